"""Loads and receptors near a pit, and the stretch of wall each load bears on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from ingest.members import Load
from ingest.model import Site
from sections.found import PitShape
from sections.model import Bools, Floats, PitLoad, PitReceptor
from sections.pit.chainage import area_of, line_of, locate, normal_at, point_at

SPREAD = 2.0
"""A load bears on the wall up to this many times its distance behind it, beyond its own ends (judgement)."""
BEHIND = 2.0
"""A load further behind the wall than this many excavated depths does not bear on it (judgement)."""


@dataclass(frozen=True, kw_only=True)
class NearLoad:
    """A load near one pit: its record, which of the site's loads it is, and its nearest chainage."""

    load: PitLoad
    index: int
    at: float


def find_loads(site: Site, shape: PitShape, depth: float) -> tuple[NearLoad, ...]:
    """Loads inside a pit or within reach of its wall, with ids in order of chainage, local coordinates.

    Args:
        depth: Largest excavated depth, m; nan when not known, then every load of the site counts as near.
    """
    reach = BEHIND * depth if np.isfinite(depth) else np.inf
    wall, area = line_of(shape), area_of(shape)
    near = []
    for index, load in enumerate(site.loads):
        if not load.points:
            continue
        outline = shape_of(load)
        inside = _within(shape, area, outline)
        if not inside and shapely.distance(wall, outline) > reach:
            continue
        at = float(locate(shape, np.array([[outline.centroid.x, outline.centroid.y]])).at[0])
        near.append((round(at, 1), -(load.level or 0.0), load.points, at, index, inside))
    near.sort(key=lambda entry: entry[:4])
    return tuple(
        NearLoad(load=_record(site.loads[index], f"{shape.id}-load-{n}", inside), index=index, at=at)
        for n, (_, _, _, at, index, inside) in enumerate(near, start=1)
    )


def _within(shape: PitShape, area: shapely.Polygon, outline: BaseGeometry) -> bool:
    spot = shapely.point_on_surface(outline)
    if shape.closed:
        return bool(area.contains(spot))
    return bool(locate(shape, np.array([[spot.x, spot.y]])).offset[0] > 0.0)


def _record(load: Load, name: str, inside: bool) -> PitLoad:
    return PitLoad(
        id=name, kind=load.kind, value=load.value, within_pit=inside, points=load.points, sources=load.sources
    )


def shape_of(load: Load | PitLoad) -> BaseGeometry:
    """Point, line or outline of a load on plan."""
    return _geometry(load.points, load.kind in ("area", "footing"))


def _geometry(points: Sequence[tuple[float, float]], filled: bool) -> BaseGeometry:
    if len(points) == 1:
        return shapely.Point(points[0])
    if len(points) == 2 or not filled:
        return shapely.LineString(points)
    return shapely.make_valid(shapely.Polygon(points))


def bearing(shape: PitShape, load: PitLoad, chainage: Floats, depth: Floats) -> Bools:
    """True at the chainages (n,) on whose wall a load bears.

    A load bears where, measured along the wall from its ends, the station is no further away than twice the load's
    distance behind the wall, where that distance is at most two excavated depths, and where no other part of the pit
    lies between. An unknown depth rules nothing out.
    """
    if load.within_pit:
        return np.zeros(len(chainage), dtype=bool)
    points = _outline_points(load)
    normal = normal_at(shape, chainage)
    along, back = _as_seen(shape, points, chainage, normal)
    behind = back > 1e-6
    least = np.min(np.where(behind, back, np.inf), axis=1)
    # only what lies behind this wall counts: the part of a load that reaches past a corner bears on the other wall
    low = np.min(np.where(behind, along, np.inf), axis=1)
    high = np.max(np.where(behind, along, -np.inf), axis=1)
    off = np.maximum(0.0, np.maximum(low, -high))
    bears = np.isfinite(least) & (off <= SPREAD * least + 1e-9)
    bears &= np.isnan(depth) | (least <= BEHIND * depth + 1e-9)
    return np.asarray(bears & _in_sight(shape, load, chainage, normal, bears))


def _outline_points(load: PitLoad) -> Floats:
    """Vertices of a load, its edges divided so that no long edge hides a near point from a curved or short wall."""
    geometry = shape_of(load)
    dense = shapely.segmentize(geometry, 1.0) if geometry.length > 0.0 else geometry
    return np.asarray(shapely.get_coordinates(dense))


def _as_seen(shape: PitShape, points: Floats, chainage: Floats, normal: Floats) -> tuple[Floats, Floats]:
    """Distances (n, p) along the wall and behind it of points seen from each station."""
    gap = points[None, :, :] - point_at(shape, chainage)[:, None, :]
    along = gap[:, :, 0] * normal[:, None, 1] - gap[:, :, 1] * normal[:, None, 0]
    back = -(gap[:, :, 0] * normal[:, None, 0] + gap[:, :, 1] * normal[:, None, 1])
    return along, back


def _in_sight(shape: PitShape, load: PitLoad, chainage: Floats, normal: Floats, asked: Bools) -> Bools:
    """False where the pit itself lies between the wall and the load."""
    seen = np.ones(len(chainage), dtype=bool)
    chosen = np.flatnonzero(asked)
    if len(chosen) == 0 or not shape.closed:
        return seen
    start = point_at(shape, chainage[chosen]) - 0.02 * normal[chosen]
    target = shapely.shortest_line(shapely.points(start), shape_of(load))
    wall = line_of(shape)
    shapely.prepare(wall)
    seen[chosen] = ~np.asarray(shapely.intersects(wall, target))
    return seen


def load_ends(shape: PitShape, load: PitLoad, depth: float) -> Floats:
    """Chainages at which a load begins and ceases to bear on the wall, found by halving."""
    count = max(8, int(np.ceil(shape.length / 0.5)))
    grid = np.linspace(0.0, shape.length, count + 1)
    deep = np.full(len(grid), depth)
    on = bearing(shape, load, grid, deep)
    change = np.flatnonzero(on[1:] != on[:-1])
    low, high, state = grid[change], grid[change + 1], on[change]
    for _ in range(30):
        middle = 0.5 * (low + high)
        same = bearing(shape, load, middle, np.full(len(middle), depth)) == state
        low, high = np.where(same, middle, low), np.where(same, high, middle)
    return np.asarray(np.round(0.5 * (low + high), 6))


def find_receptors(site: Site, shape: PitShape) -> tuple[PitReceptor, ...]:
    """Receptors with their least distance to the wall axis, nearest first, local coordinates."""
    wall = line_of(shape)
    found = []
    for receptor in site.receptors:
        if receptor.points:
            outline = _geometry(receptor.points, receptor.points[0] == receptor.points[-1] or len(receptor.points) > 3)
            found.append((float(shapely.distance(wall, outline)), receptor.kind, receptor.points))
    found.sort()
    return tuple(
        PitReceptor(id=f"{shape.id}-receptor-{n}", kind=kind, points=points, distance=distance)
        for n, (distance, kind, points) in enumerate(found, start=1)
    )
