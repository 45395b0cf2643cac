"""Rows of a section's `smear` and `back` for the wall of an axisymmetric section, per metre of circumference.

Four stiffnesses, always: along the pile and along the ring, axial and bending. Results come back from values per metre
of circumference and per radian (R times as much). Source: statics of a ring of equal members.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import pi

from ingest.errors import require, require_positive
from ingest.record import record
from sections.member import Back, PerRadian, RealMember, Smear
from sections.smearing.support_rows import RowSpec, apply_rows
from sections.smearing.wall import plane_strain_factor
from sections.smearing.wall_rows import STRIP, beam_specs, net_part

ALIKE = "all members of the ring act alike"


@record
class SmearedRing:
    """A real member, its values in an axisymmetric section, and the rows that lead there and back."""

    real: RealMember
    section: PerRadian
    smear: tuple[Smear, ...]
    back: tuple[Back, ...]


def ring_spacing(radius: float, count: int) -> float:
    """Spacing of n equal members on a circle, 2 pi R/n, m."""
    require_positive(float(count), "number of members")
    return 2 * pi * require_positive(radius, "radius", "m") / count


def smear_ring_pile_wall(
    real: RealMember,
    *,
    radius: float,
    hoop: Sequence[tuple[float, float]] = (),
    name: str = "pile",
    EI_factor: float = 1.0,
    soil: float | None = None,
) -> SmearedRing:
    """Smear the piles of a round shaft with its four stiffnesses; along the ring a row of piles has none.

    Args:
        real: One pile with the spacing of the piles that bend, as from `wall_rows.round_pile`.
        radius: Of the wall axis, m.
        hoop: (level, EA_hoop in kN/m) of a secant wall, from `secant_hoop`; empty for contiguous, king post, sheet.
        name: What one member is called.
        EI_factor: Cracking and creep.
        soil: Unit weight of displaced soil for the net weight, kN/m3.

    Returns:
        EA_hoop is the least over the levels and acts in compression only; EI_hoop is 0.

    Assumes:
        The receiving program has an orthotropic wall; a plain plate of EA/s would be a false hoop spring.
    """
    spacing = require_positive(real.spacing, "spacing", "m")
    rows, values = apply_rows(real, _wall_specs(real, spacing, EI_factor, 1.0, soil))
    section = PerRadian(
        **values,  # type: ignore[arg-type]
        EA_hoop_kN_per_m=min((EA for _, EA in hoop), default=0.0),
        EA_hoop_by_level=tuple(hoop) or None,
        EI_hoop_kNm2_per_m=0.0,
        net_of_soil=soil is not None,
    )
    back = _wall_back(name, spacing, require_positive(radius, "radius", "m"), has_hoop=bool(hoop))
    return SmearedRing(real=real, section=section, smear=rows, back=back)


def secant_hoop(overlap: Sequence[float], levels: Sequence[float], E_weaker: float) -> tuple[tuple[float, float], ...]:
    """Hoop stiffness of a secant wall by level: modulus of the weaker pile times overlap, kN/m.

    Args:
        overlap: Common chord at each level, m, from `smear_wall.overlap`; 0 where the piles have parted.
        levels: m above datum.
        E_weaker: kPa.
    """
    require_positive(E_weaker, "modulus of the weaker pile", "kPa")
    chords = [require(float(chord), "overlap", "m", least=0.0) for chord in overlap]
    return tuple((float(z), E_weaker * chord) for z, chord in zip(levels, chords, strict=True))


def smear_ring_wall(
    *,
    E: float,
    thickness: float,
    radius: float,
    jointed: bool,
    unit_weight: float | None = None,
    joint_step: float = 0.0,
    nu: float | None = None,
    EI_factor: float = 1.0,
    soil: float | None = None,
) -> SmearedRing:
    """Smear a diaphragm or concrete ring wall with its four stiffnesses; the real member is a strip 1 m wide.

    Args:
        E: Modulus, kPa.
        thickness: m.
        radius: Of the wall axis, m.
        jointed: Panels with joints: no bending along the ring, hoop in compression only.
        unit_weight: kN/m3.
        joint_step: Radial step between neighbouring panels, m, off the hoop thickness.
        nu: Poisson's ratio when 1/(1 - nu^2) is to be included in the vertical EI.
        EI_factor: Cracking and creep.
        soil: Unit weight of displaced soil for the net weight, kN/m3.
    """
    require_positive(E, "modulus E", "kPa")
    require_positive(thickness, "wall thickness", "m")
    step = require(joint_step, "radial step at joints", "m", least=0.0, below=thickness)
    factor = 1.0 if nu is None else plane_strain_factor(nu)
    real = RealMember(
        EA_kN=E * thickness,
        EI_kNm2=E * thickness**3 / 12,
        weight_kN_per_m=None if unit_weight is None else require_positive(unit_weight, "unit weight") * thickness,
        thickness=thickness,
        E_kPa=E,
    )
    rows, values = apply_rows(real, _wall_specs(real, STRIP, EI_factor, factor, soil))
    section = PerRadian(
        **values,  # type: ignore[arg-type]
        EA_hoop_kN_per_m=E * (thickness - step),
        EI_hoop_kNm2_per_m=0.0 if jointed else EI_factor * E * (thickness - step) ** 3 / 12,
        thickness=thickness,
        E_kPa=E,
        nu=nu,
        net_of_soil=soil is not None,
        plane_strain_factor_included=nu is not None,
    )
    back = _wall_back("wall strip 1 m wide", STRIP, require_positive(radius, "radius", "m"), has_hoop=True)
    return SmearedRing(real=real, section=section, smear=rows, back=back)


def _wall_specs(
    real: RealMember, spacing: float, EI_factor: float, plane_strain: float, soil: float | None
) -> list[RowSpec]:
    names = {"EA_kN_per_m": "EA_vertical_kN_per_m", "EI_kNm2_per_m": "EI_vertical_kNm2_per_m"}
    specs = beam_specs(spacing, EI_factor, plane_strain, net_part(real, soil))
    return [(quantity, real_key, names.get(key, key), parts) for quantity, real_key, key, parts in specs]


def _wall_back(name: str, spacing: float, radius: float, *, has_hoop: bool) -> tuple[Back, ...]:
    rows = []
    for unit, factor in (("m", spacing), ("rad", spacing / radius)):
        rows += [
            _back("N", f"kN/{unit}", factor, f"axial force of one {name}", "kN"),
            _back("V", f"kN/{unit}", factor, f"shear of one {name}", "kN"),
            _back("M", f"kNm/{unit}", factor, f"bending moment of one {name}", "kNm"),
        ]
    if has_hoop:
        rows.append(_back("hoop", "kN/m", 1.0, "hoop force per metre of depth", "kN/m", "in compression throughout"))
    return tuple(rows)


def _back(quantity: str, from_unit: str, factor: float, gives: str, unit: str, valid_if: str = ALIKE) -> Back:
    return Back(
        quantity=quantity,  # type: ignore[arg-type]
        from_unit=from_unit,
        factor=factor,
        gives=gives,
        unit=unit,
        valid_if=valid_if,
    )
