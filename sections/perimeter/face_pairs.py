"""Which drawn faces belong together: candidates by distance and direction, then the best matching of all.

Faces are first parted where an opposite face begins or ends, so that one long face may answer to several short ones.
Taking the nearest pair first fails at cavity walls; a matching of greatest weight does not.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import networkx as nx
import numpy as np
import shapely
from scipy.spatial import cKDTree

from sections.model import Bools, Floats, Ints

THICKEST, THINNEST = 2.0, 0.05
"""Thickness of wall looked for between two faces, m (common practice, no source)."""
PARALLEL = 4.0
"""Faces of one wall are parallel within this (chords of two arcs may differ a little), degrees."""
STRAIGHT = 0.3
"""Faces this parallel are no chords of arcs: a short stretch beside each other will do, degrees."""
SLIVER = 0.03
MUCH_THICKER = 1.3
SURE_MARGIN = 0.2
"""A second matching that is worse by less than this leaves the pairing open."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Faces:
    """Straight face segments: ends, the piece each comes from, the body it bounds (-1 for none), thickness if known."""

    p: Floats
    q: Floats
    piece: Ints
    body: Ints
    thickness: Floats

    def pick(self, mask: Bools | Ints) -> Faces:
        """Some of the faces."""
        return Faces(p=self.p[mask], q=self.q[mask], piece=self.piece[mask], body=self.body[mask],
                     thickness=self.thickness[mask])  # fmt: skip

    @cached_property
    def along(self) -> Floats:
        """Unit directions."""
        way = self.q - self.p
        return np.asarray(way / np.maximum(np.hypot(*way.T), 1e-12)[:, None])

    @cached_property
    def length(self) -> Floats:
        """Lengths, m."""
        return np.asarray(np.hypot(*(self.q - self.p).T))


@dataclass(frozen=True, kw_only=True)
class Pair:
    """Two faces that bound a wall over a stretch of the first one (from `start` to `stop` along it, m)."""

    first: int
    second: int
    start: float
    stop: float


def drop_doubles(faces: Faces) -> Faces:
    """Leave out faces drawn twice (both ends within 20 mm)."""
    swap = (faces.p[:, 0] > faces.q[:, 0]) | ((faces.p[:, 0] == faces.q[:, 0]) & (faces.p[:, 1] > faces.q[:, 1]))
    ends = np.where(swap[:, None], np.hstack((faces.q, faces.p)), np.hstack((faces.p, faces.q)))
    keep = np.ones(len(ends), dtype=bool)
    for a, b in sorted(cKDTree(ends).query_pairs(0.02)):
        if keep[a]:
            keep[b] = False
    return faces.pick(keep)


def candidates(faces: Faces, within: bool) -> Ints:
    """Pairs of faces that could bound one wall.

    Args:
        faces: The faces.
        within: True to look only at faces of one body (which is longer than it is thick), False to look at all.
    """
    lines = np.asarray(shapely.linestrings(np.stack((faces.p, faces.q), axis=1))).tolist()
    a, b = shapely.STRtree(lines).query(lines, predicate="dwithin", distance=THICKEST)
    ok = a < b
    if within:
        ok &= faces.body[a] == faces.body[b]
    a, b = a[ok], b[ok]
    u = faces.along
    ok = np.abs((u[a] * u[b]).sum(axis=1)) >= np.cos(np.radians(PARALLEL))
    a, b = a[ok], b[ok]
    low, high, offset = beside(faces, np.column_stack((a, b)))
    shorter = np.minimum(faces.length[a], faces.length[b])
    bent = np.abs((u[a] * u[b]).sum(axis=1)) < np.cos(np.radians(STRAIGHT))
    least = np.where(bent, np.maximum(0.2 * shorter, SLIVER), 2 * SLIVER)
    ok = (high - low >= least) & (offset >= THINNEST) & (offset <= THICKEST)
    for side in (a, b):
        said = faces.thickness[side]
        ok &= np.isnan(said) | (np.abs(offset - said) <= 0.03)
    if within:
        ok &= _usual(faces.body[a], offset, np.where(ok, high - low, 0.0))
    return np.column_stack((a[ok], b[ok]))


def _usual(body: Ints, offset: Floats, length: Floats) -> Bools:
    """Pairs that are not much thicker than what most of the body is: its two ends are no faces of it."""
    ok = np.ones(len(body), dtype=bool)
    for one in np.unique(body):
        mine = np.flatnonzero(body == one)
        order = mine[np.argsort(offset[mine])]
        along = np.cumsum(length[order])
        middle = offset[order[int(np.searchsorted(along, 0.5 * along[-1]))]]
        ok[mine] = offset[mine] <= MUCH_THICKER * middle
    return ok


def beside(faces: Faces, pairs: Ints) -> tuple[Floats, Floats, Floats]:
    """Stretch of the first face that lies beside the second (from, to along it), and their distance there, m."""
    a, b = pairs.T
    low, high = _overlap(faces, a, b)
    return low, high, _offset(faces, a, b, 0.5 * (low + high))


def _overlap(faces: Faces, a: Ints, b: Ints) -> tuple[Floats, Floats]:
    """Stretch of face `a` that lies beside face `b`, as distances from its first end."""
    u = faces.along[a]
    s = ((faces.p[b] - faces.p[a]) * u).sum(axis=1)
    t = ((faces.q[b] - faces.p[a]) * u).sum(axis=1)
    return np.maximum(np.minimum(s, t), 0.0), np.minimum(np.maximum(s, t), faces.length[a])


