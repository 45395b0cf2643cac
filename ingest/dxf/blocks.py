"""Inserts: nested, scaled unevenly, mirrored, turned, in arrays, with attributes."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import replace
from typing import Any

import numpy as np

from ingest.dxf.clip import clipping_outline
from ingest.dxf.curves import entity_axes
from ingest.dxf.figures import sketch
from ingest.dxf.layers import LayerTable
from ingest.dxf.linework import layer_of
from ingest.dxf.placing import Matrix
from ingest.dxf.sketch import Batch, Left, Sketch, settle
from ingest.dxf.text import decode, sketch_text
from ingest.members import Point3

DEEPEST = 64
"""Blocks nested deeper than this are a fault of the file or an attack."""
_INVISIBLE, _CONSTANT = 1, 2
"""Flags of attributes and their definitions."""
MOST_FIGURES = 1_000_000
"""More figures than this from one insert are a fault of the file or an attack."""


def insert_matrices(known: dict[str, Any], base: Any) -> tuple[Matrix, list[Point3]]:
    """The matrix of an insert and the shift of each of its copies: placed = vertex @ matrix + shift.

    Args:
        known: Attributes of the INSERT as the library names them.
        base: Base point of the block.

    Returns:
        The matrix for row vectors, and one shift a copy, row by row. Rows and columns of an array turn with the insert
        but are not scaled.
    """
    turn = math.radians(known.get("rotation", 0.0))
    cos, sin = math.cos(turn), math.sin(turn)
    sx, sy, sz = known.get("xscale") or 1.0, known.get("yscale") or 1.0, known.get("zscale") or 1.0
    turned: Matrix = ((cos, sin, 0.0), (-sin, cos, 0.0), (0.0, 0.0, 1.0))
    matrix: Matrix = ((sx * cos, sx * sin, 0.0), (-sy * sin, sy * cos, 0.0), (0.0, 0.0, sz))
    at = known.get("insert")
    spot: Point3 = (at.x, at.y, at.z) if at is not None else (0.0, 0.0, 0.0)
    axes = entity_axes(known.get("extrusion"))
    if axes is not None:
        a, b, c = ((row[0], row[1], row[2]) for row in axes.tolist())
        plane: Matrix = (a, b, c)
        turned, matrix, spot = times(turned, plane), times(matrix, plane), turn_point(spot, plane)
    first = minus(spot, turn_point((base.x, base.y, base.z), matrix))
    columns, rows = copies(known)
    if columns == rows == 1:
        return matrix, [first]
    dx, dy = known.get("column_spacing", 0.0), known.get("row_spacing", 0.0)
    steps = ((j * dx, i * dy, 0.0) for i in range(rows) for j in range(columns))
    return matrix, [plus(first, turn_point(step, turned)) for step in steps]


def turn_point(point: Point3, matrix: Matrix) -> Point3:
    """A row vector times a matrix."""
    (x, y, z), (a, b, c) = point, matrix
    return x * a[0] + y * b[0] + z * c[0], x * a[1] + y * b[1] + z * c[1], x * a[2] + y * b[2] + z * c[2]


def times(first: Matrix, second: Matrix) -> Matrix:
    """The matrix that does the first, then the second."""
    a, b, c = first
    return turn_point(a, second), turn_point(b, second), turn_point(c, second)


def plus(a: Point3, b: Point3) -> Point3:
    """Sum of two vectors."""
    return a[0] + b[0], a[1] + b[1], a[2] + b[2]


def minus(a: Point3, b: Point3) -> Point3:
    """Difference of two vectors."""
    return a[0] - b[0], a[1] - b[1], a[2] - b[2]


def scaled(matrix: Matrix, factor: float) -> Matrix:
    """A matrix times a number."""
    a, b, c = matrix
    return scaled_point(a, factor), scaled_point(b, factor), scaled_point(c, factor)


def scaled_point(point: Point3, factor: float) -> Point3:
    """A vector times a number."""
    return point[0] * factor, point[1] * factor, point[2] * factor


def copies(known: dict[str, Any]) -> tuple[int, int]:
    """Columns and rows of an insert; counts below one and spacings of zero mean a single one."""
    columns = max(1, known.get("column_count", 1)) if known.get("column_spacing", 0.0) else 1
    rows = max(1, known.get("row_count", 1)) if known.get("row_spacing", 0.0) else 1
    return columns, rows


class BlockBook:
    """The blocks of one drawing, each drawn once and kept."""

    def __init__(self, document: Any, sagitta: float, layers: LayerTable) -> None:
        """Args: document as loaded; sagitta in drawing units at scale 1; the layers of the drawing."""
        self._blocks = document.blocks
        self.sagitta = sagitta
        self._layers = layers
        self._drawn: dict[tuple[str, int], Batch] = {}
        self._bases: dict[str, Any] = {}
        self._sizes: dict[str, int] = {}
        self.left: dict[str, Counter[str]] = {}
        """What gave no figure, by block and reason."""

    def block(self, name: str) -> Any:
        """A block as loaded, None when the file does not have it."""
        return self._blocks.get(name)

    def base(self, name: str) -> Any:
        """Base point of a block."""
        found = self._bases.get(name)
        if found is None:
            found = self._bases[name] = self._blocks.get(name).block.dxf.base_point
        return found

    def figures(self, name: str) -> int:
        """Number of figures one insert of the block gives, nested ones included.

        -1 where a block holds itself, or blocks nest deeper than any draughtsman's.
        """
        return self._count(name.lower(), ())

    def _count(self, key: str, path: tuple[str, ...]) -> int:
        if key in path or len(path) > DEEPEST:
            return -1
        if key in self._sizes:
            return self._sizes[key]
        total = 0
        for entity in self._entities(key):
            if entity.dxftype() != "INSERT":
                total += 1
                continue
            known = vars(entity.dxf)
            inner = self._count(str(known.get("name", "")).lower(), (*path, key))
            if inner < 0:
                total = -1
                break
            columns, rows = copies(known)
            total += inner * columns * rows + len(entity.attribs)
        self._sizes[key] = total
        return total

    def _entities(self, name: str) -> list[Any]:
        block = self._blocks.get(name)
        return list(block) if block is not None else []

    def content(self, name: str, matrix: Matrix) -> Batch:
        """The figures of a block in its own units, fine enough for the scale it is inserted at."""
        level = math.ceil(math.log2(max(_stretch(matrix), 1e-9)) - 1e-9)
        key = (name.lower(), level)
        if key not in self._drawn:
            self._drawn[key] = self._draw(name, self.sagitta * 2.0**-level)
        return self._drawn[key]

    def _draw(self, name: str, sagitta: float) -> Batch:
        sketches: list[Sketch] = []
        left: Counter[str] = Counter()
        title = self.title(name)
        for entity in self._entities(name):
            known = vars(entity.dxf)
            layer = self._layers.use(layer_of(known))
            if layer.left_out or known.get("invisible", 0):
                continue
            kind = entity.dxftype()
            if kind == "INSERT":
                sketches += self._nested(entity, self.sagitta / sagitta, left)
                continue
            fixed = kind == "ATTDEF" and known.get("flags", 0) & _CONSTANT
            figures = sketch_text(entity, sagitta) if fixed else sketch(kind, entity, sagitta)
            if isinstance(figures, Left):
                left[figures.reason] += 1
                continue
            for figure in figures:
                figure.name, figure.layer = title, layer.name
                if layer.state:
                    figure.tags = {**(figure.tags or {}), "layer_state": layer.state}
            sketches += figures
        batch = settle(sketches, sagitta)
        left.update(why for _, why in batch.dropped)
        self.left[name.lower()] = left
        return batch

    def title(self, name: str) -> str:
        """Name of a block as the draughtsman knows it: that of the block a variant without a name was made from."""
        if name.startswith("*U"):
            from ezdxf.dynblkhelper import get_dynamic_block_record_handle

            record = self._blocks.get(name).block_record
            handle = get_dynamic_block_record_handle(record)
            name = next((block.name for block in self._blocks if block.block_record_handle == handle), name)
        return decode(name)

    def all_left(self) -> Counter[str]:
        """What gave no figure in any block, by reason."""
        return sum(self.left.values(), Counter())

    def _nested(self, entity: Any, outer: float, left: Counter[str]) -> list[Sketch]:
        """The figures of an insert inside a block, in the units of that block."""
        known = vars(entity.dxf)
        name = str(known.get("name", ""))
        block = self._blocks.get(name)
        if block is None:
            left["insert of a block that is not in the file"] += 1
            return []
        matrix, shifts = insert_matrices(known, block.block.dxf.base_point)
        if clipping_outline(entity, block.block.dxf.base_point) is not None:
            left["clipping outline of an insert inside a block: not applied"] += 1
        inner = self.content(name, scaled(matrix, outer))
        layer, tags = decode(layer_of(known)), attributes(entity)
        (p, q, _), (r, t, _), (_, _, rise) = matrix
        plan = math.sqrt(abs(p * t - q * r))
        placed = attribute_texts(entity)
        for shift in shifts:
            moved = inner.xyz @ np.array(matrix) + np.array(shift)
            for figure, a, b in zip(inner.sketches, inner.starts, inner.starts[1:], strict=False):
                placed.append(
                    replace(
                        figure,
                        xyz=moved[a:b].ravel(),
                        bulges=None,
                        axes=None,
                        layer=layer if figure.layer == "0" else figure.layer,
                        width=figure.width * plan if figure.width else None,
                        measure=figure.measure * plan if figure.measure else None,
                        rise=figure.rise * rise,
                        tags={**(figure.tags or {}), **tags} if tags else figure.tags,
                    )
                )
        return placed


def _stretch(matrix: Matrix) -> float:
    """Largest factor by which a matrix stretches the plan."""
    return max(math.hypot(*matrix[0]), math.hypot(*matrix[1]))


def attributes(entity: Any) -> dict[str, str]:
    """Attributes of an insert, tag to plain text; empty ones are left out."""
    found: dict[str, str] = {}
    for attrib in entity.attribs:
        known = vars(attrib.dxf)
        words = decode(str(known.get("text", ""))).strip()
        if words:
            found[decode(str(known.get("tag", "")))] = words
    return found


def attribute_texts(entity: Any) -> list[Sketch]:
    """Attributes of an insert as texts at their own places; hidden ones are left out."""
    sketches: list[Sketch] = []
    for attrib in entity.attribs:
        figures = sketch_text(attrib, 0.0)
        if isinstance(figures, Left) or vars(attrib.dxf).get("flags", 0) & _INVISIBLE:
            continue
        for figure in figures:
            figure.tags = {"attribute": decode(str(vars(attrib.dxf).get("tag", "")))}
        sketches += figures
    return sketches
