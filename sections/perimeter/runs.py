"""Runs: stretches of perimeter of one construction, with the wall of each."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
import shapely

from ingest.members import WallKind, WallPiece
from ingest.model import Limits, Site
from ingest.trail import Source
from sections.model import Floats, Run, Wall
from sections.perimeter.outline import Outline
from sections.perimeter.pile_kinds import kinds_by_bay, without_specks
from sections.perimeter.pile_walls import SAME_SIZE, near, pile_wall, split_row
from sections.perimeter.rings import Trace
from sections.perimeter.wall_lines import WallLine

SPECK = 0.05
"""Drawn stretches shorter than this are left over from joining ends, m."""
AT_CORNER = 0.02
"""A pile this close to a corner stands in it, m."""


@dataclass(frozen=True, kw_only=True)
class Stretch:
    """A bit of wall along the axis: a pile (start = stop) or a drawn stretch. `stop` may pass the length of a ring."""

    start: float
    stop: float
    kind: WallKind
    pile: int = -1
    piece: int = -1
    partner: int = -1
    thickness: float | None = None


def locate(outline: Outline, points: Floats) -> Floats:
    """Chainage of points along an axis; on a ring the start is 0, never the length."""
    ring = np.vstack((outline.points, outline.points[:1])) if outline.closed else outline.points
    at = shapely.line_locate_point(shapely.LineString(ring), shapely.points(points))
    if outline.closed:
        at = np.where(at > outline.length - 1e-3, 0.0, at)
    return np.asarray(at)


def stretches_along(site: Site, outline: Outline, trace: Trace, lines: Sequence[WallLine]) -> list[Stretch]:
    """Piles and drawn stretches of a way, in order of chainage; a pile of a wall that only ends there is left out."""
    graph = trace.graph
    nodes = trace.nodes
    piles = graph.pile[nodes]
    line, part = graph.line[trace.edges], graph.part[trace.edges]
    kind_of = {int(p): (kind, k) for k, one in enumerate(lines) for p, kind in zip(one.piles, one.kinds, strict=True)}
    beside = np.where(part >= 0, line, -1)
    before, after = (np.roll(beside, 1), beside) if trace.closed else (np.append(-1, beside), np.append(beside, -1))
    at = locate(outline, graph.xy[nodes])
    found = {
        int(p): float(c)
        for p, c, *near in zip(piles, at, before, after, strict=True)
        if p >= 0 and (-1 in near or kind_of[int(p)][1] in near)
    }
    bits = [Stretch(start=c, stop=c, kind=kind_of[p][0], pile=p) for p, c in found.items()]
    plain = (part >= 0) & np.array([not len(one.piles) for one in lines])[line]
    start, stop = (at, np.roll(at, -1)) if trace.closed else (at[:-1], at[1:])
    stop = np.where(stop < start - SPECK, stop + outline.length, stop)
    for k in np.flatnonzero(plain & (stop - start > SPECK)).tolist():
        one = lines[line[k]]
        bits.append(Stretch(start=float(start[k]), stop=float(stop[k]), kind=one.kind, piece=one.piece,
                            partner=one.partner, thickness=one.thickness))  # fmt: skip
    bits.sort(key=lambda bit: (bit.start, bit.stop, bit.pile))
    return _settled(site, _between_piles(bits, lines, outline.length), outline.length, outline.closed)


def _between_piles(bits: Sequence[Stretch], lines: Sequence[WallLine], length: float) -> list[Stretch]:
    """The bits without drawn stretches between neighbouring piles: a line drawn along a row is no wall of its own."""
    pace = {int(p): max(one.pace) for one in lines for p in one.piles}
    piles = [bit for bit in bits if bit.pile >= 0]
    if len(piles) < 2:
        return list(bits)
    at = np.array([bit.start for bit in piles])
    wide = 1.6 * np.array([pace[bit.pile] for bit in piles])
    kept = []
    for bit in bits:
        after = int(np.searchsorted(at, bit.stop - SPECK)) % len(at)
        before = int(np.searchsorted(at, bit.start + SPECK, side="right")) - 1
        gap = (at[after] - at[before]) % length
        inside = (bit.stop - bit.start) <= gap <= max(wide[after], wide[before])
        if bit.pile >= 0 or not inside:
            kept.append(bit)
    return kept


def _settled(site: Site, bits: list[Stretch], length: float, closed: bool) -> list[Stretch]:
    """Kinds of unnamed piles settled by the bay that follows, single odd ones by their neighbours; round a ring too.

    The bay that follows decides because a pile belongs to the run that begins at it.
    """
    index = [k for k, bit in enumerate(bits) if bit.pile >= 0]
    if len(index) < 2:
        return bits
    piles = [site.piles[bits[k].pile] for k in index]
    at = np.array([bits[k].start for k in index])
    after = (np.roll(at, -1) - at) % length
    if not closed:
        after[-1] = after[-2]
    after = np.where(after > 2.0 * np.roll(after, 1), np.roll(after, 1), after)
    kinds = kinds_by_bay(piles, after, [bits[k].kind for k in index])
    lead = min(3, len(index)) if closed else 0
    around = [*range(-lead, 0), *range(len(index)), *range(lead)]
    kinds = without_specks([piles[k] for k in around], [kinds[k] for k in around])[lead : lead + len(index)]
    settled = list(bits)
    for k, kind in zip(index, kinds, strict=True):
        settled[k] = replace(bits[k], kind=kind)
    return settled


def find_runs(
    site: Site, outline: Outline, bits: Sequence[Stretch], corners: Sequence[float]
) -> tuple[tuple[Run, ...], tuple[tuple[int, ...], ...]]:
    """Runs of one construction and the piles of each, in order of chainage.

    Args:
        site: The site with its piles and wall pieces.
        outline: The wall axis.
        bits: Piles and drawn stretches along it.
        corners: Chainages of its corners; a change between two bits with a corner between them is at the corner.
    """
    groups = _groups(site, bits, outline.closed)
    if len(groups) < 2:
        walls = [(Run(start=0.0, to=outline.length, wall=_wall(site, g)), _piles(g)) for g in groups]
        return tuple(run for run, _ in walls), tuple(piles for _, piles in walls)
    count = len(groups)
    bounds = [_boundary(groups[k - 1], groups[k], outline, corners) for k in range(count)]
    if not outline.closed:
        bounds[0] = 0.0
    stops = bounds[1:] + [bounds[0] if outline.closed else outline.length]
    stops = [outline.length if stop == 0.0 else stop for stop in stops]
    order = np.argsort(bounds, kind="stable").tolist()
    runs = [Run(start=bounds[k], to=stops[k], wall=_wall(site, groups[k])) for k in order]
    return tuple(runs), tuple(_piles(groups[k]) for k in order)


def _piles(group: Sequence[Stretch]) -> tuple[int, ...]:
    return tuple(bit.pile for bit in group if bit.pile >= 0)


def _groups(site: Site, bits: Sequence[Stretch], closed: bool) -> list[list[Stretch]]:
    """Neighbouring bits of one construction; on a ring the first group may reach back over the start."""
    groups: list[list[Stretch]] = []
    for bit in bits:
        if groups and _alike(site, groups[-1][0], bit):
            groups[-1].append(bit)
        else:
            groups.append([bit])
    if closed and len(groups) > 1 and _alike(site, groups[-1][0], groups[0][0]):
        groups = [groups[-1] + groups[0], *groups[1:-1]]
    split: list[list[Stretch]] = []
    for group in groups:
        ring = closed and len(groups) == 1
        split += _split_piles(site, group, ring) if group[0].pile >= 0 else [group]
    return split


def _split_piles(site: Site, group: list[Stretch], ring: bool) -> list[list[Stretch]]:
    cuts = split_row([site.piles[bit.pile] for bit in group], group[0].kind, site.limits, ring)
    parts = [group[a:b] for a, b in pairwise([0, *cuts, len(group)]) if b > a]
    if ring and len(parts) > 1 and 0 not in cuts:
        parts = [parts[-1] + parts[0], *parts[1:-1]]
    return parts


def _alike(site: Site, a: Stretch, b: Stretch) -> bool:
    if a.kind != b.kind or (a.pile >= 0) != (b.pile >= 0):
        return False
    if a.pile >= 0:
        return True
    one, other = site.walls[a.piece], site.walls[b.piece]
    return near(a.thickness, b.thickness, SAME_SIZE) and _like_pieces(one, other, site.limits)


def _like_pieces(a: WallPiece, b: WallPiece, limits: Limits) -> bool:
    levels = near(a.top, b.top, limits.level) and near(a.toe, b.toe, limits.level)
    return levels and _facts(a) == _facts(b)


def _facts(piece: WallPiece) -> tuple[object, ...]:
    return (piece.material, piece.EI_factor, piece.continuity, piece.capping_beam)


def _boundary(before: Sequence[Stretch], after: Sequence[Stretch], outline: Outline, corners: Sequence[float]) -> float:
    """Where one run ends and the next begins.

    At a corner, if there is one between them; else where a drawn stretch ends; else between two piles, a quarter of the
    spacing before the first pile of the new run: any place between the two would be as true.
    """
    a, b = before[-1].stop, after[0].start
    length = outline.length
    if b < a - 0.5 * length:
        b += length
    low = a + (AT_CORNER if before[-1].pile >= 0 else -_slack(before[-1]))
    high = b + (AT_CORNER if after[0].pile >= 0 else _slack(after[0]))
    for corner in corners:
        for at in (corner, corner + length):
            if low < at <= high:
                return _on_ring(min(at, b) if after[0].pile >= 0 else at, outline)
    if before[-1].pile < 0 and after[0].pile < 0:
        return _on_ring(0.5 * (a + b), outline)
    if before[-1].pile < 0:
        return _on_ring(min(a, b), outline)
    if after[0].pile < 0:
        return _on_ring(max(b, a + AT_CORNER), outline)
    return _on_ring(b - 0.25 * (b - a), outline)


def _slack(bit: Stretch) -> float:
    """How far past or short of a corner a drawn stretch may end and still end in it, m."""
    return AT_CORNER + 0.6 * (bit.thickness or 0.0)


def _on_ring(at: float, outline: Outline) -> float:
    if not outline.closed:
        return min(max(at, 0.0), outline.length)
    at %= outline.length
    return 0.0 if outline.length - at < 1e-6 else at


def _wall(site: Site, group: Sequence[Stretch]) -> Wall:
    first = group[0]
    if first.pile >= 0:
        return pile_wall([site.piles[bit.pile] for bit in group], first.kind, site.limits)
    one = site.walls[first.piece]
    used = dict.fromkeys(i for bit in group for i in (bit.piece, bit.partner) if i >= 0)
    return Wall(
        kind=first.kind,
        thickness=first.thickness,
        top=one.top,
        toe=one.toe,
        continuity=one.continuity,
        capping_beam=one.capping_beam,
        material=one.material,
        EI_factor=one.EI_factor,
        sources=unique_sources([site.walls[i] for i in used]),
    )


def unique_sources(items: Sequence[WallPiece]) -> tuple[Source, ...]:
    """Sources of all pieces, each once, in a fixed order."""
    found = {source for item in items for source in item.sources}
    return tuple(sorted(found, key=lambda s: (s.file, s.item, s.how)))
