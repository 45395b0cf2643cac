"""One inclined, skewed member in a plane-strain section: rigidity per metre run of wall, and the way back.

Kinematics of plane strain: the wall moves only in the plane of the cut, and the section draws the projected length of
a skewed member. Energy then gives cos^3 of the out-of-plane angle beta on EA and EI (statics; the usual EA/s is the
case beta = 0). Every function is plain and holds at any angle; limits of use are in `sections.smearing.checks`.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import atan2, cos, degrees, hypot, radians, sin, tan
from typing import Literal

import numpy as np

from ingest.errors import require, require_positive
from ingest.members import Point, Point3
from ingest.record import record
from sections.member import SmearParts
from sections.model import Floats

MemberQuantity = Literal["EA", "EI", "weight", "preload", "limit", "k_effective", "free_strain"]

POWER_OF_COS_BETA: dict[MemberQuantity, int] = {
    "EA": 3, "EI": 3, "weight": -1, "preload": 1, "limit": 1, "k_effective": 2, "free_strain": -2,
}  # fmt: skip
"""Power of cos(beta) that turns a member's value into the section's (statics of a bar in plane motion)."""
NO_SKEW = 1e-6
"""Skews below this are rounding of the coordinates, degrees."""


@record
class Direction:
    """Direction of a member: `skew` on plan off the wall normal and `inclination` below the horizontal, degrees.

    Raises:
        ValueError: Skew not between -90 and 90, inclination outside -90 to 90.
    """

    skew: float = 0.0
    inclination: float = 0.0

    def __post_init__(self) -> None:
        require(self.skew, "skew", "degrees", above=-90.0, below=90.0)
        require(self.inclination, "inclination", "degrees", least=-90.0, most=90.0)

    @property
    def normal_part(self) -> float:
        """Component of the unit vector square to the wall, horizontal."""
        return cos(radians(self.inclination)) * cos(radians(self.skew))

    @property
    def vertical_part(self) -> float:
        """Component of the unit vector downwards."""
        return sin(radians(self.inclination))

    @property
    def along_part(self) -> float:
        """Component of the unit vector along the wall, sin(beta) with the sign of the skew."""
        return cos(radians(self.inclination)) * sin(radians(self.skew))

    @property
    def cos_beta(self) -> float:
        """Cosine of the out-of-plane angle: projected length over true length."""
        return hypot(self.normal_part, self.vertical_part)

    @property
    def beta(self) -> float:
        """Out-of-plane angle, degrees, never negative."""
        return degrees(atan2(abs(self.along_part), self.cos_beta))

    @property
    def apparent_inclination(self) -> float:
        """Inclination as drawn in the cut, degrees: steeper than the true one when the member is skewed."""
        return degrees(atan2(self.vertical_part, self.normal_part))


def find_direction(head: Point3, far: Point3, along_wall: Point) -> Direction:
    """Direction of a member from its head on the wall to its far end.

    Args:
        head: Point at the wall, m.
        far: Far end, m.
        along_wall: Vector along the wall line on plan, any length.

    Returns:
        Skew positive towards `along_wall`, inclination positive when the far end is lower.
    """
    length = require_positive(hypot(*along_wall), "length of the wall direction", "m")
    require_positive(hypot(*(b - a for a, b in zip(head, far, strict=True))), "member length", "m")
    tx, ty = along_wall[0] / length, along_wall[1] / length
    dx, dy = far[0] - head[0], far[1] - head[1]
    along, normal = dx * tx + dy * ty, abs(dy * tx - dx * ty)
    inclination = degrees(atan2(head[2] - far[2], hypot(along, normal)))
    skew = degrees(atan2(along, normal))
    return Direction(skew=skew if abs(skew) > NO_SKEW else 0.0, inclination=inclination)


def member_parts(
    quantity: MemberQuantity, spacing: float, direction: Direction, *, phi: float = 1.0, EI_factor: float = 1.0
) -> SmearParts:
    """Factors that turn one quantity of a real member into the section's value per metre run of wall.

    Args:
        quantity: EA (kN -> kN/m), EI (kNm2 -> kNm2/m), weight (kN per m of member -> kN/m per projected m), preload and
            limit (kN -> kN/m, along the drawn member), k_effective (kN/m -> kN/m per m), free_strain (-).
        spacing: Centre to centre along the wall line, m.
        direction: Skew and inclination.
        phi: Chain factor on EA, above 0 and at most 1.
        EI_factor: Factor on EI, above 0 and at most 1.

    Source: statics of a bar whose wall end moves in the plane of the cut only.
    """
    require_positive(spacing, "spacing", "m")
    return SmearParts(
        per_spacing=1.0 if quantity == "free_strain" else 1.0 / spacing,
        cos_beta_power=direction.cos_beta ** POWER_OF_COS_BETA[quantity],
        phi=require(phi, "chain factor phi", above=0.0, most=1.0) if quantity == "EA" else 1.0,
        EI_factor=require(EI_factor, "EI factor", above=0.0, most=1.0) if quantity == "EI" else 1.0,
    )


def in_plane_stiffness(EA: float, length: float, spacing: float, direction: Direction) -> float:
    """Stiffness of a row of members against movement along the drawn member, EA cos^2(beta)/(s L), kN/m per m.

    Args:
        EA: Axial rigidity of one member, kN.
        length: True length to the fixed far end (or to the symmetry plane), m.
        spacing: Along the wall, m.
        direction: Skew and inclination.
    """
    require_positive(EA, "axial rigidity EA", "kN")
    require_positive(length, "member length", "m")
    return EA / length * member_parts("k_effective", spacing, direction).product


def axial_force_factor(spacing: float, direction: Direction) -> float:
    """Force of one member over the section's N in kN/m: s/cos(beta), m. The same for bending moments."""
    return require_positive(spacing, "spacing", "m") / direction.cos_beta


