"""Supports of the site: struts, corner struts, rakers, anchors and walers, with what the brief says of them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Literal, cast

from ingest.brief_tables import SupportTable
from ingest.figures import NearLines, ends_of, plan
from ingest.matching import fits
from ingest.member_properties import read_property
from ingest.members import BarSection, Material, Pile, Point3, Support, Waler, WallPiece
from ingest.notes import Notes, label
from ingest.parts import Part
from ingest.rigidity import find_rigidity
from ingest.roles import RoleGiven
from ingest.tie_texts import Tied

SupportRole = Literal["strut", "corner_strut", "raker", "anchor"]
FIELDS = tuple(name for name in SupportTable.model_fields if name not in ("match", "role", "level"))


def build_supports(
    given: Sequence[RoleGiven],
    walls: Sequence[WallPiece],
    piles: Sequence[Pile],
    materials: Sequence[Material],
    tied: Tied,
    notes: Notes,
) -> tuple[Support, ...]:
    """Make the supports; a member drawn once for several levels of the brief gives one support a level.

    Args:
        given: Parts with a support role.
        walls: Walls, to tell the head of an anchor from its far end.
        piles: Piles, likewise.
        materials: Materials of the brief.
        tied: Levels written beside the members.
        notes: Takes what is missing, assumed or refused.

    Returns:
        Supports with head at the wall, in the order of `given`.
    """
    near = _wall_lines(walls, piles)
    known = {material.id: material for material in materials}
    supports = []
    for item in given:
        ends = ends_of(item.part)
        if ends is None:
            notes.refuse(item.part, f"{item.role} that is not one straight member")
            continue
        for numbers, entry in _entries(item, notes):
            supports.append(_support(item, _ordered(item, ends, near), entry, numbers, known, tied, notes))
    return tuple(supports)


def build_walers(
    given: Sequence[RoleGiven], supports: Sequence[Support], materials: Sequence[Material], notes: Notes
) -> tuple[Waler, ...]:
    """Make the walers; one drawn flat lies at the level of the supports when these have but one.

    Args:
        given: Parts with role waler, capping beams left out.
        supports: The supports already built.
        materials: Materials of the brief.
        notes: Takes what is missing or refused.
    """
    known = {material.id: material for material in materials}
    levels = {round(support.head[2], 3) for support in supports if support.level_given}
    stiff = {entry.waler_EI for entry in notes.brief.supports if entry.waler_EI is not None}
    walers = []
    for item in given:
        part = item.part
        if part.form not in ("path", "outline", "prism", "bar") or len(part.points) < 2:
            notes.refuse(part, "waler without a line on plan")
            continue
        level = _drawn_level(part)
        if level is None and len(levels) == 1:
            level = next(iter(levels))
            basis = "the supports given have this one level"
            notes.assume("waler-level", label(item), f"waler at {level:g} m", basis, (part.source,))
        line, material = plan(part.points), notes.material_of(part)
        of_model = {"section": None, "EA": None, "material": material}
        walers.append(
            Waler(
                id="",
                points=(*line, line[0]) if part.closed or part.form in ("outline", "prism") else line,
                level=level,
                EI=next(iter(stiff)) if len(stiff) == 1 else None,
                EA=find_rigidity(label(item), part, of_model, (), known, notes)[1],
                material=material,
                layer=part.layer,
                name=part.name,
                evidence=item.evidence,
                sources=(part.source,),
            )
        )
    return tuple(walers)


def _entries(item: RoleGiven, notes: Notes) -> list[tuple[list[int], dict[str, Any]]]:
    """Entries of the brief for a part, merged: one for each level given, entries that name the part first."""
    found = []
    for number, entry in enumerate(notes.brief.supports):
        named = entry.match is not None and fits(entry.match, item.part)
        general = entry.match is None and entry.role in (None, item.role)
        if named or general:
            found.append((not named, number, entry))
    found.sort(key=lambda row: row[:2])
    given = dict.fromkeys(entry.level for _, _, entry in found if entry.level is not None)
    levels: list[float | None] = list(given) or [None]
    merged = []
    for level in levels:
        rows = [row for row in found if row[2].level in (None, level)]
        rows.sort(key=lambda row: row[2].level is None)
        values = {name: _first(rows, name) for name in FIELDS}
        merged.append(([number for _, number, _ in rows], {"level": level, **values}))
    return merged


def _first(rows: Sequence[tuple[bool, int, SupportTable]], name: str) -> Any:
    return next((value for _, _, entry in rows if (value := getattr(entry, name)) is not None), None)


def _support(
    item: RoleGiven,
    ends: tuple[Point3, Point3],
    entry: dict[str, Any],
    numbers: list[int],
    materials: dict[str, Material],
    tied: Tied,
    notes: Notes,
) -> Support:
    role = cast(SupportRole, item.role)
    part = item.part
    _check_preload(role, entry["preload"], numbers, notes)
    if role == "anchor":
        entry = _with_properties(item, entry, notes)
    head, far, level_given, inclination_given = _placed(item, ends, entry, tied, notes)
    section, EA, EI, weight = find_rigidity(label(item), part, entry, numbers, materials, notes)
    return Support(
        id="",
        role=role,
        head=head,
        far=far,
        group=label(item),
        section=section if isinstance(section, BarSection) else None,
        EA=EA,
        EI=EI,
        weight=weight,
        material=entry["material"],
        free_length=entry["free_length"],
        bond_length=entry["bond_length"],
        bond_diameter=entry["bond_diameter"],
        preload=entry["preload"],
        thermal_range=entry["thermal_range"],
        packing_stiffness=entry["packing_stiffness"],
        waler=entry["waler"],
        waler_EI=entry["waler_EI"],
        continuous_at_corners=entry["continuous_at_corners"],
        level_given=level_given,
        inclination_given=inclination_given,
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _with_properties(item: RoleGiven, entry: dict[str, Any], notes: Notes) -> dict[str, Any]:
    """What the brief leaves open, from the properties of the model; a bar in space shows its inclination itself."""
    fields = ["free_length", "bond_length", "bond_diameter", "preload"]
    if _drawn_level(item.part) is None:
        fields.append("inclination")
    about = label(item)
    found = {name: read_property(item.part, name, about, notes) for name in fields if entry[name] is None}
    return {**entry, **found}


def _check_preload(role: SupportRole, preload: float | None, numbers: list[int], notes: Notes) -> None:
    if preload is None or preload == 0:
        return
    wrong = preload < 0 if role == "anchor" else preload > 0
    if wrong:
        sense = "an anchor is stretched: tension is positive" if role == "anchor" else "compression is negative"
        number = next(n for n in numbers if notes.brief.supports[n].preload == preload)
        problem = f"preload {preload:g} kN has the wrong sign for a {role.replace('_', ' ')}: {sense}"
        raise notes.stop(problem, f"write preload = {-preload:g}", "supports", number, "preload")


def _placed(
    item: RoleGiven, ends: tuple[Point3, Point3], entry: dict[str, Any], tied: Tied, notes: Notes
) -> tuple[Point3, Point3, bool, bool]:
    head, far = ends
    drawn = _drawn_level(item.part)
    level = (
        entry["level"] if entry["level"] is not None else head[2] if drawn is not None else tied.value(item, "level")
    )
    slope = far[2] - head[2] if drawn is not None else None
    z = 0.0 if level is None else level
    run = math.dist(head[:2], far[:2])
    if entry["inclination"] is None:
        drop = 0.0 if slope is None else slope
        inclined = item.role in ("anchor", "raker")
        return (*head[:2], z), (*far[:2], z + drop), level is not None, slope is not None or not inclined
    dip = math.radians(entry["inclination"])
    lengths = (entry["free_length"], entry["bond_length"])
    reach = run
    if item.role == "anchor" and None not in lengths:
        reach = math.cos(dip) * sum(lengths)
        _compare_reach(item, run, reach, notes)
    x, y = ((b - a) / run if run else 0.0 for a, b in zip(head[:2], far[:2], strict=True))
    end = (head[0] + reach * x, head[1] + reach * y, z - reach * math.tan(dip))
    return (*head[:2], z), end, level is not None, True


def _compare_reach(item: RoleGiven, run: float, reach: float, notes: Notes) -> None:
    if run and abs(run - reach) > max(0.05 * reach, 0.1):
        text = f"drawn {run:.2f} m long on plan; free and bond length at its inclination give {reach:.2f} m and rule"
        notes.see("anchor-length", "check", label(item), text, (item.part.source,))


def _ordered(item: RoleGiven, ends: tuple[Point3, Point3], near: NearLines) -> tuple[Point3, Point3]:
    """Head first: the end at the wall, for members from wall to wall the western, else southern one."""
    if item.role in ("strut", "corner_strut"):
        return min(ends), max(ends)
    if item.part.form == "bar" and abs(ends[0][2] - ends[1][2]) > 0.05:
        return ends
    return (ends[1], ends[0]) if near.distance(ends[1][:2]) < near.distance(ends[0][:2]) else ends


def _drawn_level(part: Part) -> float | None:
    """Level of a part drawn in space; a figure drawn at height zero shows none."""
    if part.form in ("bar", "prism") or any(point[2] for point in part.points):
        return part.points[0][2]
    return None


def _wall_lines(walls: Sequence[WallPiece], piles: Sequence[Pile]) -> NearLines:
    lines = [(*wall.axis, wall.axis[0]) if wall.closed else wall.axis for wall in walls]
    return NearLines(lines, [pile.centre for pile in piles if not pile.bearing])
