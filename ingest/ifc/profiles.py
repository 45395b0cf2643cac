"""Cross-sections of swept bodies: outline, holes, and the area and second moments worked out from them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import atan2, hypot, inf, pi
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.attributes import PROFILE_NAME, PROFILE_POSITION
from ingest.ifc.curves import CurveReader, circle_points
from ingest.ifc.section_shapes import (
    angle,
    channel,
    cold_channel,
    ellipse,
    i_shape,
    rounded_rectangle,
    tee,
    trapezium,
    zed,
)

Entity: TypeAlias = Any
Floats: TypeAlias = NDArray[np.float64]
Ring: TypeAlias = tuple[tuple[float, float], ...]
DEEPEST = 8


@dataclass(slots=True)
class Profile:
    """A cross-section in the coordinates of its sweep, lengths in the file's units.

    Attributes:
        kind: rectangle, circle, hollow circle, i, u, l, t, c, z, hollow rectangle, polygon, composite, line.
        name: As the file has it, "" when not given.
        centre: Middle of a rectangle or circle.
        way: Unit vector of the profile's own x axis.
        size: Rectangle (x, y); circle (radius,); hollow circle (radius, wall); I, U ... (depth, width, ...).
        rings: Outer outlines; a circle and a rectangle have theirs made on demand by `outline`.
        holes: Inner outlines.
        note: What was left out.
    """

    kind: str
    name: str
    centre: tuple[float, float] = (0.0, 0.0)
    way: tuple[float, float] = (1.0, 0.0)
    size: tuple[float, ...] = ()
    rings: tuple[Ring, ...] = ()
    holes: tuple[Ring, ...] = ()
    note: str = ""

    @property
    def is_round(self) -> bool:
        """True for full and hollow circles."""
        return self.kind in ("circle", "hollow circle")

    @property
    def outlines(self) -> tuple[Ring, ...]:
        """Outer rings, made from the size where the file gives no vertices."""
        if self.rings:
            return self.rings
        (x, y), (u, v) = self.centre, self.way
        if self.is_round:
            return (circle_points(x, y, self.size[0]),)
        a, b = self.size[0] / 2, self.size[1] / 2
        return (
            (
                (x - a * u + b * v, y - a * v - b * u),
                (x + a * u + b * v, y + a * v - b * u),
                (x + a * u - b * v, y + a * v + b * u),
                (x - a * u - b * v, y - a * v + b * u),
            ),
        )


@dataclass(frozen=True, slots=True)
class Moments:
    """Area, centroid and second moments about axes through the centroid, parallel to the profile's coordinates."""

    A: float
    x: float
    y: float
    Ixx: float
    Iyy: float
    Ixy: float

    @property
    def largest(self) -> tuple[float, float]:
        """Largest second moment, and the angle of its axis from x, radians."""
        mean, half = (self.Ixx + self.Iyy) / 2, (self.Ixx - self.Iyy) / 2
        return mean + hypot(half, self.Ixy), 0.5 * atan2(-self.Ixy, half)

    def about(self, way: tuple[float, float]) -> float:
        """Second moment about an axis through the centroid along a unit vector."""
        c, s = way
        return self.Ixx * c * c + self.Iyy * s * s - 2 * self.Ixy * s * c


def moments(profile: Profile) -> Moments:
    """Area and second moments of a profile: exact for circles, by Green's theorem round its rings otherwise."""
    if profile.is_round:
        r = profile.size[0]
        inner = r - profile.size[1] if profile.kind == "hollow circle" else 0.0
        second = pi * (r**4 - inner**4) / 4
        return Moments(pi * (r**2 - inner**2), *profile.centre, second, second, 0.0)
    total = np.zeros(6)
    for ring in profile.outlines:
        total += _ring_sums(ring)
    for ring in profile.holes:
        total -= _ring_sums(ring)
    A, Sx, Sy, Ixx, Iyy, Ixy = total.tolist()
    if A <= 0:
        raise ValueError("a profile without area")
    x, y = Sx / A, Sy / A
    return Moments(A, x, y, Ixx - A * y * y, Iyy - A * x * x, Ixy - A * x * y)


