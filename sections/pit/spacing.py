"""Spacing along a wall: regular, periodic and irregular gaps, and the wall length each support stands for."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sections.model import Floats
from sections.pit.segmentation import alike_stretches


@dataclass(frozen=True, kw_only=True)
class Stand:
    """Where one end of a row stands on one side of the wall.

    Attributes:
        row: Index of the row.
        end: "head" or "far".
        side: Side of the wall.
        level: Label of the level; ends of one label act at one level.
        places: (k,) distance of each end from the start of the side, rising (beyond the length when a ring is passed).
        order: (k,) place of each in the row.
        parent: Rows that one change of spacing parted share a parent.
        shared: Place of the last support of the row before, where the spacing changed; nan when none.
    """

    row: int
    end: str
    side: int
    level: int
    places: Floats
    order: tuple[int, ...]
    parent: int
    shared: float = float("nan")

    @property
    def bays(self) -> Floats:
        """(b + 1,) places that bound the bays of the row, the shared one included."""
        return self.places if np.isnan(self.shared) else np.sort(np.append(self.places, self.shared))


def bay_spacings(gaps: Floats, ratio: float) -> Floats:
    """Spacing that holds in each bay: the gap itself, or the mean of a pattern that repeats (pairs, threes, fours)."""
    for period in (2, 3, 4):
        if len(gaps) < 2 * period:
            break
        repeats = np.abs(gaps[period:] - gaps[:-period]) <= ratio * gaps[:-period]
        if np.all(repeats) and np.ptp(gaps) > ratio * np.min(gaps):
            return np.full(len(gaps), float(np.mean(gaps[: len(gaps) - len(gaps) % period])))
    return gaps


def regular_spacing(gaps: Floats, ratio: float) -> float | None:
    """Spacing of a row: that of its regular stretches where it has any, else the mean; None for a single member."""
    if len(gaps) == 0:
        return None
    bays = bay_spacings(gaps, ratio)
    starts, ends = _stretches(bays, ratio)
    regular = np.concatenate([bays[a:b] for a, b in zip(starts, ends, strict=True) if b - a >= 2] or [bays[:0]])
    return float(np.median(regular)) if len(regular) else float(np.mean(gaps))


def spacing_changes(gaps: Floats, ratio: float) -> tuple[int, ...]:
    """Supports at which one regular spacing gives way to another, as indices of the gap that begins there.

    A single odd gap (a missing strut, an opening) changes nothing: the row goes on behind it.
    """
    bays = bay_spacings(gaps, ratio)
    starts, ends = _stretches(bays, ratio)
    changes = []
    last: float | None = None
    for a, b in zip(starts, ends, strict=True):
        if b - a < 2:
            continue
        spacing = float(np.mean(bays[a:b]))
        if last is not None and max(spacing, last) > min(spacing, last) * (1.0 + ratio):
            changes.append(int(a))
        last = spacing
    return tuple(changes)


def _stretches(bays: Floats, ratio: float) -> tuple[list[int], list[int]]:
    ends = alike_stretches(np.log(np.maximum(bays, 1e-6)) / np.log1p(ratio), np.ones(len(bays)))
    return [0, *ends[:-1].tolist()][: len(ends)], ends.tolist()


def tributary_widths(stand: Stand, others: Sequence[Stand], length: float, loop: bool) -> Floats:
    """Wall length each end stands for, m: half the gap on either side, or up to the end of the wall.

    Args:
        stand: The row end in question.
        others: All row ends on the same side at the same level, itself included or not.
        length: Length of the side.
        loop: True when the side closes on itself.
    """
    places = stand.places
    before, after = neighbours(stand, others, length, loop)
    gaps = np.diff(places)
    left = np.concatenate([[_end_share(places[0], before, 0.0)], 0.5 * gaps])
    right = np.concatenate([0.5 * gaps, [_end_share(-places[-1], -after, -length)]])
    return np.asarray(left + right)


def _end_share(place: float, neighbour: float, wall_end: float) -> float:
    """Half the gap to a neighbour, or the whole distance to the end of the wall where there is none."""
    return place - wall_end if np.isnan(neighbour) else 0.5 * (place - neighbour)


def neighbours(stand: Stand, others: Sequence[Stand], length: float, loop: bool) -> tuple[float, float]:
    """Nearest supports of other rows before and after this one; nan where the wall ends first.

    Rows that interleave with this one are no neighbours of it: each of them spans the wall by itself.
    """
    first, last = float(stand.places[0]), float(stand.places[-1])
    turns = (-length, 0.0, length) if loop else (0.0,)
    before, after = [], []
    for other in others:
        itself = other is stand
        for turn in turns:
            low, high = float(other.places[0]) + turn, float(other.places[-1]) + turn
            if itself and turn == 0.0:
                continue
            before += [high] if high < first - 1e-9 else []
            after += [low] if low > last + 1e-9 else []
    return max(before, default=float("nan")), min(after, default=float("nan"))
