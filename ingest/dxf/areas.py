"""Hatches, filled faces, meshes and multiple lines."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from ingest.dxf.curves import Floats, circle_of_bulges, entity_axes, flatten_bulges, flatten_conic
from ingest.dxf.linework import conic, face_sketch, forward, incomplete, layer_of
from ingest.dxf.sketch import Left, Sketch

_TEXT_BOX = 8


def sketch_solid(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A SOLID or TRACE; the format lists its third and fourth corners crosswise."""
    known = vars(entity.dxf)
    corners = [known.get(f"vtx{k}") for k in (0, 1, 3, 2)]
    ring = [(c.x, c.y, c.z) for c in corners if c is not None]
    if len(ring) < 3:
        return incomplete(f"{entity.dxftype()} with fewer than three corners")
    return [face_sketch(entity.dxftype(), layer_of(known), ring, entity_axes(known.get("extrusion")))]


def sketch_face(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A 3DFACE, world coordinates, corners in order."""
    known = vars(entity.dxf)
    ring = [(c.x, c.y, c.z) for c in (known.get(f"vtx{k}") for k in range(4)) if c is not None]
    if len(ring) < 3:
        return incomplete("3DFACE with fewer than three corners")
    return [face_sketch("3DFACE", layer_of(known), ring)]


def sketch_mesh(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A MESH, face by face, before any smoothing."""
    points = [(float(x), float(y), float(z)) for x, y, z in entity.vertices]
    layer = layer_of(vars(entity.dxf))
    faces = [[points[k] for k in face] for face in entity.faces]
    return [face_sketch("MESH", layer, ring) for ring in faces if len(ring) > 2] or incomplete("mesh without faces")


def sketch_mline(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A MLINE by the middle between its outer lines and the distance between them.

    Each vertex lists where every line crosses the mitre, so justification and scale are in those numbers already.
    """
    known = vars(entity.dxf)
    middle, widths = [], []
    for vertex in entity.vertices:
        offsets = [params[0] for params in vertex.line_params if len(params)]
        if not offsets:
            return incomplete("MLINE without its line offsets")
        point = vertex.location + vertex.miter_direction * ((min(offsets) + max(offsets)) / 2)
        along, across = vertex.line_direction, vertex.miter_direction
        widths.append((max(offsets) - min(offsets)) * abs(along.x * across.y - along.y * across.x))
        middle += [point.x, point.y, point.z]
    if len(middle) < 6:
        return incomplete("MLINE with fewer than two vertices")
    return [
        Sketch(
            cls="MLINE",
            layer=layer_of(known),
            form="path",
            xyz=middle,
            closed=bool(known.get("flags", 0) & 2),
            width=max(widths),
            evidence="multiple line: middle of its outer lines",
        )
    ]


def sketch_hatch(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A HATCH or MPOLYGON by its boundaries: outer rings with the holes that lie in them."""
    known = vars(entity.dxf)
    cls, layer = entity.dxftype(), layer_of(known)
    axes = entity_axes(known.get("extrusion"))
    level = getattr(known.get("elevation"), "z", 0.0)
    tags = {"pattern": str(known.get("pattern_name", "SOLID")) if not known.get("solid_fill", 1) else "SOLID"}
    rings, round_ = [], []
    for path in entity.paths.paths:
        if path.path_type_flags & _TEXT_BOX:
            continue
        circle = _circle(path)
        ring = _ring(path, sagitta)
        if len(ring) > 2:
            rings.append(ring)
            round_.append(circle)
    if not rings:
        return incomplete(f"{cls} without a boundary that can be read")
    if len(rings) == 1 and round_[0] is not None:
        x, y, radius = round_[0]
        return [conic(cls, layer, (x, y, level), radius, None, axes, tags=tags)]
    sketches = []
    for outer, holes in _nest(rings):
        members = [rings[outer], *(rings[h] for h in holes)]
        xy = np.concatenate(members)
        xyz = np.column_stack((xy, np.full(len(xy), level))).ravel()
        counts = tuple(len(m) for m in members)
        sketches.append(
            Sketch(cls=cls, layer=layer, form="outline", xyz=xyz, closed=True, rings=counts, axes=axes, tags=tags)
        )
    return sketches


def _circle(path: Any) -> tuple[float, float, float] | None:
    """Centre and radius of a boundary that is one circle."""
    if hasattr(path, "vertices"):
        values = np.array(path.vertices, dtype=np.float64).reshape(-1, 3)
        return circle_of_bulges(values[:, :2], values[:, 2]) if 1 < len(values) < 9 else None
    if len(path.edges) == 1 and path.edges[0].EDGE_TYPE == "ArcEdge":
        edge = path.edges[0]
        if abs(abs(edge.end_angle - edge.start_angle) - 360.0) < 1e-6:
            return edge.center.x, edge.center.y, edge.radius
    return None


def _ring(path: Any, sagitta: float) -> Floats:
    """Vertices of one boundary in the hatch's plane, its closing vertex not repeated, shape (n, 2)."""
    if hasattr(path, "vertices"):
        values = np.array(path.vertices, dtype=np.float64).reshape(-1, 3)
        if not len(values):
            return values[:, :2]
        return flatten_bulges(values[:, :2], np.roll(values[:, :2], -1, axis=0), values[:, 2], sagitta)[0]
    pieces = [_edge(edge, sagitta) for edge in path.edges]
    pieces = [piece for piece in pieces if len(piece) > 1]
    if not pieces:
        return np.empty((0, 2))
    return np.concatenate([piece[:-1] for piece in _chain(pieces)])


def _chain(pieces: list[Floats]) -> list[Floats]:
    """Turn edges round so that each begins where the one before ends."""
    if len(pieces) > 1 and _gap(pieces[0][0], pieces[1]) < _gap(pieces[0][-1], pieces[1]):
        pieces[0] = pieces[0][::-1]
    for k in range(1, len(pieces)):
        end = pieces[k - 1][-1]
        if np.hypot(*(pieces[k][-1] - end)) < np.hypot(*(pieces[k][0] - end)):
            pieces[k] = pieces[k][::-1]
    return pieces


def _gap(point: Floats, piece: Floats) -> float:
    return float(min(np.hypot(*(piece[0] - point)), np.hypot(*(piece[-1] - point))))


def _edge(edge: Any, sagitta: float) -> Floats:
    """Points of one boundary edge in drawing order, shape (n, 2)."""
    kind = edge.EDGE_TYPE
    if kind == "LineEdge":
        return np.array([[edge.start.x, edge.start.y], [edge.end.x, edge.end.y]])
    if kind == "SplineEdge":
        points = [(p.x, p.y) for p in edge.construction_tool().flattening(sagitta)]
        return np.array(points, dtype=np.float64).reshape(-1, 2)
    centre = np.array([edge.center.x, edge.center.y, 0.0])
    if kind == "ArcEdge":
        u, v = np.array([edge.radius, 0.0, 0.0]), np.array([0.0, edge.radius, 0.0])
        span = forward(math.radians(edge.start_angle), math.radians(edge.end_angle))
    else:
        u = np.array([edge.major_axis.x, edge.major_axis.y, 0.0])
        v = np.array([-u[1], u[0], 0.0]) * edge.ratio
        span = forward(edge.start_param, edge.end_param)
    points_3d = flatten_conic(centre, u, v, span, sagitta)
    return points_3d[:, :2] if edge.ccw else points_3d[::-1, :2]


def _nest(rings: list[Floats]) -> list[tuple[int, list[int]]]:
    """Outer rings with their holes: a ring inside an odd number of others is a hole of the smallest of them."""
    if len(rings) == 1:
        return [(0, [])]
    import shapely

    areas = [shapely.make_valid(shapely.Polygon(ring)) for ring in rings]
    tree = shapely.STRtree(areas)
    inside, around = tree.query([area.representative_point() for area in areas], predicate="within")
    holders: list[list[int]] = [[] for _ in rings]
    for a, b in zip(inside.tolist(), around.tolist(), strict=True):
        if a != b and areas[b].area > areas[a].area:
            holders[a].append(b)
    outers = [k for k, holder in enumerate(holders) if len(holder) % 2 == 0]
    holes: dict[int, list[int]] = {k: [] for k in outers}
    for k, holder in enumerate(holders):
        if len(holder) % 2:
            holes.setdefault(min(holder, key=lambda b: areas[b].area), []).append(k)
    return [(k, holes[k]) for k in outers]
