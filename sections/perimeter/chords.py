"""Curves that a drawing lists by long chords: many short equal sides with small equal turns are an arc.

Up to 24 sides round a whole ring are a polygon, with corners (judgement: more sides than that turn by so little that
neither the wall nor the ground can tell).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from sections.model import Bools, Floats
from sections.perimeter.circle_fit import fit_circle
from sections.perimeter.joints import meet
from sections.perimeter.sides import Side
from sections.perimeter.wall_graph import cross

MOST_TURN = 360.0 / 24.5
"""Turn from chord to chord below which the sides of a regular ring are more than 24, degrees."""
SAME_TURN = 0.7
SAME_LENGTH = 0.05
LEAST_TURNS = 5
MOST_RISE = 0.15
"""Largest rise of a curve over its chord, m."""


def read_chords(sides: Sequence[Side], closed: bool) -> list[Side]:
    """Replace runs of chords by arcs through their ends."""
    count = len(sides)
    if count <= LEAST_TURNS:
        return list(sides)
    joint, turn, like = _joints(sides, closed)
    if closed and like.all():
        whole = count > 24 and np.ptp(turn) <= 2 * SAME_TURN
        return [_arc(joint, sides)] if whole and _is_curve(joint) else list(sides)
    shift = int(np.flatnonzero(~like)[0]) if closed else 0
    order = np.roll(np.arange(count), -shift)
    made: list[Side] = []
    k = 0
    while k < count:
        stop = k + 1
        while stop < count and like[order[stop]] and abs(turn[order[stop]] - turn[order[k + 1]]) <= SAME_TURN:
            stop += 1
        chords = [sides[i] for i in order[k:stop]]
        ends = joint[np.append(order[k:stop], order[stop % count])]
        if stop - k > LEAST_TURNS and np.isfinite(ends).all() and _is_curve(ends):
            made.append(_arc(ends, chords))
        else:
            made += chords
        k = stop
    return made


def _joints(sides: Sequence[Side], closed: bool) -> tuple[Floats, Floats, Bools]:
    """Where each side begins, the turn there in degrees, and whether the two sides there could be chords of one arc."""
    count = len(sides)
    joint = np.full((count, 2), np.nan)
    turn = np.zeros(count)
    for k in range(0 if closed else 1, count):
        a, b = sides[k - 1], sides[k]
        if a.form == b.form == "line":
            turn[k] = np.degrees(np.arctan2(float(cross(a.ahead, b.ahead)), float(a.ahead @ b.ahead)))
            point = meet(a, b, 0.3)
            joint[k] = 0.5 * (a.last + b.first) if point is None else point
        else:
            joint[k] = 0.5 * (a.last + b.first)
    length = np.hypot(*(np.roll(joint, -1, axis=0) - joint).T)
    before = np.roll(length, 1)
    small = (np.abs(turn) < MOST_TURN) & (np.abs(turn) > 0.5)
    return joint, turn, np.asarray(small & (np.abs(length - before) <= SAME_LENGTH * length), dtype=np.bool_)


def _is_curve(ends: Floats) -> bool:
    chord = np.hypot(*np.diff(ends, axis=0).T)
    radius = fit_circle(ends)[1]
    return bool((chord**2).max() / (8 * radius) <= MOST_RISE)


def _arc(ends: Floats, chords: Sequence[Side]) -> Side:
    centre, radius = fit_circle(ends)
    out = ends - centre
    turn = 1 if cross(out[:-1], out[1:]).sum() > 0 else -1
    return Side(form="arc", first=ends[0], last=ends[-1], ahead=np.zeros(2), centre=np.array(centre), radius=radius,
                turn=turn, block=(chords[0].block[0], chords[-1].block[1]))  # fmt: skip
