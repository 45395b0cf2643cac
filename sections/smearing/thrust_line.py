"""Is a ring circular enough: the thrust must stay in the wall, level by level and stage by stage.

e = (M_shape + M_uneven + M_struts)/N against t/6 (no joint opens) and t/2 (the thrust leaves the wall), t less the
radial step between panels. Source: statics of a section without tension; the use as a gate is a project rule.
"""

from __future__ import annotations

from math import inf
from typing import Literal

from ingest.errors import require, require_positive
from ingest.record import record

TRY_DEVIATION, TRY_QUOTIENT, TRY_UNEVEN = 0.02, 0.97, 0.10
"""Whether an axisymmetric candidate is worth trying at all (judgement); they do not scale and decide nothing."""
TWO_RUNS_APART = 0.15
"""Two runs, with and without the disc of struts, that differ by more are no ring (judgement)."""

Word = Literal["stays", "not_two_dimensional", "reject"]


@record
class ThrustLine:
    """Eccentricity of the hoop thrust at one level and stage, m.

    `word`: stays within t/6; `not_two_dimensional` for hoop force and horizontal bending beyond; `reject` the
    candidate beyond t/2.
    """

    eccentricity: float
    joint_limit: float
    wall_limit: float
    word: Word


def find_thrust_line(
    *, N: float, M_shape: float, M_uneven: float = 0.0, M_struts: float = 0.0, thickness: float, joint_step: float = 0.0
) -> ThrustLine:
    """Judge one level and stage.

    Args:
        N: Hoop compression p R of that level, kN/m.
        M_shape: Moment from the shape (out of round, polygon corner), kNm/m, taken by size.
        M_uneven: From uneven pressure, kNm/m.
        M_struts: From struts that are not spread round the ring, kNm/m.
        thickness: Of the wall, m.
        joint_step: Radial step between neighbouring panels, m.

    Assumes:
        The three moments peak at one place: they are added by size.
    """
    require_positive(thickness, "wall thickness", "m")
    t = thickness - require(joint_step, "radial step at joints", "m", least=0.0, below=thickness)
    require(N, "hoop force", "kN/m", least=0.0)
    moments = [M_shape, M_uneven, M_struts]
    total = inf if any(abs(M) == inf for M in moments) else sum(abs(require(M, "moment", "kNm/m")) for M in moments)
    e = total / N if N > 0 else (0.0 if total == 0 else inf)
    word: Word = "stays"
    if e > t / 6 * (1 + 1e-9):
        word = "not_two_dimensional" if e <= t / 2 * (1 + 1e-9) else "reject"
    return ThrustLine(eccentricity=e, joint_limit=t / 6, wall_limit=t / 2, word=word)


def check_worth_trying(
    deviation: float, quotient: float, uneven: float, least_quotient: float = TRY_QUOTIENT
) -> tuple[str, ...]:
    """Reasons not to try an axisymmetric candidate; empty when it is worth trying.

    Args:
        deviation: (r_max - r_min)/r_mean after a best fit.
        quotient: 4 pi area/perimeter^2.
        uneven: Largest difference of load or level round the ring over its mean.
        least_quotient: 0.97 is n >= 12 sides; the engineer may ask for less, down to 0.948 (n = 8).
    """
    reasons = []
    if require(deviation, "deviation from the circle", least=0.0) > TRY_DEVIATION:
        reasons.append(f"radii differ by {deviation:.1%} of the mean, more than {TRY_DEVIATION:.0%}")
    if require(quotient, "isoperimetric quotient", above=0.0, most=1.0 + 1e-9) < least_quotient:
        reasons.append(f"isoperimetric quotient {quotient:.3f}, less than {least_quotient:g}")
    if require(uneven, "unevenness", least=0.0) > TRY_UNEVEN:
        reasons.append(f"load or level differs by {uneven:.0%} round the ring, more than {TRY_UNEVEN:.0%}")
    return tuple(reasons)


def two_runs_agree(with_disc: float, without: float) -> bool:
    """Tell whether a governing quantity with the disc of struts and without it lies within 15 % of the larger."""
    require(with_disc, "value with the disc")
    require(without, "value without it")
    return abs(with_disc - without) <= TWO_RUNS_APART * max(abs(with_disc), abs(without)) * (1 + 1e-9)
