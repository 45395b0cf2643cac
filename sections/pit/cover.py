"""The stretch of wall each support row covers, and the spacing that holds in each of its bays."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Limits
from sections.model import Floats
from sections.pit.chainage import ON, Sides
from sections.pit.spacing import Stand, bay_spacings, neighbours, regular_spacing
from sections.pit.support_rows import Rows
from sections.pit.walk import Walk

REMNANT = 1.5
"""A row covers what is left to the end of the wall or half way to the next row up to this many spacings (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Cover:
    """Where a row holds one side of the wall, distances from the start of that side, m.

    Attributes:
        row: Index of the row.
        side: Side of the wall.
        start, to: Ends of the stretch; a ring covered all round has a stretch of its whole length.
        edges: (b + 1,) places that bound the bays.
        spacings: (b,) spacing that holds in each bay; a single support has none.
    """

    row: int
    side: int
    start: float
    to: float
    edges: Floats
    spacings: Floats


def find_covers(rows: Rows, sides: Sides, limits: Limits, single: float) -> tuple[Cover, ...]:
    """Stretches that the rows cover.

    A row covers its members and beyond them one spacing, or up to half way to the next row of its level, or to the
    end of the wall, whichever comes first (judgement): a wall whose struts end half way along is not propped there.

    Args:
        single: How far a row of one member reaches either way, m.
    """
    covers = []
    for stand in rows.stands:
        level = [other for other in rows.stands if other.side == stand.side and other.level == stand.level]
        covers.append(_cover(stand, level, sides, limits, single))
    return tuple(covers)


def _cover(stand: Stand, level: Sequence[Stand], sides: Sides, limits: Limits, single: float) -> Cover:
    length = float(sides.length[stand.side])
    edges = stand.bays
    gaps = np.diff(edges)
    regular = regular_spacing(gaps, limits.spacing_ratio)
    reach = single if regular is None else regular
    before, after = neighbours(stand, level, length, sides.loop)
    first, last = float(stand.places[0]), float(stand.places[-1])
    start = first - _reach(reach, _room(first, before, 0.0, sides.loop))
    to = last + _reach(reach, _room(-last, -after, -length, sides.loop))
    start, to = _meet_siblings(stand, level, start, to)
    if sides.loop and to - start >= length - ON:
        start, to = 0.0, length
    return Cover(
        row=stand.row, side=stand.side, start=start, to=to, edges=edges,
        spacings=bay_spacings(gaps, limits.spacing_ratio),
    )  # fmt: skip


def _reach(reach: float, room: float) -> float:
    """One spacing, or all the room there is where it is little more: no sliver is left over at a corner."""
    return room if room <= REMNANT * reach else reach


def _room(place: float, neighbour: float, wall_end: float, loop: bool) -> float:
    if np.isnan(neighbour):
        return np.inf if loop else place - wall_end
    return 0.5 * (place - neighbour)


def _meet_siblings(stand: Stand, level: Sequence[Stand], start: float, to: float) -> tuple[float, float]:
    """Rows parted by a change of spacing meet at the support where it changes, not half way behind it."""
    siblings = [s for s in level if s.parent == stand.parent and s.end == stand.end and s is not stand]
    if not np.isnan(stand.shared):
        start, to = (stand.shared, to) if stand.shared < stand.places[0] else (start, stand.shared)
    for other in siblings:
        if not np.isnan(other.shared) and np.isclose(other.shared, stand.places[-1], atol=ON):
            to = float(other.shared)
        elif not np.isnan(other.shared) and np.isclose(other.shared, stand.places[0], atol=ON):
            start = float(other.shared)
    return start, to


def rows_at(
    covers: Sequence[Cover], sides: Sides, steps: Walk, levels: Floats
) -> tuple[Floats, tuple[tuple[int, ...], ...]]:
    """Spacing of each row at each station (rows, n), nan where it does not hold the wall, and the rows that do.

    Args:
        levels: (rows,) below which the dig must go for a row to be there, m; nan where not known.
    """
    spacing = np.full((len(levels), len(steps.chainage)), np.nan)
    for cover in covers:
        length = float(sides.length[cover.side])
        place = np.minimum(steps.place + 2.0 * ON, length - 0.5 * ON)
        for turn in (-length, 0.0, length) if sides.loop else (0.0,):
            shifted = place + turn
            on = (steps.side == cover.side) & (shifted >= cover.start - ON) & (shifted < cover.to)
            on &= ~(steps.floor > levels[cover.row])  # a row above whose level the dig stops is not there
            spacing[cover.row, on] = _bay_at(cover, shifted[on])
    held = ~np.isnan(spacing)
    rows, stations = np.nonzero(held)
    order = np.argsort(stations, kind="stable")
    splits = np.searchsorted(stations[order], np.arange(1, len(steps.chainage)))
    return spacing, tuple(tuple(int(row) for row in part) for part in np.split(rows[order], splits))


def _bay_at(cover: Cover, place: Floats) -> Floats:
    """Spacing at places within the stretch; beyond the outermost members that of the outermost bay; 0 for one alone."""
    if len(cover.spacings) == 0:
        return np.zeros(len(place))
    bay = np.clip(np.searchsorted(cover.edges, place, side="right") - 1, 0, len(cover.spacings) - 1)
    return np.asarray(cover.spacings[bay])
