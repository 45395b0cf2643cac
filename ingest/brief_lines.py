"""Where each key of a TOML text stands, so that a message can name the line."""

from __future__ import annotations

import re
import tomllib

from ingest.receive import shown

KeyPath = tuple[str | int, ...]

_KEY = re.compile(r"""\s*(?:(?P<bare>[A-Za-z0-9_-]+)|(?P<quoted>"(?:[^"\\\n]|\\.)*")|'(?P<literal>[^'\n]*)')\s*""")
_STRINGS = ('"""', "'''", '"', "'")


def find_lines(text: str) -> dict[KeyPath, int]:
    """Find the line (from 1) of every table header and key of a valid TOML text.

    Args:
        text: TOML that `tomllib` has accepted.

    Returns:
        Line by key path, with indices for the tables of an array: ("walls", 0, "toe").
    """
    lines: dict[KeyPath, int] = {}
    arrays: dict[KeyPath, int] = {}
    table: KeyPath = ()
    at = 0
    while at < len(text):
        at = _skip_blank(text, at)
        if at >= len(text):
            break
        line = text.count("\n", 0, at) + 1
        if text[at] == "[":
            double = text.startswith("[[", at)
            keys, end = _read_keys(text, at + (2 if double else 1))
            table = _open_table(keys, arrays, double)
            lines.setdefault(table, line)
            if double:
                lines.setdefault(table[:-1], line)
            at = _line_end(text, end)
        else:
            keys, end = _read_keys(text, at)
            lines.setdefault((*table, *keys), line)
            at = _value_end(text, end + 1)
    return lines


def nearest_line(lines: dict[KeyPath, int], path: KeyPath) -> int | None:
    """Find the line of a key path, or of the innermost table around it that has one."""
    for size in range(len(path), 0, -1):
        if path[:size] in lines:
            return lines[path[:size]]
    return None


def _open_table(keys: KeyPath, arrays: dict[KeyPath, int], double: bool) -> KeyPath:
    path: KeyPath = ()
    for number, key in enumerate(keys):
        path = (*path, key)
        if double and number == len(keys) - 1:
            arrays[path] = arrays.get(path, 0) + 1
        if path in arrays:
            path = (*path, arrays[path] - 1)
    return path


def _read_keys(text: str, at: int) -> tuple[KeyPath, int]:
    keys: list[str] = []
    while match := _KEY.match(text, at):
        quoted = match["quoted"]
        keys.append(tomllib.loads(f"k = {quoted}")["k"] if quoted else match["bare"] or match["literal"] or "")
        at = match.end()
        if text[at : at + 1] != ".":
            break
        at += 1
    return tuple(keys), at


def _skip_blank(text: str, at: int) -> int:
    while at < len(text):
        if text[at] == "#":
            at = _line_end(text, at)
        elif text[at].isspace():
            at += 1
        else:
            break
    return at


def _line_end(text: str, at: int) -> int:
    end = text.find("\n", at)
    return len(text) if end < 0 else end + 1


def _value_end(text: str, at: int) -> int:
    depth = 0
    while at < len(text):
        mark = next((quote for quote in _STRINGS if text.startswith(quote, at)), "")
        if mark:
            at = _string_end(text, at, mark)
        elif text[at] == "#":
            at = _line_end(text, at) - 1
        elif text[at] == "\n" and depth == 0:
            return at + 1
        else:
            depth += (text[at] in "[{") - (text[at] in "]}")
            at += 1
    return at


def _string_end(text: str, at: int, mark: str) -> int:
    at += len(mark)
    while at < len(text) and not text.startswith(mark, at):
        at += 2 if text[at] == "\\" and mark[0] == '"' else 1
    at += len(mark)
    while len(mark) == 3 and text.startswith(mark[0], at):  # up to two quotes may stand before the closing three
        at += 1
    return at


def quoted(text: str) -> str:
    """A TOML basic string of any text."""
    escapes = {"\\": "\\\\", '"': '\\"', "\n": "\\n", "\r": "\\r", "\t": "\\t"}
    safe = (escapes.get(c) or (f"\\u{ord(c):04x}" if ord(c) < 32 or ord(c) == 127 else c) for c in text)
    return '"' + "".join(safe) + '"'


def one_line(text: str) -> str:
    """A text that cannot leave its comment line."""
    return shown(text.replace("\n", " "))
