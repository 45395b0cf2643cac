"""Who belongs to whom: materials, storeys, aggregates, openings, groups, drawing layers."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

from ingest.ifc.attributes import (
    NAME,
    PARTS,
    RELATED_ELEMENTS,
    RELATED_OBJECTS,
    RELATING,
    RELATING_STRUCTURE,
    WHOLE,
)
from ingest.ifc.properties import number_text
from ingest.ifc.unreadable import UNREADABLE

Entity = Any


def of_type(model: Any, name: str) -> tuple[Entity, ...]:
    """All instances of a class and its subclasses; none where the schema has no such class."""
    try:
        return tuple(model.by_type(name))
    except RuntimeError:
        return ()


@dataclass(frozen=True, slots=True)
class MaterialUse:
    """The material of an element, lengths in the file's units.

    `layers` are (name, thickness) from the reference line onwards. `offset` and `sense` tell where they lie along the
    `direction` axis of the element; None when the file gives no usage. `extent` is the height of a wall that has no
    body; `profiles` and `cardinal_point` describe a bar that has none.
    """

    name: str
    layers: tuple[tuple[str, float], ...] = ()
    offset: float | None = None
    sense: int = 1
    direction: str = ""
    extent: float | None = None
    cardinal_point: int | None = None
    profiles: tuple[Entity, ...] = ()

    @property
    def total(self) -> float:
        """Sum of the layers."""
        return sum(thickness for _, thickness in self.layers)


class Relations:
    """Tables by product id, filled in one pass over each kind of relation.

    Attributes:
        materials: Material entity.
        places: Name of the spatial element an element stands in, and whether that is a storey.
        parts, whole: Parts of a whole, and the id of the whole of a part.
        openings: Openings of an element.
        groups, codes: Names of groups and systems; classification.
        layers: Drawing layer, by the id of a representation or item.
        unread: Number of damaged relations.
    """

    def __init__(self, model: Any) -> None:
        self.materials: dict[int, Entity] = {}
        self.places: dict[int, tuple[str, bool]] = {}
        self.parts: dict[int, list[Entity]] = {}
        self.whole: dict[int, int] = {}
        self.openings: dict[int, list[Entity]] = {}
        self.groups: dict[int, list[str]] = {}
        self.codes: dict[int, str] = {}
        self.layers: dict[int, str] = {}
        self.unread = 0
        self._uses: dict[int, MaterialUse] = {}
        self._layer_words: dict[int, str] = {}
        self._fill_belongings(model)
        self._fill_structure(model)

    def _each(
        self, model: Any, name: str, many: int, one: int, read: Callable[[Entity], Any]
    ) -> Iterator[tuple[int, Entity, Any]]:
        """Id and entity of each member with what `read` makes of the single side; damaged relations are counted."""
        for relation in of_type(model, name):
            try:
                single = read(relation.get_argument(one))
                members = [(member.id(), member) for member in relation.get_argument(many)]
            except UNREADABLE:
                self.unread += 1
                continue
            for key, member in members:
                yield key, member, single

    def _fill_belongings(self, model: Any) -> None:
        for key, _, material in self._each(model, "IfcRelAssociatesMaterial", RELATED_OBJECTS, RELATING, _entity):
            self.materials[key] = material
        for key, _, name in self._each(model, "IfcRelAssignsToGroup", RELATED_OBJECTS, 6, _name):
            self.groups.setdefault(key, []).append(name)
        for key, _, code in self._each(model, "IfcRelAssociatesClassification", RELATED_OBJECTS, RELATING, _code):
            if code:
                self.codes[key] = code
        for layer in of_type(model, "IfcPresentationLayerAssignment"):
            try:
                name = str(layer.get_argument(0) or "")
                for item in layer.get_argument(2):
                    self.layers.setdefault(item.id(), name)
            except UNREADABLE:
                self.unread += 1

    def _fill_structure(self, model: Any) -> None:
        contained = "IfcRelContainedInSpatialStructure"
        for key, _, place in self._each(model, contained, RELATED_ELEMENTS, RELATING_STRUCTURE, _place):
            self.places[key] = place
        for kind in ("IfcRelAggregates", "IfcRelNests"):
            for key, member, whole in self._each(model, kind, PARTS, WHOLE, _key):
                self.parts.setdefault(whole, []).append(member)
                self.whole[key] = whole
        for relation in of_type(model, "IfcRelVoidsElement"):
            try:
                self.openings.setdefault(relation.get_argument(4).id(), []).append(_entity(relation.get_argument(5)))
            except UNREADABLE:
                self.unread += 1

    def place(self, key: int) -> tuple[str, bool] | None:
        """Spatial element a product stands in, its whole's when it has none of its own."""
        for _ in range(8):
            place = self.places.get(key)
            if place is not None:
                return place
            whole = self.whole.get(key)
            if whole is None:
                return None
            key = whole
        return None

    def layer_words(self, use: MaterialUse, scale: float) -> str:
        """The layers of a material use as text, thicknesses in m."""
        known = self._layer_words.get(id(use))
        if known is None:
            known = self._layer_words[id(use)] = "; ".join(f"{n} {number_text(t * scale)}" for n, t in use.layers)
        return known

    def material(self, key: int, type_key: int | None) -> MaterialUse | None:
        """Material of a product; where its own says less, what its type adds (layers without a usage)."""
        own = self._use(self.materials.get(key))
        of_its_type = None if type_key is None else self._use(self.materials.get(type_key))
        if own is None or (of_its_type is not None and not own.layers and of_its_type.layers):
            return of_its_type if of_its_type is not None else own
        return own

    def _use(self, material: Entity | None) -> MaterialUse | None:
        if material is None:
            return None
        key = material.id()
        if key not in self._uses:
            try:
                self._uses[key] = read_material(material)
            except UNREADABLE:
                self.unread += 1
                self._uses[key] = MaterialUse("")
        return self._uses[key]


