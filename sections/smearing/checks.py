"""Limits of use of smearing: what is flagged, and what is refused. The formulas themselves hold at any angle."""

from __future__ import annotations

from math import cos, radians
from typing import Literal

import numpy as np

from ingest.errors import require_positive
from ingest.record import record
from ingest.trail import Finding, Severity
from sections.model import Floats
from sections.smearing.member import Direction

CARE_BETA, REFUSE_BETA = 15.0, 40.0
"""Out-of-plane angle from which a member is flagged, and from which it is not smeared, degrees (judgement)."""
TRIBUTARY_RATIO = 0.10
"""Tributary widths of a row that differ by more give a range of spacings instead of one (judgement)."""
ARCHING_RATIO = 2.0
"""Largest s/D of a bored wall whose soil arches from pile to pile (recalled from design practice)."""
ANGLE_TOLERANCE = 1e-6
"""Degrees; a strut drawn at the limit must not slip through by rounding."""


@record
class RowSpacing:
    """Spacing of a row: one value with `spacing_range` None, or the range alone where tributary widths differ."""

    spacing: float | None
    spacing_range: tuple[float, float] | None
    findings: tuple[Finding, ...] = ()


def may_be_smeared(direction: Direction, role: Literal["strut", "corner_strut", "raker", "anchor"] = "strut") -> bool:
    """Tell whether a row may be smeared at all: out-of-plane angle below 40 degrees, or a corner strut."""
    return role == "corner_strut" or direction.beta < REFUSE_BETA - ANGLE_TOLERANCE


def check_skew(
    direction: Direction, where: str, role: Literal["strut", "corner_strut", "raker", "anchor"] = "strut"
) -> tuple[Finding, ...]:
    """Flag a skewed row: from 15 degrees with care, from 40 degrees not smeared (corner struts have their own rule)."""
    beta = direction.beta
    if not may_be_smeared(direction, role):
        text = f"{beta:.1f} degrees out of the plane of the cut, limit {REFUSE_BETA:g}: not smeared, force not assessed"
        return (_finding("skew-refused", "check", where, text),)
    if role != "corner_strut" and beta > CARE_BETA + ANGLE_TOLERANCE:
        left = cos(radians(beta)) ** 3
        text = f"{beta:.1f} degrees out of the plane of the cut, care above {CARE_BETA:g}: {left:.3f} of EA/s is left"
        return (_finding("skew-care", "check", where, text),)
    return ()


def check_spacing(widths: Floats, where: str) -> RowSpacing:
    """Give one spacing where the tributary widths of a row agree within 10 %, else their range.

    Args:
        widths: (k,) tributary widths, m.
        where: Row, as the engineer knows it.
    """
    widths = np.asarray(widths, dtype=float)
    low, high = require_positive(float(np.min(widths)), "tributary width", "m"), float(np.max(widths))
    if high <= low * (1 + TRIBUTARY_RATIO) * (1 + 1e-9):
        return RowSpacing(spacing=float(np.mean(widths)), spacing_range=None)
    text = f"tributary widths {low:.2f} to {high:.2f} m, more than {TRIBUTARY_RATIO:.0%} apart: no single spacing"
    finding = _finding("spacing-range", "check", where, text)
    return RowSpacing(spacing=None, spacing_range=(low, high), findings=(finding,))


def check_arching(diameter: float, spacing: float, where: str) -> tuple[Finding, ...]:
    """Flag bored piles so far apart that the soil may not arch from pile to pile."""
    ratio = require_positive(spacing, "spacing", "m") / require_positive(diameter, "pile diameter", "m")
    if ratio <= ARCHING_RATIO * (1 + 1e-9):
        return ()
    text = f"piles {spacing:.2f} m apart, {ratio:.2f} D: beyond about {ARCHING_RATIO:g} D soil may run out between them"
    return (_finding("arching", "check", where, text),)


def _finding(code: str, severity: Severity, where: str, text: str) -> Finding:
    return Finding(id=f"{code}:{where}", code=code, severity=severity, where=where, text=text)
