"""Settled figures -> parts in metres, one set for each place they are put at."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import accumulate, pairwise
from typing import Any, Literal, NamedTuple

import numpy as np

from ingest.dxf.curves import SAGITTA, Floats, flatten_conic
from ingest.dxf.sketch import OUT_OF_REACH, Batch, Sketch
from ingest.members import Point3
from ingest.parts import Form, Part
from ingest.trail import Source

FARTHEST = 1e8
"""Coordinates beyond this many metres are more than twice the earth's girth: no place on a site."""
Matrix = tuple[Point3, Point3, Point3]
IDENTITY: Matrix = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
_AT_ONCE = 200_000
"""Vertices moved in one go."""


class Placing(NamedTuple):
    """Where a batch goes: world metres = vertex @ matrix + shift, and what its parts inherit.

    With an empty `item` each figure keeps its own.
    """

    matrix: Matrix
    shift: Point3
    item: str = ""
    layer: str = "0"
    tags: dict[str, str] | None = None
    evidence: str = ""


class Placed(NamedTuple):
    """What became of a batch: its parts, and (item, reason) for each figure that gave none."""

    parts: list[Part]
    empty: list[tuple[str, str]]


def place(batch: Batch, places: Sequence[Placing], file: str) -> Placed:
    """Turn a batch into parts in metres.

    Args:
        batch: Settled sketches.
        places: Where they go.
        file: Name for the sources.

    Returns:
        Parts in order of the places.
    """
    found = Placed([], [])
    step = max(1, _AT_ONCE // max(1, len(batch.xyz)))
    spans = list(zip(batch.sketches, batch.starts, batch.starts[1:], strict=False))
    for first in range(0, len(places), step):
        some = places[first : first + step]
        matrices, shifts = np.array([p.matrix for p in some]), np.array([p.shift for p in some])
        moved = np.matmul(batch.xyz, matrices) + shifts[:, None, :]
        far = _far(moved, batch.starts)
        flat = (moved[:, :, 2] == moved[:, :1, 2]).all(axis=1).tolist()
        for k, (xs, ys, zs) in enumerate(moved.transpose(0, 2, 1).tolist()):
            # one float for all levels of a plane figure: half the memory
            levels = zs[:1] * len(zs) if flat[k] else zs
            points = list(zip(xs, ys, levels, strict=True))
            _place_once(spans, points, _Mover(some[k], file), far.get(k, set()), found)
    return found


def _place_once(
    spans: list[tuple[Sketch, int, int]], points: list[Point3], mover: _Mover, far: set[int], found: Placed
) -> None:
    for n, (sketch, a, b) in enumerate(spans):
        part = OUT_OF_REACH if n in far else mover.part(sketch, tuple(points[a:b]))
        if isinstance(part, str):
            found.empty.append((mover.at.item or sketch.item, part))
        else:
            found.parts.append(part)


def _far(moved: Floats, starts: list[int]) -> dict[int, set[int]]:
    """By place, the figures with a vertex off the earth."""
    if not moved.size or np.abs(moved).max() < FARTHEST:
        return {}
    places, vertices = np.nonzero(~(np.abs(moved).max(axis=2) < FARTHEST))
    found: dict[int, set[int]] = {}
    for k, n in zip(places.tolist(), (np.searchsorted(starts, vertices, side="right") - 1).tolist(), strict=True):
        found.setdefault(k, set()).add(n)
    return found


class _Mover:
    """Makes the parts of one place."""

    def __init__(self, at: Placing, file: str) -> None:
        self.at, self.file = at, file
        self.source = Source(file=file, item=at.item) if at.item else None
        (a, b, _), (c, d, _), (_, _, self.rise_scale) = at.matrix
        self.plan_scale = math.sqrt(abs(a * d - b * c))

    def part(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        """The part, or the reason why there is none."""
        if not points:
            return "no coordinates"
        form = sketch.form
        if form == "path" or form == "outline":
            return self._line(sketch, form, points)
        if form == "conic":
            return self._conic(sketch, points)
        if form == "text":
            return self._text(sketch, points)
        return self._make(sketch, "point", points[:1])

    def _line(self, sketch: Sketch, form: Literal["path", "outline"], points: tuple[Point3, ...]) -> Part | str:
        more: dict[str, Any] = {}
        if len(sketch.rings) > 1:
            bounds = list(accumulate(sketch.rings))
            more["holes"] = tuple(points[a:b] for a, b in pairwise(bounds))
            points = points[: bounds[0]]
        closed = sketch.closed
        if len(points) > 2 and points[0] == points[-1]:
            points, closed = points[:-1], True
        if len(points) < 2 or (len(points) == 2 and points[0] == points[1]):
            return "zero length"
        if closed and len(points) > 2:
            more["closed"] = True
        return self._make(sketch, form, points, **more)

    def _conic(self, sketch: Sketch, points: tuple[Point3, ...]) -> Part | str:
        centre, a, b = points
        radius, other = math.dist(centre, a), math.dist(centre, b)
        if max(radius, other) == 0.0:
            return "zero radius"
        slack = 1e-6 * radius
        along, across = _arm(centre, a), _arm(centre, b)
        level = abs(along[2]) <= slack and abs(across[2]) <= slack
        square = abs(sum(u * v for u, v in zip(along, across, strict=True))) <= slack * radius
        round_ = level and square and abs(radius - other) <= slack
        whole = sketch.span is None or sketch.span[1] - sketch.span[0] >= math.tau - 1e-9
        if whole and round_:
            return self._make(sketch, "circle", points[:1], closed=True, radius=radius)
        span = sketch.span or (0.0, math.tau)
        chords = flatten_conic(np.array(centre), np.array(along), np.array(across), span, SAGITTA)
        path = tuple((x, y, z) for x, y, z in chords.tolist())
        tags = {"arc_centre": f"{centre[0]!r} {centre[1]!r}", "arc_radius": repr(radius)} if round_ else {}
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

    def _make(self, sketch: Sketch, form: Form, points: tuple[Point3, ...], **more: Any) -> Part:
        """A part with what differs from a plain line only: most figures are plain, and there are many of them."""
        at = self.at
        layer = at.layer if at.item and sketch.layer == "0" else sketch.layer
        if sketch.rise:
            ends = points[0][2], points[0][2] + sketch.rise * self.rise_scale
            more["z_bottom"], more["z_top"] = min(ends), max(ends)
        if sketch.width:
            more["thickness"] = sketch.width * self.plan_scale
        if at.tags or sketch.tags:
            more["tags"] = {**(at.tags or {}), **(sketch.tags or {}), **more.get("tags", {})}
        if sketch.name:
            more["name"] = sketch.name
        if sketch.text:
            more["text"] = sketch.text
        if at.evidence or sketch.evidence:
            more["evidence"] = at.evidence or sketch.evidence
        source = self.source or Source(file=self.file, item=sketch.item)
        return Part(source=source, form=form, points=points, layer=layer, cls=sketch.cls, **more)


def _arm(centre: Point3, end: Point3) -> Point3:
    return end[0] - centre[0], end[1] - centre[1], end[2] - centre[2]
