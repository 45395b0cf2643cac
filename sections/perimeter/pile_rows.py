"""Piles to wall lines: who stands next to whom in a row of piles or posts, and which piles are no wall at all."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.spatial import cKDTree

from ingest.members import Pile, WallKind
from sections.model import Bools, Floats, Ints
from sections.perimeter.pile_kinds import CLOSE_ROW, EMBEDDED, kinds_of, pile_size

SAME_PILE = 0.02
"""Two piles closer than this are one pile drawn twice, m."""
NEIGHBOURS = 8
MAX_TURN = 40.0
"""Largest turn inside one row, degrees; sharper ones are corners, which the wall lines make where they meet."""
STRAIGHT_TURN = 25.0
OVER_GAP = 3
"""Rank added to a bay that spans a gap."""
WIDEST = 6.0
"""Widest spacing of king posts looked for, m (common practice, no source)."""


@dataclass(frozen=True, kw_only=True)
class PileRow:
    """A row of neighbouring piles.

    Attributes:
        piles: Indices into the piles given, in order along the row.
        closed: True for a ring of piles.
        spacing: Median distance between neighbours, m.
        kinds: Kind of each pile, as said or as its neighbours show.
        ends: Distance between neighbours at the two ends of the row, m.
        sure: False where only the place of the piles says that they are a wall.
    """

    piles: tuple[int, ...]
    closed: bool
    spacing: float
    kinds: tuple[WallKind, ...]
    ends: tuple[float, float]
    sure: bool


def single_piles(piles: Sequence[Pile]) -> Ints:
    """Indices of the piles with duplicates within 20 mm dropped, ordered by place so that input order is forgotten.

    Of a pile drawn twice the one about which more is known stays.
    """
    if not piles:
        return np.zeros(0, dtype=np.int64)
    centres = np.array([pile.centre for pile in piles])
    order = np.array(sorted(range(len(piles)), key=lambda i: (-_known(piles[i]), *piles[i].centre, piles[i].id)))
    pairs = cKDTree(centres[order]).query_pairs(SAME_PILE, output_type="ndarray")
    keep = np.ones(len(order), dtype=bool)
    for first, second in pairs[np.lexsort((pairs[:, 1], pairs[:, 0]))]:
        if keep[first]:
            keep[second] = False
    kept = order[keep]
    return kept[np.lexsort((centres[kept, 1], centres[kept, 0]))].astype(np.int64)


def _known(pile: Pile) -> int:
    facts = (pile.kind, pile.diameter, pile.section, pile.top, pile.toe, pile.male, pile.material, pile.bearing)
    return sum(fact is not None for fact in facts)


def find_pile_rows(piles: Sequence[Pile]) -> tuple[PileRow, ...]:
    """Chain wall piles into rows; piles said to be bearing piles, and grids of unnamed piles, are left out.

    Returns:
        Rows of at least three piles (two where the piles are said to be a wall, or stand too close for anything else),
        each pile in one row at most.
    """
    chosen = [i for i in single_piles(piles) if piles[i].bearing is not True]
    if len(chosen) < 2:
        return ()
    index = np.array(chosen, dtype=np.int64)
    xy = np.array([piles[i].centre for i in chosen])
    named = np.array([piles[i].kind in EMBEDDED or piles[i].bearing is False for i in chosen])
    size = np.array([pile_size(piles[i]) or np.nan for i in chosen])
    post = np.array([piles[i].kind == "king_post" for i in chosen])
    tree = cKDTree(xy)
    reach = _reach(tree, xy, named, size, post)
    edges = _neighbours(tree, xy, reach)
    edges = edges[_alike(edges, piles, chosen, named)]
    grid = _in_grid(edges, xy, named, size)
    edges = edges[~(grid[edges[:, 0]] | grid[edges[:, 1]])]
    rank, span = _ranked(tree, xy, edges)
    links = _link(edges, xy, rank, span)
    _link_single(edges, links, rank, span)
    rows = (_row(piles, chain, closed, xy, index, named) for chain, closed in _chains(links))
    return tuple(row for row in rows if len(row.piles) >= (1 if row.sure else 3) and row.spacing > 0.0)


def _reach(tree: cKDTree, xy: Floats, named: Bools, size: Floats, post: Bools) -> Floats:
    """How far each pile may look for its neighbour, m: over one or two missing piles where it is surely a wall."""
    nearest = _nearest(tree, xy)
    close = named | (nearest <= CLOSE_ROW * np.nan_to_num(size, nan=0.0))
    factor = np.where(post, 2.3, np.where(close, 3.2, 1.5))
    return np.minimum(factor * nearest, np.where(post | ~close, 1.5 * WIDEST, WIDEST))


def _nearest(tree: cKDTree, xy: Floats) -> Floats:
    """Distance from each pile to its nearest neighbour, m."""
    return np.asarray(tree.query(xy, k=2)[0], dtype=float)[:, 1]


def _neighbours(tree: cKDTree, xy: Floats, reach: Floats) -> Ints:
    k = min(NEIGHBOURS + 1, len(xy))
    distance, other = (np.asarray(found) for found in tree.query(xy, k=k))
    first = np.repeat(np.arange(len(xy)), k - 1)
    second, span = other[:, 1:].ravel(), distance[:, 1:].ravel()
    ok = span <= np.maximum(reach[first], reach[second])
    pairs = np.sort(np.column_stack((first[ok], second[ok])), axis=1)
    return np.unique(pairs[pairs[:, 0] < pairs[:, 1]], axis=0).astype(np.int64)


def _alike(edges: Ints, piles: Sequence[Pile], chosen: Sequence[int], named: Bools) -> Bools:
    """A pile that nobody calls a wall pile joins a named one only from the same layer or at the same diameter."""
    layer = np.array([piles[i].layer for i in chosen])
    size = np.array([round(pile_size(piles[i]) or -1.0, 2) for i in chosen])
    a, b = edges.T
    return np.asarray((named[a] == named[b]) | (layer[a] == layer[b]) | (size[a] == size[b]), dtype=np.bool_)


def _in_grid(edges: Ints, xy: Floats, named: Bools, size: Floats) -> Bools:
    """Unnamed, widely spaced piles with neighbours on three sides or more stand in a grid: they carry, not retain."""
    span = np.hypot(*(xy[edges[:, 1]] - xy[edges[:, 0]]).T)
    nearest = np.full(len(xy), np.inf)
    np.minimum.at(nearest, edges.ravel(), np.repeat(span, 2))
    wide = ~named & (nearest > CLOSE_ROW * np.nan_to_num(size, nan=np.inf))
    near = span <= 1.3 * np.minimum(nearest[edges[:, 0]], nearest[edges[:, 1]])
    count = np.bincount(edges[near].ravel(), minlength=len(xy))
    grid: Bools = wide & (count >= 3)
    for _ in range(2):
        touching = np.zeros(len(xy), dtype=bool)
        touching[edges[near & grid[edges[:, 0]], 1]] = True
        touching[edges[near & grid[edges[:, 1]], 0]] = True
        grid = grid | (wide & touching)
    return grid


def _ranked(tree: cKDTree, xy: Floats, edges: Ints) -> tuple[Ints, Floats]:
    """Rank of each possible bay, lowest best, and bay lengths.

    Bays over a gap (longer than either pile's distance to its nearest neighbour allows) come last; before them the
    rank is by how many ends of the bay have no pile behind them in the same direction.
    """
    p, q = xy[edges[:, 0]], xy[edges[:, 1]]
    span = np.hypot(*(q - p).T)
    alone = (tree.query(2 * p - q)[0] > 0.35 * span).astype(np.int64) + (tree.query(2 * q - p)[0] > 0.35 * span)
    nearest = _nearest(tree, xy)
    over_gap = span > 1.6 * np.maximum(nearest[edges[:, 0]], nearest[edges[:, 1]])
    return np.asarray(alone + OVER_GAP * over_gap, dtype=np.int64), span


def _link(edges: Ints, xy: Floats, rank: Ints, span: Floats) -> list[list[int]]:
    """Take bays by rank, short before long, two to a pile, without sharp turns."""
    order = np.lexsort((np.round(span, 4), rank))
    straight, turned = np.cos(np.radians((STRAIGHT_TURN, MAX_TURN)))
    links: list[list[int]] = [[] for _ in range(len(xy))]
    x, y = xy[:, 0].tolist(), xy[:, 1].tolist()

    def fits(at: int, to: int, limit: float) -> bool:
        if not links[at]:
            return True
        if len(links[at]) > 1 or to in links[at]:
            return False
        back = links[at][0]
        ax, ay, bx, by = x[at] - x[back], y[at] - y[back], x[to] - x[at], y[to] - y[at]
        return bool(ax * bx + ay * by >= limit * np.sqrt((ax * ax + ay * ay) * (bx * bx + by * by)))

    for (p, q), tier in zip(edges[order].tolist(), rank[order].tolist(), strict=True):
        limit = straight if tier in (0, OVER_GAP) else turned
        if fits(p, q, limit) and fits(q, p, limit):
            links[p].append(q)
            links[q].append(p)
    return links


def _link_single(edges: Ints, links: list[list[int]], rank: Ints, span: Floats) -> None:
    """A pile alone between two corners joins the rows that end beside it, whatever the direction."""
    single = np.array([not near for near in links])
    maybe = np.flatnonzero((single[edges[:, 0]] | single[edges[:, 1]]) & (rank < OVER_GAP))
    for p, q in edges[maybe[np.argsort(np.round(span[maybe], 4), kind="stable")]].tolist():
        if len(links[p]) < 2 and len(links[q]) < 2:
            links[p].append(q)
            links[q].append(p)


def _chains(links: list[list[int]]) -> list[tuple[list[int], bool]]:
    """Walk the links into open rows first, then closed rings."""
    seen = [False] * len(links)
    chains: list[tuple[list[int], bool]] = []
    starts = [i for i, near in enumerate(links) if len(near) == 1] + [i for i, n in enumerate(links) if len(n) == 2]
    for start in starts:
        if seen[start]:
            continue
        chain = [start]
        seen[start] = True
        while True:
            ahead = [i for i in links[chain[-1]] if not seen[i]]
            if not ahead:
                break
            seen[ahead[0]] = True
            chain.append(ahead[0])
        chains.append((chain, len(links[start]) == 2))
    return chains


def _row(
    piles: Sequence[Pile], chain: list[int], closed: bool, xy: Floats, index: Ints, named: Bools
) -> PileRow:  # fmt: skip
    along = xy[[*chain, chain[0]] if closed else chain]
    spans = np.hypot(*np.diff(along, axis=0).T)
    members = [piles[i] for i in index[chain]]
    return PileRow(
        piles=tuple(int(i) for i in index[chain]),
        closed=closed,
        spacing=float(np.median(spans)) if len(spans) else 0.0,
        kinds=kinds_of(members, spans, closed),
        ends=(float(spans[:3].max(initial=0.0)), float(spans[-3:].max(initial=0.0))),
        sure=bool(named[chain].mean() > 0.5 or named[chain].sum() > 1) or _is_close(members, spans),
    )


def _is_close(members: Sequence[Pile], spans: Floats) -> bool:
    """True where the piles stand too close to be anything but a wall."""
    sizes = [size for size in map(pile_size, members) if size is not None]
    return bool(sizes and len(spans) and np.median(spans) <= CLOSE_ROW * np.median(sizes))
