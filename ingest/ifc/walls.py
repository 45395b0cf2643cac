"""Walls, slabs and bodies of unknown purpose: centre line with thickness, or outline between two levels."""

from __future__ import annotations

from math import hypot

import numpy as np
import shapely
from numpy.typing import NDArray

from ingest.ifc.bars import WIDEST_PILE, bar_parts, is_pile_shape, round_part
from ingest.ifc.bodies import Placed
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.facets import Facets
from ingest.ifc.fits import fit_cylinder, mesh_volume
from ingest.ifc.meshes import mesh_parts
from ingest.ifc.plan import Prism, is_flat, is_upright, join_prisms, prism
from ingest.ifc.shapes import Extrusion, Line, Sweep
from ingest.ifc.strips import FITS, Strip, find_strip, length_of_line
from ingest.model import Part, Point3

Floats = NDArray[np.float64]

LOOSE_FIT = 0.35
"""Misfit above which a wall is kept as its outline and not as a strip (judgement)."""
HALF_FULL = 0.5
"""A mesh that fills less of the upright prism about it stays a mesh (judgement)."""
ALIKE = 0.001
"""Layers and body agree on the thickness within this, m."""


def wall_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The part of a wall: a 'path' along its centre line, or a 'prism' where its outline is no strip.

    Raises:
        NoPart: If it has neither body nor axis.
    """
    if not element.bodies:
        return (_from_axis(element),)
    quick = _plain_wall(element)
    if quick is not None:
        return (quick,)
    whole = element_prism(element)
    hint = _hint(element)
    strip = find_strip(whole.area, hint)
    if strip is None or strip.misfit > LOOSE_FIT or (element.cls == "IfcPlate" and _is_plate(strip, whole)):
        return (prism_part(element, whole, ()),)
    said = [
        f"centre line {strip.how}",
        *_fit_words(element, strip),
        _layer_words(element, strip.thickness),
        *whole.notes,
    ]
    return (_strip_part(element, strip, whole.bottom, whole.top, said),)


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
    return sx >= sy


def element_prism(element: Element) -> Prism:
    """The upright prism round all bodies of an element.

    Raises:
        NoPart: If none of them has a plan area.
    """
    made = []
    for body in element.bodies:
        if isinstance(body.shape, Line):
            continue
        try:
            made.append(prism(body))
        except (ValueError, shapely.errors.GEOSException):
            continue
    if not made:
        raise NoPart("body without plan area")
    whole = join_prisms(made)
    if whole.area.is_empty or whole.area.area <= 0:
        raise NoPart("body without plan area")
    return whole


def _hint(element: Element) -> Floats | None:
    line = element.axis_line()
    return None if line is None else line[:, :2]


def _fit_words(element: Element, strip: Strip) -> list[str]:
    said = []
    if any(isinstance(body.shape, Facets) for body in element.bodies):
        said.append("fitted to a mesh")
    if strip.misfit > FITS or said:
        said.append(f"area differs from the strip's by {strip.misfit:.1%}")
    return said


def _layer_words(element: Element, thickness: float) -> str:
    use = element.material
    if use is None or not use.layers:
        return ""
    total = use.total * element.length
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
        raise NoPart("no geometry")
    use, said = element.material, ["its axis only; it has no body"]
    thickness = use.total * element.length if use and use.layers else None
    if thickness and use and use.offset is not None:
        offset = use.offset * element.length + use.sense * thickness / 2
        moved = _beside(element, line, offset)
        if moved is not None:
            line = moved
            said.append("moved to the middle of its material layers")
    elif thickness:
        said.append("reference line; where the layers lie beside it is not given")
    points: list[Point3] = [(x, y, z) for x, y, z in line.tolist()]
    return element.part("path", points, said, thickness=thickness)


def _beside(element: Element, line: Floats, offset: float) -> Floats | None:
    """The line moved along the element's own second axis, which a layer usage counts from."""
    up = element.axes[0].base[:3, 1]
    way = line[-1] - line[0]
    normal = np.array([-way[1], way[0]])
    side = offset if normal @ up[:2] >= 0 else -offset
    if abs(side) < 1e-9:
        return line
    moved = shapely.offset_curve(shapely.LineString(line[:, :2]), side, join_style="mitre")
    at = shapely.get_coordinates(moved)
    return np.column_stack([at, np.full(len(at), line[0, 2])]) if len(at) >= 2 else None


