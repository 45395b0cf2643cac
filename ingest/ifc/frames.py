"""Axis placements gathered as raw numbers and turned into matrices all at once."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.attributes import (
    AXIS,
    COORDINATES,
    LOCATION,
    REF_DIRECTION,
    REF_DIRECTION_2D,
)

Entity = Any
Floats = NDArray[np.float64]
Triple = tuple[float, float, float]

_UP: Triple = (0.0, 0.0, 1.0)
_EAST: Triple = (1.0, 0.0, 0.0)
NO_FRAME = 0
"""Row of the identity, for an omitted placement."""


class FrameTable:
    """Axis placements, each gathered once; `matrices` turns them all into 4 x 4 arrays in one go.

    The third axis defaults to up, the first to the file's x axis made square to it, as ISO 10303-42 has it.
    """

    def __init__(self) -> None:
        self._rows: dict[int, int] = {}
        self._directions: dict[int, Triple] = {}
        self._origins: list[Triple] = [(0.0, 0.0, 0.0)]
        self._ups: list[Triple] = [_UP]
        self._firsts: list[Triple] = [_EAST]
        self._made: Floats = np.empty((0, 4, 4))

    def row(self, frame: Entity | None) -> int:
        """Row of an IfcAxis2Placement2D, 3D or IfcAxis1Placement; `NO_FRAME` for None."""
        if frame is None:
            return NO_FRAME
        key = frame.id()
        known = self._rows.get(key)
        if known is None:
            known = self._rows[key] = self.append(frame)
        return known

    def append(self, frame: Entity) -> int:
        """Row of a frame that is not shared, so not looked up."""
        kind = frame.is_a()
        up = first = None
        if kind == "IfcAxis2Placement2D":
            first = frame.get_argument(REF_DIRECTION_2D)
        else:
            up = frame.get_argument(AXIS)
            if kind != "IfcAxis1Placement":
                first = frame.get_argument(REF_DIRECTION)
        return self.add(
            triple(frame.get_argument(LOCATION).get_argument(COORDINATES)),
            _UP if up is None else self.direction(up),
            _EAST if first is None else self.direction(first),
        )

    def add(self, origin: Triple, up: Triple, first: Triple) -> int:
        """Append a frame given by its numbers."""
        self._origins.append(origin)
        self._ups.append(up)
        self._firsts.append(first)
        return len(self._origins) - 1

    def direction(self, direction: Entity) -> Triple:
        """Ratios of an IfcDirection, not normalised."""
        key = direction.id()
        known = self._directions.get(key)
        if known is None:
            known = self._directions[key] = triple(direction.get_argument(COORDINATES))
        return known

    def clear(self) -> None:
        """Let go of everything that was gathered; arrays handed out stay good."""
        for kept in (self._rows, self._directions, self._origins, self._ups, self._firsts):
            kept.clear()

    def is_plain(self, row: int) -> bool:
        """True for a frame at the origin that is not turned."""
        return (self._origins[row], self._ups[row], self._firsts[row]) == ((0.0, 0.0, 0.0), _UP, _EAST)

    def matrix(self, row: int) -> Floats:
        """One frame as (4, 4); `matrices` for many."""
        one = (np.array([numbers[row]]) for numbers in (self._origins, self._ups, self._firsts))
        return np.asarray(frame_matrices(*one)[0])

    def matrices(self) -> Floats:
        """All frames as (n, 4, 4), lengths in the file's units; not to be written to."""
        if len(self._made) != len(self._origins):
            numbers = (np.array(rows) for rows in (self._origins, self._ups, self._firsts))
            self._made = frame_matrices(*numbers)
        return self._made


def triple(numbers: tuple[float, ...]) -> Triple:
    """Two or three coordinates as three.

    Raises:
        ValueError: If there are fewer or more, or one is no number: damaged files hold texts and lists here.
    """
    x, y, z = numbers if len(numbers) == 3 else (*numbers, 0.0)
    if type(x) is float and type(y) is float and type(z) is float:
        return (x, y, z)
    return (_number(x), _number(y), _number(z))


def _number(value: object) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValueError("a coordinate is no number")
    return float(value)


def frame_matrices(origins: Floats, ups: Floats, firsts: Floats) -> Floats:
    """Matrices (n, 4, 4) from origins, third axes and reference directions, each (n, 3)."""
    z = _unit(ups, np.array([0.0, 0.0, 1.0]))
    along = firsts - np.einsum("ij,ij->i", firsts, z)[:, None] * z
    lost = np.linalg.norm(along, axis=1) < 1e-9 * np.maximum(np.linalg.norm(firsts, axis=1), 1e-300)
    if lost.any():
        spare = np.where(np.abs(z[lost, :1]) < 0.9, [[1.0, 0.0, 0.0]], [[0.0, 1.0, 0.0]])
        along[lost] = spare - np.einsum("ij,ij->i", spare, z[lost])[:, None] * z[lost]
    x = _unit(along, np.array([1.0, 0.0, 0.0]))
    matrices = np.zeros((len(origins), 4, 4))
    matrices[:, :3, 0], matrices[:, :3, 1], matrices[:, :3, 2] = x, np.cross(z, x), z
    matrices[:, :3, 3], matrices[:, 3, 3] = origins, 1.0
    return matrices


def _unit(vectors: Floats, spare: Floats) -> Floats:
    length = np.linalg.norm(vectors, axis=1)
    ok = length > 0
    return np.where(ok[:, None], vectors / np.where(ok, length, 1.0)[:, None], spare)
