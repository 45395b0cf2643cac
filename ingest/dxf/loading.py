"""Bytes on disk -> a loaded drawing, in recovery mode where need be, with what was lost on the way."""

from __future__ import annotations

import gc
import logging
import re
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ingest.dxf.damage import SEND_AGAIN, find_bad_number
from ingest.dxf.tagscan import scan_tags
from ingest.errors import InputError

_LINE = re.compile(r"\b(line):? (\d+)")
_ENTITY = re.compile(r"\b([A-Z_]{3,})\(#([0-9A-F]+)\)")
MANY_OBJECTS = 1_000_000
"""More new objects than this are set aside from the collector: it would walk through all of them to find nothing."""


@dataclass(slots=True)
class Loaded:
    """A drawing and how it was got."""

    document: Any
    recovered: str = ""
    """Why recovery mode was needed, "" when it was not."""
    repairs: tuple[str, ...] = ()


@contextmanager
def quiet() -> Iterator[None]:
    """Keep the library's log off the user's screen and the collector from walking a growing drawing again and again."""
    log = logging.getLogger("ezdxf")
    was_off, was_collecting = log.disabled, gc.isenabled()
    log.disabled = True
    gc.disable()
    try:
        yield
    finally:
        log.disabled = was_off
        if gc.get_count()[0] > MANY_OBJECTS:
            gc.freeze()
        if was_collecting:
            gc.enable()


def load_document(path: Path) -> Loaded:
    """Load a drawing.

    Args:
        path: The file; its bytes have been checked.

    Raises:
        InputError: When recovery mode fails as well.
    """
    import ezdxf

    try:
        return Loaded(ezdxf.readfile(path))
    except Exception as fault:  # the library raises nearly anything on damaged files
        first = describe_fault(fault)
    from ezdxf import recover

    try:
        document, auditor = recover.readfile(path)
    except Exception:
        bad = find_bad_number(scan_tags(path.read_bytes()))
        words = f"{bad[1]!r} stands where a number must be" if bad else f"cannot be loaded: {first}"
        place = bad[0] if bad else _place(first)
        raise InputError(path.name, place, words, SEND_AGAIN) from None
    repairs = tuple(str(entry.message) for entry in auditor.errors)
    return Loaded(document, first, repairs)


def let_go(document: Any) -> None:
    """Take a drawing apart, so that its memory comes back at once and not when the collector finds its circles."""
    for entity in list(document.entitydb.values()):
        release(entity)
    vars(document).clear()


def release(entity: Any) -> None:
    """Free what one loaded entity holds; it refers to itself, so that nothing else would before the collector comes."""
    try:  # noqa: SIM105  a context costs more than the work, 200,000 times
        entity.destroy()
    except AttributeError:  # some kinds fail on what they never had
        pass
    vars(entity).clear()


def _place(words: str) -> str:
    """Line or entity that a library's message names."""
    found = _LINE.search(words) or _ENTITY.search(words)
    return " ".join(found.groups()) if found else "whole file"


def describe_fault(fault: Exception) -> str:
    """One line of what the library says, where it says it in words."""
    from ezdxf import DXFError

    words = " ".join(str(fault).split())
    known = isinstance(fault, DXFError | ValueError) and " " in words
    return words[:160].rstrip(".") if known else "its structure is damaged"