def plate_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The part of a slab, raft, footing, course or cut: outline with holes between two levels."""
    if not element.bodies:
        return (_from_footprint(element),)
    if len(element.bodies) == 1 and is_pile_shape(element.bodies[0]):
        body = element.bodies[0]
        if abs(body.vector[2]) > 2 * _diameter(body):
            return (round_part(element, body, sections),)
    whole = element_prism(element)
    return (prism_part(element, _open_up(element, whole), ()),)


def _diameter(body: Placed) -> float:
    assert isinstance(body.shape, Extrusion)
    return 2 * body.shape.profile.size[0] * body.scale


def _open_up(element: Element, whole: Prism) -> Prism:
    """Take openings that go right through out of the outline."""
    area, notes = whole.area, list(whole.notes)
    for opening in element.openings:
        try:
            gap = prism(opening)
        except (ValueError, shapely.errors.GEOSException):
            continue
        if gap.bottom <= whole.bottom + ALIKE and gap.top >= whole.top - ALIKE:
            area = shapely.difference(area, gap.area)
        else:
            notes.append("an opening that does not go through was left out")
    if area.is_empty or area.area <= 0:
        return whole
    return Prism(area, whole.bottom, whole.top, tuple(dict.fromkeys(notes)))


def _from_footprint(element: Element) -> Part:
    for body in element.footprints:
        if isinstance(body.shape, Line) and len(body.shape.points) > 3:
            at = body.points()
            if np.linalg.norm(at[0] - at[-1]) < 1e-6:
                points = [(x, y, z) for x, y, z in at[:-1].tolist()]
                return element.part("outline", points, ("its footprint only; it has no body",), closed=True)
    raise NoPart("no geometry")


def prism_part(element: Element, whole: Prism, said: tuple[str, ...]) -> Part:
    """A 'prism' part: the largest piece of the plan area with its holes; smaller pieces are mentioned."""
    pieces = [p for p in shapely.get_parts(whole.area) if p.geom_type == "Polygon"]
    pieces.sort(key=lambda p: (-p.area, shapely.bounds(p).tolist()))
    words = [*said, *_mesh_words(element, whole), *whole.notes]
    if len(pieces) > 1:
        words.append(f"largest of {len(pieces)} pieces, {pieces[0].area / whole.area.area:.0%} of the area")
    outer = shapely.get_coordinates(shapely.get_exterior_ring(shapely.orient_polygons(pieces[0])))[:-1]
    holes = [shapely.get_coordinates(ring)[:-1] for ring in pieces[0].interiors]
    return element.part(
        "prism",
        [(x, y, whole.bottom) for x, y in outer.tolist()],
        words or ["outline of its body on plan"],
        closed=True,
        holes=tuple(tuple((x, y, whole.bottom) for x, y in ring.tolist()) for ring in holes),
        z_bottom=whole.bottom,
        z_top=whole.top,
    )


def _filled(element: Element, whole: Prism) -> float:
    """Share of the upright prism that the meshes of an element fill; 1 when it has none."""
    meshes = [(b.points(), b.shape) for b in element.bodies if isinstance(b.shape, Facets)]
    upright = whole.area.area * (whole.top - whole.bottom)
    if not meshes or upright <= 0:
        return 1.0 if not meshes else 0.0
    return sum(mesh_volume(points, shape.faces) for points, shape in meshes) / upright


def _mesh_words(element: Element, whole: Prism) -> list[str]:
    if not any(isinstance(b.shape, Facets) for b in element.bodies):
        return []
    return [f"fitted to a mesh: its shadow on plan, an upright prism it fills to {_filled(element, whole):.0%}"]


def any_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The part of an element whose class says nothing: pile, wall, bar, prism or mesh by its shape alone."""
    if not element.bodies or all(isinstance(body.shape, Line) for body in element.bodies):
        return bar_parts(element, sections)
    if len(element.bodies) == 1:
        body = element.bodies[0]
        if is_pile_shape(body) and _diameter(body) <= WIDEST_PILE:
            return (round_part(element, body, sections),)
        if not is_pile_shape(body) and _is_slender(body):
            return bar_parts(element, sections)
    try:
        whole = element_prism(element)
    except NoPart:
        return _meshes_or_raise(element, "body without plan area")
    strip = find_strip(whole.area, _hint(element))
    if strip is not None and strip.misfit <= FITS and _is_wall(strip, whole):
        return wall_parts(element, sections)
    if _filled(element, whole) < HALF_FULL:
        return _meshes_or_raise(element, "body that is no upright prism")
    return (prism_part(element, whole, ()),)


def _meshes_or_raise(element: Element, reason: str) -> tuple[Part, ...]:
    made = mesh_parts(element)
    if not made:
        raise NoPart(reason)
    return made


def _is_slender(body: Placed) -> bool:
    """A sweep, a lying extrusion three times as long as its section, or a mesh of an upright cylinder."""
    shape = body.shape
    if isinstance(shape, Sweep):
        return True
    if isinstance(shape, Facets):
        return fit_cylinder(body.points(), shape.faces) is not None
    assert isinstance(shape, Extrusion)
    at = np.array([p for ring in shape.profile.outlines for p in ring])
    across = float(np.linalg.norm(np.ptp(at, axis=0))) * body.scale
    length = float(np.linalg.norm(body.vector))
    return length > (6 if is_upright(body.vector) else 3) * across


def _is_wall(strip: Strip, whole: Prism) -> bool:
    """A body at least twice as high as thick and at least three times as long as thick."""
    height, length = whole.top - whole.bottom, length_of_line(strip.line)
    return height >= 2 * strip.thickness and length >= 3 * strip.thickness
