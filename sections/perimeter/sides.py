"""A ring or an open way of walls read as straight sides and arcs, by exact segmentation of its points.

The points are pile centres and the ends and middles of drawn segments, as drawn and before ends were brought together,
so that a gap at an end does not turn a side. The split into sides is the cheapest of all (optimal partitioning, as in
Jackson et al. 2005, recalled): squared distance over squared tolerance, plus a price for every side.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from ingest.members import Point
from sections.model import Bools, Floats, Ints
from sections.perimeter.circle_fit import fit_circle
from sections.perimeter.rings import Trace
from sections.perimeter.wall_graph import cross
from sections.perimeter.wall_lines import WallLine

TOLERANCE = 0.005
"""How far points of one side are expected to lie from it, m; rows of piles set out less well raise it."""
MOST_NOISE = 0.008
"""Scatter above this is no scatter but the shape of the row, m."""
ROUGHER = (3.0, 8.0)
RAGGED_TURN = 15.0
"""Bends to and fro of less than this are scatter, degrees."""
LINE_PRICE, ARC_PRICE, POINT_PRICE = 14.0, 20.0, 8.0
MOST_RADIUS, LEAST_RADIUS = 2000.0, 0.6
LEAST_RISE = 0.03
"""Rise of an arc over its chord below which a straight line says the same, m."""
MOST_BREAKS = 600


@dataclass(frozen=True, kw_only=True, eq=False)
class Samples:
    """Points along a way, local m.

    Attributes:
        xy: (n, 2) points.
        opens: (n,) True where a new side may begin with this point.
        weight: (n,) length of wall the point stands for, m.
        pile: (n,) True for pile centres.
        middle: (n,) True for middles of drawn segments, which lie off the arc that chords stand for.
        closed: True for a ring.
        rough: Factor on the tolerance where the points turn out not to lie in line.
    """

    xy: Floats
    opens: Bools
    weight: Floats
    pile: Bools
    middle: Bools
    closed: bool
    rough: float = 1.0

    def pick(self, keep: Ints | Bools) -> Samples:
        """Some of the samples, or all in another order."""
        return Samples(xy=self.xy[keep], opens=self.opens[keep], weight=self.weight[keep], pile=self.pile[keep],
                       middle=self.middle[keep], closed=self.closed, rough=self.rough)  # fmt: skip


@dataclass(frozen=True, kw_only=True, eq=False)
class Side:
    """A straight side, an arc, or a lone point between two sides.

    Attributes:
        form: What it is.
        first, last: Its first and last point, on the fitted line or arc.
        ahead: Unit direction of a straight side.
        centre, radius: Of an arc. `turn` is 1 where it bends to the left, -1 to the right.
        block: Range of samples it was fitted to.
    """

    form: Literal["line", "arc", "point"]
    first: Floats
    last: Floats
    ahead: Floats
    centre: Floats
    radius: float
    turn: int
    block: tuple[int, int]


def sample_way(trace: Trace, lines: Sequence[WallLine]) -> Samples:
    """Points along a way as they were drawn."""
    graph = trace.graph
    line, part = graph.line[trace.edges], graph.part[trace.edges]
    tail = graph.ends[trace.edges, np.where(trace.forward, 0, 1)]
    head = graph.ends[trace.edges, np.where(trace.forward, 1, 0)]
    bay = np.array([len(one.piles) > 0 for one in lines])[line] & (part >= 0)
    plain = ~bay & (part >= 0)
    start, end = _as_drawn(graph.xy, tail, head, line, part, lines)
    points = np.stack((start, 0.5 * (start + end), end), axis=1)
    at_pile = graph.pile[np.stack((tail, tail, head), axis=1)] >= 0
    use = plain[:, None] | (bay[:, None] & at_pile & [True, False, True])
    span = np.hypot(*(end - start).T)
    weight = np.where(plain[:, None], span[:, None] * [1 / 6, 2 / 3, 1 / 6], span[:, None])
    opens = np.where(plain[:, None], [True, False, False], True)
    node = np.where(bay[:, None], np.stack((tail, tail, head), axis=1), -1)
    middle = plain[:, None] & [False, True, False]
    samples = Samples(xy=points[use], opens=opens[use], weight=np.maximum(weight[use], 1e-6), pile=node[use] >= 0,
                      middle=middle[use], closed=trace.closed)  # fmt: skip
    node = node[use]
    same = (node >= 0) & (node == np.roll(node, 1))
    if not trace.closed:
        same[0] = False
    return _from_sharpest(samples.pick(~same))


def _as_drawn(
    xy: Floats, tail: Ints, head: Ints, line: Ints, part: Ints, lines: Sequence[WallLine]
) -> tuple[Floats, Floats]:
    """Ends of edges on the segment as drawn, never beyond its own ends."""
    first = np.concatenate([np.append([0], np.cumsum([len(one.points) for one in lines])[:-1])])
    stacked = np.vstack([one.points for one in lines])
    k = first[line] + np.maximum(part, 0)
    p, q = stacked[k], stacked[np.minimum(k + 1, len(stacked) - 1)]
    along = q - p
    size = np.maximum((along**2).sum(axis=1), 1e-18)
    ends = []
    for node in (tail, head):
        t = np.clip(((xy[node] - p) * along).sum(axis=1) / size, 0.0, 1.0)
        ends.append(p + t[:, None] * along)
    return ends[0], ends[1]


def _from_sharpest(samples: Samples) -> Samples:
    """A ring begins at its sharpest turn, so that the first side begins at a corner if there is one."""
    if not samples.closed:
        return samples
    xy = samples.xy
    back, ahead = np.roll(xy, 1, axis=0) - np.roll(xy, 2, axis=0), np.roll(xy, -1, axis=0) - xy
    turn = np.abs(np.arctan2(cross(back, ahead), (back * ahead).sum(axis=1)))
    turn[~samples.opens] = -1.0
    return samples.pick(np.roll(np.arange(len(xy)), -int(np.argmax(np.round(turn, 6)))))


def tolerance_of(samples: Samples) -> Floats:
    """How far each point may lie from its side, m: more for rows of piles that are not set out in line.

    The noise of a row is read from third differences across the row, which are zero on any line or arc.
    """
    noise = TOLERANCE
    if samples.pile.sum() >= 12:
        third = np.diff(samples.xy, n=3, axis=0)
        along = samples.xy[2:-1] - samples.xy[1:-2]
        across = np.abs(cross(along, third)) / np.maximum(np.hypot(*along.T), 1e-9)
        row = np.array([samples.pile[k : len(samples.pile) - 3 + k] for k in range(4)]).all(axis=0)
        if row.any():
            noise = float(np.median(across[row])) / 0.6745 / np.sqrt(20.0)
    noise = noise if noise < MOST_NOISE else 0.0
    return samples.rough * np.where(samples.pile, max(1.5 * noise, TOLERANCE), TOLERANCE)


def find_sides(samples: Samples) -> tuple[Samples, tuple[Side, ...]]:
    """Split a way into straight sides, arcs and lone points, in order along it.

    A ring is split twice, the second time from a break that the first found, so that where the walk began leaves no
    trace.

    Returns:
        The samples as they were split last, and the sides.
    """
    sides = _split(samples)
    for rough in ROUGHER:
        if not _is_ragged(sides):
            break
        samples = replace(samples, rough=rough)
        sides = _split(samples)
    if samples.closed and len(sides) > 2:
        start = sides[len(sides) // 2].block[0]
        samples = samples.pick(np.roll(np.arange(len(samples.xy)), -start))
        sides = _split(samples)
    return samples, sides


def _is_ragged(sides: Sequence[Side]) -> bool:
    """Many small bends to and fro: piles that were not set out in line, or measured as built."""
    ahead = np.array([side.ahead for side in sides if side.form == "line"]).reshape(-1, 2)
    turn = np.degrees(np.arctan2(cross(ahead[:-1], ahead[1:]), (ahead[:-1] * ahead[1:]).sum(axis=1)))
    small = turn[np.abs(turn) < RAGGED_TURN]
    return bool(len(small) >= 4 and min((small > 0).mean(), (small < 0).mean()) >= 0.25)


def _split(samples: Samples) -> tuple[Side, ...]:
    sigma = tolerance_of(samples)
    starts = _candidates(samples, sigma)
    stops = np.append(starts[1:], len(samples.xy))
    best = np.full(len(starts) + 1, np.inf)
    best[0] = 0.0
    came = np.zeros(len(starts) + 1, dtype=np.int64)
    arc_at = np.zeros(len(starts) + 1, dtype=bool)
    for k, start in enumerate(starts.tolist()):
        line, arc = _block_costs(samples, sigma, start, stops[k:])
        cost = best[k] + np.minimum(line, arc)
        better = cost < best[k + 1 :] - 1e-9
        best[k + 1 :][better] = cost[better]
        came[k + 1 :][better] = k
        arc_at[k + 1 :][better] = (arc < line)[better]
    blocks = []
    at = len(starts)
    while at > 0:
        blocks.append((int(starts[came[at]]), int(stops[at - 1]), bool(arc_at[at])))
        at = int(came[at])
    return tuple(fit_side(samples, i, j, arc) for i, j, arc in blocks[::-1])


def _candidates(samples: Samples, sigma: Floats) -> Ints:
    """Where a new side may begin: away from the middle of straight stretches, thinned where there are very many."""
    count = len(samples.xy)
    opens = samples.opens.copy()
    if opens.sum() > MOST_BREAKS // 4:
        opens &= _bent(samples.xy, sigma, samples.closed)
    opens[0] = True
    starts = np.flatnonzero(opens)
    if len(starts) > MOST_BREAKS:
        starts = np.unique(np.append(0, starts[:: len(starts) // MOST_BREAKS + 1]))
    return starts[starts < count].astype(np.int64)


def _bent(xy: Floats, sigma: Floats, closed: bool) -> Bools:
    """Points within a few places of one that leaves the chord of its neighbours."""
    bent = np.zeros(len(xy), dtype=bool)
    for k in (2, 5):
        before, after = np.roll(xy, k, axis=0), np.roll(xy, -k, axis=0)
        chord = after - before
        rise = np.abs(cross(chord, xy - before)) / np.maximum(np.hypot(*chord.T), 1e-9)
        bent |= rise > 2.0 * sigma
    if not closed:
        bent[:6] = bent[-6:] = True
    wide = np.convolve(bent, np.ones(7), mode="same") > 0
    return np.asarray(wide | np.roll(wide, 3) | np.roll(wide, -3), dtype=np.bool_)


def _block_costs(samples: Samples, sigma: Floats, start: int, stops: Ints) -> tuple[Floats, Floats]:
    """Price of one side from `start` to before each stop, as a straight line and as an arc."""
    local = samples.xy[start:] - samples.xy[start]
    w = 1.0 / sigma[start:] ** 2
    x, y = local.T
    z = x * x + y * y
    pick = stops - start - 1
    terms = (w, w * x, w * y, w * x * x, w * x * y, w * y * y, w * z, w * x * z, w * y * z, w * z * z)
    n, sx, sy, sxx, sxy, syy, sz, sxz, syz, szz = (np.cumsum(term)[pick] for term in terms)
    cxx, cxy, cyy = sxx - sx * sx / n, sxy - sx * sy / n, syy - sy * sy / n
    cxz, cyz, czz = sxz - sx * sz / n, syz - sy * sz / n, szz - sz * sz / n
    line = np.maximum(0.5 * (cxx + cyy - np.hypot(cxx - cyy, 2 * cxy)), 0.0) + LINE_PRICE
    line[pick == 0] = POINT_PRICE
    det = cxx * cyy - cxy * cxy
    safe = np.where(det > 1e-12 * cxx * cyy, det, np.inf)
    a, b = (cxz * cyy - cyz * cxy) / safe, (cyz * cxx - cxz * cxy) / safe
    r2 = (sz - a * sx - b * sy) / n + 0.25 * (a * a + b * b)
    arc = np.maximum(czz - a * cxz - b * cyz, 0.0) / (4.0 * np.maximum(r2, 1e-6)) + ARC_PRICE
    way = np.cumsum(np.append(0.0, np.hypot(*np.diff(local, axis=0).T)))[pick]
    radius = np.sqrt(np.maximum(r2, 1e-6))
    whole = np.cumsum(np.where(samples.pile[start:], 0.72, 0.4))[pick] >= 3.55
    ok = np.isfinite(safe) & (radius < MOST_RADIUS) & (radius > LEAST_RADIUS) & (way**2 / (8 * radius) > LEAST_RISE)
    return line, np.where(ok & whole, arc, np.inf)


def fit_side(samples: Samples, start: int, stop: int, arc: bool) -> Side:
    """The line or arc of least squares through a range of samples."""
    xy, w = samples.xy[start:stop], samples.weight[start:stop]
    if arc:
        on_arc = ~samples.middle[start:stop]
        return _fit_arc(xy[on_arc], w[on_arc], (start, stop))
    if stop - start == 1:
        return Side(form="point", first=xy[0], last=xy[0], ahead=np.zeros(2), centre=np.zeros(2), radius=np.inf,
                    turn=0, block=(start, stop))  # fmt: skip
    mean = w @ xy / w.sum()
    _, vectors = np.linalg.eigh((xy - mean).T @ (w[:, None] * (xy - mean)))
    ahead = vectors[:, 1] * np.sign(vectors[:, 1] @ (xy[-1] - xy[0]) or 1.0)
    along = (xy - mean) @ ahead
    return Side(form="line", first=mean + along[0] * ahead, last=mean + along[-1] * ahead, ahead=ahead,
                centre=np.zeros(2), radius=np.inf, turn=0, block=(start, stop))  # fmt: skip


def _fit_arc(xy: Floats, w: Floats, block: tuple[int, int]) -> Side:
    centre: Point
    centre, radius = fit_circle(xy, w)
    out = xy - centre
    turn = 1 if cross(out[:-1], out[1:]).sum() > 0 else -1
    on = centre + radius * out / np.hypot(*out.T)[:, None]
    return Side(form="arc", first=on[0], last=on[-1], ahead=np.zeros(2), centre=np.array(centre), radius=radius,
                turn=turn, block=block)  # fmt: skip
