"""From metres to the sheet: round drawing scales, round steps, and the map of points onto an SVG."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from math import ceil, floor, isfinite, log10

from export.report.markup import number
from ingest.members import Point

UNITS_PER_MM = 1000 / 180
"""A drawing is 1000 units wide and stands for 180 mm of paper, the width between the margins of A4."""
WIDTH = 1000.0
LETTERS = 14.0
"""Height of lettering, units: 2.5 mm on A4."""
RATIOS = tuple(base * 10**power for power in range(1, 7) for base in (1, 1.25, 1.5, 2, 2.5, 3, 4, 5, 7.5))


@dataclass(frozen=True, kw_only=True)
class View:
    """A window onto the plan or a section: `x0`, `y1` is its upper left corner in m, `k` units per m."""

    x0: float
    y1: float
    k: float
    left: float
    top: float
    width: float
    height: float
    ratio: float

    def x(self, x: float) -> float:
        """Units from the left."""
        return self.left + (x - self.x0) * self.k

    def y(self, y: float) -> float:
        """Units from the top; levels and northings run upwards."""
        return self.top + (self.y1 - y) * self.k

    def at(self, point: Point) -> Point:
        """A point in units."""
        return (self.x(point[0]), self.y(point[1]))

    def path(self, points: Iterable[Point], closed: bool = False) -> str:
        """Path data through points given in m."""
        return path_data([self.at(point) for point in points], closed)

    @property
    def x_range(self) -> Point:
        """West and east edge, m."""
        return (self.x0, self.x0 + self.width / self.k)

    @property
    def y_range(self) -> Point:
        """South and north edge, m."""
        return (self.y1 - self.height / self.k, self.y1)

    def holds(self, point: Point) -> bool:
        """Whether a point in m lies inside the window."""
        (west, east), (south, north) = self.x_range, self.y_range
        return west <= point[0] <= east and south <= point[1] <= north


def fit(
    points: Sequence[Point], width: float, most_height: float, left: float = 0.0, top: float = 0.0, margin: float = 0.0
) -> View:
    """The largest round scale at which points fit, centred.

    Args:
        points: Points in m; at least one.
        width, most_height: Room, units.
        left, top: Where the window begins, units.
        margin: Free edge round the points, units.
    """
    xs, ys = [p[0] for p in points], [p[1] for p in points]
    wide, high = max(max(xs) - min(xs), 1.0), max(max(ys) - min(ys), 1.0)
    best = min((width - 2 * margin) / wide, (most_height - 2 * margin) / high)
    ratio = round_ratio(best)
    k = units_per_metre(ratio)
    height = min(most_height, high * k + 2 * margin)
    return View(
        x0=(max(xs) + min(xs)) / 2 - width / k / 2,
        y1=(max(ys) + min(ys)) / 2 + height / k / 2,
        k=k,
        left=left,
        top=top,
        width=width,
        height=height,
        ratio=ratio,
    )


def units_per_metre(ratio: float) -> float:
    """Units for one metre at a scale of 1 to `ratio`."""
    return 1000 * UNITS_PER_MM / ratio


def round_ratio(units: float) -> float:
    """The round scale that is not larger than `units` per metre.

    Example:
        >>> round_ratio(units_per_metre(230.0))
        250.0
    """
    wanted = 1000 * UNITS_PER_MM / units * (1 - 1e-9)
    return next((float(ratio) for ratio in RATIOS if ratio >= wanted), wanted)


def round_step(room: float) -> float:
    """The least of 1, 2, 5 times a power of ten that is at least `room`.

    Example:
        >>> round_step(3.1), round_step(0.5), round_step(11.0)
        (5.0, 0.5, 20.0)
    """
    size = 10.0 ** floor(log10(room))
    return next(step * size for step in (1.0, 2.0, 5.0, 10.0) if step * size >= room * (1 - 1e-9))


def multiples(step: float, low: float, high: float) -> list[float]:
    """Multiples of a step within a range, ends included."""
    if not (isfinite(low) and isfinite(high)):
        raise ValueError("a range of a drawing is not finite")
    first = ceil(low / step - 1e-9)
    return [n * step for n in range(first, floor(high / step + 1e-9) + 1)]


def path_data(points: Sequence[Point], closed: bool = False) -> str:
    """Path data through points in units."""
    return "M" + "L".join(f"{number(x)} {number(y)}" for x, y in points) + ("Z" if closed else "")


def clip(a: Point, b: Point, view: View) -> tuple[Point, Point] | None:
    """The part of a line a-b inside the window, None when there is none (Liang and Barsky 1984)."""
    (west, east), (south, north) = view.x_range, view.y_range
    dx, dy = b[0] - a[0], b[1] - a[1]
    first, last = 0.0, 1.0
    for along, room in ((-dx, a[0] - west), (dx, east - a[0]), (-dy, a[1] - south), (dy, north - a[1])):
        if along == 0:
            if room < 0:
                return None
        elif along < 0:
            first = max(first, room / along)
        else:
            last = min(last, room / along)
    if first >= last:
        return None
    return (a[0] + first * dx, a[1] + first * dy), (a[0] + last * dx, a[1] + last * dy)
