"""`implied.ifc`: the bodies each section implies, laid into the model received, with what is really there.

Each body is a proxy and no wall or member, so that no schedule of the joint model counts it; its property sets name the
real elements it stands for and carry the values per metre or per radian.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import fields
from math import cos, hypot, pi, radians, sin
from pathlib import Path
from typing import Any

from export import VERSION
from export.canonical import round_number
from export.implied_solids import Body, bay_of, load_body, member_body
from export.model_frame import PLACES, ModelFrame
from export.report.markup import clean
from export.stamp import Stamp
from ingest.members import Point3
from ingest.model import NOTICE, Site
from ingest.trail import Source
from ingest.words import OWN_AGENT
from sections.definition import SectionDefinition, SectionLoad
from sections.member import SectionMember
from sections.proposal import Proposal

Entity = Any
LAYER = f"{OWN_AGENT}IMPLIEE-"
SETS = "Cutworthy"


def write_implied_ifc(proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site, folder: Path) -> str:
    """Write `implied.ifc` (IFC4X3 ADD2).

    Args:
        proposal: The proposal, world coordinates.
        definitions: Its sections.
        site: The site as received.
        folder: Where to write.

    Returns:
        Name of the file. Lengths in metres; coordinates are those of the IFC model received, with its map conversion;
        without such a model, world coordinates, by a map conversion where the grid is named.
    """
    model = _Model(ModelFrame.of(site, proposal.frame), Stamp.of(site), site.name)
    for one in definitions:
        model.add_section(one)
    path = folder / "implied.ifc"
    model.save(path)
    return path.name


class _Model:
    """The file while it is written."""

    def __init__(self, frame: ModelFrame, stamp: Stamp, name: str) -> None:
        import ifcopenshell
        import ifcopenshell.guid

        self.compress = ifcopenshell.guid.compress
        self.frame, self.stamp = frame, stamp
        self.file = ifcopenshell.file(schema="IFC4X3")
        self.add = self.file.create_entity
        self.bodies: list[Entity] = []
        self.shapes: list[Entity] = []
        origin = self._axes((0.0, 0.0, 0.0))
        context = self.add("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, origin)
        self.body = self.add(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier="Body",
            ContextType="Model",
            ParentContext=context,
            TargetView="MODEL_VIEW",
        )
        units = [self.add("IfcSIUnit", UnitType=kind, Name=unit) for kind, unit in _UNITS]
        project = self._root("IfcProject", clean(name) or "Excavation", NOTICE)
        project.RepresentationContexts = [context]
        project.UnitsInContext = self.add("IfcUnitAssignment", units)
        self.place = self.add("IfcLocalPlacement", None, self._axes(frame.base))
        self.site = self._root("IfcSite", clean(name) or "Excavation", None)
        self.site.ObjectPlacement = self.place
        self._relate("IfcRelAggregates", "site", project, [self.site])
        if frame.mapped:
            self._map(context, units[0])

    def _map(self, context: Entity, metre: Entity) -> None:
        """The conversion that takes this model to the map, the same as that of the source."""
        place = self.frame.place
        turn = radians(place.rotation_deg)
        east, north, height = (round(value, PLACES) + 0.0 for value in place.origin)
        grid = self.add("IfcProjectedCRS", Name=clean(self.frame.crs or "not given"), MapUnit=metre)
        way = (round(cos(turn), 12) + 0.0, round(sin(turn), 12) + 0.0)
        self.add("IfcMapConversion", context, grid, east, north, height, *way, round_number(place.scale, 12))

    def add_section(self, definition: SectionDefinition) -> None:
        """The bodies of one section, in one group."""
        local = self.add("IfcLocalPlacement", self.place, self._section_axes(definition))
        made = []
        rows: list[tuple[SectionMember | SectionLoad, Body | None]] = []
        rows += [(one, member_body(one, definition)) for one in definition.members]
        rows += [(load, load_body(load)) for load in definition.loads]
        for one, body in rows:
            if body is not None:
                element = self._element(definition, body, local)
                self._describe(element, definition, one, body)
                made.append(element)
        self.bodies += made
        group = self._root("IfcGroup", f"Section {definition.id}", f"Bodies implied by section {definition.id}")
        if made:
            self._relate("IfcRelAssignsToGroup", definition.id, made, None, group)
        self._set(group, f"{SETS}_Section", _section_values(definition))

    def _section_axes(self, definition: SectionDefinition) -> Entity:
        """Axes of the section plane: x along the cut, y upwards; z is level, and the bay lies half on either side."""
        (ax, ay), (bx, by) = definition.line
        length = hypot(bx - ax, by - ay) or 1.0
        ux, uy = (bx - ax) / length, (by - ay) / length
        start: Point3 = (*(definition.axis.point if definition.axis else (ax, ay)), 0.0)
        if definition.axis is None:
            half = bay_of(definition) / 2
            start = (ax - half * uy, ay + half * ux, 0.0)
        at = tuple(a - b for a, b in zip(self.frame.to_model(start), self.frame.base, strict=True))
        return self._axes(at, self.frame.turn((uy, -ux, 0.0)), self.frame.turn((ux, uy, 0.0)))

    def _element(self, definition: SectionDefinition, body: Body, local: Entity) -> Entity:
        k = self.frame.place.scale
        corners = [self._point((x / k, z / k)) for x, z in body.ring]
        outline = self.add("IfcPolyline", [*corners, corners[0]])
        profile = self.add("IfcArbitraryClosedProfileDef", "AREA", None, outline)
        axes = self._axes((0.0, 0.0, 0.0))
        if definition.axis is None:
            ahead = self.add("IfcDirection", (0.0, 0.0, 1.0))
            depth = round(bay_of(definition) / k, PLACES)
            solid = self.add("IfcExtrudedAreaSolid", profile, axes, ahead, depth)
        else:
            upright = self.add("IfcDirection", (0.0, 1.0, 0.0))
            axis = self.add("IfcAxis1Placement", self._point((0.0, 0.0, 0.0)), upright)
            solid = self.add("IfcRevolvedAreaSolid", profile, axes, axis, 2 * pi)
        shape = self.add("IfcShapeRepresentation", self.body, "Body", "SweptSolid", [solid])
        self.shapes.append(shape)
        element = self._root("IfcBuildingElementProxy", f"{definition.id} {body.id}", f"Implied body: {body.basis}")
        element.ObjectType = "Implied body"
        element.ObjectPlacement = local
        element.Representation = self.add("IfcProductDefinitionShape", None, None, [shape])
        element.Tag = body.id
        element.PredefinedType = "USERDEFINED"
        return element

    def _describe(
        self, element: Entity, definition: SectionDefinition, one: SectionMember | SectionLoad, body: Body
    ) -> None:
        per = "PerMetre" if definition.kind == "plane_strain" else "PerRadian"
        self._set(element, f"{SETS}_{per}", _numbers(one.section))
        self._set(element, f"{SETS}_Real", {**_numbers(one.real), "Elements": _named(one.sources)})
        rows = {
            f"{row.quantity}": f"real {row.real:.6g}, implied {row.implied:.6g}, ratio {row.ratio:.4g}: {row.grade}"
            for row in definition.implied
            if row.about == one.id and row.real is not None and row.implied is not None and row.ratio is not None
        }
        words = {"Section": definition.id, "Member": one.id, "Thickness": body.basis, "Notice": NOTICE}
        self._set(element, f"{SETS}_Implied", {**words, **rows})

    def _set(self, element: Entity, name: str, values: dict[str, Any]) -> None:
        found = [self._property(key, value) for key, value in values.items() if value not in (None, ())]
        if found:
            key = f"{name} {element.GlobalId}"
            made = self.add("IfcPropertySet", self._guid("IfcPropertySet", key), None, name, None, found)
            self._relate("IfcRelDefinesByProperties", key, [element], made)

    def _property(self, name: str, value: Any) -> Entity:
        if isinstance(value, tuple):
            return self.add("IfcPropertyListValue", name, None, [self._measure(item) for item in value], None)
        return self.add("IfcPropertySingleValue", name, None, self._measure(value), None)

    def _measure(self, value: Any) -> Entity:
        if isinstance(value, bool):
            return self.add("IfcBoolean", value)
        if isinstance(value, int | float):
            return self.add("IfcReal", round_number(float(value)))
        return self.add("IfcText", clean(str(value)))

    def _root(self, kind: str, name: str, about: str | None) -> Entity:
        return self.add(kind, GlobalId=self._guid(kind, name), Name=name, Description=about)

    def _guid(self, kind: str, name: str) -> str:
        return str(self.compress(self.stamp.guid(kind, name).hex))

    def _relate(self, kind: str, name: str, *rest: Any) -> None:
        self.add(kind, self._guid(kind, name), None, None, None, *rest)

    def _axes(self, at: Sequence[float], up: Point3 | None = None, first: Point3 | None = None) -> Entity:
        ways = [None if way is None else self.add("IfcDirection", _clear(way)) for way in (up, first)]
        return self.add("IfcAxis2Placement3D", self._point(at), *ways)

    def _point(self, at: Sequence[float]) -> Entity:
        return self.add("IfcCartesianPoint", tuple(round(float(value), PLACES) + 0.0 for value in at))

    def save(self, path: Path) -> None:
        """Close the relations and write, with the stamp's date in the header."""
        if self.bodies:
            self._relate("IfcRelContainedInSpatialStructure", "bodies", self.bodies, self.site)
            self.add("IfcPresentationLayerAssignment", LAYER, None, self.shapes)
        header = self.file.header.file_name
        header.name, header.time_stamp = path.name, f"{self.stamp.day.isoformat()}T00:00:00"
        header.preprocessor_version = header.originating_system = f"cutworthy {VERSION}"
        self.file.write(str(path))


_UNITS = (
    ("LENGTHUNIT", "METRE"),
    ("AREAUNIT", "SQUARE_METRE"),
    ("VOLUMEUNIT", "CUBIC_METRE"),
    ("PLANEANGLEUNIT", "RADIAN"),
)


def _clear(way: Point3) -> tuple[float, ...]:
    return tuple(round(value, 12) + 0.0 for value in way)


def _numbers(record: Any) -> dict[str, Any]:
    """The plain values of a record that are given, by name; the names carry the units."""
    found = {field.name: getattr(record, field.name) for field in fields(record)}
    return {name: value for name, value in found.items() if isinstance(value, bool | int | float | str)}


def _named(sources: Sequence[Source]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(f"{one.file}: {one.item}" for one in sources))


def _section_values(definition: SectionDefinition) -> dict[str, Any]:
    return {
        "Kind": definition.kind,
        "Bay_m": None if definition.axis else bay_of(definition),
        "Score": definition.score,
        **{f"Verdict_{output}": verdict.verdict for output, verdict in sorted(definition.verdicts.items())},
        "Notice": NOTICE,
    }
