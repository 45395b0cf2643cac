"""Curves of an IFC file as points: lines, arcs, composite and spline curves."""

from __future__ import annotations

from math import acos, ceil, cos, isfinite, pi, sin
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.frames import FrameTable, triple

Entity = Any
Floats = NDArray[np.float64]

SAGITTA = 0.005
"""Largest distance between an arc and its chord, m."""
LEAST_STEPS_PER_TURN = 48
DEEPEST = 16
"""Curves nested deeper than this are refused: they may go in a circle."""


class CurveReader:
    """Turns curves into (n, 3) points in the file's units.

    Args:
        length: Metres per length unit, for the sagitta of chorded arcs.
        angle: Radians per plane angle unit, for trimming parameters.
    """

    def __init__(self, length: float, angle: float) -> None:
        self._sagitta = SAGITTA / length
        self.angle = angle
        self._known: dict[int, Floats] = {}

    def clear(self) -> None:
        """Let go of the curves that were read."""
        self._known.clear()

    def points(self, curve: Entity, depth: int = 0) -> Floats:
        """Points of a bounded curve, from its start to its end; a closed curve repeats its first point.

        Raises:
            ValueError: If the curve is of a kind that is not read, or nested too deep.
        """
        if depth > DEEPEST:
            raise ValueError("a curve is nested too deep or in itself")
        key = curve.id()
        if key not in self._known:
            self._known[key] = self._read(curve, depth)
        return self._known[key]

    def _read(self, curve: Entity, depth: int) -> Floats:
        kind = curve.is_a()
        reader = _READERS.get(kind)
        if reader is None:
            raise ValueError(f"{kind} is not read")
        points = reader(self, curve, depth)
        if len(points) < 2 or not isfinite(points.sum()):
            raise ValueError(f"{kind} #{curve.id()} has no two finite points")
        return points

    def _polyline(self, curve: Entity, _depth: int) -> Floats:
        points = curve.get_argument(0)
        if len(points) == 2:
            return np.array([triple(p.get_argument(0)) for p in points])
        return _drop_repeats(_as_3d([p.get_argument(0) for p in points]))

    def _indexed(self, curve: Entity, _depth: int) -> Floats:
        at = _as_3d(curve.Points.get_argument(0))
        if not curve.Segments:
            return _drop_repeats(at)
        pieces = []
        for segment in curve.Segments:
            index = np.array(segment.get_argument(0)) - 1
            if index.min() < 0:
                raise ValueError("point number below 1")
            arc = segment.is_a() == "IfcArcIndex"
            pieces.append(self.arc_through(*at[index]) if arc else at[index])
        return _drop_repeats(np.concatenate(pieces))

    def arc_through(self, start: Floats, middle: Floats, end: Floats) -> Floats:
        """Points of the arc through three points; the straight line when they are in line."""
        a, b = middle - start, end - start
        normal = np.cross(a, b)
        area = float(normal @ normal)
        if area <= 1e-18 * float(a @ a) * float(b @ b):
            return np.array([start, middle, end])
        to_centre = (np.cross(normal, a) * (b @ b) + np.cross(b, normal) * (a @ a)) / (2 * area)
        radius = float(np.linalg.norm(to_centre))
        x = -to_centre / radius
        y = np.cross(normal / np.sqrt(area), x)
        sweep = float(np.arctan2((b - to_centre) @ y, (b - to_centre) @ x)) % (2 * pi)
        return self._arc(start + to_centre, x, y, radius, radius, 0.0, sweep)

    def _arc(self, c: Floats, x: Floats, y: Floats, a: float, b: float, start: float, sweep: float) -> Floats:
        steps = self._steps(max(abs(a), abs(b)), abs(sweep))
        t = start + sweep * np.arange(steps + 1)[:, None] / steps
        return np.asarray(c + a * np.cos(t) * x + b * np.sin(t) * y)

    def _steps(self, radius: float, sweep: float) -> int:
        widest = 2 * acos(max(1.0 - self._sagitta / max(radius, self._sagitta), 0.0))
        return max(ceil(sweep / min(widest, 2 * pi / LEAST_STEPS_PER_TURN) - 1e-9), 1)

    def _conic(self, curve: Entity, _depth: int) -> Floats:
        return self._conic_arc(curve, 0.0, 2 * pi)

    def _conic_arc(self, curve: Entity, start: float, sweep: float) -> Floats:
        c, x, y, a, b = conic(curve)
        return self._arc(c, x, y, a, b, start, sweep)

    def _trimmed(self, curve: Entity, depth: int) -> Floats:
        basis, forward = curve.BasisCurve, bool(curve.SenseAgreement)
        kind = basis.is_a()
        if kind == "IfcLine":
            return np.array([self._line_end(basis, trim) for trim in (curve.Trim1, curve.Trim2)])
        if kind in ("IfcCircle", "IfcEllipse"):
            start, end = (self._conic_angle(basis, trim) for trim in (curve.Trim1, curve.Trim2))
            sweep = (end - start) % (2 * pi) if forward else -((start - end) % (2 * pi))
            if abs(sweep) < 1e-12:
                sweep = 2 * pi if forward else -2 * pi
            return self._conic_arc(basis, start, sweep)
        if kind == "IfcPolyline" and _cartesian(curve.Trim1) is None:
            whole = self.points(basis, depth + 1)
            ends = sorted(float(_parameter(t) or 0.0) for t in (curve.Trim1, curve.Trim2))
            cut = _part_of_polyline(whole, *ends)
            return cut if forward else cut[::-1]
        raise ValueError(f"a trimmed {kind} is not read")

    def _line_end(self, line: Entity, trim: tuple[Any, ...]) -> Floats:
        at = _cartesian(trim)
        if at is not None:
            return at
        along = line.Dir
        way = _as_3d([along.Orientation.DirectionRatios])[0]
        start = _as_3d([line.Pnt.Coordinates])[0]
        return np.asarray(start + (_parameter(trim) or 0.0) * along.Magnitude * way / np.linalg.norm(way))

    def _conic_angle(self, basis: Entity, trim: tuple[Any, ...]) -> float:
        """Angle of a trim; a point is taken before a parameter, whose angle unit files often get wrong."""
        at = _cartesian(trim)
        if at is None:
            return float(_parameter(trim) or 0.0) * self.angle
        c, x, y, a, b = conic(basis)
        return float(np.arctan2((at - c) @ y / b, (at - c) @ x / a))

    def _composite(self, curve: Entity, depth: int) -> Floats:
        pieces = []
        for segment in curve.Segments:
            if not hasattr(segment, "ParentCurve"):
                raise ValueError(f"{segment.is_a()} is not read")
            piece = self.points(segment.ParentCurve, depth + 1)
            pieces.append(piece if segment.SameSense else piece[::-1])
        return _drop_repeats(np.concatenate(_aligned(pieces)))

    def _spline(self, curve: Entity, _depth: int) -> Floats:
        from scipy.interpolate import BSpline

        at = _as_3d([p.Coordinates for p in curve.ControlPointsList])
        weights = np.array(getattr(curve, "WeightsData", None) or np.ones(len(at)), float)[:, None]
        knots = np.repeat(curve.Knots, curve.KnotMultiplicities) if hasattr(curve, "Knots") else None
        degree = int(curve.Degree)
        if knots is None:
            knots = np.concatenate([[0.0] * degree, np.arange(len(at) - degree + 1), [len(at) - degree] * degree])
        t = np.linspace(knots[degree], knots[-degree - 1], 8 * len(at) + 1)
        made = BSpline(knots, np.hstack([at * weights, weights]), degree)(t)
        return np.asarray(made[:, :3] / made[:, 3:])

    def _edge(self, edge: Entity, depth: int) -> Floats:
        ends = _as_3d([v.VertexGeometry.Coordinates for v in (edge.EdgeStart, edge.EdgeEnd)])
        geometry = getattr(edge, "EdgeGeometry", None)
        if geometry is None or geometry.is_a("IfcLine"):
            return ends
        if geometry.is_a("IfcConic"):
            forward = bool(edge.SameSense)
            c, x, y, a, b = conic(geometry)
            start, end = (float(np.arctan2((p - c) @ y / b, (p - c) @ x / a)) for p in ends)
            sweep = (end - start) % (2 * pi) if forward else -((start - end) % (2 * pi))
            return self._conic_arc(geometry, start, sweep or 2 * pi)
        return self.points(geometry, depth + 1)

    def _oriented(self, edge: Entity, depth: int) -> Floats:
        points = self.points(edge.EdgeElement, depth + 1)
        return points if edge.Orientation else points[::-1]


