"""A DXF drawing -> parts in metres, with every entity accounted for."""

from __future__ import annotations

import hashlib
from collections import Counter
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np

from ingest.dxf.blocks import BlockBook, attribute_texts, attributes, insert_matrices
from ingest.dxf.curves import SAGITTA
from ingest.dxf.figures import sketch
from ingest.dxf.linework import layer_of
from ingest.dxf.sketch import Left, Placing, Sketch, place, settle
from ingest.dxf.text import decode
from ingest.model import FileParts, Part
from ingest.units import METRES, unit_name

CHUNK = 5_000
INSUNITS = {1: "inch", 2: "foot", 4: "mm", 5: "cm", 6: "m"}


def read_dxf(path: Path, *, length_unit: str | None = None, ignore_layers: tuple[str, ...] = ()) -> FileParts:
    """Read a DXF drawing.

    Args:
        path: The file.
        length_unit: Unit of the drawing as the brief gives it; None to take the file's own.
        ignore_layers: Layers the brief leaves out.

    Returns:
        Parts in metres in the file's own frame. entities = entities that gave a part + context + ignored.

    Raises:
        InputError: When the file cannot be read.
    """
    import ezdxf

    document = ezdxf.readfile(path)
    unit = unit_name(length_unit) if length_unit else INSUNITS.get(int(document.header.get("$INSUNITS", 0) or 0), "m")
    scale = METRES[unit]
    book = BlockBook(document, SAGITTA / scale)
    left: dict[str, Counter[str]] = {"context": Counter(), "ignored": Counter()}
    ignore = {name.lower() for name in ignore_layers}
    entities = list(document.modelspace())
    parts: list[Part] = []
    for start in range(0, len(entities), CHUNK):
        parts += _read_chunk(entities[start : start + CHUNK], path.name, scale, book, ignore, left)
    paper = sum(len(layout) for layout in document.layouts if layout.name != "Model")
    if paper:
        left["ignored"]["paper space"] += paper
    return FileParts(
        file=path.name,
        sha256=hashlib.sha256(path.read_bytes()).hexdigest(),
        kind="dxf",
        schema_or_version=document.dxfversion,
        length_unit=unit,
        unit_scale=scale,
        entities=len(entities) + paper,
        parts=tuple(parts),
        context=dict(sorted(left["context"].items())),
        ignored=dict(sorted(left["ignored"].items())),
    )


def _read_chunk(
    entities: list[Any], file: str, scale: float, book: BlockBook, ignore: set[str], left: dict[str, Counter[str]]
) -> Iterator[Part]:
    plain: list[Sketch] = []
    reasons: dict[str, Left] = {}
    made: set[str] = set()
    unscaled = np.eye(3) * scale
    parts: list[Part] = []
    for entity in entities:
        item = str(entity.dxf.handle)
        layer = decode(layer_of(vars(entity.dxf)))
        if layer.lower() in ignore:
            reasons[item] = Left("ignored", "layer ignored by the brief")
            continue
        if entity.dxftype() == "INSERT":
            new = list(_insert_parts(entity, item, layer, file, scale, book))
            if new:
                made.add(item)
                parts += new
            else:
                reasons[item] = Left("ignored", "insert that draws nothing")
            continue
        figures = sketch(entity, book._sagitta)
        if isinstance(figures, Left):
            reasons[item] = figures
            continue
        for figure in figures:
            figure.item, figure.layer = item, layer
        plain += figures
    batch = settle(plain, book._sagitta)
    for figure, why in batch.dropped:
        reasons[figure.item] = Left("ignored", why)
    placed, empty = place(batch, Placing(file, unscaled, np.zeros(3)))
    made |= {part.source.item for part in placed}
    for item, why in empty:
        reasons[item] = Left("ignored", why)
    for item, why_left in reasons.items():
        if item not in made:
            left[why_left.kind][why_left.reason] += 1
    yield from parts
    yield from placed


def _insert_parts(entity: Any, item: str, layer: str, file: str, scale: float, book: BlockBook) -> Iterator[Part]:
    known = vars(entity.dxf)
    name = str(known.get("name", ""))
    block = book._blocks.get(name)
    if block is None:
        return
    matrix, shifts = insert_matrices(known, block.block.dxf.base_point)
    batch = book.content(name, matrix)
    tags = attributes(entity)
    for shift in shifts:
        yield from place(batch, Placing(file, matrix * scale, shift * scale, item, layer, tags))[0]
    words = settle(attribute_texts(entity), 1.0)
    yield from place(words, Placing(file, np.eye(3) * scale, np.zeros(3), item, layer))[0]
