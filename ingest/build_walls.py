"""Walls and piles of the site from the parts that have these roles."""

from __future__ import annotations

import math
from collections.abc import Sequence

from ingest.brief_tables import WallTable
from ingest.errors import InputError
from ingest.faces import THICKEST, find_faces
from ingest.figures import NearLines, centre_line, centroid, extent, outline_of, plan, sides_of
from ingest.matching import fits
from ingest.members import BarSection, Continuity, Pile, Point, WallKind, WallPiece
from ingest.notes import Notes, label
from ingest.parts import Part
from ingest.record import record
from ingest.roles import RoleGiven
from ingest.steel import find_section
from ingest.surroundings import PILE_DIAMETER, upright
from ingest.tie_texts import Tied
from ingest.words import find_meanings, layer_name

_DRAWN = {"path": "axis", "circle": "axis", "outline": "outline"}
BESIDE = 1.0
"""A capping beam runs along a wall whose middle is within this of it, m (judgement)."""
SAME_POST = 0.02
"""Drawn size of a post and that of the section it is named after may differ by this, m (judgement)."""
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


def build_walls(
    given: Sequence[RoleGiven], beams: Sequence[RoleGiven], tied: Tied, notes: Notes
) -> tuple[tuple[WallPiece, ...], tuple[Pile, ...]]:
    """Make wall pieces and piles.

    Args:
        given: Parts with role wall or bearing_pile.
        beams: Capping beams.
        tied: Levels written beside them.
        notes: Takes the parts that give nothing, with the reason.

    Returns:
        Wall pieces and piles, each sorted by place.
    """
    walls: list[WallPiece] = []
    piles: list[Pile] = []
    capping, faces = _Capping(beams, notes), _faces(given)
    for item in given:
        found: Pile | WallPiece | None = _pile(item, tied, notes, capping)
        if found is None and item.role == "wall":
            found = _wall(item, faces.get(id(item.part)), tied, notes, capping)
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
        material=material if isinstance(material, str) else notes.material_of(part),
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


class _Capping:
    """Which walls have a capping beam: those a drawn one runs along, else what the brief says of all supports."""

    def __init__(self, beams: Sequence[RoleGiven], notes: Notes) -> None:
        usable = [item for item in beams if len(item.part.points) > 1]
        for item in beams:
            if item not in usable:
                notes.refuse(item.part, "capping beam without a line on plan")
        self._lines = NearLines([_beam_line(item.part) for item in usable], [])
        said = [entry.capping_beam for entry in notes.brief.supports if entry.capping_beam is not None]
        self._said = said[0] if len(set(said)) == 1 else None
        if self._said is not None:
            text = f"every wall {'has a' if self._said else 'is without'} capping beam"
            notes.assume("capping-beam", "", text, "the brief says so of its supports and names no single wall")

    def over(self, middle: Point) -> bool | None:
        """Whether the wall that passes here has one; None when nothing says."""
        return True if self._lines.distance(middle, BESIDE) <= BESIDE else self._said


def _beam_line(part: Part) -> tuple[Point, ...]:
    ring = outline_of(part)
    line = centre_line(ring) if ring is not None else None
    if line is not None:
        return line[0]
    return plan(part.points) if ring is None else (*ring, ring[0])


def _pile(item: RoleGiven, tied: Tied, notes: Notes, capping: _Capping) -> Pile | None:
    part = item.part
    round_ = _pile_circle(part)
    post = None if round_ else _post(item, notes)
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
        male=item.use == "male" if kind == "secant" and item.use in ("male", "female") else None,
        top=said.top if not bearing else _first_number(_levels(part)[0], tied.value(item, "top")),
        toe=said.toe if not bearing else _first_number(_levels(part)[1], tied.value(item, "toe")),
        material=said.material,
        EI_factor=said.EI_factor,
        continuity=said.continuity,
        capping_beam=None if bearing else capping.over(centre),
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _post(item: RoleGiven, notes: Notes) -> BarSection | None:
    """A post drawn by its outline or standing as an upright bar of any section."""
    part = item.part
    if part.form == "bar" and len(part.points) == 2:
        (x1, y1, z1), (x2, y2, z2) = part.points
        upright_bar = math.hypot(x2 - x1, y2 - y1) <= 0.02 * abs(z2 - z1)
        return (part.section or BarSection(designation="")) if upright_bar else None
    ring = outline_of(part)
    if ring is None or max(extent(ring)) > 2 * POST or sides_of(ring)[1] > POST:
        return None
    if item.wall_kind == "king_post" or item.role == "bearing_pile":
        width, depth = sides_of(ring)
        return _named_post(item, width, depth, notes) or BarSection(designation="as drawn", width=width, depth=depth)
    return None


