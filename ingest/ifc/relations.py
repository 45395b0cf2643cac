"""Who belongs to whom: materials, storeys, aggregates, openings, groups, drawing layers."""

from __future__ import annotations

from collections.abc import Iterator
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
from ingest.ifc.properties import UNREADABLE

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
    `direction` axis of the element; None when the file gives no usage.
    """

    name: str
    layers: tuple[tuple[str, float], ...] = ()
    offset: float | None = None
    sense: int = 1
    direction: str = ""
    cardinal_point: int | None = None
    profiles: tuple[Entity, ...] = ()

    @property
    def total(self) -> float:
        """Sum of the layers."""
        return sum(thickness for _, thickness in self.layers)


class Relations:
    """Tables by product id, filled in one pass over each kind of relation."""

    def __init__(self, model: Any) -> None:
        self.materials: dict[int, Entity] = {}
        self.storey: dict[int, Entity] = {}
        self.parts: dict[int, list[Entity]] = {}
        self.whole: dict[int, Entity] = {}
        self.openings: dict[int, list[Entity]] = {}
        self.groups: dict[int, list[str]] = {}
        self.codes: dict[int, str] = {}
        self.layers: dict[int, str] = {}
        self.unread = 0
        self._uses: dict[int, MaterialUse] = {}
        self._fill(model)

    def _pairs(self, model: Any, name: str, many: int, one: int) -> Iterator[tuple[Entity, Entity]]:
        for relation in of_type(model, name):
            try:
                single = relation.get_argument(one)
                for member in relation.get_argument(many):
                    yield member, single
            except UNREADABLE:
                self.unread += 1

    def _fill(self, model: Any) -> None:
        for member, material in self._pairs(model, "IfcRelAssociatesMaterial", RELATED_OBJECTS, RELATING):
            self.materials[member.id()] = material
        for member, storey in self._pairs(
            model, "IfcRelContainedInSpatialStructure", RELATED_ELEMENTS, RELATING_STRUCTURE
        ):
            self.storey[member.id()] = storey
        for name in ("IfcRelAggregates", "IfcRelNests"):
            for member, whole in self._pairs(model, name, PARTS, WHOLE):
                self.parts.setdefault(whole.id(), []).append(member)
                self.whole[member.id()] = whole
        for member, group in self._pairs(model, "IfcRelAssignsToGroup", RELATED_OBJECTS, 6):
            self.groups.setdefault(member.id(), []).append(str(group.get_argument(NAME) or ""))
        for member, code in self._pairs(model, "IfcRelAssociatesClassification", RELATED_OBJECTS, RELATING):
            if code.is_a("IfcClassificationReference"):
                self.codes[member.id()] = " ".join(str(v) for v in (code.get_argument(1), code.get_argument(2)) if v)
        self._fill_layers(model)
        for relation in of_type(model, "IfcRelVoidsElement"):
            try:
                self.openings.setdefault(relation.get_argument(4).id(), []).append(relation.get_argument(5))
            except UNREADABLE:
                self.unread += 1

    def _fill_layers(self, model: Any) -> None:
        for layer in of_type(model, "IfcPresentationLayerAssignment"):
            try:
                name = str(layer.get_argument(0) or "")
                for item in layer.get_argument(2):
                    self.layers.setdefault(item.id(), name)
            except UNREADABLE:
                self.unread += 1

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
        return MaterialUse(base.name, base.layers, offset, sense, str(material.LayerSetDirection))
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
