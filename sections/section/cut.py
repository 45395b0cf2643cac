"""A cut: a line on plan, the walls it is judged at, and the section's own coordinates."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.members import Point
from sections.found import FoundPit
from sections.model import Floats

Interval = tuple[float, float]


@dataclass(frozen=True, kw_only=True)
class CutWall:
    """One wall a cut is judged at. `x` is its place along the cut, `side` where its retained ground lies."""

    found: FoundPit
    station: int
    x: float
    side: str

    @property
    def at(self) -> float:
        """Chainage of the wall."""
        return float(self.found.stations.chainage[self.station])

    @property
    def level(self) -> dict[str, float | None]:
        """Ground, floor, top and toe at this wall; None where not given."""
        stations = self.found.stations
        fields = {"ground": stations.ground, "floor": stations.floor, "top": stations.top, "toe": stations.toe}
        return {name: known(values[self.station]) for name, values in fields.items()}


@dataclass(frozen=True, kw_only=True)
class Cut:
    """A line on plan (local coordinates) from the retained side of its first wall, with the walls along it."""

    kind: str
    start: Point
    end: Point
    walls: tuple[CutWall, ...]

    @property
    def length(self) -> float:
        """Length of the line, m."""
        return float(np.hypot(self.end[0] - self.start[0], self.end[1] - self.start[1]))

    @property
    def direction(self) -> Floats:
        """Unit vector along the cut."""
        return np.array([self.end[0] - self.start[0], self.end[1] - self.start[1]]) / self.length

    @property
    def across(self) -> Floats:
        """Unit vector out of the plane, to the left of the cut."""
        along = self.direction
        return np.array([-along[1], along[0]])

    def x_of(self, points: Sequence[Point] | Floats) -> Floats:
        """Section coordinate x of points (n, 2)."""
        return np.asarray((np.asarray(points, float).reshape(-1, 2) - self.start) @ self.direction)

    def y_of(self, points: Sequence[Point] | Floats) -> Floats:
        """Distance of points (n, 2) from the plane of the cut, positive to its left."""
        return np.asarray((np.asarray(points, float).reshape(-1, 2) - self.start) @ self.across)

    def point(self, x: float) -> Point:
        """Plan point at x."""
        spot = np.asarray(self.start) + x * self.direction
        return float(spot[0]), float(spot[1])

    def pit_interval(self) -> Interval:
        """Stretch of x inside the pit: between two walls, or from the one wall to the end of the cut."""
        first = self.walls[0]
        if len(self.walls) > 1:
            return first.x, self.walls[1].x
        return (first.x, self.length) if first.side == "left" else (0.0, first.x)


def known(value: float) -> float | None:
    """None for nan: the array way of saying *not given*."""
    return None if np.isnan(value) else float(value)


def crossings(cut: Cut, ring: Sequence[Point]) -> tuple[Interval, ...]:
    """Stretches of x on which the cut runs inside a plan outline (any polygon, its first point not repeated)."""
    points = np.asarray(ring, float)
    x, y = cut.x_of(points), cut.y_of(points)
    x2, y2 = np.roll(x, -1), np.roll(y, -1)
    # Half-open rule: a vertex on the cut counts with one of its two edges, so crossings always pair.
    cross = (y < 0) != (y2 < 0)
    at = np.sort(x[cross] + (x2 - x)[cross] * (-y[cross]) / (y2 - y)[cross])
    pairs = at.reshape(-1, 2)
    return tuple((max(0.0, float(a)), min(cut.length, float(b))) for a, b in pairs if b > 0 and a < cut.length)
