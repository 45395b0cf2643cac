"""Which function draws which kind of entity, and what is left aside with which reason."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from ingest.dxf.annotation import sketch_dimension, sketch_multileader
from ingest.dxf.areas import sketch_face, sketch_hatch, sketch_mesh, sketch_mline, sketch_solid
from ingest.dxf.linework import (
    sketch_arc,
    sketch_circle,
    sketch_ellipse,
    sketch_line,
    sketch_lwpolyline,
    sketch_point,
    sketch_polyline,
    sketch_spline,
)
from ingest.dxf.sketch import Left, Sketch
from ingest.dxf.text import sketch_mtext, sketch_text

Sketcher = Callable[[Any, float], "list[Sketch] | Left"]

SKETCHERS: dict[str, Sketcher] = {
    "LINE": sketch_line,
    "LWPOLYLINE": sketch_lwpolyline,
    "POLYLINE": sketch_polyline,
    "CIRCLE": sketch_circle,
    "ARC": sketch_arc,
    "ELLIPSE": sketch_ellipse,
    "SPLINE": sketch_spline,
    "HELIX": sketch_spline,
    "POINT": sketch_point,
    "TEXT": sketch_text,
    "MTEXT": sketch_mtext,
    "HATCH": sketch_hatch,
    "MPOLYGON": sketch_hatch,
    "SOLID": sketch_solid,
    "TRACE": sketch_solid,
    "3DFACE": sketch_face,
    "MLINE": sketch_mline,
    "MESH": sketch_mesh,
    "DIMENSION": sketch_dimension,
    "ARC_DIMENSION": sketch_dimension,
    "LARGE_RADIAL_DIMENSION": sketch_dimension,
    "MULTILEADER": sketch_multileader,
}

SOLIDS = {"3DSOLID", "REGION", "BODY", "SURFACE", "EXTRUDEDSURFACE", "LOFTEDSURFACE", "REVOLVEDSURFACE",
          "SWEPTSURFACE", "PLANESURFACE", "NURBSURFACE"}  # fmt: skip

ASIDE: dict[str, Left] = {
    "ATTDEF": Left("context", "attribute definition"),
    "LEADER": Left("context", "leader line"),
    "VIEWPORT": Left("context", "viewport"),
    "RAY": Left("context", "endless construction line"),
    "XLINE": Left("context", "endless construction line"),
    "IMAGE": Left("context", "picture: not read"),
    "WIPEOUT": Left("context", "mask"),
    "TOLERANCE": Left("context", "tolerance frame"),
    "LIGHT": Left("context", "light"),
    "SUN": Left("context", "light"),
    "OLEFRAME": Left("ignored", "embedded object of another program: not read"),
    "OLE2FRAME": Left("ignored", "embedded object of another program: not read"),
    "PDFUNDERLAY": Left("ignored", "underlay in another file: not read"),
    "DWFUNDERLAY": Left("ignored", "underlay in another file: not read"),
    "DGNUNDERLAY": Left("ignored", "underlay in another file: not read"),
    "SHAPE": Left("context", "symbol of a shape file: not read"),
    "ACAD_PROXY_ENTITY": Left("ignored", "unreadable proxy"),
    "ACAD_PROXY_OBJECT": Left("ignored", "unreadable proxy"),
    **dict.fromkeys(SOLIDS, Left("ignored", "3D solid: not read")),
}


def sketch(kind: str, entity: Any, sagitta: float) -> list[Sketch] | Left:
    """Draw one entity that is not an insert.

    Args:
        kind: Its type in the file.
        entity: As the library loaded it; not one that is hidden.
        sagitta: Allowed distance between arcs and chords, drawing units.

    Returns:
        Its figures, or why there are none. A fault in one entity never ends the reading of the others.
    """
    sketcher = SKETCHERS.get(kind)
    if sketcher is None:
        return ASIDE.get(kind) or Left("ignored", f"unreadable object of another program: {kind}")
    try:
        return sketcher(entity, sagitta)
    except (ValueError, TypeError, AttributeError, ArithmeticError, LookupError, RecursionError) as fault:
        return Left("ignored", f"{kind} cannot be read: {type(fault).__name__}")
