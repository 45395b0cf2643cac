"""Bodies that are kept as their mesh: terrain, strata, surfaces, and what no simple body fits."""

from __future__ import annotations

from ingest.ifc.bodies import Placed
from ingest.ifc.elements import Element
from ingest.ifc.facets import Facets
from ingest.parts import Part


def mesh_parts(element: Element) -> tuple[Part, ...]:
    """One 'mesh' part for each mesh of an element, faces as rings of point numbers."""
    return tuple(_mesh_part(element, body, body.shape) for body in element.bodies if isinstance(body.shape, Facets))


def _mesh_part(element: Element, body: Placed, shape: Facets) -> Part:
    points = body.points()
    return element.part(
        "mesh",
        [(x, y, z) for x, y, z in points.tolist()],
        (f"mesh of {len(shape.faces)} faces", *shape.notes),
        faces=shape.faces,
        z_top=float(points[:, 2].max()),
        z_bottom=float(points[:, 2].min()),
    )
