"""The file's own count: which entities it holds, where, and under which name each is known."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ingest.dxf.tagscan import SUBENTITIES, Tags

_PLAIN = frozenset({"LINE", "LWPOLYLINE", "CIRCLE", "TEXT", "ARC"})
"""Kinds that never draw a block; most entities are of these."""
_LAYOUTS = ("*model_space", "*paper_space")


@dataclass(slots=True)
class RawFigures:
    """Entities as the bytes list them: by layout section, by block, with a name for each of the modelspace."""

    space: Counter[str] = field(default_factory=Counter)
    blocks: dict[str, Counter[str]] = field(default_factory=dict)
    kinds: list[str] = field(default_factory=list)
    items: list[str] = field(default_factory=list)
    repeated: tuple[str, ...] = ()
    """Handles that stand at more than one entity."""

    def total(self) -> Counter[str]:
        """All entities by type."""
        return sum(self.blocks.values(), self.space.copy())


def list_raw(tags: Tags) -> RawFigures:
    """List the entities of a file from its tags alone.

    Args:
        tags: Checked tags of the file.

    Returns:
        The list. An item is the entity's handle; where the file gives none, or gives one twice, the place in the file.
    """
    raw = RawFigures()
    first, last = tags.sections.get("ENTITIES", (0, 0))
    a, b = np.searchsorted(tags.zeros, (first, last)).tolist()
    handles = _values(tags, a, b, 5)
    paper = {k for k, value in _values(tags, a, b, 67).items() if value not in (b"0", b"\0\0")}
    own = [k for k in range(a, b) if tags.names[k] not in SUBENTITIES]
    raw.space.update(tags.names[k] for k in own)
    counts = Counter(handles[k] for k in own if handles.get(k))
    repeated = {handle for handle, count in counts.items() if count > 1}
    raw.repeated = tuple(sorted(handle.decode("latin-1") for handle in repeated))
    for k in own:
        if k in paper:
            continue
        handle = handles.get(k, b"")
        name = handle.decode("latin-1")
        if not handle:
            name = tags.place(int(tags.zeros[k]))
        elif handle in repeated:
            name = f"{name} at {tags.place(int(tags.zeros[k]))}"
        raw.kinds.append(tags.names[k])
        raw.items.append(name)
    _list_blocks(tags, raw)
    return raw


def _values(tags: Tags, a: int, b: int, code: int) -> dict[int, bytes]:
    """First value with a code in each entity from a to b (indices into `zeros`)."""
    if a == b:
        return {}
    first = int(tags.zeros[a])
    last = int(tags.zeros[b]) if b < len(tags.zeros) else len(tags.codes)
    at = np.flatnonzero(tags.codes[first:last] == code) + first
    owners = np.searchsorted(tags.zeros, at, side="right") - 1
    found: dict[int, bytes] = {}
    for owner, value in zip(owners.tolist(), tags.values(at), strict=True):
        found.setdefault(owner, value)
    return found


def _list_blocks(tags: Tags, raw: RawFigures) -> None:
    first, last = tags.sections.get("BLOCKS", (0, 0))
    a, b = np.searchsorted(tags.zeros, (first, last)).tolist()
    titles = _values(tags, a, b, 2)
    current = ""
    for k in range(a, b):
        name = tags.names[k]
        if name == "BLOCK":
            current = titles.get(k, b"").decode("latin-1")
            raw.blocks.setdefault(current, Counter())
        elif name != "ENDBLK" and name not in SUBENTITIES:
            raw.blocks.setdefault(current, Counter())[name] += 1


@dataclass(slots=True)
class Account:
    """Every entity to be accounted for: those of the modelspace one by one, the others by number and reason."""

    items: list[str]
    """Name of each entity of the modelspace, in step with `space`."""
    space: list[Any]
    aside: Counter[str]
    lost: Counter[str]
    """Entities the bytes hold and the loaded drawing does not, by type; those inside inserted blocks too."""

    @property
    def entities(self) -> int:
        """The file's own count."""
        return len(self.items) + sum(self.aside.values())


def open_account(document: Any, raw: RawFigures) -> Account:
    """Set what the library loaded against what the bytes hold.

    Args:
        document: The loaded drawing.
        raw: The entities by the bytes.

    Returns:
        The account. Entities the library dropped from a layout or an unused block stand in `aside` as lost.
    """
    space = list(document.modelspace())
    kinds = [e.dxftype() for e in space]
    sheets = [layout for layout in document.layouts if layout.name != "Model"]
    in_layouts = Counter(kinds) + Counter(e.dxftype() for sheet in sheets for e in sheet)
    expected = raw.space.copy()
    for name, counts in raw.blocks.items():
        if name.lower().startswith(_LAYOUTS):
            expected += counts
    aside: Counter[str] = Counter()
    aside["paper space"] = sum(in_layouts.values()) - len(space)
    for kind, count in (expected - in_layouts).items():
        aside[f"lost in reading: {kind}"] += count
    own = {name.lower() for name in raw.blocks}
    drawing = [entity for entity, kind in zip(space, kinds, strict=True) if kind not in _PLAIN]
    reached = _reached(document, [*drawing, *(entity for sheet in sheets for entity in sheet)])
    blocks = [block for block in document.blocks if not block.name.lower().startswith(_LAYOUTS)]
    unused = [block for block in blocks if block.name.lower() in own - reached and len(block)]
    aside["block never inserted"] = sum(len(block) for block in unused)
    loaded = in_layouts + Counter(e.dxftype() for block in blocks for e in block)
    return Account(_names(space, kinds, raw), space, +aside, raw.total() - loaded)


def _names(space: list[Any], kinds: list[str], raw: RawFigures) -> list[str]:
    """Names of the loaded entities; the raw ones where both lists agree, else handles made unique."""
    handles = [str(entity.dxf.handle) for entity in space]
    if kinds == raw.kinds:
        # one string for both where they are equal: half the memory
        return [own if own == name else name for own, name in zip(handles, raw.items, strict=True)]
    seen: Counter[str] = Counter()
    names = []
    for handle in handles:
        seen[handle] += 1
        names.append(handle if seen[handle] == 1 else f"{handle} no. {seen[handle]}")
    return names


def _reached(document: Any, entities: list[Any]) -> set[str]:
    """Lower-case names of the blocks that these entities draw, directly or through other blocks."""
    by_handle = {block.block_record_handle: block.name.lower() for block in document.blocks}
    todo: list[Iterable[Any]] = [entities]
    reached: set[str] = set()
    while todo:
        for entity in todo.pop():
            for name in _drawn_by(entity, by_handle):
                if name not in reached:
                    reached.add(name)
                    todo.append(document.blocks.get(name) or ())
    return reached


def _drawn_by(entity: Any, by_handle: dict[str, str]) -> list[str]:
    """Blocks one entity draws."""
    kind = entity.dxftype()
    if kind == "INSERT":
        return [str(vars(entity.dxf).get("name", "")).lower()]
    if kind in _PLAIN:
        return []
    known = vars(entity.dxf)
    names = [str(known["geometry"]).lower()] if known.get("geometry") else []
    handles = [known.get("block_record_handle")]
    note_block = getattr(getattr(entity, "context", None), "block", None)
    if note_block is not None:
        handles.append(note_block.block_record_handle)
    return names + [by_handle[h] for h in handles if h in by_handle]
