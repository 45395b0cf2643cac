"""Supports of an axisymmetric section: struts across the ring and anchors out of it, per radian."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.members import Material, Support
from ingest.model import Site
from ingest.trail import Finding
from sections.found import SupportRow
from sections.member import Curve, End, PerRadian, SectionMember
from sections.model import Floats
from sections.section.cut import Cut, CutWall
from sections.section.real_support import real_support
from sections.section.stages import Prop
from sections.smearing.member import Direction, find_direction
from sections.smearing.ring_supports import smear_diametral_struts, smear_ring_anchors
from sections.smearing.ring_wall import SmearedRing

NU_DISC = 0.2
"""Poisson's ratio of the disc that stands for struts; its stiffness does not depend on it."""
EVEN = 5.0
"""Struts along diameters count as even in angle within this, degrees (judgement)."""
EVEN_GAPS = 1.5
"""Anchors go all round a ring when their widest gap is at most this times the mean (judgement)."""

Made = tuple[list[SectionMember], list[Prop], list[Finding]]


def ring_supports(site: Site, cut: Cut, wall: CutWall, name: str) -> Made:
    """Make the supports of an axisymmetric section.

    Args:
        site: The real supports.
        cut: From the axis of the ring outwards.
        wall: The wall it meets.
        name: Member id of that wall.

    Returns:
        Members, the same as the stages see them, and what does not repeat round the ring.
    """
    members: list[SectionMember] = []
    props: list[Prop] = []
    findings: list[Finding] = []
    for row in wall.found.rows:
        supports = [site.supports[i] for i in row.supports]
        made, notes = _row(site, cut, wall, row, supports, name)
        findings += notes
        if made is not None:
            members.append(made)
            props.append(_prop(supports[0], made))
    return members, props, findings


def _row(
    site: Site, cut: Cut, wall: CutWall, row: SupportRow, supports: Sequence[Support], name: str
) -> tuple[SectionMember | None, list[Finding]]:
    where, role = row.member.id, row.member.role
    material = next((m for m in site.materials if m.id == supports[0].material), None)
    if role == "anchor" and row.member.inclination is not None and _all_round(row.head_at, wall.found.pit.length):
        return _anchors(cut, wall, row, supports[0], material, name)
    if role == "strut" and not np.any(np.isnan(row.far_at)):
        return _struts(cut, wall, row, supports, material, name)
    return None, [_finding(where, "not_axisymmetric", f"{where} does not repeat round the ring: not in this section")]


def _all_round(at: Floats, length: float) -> bool:
    """Whether members stand all round the ring at about one spacing."""
    gaps = np.diff(np.append(np.sort(at), np.min(at) + length))
    return len(at) > 2 and float(np.max(gaps)) <= EVEN_GAPS * length / len(at)


def _anchors(
    cut: Cut, wall: CutWall, row: SupportRow, support: Support, material: Material | None, name: str
) -> tuple[SectionMember, list[Finding]]:
    out = np.subtract(support.head[:2], cut.start)
    direction = find_direction(support.head, support.far, (float(-out[1]), float(out[0])))
    real = real_support(support, material, direction, row.member.count)
    length = real.free_length or real.length or 0.0
    level = support.head[2]
    end = (wall.x + length * direction.normal_part, level - length * direction.vertical_part)
    smeared = smear_ring_anchors(real, radius=wall.x, count=row.member.count)
    findings = []
    if support.bond_length:
        text = f"The bond length of {row.member.id} is not drawn: the anchors are held where their free length ends"
        findings.append(_finding(row.member.id, "bond_not_drawn", text))
    return _made(row, material, "bar", ((wall.x, level), end), smeared, (name, "ground")), findings


def _struts(
    cut: Cut, wall: CutWall, row: SupportRow, supports: Sequence[Support], material: Material | None, name: str
) -> tuple[SectionMember, list[Finding]]:
    where, support = row.member.id, supports[0]
    real = real_support(support, material, Direction(), row.member.count)
    offsets = [_offset(one, cut) for one in supports]
    smeared = smear_diametral_struts(
        real, radius=wall.x, diameters=row.member.count, nu=NU_DISC, offset=float(np.sqrt(np.mean(np.square(offsets))))
    )
    points = ((wall.x, support.head[2]), (0.0, support.head[2]))
    findings = _unevenness(supports, where)
    if real.k_packing_kN_per_m is not None:
        text = f"The packing of {where} is not in its stiffness here: it is softer than the section has it"
        findings.append(_finding(where, "packing", text))
    return _made(row, material, "disc", points, smeared, (name, "axis")), findings


def _offset(support: Support, cut: Cut) -> float:
    """Distance of a strut's line from the axis, m."""
    a, b = np.subtract(support.head[:2], cut.start), np.subtract(support.far[:2], cut.start)
    return float(abs(a[0] * b[1] - a[1] * b[0]) / np.hypot(*(b - a)))


def _unevenness(supports: Sequence[Support], where: str) -> list[Finding]:
    """Struts that do not spread evenly round the ring are no disc: the two runs that bound them."""
    angles = []
    for support in supports:
        (x1, y1, _), (x2, y2, _) = support.head, support.far
        angles.append(float(np.degrees(np.arctan2(y2 - y1, x2 - x1)) % 180))
    count = len(angles)
    gaps = np.diff(np.sort(angles + [min(angles) + 180]))
    if count >= 2 and float(np.max(np.abs(gaps - 180 / count))) <= EVEN:
        return []
    text = (
        f"{where}: {count} strut(s) not spread evenly round the ring. Make two runs, with the disc and without: "
        "vertical bending is the envelope of both, movement from the run without, strut force from the one with; "
        "horizontal bending of the ring is not in either"
    )
    return [_finding(where, "two_runs", text)]


def _made(
    row: SupportRow,
    material: Material | None,
    form: str,
    points: Curve,
    smeared: SmearedRing,
    to: tuple[str, str],
) -> SectionMember:
    ends = (End(to=on, at=at, joint="pinned") for on, at in zip(to, points, strict=True))
    return SectionMember(
        id=row.member.id,
        role=row.member.role,
        side="right",
        material=material.id if material else None,
        form=form,  # type: ignore[arg-type]
        points=points,
        ends=tuple(ends),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=row.member.sources,
    )


def _prop(support: Support, member: SectionMember) -> Prop:
    preload = member.section.preload_kN_per_rad if isinstance(member.section, PerRadian) else None
    words = (support.layer, support.name, support.group, member.id)
    return Prop(id=member.id, level=support.head[2], preload=preload, names=frozenset(word for word in words if word))


def _finding(where: str, code: str, text: str) -> Finding:
    return Finding(id=f"{where}-{code}", code=code, severity="check", where=where, text=text)
