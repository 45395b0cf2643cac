"""Figures as drawn, in drawing units, and how many of them are brought into one array."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal, NamedTuple

import numpy as np

from ingest.dxf.curves import Floats, flatten_bulges

OUT_OF_REACH = "coordinate not finite or beyond any site"
FARTHEST_UNITS = 1e15
"""Drawing units beyond which arithmetic on coordinates would mean nothing, whatever the unit."""


class Left(NamedTuple):
    """An entity that gives no part, and why."""

    kind: Literal["context", "ignored"]
    reason: str


@dataclass(slots=True, kw_only=True)
class Sketch:
    """One figure in drawing units, not yet placed.

    `xyz` is flat: x, y, z of each vertex. A conic has three: centre and the two half-axis points; a text has its
    point, one letter height along it, one letter height up, then the points of its leaders. `measure` is the length a
    dimension measures. `bulges` belongs to each vertex and its next. `axes` are the rows of the entity's own plane when
    its vertices are not in world axes yet. `rings` counts the vertices of the outer ring and of each hole.
    """

    cls: str
    layer: str
    form: Literal["path", "outline", "point", "conic", "text"]
    xyz: Sequence[float] | Floats
    item: str = ""
    closed: bool = False
    bulges: Sequence[float] | Floats | None = None
    axes: Floats | None = None
    span: tuple[float, float] | None = None
    rings: tuple[int, ...] = ()
    width: float | None = None
    measure: float | None = None
    rise: float = 0.0
    name: str = ""
    text: str = ""
    tags: dict[str, str] | None = None
    evidence: str = ""


@dataclass(slots=True)
class Batch:
    """Sketches with their vertices in one array, bulges resolved, in world axes of their layout or block."""

    sketches: list[Sketch]
    xyz: Floats
    starts: list[int]
    dropped: list[tuple[Sketch, str]] = field(default_factory=list)


def settle(sketches: list[Sketch], sagitta: float) -> Batch:
    """Resolve bulges and entity planes of many sketches at once.

    Args:
        sketches: Figures.
        sagitta: Allowed distance between arcs and chords, drawing units.

    Returns:
        The batch; sketches with non-finite vertices are left out and listed in `dropped`.
    """
    flat = [np.asarray(s.xyz, dtype=np.float64) for s in sketches]
    far = _far(flat)
    dropped = [(sketches[k], OUT_OF_REACH) for k in sorted(far)]
    if far:
        sketches = [s for k, s in enumerate(sketches) if k not in far]
        flat = [xyz for k, xyz in enumerate(flat) if k not in far]
    _resolve_bulges([k for k, s in enumerate(sketches) if s.bulges is not None], sketches, flat, sagitta)
    for k, sketch in enumerate(sketches):
        if sketch.axes is not None:
            flat[k] = (flat[k].reshape(-1, 3) @ sketch.axes).ravel()
    starts = [0]
    for xyz in flat:
        starts.append(starts[-1] + len(xyz) // 3)
    return Batch(sketches, np.concatenate(flat).reshape(-1, 3) if flat else np.empty((0, 3)), starts, dropped)


def _far(flat: list[Floats]) -> set[int]:
    """Indices of the vertex lists with a coordinate that is not finite or too large to reckon with."""
    if not flat or not (size := np.abs(np.concatenate(flat))).size or size.max() < FARTHEST_UNITS:
        return set()
    return {k for k, xyz in enumerate(flat) if len(xyz) and not np.abs(xyz).max() < FARTHEST_UNITS}


def _resolve_bulges(curved: list[int], sketches: list[Sketch], flat: list[Floats], sagitta: float) -> None:
    """Put chords in the place of the bulged vertex lists, each in its own plane."""
    if not curved:
        return
    rings = [flat[k].reshape(-1, 3) for k in curved]
    bulges = []
    for k in curved:
        own = np.array(sketches[k].bulges, dtype=np.float64)
        if not sketches[k].closed:
            own[-1] = 0.0
        bulges.append(own)
    every = np.concatenate(rings)
    stops = np.cumsum([len(ring) for ring in rings])
    following = np.arange(1, len(every) + 1)
    following[stops - 1] = np.concatenate(([0], stops[:-1]))
    points, counts = flatten_bulges(every[:, :2], every[following, :2], np.concatenate(bulges), sagitta)
    placed = np.column_stack((points, np.repeat(every[:, 2], counts)))
    begin = 0
    for k, stop in zip(curved, np.cumsum(counts)[stops - 1].tolist(), strict=True):
        flat[k] = placed[begin:stop].ravel()
        begin = stop
