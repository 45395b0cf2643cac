"""Slabs that the cut passes through: struts of the permanent works where they reach a wall."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from ingest.members import Plate, Point
from ingest.model import Site
from ingest.trail import Finding
from sections.definition import Action
from sections.member import XZ, End, PerMetre, RealMember, SectionMember
from sections.section.cut import Cut, CutWall, crossings
from sections.section.stages import Prop
from sections.smearing.support_rows import Smeared
from sections.smearing.wall_rows import smear_slab_strip

REACHES = 1.0
"""A slab edge this near the wall axis bears on the wall, and an opening this near touches it, m (judgement)."""
SLIVER = 0.1
"""A stretch of slab shorter than this is none, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Strip:
    """A stretch of slab along the cut; `cut_off` says for either end whether an opening ends it."""

    x: tuple[float, float]
    cut_off: tuple[bool, bool]


@dataclass(frozen=True, kw_only=True)
class SlabParts:
    """What the slabs put into a section."""

    members: tuple[SectionMember, ...]
    props: tuple[Prop, ...]
    findings: tuple[Finding, ...]
    actions: tuple[Action, ...]


def slab_parts(site: Site, cut: Cut, walls: Mapping[str, str]) -> SlabParts:
    """Make a member of each stretch of slab in the pit that the cut passes through.

    An opening that touches the wall leaves the slab without an end there: it gives no support at that cut, and the
    edge beam past the opening is an action that the section cannot show.
    """
    members: list[SectionMember] = []
    props: list[Prop] = []
    findings: list[Finding] = []
    actions: list[Action] = []
    slabs = [plate for plate in site.plates if plate.role == "slab"]
    for plate in sorted(slabs, key=lambda p: (-(p.underside or p.top or 0.0), p.outline)):
        slab = _name(plate, cut)
        for part, strip in enumerate(strips_of(plate, cut)):
            name = slab + (f"-{part + 1}" if part else "")
            member = _member(site, cut, plate, strip, name, walls)
            if member is None:
                findings.append(
                    _finding(name, "level_missing", f"The level of {name} is not given: not in the section")
                )
                continue
            members.append(member)
            names = frozenset(n for n in (plate.layer, plate.name, name) if n)
            props.append(Prop(id=name, level=member.points[0][1], preload=None, names=names, permanent=True))
            if member.section.EA_kN_per_m is None:  # type: ignore[union-attr]
                text = f"The modulus or thickness of {name} is not given: its stiffness is not in the section"
                findings.append(_finding(name, "slab_input_missing", text))
        actions += [_edge_beam(slab, a, wall) for wall, a in _openings_at_walls(plate, cut)]
    return SlabParts(members=tuple(members), props=tuple(props), findings=tuple(findings), actions=tuple(actions))


def _name(plate: Plate, cut: Cut) -> str:
    """The id by which the proposal knows a slab; one of its own for a slab that is in no pit of it."""
    pit, sources = cut.walls[0].found.pit, set(plate.sources)
    listed = [member.id for member in pit.members if member.role == "slab" and sources & set(member.sources)]
    return listed[0] if listed else f"{pit.id}-slab-{plate.id}"


def strips_of(plate: Plate, cut: Cut) -> list[Strip]:
    """Stretches of x where there is slab: its outline less its openings, inside the pit or reaching its walls.

    Slab between a wall and an opening that touches it is left out: it holds nothing.
    """
    inside = cut.pit_interval()
    spans = [(max(a, inside[0]), min(b, inside[1])) for a, b in crossings(cut, plate.outline)]
    strips = [Strip(x=span, cut_off=(False, False)) for span in spans]
    for hole in plate.holes:
        for a, b in crossings(cut, hole):
            strips = [piece for strip in strips for piece in _without(strip, a, b)]
    kept = [strip for strip in strips if strip.x[1] - strip.x[0] > SLIVER]
    return [strip for strip in kept if not any(strip.cut_off) or strip.x[1] - strip.x[0] > REACHES]


def _without(strip: Strip, a: float, b: float) -> list[Strip]:
    """A strip less the opening from a to b."""
    x1, x2 = strip.x
    if b <= x1 or a >= x2:
        return [strip]
    left = Strip(x=(x1, a), cut_off=(strip.cut_off[0], True))
    right = Strip(x=(b, x2), cut_off=(True, strip.cut_off[1]))
    return [piece for piece in (left, right) if piece.x[1] > piece.x[0]]


def _openings_at_walls(plate: Plate, cut: Cut) -> list[tuple[CutWall, float]]:
    """Walls that an opening of the slab touches at the cut, with the length of the opening along the wall, m."""
    found = []
    for hole in plate.holes:
        for span in crossings(cut, hole):
            near = [wall for wall in cut.walls if min(abs(x - wall.x) for x in span) <= REACHES]
            found += [(wall, _along(hole, cut)) for wall in near]
    return found


def _along(hole: tuple[Point, ...], cut: Cut) -> float:
    return float(np.ptp(cut.y_of(hole)))


def _edge_beam(name: str, length: float, wall: CutWall) -> Action:
    """Beam fixed at both ends under an even line load: M = w a^2/12 (statics)."""
    text = (
        f"edge beam of {name} past the opening at the wall, {length:.2f} m: {length**2 / 12:.3f} m2 times the line load"
    )
    return Action(name=text, size=None, unit="kNm", at=f"chainage {wall.at:.2f}")


def _finding(where: str, code: str, text: str) -> Finding:
    return Finding(id=f"{where}-{code}", code=code, severity="check", where=where, text=text)


def _smeared(site: Site, plate: Plate, length: float) -> tuple[Smeared, str | None]:
    thickness = plate.top - plate.underside if plate.top is not None and plate.underside is not None else None
    material = next((m for m in site.materials if m.id == plate.material), None)
    if thickness and thickness > 0 and material and material.E:
        smeared = smear_slab_strip(
            E=material.E, thickness=thickness, unit_weight=material.unit_weight, real_length=length
        )
        return smeared, material.id
    real = RealMember(thickness=thickness, length=length)
    return Smeared(real=real, section=PerMetre(), smear=(), back=()), material.id if material else None


def _member(
    site: Site, cut: Cut, plate: Plate, strip: Strip, name: str, walls: Mapping[str, str]
) -> SectionMember | None:
    levels = [level for level in (plate.top, plate.underside) if level is not None]
    if not levels:
        return None
    z = sum(levels) / len(levels)
    length = strip.x[1] - strip.x[0]
    smeared, material = _smeared(site, plate, length)
    points = ((strip.x[0], z), (strip.x[1], z))
    ends = tuple(_end(cut, point, walls, off) for point, off in zip(points, strip.cut_off, strict=True))
    section = smeared.section
    if section.EA_kN_per_m is not None and all(end.joint == "pinned" for end in ends):
        section = replace(section, k_effective_kN_per_m_per_m=section.EA_kN_per_m / length)
    return SectionMember(
        id=name,
        role="slab",
        side="none",
        material=material,
        form="bar",
        points=points,
        ends=ends,
        real=smeared.real,
        section=section,
        smear=smeared.smear,
        back=smeared.back,
        sources=plate.sources,
    )


def _end(cut: Cut, point: XZ, walls: Mapping[str, str], cut_off: bool) -> End:
    """What an end of a strip stands on; at an opening, on nothing."""
    for wall in () if cut_off else cut.walls:
        if abs(point[0] - wall.x) <= REACHES:
            return End(to=walls[wall.side], at=point, joint="pinned")
    return End(to="ground", at=point, joint="free")
