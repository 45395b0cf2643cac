"""Which representation of a product to read: the body in its most telling form, else axis, footprint or box."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, TypeAlias

from ingest.ifc.attributes import IDENTIFIER, REPRESENTATION_TYPE, REPRESENTATIONS
from ingest.ifc.classes import Group
from ingest.ifc.items import ItemReader
from ingest.ifc.shapes import Described, Line
from ingest.ifc.unreadable import UNREADABLE

Entity: TypeAlias = Any

_BEST_FIRST = {
    kind: rank
    for rank, kind in enumerate(
        (
            "SweptSolid", "AdvancedSweptSolid", "MappedRepresentation", "Clipping", "CSG", "SolidModel", "Brep",
            "AdvancedBrep", "Tessellation", "SurfaceModel", "SectionedSpine",
        )
    )
}  # fmt: skip
_AXES = frozenset({"Axis", "Reference", "Directrix"})
_FOOTPRINTS = frozenset({"FootPrint", "Footprint", "Plan"})
_NOT_READ = frozenset({"CoG", "Profile", "Annotation", "Lighting", "Clearance", "Light", "WalkingLine"})
NO_GEOMETRY = "no geometry"


@dataclass(slots=True)
class Chosen:
    """What was read of one product: bodies, axis, footprint; why there is no body, and what the fault was."""

    bodies: Described = ()
    axes: Described = ()
    footprints: Described = ()
    reason: str = NO_GEOMETRY
    fault: str = ""


def choose(shape: Entity | None, items: ItemReader, group: Group) -> Chosen:
    """Read the representation of a product.

    Args:
        shape: IfcProductDefinitionShape or None.
        items: Reader of items.
        group: What it is read as: plates need no axis, annotations are drawn in representations of their own.
    """
    chosen = Chosen()
    representations = None if shape is None else shape.get_argument(REPRESENTATIONS)
    if not representations:
        return chosen
    if group == "line":
        chosen.bodies = tuple(found for one in representations for found in _first_read([one], items, chosen))
        return chosen
    if len(representations) == 1:
        name = representations[0].get_argument(IDENTIFIER)
        if name == "Body":
            chosen.bodies = _first_read(representations, items, chosen)
            return chosen
    bodies, axes, footprints, boxes = _sorted(representations)
    chosen.bodies = _first_read(bodies, items, chosen)
    if axes and (group != "plate" or not chosen.bodies):
        chosen.axes = _first_read(axes, items, Chosen())
    if not chosen.bodies:
        chosen.footprints = _first_read(footprints, items, Chosen())
        if boxes and not chosen.axes and not _closed(chosen.footprints):
            chosen.bodies = _first_read(boxes, items, Chosen())
    return chosen


def _sorted(representations: tuple[Entity, ...]) -> tuple[list[Entity], list[Entity], list[Entity], list[Entity]]:
    bodies, axes, footprints, boxes = [], [], [], []
    for one in representations:
        name = one.get_argument(IDENTIFIER) or ""
        if name == "Body":
            bodies.append(one)
        elif name in _AXES:
            axes.append(one)
        elif name in _FOOTPRINTS:
            footprints.append(one)
        elif name == "Box":
            boxes.append(one)
        elif name not in _NOT_READ:
            bodies.append(one)
    if len(bodies) > 1:
        bodies.sort(key=lambda one: _BEST_FIRST.get(one.get_argument(REPRESENTATION_TYPE) or "", len(_BEST_FIRST)))
    return bodies, axes, footprints, boxes


def _first_read(representations: list[Entity] | tuple[Entity, ...], items: ItemReader, chosen: Chosen) -> Described:
    """The first representation that can be read; a body of bare lines only when there is no better one."""
    spare: Described = ()
    for one in representations:
        try:
            found = items.representation(one)
        except (*UNREADABLE, RecursionError, OverflowError, ZeroDivisionError) as error:
            text = str(error)
            plain = text.endswith("is not read") and len(text) < 80
            chosen.reason = text if plain else "geometry cannot be read"
            chosen.fault = chosen.fault or ("" if plain else text[:120] or type(error).__name__)
            continue
        if found and not isinstance(found[0][0], Line):
            return found
        if any(not isinstance(shape, Line) for shape, _ in found):
            return found
        spare = spare or found
    return spare


def _closed(described: Described) -> bool:
    return any(isinstance(shape, Line) and len(shape.points) > 3 for shape, _ in described)
