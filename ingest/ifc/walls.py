"""Walls, slabs and bodies of unknown purpose: centre line with thickness, or outline between two levels."""

from __future__ import annotations

from math import hypot, pi

import numpy as np
import shapely
from numpy.typing import NDArray

from ingest.ifc.bars import is_pile_shape
from ingest.ifc.curves import circle_points
from ingest.ifc.elements import Element, SectionTable
from ingest.ifc.plan import Prism, is_flat, is_upright, prism, profile_upright
from ingest.ifc.plates import element_prism, element_prisms, mesh_words, part_from_footprint, prism_parts
from ingest.ifc.shapes import Extrusion, Line, Sweep
from ingest.ifc.strips import FITS, Strip, arc_steps, find_strip
from ingest.members import Point3
from ingest.parts import Part

Floats = NDArray[np.float64]

LOOSE_FIT = 0.35
"""Misfit above which a wall is kept as its outline and not as a strip (judgement)."""
ALIKE = 0.001
"""Layers and body agree on the thickness within this, m."""


def wall_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The part of a wall: a 'path' along its centre line, or a 'prism' where its outline is no strip.

    Raises:
        NoPart: If it has neither body nor axis.
    """
    if not element.bodies:
        return (_from_axis(element),)
    for reader in (_plain_wall, _round_wall, _swept_wall):
        made = reader(element)
        if made is not None:
            return (made,)
    whole = element_prism(element)
    hint = hint_of(element)
    strip = find_strip(whole.area, hint, layers_of(element))
    if strip is None or strip.misfit > LOOSE_FIT or (element.cls == "IfcPlate" and _is_plate(strip, whole)):
        return tuple(part for one in element_prisms(element) for part in prism_parts(element, one))
    said = [
        f"centre line {strip.how}",
        *_fit_words(element, strip, whole),
        _layer_words(element, strip.thickness),
        *whole.notes,
    ]
    return (_strip_part(element, strip, whole.bottom, whole.top, said),)


def _round_wall(element: Element) -> Part | None:
    """A shaft of one piece: an upright tube, as a closed path half its wall thickness inside the outer radius."""
    body = element.bodies[0]
    shape = body.shape
    if len(element.bodies) > 1 or not isinstance(shape, Extrusion) or not is_pile_shape(body):
        return None
    if shape.profile.kind != "hollow circle":
        return None
    whole = prism(body)
    thickness, radius = shape.profile.size[1] * body.scale, shape.profile.size[0] * body.scale
    u, v = shape.profile.centre
    x, y = (body.origin[k] + u * body.x[k] + v * body.y[k] for k in (0, 1))
    middle = radius - thickness / 2
    ring = circle_points(x, y, middle, arc_steps(middle, 2 * pi))
    return element.part(
        "path",
        [(x, y, whole.bottom) for x, y in ring],
        ("upright extrusion of a hollow circle, middle of its thickness", *whole.notes),
        closed=True,
        thickness=thickness,
        z_bottom=whole.bottom,
        z_top=whole.top,
    )


def _swept_wall(element: Element) -> Part | None:
    """A wall that is swept along one level line, for instance a parapet; several layers may share the line."""
    sweeps = [(body, body.shape) for body in element.bodies if isinstance(body.shape, Sweep)]
    if not sweeps or len(sweeps) < len(element.bodies):
        return None
    points = sweeps[0][0].points()
    others = [body.points() for body, _ in sweeps[1:]]
    if len(points) < 2 or float(np.ptp(points[:, 2])) > ALIKE:
        return None
    if any(len(at) != len(points) or not np.allclose(at, points, atol=ALIKE) for at in others):
        return None
    corners = np.concatenate([profile_upright(body, shape) for body, shape in sweeps])
    low, high = corners.min(axis=0), corners.max(axis=0)
    closed = bool(np.linalg.norm(points[0] - points[-1]) < 1e-6)
    line = _moved(points[:, :2], float(low[0] + high[0]) / 2)
    if line is None:
        return None
    z = float(points[0, 2])
    return element.part(
        "path",
        [(x, y, z + float(low[1])) for x, y in (line[:-1] if closed else line).tolist()],
        ("profile swept along a line, middle of its width", *sweeps[0][1].notes),
        closed=closed,
        thickness=float(high[0] - low[0]),
        z_bottom=z + float(low[1]),
        z_top=z + float(high[1]),
    )


def _moved(line: Floats, left: float) -> Floats | None:
    """A line moved to its left, corners mitred; None when it falls apart."""
    if abs(left) < 1e-9:
        return line
    closed = bool(np.linalg.norm(line[0] - line[-1]) < 1e-6)
    if closed:
        ring = shapely.orient_polygons(shapely.Polygon(line))
        turned = shapely.LinearRing(line).is_ccw
        grown = shapely.buffer(ring, -left if turned else left, join_style="mitre")
        if grown.geom_type != "Polygon":
            return None
        moved = shapely.get_coordinates(shapely.get_exterior_ring(shapely.orient_polygons(grown)))
        return np.asarray(moved if turned else moved[::-1])
    curve = shapely.offset_curve(shapely.LineString(line), left, join_style="mitre")
    at = shapely.get_coordinates(curve)
    return np.asarray(at) if curve.geom_type == "LineString" and len(at) >= 2 else None


def _is_plate(strip: Strip, whole: Prism) -> bool:
    """A plate lower than it is thick lies flat."""
    return strip.thickness > 1.5 * (whole.top - whole.bottom)


def _plain_wall(element: Element) -> Part | None:
    """An upright extrusion of one rectangle, the usual wall, without any plan geometry."""
    if len(element.bodies) != 1:
        return None
    body = element.bodies[0]
    shape = body.shape
    if not isinstance(shape, Extrusion) or shape.profile.kind != "rectangle" or shape.cuts:
        return None
    if not is_upright(body.vector) or not is_flat(body):
        return None
    profile, rise = shape.profile, body.vector[2]
    (ox, oy, oz), (a, b, _), (d, e, _) = body.origin, body.x, body.y
    (cx, cy), (u, v), (sx, sy) = profile.centre, profile.way, profile.size
    first = (u * a + v * d, u * b + v * e)
    second = (-v * a + u * d, -v * b + u * e)
    if not _along_first(element, first, second, sx, sy):
        first, second, sx, sy = second, first, sy, sx
    thickness = sy * hypot(*second)
    mx, my = ox + cx * a + cy * d, oy + cx * b + cy * e
    dx, dy = first[0] * sx / 2, first[1] * sx / 2
    bottom, top = (oz, oz + rise) if rise > 0 else (oz + rise, oz)
    if element.cls == "IfcPlate" and thickness > 1.5 * (top - bottom):
        return None
    points = ((mx - dx, my - dy, bottom), (mx + dx, my + dy, bottom))
    said = ("upright extrusion of a rectangle, middle of its thickness", _layer_words(element, thickness), *shape.notes)
    return element.part("path", points, said, thickness=thickness, z_bottom=bottom, z_top=top)


def _along_first(
    element: Element, first: tuple[float, float], second: tuple[float, float], sx: float, sy: float
) -> bool:
    """True when the wall runs along the profile's first axis: as its drawn axis does, else along the longer side."""
    for axis in element.axes:
        shape = axis.shape
        if isinstance(shape, Line) and len(shape.points) == 2:
            x, y, _ = axis.vector
            along, across = abs(x * first[0] + y * first[1]), abs(x * second[0] + y * second[1])
            if max(along, across) > 0:
                return along >= across
    layers = layers_of(element)
    if layers is not None:
        across_second = abs(sy * hypot(*second) - layers)
        return across_second <= abs(sx * hypot(*first) - layers)
    return sx >= sy


