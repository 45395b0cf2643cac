"""Rows of a section's `smear` and `back` for walls, bearing piles and slab strips, per metre run of wall."""

from __future__ import annotations

from typing import Literal

from ingest.errors import require, require_positive
from sections.member import AlsoGives, Back, PerMetre, RealMember, SmearParts
from sections.smearing.bearing_row import shaft_factor
from sections.smearing.support_rows import RowSpec, Smeared, apply_rows, bending_back
from sections.smearing.wall import (
    Which,
    circle_area,
    circle_inertia,
    equivalent_wall,
    plane_strain_factor,
    structural_spacing,
)

ALIKE = "the piles of the row bend alike; between and at supports they differ from this mean"
STRIP = 1.0
"""Width of the strip that stands for a continuous wall or slab, m."""


def round_pile(
    *, diameter: float, E: float, unit_weight: float | None, centres: float, which: Which, count: int | None = None
) -> RealMember:
    """One real pile of a wall from its diameter (m), modulus (kPa), unit weight (kN/m3) and drawn centres (m)."""
    area = circle_area(diameter)
    require_positive(E, "modulus E", "kPa")
    return RealMember(
        EA_kN=E * area,
        EI_kNm2=E * circle_inertia(diameter),
        weight_kN_per_m=None if unit_weight is None else require_positive(unit_weight, "unit weight", "kN/m3") * area,
        spacing=structural_spacing(centres, which),
        centres=centres,
        diameter=diameter,
        E_kPa=E,
        count=count,
    )


def post(
    *,
    E: float,
    A: float,
    I: float,  # noqa: E741
    unit_weight: float | None,
    spacing: float,
    width: float | None = None,
) -> RealMember:
    """One real king post: modulus (kPa), area (m2), second moment across the wall (m4), spacing, flange width (m)."""
    require_positive(E, "modulus E", "kPa")
    area = require_positive(A, "area A", "m2")
    return RealMember(
        EA_kN=E * area,
        EI_kNm2=E * require_positive(I, "second moment I", "m4"),
        weight_kN_per_m=None if unit_weight is None else require_positive(unit_weight, "unit weight", "kN/m3") * area,
        spacing=require_positive(spacing, "post spacing", "m"),
        centres=spacing,
        thickness=width,
        E_kPa=E,
    )


def smear_pile_wall(
    real: RealMember, *, name: Literal["pile", "post"] = "pile", EI_factor: float = 1.0, soil: float | None = None
) -> Smeared:
    """Smear a row of equal piles or posts: `real.spacing` is that of the piles that bend.

    Args:
        real: From `round_pile` or `post`.
        name: What one member is called.
        EI_factor: Cracking and creep, named input.
        soil: Unit weight of the displaced soil, kN/m3, for the net weight; None hands over the full weight.

    Assumes:
        Wall and the ground between the piles move together. The thickness and modulus given belong to a solid wall
        with EA and EI of the row; a solid model of it must not add 1/(1 - nu^2).
    """
    spacing = require_positive(real.spacing, "spacing", "m")
    rows, values = apply_rows(real, beam_specs(spacing, EI_factor, 1.0, net_part(real, soil)))
    if "EA_kN_per_m" in values and "EI_kNm2_per_m" in values:
        thickness, E = equivalent_wall(values["EA_kN_per_m"], values["EI_kNm2_per_m"])
        values |= {"thickness": thickness, "E_kPa": E}
    axial = Back(quantity="N", from_unit="kN/m", factor=spacing, gives=f"axial force of one {name}", unit="kN")
    section = PerMetre(**values, net_of_soil=soil is not None)  # type: ignore[arg-type]
    return Smeared(real=real, section=section, smear=rows, back=(axial, *bending_back(name, spacing, valid_if=ALIKE)))


def smear_hard_hard(
    *, E: float, male: float, female: float, centres: float, unit_weight: float | None, EI_factor: float = 1.0
) -> Smeared:
    """Smear a secant wall whose males and females are both reinforced; the real member is one pair of neighbours.

    Args:
        E: Modulus of both, kPa.
        male: Diameter, m.
        female: Diameter, m.
        centres: Distance between neighbours as drawn, m.
        unit_weight: kN/m3, None where not given.
        EI_factor: Cracking and creep.

    Returns:
        Rows back that share N by area, V and M by second moment: first the male, `also` the female.
    """
    area = (circle_area(male), circle_area(female))
    inertia = (circle_inertia(male), circle_inertia(female))
    spacing = 2 * require_positive(centres, "pile centres", "m")
    real = RealMember(
        EA_kN=require_positive(E, "modulus E", "kPa") * sum(area),
        EI_kNm2=E * sum(inertia),
        weight_kN_per_m=None if unit_weight is None else unit_weight * sum(area),
        spacing=spacing,
        centres=centres,
        diameter=male,
        E_kPa=E,
    )
    pair = smear_pile_wall(real, EI_factor=EI_factor)
    back = tuple(_share(row, area if row.quantity == "N" else inertia) for row in pair.back)
    return Smeared(real=real, section=pair.section, smear=pair.smear, back=back)