_READERS = {
    "IfcPolyline": CurveReader._polyline,
    "IfcIndexedPolyCurve": CurveReader._indexed,
    "IfcTrimmedCurve": CurveReader._trimmed,
    "IfcCircle": CurveReader._conic,
    "IfcEllipse": CurveReader._conic,
    "IfcCompositeCurve": CurveReader._composite,
    "Ifc2DCompositeCurve": CurveReader._composite,
    "IfcBezierCurve": CurveReader._spline,
    "IfcRationalBezierCurve": CurveReader._spline,
    "IfcBSplineCurveWithKnots": CurveReader._spline,
    "IfcRationalBSplineCurveWithKnots": CurveReader._spline,
    "IfcEdge": CurveReader._edge,
    "IfcEdgeCurve": CurveReader._edge,
    "IfcOrientedEdge": CurveReader._oriented,
}


def conic(curve: Entity) -> tuple[Floats, Floats, Floats, float, float]:
    """Centre, both axes (unit vectors) and both half axes of an IfcCircle or IfcEllipse."""
    frames = FrameTable()
    matrix = frames.matrix(frames.row(curve.Position))
    half = (curve.Radius, curve.Radius) if curve.is_a("IfcCircle") else (curve.SemiAxis1, curve.SemiAxis2)
    return matrix[:3, 3], matrix[:3, 0], matrix[:3, 1], float(half[0]), float(half[1])


