"""Model `first_pit` as IFC: the basement that make_first_pit.py draws. Run it with python."""

from __future__ import annotations

import uuid
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

FOLDER = Path(__file__).parent / "first_pit_ifc"
WEST, SOUTH, LENGTH, WIDTH = 100.0, 200.0, 30.0, 20.0
DIAMETER, CENTRES = 0.75, 1.0
TOP, TOE = 0.0, -12.0
STRUT_SPACING, STRUT_LEVEL = 5.0, -1.5
STRUT_DIAMETER, STRUT_WALL = 0.508, 0.016
WALER_DEPTH, WALER_WIDTH = 0.30, 0.30
FOOTING_UNDERSIDE, FOOTING_TOP = -1.0, -0.4
SPACE = uuid.UUID("6f1d0a52-3a38-5b0e-9a0d-0c5b2a1d7e11")

Entity = Any
Point = tuple[float, float, float]


class Model:
    """A small IFC4 model in metres whose bytes never change."""

    def __init__(self) -> None:
        self.file = ifcopenshell.file(schema="IFC4")
        add = self.file.create_entity
        self.world = add("IfcAxis2Placement3D", self.point(0.0, 0.0, 0.0))
        context = add("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, self.world)
        self.body = add(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier="Body",
            ContextType="Model",
            ParentContext=context,
            TargetView="MODEL_VIEW",
        )
        metre = add("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        radian = add("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        self.project = self.root("IfcProject", "First pit")
        self.project.RepresentationContexts = [context]
        self.project.UnitsInContext = add("IfcUnitAssignment", [metre, radian])
        self.place = add("IfcLocalPlacement", None, self.world)
        self.site = self.root("IfcSite", "First pit", None, self.place)
        self.relate("IfcRelAggregates", self.project, [self.site])
        self.elements: list[Entity] = []
        self.on_layer: dict[str, list[Entity]] = {}

    def root(self, kind: str, name: str, *more: Any) -> Entity:
        """A rooted entity whose GlobalId follows from its class and name."""
        guid = ifcopenshell.guid.compress(uuid.uuid5(SPACE, f"{kind}/{name}").hex)
        return self.file.create_entity(kind, guid, None, name, None, *more)

    def relate(self, kind: str, one: Any, many: Any) -> None:
        """A relation whose GlobalId follows from its kind and number."""
        self.root(kind, f"{kind} {len(self.file.by_type(kind))}", one, many)

    def point(self, *at: float) -> Entity:
        """A point."""
        return self.file.create_entity("IfcCartesianPoint", at)

    def frame(self, at: Point, up: Point | None = None, first: Point | None = None) -> Entity:
        """An axis placement."""
        ways = [None if w is None else self.file.create_entity("IfcDirection", w) for w in (up, first)]
        return self.file.create_entity("IfcAxis2Placement3D", self.point(*at), *ways)

    def element(self, kind: str, name: str, layer: str, frame: Entity, solid: Entity, predefined: str) -> Entity:
        """An element with one extruded body, on a drawing layer."""
        add = self.file.create_entity
        swept = "SweptSolid" if solid.is_a("IfcExtrudedAreaSolid") else "AdvancedSweptSolid"
        shape = add("IfcShapeRepresentation", self.body, "Body", swept, [solid])
        whole = add("IfcProductDefinitionShape", None, None, [shape])
        made = self.root(kind, name, None, add("IfcLocalPlacement", self.place, frame), whole, None, predefined)
        self.on_layer.setdefault(layer, []).append(shape)
        self.elements.append(made)
        return made

    def extrusion(self, profile: Entity, depth: float, way: Point = (0.0, 0.0, 1.0)) -> Entity:
        """A body extruded from the origin of its element."""
        direction = self.file.create_entity("IfcDirection", way)
        return self.file.create_entity("IfcExtrudedAreaSolid", profile, self.world, direction, depth)

    def save(self, path: Path) -> None:
        """Write the file, header date fixed."""
        self.relate("IfcRelContainedInSpatialStructure", self.elements, self.site)
        for layer, shapes in self.on_layer.items():
            self.file.create_entity("IfcPresentationLayerAssignment", layer, None, shapes)
        header = self.file.header.file_name
        header.name, header.time_stamp = path.name, "2026-03-02T00:00:00"
        header.preprocessor_version = header.originating_system = "make_first_pit_ifc.py"
        path.parent.mkdir(exist_ok=True)
        self.file.write(str(path))


def pile_centres() -> list[tuple[float, float]]:
    """One pile a metre round the wall axis, one at each corner: 100 piles."""
    east, north = WEST + LENGTH, SOUTH + WIDTH
    along = [WEST + i * CENTRES for i in range(round(LENGTH / CENTRES))]
    up = [SOUTH + i * CENTRES for i in range(round(WIDTH / CENTRES))]
    return (
        [(x, SOUTH) for x in along]
        + [(east, y) for y in up]
        + [(east + WEST - x, north) for x in along]
        + [(WEST, north + SOUTH - y) for y in up]
    )


def add_piles(model: Model) -> None:
    """Contiguous bored piles, each from its head downwards; all share one profile."""
    flat = model.file.create_entity("IfcAxis2Placement2D", model.point(0.0, 0.0))
    circle = model.file.create_entity("IfcCircleProfileDef", "AREA", "750 mm bored pile", flat, DIAMETER / 2)
    solid = model.extrusion(circle, TOP - TOE, (0.0, 0.0, -1.0))
    for number, (x, y) in enumerate(pile_centres(), start=1):
        model.element("IfcPile", f"W{number}", "WALL-PILES-CONTIGUOUS", model.frame((x, y, TOP)), solid, "BORED")


def add_struts(model: Model) -> None:
    """Cross-lot struts, axis to axis: six across the width, four along the length."""
    east, north, z, first = WEST + LENGTH, SOUTH + WIDTH, STRUT_LEVEL, STRUT_SPACING / 2
    across = [WEST + first + i * STRUT_SPACING for i in range(6)]
    along = [SOUTH + first + i * STRUT_SPACING for i in range(4)]
    ends = [((x, SOUTH, z), (x, north, z)) for x in across] + [((WEST, y, z), (east, y, z)) for y in along]
    flat = model.file.create_entity("IfcAxis2Placement2D", model.point(0.0, 0.0))
    tube = model.file.create_entity(
        "IfcCircleHollowProfileDef", "AREA", "CHS 508x16", flat, STRUT_DIAMETER / 2, STRUT_WALL
    )
    for number, (start, end) in enumerate(ends, start=1):
        x, y = end[0] - start[0], end[1] - start[1]
        frame = model.frame(start, (x, y, 0.0), (-y, x, 0.0))
        solid = model.extrusion(tube, x + y)
        model.element("IfcMember", f"STRUTS {number}", "STRUTS", frame, solid, "STRUT")


def add_waler(model: Model) -> None:
    """The waler as one beam swept round the inner face of the wall."""
    inset = DIAMETER / 2 + 0.15
    west, south, east, north = WEST + inset, SOUTH + inset, WEST + LENGTH - inset, SOUTH + WIDTH - inset
    ring = [(west, south), (east, south), (east, north), (west, north), (west, south)]
    add = model.file.create_entity
    flat = add("IfcAxis2Placement2D", model.point(0.0, 0.0))
    box = add("IfcRectangleProfileDef", "AREA", "waler", flat, WALER_WIDTH, WALER_DEPTH)
    line = add("IfcPolyline", [model.point(x, y, STRUT_LEVEL) for x, y in ring])
    up = add("IfcDirection", (0.0, 0.0, 1.0))
    solid = add("IfcFixedReferenceSweptAreaSolid", box, None, line, None, None, up)
    model.element("IfcBeam", "WALER", "WALER", model.world, solid, "BEAM")


def add_footing(model: Model) -> None:
    """The neighbour's pad footing, two metres behind the north wall."""
    flat = model.file.create_entity("IfcAxis2Placement2D", model.point(1.5, 1.0))
    pad = model.file.create_entity("IfcRectangleProfileDef", "AREA", "pad", flat, 3.0, 2.0)
    frame = model.frame((WEST + 13.5, SOUTH + WIDTH + 2.0, FOOTING_UNDERSIDE))
    solid = model.extrusion(pad, FOOTING_TOP - FOOTING_UNDERSIDE)
    model.element("IfcFooting", "FOOTING-NEIGHBOUR", "FOOTING-NEIGHBOUR", frame, solid, "PAD_FOOTING")


def write_model() -> None:
    """Write `first_pit.ifc`; the same bytes at every run."""
    model = Model()
    add_piles(model)
    add_struts(model)
    add_waler(model)
    add_footing(model)
    model.save(FOLDER / "first_pit.ifc")


if __name__ == "__main__":
    write_model()