def smear_continuous_wall(
    *,
    E: float,
    thickness: float,
    unit_weight: float | None = None,
    nu: float | None = None,
    EI_factor: float = 1.0,
    soil: float | None = None,
) -> Smeared:
    """Smear a diaphragm or concrete wall; the real member is a strip 1 m wide.

    Args:
        E: Modulus, kPa.
        thickness: m.
        unit_weight: kN/m3, None where not given.
        nu: Poisson's ratio when 1/(1 - nu^2) is to be included in EI; None leaves it to the receiving program.
        EI_factor: Cracking and creep.
        soil: Unit weight of the displaced soil, kN/m3, for the net weight.

    Returns:
        `thickness` and `E_kPa` of a solid wall with EA and the factored EI, without the plane-strain factor, which a
        solid model adds by itself.
    """
    require_positive(thickness, "wall thickness", "m")
    return _smear_strip(
        RealMember(
            EA_kN=require_positive(E, "modulus E", "kPa") * thickness,
            EI_kNm2=E * thickness**3 / 12,
            weight_kN_per_m=None if unit_weight is None else require_positive(unit_weight, "unit weight") * thickness,
            thickness=thickness,
            E_kPa=E,
        ),
        EI_factor,
        1.0 if nu is None else plane_strain_factor(nu),
        soil,
    )


def smear_sheet_wall(
    *,
    E: float,
    A: float,
    I: float,  # noqa: E741
    weight: float | None = None,
    beta_D: float = 1.0,
) -> Smeared:
    """Smear a sheet wall from its catalogue values; the real member is a strip 1 m wide.

    Args:
        E: Modulus, kPa.
        A: Area, m2/m.
        I: Second moment, m4/m.
        weight: Of the wall, kN/m2.
        beta_D: Reduction of U-profiles for slip in their locks, EN 1993-5 and National Annex (recalled).
    """
    EA = require_positive(E, "modulus E", "kPa") * require_positive(A, "area A", "m2/m")
    EI = E * require_positive(I, "second moment I", "m4/m")
    return _smear_strip(RealMember(EA_kN=EA, EI_kNm2=EI, weight_kN_per_m=weight, E_kPa=E), beta_D, 1.0, None)


def smear_bearing_row(real: RealMember, *, sheet_thickness: float) -> Smeared:
    """Smear a row of bearing piles that is drawn as a sheet; contact_kPa becomes the limit on each face of the sheet.

    Args:
        real: One pile with spacing and diameter.
        sheet_thickness: Of the sheet as drawn, m.
    """
    spacing = require_positive(real.spacing, "spacing", "m")
    contact = SmearParts(per_spacing=shaft_factor(require_positive(real.diameter, "pile diameter", "m"), spacing))
    specs = [
        *beam_specs(spacing, 1.0, 1.0, 1.0),
        ("limit", "limit_kN", "limit_kN_per_m", SmearParts(per_spacing=1 / spacing)),
        ("contact", "contact_kPa", "contact_kPa", contact),
    ]
    rows, values = apply_rows(real, specs)
    section = PerMetre(**values, thickness=require_positive(sheet_thickness, "sheet thickness", "m"))  # type: ignore[arg-type]
    axial = Back(quantity="N", from_unit="kN/m", factor=spacing, gives="axial force of one pile", unit="kN")
    return Smeared(real=real, section=section, smear=rows, back=(axial, *bending_back("pile", spacing, valid_if=ALIKE)))


