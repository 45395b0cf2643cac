"""Properties and quantities as text: one pass over the relations, numbers turned into m, kN, kPa and degrees."""

from __future__ import annotations

from collections.abc import Iterable
from sys import intern
from typing import Any, TypeAlias

from ingest.ifc.attributes import NAME, RELATED_OBJECTS, RELATING
from ingest.ifc.units import ProjectUnits, unit_factor
from ingest.ifc.unreadable import UNREADABLE

Entity: TypeAlias = Any
Tags: TypeAlias = dict[str, str]

_SETS_OF_TYPE = 5
_PROPERTIES = 4
_QUANTITIES = 5
_QUANTITY_MEASURES = {
    "IfcQuantityLength": "IfcLengthMeasure",
    "IfcQuantityArea": "IfcAreaMeasure",
    "IfcQuantityVolume": "IfcVolumeMeasure",
}
_KIND_MEASURES = {
    "LENGTHUNIT": "IfcLengthMeasure",
    "AREAUNIT": "IfcAreaMeasure",
    "VOLUMEUNIT": "IfcVolumeMeasure",
    "PLANEANGLEUNIT": "IfcPlaneAngleMeasure",
    "FORCEUNIT": "IfcForceMeasure",
    "PRESSUREUNIT": "IfcPressureMeasure",
    "LINEARFORCEUNIT": "IfcLinearForceMeasure",
    "PLANARFORCEUNIT": "IfcPlanarForceMeasure",
}


