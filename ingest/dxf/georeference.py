"""What a drawing says of its place on the earth; told to the engineer, not applied."""

from __future__ import annotations

from typing import Any


def describe_georeference(document: Any) -> str:
    """The georeference of a drawing in one sentence, "" where it has none."""
    try:
        data = document.modelspace().get_geodata()
        if data is None:
            return ""
        at, on = data.dxf.design_point, data.dxf.reference_point
        north = data.dxf.north_direction
    except Exception:  # the library raises errors of its own on broken georeferences
        return "the drawing has a georeference that cannot be read"
    try:
        crs = f"EPSG:{data.get_crs()[0]}"
    except Exception:  # likewise on systems without a number
        crs = "a coordinate system without an EPSG number"
    place = f"the point ({at.x:.10g}, {at.y:.10g}) in drawing units stands at ({on.x:.10g}, {on.y:.10g})"
    return f"georeferenced to {crs}: {place}, north is ({north.x:.6g}, {north.y:.6g}); coordinates are left as drawn"
