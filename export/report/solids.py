"""Plain solids for the three-dimensional views: prisms, bars, sheets and rings, as points, faces and drawn edges."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import cos, pi, sin

import numpy as np

from ingest.members import Point, Point3
from sections.model import Floats

ROUND_SIDES = 8


@dataclass(frozen=True, kw_only=True)
class Solid:
    """One body: `points` (n, 3) m, `faces` convex rings of indices, `edges` the lines drawn in ink.

    `marked` bodies differ between the real arrangement and what the section implies.
    """

    kind: str
    points: Floats
    faces: tuple[tuple[int, ...], ...]
    edges: tuple[tuple[int, int], ...]
    marked: bool = False
    convex: bool = True


def prism(
    kind: str, outline: Sequence[Point], low: float, high: float, marked: bool = False, sharp: bool = True
) -> Solid:
    """An upright prism over a convex outline; a rounded one shows no upright edges."""
    n = len(outline)
    points = np.array([(*p, low) for p in outline] + [(*p, high) for p in outline], dtype=np.float64)
    ring = [(i, (i + 1) % n) for i in range(n)]
    sides = tuple((a, b, b + n, a + n) for a, b in ring)
    caps = (tuple(range(n)), tuple(range(2 * n - 1, n - 1, -1)))
    edges = [*ring, *((a + n, b + n) for a, b in ring), *(((i, i + n) for i in range(n)) if sharp else ())]
    return Solid(kind=kind, points=points, faces=(*sides, *caps), edges=tuple(edges), marked=marked)


def pile(kind: str, centre: Point, diameter: float, low: float, high: float, marked: bool = False) -> Solid:
    """An upright round pile."""
    turns = [2 * pi * i / ROUND_SIDES for i in range(ROUND_SIDES)]
    outline = [(centre[0] + diameter / 2 * cos(t), centre[1] + diameter / 2 * sin(t)) for t in turns]
    return prism(kind, outline, low, high, marked, sharp=False)


def bar(kind: str, a: Point3, b: Point3, width: float, depth: float, marked: bool = False) -> Solid | None:
    """A straight bar with a rectangular section, `width` level and `depth` across; None when it has no length."""
    start, along = np.array(a, dtype=np.float64), np.array(b, dtype=np.float64) - np.array(a, dtype=np.float64)
    length = float(np.linalg.norm(along))
    if length < 1e-6:
        return None
    along = along / length
    side = np.cross(along, (0.0, 0.0, 1.0))
    size = float(np.linalg.norm(side))
    side = side / size if size > 1e-6 else np.array((1.0, 0.0, 0.0))
    up = np.cross(side, along)
    corners = [s * width / 2 * side + t * depth / 2 * up for s, t in ((-1, -1), (1, -1), (1, 1), (-1, 1))]
    points = np.array([start + c for c in corners] + [start + length * along + c for c in corners])
    faces = ((0, 1, 2, 3), (7, 6, 5, 4), (0, 4, 5, 1), (1, 5, 6, 2), (2, 6, 7, 3), (3, 7, 4, 0))
    edges = tuple((i, (i + 1) % 4) for i in range(4)) + tuple((4 + i, 4 + (i + 1) % 4) for i in range(4))
    return Solid(
        kind=kind, points=points, faces=faces, edges=edges + tuple((i, i + 4) for i in range(4)), marked=marked
    )


def extruded(kind: str, ring: Sequence[Point], half: float, marked: bool = False) -> Solid:
    """A convex ring of the section plane (x, z) carried `half` m to either side of it."""
    n = len(ring)
    points = np.array([(x, -half, z) for x, z in ring] + [(x, half, z) for x, z in ring], dtype=np.float64)
    sides = tuple((i, (i + 1) % n, (i + 1) % n + n, i + n) for i in range(n))
    caps = (tuple(range(n)), tuple(range(2 * n - 1, n - 1, -1)))
    edges = [(i, (i + 1) % n) for i in range(n)]
    edges += [(a + n, b + n) for a, b in edges] + [(i, i + n) for i in range(n)]
    return Solid(kind=kind, points=points, faces=(*sides, *caps), edges=tuple(edges), marked=marked)


def revolved(kind: str, ring: Sequence[Point], turns: int = 36, marked: bool = False) -> Solid:
    """A ring of the section plane (r, z) turned once about the axis."""
    n = len(ring)
    angles = [2 * pi * k / turns for k in range(turns)]
    points = np.array([(r * cos(t), r * sin(t), z) for t in angles for r, z in ring], dtype=np.float64)
    faces, edges = [], []
    for k in range(turns):
        a, b = k * n, (k + 1) % turns * n
        for i in range(n):
            j = (i + 1) % n
            faces.append((a + i, a + j, b + j, b + i))
            edges.append((a + i, b + i))
    return Solid(kind=kind, points=points, faces=tuple(faces), edges=tuple(edges), marked=marked, convex=False)


def thick_line(a: Point, b: Point, thickness: float) -> list[Point]:
    """The rectangle round a line a-b."""
    dx, dy = b[0] - a[0], b[1] - a[1]
    size = (dx * dx + dy * dy) ** 0.5 or 1.0
    nx, ny = -dy / size * thickness / 2, dx / size * thickness / 2
    return [(a[0] - nx, a[1] - ny), (b[0] - nx, b[1] - ny), (b[0] + nx, b[1] + ny), (a[0] + nx, a[1] + ny)]
