"""King posts below formation, where they are separate piles and not a wall: what acts on them, what resists.

Above formation the lagging spans from post to post and everything loads on the spacing. Below, the passive resistance
of a post is that of a discrete pile. Source of the limits: Broms (1964), design practice (recalled).
"""

from __future__ import annotations

from math import cos, radians, sin, sqrt

import numpy as np

from ingest.errors import require, require_positive
from sections.member import BelowFormation
from sections.model import Floats

DEEP_FACTOR, SURFACE_FACTOR = 9.0, 2.0
"""N_p of a pile in clay, deep and at the surface (recalled)."""
WIDTHS_MOBILISED = 3.0
"""Passive width of a post in coarse soil, in widths of the post (recalled)."""


def coulomb_passive(phi: float, delta: float) -> float:
    """Passive coefficient of an upright wall and level ground, resultant at delta to the wall normal; degrees.

    Source: Coulomb 1776. Only used to show what wall friction can and cannot do: towards delta = phi it overstates.
    """
    require(phi, "friction angle", "degrees", above=0.0, below=90.0)
    require(delta, "wall friction angle", "degrees", least=0.0, most=phi)
    f, d = radians(phi), radians(delta)
    return cos(f) ** 2 / (cos(d) * (1 - sqrt(sin(f + d) * sin(f) / cos(d))) ** 2)


def least_interface_share(phi: float, delta: float) -> float:
    """Smallest share of the horizontal passive that a wall-friction (interface) factor alone can leave.

    Kp(0)/(Kp(delta) cos(delta)). It lies far above the share that posts have, so such a factor must not stand in for
    discrete posts.
    """
    return coulomb_passive(phi, 0.0) / (coulomb_passive(phi, delta) * cos(radians(delta)))


def active_share(width: float, spacing: float) -> float:
    """Share of the active pressure and water that acts on posts below formation, b/s."""
    return require_positive(width, "post width", "m") / require(spacing, "post spacing", "m", least=width)


def passive_share(width: float, spacing: float) -> float:
    """Share of the plane-strain passive that posts find in coarse soil, min(s, 3b)/s. Source: Broms 1964 (recalled)."""
    require(spacing, "post spacing", "m", least=require_positive(width, "post width", "m"))
    return min(spacing, WIDTHS_MOBILISED * width) / spacing


def ignored_depth(width: float) -> float:
    """Depth below formation in which no passive is counted unless the brief says so, max(0.5 m, 1.5 b) (recalled)."""
    return max(0.5, 1.5 * require_positive(width, "post width", "m"))


def clay_factor(depth: Floats | float, width: float) -> Floats:
    """N_p of a post in clay at a depth below formation, min(9, 2 + 7 z/(3b)) (recalled)."""
    require_positive(width, "post width", "m")
    z = np.asarray(depth, dtype=float)
    require(float(np.min(z)), "depth below formation", "m", least=0.0)
    ramp = SURFACE_FACTOR + (DEEP_FACTOR - SURFACE_FACTOR) * z / (WIDTHS_MOBILISED * width)
    return np.asarray(np.minimum(DEEP_FACTOR, ramp))


def clay_pressure(depth: Floats | float, su: float, width: float, spacing: float) -> Floats:
    """Limit pressure of clay on posts, spread over the wall, N_p s_u b/s, kPa."""
    require_positive(su, "undrained strength", "kPa")
    return clay_factor(depth, width) * su * active_share(width, spacing)


def clay_resistance(depth: float, su: float, width: float, spacing: float, *, ignored: float | None = None) -> float:
    """Limit force of clay on posts from formation to a depth, per metre of wall, kN/m.

    Args:
        depth: Below formation, m.
        su: Undrained strength, constant over the depth, kPa.
        width: Flange or encasement, m.
        spacing: Of the posts, m.
        ignored: Depth without resistance, m; None takes `ignored_depth`.

    Source: the ramp of `clay_factor`, integrated.
    """
    require(depth, "depth below formation", "m", least=0.0)
    require_positive(su, "undrained strength", "kPa")
    start = ignored_depth(width) if ignored is None else require(ignored, "ignored depth", "m", least=0.0)
    area = _ramp_area(depth, width) - _ramp_area(min(start, depth), width)
    return area * su * active_share(width, spacing)


def below_formation(level: float, toe: float, width: float, spacing: float) -> BelowFormation:
    """Numbers that a plane-strain section needs for posts below formation.

    Args:
        level: Of formation, m.
        toe: Of the posts, m.
        width: Flange or encasement, m.
        spacing: Of the posts, m.
    """
    depth = np.array(sorted({0.0, min(WIDTHS_MOBILISED * width, level - toe), level - toe}))
    factors = clay_factor(depth, width)
    return BelowFormation(
        level=level,
        width=width,
        active_share=active_share(width, spacing),
        passive_share_coarse=passive_share(width, spacing),
        no_passive_to=level - ignored_depth(width),
        clay_N_p=tuple((level - float(z), float(N)) for z, N in zip(depth, factors, strict=True)),
        how="springs on the wall limited to these, or ground below formation weakened until its passive equals them; "
        "never by a factor on wall friction, which leaves far more",
        basis="width of 3 posts in coarse soil and N_p of a pile in clay, Broms 1964 and design practice (recalled)",
    )


def _ramp_area(depth: float, width: float) -> float:
    """Integral of N_p from formation to a depth, m."""
    knee = WIDTHS_MOBILISED * width
    top = min(depth, knee)
    ramp = SURFACE_FACTOR * top + (DEEP_FACTOR - SURFACE_FACTOR) * top**2 / (2 * knee)
    return ramp + DEEP_FACTOR * max(0.0, depth - knee)
