"""Where a part stands among the others: in a row of piles, below the lowest slab, between walls, behind a wall."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ingest.figures import NearLines, plan
from ingest.members import Point, Point3
from ingest.parts import Part

Floats = NDArray[np.float64]

PILE_DIAMETER = (0.2, 3.5)
"""Diameters taken for piles, m (common practice, no source)."""
PILE_LENGTH = 2.0
"""Shortest pile, m (judgement)."""
WALL_ROW = 1.8
"""Piles at less than this many diameters stand close enough for a wall; bearing piles stand at 2.5 to 3 (judgement)."""
ROW_LEAST = 5
"""Piles that make a row (judgement)."""
NEAR_WALL = 1.5
"""An end this close to a wall axis meets the wall, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Place:
    """What place says about one part.

    `row_count`, `row_ratio`: piles of the close row it stands in and their spacing over diameter. `below_slab`: upright
    and round with its head at or below the lowest slab. `ends_at_walls`: ends of a straight member near a wall, 0 to 2.
    `inclination`: degrees below the horizontal of a straight member. `far_side`: where its lower end lies.
    """

    row_count: int = 0
    row_ratio: float = math.nan
    below_slab: bool = False
    ends_at_walls: int = 0
    inclination: float = 0.0
    far_side: str = ""


def upright(part: Part) -> tuple[Point, float] | None:
    """Centre and diameter of a round upright part (a circle on plan, an upright round bar), else None."""
    if part.radius is None:
        return None
    if part.form in ("circle", "point"):
        return part.points[0][:2], 2 * part.radius
    if part.form == "bar" and len(part.points) == 2:
        (x1, y1, z1), (x2, y2, z2) = part.points
        if math.hypot(x2 - x1, y2 - y1) <= 0.02 * abs(z2 - z1):
            return (x1, y1), 2 * part.radius
    return None


def straight(part: Part) -> bool:
    """Whether a part is one straight member: a bar or a path of two points that is not upright."""
    return part.form in ("bar", "path") and len(part.points) == 2 and not part.closed and upright(part) is None


def find_places(parts: Sequence[Part], is_wall: Sequence[bool], is_slab: Sequence[bool]) -> tuple[Place, ...]:
    """Find the place of every part.

    Args:
        parts: All parts of the site, in one frame.
        is_wall: What class and name alone already say, part by part.
        is_slab: Likewise for slabs.

    Returns:
        One place per part.
    """
    rows = _pile_rows(parts)
    floors = [part.z_bottom for part, slab in zip(parts, is_slab, strict=True) if slab and part.z_bottom is not None]
    lowest = min(floors) if floors else None
    axes = [_line(part) for part, wall in zip(parts, is_wall, strict=True) if wall and len(part.points) > 1]
    centres = [part.points[0] for n, part in enumerate(parts) if n in rows and rows[n][1] < WALL_ROW]
    meets = _Walls(axes, centres)
    return tuple(_place(n, part, rows.get(n), lowest, meets) for n, part in enumerate(parts))


def _line(part: Part) -> tuple[Point3, ...]:
    ring = part.closed or part.form in ("outline", "prism")
    return (*part.points, part.points[0]) if ring else part.points


def _place(n: int, part: Part, row: tuple[int, float] | None, lowest: float | None, walls: _Walls) -> Place:
    count, ratio = row or (0, math.nan)
    if upright(part) is not None:
        top = part.z_top if part.z_top is not None else max(p[2] for p in part.points)
        below = lowest is not None and top <= lowest + 0.3 and _pile_size(part)
        return Place(row_count=count, row_ratio=ratio, below_slab=below)
    if not straight(part) or walls.empty:
        return Place()
    head, far = sorted(part.points, key=lambda p: -p[2])
    dip = math.degrees(math.atan2(head[2] - far[2], math.dist(head[:2], far[:2])))
    ends = sum(walls.near(point[:2]) for point in part.points)
    return Place(ends_at_walls=ends, inclination=dip, far_side=walls.side(far[:2]) if dip > 3 else "")


def _pile_size(part: Part) -> bool:
    """Round and upright, of a pile's diameter, and long: hoses and dowels stand below slabs too."""
    low, high = PILE_DIAMETER
    heights = [point[2] for point in part.points] + [z for z in (part.z_bottom, part.z_top) if z is not None]
    return part.radius is not None and low <= 2 * part.radius <= high and max(heights) - min(heights) >= PILE_LENGTH


def _pile_rows(parts: Sequence[Part]) -> dict[int, tuple[int, float]]:
    """Close rows of round uprights: by index into `parts`, the count of the row and its spacing over diameter."""
    from scipy.sparse import coo_array
    from scipy.sparse.csgraph import connected_components
    from scipy.spatial import cKDTree

    low, high = PILE_DIAMETER
    rounds = [(n, *pile) for n, part in enumerate(parts) if (pile := upright(part)) is not None]
    piles = [(n, centre, diameter) for n, centre, diameter in rounds if low <= diameter <= high]
    if len(piles) < ROW_LEAST:
        return {}
    xy = np.array([centre for _, centre, _ in piles])
    size = np.array([diameter for _, _, diameter in piles])
    pairs = cKDTree(xy).query_pairs(WALL_ROW * float(size.max()), output_type="ndarray")
    gap = np.hypot(*(xy[pairs[:, 0]] - xy[pairs[:, 1]]).T)
    ratio = gap / np.minimum(size[pairs[:, 0]], size[pairs[:, 1]])
    close = (ratio < WALL_ROW) & (ratio > 0.3)  # closer is the same pile drawn twice
    pairs, ratio = pairs[close], ratio[close]
    links = coo_array((np.ones(len(pairs)), (pairs[:, 0], pairs[:, 1])), shape=(len(piles), len(piles)))
    _, member = connected_components(links, directed=False)
    count = np.bincount(member)
    nearest = np.full(len(piles), np.inf)
    np.minimum.at(nearest, pairs.ravel(), np.repeat(ratio, 2))
    found: dict[int, tuple[int, float]] = {}
    for group in np.flatnonzero(count >= ROW_LEAST):
        inside = np.flatnonzero(member == group)
        spacing = float(np.median(nearest[inside]))
        if _is_row(xy[inside], spacing * float(np.median(size[inside]))):
            found.update({piles[i][0]: (len(inside), spacing) for i in inside.tolist()})
    return found


def _is_row(xy: Floats, spacing: float) -> bool:
    """A row fills a strip, a field of piles an area: few piles have more than two neighbours at the spacing."""
    from scipy.spatial import cKDTree

    tree = cKDTree(xy)
    neighbours = tree.query_ball_point(xy, 1.3 * spacing, return_length=True) - 1
    return bool(np.mean(neighbours > 2) < 0.3)


class _Walls:
    """Wall axes and wall piles, asked for distance and side."""

    def __init__(self, axes: Sequence[Sequence[Point3]], centres: Sequence[Point3]) -> None:
        self._lines = NearLines([plan(axis) for axis in axes], plan(centres))
        self.empty = self._lines.empty

    def near(self, point: Point) -> bool:
        """Whether a wall stands close by."""
        return self._lines.distance(point, NEAR_WALL) <= NEAR_WALL

    def side(self, point: Point) -> str:
        """Behind the walls or between them; only clear where the walls enclose an area."""
        from shapely import intersects_xy

        hull = self._lines.hull
        if hull.area < 1.0:
            return ""
        return "between" if intersects_xy(hull, *point) else "behind"
