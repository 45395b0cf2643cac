"""Lines, polylines, arcs, circles, ellipses, splines and points as drawn."""

from __future__ import annotations

import math
from itertools import chain
from typing import Any

import numpy as np

from ingest.dxf.curves import Floats, circle_of_bulges, entity_axes
from ingest.dxf.sketch import FARTHEST_UNITS, OUT_OF_REACH, Left, Sketch


def incomplete(what: str) -> Left:
    """An entity that lacks a coordinate it cannot be drawn without."""
    return Left("ignored", f"incomplete: {what}")


def sketch_line(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A LINE; both its ends are world coordinates whatever its extrusion."""
    known = vars(entity.dxf)
    start, end = known.get("start"), known.get("end")
    if start is None or end is None:
        return incomplete("LINE without both ends")
    xyz = (start.x, start.y, start.z, end.x, end.y, end.z)
    return [Sketch(cls="LINE", layer=layer_of(known), form="path", xyz=xyz, rise=known.get("thickness", 0.0))]


def sketch_point(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A POINT, world coordinates."""
    known = vars(entity.dxf)
    at = known.get("location")
    if at is None:
        return incomplete("POINT without its place")
    return [Sketch(cls="POINT", layer=layer_of(known), form="point", xyz=(at.x, at.y, at.z))]


def sketch_lwpolyline(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A LWPOLYLINE in its own plane, with bulges and a width that is the same all along."""
    known = vars(entity.dxf)
    values = np.asarray(entity.lwpoints.values, dtype=np.float64).reshape(-1, 5)
    if len(values) == 0:
        return incomplete("polyline without vertices")
    xyz = np.empty((len(values), 3))
    xyz[:, :2] = values[:, :2]
    xyz[:, 2] = known.get("elevation", 0.0)
    line = Sketch(
        cls="LWPOLYLINE",
        layer=layer_of(known),
        form="path",
        xyz=xyz.ravel(),
        closed=bool(known.get("flags", 0) & 1),
        bulges=values[:, 4],
        axes=entity_axes(known.get("extrusion")),
        width=known.get("const_width") or even_width(values[:, 2:4]),
        rise=known.get("thickness", 0.0),
    )
    return [_disc(line) or line]


def _disc(line: Sketch) -> Sketch | None:
    """A closed polyline whose arcs are one circle, as that circle out to the edge of its width."""
    if not line.closed or line.bulges is None or not 1 < len(line.bulges) < 9 or not line.bulges[0]:
        return None
    vertices = np.asarray(line.xyz, dtype=np.float64).reshape(-1, 3)
    found = circle_of_bulges(vertices[:, :2], np.asarray(line.bulges, dtype=np.float64))
    if found is None:
        return None
    at, radius = (found[0], found[1], float(vertices[0, 2])), found[2] + (line.width or 0.0) / 2
    words = "polyline of arcs that make one circle"
    return conic(line.cls, line.layer, at, radius, None, line.axes, rise=line.rise, evidence=words)


def even_width(widths: Floats) -> float | None:
    """The width of a polyline when it is the same at every vertex, else None."""
    first = float(widths[0, 0])
    return first if first > 0.0 and bool((widths == first).all()) else None


def sketch_circle(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A CIRCLE, kept as its centre and two half axes."""
    return _round(entity, None)


def sketch_arc(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """An ARC, counter-clockwise from its start to its end angle in its own plane."""
    known = vars(entity.dxf)
    start, end = known.get("start_angle", 0.0), known.get("end_angle", 360.0)
    return _round(entity, forward(math.radians(start), math.radians(end)))


def forward(start: float, end: float) -> tuple[float, float]:
    """The span from start to end counter-clockwise, radians; equal angles are a whole turn."""
    sweep = math.fmod(end - start, math.tau)
    if sweep <= 1e-12:
        sweep += math.tau
    return start, start + sweep


def _round(entity: Any, span: tuple[float, float] | None) -> list[Sketch] | Left:
    known = vars(entity.dxf)
    centre, radius = known.get("center"), known.get("radius")
    cls = entity.dxftype()
    if centre is None or radius is None:
        return incomplete(f"{cls} without centre or radius")
    axes = entity_axes(known.get("extrusion"))
    at = (centre.x, centre.y, centre.z)
    return [conic(cls, layer_of(known), at, abs(radius), span, axes, rise=known.get("thickness", 0.0))]


def conic(
    cls: str,
    layer: str,
    at: tuple[float, float, float],
    radius: float,
    span: tuple[float, float] | None,
    axes: Floats | None,
    *,
    rise: float = 0.0,
    tags: dict[str, str] | None = None,
    evidence: str = "",
) -> Sketch:
    """A circle, or with a span an arc, in the plane of the axes."""
    x, y, z = at
    xyz = (x, y, z, x + radius, y, z, x, y + radius, z)
    return Sketch(
        cls=cls, layer=layer, form="conic", xyz=xyz, span=span, axes=axes, rise=rise, tags=tags, evidence=evidence
    )


def sketch_ellipse(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """An ELLIPSE: centre and long half axis in world axes, the short one from the ratio and the normal."""
    known = vars(entity.dxf)
    centre, long = known.get("center"), known.get("major_axis")
    if centre is None or long is None:
        return incomplete("ELLIPSE without centre or axis")
    axes = entity_axes(known.get("extrusion"))
    normal = axes[2] if axes is not None else np.array([0.0, 0.0, 1.0])
    c, u = np.array([centre.x, centre.y, centre.z]), np.array([long.x, long.y, long.z])
    v = np.cross(normal, u) * known.get("ratio", 1.0)
    span = forward(known.get("start_param", 0.0), known.get("end_param", math.tau))
    xyz = np.concatenate((c, c + u, c + v))
    return [Sketch(cls="ELLIPSE", layer=layer_of(known), form="conic", xyz=xyz, span=span)]


def sketch_spline(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A SPLINE by its control points and knots, or through its fit points where it has only those."""
    if any(not abs(c) < FARTHEST_UNITS for point in chain(entity.control_points, entity.fit_points) for c in point):
        return Left("ignored", OUT_OF_REACH)
    try:
        points = [p for point in entity.construction_tool().flattening(sagitta) for p in (point.x, point.y, point.z)]
    except (ValueError, TypeError, IndexError, ZeroDivisionError, ArithmeticError) as fault:
        return Left("ignored", f"spline cannot be drawn: {fault}")
    closed = bool(vars(entity.dxf).get("flags", 0) & 1)
    return [Sketch(cls=entity.dxftype(), layer=layer_of(vars(entity.dxf)), form="path", xyz=points, closed=closed)]


def sketch_polyline(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A POLYLINE: plane with bulges, in space, or a mesh given face by face."""
    known = vars(entity.dxf)
    flags = known.get("flags", 0)
    if flags & 16:
        return _grid_faces(entity, known)
    if flags & 64:
        return _listed_faces(entity, known)
    vertices = [v for v in entity.vertices if not _is_control(v)]
    if not vertices:
        return incomplete("polyline without vertices")
    own = [vars(v.dxf) for v in vertices]
    xyz = [_xyz(v) for v in own]
    planar = not flags & 8
    if planar:
        level = getattr(known.get("elevation"), "z", 0.0)
        xyz = [(x, y, level) for x, y, _ in xyz]
    bulges = [v.get("bulge", 0.0) for v in own]
    width = known.get("default_start_width", 0.0), known.get("default_end_width", 0.0)
    widths = [(v.get("start_width", width[0]), v.get("end_width", width[1])) for v in own]
    line = Sketch(
        cls="POLYLINE",
        layer=layer_of(known),
        form="path",
        xyz=tuple(chain.from_iterable(xyz)),
        closed=bool(flags & 1),
        bulges=bulges if planar and any(bulges) else None,
        axes=entity_axes(known.get("extrusion")) if planar else None,
        width=even_width(np.array(widths)) if planar else None,
        rise=known.get("thickness", 0.0),
    )
    return [_disc(line) or line]


def _is_control(vertex: Any) -> bool:
    """Frame points of a smoothed polyline are not on the drawn line."""
    return bool(vars(vertex.dxf).get("flags", 0) & 16)


def _xyz(known: dict[str, Any]) -> tuple[float, float, float]:
    at = known.get("location")
    return (at.x, at.y, at.z) if at is not None else (math.nan, math.nan, math.nan)


def _grid_faces(entity: Any, known: dict[str, Any]) -> list[Sketch] | Left:
    """The faces of an m x n mesh."""
    smooth = known.get("smooth_type", 0)
    m = known.get("m_smooth_density" if smooth else "m_count", 0)
    n = known.get("n_smooth_density" if smooth else "n_count", 0)
    points = [_xyz(vars(v.dxf)) for v in entity.vertices if not (smooth and _is_control(v))]
    if m < 2 or n < 2 or len(points) < m * n:
        return incomplete("mesh without its vertices")
    flags = known.get("flags", 0)
    rows, columns = (m if flags & 1 else m - 1), (n if flags & 32 else n - 1)
    faces = []
    for i in range(rows):
        for j in range(columns):
            i2, j2 = (i + 1) % m, (j + 1) % n
            faces.append([points[i * n + j], points[i2 * n + j], points[i2 * n + j2], points[i * n + j2]])
    return [face_sketch("POLYLINE", layer_of(known), face) for face in faces]


def _listed_faces(entity: Any, known: dict[str, Any]) -> list[Sketch] | Left:
    """The faces of a mesh whose vertices and faces are listed one after the other."""
    own = [vars(v.dxf) for v in entity.vertices]
    points = [_xyz(v) for v in own if v.get("flags", 0) & 64]
    sketches = []
    for face in (v for v in own if v.get("flags", 0) & 192 == 128):
        corners = [abs(face.get(key, 0)) for key in ("vtx0", "vtx1", "vtx2", "vtx3")]
        ring = [points[c - 1] for c in corners if 0 < c <= len(points)]
        if len(ring) > 2:
            sketches.append(face_sketch("POLYLINE", layer_of(known), ring))
    return sketches or incomplete("mesh without faces")


def face_sketch(cls: str, layer: str, ring: list[tuple[float, float, float]], axes: Floats | None = None) -> Sketch:
    """A filled face by its corners; a corner given twice counts once."""
    corners = [p for k, p in enumerate(ring) if p != ring[k - 1]]
    return Sketch(cls=cls, layer=layer, form="outline", xyz=[c for p in corners for c in p], closed=True, axes=axes)


def layer_of(known: dict[str, Any]) -> str:
    """Layer of an entity; an entity without one is on layer 0."""
    layer: str = known.get("layer", "0")
    return layer
