"""Wall lines that are faces: each has a parallel partner a wall's thickness away."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from ingest.figures import outline_of, plan
from ingest.parts import Part

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

THINNEST, THICKEST = 0.15, 2.0
"""Thickness of a wall, m (common practice, no source)."""
PARALLEL = 0.0175
"""Sine of one degree: faces that differ more are no pair (judgement)."""
OVERLAP = 0.5
"""Share of the shorter face that must lie beside the other one (judgement)."""


def find_faces(parts: Sequence[Part]) -> dict[int, Literal["face", "outline"]]:
    """Tell which wall lines are faces.

    Args:
        parts: Wall lines of one site, open and closed, without a thickness of their own.

    Returns:
        By index into `parts`: "face" when the partner is another line of its layer, "outline" when a closed line is its
        own partner. A line without partner is not listed: it is the axis.
    """
    a, b, owner = _segments(parts)
    if len(a) < 2:
        return {}
    first, second = _pairs(a, b)
    layer = np.array([parts[n].layer for n in owner.tolist()])
    fits = _beside(a, b, first, second) & (layer[first] == layer[second])
    first, second = owner[first[fits]], owner[second[fits]]
    found: dict[int, Literal["face", "outline"]] = {}
    for n, m in zip(first.tolist(), second.tolist(), strict=True):
        if n != m:
            found[n] = found[m] = "face"
    for n in first[first == second].tolist():
        if outline_of(parts[n]) is not None:
            found.setdefault(n, "outline")
    return found


def _segments(parts: Sequence[Part]) -> tuple[Floats, Floats, Ints]:
    a, b, owner = [np.zeros((0, 2))], [np.zeros((0, 2))], [np.zeros(0, dtype=np.int64)]
    for n, part in enumerate(parts):
        ring = outline_of(part)
        line = np.array(plan(part.points) if ring is None else (*ring, ring[0]))
        a.append(line[:-1])
        b.append(line[1:])
        owner.append(np.full(len(line) - 1, n, dtype=np.int64))
    starts, ends, owners = np.vstack(a), np.vstack(b), np.concatenate(owner)
    long = np.hypot(*(ends - starts).T) >= THINNEST
    return starts[long], ends[long], owners[long]


def _pairs(a: Floats, b: Floats) -> tuple[Ints, Ints]:
    from shapely import STRtree, linestrings

    lines = np.asarray(linestrings(np.stack((a, b), axis=1)))
    first, second = STRtree(lines).query(lines, predicate="dwithin", distance=THICKEST)
    once = first < second
    return first[once], second[once]


def _beside(a: Floats, b: Floats, first: Ints, second: Ints) -> NDArray[np.bool_]:
    """Whether two segments are parallel, a wall's thickness apart, and lie beside each other."""
    length = np.hypot(*(b - a).T)
    way = (b - a) / length[:, None]
    along, normal = way[first], np.column_stack((-way[first, 1], way[first, 0]))
    turn = np.abs(np.sum(normal * way[second], axis=1))
    offset = np.abs(np.sum(normal * ((a[second] + b[second]) / 2 - a[first]), axis=1))
    ends = np.column_stack([np.sum(along * (end[second] - a[first]), axis=1) for end in (a, b)])
    common = np.minimum(ends.max(axis=1), length[first]) - np.maximum(ends.min(axis=1), 0.0)
    share = common / np.minimum(length[first], length[second])
    return np.asarray((turn < PARALLEL) & (offset >= THINNEST) & (offset <= THICKEST) & (share >= OVERLAP))
