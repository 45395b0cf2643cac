"""The frame of a section: size of the model, halving, and what lies along the cut."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

import numpy as np

from ingest.members import Point
from ingest.model import Site
from ingest.trail import Finding
from sections.definition import Extent, Half, SectionLoad, SectionReceptor
from sections.member import SectionMember
from sections.pit.mirror import cut_mirrors
from sections.pit.world import to_local, to_world
from sections.section.cut import Cut, crossings

BELOW_TOE = 2.0
"""Model below the wall toe, in excavated depths (judgement)."""


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
    findings: tuple[Finding, ...] = ()
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
    left: Literal["axis", "roller"] = "axis" if cut.kind == "axisymmetric" else "roller"
    return Extent(x=(0.0, cut.length), z=(base, top), left=left, right="roller", base="fixed", basis=basis), findings


def mirrors(site: Site, cut: Cut, members: Sequence[SectionMember], loads: Sequence[SectionLoad]) -> Half:
    """Whether the section mirrors about its middle, so that half of it may be analysed. It is always written whole."""
    if len(cut.walls) != 2:
        return Half(is_half=False, at_x=None, basis="one wall only")
    first, second = cut.walls
    same, why = cut_mirrors(first.found.stations, first.found.rows, first.station, site.limits)
    one_sided = [member.id for member in members if member.form == "bar" and member.side in ("left", "right")]
    if same and (loads or one_sided):
        same, why = False, f"one side only has {', '.join([*(load.id for load in loads), *one_sided])}"
    if not same:
        return Half(is_half=False, at_x=None, basis=f"does not mirror: {why}")
    at = (first.x + second.x) / 2
    return Half(is_half=False, at_x=at, basis=f"mirrors about x = {at:.2f}: half of it may be analysed; {why}")


def borehole_distance(site: Site, cut: Cut) -> float | None:
    """Least distance from the cut to a borehole, m; None without boreholes."""
    if not site.boreholes:
        return None
    holes = [hole.location[:2] for hole in site.boreholes]
    x = np.clip(cut.x_of(holes), 0.0, cut.length)
    return float(np.min(np.hypot(cut.x_of(holes) - x, cut.y_of(holes))))


def receptors_met(site: Site, cut: Cut) -> tuple[SectionReceptor, ...]:
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


def world_point(site: Site, point: Point) -> Point:
    """World coordinates of a local plan point."""
    x, y = to_world(site.frame, [point])[0]
    return float(x), float(y)


def local_point(site: Site, point: Point) -> Point:
    """Local coordinates of a world plan point."""
    x, y = to_local(site.frame, [point])[0]
    return float(x), float(y)
