"""A footing B x L in two dimensions: stress under it, ratio to the strip, bearing factors, and what to hand over.

Source: Newmark 1935 and Steinbrenner 1934 (stress below a corner), EN 1997-1:2004 Annex D (bearing), all recalled.
Pressure and width are never reduced together.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import atan, exp, pi, radians, sin, sqrt, tan
from typing import NamedTuple

from ingest.errors import require, require_positive
from sections.definition import Alternative
from sections.smearing.hand_over import HandedOver, hand_over_area

LONG_FOOTING = 5.0
"""L/B from which the strip stands for the footing under its centre (error below 1 % to z = B, 7 % to 2 B)."""


class BearingFactors(NamedTuple):
    """Nq, Nc, Ngamma."""

    Nq: float
    Nc: float
    Ng: float


class ShapeFactors(NamedTuple):
    """Drained shape factors of a rectangle: sq, sgamma, sc."""

    sq: float
    sg: float
    sc: float


def corner_influence(m: float, n: float) -> float:
    """Vertical stress below the corner of a loaded rectangle over its pressure; m = B/z, n = L/z.

    Source: Newmark 1935, in a form without branches.
    """
    require(m, "B/z", least=0.0)
    require(n, "L/z", least=0.0)
    root = m * n / sqrt(1 + m**2 + n**2)
    return (atan(root) + root * (1 / (1 + m**2) + 1 / (1 + n**2))) / (2 * pi)


def centre_influence(B: float, L: float, z: float) -> float:
    """Vertical stress below the centre of a B x L footing over its pressure, at depth z; all in m."""
    require_positive(z, "depth below the footing", "m")
    return 4 * corner_influence(require_positive(B, "B", "m") / (2 * z), require_positive(L, "L", "m") / (2 * z))


def strip_influence(B: float, z: float) -> float:
    """Vertical stress below the centre of an endless strip over its pressure, (a + sin a)/pi, a = 2 atan(B/2z)."""
    a = 2 * atan(require_positive(B, "B", "m") / (2 * require_positive(z, "depth below the footing", "m")))
    return (a + sin(a)) / pi


def spread_two_to_one(B: float, z: float, L: float | None = None) -> float:
    """Vertical stress over pressure by a 2:1 spread; a strip when L is None."""
    across = 1 / (1 + require(z, "depth below the footing", "m", least=0.0) / require_positive(B, "B", "m"))
    return across if L is None else across / (1 + z / require_positive(L, "L", "m"))


def stress_ratio(B: float, L: float, z: float) -> float:
    """Real over strip vertical stress below the centre at depth z.

    For settlement or heave of a layer at that depth; never for the load on a wall, where it is 1.5 to 3.9 times too
    small in common cases.
    """
    return centre_influence(B, L, z) / strip_influence(B, z)


def settlement_pressure(q: float, B: float, L: float, z: float) -> float:
    """Pressure on a strip of the same width with the real vertical stress at depth z, kPa; q itself from L/B = 5."""
    return q if L / require_positive(B, "B", "m") >= LONG_FOOTING else q * stress_ratio(B, L, z)


def bearing_factors(phi: float) -> BearingFactors:
    """Nq, Nc, Ng = 2 (Nq - 1) tan phi; phi in degrees. Source: EN 1997-1:2004 Annex D (informative, recalled)."""
    f = radians(require(phi, "friction angle", "degrees", above=0.0, below=90.0))
    Nq = exp(pi * tan(f)) * tan(pi / 4 + f / 2) ** 2
    return BearingFactors(Nq=Nq, Nc=(Nq - 1) / tan(f), Ng=2 * (Nq - 1) * tan(f))


def shape_factors(phi: float, B: float, L: float) -> ShapeFactors:
    """Drained sq, sg, sc of a rectangle, B <= L; phi in degrees. Source: EN 1997-1:2004 Annex D (recalled)."""
    ratio = _ratio(B, L)
    Nq = bearing_factors(phi).Nq
    sq = 1 + ratio * sin(radians(phi))
    return ShapeFactors(sq=sq, sg=1 - 0.3 * ratio, sc=(sq * Nq - 1) / (Nq - 1))


def undrained_shape_factor(B: float, L: float) -> float:
    """Undrained sc = 1 + 0.2 B/L, with Nc = pi + 2. Source: EN 1997-1:2004 Annex D (recalled)."""
    return 1 + 0.2 * _ratio(B, L)


def hand_over_footing(
    q: float,
    *,
    x1: float,
    x2: float,
    b1: float,
    b2: float,
    depths: Sequence[float],
    settlement_depth: float | None = None,
    stands_for: float | None = None,
) -> HandedOver:
    """Hand a footing over by its load on the wall, with the pressure for settlement among the alternatives.

    Args:
        q: Pressure, kPa.
        x1: Near edge from the wall, m.
        x2: Far edge, m.
        b1: From the section to one end along the wall, m.
        b2: To the other end, m.
        depths: Of formation and of the toe below the footing, m.
        settlement_depth: Depth z* below the footing of the layer whose settlement matters, m; None for none.
        stands_for: Length of wall the section stands for, m.
    """
    wall = hand_over_area(q, x1=x1, x2=x2, b1=b1, b2=b2, depths=depths, stands_for=stands_for)
    if settlement_depth is None:
        return wall
    value = settlement_pressure(q, x2 - x1, b1 + b2, settlement_depth)
    row = Alternative(
        name="equal_effect",
        value=value,
        unit="kPa",
        keeps=f"the vertical stress under the centre {settlement_depth:g} m below the footing, for settlement or heave",
        loses="the load on the wall, which it under-states",
    )
    return replace(wall, alternatives=(*wall.alternatives, row))


def _ratio(B: float, L: float) -> float:
    return require_positive(B, "B", "m") / require(L, "L", "m", least=B)
