"""Elements whose class says nothing: pile, wall, bar, prism or mesh by their shape alone."""

from __future__ import annotations

import numpy as np

from ingest.ifc.bars import WIDEST_PILE, bar_parts, is_pile_shape, round_part
from ingest.ifc.bodies import Placed
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.facets import Facets
from ingest.ifc.fits import fit_cylinder
from ingest.ifc.meshes import mesh_parts
from ingest.ifc.plan import Prism, is_upright, join_prisms
from ingest.ifc.plates import HALF_FULL, element_prisms, filled, prism_parts
from ingest.ifc.shapes import Extrusion, Line, Sweep
from ingest.ifc.strips import FITS, Strip, find_strip, length_of_line
from ingest.ifc.walls import hint_of, wall_parts
from ingest.parts import Part


def any_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The parts of an element by the shape of its bodies.

    Raises:
        NoPart: If it has no geometry.
    """
    if not element.bodies or all(isinstance(body.shape, Line) for body in element.bodies):
        return bar_parts(element, sections)
    if len(element.bodies) == 1:
        single = _single(element, element.bodies[0], sections)
        if single is not None:
            return single
    try:
        prisms = element_prisms(element)
    except NoPart:
        return _meshes(element, "body without plan area")
    whole = join_prisms(prisms)
    strip = find_strip(whole.area, hint_of(element))
    if strip is not None and strip.misfit <= FITS and _is_wall(strip, whole):
        return wall_parts(element, sections)
    if filled(element, whole) < HALF_FULL:
        return _meshes(element, "body that is no upright prism")
    return tuple(part for one in prisms for part in prism_parts(element, one))


def _single(element: Element, body: Placed, sections: SectionTable) -> tuple[Part, ...] | None:
    shape = body.shape
    if is_pile_shape(body):
        assert isinstance(shape, Extrusion)
        wide = 2 * shape.profile.size[0] * body.scale > WIDEST_PILE
        return None if wide else (round_part(element, body, sections),)
    return bar_parts(element, sections) if _is_slender(body) else None


def _meshes(element: Element, reason: str) -> tuple[Part, ...]:
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
        cylinder = fit_cylinder(body.points(), shape.faces)
        return cylinder is not None and 2 * cylinder.radius <= WIDEST_PILE
    if not isinstance(shape, Extrusion):
        return False
    at = np.array([p for ring in shape.profile.outlines for p in ring])
    across = float(np.linalg.norm(np.ptp(at, axis=0))) * body.scale
    length = float(np.linalg.norm(body.vector))
    return length > (6 if is_upright(body.vector) else 3) * across


def _is_wall(strip: Strip, whole: Prism) -> bool:
    """A body at least twice as high as thick and at least three times as long as thick."""
    height, length = whole.top - whole.bottom, length_of_line(strip.line)
    return height >= 2 * strip.thickness and length >= 3 * strip.thickness
