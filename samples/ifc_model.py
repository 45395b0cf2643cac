"""A small IFC model whose bytes never change, for the scripts of this folder that model an invented site."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

SPACE = uuid.UUID("0b7c6f52-6f0d-5d53-8a51-6d0a1f7b9c24")
HEADER_DATE = "2026-03-02T00:00:00"

Entity = Any
Numbers = Sequence[float]


class SiteModel:
    """Project, site and elements of one invented site; lengths in the unit given, forces in kilonewtons."""

    def __init__(self, name: str, schema: str, prefix: str | None = None) -> None:
        self.name = name
        self.file = ifcopenshell.file(schema=schema)
        self.add = self.file.create_entity
        self.world = self.frame((0.0, 0.0, 0.0))
        self.context = self.add("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, self.world)
        self.body = self._sub_context("Body")
        self.reference = self._sub_context("Reference")
        units = [
            self.add("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=prefix, Name="METRE"),
            self.add("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN"),
            self.add("IfcSIUnit", UnitType="FORCEUNIT", Prefix="KILO", Name="NEWTON"),
        ]
        project = self.root("IfcProject", name)
        project.RepresentationContexts = [self.context]
        project.UnitsInContext = self.add("IfcUnitAssignment", units)
        self.place = self.add("IfcLocalPlacement", None, self.world)
        self.site = self.root("IfcSite", name, None, self.place)
        self.relate("IfcRelAggregates", project, [self.site])
        self._elements: list[Entity] = []
        self._on_layer: dict[str, list[Entity]] = {}
        self._of_material: dict[str, list[Entity]] = {}

    def _sub_context(self, name: str) -> Entity:
        return self.add(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier=name,
            ContextType="Model",
            ParentContext=self.context,
            TargetView="MODEL_VIEW",
        )

    def root(self, kind: str, name: str, *more: Any) -> Entity:
        """A rooted entity whose GlobalId follows from the site, its class and its name."""
        guid = ifcopenshell.guid.compress(uuid.uuid5(SPACE, f"{self.name}/{kind}/{name}").hex)
        return self.add(kind, guid, None, name, None, *more)

    def relate(self, kind: str, one: Any, many: Any) -> None:
        """A relation whose GlobalId follows from its kind and number."""
        self.root(kind, f"{kind} {len(self.file.by_type(kind))}", one, many)

    def map_conversion(self, east: float, north: float, way: Numbers, metres: float, crs: str) -> None:
        """Where the model lies on the map: origin in metres, direction of its x axis, metres per unit of length."""
        metre = self.add("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        target = self.add("IfcProjectedCRS", Name=crs, MapUnit=metre)
        self.add("IfcMapConversion", self.context, target, east, north, 0.0, way[0], way[1], metres)

    def point(self, at: Numbers) -> Entity:
        """A point in the plane or in space."""
        return self.add("IfcCartesianPoint", [float(v) for v in at])

    def direction(self, way: Numbers) -> Entity:
        """A direction in space."""
        return self.add("IfcDirection", [float(v) for v in way])

    def frame(self, at: Numbers, up: Numbers | None = None, first: Numbers | None = None) -> Entity:
        """An axis placement in space."""
        ways = [None if way is None else self.direction(way) for way in (up, first)]
        return self.add("IfcAxis2Placement3D", self.point(at), *ways)

    def flat(self, at: Numbers = (0.0, 0.0)) -> Entity:
        """An axis placement in the plane."""
        return self.add("IfcAxis2Placement2D", self.point(at), None)

    def outline(self, ring: Sequence[Numbers]) -> Entity:
        """A profile by its corners; the ring is closed here."""
        line = self.add("IfcPolyline", [self.point(p) for p in (*ring, ring[0])])
        return self.add("IfcArbitraryClosedProfileDef", "AREA", None, line)

    def extrusion(self, profile: Entity, depth: float, way: Numbers = (0.0, 0.0, 1.0)) -> Entity:
        """A body extruded from the origin of its element."""
        return self.add("IfcExtrudedAreaSolid", profile, self.world, self.direction(way), float(depth))

    def element(
        self, kind: str, name: str, layer: str, frame: Entity, solid: Entity, predefined: str | None, material: str
    ) -> Entity:
        """An element with one body, on a drawing layer, of one material."""
        swept = "SweptSolid" if solid.is_a("IfcExtrudedAreaSolid") else "AdvancedSweptSolid"
        shape = self.add("IfcShapeRepresentation", self.body, "Body", swept, [solid])
        whole = self.add("IfcProductDefinitionShape", None, None, [shape])
        made = self.root(kind, name, None, self.add("IfcLocalPlacement", self.place, frame), whole, None, predefined)
        self._on_layer.setdefault(layer, []).append(shape)
        self._of_material.setdefault(material, []).append(made)
        self._elements.append(made)
        return made

    def bar(
        self, kind: str, name: str, layer: str, ends: Sequence[Numbers], profile: Entity, predefined: str, material: str
    ) -> Entity:
        """A level straight member between two points, the y axis of its profile upright."""
        (x1, y1, z1), (x2, y2, z2) = ends
        dx, dy = x2 - x1, y2 - y1
        frame = self.frame((x1, y1, z1), (dx, dy, z2 - z1), (-dy, dx, 0.0))
        solid = self.extrusion(profile, (dx * dx + dy * dy + (z2 - z1) ** 2) ** 0.5)
        return self.element(kind, name, layer, frame, solid, predefined, material)

    def ring_beam(
        self, kind: str, name: str, layer: str, ring: Sequence[Numbers], profile: Entity, predefined: str, material: str
    ) -> Entity:
        """A closed beam swept along a level ring of points."""
        line = self.add("IfcPolyline", [self.point(p) for p in (*ring, ring[0])])
        up = self.direction((0.0, 0.0, 1.0))
        solid = self.add("IfcFixedReferenceSweptAreaSolid", profile, None, line, None, None, up)
        return self.element(kind, name, layer, self.world, solid, predefined, material)

    def plate(
        self, kind: str, name: str, layer: str, ring: Sequence[Numbers], levels: Numbers, predefined: str, material: str
    ) -> Entity:
        """A slab or footing by its outline between its underside and its top."""
        bottom, top = levels
        solid = self.extrusion(self.outline(ring), top - bottom)
        return self.element(kind, name, layer, self.frame((0.0, 0.0, bottom)), solid, predefined, material)

    def point_load(self, name: str, at: Numbers, down: float) -> None:
        """A structural action in global axes at a point, kN downwards."""
        vertex = self.add("IfcVertexPoint", self.point(at))
        topology = self.add("IfcTopologyRepresentation", self.reference, "Reference", "Vertex", [vertex])
        whole = self.add("IfcProductDefinitionShape", None, None, [topology])
        place = self.add("IfcLocalPlacement", self.place, self.world)
        force = self.add("IfcStructuralLoadSingleForce", name, None, None, -float(down))
        self.root("IfcStructuralPointAction", name, None, place, whole, force, "GLOBAL_COORDS")

    def save(self, path: Path, script: str) -> None:
        """Write the file, header date fixed."""
        self.relate("IfcRelContainedInSpatialStructure", self._elements, self.site)
        for layer, shapes in self._on_layer.items():
            self.add("IfcPresentationLayerAssignment", layer, None, shapes)
        for material, elements in self._of_material.items():
            self.relate("IfcRelAssociatesMaterial", elements, self.add("IfcMaterial", material))
        header = self.file.header.file_name
        header.name, header.time_stamp = path.name, HEADER_DATE
        header.preprocessor_version = header.originating_system = script
        path.parent.mkdir(parents=True, exist_ok=True)
        self.file.write(str(path))