def _offset(faces: Faces, a: Ints, b: Ints, at: Floats) -> Floats:
    """Distance from a point on face `a` to the line of face `b`."""
    point = faces.p[a] + at[:, None] * faces.along[a]
    way, u = point - faces.p[b], faces.along[b]
    return np.asarray(np.abs(u[:, 0] * way[:, 1] - u[:, 1] * way[:, 0]))


def pair_faces(faces: Faces, pairs: Ints, capped: set[tuple[int, int]]) -> tuple[list[Pair], list[tuple[int, int]]]:
    """Choose among candidate pairs.

    Args:
        faces: The faces.
        pairs: (k, 2) candidates.
        capped: Pairs whose ends a short drawn segment joins.

    Returns:
        The pairs chosen, and pairs for which another choice is about as good.
    """
    atoms = _atoms(faces, pairs)
    graph: nx.Graph[Node] = nx.Graph()
    for a, b in pairs.tolist():
        for k, (low, high) in enumerate(atoms[a]):
            middle = 0.5 * (low + high)
            m = _atom_at(faces, atoms, a, b, middle)
            if m is not None:
                thick = float(_offset(faces, np.array([a]), np.array([b]), np.array([middle]))[0])
                weight = 4.0 - thick + (4.0 if (a, b) in capped else 0.0)
                graph.add_edge((a, k), (b, m), weight=weight)
    chosen: list[Pair] = []
    open_pairs: list[tuple[int, int]] = []
    for part in sorted(nx.connected_components(graph), key=min):
        matched, unsure = _match(graph.subgraph(part).copy())
        for (a, k), (b, m) in matched:
            first, second, atom = (a, b, k) if (a, k) < (b, m) else (b, a, m)
            low, high = atoms[first][atom]
            chosen.append(Pair(first=first, second=second, start=low, stop=high))
        open_pairs += unsure
    return _joined(chosen), open_pairs


def _atoms(faces: Faces, pairs: Ints) -> list[list[tuple[float, float]]]:
    """Every face parted where an opposite face begins or ends."""
    near: list[list[int]] = [[] for _ in faces.p]
    for a, b in pairs.tolist():
        near[a].append(b)
        near[b].append(a)
    length, along = faces.length, faces.along
    breaks: list[list[Floats]] = [[] for _ in faces.p]
    for i, others in enumerate(near):
        far = {k for j in others for k in (j, *near[j]) if k != i}
        breaks[i] = [end for k in sorted(far) for end in (faces.p[k], faces.q[k])]
    atoms = []
    for i, points in enumerate(breaks):
        at = [float((point - faces.p[i]) @ along[i]) for point in points]
        inside = sorted({round(s, 4) for s in at if SLIVER < s < length[i] - SLIVER})
        cuts = [0.0]
        for s in inside:
            if s - cuts[-1] > SLIVER:
                cuts.append(s)
        atoms.append(list(zip(cuts, [*cuts[1:], float(length[i])], strict=True)))
    return atoms


def _atom_at(
    faces: Faces, atoms: Sequence[Sequence[tuple[float, float]]], a: int, b: int, at: float
) -> int | None:  # fmt: skip
    """Number of the part of face `b` beside a point of face `a`."""
    point = faces.p[a] + at * faces.along[a]
    s = float((point - faces.p[b]) @ faces.along[b])
    for m, (low, high) in enumerate(atoms[b]):
        if low <= s <= high:
            return m
    return None


Node = tuple[int, int]


def _match(graph: nx.Graph[Node]) -> tuple[list[tuple[Node, Node]], list[tuple[int, int]]]:
    """Greatest matching of a component, and the pairs that could as well be otherwise."""
    if graph.number_of_nodes() == 2:
        a, b = sorted(graph.nodes)
        return [(a, b)], []
    best = _sorted_matching(graph)
    unsure: list[tuple[int, int]] = []
    if graph.number_of_nodes() <= 16:
        value = sum(graph.edges[e]["weight"] for e in best)
        for edge in best:
            less = graph.copy()
            less.remove_edge(*edge)
            other = _sorted_matching(less)
            worth = sum(graph.edges[e]["weight"] for e in other)
            if len(other) == len(best) and value - worth < SURE_MARGIN:
                unsure.append((edge[0][0], edge[1][0]))
    return best, unsure


def _sorted_matching(graph: nx.Graph[Node]) -> list[tuple[Node, Node]]:
    ordered: nx.Graph[Node] = nx.Graph()
    ordered.add_nodes_from(sorted(graph.nodes))
    ordered.add_weighted_edges_from(sorted((min(a, b), max(a, b), d["weight"]) for a, b, d in graph.edges(data=True)))
    found = nx.max_weight_matching(ordered, maxcardinality=True)
    return sorted((min(a, b), max(a, b)) for a, b in found)


def _joined(pairs: Sequence[Pair]) -> list[Pair]:
    """Neighbouring stretches of the same two faces become one."""
    joined: list[Pair] = []
    for pair in sorted(pairs, key=lambda p: (p.first, p.second, p.start)):
        last = joined[-1] if joined else None
        if last and (last.first, last.second) == (pair.first, pair.second) and pair.start - last.stop < SLIVER:
            joined[-1] = Pair(first=last.first, second=last.second, start=last.start, stop=pair.stop)
        else:
            joined.append(pair)
    return joined