def _ring_sums(ring: Ring) -> Floats:
    at = np.array(ring)
    x, y = at[:, 0], at[:, 1]
    x1, y1 = np.roll(x, -1), np.roll(y, -1)
    cross = x * y1 - x1 * y
    sums = np.array(
        [
            cross.sum() / 2,
            ((x + x1) * cross).sum() / 6,
            ((y + y1) * cross).sum() / 6,
            ((y * y + y * y1 + y1 * y1) * cross).sum() / 12,
            ((x * x + x * x1 + x1 * x1) * cross).sum() / 12,
            ((x * y1 + 2 * x * y + 2 * x1 * y1 + x1 * y) * cross).sum() / 24,
        ]
    )
    return np.asarray(sums if sums[0] > 0 else -sums)


class ProfileReader:
    """Reads profile definitions, each once."""

    def __init__(self, curves: CurveReader) -> None:
        self._curves = curves
        self._known: dict[int, Profile] = {}
        self._ways: dict[int, tuple[float, float, float, float]] = {}

    def clear(self) -> None:
        """Let go of the profiles that were read."""
        self._known.clear()
        self._ways.clear()

    def read(self, profile: Entity, depth: int = 0) -> Profile:
        """Read one profile definition.

        Raises:
            ValueError: If its kind is not read or its sizes make no shape.
        """
        key = profile.id()
        known = self._known.get(key)
        if known is None:
            if depth > DEEPEST:
                raise ValueError("a profile is nested too deep or in itself")
            known = self._known[key] = self._read(profile, depth)
        return known

    def _read(self, profile: Entity, depth: int) -> Profile:
        kind = profile.is_a()
        name = profile.get_argument(PROFILE_NAME) or ""
        if kind == "IfcCircleProfileDef":
            return self._simple("circle", profile, name, (profile.get_argument(3),))
        if kind == "IfcRectangleProfileDef":
            return self._simple("rectangle", profile, name, (profile.get_argument(3), profile.get_argument(4)))
        if kind == "IfcCircleHollowProfileDef":
            return self._hollow_circle(profile, name)
        if kind in ("IfcArbitraryClosedProfileDef", "IfcArbitraryProfileDefWithVoids"):
            return self._arbitrary(profile, name)
        if kind == "IfcCompositeProfileDef":
            return self._composite(profile, name, depth)
        if kind in ("IfcDerivedProfileDef", "IfcMirroredProfileDef"):
            return self._derived(profile, name, depth)
        shaper = _SHAPERS.get(kind)
        if shaper is None:
            raise ValueError(f"{kind} is not read")
        return self._shaped(profile, name, *shaper)

    def _simple(self, kind: str, profile: Entity, name: str, size: tuple[float, ...]) -> Profile:
        if not (0 < size[0] < inf and 0 < size[-1] < inf):
            raise ValueError(f"profile #{profile.id()} has size {size}")
        x, y, u, v = self._position(profile)
        return Profile(kind, name, (x, y), (u, v), size)

    def _position(self, profile: Entity) -> tuple[float, float, float, float]:
        place = profile.get_argument(PROFILE_POSITION)
        if place is None:
            return (0.0, 0.0, 1.0, 0.0)
        key = place.id()
        known = self._ways.get(key)
        if known is None:
            x, y = place.get_argument(0).get_argument(0)[:2]
            ref = place.get_argument(1)
            u, v = (1.0, 0.0) if ref is None else ref.get_argument(0)[:2]
            length = hypot(u, v)
            known = self._ways[key] = (x, y, u / length, v / length) if length else (x, y, 1.0, 0.0)
        return known

    def _hollow_circle(self, profile: Entity, name: str) -> Profile:
        radius, wall = float(profile.Radius), float(profile.WallThickness)
        if not 0 < wall <= radius:
            raise ValueError(f"tube of radius {radius} with a wall of {wall}")
        x, y, u, v = self._position(profile)
        return Profile("hollow circle", name, (x, y), (u, v), (radius, wall))

    def _arbitrary(self, profile: Entity, name: str) -> Profile:
        holes = tuple(self._ring(curve) for curve in getattr(profile, "InnerCurves", None) or ())
        return Profile("polygon", name, rings=(self._ring(profile.OuterCurve),), holes=holes)

    def _ring(self, curve: Entity) -> Ring:
        points = self._curves.points(curve)
        ring = [(float(x), float(y)) for x, y in points[:, :2]]
        span = max(float(np.ptp(points, axis=0).max()), 1e-12)
        while len(ring) > 1 and hypot(ring[0][0] - ring[-1][0], ring[0][1] - ring[-1][1]) < 1e-6 * span:
            ring.pop()
        if len(ring) < 3:
            raise ValueError("an outline with fewer than three corners")
        return tuple(ring)

    def _composite(self, profile: Entity, name: str, depth: int) -> Profile:
        parts = [self.read(part, depth + 1) for part in profile.Profiles]
        rings = tuple(ring for part in parts for ring in part.outlines)
        holes = tuple(ring for part in parts for ring in holes_of(part))
        return Profile("composite", name, rings=rings, holes=holes, note=f"{len(parts)} parts")

    def _derived(self, profile: Entity, name: str, depth: int) -> Profile:
        parent = self.read(profile.ParentProfile, depth + 1)
        if profile.is_a("IfcMirroredProfileDef") and getattr(profile, "Operator", None) is None:
            turn, move = np.array([[-1.0, 0.0], [0.0, 1.0]]), np.zeros(2)
        else:
            turn, move = operator_2d(profile.Operator)

        def lay(ring: Ring) -> Ring:
            return tuple((float(x), float(y)) for x, y in np.array(ring) @ turn.T + move)

        scale = abs(float(np.linalg.det(turn))) ** 0.5
        if parent.is_round and np.allclose(turn @ turn.T, np.eye(2) * scale**2):
            centre = turn @ np.array(parent.centre) + move
            size = tuple(s * scale for s in parent.size)
            return Profile(parent.kind, name or parent.name, (float(centre[0]), float(centre[1])), size=size)
        holes = tuple(lay(ring) for ring in holes_of(parent))
        rings = tuple(lay(ring) for ring in parent.outlines)
        return Profile("polygon", name or parent.name, rings=rings, holes=holes, note="derived from another profile")

    def _shaped(self, profile: Entity, name: str, kind: str, shape: Callable[[Entity], Any]) -> Profile:
        outer, inner, size = shape(profile)
        x, y, u, v = self._position(profile)

        def lay(ring: Floats) -> Ring:
            return tuple((x + a * u - b * v, y + a * v + b * u) for a, b in ring.tolist())

        sloped = any((getattr(profile, slope, None) or 0.0) != 0.0 for slope in ("FlangeSlope", "LegSlope", "WebSlope"))
        note = "slope of flanges left out" if sloped else ""
        holes = () if inner is None else (lay(inner),)
        return Profile(kind, name, (x, y), (u, v), size, (lay(outer),), holes, note)


