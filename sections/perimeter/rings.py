"""Closed rings and open stretches of a network of walls."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components

from sections.model import Bools, Floats, Ints
from sections.perimeter.wall_graph import WallGraph, cross

THINNEST = 0.6
"""Mean width below which a closed shape is the body of a wall, not a pit, m (judgement)."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Trace:
    """A way along a network: edge numbers in order and whether each is walked with its own sense."""

    graph: WallGraph
    edges: Ints
    forward: Bools
    closed: bool

    @property
    def nodes(self) -> Ints:
        """Nodes in order; an open way has one more than edges."""
        start = np.where(self.forward, self.graph.ends[self.edges, 0], self.graph.ends[self.edges, 1])
        if self.closed:
            return np.asarray(start, dtype=np.int64)
        last = self.graph.ends[self.edges[-1], 1 if self.forward[-1] else 0]
        return np.append(start, last).astype(np.int64)

    @property
    def points(self) -> Floats:
        """Plan points in order."""
        return self.graph.xy[self.nodes]

    @property
    def length(self) -> float:
        """Length of the way, m."""
        ends = self.graph.xy[self.graph.ends[self.edges]]
        return float(np.hypot(*(ends[:, 1] - ends[:, 0]).T).sum())

    def reversed(self) -> Trace:
        """The same way walked backwards."""
        return Trace(graph=self.graph, edges=self.edges[::-1], forward=~self.forward[::-1], closed=self.closed)


@dataclass(frozen=True, kw_only=True, eq=False)
class Faces:
    """Faces of a planar network: for each half-edge (edge then its twin) its face and the half-edge after it."""

    after: Ints
    face: Ints
    area: Floats
    length: Floats


def trace_faces(graph: WallGraph) -> Faces:
    """Walk every face with the face on the left; inner faces come out with a positive area, m2."""
    count = len(graph.ends)
    tail = np.concatenate((graph.ends[:, 0], graph.ends[:, 1]))
    head = np.concatenate((graph.ends[:, 1], graph.ends[:, 0]))
    twin = np.concatenate((np.arange(count, 2 * count), np.arange(count)))
    way = graph.xy[head] - graph.xy[tail]
    order = np.lexsort((np.arctan2(way[:, 1], way[:, 0]), tail))
    degree = np.bincount(tail, minlength=len(graph.xy))
    first = np.cumsum(degree) - degree
    place = np.empty(2 * count, dtype=np.int64)
    place[order] = np.arange(2 * count) - first[tail[order]]
    after = order[first[head] + (place[twin] - 1) % degree[head]]
    links = coo_array((np.ones(2 * count), (np.arange(2 * count), after)), shape=(2 * count, 2 * count))
    total, face = connected_components(links, directed=False)
    area = np.asarray(0.5 * np.bincount(face, cross(graph.xy[tail], graph.xy[head]), minlength=total), dtype=float)
    length = np.asarray(np.bincount(face, np.hypot(*way.T), minlength=total), dtype=float)
    return Faces(after=after.astype(np.int64), face=face.astype(np.int64), area=area, length=length)


def prune(graph: WallGraph) -> WallGraph:
    """Only edges with different faces on their two sides: loose ends and bridges are left out."""
    while len(graph.ends):
        face = trace_faces(graph).face.reshape(2, -1)
        keep = face[0] != face[1]
        if keep.all():
            break
        graph = graph.pick(keep)
    return graph


def find_rings(graph: WallGraph, parting: Bools) -> tuple[Trace, ...]:
    """Rings round every pit: faces that no parting wall divides are one pit.

    Args:
        graph: The network, loose ends allowed.
        parting: (m,) True for walls that part two pits when there is a pit on either side.

    Returns:
        Counter-clockwise rings, one for each pit; a wall between two pits is in both.
    """
    mask = _with_sides(graph)
    inner, parting = graph.pick(mask), parting[mask]
    if not len(inner.ends):
        return ()
    faces = trace_faces(inner)
    left, right = faces.face.reshape(2, -1)
    pit = (faces.area > 0) & (2 * faces.area > THINNEST * faces.length)
    open_between = pit[left] & pit[right] & ~parting
    total = len(faces.area)
    joined = coo_array((np.ones(open_between.sum()), (left[open_between], right[open_between])), shape=(total, total))
    _, part = connected_components(joined, directed=False)
    region: Ints = np.where(pit, part, -1).astype(np.int64)
    outline = inner.pick(region[left] != region[right])
    again = trace_faces(outline)
    return tuple(_ring(outline, again, int(k)) for k in np.flatnonzero(_is_pit(outline, again, inner, faces, region)))


