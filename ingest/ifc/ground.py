"""Ground in an IFC file: terrain and strata as meshes, boreholes with the strata they met."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.by_shape import any_parts
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.meshes import mesh_parts
from ingest.ifc.plan import prism
from ingest.ifc.shapes import Line
from ingest.model import Borehole, Layer
from ingest.parts import Part

Floats = NDArray[np.float64]


def ground_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """Terrain or a stratum: a 'mesh' with its faces where the file has faces, else by shape."""
    return mesh_parts(element) or any_parts(element, sections)


def read_borehole(hole: Element, strata: list[Element]) -> Borehole:
    """A hole with the levels of its strata, taken from their bodies or lines.

    Raises:
        NoPart: If no stratum has a depth.
    """
    layers = []
    for stratum in strata:
        levels = _levels(stratum)
        if levels is not None:
            description = stratum.material.name if stratum.material else ""
            layers.append(Layer(top=levels[1], base=levels[0], code=stratum.name, description=description))
    if not layers:
        raise NoPart("borehole without strata that have a depth")
    layers.sort(key=lambda layer: (-layer.top, -layer.base))
    x, y, z = hole.origin
    depth = hole.tags.get("GroundwaterDepth")
    return Borehole(
        id=hole.name or hole.source.item,
        location=(x, y, z),
        layers=tuple(layers),
        water=None if depth is None else z - float(depth),
        sources=(hole.source, *(stratum.source for stratum in strata)),
    )


def _levels(element: Element) -> tuple[float, float] | None:
    """Lowest and highest level of an element, m."""
    low, high = [], []
    for body in (*element.bodies, *element.axes):
        if isinstance(body.shape, Line):
            z = body.points()[:, 2]
            low.append(float(z.min()))
            high.append(float(z.max()))
            continue
        try:
            whole = prism(body)
        except ValueError:
            continue
        low.append(whole.bottom)
        high.append(whole.top)
    if not low or max(high) - min(low) <= 0:
        return None
    return min(low), max(high)
