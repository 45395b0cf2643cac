"""Bodies put where they stand, in world metres, all at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.facets import Facets
from ingest.ifc.frames import NO_FRAME, Triple
from ingest.ifc.solids import Extrusion, ItemReader, Line, Shape, Sweep

Floats = NDArray[np.float64]


@dataclass(slots=True)
class Placed:
    """One body in the world. `origin`, `x`, `y` are the frame its profile lies in, `vector` its full extrusion, m.

    `base` brings the item's own coordinates, in file units, to world metres.
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
    """Bodies gathered for many products, placed together."""

    def __init__(self) -> None:
        self._shapes: list[Shape] = []
        self._placements: list[int] = []
        self._mappings: list[int] = []
        self._frames: list[int] = []
        self._vectors: list[Triple] = []

    def __len__(self) -> int:
        return len(self._shapes)

    def add(self, shape: Shape, placement: int, mapping: int) -> int:
        """Append one body; returns its number."""
        self._shapes.append(shape)
        self._placements.append(placement)
        self._mappings.append(mapping)
        swept = isinstance(shape, Extrusion)
        self._frames.append(shape.frame if swept else NO_FRAME)
        self._vectors.append(shape.vector if swept else (0.0, 0.0, 0.0))
        return len(self._shapes) - 1

    def place(self, world: Floats, items: ItemReader) -> tuple[list[Placed], NDArray[np.bool_]]:
        """Place all bodies.

        Args:
            world: (n, 4, 4) placements, from file units to world metres.
            items: Reader that holds the frames and mappings the bodies refer to.

        Returns:
            The placed bodies, and for each whether all its numbers are finite.
        """
        if not self._shapes:
            return [], np.zeros(0, bool)
        frames = items.frames.matrices()
        with np.errstate(all="ignore"):
            base = world[self._placements]
            mapped = np.flatnonzero(self._mappings)
            if len(mapped):
                base[mapped] = base[mapped] @ items.operators.matrices()[np.array(self._mappings)[mapped]]
            full = base @ frames[self._frames]
            vectors = np.einsum("nij,nj->ni", full[:, :3, :3], np.array(self._vectors, float))
        finite = np.isfinite(full).all(axis=(1, 2)) & np.isfinite(vectors).all(axis=1)
        origins, xs, ys = (list(map(tuple, full[:, :3, k].tolist())) for k in (3, 0, 1))
        rows = zip(self._shapes, origins, xs, ys, map(tuple, vectors.tolist()), base, strict=True)
        placed = [Placed(shape, o, x, y, v, matrix, frames) for shape, o, x, y, v, matrix in rows]
        return placed, finite
