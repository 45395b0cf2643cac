"""Which lines on the plan are the retaining wall: rings and open walls chosen by evidence.

Walls that are built from the ground down come first; walls of a building only close what those leave open, or stand in
where there are no others.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components

from ingest.members import Point
from ingest.model import Site
from ingest.trail import Finding, Question
from sections.model import Bools, Floats
from sections.perimeter.ring_notes import (
    aside_notes,
    bridge_notes,
    gap_notes,
    inner_ring_question,
    no_ring_note,
    shallow_notes,
    twin_note,
)
from sections.perimeter.rings import Trace, find_open, find_rings
from sections.perimeter.wall_graph import WallGraph, build_graph
from sections.perimeter.wall_joins import close_joins
from sections.perimeter.wall_lines import WallLine

LEAST_AREA = 3.0
"""Rings of less are no pit, m2 (judgement)."""
SAME_WALL = 1.5
"""Two rings one inside the other at less than this on average are one wall drawn twice or lined, m (judgement)."""
LEAST_OPEN = 3.0
"""Shorter open walls are no perimeter, m (judgement)."""
MOST_OF = 0.8
"""Share of an open wall that a ring closed with other walls must take up (judgement)."""
LEAST_SHARE = 0.1
"""Rings of building walls smaller than this share of the largest are rooms or shafts of the building (judgement)."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Choice:
    """Ways chosen as perimeters, what was seen on the way, and what is asked."""

    traces: tuple[Trace, ...]
    findings: tuple[Finding, ...] = ()
    questions: tuple[Question, ...] = ()


def choose_rings(site: Site, lines: Sequence[WallLine], origin: Point) -> Choice:
    """Choose the retaining rings and open walls of a site among its wall lines."""
    embedded = np.array([line.embedded for line in lines], dtype=bool)
    shallow = embedded & np.array([_is_shallow(site, line) for line in lines], dtype=bool)
    if not embedded.any():
        return _building_rings(site, lines, origin)
    graph = _network(site, lines, embedded & ~shallow)
    every = _pits(find_rings(graph, np.ones(len(graph.ends), dtype=bool)))
    rings, findings = _once(every, lines, origin)
    rest = _unused(graph, every)
    loose, inside, wings = _beside(rest, rings)
    closing = _closing_rings(site, lines, embedded, rest.pick(loose)) if loose.any() else []
    if closing:
        rings, more = _once([*rings, *closing], lines, origin)
        findings += more
        loose &= ~np.isin(rest.line, np.concatenate([_lines_of(ring) for ring in closing]))
    ways = [way for way in find_open(rest.pick(loose)) if way.length >= LEAST_OPEN]
    if not rings and not ways:
        return _building_rings(site, lines, origin)
    findings += gap_notes(ways, origin) + bridge_notes([*rings, *ways], lines, site.limits.plan, origin)
    findings += aside_notes(rest, inside, wings, LEAST_OPEN, origin) + shallow_notes(site, lines, shallow, origin)
    return Choice(traces=(*rings, *ways), findings=tuple(findings))


def _is_shallow(site: Site, line: WallLine) -> bool:
    """A toe in the upper half of the dig: a guide wall or an upstand, not the wall that retains."""
    if line.toe is None or site.formation is None or site.ground_level is None:
        return False
    return line.toe > 0.5 * (site.ground_level + site.formation)


def _network(site: Site, lines: Sequence[WallLine], chosen: Bools) -> WallGraph:
    index = np.flatnonzero(chosen)
    some = [lines[i] for i in index.tolist()]
    if not some:
        empty = np.zeros(0, dtype=np.int64)
        return WallGraph(xy=np.zeros((0, 2)), ends=np.zeros((0, 2), dtype=np.int64), line=empty, part=empty,
                         forward=empty.astype(bool), pile=empty)  # fmt: skip
    graph = close_joins(build_graph(some, site.limits.plan), some, site.limits.plan)
    return replace(graph, line=index[graph.line].astype(np.int64))


def _pits(rings: Sequence[Trace]) -> list[Trace]:
    return [ring for ring in rings if area_of(ring.points) >= LEAST_AREA]


def area_of(points: Floats) -> float:
    """Area inside a ring of points, m2."""
    x, y = points.T
    return float(0.5 * (x @ np.roll(y, -1) - y @ np.roll(x, -1)))


def _lines_of(ring: Trace) -> Floats:
    return np.unique(ring.graph.line[ring.edges])


def _once(rings: Sequence[Trace], lines: Sequence[WallLine], origin: Point) -> tuple[list[Trace], list[Finding]]:
    """Of two rings that are the same wall the one of better evidence stays."""
    areas = [shapely.Polygon(ring.points) for ring in rings]
    order = sorted(range(len(rings)), key=lambda k: (-_evidence(rings[k], lines), -areas[k].area))
    kept: list[int] = []
    findings = []
    for k in order:
        twin = next((j for j in kept if _same_wall(areas[j], areas[k])), None)
        if twin is None:
            kept.append(k)
            continue
        x, y = areas[k].representative_point().coords[0]
        findings.append(twin_note((x + origin[0], y + origin[1])))
    return [rings[k] for k in sorted(kept)], findings


def _evidence(ring: Trace, lines: Sequence[WallLine]) -> float:
    """Share of a ring that is piles, and less for paired faces and known thickness."""
    used = [lines[i] for i in ring.graph.line[ring.edges].tolist()]
    worth = [3.0 if len(line.piles) else 2.0 if line.paired else 1.0 if line.embedded else 0.0 for line in used]
    return round(float(np.mean(worth)), 3)


