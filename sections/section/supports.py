"""The supports of a section: rows whose tributary width covers the cut, at their true inclination and skew."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from ingest.members import Material
from ingest.model import Limits, Site
from ingest.trail import Finding
from sections.member import PerMetre, RealMember, SectionMember
from sections.section.cut import Cut
from sections.section.real_support import real_support
from sections.section.rows_at_cut import RowAtCut, rows_at, wall_of_other_end, why_no_corner_strut
from sections.section.stages import Prop
from sections.section.support_drawing import draw_bond, draw_support, from_both_ends
from sections.smearing.anchors import smear_bond_length
from sections.smearing.chain import corner_chain, support_chain
from sections.smearing.checks import ANGLE_TOLERANCE, REFUSE_BETA
from sections.smearing.support_rows import Smeared, axial_back, smear_corner_strut, smear_support


def support_members(
    site: Site, cut: Cut, walls: Mapping[str, str]
) -> tuple[tuple[SectionMember, ...], tuple[Prop, ...], tuple[Finding, ...]]:
    """Make the support members of a section.

    Args:
        site: For the real members.
        cut: The cut.
        walls: Member id of the wall on each side ("left", "right").

    Returns:
        Members, the same as the stages see them, and what could not be smeared or rests on an assumption.
    """
    members: list[SectionMember] = []
    props: list[Prop] = []
    findings: list[Finding] = []
    for met in rows_at(site, cut):
        if met.direction.beta >= REFUSE_BETA - ANGLE_TOLERANCE and met.role != "corner_strut":
            findings.append(_refused(met))
            continue
        member = _member(site, met, cut, walls)
        findings += _notes(met, cut, site.limits)
        members.append(member)
        parts: tuple[str, ...] = ()
        if met.role == "anchor" and met.support.bond_length:
            members.append(_bond(met, member))
            parts = (members[-1].id,)
        preload = member.section.preload_kN_per_m if isinstance(member.section, PerMetre) else None
        props.append(Prop(id=member.id, level=met.near[2], preload=preload, names=_names(met), parts=parts))
    return tuple(members), tuple(props), tuple(findings)


def _names(met: RowAtCut) -> frozenset[str]:
    support = met.support
    return frozenset(name for name in (support.layer, support.name, support.group, met.row.member.id) if name)


def _notes(met: RowAtCut, cut: Cut, limits: Limits) -> list[Finding]:
    """What the engineer must know of a row that is in the section."""
    name = met.row.member.id
    if met.role == "corner_strut":
        why = why_no_corner_strut(met, limits)
        text = f"{name} has no stiffness in this section: {why}. Needs a model with both walls of the corner"
        return [_finding(met, "corner_strut_not_assessed", text)] if why else []
    if from_both_ends(met, cut):
        text = (
            f"{name} presses on a stretch of wall (chainage {met.off_at:.2f}) that is not in this section: it is drawn "
            "to its middle and held there, as if both walls moved alike. Were the far wall still, it would be half as "
            "stiff"
        )
        return [_finding(met, "far_wall_not_in_section", text)]
    if met.role == "raker":
        text = (
            f"The foot of {name} is drawn as held. A foot on the ground gives way: its stiffness along the raker "
            "is not given, and the support lies between about a third and the whole of EA/L (judgement)"
        )
        return [_finding(met, "raker_foot", text)]
    return []


def _refused(met: RowAtCut) -> Finding:
    beta = f"{met.direction.beta:.1f} degrees (limit {REFUSE_BETA:.0f})"
    text = f"{met.row.member.id} leaves the plane of the cut by {beta}: not in this section; needs 3D or another cut"
    return _finding(met, "member_not_smeared", text)


def _finding(met: RowAtCut, code: str, text: str) -> Finding:
    name = met.row.member.id
    return Finding(id=f"{name}-{code}", code=code, severity="check", where=name, text=text, sources=met.support.sources)


def _real(met: RowAtCut, material: Material | None) -> RealMember:
    """The real member with its spacing at this cut; corner struts are drawn level."""
    real = real_support(met.support, material, met.direction, met.row.member.count)
    return replace(
        real,
        EI_kNm2=met.support.EI,
        spacing=met.tributary,
        spacing_range=met.row.member.spacing_range,
        inclination=0.0 if met.role == "corner_strut" else real.inclination,
    )


def _smeared(met: RowAtCut, cut: Cut, limits: Limits, real: RealMember) -> Smeared:
    tied = wall_of_other_end(met, cut) is not None
    if met.role == "corner_strut" and why_no_corner_strut(met, limits):
        back = axial_back("corner_strut", met.tributary, met.direction)
        return Smeared(real=real, section=PerMetre(resists="compression"), smear=(), back=back)
    if met.role == "anchor" and real.free_length:
        real = replace(real, L_eff=real.free_length)
    elif from_both_ends(met, cut):
        real = replace(real, L_eff=(real.length or 0.0) / 2)
    if real.EA_kN and real.k_packing_kN_per_m and real.length:
        real = _with_chain(met, real, real.length / 2 if tied else real.L_eff or real.length)
    if met.role == "corner_strut":
        return smear_corner_strut(real)
    return smear_support(real, met.role, both_walls_drawn=tied)


def _with_chain(met: RowAtCut, real: RealMember, length: float) -> RealMember:
    """Member and packing in series, along the member's axis; one packing to each end that is drawn."""
    EA, packing = real.EA_kN or 0.0, real.k_packing_kN_per_m or 0.0
    if met.role == "corner_strut":
        chain = corner_chain(EA, real.length or 0.0, abs(met.direction.skew), k_packing=packing)
    else:
        chain = support_chain(EA, length, k_packing=packing)
    return replace(real, L_eff=chain.L_eff, k_effective_kN_per_m=chain.k_effective)


def _member(site: Site, met: RowAtCut, cut: Cut, walls: Mapping[str, str]) -> SectionMember:
    material = next((m for m in site.materials if m.id == met.support.material), None)
    smeared = _smeared(met, cut, site.limits, _real(met, material))
    points, ends = draw_support(met, cut, walls, smeared.real)
    section = smeared.section
    drawn = float(np.hypot(points[1][0] - points[0][0], points[1][1] - points[0][1]))
    if section.EA_kN_per_m is not None and section.k_effective_kN_per_m_per_m is None and drawn > 0:
        section = replace(section, k_effective_kN_per_m_per_m=section.EA_kN_per_m / drawn)
    return SectionMember(
        id=met.row.member.id,
        role=met.role,
        side="both" if wall_of_other_end(met, cut) else met.wall.side,  # type: ignore[arg-type]
        material=material.id if material else None,
        form="bar",
        points=points,
        ends=ends,
        real=smeared.real,
        section=section,
        smear=smeared.smear,
        back=smeared.back,
        sources=met.support.sources,
    )


def _bond(met: RowAtCut, free: SectionMember) -> SectionMember:
    """The bond length as a sheet: two faces a metre wide in place of the grout bodies of one row."""
    support = met.support
    real = RealMember(
        length=support.bond_length,
        spacing=met.tributary,
        bond_length=support.bond_length,
        bond_diameter=support.bond_diameter,
        skew=met.direction.skew,
        inclination=met.direction.inclination,
        count=met.row.member.count,
    )
    smeared = Smeared(real=real, section=PerMetre(resists="tension"), smear=(), back=())
    if support.bond_diameter:
        smeared = smear_bond_length(real)
    points, ends = draw_bond(met, free)
    return SectionMember(
        id=f"{free.id}-bond",
        role="anchor",
        side=free.side,
        material=None,
        form="sheet",
        points=points,
        ends=ends,
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=support.sources,
    )
