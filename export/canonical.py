"""Canonical JSON text: one way to write a number, one order of keys, so that equal content gives equal bytes."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterable
from math import isfinite
from typing import Any

from ingest.model import RING_OUTPUTS

WIDTH = 120
"""A list or object that fits into this many characters stands on one line."""
WORLD_PLACES = 4
"""World coordinates are written to 1e-4 m."""
DIGITS = 9

IsWorld = Callable[[tuple[str, ...]], bool]


def canonical_text(tree: object, is_world: IsWorld = lambda keys: False) -> str:
    """Write a tree of dicts, lists, texts, numbers, truths and None as JSON text with a final line break.

    Args:
        tree: What to write. Keys keep their order; sort them with `sort_free_keys` where they are names.
        is_world: Tells from the keys on the way to a number (list positions left out) that it is a world coordinate.

    Returns:
        JSON text: numbers to 9 significant digits, world coordinates to 1e-4 m, no exponent sign other than Python's.

    Raises:
        ValueError: On a non-finite number, naming its key path.
    """
    return _layout(_rounded(tree, (), "", is_world), 0) + "\n"


def round_number(value: float, digits: int = DIGITS) -> float:
    """Round to significant digits, and never return a negative zero.

    Example:
        >>> round_number(5193429.6481234567)
        5193429.65
    """
    return float(f"{value:.{digits}g}") + 0.0


def sort_free_keys(names: Iterable[str]) -> list[str]:
    """Order free names: outputs as the contract lists them, all others by their letters.

    Example:
        >>> sort_free_keys(["zeta", "support_force", "wall_deflection", "alpha"])
        ['wall_deflection', 'support_force', 'alpha', 'zeta']
    """
    rank = {output: n for n, output in enumerate(RING_OUTPUTS)}
    return sorted(names, key=lambda name: (rank.get(name, len(rank)), name))


def _rounded(tree: Any, keys: tuple[str, ...], path: str, is_world: IsWorld) -> Any:
    if isinstance(tree, float):
        if not isfinite(tree):
            raise ValueError(f"{path or 'the document'} is {tree}, and JSON has finite numbers only")
        return round(float(tree), WORLD_PLACES) + 0.0 if is_world(keys) else round_number(tree)
    if isinstance(tree, dict):
        return {
            key: _rounded(value, (*keys, key), f"{path}.{key}" if path else str(key), is_world)
            for key, value in tree.items()
        }
    if isinstance(tree, list | tuple):
        return [_rounded(value, keys, f"{path}[{n}]", is_world) for n, value in enumerate(tree)]
    return tree


def _layout(tree: Any, depth: int) -> str:
    if not isinstance(tree, dict | list) or not tree:
        return json.dumps(tree, ensure_ascii=False, allow_nan=False)
    inner = "  " * (depth + 1)
    if isinstance(tree, dict):
        items = [f"{json.dumps(key, ensure_ascii=False)}: {_layout(value, depth + 1)}" for key, value in tree.items()]
        opening, closing = "{", "}"
    else:
        items = [_layout(value, depth + 1) for value in tree]
        opening, closing = "[", "]"
    room = WIDTH - len(inner) - 2 * len(items)
    if sum(map(len, items)) <= room and not any("\n" in item for item in items):
        return opening + ", ".join(items) + closing
    if isinstance(tree, list) and all(not isinstance(value, dict | list) for value in tree):
        return opening + "\n" + _filled(items, inner) + "\n" + "  " * depth + closing
    return opening + "\n" + ",\n".join(inner + item for item in items) + "\n" + "  " * depth + closing


def _filled(items: list[str], inner: str) -> str:
    lines, line = [], inner
    for n, item in enumerate(items):
        piece = item + ("," if n < len(items) - 1 else "")
        if len(line) + len(piece) + 1 > WIDTH and line != inner:
            lines.append(line.rstrip())
            line = inner
        line += piece + " "
    return "\n".join([*lines, line.rstrip()])
