"""What the extrusion of a cut does to a load: elastic stress on the wall, and the widths that set it right.

Half-space, nu = 0.5; x is the distance of the load from the wall, z the depth below the load, y along the wall. Stress
is single, as in open ground: a wall that does not yield doubles it in 2D and 3D alike, so ratios and widths stay.
Source: Boussinesq 1885 (point), Flamant 1892 (line), both recalled; widths derived and checked by quadrature.

Assumes:
    Homogeneous elastic ground and no effect of wall movement: for ranking and for choosing a width, not for design
    pressures in layered ground.
"""

from __future__ import annotations

from math import asinh, atan, hypot, log, pi, sqrt

import numpy as np

from ingest.errors import require, require_positive
from sections.model import Floats

Number = Floats | float

GAUSS_X, GAUSS_W = np.polynomial.legendre.leggauss(96)
CLOSED_FORM_SHARE = 0.91
"""Keeps the closed form of the own width at or below the exact one (scan of x 0.3 to 20, b 0.5 to 40, H 4 to 25 m)."""


def point_stress(Q: float, x: float, y: Number, z: Number) -> Floats:
    """Horizontal stress on the wall of a point load Q (kN), 3 Q x^2 z/(2 pi R^5), kPa. Source: Boussinesq 1885."""
    R = np.sqrt(_distance(x) ** 2 + np.asarray(y, dtype=float) ** 2 + np.asarray(z, dtype=float) ** 2)
    return np.asarray(3 * Q * x**2 * np.asarray(z) / (2 * pi * R**5))


def line_stress(q: float, x: float, z: Number) -> Floats:
    """Horizontal stress of an endless line q (kN/m) along the wall, 2 q x^2 z/(pi r^4), kPa. Source: Flamant 1892."""
    r2 = _distance(x) ** 2 + np.asarray(z, dtype=float) ** 2
    return np.asarray(2 * q * x**2 * np.asarray(z) / (pi * r2**2))


def strip_stress(p: float, x1: float, x2: float, z: Number) -> Floats:
    """Horizontal stress of an endless strip p (kPa) from x1 to x2, (p/pi)(B - sin B cos 2A), kPa.

    Source: integral of Flamant's line; B the angle the strip subtends, A the mean of the angles to its edges.
    """
    require(x1, "near edge", "m", least=0.0)
    require(x2, "far edge", "m", above=x1)
    near, far = np.arctan2(x1, np.asarray(z, dtype=float)), np.arctan2(x2, np.asarray(z, dtype=float))
    return np.asarray(p / pi * (far - near - np.sin(far - near) * np.cos(far + near)))


def finite_length_factor(r: Number, b1: float, b2: float) -> Floats:
    """Factor F on the 2D stress at distance r = sqrt(x^2 + z^2) of a line load of finite length.

    Args:
        r: Distance in the plane of the section, m, above 0.
        b1: From the section to one end of the load, m.
        b2: To the other end, m; negative when the load ends before it reaches the section. b1 + b2 above 0.

    Returns:
        F = (g(b1/r) + g(b2/r))/2, g = (3 t - t^3)/2, t = b/sqrt(b^2 + r^2). Source: integral of Boussinesq along y.
    """
    _ends(b1, b2)
    r = np.asarray(r, dtype=float)
    require_positive(float(np.min(r)), "distance r", "m")
    return np.asarray((_g(b1, r) + _g(b2, r)) / 2)


def finite_strip_stress(p: float, x1: float, x2: float, b1: float, b2: float, z: Number) -> Floats:
    """Horizontal stress at the section of a rectangle p (kPa), strip by strip in x, kPa."""
    x, w = strips_across(x1, x2)
    z = np.asarray(z, dtype=float)[..., None]
    r2 = x**2 + z**2
    return np.asarray(np.sum(w * 2 * p * x**2 * z / (pi * r2**2) * finite_length_factor(np.sqrt(r2), b1, b2), axis=-1))