def _with_sides(graph: WallGraph) -> Bools:
    """Mask of the edges that `prune` leaves."""
    number = np.arange(len(graph.ends))
    kept = prune(WallGraph(xy=graph.xy, ends=graph.ends, line=number, part=number,
                           forward=graph.forward, pile=graph.pile)).line  # fmt: skip
    mask = np.zeros(len(graph.ends), dtype=bool)
    mask[kept] = True
    return mask


def _is_pit(outline: WallGraph, again: Faces, inner: WallGraph, faces: Faces, region: Ints) -> Bools:
    """Faces of the outline that are pits: those whose half-edges had a pit on the left before."""
    count, many = len(outline.ends), len(inner.ends)
    key = inner.ends @ np.array([len(inner.xy), 1])
    order = np.argsort(key)
    mine = order[np.searchsorted(key[order], outline.ends @ np.array([len(inner.xy), 1]))]
    was = region[faces.face[np.concatenate((mine, mine + many))]] >= 0
    result = np.zeros(len(again.area), dtype=bool)
    result[again.face[: 2 * count][was]] = True
    return result & (again.area > 0)


def _ring(graph: WallGraph, faces: Faces, number: int) -> Trace:
    count = len(graph.ends)
    start = int(np.flatnonzero(faces.face == number)[0])
    walk = [start]
    at = int(faces.after[start])
    while at != start:
        walk.append(at)
        at = int(faces.after[at])
    half = np.array(walk, dtype=np.int64)
    return Trace(graph=graph, edges=half % count, forward=half < count, closed=True)


def find_open(graph: WallGraph) -> tuple[Trace, ...]:
    """The longest way through every connected part of a network, shortest parts last."""
    _, label = connected_components(
        coo_array((np.ones(len(graph.ends)), graph.ends.T), shape=(len(graph.xy),) * 2), directed=False
    )
    traces = []
    span = _spans(graph)
    part = label[graph.ends[:, 0]]
    order = np.argsort(part, kind="stable")
    for mine in np.split(order, np.flatnonzero(np.diff(part[order])) + 1):
        trace = _longest(graph, mine, span) if len(mine) else None
        if trace is not None:
            traces.append(trace)
    return tuple(sorted(traces, key=lambda t: -float(span[t.edges].sum())))


def _spans(graph: WallGraph) -> Floats:
    return np.asarray(np.hypot(*(graph.xy[graph.ends[:, 1]] - graph.xy[graph.ends[:, 0]]).T))


def _longest(graph: WallGraph, edges: Ints, span: Floats) -> Trace | None:
    """Longest way through a tree of edges, by two sweeps from the farthest node."""
    near: dict[int, list[tuple[int, int, float]]] = {}
    for e in edges.tolist():
        a, b = graph.ends[e].tolist()
        near.setdefault(a, []).append((b, e, float(span[e])))
        near.setdefault(b, []).append((a, e, float(span[e])))
    start, _ = _sweep(near, min(near))
    end, back = _sweep(near, start)
    walk: list[int] = []
    at = end
    while at != start:
        before, e = back[at]
        walk.append(e)
        at = before
    if not walk:
        return None
    chosen = np.array(walk[::-1], dtype=np.int64)
    forward = np.empty(len(chosen), dtype=bool)
    at = start
    for k, e in enumerate(chosen.tolist()):
        forward[k] = graph.ends[e, 0] == at
        at = int(graph.ends[e, 1 if forward[k] else 0])
    return Trace(graph=graph, edges=chosen, forward=forward, closed=False)


def _sweep(near: dict[int, list[tuple[int, int, float]]], start: int) -> tuple[int, dict[int, tuple[int, int]]]:
    """Farthest node from `start`, and for every node the node and edge before it."""
    far, best = start, 0.0
    reached = {start: 0.0}
    back: dict[int, tuple[int, int]] = {}
    todo = [start]
    while todo:
        at = todo.pop()
        for to, edge, span in near[at]:
            if to not in reached:
                reached[to] = reached[at] + span
                back[to] = (at, edge)
                todo.append(to)
                if reached[to] > best:
                    far, best = to, reached[to]
    return far, back
