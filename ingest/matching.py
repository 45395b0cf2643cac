"""Which entries of the brief mean which entity."""

from __future__ import annotations

import re
from collections.abc import Sequence
from fnmatch import fnmatchcase
from functools import lru_cache
from typing import Protocol, TypeVar

from ingest.brief_lines import quoted
from ingest.brief_tables import Match
from ingest.parts import Part


class HasMatch(Protocol):
    """An entry of the brief that may say which entities it means."""

    @property
    def match(self) -> Match | None:
        """The pattern, None when the entry names no entity."""


Entry = TypeVar("Entry", bound=HasMatch)


def fits(match: Match, part: Part) -> bool:
    """Whether all given keys of a match fit a part; capitals do not matter, `*` and `?` stand for any letters.

    A layer bound into the drawing from another one ("plan$0$WALL") is met by its own name too, a class with a
    predefined type ("IfcWall.RETAININGWALL") by the class alone.
    """
    pairs = (
        (match.layer, (part.layer, part.layer.rpartition("$")[2])),
        (match.cls, (part.cls, part.cls.partition(".")[0])),
        (match.name, (part.name,)),
        (match.id, (part.source.item,)),
    )
    return all(pattern is None or any(_like(pattern, text) for text in texts) for pattern, texts in pairs)


def find_entry(entries: Sequence[Entry], part: Part) -> tuple[int, Entry] | None:
    """Find the first entry that names the part, with its number."""
    return next(
        ((n, entry) for n, entry in enumerate(entries) if entry.match is not None and fits(entry.match, part)), None
    )


def alike(name: str) -> str:
    """The pattern of names that differ in their numbers only."""
    return re.sub(r"\d+", "*", name)


def match_line(layer: str, name: str, cls: str, item: str = "") -> str:
    """The line of a brief that means all parts like one: by its layer, else name, else class, else id.

    Example:
        >>> match_line("", "Strut 12", "IfcMember")
        'match = { name = "Strut *" }'
    """
    pairs = (("layer", layer), ("name", alike(name)), ("class", cls), ("id", item))
    key, value = next(((key, value) for key, value in pairs if value), ("id", item))
    return f"match = {{ {key} = {quoted(value)} }}"


@lru_cache(maxsize=65536)
def _like(pattern: str, text: str) -> bool:
    return fnmatchcase(text.casefold(), pattern.casefold().replace("[", "[[]"))
