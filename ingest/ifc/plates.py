"""Slabs, rafts, footings, courses and cuts: outlines with holes between two levels."""

from __future__ import annotations

import numpy as np
import shapely
from shapely import Polygon

from ingest.ifc.bars import is_pile_shape, round_part
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.facets import Facets
from ingest.ifc.fits import mesh_volume
from ingest.ifc.meshes import mesh_parts
from ingest.ifc.plan import Prism, areal, join_prisms, prism
from ingest.ifc.shapes import Line
from ingest.parts import Part

SAME_LEVEL = 0.001
"""Levels within this are one, m."""
SMALLEST_PIECE = 1e-4
"""Pieces of an outline smaller than this are dropped, m2."""
HALF_FULL = 0.5
"""A mesh that fills less of the upright prism about it stays a mesh (judgement)."""


def plate_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The parts of a plate: a 'prism' for each piece of it; a 'circle' for a round shaft twice as deep as wide.

    Raises:
        NoPart: If it has neither body nor footprint.
    """
    if not element.bodies:
        return (part_from_footprint(element),)
    if len(element.bodies) == 1 and is_pile_shape(element.bodies[0]):
        made = round_part(element, element.bodies[0], sections)
        if (made.z_top or 0.0) - (made.z_bottom or 0.0) > 4 * (made.radius or 0.0):
            return (made,)
    prisms = [_open_up(element, one) for one in element_prisms(element)]
    if filled(element, join_prisms(prisms)) < HALF_FULL and element.cls == "IfcEarthworksCut":
        return mesh_parts(element)
    return tuple(part for one in prisms for part in prism_parts(element, one))


def element_prisms(element: Element) -> list[Prism]:
    """The upright prisms of an element: bodies between the same levels, or on the same area, are one.

    Raises:
        NoPart: If no body has a plan area.
    """
    groups: list[list[Prism]] = []
    for one in _whole_prisms(element):
        same = next((group for group in groups if _same_levels(group[0], one)), None)
        if same is None:
            groups.append([one])
        else:
            same.append(one)
    if not groups:
        raise NoPart("body without plan area")
    joined = [join_prisms(group) for group in groups]
    if len(joined) > 1 and (element.of_parts or _same_area(joined)):
        return [join_prisms(joined)]
    return joined


def _whole_prisms(element: Element) -> list[Prism]:
    made = []
    for body in element.bodies:
        if isinstance(body.shape, Line):
            continue
        try:
            one = prism(body)
        except (ValueError, shapely.errors.GEOSException):
            continue
        if one.area.area > 0:
            made.append(one)
    return made


def element_prism(element: Element) -> Prism:
    """One upright prism round all bodies of an element."""
    return join_prisms(element_prisms(element))


def _same_levels(a: Prism, b: Prism) -> bool:
    return abs(a.bottom - b.bottom) <= SAME_LEVEL and abs(a.top - b.top) <= SAME_LEVEL


def _same_area(prisms: list[Prism]) -> bool:
    first = prisms[0].area
    return all(areal(shapely.symmetric_difference(first, one.area)).area < 0.02 * first.area for one in prisms[1:])


def _open_up(element: Element, whole: Prism) -> Prism:
    """Take openings that go right through out of the outline."""
    area, notes = whole.area, list(whole.notes)
    for opening in element.openings:
        try:
            gap = prism(opening)
        except (ValueError, shapely.errors.GEOSException):
            continue
        if not shapely.intersects(gap.area, area) or gap.top <= whole.bottom or gap.bottom >= whole.top:
            continue
        if gap.bottom <= whole.bottom + SAME_LEVEL and gap.top >= whole.top - SAME_LEVEL:
            area = areal(shapely.difference(area, gap.area))
        else:
            notes.append("an opening that does not go through was left out")
    if area.area <= 0:
        return whole
    return Prism(area, whole.bottom, whole.top, tuple(dict.fromkeys(notes)))


def part_from_footprint(element: Element) -> Part:
    """The outline of an element that has only its footprint.

    Raises:
        NoPart: If it has none.
    """
    for body in element.footprints:
        if isinstance(body.shape, Line) and len(body.shape.points) > 3:
            at = body.points()
            if np.linalg.norm(at[0] - at[-1]) < 1e-6:
                points = [(x, y, z) for x, y, z in at[:-1].tolist()]
                return element.part("outline", points, ("its footprint only; it has no body",), closed=True)
    raise NoPart("no geometry")


def prism_parts(element: Element, whole: Prism) -> tuple[Part, ...]:
    """A 'prism' part for each piece of a plan area, largest first, with its holes."""
    pieces = [p for p in shapely.get_parts(whole.area) if isinstance(p, Polygon) and p.area > SMALLEST_PIECE]
    pieces.sort(key=lambda p: (-round(p.area, 6), p.bounds))
    if not pieces:
        raise NoPart("body without plan area")
    words = [*mesh_words(element, whole), *whole.notes] or ["outline of its body on plan"]
    if len(pieces) > 1:
        words.append(f"one of {len(pieces)} pieces")
    return tuple(_piece(element, piece, whole, words) for piece in pieces)


def _piece(element: Element, piece: Polygon, whole: Prism, words: list[str]) -> Part:
    outer, *holes = (
        shapely.get_coordinates(ring)[:-1].tolist()
        for ring in (shapely.orient_polygons(piece).exterior, *piece.interiors)
    )
    return element.part(
        "prism",
        [(x, y, whole.bottom) for x, y in outer],
        words,
        closed=True,
        holes=tuple(tuple((x, y, whole.bottom) for x, y in ring) for ring in holes),
        z_bottom=whole.bottom,
        z_top=whole.top,
    )


def filled(element: Element, whole: Prism) -> float:
    """Share of the upright prism that the meshes of an element fill; 1 when it has none."""
    meshes = [(b.points(), b.shape) for b in element.bodies if isinstance(b.shape, Facets)]
    upright = whole.area.area * (whole.top - whole.bottom)
    if not meshes:
        return 1.0
    return sum(mesh_volume(points, shape.faces) for points, shape in meshes) / upright if upright > 0 else 0.0


def mesh_words(element: Element, whole: Prism) -> list[str]:
    """What to say of a body that was fitted to a mesh: how far the mesh fills it."""
    if not any(isinstance(b.shape, Facets) for b in element.bodies):
        return []
    return [f"fitted to a mesh: its shadow on plan, an upright prism it fills to {filled(element, whole):.0%}"]
