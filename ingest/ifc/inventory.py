"""All products of a file with their classes, relations and properties; geometry described but not yet placed."""

from __future__ import annotations

from dataclasses import dataclass
from sys import intern
from typing import Any, TypeAlias

from ingest.ifc.attributes import DESCRIPTION, GUID, NAME, OBJECT_TYPE, PLACEMENT, REPRESENTATION, TAG
from ingest.ifc.bodies import BodyList
from ingest.ifc.classes import COUNTED_OUT, WHOLE_FROM_PARTS, Classes, Group
from ingest.ifc.curves import CurveReader
from ingest.ifc.elements import Element
from ingest.ifc.frames import FrameTable
from ingest.ifc.items import ItemReader
from ingest.ifc.loads import items_of_actions, load_tags
from ingest.ifc.placement import PlacementTable
from ingest.ifc.profiles import Profile
from ingest.ifc.properties import PropertyTable
from ingest.ifc.relations import MaterialUse, Relations
from ingest.ifc.representations import choose
from ingest.ifc.units import read_units
from ingest.ifc.unreadable import UNREADABLE
from ingest.trail import Source

Entity: TypeAlias = Any
_TEXT_ATTRIBUTES = (("ObjectType", OBJECT_TYPE), ("Description", DESCRIPTION), ("Tag", TAG))
_KIND_ATTRIBUTES = ("PredefinedType", "ShapeType")


@dataclass(slots=True)
class Product:
    """One product.

    Attributes:
        reason: Why it is context, or why it has no body.
        part_of: Says that another element holds it.
        placement: Row of its placement.
        rows: Numbers of its first body, first axis, first footprint, and the number after the last; None before it is
            described.
        fault: What was wrong with its geometry.
    """

    key: int
    entity: Entity
    item: str
    cls: str
    group: Group
    reason: str = ""
    part_of: str = ""
    has_parts: bool = False
    placement: int = 0
    rows: tuple[int, int, int, int] | None = None
    fault: str = ""


