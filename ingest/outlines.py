"""Two drawings of one wall: do they lie on each other, and if not, which shift, turn and scale lays them there."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ingest.members import Point
from ingest.roles import RoleGiven

Floats = NDArray[np.float64]

STEP = 0.5
"""Distance of the points that stand for a line, m; finer where the whole file is small."""
MOST = 5000
"""Points that stand for one outline at most."""
FITS = 0.25
"""Largest mean distance of outlines that are said to lie on each other, m (judgement)."""
ALIKE = 1.5
"""Placements whose residual is within this factor of the best, or within 5 mm, cannot be told apart (judgement)."""
SLIPS = {
    1.0: "",
    1000.0: "mm",
    0.001: "m",
    1 / 0.3048: "foot",
    0.3048: "m",
    1 / 0.0254: "inch",
    0.0254: "m",
}
"""Factors by which a file grows when it is read in another unit than it was drawn in, and the unit it was drawn in."""


@dataclass(frozen=True, kw_only=True)
class Placement:
    """world = shift + turn(scale * file), x negated before when `mirrored`; `residual` is the mean distance left, m."""

    shift: Point
    turn: float
    scale: float
    mirrored: bool
    residual: float


def outline_points(given: Sequence[RoleGiven]) -> Floats:
    """Points along the walls and wall piles of one file, shape (n, 2)."""
    found: list[Floats] = []
    walls = [item for item in given if item.role == "wall"]
    corners = np.array([point[:2] for item in walls for point in item.part.points] or [(0.0, 0.0)])
    finest = min(STEP, max(float(np.hypot(*np.ptp(corners, axis=0))) / 200, 1e-6))
    for item in walls:
        line = np.array([point[:2] for point in item.part.points])
        if item.part.closed or item.part.form in ("outline", "prism"):
            line = np.vstack((line, line[:1]))
        for a, b in zip(line, line[1:], strict=False):
            steps = max(1, math.ceil(float(np.hypot(*(b - a))) / finest))
            found.append(a + (b - a) * np.arange(steps)[:, None] / steps)
        found.append(line[-1:])
    points = np.vstack(found) if found else np.zeros((0, 2))
    return points[:: 1 + len(points) // MOST]


def distance_between(one: Floats, other: Floats) -> float:
    """Mean distance from the points of each outline to the other one, the worse of the two ways, m."""
    from scipy.spatial import cKDTree

    there = np.asarray(cKDTree(one).query(other)[0])
    back = np.asarray(cKDTree(other).query(one)[0])
    return float(max(np.mean(there), np.mean(back)))


def find_placements(fixed: Floats, loose: Floats) -> tuple[Placement, ...]:
    """Find how `loose` lies on `fixed`.

    Args:
        fixed: Points of the outline that stays, (n, 2) m.
        loose: Points of the outline that is to be laid on it, (m, 2) m.

    Returns:
        The best placement and those that fit as well (a rectangle fits twice), best first; unmirrored and unscaled ones
        only where they fit. Empty when none fits within `FITS`.
    """
    if len(fixed) < 4 or len(loose) < 4:
        return ()
    tried = sorted(
        (_settle(fixed, loose, *start) for start in _starts(fixed, loose)),
        key=lambda p: (p.residual > FITS, p.mirrored, p.scale != 1.0, round(p.residual, 3), abs(p.turn)),
    )
    best = tried[0] if tried else None
    if best is None or best.residual > FITS:
        return ()
    kept: list[Placement] = []
    for p in tried:
        same = p.mirrored == best.mirrored and p.scale == best.scale
        near = p.residual <= max(ALIKE * best.residual, best.residual + 0.005)
        if same and near and all(_apart(p, k) for k in kept):
            kept.append(p)
    return tuple(kept[:4])


def _apart(a: Placement, b: Placement) -> bool:
    return abs((a.turn - b.turn + 180) % 360 - 180) > 2 or math.dist(a.shift, b.shift) > 0.5


def _starts(fixed: Floats, loose: Floats) -> Iterator[tuple[float, float, bool]]:
    """Scale, turn in degrees and mirroring to start from: the sizes must agree, the main directions too."""
    ratio = _size(fixed) / _size(loose) if _size(loose) else 0.0
    for scale in SLIPS:
        if not 0.7 < ratio * scale < 1.4:
            continue
        for mirrored in (False, True):
            seen = loose * (-1, 1) if mirrored else loose
            base = _direction(fixed) - _direction(seen)
            for quarter in range(4):
                yield 1 / scale, base + 90 * quarter, mirrored


def _size(points: Floats) -> float:
    return float(np.sqrt(np.mean(np.sum((points - points.mean(axis=0)) ** 2, axis=1))))


def _direction(points: Floats) -> float:
    """Main direction of the edges, modulo a quarter turn, degrees."""
    step = np.diff(points, axis=0)
    length = np.hypot(*step.T)
    near = (length > 0) & (length < 4 * np.median(length[length > 0])) if (length > 0).any() else length > 0
    angle = 4 * np.arctan2(step[near, 1], step[near, 0])
    mean = np.sum(length[near] * np.exp(1j * angle))
    return math.degrees(float(np.angle(mean))) / 4 if abs(mean) > 0 else 0.0


def _settle(fixed: Floats, loose: Floats, scale: float, turn: float, mirrored: bool) -> Placement:
    """Improve a start: each point looks for its nearest, then the best rigid move of all pairs, until it rests."""
    from scipy.spatial import cKDTree

    start = scale * (loose * (-1, 1) if mirrored else loose)
    tree = cKDTree(fixed)
    R = _rotation(turn)
    shift = _middle(fixed) - _middle(start @ R.T)
    for _ in range(40):
        moved = start @ R.T + shift
        pairs = fixed[np.asarray(tree.query(moved)[1])]
        a, b = start - start.mean(axis=0), pairs - pairs.mean(axis=0)
        angle = math.atan2(float(np.sum(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0])), float(np.sum(a * b)))
        R = _rotation(math.degrees(angle))
        new = pairs.mean(axis=0) - start.mean(axis=0) @ R.T
        rest = float(np.hypot(*(new - shift))) < 1e-5
        turn, shift = math.degrees(angle), new
        if rest:
            break
    residual = distance_between(fixed, start @ R.T + shift)
    return Placement(
        shift=(float(shift[0]), float(shift[1])), turn=turn, scale=scale, mirrored=mirrored, residual=residual
    )


def _middle(points: Floats) -> Floats:
    return np.asarray((points.min(axis=0) + points.max(axis=0)) / 2)


def _rotation(turn: float) -> Floats:
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    return np.array([[c, -s], [s, c]])
