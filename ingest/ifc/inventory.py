"""All products of a file with their classes, relations and properties; geometry described but not yet placed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from ingest.ifc.attributes import DESCRIPTION, GUID, NAME, OBJECT_TYPE, PLACEMENT, REPRESENTATION, TAG
from ingest.ifc.classes import COUNTED_OUT, WHOLE_FROM_PARTS, Classes, Group
from ingest.ifc.curves import CurveReader
from ingest.ifc.elements import Element
from ingest.ifc.frames import FrameTable
from ingest.ifc.loads import items_of_actions, load_tags
from ingest.ifc.placement import PlacementTable
from ingest.ifc.properties import UNREADABLE, PropertyTable, number_text
from ingest.ifc.relations import MaterialUse, Relations
from ingest.ifc.representations import Chosen, choose
from ingest.ifc.solids import ItemReader
from ingest.ifc.units import read_units
from ingest.trail import Source

Entity = Any
_PIECES = ("IfcBuildingElementPart", "IfcBuildingElementProxy")


@dataclass(slots=True)
class Product:
    """One product. `reason` says why it is context, or why it cannot be read; `part_of` that another one holds it."""

    key: int
    entity: Entity
    item: str
    cls: str
    group: Group
    reason: str = ""
    part_of: str = ""
    has_parts: bool = False
    placement: int = 0
    chosen: Chosen | None = None


class Inventory:
    """Everything that can be known of the products before they are placed."""

    def __init__(self, model: Any, file: str, length_unit: str | None) -> None:
        self.file = file
        self.units = read_units(model, file, length_unit)
        self.relations = Relations(model)
        self.properties = PropertyTable(model, self.units)
        self.frames = FrameTable()
        self.placements = PlacementTable(self.frames)
        self.items = ItemReader(self.frames, CurveReader(self.units.length, self.units.angle))
        self._loads = items_of_actions(model)
        self._last_attribute: dict[str, int | None] = {}
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
            group, reason = classes.of(entity)
            item = self._item(entity, key, guids)
            found.append(Product(key, entity, item, entity.is_a(), group, reason))
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
            parts = self.relations.parts.get(product.key)
            product.has_parts = bool(parts)
        for product in self.products:
            whole = self._by_key.get(self._whole_key(product))
            if whole is None or whole.group == "setting":
                continue
            if whole.cls == "IfcBorehole" and product.group == "ground":
                product.part_of = "stratum of a borehole"
            elif whole.group in WHOLE_FROM_PARTS and product.cls in _PIECES:
                if product.cls == "IfcBuildingElementPart" or not _has_body(whole.entity):
                    product.part_of = "part of an element read whole"

    def _whole_key(self, product: Product) -> int:
        whole = self.relations.whole.get(product.key)
        return -1 if whole is None else int(whole.id())

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
        """Openings of a plate whose bodies were described."""
        if product.group != "plate":
            return []
        found = (self._by_key.get(opening.id()) for opening in self.relations.openings.get(product.key, ()))
        return [opening for opening in found if opening is not None and opening.chosen is not None]

    def describe(self, product: Product) -> None:
        """Describe placement and geometry of a product, and the openings of a plate."""
        entity = product.entity
        placement, shape = entity.get_argument(PLACEMENT), entity.get_argument(REPRESENTATION)
        if product.group == "load" and (item := self._loads.get(product.key)) is not None:
            shape = shape or item.get_argument(REPRESENTATION)
            placement = placement or item.get_argument(PLACEMENT)
        product.placement = self.placements.row(placement)
        product.chosen = choose(shape, self.items, product.group != "plate")
        if product.group == "plate":
            for opening in self.relations.openings.get(product.key, ()):
                known = self._by_key.get(opening.id())
                if known is not None and known.chosen is None:
                    known.placement = self.placements.row(known.entity.get_argument(PLACEMENT))
                    known.chosen = choose(known.entity.get_argument(REPRESENTATION), self.items, False)

    def element(self, product: Product) -> Element:
        """The element of a product, with its attributes and properties; bodies are added by the caller."""
        entity, key = product.entity, product.key
        own_type = self.properties.type_of(key)
        material = self.relations.material(key, None if own_type is None else own_type.id())
        tags = self._tags(product, own_type, material)
        return Element(
            source=Source(file=self.file, item=product.item),
            cls=product.cls,
            group=product.group,
            name=str(entity.get_argument(NAME) or ""),
            layer=self._layer(entity),
            material=material,
            tags=tags,
            length=self.units.length,
        )

    def _tags(self, product: Product, own_type: Entity | None, material: MaterialUse | None) -> dict[str, str]:
        entity, key = product.entity, product.key
        tags: dict[str, str] = {}
        for name, position in (("ObjectType", OBJECT_TYPE), ("Description", DESCRIPTION)):
            value = entity.get_argument(position)
            if value:
                tags[name] = str(value)
        if product.group not in ("load", "line"):
            value = entity.get_argument(TAG)
            if value and isinstance(value, str):
                tags["Tag"] = value
        self._kind_tags(entity, own_type, tags)
        storey = self._storey(product)
        if storey:
            tags["Storey"] = storey
        if key in self.relations.groups:
            tags["Group"] = ", ".join(self.relations.groups[key])
        if key in self.relations.codes:
            tags["Classification"] = self.relations.codes[key]
        if material is not None and material.layers:
            scale = self.units.length
            tags["MaterialLayers"] = "; ".join(f"{n} {number_text(t * scale)}" for n, t in material.layers)
        if product.group == "load":
            tags.update(load_tags(entity, self.units))
        for name, text in self.properties.tags(key).items():
            tags.setdefault(name, text)
        return tags

    def _kind_tags(self, entity: Entity, own_type: Entity | None, tags: dict[str, str]) -> None:
        """Predefined type of the occurrence, else of its type, and the type's name."""
        kind = self._predefined(entity)
        if own_type is not None:
            name = own_type.get_argument(NAME)
            if name:
                tags["TypeName"] = str(name)
            if kind in (None, "NOTDEFINED"):
                kind = self._predefined(own_type) or kind
            if kind == "USERDEFINED":
                tags.setdefault("ElementType", str(getattr(own_type, "ElementType", None) or ""))
        if kind:
            tags["PredefinedType"] = kind

    def _predefined(self, entity: Entity) -> str | None:
        name = entity.is_a()
        if name not in self._last_attribute:
            names = list(entity.get_attribute_names())
            found = [i for i, n in enumerate(names) if n in ("PredefinedType", "ShapeType")]
            self._last_attribute[name] = found[0] if found else None
        position = self._last_attribute[name]
        value = None if position is None else entity.get_argument(position)
        return str(value) if value else None

    def _storey(self, product: Product) -> str:
        """Name of the storey an element stands in, its whole's when it has none of its own."""
        key = product.key
        for _ in range(8):
            storey = self.relations.storey.get(key)
            if storey is not None:
                return str(storey.get_argument(NAME) or "")
            whole = self.relations.whole.get(key)
            if whole is None:
                return ""
            key = whole.id()
        return ""

    def _layer(self, entity: Entity) -> str:
        """Drawing layer of the representation or of one of its items."""
        layers = self.relations.layers
        shape = entity.get_argument(REPRESENTATION) if layers else None
        if shape is None:
            return ""
        for one in shape.get_argument(2):
            for candidate in (one, *one.get_argument(3)):
                name = layers.get(candidate.id())
                if name:
                    return name
        return ""

    def damage(self) -> list[str]:
        """What the relations and properties lost, one sentence each."""
        said = []
        if self.doubles:
            said.append(f"{self.doubles} GlobalIds are used twice; the later ones are named with their instance number")
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