def _same_wall(a: shapely.Polygon, b: shapely.Polygon) -> bool:
    small, large = sorted((a, b), key=lambda p: p.area)
    if not large.buffer(0.05).contains(small):
        return False
    return 2.0 * (large.area - small.area) / (large.length + small.length) < SAME_WALL


def _unused(graph: WallGraph, rings: Sequence[Trace]) -> WallGraph:
    """Edges that are on no ring, ends of rings marked by their nodes kept."""
    used = {tuple(sorted(pair)) for ring in rings for pair in ring.graph.ends[ring.edges].tolist()}
    free = np.array([tuple(sorted(pair)) not in used for pair in graph.ends.tolist()], dtype=bool)
    return graph.pick(free)


def _beside(rest: WallGraph, rings: Sequence[Trace]) -> tuple[Bools, Bools, Bools]:
    """Which left-over edges stand free outside all rings, which lie inside one, and which run on from one."""
    count = len(rest.ends)
    if not count:
        none = np.zeros(0, dtype=bool)
        return none, none, none
    on_ring = np.zeros(len(rest.xy), dtype=bool)
    inside_node = np.zeros(len(rest.xy), dtype=bool)
    for ring in rings:
        on_ring[ring.nodes] = True
        inside_node |= shapely.contains_xy(shapely.Polygon(ring.points), rest.xy)
    size = (len(rest.xy),) * 2
    total, label = connected_components(coo_array((np.ones(count), rest.ends.T), shape=size), directed=False)
    touches = np.bincount(label, on_ring & (rest.degree > 0), minlength=total) > 0
    within = np.bincount(label, inside_node & ~on_ring, minlength=total) > 0
    part = label[rest.ends[:, 0]]
    return ~touches[part] & ~within[part], within[part], touches[part] & ~within[part]


def _closing_rings(site: Site, lines: Sequence[WallLine], embedded: Bools, loose: WallGraph) -> list[Trace]:
    """Rings that walls of a building, or failing that lines of no known kind, close with what is left open.

    They must take up nearly all of the open wall, and a good part of them must be that wall: a stray line that happens
    to cross it closes nothing.
    """
    kinds = np.array([line.kind for line in lines])
    wanted = MOST_OF * float(_spans(loose).sum())
    for others, least in ((np.isin(kinds, ("concrete", "masonry", "none")), 0.25), (~embedded, 0.5)):
        if not others.any():
            continue
        graph = _network(site, lines, embedded | others)
        rings = [ring for ring in _pits(find_rings(graph, embedded[graph.line])) if _uses(ring, loose)]
        rings = [ring for ring in rings if least <= _share(ring, embedded) < 1.0]
        if rings and sum(_share(ring, embedded) * ring.length for ring in rings) >= wanted:
            return rings
    return []


def _uses(ring: Trace, loose: WallGraph) -> bool:
    return bool(np.isin(ring.graph.line[ring.edges], loose.line).any())


def _spans(graph: WallGraph) -> Floats:
    return np.asarray(np.hypot(*(graph.xy[graph.ends[:, 1]] - graph.xy[graph.ends[:, 0]]).T))


def _share(ring: Trace, embedded: Bools) -> float:
    """Share of the length of a ring that is embedded wall."""
    span = _spans(ring.graph)[ring.edges]
    return float(span[embedded[ring.graph.line[ring.edges]]].sum() / span.sum())


def _building_rings(site: Site, lines: Sequence[WallLine], origin: Point) -> Choice:
    """Outlines of the lowest storey where there are only walls of a building, or lines of no known kind."""
    toes = [line.toe for line in lines if line.toe is not None]
    lowest = np.array([line.toe is None or line.toe <= min(toes) + 1.0 for line in lines], dtype=bool)
    for chosen in (lowest, np.ones(len(lines), dtype=bool)):
        graph = _network(site, lines, chosen)
        rings = _pits(find_rings(graph, np.zeros(len(graph.ends), dtype=bool)))
        rings.sort(key=lambda ring: -area_of(ring.points))
        if rings:
            return _outermost(rings, lines, origin)
    if site.plates or not (site.supports or site.floors or site.formation is not None):
        return Choice(traces=(), findings=(no_ring_note(lines),))
    drawn = lowest & np.array([line.sure for line in lines], dtype=bool)
    ways = [way for way in find_open(_network(site, lines, drawn)) if way.length >= LEAST_OPEN]
    return Choice(traces=tuple(ways[:1]))


def _outermost(rings: Sequence[Trace], lines: Sequence[WallLine], origin: Point) -> Choice:
    areas = [shapely.Polygon(ring.points) for ring in rings]
    kept: list[int] = []
    questions: list[Question] = []
    for k, area in enumerate(areas):
        outer = next((j for j in kept if areas[j].contains(area.representative_point())), None)
        if outer is None and area.area >= LEAST_SHARE * areas[0].area:
            kept.append(k)
        elif outer is not None and area.area >= LEAST_SHARE * areas[outer].area and not _same_wall(areas[outer], area):
            x, y = area.representative_point().coords[0]
            questions.append(inner_ring_question(len(questions) + 1, (x + origin[0], y + origin[1])))
    return Choice(traces=tuple(rings[k] for k in kept), questions=tuple(questions))
