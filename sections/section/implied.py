"""What a section silently implies: the cut extruded back to three dimensions beside the real thing, in numbers."""

from __future__ import annotations

from collections.abc import Sequence
from math import hypot, pi

from sections.definition import Implied, SectionLoad
from sections.member import PerMetre, SectionMember
from sections.smearing.member import Direction

FAIR, CARE = 0.1, 0.5
"""Grades by |ratio - 1|: fair within 0.1, care within 0.5, serious beyond (judgement)."""

Grade = str


def imply(members: Sequence[SectionMember], loads: Sequence[SectionLoad]) -> tuple[Implied, ...]:
    """List implied against real amounts for every member and load of a plane-strain section, per metre run of wall.

    A ratio of 1 says that the section has the real amount; quantities that were smeared keep it by construction and
    are listed so that a checker sees them.
    """
    rows: list[Implied] = []
    for member in members:
        if isinstance(member.section, PerMetre):
            rows += _member_rows(member, member.section)
    for load in loads:
        rows += _load_rows(load)
    return tuple(rows)


def _member_rows(member: SectionMember, section: PerMetre) -> list[Implied]:
    if member.role == "wall":
        return _wall_rows(member, section)
    if member.role == "anchor" and member.form == "sheet":
        return _bond_rows(member)
    if member.form == "bar":
        return _bar_rows(member, section)
    if member.role == "bearing_pile":
        return _bearing_rows(member, section)
    return []


def _wall_rows(member: SectionMember, section: PerMetre) -> list[Implied]:
    real = member.real
    rows = []
    if real.diameter and real.spacing and section.thickness:
        shaft = pi * real.diameter**2 / 4 / real.spacing
        rows.append(
            _row(
                member.id,
                "volume",
                shaft,
                section.thickness,
                "hand over EA and EI per metre, and the weight of the real piles, not of a wall this thick",
                "moments come back per pile by the spacing; the gaps between piles are not in the section",
            )
        )
        rows.append(
            _row(
                member.id,
                "count",
                1 / real.spacing,
                1.0,
                "none: piles become an endless straight wall; bending along the wall is not in the section",
                "read deflection as the mean of a row of piles, not of the pile at mid-bay",
            )
        )
    return rows


def _bar_rows(member: SectionMember, section: PerMetre) -> list[Implied]:
    real = member.real
    rows: list[Implied] = []
    if not real.spacing:
        return rows
    rows.append(
        _row(
            member.id,
            "count",
            1 / real.spacing,
            1.0,
            f"one member each {real.spacing:.2f} m becomes a sheet: its values are divided by the spacing",
            f"multiply back by {_back(member):.3f}; between members the wall moves more than the section shows",
        )
    )
    stiffness = in_plane(member)
    if stiffness and section.k_effective_kN_per_m_per_m:
        rows.append(
            _row(
                member.id,
                "stiffness",
                stiffness,
                section.k_effective_kN_per_m_per_m,
                "the section's value holds the spacing and the projection of a skewed member: divide by neither again",
                "the along-wall part of the force is lost; see actions without a 2D twin",
            )
        )
    return rows + _volume_rows(member, section)


def in_plane(member: SectionMember) -> float | None:
    """Stiffness of the real row along the member as drawn, kN/m per m: k cos^2(beta)/s, both ends as they really move.

    Source: a bar whose wall end moves in the plane of the cut only.
    """
    real = member.real
    length = real.length if member.side == "both" else real.L_eff or real.free_length or real.length
    if not (real.EA_kN and real.spacing and length):
        return None
    k = real.EA_kN / length
    if real.k_effective_kN_per_m and real.L_eff:
        k = real.k_effective_kN_per_m * real.L_eff / length
    direction = Direction(skew=real.skew or 0.0, inclination=real.inclination or 0.0)
    return k * direction.cos_beta**2 / real.spacing


def _volume_rows(member: SectionMember, section: PerMetre) -> list[Implied]:
    """Body of the row per metre run of wall against that of the sheet with the section's axial rigidity."""
    real = member.real
    length = real.length if member.side == "both" else real.L_eff or real.free_length or real.length
    if not (real.A_m2 and real.EA_kN and real.spacing and length and section.EA_kN_per_m):
        return []
    (x1, z1), (x2, z2) = member.points[0], member.points[-1]
    sheet = section.EA_kN_per_m * real.A_m2 / real.EA_kN * hypot(x2 - x1, z2 - z1)
    return [
        _row(
            member.id,
            "volume",
            real.A_m2 * length / real.spacing,
            sheet,
            "hand over the weight of the real members, not that of a sheet",
            "a sheet has no gaps between the members: nothing passes it in the section",
        )
    ]


def _bond_rows(member: SectionMember) -> list[Implied]:
    real = member.real
    if not (real.bond_diameter and real.spacing):
        return []
    return [
        _row(
            member.id,
            "contact_area",
            pi * real.bond_diameter / real.spacing,
            2.0,
            "reduce the interface strength of the sheet by this ratio; let ground pass the sheet",
            "the section shows an endless sheet in the ground: it shields and stiffens more than separate grout bodies",
        )
    ]


def _bearing_rows(member: SectionMember, section: PerMetre) -> list[Implied]:
    real = member.real
    rows: list[Implied] = []
    if not (real.diameter and real.spacing):
        return rows
    rows.append(
        _row(
            member.id,
            "contact_area",
            pi * real.diameter / real.spacing,
            2.0,
            "scale the shaft strength of the sheet by real over implied",
            "ground cannot flow between the piles in the section: lateral coupling is overstated",
        )
    )
    if section.thickness:
        rows.append(
            _row(
                member.id,
                "volume",
                pi * real.diameter**2 / 4 / real.spacing,
                section.thickness,
                "scale the base resistance by real over implied",
                "settlement of the row is kept; punching between piles is not shown",
            )
        )
    return rows


def _load_rows(load: SectionLoad) -> list[Implied]:
    """Load as handed over against load as drawn and simply extruded: the naive alternative over the real effect."""
    naive = next((a for a in load.alternatives if a.name == "pressure_kept"), None)
    if naive is None or naive.value is None or not load.section.value:
        return []
    return [
        _row(
            load.id,
            "load",
            load.section.value,
            naive.value,
            "hand over the equal-effect value; the drawn load extruded is endless along the wall",
            "valid in the plane through the load only; run the neighbour with and without it",
        )
    ]


def _back(member: SectionMember) -> float:
    return next((back.factor for back in member.back if back.quantity == "N"), member.real.spacing or 1.0)


def _row(about: str, quantity: str, real: float, implied: float, inputs: str, outputs: str) -> Implied:
    ratio = implied / real
    return Implied(
        about=about,
        quantity=quantity,  # type: ignore[arg-type]
        real=real,
        implied=implied,
        ratio=ratio,
        grade=grade(ratio),  # type: ignore[arg-type]
        do_in_inputs=inputs,
        read_outputs=outputs,
    )


def grade(ratio: float) -> Grade:
    """Word for a ratio of implied over real, judged alike above and below one."""
    away = max(ratio, 1 / ratio) - 1 if ratio > 0 else float("inf")
    return "fair" if away <= FAIR + 1e-9 else "care" if away <= CARE + 1e-9 else "serious"
