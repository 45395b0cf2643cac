"""Small pits drawn by hand: one line for each side, or piles with one in every corner."""

from __future__ import annotations

import numpy as np

from ingest.members import Pile, WallPiece
from sections.perimeter.perimeter import find_shapes

BOX = ((0.0, 0.0), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0))


def lines(points, closed=True, kind="diaphragm", thickness=0.8, **more):
    """One wall piece for each straight of a polyline."""
    ends = zip(points, [*points[1:], points[0]] if closed else points[1:], strict=False)
    return tuple(
        WallPiece(id=f"w{k}", axis=(a, b), kind=kind, thickness=thickness, **more) for k, (a, b) in enumerate(ends)
    )


def rows(points, spacing, closed=True, **more):
    """Piles along a polyline, one in every corner."""
    piles = []
    for a, b in zip(points, [*points[1:], points[0]] if closed else points[1:], strict=False):
        a, b = np.array(a), np.array(b)
        n = round(float(np.hypot(*(b - a))) / spacing)
        piles += [tuple(a + (b - a) * k / n) for k in range(n)]
    piles += [] if closed else [tuple(points[-1])]
    return tuple(Pile(id=f"p{k}", centre=(float(x), float(y)), **more) for k, (x, y) in enumerate(piles))


def only(site):
    shapes, _, _ = find_shapes(site)
    assert len(shapes) == 1
    return shapes[0]


def angles(shape):
    return [round(corner.interior_angle, 6) for corner in shape.corners]