def hint_of(element: Element) -> Floats | None:
    """The line the file draws along an element, on plan."""
    line = element.axis_line()
    return None if line is None else line[:, :2]


def layers_of(element: Element) -> float | None:
    """Sum of the material layers, m; None when there are none."""
    use = element.material
    return use.total * element.length if use is not None and use.layers else None


def _fit_words(element: Element, strip: Strip, whole: Prism) -> list[str]:
    said = mesh_words(element, whole)
    if strip.misfit > FITS or said:
        said.append(f"area differs from the strip's by {strip.misfit:.1%}")
    return said


def _layer_words(element: Element, thickness: float) -> str:
    total = layers_of(element)
    if total is None:
        return ""
    if abs(total - thickness) <= ALIKE:
        return f"layers sum to its thickness, {thickness:.3f} m"
    return f"layers sum to {total:.3f} m, the body is {thickness:.3f} m thick"


def _strip_part(element: Element, strip: Strip, bottom: float | None, top: float | None, said: list[str]) -> Part:
    level = 0.0 if bottom is None else bottom
    points = [(x, y, level) for x, y in strip.line]
    return element.part(
        "path", points, said, closed=strip.closed, thickness=strip.thickness, z_bottom=bottom, z_top=top
    )


def _from_axis(element: Element) -> Part:
    """A wall with nothing but its reference line: moved into the middle of its layers when the file says where."""
    line = element.axis_line()
    if line is None:
        return part_from_footprint(element)
    use, said = element.material, ["its axis only; it has no body"]
    thickness = layers_of(element)
    if thickness and use and use.offset is not None:
        offset = use.offset * element.length + use.sense * thickness / 2
        moved = _beside(element, line, offset)
        if moved is not None:
            line = moved
            said.append("moved to the middle of its material layers")
    elif thickness:
        said.append("reference line; where the layers lie beside it is not given")
    points: list[Point3] = [(x, y, z) for x, y, z in line.tolist()]
    bottom = float(line[0, 2])
    top = bottom + use.extent * element.length if use and use.extent else None
    return element.part("path", points, said, thickness=thickness, z_bottom=None if top is None else bottom, z_top=top)


def _beside(element: Element, line: Floats, offset: float) -> Floats | None:
    """The line moved along the element's own second axis, which a layer usage counts from."""
    up = element.axes[0].base[:3, 1]
    way = line[-1] - line[0]
    normal = np.array([-way[1], way[0]])
    side = offset if normal @ up[:2] >= 0 else -offset
    if abs(side) < 1e-9:
        return line
    at = _moved(line[:, :2], side)
    return None if at is None else np.column_stack([at, np.full(len(at), line[0, 2])])
