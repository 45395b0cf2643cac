"""What kind of wall a pile belongs to: as it is said to be, else as spacing, size and neighbours show."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.members import Pile, WallKind
from sections.model import Floats

EMBEDDED = ("diaphragm", "secant", "contiguous", "sheet", "king_post")
"""Walls built from the ground down to retain it, as against walls of a building."""
CLOSE_ROW = 1.8
"""Spacing over diameter up to which a row can only be a wall (common practice, no source)."""


def pile_size(pile: Pile) -> float | None:
    """Diameter of a pile, or the larger side of a post, m; None where neither is given."""
    if pile.diameter is not None:
        return pile.diameter
    section = pile.section
    if section is None:
        return None
    sizes = [size for size in (section.diameter, section.width, section.depth) if size is not None]
    return max(sizes) if sizes else None


def kinds_of(piles: Sequence[Pile], spans: Floats, closed: bool) -> tuple[WallKind, ...]:
    """Kind of each pile of a row: what it is said to be, else what spacing and size of its neighbours tell.

    Piles that cut into each other are secant, piles up to `CLOSE_ROW` diameters apart contiguous, steel posts and
    wider piles king posts (common practice, no source).
    """
    size = np.array([pile_size(pile) or np.nan for pile in piles])
    bays = spans if closed else np.append(spans, spans[-1:])
    after = bays / (0.5 * (size + np.roll(size, -1)))
    if not closed:
        after[-1:] = after[-2:-1]
    around = np.stack([np.roll(after, k) for k in (-1, 0, 1, 2)])
    if not closed and len(piles) > 3:
        around[0, -1], around[2, 0], around[3, :2] = after[-1], after[0], after[0]
    ratio = np.median(around, axis=0)
    return tuple(_pile_kind(pile, float(r)) for pile, r in zip(piles, ratio, strict=True))


def kinds_by_bay(piles: Sequence[Pile], after: Floats, given: Sequence[WallKind]) -> list[WallKind]:
    """Kinds of piles along a wall, those of unnamed piles by the distance to the next one over their sizes."""
    size = np.array([pile_size(pile) or np.nan for pile in piles])
    ratio = after / (0.5 * (size + np.roll(size, -1)))
    return [
        _pile_kind(pile, float(r)) if np.isfinite(r) else kind
        for pile, r, kind in zip(piles, ratio, given, strict=True)
    ]


def without_specks(piles: Sequence[Pile], given: Sequence[WallKind]) -> list[WallKind]:
    """Kinds along a wall with one or two unnamed piles between others given to the side of their layer and size.

    They only differ from both sides because two spacings meet there.
    """
    kinds = list(given)
    said = [pile.kind in EMBEDDED for pile in piles]
    size = [pile_size(pile) or 0.0 for pile in piles]
    starts = [k for k in range(len(kinds)) if k == 0 or (kinds[k], said[k]) != (kinds[k - 1], said[k - 1])]
    for a, b in zip(starts, [*starts[1:], len(kinds)], strict=True):
        if b - a > 2 or any(said[a:b]) or len(starts) == 1:
            continue
        sides = [k for k in (a - 1, b) if 0 <= k < len(kinds)]
        like = min(sides, key=lambda k: (piles[k].layer != piles[a].layer, abs(size[k] - size[a]), said[k], k))
        kinds[a:b] = [kinds[like]] * (b - a)
    return kinds


def _pile_kind(pile: Pile, ratio: float) -> WallKind:
    if pile.kind in EMBEDDED:
        return pile.kind
    if pile.diameter is None and pile.section is not None:
        return "king_post"
    if not np.isfinite(ratio):
        return "unknown"
    if ratio < 0.98:
        return "secant"
    return "contiguous" if ratio <= CLOSE_ROW else "king_post"
