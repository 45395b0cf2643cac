"""Members and loads of an axisymmetric section: walls per metre of circumference, all else per radian."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingest.model import Load, Material, Site
from ingest.trail import Finding
from sections.cut import Cut, CutWall
from sections.definition import Curve, End, Implied, LoadValue, PerRadian, RealMember, SectionLoad, SectionMember
from sections.hand_over_ring import hand_over_ring_footing, hand_over_ring_point, ring_over_footing
from sections.implied import grade
from sections.model import Run, SupportRow
from sections.ring_beams import beams_and_slabs
from sections.section_loads import UNITS, loads_at
from sections.section_stages import Prop
from sections.smear_ring import SmearedRing, smear_ring_pile_wall, smear_ring_wall
from sections.smear_ring_supports import smear_diametral_struts, smear_ring_anchors
from sections.wall_rows import round_pile

NU_DISC = 0.2
"""Poisson's ratio of the disc that stands for struts; its stiffness does not depend on it."""
EVEN = 5.0
"""Struts along diameters count as even in angle within this, degrees (judgement)."""


@dataclass(frozen=True, kw_only=True)
class RingParts:
    """What makes up an axisymmetric section."""

    members: tuple[SectionMember, ...]
    props: tuple[Prop, ...]
    loads: tuple[SectionLoad, ...]
    implied: tuple[Implied, ...]
    findings: tuple[Finding, ...]


def ring_parts(site: Site, cut: Cut, name: str) -> RingParts:
    """Turn the members and loads round a ring into those of its axisymmetric section.

    Args:
        site: The real members.
        cut: From the axis outwards through its one wall.
        name: Member id of the wall.
    """
    wall = cut.walls[0]
    member, findings = _wall(site, wall, name)
    members, props = [member], []
    for row in wall.found.rows:
        made, notes = _row(site, wall, row, name)
        findings += notes
        if made is not None:
            members.append(made)
            props.append(_prop(site, row, made))
    beams, held, notes = beams_and_slabs(site, cut, wall, name)
    members += beams
    props += held
    findings += notes
    loads, implied = _loads(site, cut, wall)
    return RingParts(members=tuple(members), props=tuple(props), loads=loads, implied=implied, findings=tuple(findings))


def _words(*names: str) -> frozenset[str]:
    return frozenset(name for name in names if name)


def _finding(where: str, code: str, text: str) -> Finding:
    return Finding(id=f"{where}-{code}", code=code, severity="check", where=where, text=text)


def _wall(site: Site, wall: CutWall, name: str) -> tuple[SectionMember, list[Finding]]:
    run = wall.found.pit.runs[int(wall.found.stations.run[wall.station])]
    material = next((m for m in site.materials if m.id == run.wall.material), None)
    smeared, text = _smear_wall(run, material, wall.x)
    findings = [_finding(name, "ring_wall", text)] if text else []
    top, toe = wall.level["top"], wall.level["toe"]
    points: Curve = tuple((wall.x, level) for level in (top, toe) if level is not None)
    member = SectionMember(
        id=name,
        role="wall",
        side="right",
        material=run.wall.material if material else None,
        form="beam",
        points=points,
        ends=tuple(End(to="ground", at=point, joint="free") for point in points),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=run.wall.sources,
    )
    return member, findings


def _smear_wall(run: Run, material: Material | None, radius: float) -> tuple[SmearedRing, str]:
    wall = run.wall
    factor = 1.0 if wall.EI_factor is None else wall.EI_factor
    if material is None or material.E is None:
        return _bare(RealMember(thickness=wall.thickness, diameter=wall.diameter)), "modulus of the wall is not given"
    if wall.kind in ("diaphragm", "concrete") and wall.thickness:
        jointed = wall.continuity != "monolithic"
        smeared = smear_ring_wall(
            E=material.E, thickness=wall.thickness, radius=radius, jointed=jointed, unit_weight=material.unit_weight,
            EI_factor=factor,
        )  # fmt: skip
        return (
            smeared,
            "" if not jointed else "radial steps between panels are not given: the whole thickness is in the hoop",
        )
    if wall.kind in ("contiguous", "secant") and wall.diameter and wall.centres and wall.structural:
        pile = round_pile(
            diameter=wall.diameter, E=material.E, unit_weight=material.unit_weight, centres=wall.centres,
            which=wall.structural.which, count=wall.structural.count,
        )  # fmt: skip
        text = "overlap and modulus of the weaker piles are not given: no hoop stiffness is counted"
        return smear_ring_pile_wall(pile, radius=radius, EI_factor=factor), text if wall.kind == "secant" else ""
    return _bare(RealMember()), f"a {wall.kind} wall of unknown size: its stiffness is not in the section"


