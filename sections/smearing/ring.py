"""Rings, discs and polygons under pressure from outside: stiffness, hoop force, bending along the ring.

Pressures act towards the axis and are positive, movements towards the axis likewise, R is the mean radius. Source: thin
ring statics; Lame (thick ring), after Timoshenko & Goodier; ring buckling after Timoshenko & Gere (recalled).
"""

from __future__ import annotations

from math import cos, inf, pi, sin, sqrt, tan

import numpy as np

from ingest.errors import require, require_positive
from ingest.record import record
from sections.model import Floats


@record
class Polygon:
    """Regular polygon of `sides` inscribed in a circle, under even pressure, joints rigid; per metre of depth.

    Lengths in m, N in kN/m, moments in kNm/m, `eccentricity` = M_corner/N in m, `quotient` = 4 pi area/perimeter^2.
    """

    sagitta: float
    side: float
    apothem: float
    N: float
    M_corner: float
    M_mid: float
    eccentricity: float
    quotient: float
    equal_area_radius: float


def ring_stiffness(E: float, t: float, R: float) -> float:
    """Radial stiffness of a ring wall, E t/R^2, kPa/m. E in kPa, t and R in m."""
    return require_positive(E, "modulus E", "kPa") * require_positive(t, "wall thickness", "m") / _radius(R) ** 2


def ring_movement(p: float, E: float, t: float, R: float) -> float:
    """Radial movement under pressure p (kPa), m."""
    return p / ring_stiffness(E, t, R)


def hoop_force(p: float, R: float) -> float:
    """Hoop compression under pressure p (kPa) per metre of depth, p R, kN/m; of a ring beam under q (kN/m), kN."""
    return p * _radius(R)


def ring_beam_stiffness(EA: float, R: float) -> tuple[float, float]:
    """Radial stiffness of a ring beam per metre of circumference EA/R^2 and per radian EA/R (EA in kN)."""
    return require_positive(EA, "EA", "kN") / _radius(R) ** 2, EA / R


def thick_ring_movement(p: float, E: float, nu: float, a: float, b: float, *, plane_strain: bool = False) -> float:
    """Inward movement of the outer face of a ring of radii a < b under outside pressure p, m. Source: Lame.

    `a` = 0 is a solid disc. Plane stress unless `plane_strain`.
    """
    require_positive(E, "modulus E", "kPa")
    require(nu, "Poisson's ratio", least=0.0, below=0.5)
    if plane_strain:
        E, nu = E / (1 - nu**2), nu / (1 - nu)
    return p * b / E * (_bore(a, b) - nu)


def thick_ring_hoop(p: float, a: float, b: float) -> tuple[float, float]:
    """Hoop compression at the inner and the outer face under outside pressure p, kPa. Source: Lame."""
    return p * (_bore(a, b) + 1), p * _bore(a, b)


def thick_ring_hoop_inside(p: float, a: float, b: float) -> tuple[float, float]:
    """Hoop tension at the inner and the outer face under INSIDE pressure p, kPa. Source: Lame."""
    return p * _bore(a, b), p * (_bore(a, b) - 1)


def disc_stiffness(E: float, t: float, R: float, nu: float, hole: float = 0.0) -> float:
    """Radial stiffness of a slab filling the ring, per metre of circumference, kN/m per m.

    E t/(R (1 - nu)) for a solid disc; with a central hole of radius `hole` by Lame.
    """
    return require_positive(t, "slab thickness", "m") / thick_ring_movement(1.0, E, nu, hole, _radius(R))


def strut_ring_stiffness(EA: float, R: float, diameters: int) -> tuple[float, float]:
    """Radial stiffness of n struts along diameters, even in angle: n EA/(pi R^2) per m, n EA/(pi R) per radian."""
    require_positive(float(diameters), "number of struts")
    per_radian = diameters * require_positive(EA, "EA", "kN") / (pi * _radius(R))
    return per_radian / R, per_radian


def equivalent_disc(EA: float, R: float, diameters: int, nu: float) -> float:
    """E t of the disc that is as stiff as n struts along diameters, (1 - nu) n EA/(pi R), kN/m."""
    return (1 - require(nu, "Poisson's ratio", least=0.0, below=0.5)) * strut_ring_stiffness(EA, R, diameters)[1]


def pair_factor(offset: float, R: float) -> float:
    """Radial stiffness of two parallel struts at an offset from the diameter over that on it, sqrt(1 - (c/R)^2)."""
    return sqrt(1 - (require(offset, "offset from the diameter", "m", least=0.0, below=_radius(R)) / R) ** 2)