def holes_of(profile: Profile) -> tuple[Ring, ...]:
    """Inner rings, the bore of a hollow circle included."""
    if profile.kind == "hollow circle":
        return (circle_points(*profile.centre, profile.size[0] - profile.size[1]),)
    return profile.holes


def operator_2d(operator: Entity) -> tuple[Floats, Floats]:
    """Matrix (2, 2) and shift of an IfcCartesianTransformationOperator2D; a mirrored second axis is kept."""
    first = np.array(operator.Axis1.DirectionRatios[:2] if operator.Axis1 else (1.0, 0.0), float)
    first = first / np.linalg.norm(first)
    second = np.array([-first[1], first[0]])
    if operator.Axis2 is not None and np.dot(operator.Axis2.DirectionRatios[:2], second) < 0:
        second = -second
    one = float(operator.Scale or 1.0)
    two = float(getattr(operator, "Scale2", None) or one)
    return np.column_stack([first * one, second * two]), np.array(operator.LocalOrigin.Coordinates[:2], float)


_SHAPERS: dict[str, tuple[str, Callable[[Entity], Any]]] = {
    "IfcIShapeProfileDef": ("i", i_shape),
    "IfcAsymmetricIShapeProfileDef": ("i", i_shape),
    "IfcUShapeProfileDef": ("u", channel),
    "IfcLShapeProfileDef": ("l", angle),
    "IfcTShapeProfileDef": ("t", tee),
    "IfcCShapeProfileDef": ("c", cold_channel),
    "IfcZShapeProfileDef": ("z", zed),
    "IfcRectangleHollowProfileDef": ("hollow rectangle", rounded_rectangle),
    "IfcRoundedRectangleProfileDef": ("rounded rectangle", rounded_rectangle),
    "IfcTrapeziumProfileDef": ("polygon", trapezium),
    "IfcEllipseProfileDef": ("polygon", ellipse),
}
