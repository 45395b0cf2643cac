"""Items of representations, each described once: bodies with their cuts, mapped copies, curves, topology, texts."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import sqrt
from typing import Any, TypeAlias

import numpy as np

from ingest.ifc.attributes import (
    DEPTH,
    EXTRUDED_DIRECTION,
    ITEMS,
    MAPPED_REPRESENTATION,
    MAPPING_ORIGIN,
    MAPPING_SOURCE,
    MAPPING_TARGET,
    POSITION,
    SWEPT_AREA,
)
from ingest.ifc.curves import CurveReader
from ingest.ifc.facets import MESHES, outer_ring
from ingest.ifc.frames import FrameTable, triple
from ingest.ifc.operators import OperatorTable
from ingest.ifc.profiles import Profile, ProfileReader
from ingest.ifc.shapes import Described, Extrusion, HalfSpace, Line, Shape, make_line, noted
from ingest.ifc.sweeps import read_disk, read_revolved, read_sectioned, read_swept_area

Entity: TypeAlias = Any

DEEPEST = 32
"""Items nested deeper than this are refused: they may go in a circle."""


class ItemReader:
    """Describes representation items, each once."""

    def __init__(self, frames: FrameTable, curves: CurveReader) -> None:
        self.frames = frames
        self.operators = OperatorTable(frames)
        self.curves = curves
        self.profiles = ProfileReader(curves)
        self._known: dict[int, Described] = {}

    def clear(self) -> None:
        """Let go of everything that was described, once it is placed."""
        self._known.clear()
        for reader in (self.frames, self.curves, self.profiles):
            reader.clear()

    def representation(self, representation: Entity, depth: int = 0) -> Described:
        """Shapes of all items of a shape representation.

        Raises:
            ValueError: If an item is of a kind that is not read.
        """
        items: tuple[Entity, ...] = representation.get_argument(ITEMS) or ()
        if len(items) == 1:
            return self.item(items[0], depth)
        return tuple(found for item in items for found in self.item(item, depth))

    def item(self, item: Entity, depth: int = 0) -> Described:
        """Shapes of one item; a mapped item gives those of its source, mapped."""
        kind = item.is_a()
        if kind == "IfcExtrudedAreaSolid":
            return ((self._extrusion(item), 0),)
        key = item.id()
        known = self._known.get(key)
        if known is None:
            if depth > DEEPEST:
                raise ValueError("a body is nested too deep or in itself")
            known = self._known[key] = (
                self._mapped(item, depth) if kind == "IfcMappedItem" else self._other(item, depth)
            )
        return known

    def _mapped(self, item: Entity, depth: int) -> Described:
        source = item.get_argument(MAPPING_SOURCE)
        target = self.operators.row(item.get_argument(MAPPING_TARGET), source.get_argument(MAPPING_ORIGIN))
        key = source.id()
        inner = self._known.get(-key)
        if inner is None:
            inner = self.representation(source.get_argument(MAPPED_REPRESENTATION), depth + 1)
            self._known[-key] = inner
        return tuple((shape, self.operators.chain(target, row)) for shape, row in inner)

    def _extrusion(self, item: Entity) -> Extrusion:
        x, y, z = self.frames.direction(item.get_argument(EXTRUDED_DIRECTION))
        depth = item.get_argument(DEPTH) * 1.0
        if not x and not y:
            vector = (0.0, 0.0, depth if z > 0 else -depth)
        else:
            scale = depth / sqrt(x * x + y * y + z * z)
            vector = (x * scale, y * scale, z * scale)
        return Extrusion(
            self.profiles.read(item.get_argument(SWEPT_AREA)), self.frames.row(item.get_argument(POSITION)), vector
        )

    def _other(self, item: Entity, depth: int) -> Described:
        kind = item.is_a()
        if item.is_a("IfcBooleanResult"):
            return self._boolean(item, depth)
        if item.is_a("IfcCurve"):
            return ((make_line(self.curves.points(item)), 0),)
        mesh = MESHES.get(kind)
        if mesh is not None:
            return ((mesh(item, self.curves), 0),)
        sweep = _SWEEPS.get(kind)
        if sweep is not None:
            return ((sweep(self, item), 0),)
        reader = _READERS.get(kind)
        if reader is None:
            raise ValueError(f"{kind} is not read")
        return reader(self, item, depth)

    def _boolean(self, item: Entity, depth: int) -> Described:
        cutters: list[tuple[str, Entity]] = []
        while item.is_a("IfcBooleanResult"):
            cutters.append((str(item.Operator), item.SecondOperand))
            item = item.FirstOperand
            if len(cutters) > 1000:
                raise ValueError("a body is cut by itself")
        bodies = self.item(item, depth + 1)
        for operator, cutter in reversed(cutters):
            if operator == "UNION":
                bodies = bodies + self.item(cutter, depth + 1)
            elif operator == "DIFFERENCE":
                bodies = self._cut(bodies, cutter, depth)
            else:
                bodies = tuple((noted(b, "intersection with another body left out"), row) for b, row in bodies)
        return bodies

    def _cut(self, bodies: Described, cutter: Entity, depth: int) -> Described:
        cuts: tuple[HalfSpace | Extrusion, ...]
        if cutter.is_a("IfcHalfSpaceSolid"):
            half = self._half_space(cutter)
            cuts = (half,) if half else ()
        else:
            try:
                shapes = self.item(cutter, depth + 1)
            except ValueError:
                shapes = ()
            cuts = tuple(s for s, row in shapes if isinstance(s, Extrusion) and row == 0 and not s.cuts)
            cuts = cuts if len(cuts) == len(shapes) else ()
        if not cuts:
            return tuple((noted(body, "a cut was left out"), row) for body, row in bodies)
        return tuple(
            (replace(b, cuts=b.cuts + cuts) if isinstance(b, Extrusion) else noted(b, "a cut was left out"), row)
            for b, row in bodies
        )

    def _half_space(self, item: Entity) -> HalfSpace | None:
        if not item.BaseSurface.is_a("IfcPlane"):
            return None
        frame, above = self.frames.row(item.BaseSurface.Position), bool(item.AgreementFlag)
        if not item.is_a("IfcPolygonalBoundedHalfSpace"):
            return HalfSpace(frame, above)
        ring = tuple((float(x), float(y)) for x, y in self.curves.points(item.PolygonalBoundary)[:, :2])
        return HalfSpace(frame, above, ring, self.frames.row(item.Position))

    def _tapered(self, item: Entity, _depth: int) -> Described:
        body = self._extrusion(item)
        return ((replace(body, notes=("tapers; section at its start",)), 0),)

    def _csg(self, item: Entity, depth: int) -> Described:
        return self.item(item.TreeRootExpression, depth + 1)

    def _block(self, item: Entity, _depth: int) -> Described:
        x, y, z = item.XLength, item.YLength, item.ZLength
        profile = Profile("rectangle", "", (x / 2, y / 2), size=(float(x), float(y)))
        return ((Extrusion(profile, self.frames.row(item.Position), (0.0, 0.0, float(z))), 0),)

    def _cylinder(self, item: Entity, _depth: int) -> Described:
        profile = Profile("circle", "", size=(float(item.Radius),))
        return ((Extrusion(profile, self.frames.row(item.Position), (0.0, 0.0, float(item.Height))), 0),)

    def _box(self, item: Entity, _depth: int) -> Described:
        x, y, z = item.XDim, item.YDim, item.ZDim
        cx, cy, cz = item.Corner.Coordinates
        profile = Profile("rectangle", "", (cx + x / 2, cy + y / 2), size=(float(x), float(y)))
        row = self.frames.add((0.0, 0.0, cz), (0.0, 0.0, 1.0), (1.0, 0.0, 0.0))
        return ((Extrusion(profile, row, (0.0, 0.0, float(z)), notes=("bounding box only",)), 0),)

    def _set(self, item: Entity, depth: int) -> Described:
        return tuple(found for element in item.Elements for found in self.item(element, depth + 1))

    def _point(self, item: Entity, _depth: int) -> Described:
        return ((Line(np.array([triple(item.Coordinates)], float)), 0),)

    def _vertex(self, item: Entity, depth: int) -> Described:
        return self.item(item.VertexGeometry, depth + 1)

    def _edge(self, item: Entity, _depth: int) -> Described:
        return ((make_line(self.curves.points(item)), 0),)

    def _face(self, item: Entity, _depth: int) -> Described:
        ring = np.array([triple(p) for p in outer_ring(item, self.curves)], float)
        return ((Line(np.vstack([ring, ring[:1]])), 0),)

    def _label(self, item: Entity, _depth: int) -> Described:
        place = item.Placement
        at = triple(place.Location.Coordinates)
        return ((Line(np.array([at], float), text=str(item.Literal or "")), 0),)


_SWEEPS: dict[str, Callable[[ItemReader, Entity], Shape]] = {
    "IfcSweptDiskSolid": read_disk,
    "IfcSweptDiskSolidPolygonal": read_disk,
    "IfcFixedReferenceSweptAreaSolid": read_swept_area,
    "IfcSurfaceCurveSweptAreaSolid": read_swept_area,
    "IfcDirectrixDerivedReferenceSweptAreaSolid": read_swept_area,
    "IfcSectionedSolidHorizontal": read_sectioned,
    "IfcRevolvedAreaSolid": read_revolved,
}
_READERS: dict[str, Callable[[ItemReader, Entity, int], Described]] = {
    "IfcExtrudedAreaSolidTapered": ItemReader._tapered,
    "IfcCsgSolid": ItemReader._csg,
    "IfcBlock": ItemReader._block,
    "IfcRightCircularCylinder": ItemReader._cylinder,
    "IfcBoundingBox": ItemReader._box,
    "IfcGeometricSet": ItemReader._set,
    "IfcGeometricCurveSet": ItemReader._set,
    "IfcCartesianPoint": ItemReader._point,
    "IfcVertexPoint": ItemReader._vertex,
    "IfcEdge": ItemReader._edge,
    "IfcEdgeCurve": ItemReader._edge,
    "IfcOrientedEdge": ItemReader._edge,
    "IfcFace": ItemReader._face,
    "IfcFaceSurface": ItemReader._face,
    "IfcTextLiteral": ItemReader._label,
    "IfcTextLiteralWithExtent": ItemReader._label,
}
