"""One section as DXF: ground with hatches, members, loads, water, dig levels, levels and dimensions."""

from __future__ import annotations

from math import atan2, degrees, hypot
from typing import Any

from export.drawing_style import LETTERS, layer, polyline, words
from export.report.hatches import hatch_of
from export.report.section_marks import levels_of
from export.report.section_members import THIN, member_about, thickness
from export.report.words import KIND_NAMES, figure, level
from export.section_json import SECTION_NOTICE
from ingest.members import Point
from sections.definition import SectionDefinition, SectionLoad
from sections.member import SectionMember

HatchLine = tuple[float, tuple[float, float], tuple[float, float], list[float]]
HATCHES: dict[str, list[HatchLine]] = {
    "clay": [(0, (0, 0), (0.7, 0.6), [0.9, -0.5])],
    "silt": [(90, (0, 0), (0.5, 0.7), [0.4, -0.6])],
    "sand": [(0, (0, 0), (0.6, 0.5), [0.05, -1.15])],
    "gravel": [(60, (0, 0), (0.5, 0.9), [0.35, -0.8]), (120, (0.3, 0), (0.5, 0.9), [0.35, -0.8])],
    "made": [(45, (0, 0), (0.9, 0.9), [0.4, -0.9]), (135, (0.28, 0), (0.9, 0.9), [0.4, -0.9])],
    "peat": [(20, (0, 0), (0.6, 0.7), [0.3, -0.6]), (160, (0.4, 0), (0.6, 0.7), [0.3, -0.6])],
    "rock": [(0, (0, 0), (0, 1.0), []), (90, (0, 0), (1.0, 1.2), [1.0, -1.0])],
    "chalk": [(0, (0, 0), (0, 0.8), []), (90, (0, 0), (0.8, 0.7), [0.8, -0.8])],
}


def draw_section(drawing: Any, definition: SectionDefinition) -> None:
    """Draw one section into modelspace: x along the cut, y = level, metres."""
    space = drawing.modelspace()
    _ground(space, definition)
    for stage in definition.stages:
        for ring in stage.dig:
            polyline(space, ring, "dig", True)
            base = min(ring, key=lambda p: (p[1], p[0]))
            words(
                space, (base[0] + 0.3, base[1] - 0.4), f"stage {stage.id}: {level(base[1])}", "dig_text", LETTERS * 0.8
            )
    for one in definition.members:
        _member(space, one)
    for load in definition.loads:
        _load(space, load)
    _levels(space, definition)
    _dimensions(space, definition)
    (x0, x1), (z0, z1) = definition.extent.x, definition.extent.z
    polyline(space, [(x0, z0), (x1, z0), (x1, z1), (x0, z1)], "frame", True)
    title = f"Section {definition.id}, {KIND_NAMES[definition.kind]}"
    words(space, (x0, z0 - 1.0), title, "notes", LETTERS * 1.6)
    words(space, (x0, z0 - 1.7), SECTION_NOTICE, "notes")


def _ground(space: Any, definition: SectionDefinition) -> None:
    polyline(space, definition.ground.surface, "ground")
    for one in definition.ground.layers:
        rings = [ring for ring in (*one.outlines, *one.holes) if len(ring) > 2]
        for ring in rings:
            polyline(space, ring, "ground", True)
        kind = hatch_of(one.material) or hatch_of(one.id)
        if kind and rings:
            hatch = space.add_hatch(dxfattribs=layer("ground_hatch"))
            hatch.set_pattern_fill(f"CW-{kind.upper()}", definition=[list(line) for line in HATCHES[kind]])
            for ring in rings:
                hatch.paths.add_polyline_path([(float(x), float(z)) for x, z in ring], is_closed=True)
        if rings:
            x, z = min(x for ring in rings for x, _ in ring), max(z for ring in rings for _, z in ring)
            words(space, (x + 0.4, z - 0.6), one.material or one.id, "ground_text")
    for water in definition.ground.water:
        if len(water.line) > 1 and not water.before_work:
            polyline(space, water.line, "water")