def circle_points(
    x: float, y: float, radius: float, steps: int = LEAST_STEPS_PER_TURN
) -> tuple[tuple[float, float], ...]:
    """Vertices of a regular polygon on a circle, first one due east, counter-clockwise."""
    return tuple((x + radius * cos(2 * pi * i / steps), y + radius * sin(2 * pi * i / steps)) for i in range(steps))


def _as_3d(rows: Any) -> Floats:
    at = np.array(rows, float)
    if at.ndim != 2 or at.shape[1] not in (2, 3):
        raise ValueError("points without two or three coordinates")
    return at if at.shape[1] == 3 else np.hstack([at, np.zeros((len(at), 1))])


def _cartesian(trim: tuple[Any, ...]) -> Floats | None:
    for select in trim:
        if select.is_a() == "IfcCartesianPoint":
            return np.asarray(_as_3d([select.Coordinates])[0])
    return None


def _parameter(trim: tuple[Any, ...]) -> float | None:
    for select in trim:
        if select.is_a() != "IfcCartesianPoint":
            return float(select.wrappedValue)
    return None


def _part_of_polyline(points: Floats, start: float, end: float) -> Floats:
    at = np.arange(len(points))
    inner = points[(at > start) & (at < end)]
    ends = [np.array([np.interp(t, at, points[:, k]) for k in range(3)]) for t in (start, end)]
    return np.vstack([ends[0], inner, ends[1]])


def _aligned(pieces: list[Floats]) -> list[Floats]:
    """Turn round pieces whose sense was written wrongly, when that alone closes the joint."""
    for i in range(1, len(pieces)):
        gap = float(np.linalg.norm(pieces[i][0] - pieces[i - 1][-1]))
        turned = float(np.linalg.norm(pieces[i][-1] - pieces[i - 1][-1]))
        if turned < 1e-6 * max(gap, 1e-30):
            pieces[i] = pieces[i][::-1]
    return pieces


def _drop_repeats(points: Floats) -> Floats:
    keep = np.ones(len(points), bool)
    keep[1:] = np.any(points[1:] != points[:-1], axis=1)
    return points[keep]
