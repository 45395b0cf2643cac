"""From the site to the perimeters of its pits: which walls retain, how they run, where chainage starts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.model import Point, Site
from ingest.trail import Finding, Question
from sections.corners import find_arcs, find_corners, start_outline
from sections.model import Arc, Corner, PitShape
from sections.outline import Outline, build_outline
from sections.rings import Trace, find_rings
from sections.runs import find_runs, stretches_along
from sections.sides import find_sides, sample_way
from sections.wall_graph import build_graph
from sections.wall_joins import close_joins
from sections.wall_lines import WallLine, gather_lines


def find_shapes(site: Site) -> tuple[tuple[PitShape, ...], tuple[Finding, ...], tuple[Question, ...]]:
    """Find the perimeter of every pit of a site.

    Returns:
        The pits by chainage start from south to north, then west to east; what was seen; what is asked.
    """
    origin = _origin(site)
    lines, questions = gather_lines(site, origin)
    if not lines:
        return (), (), questions
    traces = _find_traces(site, lines)
    shapes = [_shape(site, trace, lines, origin) for trace in traces]
    return _numbered(shapes), (), questions


def _origin(site: Site) -> Point:
    points = [p for piece in site.walls for p in piece.axis] + [pile.centre for pile in site.piles]
    if not points:
        return (0.0, 0.0)
    x, y = np.median(np.array(points), axis=0)
    return (float(np.round(x)), float(np.round(y)))


def _find_traces(site: Site, lines: Sequence[WallLine]) -> list[Trace]:
    graph = close_joins(build_graph(lines, site.limits.plan), lines, site.limits.plan)
    parting = np.array([line.embedded for line in lines])[graph.line]
    return list(find_rings(graph, parting))


def _shape(site: Site, trace: Trace, lines: Sequence[WallLine], origin: Point) -> PitShape:
    samples = sample_way(trace, lines)
    outline = build_outline(samples, find_sides(samples), 0.3)
    start = None if site.start is None else (site.start[0] - origin[0], site.start[1] - origin[1])
    outline = start_outline(outline, site.limits.direction, -site.frame.rotation_deg, start)
    corners = find_corners(outline, site.limits.direction)
    runs, piles = find_runs(site, outline, stretches_along(site, outline, trace, lines), [c.at for c in corners])
    return PitShape(
        id="", closed=outline.closed, axis=outline.points + origin, at=outline.at, length=outline.length,
        arcs=tuple(_moved_arc(arc, origin) for arc in find_arcs(outline)),
        corners=tuple(_moved_corner(c, origin) for c in corners),
        runs=runs, circle=None, circles=(), piles=piles,
    )  # fmt: skip


def _moved_arc(arc: Arc, origin: Point) -> Arc:
    return replace(arc, centre=(arc.centre[0] + origin[0], arc.centre[1] + origin[1]))


def _moved_corner(corner: Corner, origin: Point) -> Corner:
    return replace(corner, point=(corner.point[0] + origin[0], corner.point[1] + origin[1]))


def _numbered(shapes: Sequence[PitShape]) -> tuple[PitShape, ...]:
    ordered = sorted(shapes, key=lambda s: (round(float(s.axis[0, 1]), 2), round(float(s.axis[0, 0]), 2)))
    return tuple(replace(shape, id=f"P{k + 1}") for k, shape in enumerate(ordered))


def _outline_length(outline: Outline) -> float:
    return outline.length
