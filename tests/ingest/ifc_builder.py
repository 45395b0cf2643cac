"""Write small IFC models by hand: one call a product, lengths in the project's unit, ids that never change.

    model = IfcBuilder(unit="MILLIMETRE")
    model.pile("P1", at=(1000, 2000, 0), diameter=750, length=12000)
    model.save(tmp_path / "piles.ifc")

Only `ifcopenshell.file.create_entity` is used, so every attribute a test depends on is in sight. GlobalIds are uuid5 of
the name, the header date is fixed: the same calls give the same bytes.
"""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

Entity = Any
Numbers = Sequence[float]
_UNITS = {"METRE": None, "MILLIMETRE": "MILLI", "CENTIMETRE": "CENTI"}
_CONVERTED = {"FOOT": 0.3048, "INCH": 0.0254, "US SURVEY FOOT": 1200 / 3937}


class IfcBuilder:
    """A model with project, site, building and storey; products are added to the storey."""

    def __init__(self, unit: str | None = "METRE", schema: str = "IFC4", angle: str = "RADIAN") -> None:
        self.file = ifcopenshell.file(schema=schema)
        self.schema = schema
        self._names: dict[str, int] = {}
        self.world = self.axis3((0, 0, 0))
        self.model_context = self.file.create_entity(
            "IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, self.world
        )
        self.contexts = {name: self._sub_context(name) for name in ("Body", "Axis", "FootPrint", "Box")}
        units = [*([self.length_unit(unit)] if unit else []), self.angle_unit(angle)]
        self.project = self.root("IfcProject", "project")
        self.project.RepresentationContexts = [self.model_context]
        if unit is not None or angle != "RADIAN":
            self.project.UnitsInContext = self.file.create_entity("IfcUnitAssignment", units)
        self.site = self.product("IfcSite", "site")
        self.building = self.product("IfcBuilding", "building", relative_to=self.site.ObjectPlacement)
        self.storey = self.product("IfcBuildingStorey", "storey", relative_to=self.building.ObjectPlacement)
        self._contained: list[Entity] = []
        for whole, part in ((self.project, self.site), (self.site, self.building), (self.building, self.storey)):
            self.aggregate(whole, [part])

    # ---- units -----------------------------------------------------------------------------------------------------

    def length_unit(self, name: str) -> Entity:
        """SI or conversion-based length unit."""
        if name in _UNITS:
            return self.file.create_entity("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=_UNITS[name], Name="METRE")
        metre = self.file.create_entity("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        return self.converted("LENGTHUNIT", name, self.file.create_entity("IfcRatioMeasure", _CONVERTED[name]), metre)

    def converted(self, kind: str, name: str, factor: Entity, base: Entity) -> Entity:
        """Conversion-based unit with its factor to a base unit."""
        powers = [1, 0, 0, 0, 0, 0, 0] if kind == "LENGTHUNIT" else [0] * 7
        measure = self.file.create_entity("IfcMeasureWithUnit", factor, base)
        dimensions = self.file.create_entity("IfcDimensionalExponents", *powers)
        return self.file.create_entity("IfcConversionBasedUnit", dimensions, kind, name, measure)

    def angle_unit(self, name: str) -> Entity:
        """Radian, or the degree as a conversion-based unit."""
        radian = self.file.create_entity("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        if name == "RADIAN":
            return radian
        factor = self.file.create_entity("IfcPlaneAngleMeasure", 0.017453292519943295)
        return self.converted("PLANEANGLEUNIT", "DEGREE", factor, radian)

    def force_unit(self) -> Entity:
        """Add the kilonewton to the project's units."""
        kn = self.file.create_entity("IfcSIUnit", UnitType="FORCEUNIT", Prefix="KILO", Name="NEWTON")
        assignment = self.project.UnitsInContext
        assignment.Units = [*assignment.Units, kn]
        return kn

    # ---- roots and placements --------------------------------------------------------------------------------------

    def guid(self, name: str) -> str:
        """GlobalId by uuid5 of the name; a name used twice is numbered."""
        count = self._names[name] = self._names.get(name, 0) + 1
        return ifcopenshell.guid.compress(uuid.uuid5(uuid.NAMESPACE_URL, f"{name}/{count}").hex)

    def root(self, kind: str, name: str, *more: Any, **attributes: Any) -> Entity:
        """Any rooted entity, with a fixed GlobalId."""
        entity = self.file.create_entity(kind, self.guid(f"{kind}:{name}"), None, name, None, *more)
        for key, value in attributes.items():
            setattr(entity, key, value)
        return entity

    def product(
        self,
        kind: str,
        name: str,
        *,
        at: Numbers = (0, 0, 0),
        up: Numbers | None = None,
        first: Numbers | None = None,
        relative_to: Entity | None = None,
        body: Sequence[Entity] | Entity | None = None,
        axis: Entity | None = None,
        body_type: str = "SweptSolid",
        **attributes: Any,
    ) -> Entity:
        """A product at a local placement with a body and an axis; elements go into the storey."""
        entity = self.root(kind, name, **attributes)
        if relative_to is None and hasattr(self, "storey"):
            relative_to = self.storey.ObjectPlacement
        entity.ObjectPlacement = self.file.create_entity("IfcLocalPlacement", relative_to, self.axis3(at, up, first))
        shapes = []
        if axis is not None:
            shapes.append(self.representation("Axis", "Curve2D", [axis]))
        if body is not None:
            items = list(body) if isinstance(body, list | tuple) else [body]
            shapes.append(self.representation("Body", body_type, items))
        if shapes:
            entity.Representation = self.file.create_entity("IfcProductDefinitionShape", None, None, shapes)
        if hasattr(self, "_contained"):
            self._contained.append(entity)
        return entity

    def representation(self, name: str, kind: str, items: Sequence[Entity]) -> Entity:
        """A shape representation."""
        return self.file.create_entity("IfcShapeRepresentation", self.contexts.get(name), name, kind, list(items))

    def _sub_context(self, name: str) -> Entity:
        return self.file.create_entity(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier=name,
            ContextType="Model",
            ParentContext=self.model_context,
            TargetView="MODEL_VIEW",
        )

    # ---- geometry --------------------------------------------------------------------------------------------------

    def point(self, at: Numbers) -> Entity:
        """Point in the plane or in space."""
        return self.file.create_entity("IfcCartesianPoint", [float(v) for v in at])

    def direction(self, way: Numbers) -> Entity:
        """Direction in the plane or in space."""
        return self.file.create_entity("IfcDirection", [float(v) for v in way])

    def axis3(self, at: Numbers, up: Numbers | None = None, first: Numbers | None = None) -> Entity:
        """Axis placement in space."""
        return self.file.create_entity(
            "IfcAxis2Placement3D",
            self.point(at),
            None if up is None else self.direction(up),
            None if first is None else self.direction(first),
        )

    def axis2(self, at: Numbers = (0, 0), first: Numbers | None = None) -> Entity:
        """Axis placement in the plane."""
        return self.file.create_entity(
            "IfcAxis2Placement2D", self.point(at), None if first is None else self.direction(first)
        )

    def polyline(self, *points: Numbers) -> Entity:
        """Polyline through points."""
        return self.file.create_entity("IfcPolyline", [self.point(p) for p in points])

    def circle(self, diameter: float, wall: float | None = None, name: str | None = None) -> Entity:
        """Full or hollow circle profile."""
        if wall is None:
            return self.file.create_entity("IfcCircleProfileDef", "AREA", name, self.axis2(), diameter / 2)
        return self.file.create_entity("IfcCircleHollowProfileDef", "AREA", name, self.axis2(), diameter / 2, wall)

    def rectangle(self, x: float, y: float, at: Numbers = (0, 0), first: Numbers | None = None) -> Entity:
        """Rectangle profile about a point."""
        return self.file.create_entity("IfcRectangleProfileDef", "AREA", None, self.axis2(at, first), x, y)

    def outline(self, *points: Numbers, holes: Sequence[Sequence[Numbers]] = ()) -> Entity:
        """Arbitrary closed profile; the ring is closed here."""
        ring = self.polyline(*points, points[0])
        if not holes:
            return self.file.create_entity("IfcArbitraryClosedProfileDef", "AREA", None, ring)
        inner = [self.polyline(*hole, hole[0]) for hole in holes]
        return self.file.create_entity("IfcArbitraryProfileDefWithVoids", "AREA", None, ring, inner)

    def extrusion(
        self,
        profile: Entity,
        depth: float,
        *,
        at: Numbers = (0, 0, 0),
        up: Numbers | None = None,
        first: Numbers | None = None,
        way: Numbers = (0, 0, 1),
    ) -> Entity:
        """Extruded area solid; `up` and `first` turn the profile plane, `way` is in its coordinates."""
        return self.file.create_entity(
            "IfcExtrudedAreaSolid", profile, self.axis3(at, up, first), self.direction(way), float(depth)
        )

    def mapped(self, items: Sequence[Entity], operator: Entity, origin: Entity | None = None) -> Entity:
        """Mapped item of a new representation map; `origin` is the frame that lands on the operator's target."""
        source = self.file.create_entity(
            "IfcRepresentationMap", origin or self.axis3((0, 0, 0)), self.representation("Body", "SweptSolid", items)
        )
        return self.file.create_entity("IfcMappedItem", source, operator)

    def operator(
        self,
        at: Numbers = (0, 0, 0),
        x: Numbers | None = None,
        y: Numbers | None = None,
        z: Numbers | None = None,
        scale: float | None = None,
    ) -> Entity:
        """Cartesian transformation operator."""
        axes = [None if a is None else self.direction(a) for a in (x, y, z)]
        return self.file.create_entity(
            "IfcCartesianTransformationOperator3D", axes[0], axes[1], self.point(at), scale, axes[2]
        )

    # ---- the usual members of an excavation ------------------------------------------------------------------------

    def pile(
        self, name: str, at: Numbers, diameter: float, length: float, kind: str = "IfcPile", **more: Any
    ) -> Entity:
        """Round pile, head at `at`, extruded downwards."""
        body = self.extrusion(self.circle(diameter), length, way=(0, 0, -1))
        return self.product(kind, name, at=at, body=body, **more)

    def wall(
        self,
        name: str,
        start: Numbers,
        end: Numbers,
        thickness: float,
        height: float,
        *,
        offset: float = 0.0,
        **more: Any,
    ) -> Entity:
        """Upright wall drawn by its reference line from `start` to `end`; `offset` is its centre line left of it."""
        dx, dy = end[0] - start[0], end[1] - start[1]
        length = (dx * dx + dy * dy) ** 0.5
        body = self.extrusion(self.rectangle(length, thickness, (length / 2, offset)), height)
        axis = self.polyline((0, 0), (length, 0))
        return self.product("IfcWall", name, at=start, first=(dx, dy, 0), body=body, axis=axis, **more)

    def bar(
        self, name: str, start: Numbers, end: Numbers, profile: Entity, kind: str = "IfcMember", **more: Any
    ) -> Entity:
        """Straight member of any profile between two points; level members keep the profile's y axis upright."""
        way = [b - a for a, b in zip(start, end, strict=True)]
        length = sum(v * v for v in way) ** 0.5
        first = (-way[1], way[0], 0.0) if way[0] or way[1] else (1.0, 0.0, 0.0)
        body = self.extrusion(profile, length)
        return self.product(kind, name, at=start, up=way, first=first, body=body, **more)

    def slab(
        self, name: str, ring: Sequence[Numbers], bottom: float, top: float, *, holes: Sequence[Sequence[Numbers]] = (),
        kind: str = "IfcSlab", **more: Any,
    ) -> Entity:  # fmt: skip
        """Slab or footing by its outline between two levels."""
        body = self.extrusion(self.outline(*ring, holes=holes), top - bottom)
        return self.product(kind, name, at=(0, 0, bottom), body=body, **more)

    # ---- relations -------------------------------------------------------------------------------------------------

    def aggregate(self, whole: Entity, parts: Sequence[Entity]) -> Entity:
        """Parts of a whole."""
        return self.file.create_entity("IfcRelAggregates", self.guid("rel"), None, None, None, whole, list(parts))

    def properties(self, entity: Entity, set_name: str, **values: Entity) -> Entity:
        """A property set; values are measures made with `measure`."""
        singles = [self.file.create_entity("IfcPropertySingleValue", k, None, v, None) for k, v in values.items()]
        pset = self.root("IfcPropertySet", set_name, singles)
        self.file.create_entity("IfcRelDefinesByProperties", self.guid("rel"), None, None, None, [entity], pset)
        return pset

    def measure(self, kind: str, value: Any) -> Entity:
        """A typed value, for instance IfcLengthMeasure."""
        return self.file.create_entity(kind, value)

    def typed(self, type_entity: Entity, entities: Sequence[Entity]) -> None:
        """Occurrences of a type."""
        self.file.create_entity("IfcRelDefinesByType", self.guid("rel"), None, None, None, list(entities), type_entity)

    def layers(self, entity: Entity, thicknesses: Numbers, offset: float, sense: str = "POSITIVE") -> None:
        """Material layer set usage along the element's y axis."""
        rows = [
            self.file.create_entity("IfcMaterialLayer", self.material(f"m{i}"), t) for i, t in enumerate(thicknesses)
        ]
        layer_set = self.file.create_entity("IfcMaterialLayerSet", rows)
        usage = self.file.create_entity("IfcMaterialLayerSetUsage", layer_set, "AXIS2", sense, offset)
        self.associate(entity, usage)

    def material(self, name: str) -> Entity:
        """A material by name."""
        return self.file.create_entity("IfcMaterial", name)

    def associate(self, entity: Entity, material: Entity) -> None:
        """Material of an element."""
        self.file.create_entity("IfcRelAssociatesMaterial", self.guid("rel"), None, None, None, [entity], material)

    def map_conversion(
        self, east: float, north: float, height: float, cosine: float, sine: float, **more: Any
    ) -> Entity:
        """Map conversion of the model context; `map_unit` and `scale` may be given."""
        crs = self.file.create_entity("IfcProjectedCRS", Name="EPSG:27700", MapUnit=more.get("map_unit"))
        return self.file.create_entity(
            "IfcMapConversion", self.model_context, crs, east, north, height, cosine, sine, more.get("scale")
        )

    def save(self, path: Path) -> Path:
        """Write the model; the same model gives the same bytes."""
        if self._contained:
            self.file.create_entity(
                "IfcRelContainedInSpatialStructure", self.guid("rel"), None, None, None, self._contained, self.storey
            )
            self._contained = []
        header = self.file.header.file_name
        header.name, header.time_stamp = path.name, "2026-01-01T00:00:00"
        self.file.write(str(path))
        return path
