"""Bodies put where they stand, in world metres, all at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.facets import Facets
from ingest.ifc.frames import NO_FRAME, Triple
from ingest.ifc.items import ItemReader
from ingest.ifc.shapes import Described, Extrusion, Line, Shape, Sweep

Floats: TypeAlias = NDArray[np.float64]

CHUNK = 4096
"""Rows turned from arrays into tuples at once: faster than one by one, and small in memory."""
_NOWHERE = (0.0, 0.0, 0.0)


@dataclass(slots=True)
class Placed:
    """One body in the world. `origin`, `x`, `y` are the frame its profile lies in, m.

    `vector` is the full extrusion, or the way from the first to the last point of a line of two points. `base` brings
    the item's own coordinates, in file units, to world metres.
    """

    shape: Shape
    origin: Triple
    x: Triple
    y: Triple
    vector: Triple
    base: Floats
    frames: Floats

    def points(self) -> Floats:
        """World points (n, 3) of a line, sweep or mesh."""
        assert isinstance(self.shape, (Line, Sweep, Facets))
        return np.asarray(self.shape.points @ self.base[:3, :3].T + self.base[:3, 3])

    @property
    def scale(self) -> float:
        """Metres per unit of the profile along its x axis."""
        a, b, c = self.x
        return float((a * a + b * b + c * c) ** 0.5)


class BodyList:
    """Bodies gathered for many products, placed together by `place` and handed out by `take`."""

    def __init__(self) -> None:
        self._shapes: list[Any] = []
        self._placements: list[int] = []
        self._mappings: list[int] = []
        self._frames: list[int] = []
        self._vectors: list[Triple] = []
        self._chunk = -1
        self._rows: list[tuple[Triple, Triple, Triple, Triple]] = []

    def __len__(self) -> int:
        return len(self._shapes)

    def add(self, described: Described, placement: int) -> int:
        """Append bodies of one product; returns the number after the last of them."""
        for shape, mapping in described:
            self._shapes.append(shape)
            self._placements.append(placement)
            self._mappings.append(mapping)
            if isinstance(shape, Extrusion):
                self._frames.append(shape.frame)
                self._vectors.append(shape.vector)
            else:
                self._frames.append(NO_FRAME)
                self._vectors.append(shape.way if isinstance(shape, Line) else _NOWHERE)
        return len(self._shapes)

    def place(self, world: Floats, items: ItemReader) -> None:
        """Place all bodies.

        Args:
            world: (n, 4, 4) placements, from file units to world metres.
            items: Reader that holds the frames and mappings the bodies refer to.
        """
        self._frame_matrices = items.frames.matrices()
        with np.errstate(all="ignore"):
            base = world[np.array(self._placements, int)]
            mappings = np.array(self._mappings, int)
            mapped = np.flatnonzero(mappings)
            if len(mapped):
                base[mapped] = base[mapped] @ items.operators.matrices()[mappings[mapped]]
            full = base @ self._frame_matrices[np.array(self._frames, int)]
            vectors = np.array(self._vectors, float).reshape(-1, 3)
            self._placed = np.empty((len(full), 4, 3))
            self._placed[:, 0], self._placed[:, 1], self._placed[:, 2] = full[:, :3, 3], full[:, :3, 0], full[:, :3, 1]
            self._placed[:, 3] = np.einsum("nij,nj->ni", full[:, :3, :3], vectors)
        self._base = base
        for gathered in (self._placements, self._mappings, self._frames, self._vectors):
            gathered.clear()
        self._bad = ~(np.isfinite(self._placed).all(axis=(1, 2)) & np.isfinite(base).all(axis=(1, 2)))
        self._any_bad = bool(self._bad.any())

    def take(self, first: int, end: int) -> list[Placed]:
        """The placed bodies of these rows.

        Raises:
            ValueError: If one of their coordinates is no finite number.
        """
        if first == end:
            return []
        if self._any_bad and self._bad[first:end].any():
            raise ValueError("coordinates are not finite numbers")
        return [
            Placed(self._shapes[row], *self._row(row), self._base[row], self._frame_matrices)
            for row in range(first, end)
        ]

    def release(self, first: int, end: int) -> None:
        """Forget the shapes of these rows; they cannot be taken again."""
        self._shapes[first:end] = [None] * (end - first)

    def _row(self, row: int) -> tuple[Triple, Triple, Triple, Triple]:
        chunk = row // CHUNK
        if chunk == self._chunk + 1:
            self._chunk = chunk
            part = self._placed[chunk * CHUNK : (chunk + 1) * CHUNK]
            columns = (map(tuple, part[:, k].tolist()) for k in range(4))
            self._rows = list(zip(*columns, strict=True))
        if chunk == self._chunk:
            return self._rows[row - chunk * CHUNK]
        return tuple(map(tuple, self._placed[row].tolist()))  # type: ignore[return-value]
