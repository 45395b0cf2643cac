"""Sides of a way put together to a wall axis: sides meet where their lines meet, arcs run into straights."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely

from sections.model import Bools, Floats, Ints
from sections.perimeter.chords import read_chords
from sections.perimeter.joints import meet
from sections.perimeter.sides import Samples, Side, fit_side
from sections.perimeter.wall_graph import cross

SAGITTA = 0.005
"""Rise of the chords that list an arc, m."""
SAME_LINE = 0.025
"""Neighbouring sides that one line fits this well are one side, m."""
LONE = 0.1
"""A lone point this close to the corner of its neighbours belongs to it, m."""
SAME_TURN = 6.0
"""And turn less than this, degrees."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Outline:
    """A wall axis as a polyline.

    Attributes:
        points: (m, 2) vertices; a closed one does not repeat its first.
        closed: True for a ring.
        joint: (m,) True where two sides meet (the ends of an open one included).
        before, behind: (m, 2) unit directions of the wall coming into and leaving each vertex, exact on arcs.
        arc: (m,) number of the arc that the stretch after the vertex belongs to, -1 on straights.
        arcs: The arcs, as sides.
    """

    points: Floats
    closed: bool
    joint: Bools
    before: Floats
    behind: Floats
    arc: Ints
    arcs: tuple[Side, ...]

    @property
    def at(self) -> Floats:
        """Chainage of each vertex from the first."""
        return np.append(0.0, np.cumsum(self.spans))[: len(self.points)]

    @property
    def spans(self) -> Floats:
        """Length of the stretch after each vertex; an open one has one less."""
        ring = np.vstack((self.points, self.points[:1])) if self.closed else self.points
        return np.asarray(np.hypot(*np.diff(ring, axis=0).T))

    @property
    def length(self) -> float:
        """Length of the axis, m."""
        return float(self.spans.sum())


def merge_sides(samples: Samples, sides: Sequence[Side]) -> list[Side]:
    """Neighbours that are one straight line, or one arc, become one side; lone points between them are passed over."""
    merged: list[Side] = []
    for side in sides:
        merged.append(side)
        while (joined := _joined_tail(samples, merged)) is not None:
            merged = joined
    if samples.closed and len(merged) > 2:
        merged = _close_up(samples, merged)
    return merged


def _joined_tail(samples: Samples, sides: list[Side]) -> list[Side] | None:
    for back in (2, 3):
        if len(sides) < back or (back == 3 and sides[-2].form != "point"):
            continue
        one = _as_one(samples, sides[-back], sides[-1])
        if one is not None:
            return [*sides[:-back], one]
    return None


def _as_one(samples: Samples, a: Side, b: Side) -> Side | None:
    """One side through both, if one line or arc fits them; a lone point may belong to the arc beside it."""
    forms = {a.form, b.form}
    if forms not in ({"line"}, {"arc"}, {"arc", "point"}):
        return None
    keep = np.concatenate((np.arange(*a.block), np.arange(*b.block)))
    both = samples.pick(keep)
    if "point" in forms:
        pass
    elif a.form == "line":
        if a.ahead @ b.ahead < np.cos(np.radians(SAME_TURN)):
            return None
    elif a.turn != b.turn or abs(a.radius - b.radius) > 0.1 * max(a.radius, b.radius):
        return None
    one = fit_side(both, 0, len(keep), "arc" in forms)
    off = both.xy - one.centre if one.form == "arc" else both.xy - one.first
    away = np.abs(np.hypot(*off.T) - one.radius) if one.form == "arc" else np.abs(cross(one.ahead, off))
    if away.max() > SAME_LINE * max(1.0, 0.5 * samples.rough):
        return None
    return replace(one, block=(a.block[0], b.block[1]))


def _close_up(samples: Samples, sides: list[Side]) -> list[Side]:
    """The first and the last side of a ring may be one."""
    count = len(samples.xy)
    twice = samples.pick(np.arange(2 * count) % count)
    first = replace(sides[0], block=(sides[0].block[0] + count, sides[0].block[1] + count))
    one = _as_one(twice, sides[-1], first)
    if one is None:
        return sides
    return [one, *sides[1:-1]]


