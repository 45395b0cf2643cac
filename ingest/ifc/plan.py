"""Bodies seen from above: outline on plan, holes, and the levels between which they stand."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, sqrt
from typing import Any, TypeAlias

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPolygon, Polygon

from ingest.ifc.bodies import Placed
from ingest.ifc.facets import Facets
from ingest.ifc.frames import Triple
from ingest.ifc.profiles import Profile, Ring, holes_of
from ingest.ifc.shapes import Extrusion, HalfSpace, Line, Sweep

Floats: TypeAlias = NDArray[np.float64]
Area: TypeAlias = Polygon | MultiPolygon

UPRIGHT = 0.0087
"""Sine of half a degree: bodies leaning less count as upright (judgement; bored piles may lean 0.02 by EN 1536)."""
SNAP = 1e-7
"""Outlines closer than this are one, m."""


@dataclass(frozen=True, slots=True)
class Prism:
    """A body as an upright prism: plan area between two levels, m. `notes` say what that leaves out."""

    area: Area
    bottom: float
    top: float
    notes: tuple[str, ...] = ()


def areal(geometry: object) -> Area:
    """The polygons of a geometry; lines and points that set operations leave behind are dropped."""
    if isinstance(geometry, Polygon | MultiPolygon):
        return geometry
    pieces = [piece for piece in getattr(geometry, "geoms", ()) if isinstance(piece, Polygon)]
    return MultiPolygon(pieces)


def is_upright(vector: Triple) -> bool:
    """True for an extrusion within half a degree of the vertical."""
    x, y, z = vector
    return hypot(x, y) <= UPRIGHT * sqrt(x * x + y * y + z * z)


def is_flat(body: Placed) -> bool:
    """True when the profile lies in a level plane."""
    return abs(body.x[2]) < 1e-6 * body.scale and abs(body.y[2]) < 1e-6 * body.scale


def ring_points(body: Placed, ring: Ring) -> list[Triple]:
    """World points of a profile ring, m."""
    (ox, oy, oz), (a, b, c), (d, e, f) = body.origin, body.x, body.y
    return [(ox + u * a + v * d, oy + u * b + v * e, oz + u * c + v * f) for u, v in ring]


def prism(body: Placed) -> Prism:
    """The upright prism round a body.

    Raises:
        ValueError: For bodies without volume.
    """
    shape = body.shape
    if isinstance(shape, Extrusion):
        return _cut_prism(body, shape, _upright_prism(body, shape.profile) if is_upright(body.vector) else _lying(body))
    if isinstance(shape, Sweep):
        return _sweep_prism(body, shape)
    if isinstance(shape, Facets):
        return mesh_prism(body.points(), shape)
    raise ValueError("a line has no plan area")


def _upright_prism(body: Placed, profile: Profile) -> Prism:
    rings = [ring_points(body, ring) for ring in profile.outlines]
    holes = [ring_points(body, ring) for ring in holes_of(profile)]
    area = _area([[p[:2] for p in ring] for ring in rings], [[p[:2] for p in ring] for ring in holes])
    levels = [p[2] for ring in rings for p in ring]
    low, high = min(levels), max(levels)
    rise = body.vector[2]
    notes = () if high - low < 1e-6 else ("ends not level",)
    return Prism(area, low + min(rise, 0.0), high + max(rise, 0.0), notes)


def _lying(body: Placed) -> Prism:
    """A body extruded sideways. Level ones have a rectangle on plan; others the hull of their two ends."""
    shape = body.shape
    assert isinstance(shape, Extrusion)
    start = np.array([p for ring in shape.profile.outlines for p in ring_points(body, ring)])
    both = np.vstack([start, start + body.vector])
    hull = shapely.convex_hull(shapely.multipoints(both[:, :2]))
    length = sqrt(sum(v * v for v in body.vector))
    low, high = float(both[:, 2].min()), float(both[:, 2].max())
    area = areal(hull)
    if abs(body.vector[2]) > UPRIGHT * length:
        return Prism(area, low, high, ("inclined; outline is its hull on plan",))
    profile = sum(_polygon(list(ring)).area for ring in shape.profile.outlines) * body.scale**2
    share = profile * length / (area.area * (high - low)) if area.area and high > low else 1.0
    notes = () if share > 0.99 else (f"lies on its side; fills {share:.0%} of the upright prism",)
    return Prism(area, low, high, notes)


def _area(rings: list[list[Any]], holes: list[list[Any]]) -> Area:
    outer = areal(shapely.union_all([_polygon(ring) for ring in rings]))
    if holes:
        outer = areal(shapely.difference(outer, shapely.union_all([_polygon(ring) for ring in holes])))
    return outer


def _polygon(ring: list[Any]) -> Area:
    made = Polygon(ring)
    return made if made.is_valid else areal(shapely.make_valid(made, method="structure", keep_collapsed=False))


def _cut_prism(body: Placed, shape: Extrusion, whole: Prism) -> Prism:
    notes = [*shape.notes, *whole.notes]
    if shape.profile.note and shape.profile.kind != "composite":
        notes.append(shape.profile.note)
    area, bottom, top = whole.area, whole.bottom, whole.top
    for cut in shape.cuts:
        try:
            if isinstance(cut, HalfSpace):
                area, bottom, top, note = _cut_by_plane(body, cut, area, bottom, top)
            else:
                area, note = _cut_by_body(body, cut, area, bottom, top)
        except (ValueError, shapely.errors.GEOSException):
            note = "a cut was left out"
        if note and note not in notes:
            notes.append(note)
    return Prism(area, bottom, top, tuple(notes))


def _cut_by_plane(
    body: Placed, cut: HalfSpace, area: Area, bottom: float, top: float
) -> tuple[Area, float, float, str]:
    frame = body.base @ body.frames[cut.frame]
    point, normal = frame[:3, 3], frame[:3, 2] / np.linalg.norm(frame[:3, 2])
    keep = normal if cut.keep_above else -normal
    reach = _cut_reach(body, cut, area)
    if abs(keep[2]) < 1e-6:
        gone = shapely.intersection(half_plane(point[:2], -keep[:2], area), reach)
        left = areal(shapely.difference(area, gone))
        return (left, bottom, top, "") if left.area > 0 else (area, bottom, top, "cut away whole; uncut body kept")
    if not shapely.covers(shapely.buffer(reach, 1e-6), area):
        return area, bottom, top, "cut over a part of its length"
    corners = shapely.get_coordinates(area)
    levels = point[2] - ((corners - point[:2]) @ keep[:2]) / keep[2]
    low, high = float(levels.min()), float(levels.max())
    note = "" if high - low < 1e-6 else f"cut slopes from {low:.3f} to {high:.3f}"
    if keep[2] < 0 and high > bottom:
        return area, bottom, min(top, high), note if low < top else ""
    if keep[2] > 0 and low < top:
        return area, max(bottom, low), top, note if high > bottom else ""
    return area, bottom, top, "cut away whole; uncut body kept"


def _cut_reach(body: Placed, cut: HalfSpace, area: Area) -> Area:
    if cut.boundary is None:
        return areal(shapely.buffer(shapely.box(*area.bounds), 1.0))
    frame = body.base @ body.frames[cut.boundary_frame]
    ring = np.array([[u, v, 0.0] for u, v in cut.boundary]) @ frame[:3, :3].T + frame[:3, 3]
    if abs(frame[2, 2]) < 0.999 * float(np.linalg.norm(frame[:3, 2])):
        raise ValueError("boundary does not stand upright")
    return _polygon(ring[:, :2].tolist())


def half_plane(point: Floats, way: Floats, around: Area) -> Polygon:
    """The part of a large square about `around` that lies on the side of `way` from `point`."""
    x0, y0, x1, y1 = around.bounds
    reach = 2 * (hypot(x1 - x0, y1 - y0) + hypot(point[0] - x0, point[1] - y0)) + 1.0
    along = way / np.hypot(*way) * reach
    side = np.array([-along[1], along[0]])
    return Polygon([point + side, point - side, point - side + along, point + side + along])


def _cut_by_body(body: Placed, cut: Extrusion, area: Area, bottom: float, top: float) -> tuple[Area, str]:
    other = place_cutter(body, cut)
    gone = prism(other)
    if gone.bottom > bottom + 1e-3 or gone.top < top - 1e-3:
        return area, "a pocket cut out of it was left out"
    left = areal(shapely.difference(area, gone.area))
    return (left, "") if left.area > 0 else (area, "cut away whole; uncut body kept")


def place_cutter(body: Placed, cut: Extrusion) -> Placed:
    """Place a body that is cut out of another one, given in the coordinates of that other's item."""
    full = body.base @ body.frames[cut.frame]
    vector = full[:3, :3] @ np.array(cut.vector)
    rows = (tuple(map(float, column)) for column in (full[:3, 3], full[:3, 0], full[:3, 1], vector))
    origin, x, y, along = rows
    return Placed(cut, origin, x, y, along, body.base, body.frames)  # type: ignore[arg-type]


