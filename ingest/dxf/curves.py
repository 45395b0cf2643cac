"""Arcs into chords and entity planes into the world, on numpy arrays."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

SAGITTA = 0.005
"""Largest distance between an arc and its chords, m (the contract's tolerance)."""
WIDEST_CHORD = math.pi / 4
"""Angle a chord may span at most, so that small circles stay round."""
FINEST_CHORD = 2.0 * math.pi / 10_000
"""Angle below which no arc is divided: a bound on memory, reached by radii above 100 km."""


def chord_angle(radius: Floats, sagitta: float) -> Floats:
    """Angle whose chord stays within the sagitta of its arc, at most an eighth of a turn.

    Args:
        radius: Arc radii, any unit, shape (n,).
        sagitta: Allowed distance between arc and chord, same unit.

    Returns:
        Angles in radians, shape (n,), from s = R (1 - cos(angle / 2)).
    """
    # the half-angle form keeps its digits on flat arcs
    wanted = 4.0 * np.arcsin(np.sqrt(np.clip(sagitta / radius, 0.0, 2.0) / 2.0))
    return np.clip(wanted, FINEST_CHORD, WIDEST_CHORD)


def flatten_bulges(starts: Floats, ends: Floats, bulges: Floats, sagitta: float) -> tuple[Floats, NDArray[np.int64]]:
    """Replace bulged polyline segments by chords, all of them in one go.

    A bulge is tan(angle / 4), positive counter-clockwise; R = c (1 + b^2) / (4 |b|) for the chord c.

    Args:
        starts: First points of the segments, shape (n, 2), any unit.
        ends: Last points, shape (n, 2).
        bulges: Bulges, shape (n,); 0 is a straight segment.
        sagitta: Allowed distance between arc and chord, same unit.

    Returns:
        The points of all segments in order, each from its start up to but without its end, shape (m, 2), and the number
        of points of each segment, shape (n,).
    """
    chord = ends - starts
    length = np.hypot(chord[:, 0], chord[:, 1])
    curved = (np.abs(bulges) > 1e-12) & (length > 0.0)
    safe = np.where(curved, bulges, 1.0)
    angle = np.where(curved, 4.0 * np.arctan(safe), 0.0)
    radius = np.where(curved, length * (1.0 + safe**2) / (4.0 * np.abs(safe)), 1.0)
    counts = np.where(curved, np.ceil(np.abs(angle) / chord_angle(radius, sagitta) - 1e-9), 1.0)
    counts = np.maximum(counts, 1.0).astype(np.int64)
    # centre: from the middle of the chord along its left normal by c (1 - b^2) / (4 b)
    lift = np.where(curved, (1.0 - safe**2) / (4.0 * safe), 0.0)[:, None]
    centre = (starts + ends) / 2.0 + lift * np.column_stack((-chord[:, 1], chord[:, 0]))
    owner = np.repeat(np.arange(len(starts)), counts)
    step = np.arange(len(owner)) - np.repeat(np.cumsum(counts) - counts, counts)
    turn = angle[owner] * step / counts[owner]
    arm = starts[owner] - centre[owner]
    cos, sin = np.cos(turn), np.sin(turn)
    turned = np.column_stack((cos * arm[:, 0] - sin * arm[:, 1], sin * arm[:, 0] + cos * arm[:, 1]))
    points = np.where((curved[owner] & (step > 0))[:, None], centre[owner] + turned, starts[owner])
    return points, counts


def flatten_conic(centre: Floats, along: Floats, across: Floats, span: tuple[float, float], sagitta: float) -> Floats:
    """Chords of a circle, ellipse or part of one.

    Args:
        centre: Centre, shape (3,), any unit.
        along: Half axis where the parameter is 0, shape (3,).
        across: Half axis where the parameter is pi/2, shape (3,).
        span: First and last parameter in radians, last above first.
        sagitta: Allowed distance between curve and chord, same unit.

    Returns:
        Points on the curve, both ends included, shape (m, 3). The curve is an affine image of the unit circle, so its
        distance from the chords is at most the longer half axis times the unit circle's.
    """
    longest = max(float(np.linalg.norm(along)), float(np.linalg.norm(across)))
    angle = float(chord_angle(np.array([longest]), sagitta)[0]) if longest > 0.0 else WIDEST_CHORD
    count = max(1, math.ceil((span[1] - span[0]) / angle - 1e-9))
    at = np.linspace(span[0], span[1], count + 1)
    points: Floats = centre + np.cos(at)[:, None] * along + np.sin(at)[:, None] * across
    return points


def entity_axes(extrusion: Any) -> Floats | None:
    """Axes of an entity's own plane by the format's arbitrary axis rule.

    Args:
        extrusion: Normal of the plane with x, y, z, or None when the entity has none.

    Returns:
        None where the plane is the world's, else the axes as rows, shape (3, 3): world = own @ axes. The rule (DXF
        reference, "Arbitrary axis algorithm"): with |nx| and |ny| both below 1/64 the x axis is Y x n, else Z x n.
    """
    if extrusion is None:
        return None
    x, y, z = float(extrusion.x), float(extrusion.y), float(extrusion.z)
    if x == 0.0 and y == 0.0 and z > 0.0:
        return None
    size = math.sqrt(x * x + y * y + z * z)
    if size == 0.0 or not math.isfinite(size):
        return None
    normal = np.array([x, y, z]) / size
    up = np.array([0.0, 1.0, 0.0]) if abs(normal[0]) < 1 / 64 and abs(normal[1]) < 1 / 64 else np.array([0.0, 0.0, 1.0])
    first = np.cross(up, normal)
    first /= np.linalg.norm(first)
    return np.array([first, np.cross(normal, first), normal])


def circle_of_bulges(points: Floats, bulges: Floats) -> tuple[float, float, float] | None:
    """Centre and radius of a closed polyline whose arcs are one full circle.

    Args:
        points: Vertices, shape (n, 2), any unit; the last one joins the first.
        bulges: Bulges, shape (n,), of each vertex to the next.

    Returns:
        x, y and radius in the same unit, or None when the polyline is anything else.
    """
    if abs(abs(float(np.arctan(bulges).sum())) - math.pi / 2) > 1e-6 or not (np.abs(bulges) > 1e-3).all():
        return None
    ahead = np.roll(points, -1, axis=0)
    chord = ahead - points
    lift = ((1.0 - bulges**2) / (4.0 * bulges))[:, None]
    centres = (points + ahead) / 2.0 + lift * np.column_stack((-chord[:, 1], chord[:, 0]))
    radii = np.hypot(*(points - centres).T)
    centre, radius = centres.mean(axis=0), float(radii.mean())
    if np.abs(centres - centre).max() > 1e-6 * radius or np.abs(radii - radius).max() > 1e-6 * radius:
        return None
    return float(centre[0]), float(centre[1]), radius
