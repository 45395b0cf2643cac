"""The supports of a section: rows whose tributary width covers the cut, at their true inclination and skew."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from ingest.model import Point3, Site, Support
from ingest.trail import Finding
from sections.anchors import smear_bond_length
from sections.chain import support_chain
from sections.cut import Cut, CutWall
from sections.definition import XZ, End, PerMetre, RealMember, SectionMember
from sections.model import SupportRow
from sections.section_stages import Prop
from sections.smear import Direction, find_direction
from sections.smear_rows import Smeared, smear_corner_strut, smear_support

REFUSED = 40.0
"""Out-of-plane angle from which a member is not smeared unless it is a corner strut, degrees (judgement)."""


@dataclass(frozen=True, kw_only=True)
class RowAtCut:
    """One row as the cut meets it: the nearest real member, the wall length it stands for, and where it is drawn."""

    row: SupportRow
    wall: CutWall
    support: Support
    near: Point3
    off: Point3
    """Ends of the real member: the one on this wall and the other."""
    tributary: float


def rows_at(site: Site, cut: Cut) -> tuple[RowAtCut, ...]:
    """Rows whose tributary width covers the cut, each once, from the first wall that has it."""
    met: dict[str, RowAtCut] = {}
    for wall in cut.walls:
        stations = wall.found.stations
        for index in stations.supports[wall.station]:
            row = wall.found.rows[index]
            nearest = _nearest(site, row, wall)
            if nearest is not None and row.member.id not in met:
                met[row.member.id] = nearest
    return tuple(met[name] for name in sorted(met))


def _nearest(site: Site, row: SupportRow, wall: CutWall) -> RowAtCut | None:
    length = wall.found.pit.length
    best: tuple[float, int, bool] | None = None
    for at, head in ((row.head_at, True), (row.far_at, False)):
        gap = np.abs(at - wall.at)
        gap = np.where(np.isnan(gap), np.inf, np.minimum(gap, length - gap) if wall.found.pit.closed else gap)
        place = int(np.argmin(gap))
        if np.isfinite(gap[place]) and (best is None or gap[place] < best[0]):
            best = float(gap[place]), place, head
    if best is None:
        return None
    _, place, head = best
    width = float((row.tributary_head if head else row.tributary_far)[place])
    support = site.supports[row.supports[place]]
    turned = row.turned is not None and bool(row.turned[place])
    near, off = (support.head, support.far) if head != turned else (support.far, support.head)
    return RowAtCut(row=row, wall=wall, support=support, near=near, off=off, tributary=width)


def support_members(
    site: Site, cut: Cut, walls: Mapping[str, str]
) -> tuple[tuple[SectionMember, ...], tuple[Prop, ...], tuple[Finding, ...]]:
    """Make the support members of a section.

    Args:
        site: For the real members.
        cut: The cut.
        walls: Member id of the wall on each side ("left", "right").

    Returns:
        Members, the same as the stages see them, and what could not be smeared.
    """
    members: list[SectionMember] = []
    props: list[Prop] = []
    findings: list[Finding] = []
    for met in rows_at(site, cut):
        direction = _direction(met)
        role = met.support.role
        if direction.beta >= REFUSED - 1e-9 and role != "corner_strut":
            findings.append(_refused(met, direction))
            continue
        member = _member(met, cut, walls, direction)
        members.append(member)
        parts: tuple[str, ...] = ()
        if role == "anchor" and met.support.bond_length:
            members.append(_bond(met, member, direction))
            parts = (members[-1].id,)
        preload = member.section.preload_kN_per_m if isinstance(member.section, PerMetre) else None
        props.append(Prop(id=member.id, level=met.near[2], preload=preload, names=_names(met), parts=parts))
    return tuple(members), tuple(props), tuple(findings)


def _names(met: RowAtCut) -> frozenset[str]:
    support = met.support
    return frozenset(name for name in (support.layer, support.name, support.group, met.row.member.id) if name)


def _direction(met: RowAtCut) -> Direction:
    normal = met.wall.found.stations.normal[met.wall.station]
    return find_direction(met.near, met.off, (float(normal[1]), float(-normal[0])))


def _refused(met: RowAtCut, direction: Direction) -> Finding:
    return Finding(
        id=f"{met.row.member.id}-skew",
        code="member_not_smeared",
        severity="check",
        where=met.row.member.id,
        text=f"{met.row.member.id} leaves the plane of the cut by {direction.beta:.1f} degrees (limit {REFUSED:.0f}): "
        "not in this section; needs 3D or another cut",
        sources=met.support.sources,
    )


def _real(met: RowAtCut, direction: Direction) -> RealMember:
    support, member = met.support, met.row.member
    head, far = np.asarray(support.head), np.asarray(support.far)
    length = float(np.linalg.norm(far - head))
    spread = member.spacing_range
    return RealMember(
        EA_kN=support.EA,
        EI_kNm2=support.EI,
        length=length,
        spacing=met.tributary,
        spacing_range=spread,
        skew=direction.skew,
        inclination=direction.inclination,
        count=member.count,
        preload_kN=support.preload,
        weight_kN_per_m=support.weight,
        free_length=support.free_length,
        bond_length=support.bond_length,
        bond_diameter=support.bond_diameter,
        thermal_range_K=support.thermal_range,
        k_packing_kN_per_m=support.packing_stiffness,
    )


def _smeared(met: RowAtCut, direction: Direction, both_walls: bool) -> Smeared:
    real, role = _real(met, direction), met.support.role
    if role == "corner_strut":
        return smear_corner_strut(real)
    if role == "anchor" and real.free_length:
        real = replace(real, L_eff=real.free_length)
    if real.EA_kN and real.k_packing_kN_per_m and real.length:
        real = _with_chain(real, both_walls)
    return smear_support(real, role, both_walls_drawn=both_walls)


def _with_chain(real: RealMember, both_walls: bool) -> RealMember:
    """Member and packing in series, along the member's axis; half the member when both walls are drawn."""
    length = (real.length or 0.0) / (2 if both_walls else 1)
    chain = support_chain(real.EA_kN or 0.0, length, k_packing=real.k_packing_kN_per_m or 0.0)
    return replace(real, L_eff=length, k_effective_kN_per_m=chain.k_effective)


