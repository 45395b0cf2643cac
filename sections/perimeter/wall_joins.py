"""Loose ends of walls brought to where the walls meet: corners, junctions, changes of construction."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely
from scipy.spatial import cKDTree

from sections.model import Floats, Ints
from sections.perimeter.wall_graph import WallGraph, add_nodes, cross, cut, edge_tree, stub_length
from sections.perimeter.wall_lines import WallLine

ROUNDS = 3
NEXT_PILE = 1.25
"""The end of a row of piles joins another end within this many spacings, whatever the direction."""
NEAR_PILE = 0.4
"""A wall that meets a bay within this share of its length from a pile meets the pile: no pile is cut off."""
FOREIGN = 0.6
"""Spacings by which a row of piles is readier to meet piles than to meet a drawn line."""
FACING = 25.0
"""Two ends within this of looking straight at each other continue one line, degrees."""


@dataclass(frozen=True, kw_only=True, eq=False)
class LooseEnds:
    """Nodes with one edge: node, edge, direction in which the wall would go on, how far it may, pile spacing or 0."""

    node: Ints
    edge: Ints
    at: Floats
    ahead: Floats
    reach: Floats
    pace: Floats


@dataclass(frozen=True, kw_only=True)
class Join:
    """One way to close a loose end: with another end or onto an edge, at a new point or straight to a node."""

    cost: float
    end: int
    other: int | None = None
    edge: int | None = None
    point: tuple[float, float] | None = None
    node: int | None = None


def close_joins(graph: WallGraph, lines: Sequence[WallLine], tolerance: float) -> WallGraph:
    """Extend loose ends to where the walls obviously meet, shortest way first, and drop overshoots.

    Two ends meet where their lines intersect, within the reach of both (about a wall thickness, or a pile spacing; more
    in acute corners, where two walls of one thickness meet farther away); ends that look at each other are joined. A
    third wall may then meet what was made.
    """
    graph = drop_stubs(graph, lines)
    for _ in range(ROUNDS):
        ends = loose_ends(graph, lines)
        if not len(ends.node):
            break
        joins = _choose([*_end_to_end(ends, tolerance), *_end_to_edge(graph, ends, tolerance)], ends)
        if not joins:
            break
        graph = drop_stubs(_apply(graph, ends, joins), lines)
    return graph


def _choose(joins: Sequence[Join], ends: LooseEnds) -> list[Join]:
    """Cheapest first, each end once."""
    free = [True] * len(ends.node)
    taken = []
    for join in sorted(joins, key=lambda j: (round(j.cost, 6), *np.round(ends.at[j.end], 3))):
        if free[join.end] and (join.other is None or free[join.other]):
            taken.append(join)
            free[join.end] = False
            if join.other is not None:
                free[join.other] = False
    return taken


def loose_ends(graph: WallGraph, lines: Sequence[WallLine]) -> LooseEnds:
    """All nodes with one edge. The direction is that of the segment as drawn, not of the piece left of it."""
    node = np.flatnonzero(graph.degree == 1)
    edge = np.zeros(len(graph.xy), dtype=np.int64)
    edge[graph.ends[:, 0]] = np.arange(len(graph.ends))
    is_first = np.zeros(len(graph.xy), dtype=bool)
    is_first[graph.ends[:, 0]] = True
    alone = np.bincount(graph.ends[:, 1], minlength=len(graph.xy)) > 0
    edge[graph.ends[:, 1]] = np.where(alone[graph.ends[:, 1]], np.arange(len(graph.ends)), edge[graph.ends[:, 1]])
    mine = edge[node]
    drawn = np.array([_direction(graph, lines, int(e)) for e in mine]).reshape(-1, 2)
    outward = graph.ends[mine, 1] == node
    owner = [lines[i] for i in graph.line[mine].tolist()]
    late = [int(2 * part >= len(one.points) - 1 and len(one.points) > 2)
            for part, one in zip(graph.part[mine].tolist(), owner, strict=True)]  # fmt: skip
    reach = np.array([one.reach[k] for one, k in zip(owner, late, strict=True)])
    pace = np.array([one.pace[k] for one, k in zip(owner, late, strict=True)])
    return LooseEnds(
        node=node.astype(np.int64),
        edge=mine,
        at=graph.xy[node],
        ahead=np.where(outward[:, None], drawn, -drawn),
        reach=reach,
        pace=pace,
    )


def _direction(graph: WallGraph, lines: Sequence[WallLine], edge: int) -> Floats:
    """Unit vector of an edge from its first to its second node."""
    a, b = graph.xy[graph.ends[edge]]
    part = int(graph.part[edge])
    along = b - a
    if part >= 0:
        points = lines[graph.line[edge]].points
        drawn = points[part + 1] - points[part]
        along = drawn if drawn @ along >= 0 else -drawn
    return np.asarray(along / np.hypot(*along))


def _end_to_end(ends: LooseEnds, tolerance: float) -> list[Join]:
    pairs = cKDTree(ends.at).query_pairs(2.5 * float(ends.reach.max()), output_type="ndarray")
    i, j = pairs[np.lexsort((pairs[:, 1], pairs[:, 0]))].T
    di, dj, gap = ends.ahead[i], ends.ahead[j], ends.at[j] - ends.at[i]
    span = np.hypot(*gap.T)
    det = cross(di, dj)
    safe = np.where(np.abs(det) > 0.03, det, np.inf)
    s, t = cross(gap, dj) / safe, cross(gap, di) / safe
    half = 0.5 * np.arccos(np.clip((di * dj).sum(axis=1), -1.0, 1.0))
    stretch = np.maximum(1.0, 0.6 / np.tan(np.maximum(half, 0.1)))
    back = -np.maximum(tolerance, 0.1 * np.minimum(ends.reach[i], ends.reach[j]))
    corner = (np.abs(det) > 0.03) & (s >= back) & (t >= back)
    corner &= (s <= stretch * ends.reach[i]) & (t <= stretch * ends.reach[j])
    pace = np.maximum(ends.pace[i], ends.pace[j])
    beside = ~corner & (span <= NEXT_PILE * pace)
    look = np.cos(np.radians(FACING)) * span
    facing = ((di * gap).sum(axis=1) >= look) & (-(dj * gap).sum(axis=1) >= look)
    facing &= span <= np.maximum(ends.reach[i], ends.reach[j])
    meet = ends.at[i] + s[:, None] * di
    cost = np.where(facing, span, np.where(corner, np.maximum(s, 0.0) + np.maximum(t, 0.0), 1.2 * span))
    straight = facing | beside | (np.minimum(np.abs(s), np.abs(t)) <= tolerance)
    return [
        Join(cost=float(cost[k]), end=int(i[k]), other=int(j[k]), node=int(ends.node[j[k]]) if straight[k] else None,
             point=None if straight[k] else (float(meet[k, 0]), float(meet[k, 1])))
        for k in np.flatnonzero(corner | facing | beside)
    ]  # fmt: skip


def _end_to_edge(graph: WallGraph, ends: LooseEnds, tolerance: float) -> list[Join]:
    rays = shapely.linestrings(np.stack((ends.at, ends.at + ends.ahead * ends.reach[:, None]), axis=1))
    end, edge = edge_tree(graph).query(rays, predicate="dwithin", distance=0.5 * tolerance)
    a, b = graph.ends[edge].T
    other = (a != ends.node[end]) & (b != ends.node[end])
    end, edge, a, b = end[other], edge[other], a[other], b[other]
    along = graph.xy[b] - graph.xy[a]
    det = cross(ends.ahead[end], along)
    ok = np.abs(det) > 0.03 * np.hypot(*along.T)
    s = cross(graph.xy[a] - ends.at[end], along) / np.where(ok, det, 1.0)
    meet = ends.at[end] + s[:, None] * ends.ahead[end]
    to_a, to_b = np.hypot(*(meet - graph.xy[a]).T), np.hypot(*(meet - graph.xy[b]).T)
    is_bay = (graph.pile[a] >= 0) & (graph.pile[b] >= 0)
    span = np.hypot(*along.T)
    t = ((meet - graph.xy[a]) * along).sum(axis=1) / span
    at_node = np.minimum(to_a, to_b) <= np.where(is_bay, NEAR_PILE * span, tolerance)
    nearer = np.where(to_a < to_b, a, b)
    cost = s + np.where(is_bay, 0.0, FOREIGN * ends.pace[end])
    return [
        Join(cost=float(cost[k]), end=int(end[k]), node=int(nearer[k])) if at_node[k] else
        Join(cost=float(cost[k]), end=int(end[k]), edge=int(edge[k]), point=(float(meet[k, 0]), float(meet[k, 1])))
        for k in np.flatnonzero(ok & (s >= 0) & (t >= -tolerance) & (t <= span + tolerance))
    ]  # fmt: skip


def _apply(graph: WallGraph, ends: LooseEnds, joins: Sequence[Join]) -> WallGraph:
    points = np.array([j.point for j in joins if j.point is not None]).reshape(-1, 2)
    grown, fresh = add_nodes(graph, points)
    numbers = iter(fresh.tolist())
    pairs: list[tuple[int, int]] = []
    line: list[int] = []
    cuts: list[tuple[int, int]] = []
    for join in joins:
        mine, here = int(ends.node[join.end]), int(graph.line[ends.edge[join.end]])
        to = next(numbers) if join.node is None else join.node
        pairs.append((mine, to))
        line.append(here)
        if join.other is not None and join.point is not None:
            pairs.append((to, int(ends.node[join.other])))
            line.append(int(graph.line[ends.edge[join.other]]))
        if join.edge is not None:
            cuts.append((join.edge, to))
    grown = cut(grown, *np.array(cuts, dtype=np.int64).reshape(-1, 2).T)
    made = len(pairs)
    return replace(
        grown,
        ends=np.vstack((grown.ends, np.array(pairs, dtype=np.int64).reshape(-1, 2))),
        line=np.append(grown.line, np.array(line, dtype=np.int64)),
        part=np.append(grown.part, np.full(made, -1, dtype=np.int64)),
        forward=np.append(grown.forward, np.ones(made, dtype=bool)),
    )


def drop_stubs(graph: WallGraph, lines: Sequence[WallLine]) -> WallGraph:
    """Leave out single edges that stick out past a junction by no more than an overshoot, unless a pile ends them."""
    limit = np.array([stub_length(line) for line in lines])[graph.line]
    degree = graph.degree[graph.ends]
    span = np.hypot(*(graph.xy[graph.ends[:, 1]] - graph.xy[graph.ends[:, 0]]).T)
    loose = graph.ends[np.arange(len(degree)), degree.argmin(axis=1)]
    stub = (degree.min(axis=1) == 1) & (degree.max(axis=1) >= 3) & (span <= limit) & (graph.pile[loose] < 0)
    return graph.pick(~stub)
