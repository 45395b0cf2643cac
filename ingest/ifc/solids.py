"""What the items of a representation are: extrusions, sweeps, meshes and curves, in the file's own numbers."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import hypot, pi, sqrt
from typing import Any

import numpy as np
from numpy.typing import NDArray

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
from ingest.ifc.facets import MESHES, Facets
from ingest.ifc.frames import NO_FRAME, FrameTable, Triple
from ingest.ifc.operators import OperatorTable
from ingest.ifc.profiles import Profile, ProfileReader, Ring

Entity = Any
Floats = NDArray[np.float64]

DEEPEST = 32
"""Items nested deeper than this are refused: they may go in a circle."""


@dataclass(slots=True)
class HalfSpace:
    """A plane that cuts a body: what lies on the side of its normal stays when `keep_above`.

    `boundary` limits the cut to a prism over this ring in the coordinates of `boundary_frame`.
    """

    frame: int
    keep_above: bool
    boundary: Ring | None = None
    boundary_frame: int = NO_FRAME


@dataclass(slots=True)
class Extrusion:
    """A profile moved along a vector, both in the coordinates of `frame`; cuts as in the coordinates of the item."""

    profile: Profile
    frame: int
    vector: Triple
    cuts: tuple[HalfSpace | Extrusion, ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(slots=True)
class Sweep:
    """A profile or a disc moved along a curve (n, 3)."""

    points: Floats
    profile: Profile
    notes: tuple[str, ...] = ()


@dataclass(slots=True)
class Line:
    """A bare curve (n, 3) or a single point (1, 3); `way` runs from the first to the second of two points."""

    points: Floats
    way: Triple = (0.0, 0.0, 0.0)


Shape = Extrusion | Sweep | Facets | Line
Described = tuple[tuple[Shape, int], ...]
"""Shapes, each with the row of its mapping in the operator table."""


class ItemReader:
    """Describes representation items, each once."""

    def __init__(self, frames: FrameTable, curves: CurveReader) -> None:
        self.frames = frames
        self.operators = OperatorTable(frames)
        self._curves = curves
        self.profiles = ProfileReader(curves)
        self._known: dict[int, Described] = {}

    def representation(self, representation: Entity, depth: int = 0) -> Described:
        """Shapes of all items of a shape representation.

        Raises:
            ValueError: If an item is of a kind that is not read.
        """
        items = representation.get_argument(ITEMS)
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
        depth = item.get_argument(DEPTH)
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
            return ((make_line(self._curves.points(item)), 0),)
        mesh = MESHES.get(kind)
        if mesh is not None:
            return ((mesh(item, self._curves), 0),)
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
                bodies = tuple((_noted(b, "intersection with another body left out"), row) for b, row in bodies)
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
            return tuple((_noted(body, "a cut was left out"), row) for body, row in bodies)
        return tuple(
            (replace(b, cuts=b.cuts + cuts) if isinstance(b, Extrusion) else _noted(b, "a cut was left out"), row)
            for b, row in bodies
        )

    def _half_space(self, item: Entity) -> HalfSpace | None:
        if not item.BaseSurface.is_a("IfcPlane"):
            return None
        frame, above = self.frames.row(item.BaseSurface.Position), bool(item.AgreementFlag)
        if not item.is_a("IfcPolygonalBoundedHalfSpace"):
            return HalfSpace(frame, above)
        ring = tuple((float(x), float(y)) for x, y in self._curves.points(item.PolygonalBoundary)[:, :2])
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

    def _disk(self, item: Entity, _depth: int) -> Described:
        radius, inner = float(item.Radius), float(item.InnerRadius or 0.0)
        kind, size = ("hollow circle", (radius, radius - inner)) if inner else ("circle", (radius,))
        return ((Sweep(self._directrix(item), Profile(kind, "", size=size)), 0),)

    def _along(self, item: Entity, _depth: int) -> Described:
        profile = self.profiles.read(item.SweptArea)
        points = self._directrix(item)
        at = self.frames.matrix(self.frames.row(item.Position))
        return ((Sweep(points @ at[:3, :3].T + at[:3, 3], profile), 0),)

    def _directrix(self, item: Entity) -> Floats:
        points = self._curves.points(item.Directrix)
        trims = [getattr(item, name, None) for name in ("StartParam", "EndParam")]
        whole = all(t is None or not hasattr(t, "is_a") for t in trims)
        if not whole or not item.Directrix.is_a("IfcPolyline"):
            return points
        start, end = (
            float(t) if t is not None else spare for t, spare in zip(trims, (0.0, len(points) - 1), strict=True)
        )
        if (start, end) == (0.0, len(points) - 1) or not 0 <= start < end <= len(points) - 1:
            return points
        at = np.arange(len(points))
        ends = [[np.interp(t, at, points[:, k]) for k in range(3)] for t in (start, end)]
        return np.vstack([ends[0], points[(at > start) & (at < end)], ends[1]])

    def _sectioned(self, item: Entity, _depth: int) -> Described:
        profile = self.profiles.read(item.CrossSections[0])
        return ((Sweep(self._curves.points(item.Directrix), profile, ("several cross-sections; the first",)), 0),)

    def _revolved(self, item: Entity, _depth: int) -> Described:
        profile = self.profiles.read(item.SweptArea)
        at = self.frames.matrix(self.frames.row(item.Position))
        axis = self.frames.matrix(self.frames.row(item.Axis))
        mesh = revolve(profile, axis[:3, 3], axis[:3, 2], float(item.Angle) * self._curves.angle)
        return ((Facets(mesh.points @ at[:3, :3].T + at[:3, 3], mesh.faces), 0),)

    def _set(self, item: Entity, depth: int) -> Described:
        return tuple(found for element in item.Elements for found in self.item(element, depth + 1))

    def _point(self, item: Entity, _depth: int) -> Described:
        x, y, *z = item.Coordinates
        return ((Line(np.array([[x, y, z[0] if z else 0.0]], float)), 0),)


def make_line(points: Floats) -> Line:
    """A bare curve from its points."""
    if len(points) != 2:
        return Line(points)
    x, y, z = (points[1] - points[0]).tolist()
    return Line(points, (x, y, z))


def _noted(body: Shape, note: str) -> Shape:
    if isinstance(body, Line):
        return body
    return body if note in body.notes else replace(body, notes=(*body.notes, note))


def revolve(profile: Profile, origin: Floats, axis: Floats, turn: float) -> Facets:
    """Mesh of a profile (in the plane z = 0) turned about an axis, one ring of points per 7.5 degrees."""
    ring = np.array(profile.outlines[0])
    flat = np.column_stack([ring, np.zeros(len(ring))]) - origin
    full = abs(abs(turn) - 2 * pi) < 1e-6
    steps = max(int(np.ceil(abs(turn) / (pi / 24))), 1)
    angles = turn * np.arange(steps if full else steps + 1) / steps
    along = (flat @ axis)[:, None] * axis
    across = flat - along
    side = np.cross(axis, across)
    points = np.concatenate([origin + along + np.cos(t) * across + np.sin(t) * side for t in angles])
    n, rows = len(ring), len(angles)
    faces = [
        (i * n + j, i * n + (j + 1) % n, (i + 1) % rows * n + (j + 1) % n, (i + 1) % rows * n + j)
        for i in range(rows if full else rows - 1)
        for j in range(n)
    ]
    if not full:
        faces += [tuple(range(n)), tuple(range((rows - 1) * n, rows * n))]  # type: ignore[list-item]
    return Facets(points, tuple(faces))


def length_of(vector: Triple) -> float:
    """Length of an extrusion vector."""
    return hypot(*vector)


_READERS = {
    "IfcExtrudedAreaSolidTapered": ItemReader._tapered,
    "IfcCsgSolid": ItemReader._csg,
    "IfcBlock": ItemReader._block,
    "IfcRightCircularCylinder": ItemReader._cylinder,
    "IfcBoundingBox": ItemReader._box,
    "IfcSweptDiskSolid": ItemReader._disk,
    "IfcSweptDiskSolidPolygonal": ItemReader._disk,
    "IfcFixedReferenceSweptAreaSolid": ItemReader._along,
    "IfcSurfaceCurveSweptAreaSolid": ItemReader._along,
    "IfcDirectrixDerivedReferenceSweptAreaSolid": ItemReader._along,
    "IfcSectionedSolidHorizontal": ItemReader._sectioned,
    "IfcRevolvedAreaSolid": ItemReader._revolved,
    "IfcGeometricSet": ItemReader._set,
    "IfcGeometricCurveSet": ItemReader._set,
    "IfcCartesianPoint": ItemReader._point,
}
