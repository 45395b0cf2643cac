"""Plan figures of parts: centre line of a slender outline, round outlines, ends of a straight member."""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import cached_property
from typing import TYPE_CHECKING

from ingest.members import Point, Point3
from ingest.parts import Part

if TYPE_CHECKING:
    from shapely import STRtree
    from shapely.geometry.base import BaseGeometry

SLENDER = 2.5
"""Length over width from which an outline has a centre line (judgement)."""


def plan(points: Sequence[Point3]) -> tuple[Point, ...]:
    """Plan coordinates of points."""
    return tuple((point[0], point[1]) for point in points)


def outline_of(part: Part) -> tuple[Point, ...] | None:
    """Ring of an outline, prism, closed path or circle on plan, not repeated; None for anything open.

    A circle is chorded at a sagitta of 5 mm.
    """
    if part.form == "circle" and part.radius:
        steps = max(16, math.ceil(math.pi / math.acos(max(1 - 0.005 / part.radius, 0.0))))
        x, y, _ = part.points[0]
        turns = [2 * math.pi * n / steps for n in range(steps)]
        return tuple((x + part.radius * math.cos(a), y + part.radius * math.sin(a)) for a in turns)
    if part.form in ("outline", "prism") or (part.form == "path" and part.closed):
        return plan(part.points) if len(part.points) > 2 else None
    return None


def centroid(part: Part) -> Point:
    """Centre of a part on plan: centroid of its outline, middle of its line, or its point."""
    from shapely import LineString, Polygon

    ring = outline_of(part)
    if part.form in ("circle", "point", "text") or len(part.points) == 1:
        return part.points[0][0], part.points[0][1]
    middle = Polygon(ring).centroid if ring and Polygon(ring).area > 0 else LineString(plan(part.points)).centroid
    return float(middle.x), float(middle.y)


def centre_line(ring: Sequence[Point]) -> tuple[tuple[Point, Point], float] | None:
    """Centre line and width of a slender, nearly rectangular ring; None for any other shape.

    Args:
        ring: Vertices, m, not repeated.

    Returns:
        The two ends of the centre line and the width, m.
    """
    from shapely import Polygon, minimum_rotated_rectangle

    shape = Polygon(ring)
    if not shape.is_valid or shape.area <= 0:
        return None
    box = minimum_rotated_rectangle(shape)
    if not isinstance(box, Polygon) or shape.area < 0.97 * box.area:
        return None
    corners = [(float(x), float(y)) for x, y in box.exterior.coords[:4]]
    a, b = math.dist(corners[0], corners[1]), math.dist(corners[1], corners[2])
    if a < b:
        corners = corners[1:] + corners[:1]
        a, b = b, a
    if a < SLENDER * b:
        return None
    ends = (_middle(corners[0], corners[3]), _middle(corners[1], corners[2]))
    return (min(ends), max(ends)), b


def ends_of(part: Part) -> tuple[Point3, Point3] | None:
    """Ends of a straight member: a bar, a straight path, or a slender outline taken by its centre line.

    Returns:
        The two ends, the upper one first for a bar; None when the part is not one straight member.
    """
    if part.form == "bar" and len(part.points) == 2:
        return part.points[0], part.points[1]
    ring = outline_of(part)
    if ring is not None and part.form != "circle":
        line = centre_line(ring)
        if line is None:
            return None
        z = _level(part)
        (a, b), _ = line
        return (*a, z), (*b, z)
    if part.form != "path" or len(part.points) < 2:
        return None
    first, last = part.points[0], part.points[-1]
    length = math.dist(first, last)
    bent = max((_offset(point, first, last) for point in part.points[1:-1]), default=0.0)
    return (first, last) if length > 0 and bent <= 0.02 * length else None


def extent(ring: Sequence[Point]) -> tuple[float, float]:
    """Size of a ring along x and y, m."""
    xs, ys = [x for x, _ in ring], [y for _, y in ring]
    return max(xs) - min(xs), max(ys) - min(ys)


def sides_of(ring: Sequence[Point]) -> tuple[float, float]:
    """Shorter and longer side of the smallest rectangle round a ring, however it is turned, m."""
    from shapely import Polygon, get_coordinates, oriented_envelope

    corners = get_coordinates(oriented_envelope(Polygon(ring)))
    if len(corners) < 4:
        return 0.0, math.dist(ring[0], ring[-1])
    one, other = (math.dist(corners[k], corners[k + 1]) for k in (0, 1))
    return min(one, other), max(one, other)


class NearLines:
    """Lines and points on plan, asked for the distance of a point from the nearest of them."""

    def __init__(self, lines: Sequence[Sequence[Point]], points: Sequence[Point]) -> None:
        """Args: lines of two vertices or more, single points; m."""
        self._shapes = [*lines, *((point,) for point in points)]
        self.empty = not self._shapes

    @cached_property
    def _tree(self) -> STRtree:
        from shapely import LineString, STRtree
        from shapely import Point as At

        return STRtree([LineString(shape) if len(shape) > 1 else At(shape[0]) for shape in self._shapes])

    @cached_property
    def hull(self) -> BaseGeometry:
        """Convex hull of everything."""
        from shapely import MultiPoint

        return MultiPoint([point for shape in self._shapes for point in shape]).convex_hull

    def distance(self, point: Point, within: float = math.inf) -> float:
        """Distance to the nearest, m; inf when none lies `within`."""
        from shapely import Point as At

        if self.empty:
            return math.inf
        reach = None if math.isinf(within) else within
        _, found = self._tree.query_nearest(At(point), max_distance=reach, return_distance=True, all_matches=False)
        return float(found[0]) if len(found) else math.inf


def _level(part: Part) -> float:
    if part.z_bottom is not None and part.z_top is not None:
        return (part.z_bottom + part.z_top) / 2
    return part.points[0][2]


def _middle(a: Point, b: Point) -> Point:
    return (a[0] + b[0]) / 2, (a[1] + b[1]) / 2


def _offset(point: Point3, first: Point3, last: Point3) -> float:
    span = math.dist(first, last)
    along = sum((p - a) * (b - a) for p, a, b in zip(point, first, last, strict=True)) / span**2 if span else 0.0
    foot = tuple(a + along * (b - a) for a, b in zip(first, last, strict=True))
    return math.dist(point, foot)
