"""Dimensions, leaders and notes with leaders: what is written, and what it points at."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

from ingest.dxf.linework import incomplete
from ingest.dxf.sketch import Left, Sketch
from ingest.dxf.text import decode, plain_mtext, written

LINEAR, ALIGNED, DIAMETER, RADIUS = 0, 1, 3, 4
_MARKS = {DIAMETER: "\u00d8", RADIUS: "R"}


def sketch_dimension(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A dimension as the text it shows, with the length it measures.

    The lines and arrows of a dimension are annotation and give no part.
    """
    known = vars(entity.dxf)
    kind = known.get("dimtype", 0) & 7
    at = known.get("text_midpoint") or known.get("defpoint")
    if at is None:
        return incomplete("dimension without its place")
    measure = _measure(entity) if kind in (LINEAR, ALIGNED, DIAMETER, RADIUS) else None
    shown = str(known.get("text", "") or "<>")
    if "<>" in shown:
        if measure is None:
            return Left("context", "dimension of an angle or an ordinate")
        value = _MARKS.get(kind, "") + f"{round(measure * _style(entity, 'dimlfac'), 4):.10g}"
        shown = shown.replace("<>", value)
    words = decode(plain_mtext(shown)).strip()
    if not words:
        return Left("context", "dimension without text")
    height = _style(entity, "dimtxt") * _style(entity, "dimscale")
    figure = written(entity, (at.x, at.y, at.z), words, height, 0.0, planar=True)
    figure.measure = measure
    return [figure]


def _measure(entity: Any) -> float | None:
    """Measured length in drawing units from the definition points."""
    try:
        length = abs(float(entity.get_measurement()))
    except (TypeError, ValueError, AttributeError, ArithmeticError):
        return None
    return length if math.isfinite(length) and length > 0.0 else None


def _style(entity: Any, name: str) -> float:
    """A positive number of the dimension's style, its own overrides first; 1 where it has none."""
    try:
        value = float(entity.override().get(name, 1.0) or 1.0)
    except Exception:  # the library raises errors of its own for styles the file does not have
        return 1.0
    return value if math.isfinite(value) and value > 0.0 else 1.0


def sketch_multileader(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A note with its leaders: the text, its place, and the point of each leader."""
    context = entity.context
    place = context.mtext or context.block
    if place is None:
        return Left("context", "leader without a note")
    if context.mtext is not None:
        words = decode(plain_mtext(str(context.mtext.default_content))).strip()
    else:
        words = " ".join(decode(str(attrib.text)) for attrib in entity.block_attribs).strip()
    if not words:
        return Left("context", "leader without a note")
    at, height = place.insert, abs(float(context.char_height)) or 1.0
    figure = written(entity, (at.x, at.y, at.z), words, height, 0.0, planar=False)
    tips = [line.vertices[0] for leader in context.leaders for line in leader.lines if line.vertices]
    figure.xyz = [*figure.xyz, *(c for tip in tips for c in (tip.x, tip.y, tip.z))]
    return [figure]


class Leader(NamedTuple):
    """A plain leader: its point, its other end, and the handle of the note it belongs to, "" if none is named."""

    tip: tuple[float, float, float]
    tail: tuple[float, float, float]
    note: str


def read_leader(entity: Any) -> Leader | None:
    """A LEADER, world coordinates in drawing units; None when it has fewer than two vertices."""
    vertices = entity.vertices
    if len(vertices) < 2:
        return None
    tip, tail = vertices[0], vertices[-1]
    note = str(vars(entity.dxf).get("annotation_handle", "0"))
    return Leader((tip[0], tip[1], tip[2]), (tail[0], tail[1], tail[2]), "" if note == "0" else note)