def find_polygon(sides: int, R: float, p: float) -> Polygon:
    """Shape and actions of a regular polygon inscribed in radius R under pressure p (kPa).

    Source: hoop force p times apothem; each side bends as a beam fixed at its ends (rigid joints).
    """
    n = int(require(float(sides), "number of sides", least=3.0))
    require_positive(p, "pressure", "kPa")
    side, apothem = 2 * _radius(R) * sin(pi / n), R * cos(pi / n)
    return Polygon(
        sagitta=R - apothem,
        side=side,
        apothem=apothem,
        N=p * apothem,
        M_corner=p * side**2 / 12,
        M_mid=p * side**2 / 24,
        eccentricity=side**2 / (12 * apothem),
        quotient=pi / (n * tan(pi / n)),
        equal_area_radius=R * sqrt(n * sin(2 * pi / n) / (2 * pi)),
    )


def buckling_pressure(EI: float, R: float) -> float:
    """Pressure at which a free ring ovalises, 3 EI/R^3, kPa; the ground would help, so it errs low.

    Source: Timoshenko & Gere (recalled). EI along the ring, kNm2/m.
    """
    return 3 * require_positive(EI, "EI along the ring", "kNm2/m") / _radius(R) ** 3


def shape_moment(p: float, R: float, out_of_round: float, EI: float) -> float:
    """Moment along the ring from w0 cos 2theta out of round, p R w0/(1 - p/p_cr), kNm/m; inf from p_cr on."""
    require(p, "pressure", "kPa", least=0.0)
    require(out_of_round, "out of round", "m", least=0.0)
    share = p / buckling_pressure(EI, R)
    return inf if share >= 1 else p * R * out_of_round / (1 - share)


def uneven_moment(dp: float, R: float, EI: float, *, ground: float = 0.0, mode: int = 2) -> float:
    """Moment along the ring from uneven pressure dp cos(m theta), kNm/m.

    Args:
        dp: kPa.
        R: m.
        EI: Along the ring, kNm2/m.
        ground: Radial spring of the ground, kPa/m; 0 for none.
        mode: m, 2 (oval) or more; 1 is a sideways force that no ring resists.

    Source: inextensible ring, dp R^2/(m^2 - 1)/(1 + k R^4/((m^2 - 1)^2 EI)).
    """
    order = _mode(mode)
    return require(dp, "uneven pressure", "kPa") * _radius(R) ** 2 / order / (1 + _ground(ground, R, EI) / order**2)


def uneven_movement(dp: float, R: float, EI: float, *, ground: float = 0.0, mode: int = 2) -> float:
    """Radial movement from uneven pressure dp cos(m theta), m; arguments as in `uneven_moment`."""
    order = _mode(mode)
    return uneven_moment(dp, R, EI, ground=ground, mode=mode) * _radius(R) ** 2 / (order * EI)


def ground_spring(E: float, nu: float, R: float) -> float:
    """Spring of the ground against ovalling, normal pressure only, 3 E/((1 + nu)(5 - 6 nu) R), kPa/m.

    Source: infinite elastic ground round a hole, derived.
    """
    require(nu, "Poisson's ratio", least=0.0, most=0.5)
    return 3 * require_positive(E, "modulus of the ground", "kPa") / ((1 + nu) * (5 - 6 * nu) * _radius(R))


def strut_moment(P: float, R: float, theta: Floats | float, EI: float, *, ground: float = 0.0) -> Floats:
    """Moment along the ring from two opposite strut forces P (kN per m of depth) at an angle from the strut, kNm/m.

    Args:
        P: Force of each strut end per metre of depth.
        R: m.
        theta: Angle from the strut, radians.
        EI: Along the ring, kNm2/m.
        ground: Radial spring of the ground, kPa/m.

    Source: inextensible ring, (2 P R/pi) sum over m = 2, 4 .. of (m^2 - 1) cos(m theta)/((m^2 - 1)^2 + k R^4/EI); the
    sum without ground is P R (1/pi - |sin theta|/2) and is taken out, so that the rest converges fast.
    """
    angle = np.asarray(theta, dtype=float)
    kappa = _ground(ground, R, EI)
    m = np.arange(2.0, 2.0 * (200 + int(50 * kappa**0.25)), 2.0)
    order = m**2 - 1
    held = np.cos(angle[..., None] * m) @ (kappa / (order * (order**2 + kappa)))
    return np.asarray(P * R * (1 / pi - np.abs(np.sin(angle)) / 2 - 2 / pi * held))


def _radius(R: float) -> float:
    return require_positive(R, "radius", "m")


def _bore(a: float, b: float) -> float:
    require(a, "inner radius", "m", least=0.0)
    require(b, "outer radius", "m", above=a)
    return (b**2 + a**2) / (b**2 - a**2)


def _mode(mode: int) -> float:
    return require(float(mode), "mode of uneven pressure", least=2.0) ** 2 - 1


def _ground(ground: float, R: float, EI: float) -> float:
    """Spring over bending, k R^4/EI."""
    require(ground, "ground spring", "kPa/m", least=0.0)
    return ground * _radius(R) ** 4 / require_positive(EI, "EI along the ring", "kNm2/m")
