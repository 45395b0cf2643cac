"""Walls and piles of the site from the parts that have these roles."""

from __future__ import annotations

import math
from collections.abc import Sequence

from ingest.brief_tables import WallTable
from ingest.errors import InputError
from ingest.figures import centre_line, centroid, extent, outline_of, plan
from ingest.matching import fits
from ingest.model import BarSection, Continuity, Part, Pile, Point, WallKind, WallPiece
from ingest.notes import Notes, label
from ingest.record import record
from ingest.roles import RoleGiven
from ingest.surroundings import upright
from ingest.tie_texts import Tied

POST = 1.5
"""Largest side of a post drawn by its outline, m (judgement)."""


@record
class WallGiven:
    """What the brief says about one wall part, first entry first."""

    material: str | None = None
    EI_factor: float | None = None
    continuity: Continuity = "unknown"
    top: float | None = None
    toe: float | None = None


def build_walls(given: Sequence[RoleGiven], tied: Tied, notes: Notes) -> tuple[tuple[WallPiece, ...], tuple[Pile, ...]]:
    """Make wall pieces and piles.

    Args:
        given: Parts with role wall or bearing_pile.
        tied: Levels written beside them.
        notes: Takes the parts that give nothing, with the reason.

    Returns:
        Wall pieces and piles, each sorted by place.
    """
    walls: list[WallPiece] = []
    piles: list[Pile] = []
    capping = _capping_beam(notes)
    for item in given:
        found = _pile(item, tied, notes, capping) or (
            _wall(item, tied, notes, capping) if item.role == "wall" else None
        )
        if isinstance(found, Pile):
            piles.append(found)
        elif isinstance(found, WallPiece):
            walls.append(found)
        else:
            notes.refuse(item.part, f"{item.role} without a usable shape on plan")
    return tuple(walls), tuple(piles)


def given_of(item: RoleGiven, tied: Tied, notes: Notes) -> WallGiven:
    """What the [[walls]] entries that fit a part say, then the part itself, then a note beside it.

    Entries without a match fit every wall.
    """
    part = item.part
    entries = [e for e in notes.brief.walls if e.match is None or fits(e.match, part)]
    entries.sort(key=lambda entry: entry.match is None)
    drawn_top, drawn_toe = _levels(part)
    stated_top = _first_number(_first(entries, "top"), notes.brief.levels.top)
    stated_toe = _first_number(_first(entries, "toe"))
    if stated_top is not None and stated_toe is not None and stated_toe >= stated_top:
        raise _wrong_levels(item, entries, stated_top, stated_toe, notes)
    top = _first_number(stated_top, drawn_top, tied.value(item, "top"))
    toe = _first_number(stated_toe, drawn_toe, tied.value(item, "toe"))
    if top is not None and toe is not None and toe >= top:
        text = f"toe {toe:g} m is not below its top {top:g} m; the toe is not taken"
        notes.see("wall-levels", "check", label(item), text, (part.source,))
        toe = None
    material, factor = _first(entries, "material"), _first(entries, "EI_factor")
    return WallGiven(
        material=material if isinstance(material, str) else None,
        EI_factor=factor if isinstance(factor, float) else None,
        continuity=_first(entries, "continuity") or "unknown",  # type: ignore[arg-type]
        top=top,
        toe=toe,
    )


def _first(entries: Sequence[WallTable], name: str) -> object:
    return next((value for entry in entries if (value := getattr(entry, name)) is not None), None)


def _wrong_levels(item: RoleGiven, entries: Sequence[WallTable], top: float, toe: float, notes: Notes) -> InputError:
    number = next(n for n, entry in enumerate(notes.brief.walls) if entry in entries and entry.toe == toe)
    problem = f"wall {label(item)}: toe {toe:g} m is not below its top {top:g} m"
    remedy = "correct top or toe; levels are in metres, upwards positive"
    return notes.stop(problem, remedy, "walls", number, "toe")


def _capping_beam(notes: Notes) -> bool | None:
    said = [entry.capping_beam for entry in notes.brief.supports if entry.capping_beam is not None]
    if len(set(said)) == 1:
        notes.assume(
            "capping-beam",
            "",
            f"every wall {'has a' if said[0] else 'is without'} capping beam",
            "the brief says so of its supports and names no single wall",
        )
        return said[0]
    return None


def _pile(item: RoleGiven, tied: Tied, notes: Notes, capping: bool | None) -> Pile | None:
    part = item.part
    round_ = upright(part)
    post = None if round_ else _post(item)
    if round_ is None and post is None:
        return None
    centre, diameter = round_ if round_ else (centroid(part), None)
    said = given_of(item, tied, notes)
    bearing = item.role == "bearing_pile"
    kind: WallKind | None = None if bearing else item.wall_kind or "unknown"
    return Pile(
        id="",
        centre=centre,
        diameter=diameter,
        kind=kind,
        bearing=None if bearing and item.use == "pile" else bearing,
        section=post or part.section,
        male=None if item.use not in ("male", "female") else item.use == "male",
        top=said.top if not bearing else _first_number(_levels(part)[0], tied.value(item, "top")),
        toe=said.toe if not bearing else _first_number(_levels(part)[1], tied.value(item, "toe")),
        material=said.material,
        EI_factor=said.EI_factor,
        continuity=said.continuity,
        capping_beam=None if bearing else capping,
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _post(item: RoleGiven) -> BarSection | None:
    """A post drawn by its outline or standing as an upright bar of any section."""
    part = item.part
    if part.form == "bar" and len(part.points) == 2:
        (x1, y1, z1), (x2, y2, z2) = part.points
        upright_bar = math.hypot(x2 - x1, y2 - y1) <= 0.02 * abs(z2 - z1)
        return (part.section or BarSection(designation="")) if upright_bar else None
    ring = outline_of(part)
    if ring is None or max(extent(ring)) > POST:
        return None
    if item.wall_kind == "king_post" or item.role == "bearing_pile":
        width, depth = extent(ring)
        return BarSection(designation="as drawn", width=width, depth=depth)
    return None


def _wall(item: RoleGiven, tied: Tied, notes: Notes, capping: bool | None) -> WallPiece | None:
    part = item.part
    axis, closed, drawn, thickness = _axis(part)
    if len(axis) < 2:
        return None
    said = given_of(item, tied, notes)
    return WallPiece(
        id="",
        axis=axis,
        closed=closed,
        drawn=drawn,  # type: ignore[arg-type]
        kind=item.wall_kind or "unknown",
        thickness=thickness,
        top=said.top,
        toe=said.toe,
        material=said.material,
        EI_factor=said.EI_factor,
        continuity=said.continuity,
        capping_beam=capping,
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _axis(part: Part) -> tuple[tuple[Point, ...], bool, str, float | None]:
    if part.form in ("outline", "prism", "mesh"):
        ring = outline_of(part) or plan(part.points)
        line = centre_line(ring) if len(ring) > 2 else None
        drawn = "solid" if part.form != "outline" else "hatch" if part.cls == "HATCH" else "outline"
        if line is not None:
            return line[0], False, drawn, line[1]
        return ring, True, drawn, part.thickness
    if part.form == "path":
        return plan(part.points), part.closed, "axis", part.thickness
    return (), False, "axis", None


def _levels(part: Part) -> tuple[float | None, float | None]:
    """Top and toe a part itself shows; a figure drawn flat shows none."""
    if part.form == "bar":
        heights = [point[2] for point in part.points]
        return max(heights), min(heights)
    return part.z_top, part.z_bottom


def _first_number(*values: object) -> float | None:
    return next((value for value in values if isinstance(value, float | int)), None)
