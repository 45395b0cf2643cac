"""Members and loads of an axisymmetric section: walls per metre of circumference, all else per radian."""

from __future__ import annotations

from dataclasses import replace

from ingest.members import Material
from ingest.model import Site
from ingest.trail import Assumption, Finding
from sections.member import Curve, End, PerRadian, RealMember, SectionMember
from sections.model import Run
from sections.section.cut import Cut, CutWall
from sections.section.parts import SectionParts
from sections.section.ring_beams import beams_and_slabs
from sections.section.ring_loads import ring_loads
from sections.section.ring_supports import ring_supports
from sections.section.walls import displaced, uncracked
from sections.smearing.ring_wall import SmearedRing, ring_spacing, smear_ring_pile_wall, smear_ring_wall
from sections.smearing.wall_rows import round_pile


def ring_parts(site: Site, cut: Cut, name: str) -> SectionParts:
    """Turn the members and loads round a ring into those of its axisymmetric section.

    Args:
        site: The real members.
        cut: From the axis outwards through its one wall.
        name: Member id of the wall.
    """
    wall = cut.walls[0]
    member, taken, findings = _wall(site, wall, name)
    supports, props, notes = ring_supports(site, cut, wall, name)
    beams, held, told = beams_and_slabs(site, cut, wall, name)
    loads, implied, unsaid = ring_loads(site, cut, wall)
    return SectionParts(
        members=(member, *supports, *beams),
        props=(*props, *held),
        loads=loads,
        implied=implied,
        assumptions=taken,
        findings=(*findings, *notes, *told, *unsaid, *_left_out(site, cut, wall)),
    )


def _left_out(site: Site, cut: Cut, wall: CutWall) -> tuple[Finding, ...]:
    """Bearing piles inside the ring, which this section does not carry."""
    if not any(member.role == "bearing_pile" for member in wall.found.pit.members):
        return ()
    where = wall.found.pit.id
    text = f"The bearing piles inside {where} are not in this section: they stand on no circle that is known"
    return (_finding(where, "bearing_piles_left_out", text),)


def _finding(where: str, code: str, text: str) -> Finding:
    return Finding(id=f"{where}-{code}", code=code, severity="check", where=where, text=text)


def _wall(site: Site, wall: CutWall, name: str) -> tuple[SectionMember, tuple[Assumption, ...], tuple[Finding, ...]]:
    run = wall.found.pit.runs[int(wall.found.stations.run[wall.station])]
    material = next((m for m in site.materials if m.id == run.wall.material), None)
    smeared, text = _smear_wall(run, material, wall.x, wall.found.pit.length)
    findings = (_finding(name, "ring_wall", text),) if text else ()
    taken = (uncracked(name),) if run.wall.EI_factor is None and smeared.smear else ()
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
        section=replace(smeared.section, soil_displaced_m3_per_m2=displaced(smeared.real)),
        smear=smeared.smear,
        back=smeared.back,
        sources=run.wall.sources,
        assumptions=tuple(one.id for one in taken),
    )
    return member, taken, findings


def _smear_wall(run: Run, material: Material | None, radius: float, length: float) -> tuple[SmearedRing, str]:
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
        if wall.structural.count and abs(run.to - run.start - length) < 1e-6:  # along the arc, not the chord
            pile = replace(pile, spacing=ring_spacing(radius, wall.structural.count))
        text = "overlap and modulus of the weaker piles are not given: no hoop stiffness is counted"
        return smear_ring_pile_wall(pile, radius=radius, EI_factor=factor), text if wall.kind == "secant" else ""
    return _bare(RealMember()), f"a {wall.kind} wall of unknown size: its stiffness is not in the section"


def _bare(real: RealMember) -> SmearedRing:
    return SmearedRing(real=real, section=PerRadian(), smear=(), back=())
