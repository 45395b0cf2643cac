"""Where two neighbouring sides meet: lines cross, an arc runs into a straight, two arcs touch."""

from __future__ import annotations

import numpy as np

from sections.model import Floats
from sections.perimeter.sides import Side
from sections.perimeter.wall_graph import cross

TANGENT = 4.5
"""An arc that runs into its neighbour within this is tangent to it, degrees."""


def meet(a: Side, b: Side, near: float) -> Floats | None:
    """Point where two sides meet, None where they do not within `near` (m) of their ends."""
    points = _meetings(a, b)
    middle = 0.5 * (a.last + b.first)
    points.sort(key=lambda p: float(np.hypot(*(p - middle))))
    if points and np.hypot(*(points[0] - a.last)) <= near and np.hypot(*(points[0] - b.first)) <= near:
        return points[0]
    return None


def _meetings(a: Side, b: Side) -> list[Floats]:
    if a.form == "line" and b.form == "line":
        det = float(cross(a.ahead, b.ahead))
        if abs(det) < np.sin(np.radians(0.5)):
            return []
        return [a.last + float(cross(b.first - a.last, b.ahead)) / det * a.ahead]
    if a.form == "arc" and b.form == "arc":
        return _arc_arc(a, b)
    if "point" in (a.form, b.form):
        return []
    return _line_arc(a, b) if a.form == "line" else _line_arc(b, a)


def _line_arc(line: Side, arc: Side) -> list[Floats]:
    """Tangent point where the line all but touches the arc, else both crossings."""
    foot = line.first + float((arc.centre - line.first) @ line.ahead) * line.ahead
    away = float(np.hypot(*(arc.centre - foot)))
    if away >= arc.radius * np.cos(np.radians(TANGENT)):
        return [foot]
    half = float(np.sqrt(arc.radius**2 - away**2))
    return [foot + half * line.ahead, foot - half * line.ahead]


def _arc_arc(a: Side, b: Side) -> list[Floats]:
    between = b.centre - a.centre
    span = float(np.hypot(*between))
    if span < 1e-6:
        return []
    unit = between / span
    x = (span**2 + a.radius**2 - b.radius**2) / (2 * span)
    half = float(np.sqrt(max(a.radius**2 - x**2, 0.0)))
    if half < a.radius * np.sin(np.radians(TANGENT)):
        return [a.centre + np.sign(x) * a.radius * unit]
    side = half * np.array([-unit[1], unit[0]])
    return [a.centre + x * unit + side, a.centre + x * unit - side]
