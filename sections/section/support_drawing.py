"""Where supports are drawn in a section and what their ends stand on.

A skewed member is drawn by its projection, cos(beta) times its true length. A member between two walls of which only
one is in the section is drawn to the point that holds still when both move alike.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from sections.member import XZ, End, RealMember, SectionMember
from sections.section.cut import Cut
from sections.section.rows_at_cut import RowAtCut, wall_of_other_end

Line = tuple[XZ, XZ]


def from_both_ends(met: RowAtCut, cut: Cut) -> bool:
    """Whether a strut presses against a further wall of the pit that is not in this section."""
    return met.role == "strut" and met.off_station is not None and wall_of_other_end(met, cut) is None


def draw_support(met: RowAtCut, cut: Cut, walls: Mapping[str, str], real: RealMember) -> tuple[Line, tuple[End, End]]:
    """Draw a support.

    Args:
        met: The row at the cut.
        cut: The cut.
        walls: Member id of the wall on each side.
        real: The real member; `L_eff` is the true length to the point that holds still.

    Returns:
        Head and far end in section coordinates, and the ends.
    """
    start = (met.wall.x, met.near[2])
    here = End(to=walls[met.wall.side], at=start, joint="pinned")
    other = wall_of_other_end(met, cut)
    if other is not None:
        end = (other.x, met.off[2])
        return (start, end), (here, End(to=walls[other.side], at=end, joint="pinned"))
    end = _end(met, real.L_eff or real.free_length or real.length or 0.0)
    return (start, end), (here, End(to=_stands_on(met, cut), at=end, joint="pinned"))


def _end(met: RowAtCut, length: float) -> XZ:
    """End of a member of a true length as the section draws it."""
    across = length * met.direction.normal_part * _into(met)
    drop = 0.0 if met.role == "corner_strut" else length * met.direction.vertical_part
    return met.wall.x + across, met.near[2] - drop


def _stands_on(met: RowAtCut, cut: Cut) -> str:
    if met.role == "anchor" and met.support.bond_length:
        return f"{met.row.member.id}-bond"
    return "opposite" if met.role == "corner_strut" or from_both_ends(met, cut) else "ground"


def _into(met: RowAtCut) -> float:
    """+1 when the member leaves the wall towards growing x."""
    into_pit = 1.0 if met.wall.side == "left" else -1.0
    return -into_pit if met.role == "anchor" else into_pit


def draw_bond(met: RowAtCut, free: SectionMember) -> tuple[Line, tuple[End, End]]:
    """Draw a bond length in line with its free length."""
    (x1, z1), (x2, z2) = free.points[0], free.points[1]
    share = (met.support.bond_length or 0.0) * met.direction.cos_beta / float(np.hypot(x2 - x1, z2 - z1))
    end = (x2 + (x2 - x1) * share, z2 + (z2 - z1) * share)
    ends = End(to=free.id, at=(x2, z2), joint="fixed"), End(to="ground", at=end, joint="free")
    return ((x2, z2), end), ends
