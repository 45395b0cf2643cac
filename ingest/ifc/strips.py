"""Walls from their plan outline: centre line, thickness, and how well a strip of that thickness fits."""

from __future__ import annotations

from dataclasses import dataclass
from math import acos, atan2, ceil, hypot, pi
from typing import TypeAlias

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPolygon, Polygon

from ingest.ifc.plan import Area, areal

Floats: TypeAlias = NDArray[np.float64]
Points: TypeAlias = tuple[tuple[float, float], ...]

FITS = 0.05
"""Largest share of a strip's area by which the outline may differ (judgement)."""
SAGITTA = 0.005
WIDEST_CHORD = 0.55
"""Chords longer than this many radii are sides of a polygon, not of a chorded arc (32 degrees)."""


@dataclass(frozen=True, slots=True)
class Strip:
    """A wall on plan: centre line, thickness, and the difference of areas as a share of the strip's."""

    line: Points
    thickness: float
    misfit: float
    how: str
    closed: bool = False


def find_strip(area: Area, hint: Floats | None, expected: float | None = None) -> Strip | None:
    """Find the centre line and thickness of a wall from its outline on plan.

    Args:
        area: Plan area, m.
        hint: (n, 2) line the file draws along the wall (its reference line, not its centre line), or None.
        expected: Thickness that layers sum to, m: tells a stub shorter than thick from a wall.

    Returns:
        The best strip, or None when the outline is no strip.
    """
    if isinstance(area, MultiPolygon):
        area = _one_piece(area)
    if not isinstance(area, Polygon) or area.is_empty:
        return None
    outer = shapely.get_coordinates(area.exterior)[:-1]
    ring = _ring_strip(area)
    if ring is not None:
        return ring
    if hint is not None and len(hint) > 2 and np.hypot(*(hint[0] - hint[-1])) < 1e-6:
        hint = None  # a closed line is the outline once more, not a line along the wall
    if hint is not None and len(hint) > 2:
        return _arc_strip(outer, hint, area.area) or _bent_strip(area, hint)
    way = _way(area, hint, expected)
    how = "along its axis" if hint is not None else "along its longer side"
    if hint is None and expected is not None:
        how = "across the side its layers sum to"
    return _straight_strip(area, outer, way, how)


def _one_piece(area: MultiPolygon) -> Area:
    """Bridge gaps up to 30 mm between the leaves of a wall; leaves farther apart are taken as one rectangle."""
    joined = shapely.buffer(shapely.buffer(area, 0.015, join_style="mitre"), -0.015, join_style="mitre")
    return joined if isinstance(joined, Polygon) else areal(shapely.minimum_rotated_rectangle(area))


def _way(area: Area, hint: Floats | None, expected: float | None) -> Floats:
    if hint is not None and len(hint) == 2 and np.ptp(hint, axis=0).max() > 1e-6:
        way = hint[1] - hint[0]
        return np.asarray(way / np.hypot(*way))
    box = shapely.get_coordinates(shapely.minimum_rotated_rectangle(area))
    sides = np.diff(box[:3], axis=0)
    lengths = np.hypot(*sides.T)
    along = int(np.argmax(lengths))
    if expected is not None and abs(lengths[along] - expected) < abs(lengths[1 - along] - expected):
        along = 1 - along
    return np.asarray(sides[along] / lengths[along])


def _straight_strip(area: Area, outer: Floats, way: Floats, how: str) -> Strip | None:
    normal = np.array([-way[1], way[0]])
    along, across = outer @ way, outer @ normal
    thickness = float(np.ptp(across))
    middle = float(across.min() + across.max()) / 2
    reach = float(np.ptp(along)) + 1.0
    start = way * (float(along.min()) - reach) + normal * middle
    ray = shapely.LineString([start, start + way * 3 * reach])
    inside = shapely.get_coordinates(shapely.intersection(ray, area)) @ way
    if not len(inside) or thickness <= 0:
        return None
    a, b = float(inside.min()), float(inside.max())
    if b - a <= 0:
        return None
    misfit = abs(area.area / (thickness * (b - a)) - 1)
    ends = (a * way + middle * normal, b * way + middle * normal)
    return Strip(_tuple(np.array(ends)), thickness, misfit, how)