def _member(met: RowAtCut, cut: Cut, walls: Mapping[str, str], direction: Direction) -> SectionMember:
    both = _ties_both(met, cut)
    smeared = _smeared(met, direction, both)
    points, ends = _drawn(met, cut, walls, direction, smeared.real, both)
    section = smeared.section
    drawn = float(np.hypot(points[1][0] - points[0][0], points[1][1] - points[0][1]))
    if section.EA_kN_per_m is not None and section.k_effective_kN_per_m_per_m is None and drawn > 0:
        section = replace(section, k_effective_kN_per_m_per_m=section.EA_kN_per_m / drawn)
    return SectionMember(
        id=met.row.member.id,
        role=met.support.role,
        side="both" if both else met.wall.side,  # type: ignore[arg-type]
        material=met.support.material,
        form="bar",
        points=points,
        ends=ends,
        real=smeared.real,
        section=section,
        smear=smeared.smear,
        back=smeared.back,
        sources=met.support.sources,
    )


def _ties_both(met: RowAtCut, cut: Cut) -> bool:
    if len(cut.walls) < 2 or met.support.role != "strut":
        return False
    tied = ~np.isnan(met.row.head_at) & ~np.isnan(met.row.far_at)
    return bool(np.all(tied))


def _drawn(
    met: RowAtCut, cut: Cut, walls: Mapping[str, str], direction: Direction, real: RealMember, both: bool
) -> tuple[tuple[XZ, XZ], tuple[End, End]]:
    """Where the member is drawn in the section, and what its ends stand on."""
    support, wall = met.support, met.wall
    start = (wall.x, met.near[2])
    here = End(to=walls[wall.side], at=start, joint="pinned")
    if both:
        other = next(w for w in cut.walls if w is not wall)
        end = (other.x, met.off[2])
        return (start, end), (here, End(to=walls[other.side], at=end, joint="pinned"))
    length = real.length or 0.0
    if support.role == "anchor" and support.free_length:
        length = support.free_length
    if support.role == "corner_strut" and real.L_eff:
        end = (wall.x + _into(met) * real.L_eff, met.near[2])
        return (start, end), (here, End(to="opposite", at=end, joint="pinned"))
    across = length * direction.normal_part * _into(met)
    end = (wall.x + across, met.near[2] - length * direction.vertical_part)
    there = f"{met.row.member.id}-bond" if support.role == "anchor" and support.bond_length else "ground"
    return (start, end), (here, End(to=there, at=end, joint="pinned"))


def _into(met: RowAtCut) -> float:
    """+1 when the member leaves the wall towards growing x."""
    into_pit = 1.0 if met.wall.side == "left" else -1.0
    return -into_pit if met.support.role == "anchor" else into_pit


def _bond(met: RowAtCut, free: SectionMember, direction: Direction) -> SectionMember:
    """The bond length as a sheet: two faces a metre wide in place of the grout bodies of one row."""
    support = met.support
    bond = support.bond_length or 0.0
    (x1, z1), (x2, z2) = free.points[0], free.points[1]
    share = bond * direction.cos_beta / float(np.hypot(x2 - x1, z2 - z1))
    end = (x2 + (x2 - x1) * share, z2 + (z2 - z1) * share)
    real = RealMember(
        length=bond,
        spacing=met.tributary,
        bond_length=bond,
        bond_diameter=support.bond_diameter,
        skew=direction.skew,
        inclination=direction.inclination,
        count=met.row.member.count,
    )
    smeared = Smeared(real=real, section=PerMetre(resists="tension"), smear=(), back=())
    if support.bond_diameter:
        smeared = smear_bond_length(real)
    return SectionMember(
        id=f"{free.id}-bond",
        role="anchor",
        side=free.side,
        material=None,
        form="sheet",
        points=(free.points[1], end),
        ends=(End(to=free.id, at=free.points[1], joint="fixed"), End(to="ground", at=end, joint="free")),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=support.sources,
    )
