"""Distance along a wall: points to chainages and back, the sides between corners, stretches that pass the start."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import ArrayLike
from shapely.geometry.base import BaseGeometry

from sections.found import PitShape
from sections.model import Bools, Floats, Ints

ON = 1e-3
"""Chainages closer than this are one place, m."""
OPEN_DEPTH = 20.0
"""How far in front of an open wall its dig is taken to reach, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Sides:
    """The stretches of wall between corners; a near-circular ring, or a wall without corners, is one side.

    Attributes:
        start: Chainage at which each side begins.
        length: Its length, m.
        angle_start, angle_end: Interior angle of the corner at either end, degrees; nan where there is no corner.
        loop: True when the one side closes on itself, so that it has no ends.
        closed: True when the whole wall closes on itself, corners or not.
        total: Length of the whole wall, m.
    """

    start: Floats
    length: Floats
    angle_start: Floats
    angle_end: Floats
    loop: bool
    closed: bool
    total: float


@dataclass(frozen=True, kw_only=True)
class Located:
    """Points laid on the wall axis: chainage of the nearest point, distance, and offset (positive into the pit)."""

    at: Floats
    distance: Floats
    offset: Floats


def find_sides(shape: PitShape) -> Sides:
    """Split a perimeter at its corners; the corners of a regular polygon taken as a ring do not count."""
    corners = () if shape.circle is not None else tuple(sorted(shape.corners, key=lambda corner: corner.at))
    at = np.array([corner.at for corner in corners])
    angle = np.array([corner.interior_angle for corner in corners])
    none = np.array([np.nan])
    if shape.closed and len(at) > 0:
        start, length = at, np.diff(np.append(at, at[0] + shape.length))
        before, after = angle, np.roll(angle, -1)
    else:
        ends = np.concatenate([[0.0], at, [shape.length]])
        start, length = ends[:-1], np.diff(ends)
        before, after = np.concatenate([none, angle]), np.concatenate([angle, none])
    return Sides(
        start=start,
        length=length,
        angle_start=before,
        angle_end=after,
        loop=shape.closed and len(at) == 0,
        closed=shape.closed,
        total=shape.length,
    )


def side_of(sides: Sides, chainage: Floats) -> tuple[Ints, Floats]:
    """Side index and distance from its start; a chainage on a corner belongs to the side that begins there."""
    index = np.searchsorted(sides.start, chainage + 1e-9, side="right") - 1
    index = np.where(index < 0, len(sides.start) - 1, index)
    local = chainage - sides.start[index]
    if sides.closed:
        local = np.mod(local + 1e-9, sides.total) - 1e-9
    return index.astype(np.int64), np.clip(local, 0.0, None)


def line_of(shape: PitShape) -> shapely.LineString:
    """The wall axis as a line; a closed one ends where it began."""
    axis = np.vstack([shape.axis, shape.axis[:1]]) if shape.closed else shape.axis
    return shapely.LineString(axis)


def area_of(shape: PitShape) -> shapely.Polygon:
    """The plan of a pit; for an open wall the ground in front of it, closed straight between its ends or 20 m deep."""
    if shape.closed:
        return _largest(shapely.Polygon(shape.axis))
    line = line_of(shape)
    front: BaseGeometry = line.buffer(OPEN_DEPTH, single_sided=True)
    if len(shape.axis) > 2:
        ring = shapely.Polygon(shape.axis)
        front = shapely.union(front, ring.buffer(0.0)) if shapely.is_ccw(ring.exterior) else front
    behind = line.buffer(-OPEN_DEPTH, single_sided=True)
    return _largest(shapely.difference(front, behind))


def _largest(area: BaseGeometry) -> shapely.Polygon:
    """The largest polygon of a plan that may touch or cross itself."""
    valid = area if area.is_valid else area.buffer(0.0)
    parts = [part for part in getattr(valid, "geoms", [valid]) if isinstance(part, shapely.Polygon)]
    return max(parts, key=lambda part: part.area)


def segments_of(shape: PitShape) -> tuple[Floats, Floats, Floats]:
    """Start points (m, 2), vectors (m, 2) and lengths (m,) of the straight pieces of the axis."""
    axis = np.vstack([shape.axis, shape.axis[:1]]) if shape.closed else shape.axis
    vector = np.diff(axis, axis=0)
    return axis[:-1], vector, np.hypot(vector[:, 0], vector[:, 1])


def segment_at(shape: PitShape, chainage: Floats) -> Ints:
    """Index of the straight piece of the axis under each chainage; at a vertex the piece that begins there."""
    pieces = len(shape.axis) if shape.closed else len(shape.axis) - 1
    index = np.searchsorted(shape.at, chainage + 1e-9, side="right") - 1
    return np.clip(index, 0, pieces - 1).astype(np.int64)