def _bare(real: RealMember) -> SmearedRing:
    return SmearedRing(real=real, section=PerRadian(), smear=(), back=())


def _row(site: Site, wall: CutWall, row: SupportRow, name: str) -> tuple[SectionMember | None, list[Finding]]:
    support = site.supports[row.supports[0]]
    head, far = np.asarray(support.head), np.asarray(support.far)
    real = RealMember(
        EA_kN=support.EA,
        length=float(np.linalg.norm(far - head)),
        skew=0.0,
        inclination=row.member.inclination,
        count=row.member.count,
        preload_kN=support.preload,
        free_length=support.free_length,
        bond_length=support.bond_length,
        bond_diameter=support.bond_diameter,
    )
    where, level = row.member.id, support.head[2]
    if support.role == "anchor" and row.member.inclination is not None:
        smeared = smear_ring_anchors(real, radius=wall.x, count=row.member.count)
        end = (wall.x + float(np.hypot(*(far - head)[:2])), float(min(far[2], head[2])))
        return _made(row, support.material, "bar", ((wall.x, level), end), smeared, name, "ground"), []
    if support.role == "strut" and not np.any(np.isnan(row.far_at)):
        smeared = smear_diametral_struts(real, radius=wall.x, diameters=row.member.count, nu=NU_DISC)
        points = ((wall.x, level), (0.0, level))
        return _made(row, support.material, "disc", points, smeared, name, "axis"), _unevenness(site, row, where)
    return None, [_finding(where, "not_axisymmetric", f"{where} does not repeat round the ring: not in this section")]


def _unevenness(site: Site, row: SupportRow, where: str) -> list[Finding]:
    """Struts that do not spread evenly round the ring are no disc: the two runs that bound them."""
    angles = []
    for index in row.supports:
        (x1, y1, _), (x2, y2, _) = site.supports[index].head, site.supports[index].far
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
    material: str | None,
    form: str,
    points: Curve,
    smeared: SmearedRing,
    name: str,
    to: str,
) -> SectionMember:
    return SectionMember(
        id=row.member.id,
        role=row.member.role,
        side="right",
        material=material,
        form=form,  # type: ignore[arg-type]
        points=points,
        ends=(End(to=name, at=points[0], joint="pinned"), End(to=to, at=points[1], joint="pinned")),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=row.member.sources,
    )


def _prop(site: Site, row: SupportRow, member: SectionMember) -> Prop:
    support = site.supports[row.supports[0]]
    preload = member.section.preload_kN_per_rad if isinstance(member.section, PerRadian) else None
    return Prop(
        id=member.id,
        level=support.head[2],
        preload=preload,
        names=_words(support.layer, support.name, support.group, member.id),
    )


def _loads(site: Site, cut: Cut, wall: CutWall) -> tuple[tuple[SectionLoad, ...], tuple[Implied, ...]]:
    rows, implied = [], []
    for name, load, _ in loads_at(site, cut):
        x = np.hypot(*(np.asarray(load.points, float) - cut.start).T)
        r, spread = float(np.mean(x)), float(np.max(cut.y_of(load.points)) - np.min(cut.y_of(load.points)))
        if load.value is None or r <= 0:
            continue
        handed = hand_over_ring_point(load.value, r=r) if load.kind == "point" or spread <= 0 else None
        if handed is None:
            handed = hand_over_ring_footing(load.value, r=r, L=spread)
            implied.append(_implied(name, load, r, spread))
        level = load.level if load.level is not None else wall.level["ground"] or 0.0
        inner, outer = float(np.min(cut.x_of(load.points))), float(np.max(cut.x_of(load.points)))
        at: Curve = ((r, level),) if handed.section.unit == "kN/m" else ((inner, level), (outer, level))
        rows.append(
            SectionLoad(
                id=name,
                kind=load.kind,
                direction="down",
                at=at,
                real=LoadValue(value=load.value, unit=UNITS[load.kind]),
                section=handed.section,
                alternatives=handed.alternatives,
                sources=load.sources,
            )
        )
    return tuple(rows), tuple(implied)


def _implied(name: str, load: Load, r: float, length: float) -> Implied:
    ratio = ring_over_footing(r, length)
    return Implied(
        about=name,
        quantity="load",
        real=load.value,
        implied=None if load.value is None else load.value * ratio,
        ratio=ratio,
        grade=grade(ratio),  # type: ignore[arg-type]
        do_in_inputs=f"the load becomes a ring 2 pi {r:.2f} m long: run the full ring and the mean or nothing",
        read_outputs="sway and ovalling from one side are in neither run; bound them apart",
    )
