"""Corners of a wall axis as seen from inside the pit, and the point where chainage starts."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import shapely

from ingest.members import Point
from sections.model import Arc, Corner, Floats
from sections.perimeter.outline import Outline, full_circle
from sections.perimeter.wall_graph import cross

TIE = 0.01
"""Corners this close to the least northing count as equally far south, m."""
ON_CORNER = 0.1
"""A start asked for this close to a vertex is that vertex, m."""


def turns(outline: Outline) -> Floats:
    """Turn to the left at each vertex, degrees; exact at the ends of arcs."""
    a, b = outline.before, outline.behind
    return np.asarray(np.degrees(np.arctan2(cross(a, b), (a * b).sum(axis=1))))


def corner_vertices(outline: Outline, direction: float) -> list[int]:
    """Vertices where the wall turns by more than `direction` degrees; curved stretches have none inside."""
    is_corner = outline.joint & (np.abs(turns(outline)) >= direction)
    if not outline.closed:
        is_corner[[0, -1]] = False
    return [int(k) for k in np.flatnonzero(is_corner)]


def find_corners(outline: Outline, direction: float) -> tuple[Corner, ...]:
    """Corners in order of chainage, interior angle = 180 degrees less the turn to the left."""
    turn, at = turns(outline), outline.at
    return tuple(
        Corner(
            at=float(at[k]),
            point=(float(outline.points[k, 0]), float(outline.points[k, 1])),
            interior_angle=float(180.0 - turn[k]),
            kind="inside" if turn[k] > 0 else "re-entrant",
        )
        for k in corner_vertices(outline, direction)
    )


def find_arcs(outline: Outline) -> tuple[Arc, ...]:
    """The circular stretches by chainage, exactly."""
    at, count = outline.at, len(outline.points)
    arcs = []
    for number, side in enumerate(outline.arcs):
        mine = np.flatnonzero(outline.arc == number)
        whole = len(mine) == count
        starts = mine if whole else mine[outline.arc[mine - 1] != number]
        first = int(starts[0])
        last = count if whole else first + len(mine)
        arcs.append(
            Arc(
                start=0.0 if whole else float(at[first]),
                to=outline.length if last % count == 0 else float(at[last % count]),
                centre=(float(side.centre[0]), float(side.centre[1])),
                radius=float(side.radius),
                ccw=side.turn > 0,
            )
        )
    return tuple(sorted(arcs, key=lambda arc: arc.start))


def start_outline(outline: Outline, direction: float, north: float, start: Point | None) -> Outline:
    """The same ring with chainage starting where it should.

    Args:
        outline: A ring; an open way is returned as it is, it starts at its own first end.
        direction: Turn that makes a corner, degrees.
        north: Direction of world north in the frame of the outline, degrees counter-clockwise from its y axis.
        start: Point asked for, or None: the corner farthest south, then west; a ring without corners due east of its
            centre.
    """
    if not outline.closed:
        return outline
    if start is not None:
        return _start_at(outline, np.array(start))
    c, s = np.cos(np.radians(north)), np.sin(np.radians(north))
    corners = corner_vertices(outline, direction)
    if corners:
        easting = outline.points[corners] @ [c, s]
        northing = outline.points[corners] @ [-s, c]
        lowest = northing <= northing.min() + TIE
        return roll(outline, corners[int(np.argmin(np.where(lowest, easting, np.inf)))])
    if len(outline.arcs) == 1 and (outline.arc == 0).all():
        return full_circle(outline.arcs[0], float(np.radians(north)))
    centre = np.array(shapely.Polygon(outline.points).centroid.coords[0])
    far = 2.0 * float(np.abs(outline.points - centre).sum(axis=1).max())
    ring = shapely.LinearRing(outline.points)
    met = shapely.get_coordinates(ring.intersection(shapely.LineString((centre, centre + far * np.array([c, s])))))
    return _start_at(outline, met[int(np.argmax((met - centre) @ [c, s]))])


def _start_at(outline: Outline, point: Floats) -> Outline:
    away = np.hypot(*(outline.points - point).T)
    if away.min() <= ON_CORNER:
        return roll(outline, int(np.argmin(away)))
    ring = np.vstack((outline.points, outline.points[:1]))
    chainage = float(shapely.line_locate_point(shapely.LineString(ring), shapely.Point(point)))
    return roll(*_insert(outline, chainage))


def _insert(outline: Outline, chainage: float) -> tuple[Outline, int]:
    """The outline with a vertex at a chainage, and its number."""
    k = int(np.searchsorted(outline.at, chainage, side="right")) - 1
    a, b = outline.points[k], outline.points[(k + 1) % len(outline.points)]
    share = (chainage - outline.at[k]) / outline.spans[k]
    along = (b - a) / np.hypot(*(b - a))
    return replace(
        outline,
        points=np.insert(outline.points, k + 1, a + share * (b - a), axis=0),
        joint=np.insert(outline.joint, k + 1, False),
        before=np.insert(outline.before, k + 1, along, axis=0),
        behind=np.insert(outline.behind, k + 1, along, axis=0),
        arc=np.insert(outline.arc, k + 1, outline.arc[k]),
    ), k + 1


def roll(outline: Outline, first: int) -> Outline:
    """The same ring beginning with another vertex."""
    return replace(
        outline,
        points=np.roll(outline.points, -first, axis=0),
        joint=np.roll(outline.joint, -first),
        before=np.roll(outline.before, -first, axis=0),
        behind=np.roll(outline.behind, -first, axis=0),
        arc=np.roll(outline.arc, -first),
    )
