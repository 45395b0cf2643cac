"""From the site to the perimeters of its pits: which walls retain, how they run, where chainage starts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np
import shapely

from ingest.members import Point
from ingest.model import Site
from ingest.trail import Finding, Question
from sections.found import PitShape
from sections.model import Arc, Circle, CirclePart
from sections.perimeter.circles import find_circle, find_parts
from sections.perimeter.corners import find_arcs, find_corners, start_outline
from sections.perimeter.open_walls import find_witnesses, oriented
from sections.perimeter.outline import Outline, build_outline
from sections.perimeter.ring_choice import Choice, choose_rings
from sections.perimeter.rings import Trace
from sections.perimeter.run_checks import check_runs
from sections.perimeter.runs import find_runs, stretches_along
from sections.perimeter.sides import Samples, find_sides, sample_way
from sections.perimeter.slab_edge import Shapes, from_slab, numbered_findings
from sections.perimeter.wall_lines import WallLine, gather_lines

CUT_CORNER = 0.3
"""A straight shorter than this between two sides that meet only cuts their corner, m (judgement)."""

Centred = TypeVar("Centred", Arc, Circle, CirclePart)


@dataclass(frozen=True, kw_only=True, eq=False)
class Way:
    """A perimeter on the way to its shape."""

    trace: Trace
    samples: Samples
    outline: Outline


def find_shapes(site: Site) -> Shapes:
    """Find the perimeter of every pit of a site.

    Args:
        site: The site in local coordinates.

    Returns:
        The pits by chainage start from south to north, then west to east; what was seen; what is asked. No pits where
        there is neither a wall nor a slab to go by.
    """
    origin = _origin(site)
    lines, seen, questions = gather_lines(site, origin)
    choice = choose_rings(site, lines, origin) if lines else Choice(traces=())
    if not choice.traces:
        shapes, findings, asked = from_slab(site, (*seen, *choice.findings), find_shapes)
        return shapes, findings, (*questions, *choice.questions, *asked)
    ways, sides_asked = _ways(site, choice.traces, lines, origin)
    starts = _starts(site, ways, origin)
    made = [_shape(site, way, lines, origin, start) for way, start in zip(ways, starts, strict=True)]
    shapes, checked = _numbered(site, made)
    every = [*seen, *choice.findings, *checked]
    return shapes, numbered_findings(every), (*questions, *choice.questions, *sides_asked)


def _origin(site: Site) -> Point:
    """A round point amid the walls: the finder works near zero, whatever the grid."""
    points = [p for piece in site.walls for p in piece.axis] + [pile.centre for pile in site.piles]
    if not points:
        return (0.0, 0.0)
    x, y = np.round(np.median(np.array(points), axis=0))
    return (float(x), float(y))


def _ways(
    site: Site, traces: Sequence[Trace], lines: Sequence[WallLine], origin: Point
) -> tuple[list[Way], list[Question]]:  # fmt: skip
    witnesses = find_witnesses(site, origin)
    ways: list[Way] = []
    asked: list[Question] = []
    for trace in traces:
        turned = trace
        if not trace.closed:
            turned, question = oriented(trace, witnesses, origin)
            if question is not None:
                asked.append(replace(question, id=f"{question.id}-{len(asked) + 1}"))
        samples, sides = find_sides(sample_way(turned, lines))
        outline = build_outline(samples, sides, CUT_CORNER)
        ways.append(Way(trace=turned, samples=samples, outline=outline))
    return ways, asked


def _starts(site: Site, ways: Sequence[Way], origin: Point) -> list[Point | None]:
    """The start that the brief asks for goes to the pit it lies nearest to."""
    starts: list[Point | None] = [None] * len(ways)
    if site.start is not None:
        local = (site.start[0] - origin[0], site.start[1] - origin[1])
        rings = [shapely.LinearRing(w.outline.points) if w.outline.closed else shapely.LineString(w.outline.points)
                 for w in ways]  # fmt: skip
        starts[int(np.argmin(shapely.distance(rings, shapely.Point(local))))] = local
    return starts


def _shape(site: Site, way: Way, lines: Sequence[WallLine], origin: Point, start: Point | None) -> PitShape:
    direction = site.limits.direction
    outline = start_outline(way.outline, direction, -site.frame.rotation_deg, start)
    corners = find_corners(outline, direction)
    circle = find_circle(outline, way.samples, direction)
    parts = find_parts(outline, way.samples, direction) if circle is None else ()
    runs, piles = find_runs(site, outline, stretches_along(site, outline, way.trace, lines), [c.at for c in corners])
    return PitShape(
        id="",
        closed=outline.closed,
        axis=outline.points + origin,
        at=outline.at,
        length=outline.length,
        arcs=tuple(_moved(arc, origin) for arc in find_arcs(outline)),
        corners=tuple(replace(c, point=_shift(c.point, origin)) for c in corners),
        runs=runs,
        circle=None if circle is None else _moved(circle, origin),
        circles=tuple(_moved(part, origin) for part in parts),
        piles=piles,
    )


def _shift(point: Point, origin: Point) -> Point:
    return (point[0] + origin[0], point[1] + origin[1])


def _moved(item: Centred, origin: Point) -> Centred:
    return replace(item, centre=_shift(item.centre, origin))


def _numbered(site: Site, shapes: Sequence[PitShape]) -> tuple[tuple[PitShape, ...], list[Finding]]:
    """Pits by northing then easting of their start, each with the pits it lies in, and what their runs show."""
    angle = np.radians(site.frame.rotation_deg)
    east, north = np.array([np.cos(angle), -np.sin(angle)]), np.array([np.sin(angle), np.cos(angle)])
    ordered = sorted(shapes, key=lambda s: (round(float(s.axis[0] @ north), 2), round(float(s.axis[0] @ east), 2)))
    named = [replace(shape, id=f"P{k + 1}") for k, shape in enumerate(ordered)]
    areas = {s.id: shapely.Polygon(s.axis) for s in named if s.closed}
    within = {
        s.id: tuple(k for k, area in areas.items() if k != s.id and area.contains(areas[s.id].representative_point())
                    and area.area > areas[s.id].area)
        for s in named if s.closed
    }  # fmt: skip
    final = tuple(replace(s, enclosing=within.get(s.id, ())) for s in named)
    return final, [finding for s in final for finding in check_runs(site, s)]