def width_at_depth(x: float, z: float) -> float:
    """Width W = Q/q that gives a single point load its stress at depth z, (4/3) sqrt(x^2 + z^2), m."""
    return 4 / 3 * hypot(_distance(x), require(z, "depth", "m", least=0.0))


def width_by_resultant(x: float, H: float) -> float:
    """Width W_H of a single point load by the horizontal resultant down to H, 2 x (1 - k^2)/(1 - k^3), m."""
    k = _distance(x) / hypot(x, _height(H))
    return 2 * x * (1 - k**2) / (1 - k**3)


def width_by_moment(x: float, H: float) -> float:
    """Width W_M of a single point load by the moment of the stress about depth H, m; below `width_by_resultant`."""
    return line_moment(x, H) / point_moment(x, H)


def point_width(x: float, H: float, y: float = 0.0) -> float:
    """Width to hand a single point load over with, the smaller of W_H and W_M, m: a wide one means a small load.

    A load that stands y out of the plane of the section is felt less there: its width grows as its effect decays.
    """
    by_force = width_by_resultant(x, H) * point_resultant(x, H) / point_resultant(x, H, y)
    return min(by_force, width_by_moment(x, H) * point_moment(x, H) / point_moment(x, H, y))


def own_width(x: float, b: float, H: float) -> tuple[float, float]:
    """Width of a load of own width b along the wall, section at its middle: by resultant and by moment, m."""
    require_positive(b, "own width", "m")
    half = b / 2
    by_force = b * line_resultant(x, H) / finite_line_resultant(x, H, half, half)
    return by_force, b * line_moment(x, H) / finite_line_moment(x, H, half, half)


def own_width_closed(x: float, b: float, H: float) -> float:
    """Closed form 0.91 sqrt(4 x^2 + b^2) W_H/(2 x) of `own_width`, never above it, m."""
    require_positive(b, "own width", "m")
    return CLOSED_FORM_SHARE * hypot(2 * _distance(x), b) * width_by_resultant(x, H) / (2 * x)


def line_resultant(x: float, H: float) -> float:
    """Resultant down to H of an endless line of 1 kN/m, (1 - k^2)/pi, kN/m."""
    return H**2 / (_distance(x) ** 2 + _height(H) ** 2) / pi


def line_moment(x: float, H: float) -> float:
    """Moment about depth H of an endless line of 1 kN/m, (H - x atan(H/x))/pi, kNm/m."""
    return (_height(H) - _distance(x) * atan(H / x)) / pi


def point_resultant(x: float, H: float, y: float = 0.0) -> float:
    """Resultant down to H of a point load of 1 kN at offset y along the wall, kN/m; (1 - k^3)/(2 pi x) at y = 0."""
    a2 = _distance(x) ** 2 + y**2
    return float(x**2 / (2 * pi) * (a2**-1.5 - (a2 + _height(H) ** 2) ** -1.5))


def point_moment(x: float, H: float, y: float = 0.0) -> float:
    """Moment about depth H of a point load of 1 kN at offset y along the wall, kNm/m."""
    a2 = _distance(x) ** 2 + y**2
    return float(x**2 * H / (2 * pi) * (a2**-1.5 - 1 / (a2 * sqrt(a2 + _height(H) ** 2))))


def finite_line_resultant(x: float, H: float, b1: float, b2: float) -> float:
    """Resultant down to H of a line of 1 kN/m that ends b1 and b2 from the section, kN/m."""
    _ends(b1, b2)
    return float(_finite_resultant(_distance(x), _height(H), b1) + _finite_resultant(x, H, b2)) / 2


def finite_line_moment(x: float, H: float, b1: float, b2: float) -> float:
    """Moment about depth H of a line of 1 kN/m that ends b1 and b2 from the section, kNm/m."""
    _ends(b1, b2)
    return float(_finite_moment(_distance(x), _height(H), b1) + _finite_moment(x, H, b2)) / 2


