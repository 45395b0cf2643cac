"""Rows of a section's `smear` and `back` for supports: real value x factor = section value, and the way back.

Each helper takes the real member as the section lists it and returns it with the section's values per metre run of
wall. A quantity that is not given gets no row. Tension is positive, so a strut's preload is negative.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import cos, radians
from typing import Literal

from ingest.errors import require, require_positive
from ingest.record import record
from sections.member import AlsoGives, Back, PerMetre, RealMember, Smear, SmearParts
from sections.smearing.member import Direction, axial_force_factor, corner_length, member_parts

SupportRole = Literal["strut", "raker", "anchor", "corner_strut"]
RowSpec = tuple[str, str, str, SmearParts]

RESISTS: dict[SupportRole, Literal["compression", "tension"]] = {
    "strut": "compression", "raker": "compression", "corner_strut": "compression", "anchor": "tension",
}  # fmt: skip
SMALL = 1e-9


@record
class Smeared:
    """A real member, its values per metre run of wall, and the rows that lead there and back."""

    real: RealMember
    section: PerMetre
    smear: tuple[Smear, ...]
    back: tuple[Back, ...]


def direction_of(real: RealMember) -> Direction:
    """Direction of a real member; `ValueError` where skew or inclination is not given."""
    return Direction(
        skew=require(real.skew, "skew", "degrees"), inclination=require(real.inclination, "inclination", "degrees")
    )


def chain_factor(real: RealMember) -> float:
    """Chain factor phi = k_effective L_eff/EA of a member whose support chain is known, else 1.

    Raises:
        ValueError: The chain would be stiffer than the member itself.
    """
    if real.k_effective_kN_per_m is None or real.L_eff is None or real.EA_kN is None:
        return 1.0
    phi = real.k_effective_kN_per_m * real.L_eff / require_positive(real.EA_kN, "EA", "kN")
    return min(1.0, require(phi, "chain factor phi", above=0.0, most=1.0 + SMALL))


def smear_support(
    real: RealMember,
    role: Literal["strut", "raker", "anchor"],
    *,
    EI_factor: float = 1.0,
    both_walls_drawn: bool = False,
) -> Smeared:
    """Smear a row of struts, rakers or anchor free lengths.

    Args:
        real: One member: spacing, skew and inclination are needed; EA, EI, weight, preload, limit, free strain and
            k_effective with L_eff as far as they are given.
        role: Says in which direction it resists.
        EI_factor: On EI.
        both_walls_drawn: A strut drawn whole whose chain (k_effective, L_eff) was worked out for one half.

    Raises:
        ValueError: Spacing, skew or inclination missing or out of range.

    Assumes:
        Far end held, regular spacing, wall movement in the plane of the cut, small displacements.
    """
    direction, spacing = direction_of(real), require_positive(real.spacing, "spacing", "m")
    specs = _axial_specs(real, spacing, direction, _share_drawn(real, both_walls_drawn))
    specs.append(("EI", "EI_kNm2", "EI_kNm2_per_m", member_parts("EI", spacing, direction, EI_factor=EI_factor)))
    specs.append(("weight", "weight_kN_per_m", "weight_kN_per_m2", member_parts("weight", spacing, direction)))
    rows, values = apply_rows(real, specs)
    back = (*axial_back(role, spacing, direction), *_bending_back(role, spacing, direction, real.EI_kNm2))
    return Smeared(real=real, section=PerMetre(**values, resists=RESISTS[role]), smear=rows, back=back)  # type: ignore[arg-type]


def smear_corner_strut(real: RealMember) -> Smeared:
    """Smear corner struts on the wall for which spacing and skew are given; the far end is drawn at `L_eff`.

    Args:
        real: One strut with its own length, spacing, skew; inclination 0. For the other wall call again with the
            spacing and skew of `smear.on_other_wall`.

    Returns:
        The real member with `L_eff` filled in, axial values only: bending and self-weight belong to the true length
        and cannot be read from a strut drawn shorter.

    Assumes:
        Two like walls at 90 degrees that move alike. Unlike walls or another corner: not assessed.
    """
    direction, spacing = direction_of(real), require_positive(real.spacing, "spacing", "m")
    require(real.inclination, "inclination of a corner strut", "degrees", least=-SMALL, most=SMALL)
    skew = abs(direction.skew)
    real = replace(real, L_eff=corner_length(require_positive(real.length, "strut length", "m"), skew))
    rows, values = apply_rows(real, _axial_specs(real, spacing, direction, 1.0))
    section = PerMetre(**values, resists="compression")  # type: ignore[arg-type]
    return Smeared(real=real, section=section, smear=rows, back=axial_back("corner_strut", spacing, direction))


def apply_rows(real: RealMember, specs: Iterable[RowSpec]) -> tuple[tuple[Smear, ...], dict[str, float]]:
    """Make the rows of the quantities that are given, and the section values they lead to.

    Args:
        real: The real member.
        specs: (quantity, key in the real member, key in the section, parts of the factor).
    """
    rows, values = [], {}
    for quantity, real_key, section_key, parts in specs:
        value = getattr(real, real_key)
        if value is None:
            continue
        require(value, f"{quantity} ({real_key})")
        factor = parts.product
        rows.append(Smear(quantity=quantity, real_key=real_key, section_key=section_key, factor=factor, parts=parts))
        values[section_key] = float(value * factor)
    return tuple(rows), values


def bending_back(name: str, spacing: float, cos_beta: float = 1.0, valid_if: str = "") -> tuple[Back, ...]:
    """Rows that take V (kN/m) and M (kNm/m) back to one member."""
    return (
        Back(
            quantity="V", from_unit="kN/m", factor=spacing, gives=f"shear of one {name}", unit="kN", valid_if=valid_if
        ),
        Back(
            quantity="M",
            from_unit="kNm/m",
            factor=spacing / cos_beta,
            gives=f"bending moment of one {name}",
            unit="kNm",
            valid_if=valid_if,
        ),
    )


def _axial_specs(real: RealMember, spacing: float, direction: Direction, drawn: float) -> list[RowSpec]:
    """Specs of EA, preload, limit, chain stiffness and free strain; `drawn` is L_eff over the length drawn."""
    for key, what, unit in (("EA_kN", "EA", "kN"), ("limit_kN", "resistance", "kN"), ("EI_kNm2", "EI", "kNm2")):
        if getattr(real, key) is not None:
            require_positive(getattr(real, key), what, unit)
    stiffness = member_parts("k_effective", spacing, direction)
    return [
        ("EA", "EA_kN", "EA_kN_per_m", member_parts("EA", spacing, direction, phi=chain_factor(real))),
        ("preload", "preload_kN", "preload_kN_per_m", member_parts("preload", spacing, direction)),
        ("limit", "limit_kN", "limit_kN_per_m", member_parts("limit", spacing, direction)),
        (
            "k_effective",
            "k_effective_kN_per_m",
            "k_effective_kN_per_m_per_m",
            replace(stiffness, per_spacing=stiffness.per_spacing * drawn),
        ),
        ("free_strain", "free_strain", "free_strain", member_parts("free_strain", spacing, direction)),
    ]


def _share_drawn(real: RealMember, both_walls_drawn: bool) -> float:
    if not both_walls_drawn or real.L_eff is None:
        return 1.0
    length = require_positive(real.length, "member length", "m")
    return require(real.L_eff, "L_eff", "m", above=0.0, most=length) / length


def axial_back(role: SupportRole, spacing: float, direction: Direction) -> tuple[Back, ...]:
    """Rows that take N (kN/m along the drawn member) and the reaction (kN/m on the wall) back to one member."""
    name, factor = role.replace("_", " "), axial_force_factor(spacing, direction)
    alpha = radians(direction.apparent_inclination)
    also = []
    if abs(direction.along_part) > SMALL:
        text = "away from the corner, " if role == "corner_strut" else ""
        thrust = AlsoGives(
            gives=f"thrust of one {name} along the wall, {text}into waler and shear stop",
            factor=factor * abs(direction.along_part),
        )
        also.append(thrust)
    if abs(direction.vertical_part) > SMALL:
        also.append(
            AlsoGives(
                gives=f"vertical part of one {name}, down on the wall when it pulls",
                factor=spacing * direction.vertical_part / direction.cos_beta,
            )
        )
        also.append(AlsoGives(gives=f"horizontal part of one {name} square to the wall", factor=spacing * cos(alpha)))
    gives = f"axial force of one {name}"
    rows = [Back(quantity="N", from_unit="kN/m", factor=factor, gives=gives, unit="kN", also=tuple(also))]
    if direction.normal_part > SMALL:
        sign = 1.0 if role == "anchor" else -1.0
        rows.append(
            Back(quantity="reaction", from_unit="kN/m", factor=sign * spacing / direction.normal_part, gives=gives,
                 unit="kN", valid_if="the reaction is the horizontal force on the wall")
        )  # fmt: skip
    return tuple(rows)


def _bending_back(role: SupportRole, spacing: float, direction: Direction, EI: float | None) -> tuple[Back, ...]:
    if role == "anchor" and EI is None:
        return ()
    return bending_back(role, spacing, direction.cos_beta)