def build_outline(samples: Samples, sides: Sequence[Side], short: float) -> Outline:
    """Axis through the sides.

    Args:
        samples: The points the sides were fitted to.
        sides: Sides in order.
        short: Sides shorter than this between two that meet are only a cut across the corner, m.
    """
    kept = read_chords(merge_sides(samples, sides), samples.closed)
    if len(kept) == 1 and samples.closed:
        return full_circle(kept[0])
    return _assemble(samples, _drop_cuts(samples, kept, short))


def full_circle(side: Side, east: float = 0.0) -> Outline:
    """A whole circle listed from the point at angle `east` (radians)."""
    steps = int(np.ceil(2 * np.pi / _step(side.radius)))
    angle = east + 2 * np.pi * np.arange(steps) / steps
    out = np.column_stack((np.cos(angle), np.sin(angle)))
    tangent = np.column_stack((-np.sin(angle), np.cos(angle)))
    return Outline(points=side.centre + side.radius * out, closed=True, joint=np.zeros(steps, dtype=bool),
                   before=tangent, behind=tangent, arc=np.zeros(steps, dtype=np.int64), arcs=(side,))  # fmt: skip


def _step(radius: float) -> float:
    """Angle of the chords that list an arc."""
    return float(2 * np.arccos(max(1 - SAGITTA / radius, 0.5)))


def _drop_cuts(samples: Samples, sides: list[Side], short: float) -> list[Side]:
    """Settle lone points and very short straights: part of a corner, a side of two bays, or a vertex of their own."""
    kept = list(sides)
    closed = samples.closed
    k = 0 if closed else 1
    while k < len(kept) - (0 if closed else 1) and len(kept) > (3 if closed else 2):
        side, a, b = kept[k], kept[k - 1], kept[(k + 1) % len(kept)]
        if side.form == "point" or (side.form == "line" and np.hypot(*(side.last - side.first)) <= short):
            gap = float(np.hypot(*(b.first - a.last)))
            point = meet(a, b, 1.5 * gap + 0.1)
            middle = 0.5 * (side.first + side.last)
            if point is not None and (side.form == "line" or _beside((a.last, point, b.first), middle) <= LONE):
                del kept[k]
                continue
            if side.form == "point" and _beside((a.last, b.first), middle) <= SAME_LINE:
                kept[k] = _straight(a.last, b.first, side.block)
        k += 1
    return kept


def _beside(way: Sequence[Floats], point: Floats) -> float:
    return float(shapely.LineString(way).distance(shapely.Point(point)))


def _straight(first: Floats, last: Floats, block: tuple[int, int]) -> Side:
    ahead = (last - first) / np.hypot(*(last - first))
    return Side(form="line", first=first, last=last, ahead=ahead, centre=np.zeros(2), radius=np.inf, turn=0,
                block=block)  # fmt: skip


def _assemble(samples: Samples, sides: list[Side]) -> Outline:
    """Vertices at the joints, arcs listed by chords."""
    count = len(sides)
    starts, stops = [s.first for s in sides], [s.last for s in sides]
    for k in range(count if samples.closed else count - 1):
        point = _joint(samples, sides[k], sides[(k + 1) % count])
        if point is not None:
            stops[k], starts[(k + 1) % count] = point, point
    return _listed(sides, starts, stops, samples.closed)


def _joint(samples: Samples, a: Side, b: Side) -> Floats | None:
    """Where two neighbouring sides meet; None where a bay or a step of its own lies between them."""
    gap = float(np.hypot(*(b.first - a.last)))
    lines = a.form == b.form == "line"
    turn = float(np.arcsin(min(abs(float(cross(a.ahead, b.ahead))), 1.0))) if lines else np.pi / 2
    blurred = max((np.sqrt(0.1 * side.radius) for side in (a, b) if side.form == "arc"), default=0.0)
    point = meet(a, b, 1.2 * gap / max(np.sin(turn), 0.05) + 0.3 + blurred)
    if point is None:
        return 0.5 * (a.last + b.first) if gap <= 2 * SAME_LINE else None
    pace = max(_pace(samples, a), _pace(samples, b))
    round_it = float(np.hypot(*(point - a.last)) + np.hypot(*(b.first - point)))
    square = turn > np.radians(75.0) and gap <= 1.5 * pace
    if lines and 0.95 * pace < gap < 1.15 * pace and round_it > 1.25 * pace and not square:
        return None
    return point


