"""Pressure of surface loads on a wall that yields, empirical. Source: Terzaghi 1954 (recalled).

m = x/H, n = z/H. The values are those on the wall: the doubling of the elastic stress is in them.
"""

from __future__ import annotations

import numpy as np

from ingest.errors import require_positive
from sections.model import Floats

NEAR = 0.4
"""x/H up to which a load counts as near."""


def line_pressure(q: float, x: float, H: float, z: Floats | float) -> Floats:
    """Pressure of a line load q (kN/m) along the wall, kPa."""
    m, n = _ratios(x, H, z)
    if m > NEAR:
        return np.asarray(1.27 * q * m**2 * n / (H * (m**2 + n**2) ** 2))
    return np.asarray(0.203 * q * n / (H * (0.16 + n**2) ** 2))


def point_pressure(Q: float, x: float, H: float, z: Floats | float) -> Floats:
    """Pressure of a point load Q (kN) in the section through it, kPa."""
    m, n = _ratios(x, H, z)
    if m > NEAR:
        return np.asarray(1.77 * Q * m**2 * n**2 / (H**2 * (m**2 + n**2) ** 3))
    return np.asarray(0.28 * Q * n**2 / (H**2 * (0.16 + n**2) ** 3))


def _ratios(x: float, H: float, z: Floats | float) -> tuple[float, Floats]:
    require_positive(x, "distance from the wall", "m")
    require_positive(H, "wall height", "m")
    return x / H, np.asarray(z, dtype=float) / H
