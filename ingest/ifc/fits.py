"""Simple bodies fitted to meshes, each with its residual."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.facets import Face
from ingest.ifc.frames import Triple

Floats = NDArray[np.float64]

ROUND = 0.02
"""Largest distance of a vertex from the fitted circle, as a share of the radius (judgement)."""
LEAST_SIDES = 8


@dataclass(frozen=True, slots=True)
class Cylinder:
    """An upright cylinder, m; `residual` is the largest distance of a vertex from it."""

    centre: tuple[float, float]
    radius: float
    top: float
    bottom: float
    residual: float


@dataclass(frozen=True, slots=True)
class Box:
    """A straight bar of rectangular section, m; `filled` is the volume of the mesh over that of the box."""

    start: Triple
    end: Triple
    width: float
    depth: float
    filled: float


def fit_cylinder(points: Floats, faces: tuple[Face, ...]) -> Cylinder | None:
    """The upright cylinder whose mantle holds all vertices but those on its axis; None when they stand on no circle.

    Vertices must stand in rings of at least eight, so that a square or hexagonal post is not taken for a pile.
    """
    used = np.unique(np.array([i for face in faces for i in face], int)) if faces else np.arange(len(points))
    at = points[used]
    low, high = float(at[:, 2].min()), float(at[:, 2].max())
    flat = at[:, :2] - at[:, :2].mean(axis=0)
    scale = float(np.abs(flat).max())
    if scale <= 0 or high - low <= 0:
        return None
    rim = flat[np.hypot(*flat.T) > 0.5 * scale]
    if len(np.unique(np.round(rim / scale, 4), axis=0)) < LEAST_SIDES:
        return None
    system = np.column_stack([2 * rim, np.ones(len(rim))])
    solved, _, rank, _ = np.linalg.lstsq(system, (rim**2).sum(axis=1), rcond=None)
    if rank < 3:
        return None
    radius = float(np.sqrt(max(solved[2] + solved[0] ** 2 + solved[1] ** 2, 0.0)))
    off = np.abs(np.hypot(*(rim - solved[:2]).T) - radius)
    if radius <= 0 or off.max() > ROUND * radius or not _all_round(rim - solved[:2]):
        return None
    x, y = (solved[:2] + at[:, :2].mean(axis=0)).tolist()
    return Cylinder((x, y), radius, high, low, float(off.max()))


def _all_round(rim: Floats) -> bool:
    """True when no gap between neighbouring vertices is wider than a corner of an octagon and a bit."""
    angles = np.sort(np.arctan2(rim[:, 1], rim[:, 0]))
    gaps = np.diff(np.concatenate([angles, angles[:1] + 2 * np.pi]))
    return bool(gaps.max() < 2 * np.pi / LEAST_SIDES + 1e-3)


def fit_bar(points: Floats) -> Box:
    """The box about a mesh along its longest principal direction, ends at the middle of its end faces."""
    middle = points.mean(axis=0)
    _, _, ways = np.linalg.svd(points - middle, full_matrices=False)
    along = ways[0]
    level = np.cross(along, [0.0, 0.0, 1.0])
    level = level / np.linalg.norm(level) if np.linalg.norm(level) > 1e-6 else np.array([1.0, 0.0, 0.0])
    across = np.cross(level, along)
    spread = np.column_stack([(points - middle) @ way for way in (along, level, across)])
    low, high = spread.min(axis=0), spread.max(axis=0)
    centre = middle + (low[1] + high[1]) / 2 * level + (low[2] + high[2]) / 2 * across
    (a, b, c), (d, e, f) = (centre + low[0] * along).tolist(), (centre + high[0] * along).tolist()
    sizes = high - low
    hull = _hull_volume(points)
    box = float(np.prod(sizes))
    return Box((a, b, c), (d, e, f), float(sizes[1]), float(sizes[2]), hull / box if box > 0 else 0.0)


def _hull_volume(points: Floats) -> float:
    from scipy.spatial import ConvexHull, QhullError

    try:
        return float(ConvexHull(points).volume)
    except QhullError:
        return 0.0


def mesh_volume(points: Floats, faces: tuple[Face, ...]) -> float:
    """Volume within a closed mesh by the divergence theorem; of no meaning for an open one."""
    at = points - points.mean(axis=0)
    total = 0.0
    for face in faces:
        ring = at[list(face)]
        for i in range(1, len(ring) - 1):
            total += float(np.dot(ring[0], np.cross(ring[i], ring[i + 1])))
    return abs(total) / 6
