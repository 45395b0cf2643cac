"""The perimeter by chainage: points, offsets to the retained side, and stretches of equal verdict."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import groupby
from typing import TypeVar

import numpy as np

from ingest.members import Point
from sections.model import Floats, Pit
from sections.proposal import WORST_FIRST, Proposal, StationOutput, StationTable, VerdictWord

T = TypeVar("T")
LONGEST_MITRE = 2.0


@dataclass(frozen=True)
class Perimeter:
    """A perimeter as a polyline with the chainage of each vertex; a closed one ends where it starts."""

    vertices: Floats
    at: Floats
    closed: bool

    @classmethod
    def of(cls, pit: Pit) -> Perimeter:
        """The perimeter of a pit; its polyline is laid on `length`, so that chord lengths of arcs do not drift."""
        ring = np.array([*pit.perimeter, *(pit.perimeter[:1] if pit.closed else ())], dtype=np.float64).reshape(-1, 2)
        steps = np.hypot(*np.diff(ring, axis=0).T)
        keep = np.concatenate(([True], steps > 1e-9))
        at = np.concatenate(([0.0], np.cumsum(steps)))
        scale = pit.length / at[-1] if at[-1] > 0 else 1.0
        return cls(ring[keep], at[keep] * scale, pit.closed)

    @property
    def length(self) -> float:
        """Length, m."""
        return float(self.at[-1])

    def point(self, chainage: float, offset: float = 0.0) -> Point:
        """A point at a chainage, `offset` m towards the retained side."""
        line = self.vertices if offset == 0 else self.beside(offset)
        c = chainage % self.length if self.closed and chainage != self.length else chainage
        return float(np.interp(c, self.at, line[:, 0])), float(np.interp(c, self.at, line[:, 1]))

    def square_off(self, chainage: float, offset: float) -> Point:
        """A point `offset` m from the wall axis, square to it; on the mitre at a vertex."""
        if np.min(np.abs(self.at - chainage % self.length)) < 1e-6:
            return self.point(chainage, offset)
        (x, y), (nx, ny) = self.point(chainage), self.normal(chainage)
        return x + offset * nx, y + offset * ny

    def straight_middle(self, start: float, to: float) -> float:
        """Chainage a third along the longest straight piece between two chainages: a quiet place for a label."""
        last = to if to >= start else to + self.length
        marks = np.unique(np.clip(np.concatenate((self.at, self.at + self.length, (start, last))), start, last))
        n = int(np.argmax(np.diff(marks))) if len(marks) > 1 else 0
        end = marks[min(n + 1, len(marks) - 1)]
        return float(marks[n] + (end - marks[n]) * 0.3)

    def normal(self, chainage: float) -> Point:
        """Unit vector towards the retained side, which lies on the right of the direction of chainage."""
        n = int(np.clip(np.searchsorted(self.at, chainage % self.length, side="right") - 1, 0, len(self.at) - 2))
        dx, dy = self.vertices[n + 1] - self.vertices[n]
        size = float(np.hypot(dx, dy)) or 1.0
        return float(dy) / size, -float(dx) / size

    def beside(self, offset: float) -> Floats:
        """The polyline moved towards the retained side, mitred at its vertices."""
        return np.asarray(self.vertices + offset * self._mitres)

    def part(self, start: float, to: float, offset: float = 0.0) -> list[Point]:
        """The polyline between two chainages; `to < start` passes the start of a closed perimeter."""
        if to < start and self.closed:
            return self.part(start, self.length, offset) + self.part(0.0, to, offset)[1:]
        line = self.beside(offset) if offset else self.vertices
        inner = (self.at > start + 1e-9) & (self.at < to - 1e-9)
        ends = [
            (float(np.interp(c, self.at, line[:, 0])), float(np.interp(c, self.at, line[:, 1]))) for c in (start, to)
        ]
        return [ends[0], *((float(x), float(y)) for x, y in line[inner]), ends[1]]

    @cached_property
    def _mitres(self) -> Floats:
        along = np.diff(self.vertices, axis=0)
        along = along / np.hypot(along[:, 0], along[:, 1])[:, None]
        right = np.column_stack((along[:, 1], -along[:, 0]))
        first, last = (right[-1:], right[:1]) if self.closed else (right[:1], right[-1:])
        before, after = np.vstack((first, right)), np.vstack((right, last))
        total = before + after
        size = np.maximum((total**2).sum(axis=1) / 2, 2 / LONGEST_MITRE**2)
        return np.asarray(total / size[:, None])


@dataclass(frozen=True)
class Stretch:
    """Stations of one verdict in a row: chainages, and the indices of the first and last station."""

    start: float
    to: float
    first: int
    last: int
    value: str | None


def stretches(chainage: Sequence[float], values: Sequence[str | None], length: float) -> list[Stretch]:
    """Group equal neighbours; each station stands for half the way to its neighbours."""
    found, n = [], 0
    for value, group in groupby(values):
        size = len(list(group))
        first, last = n, n + size - 1
        start = 0.0 if first == 0 else (chainage[first - 1] + chainage[first]) / 2
        to = length if last == len(values) - 1 else (chainage[last] + chainage[last + 1]) / 2
        found.append(Stretch(start, to, first, last, value))
        n += size
    return found


def blank_stations(outputs: Sequence[str]) -> StationTable:
    """Stations of a pit that has none: one at the start, where nothing is assessed."""
    blank = StationOutput(low=(None,), high=(None,), verdict=("not_assessed",), dominant=(None,))
    return StationTable(
        chainage=(0.0,), floor=(None,), retained=(None,), section=(None,), outputs=dict.fromkeys(outputs, blank)
    )


def stations_of(proposal: Proposal, pit: Pit) -> StationTable:
    """The stations of a pit; where there are none, everything is not assessed."""
    table = proposal.stations.get(pit.id)
    return table if table is not None and table.chainage else blank_stations(proposal.limits.governing)


def worst_words(table: StationTable, outputs: Sequence[str]) -> tuple[VerdictWord, ...]:
    """Per station the worst verdict of some outputs; `not_assessed` where an output is not listed."""
    rank = {word: n for n, word in enumerate(WORST_FIRST)}
    nothing: VerdictWord = "not_assessed"
    blank = (nothing,) * len(table.chainage)
    listed = [table.outputs[o].verdict if o in table.outputs else blank for o in outputs] or [blank]
    worst: list[VerdictWord] = []
    for words in zip(*listed, strict=True):
        worst.append(min(words, key=rank.__getitem__))
    return tuple(worst)