def thrust_along_wall(N: float, direction: Direction) -> float:
    """Part of a member's force along the wall, N sin(beta), kN, signed by the skew.

    The section does not see it. It cancels only between mirrored members; otherwise it adds up along the waler.
    """
    return N * direction.along_part


def spacing_along_wall(square_spacing: float, skew: float) -> float:
    """Spacing along the wall of members whose spacing was measured square to them on plan, s/cos(skew), m."""
    require(skew, "skew", "degrees", above=-90.0, below=90.0)
    return require_positive(square_spacing, "spacing square to the members", "m") / cos(radians(skew))


def projected_length(length: float, direction: Direction) -> float:
    """Length of the member as drawn in the cut, L cos(beta), m."""
    return require_positive(length, "member length", "m") * direction.cos_beta


def corner_length(length: float, skew: float) -> float:
    """Length at which a corner strut's far end is held, L cos/(cos + sin) of its skew, m (L/2 at 45 degrees).

    Both walls of a corner push; with the far end held at the full length a strut at 45 degrees would have half its
    stiffness and half its force.

    Assumes:
        Two like walls at 90 degrees that move alike (kind, depth, load, support), level strut.
    """
    c, s = _corner_parts(skew)
    return require_positive(length, "strut length", "m") * c / (c + s)


def corner_force(EA: float, length: float, skew: float, movement: float) -> float:
    """Shortening force of a corner strut when both walls move `movement` (m) into the pit, EA u (cos + sin)/L, kN."""
    c, s = _corner_parts(skew)
    require_positive(EA, "axial rigidity EA", "kN")
    return EA * movement * (c + s) / require_positive(length, "strut length", "m")


def corner_stiffness(EA: float, length: float, skew: float, spacing: float) -> float:
    """Stiffness of a row of corner struts per metre of wall 1, EA cos (cos + sin)/(s L), kN/m per m."""
    direction = Direction(skew=skew)
    return in_plane_stiffness(EA, corner_length(length, skew), spacing, direction)


def on_other_wall(spacing: float, skew: float) -> tuple[float, float]:
    """Spacing and skew of corner struts as the other wall of a right-angled corner has them: s/tan, 90 - skew."""
    require(skew, "skew of a corner strut", "degrees", above=0.0, below=90.0)
    return require_positive(spacing, "spacing", "m") / tan(radians(skew)), 90.0 - skew


def thrust_to_shear_stop(forces: Sequence[float], skew: float) -> float:
    """Thrust along one wall added up from the corner to the first shear stop, kN, away from the corner.

    The struts of the other wall never cancel it.
    """
    return sum(forces) * _corner_parts(skew)[1]


def find_tributary_widths(at: Floats, start: float, end: float) -> Floats:
    """Length of wall that each member of a row stands for, m; they add up to the wall.

    Args:
        at: (k,) chainages of the members, rising, m.
        start: Chainage where the wall they hold begins.
        end: Chainage where it ends.

    Returns:
        (k,) half the gaps to the neighbours; an end member takes half its gap and all that is left of the wall.

    Raises:
        ValueError: No member, chainages that do not rise, or a member off the wall.
    """
    at = np.asarray(at, dtype=float)
    require_positive(end - start, "length of wall", "m")
    require_positive(float(at.size), "number of members")
    if at.size > 1:
        require_positive(float(np.min(np.diff(at))), "spacing", "m")
    require(float(at[0]), "chainage of the first member", "m", least=start, most=end)
    require(float(at[-1]), "chainage of the last member", "m", least=start, most=end)
    middles = (at[1:] + at[:-1]) / 2
    return np.diff(np.concatenate(([start], middles, [end])))


def find_ring_widths(at: Floats, length: float) -> Floats:
    """Length of wall that each member of a closed ring stands for, m; chainages rising from 0 to below `length`."""
    at = np.asarray(at, dtype=float)
    require_positive(length, "length of the ring", "m")
    require_positive(float(at.size), "number of members")
    gaps = np.diff(np.concatenate((at, [at[0] + length])))
    require_positive(float(np.min(gaps)), "spacing", "m")
    return (gaps + np.roll(gaps, 1)) / 2


def _corner_parts(skew: float) -> tuple[float, float]:
    angle = radians(require(skew, "skew of a corner strut", "degrees", above=0.0, below=90.0))
    return cos(angle), sin(angle)
