"""Struts between two walls that are not parallel: what the turned wall gets, and the thrust along it.

Struts stand square to the reference wall; the other wall is turned on plan by psi. Source: statics of one strut.
"""

from __future__ import annotations

from math import cos, radians, sin

from ingest.errors import require, require_positive

ONE_CUT_LIMIT = 10.0
"""Turn up to which one cut serves both walls, degrees (judgement)."""


def support_share(skew: float, reference_skew: float = 0.0) -> float:
    """Support per metre that a wall has from the struts, over that of the reference wall: cos^2/cos^2.

    Args:
        skew: Angle between strut and the normal of this wall, degrees.
        reference_skew: The same at the reference wall; 0 for struts square to it.
    """
    return (_cos(skew) / _cos(reference_skew)) ** 2


def force_ratio(skew: float, reference_skew: float = 0.0) -> float:
    """Strut force needed for equal pressure on the turned wall, over the plane-strain value: 1/share."""
    return 1.0 / support_share(skew, reference_skew)


def thrust_along(N: float, skew: float) -> float:
    """Part of one strut's force along the turned wall, N sin(psi), kN; no section shows it."""
    require(skew, "skew", "degrees", above=-90.0, below=90.0)
    return N * sin(radians(skew))


def spacing_on(spacing: float, skew: float) -> float:
    """Spacing of the struts measured along the turned wall, s/cos(psi), m."""
    return require_positive(spacing, "spacing", "m") / _cos(skew)


def one_cut_serves_both(skew: float) -> bool:
    """Tell whether one cut may stand for both walls: turned by at most 10 degrees."""
    return abs(require(skew, "skew", "degrees", above=-90.0, below=90.0)) <= ONE_CUT_LIMIT + 1e-6


def _cos(skew: float) -> float:
    return cos(radians(require(skew, "skew", "degrees", above=-90.0, below=90.0)))
