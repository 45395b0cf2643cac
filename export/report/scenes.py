"""The two scenes of a section: what is really there around the cut, and what the section implies, at like length.

Coordinates of a scene: x along the cut as in the section, y level and square to it, z = level, m; for a ring x and
y are taken from its axis.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot

from export.report.along import Perimeter
from export.report.plan_site import to_world
from export.report.section_members import THIN, thickness
from export.report.solids import Solid, bar, extruded, pile, prism, revolved, thick_line
from ingest.members import Pile, Point, Point3, Role, Support
from ingest.model import Site
from sections.definition import SectionDefinition
from sections.member import SectionMember
from sections.model import Pit, Run
from sections.proposal import Proposal

LEAST_HALF, MOST_HALF = 3.0, 15.0
PLATE = 0.18
"""Drawn depth of what stands for a row of bars, m: thin, so that it reads as a sheet."""


@dataclass(frozen=True, kw_only=True)
class Scenes:
    """Both scenes, the length of wall they show, and what was counted in each."""

    real: tuple[Solid, ...]
    implied: tuple[Solid, ...]
    half: float
    counts: tuple[tuple[str, int, int], ...]

    @property
    def walls(self) -> bool:
        """Whether a wall stands in both."""
        return all(any(solid.kind == "wall" for solid in scene) for scene in (self.real, self.implied))


@dataclass(frozen=True, kw_only=True)
class Cut:
    """The frame of a scene in world coordinates."""

    origin: Point
    along: Point
    half: float
    reach: tuple[float, float]
    ring: bool

    def at(self, point: Point) -> Point:
        """A world point in the frame of the cut."""
        dx, dy = point[0] - self.origin[0], point[1] - self.origin[1]
        return dx * self.along[0] + dy * self.along[1], -dx * self.along[1] + dy * self.along[0]

    def holds(self, point: Point) -> bool:
        """Whether a point of the frame lies within what is shown."""
        return abs(point[1]) <= self.half + 1e-6 and self.reach[0] - 1e-6 <= point[0] <= self.reach[1] + 1e-6


def scenes(definition: SectionDefinition, proposal: Proposal, site: Site) -> Scenes:
    """Build both scenes of one section."""
    cut = _cut(definition)
    marked = {one.about for one in definition.implied if one.grade == "serious"}
    roles = {one.role for one in definition.members if one.id in marked}
    real = [
        *_walls(cut, proposal, site, definition),
        *_supports(cut, proposal, site, roles),
        *_loads(cut, proposal, definition, marked),
    ]
    implied = _implied(definition, cut, marked)
    kinds = list(dict.fromkeys(solid.kind for solid in (*real, *implied)))
    counts = [(kind, _number(real, kind), _number(implied, kind)) for kind in kinds]
    return Scenes(real=tuple(real), implied=tuple(implied), half=cut.half, counts=tuple(counts))


def _number(solids: list[Solid], kind: str) -> int:
    return sum(solid.kind == kind for solid in solids)


def _cut(definition: SectionDefinition) -> Cut:
    (ax, ay), (bx, by) = definition.line
    size = hypot(bx - ax, by - ay) or 1.0
    along = ((bx - ax) / size, (by - ay) / size)
    if definition.axis is not None:
        half = definition.axis.r_of_wall * 1.25
        return Cut(origin=definition.axis.point, along=along, half=half, reach=(-half, half), ring=True)
    spacings = [m.real.spacing for m in definition.members if m.real.spacing is not None]
    half = min(max(1.5 * max(spacings, default=2.0), LEAST_HALF), MOST_HALF)
    return Cut(origin=(ax, ay), along=along, half=half, reach=definition.extent.x, ring=False)


def _wall_levels(definition: SectionDefinition) -> tuple[float, float] | None:
    zs = [z for one in definition.members if one.role == "wall" for _, z in one.points]
    return (min(zs), max(zs)) if zs else None


def _walls(cut: Cut, proposal: Proposal, site: Site, definition: SectionDefinition) -> list[Solid]:
    """Piles one by one where the site has them, else panels along the wall axis."""
    levels = _wall_levels(definition)
    if levels is None:
        return []
    world = to_world(proposal.frame)
    found = [
        _pile(one, cut.at(world(one.centre)), levels) for one in site.piles if cut.holds(cut.at(world(one.centre)))
    ]
    if found:
        return found
    walls = {wall.pit for wall in definition.walls}
    return [
        solid
        for pit in proposal.pits
        if pit.id in walls
        for run in pit.runs
        for solid in _panels(run, pit, cut, levels)
    ]


def _pile(one: Pile, centre: Point, levels: tuple[float, float]) -> Solid:
    low = one.toe if one.toe is not None else levels[0]
    high = one.top if one.top is not None else levels[1]
    return pile("bearing pile" if one.bearing else "wall", centre, one.diameter or 0.3, low, high)


def _panels(run: Run, pit: Pit, cut: Cut, levels: tuple[float, float]) -> list[Solid]:
    line = Perimeter.of(pit)
    points = [cut.at(point) for point in line.part(run.start, run.to)]
    low = run.wall.toe if run.wall.toe is not None else levels[0]
    high = run.wall.top if run.wall.top is not None else levels[1]
    size = run.wall.thickness or run.wall.diameter or 0.3
    found = []
    for a, b in zip(points, points[1:], strict=False):
        inside = _clip(a, b, cut)
        if inside is not None:
            found.append(prism("wall", thick_line(*inside, size), low, high))
    return found


def _clip(a: Point, b: Point, cut: Cut) -> tuple[Point, Point] | None:
    """The part of a line within the length of wall shown and the reach of the section."""
    first, last = 0.0, 1.0
    for start, end, low, high in ((a[1], b[1], -cut.half, cut.half), (a[0], b[0], *cut.reach)):
        step = end - start
        if abs(step) < 1e-9:
            if not low - 1e-9 <= start <= high + 1e-9:
                return None
            continue
        ends = sorted(((low - start) / step, (high - start) / step))
        first, last = max(first, ends[0]), min(last, ends[1])
    if last - first < 1e-9:
        return None
    return tuple((a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])) for t in (first, last))  # type: ignore[return-value]


def _supports(cut: Cut, proposal: Proposal, site: Site, marked: set[Role]) -> list[Solid]:
    world = to_world(proposal.frame)
    found: list[Solid | None] = []
    for one in site.supports:
        ends = _between(cut, cut.at(world(one.head)), one.head[2], cut.at(world(one.far)), one.far[2])
        if ends is not None:
            runs_with_it = abs(ends[1][0] - ends[0][0]) >= abs(ends[1][1] - ends[0][1])
            found.append(
                bar(one.role.replace("_", " "), *ends, *_bar_size(one), marked=one.role in marked and runs_with_it)
            )
    for waler in site.walers:
        points = [cut.at(world(point)) for point in waler.points]
        for a, b in zip(points, points[1:], strict=False):
            if waler.level is not None:
                ends = _between(cut, a, waler.level, b, waler.level)
                found.append(bar("waler", *ends, 0.4, 0.4) if ends is not None else None)
    return [solid for solid in found if solid is not None]


def _bar_size(one: Support) -> tuple[float, float]:
    if one.section is None:
        return 0.35, 0.35
    size = one.section.diameter or one.section.depth or 0.35
    return one.section.width or size, size


def _between(cut: Cut, a: Point, za: float, b: Point, zb: float) -> tuple[Point3, Point3] | None:
    inside = _clip(a, b, cut)
    if inside is None:
        return None
    length = hypot(b[0] - a[0], b[1] - a[1])
    zs = [za + (zb - za) * hypot(p[0] - a[0], p[1] - a[1]) / length if length else za for p in inside]
    return (*inside[0], zs[0]), (*inside[1], zs[1])


def _loads(cut: Cut, proposal: Proposal, definition: SectionDefinition, marked: set[str]) -> list[Solid]:
    levels = {load.id: max((z for _, z in load.at), default=0.0) for load in definition.loads}
    found = []
    for pit in proposal.pits:
        for load in pit.loads:
            points = [cut.at(point) for point in load.points]
            if load.id in levels and len(points) > 2 and any(cut.holds(point) for point in points):
                found.append(prism("load", points, levels[load.id], levels[load.id] + PLATE, load.id in marked))
    return found


def _implied(definition: SectionDefinition, cut: Cut, marked: set[str]) -> list[Solid]:
    found = []
    for one in definition.members:
        ring = _ring(one)
        if ring is not None:
            found.append(_carried(one.role.replace("_", " "), ring, cut, one.id in marked))
    for load in definition.loads:
        xs, z = [x for x, _ in load.at], max((z for _, z in load.at), default=0.0)
        if xs:
            low, high = min(xs), max(max(xs), min(xs) + PLATE)
            ring = [(low, z), (high, z), (high, z + PLATE), (low, z + PLATE)]
            found.append(_carried("load", ring, cut, load.id in marked))
    return found


def _carried(kind: str, ring: list[Point], cut: Cut, marked: bool) -> Solid:
    return revolved(kind, ring, marked=marked) if cut.ring else extruded(kind, ring, cut.half, marked)


def _ring(one: SectionMember) -> list[Point] | None:
    """Outline of a member in the section plane."""
    if len(one.points) < 2:
        return None
    if len(one.points) > 2:
        return [(x, z) for x, z in one.points]
    size = (thickness(one) or THIN) if one.role in ("wall", "slab", "footing", "bearing_pile") else PLATE
    return thick_line(one.points[0], one.points[1], size)