def _named_post(item: RoleGiven, width: float, depth: float, notes: Notes) -> BarSection | None:
    """The steel section that a post's block is named after, where it has the size drawn."""
    part = item.part
    try:
        section = find_section(part.name)
    except ValueError:
        return None
    named = sorted(size for size in (section.width, section.depth) if size is not None)
    if any(abs(a - b) > SAME_POST for a, b in zip(named, sorted((width, depth)), strict=False)):
        text = f"its block is named {part.name}, but it is drawn {width:.3f} x {depth:.3f} m; the name is not taken"
        notes.see("post-size", "check", label(item), text, (part.source,))
        return None
    notes.assume(
        "post-section",
        f"{label(item)} {section.designation}",
        f"posts are {section.designation}, web across the wall: they bend about their major axis",
        "name of the block they are drawn with, and its size",
        (part.source,),
    )
    return section


def _wall(item: RoleGiven, face: str | None, tied: Tied, notes: Notes, capping: _Capping) -> WallPiece | None:
    part = item.part
    axis, closed, drawn, thickness = _axis(part, face)
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
        capping_beam=capping.over(_halfway(axis)),
        layer=part.layer,
        name=part.name,
        evidence=item.evidence,
        sources=(part.source,),
    )


def _axis(part: Part, face: str | None) -> tuple[tuple[Point, ...], bool, str, float | None]:
    """Line of a wall, whether it is a ring, how it was drawn, and its thickness."""
    ring = outline_of(part) or (plan(part.points) if part.form == "mesh" else None)
    if ring is not None and len(ring) > 2:
        line = None if part.form == "circle" else centre_line(ring)
        drawn = _DRAWN.get(part.form, "solid") if part.cls != "HATCH" else "hatch"
        if line is not None and line[1] <= THICKEST:
            return line[0], False, "outline" if drawn == "axis" else drawn, line[1]
        return ring, True, face or drawn, part.thickness
    if part.form == "path":
        return plan(part.points), False, face or "axis", part.thickness
    return (), False, "axis", None


def _halfway(axis: Sequence[Point]) -> Point:
    """Middle of the first stretch of a wall, a point on it."""
    (x1, y1), (x2, y2) = axis[:2]
    return (x1 + x2) / 2, (y1 + y2) / 2


def _faces(given: Sequence[RoleGiven]) -> dict[int, str]:
    """By part: which wall lines without thickness are faces; a layer of axes has none."""
    lines = [
        item.part
        for item in given
        if item.role == "wall" and item.part.thickness is None and item.part.form in ("path", "circle")
        if _pile_circle(item.part) is None
        if all(meaning.use != "axis" for meaning in find_meanings(layer_name(item.part.layer)))
    ]
    return {id(lines[n]): kind for n, kind in find_faces(lines).items()}


def _pile_circle(part: Part) -> tuple[Point, float] | None:
    """Centre and diameter of a round upright; a circle wider than any pile is the wall of a shaft."""
    found = upright(part)
    return found if found is not None and found[1] <= PILE_DIAMETER[1] else None


def _levels(part: Part) -> tuple[float | None, float | None]:
    """Top and toe a part itself shows; a figure drawn flat shows none."""
    if part.form == "bar":
        heights = [point[2] for point in part.points]
        return max(heights), min(heights)
    return part.z_top, part.z_bottom


def _first_number(*values: object) -> float | None:
    return next((value for value in values if isinstance(value, float | int)), None)
