"""What a drawing shows that a length is known of: extent, circles, door swings, letters, dimensions."""

from __future__ import annotations

import math
import re
from collections import Counter
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ingest.dxf.blocks import DEEPEST, copies, insert_matrices, plus, times, turn_point
from ingest.dxf.placing import IDENTITY, Matrix
from ingest.members import Point3
from ingest.units import FOOT, INCH, METRES

MOST_LOOKED_AT = 5_000
"""Entities looked at, evenly over the drawing; more would not change a median."""
_FEET = re.compile(r"""(?:(\d+(?:\.\d+)?)\s*'\s*-?\s*)?(?:(\d+)\s+)?(\d+(?:\.\d+)?)?(?:/(\d+))?\s*(?:"|'')?""")
_SUFFIX = re.compile(r"""^(?:<>)?\s*(mm|cm|m|"|'|in|ft)\s*$""")
_SUFFIXES = {"mm": "mm", "cm": "cm", "m": "m", '"': "inch", "in": "inch", "'": "foot", "ft": "foot"}
_UNIT = re.compile(r"^\s*([0-9]+(?:\.[0-9]+)?)\s*(mm|cm|m|ft|in)\b")


@dataclass(slots=True)
class Measures:
    """Lengths of known things in drawing units, with how often each was met."""

    points: list[tuple[float, float]] = field(default_factory=list)
    circles: Counter[float] = field(default_factory=Counter)
    """Diameters."""
    doors: Counter[float] = field(default_factory=Counter)
    """Radii of quarter circles."""
    letters: Counter[float] = field(default_factory=Counter)
    """Heights of texts."""
    dimensions: list[tuple[float, str]] = field(default_factory=list)
    """Measured length and the text written instead of it."""
    shown_in: Counter[str] = field(default_factory=Counter)
    """Unit of the drawing by the way dimensions are shown."""
    styles: dict[str, str] = field(default_factory=dict)
    """Dimension style -> unit of the drawing it implies, "" for none."""

    def extent(self) -> float | None:
        """Larger side of the drawing without its outermost twentieths; None below two points."""
        if len(self.points) < 2:
            return None
        xy = np.array(self.points)
        xy = xy[np.isfinite(xy).all(axis=1)]
        low, high = (0.0, 1.0) if len(xy) < 40 else (0.05, 0.95)
        span = np.quantile(xy, high, axis=0) - np.quantile(xy, low, axis=0) if len(xy) else np.zeros(2)
        return float(span.max()) or None


