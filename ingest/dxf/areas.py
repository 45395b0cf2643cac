"""Hatches, filled faces and multiple lines."""

from __future__ import annotations

from typing import Any

from ingest.dxf.curves import entity_axes
from ingest.dxf.linework import face_sketch, incomplete, layer_of
from ingest.dxf.sketch import Left, Sketch


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


def sketch_hatch(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A HATCH or MPOLYGON by its boundaries."""
    return Left("ignored", "hatch: not read yet")


def sketch_mline(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A MLINE by its middle line and its overall width."""
    return Left("ignored", "mline: not read yet")
