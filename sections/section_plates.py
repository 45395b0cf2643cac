"""Slabs that the cut passes through: struts of the permanent works where they reach a wall."""

from __future__ import annotations

from collections.abc import Mapping

from ingest.model import Plate, Site
from sections.cut import Cut, Interval, crossings
from sections.definition import End, PerMetre, RealMember, SectionMember
from sections.section_stages import Prop
from sections.smear_rows import Smeared
from sections.wall_rows import smear_slab_strip

REACHES = 1.0
"""A slab edge this near the wall axis bears on the wall, m (judgement)."""


def slab_members(site: Site, cut: Cut, walls: Mapping[str, str]) -> tuple[tuple[SectionMember, ...], tuple[Prop, ...]]:
    """Make a member of each stretch of slab in the pit that the cut passes through.

    An opening that touches the wall leaves the slab without an end there: it gives no support at that cut.
    """
    members, props = [], []
    inside = cut.pit_interval()
    slabs = [plate for plate in site.plates if plate.role == "slab"]
    for number, plate in enumerate(sorted(slabs, key=lambda p: (-(p.underside or p.top or 0.0), p.outline)), start=1):
        for part, span in enumerate(_spans(plate, cut, inside)):
            name = f"{cut.walls[0].found.stations.pit}-slab-{number}" + (f"-{part + 1}" if part else "")
            member = _member(site, cut, plate, span, name, walls)
            if member is not None:
                members.append(member)
                names = frozenset(n for n in (plate.layer, plate.name, name) if n)
                props.append(Prop(id=name, level=member.points[0][1], preload=None, names=names, permanent=True))
    return tuple(members), tuple(props)


def _spans(plate: Plate, cut: Cut, inside: Interval) -> list[Interval]:
    """Stretches of x where there is slab: its outline less its openings, inside the pit or reaching its walls."""
    spans = [(max(a, inside[0]), min(b, inside[1])) for a, b in crossings(cut, plate.outline)]
    for hole in plate.holes:
        for a, b in crossings(cut, hole):
            spans = [piece for x1, x2 in spans for piece in ((x1, min(x2, a)), (max(x1, b), x2)) if piece[1] > piece[0]]
    return [span for span in spans if span[1] - span[0] > 0.1]


def _member(
    site: Site, cut: Cut, plate: Plate, span: Interval, name: str, walls: Mapping[str, str]
) -> SectionMember | None:
    levels = [level for level in (plate.top, plate.underside) if level is not None]
    if not levels:
        return None
    z = sum(levels) / len(levels)
    thickness = plate.top - plate.underside if plate.top is not None and plate.underside is not None else None
    material = next((m for m in site.materials if m.id == plate.material), None)
    smeared = Smeared(
        real=RealMember(thickness=thickness, length=span[1] - span[0]), section=PerMetre(), smear=(), back=()
    )
    if thickness and thickness > 0 and material and material.E:
        smeared = smear_slab_strip(
            E=material.E, thickness=thickness, unit_weight=material.unit_weight, real_length=span[1] - span[0]
        )
    points = ((span[0], z), (span[1], z))
    return SectionMember(
        id=name,
        role="slab",
        side="none",
        material=plate.material if material else None,
        form="bar",
        points=points,
        ends=tuple(_end(cut, point, walls) for point in points),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=plate.sources,
    )


def _end(cut: Cut, point: tuple[float, float], walls: Mapping[str, str]) -> End:
    for wall in cut.walls:
        if abs(point[0] - wall.x) <= REACHES:
            return End(to=walls[wall.side], at=point, joint="pinned")
    return End(to="ground", at=point, joint="free")
