"""The chain that a support really is: member, packing, waler and far end in series, along the member's axis.

Source: statics of springs in series; footing springs of a rigid circle on an elastic half-space (recalled).
"""

from __future__ import annotations

from math import cos, inf, isinf, pi, radians, sin, sqrt
from typing import Literal

from ingest.errors import require, require_positive
from ingest.record import record
from sections.smearing.member import corner_length

UNKNOWN_CHAIN = (1.0 / 3.0, 1.0)
"""k_effective over EA/L_eff when nothing is known of the chain (judgement)."""
OPENING_CLEAR = 1.5
"""Distance from the wall, in opening lengths, beyond which only the net width of a slab counts (judgement)."""


@record
class SupportChain:
    """Stiffness of a support along its axis: `k_effective` in kN/m over `L_eff` in m, `phi` = k_effective L_eff/EA."""

    L_eff: float
    k_effective: float
    phi: float


def support_chain(
    EA: float, L_eff: float, *, k_packing: float = inf, k_waler: float = inf, k_end: float = inf
) -> SupportChain:
    """Put a support's chain together: 1/k = L_eff/EA + 1/k_packing + 1/k_waler + 1/k_end.

    Args:
        EA: Axial rigidity, kN.
        L_eff: Length to what holds still: the true length, half of it at a symmetry plane, `corner_length` at a
            corner of 45 degrees (else `corner_chain`), m.
        k_packing: kN/m; inf where there is no packing.
        k_waler: Local bending of the waler between wall contacts, kN/m; inf where it bears on the wall all along.
        k_end: What the far end stands on, kN/m; inf for a cast slab or a symmetry plane.

    Raises:
        ValueError: A value that is not positive. Where a link is not known use `chain_range`, not inf.
    """
    member = require_positive(L_eff, "L_eff", "m") / require_positive(EA, "EA", "kN")
    links = ((k_packing, "packing"), (k_waler, "waler"), (k_end, "far end"))
    k = 1.0 / (member + sum(_flexibility(stiffness, what) for stiffness, what in links))
    return SupportChain(L_eff=L_eff, k_effective=k, phi=k * member)


def corner_chain(
    EA: float, length: float, skew: float, *, k_packing: float = inf, k_waler: float = inf
) -> SupportChain:
    """Chain of a corner strut with equal packing and waler at either end.

    Args:
        EA: Axial rigidity, kN.
        length: True length, m.
        skew: On this wall, degrees.
        k_packing: kN/m at each end.
        k_waler: kN/m at each end.

    Source: both walls move alike, so the whole flexibility counts cos/(cos + sin); at 45 degrees this is one end of it.
    """
    L_eff = corner_length(length, skew)
    share = L_eff / length
    ends = 2 * (_flexibility(k_packing, "packing") + _flexibility(k_waler, "waler"))
    member = L_eff / require_positive(EA, "EA", "kN")
    k = 1.0 / (member + share * ends)
    return SupportChain(L_eff=L_eff, k_effective=k, phi=k * member)


def chain_range(EA: float, L_eff: float) -> tuple[SupportChain, SupportChain]:
    """Softest and stiffest chain of a support of which only the member is known (judgement)."""
    whole = require_positive(EA, "EA", "kN") / require_positive(L_eff, "L_eff", "m")
    low, high = (SupportChain(L_eff=L_eff, k_effective=share * whole, phi=share) for share in UNKNOWN_CHAIN)
    return low, high


def packing_stiffness(E: float, area: float, thickness: float) -> float:
    """Stiffness of a packing E A/t, kN/m. Arguments: modulus kPa, area m2, thickness along the strut m."""
    require_positive(E, "modulus of packing", "kPa")
    return E * require_positive(area, "packing area", "m2") / require_positive(thickness, "packing thickness", "m")


def footing_stiffness(radius: float, G: float, nu: float) -> tuple[float, float]:
    """Vertical 4 G r/(1 - nu) and horizontal 8 G r/(2 - nu) stiffness of a rigid round footing, kN/m.

    Args:
        radius: Of the circle of equal area, m.
        G: Shear modulus of the ground, kPa.
        nu: Poisson's ratio of the ground.

    Source: rigid circle on an elastic half-space (recalled).

    Assumes:
        Elastic ground of great depth; no sliding or bearing failure of the footing.
    """
    require_positive(radius, "footing radius", "m")
    require_positive(G, "shear modulus G", "kPa")
    require(nu, "Poisson's ratio", least=0.0, most=0.5)
    return 4 * G * radius / (1 - nu), 8 * G * radius / (2 - nu)


def equal_area_radius(area: float) -> float:
    """Radius of the circle that has a footing's area, m."""
    return sqrt(require_positive(area, "footing area", "m2") / pi)


def stiffness_along(k_v: float, k_h: float, inclination: float) -> float:
    """Stiffness of a foot along a member's axis: 1/k = cos^2/k_h + sin^2/k_v, kN/m.

    Args:
        k_v: Vertical stiffness, kN/m.
        k_h: Horizontal stiffness, kN/m.
        inclination: Of the member, degrees.
    """
    delta = radians(require(inclination, "inclination", "degrees", least=-90.0, most=90.0))
    require_positive(k_v, "vertical stiffness", "kN/m")
    require_positive(k_h, "horizontal stiffness", "kN/m")
    return 1.0 / (cos(delta) ** 2 / k_h + sin(delta) ** 2 / k_v)


def force_lost_to_gap(k_effective: float, gap: float) -> float:
    """Force that slack or shrinkage takes from a support, k g, kN; none is felt until the head has moved the gap."""
    return require_positive(k_effective, "k_effective", "kN/m") * require(gap, "gap", "m", least=0.0)


def free_strain(alpha: float, warming: float) -> float:
    """Free thermal strain alpha dT, lengthening positive; alpha in 1/K, warming in K."""
    return require_positive(alpha, "thermal coefficient", "1/K") * require(warming, "change of temperature", "K")


def restraint_force(chain: SupportChain, alpha: float, warming: float) -> float:
    """Compression of a support that warms between still walls, k_effective alpha dT L_eff, kN.

    Not EA alpha dT: the chain gives way.
    """
    return chain.k_effective * free_strain(alpha, warming) * chain.L_eff


def slab_at_opening(distance: float, length: float) -> Literal["no_support", "not_assessed", "net_width"]:
    """Say how a slab props the wall beside an opening.

    Args:
        distance: From the wall to the opening, m; 0 when it touches.
        length: Of the opening along the wall, m.

    Returns:
        `no_support` where the opening touches the wall, `net_width` beyond 1.5 lengths, `not_assessed` between.
    """
    require(distance, "distance of opening from wall", "m", least=0.0)
    require_positive(length, "length of opening", "m")
    if distance <= 1e-6:
        return "no_support"
    return "net_width" if distance > OPENING_CLEAR * length else "not_assessed"


def _flexibility(stiffness: float, what: str) -> float:
    return (
        0.0 if isinf(stiffness) and stiffness > 0 else 1.0 / require_positive(stiffness, f"stiffness of {what}", "kN/m")
    )
