"""Placements that refer to an intersection of grid lines."""

from __future__ import annotations

from typing import Any

import numpy as np

from ingest.ifc.curves import CurveReader

Entity = Any
Triple = tuple[float, float, float]


def grid_frame(placement: Entity) -> tuple[Triple, Triple, Triple]:
    """Origin, up and first direction of an IfcGridPlacement, in the coordinates of its grid.

    The first direction runs towards the second intersection or along the given direction; without either it follows
    the first grid line (IFC4X3, 8.11.3, IfcGridPlacement).

    Raises:
        ValueError: If the grid lines are not straight or do not meet.
    """
    origin = _meeting(placement.PlacementLocation)
    towards = placement.PlacementRefDirection
    if towards is None:
        ends = _line(placement.PlacementLocation.IntersectingAxes[0])
        first = ends[1] - ends[0]
    elif towards.is_a("IfcDirection"):
        first = np.array([*towards.DirectionRatios, 0.0])[:3]
    else:
        first = _meeting(towards) - origin
    return (_triple(origin), (0.0, 0.0, 1.0), _triple(first))


def _triple(vector: Any) -> Triple:
    return (float(vector[0]), float(vector[1]), float(vector[2]))


def _line(axis: Entity) -> Any:
    points = CurveReader(1.0, 1.0).points(axis.AxisCurve)
    if len(points) != 2:
        raise ValueError("grid line is not straight")
    return points if axis.SameSense else points[::-1]


def _meeting(crossing: Entity) -> Any:
    first, second = (_line(axis) for axis in crossing.IntersectingAxes)
    offsets = tuple(crossing.OffsetDistances or ()) + (0.0, 0.0, 0.0)
    starts, ways = [], []
    for line, offset in ((first, offsets[0]), (second, offsets[1])):
        way = (line[1] - line[0])[:2]
        way = way / np.hypot(*way)
        starts.append(line[0][:2] + offset * np.array([-way[1], way[0]]))
        ways.append(way)
    square = np.array([ways[0], -ways[1]]).T
    if abs(np.linalg.det(square)) < 1e-9:
        raise ValueError("grid lines are parallel")
    at = starts[0] + np.linalg.solve(square, starts[1] - starts[0])[0] * ways[0]
    return np.array([at[0], at[1], offsets[2]])
