"""Mirror axes of a pit: overlap of its plan with its mirror image, then walls, floors, supports, loads and ground.

The plan score is area in common over area of both together; every mirror axis of a plan passes through its centroid.
"""

from __future__ import annotations

import numpy as np
import shapely
from numpy.typing import ArrayLike

from ingest.members import Point
from sections.found import PitShape
from sections.model import Axis, Floats
from sections.pit.chainage import area_of

NEAR = 0.95
"""Axes whose overlap is less are not listed (judgement)."""
FULL = 0.99
"""A plan this close to its mirror image counts as symmetric (judgement: 1 in 100 of the area)."""
GRID = 1.0
"""Step of the search, degrees; finer between neighbours only where the score peaks."""


def mirrored(points: Floats, centre: Point | Floats, direction: ArrayLike) -> Floats:
    """Mirror points (n, 2) in the line through `centre` at `direction` (degrees counter-clockwise from the x axis).

    With directions (d,) the result is (d, n, 2).
    """
    angle = 2.0 * np.radians(np.asarray(direction, dtype=np.float64))
    matrix = np.stack([np.stack([np.cos(angle), np.sin(angle)], -1), np.stack([np.sin(angle), -np.cos(angle)], -1)], -2)
    away = np.asarray(points, dtype=np.float64) - np.asarray(centre)
    turned = np.einsum("...ij,nj->...ni", matrix, away)
    return np.asarray(turned + np.asarray(centre))


def overlap_at(outline: shapely.Polygon, directions: ArrayLike) -> Floats:
    """Overlap of a plan with its mirror image in the axis through its centroid at each direction (d,), degrees."""
    angles = np.atleast_1d(np.asarray(directions, dtype=np.float64))
    centre = np.array([outline.centroid.x, outline.centroid.y])
    ring = shapely.get_coordinates(outline.exterior)
    images = shapely.polygons(mirrored(ring, centre, angles))
    common = shapely.area(shapely.intersection(images, outline))
    return np.asarray(common / (2.0 * outline.area - common))


def plan_axes(shape: PitShape) -> tuple[tuple[float, float], ...]:
    """Directions (degrees, 0 to 180) of the axes about which a closed plan nearly mirrors, with their overlap."""
    if not shape.closed:
        return ()
    outline = area_of(shape)
    rough = outline.exterior.simplify(0.005 * np.sqrt(outline.area))
    coarse = shapely.Polygon(shapely.get_coordinates(rough))
    grid = np.arange(0.0, 180.0, GRID)
    score = overlap_at(coarse, grid)
    peaks = grid[(score >= np.roll(score, 1)) & (score >= np.roll(score, -1)) & (score > NEAR - 0.1)]
    candidates = np.concatenate([_refined(coarse, peaks), _exact_directions(coarse)])
    score = overlap_at(coarse, candidates) if len(candidates) else np.zeros(0)
    kept = _apart(candidates[score > NEAR - 0.02], score[score > NEAR - 0.02])
    final = overlap_at(outline, kept) if len(kept) else np.zeros(0)
    found = sorted((float(round(d, 6) % 180.0), float(s)) for d, s in zip(kept, final, strict=True) if s >= NEAR)
    return tuple(found)


def _refined(outline: shapely.Polygon, peaks: Floats) -> Floats:
    """Narrow each peak of the grid by comparing nine directions about it, five times over."""
    if len(peaks) == 0:
        return peaks
    width = GRID
    for _ in range(6):
        tried = peaks[:, None] + np.linspace(-width, width, 9)[None, :]
        score = overlap_at(outline, tried.reshape(-1)).reshape(tried.shape)
        peaks = tried[np.arange(len(peaks)), np.argmax(score, axis=1)]
        width /= 4.0
    return np.asarray(np.mod(peaks, 180.0))


def _exact_directions(outline: shapely.Polygon) -> Floats:
    """Directions a true axis must have: through a vertex, or square to an edge."""
    ring = shapely.get_coordinates(outline.exterior)[:-1]
    if len(ring) > 80:
        return np.zeros(0)
    spoke = ring - np.array([outline.centroid.x, outline.centroid.y])
    edge = np.roll(ring, -1, axis=0) - ring
    through = np.degrees(np.arctan2(spoke[:, 1], spoke[:, 0]))
    square = np.degrees(np.arctan2(edge[:, 1], edge[:, 0])) + 90.0
    return np.unique(np.round(np.mod(np.concatenate([through, square]), 180.0), 9))


def _apart(directions: Floats, score: Floats) -> Floats:
    """The best of every bunch of directions within half a degree, and only those that are peaks of their own."""
    kept: list[float] = []
    for i in np.lexsort((directions, -np.round(score, 7))):
        gap = [abs((directions[i] - other + 90.0) % 180.0 - 90.0) for other in kept]
        if not gap or min(gap) > 2.0 * GRID:
            kept.append(float(directions[i]))
    return np.array(kept)


def circle_axis(shape: PitShape) -> Axis | None:
    """The one entry of a true circle, of which every diameter is an axis; None for any other plan."""
    if shape.circle is None or shape.circle.sides is not None or not shape.closed:
        return None
    outline = area_of(shape)
    overlap = float(np.min(overlap_at(outline, np.arange(0.0, 180.0, 15.0))))
    if overlap < FULL:
        return None
    return Axis(point=shape.circle.centre, direction=0.0, overlap=overlap, complete=True, all_diameters=True)