def area_ratios(x1: float, x2: float, H: float, b1: float, b2: float) -> tuple[float, float]:
    """Real effect of a loaded rectangle over that of the same pressure on an endless strip, by resultant and by moment.

    Args:
        x1: Near edge from the wall, m (0 touches it).
        x2: Far edge, m.
        H: Depth below the load, m.
        b1: From the section to one end, m.
        b2: To the other end, m.
    """
    _ends(b1, b2)
    x, w = strips_across(x1, x2)
    _height(H)
    force = float(np.sum(w * (_finite_resultant(x, H, b1) + _finite_resultant(x, H, b2)))) / 2
    moment = float(np.sum(w * (_finite_moment(x, H, b1) + _finite_moment(x, H, b2)))) / 2
    return force / strip_resultant(x1, x2, H), moment / _strip_moment(x1, x2, H)


def perpendicular_widths(x1: float, x2: float, H: float) -> tuple[float, float]:
    """Widths of a single line load lying in the plane of the cut from x1 to x2, by resultant and by moment, m.

    p = q/W over its x-range. The near end must stand off the wall: at x1 = 0 the stress has no bound.
    """
    require_positive(x1, "near end", "m")
    require(x2, "far end", "m", above=x1)
    cubed = log(x2 / x1) - (asinh(x2 / _height(H)) - asinh(x1 / H)) + x2 / hypot(x2, H) - x1 / hypot(x1, H)
    heeled = log(x2 / x1) - (asinh(x2 / H) - asinh(x1 / H))
    return strip_resultant(x1, x2, H) / (cubed / (2 * pi)), _strip_moment(x1, x2, H) / (H * heeled / (2 * pi))


def decay_along_wall(x: float, y: float) -> float:
    """Resultant of a point load at y along the wall over that at y = 0, deep wall, (x^2/(x^2 + y^2))^(3/2)."""
    return float((x**2 / (_distance(x) ** 2 + y**2)) ** 1.5)


def _distance(x: float) -> float:
    return require_positive(x, "distance from the wall", "m")


def _height(H: float) -> float:
    return require_positive(H, "depth below the load", "m")


def _ends(b1: float, b2: float) -> None:
    require(b1, "distance to the end of the load", "m")
    require(b2, "distance to the end of the load", "m")
    require_positive(b1 + b2, "length of the load", "m")


def _g(b: float, r: Floats) -> Floats:
    t = b / np.sqrt(b**2 + r**2)
    return np.asarray((3 * t - t**3) / 2)


def strips_across(x1: float, x2: float) -> tuple[Floats, Floats]:
    """Middles and widths of the strips a loaded stretch is cut into across the wall (Gauss points), m."""
    require(x1, "near edge", "m", least=0.0)
    require(x2, "far edge", "m", above=x1)
    half = (x2 - x1) / 2
    return x1 + half * (1 + GAUSS_X), half * GAUSS_W


def _finite_resultant(x: Number, H: float, b: float) -> Number:
    """Integral of Flamant times g over the depth (one side of the section, load to infinity times g)."""
    u = x**2 + H**2
    return b / pi * (1 / np.sqrt(x**2 + b**2) - x**2 / (u * np.sqrt(u + b**2)))


def _finite_moment(x: Number, H: float, b: float) -> Number:
    u = x**2 + H**2
    return (H * b / np.sqrt(x**2 + b**2) - x * np.arctan(b * H / (x * np.sqrt(u + b**2)))) / pi


def strip_resultant(x1: float, x2: float, H: float) -> float:
    """Resultant down to H of an endless strip of 1 kPa from x1 to x2, (H/pi)(atan(x2/H) - atan(x1/H)), kN/m."""
    return H / pi * (atan(x2 / H) - atan(x1 / H))


def _strip_moment(x1: float, x2: float, H: float) -> float:
    return _moment_from_wall(x2, H) - _moment_from_wall(x1, H)


def _moment_from_wall(x: float, H: float) -> float:
    """Integral of `line_moment` from the wall to x."""
    turn = pi / 2 if x == 0 else atan(H / x)
    return (H * x - (x**2 * turn + H * (x - H * atan(x / H))) / 2) / pi
