"""Runs: stretches of perimeter of one construction, with the wall of each."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely

from ingest.model import Limits, Pile, Site, WallKind
from ingest.trail import Source
from sections.model import Floats, Ints, Run, Structural, Wall
from sections.outline import Outline
from sections.pile_rows import pile_size
from sections.rings import Trace
from sections.wall_lines import WallLine

SAME_SIZE = 0.02
"""Diameters and thicknesses closer than this are alike, m."""


@dataclass(frozen=True, kw_only=True)
class Stretch:
    """A bit of wall along the axis: a pile (start = stop) or a drawn stretch."""

    start: float
    stop: float
    kind: WallKind
    pile: int = -1
    piece: int = -1
    thickness: float | None = None


def locate(outline: Outline, points: Floats) -> Floats:
    """Chainage of points along an axis; on a ring the start is 0, never the length."""
    ring = np.vstack((outline.points, outline.points[:1])) if outline.closed else outline.points
    at = shapely.line_locate_point(shapely.LineString(ring), shapely.points(points))
    if outline.closed:
        at = np.where(at > outline.length - 1e-3, 0.0, at)
    return np.asarray(at)


def stretches_along(outline: Outline, trace: Trace, lines: Sequence[WallLine]) -> list[Stretch]:
    """Piles and drawn stretches of a way, in order of chainage."""
    graph = trace.graph
    nodes = trace.nodes
    piles = graph.pile[nodes]
    found = {int(p): float(c) for p, c in zip(piles, locate(outline, graph.xy[nodes]), strict=True) if p >= 0}
    kind_of = {int(p): line.kind for line in lines for p in line.piles}
    bits = [Stretch(start=c, stop=c, kind=kind_of[p], pile=p) for p, c in found.items()]
    line, part = graph.line[trace.edges], graph.part[trace.edges]
    plain = np.array([(part[k] >= 0) and not len(lines[line[k]].piles) for k in range(len(line))])
    ends = graph.xy[graph.ends[trace.edges]]
    ends = np.where(trace.forward[:, None, None], ends, ends[:, ::-1])
    start, stop = locate(outline, ends[:, 0]), locate(outline, ends[:, 1])
    for k in np.flatnonzero(plain):
        one = lines[line[k]]
        last = float(stop[k]) if stop[k] > start[k] else float(stop[k]) + outline.length
        bits.append(Stretch(start=float(start[k]), stop=last, kind=one.kind, piece=one.piece, thickness=one.thickness))
    return sorted(bits, key=lambda bit: (bit.start, bit.stop))


def find_runs(
    site: Site, outline: Outline, bits: Sequence[Stretch]
) -> tuple[tuple[Run, ...], tuple[tuple[int, ...], ...]]:
    """Runs of one construction and the piles of each, in order of chainage."""
    groups = _grouped(site, bits, outline.closed)
    if len(groups) == 1:
        run = Run(start=0.0, to=outline.length, wall=_wall(site, groups[0]))
        return (run,), (tuple(b.pile for b in groups[0] if b.pile >= 0),)
    runs = []
    bounds = [_boundary(groups[k - 1], groups[k], outline) for k in range(len(groups))]
    if not outline.closed:
        bounds[0] = 0.0
    for k, group in enumerate(groups):
        to = bounds[(k + 1) % len(groups)] if outline.closed or k + 1 < len(groups) else outline.length
        runs.append((Run(start=bounds[k], to=to, wall=_wall(site, group)),
                     tuple(b.pile for b in group if b.pile >= 0)))  # fmt: skip
    runs.sort(key=lambda pair: pair[0].start)
    return tuple(run for run, _ in runs), tuple(piles for _, piles in runs)


def _grouped(site: Site, bits: Sequence[Stretch], closed: bool) -> list[list[Stretch]]:
    groups: list[list[Stretch]] = []
    for bit in bits:
        if groups and _alike(site, groups[-1][0], bit):
            groups[-1].append(bit)
        else:
            groups.append([bit])
    if closed and len(groups) > 1 and _alike(site, groups[-1][0], groups[0][0]):
        groups = [groups[-1] + groups[0], *groups[1:-1]]
    return groups


def _alike(site: Site, a: Stretch, b: Stretch) -> bool:
    if a.kind != b.kind or (a.pile >= 0) != (b.pile >= 0):
        return False
    one = site.piles[a.pile] if a.pile >= 0 else site.walls[a.piece]
    other = site.piles[b.pile] if b.pile >= 0 else site.walls[b.piece]
    level = site.limits.level
    return _near(one.top, other.top, level) and _near(one.toe, other.toe, level)


def _near(a: float | None, b: float | None, limit: float) -> bool:
    return a == b or (a is not None and b is not None and abs(a - b) <= limit)


def _boundary(before: Sequence[Stretch], after: Sequence[Stretch], outline: Outline) -> float:
    a, b = before[-1].stop, after[0].start
    if b < a:
        b += outline.length
    return float((0.5 * (a + b)) % outline.length)


def _wall(site: Site, group: Sequence[Stretch]) -> Wall:
    first = group[0]
    if first.pile < 0:
        piece = site.walls[first.piece]
        return Wall(
            kind=first.kind, thickness=first.thickness, top=piece.top, toe=piece.toe, continuity=piece.continuity,
            capping_beam=piece.capping_beam, material=piece.material, EI_factor=piece.EI_factor,
            sources=_sources([s for b in group for s in site.walls[b.piece].sources]),
        )  # fmt: skip
    piles = [site.piles[b.pile] for b in group]
    spans = np.hypot(*np.diff(np.array([p.centre for p in piles]), axis=0).T)
    centres = float(np.median(spans)) if len(spans) else None
    one = piles[0]
    return Wall(
        kind=first.kind, count=len(piles), centres=centres, diameter=pile_size(one), top=one.top, toe=one.toe,
        continuity=one.continuity, structural=Structural(which="all", count=len(piles), spacing=centres),
        capping_beam=one.capping_beam, material=one.material, EI_factor=one.EI_factor,
        sources=_sources([s for p in piles for s in p.sources]),
    )  # fmt: skip


def _sources(sources: Sequence[Source]) -> tuple[Source, ...]:
    return tuple(dict.fromkeys(sources))
