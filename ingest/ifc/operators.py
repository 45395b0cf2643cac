"""Mappings of mapped items: moved, turned, scaled and mirrored copies."""

from __future__ import annotations

from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.frames import FrameTable, Triple, triple

Entity: TypeAlias = Any
Floats: TypeAlias = NDArray[np.float64]


class OperatorTable:
    """Matrices of mappings; row 0 is the identity. Most mappings only move: these are kept as their shift."""

    def __init__(self, frames: FrameTable) -> None:
        self._frames = frames
        self._rows: dict[tuple[int, int], int] = {}
        self._chains: dict[tuple[int, int], int] = {}
        self._made: list[Floats | Triple] = [(0.0, 0.0, 0.0)]
        self.shifted = 0
        """Mappings whose source has an origin of its own: the standard's words allow two readings."""

    def row(self, operator: Entity, origin: Entity) -> int:
        """Row of one mapping: the operator after the frame `origin` of the source, as geometry kernels have it."""
        key = (operator.id(), origin.id())
        known = self._rows.get(key)
        if known is None:
            self._made.append(self._read(operator, origin))
            known = self._rows[key] = len(self._made) - 1
        return known

    def chain(self, outer: int, inner: int) -> int:
        """Row of a mapping within a mapping."""
        if not inner or not outer:
            return outer or inner
        key = (outer, inner)
        known = self._chains.get(key)
        if known is None:
            self._made.append(_full(self._made[outer]) @ _full(self._made[inner]))
            known = self._chains[key] = len(self._made) - 1
        return known

    def _read(self, operator: Entity, origin: Entity) -> Floats | Triple:
        made = read_operator(operator)
        row = self._frames.row(origin)
        if self._frames.is_plain(row):
            return made
        self.shifted += 1
        return np.asarray(_full(made) @ self._frames.matrix(row))

    def matrices(self) -> Floats:
        """All mappings as (n, 4, 4), in the file's units."""
        matrices = np.tile(np.eye(4), (len(self._made), 1, 1))
        shifts = [(row, made) for row, made in enumerate(self._made) if isinstance(made, tuple)]
        matrices[[row for row, _ in shifts], :3, 3] = [made for _, made in shifts]
        for row, made in enumerate(self._made):
            if not isinstance(made, tuple):
                matrices[row] = made
        return matrices


def _full(made: Floats | Triple) -> Floats:
    if not isinstance(made, tuple):
        return made
    matrix = np.eye(4)
    matrix[:3, 3] = made
    return matrix


def read_operator(operator: Entity) -> Floats | Triple:
    """Matrix (4, 4) of an IfcCartesianTransformationOperator, which may scale and mirror; its shift when it only moves.

    Axes are made square to each other in the order third, first, second (ISO 10303-42, base axes).
    """
    kind = operator.is_a()
    flat = kind.startswith("IfcCartesianTransformationOperator2D")
    ways = (operator.get_argument(0), operator.get_argument(1), None if flat else operator.get_argument(4))
    one = float(operator.get_argument(3) or 1.0)
    at = triple(operator.get_argument(2).get_argument(0))
    if ways == (None, None, None) and one == 1.0 and not kind.endswith("nonUniform"):
        return at
    scales = [one, float(getattr(operator, "Scale2", None) or one), float(getattr(operator, "Scale3", None) or one)]
    matrix = np.eye(4)
    matrix[:3, :3] = _base_axes(*(None if way is None else _ratios(way) for way in ways)) * scales
    matrix[:3, 3] = at
    return matrix


def _ratios(direction: Entity) -> Floats:
    return np.array(triple(direction.get_argument(0)), float)


def _base_axes(first: Floats | None, second: Floats | None, third: Floats | None) -> Floats:
    z = _unit(np.array([0.0, 0.0, 1.0]) if third is None else third)
    x = np.array([1.0, 0.0, 0.0]) if first is None else first
    x = x - (x @ z) * z
    if x @ x < 1e-18:
        x = np.array([0.0, 1.0, 0.0]) if abs(z[1]) < 0.9 else np.array([0.0, 0.0, 1.0])
        x = x - (x @ z) * z
    x = _unit(x)
    y = np.cross(z, x)
    wanted = y if second is None else second
    return np.column_stack([x, y if wanted @ y >= 0 else -y, z])


def _unit(vector: Floats) -> Floats:
    length = float(np.linalg.norm(vector))
    if not length:
        raise ValueError("a direction without length")
    return vector / length