def take_measures(document: Any, entities: list[Any]) -> Measures:
    """Measure a drawing.

    Args:
        document: As loaded.
        entities: Those of its modelspace.

    Returns:
        Lengths in drawing units, those inside inserted blocks at the scale they are inserted with.
    """
    measures = Measures()
    sample = entities[:: max(1, len(entities) // MOST_LOOKED_AT)]
    _look(document, sample, IDENTITY, (0.0, 0.0, 0.0), measures, [4 * MOST_LOOKED_AT], ())
    return measures


def _look(
    document: Any,
    entities: Any,
    matrix: Matrix,
    shift: Point3,
    found: Measures,
    budget: list[int],
    path: tuple[str, ...],
) -> None:
    (a, b, _), (c, d, _), _ = matrix
    scale = math.sqrt(abs(a * d - b * c))
    for entity in entities:
        if budget[0] <= 0:
            return
        budget[0] -= 1
        known = vars(entity.dxf)
        kind = entity.dxftype()
        if kind == "INSERT":
            _look_inside(document, entity, matrix, shift, found, budget, path)
            continue
        for place in _places(kind, entity, known):
            _point(found, place, matrix, shift)
        _sizes(kind, entity, known, scale, found)


def _places(kind: str, entity: Any, known: dict[str, Any]) -> list[Point3]:
    """Points that show how far the drawing reaches; survey points may lie far off."""
    if kind == "LWPOLYLINE":
        plan = np.asarray(entity.lwpoints.values).reshape(-1, 5)[:, :2]
        return [(x, y, 0.0) for x, y in plan.tolist()]
    if kind == "POLYLINE":
        found = [vars(vertex.dxf).get("location") for vertex in entity.vertices]
    else:
        found = [known.get(name) for name in ("start", "end", "center", "insert")]
    return [(at.x, at.y, at.z) for at in found if at is not None]


def _point(found: Measures, at: Point3, matrix: Matrix, shift: Point3) -> None:
    x, y, _ = plus(turn_point(at, matrix), shift)
    if abs(x) < 1e15 and abs(y) < 1e15:
        found.points.append((x, y))


def _look_inside(
    document: Any, entity: Any, matrix: Matrix, shift: Point3, found: Measures, budget: list[int], path: tuple[str, ...]
) -> None:
    known = vars(entity.dxf)
    name = str(known.get("name", ""))
    block = document.blocks.get(name)
    columns, rows = copies(known)
    if block is None or name in path or len(path) > DEEPEST or columns * rows > 1000:
        return
    inner, shifts = insert_matrices(known, block.block.dxf.base_point)
    for own in shifts:
        _look(document, block, times(inner, matrix), plus(turn_point(own, matrix), shift), found, budget, (*path, name))


def _sizes(kind: str, entity: Any, known: dict[str, Any], scale: float, found: Measures) -> None:
    if kind == "CIRCLE" and known.get("radius"):
        found.circles[_tidy(2 * abs(known["radius"]) * scale)] += 1
    elif kind == "ARC" and known.get("radius"):
        sweep = (known.get("end_angle", 0.0) - known.get("start_angle", 0.0)) % 360.0
        if 85.0 < sweep < 95.0:
            found.doors[_tidy(abs(known["radius"]) * scale)] += 1
    elif kind in ("TEXT", "MTEXT"):
        height = known.get("height" if kind == "TEXT" else "char_height", 0.0)
        if height > 0.0:
            found.letters[_tidy(height * scale)] += 1
    elif kind == "DIMENSION" and known.get("dimtype", 0) & 7 in (0, 1):
        unit = _style_unit(entity, str(known.get("dimstyle", "")), found)
        if unit:
            found.shown_in[unit] += 1
        _dimension(entity, known, found)


def _style_unit(entity: Any, name: str, found: Measures) -> str:
    """Unit of the drawing that a dimension style implies: feet and inches count inches, a suffix names its unit."""
    if name not in found.styles:
        found.styles[name] = ""
        style = entity.doc.dimstyles.get(name) if entity.doc and entity.doc.dimstyles.has_entry(name) else None
        if style is not None:
            factor = float(style.dxf.get("dimlfac", 1.0) or 1.0)
            suffix = _SUFFIX.match(str(style.dxf.get("dimpost", "") or ""))
            if style.dxf.get("dimlunit", 2) in (3, 4) and factor == 1.0:
                found.styles[name] = "inch"
            elif suffix:
                metre = METRES[_SUFFIXES[suffix[1]]] * factor
                found.styles[name] = next((unit for unit in METRES if abs(METRES[unit] / metre - 1.0) < 1e-9), "")
    return found.styles[name]


def _dimension(entity: Any, known: dict[str, Any], found: Measures) -> None:
    text = str(known.get("text", ""))
    if not any(c.isdigit() for c in text) or "<>" in text:
        return
    try:
        length = abs(float(entity.get_measurement()))
    except (TypeError, ValueError, AttributeError, ArithmeticError):
        return
    if 0.0 < length < 1e15:
        found.dimensions.append((length, text))


def _tidy(length: float) -> float:
    return float(f"{length:.6g}")


def written_length(text: str) -> float | None:
    r"""Length that a dimension text states with its unit, m.

    Example:
        >>> written_length("16'-0\""), written_length("6.50 m"), written_length("6500")
        (4.8768, 6.5, None)
    """
    plain = text.strip()
    stated = _UNIT.match(plain)
    if stated:
        factor = {"mm": 1e-3, "cm": 1e-2, "m": 1.0, "ft": FOOT, "in": INCH}[stated[2]]
        return float(stated[1]) * factor
    if "'" not in plain and '"' not in plain:
        return None
    found = _FEET.fullmatch(plain)
    if not found or not any(found.groups()):
        return None
    feet, whole, number, over = found.groups()
    inches = float(whole or 0)
    if number:
        inches += float(number) / (float(over) if over and float(over) else 1.0)
    return round(float(feet or 0) * FOOT + inches * INCH, 9)