def point_at(shape: PitShape, chainage: ArrayLike) -> Floats:
    """Points (n, 2) of the axis at chainages (n,)."""
    at = wrapped(shape, np.asarray(chainage, dtype=np.float64))
    start, vector, length = segments_of(shape)
    index = segment_at(shape, at)
    share = (at - shape.at[index]) / np.maximum(length[index], 1e-12)
    return np.asarray(start[index] + share[:, None] * vector[index])


def normal_at(shape: PitShape, chainage: ArrayLike) -> Floats:
    """Unit normals (n, 2) into the pit; on an arc the radial direction, not that of the chord."""
    at = wrapped(shape, np.asarray(chainage, dtype=np.float64))
    _, vector, length = segments_of(shape)
    index = segment_at(shape, at)
    tangent = vector[index] / np.maximum(length[index], 1e-12)[:, None]
    normal = np.column_stack([-tangent[:, 1], tangent[:, 0]])
    points = point_at(shape, at)
    for arc in shape.arcs:
        on = within(at, arc.start, arc.to, shape.length)
        radial = np.asarray(arc.centre) - points[on]
        radial /= np.hypot(radial[:, 0], radial[:, 1])[:, None]
        normal[on] = radial if arc.ccw else -radial
    return normal


def wrapped(shape: PitShape, chainage: Floats) -> Floats:
    """Chainages brought into the length of the wall: round a closed one, to the end of an open one."""
    if shape.closed:
        return np.asarray(np.mod(chainage, shape.length))
    return np.clip(chainage, 0.0, shape.length)


def within(chainage: Floats, start: float, to: float, length: float) -> Bools:
    """True where start <= chainage < to; `to < start` passes the start, 0 to `length` is everything."""
    if to - start >= length - ON:
        return np.ones(len(chainage), dtype=bool)
    if to < start:
        return np.asarray((chainage >= start) | (chainage < to))
    return np.asarray((chainage >= start) & (chainage < to))


def locate(shape: PitShape, points: Floats) -> Located:
    """Lay points (n, 2) on the wall axis by the shortest way."""
    if len(points) == 0:
        empty = np.zeros(0)
        return Located(at=empty, distance=empty, offset=empty)
    line = line_of(shape)
    shapely.prepare(line)
    spots = shapely.points(points)
    at = np.asarray(shapely.line_locate_point(line, spots), dtype=np.float64)
    if shape.closed:
        at = np.where(at >= shape.length - 1e-9, 0.0, at)
    foot = np.asarray(shapely.get_coordinates(shapely.line_interpolate_point(line, at)))
    away = points - foot
    distance = np.hypot(away[:, 0], away[:, 1])
    # at a vertex neither normal alone says on which side a point lies; their sum does
    before = normal_at(shape, wrapped(shape, at - 1e-6))
    after = normal_at(shape, wrapped(shape, at + 1e-6))
    side = np.einsum("ij,ij->i", away, before + after)
    return Located(at=at, distance=distance, offset=np.where(side >= 0.0, distance, -distance))


def cast(shape: PitShape, origins: Floats, directions: Floats, least: float = 1e-6) -> tuple[Floats, Floats]:
    """Distance along unit rays (n, 2) to the first wall beyond `least`, and its chainage; inf and nan when none.

    Rays that graze a wall lengthwise pass it by; an end of a straight piece counts as met.
    """
    start, vector, length = segments_of(shape)
    hit = np.full(len(origins), np.inf)
    chainage = np.full(len(origins), np.nan)
    block = max(1, 2_000_000 // max(len(start), 1))
    for first in range(0, len(origins), block):
        part = slice(first, first + block)
        hit[part], chainage[part] = _cast_block(shape, (start, vector, length), origins[part], directions[part], least)
    return hit, chainage


def _cast_block(
    shape: PitShape, pieces: tuple[Floats, Floats, Floats], origins: Floats, directions: Floats, least: float
) -> tuple[Floats, Floats]:
    start, vector, length = pieces
    cross = directions[:, :1] * vector[None, :, 1] - directions[:, 1:] * vector[None, :, 0]
    gap = start[None, :, :] - origins[:, None, :]
    grazing = np.abs(cross) < 1e-9 * np.maximum(length, 1e-12)
    safe = np.where(grazing, 1.0, cross)
    ray = (gap[:, :, 0] * vector[None, :, 1] - gap[:, :, 1] * vector[None, :, 0]) / safe
    share = (gap[:, :, 0] * directions[:, 1:] - gap[:, :, 1] * directions[:, :1]) / safe
    slack = 1e-7
    good = ~grazing & (ray > least) & (share >= -slack) & (share <= 1.0 + slack)
    ray = np.where(good, ray, np.inf)
    first = np.argmin(ray, axis=1)
    rows = np.arange(len(origins))
    met = ray[rows, first]
    at = shape.at[first] + np.clip(share[rows, first], 0.0, 1.0) * length[first]
    at = np.asarray(np.mod(at, shape.length)) if shape.closed else at
    return met, np.where(np.isfinite(met), at, np.nan)