class Inventory:
    """Everything that can be known of the products before they are placed."""

    def __init__(self, model: Any, file: str, length_unit: str | None, guess: str | None = None) -> None:
        self.file = file
        self.units = read_units(model, file, length_unit, guess)
        self.relations = Relations(model)
        self.properties = PropertyTable(model, self.units)
        self.frames = FrameTable()
        self.placements = PlacementTable(self.frames)
        self.items = ItemReader(self.frames, CurveReader(self.units.length, self.units.angle))
        self._loads = items_of_actions(model)
        self.bodies = BodyList()
        self._kind_positions: dict[str, int | None] = {}
        self.doubles = 0
        self.products = self._list(model)
        self._by_key = {product.key: product for product in self.products}
        self.entities = sum(1 for p in self.products if p.cls not in COUNTED_OUT)
        self._link_parts()

    def _list(self, model: Any) -> list[Product]:
        classes, seen, found = Classes(), set(), []
        guids: set[str] = set()
        for entity in model.by_type("IfcProduct"):
            key = entity.id()
            if key in seen:
                continue
            seen.add(key)
            name, group, reason = classes.of(entity)
            found.append(Product(key, entity, self._item(entity, key, guids), name, group, reason))
        found.sort(key=lambda product: product.key)
        return found

    def _item(self, entity: Entity, key: int, guids: set[str]) -> str:
        """The GlobalId; with the instance number where it is missing or not the only one of its kind."""
        guid = entity.get_argument(GUID)
        if not isinstance(guid, str) or not guid:
            return f"#{key}"
        if guid in guids:
            self.doubles += 1
            return f"{guid}#{key}"
        guids.add(guid)
        return guid

    def _link_parts(self) -> None:
        for product in self.products:
            product.has_parts = product.key in self.relations.parts
            whole = self._by_key.get(self.relations.whole.get(product.key, -1))
            if whole is None or whole.group == "setting":
                continue
            if whole.cls == "IfcBorehole" and product.group == "ground":
                product.part_of = "stratum of a borehole"
            elif whole.group in WHOLE_FROM_PARTS and _is_piece(product, whole):
                product.part_of = "part of an element read whole"

    def parts_of(self, product: Product, depth: int = 0) -> list[Product]:
        """Products a product is made of, those of parts included."""
        found: list[Product] = []
        for part in self.relations.parts.get(product.key, ()):
            known = self._by_key.get(part.id())
            if known is not None and known is not product:
                found.append(known)
                if depth < 4:
                    found += self.parts_of(known, depth + 1)
        return list({p.key: p for p in found}.values())

    def openings_of(self, product: Product) -> list[Product]:
        """Openings of a plate; they are described with it."""
        found = (self._by_key.get(opening.id()) for opening in self.relations.openings.get(product.key, ()))
        return [opening for opening in found if opening is not None]

    def describe(self, product: Product) -> None:
        """Describe placement and geometry of a product, and the openings of a plate."""
        entity = product.entity
        placement, shape = entity.get_argument(PLACEMENT), entity.get_argument(REPRESENTATION)
        if product.group == "load" and (item := self._loads.get(product.key)) is not None:
            shape = shape or item.get_argument(REPRESENTATION)
            placement = placement or item.get_argument(PLACEMENT)
        product.placement = row = self.placements.row(placement)
        chosen = choose(shape, self.items, product.group)
        bodies = self.bodies
        first, end = len(bodies), bodies.add(chosen.bodies, row)
        axes_end = bodies.add(chosen.axes, row) if chosen.axes else end
        product.rows = (first, end, axes_end, bodies.add(chosen.footprints, row) if chosen.footprints else axes_end)
        product.fault = chosen.fault
        if product.group != "context":
            product.reason = chosen.reason
        if product.group == "plate":
            for opening in self.openings_of(product):
                if opening.rows is None:
                    self.describe(opening)

    def element(self, product: Product) -> Element:
        """The element of a product, with its attributes and properties; bodies are added by the caller."""
        entity, key = product.entity, product.key
        own_type = self.properties.type_of(key)
        name = entity.get_argument(NAME)
        material = self.relations.material(key, None if own_type is None else own_type.id())
        return Element(
            source=Source(file=self.file, item=product.item),
            cls=product.cls,
            group=product.group,
            name=name if isinstance(name, str) else str(name or ""),
            layer=self._layer(entity) if self.relations.layers else "",
            material=material,
            tags=self._tags(product, own_type, material),
            length=self.units.length,
        )

    def profile_of(self, element: Element) -> Profile | None:
        """Cross-section that the material of an element is assigned with, when it can be read."""
        for entity in element.material.profiles if element.material is not None else ():
            try:
                return self.items.profiles.read(entity)
            except UNREADABLE:
                continue
        return None

    def _tags(self, product: Product, own_type: Entity | None, material: MaterialUse | None) -> dict[str, str]:
        entity, key, relations = product.entity, product.key, self.relations
        tags: dict[str, str] = {}
        for name, position in _TEXT_ATTRIBUTES if product.group not in ("load", "line") else _TEXT_ATTRIBUTES[:2]:
            value = entity.get_argument(position)
            if value:
                tags[name] = str(value)
        self._add_kind(product, own_type, tags)
        place = relations.place(key)
        if place is not None:
            tags["Storey" if place[1] else "ContainedIn"] = place[0]
        if key in relations.groups:
            tags["Group"] = ", ".join(relations.groups[key])
        if key in relations.codes:
            tags["Classification"] = relations.codes[key]
        if material is not None and material.layers:
            tags["MaterialLayers"] = relations.layer_words(material, self.units.length)
        if product.group == "load":
            tags.update(load_tags(entity, self.units))
        self.properties.add_tags(key, tags)
        return tags

    def _add_kind(self, product: Product, own_type: Entity | None, tags: dict[str, str]) -> None:
        """Predefined type of the occurrence, else of its type, and the type's name."""
        kind = self._predefined(product.entity, product.cls)
        if own_type is not None:
            name = own_type.get_argument(NAME)
            if name:
                tags["TypeName"] = str(name)
            if kind in (None, "NOTDEFINED"):
                kind = self._predefined(own_type, own_type.is_a()) or kind
            if kind == "USERDEFINED":
                tags.setdefault("ElementType", str(getattr(own_type, "ElementType", None) or ""))
        if kind:
            tags["PredefinedType"] = kind

    def _predefined(self, entity: Entity, name: str) -> str | None:
        if name not in self._kind_positions:
            names = list(entity.get_attribute_names())
            self._kind_positions[name] = next((i for i, n in enumerate(names) if n in _KIND_ATTRIBUTES), None)
        position = self._kind_positions[name]
        value = None if position is None else entity.get_argument(position)
        return intern(value) if value else None

    def _layer(self, entity: Entity) -> str:
        """Drawing layer of the representation or of one of its items."""
        layers = self.relations.layers
        shape = entity.get_argument(REPRESENTATION)
        for one in () if shape is None else shape.get_argument(2):
            for candidate in (one, *(one.get_argument(3) or ())):
                name = layers.get(candidate.id())
                if name:
                    return name
        return ""

    def damage(self) -> list[str]:
        """What the relations and properties lost, one sentence each."""
        said = []
        if self.doubles:
            said.append(f"{self.doubles} GlobalIds are used twice; the later ones are named with their instance number")
        if self.placements.fallbacks:
            said.append(
                f"{self.placements.fallbacks} placements along an alignment were read from their fallback position"
            )
        if self.items.operators.shifted:
            count = self.items.operators.shifted
            said.append(f"{count} mapped bodies have a source with an origin of its own; check where they stand")
        if self.relations.unread:
            said.append(f"{self.relations.unread} relations or materials are damaged and were left out")
        if self.properties.unread:
            said.append(f"{self.properties.unread} property sets or relations are damaged and were left out")
        return said


def _has_body(entity: Entity) -> bool:
    try:
        shape = entity.get_argument(REPRESENTATION)
        if shape is None:
            return False
        return any((one.get_argument(1) or "Body") == "Body" for one in shape.get_argument(2))
    except UNREADABLE:
        return False


def _is_piece(product: Product, whole: Product) -> bool:
    """True for a product that is but a piece of a wall, bar or plate: a part by class, or a proxy that is its body."""
    return product.cls == "IfcBuildingElementPart" or (
        product.cls == "IfcBuildingElementProxy" and not _has_body(whole.entity)
    )
