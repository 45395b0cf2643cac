"""Wall lines to a plan network: ends brought together, junctions and crossings made, corners extended to meet.

Ends are clustered by distance, never rounded to a grid: a grid parts neighbours that straddle its lines.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components
from scipy.spatial import cKDTree

from sections.model import Bools, Floats, Ints
from sections.perimeter.wall_lines import PLAIN_REACH, WallLine

EXACT = 1e-3
"""Ends closer than this are the same point, m."""
TWICE = 0.02
"""Points of two lines closer than this belong to a wall drawn twice, m."""


@dataclass(frozen=True, kw_only=True, eq=False)
class WallGraph:
    """A plan network of walls.

    Attributes:
        xy: (k, 2) nodes.
        ends: (m, 2) node numbers of each edge.
        line: (m,) wall line of each edge.
        part: (m,) segment number within that line; -1 for a piece made to close a gap or a corner.
        forward: (m,) True where the edge runs with its line.
        pile: (k,) index into `Site.piles` of the pile at the node, -1 where there is none.
    """

    xy: Floats
    ends: Ints
    line: Ints
    part: Ints
    forward: Bools
    pile: Ints

    @property
    def degree(self) -> Ints:
        """Number of edges at each node."""
        return np.bincount(self.ends.ravel(), minlength=len(self.xy)).astype(np.int64)

    def pick(self, mask: Bools) -> WallGraph:
        """The same nodes with only the edges where `mask` is True."""
        return replace(
            self, ends=self.ends[mask], line=self.line[mask], part=self.part[mask], forward=self.forward[mask]
        )


def build_graph(lines: Sequence[WallLine], tolerance: float) -> WallGraph:
    """Join wall lines into one network.

    Args:
        lines: The lines, local m.
        tolerance: Gap or overlap that still closes a wall line, m.
    """
    graph = _cluster(_segments(lines), tolerance)
    edge, node, graph = _crossings(graph, tolerance)
    graph = cut(graph, edge, node)
    graph = cut(graph, *_tees(graph, tolerance))
    return _unique(graph, lines)


def _segments(lines: Sequence[WallLine]) -> WallGraph:
    """Every segment with two nodes of its own."""
    counts = [len(line.points) - 1 for line in lines]
    first = np.vstack([line.points[:-1] for line in lines])
    last = np.vstack([line.points[1:] for line in lines])
    piles = [line.piles if len(line.piles) else np.full(len(line.points), -1) for line in lines]
    total = len(first)
    return WallGraph(
        xy=np.vstack((first, last)),
        ends=np.arange(2 * total).reshape(2, -1).T.astype(np.int64),
        line=np.repeat(np.arange(len(lines)), counts).astype(np.int64),
        part=np.concatenate([np.arange(n) for n in counts]).astype(np.int64),
        forward=np.ones(total, dtype=bool),
        pile=np.concatenate([p[:-1] for p in piles] + [p[1:] for p in piles]).astype(np.int64),
    )


def _cluster(graph: WallGraph, tolerance: float) -> WallGraph:
    """Bring ends together: first the same points, then loose ends and walls drawn twice, never neighbours on a line."""
    graph = _merge(graph, cKDTree(graph.xy).query_pairs(EXACT, output_type="ndarray"))
    pairs = cKDTree(graph.xy).query_pairs(tolerance, output_type="ndarray")
    if not len(pairs):
        return graph
    loose = graph.degree < 2
    span = np.hypot(*(graph.xy[pairs[:, 0]] - graph.xy[pairs[:, 1]]).T)
    count = len(graph.xy)
    joined = np.isin(np.sort(pairs, axis=1) @ [count, 1], np.sort(graph.ends, axis=1) @ [count, 1])
    may = (loose[pairs].any(axis=1) | (span <= TWICE)) & ~joined
    return _merge(graph, pairs[may])


def _merge(graph: WallGraph, pairs: Ints) -> WallGraph:
    """Nodes of a pair become one: at the pile if there is one, else at their mean. Edges that vanish are dropped."""
    count = len(graph.xy)
    near = coo_array((np.ones(len(pairs)), (pairs[:, 0], pairs[:, 1])), shape=(count, count))
    total, label = connected_components(near, directed=False)
    is_pile = graph.pile >= 0
    weight = np.where(is_pile, 1.0, np.where(np.bincount(label, is_pile)[label] > 0, 0.0, 1.0))
    share = np.bincount(label, weight)
    xy = np.column_stack([np.bincount(label, weight * graph.xy[:, k]) / share for k in (0, 1)])
    pile = np.full(total, -1, dtype=np.int64)
    np.maximum.at(pile, label, graph.pile)
    ends = label[graph.ends].astype(np.int64)
    merged = replace(graph, xy=xy, ends=ends, pile=pile)
    return merged.pick(ends[:, 0] != ends[:, 1])


def edge_tree(graph: WallGraph) -> shapely.STRtree:
    """Search tree of the edges."""
    return shapely.STRtree(np.asarray(shapely.linestrings(graph.xy[graph.ends])).tolist())


def _crossings(graph: WallGraph, tolerance: float) -> tuple[Ints, Ints, WallGraph]:
    """Where two edges cross away from their ends: the edges to cut, the node to cut each at."""
    tree = edge_tree(graph)
    first, second = tree.query(tree.geometries, predicate="crosses")
    once = first < second
    first, second = first[once], second[once]
    p, q = graph.xy[graph.ends[first, 0]], graph.xy[graph.ends[first, 1]]
    r, s = graph.xy[graph.ends[second, 0]], graph.xy[graph.ends[second, 1]]
    d, e = q - p, s - r
    det = cross(d, e)
    ok = np.abs(det) > 1e-9
    t = cross(r - p, e) / np.where(ok, det, 1.0)
    u = cross(r - p, d) / np.where(ok, det, 1.0)
    away_t = np.minimum(t, 1 - t) * np.hypot(*d.T) > tolerance
    away_u = np.minimum(u, 1 - u) * np.hypot(*e.T) > tolerance
    ok &= away_t & away_u
    points = (p + t[:, None] * d)[ok]
    grown, nodes = add_nodes(graph, points)
    return np.concatenate((first[ok], second[ok])), np.concatenate((nodes, nodes)), grown


def add_nodes(graph: WallGraph, points: Floats) -> tuple[WallGraph, Ints]:
    """The graph with more nodes, and their numbers."""
    nodes = np.arange(len(graph.xy), len(graph.xy) + len(points), dtype=np.int64)
    pile = np.append(graph.pile, np.full(len(points), -1, dtype=np.int64))
    return replace(graph, xy=np.vstack((graph.xy, points.reshape(-1, 2))), pile=pile), nodes


def _tees(graph: WallGraph, tolerance: float) -> tuple[Ints, Ints]:
    """Nodes that lie on another edge away from its ends."""
    node, edge = edge_tree(graph).query(shapely.points(graph.xy), predicate="dwithin", distance=tolerance)
    a, b = graph.ends[edge].T
    other = (a != node) & (b != node)
    node, edge, a, b = node[other], edge[other], a[other], b[other]
    point = graph.xy[node]
    beside = np.minimum(np.hypot(*(point - graph.xy[a]).T), np.hypot(*(point - graph.xy[b]).T))
    along = graph.xy[b] - graph.xy[a]
    t = ((point - graph.xy[a]) * along).sum(axis=1) / np.maximum((along**2).sum(axis=1), 1e-12)
    inside = (beside > 0.5 * tolerance) & (t > 0) & (t < 1)
    return edge[inside].astype(np.int64), node[inside].astype(np.int64)


def cut(graph: WallGraph, edge: Ints, node: Ints) -> WallGraph:
    """Cut edges at nodes; the pieces keep line, part and sense."""
    if not len(edge):
        return graph
    a, b = graph.ends[edge].T
    along = graph.xy[b] - graph.xy[a]
    t = ((graph.xy[node] - graph.xy[a]) * along).sum(axis=1) / (along**2).sum(axis=1)
    every = np.arange(len(graph.ends))
    owner = np.concatenate((every, edge, every))
    stop = np.concatenate((graph.ends[:, 0], node, graph.ends[:, 1]))
    order = np.lexsort((np.concatenate((np.full(len(every), -1.0), t, np.full(len(every), 2.0))), owner))
    owner, stop = owner[order], stop[order]
    keep = (owner[:-1] == owner[1:]) & (stop[:-1] != stop[1:])
    source = owner[:-1][keep]
    return replace(
        graph,
        ends=np.column_stack((stop[:-1], stop[1:]))[keep].astype(np.int64),
        line=graph.line[source],
        part=graph.part[source],
        forward=graph.forward[source],
    )


def _unique(graph: WallGraph, lines: Sequence[WallLine]) -> WallGraph:
    """Of edges between the same nodes the one of the best evidence stays: piles, then named walls, then thickness."""
    rank = np.array([_rank(line) for line in lines])[graph.line]
    order = np.lexsort((graph.part, graph.line, rank))
    pairs = np.sort(graph.ends[order], axis=1)
    _, first = np.unique(pairs, axis=0, return_index=True)
    mask = np.zeros(len(graph.ends), dtype=bool)
    mask[order[first]] = True
    return graph.pick(mask)


def _rank(line: WallLine) -> int:
    return 4 * (not len(line.piles)) + 2 * (not line.embedded) + (line.thickness is None)


def cross(a: Floats, b: Floats) -> Floats:
    """The vertical component of the cross product of plan vectors."""
    return np.asarray(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0])


def stub_length(line: WallLine) -> float:
    """Length up to which a loose end beyond a junction is only an overshoot, m."""
    return 1.2 * line.thickness if line.thickness is not None else PLAIN_REACH