def profile_upright(body: Placed, shape: Sweep) -> Floats:
    """Corners of a swept profile as (n, 2): metres to the left of the line and metres above it."""
    ring = np.array([p for one in shape.profile.outlines for p in one]) * float(np.linalg.norm(body.base[:3, 0]))
    if shape.reference is None or abs((body.base[:3, :3] @ shape.reference)[2]) < 0.7 * np.linalg.norm(
        body.base[:3, :3] @ shape.reference
    ):
        return np.asarray(ring)
    up = 1.0 if (body.base[:3, :3] @ shape.reference)[2] > 0 else -1.0
    return np.column_stack([-up * ring[:, 1], up * ring[:, 0]])


def _sweep_prism(body: Placed, shape: Sweep) -> Prism:
    points = body.points()
    corners = profile_upright(body, shape)
    low, high = corners.min(axis=0), corners.max(axis=0)
    if np.ptp(points[:, :2], axis=0).max() <= SNAP:
        reach = float(np.abs(corners).max())
        area = areal(shapely.buffer(shapely.Point(points[0, :2]), reach))
        return Prism(area, float(points[:, 2].min()), float(points[:, 2].max()), shape.notes)
    line: shapely.Geometry = shapely.LineString(points[:, :2])
    middle = float(low[0] + high[0]) / 2
    if abs(middle) > SNAP:
        line = shapely.offset_curve(line, middle, join_style="mitre")
    area = areal(shapely.buffer(line, float(high[0] - low[0]) / 2, cap_style="flat", join_style="mitre"))
    return Prism(area, float(points[:, 2].min() + low[1]), float(points[:, 2].max() + high[1]), shape.notes)


def mesh_prism(points: Floats, mesh: Facets) -> Prism:
    """The shadow of a mesh on plan: the union of its faces, exact for prisms that stand upright."""
    faces = [points[list(face)][:, :2] for face in mesh.faces]
    polygons = [Polygon(face) for face in faces if len(face) >= 3]
    area = areal(shapely.union_all([p if p.is_valid else p.convex_hull for p in polygons if p.area > SNAP]))
    used = sorted({i for face in mesh.faces for i in face})
    if not used or area.area <= 0:
        raise ValueError("a mesh without plan area")
    levels = points[used, 2]
    return Prism(area, float(levels.min()), float(levels.max()), mesh.notes)


def join_prisms(prisms: list[Prism]) -> Prism:
    """Several prisms as one: the union of their areas between the lowest and the highest level."""
    if len(prisms) == 1:
        return prisms[0]
    area = areal(shapely.union_all([p.area for p in prisms]))
    notes = tuple(dict.fromkeys(note for p in prisms for note in p.notes))
    return Prism(area, min(p.bottom for p in prisms), max(p.top for p in prisms), notes)


def is_line(body: Placed) -> bool:
    """True for bare curves and points."""
    return isinstance(body.shape, Line)