def _pace(samples: Samples, side: Side) -> float:
    """Spacing of the piles of a side, m; infinite for a side that is not a row of piles."""
    mine = np.arange(*side.block) % len(samples.xy)
    piles = mine[samples.pile[mine]]
    return float(np.median(samples.weight[piles])) if len(piles) else np.inf


def _listed(sides: list[Side], starts: list[Floats], stops: list[Floats], closed: bool) -> Outline:
    points: list[Floats] = []
    joint: list[bool] = []
    arc: list[int] = []
    tangents: list[tuple[Floats | None, Floats | None]] = []
    arcs: list[Side] = []
    for side, start, stop in zip(sides, starts, stops, strict=True):
        if side.form == "arc":
            chain = arc_points(side, start, stop)
            number = len(arcs)
            arcs.append(replace(side, first=chain[0], last=chain[-1]))
        else:
            chain, number = np.array([start, stop]), -1
        for k, point in enumerate(chain):
            along = _tangent(side, point)
            if k == 0 and points and np.hypot(*(points[-1] - point)) < 1e-6:
                arc[-1], tangents[-1] = number, (tangents[-1][0], along)
                continue
            points.append(point)
            joint.append(k in (0, len(chain) - 1))
            arc.append(number if k < len(chain) - 1 else -1)
            tangents.append((None if k == 0 else along, None if k == len(chain) - 1 else along))
    if closed and np.hypot(*(points[-1] - points[0])) < 1e-6:
        tangents[0] = (tangents[-1][0], tangents[0][1])
        points, joint, arc, tangents = points[:-1], joint[:-1], arc[:-1], tangents[:-1]
    return _with_tangents(np.array(points), joint, arc, tangents, closed, tuple(arcs))


def _with_tangents(
    points: Floats, joint: list[bool], arc: list[int], tangents: list[tuple[Floats | None, Floats | None]],
    closed: bool, arcs: tuple[Side, ...],
) -> Outline:  # fmt: skip
    """Directions at vertices that no side gives are those of the straight bits that close the gap."""
    into, out = points - np.roll(points, 1, axis=0), np.roll(points, -1, axis=0) - points
    if not closed:
        into[0], out[-1] = out[0], into[-1]
    into, out = (v / np.maximum(np.hypot(*v.T), 1e-12)[:, None] for v in (into, out))
    before = np.array([into[k] if pair[0] is None else pair[0] for k, pair in enumerate(tangents)])
    behind = np.array([out[k] if pair[1] is None else pair[1] for k, pair in enumerate(tangents)])
    return Outline(points=points, closed=closed, joint=np.array(joint), before=before, behind=behind,
                   arc=np.array(arc, dtype=np.int64), arcs=arcs)  # fmt: skip


def _tangent(side: Side, point: Floats) -> Floats | None:
    if side.form == "line":
        return side.ahead
    if side.form == "point":
        return None
    out = (point - side.centre) / side.radius
    return side.turn * np.array([-out[1], out[0]])


def arc_points(side: Side, start: Floats, stop: Floats) -> Floats:
    """An arc listed by chords of at most 5 mm rise from `start` to `stop`."""
    a, b = start - side.centre, stop - side.centre
    angle = np.arctan2(a[1], a[0])
    sweep = float((side.turn * (np.arctan2(b[1], b[0]) - angle)) % (2 * np.pi))
    steps = max(int(np.ceil(sweep / _step(side.radius))), 1)
    angles = angle + side.turn * sweep * np.arange(steps + 1) / steps
    points = side.centre + side.radius * np.column_stack((np.cos(angles), np.sin(angles)))
    points[0], points[-1] = start, stop
    return points
