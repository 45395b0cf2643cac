"""Entities of the modelspace -> parts, chunk by chunk, with the reason for each that gives none."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ingest.dxf.account import Account
from ingest.dxf.annotation import Leader, read_leader
from ingest.dxf.blocks import (
    MOST_FIGURES,
    BlockBook,
    attribute_texts,
    attributes,
    copies,
    insert_matrices,
    scaled,
    scaled_point,
)
from ingest.dxf.clip import clip_parts, clipping_outline
from ingest.dxf.curves import SAGITTA, Floats
from ingest.dxf.figures import sketch
from ingest.dxf.layers import LayerTable, LayerUse
from ingest.dxf.loading import release
from ingest.dxf.placing import IDENTITY, Placing, place
from ingest.dxf.sketch import Batch, Left, Sketch, settle
from ingest.dxf.text import decode
from ingest.errors import InputError
from ingest.parts import Part

CHUNK = 5_000
MOST_PARTS = 3_000_000
"""More parts than this from one file would not fit into memory."""

BRIEF_SAYS_NO = Left("ignored", "layer ignored by the brief")
HIDDEN = Left("context", "hidden entity")
DRAWS_NOTHING = Left("context", "insert that draws nothing")


@dataclass(slots=True)
class Drawn:
    """What came of the modelspace. `aside` counts the entities without a part by kind and reason."""

    parts: list[Part] = field(default_factory=list)
    aside: dict[str, Counter[str]] = field(default_factory=lambda: {"context": Counter(), "ignored": Counter()})
    leaders: list[Leader] = field(default_factory=list)
    xrefs: set[str] = field(default_factory=set)
    examples: dict[str, str] = field(default_factory=dict)
    """First item of each reason."""


@dataclass(slots=True)
class _Chunk:
    """Entities drawn together: plain figures, and the places of each block."""

    plain: list[Sketch] = field(default_factory=list)
    places: dict[int, tuple[Batch, list[Placing]]] = field(default_factory=dict)
    clipped: dict[str, tuple[Floats, bool]] = field(default_factory=dict)
    tables: set[str] = field(default_factory=set)
    why: dict[str, Left] = field(default_factory=dict)

    def add(self, figures: list[Sketch], item: str, layer: LayerUse) -> None:
        """Take in plain figures under the name and the layer of their entity."""
        for figure in figures:
            figure.item, figure.layer = item, layer.name
            if layer.state:
                figure.tags = {**(figure.tags or {}), "layer_state": layer.state}
        self.plain += figures


class Drawer:
    """Draws the entities of one file."""

    def __init__(self, file: str, scale: float, document: Any, layers: LayerTable) -> None:
        """Args: metres per drawing unit, the loaded drawing, its layers."""
        self.file, self.scale, self.layers = file, scale, layers
        self.book = BlockBook(document, SAGITTA / scale, layers)
        self.drawn = Drawn()
        self._world = Placing(scaled(IDENTITY, scale), (0.0, 0.0, 0.0))

    def draw(self, account: Account, progress: Callable[[int], None] | None = None) -> Drawn:
        """Draw all entities of the modelspace.

        The account's list of them is emptied on the way and what each holds is freed, so that the drawing gives memory
        back while the parts take it.
        """
        account.space.reverse()
        for first in range(0, len(account.items), CHUNK):
            items = account.items[first : first + CHUNK]
            chunk = [(item, account.space.pop()) for item in items]
            self._draw_chunk(chunk)
            for _, entity in chunk:
                release(entity)
            if progress is not None:
                progress(first + len(items))
            if len(self.drawn.parts) > MOST_PARTS:
                words = f"its inserts give more than {MOST_PARTS} figures"
                raise InputError(self.file, items[-1], words, "send less of the drawing")
        return self.drawn

    def _draw_chunk(self, entities: list[tuple[str, Any]]) -> None:
        chunk = _Chunk()
        for item, entity in entities:
            left = self._one(item, entity, chunk)
            if left is not None:
                chunk.why[item] = left
        parts = self._place_all(chunk)
        for item, (outline, hidden_inside) in chunk.clipped.items():
            shown = clip_parts((part for part in parts if part.source.item == item), outline, hidden_inside)
            parts = [part for part in parts if part.source.item != item] + shown
        self.drawn.parts += parts
        made = {part.source.item for part in parts}
        for item, _ in entities:
            if item not in made:
                kind, reason = chunk.why.get(item, DRAWS_NOTHING)
                self.drawn.aside[kind][reason] += 1
                self.drawn.examples.setdefault(reason, item)

    def _place_all(self, chunk: _Chunk) -> list[Part]:
        parts: list[Part] = []
        plain = settle(chunk.plain, self.book.sagitta)
        for figure, why in plain.dropped:
            chunk.why.setdefault(figure.item, Left("ignored", why))
        for batch, places in [*chunk.places.values(), (plain, [self._world])]:
            placed = place(batch, places, self.file)
            for item, why in placed.empty:
                chunk.why.setdefault(item, Left("ignored", why))
            parts += placed.parts
        if chunk.tables:  # their rules are annotation
            parts = [part for part in parts if part.form == "text" or part.source.item not in chunk.tables]
        return parts

    def _one(self, item: str, entity: Any, chunk: _Chunk) -> Left | None:
        known = vars(entity.dxf)
        layer = self.layers.use(known.get("layer", "0"))
        if layer.left_out:
            return BRIEF_SAYS_NO
        if known.get("invisible", 0):
            return HIDDEN
        kind = entity.dxftype()
        if kind in ("INSERT", "ACAD_TABLE"):
            return self._insert(item, entity, layer, chunk)
        if kind == "LEADER":
            leader = read_leader(entity)
            if leader is not None:
                self.drawn.leaders.append(leader)
            return Left("context", "leader line")
        figures = sketch(kind, entity, self.book.sagitta)
        if isinstance(figures, Left):
            return figures
        chunk.add(figures, item, layer)
        return None

    def _insert(self, item: str, entity: Any, layer: LayerUse, chunk: _Chunk) -> Left | None:
        known = vars(entity.dxf)
        table = entity.dxftype() == "ACAD_TABLE"
        name = str(known.get("geometry" if table else "name", ""))
        refused = self._refuse_insert(name, known)
        if refused is not None:
            return refused
        base = self.book.base(name)
        matrix, shifts = insert_matrices(known, base)
        batch = self.book.content(name, matrix)
        for _, why in batch.dropped:
            chunk.why.setdefault(item, Left("ignored", why))
        own = {} if table else attributes(entity)
        tags = {**own, "layer_state": layer.state} if layer.state else own
        places = chunk.places.setdefault(id(batch), (batch, []))[1]
        metres = scaled(matrix, self.scale)
        columns, _ = copies(known)
        for k, shift in enumerate(shifts):
            words = f"row {k // columns + 1}, column {k % columns + 1} of an array" if len(shifts) > 1 else ""
            places.append(Placing(metres, scaled_point(shift, self.scale), item, layer.name, tags, words))
        if table:
            chunk.tables.add(item)
            return None
        for figure in attribute_texts(entity):
            figure.item = item
            figure.layer = layer.name if figure.layer == "0" else figure.layer
            chunk.plain.append(figure)
        window = clipping_outline(entity, base)
        if window is not None:
            chunk.clipped[item] = (window[0] @ np.array(metres) + np.array(places[-1].shift), window[1])
        return None

    def _refuse_insert(self, name: str, known: dict[str, Any]) -> Left | None:
        block = self.book.block(name)
        if block is None:
            return Left("ignored", "insert of a block that is not in the file")
        if block.block.dxf.flags & 12:
            self.drawn.xrefs.add(decode(str(block.block.dxf.get("xref_path", "") or name)))
            return Left("ignored", "other drawing attached by reference: not read")
        columns, rows = copies(known)
        figures = self.book.figures(name)
        if figures < 0:
            return Left("ignored", "insert of a block that holds itself or nests too deep")
        if max(figures, 1) * columns * rows > MOST_FIGURES:
            return Left("ignored", f"insert that gives more than {MOST_FIGURES} figures")
        return None
