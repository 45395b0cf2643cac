"""Rows of like point loads along the wall: the mean that a section carries, and the peak behind each load.

Source: sums of the Boussinesq 1885 resultants over the row (recalled formula); the integral along the wall of one load
is Flamant's line of Q/s, so the mean is exact.
"""

from __future__ import annotations

from math import atan, hypot, pi

import numpy as np

from ingest.errors import require_positive
from ingest.trail import Finding
from sections.model import Floats
from sections.smearing.loads import line_moment, line_resultant, strips_across

SUMMED = 400
"""Loads summed on each side; what lies beyond enters as its integral."""


def peak_by_resultant(x: float, H: float, spacing: float) -> float:
    """Largest resultant down to H behind a row of point loads over its mean, section through a load.

    Args:
        x: Distance of the row from the wall, m.
        H: Depth below the loads, m.
        spacing: Of the loads along the wall, m.
    """
    mean = line_resultant(x, H) / require_positive(spacing, "load spacing", "m")
    y, edge = _offsets(spacing)
    a2 = x**2 + y**2
    beyond = _tail(x, edge) - _tail(hypot(x, H), edge)
    return float(x**2 / (2 * pi) * (np.sum(a2**-1.5 - (a2 + H**2) ** -1.5) + 2 * beyond / spacing)) / mean


def peak_by_moment(x: float, H: float, spacing: float) -> float:
    """Largest moment about depth H behind a row of point loads over its mean; arguments as in `peak_by_resultant`."""
    mean = line_moment(x, H) / require_positive(spacing, "load spacing", "m")
    y, edge = _offsets(spacing)
    a2 = x**2 + y**2
    reach = atan(H * edge / (x * hypot(x, H, edge)))
    whole = (atan(H / x) - reach) / (x * H)
    beyond = _tail(x, edge) - whole
    terms = a2**-1.5 - 1 / (a2 * np.sqrt(a2 + H**2))
    return float(x**2 * H / (2 * pi) * (np.sum(terms) + 2 * beyond / spacing)) / mean


def perpendicular_peak(x1: float, x2: float, H: float, spacing: float) -> float:
    """Largest effect of lines square to the wall, x1 to x2 and `spacing` apart, over that of their mean q/s.

    The larger of resultant and moment about depth H.
    """
    xs, widths = strips_across(require_positive(x1, "near end", "m"), x2)
    ratios = []
    for peak, mean in ((peak_by_resultant, line_resultant), (peak_by_moment, line_moment)):
        weight = widths * np.array([mean(float(x), H) for x in xs])
        ratios.append(float(weight @ np.array([peak(float(x), H, spacing) for x in xs]) / np.sum(weight)))
    return max(ratios)


def peak_near_surface(x: float, spacing: float) -> float:
    """Largest stress over its mean just below the level of the loads."""
    require_positive(x, "distance from the wall", "m")
    y, _ = _offsets(require_positive(spacing, "load spacing", "m"))
    return float(3 * spacing / (4 * x) * np.sum((1 + (y / x) ** 2) ** -2.5))


def check_load_row(x: float, H: float, spacing: float, where: str) -> tuple[Finding, ...]:
    """Flag a row of loads farther apart than their distance from the wall, with the peak that the mean hides."""
    if require_positive(spacing, "load spacing", "m") <= require_positive(x, "distance from the wall", "m") * (
        1 + 1e-9
    ):
        return ()
    peak = peak_by_resultant(x, H, spacing)
    text = f"loads {spacing:.2f} m apart at {x:.2f} m from the wall: {peak:.2f} times the mean behind each load"
    return (Finding(id=f"load-row:{where}", code="load-row", severity="check", where=where, text=text),)


def _offsets(spacing: float) -> tuple[Floats, float]:
    """Offsets of the loads summed, and the offset from which their integral goes on."""
    return spacing * np.arange(-SUMMED, SUMMED + 1, dtype=float), spacing * (SUMMED + 0.5)


def _tail(a: float, edge: float) -> float:
    """Integral of (a^2 + y^2)^(-3/2) from `edge` to infinity."""
    return 1 / (hypot(a, edge) * (hypot(a, edge) + edge))
