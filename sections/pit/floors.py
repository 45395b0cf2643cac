"""Dig floors: their outlines and levels, the steps between them, and the dig level at the wall."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry
from shapely.ops import substring

from ingest.members import Plate
from ingest.model import Floor, Limits, Site
from sections.found import PitShape
from sections.model import Floats, PitFloor, Step
from sections.pit.chainage import area_of, line_of, normal_at, point_at

RULES_WITHIN = 1.5
"""A pit or cap deeper by D rules the dig level of the wall within this many D of it (judgement)."""
FACE = 0.05
"""How far in front of the wall the floor is looked up, m."""
SLIVER = 0.005
"""Half the width of what is taken as a sliver between two outlines, m."""
SMALL = 0.25
"""A deeper place smaller than this, m2, is a drawing slip and no floor."""


@dataclass(frozen=True, kw_only=True)
class FloorPlan:
    """The floors of one pit, local coordinates, highest first; each area excludes the deeper floors within it.

    `assumed` is True where no dig allowance was given, so that the dig level is taken at the underside of the slab.
    """

    floors: tuple[Floor, ...]
    areas: tuple[BaseGeometry, ...]
    assumed: bool

    @property
    def levels(self) -> Floats:
        """Level dug to, (k,) m: the dig level, or the underside of the slab where no allowance is known."""
        return np.array([f.level if f.dig_level is None else f.dig_level for f in self.floors])


def find_floors(site: Site, shape: PitShape) -> FloorPlan:
    """Floors of a pit from the site's floors, its slabs and footings by their underside, and the formation level.

    Where several lie above each other the deepest is what is dug to.
    """
    pit = area_of(shape)
    given = _candidates(site)
    areas = [_area(floor, pit) for floor in given]
    shown = [(f, a) for f, a in zip(given, areas, strict=True) if a.area > SMALL]
    shown.sort(key=lambda pair: (-_dug(pair[0]), -pair[1].area, pair[1].bounds))
    floors, visible = [], []
    for i, (floor, area) in enumerate(shown):
        deeper = [other for f, other in shown[i + 1 :] if _dug(f) < _dug(floor) - 1e-9]
        left = _polygons(area.difference(shapely.union_all(deeper))) if deeper else area
        if left.area > SMALL:
            floors.append(floor)
            visible.append(left)
    floors, visible = _joined(floors, visible)
    return FloorPlan(
        floors=tuple(floors), areas=tuple(visible), assumed=any(floor.dig_level is None for floor in floors)
    )


def _dug(floor: Floor) -> float:
    return floor.level if floor.dig_level is None else floor.dig_level


def _candidates(site: Site) -> list[Floor]:
    floors = list(site.floors)
    fills = any(floor.outline is None for floor in floors)
    if site.formation is not None and not fills:
        floors.append(_floor(site, site.formation, None, "formation"))
    known = {(round(f.level, 3), f.outline) for f in floors}
    for plate in _dug_plates(site):
        assert plate.underside is not None
        if (round(plate.underside, 3), plate.outline) not in known:
            floors.append(_floor(site, plate.underside, plate, plate.name))
    return floors


def _dug_plates(site: Site) -> list[Plate]:
    """Plates that something was dug for: slabs and footings with an underside below the ground."""
    plates = [plate for plate in site.plates if plate.underside is not None]
    surface = site.ground_level if site.ground_level is not None else site.wall_top
    if surface is not None:
        plates = [p for p in plates if p.underside is not None and p.underside < surface]
    formation = site.formation
    if formation is None and not any(floor.outline is None for floor in site.floors):
        return plates
    # with the formation given, only what lies below it is dug for; slabs above it are floors of the building
    lowest = formation if formation is not None else min(f.level for f in site.floors if f.outline is None)
    return [p for p in plates if p.underside is not None and p.underside < lowest - site.limits.level]


def _floor(site: Site, level: float, plate: Plate | None, name: str) -> Floor:
    allowance = site.dig_allowance
    return Floor(
        level=level,
        dig_level=None if allowance is None else level - allowance,
        outline=None if plate is None else plate.outline,
        name=name,
        sources=() if plate is None else plate.sources,
    )


def _area(floor: Floor, pit: shapely.Polygon) -> BaseGeometry:
    if floor.outline is None:
        return pit
    if len(floor.outline) < 3:
        return shapely.Polygon()
    outline = shapely.make_valid(shapely.Polygon(floor.outline))
    return _polygons(shapely.intersection(outline, pit))


def _polygons(geometry: BaseGeometry) -> BaseGeometry:
    """Only the areas of a geometry, without the slivers an overlay leaves where two outlines all but coincide."""
    opened = geometry.buffer(-SLIVER, join_style="mitre").buffer(SLIVER, join_style="mitre")
    parts = [part for part in shapely.get_parts(opened) if part.geom_type == "Polygon" and part.area > SMALL]
    return shapely.union_all(parts) if parts else shapely.Polygon()


def _joined(floors: list[Floor], areas: list[BaseGeometry]) -> tuple[list[Floor], list[BaseGeometry]]:
    """Floors of one level that touch are one floor (a slab drawn in strips)."""
    kept: list[Floor] = []
    joined: list[BaseGeometry] = []
    for floor, area in zip(floors, areas, strict=True):
        for i, other in enumerate(kept):
            alike = abs(_dug(other) - _dug(floor)) < 1e-6 and other.level == floor.level
            if alike and shapely.distance(joined[i], area) < FACE:
                joined[i] = shapely.union(joined[i].buffer(FACE / 2), area.buffer(FACE / 2)).buffer(-FACE / 2)
                break
        else:
            kept.append(floor)
            joined.append(area)
    return kept, joined


def floor_at_wall(plan: FloorPlan, shape: PitShape, chainage: Floats, half_thickness: Floats) -> Floats:
    """Dig level in front of the wall at chainages (n,), m; nan where no floor is known.

    The floor nearest in front of the wall, unless a cap or pit that stands clear of the wall and is deeper by D lies
    within 1.5 D of the wall's face (judgement): then its level rules.
    """
    level = np.full(len(chainage), np.nan)
    if not plan.floors:
        return level
    front = point_at(shape, chainage) + (half_thickness + FACE)[:, None] * normal_at(shape, chainage)
    spots = shapely.points(front)
    distance = np.vstack([shapely.distance(spots, area) for area in plan.areas])
    main = _main_floors(plan, shape, float(np.max(half_thickness)))
    nearest = distance[main]
    # where floors overlap the deepest rules, so the last of the nearest ones
    best = np.min(nearest, axis=0)
    order = np.arange(len(main))[:, None] * (nearest <= best + 1e-6)
    chosen = np.asarray(main)[np.max(order, axis=0)]
    level = plan.levels[chosen]
    ruled = level.copy()
    for i in sorted(set(range(len(plan.floors))) - set(main)):
        drop = level - plan.levels[i]
        near = (drop > 0.0) & (distance[i] + FACE <= RULES_WITHIN * drop)
        ruled = np.where(near, np.minimum(ruled, plan.levels[i]), ruled)
    return np.asarray(ruled)


def level_behind(plan: FloorPlan, inner: PitShape, chainage: Floats, half_thickness: Floats) -> Floats:
    """Level retained by a wall that stands within another pit: that pit's floor behind the wall, m.

    Args:
        plan: Floors of the pit around; those that lie within the inner one do not count.
        inner: The pit within.
    """
    within = area_of(inner)
    outside = [i for i, area in enumerate(plan.areas) if area.intersection(within).area < 0.5 * area.area]
    if not outside:
        return np.full(len(chainage), np.nan)
    behind = point_at(inner, chainage) - (half_thickness + FACE)[:, None] * normal_at(inner, chainage)
    distance = np.vstack([shapely.distance(shapely.points(behind), plan.areas[i]) for i in outside])
    return np.asarray(plan.levels[outside][np.argmin(distance, axis=0)])


def _main_floors(plan: FloorPlan, shape: PitShape, half_thickness: float) -> list[int]:
    """Floors that reach the wall; the others are pits and caps within them. At least the largest one counts."""
    line = line_of(shape)
    reach = half_thickness + 2.0 * FACE
    touching = [i for i, area in enumerate(plan.areas) if shapely.distance(area, line) <= reach]
    if touching:
        return touching
    return [int(np.argmax([area.area for area in plan.areas]))]


def find_steps(plan: FloorPlan, shape: PitShape, limits: Limits) -> tuple[Step, ...]:
    """Lines along which two floors of unlike level meet, local coordinates, with the drop and where they meet the wall.

    A pit or cap set in a floor gives a closed line that meets no wall.
    """
    steps = []
    for i in range(len(plan.floors)):
        for j in range(i + 1, len(plan.floors)):
            drop = float(plan.levels[i] - plan.levels[j])
            if drop <= limits.level:
                continue
            for line in _shared_lines(plan.areas[i], plan.areas[j], limits.plan):
                points = tuple((float(x), float(y)) for x, y in shapely.get_coordinates(line))
                steps.append(Step(line=points, drop=drop, at=_meets(line, shape)))
    return tuple(sorted(steps, key=lambda step: (step.at or (np.inf,), -step.drop, step.line)))


def _shared_lines(upper: BaseGeometry, lower: BaseGeometry, gap: float) -> Sequence[shapely.LineString]:
    """Edge of the lower of two floors along the other, which may be drawn a little apart from it."""
    loose = _lines(shapely.intersection(lower.boundary, upper.buffer(gap, quad_segs=2)))
    # the buffer reaches round the ends of the common edge by its own width
    trimmed = [line if line.is_closed else substring(line, gap, line.length - gap) for line in loose]
    return [line for line in trimmed if isinstance(line, shapely.LineString)]


def _lines(edge: BaseGeometry) -> list[shapely.LineString]:
    parts = [part for part in getattr(edge, "geoms", [edge]) if part.geom_type == "LineString" and part.length > 0.0]
    merged = shapely.line_merge(shapely.multilinestrings(parts)) if parts else edge
    lines = [part for part in getattr(merged, "geoms", [merged]) if isinstance(part, shapely.LineString)]
    return [line for line in lines if line.length > 0.2]


def _meets(line: shapely.LineString, shape: PitShape) -> tuple[float, ...]:
    """Chainages where the ends of a step line stand on the wall."""
    wall = line_of(shape)
    points = shapely.get_coordinates(line)
    if np.allclose(points[0], points[-1]):
        return ()
    ends = np.asarray(shapely.points(points[[0, -1]]))
    thickest = max((run.wall.thickness or run.wall.diameter or 0.0 for run in shape.runs), default=0.0)
    near = shapely.distance(ends, wall) <= 0.5 * thickest + 0.5
    return tuple(sorted(float(at) for at in shapely.line_locate_point(wall, ends[near])))


def floor_records(plan: FloorPlan) -> tuple[PitFloor, ...]:
    """Floors as the proposal lists them, local coordinates, one entry for each separate area."""
    records = []
    for floor, area in zip(plan.floors, plan.areas, strict=True):
        for part in getattr(area, "geoms", [area]):
            if part.geom_type != "Polygon" or part.area <= SMALL:
                continue
            ring = shapely.get_coordinates(shapely.orient_polygons(part).exterior)[:-1]
            outline = tuple((float(x), float(y)) for x, y in ring)
            records.append(PitFloor(level=floor.level, dig_level=floor.dig_level, outline=outline))
    return tuple(records)
