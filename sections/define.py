"""The definition of one section: the site cut by a vertical plane, smeared, staged, balanced and accounted for."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Material, Site
from ingest.trail import Assumption, Finding, NotAssessed
from sections.cut import Cut, crossings
from sections.definition import (
    Extent,
    Ground,
    Half,
    SectionDefinition,
    SectionMaterial,
    SectionMember,
    SectionReceptor,
    SectionStage,
    Water,
)
from sections.ground import nearest_borehole
from sections.implied import imply
from sections.model import Band, Represents, SectionWall, Verdict
from sections.section_balance import balance_section, list_actions
from sections.section_bearing import bearing_members
from sections.section_ground import layers_of_cut, soil_material, surface_line, water_lines
from sections.section_loads import load_rows, load_stages
from sections.section_plates import slab_members
from sections.section_stages import DigProfile, Prop, dig_profile, plan_stages
from sections.section_supports import support_members
from sections.section_walls import wall_member

BELOW_TOE = 2.0
"""Model below the wall toe, in excavated depths (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Judged:
    """What the rest of the proposal says of a section: verdicts of its walls, bands, stretches, score."""

    id: str
    walls: tuple[SectionWall, ...]
    criteria: tuple[Band, ...]
    verdicts: dict[str, Verdict]
    represents: tuple[Represents, ...]
    score: float | None
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
    """Build the definition of a plane-strain section.

    Args:
        site: The site as received, local coordinates.
        cut: The line and its walls, from the retained side of the first wall.
        judged: Verdicts, bands and stretches worked out elsewhere.

    Returns:
        The definition, per metre run of wall. What the site does not say stays None and is listed as a finding or under
        `not_assessed`; nothing is put in its place.
    """
    names = wall_names(cut)
    assumptions: list[Assumption] = []
    findings: list[Finding] = []
    walls: list[SectionMember] = []
    for wall in cut.walls:
        member, (taken, seen) = wall_member(site, wall, names[wall.side])
        walls.append(member)
        assumptions += taken
        findings += seen
    supports, props, refused = support_members(site, cut, names)
    slabs, slab_props = slab_members(site, cut, names)
    piles, pile_notes = bearing_members(site, cut)
    members = (*walls, *supports, *slabs, *piles)
    loads, load_notes = load_rows(site, cut, judged.stands_for)
    extent, extent_notes = model_extent(cut)
    layers, columns, ground_notes = layers_of_cut(site, cut, extent.z[0])
    water = water_lines(site, cut)
    materials = _materials(site, members, extent.z[0])
    dig = _dig(site, cut)
    stages, staged, gaps = _stages(site, dig, names, (*props, *slab_props), load_stages(site, cut), water)
    findings += [*refused, *pile_notes, *load_notes, *extent_notes, *ground_notes, *gaps]
    return SectionDefinition(
        id=judged.id,
        kind="plane_strain",
        line=(_world(site, cut.start), _world(site, cut.end)),
        represents=judged.represents,
        verdicts=judged.verdicts,
        walls=judged.walls,
        score=judged.score,
        half=_half(cut, members, loads),
        axis=None,
        extent=extent,
        materials=materials,
        ground=Ground(
            surface=surface_line(cut), layers=layers, water=water, nearest_borehole=_nearest_borehole(site, cut)
        ),
        members=members,
        loads=loads,
        stages=stages,
        criteria=judged.criteria,
        balance=balance_section(cut, members, columns, materials, site.water_retained),
        implied=imply(members, loads),
        actions_without_twin=list_actions(cut, members),
        receptors=_receptors(site, cut),
        assumptions=(*assumptions, *staged),
        findings=tuple(findings),
        not_assessed=_not_assessed(site),
    )


def model_extent(cut: Cut) -> tuple[Extent, tuple[Finding, ...]]:
    """Size of the model: the cut's own length, the surface, and BELOW_TOE excavated depths below the lowest toe."""
    levels = [wall.level for wall in cut.walls]
    ground = [level["ground"] for level in levels if level["ground"] is not None]
    low = [level["toe"] if level["toe"] is not None else level["floor"] for level in levels]
    depth = [g["ground"] - g["floor"] for g in levels if g["ground"] is not None and g["floor"] is not None]
    known_low = [level for level in low if level is not None]
    top = max(ground, default=0.0)
    reach = BELOW_TOE * max(depth, default=0.0)
    base = (min(known_low) if known_low else top) - reach
    findings = ()
    if not known_low or not ground or not depth:
        findings = (
            Finding(
                id="extent",
                code="level_missing",
                severity="check",
                where="extent",
                text="A ground, dig or toe level is not given: the size of the model is a guess",
            ),
        )
    basis = (
        "3 excavated depths behind each wall, 2 inside the pit where no far wall is in the section, 2 below the lowest "
        "known toe or dig level (judgement)"
    )
    right = "roller"
    return Extent(x=(0.0, cut.length), z=(base, top), left="roller", right=right, base="fixed", basis=basis), findings


def _materials(site: Site, members: Sequence[SectionMember], base: float) -> dict[str, SectionMaterial]:
    used = {member.material for member in members if member.material}
    materials = {m.id: _structural(m) for m in site.materials if m.id in used}
    return materials | {stratum.name: soil_material(stratum, base) for stratum in site.strata}


def _structural(material: Material) -> SectionMaterial:
    values = {"unit_weight": material.unit_weight, "E": None if material.E is None else ((0.0, material.E),)}
    standing = {name: "missing" if value is None else "given" for name, value in values.items()}
    return SectionMaterial(
        kind=material.kind,
        unit_weight=material.unit_weight,
        E=values["E"],
        standing=standing,  # type: ignore[arg-type]
    )


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
            spans.append((crossings(cut, [_local(site, point) for point in floor.outline]), floor.dig_level))
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
    return plan_stages(site, dig, tuple(names.values()), props, loads, [line.id for line in water])


def _half(cut: Cut, members: Sequence[SectionMember], loads: Sequence[object]) -> Half:
    """Whether the section mirrors about its middle: walls, levels, supports alike and no load on one side only."""
    if len(cut.walls) != 2:
        return Half(is_half=False, at_x=None, basis="one wall only")
    a, b = cut.walls
    runs = [w.found.pit.runs[int(w.found.stations.run[w.station])].wall for w in (a, b)]
    levels = all(a.level[name] == b.level[name] for name in a.level)
    alike = runs[0].kind == runs[1].kind and runs[0].diameter == runs[1].diameter and runs[0].centres == runs[1].centres
    one_sided = [member.id for member in members if member.form == "bar" and member.side in ("left", "right")]
    if levels and alike and not loads and not one_sided:
        return Half(is_half=False, at_x=(a.x + b.x) / 2, basis="mirrors about its middle: half of it may be analysed")
    return Half(is_half=False, at_x=None, basis="does not mirror: walls, levels, supports or loads differ")


def _nearest_borehole(site: Site, cut: Cut) -> float | None:
    if not site.boreholes:
        return None
    points = [cut.point(x) for x in np.linspace(0.0, cut.length, 21)]
    return float(np.min(nearest_borehole(site, points)))


def _receptors(site: Site, cut: Cut) -> tuple[SectionReceptor, ...]:
    """Receptors the cut passes through, with their distance to the nearest wall of the section."""
    found = []
    for number, receptor in enumerate(site.receptors, start=1):
        spans = crossings(cut, receptor.points) if len(receptor.points) > 2 else ()
        for a, b in spans:
            level = receptor.level if receptor.level is not None else 0.0
            gap = min(min(abs(a - wall.x), abs(b - wall.x)) for wall in cut.walls)
            line = ((a, level), (b, level))
            found.append(
                SectionReceptor(id=receptor.id or f"receptor-{number}", kind=receptor.kind, at=line, distance=gap)
            )
    return tuple(found)


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


def _world(site: Site, point: tuple[float, float]) -> tuple[float, float]:
    turn = np.radians(site.frame.rotation_deg)
    c, s = np.cos(turn), np.sin(turn)
    x, y = point
    return float(site.frame.offset[0] + c * x - s * y), float(site.frame.offset[1] + s * x + c * y)


def _local(site: Site, point: tuple[float, float]) -> tuple[float, float]:
    turn = np.radians(site.frame.rotation_deg)
    c, s = np.cos(turn), np.sin(turn)
    x, y = point[0] - site.frame.offset[0], point[1] - site.frame.offset[1]
    return float(c * x + s * y), float(-s * x + c * y)