def _ring_strip(area: Polygon) -> Strip | None:
    """A wall that closes on itself: an outline with one hole that runs parallel to it."""
    if len(area.interiors) != 1:
        return None
    outer, inner = Polygon(area.exterior), Polygon(area.interiors[0])
    thickness = 2 * area.area / (outer.length + inner.length)
    shrunk = areal(shapely.buffer(outer, -thickness, join_style="mitre"))
    misfit = areal(shapely.symmetric_difference(shrunk, inner)).area / area.area
    if misfit > FITS or inner.area < 0.25 * outer.area:
        return None
    middle = areal(shapely.buffer(outer, -thickness / 2, join_style="mitre"))
    if not isinstance(middle, Polygon):
        return None
    line = shapely.get_coordinates(middle.exterior)[:-1]
    return Strip(_tuple(line), thickness, misfit, "between its outer and inner outline", closed=True)


def _arc_strip(outer: Floats, hint: Floats, area: float) -> Strip | None:
    """A wall along an arc: both faces are circles about the axis' centre."""
    circle = fit_circle(hint)
    if circle is None:
        return None
    centre, _ = circle
    radii = np.hypot(*(outer - centre).T)
    low, high = float(radii.min()), float(radii.max())
    middle = hint[len(hint) // 2] - centre
    base = atan2(middle[1], middle[0])
    angles = (np.arctan2(*(outer - centre).T[::-1]) - base + pi) % (2 * pi) - pi
    first, last = float(angles.min()), float(angles.max())
    radius = (low + high) / 2
    strip = (high**2 - low**2) / 2 * (last - first)
    if strip <= 0:
        return None
    start, step = hint[0] - centre, hint[1] - hint[0]
    forward = start[0] * step[1] - start[1] * step[0] > 0
    t = np.linspace(first, last, arc_steps(radius, last - first) + 1) + base
    line = centre + radius * np.column_stack([np.cos(t), np.sin(t)])
    return Strip(_tuple(line if forward else line[::-1]), high - low, abs(area / strip - 1), "along its curved axis")


def _bent_strip(area: Area, hint: Floats) -> Strip | None:
    """A wall along a bent line: the line is moved sideways into the middle of the outline."""
    line = shapely.LineString(hint)
    thickness = area.area / line.length
    corners = shapely.get_coordinates(area)
    left = shapely.buffer(line, thickness * 2, single_sided=True, cap_style="flat", join_style="mitre")
    distances = shapely.distance(shapely.points(corners), line)
    signed = np.where(shapely.intersects_xy(left, corners[:, 0], corners[:, 1]), distances, -distances)
    offset = (signed.min() + signed.max()) / 2
    thickness = float(np.ptp(signed))
    moved: object = line if abs(offset) < 1e-6 else shapely.offset_curve(line, offset, join_style="mitre")
    if not isinstance(moved, shapely.LineString) or thickness <= 0:
        return None
    misfit = abs(area.area / (thickness * moved.length) - 1)
    return Strip(_tuple(shapely.get_coordinates(moved)), thickness, misfit, "along its bent axis")


def fit_circle(points: Floats) -> tuple[Floats, float] | None:
    """Centre and radius of the circle all points lie on within 1 mm or a thousandth of the radius; None otherwise."""
    at = points - points.mean(axis=0)
    system = np.column_stack([2 * at, np.ones(len(at))])
    solved, _, rank, _ = np.linalg.lstsq(system, (at**2).sum(axis=1), rcond=None)
    if rank < 3:
        return None
    radius = float(np.sqrt(max(solved[2] + solved[0] ** 2 + solved[1] ** 2, 0.0)))
    off = np.abs(np.hypot(*(at - solved[:2]).T) - radius)
    if np.hypot(*np.diff(at, axis=0).T).max() > WIDEST_CHORD * radius:
        return None
    if off.max() > max(1e-3, 1e-3 * radius) or radius > 1e5:
        return None
    return solved[:2] + points.mean(axis=0), radius


def arc_steps(radius: float, sweep: float) -> int:
    """Number of chords that keep within the sagitta of 5 mm."""
    widest = 2 * acos(max(1 - SAGITTA / max(radius, SAGITTA), 0.0))
    return max(ceil(abs(sweep) / widest), 1)


def _tuple(points: Floats) -> Points:
    return tuple((float(x), float(y)) for x, y in points)


def length_of_line(points: Points) -> float:
    """Length of a line, m."""
    return sum(hypot(b[0] - a[0], b[1] - a[1]) for a, b in zip(points, points[1:], strict=False))
