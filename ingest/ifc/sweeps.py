"""Bodies made by moving a profile along a curve or turning it about an axis."""

from __future__ import annotations

from math import pi
from typing import TYPE_CHECKING, Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.facets import Facets
from ingest.ifc.profiles import Profile
from ingest.ifc.shapes import Sweep

if TYPE_CHECKING:
    from ingest.ifc.items import ItemReader

Entity: TypeAlias = Any
Floats: TypeAlias = NDArray[np.float64]


def read_disk(reader: ItemReader, item: Entity) -> Sweep:
    """A disc or tube along a curve."""
    radius, inner = float(item.Radius), float(item.InnerRadius or 0.0)
    if not 0 <= inner < radius:
        raise ValueError(f"a disc of radius {radius} with a bore of {inner}")
    kind, size = ("hollow circle", (radius, radius - inner)) if inner else ("circle", (radius,))
    return Sweep(_directrix(reader, item), Profile(kind, "", size=size))


def read_swept_area(reader: ItemReader, item: Entity) -> Sweep:
    """A profile along a curve, held by a fixed direction or a surface."""
    points = _directrix(reader, item)
    frames = reader.frames
    at = frames.matrix(frames.row(item.Position))
    if item.is_a("IfcSurfaceCurveSweptAreaSolid"):
        surface = item.ReferenceSurface
        if not surface.is_a("IfcPlane"):
            raise ValueError(f"{item.is_a()} on a {surface.is_a()} is not read")
        way = frames.matrix(frames.row(surface.Position))[:3, 2]
    else:
        way = np.array(frames.direction(item.FixedReference))
    x, y, z = (at[:3, :3] @ way).tolist()
    profile = reader.profiles.read(item.SweptArea)
    return Sweep(points @ at[:3, :3].T + at[:3, 3], profile, reference=(x, y, z))


def read_sectioned(reader: ItemReader, item: Entity) -> Sweep:
    """Several profiles along a curve; the first stands for all."""
    profile = reader.profiles.read(item.CrossSections[0])
    points = reader.curves.points(item.Directrix)
    ends = [position.Location.DistanceAlong.wrappedValue for position in item.CrossSectionPositions]
    along = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(points, axis=0), axis=1))])
    return Sweep(_between(points, along, min(ends), max(ends)), profile, ("section of its start",))


def read_revolved(reader: ItemReader, item: Entity) -> Facets:
    """A profile turned about an axis, as a mesh."""
    frames = reader.frames
    at, axis = frames.matrix(frames.row(item.Position)), frames.matrix(frames.row(item.Axis))
    profile = reader.profiles.read(item.SweptArea)
    mesh = revolve(profile, axis[:3, 3], axis[:3, 2], float(item.Angle) * reader.curves.angle)
    return Facets(mesh.points @ at[:3, :3].T + at[:3, 3], mesh.faces)


def _directrix(reader: ItemReader, item: Entity) -> Floats:
    """The curve of a sweep between its start and end parameter, which count the corners of a polyline."""
    points = reader.curves.points(item.Directrix)
    start, end = getattr(item, "StartParam", None), getattr(item, "EndParam", None)
    last = float(len(points) - 1)
    if not item.Directrix.is_a("IfcPolyline"):
        return points
    if (start, end) == (0.0, 1.0):  # some exporters count the whole curve from 0 to 1
        return points
    first, stop = (float(t) if isinstance(t, float) else spare for t, spare in ((start, 0.0), (end, last)))
    if (first, stop) == (0.0, last) or not 0 <= first < stop <= last:
        return points
    return _between(points, np.arange(len(points), dtype=float), first, stop)


def _between(points: Floats, along: Floats, first: float, stop: float) -> Floats:
    """The stretch of a line between two values of the measure `along` its points."""
    ends = [[np.interp(t, along, points[:, k]) for k in range(3)] for t in (first, stop)]
    return np.vstack([ends[0], points[(along > first) & (along < stop)], ends[1]])


def revolve(profile: Profile, origin: Floats, axis: Floats, turn: float) -> Facets:
    """Mesh of a profile (in the plane z = 0) turned about an axis, one ring of points per 7.5 degrees."""
    ring = np.array(profile.outlines[0])
    flat = np.column_stack([ring, np.zeros(len(ring))]) - origin
    full = abs(abs(turn) - 2 * pi) < 1e-6
    steps = max(int(np.ceil(abs(turn) / (pi / 24))), 1)
    angles = turn * np.arange(steps if full else steps + 1) / steps
    along = (flat @ axis)[:, None] * axis
    across = flat - along
    side = np.cross(axis, across)
    points = np.concatenate([origin + along + np.cos(t) * across + np.sin(t) * side for t in angles])
    n, rows = len(ring), len(angles)
    faces = [
        (i * n + j, i * n + (j + 1) % n, (i + 1) % rows * n + (j + 1) % n, (i + 1) % rows * n + j)
        for i in range(rows if full else rows - 1)
        for j in range(n)
    ]
    if not full:
        faces += [tuple(range(n)), tuple(range((rows - 1) * n, rows * n))]  # type: ignore[list-item]
    return Facets(points, tuple(faces))