def smear_slab_strip(
    *,
    E: float,
    thickness: float,
    unit_weight: float | None = None,
    bay: float = STRIP,
    net_width: float | None = None,
    EI_factor: float = 1.0,
    nu: float | None = None,
    real_length: float | None = None,
) -> Smeared:
    """Smear a slab that props the wall: a strip of net width in each bay (openings taken out), per metre run of wall.

    Args:
        E: Modulus, kPa.
        thickness: m.
        unit_weight: kN/m3, None where not given.
        bay: Width that the strip stands for, m.
        net_width: Width left between openings within one bay, m; None for no opening.
        EI_factor: On EI.
        nu: Poisson's ratio when 1/(1 - nu^2) is to be included in EI.
        real_length: Length to the far end or symmetry plane, m.
    """
    width = bay if net_width is None else require(net_width, "net width of slab", "m", above=0.0, most=bay)
    area = width * require_positive(thickness, "slab thickness", "m")
    real = RealMember(
        EA_kN=require_positive(E, "modulus E", "kPa") * area,
        EI_kNm2=E * width * thickness**3 / 12,
        weight_kN_per_m=None if unit_weight is None else require_positive(unit_weight, "unit weight") * area,
        spacing=require_positive(bay, "bay", "m"),
        length=real_length,
        thickness=thickness,
        E_kPa=E,
    )
    factor = 1.0 if nu is None else plane_strain_factor(nu)
    rows, values = apply_rows(real, beam_specs(bay, EI_factor, factor, 1.0))
    section = PerMetre(**values, thickness=thickness, plane_strain_factor_included=nu is not None)  # type: ignore[arg-type]
    name = f"slab strip {width:g} m wide"
    axial = Back(quantity="N", from_unit="kN/m", factor=bay, gives=f"axial force of one {name}", unit="kN")
    return Smeared(real=real, section=section, smear=rows, back=(axial, *bending_back(name, bay)))


def net_part(real: RealMember, soil: float | None) -> float:
    """Net over full weight of a member whose soil is still in the mesh: 1 - soil A/w; 1 when `soil` is None."""
    if soil is None or real.weight_kN_per_m is None:
        return 1.0
    require(soil, "unit weight of soil", "kN/m3", least=0.0)
    EA, E = require_positive(real.EA_kN, "EA", "kN"), require_positive(real.E_kPa, "modulus E", "kPa")
    return 1.0 - soil * (EA / E) / require_positive(real.weight_kN_per_m, "weight", "kN/m")


def beam_specs(spacing: float, EI_factor: float, plane_strain: float, net: float) -> list[RowSpec]:
    """Specs of EA, EI and weight of a beam-like row: 1/spacing, and the named factors on EI and weight."""
    each = 1.0 / spacing
    require(EI_factor, "EI factor", above=0.0, most=1.0)
    return [
        ("EA", "EA_kN", "EA_kN_per_m", SmearParts(per_spacing=each)),
        (
            "EI",
            "EI_kNm2",
            "EI_kNm2_per_m",
            SmearParts(per_spacing=each, EI_factor=EI_factor, plane_strain=plane_strain),
        ),
        ("weight", "weight_kN_per_m", "weight_kN_per_m2", SmearParts(per_spacing=each, net_of_soil=net)),
    ]


def _smear_strip(real: RealMember, EI_factor: float, plane_strain: float, soil: float | None) -> Smeared:
    rows, values = apply_rows(real, beam_specs(STRIP, EI_factor, plane_strain, net_part(real, soil)))
    thickness, E = equivalent_wall(values["EA_kN_per_m"], values["EI_kNm2_per_m"] / plane_strain)
    section = PerMetre(
        **values,  # type: ignore[arg-type]
        thickness=thickness,
        E_kPa=E,
        net_of_soil=soil is not None,
        plane_strain_factor_included=plane_strain != 1.0,
    )
    back = (
        Back(quantity="N", from_unit="kN/m", factor=1.0, gives="axial force of the wall", unit="kN/m"),
        Back(quantity="V", from_unit="kN/m", factor=1.0, gives="shear of the wall", unit="kN/m"),
        Back(quantity="M", from_unit="kNm/m", factor=1.0, gives="bending moment of the wall", unit="kNm/m"),
    )
    return Smeared(real=real, section=section, smear=rows, back=back)


def _share(row: Back, shares: tuple[float, float]) -> Back:
    total, text = sum(shares), row.gives.replace("one pile", "one {} pile")
    return Back(
        quantity=row.quantity,
        from_unit=row.from_unit,
        factor=row.factor * shares[0] / total,
        gives=text.format("male"),
        unit=row.unit,
        also=(AlsoGives(gives=text.format("female"), factor=row.factor * shares[1] / total),),
        valid_if=row.valid_if,
    )
