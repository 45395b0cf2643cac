"""Ring beams and slabs of an axisymmetric section: compression rings and discs, per radian."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ingest.members import Plate, Waler
from ingest.model import Site
from ingest.trail import Finding
from sections.member import Curve, End, PerRadian, RealMember, SectionMember
from sections.model import Member
from sections.section.cut import Cut, CutWall
from sections.section.stages import Prop
from sections.smearing.ring_supports import smear_ring_beam, smear_ring_slab
from sections.smearing.ring_wall import SmearedRing

NU = 0.2
"""Poisson's ratio of a concrete slab, uncracked. Source: EN 1992-1-1 cl. 3.1.3 (recalled)."""

Made = tuple[list[SectionMember], list[Prop], list[Finding]]


def beams_and_slabs(site: Site, cut: Cut, wall: CutWall, name: str) -> Made:
    """Make the ring beams and slabs of the pit, under the ids the proposal knows them by.

    Args:
        site: The real beams and slabs.
        cut: From the axis of the ring outwards.
        wall: The wall it meets.
        name: Member id of that wall.
    """
    members: list[SectionMember] = []
    props: list[Prop] = []
    findings: list[Finding] = []
    for listed in wall.found.pit.members:
        made = None
        if listed.role == "waler":
            one = next((w for w in site.walers if set(w.sources) & set(listed.sources)), None)
            made = _beam(listed, one, cut, wall, name) if one else None
            words: tuple[str, ...] = (one.layer, one.name) if one else ()
        elif listed.role == "slab":
            plate = next((p for p in site.plates if set(p.sources) & set(listed.sources)), None)
            made = _slab(listed, plate, site, wall, name) if plate else None
            words = (plate.layer, plate.name) if plate else ()
        if made is None:
            continue
        member, problem = made
        if problem:
            code = "ring_beam" if listed.role == "waler" else "ring_slab"
            findings.append(
                Finding(id=f"{listed.id}-{code}", code=code, severity="check", where=listed.id, text=problem)
            )
        if member is not None:
            members.append(member)
            names = frozenset(word for word in (*words, listed.id) if word)
            props.append(
                Prop(
                    id=listed.id, level=member.points[0][1], preload=None, names=names, permanent=listed.role == "slab"
                )
            )
    return members, props, findings


def _beam(listed: Member, waler: Waler, cut: Cut, wall: CutWall, name: str) -> tuple[SectionMember | None, str]:
    if waler.level is None:
        return None, f"level of {listed.id} is not given: not in the section"
    point = (wall.x, waler.level)
    radius = float(np.mean(np.hypot(*(np.asarray(waler.points, float) - cut.start).T)))
    if waler.EA is None:
        smeared = SmearedRing(real=RealMember(EI_kNm2=waler.EI), section=PerRadian(), smear=(), back=())
        problem = f"axial stiffness of {listed.id} is not given: its hoop is not in the section"
    else:
        smeared, problem = smear_ring_beam(RealMember(EA_kN=waler.EA, EI_kNm2=waler.EI), radius=radius), ""
    return _member(listed, waler.material, "ring", (point,), smeared, name), problem


def _slab(listed: Member, plate: Plate, site: Site, wall: CutWall, name: str) -> tuple[SectionMember | None, str]:
    if plate.top is None or plate.underside is None:
        return None, f"top or underside of {listed.id} is not given: not in the section"
    z, thickness = (plate.top + plate.underside) / 2, plate.top - plate.underside
    material = next((m for m in site.materials if m.id == plate.material), None)
    points = ((wall.x, z), (0.0, z))
    if material is None or material.E is None or plate.holes:
        real = RealMember(thickness=thickness)
        smeared = SmearedRing(real=real, section=PerRadian(thickness=thickness), smear=(), back=())
        lacks = "it has openings" if plate.holes else "its modulus is not given"
        return _member(
            listed, plate.material, "disc", points, smeared, name
        ), f"{listed.id}: {lacks}, no stiffness stands for it"
    smeared = smear_ring_slab(E=material.E, thickness=thickness, radius=wall.x, nu=NU)
    return _member(listed, material.id, "disc", points, smeared, name), ""


def _member(
    listed: Member, material: str | None, form: str, points: Curve, smeared: SmearedRing, name: str
) -> SectionMember:
    ends = [End(to=name, at=points[0], joint="pinned")]
    ends += [End(to="axis", at=point, joint="pinned") for point in points[1:]]
    return SectionMember(
        id=listed.id,
        role=listed.role,
        side="right",
        material=material,
        form=form,  # type: ignore[arg-type]
        points=points,
        ends=tuple(ends),
        real=replace(smeared.real, count=listed.count),
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=listed.sources,
    )
