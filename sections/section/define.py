"""The definition of one section: the site cut by a vertical plane, smeared, staged, balanced and accounted for."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from ingest.members import Material
from ingest.model import Site
from ingest.trail import Assumption, Finding, NotAssessed
from sections.definition import (
    Ground,
    RingAxis,
    SectionDefinition,
    SectionMaterial,
    SectionStage,
    SupportLoss,
    Water,
)
from sections.member import SectionMember
from sections.proposal import Band, Represents, SectionWall, Verdict
from sections.section.balance import balance_section, list_actions
from sections.section.bearing_piles import bearing_members
from sections.section.cut import Cut, crossings
from sections.section.frame import borehole_distance, local_point, mirrors, model_extent, receptors_met, world_point
from sections.section.ground import layers_of_cut, soil_material, surface_line, water_lines
from sections.section.implied import imply
from sections.section.loads import load_rows, load_stages
from sections.section.parts import SectionParts
from sections.section.plates import slab_parts
from sections.section.ring import ring_parts
from sections.section.stages import DigProfile, Prop, dig_profile, plan_stages
from sections.section.supports import support_members
from sections.section.walls import wall_member


@dataclass(frozen=True, kw_only=True)
class Judged:
    """What the rest of the proposal says of a section: verdicts of its walls, bands, stretches, score."""

    id: str
    walls: tuple[SectionWall, ...]
    criteria: tuple[Band, ...]
    verdicts: dict[str, Verdict]
    represents: tuple[Represents, ...]
    score: float | None
    losses: tuple[SupportLoss, ...] = ()
    stands_for: float | None = None
    """Length of wall the section stands for, m."""


def wall_names(cut: Cut) -> dict[str, str]:
    """Member ids of the walls of a cut by side: `<pit>-wall-<n>`, n the stretch between corners and changes."""
    names: dict[str, str] = {}
    for wall in cut.walls:
        stations = wall.found.stations
        pairs = stations.side * (int(stations.run.max()) + 1) + stations.run
        order = list(dict.fromkeys(int(pair) for pair in pairs))
        number = order.index(int(pairs[wall.station])) + 1
        name = f"{stations.pit}-wall-{number}"
        if name in names.values():  # both walls of a cut across one ring
            name = f"{stations.pit}-wall-{len(order) + 1}"
        names[wall.side] = name
    return names


def define_section(site: Site, cut: Cut, judged: Judged) -> SectionDefinition:
    """Build the definition of a section.

    Args:
        site: The site as received, local coordinates.
        cut: The line and its walls: from the retained side of the first wall, or from the axis of a ring.
        judged: Verdicts, bands and stretches worked out elsewhere.

    Returns:
        The definition, per metre run of wall or per radian. What the site does not say stays None and is listed as a
        finding or under `not_assessed`; nothing is put in its place.
    """
    names = wall_names(cut)
    ring = cut.kind == "axisymmetric"
    parts = ring_parts(site, cut, names[cut.walls[0].side]) if ring else _plane(site, cut, names, judged.stands_for)
    extent, extent_notes = model_extent(cut)
    layers, columns, ground_notes = layers_of_cut(site, cut, extent.z[0])
    water = water_lines(site, cut)
    materials = _materials(site, parts.members, extent.z[0])
    stages, staged, gaps = _stages(site, _dig(site, cut), names, parts.props, load_stages(site, cut), water)
    return SectionDefinition(
        id=judged.id,
        kind="axisymmetric" if ring else "plane_strain",
        line=(world_point(site, cut.start), world_point(site, cut.end)),
        represents=judged.represents,
        verdicts=judged.verdicts,
        walls=judged.walls,
        score=judged.score,
        half=mirrors(site, cut, parts.members, parts.loads),
        axis=RingAxis(point=world_point(site, cut.start), r_of_wall=cut.walls[0].x) if ring else None,
        extent=extent,
        materials=materials,
        ground=Ground(
            surface=surface_line(cut), layers=layers, water=water, nearest_borehole=borehole_distance(site, cut)
        ),
        members=parts.members,
        loads=parts.loads,
        stages=stages,
        criteria=judged.criteria,
        balance=balance_section(cut, parts.members, columns, materials, parts.loads, site.water_retained),
        implied=parts.implied,
        actions_without_twin=(*list_actions(cut, parts.members), *parts.actions),
        losses=tuple(loss for loss in judged.losses if loss.member in {m.id for m in parts.members})[:3],
        receptors=receptors_met(site, cut),
        assumptions=(*parts.assumptions, *staged),
        findings=(*parts.findings, *extent_notes, *ground_notes, *gaps),
        not_assessed=_not_assessed(site),
    )


def _plane(site: Site, cut: Cut, names: dict[str, str], stands_for: float | None) -> SectionParts:
    made = [wall_member(site, wall, names[wall.side]) for wall in cut.walls]
    supports, props, refused = support_members(site, cut, names)
    slabs = slab_parts(site, cut, names)
    piles, pile_notes = bearing_members(site, cut)
    loads, load_notes = load_rows(site, cut, stands_for)
    members = (*(member for member, _ in made), *supports, *slabs.members, *piles)
    return SectionParts(
        members=members,
        props=(*props, *slabs.props),
        loads=loads,
        implied=imply(members, loads),
        actions=slabs.actions,
        assumptions=tuple(a for _, (taken, _) in made for a in taken),
        findings=(*(f for _, (_, seen) in made for f in seen), *refused, *slabs.findings, *pile_notes, *load_notes),
    )


def _materials(site: Site, members: Sequence[SectionMember], base: float) -> dict[str, SectionMaterial]:
    used = {member.material for member in members if member.material}
    materials = {m.id: _structural(m) for m in site.materials if m.id in used}
    return materials | {stratum.name: soil_material(stratum, base) for stratum in site.strata}


def _structural(material: Material) -> SectionMaterial:
    E = None if material.E is None else ((0.0, material.E),)
    given = {"unit_weight": material.unit_weight, "E": E}
    return SectionMaterial(
        kind=material.kind,
        unit_weight=material.unit_weight,
        E=E,
        standing={name: _standing(name, value, material.basis) for name, value in given.items()},
    )


def _standing(name: str, value: object, basis: str) -> Literal["given", "assumed", "missing"]:
    """A modulus worked out from a class is not one that was given."""
    if value is None:
        return "missing"
    return "assumed" if name == "E" and basis not in ("", "brief") else "given"


def _dig(site: Site, cut: Cut) -> DigProfile | None:
    """Final dig profile: the floor at the walls all over, deeper floors where the cut passes their outline."""
    inside = cut.pit_interval()
    grounds = [wall.level["ground"] for wall in cut.walls]
    floors = [wall.level["floor"] for wall in cut.walls]
    ground = max((level for level in grounds if level is not None), default=None)
    at_walls = [level for level in floors if level is not None]
    if ground is None or not at_walls:
        return None
    middle = inside[0] + (inside[1] - inside[0]) / 2
    spans: list[tuple[tuple[tuple[float, float], ...], float]] = []
    if len(cut.walls) == 2 and None not in floors:
        spans = [(((inside[0], middle),), floors[0] or 0.0), (((middle, inside[1]),), floors[1] or 0.0)]
    else:
        spans = [((inside,), max(at_walls))]
    for floor in cut.walls[0].found.pit.floors:
        if floor.dig_level is not None and floor.outline:
            spans.append((crossings(cut, [local_point(site, point) for point in floor.outline]), floor.dig_level))
    return dig_profile(inside, spans, ground)


def _stages(
    site: Site,
    dig: DigProfile | None,
    names: dict[str, str],
    props: Sequence[Prop],
    loads: dict[str, str | None],
    water: Sequence[Water],
) -> tuple[tuple[SectionStage, ...], tuple[Assumption, ...], tuple[Finding, ...]]:
    if dig is None or not dig.steps:
        finding = Finding(
            id="stages",
            code="dig_level_missing",
            severity="check",
            where="stages",
            text="No stages: the ground or dig level at the wall is not given",
        )
        return (), (), (finding,)
    return plan_stages(site, dig, tuple(names.values()), props, loads, water)


def _not_assessed(site: Site) -> tuple[NotAssessed, ...]:
    what = [
        ("overall stability and deep sliding", "no computation of it", "check it apart from this section"),
        ("installation and dewatering movements", "no computation of them", "add them from experience"),
        ("neighbouring works and services", "sequence and condition are not in the files", "ask their owners"),
    ]
    if site.water_retained is None:
        what.append(
            ("water pressure and base stability against flow", "no water level given", "[levels] water_retained")
        )
    return tuple(NotAssessed(what=a, why=b, what_to_do=c) for a, b, c in what)
