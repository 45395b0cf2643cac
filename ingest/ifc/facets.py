"""Bodies given by their faces: points and faces gathered, nothing fitted yet."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.curves import CurveReader

Entity = Any
Floats = NDArray[np.float64]
Face = tuple[int, ...]


@dataclass(slots=True)
class Facets:
    """Points (n, 3) and faces as rings of point numbers; holes in faces are left out."""

    points: Floats
    faces: tuple[Face, ...]
    notes: tuple[str, ...] = ()


def _triangulated(item: Entity, _curves: CurveReader) -> Facets:
    points = np.array(item.Coordinates.get_argument(0), float)
    return Facets(points, _numbered(item.CoordIndex, getattr(item, "PnIndex", None), len(points)))


def _polygonal(item: Entity, _curves: CurveReader) -> Facets:
    points = np.array(item.Coordinates.get_argument(0), float)
    rings = (face.CoordIndex for face in item.Faces)
    return Facets(points, _numbered(rings, getattr(item, "PnIndex", None), len(points)))


def _numbered(rings: Iterable[Sequence[int]], renumber: tuple[int, ...] | None, count: int) -> tuple[Face, ...]:
    if renumber and isinstance(renumber[0], int):  # drafts of IFC4 had numbers of normals in this place
        rings = ([renumber[i - 1] for i in ring] for ring in rings)
    faces = tuple(tuple(i - 1 for i in ring) for ring in rings)
    if any(not 0 <= i < count for face in faces for i in face):
        raise ValueError("a face names a point that is not there")
    return faces


def _brep(item: Entity, curves: CurveReader) -> Facets:
    return _gather(item.Outer.CfsFaces, curves)


def _surface_model(item: Entity, curves: CurveReader) -> Facets:
    shells = item.FbsmFaces if item.is_a("IfcFaceBasedSurfaceModel") else item.SbsmBoundary
    return _gather((face for shell in shells for face in shell.CfsFaces), curves)


def _gather(faces: Iterable[Entity], curves: CurveReader) -> Facets:
    points: list[Any] = []
    rows: dict[Any, int] = {}
    rings: list[Face] = []
    for face in faces:
        ring = [_row(p, rows, points) for p in outer_ring(face, curves)]
        ring = [r for i, r in enumerate(ring) if r != ring[i - 1]]
        if len(ring) >= 3:
            rings.append(tuple(ring))
    if not rings:
        raise ValueError("a body without faces")
    return Facets(np.array(points, float), tuple(rings))


def _row(point: tuple[float, ...], rows: dict[Any, int], points: list[Any]) -> int:
    row = rows.get(point)
    if row is None:
        row = rows[point] = len(points)
        points.append(point)
    return row


def outer_ring(face: Entity, curves: CurveReader) -> list[tuple[float, ...]]:
    """Corners of the outer boundary of a face; the first bound where none is said to be the outer one."""
    bounds = face.Bounds
    loop = next((bound for bound in bounds if bound.is_a() == "IfcFaceOuterBound"), bounds[0]).Bound
    if loop.is_a() == "IfcPolyLoop":
        return [p.get_argument(0) for p in loop.get_argument(0)]
    if loop.is_a() == "IfcEdgeLoop":
        return [tuple(p) for edge in loop.EdgeList for p in curves.points(edge)[:-1].tolist()]
    return []


MESHES: dict[str, Callable[[Entity, CurveReader], Facets]] = {
    "IfcTriangulatedFaceSet": _triangulated,
    "IfcTriangulatedIrregularNetwork": _triangulated,
    "IfcPolygonalFaceSet": _polygonal,
    "IfcFacetedBrep": _brep,
    "IfcFacetedBrepWithVoids": _brep,
    "IfcAdvancedBrep": _brep,
    "IfcAdvancedBrepWithVoids": _brep,
    "IfcFaceBasedSurfaceModel": _surface_model,
    "IfcShellBasedSurfaceModel": _surface_model,
}