class PropertyTable:
    """Property sets of occurrences and types, read when asked for; those of many products only once."""

    def __init__(self, model: Any, units: ProjectUnits) -> None:
        self._units = units
        self._sets: dict[int, list[Entity]] = {}
        self._types: dict[int, Entity] = {}
        self._shared: dict[int, tuple[str, Tags] | None] = {}
        self._of_type: dict[int, Tags] = {}
        self._factors: dict[str, float | None] = {}
        self._texts: dict[float, str] = {}
        self.unread = 0
        """Number of property sets and relations that were damaged."""
        for relation in model.by_type("IfcRelDefinesByProperties"):
            self._note_sets(relation)
        for relation in model.by_type("IfcRelDefinesByType"):
            self._note_type(relation)

    def _note_sets(self, relation: Entity) -> None:
        try:
            relating, related = relation.get_argument(RELATING), relation.get_argument(RELATED_OBJECTS)
            if len(related) > 1 and not isinstance(relating, tuple) and relating.id():
                self._shared[relating.id()] = None
            for one in related:
                self._sets.setdefault(one.id(), []).append(relating)
        except UNREADABLE:
            self.unread += 1

    def _note_type(self, relation: Entity) -> None:
        try:
            relating = relation.get_argument(RELATING)
            for one in relation.get_argument(RELATED_OBJECTS):
                self._types[one.id()] = relating
        except UNREADABLE:
            self.unread += 1

    def type_of(self, key: int) -> Entity | None:
        """The type object of a product, by the product's id."""
        return self._types.get(key)

    def add_tags(self, key: int, tags: Tags) -> None:
        """Add the properties of a product and its type to its tags, name to text.

        To be asked once for each product: its own sets are let go. What it says stands above its type. A name that
        comes twice with different values keeps the first; the other is kept as `set: name`.
        """
        for entity in self._sets.pop(key, ()):
            if self._is_own(entity):
                self._add_own(entity, tags)
                continue
            for name, values in self._definitions(entity):
                _merge(tags, name, values)
        own = self._types.get(key)
        if own is not None:
            for name, text in self._type_tags(own).items():
                tags.setdefault(name, text)

    def _is_own(self, entity: Entity) -> bool:
        """True for a plain property set of one product alone, which need not be kept."""
        if isinstance(entity, tuple) or entity.is_a() != "IfcPropertySet":
            return False
        return not self._shared or entity.id() not in self._shared

    def _add_own(self, entity: Entity, tags: Tags) -> None:
        found: Tags = {}
        try:
            self._properties(entity.get_argument(_PROPERTIES), found)
        except UNREADABLE:
            self.unread += 1
        if tags.keys().isdisjoint(found):
            tags.update(found)
        else:
            _merge(tags, entity.get_argument(NAME) or "", found)

    def _type_tags(self, own: Entity) -> Tags:
        key = own.id()
        if key not in self._of_type:
            found: Tags = {}
            try:
                for entity in own.get_argument(_SETS_OF_TYPE) or ():
                    for name, values in self._definitions(entity):
                        _merge(found, name, values)
            except UNREADABLE:
                self.unread += 1
            self._of_type[key] = found
        return self._of_type[key]

    def _definitions(self, entity: Entity) -> Iterable[tuple[str, Tags]]:
        if isinstance(entity, tuple):
            return [self._set(one, one.is_a()) for one in entity]
        kind = entity.is_a()
        if kind == "IfcPropertySetDefinitionSet":
            return [self._set(one, one.is_a()) for one in entity.wrappedValue]
        return (self._set(entity, kind),)

    def _set(self, entity: Entity, kind: str) -> tuple[str, Tags]:
        key = entity.id() if self._shared else -1
        known = self._shared.get(key)
        if known is not None:
            return known
        found: Tags = {}
        try:
            if kind == "IfcPropertySet":
                self._properties(entity.get_argument(_PROPERTIES), found)
            elif kind == "IfcElementQuantity":
                self._quantities(entity.get_argument(_QUANTITIES), found)
        except UNREADABLE:
            self.unread += 1
        read = (entity.get_argument(NAME) or "", found)
        if key in self._shared:
            self._shared[key] = read
        return read

    def _properties(self, properties: Iterable[Entity], found: Tags, prefix: str = "") -> None:
        for one in properties:
            name = one.get_argument(0) or ""
            if one.is_a() != "IfcPropertySingleValue":
                self._other_property(one, prefix + name, found)
                continue
            value = one.get_argument(2)
            if value is None:
                continue
            bare = value.get_argument(0)
            if isinstance(bare, str):
                text = bare
            elif isinstance(bare, float):
                text = self._number(bare, value.is_a(), one.get_argument(3))
            else:
                text = str(bare).lower()
            found[intern(prefix + name)] = text

    def _other_property(self, one: Entity, name: str, found: Tags) -> None:
        kind = one.is_a()
        if kind == "IfcPropertyEnumeratedValue":
            found[name] = ", ".join(self._text(v, None) for v in one.EnumerationValues or ())
        elif kind == "IfcPropertyListValue":
            found[name] = ", ".join(self._text(v, one.Unit) for v in one.ListValues or ())
        elif kind == "IfcPropertyBoundedValue":
            ends = (one.LowerBoundValue, one.UpperBoundValue)
            found[name] = " to ".join("" if v is None else self._text(v, one.Unit) for v in ends)
        elif kind == "IfcComplexProperty" and name.count(".") < 4:
            self._properties(one.HasProperties, found, f"{name}.")

    def _quantities(self, quantities: Iterable[Entity], found: Tags) -> None:
        for one in quantities:
            kind = one.is_a()
            if kind == "IfcPhysicalComplexQuantity":
                continue
            factor = self._factor(_QUANTITY_MEASURES.get(kind, ""), one.get_argument(2))
            value = one.get_argument(3)
            if isinstance(value, (int, float)):
                name = intern(one.get_argument(0) or "")
                found[name] = number_text(value if factor is None else value * factor)

    def _text(self, value: Entity, unit: Entity | None) -> str:
        bare = value.get_argument(0)
        if isinstance(bare, float):
            return self._number(bare, value.is_a(), unit)
        return bare if isinstance(bare, str) else str(bare).lower()

    def _number(self, bare: float, measure: str, unit: Entity | None) -> str:
        factor = self._factor(measure, unit)
        number = bare if factor is None else bare * factor
        known = self._texts.get(number)
        if known is None:
            known = self._texts[number] = number_text(number)
        return known

    def _factor(self, measure: str, unit: Entity | None) -> float | None:
        if unit is None:
            if measure not in self._factors:
                self._factors[measure] = self._units.factor(measure)
            return self._factors[measure]
        if not unit.is_a("IfcNamedUnit") and not unit.is_a("IfcDerivedUnit"):
            return self._units.factor(measure)
        kind = str(unit.UnitType)
        own = _KIND_MEASURES.get(kind)
        project = self._units.factor(own) if own else None
        if own is None or project is None:
            return None
        return project / self._units.si(kind) * unit_factor(unit)


def _merge(found: Tags, set_name: str, values: Tags) -> None:
    for name, text in values.items():
        known = found.get(name)
        if known is None:
            found[name] = text
        elif known != text:
            found[f"{set_name}: {name}"] = text


def number_text(value: float) -> str:
    """A number to nine significant digits, as text."""
    return format(float(value), ".9g")
