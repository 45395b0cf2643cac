"""Two drawn faces to one centre line with its thickness."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Point, WallPiece
from ingest.trail import Question
from sections.model import Floats


@dataclass(frozen=True, kw_only=True, eq=False)
class Centred:
    """Axes as drawn (world of the caller), and middles of two faces (relative to the origin) with thickness."""

    axes: tuple[tuple[int, Floats], ...]
    middles: tuple[tuple[int, Floats, float], ...]


def centre_lines(pieces: Sequence[tuple[int, WallPiece]], origin: Point) -> tuple[Centred, tuple[Question, ...]]:
    """Split wall pieces into axes and middles of faces."""
    return Centred(axes=tuple((i, np.array(p.axis)) for i, p in pieces), middles=()), ()
