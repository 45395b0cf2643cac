"""A surface through scattered levels: triangles inside their hull, the best plane beyond it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from sections.model import Bools, Floats, Ints


@dataclass(frozen=True, kw_only=True)
class Surface:
    """Levels known at points, and the plane that fits them best.

    Attributes:
        points: (k, 2) plan points, no two the same.
        levels: (k,) level at each.
        plane: Level at the origin, rise per metre east, rise per metre north, of the least-squares plane; with two
            points it follows their line and is level across it, with one it is level.
        triangles: (t, 3) indices of the triangles; none with fewer than three points or all on one line.
        hull: Convex hull of the points.
    """

    points: Floats
    levels: Floats
    plane: Floats
    triangles: Ints
    hull: BaseGeometry

    @property
    def dip(self) -> float:
        """Steepest fall of the plane, degrees below the horizontal."""
        return float(np.degrees(np.arctan(np.hypot(self.plane[1], self.plane[2]))))

    @property
    def dip_direction(self) -> float | None:
        """Azimuth towards which the plane falls, degrees clockwise from the y axis; None where it is level."""
        if np.hypot(self.plane[1], self.plane[2]) < 1e-9:
            return None
        return float(np.degrees(np.arctan2(-self.plane[1], -self.plane[2])) % 360.0)

    @property
    def strike(self) -> float | None:
        """Azimuth of the level line in the plane, dip to its right, degrees clockwise from the y axis."""
        return None if self.dip_direction is None else (self.dip_direction - 90.0) % 360.0


def make_surface(points: Floats, levels: Floats) -> Surface | None:
    """Surface through levels (k,) at points (k, 2); nan levels are left out, levels at one point averaged.

    Returns None when no level is known.
    """
    known = ~np.isnan(levels)
    if not np.any(known):
        return None
    spots, which = np.unique(np.round(points[known], 3), axis=0, return_inverse=True)
    mean = np.bincount(which.reshape(-1), levels[known]) / np.bincount(which.reshape(-1))
    triangles = _triangles(spots)
    return Surface(
        points=spots,
        levels=mean,
        plane=_plane(spots, mean),
        triangles=triangles,
        hull=shapely.MultiPoint(spots).convex_hull,
    )


def _plane(points: Floats, levels: Floats) -> Floats:
    centre = np.mean(points, axis=0)
    # the smallest slope that fits: with two points nothing is said across their line
    slope, *_ = np.linalg.lstsq(points - centre, levels - np.mean(levels), rcond=1e-9)
    return np.array([np.mean(levels) - centre @ slope, slope[0], slope[1]], dtype=np.float64)


def _triangles(points: Floats) -> Ints:
    none = np.zeros((0, 3), dtype=np.int64)
    if len(points) < 3:
        return none
    spread = np.linalg.svd(points - np.mean(points, axis=0), compute_uv=False)
    if spread[1] < 1e-6 * spread[0]:
        return none
    faces = shapely.delaunay_triangles(shapely.MultiPoint(points))
    corners = shapely.get_coordinates(shapely.get_parts(faces)).reshape(-1, 4, 2)[:, :3]
    flat = corners.reshape(-1, 2)
    nearest = np.argmin(np.hypot(*(flat[:, None, :] - points[None, :, :]).transpose(2, 0, 1)), axis=1)
    return np.asarray(nearest, dtype=np.int64).reshape(-1, 3)


def level_at(surface: Surface, points: Floats) -> Floats:
    """Level of the surface at points (n, 2).

    Inside the hull the triangle's; beyond it the plane's slope carried on from the nearest point of the hull, so that
    the surface has no step there.
    """
    inside = _in_hull(surface, points)
    foot = points.copy()
    if np.any(~inside):
        nearest = shapely.shortest_line(shapely.points(points[~inside]), surface.hull)
        foot[~inside] = shapely.get_coordinates(nearest).reshape(-1, 2, 2)[:, 1]
    base = _on_hull(surface, foot)
    return np.asarray(base + (points - foot) @ surface.plane[1:])


def _in_hull(surface: Surface, points: Floats) -> Bools:
    shapely.prepare(surface.hull)
    return np.asarray(shapely.intersects_xy(surface.hull, points[:, 0], points[:, 1]))


def _on_hull(surface: Surface, points: Floats) -> Floats:
    """Level at points of the hull: barycentric in the triangle that holds them, or along the line of the points."""
    if len(surface.triangles) == 0:
        return np.asarray(_along_line(surface, points))
    corner = surface.points[surface.triangles]
    origin = corner[:, 0]
    one, two = corner[:, 1] - origin, corner[:, 2] - origin
    area = one[:, 0] * two[:, 1] - one[:, 1] * two[:, 0]
    gap = points[:, None, :] - origin[None, :, :]
    second = (gap[..., 0] * two[:, 1] - gap[..., 1] * two[:, 0]) / area
    third = (one[:, 0] * gap[..., 1] - one[:, 1] * gap[..., 0]) / area
    share = np.stack([1.0 - second - third, second, third], axis=-1)
    # rounding may leave a point on an edge a hair outside every triangle: take the one it is least outside of
    best = np.argmax(np.min(share, axis=-1), axis=1)
    weight = share[np.arange(len(points)), best]
    corners = surface.levels[surface.triangles][best]
    return np.asarray(np.einsum("ij,ij->i", weight, corners))


def _along_line(surface: Surface, points: Floats) -> Floats:
    if len(surface.points) == 1:
        return np.full(len(points), surface.levels[0])
    axis = surface.points[np.argmax(np.hypot(*(surface.points - surface.points[0]).T))] - surface.points[0]
    axis = axis / np.hypot(*axis)
    place = (surface.points - surface.points[0]) @ axis
    order = np.argsort(place)
    return np.asarray(np.interp((points - surface.points[0]) @ axis, place[order], surface.levels[order]))
