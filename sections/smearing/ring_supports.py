"""Rows of a section's `smear` and `back` for supports and piles of an axisymmetric section, per radian.

Per radian = R times per metre of circumference; the whole ring is 2 pi times per radian. Source: statics of a ring of
equal members; disc after Lame.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import pi

from ingest.errors import require, require_positive
from sections.member import AlsoGives, Back, PerRadian, RealMember, SmearParts
from sections.smearing.bearing_row import shaft_factor
from sections.smearing.member import Direction, MemberQuantity, member_parts
from sections.smearing.ring import disc_stiffness, pair_factor
from sections.smearing.ring_wall import ALIKE, SmearedRing, ring_spacing
from sections.smearing.support_rows import SMALL, RowSpec, apply_rows, chain_factor, direction_of


def smear_diametral_struts(
    real: RealMember, *, radius: float, diameters: int, nu: float, offset: float = 0.0
) -> SmearedRing:
    """Smear n struts along diameters, even in angle, as radial springs and as the disc of equal stiffness.

    Args:
        real: One strut, drawn from wall axis to wall axis; with a chain, k_effective over L_eff = R.
        radius: Of the wall axis, m.
        diameters: Number of struts n; 2 n ends.
        nu: Poisson's ratio of the disc.
        offset: Distance of the struts from the axis, m: they are shorter by cos = sqrt(1 - (offset/R)^2), and only
            cos of their force and of the movement is radial.

    Assumes:
        The struts spread evenly. One strut, or a parallel pair, is not axisymmetric: it needs two runs, with the disc
        and without any strut.
    """
    R = require_positive(radius, "radius", "m")
    n = require(float(diameters), "number of struts", least=1.0)
    radial = pair_factor(offset, R)
    springs = SmearParts(per_spacing=n / (pi * R), cos_beta_power=radial, phi=chain_factor(real))
    disc = replace(springs, plane_strain=1.0 - require(nu, "Poisson's ratio", least=0.0, below=0.5))
    ends = SmearParts(per_spacing=n / pi, cos_beta_power=radial)
    specs: list[RowSpec] = [
        ("radial stiffness", "EA_kN", "radial_stiffness_kN_per_m_per_rad", springs),
        ("disc", "EA_kN", "disc_Et_kN_per_m", disc),
        ("preload", "preload_kN", "preload_kN_per_rad", ends),
        ("limit", "limit_kN", "limit_kN_per_rad", ends),
    ]
    rows, values = apply_rows(real, specs)
    gives = "axial force of one strut end"
    back = _back_from(("N", 1.0), ("reaction", -1.0), each=pi / n / radial, radius=R, gives=gives)
    return SmearedRing(
        real=real,
        section=PerRadian(**values, nu=nu, resists="compression"),  # type: ignore[arg-type]
        smear=rows,
        back=back,
    )


def smear_ring_anchors(real: RealMember, *, radius: float, count: int) -> SmearedRing:
    """Smear n anchors round a ring: per radian n X cos^k(beta)/(2 pi), constant along their length.

    Args:
        real: One anchor: inclination and skew (off the radius); EA, preload (lock-off), limit.
        radius: Of the heads, m.
        count: Number of anchors n.
    """
    direction, spacing = direction_of(real), ring_spacing(radius, count)
    keys: tuple[tuple[MemberQuantity, str, str], ...] = (
        ("EA", "EA_kN", "EA_kN_per_rad"),
        ("preload", "preload_kN", "preload_kN_per_rad"),
        ("limit", "limit_kN", "limit_kN_per_rad"),
    )
    specs: list[RowSpec] = [
        (quantity, real_key, key, replace(member_parts(quantity, spacing, direction), per_spacing=count / (2 * pi)))
        for quantity, real_key, key in keys
    ]
    rows, values = apply_rows(real, specs)
    back = _back_from(
        ("N", 1.0),
        each=2 * pi / count / direction.cos_beta,
        radius=radius,
        gives="axial force of one anchor",
        also=_parts_of_force(direction),
    )
    section = PerRadian(**values, resists="tension")  # type: ignore[arg-type]
    return SmearedRing(real=real, section=section, smear=rows, back=back)


def smear_ring_bearing_piles(real: RealMember, *, radius: float, count: int) -> SmearedRing:
    """Smear n bearing piles on a circle: per radian n X/(2 pi); contact_kPa becomes the limit on each sheet face.

    Args:
        real: One pile; diameter where contact_kPa is given.
        radius: Of the circle, m.
        count: Number of piles n.
    """
    spacing, per_radian = ring_spacing(radius, count), SmearParts(per_spacing=count / (2 * pi))
    specs: list[RowSpec] = [
        ("EA", "EA_kN", "EA_kN_per_rad", per_radian),
        ("EI", "EI_kNm2", "EI_kNm2_per_rad", per_radian),
        ("limit", "limit_kN", "limit_kN_per_rad", per_radian),
    ]
    if real.contact_kPa is not None:
        shaft = SmearParts(per_spacing=shaft_factor(require_positive(real.diameter, "pile diameter", "m"), spacing))
        specs.append(("contact", "contact_kPa", "contact_kPa", shaft))
    rows, values = apply_rows(real, specs)
    each = 2 * pi / count
    back = (
        *_back_from(("N", 1.0), each=each, radius=radius, gives="axial force of one pile"),
        *_back_from(("V", 1.0), each=each, radius=radius, gives="shear of one pile"),
        *_back_from(("M", 1.0), each=each, radius=radius, gives="bending moment of one pile", force="kNm"),
    )
    return SmearedRing(real=real, section=PerRadian(**values), smear=rows, back=back)  # type: ignore[arg-type]


def smear_ring_beam(real: RealMember, *, radius: float) -> SmearedRing:
    """Smear a ring beam (capping beam, ring waler): radial stiffness EA/R per radian; its limit is a hoop force.

    Args:
        real: The beam with EA and, where known, limit_kN (hoop compression).
        radius: Of the beam axis, m.

    Returns:
        Hoop force N = q R: the reaction per radian itself, and R times the reaction per metre of circumference.
    """
    R = require_positive(radius, "radius", "m")
    specs: list[RowSpec] = [
        ("radial stiffness", "EA_kN", "radial_stiffness_kN_per_m_per_rad", SmearParts(per_spacing=1 / R)),
        ("limit", "limit_kN", "limit_kN_per_rad", SmearParts()),
    ]
    rows, values = apply_rows(real, specs)
    gives = "hoop force of the ring beam"
    whole = Back(quantity="hoop", from_unit="kN", factor=1.0, gives=gives, unit="kN", valid_if=ALIKE)
    back = (whole, *_back_from(("reaction", -1.0), each=1.0, radius=R, gives=gives))
    section = PerRadian(**values, resists="compression")  # type: ignore[arg-type]
    return SmearedRing(real=real, section=section, smear=rows, back=back)


def smear_ring_slab(*, E: float, thickness: float, radius: float, nu: float, hole: float = 0.0) -> SmearedRing:
    """Smear a slab that fills the ring, with a central hole or without; the real member is a strip 1 m wide.

    Args:
        E: Modulus, kPa.
        thickness: m.
        radius: Of the wall axis, m.
        nu: Poisson's ratio.
        hole: Radius of a central hole, m.

    Returns:
        Radial stiffness per radian, and E t of the solid disc that has it.
    """
    R, strip = require_positive(radius, "radius", "m"), require_positive(E, "modulus E", "kPa") * thickness
    real = RealMember(EA_kN=strip, thickness=thickness, E_kPa=E)
    per_radian = disc_stiffness(E, thickness, R, nu, hole) * R / strip
    specs: list[RowSpec] = [
        ("radial stiffness", "EA_kN", "radial_stiffness_kN_per_m_per_rad", SmearParts(plane_strain=per_radian)),
        ("disc", "EA_kN", "disc_Et_kN_per_m", SmearParts(plane_strain=per_radian * (1 - nu))),
    ]
    rows, values = apply_rows(real, specs)
    gives = "radial force of the slab at its edge"
    edge = _back_from(("N", 1.0), ("reaction", -1.0), each=1 / R, radius=R, gives=gives)
    back = tuple(replace(row, unit="kN/m") for row in edge)
    section = PerRadian(**values, nu=nu, thickness=thickness, E_kPa=E)  # type: ignore[arg-type]
    return SmearedRing(real=real, section=section, smear=rows, back=back)


def _parts_of_force(direction: Direction) -> tuple[tuple[str, float], ...]:
    """What else one anchor's force gives, as shares of that force."""
    parts = []
    if abs(direction.along_part) > SMALL:
        parts.append(("thrust of one anchor along the ring", abs(direction.along_part)))
    if abs(direction.vertical_part) > SMALL:
        parts.append(("vertical part of one anchor, down on the wall when it pulls", direction.vertical_part))
    return tuple(parts)


def _back_from(
    *quantities: tuple[str, float],
    each: float,
    radius: float,
    gives: str,
    force: str = "kN",
    also: Sequence[tuple[str, float]] = (),
) -> tuple[Back, ...]:
    """Rows from values per radian (factor `each`) and per metre of circumference (R times that), with their sign."""
    return tuple(
        Back(
            quantity=quantity,  # type: ignore[arg-type]
            from_unit=f"{force}/{unit}",
            factor=sign * each * times,
            gives=gives,
            unit=force,
            also=tuple(AlsoGives(gives=text, factor=sign * each * times * share) for text, share in also),
            valid_if=ALIKE,
        )
        for quantity, sign in quantities
        for unit, times in (("rad", 1.0), ("m", radius))
    )