def _member(space: Any, one: SectionMember) -> None:
    if not one.points:
        return
    key = "wall" if one.role == "wall" else "supports"
    if len(one.points) == 1:
        space.add_circle(one.points[0], (thickness(one) or THIN) / 2, dxfattribs=layer(key))
    elif len(one.points) > 2:
        polyline(space, one.points, key, one.form == "block")
    else:
        polyline(space, one.points, key)
        size = thickness(one)
        if size:
            polyline(space, _body(one.points[0], one.points[1], size), key, True)
    if one.role == "anchor":
        _bond(space, one)
    (ax, az), (bx, bz) = one.points[0], one.points[-1]
    turn = degrees(atan2(bz - az, bx - ax))
    turn = turn - 180 if turn > 90 else turn + 180 if turn <= -90 else turn
    middle = (ax + 0.4 * (bx - ax), az + 0.4 * (bz - az) + 0.5)
    words(space, middle, member_about(one), f"{key}_text", LETTERS * 0.8, "MIDDLE_CENTER", turn)


def _body(a: Point, b: Point, size: float) -> list[Point]:
    long = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    nx, nz = -(b[1] - a[1]) / long * size / 2, (b[0] - a[0]) / long * size / 2
    return [(a[0] + nx, a[1] + nz), (b[0] + nx, b[1] + nz), (b[0] - nx, b[1] - nz), (a[0] - nx, a[1] - nz)]


def _bond(space: Any, one: SectionMember) -> None:
    free, bond = one.real.free_length, one.real.bond_length
    if free is None or bond is None or free + bond <= 0:
        return
    (ax, az), (bx, bz) = one.points[0], one.points[-1]
    share = free / (free + bond)
    start = (ax + share * (bx - ax), az + share * (bz - az))
    polyline(space, _body(start, (bx, bz), one.real.bond_diameter or 2 * THIN), "supports", True)


def _load(space: Any, load: SectionLoad) -> None:
    if not load.at:
        return
    (ax, az), (bx, _) = load.at[0], load.at[-1]
    low, high = min(ax, bx), max(ax, bx)
    pieces = max(int((high - low) / 0.5), 1) if high > low else 0
    for x in [low + n * (high - low) / pieces for n in range(pieces + 1)] if pieces else [low]:
        space.add_line((x, az + 1.0), (x, az), dxfattribs=layer("loads"))
        polyline(space, [(x - 0.08, az + 0.2), (x, az), (x + 0.08, az + 0.2)], "loads")
    said = "value not given" if load.section.value is None else figure(load.section.value, load.section.unit, 4)
    words(space, ((low + high) / 2, az + 1.3), f"{load.id}: {said}", "loads_text", LETTERS * 0.8, "MIDDLE_CENTER")


def _levels(space: Any, definition: SectionDefinition) -> None:
    x = definition.extent.x[0]
    last = 1e9
    for z, what in levels_of(definition):
        at = min(z, last - 0.45)
        last = at
        space.add_line((x - 1.0, z), (x, z), dxfattribs=layer("frame"))
        words(space, (x - 1.1, at), f"{level(z)} {what}", "levels_text", LETTERS * 0.8, "MIDDLE_RIGHT")


def _dimensions(space: Any, definition: SectionDefinition) -> None:
    walls = sorted({one.points[0][0] for one in definition.members if one.role == "wall" and one.points})
    marks = sorted({definition.extent.x[0], *walls, definition.extent.x[1]})
    top = max([definition.extent.z[1], *(z for _, z in definition.ground.surface)])
    for a, b in zip(marks, marks[1:], strict=False):
        if b - a > 0.5:
            dimension = space.add_linear_dim(
                base=(a, top + 3.0), p1=(a, top), p2=(b, top), dimstyle="CW-100", dxfattribs=layer("dimensions")
            )
            dimension.render()
