"""From model coordinates to world easting, northing and level."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import atan2, degrees, hypot
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.frames import FrameTable
from ingest.ifc.relations import of_type
from ingest.ifc.units import ProjectUnits, unit_factor, unit_name
from ingest.ifc.unreadable import UNREADABLE
from ingest.model import ModelPlace

Entity = Any
Floats = NDArray[np.float64]

ALIKE = 0.01
"""A combined scale factor of a map grid differs from 1 by far less than this (common practice, no source)."""


@dataclass(slots=True)
class Georeference:
    """How file units become world metres.

    Attributes:
        matrix: (4, 4), from project length units to world metres.
        crs: Name of the map grid, or None.
        given: True when the file holds a map conversion that was applied.
        assumed: (code, text, basis) of what had to be taken as so.
        checks: (code, text) of what wants a look.
    """

    matrix: Floats
    crs: str | None = None
    given: bool = False
    assumed: list[tuple[str, str, str]] = field(default_factory=list)
    checks: list[tuple[str, str]] = field(default_factory=list)

    def place(self, length: float) -> ModelPlace | None:
        """The same as shift, turn and scale of model metres, `length` m per project unit; None where it is more."""
        axes = self.matrix[:3, :3] / length
        scale = float(np.linalg.norm(axes[:, 0]))
        c, s = (axes[0, 0] / scale, axes[1, 0] / scale) if scale else (1.0, 0.0)
        plain = scale * np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]])
        if not scale or not np.allclose(axes, plain, rtol=0, atol=1e-9):
            return None
        x, y, z = (float(value) for value in self.matrix[:3, 3])
        return ModelPlace(origin=(x, y, z), rotation_deg=degrees(atan2(s, c)), scale=scale, given=self.given)


def read_georeference(model: Any, units: ProjectUnits) -> Georeference:
    """Read IfcMapConversion or IfcRigidOperation, or in IFC2X3 the property set that stands for it."""
    plain = Georeference(np.diag([units.length] * 3 + [1.0]))
    operations = of_type(model, "IfcCoordinateOperation")
    try:
        if operations:
            _apply(model, operations[0], units, plain)
            if len(operations) > 1:
                plain.checks.append(
                    ("several-map-conversions", f"{len(operations)} are in the file, the first was used")
                )
        elif str(model.schema_identifier).startswith("IFC2X3"):
            _apply_property_set(model, units, plain)
        _note_true_north(model, plain)
    except UNREADABLE as error:
        plain.checks.append(("map-conversion-unread", f"it cannot be read ({error}); model coordinates were kept"))
    return plain


def map_matrix(
    origin: tuple[float, float, float], way: tuple[float, float], length: float, map_unit: float, k: float
) -> Floats:
    """Matrix (4, 4) from project units to world metres.

    E = eastings + scale (c x - s y), N = northings + scale (s x + c y), H = height + scale z, with scale = k times
    project unit over map unit, and (c, s) along `way` (IFC4, IfcMapConversion).

    Args:
        origin: Eastings, northings, height in map units.
        way: XAxisAbscissa and XAxisOrdinate, not normalised.
        length: Metres per project unit.
        map_unit: Metres per map unit.
        k: Scale factor of the grid, close to 1.
    """
    size = hypot(*way)
    c, s = (way[0] / size, way[1] / size) if size else (1.0, 0.0)
    matrix = np.eye(4)
    matrix[:3, :3] = np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]]) * (k * length)
    matrix[:3, 3] = np.array(origin) * map_unit
    return matrix


def _apply(model: Any, operation: Entity, units: ProjectUnits, into: Georeference) -> None:
    crs = operation.TargetCRS
    into.crs = str(crs.Name) if crs is not None and crs.Name else None
    unit = getattr(crs, "MapUnit", None)
    map_unit = units.length if unit is None else unit_factor(unit)
    label = units.name if unit is None else unit_name(unit)
    if operation.is_a("IfcRigidOperation"):
        _apply_rigid(operation, units, map_unit, into)
        return
    if not operation.is_a("IfcMapConversion"):
        into.checks.append(("map-conversion-unread", f"{operation.is_a()} is not read; model coordinates were kept"))
        return
    numbers = [operation.Eastings, operation.Northings, operation.OrthogonalHeight]
    if numbers[0] is None or numbers[1] is None:
        into.checks.append(("map-conversion-unread", "it has no eastings or northings; model coordinates were kept"))
        return
    way = (operation.XAxisAbscissa, operation.XAxisOrdinate)
    k = _grid_factor(operation.Scale, units, map_unit, label, into)
    factors = [float(getattr(operation, name, None) or 1.0) for name in ("FactorX", "FactorY", "FactorZ")]
    e, n, h = (float(number or 0.0) for number in numbers)
    matrix = map_matrix((e, n, h), _way(way), units.length, map_unit, k)
    matrix[:3, :3] = matrix[:3, :3] @ np.diag(factors)
    _set(model, matrix, into)


def _way(way: tuple[float | None, float | None]) -> tuple[float, float]:
    return (1.0, 0.0) if way[0] is None or way[1] is None else (float(way[0]), float(way[1]))


def _grid_factor(scale: float | None, units: ProjectUnits, map_unit: float, label: str, into: Georeference) -> float:
    """Scale factor beyond the change of units; a scale that would blow up the model is not taken."""
    ratio = units.length / map_unit
    if scale is None:
        if abs(ratio - 1) > 1e-9:
            into.assumed.append(
                (
                    "map-scale-missing",
                    f"the map conversion has no scale though the project is in {units.name} and the map in {label}; "
                    f"the ratio of the units, {ratio:.9g}, was used",
                    "lengths of the model stay true",
                )
            )
        return 1.0
    k = float(scale) / ratio
    if abs(k - 1) <= ALIKE:
        if k != 1.0 and abs(k - 1) > 1e-9:
            into.checks.append(("map-scale-factor", f"map lengths are {k:.7g} times true lengths"))
        return k
    into.assumed.append(
        (
            "map-scale-wrong",
            f"the map conversion has scale {scale:.9g}, which would make the model {k:.6g} times its size "
            f"(project in {units.name}, map in {label}); true lengths were kept",
            "lengths of the model stay true",
        )
    )
    return 1.0


def _apply_rigid(operation: Entity, units: ProjectUnits, map_unit: float, into: Georeference) -> None:
    first, second = operation.FirstCoordinate, operation.SecondCoordinate
    if any("Angle" in value.is_a() for value in (first, second)):
        into.checks.append(("map-conversion-unread", "it is given in degrees; model coordinates were kept"))
        return
    numbers = (float(first.wrappedValue), float(second.wrappedValue), float(operation.Height or 0.0))
    into.matrix = map_matrix(numbers, (1.0, 0.0), units.length, map_unit, 1.0)
    into.given = True


def _apply_property_set(model: Any, units: ProjectUnits, into: Georeference) -> None:
    """IFC2X3 has no map conversion; two property sets of the site or project stand for it (common practice)."""
    found: dict[str, Any] = {}
    for one in of_type(model, "IfcPropertySet"):
        if str(one.Name).lower() in ("epset_mapconversion", "epset_projectedcrs"):
            for single in one.HasProperties:
                value = getattr(single, "NominalValue", None)
                if value is not None:
                    found[str(single.Name)] = value.wrappedValue
    if "Eastings" not in found or "Northings" not in found:
        return
    unit = str(found.get("MapUnit", "METRE")).upper()
    map_unit = {"MILLIMETRE": 1e-3, "CENTIMETRE": 1e-2, "FOOT": 0.3048}.get(unit, 1.0)
    scale = found.get("Scale")
    k = _grid_factor(None if scale is None else float(scale), units, map_unit, unit.lower(), into)
    way = _way((found.get("XAxisAbscissa"), found.get("XAxisOrdinate")))
    e, n, h = (float(found.get(name) or 0.0) for name in ("Eastings", "Northings", "OrthogonalHeight"))
    into.crs = str(found["Name"]) if found.get("Name") else None
    _set(model, map_matrix((e, n, h), way, units.length, map_unit, k), into)


def _set(model: Any, matrix: Floats, into: Georeference) -> None:
    """Apply the conversion from the origin of the model's own world system, which may be shifted."""
    for context in of_type(model, "IfcGeometricRepresentationContext"):
        if context.is_a("IfcGeometricRepresentationSubContext") or context.ContextType not in ("Model", None):
            continue
        frames = FrameTable()
        row = frames.row(context.WorldCoordinateSystem)
        if not frames.is_plain(row):
            matrix = matrix @ np.linalg.inv(frames.matrix(row))
            into.checks.append(("shifted-world-system", "the model's world system is shifted; the shift was undone"))
        break
    into.matrix, into.given = matrix, True


def _note_true_north(model: Any, into: Georeference) -> None:
    for context in of_type(model, "IfcGeometricRepresentationContext"):
        if context.is_a("IfcGeometricRepresentationSubContext") or context.TrueNorth is None:
            continue
        x, y = (float(v) for v in context.TrueNorth.DirectionRatios[:2])
        turn = degrees(atan2(x, y))
        if abs(turn) > 1e-6 and not into.given:
            into.checks.append(
                (
                    "true-north",
                    f"true north lies {turn:.4f} degrees clockwise of the model's y axis; nothing was turned",
                )
            )
        return
