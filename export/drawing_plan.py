"""The plan overlay as DXF: perimeter by verdict, cuts, what stands for what, zones, corners, supports, loads."""

from __future__ import annotations

from math import atan2, degrees, hypot
from typing import Any

from export.drawing_style import LETTERS, layer, polyline, words
from export.report.along import Perimeter, stations_of, stretches, worst_words
from export.report.plan_site import load_words, member_words, to_world
from export.report.words import fixed
from ingest.members import Point
from ingest.model import NOTICE, Site
from sections.model import Pit
from sections.proposal import ChosenSection, Proposal

VERDICT_OFF, STANDS_OFF = 0.6, 1.1


def draw_plan(drawing: Any, proposal: Proposal, site: Site | None, note: str = "") -> None:
    """Draw the whole plan into modelspace, world metres; `note` is lettered below the caution."""
    space = drawing.modelspace()
    for pit in proposal.pits:
        polyline(space, pit.perimeter, "perimeter", pit.closed)
        _verdicts(space, pit, proposal)
        _stands(space, pit, proposal)
        _zones(space, pit)
        _carried(space, pit)
    _supports(space, proposal, site)
    for section in proposal.sections:
        _cut(space, section)
    corner = min((p for pit in proposal.pits for p in pit.perimeter), key=lambda p: (p[1], p[0]), default=(0.0, 0.0))
    words(space, (corner[0], corner[1] - 4.0), NOTICE, "notes")
    words(space, (corner[0], corner[1] - 4.5), note, "notes")


def _verdicts(space: Any, pit: Pit, proposal: Proposal) -> None:
    table = stations_of(proposal, pit)
    line = Perimeter.of(pit)
    for part in stretches(table.chainage, worst_words(table, proposal.limits.governing), pit.length):
        polyline(space, line.part(part.start, part.to, VERDICT_OFF), part.value or "not_assessed")


def _stands(space: Any, pit: Pit, proposal: Proposal) -> None:
    line = Perimeter.of(pit)
    for section in proposal.sections:
        for one in section.represents:
            if one.pit == pit.id:
                polyline(space, line.part(one.start, one.to, STANDS_OFF), "stands")
                state = "provisional" if one.provisional else "shown"
                at = line.square_off(line.straight_middle(one.start, one.to), STANDS_OFF + 0.4)
                words(space, at, f"{section.id} {state}", "stands_text", align="MIDDLE_CENTER")
    for gap in proposal.unrepresented:
        if gap.pit == pit.id:
            polyline(space, line.part(gap.start, gap.to, STANDS_OFF), "not_assessed")


def _zones(space: Any, pit: Pit) -> None:
    line = Perimeter.of(pit)
    for zone in pit.zones:
        space.add_line(line.square_off(zone.start, -0.8), line.square_off(zone.start, 1.6), dxfattribs=layer("zones"))
        at = line.square_off(line.straight_middle(zone.start, zone.to), -1.0)
        words(space, at, zone.id, "zones_text", align="MIDDLE_CENTER")
    for corner in pit.corners:
        angle = f"{fixed(corner.interior_angle, 1)} deg, {corner.kind}, ch {fixed(corner.at, 2)}"
        words(space, line.square_off(corner.at, 1.9), angle, "corner_text", LETTERS * 0.8)


def _carried(space: Any, pit: Pit) -> None:
    line = Perimeter.of(pit)
    for row in pit.members:
        if row.along:
            at = line.square_off(line.straight_middle(row.along[0].start, row.along[0].to), -2.2)
            words(space, at, member_words(row), "supports_text", LETTERS * 0.8, "MIDDLE_CENTER")
    for load in pit.loads:
        if len(load.points) > 1:
            polyline(space, load.points, "loads", len(load.points) > 2)
        else:
            space.add_circle(load.points[0], 0.3, dxfattribs=layer("loads"))
        words(space, load.points[0], load_words(load), "loads_text", LETTERS * 0.8)


def _supports(space: Any, proposal: Proposal, site: Site | None) -> None:
    if site is None:
        return
    world = to_world(proposal.frame)
    for one in site.supports:
        space.add_line(world(one.head), world(one.far), dxfattribs=layer("supports"))
    for waler in site.walers:
        polyline(space, [world(point) for point in waler.points], "supports")


def _cut(space: Any, section: ChosenSection) -> None:
    a, b = section.line
    space.add_line(a, b, dxfattribs=layer("cut"))
    size = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    ux, uy = (b[0] - a[0]) / size, (b[1] - a[1]) / size
    turn = degrees(atan2(uy, ux))
    turn = turn - 180 if turn > 90 else turn + 180 if turn <= -90 else turn
    for x, y in (a, b):
        at: Point = (x - 0.5 * uy, y + 0.5 * ux)
        words(space, at, section.id, "cut_text", LETTERS * 2, "MIDDLE_CENTER", turn)
        space.add_line((x, y), (x - 1.2 * uy, y + 1.2 * ux), dxfattribs=layer("cut"))
