"""Figures as drawn, in drawing units, and how a batch of them becomes parts in metres."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal, NamedTuple

import numpy as np

from ingest.dxf.curves import SAGITTA, Floats, flatten_bulges, flatten_conic
from ingest.model import Part, Point3
from ingest.trail import Source

FARTHEST = 1e8
"""Coordinates beyond this many metres are more than twice the earth's girth: no place on a site."""
OUT_OF_REACH = "coordinate not finite or beyond any site"


class Left(NamedTuple):
    """An entity that gives no part, and why."""

    kind: Literal["context", "ignored"]
    reason: str


@dataclass(slots=True, kw_only=True)
class Sketch:
    """One figure in drawing units, not yet placed.

    `xyz` is flat: x, y, z of each vertex. A conic has three: centre and the two half-axis points; a text has its
    point, one letter height along it, one letter height up, then the points of its leaders. `measure` is the length a
    dimension measures. `bulges` belongs to each vertex and its next. `axes` are the
    rows of the entity's own plane when its vertices are not in world axes yet. `rings` counts the vertices of the outer
    ring and of each hole.
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
        sketches: Figures; those with bulges or axes are changed in place.
        sagitta: Allowed distance between arcs and chords, drawing units.

    Returns:
        The batch; sketches with non-finite vertices are left out and listed in `dropped`.
    """
    flat = [np.asarray(s.xyz, dtype=np.float64) for s in sketches]
    sizes = np.array([len(xyz) for xyz in flat], dtype=np.int64)
    far = _peaks(flat, sizes) > 1e15
    dropped = [(s, OUT_OF_REACH) for s, bad in zip(sketches, far, strict=True) if bad]
    kept = [s for s, bad in zip(sketches, far, strict=True) if not bad]
    _resolve_bulges([s for s in kept if s.bulges is not None], sagitta)
    for sketch in kept:
        if sketch.axes is not None:
            sketch.xyz = (np.asarray(sketch.xyz, dtype=np.float64).reshape(-1, 3) @ sketch.axes).ravel()
            sketch.axes = None
    counts = [len(s.xyz) // 3 for s in kept]
    xyz = np.concatenate([s.xyz for s in kept]).reshape(-1, 3) if kept else np.empty((0, 3))
    starts = [0, *np.cumsum(counts, dtype=np.int64).tolist()]
    return Batch(kept, xyz, starts, dropped)


def _peaks(flat: list[Floats], sizes: np.ndarray) -> Floats:
    """Largest magnitude of each vertex list; NaN counts as infinite."""
    peaks = np.zeros(len(flat))
    filled = sizes > 0
    if filled.any():
        size = np.nan_to_num(np.abs(np.concatenate(flat)), nan=np.inf, posinf=np.inf)
        peaks[filled] = np.maximum.reduceat(size, (np.cumsum(sizes) - sizes)[filled])
    return peaks


def _resolve_bulges(curved: list[Sketch], sagitta: float) -> None:
    """Give every bulged sketch its chords instead, in its own plane."""
    if not curved:
        return
    rings = [np.asarray(s.xyz, dtype=np.float64).reshape(-1, 3) for s in curved]
    ahead = [np.roll(r, -1, axis=0) for r in rings]
    bulges = [np.asarray(s.bulges, dtype=np.float64).copy() for s in curved]
    for sketch, own in zip(curved, bulges, strict=True):
        if not sketch.closed:
            own[-1] = 0.0
    all_rings, all_ahead = np.concatenate(rings), np.concatenate(ahead)
    points, counts = flatten_bulges(all_rings[:, :2], all_ahead[:, :2], np.concatenate(bulges), sagitta)
    level = np.repeat(all_rings[:, 2], counts)
    placed = np.column_stack((points, level))
    ends = np.cumsum([len(r) for r in rings])
    stops = np.cumsum(counts)[ends - 1]
    begin = 0
    for sketch, stop in zip(curved, stops.tolist(), strict=True):
        sketch.xyz = placed[begin:stop].ravel()
        sketch.bulges = None
        begin = stop


class Placing(NamedTuple):
    """Where a batch goes: world metres = vertex @ matrix + shift, and what its parts inherit."""

    file: str
    matrix: Floats
    shift: Floats
    item: str = ""
    layer: str = "0"
    tags: dict[str, str] | None = None
    evidence: str = ""


def place(batch: Batch, at: Placing) -> tuple[list[Part], list[tuple[str, str]]]:
    """Turn a batch into parts in metres.

    Args:
        batch: Settled sketches.
        at: Matrix and shift to world metres, and the inherited item, layer and tags.

    Returns:
        The parts, and (item, reason) of every sketch that gave none.
    """
    moved = batch.xyz @ at.matrix + at.shift
    xs, ys = moved[:, 0].tolist(), moved[:, 1].tolist()
    level = moved[:, 2]
    flat = len(level) > 0 and bool((level == level[0]).all())
    zs = [float(level[0])] * len(level) if flat else level.tolist()
    parts: list[Part] = []
    empty: list[tuple[str, str]] = []
    mover = _Mover(at)
    far = _far(moved, batch.starts)
    for index, (sketch, a, b) in enumerate(zip(batch.sketches, batch.starts, batch.starts[1:], strict=False)):
        points = tuple(zip(xs[a:b], ys[a:b], zs[a:b], strict=True))
        part = OUT_OF_REACH if index in far else mover.part(sketch, points)
        if isinstance(part, str):
            empty.append((at.item or sketch.item, part))
        else:
            parts.append(part)
    return parts, empty


def _far(moved: Floats, starts: list[int]) -> set[int]:
    """Indices of the sketches that have a vertex off the earth."""
    beyond = ~(np.abs(moved).max(axis=1, initial=0.0) < FARTHEST)
    return set((np.searchsorted(starts, np.flatnonzero(beyond), side="right") - 1).tolist())


class _Mover:
    """Makes one part of one placed sketch."""

    def __init__(self, at: Placing) -> None:
        self.at = at
        plan = abs(float(np.linalg.det(at.matrix[:2, :2])))
        self.plan_scale = math.sqrt(plan)
        self.rise_scale = float(at.matrix[2, 2])

    def part(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        """The part, or the reason why there is none."""
        if not points:
            return "no coordinates"
        if sketch.form == "conic":
            return self._conic(sketch, points)
        if sketch.form == "text":
            return self._text(sketch, points)
        if sketch.form == "point":
            return self._make(sketch, "point", points[:1])
        return self._line(sketch, points)

    def _line(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        closed = sketch.closed
        outer = sketch.rings[0] if sketch.rings else len(points)
        ring, rest = points[:outer], points[outer:]
        if len(ring) > 2 and ring[0] == ring[-1]:
            ring, closed = ring[:-1], True
        if len(ring) < 2 or (len(ring) == 2 and ring[0] == ring[1]):
            return "zero length"
        holes: list[tuple[Point3, ...]] = []
        for count in sketch.rings[1:]:
            holes.append(rest[:count])
            rest = rest[count:]
        form: Literal["path", "outline"] = "outline" if sketch.form == "outline" else "path"
        return self._make(sketch, form, ring, closed=closed and len(ring) > 2, holes=tuple(holes))

    def _conic(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        centre, a, b = (np.array(p) for p in points)
        along, across = a - centre, b - centre
        radius, other = float(np.linalg.norm(along)), float(np.linalg.norm(across))
        if max(radius, other) == 0.0:
            return "zero radius"
        slack = 1e-6 * radius
        level = abs(along[2]) <= slack and abs(across[2]) <= slack
        round_ = abs(radius - other) <= slack and abs(float(along @ across)) <= slack * radius and level
        span = sketch.span or (0.0, math.tau)
        whole = span[1] - span[0] >= math.tau - 1e-9
        if whole and round_:
            return self._make(sketch, "circle", points[:1], closed=True, radius=radius)
        chords = flatten_conic(centre, along, across, span, SAGITTA)
        path = tuple((x, y, z) for x, y, z in chords.tolist())
        tags = {"arc_centre": f"{points[0][0]!r} {points[0][1]!r}", "arc_radius": repr(radius)} if round_ else None
        return self._make(sketch, "path", path[:-1] if whole else path, closed=whole, tags=tags)

    def _text(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        start, along, up, *tips = points
        turn = math.degrees(math.atan2(along[1] - start[1], along[0] - start[0]))
        tags = {"height": f"{math.dist(start, up):.6g}", "rotation": f"{turn:.6g}"}
        if tips:
            tags["leader"] = "; ".join(f"{x!r} {y!r}" for x, y, _ in tips)
        if sketch.measure is not None:
            tags["measured"] = f"{sketch.measure * self.plan_scale:.9g}"
        return self._make(sketch, "text", points[:1], tags=tags)

    def _make(
        self,
        sketch: Sketch,
        form: Literal["path", "outline", "point", "circle", "text"],
        points: tuple[Point3, ...],
        *,
        closed: bool = False,
        holes: tuple[tuple[Point3, ...], ...] = (),
        radius: float | None = None,
        tags: dict[str, str] | None = None,
    ) -> Part:
        at = self.at
        bottom = top = None
        if sketch.rise:
            edges = sorted((points[0][2], points[0][2] + sketch.rise * self.rise_scale))
            bottom, top = edges[0], edges[1]
        return Part(
            source=Source(file=at.file, item=at.item or sketch.item),
            form=form,
            points=points,
            layer=at.layer if at.item and sketch.layer == "0" else sketch.layer,
            cls=sketch.cls,
            name=sketch.name,
            closed=closed,
            holes=holes,
            radius=radius,
            thickness=sketch.width * self.plan_scale if sketch.width else None,
            z_bottom=bottom,
            z_top=top,
            text=sketch.text,
            tags={**(at.tags or {}), **(sketch.tags or {}), **(tags or {})},
            evidence=at.evidence or sketch.evidence,
        )
