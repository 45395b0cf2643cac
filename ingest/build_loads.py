"""Loads and receptors of the site: drawn ones with what the brief says of them, and those given by points."""

from __future__ import annotations

import math
from collections.abc import Sequence

from ingest.brief_tables import LoadTable, ReceptorTable
from ingest.figures import centroid, outline_of, plan
from ingest.matching import find_entry, match_line
from ingest.members import Evidence, Load, LoadKind, Point, Receptor
from ingest.notes import Notes, label
from ingest.parts import Part
from ingest.register import Moved
from ingest.roles import RoleGiven
from ingest.tie_texts import Tied
from ingest.trail import Source

UNITS = {"point": "kN", "line": "kN/m", "area": "kPa", "footing": "kPa"}
_KINDS: dict[str, LoadKind] = {"point": "point", "line": "line", "area": "area"}


def build_loads(given: Sequence[RoleGiven], tied: Tied, moved: Moved, notes: Notes) -> tuple[Load, ...]:
    """Make the loads.

    Args:
        given: Parts with role load.
        tied: Values written beside them.
        moved: World to local, for points of the brief.
        notes: Takes missing values and refused shapes.
    """
    drawn = (_drawn_load(item, tied, notes) for item in given)
    stated = (_stated_load(number, entry, moved, notes) for number, entry in enumerate(notes.brief.loads))
    return tuple(load for load in (*drawn, *stated) if load is not None)


def _drawn_load(item: RoleGiven, tied: Tied, notes: Notes) -> Load | None:
    part = item.part
    found = find_entry(notes.brief.loads, part)
    entry = found[1] if found else LoadTable.model_construct()
    modelled = part.tags.get("load_kind", "")
    kind = entry.kind or _KINDS.get(modelled) or _kind(part)
    value = entry.value if entry.value is not None or kind != modelled else _modelled_value(part)
    if value is None:
        value = _written_value(item, kind, tied, notes)
    points = _load_points(part, kind)
    if points is None:
        notes.refuse(part, f"{kind} load without a fitting shape on plan")
        return None
    if value is None:
        about = f"{label(item)}: how large is this load ({UNITS[kind]})?"
        notes.ask(about, f'[[loads]]\n{match_line(part.layer, part.name, part.cls)}\nkind = "{kind}"\nvalue = nan')
    return Load(
        id="",
        kind=kind,
        value=value,
        points=points,
        level=entry.level if entry.level is not None else part.z_bottom,
        stage=entry.stage,
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _stated_load(number: int, entry: LoadTable, moved: Moved, notes: Notes) -> Load | None:
    brief = notes.brief
    if entry.points is None or entry.kind is None:
        return None
    return Load(
        id="",
        kind=entry.kind,
        value=entry.value,
        points=tuple(moved.to_local(point) for point in entry.points),
        level=entry.level,
        stage=entry.stage,
        evidence=Evidence(role="load", why=f"brief, {brief.place('loads', number)}", confidence=1.0),
        sources=(Source(file=brief.file, item=f"loads[{number + 1}]"),),
    )


def build_receptors(given: Sequence[RoleGiven], moved: Moved, notes: Notes) -> tuple[Receptor, ...]:
    """Make the receptors: neighbouring buildings, tunnels, tracks, utilities.

    Args:
        given: Parts with role receptor.
        moved: World to local, for points of the brief.
        notes: Supplies the brief.
    """
    brief = notes.brief
    receptors = []
    for item in given:
        found = find_entry(brief.receptors, item.part)
        entry = found[1] if found else ReceptorTable.model_construct()
        drawn = any(point[2] for point in item.part.points)
        receptors.append(
            Receptor(
                id="",
                kind=entry.kind or item.use or "building",
                points=outline_of(item.part) or plan(item.part.points),
                level=entry.level if entry.level is not None else item.part.points[0][2] if drawn else None,
                sensitivity=entry.sensitivity,
                layer=item.part.layer,
                name=item.part.name,
                evidence=item.evidence,
                sources=(item.part.source,),
            )
        )
    for number, entry in enumerate(brief.receptors):
        if entry.points:
            receptors.append(
                Receptor(
                    id="",
                    kind=entry.kind or "building",
                    points=tuple(moved.to_local(point) for point in entry.points),
                    level=entry.level,
                    sensitivity=entry.sensitivity,
                    evidence=Evidence(
                        role="receptor", why=f"brief, {brief.place('receptors', number)}", confidence=1.0
                    ),
                    sources=(Source(file=brief.file, item=f"receptors[{number + 1}]"),),
                )
            )
    return tuple(receptors)


def _modelled_value(part: Part) -> float | None:
    """Value of a structural action of the model, in kN, kN/m or kPa, positive downwards; None when it acts upwards."""
    try:
        value = float(part.tags.get("load_value", ""))
    except ValueError:
        return None
    return value if math.isfinite(value) and value >= 0 else None


def _written_value(item: RoleGiven, kind: LoadKind, tied: Tied, notes: Notes) -> float | None:
    """Value that a note beside the load gives in the unit of its kind."""
    value = tied.load(item, UNITS[kind])
    if value is not None:
        text = f"{kind} load of {value:g} {UNITS[kind]}"
        notes.assume("load-note", f"{label(item)} {item.part.source.item}", text, "a note beside it says so")
    return value


def _kind(part: Part) -> LoadKind:
    if outline_of(part) is not None:
        return "area"
    return "line" if part.form in ("path", "bar") else "point"


def _load_points(part: Part, kind: LoadKind) -> tuple[Point, ...] | None:
    if kind == "point":
        return (centroid(part),)
    if kind == "line":
        return plan(part.points) if len(part.points) > 1 else None
    return outline_of(part)
