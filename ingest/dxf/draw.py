"""Entities of the modelspace -> parts, chunk by chunk, with the reason for each that gives none."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ingest.dxf.annotation import Leader, read_leader
from ingest.dxf.blocks import MOST_FIGURES, BlockBook, attribute_texts, attributes, copies, insert_matrices
from ingest.dxf.clip import clip_parts, clipping_outline
from ingest.dxf.curves import SAGITTA
from ingest.dxf.figures import sketch
from ingest.dxf.layers import LayerTable
from ingest.dxf.linework import layer_of
from ingest.dxf.sketch import Left, Placing, Sketch, place, settle
from ingest.dxf.text import decode
from ingest.errors import InputError
from ingest.model import Part

CHUNK = 5_000
MOST_PARTS = 3_000_000
"""More parts than this from one file would not fit into memory."""

BRIEF_SAYS_NO = Left("ignored", "layer ignored by the brief")
HIDDEN = Left("context", "hidden entity")


@dataclass(slots=True)
class Drawn:
    """What came of the modelspace. `aside` counts the entities without a part by kind and reason."""

    parts: list[Part] = field(default_factory=list)
    aside: dict[str, Counter[str]] = field(default_factory=lambda: {"context": Counter(), "ignored": Counter()})
    leaders: list[Leader] = field(default_factory=list)
    xrefs: set[str] = field(default_factory=set)
    examples: dict[str, str] = field(default_factory=dict)
    """First item of each reason."""


class Drawer:
    """Draws the entities of one file."""

    def __init__(self, file: str, scale: float, document: Any, layers: LayerTable) -> None:
        """Args: metres per drawing unit, the loaded drawing, its layers."""
        self.file, self.scale, self.layers = file, scale, layers
        self.book = BlockBook(document, SAGITTA / scale, layers.ignored)
        self.drawn = Drawn()
        self._made: set[str] = set()
        self._why: dict[str, Left] = {}

    def draw(self, named: list[tuple[str, Any]], progress: Callable[[int], None] | None = None) -> Drawn:
        """Draw all entities; the list is emptied on the way so that their memory is given back."""
        named.reverse()
        done = 0
        while named:
            chunk = [named.pop() for _ in range(min(CHUNK, len(named)))]
            self._draw_chunk(chunk)
            done += len(chunk)
            if progress is not None:
                progress(done)
            if len(self.drawn.parts) > MOST_PARTS:
                words = f"its inserts give more than {MOST_PARTS} figures"
                raise InputError(self.file, chunk[-1][0], words, "send less of the drawing")
        return self.drawn

    def _draw_chunk(self, chunk: list[tuple[str, Any]]) -> None:
        plain: list[Sketch] = []
        parts: list[tuple[int, Part]] = []
        order = {item: k for k, (item, _) in enumerate(chunk)}
        self._made, self._why = set(), {}
        for item, entity in chunk:
            found = self._one(item, entity)
            if isinstance(found, Left):
                self._why[item] = found
                continue
            for figure in found:
                if isinstance(figure, Part):
                    self._made.add(item)
                    parts.append((order[item], figure))
                else:
                    plain.append(figure)
        parts += [(order[part.source.item], part) for part in self._place_plain(plain)]
        parts.sort(key=lambda pair: pair[0])
        self.drawn.parts += [part for _, part in parts]
        for item, _ in chunk:
            if item not in self._made:
                kind, reason = self._why.get(item, Left("ignored", "draws nothing"))
                self.drawn.aside[kind][reason] += 1
                self.drawn.examples.setdefault(reason, item)

    def _one(self, item: str, entity: Any) -> Sequence[Sketch | Part] | Left:
        known = vars(entity.dxf)
        layer = self.layers.plain(layer_of(known))
        if layer.casefold() in self.layers.ignored:
            return BRIEF_SAYS_NO
        kind = entity.dxftype()
        if kind in ("INSERT", "ACAD_TABLE"):
            return self._insert(item, entity, layer)
        if kind == "LEADER":
            leader = read_leader(entity)
            if leader is not None:
                self.drawn.leaders.append(leader)
            return Left("context", "leader line")
        figures = sketch(entity, self.book.sagitta)
        if isinstance(figures, Left):
            return figures
        state = self.layers.state(layer)
        for figure in figures:
            figure.item, figure.layer = item, layer
            if state:
                figure.tags = {**(figure.tags or {}), "layer_state": state}
        return figures

    def _place_plain(self, plain: list[Sketch]) -> list[Part]:
        batch = settle(plain, self.book.sagitta)
        placed, empty = place(batch, Placing(self.file, np.eye(3) * self.scale, np.zeros(3)))
        for item, why in [*((s.item, why) for s, why in batch.dropped), *empty]:
            self._why[item] = Left("ignored", why)
        self._made |= {part.source.item for part in placed}
        return placed

    def _insert(self, item: str, entity: Any, layer: str) -> list[Part] | Left:
        known = vars(entity.dxf)
        table = entity.dxftype() == "ACAD_TABLE"
        name = str(known.get("geometry" if table else "name", ""))
        refused = self._refuse_insert(name, known)
        if refused is not None:
            return refused
        block = self.book.block(name)
        matrix, shifts = insert_matrices(known, block.block.dxf.base_point)
        batch = self.book.content(name, matrix)
        state = self.layers.state(layer)
        tags = {**({} if table else attributes(entity)), **({"layer_state": state} if state else {})}
        window = None if table else clipping_outline(entity, block.block.dxf.base_point)
        columns, _ = copies(known)
        parts: list[Part] = []
        reasons: list[str] = [why for _, why in batch.dropped]
        for k, shift in enumerate(shifts):
            evidence = f"row {k // columns + 1}, column {k % columns + 1} of an array" if len(shifts) > 1 else ""
            at = Placing(self.file, matrix * self.scale, shift * self.scale, item, layer, tags, evidence)
            placed, empty = place(batch, at)
            if window is not None:
                placed = clip_parts(placed, window[0] @ at.matrix + at.shift, window[1])
            parts += [part for part in placed if part.form == "text"] if table else placed
            reasons += [why for _, why in empty]
        if not table:
            words = settle(attribute_texts(entity), self.book.sagitta)
            parts += place(words, Placing(self.file, np.eye(3) * self.scale, np.zeros(3), item, layer))[0]
        if parts:
            return parts
        return Left("ignored", reasons[0]) if reasons else Left("context", "insert that draws nothing")

    def _refuse_insert(self, name: str, known: dict[str, Any]) -> Left | None:
        if known.get("invisible", 0):
            return HIDDEN
        block = self.book.block(name)
        if block is None:
            return Left("ignored", "insert of a block that is not in the file")
        if block.block.dxf.flags & 12:
            self.drawn.xrefs.add(decode(str(block.block.dxf.get("xref_path", "") or name)))
            return Left("ignored", "other drawing attached by reference: not read")
        columns, rows = copies(known)
        figures = self.book.figures(name)
        if figures < 0:
            return Left("ignored", "insert of a block that holds itself")
        if figures * columns * rows > MOST_FIGURES or columns * rows > MOST_FIGURES:
            return Left("ignored", f"insert that gives more than {MOST_FIGURES} figures")
        return None
