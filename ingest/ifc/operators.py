"""Mappings of mapped items: moved, turned, scaled and mirrored copies."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.frames import FrameTable

Entity = Any
Floats = NDArray[np.float64]


class OperatorTable:
    """Matrices of mappings; row 0 is the identity."""

    def __init__(self, frames: FrameTable) -> None:
        self._frames = frames
        self._rows: dict[tuple[int, int], int] = {}
        self._chains: dict[tuple[int, int], int] = {}
        self._matrices: list[Floats] = [np.eye(4)]

    def row(self, operator: Entity, origin: Entity) -> int:
        """Row of one mapping: `origin`, a frame of the source, is brought onto the target of the operator."""
        key = (operator.id(), origin.id())
        known = self._rows.get(key)
        if known is None:
            known = self._rows[key] = self._append(self._matrix(operator, origin))
        return known

    def chain(self, outer: int, inner: int) -> int:
        """Row of a mapping within a mapping."""
        if not inner or not outer:
            return outer or inner
        key = (outer, inner)
        known = self._chains.get(key)
        if known is None:
            known = self._chains[key] = self._append(self._matrices[outer] @ self._matrices[inner])
        return known

    def _append(self, matrix: Floats) -> int:
        self._matrices.append(matrix)
        return len(self._matrices) - 1

    def _matrix(self, operator: Entity, origin: Entity) -> Floats:
        matrix = operator_matrix(operator)
        row = self._frames.row(origin)
        if self._frames.is_plain(row):
            return matrix
        return np.asarray(matrix @ np.linalg.inv(self._frames.matrix(row)))

    def matrices(self) -> Floats:
        """All mappings as (n, 4, 4), in the file's units."""
        return np.array(self._matrices)


def operator_matrix(operator: Entity) -> Floats:
    """Matrix (4, 4) of an IfcCartesianTransformationOperator, which may scale and mirror.

    Axes are made square to each other in the order third, first, second (ISO 10303-42, base axes).
    """
    flat = operator.is_a("IfcCartesianTransformationOperator2D")
    first, second, at = operator.get_argument(0), operator.get_argument(1), operator.get_argument(2)
    third = None if flat else operator.get_argument(4)
    one = float(operator.get_argument(3) or 1.0)
    scales = [one, float(getattr(operator, "Scale2", None) or one), float(getattr(operator, "Scale3", None) or one)]
    matrix = np.eye(4)
    if first is not None or second is not None or third is not None:
        matrix[:3, :3] = _base_axes(_ratios(first), _ratios(second), _ratios(third))
    if scales != [1.0, 1.0, 1.0]:
        matrix[:3, :3] *= scales
    coordinates = at.get_argument(0)
    matrix[: len(coordinates), 3] = coordinates
    return matrix


def _ratios(direction: Entity | None) -> Floats | None:
    if direction is None:
        return None
    ratios = direction.get_argument(0)
    return np.array([*ratios, 0.0][:3], float)


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