def read_material(material: Entity) -> MaterialUse:
    """Read a material, list, layer set, profile set, constituent set or the usage of one."""
    kind = material.is_a()
    if kind == "IfcMaterial":
        return MaterialUse(str(material.Name or ""))
    if kind == "IfcMaterialList":
        return MaterialUse(", ".join(str(m.Name) for m in material.Materials))
    if kind == "IfcMaterialLayerSetUsage":
        base = read_material(material.ForLayerSet)
        sense = -1 if str(material.DirectionSense) == "NEGATIVE" else 1
        offset = float(material.OffsetFromReferenceLine)
        extent = getattr(material, "ReferenceExtent", None)
        return MaterialUse(base.name, base.layers, offset, sense, str(material.LayerSetDirection), extent)
    if kind in ("IfcMaterialLayerSet", "IfcMaterialLayer"):
        rows = material.MaterialLayers if kind == "IfcMaterialLayerSet" else (material,)
        layers = tuple((_layer_name(row), float(row.LayerThickness)) for row in rows)
        return MaterialUse(", ".join(dict.fromkeys(name for name, _ in layers if name)), layers)
    if kind == "IfcMaterialProfileSetUsage":
        base = read_material(material.ForProfileSet)
        return MaterialUse(base.name, cardinal_point=material.CardinalPoint, profiles=base.profiles)
    if kind in ("IfcMaterialProfileSet", "IfcMaterialProfile"):
        rows = material.MaterialProfiles if kind == "IfcMaterialProfileSet" else (material,)
        names = dict.fromkeys(str(r.Material.Name) for r in rows if r.Material is not None)
        return MaterialUse(", ".join(names), profiles=tuple(r.Profile for r in rows if r.Profile is not None))
    if kind == "IfcMaterialConstituentSet":
        names = dict.fromkeys(str(c.Material.Name) for c in material.MaterialConstituents or () if c.Material)
        return MaterialUse(", ".join(names))
    return MaterialUse("")


def _layer_name(layer: Entity) -> str:
    return "" if layer.Material is None else str(layer.Material.Name or "")


def _entity(one: Entity) -> Entity:
    one.id()
    return one


def _key(one: Entity) -> int:
    return int(one.id())


def _name(one: Entity) -> str:
    return str(one.get_argument(NAME) or "")


def _place(one: Entity) -> tuple[str, bool]:
    return _name(one), bool(one.is_a("IfcBuildingStorey"))


def _code(one: Entity) -> str:
    if not one.is_a("IfcClassificationReference"):
        return ""
    return " ".join(str(v) for v in (one.get_argument(1), one.get_argument(2)) if v)
