"""What a row of piles is as a wall: males and females, spacing, and where its construction changes."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from ingest.members import Pile, WallKind
from ingest.model import Limits
from sections.model import Bools, Floats, Ints, Structural, Wall
from sections.perimeter.pile_kinds import pile_size

SAME_SIZE = 0.02
"""Diameters and thicknesses closer than this are alike, m."""
STRAIGHT = 10.0
"""Bays that turn by less than this stand in one straight stretch, degrees."""
LASTING = 3
"""Bays on either side that a change of spacing must last for."""


def near(a: float | None, b: float | None, limit: float) -> bool:
    """True when two facts agree within a limit, or neither is given."""
    return a == b or (a is not None and b is not None and abs(a - b) <= limit)


def find_males(piles: Sequence[Pile]) -> Bools | None:
    """Which piles of a secant row are males (secondaries): as said, else the larger, else the deeper of neighbours.

    Returns:
        A mask, or None where nothing tells them apart.
    """
    said = [pile.male for pile in piles]
    if any(said) and not all(said):
        return _alternate(np.array([0 if m is None else 1 if m else -1 for m in said]))
    for fact, limit in ((_diameter, SAME_SIZE), (_depth, 0.3)):
        value = np.array([fact(pile) for pile in piles])
        if len(value) < 3:
            continue
        around = 0.5 * (np.append(value[1], value[:-1]) + np.append(value[1:], value[-2]))
        verdict = np.where(value - around > limit, 1, np.where(around - value > limit, -1, 0))
        if (verdict != 0).mean() > 0.5 and (verdict > 0).any() and (verdict < 0).any():
            return _alternate(verdict)
    return None


def _diameter(pile: Pile) -> float:
    size = pile_size(pile)
    return np.nan if size is None else size


def _depth(pile: Pile) -> float:
    return np.nan if pile.toe is None else -pile.toe


def _alternate(verdict: Ints) -> Bools:
    """Fill undecided piles: neighbours of a male are females and the other way round."""
    filled = verdict.copy()
    for k in range(1, len(filled)):
        if filled[k] == 0:
            filled[k] = -filled[k - 1]
    for k in range(len(filled) - 2, -1, -1):
        if filled[k] == 0:
            filled[k] = -filled[k + 1]
    return np.asarray(filled > 0, dtype=np.bool_)


def bays(piles: Sequence[Pile], ring: bool = False) -> tuple[Floats, Bools]:
    """Distances between neighbours, m, and which of them stand in a straight (or evenly curved) stretch."""
    xy = np.array([pile.centre for pile in piles])
    if ring:
        xy = np.vstack((xy, xy[:1]))
    step = np.diff(xy, axis=0)
    span = np.hypot(*step.T)
    if len(step) < 2:
        return span, np.ones(len(step), dtype=bool)
    angle = np.arctan2(step[:, 1], step[:, 0])
    turn = np.abs((np.degrees(np.diff(angle)) + 180.0) % 360.0 - 180.0)
    typical = float(np.median(turn))
    bend = turn > typical + STRAIGHT
    last = [bend[-1]] if not ring else [abs((np.degrees(angle[0] - angle[-1]) + 180) % 360 - 180) > typical + STRAIGHT]
    first = last if ring else [bend[0]]
    straight = ~(np.append(first, bend) & np.append(bend, last))
    return span, straight


def split_row(piles: Sequence[Pile], kind: WallKind, limits: Limits, ring: bool) -> list[int]:
    """Numbers of the piles with which a new construction begins.

    On a ring the list holds 0 only where the first pile differs from the last.
    """
    if len(piles) < 2:
        return []
    male = find_males(piles) if kind == "secant" else None
    classes = [np.arange(len(piles))] if male is None else [np.flatnonzero(male), np.flatnonzero(~male)]
    cuts: list[int] = []
    for members in classes:
        cuts += _changes(piles, members, limits, ring)
    cuts += _spacing_changes(piles, limits, ring)
    kept: list[int] = []
    for k in sorted(set(cuts)):
        if not kept or k - kept[-1] > (1 if male is None else 2):
            kept.append(k)
    return kept


def _changes(piles: Sequence[Pile], members: Ints, limits: Limits, ring: bool) -> list[int]:
    if not len(members):
        return []
    found = []
    held = piles[members[0]]
    for k in members[1:].tolist():
        if not _same_pile_kind(held, piles[k], limits):
            found.append(k)
            held = piles[k]
    if ring and found and not _same_pile_kind(held, piles[members[0]], limits):
        found.append(int(members[0]))
    return [0 if ring and k <= 1 and k == members[0] else k for k in found]


def _same_pile_kind(a: Pile, b: Pile, limits: Limits) -> bool:
    """Alike in size, levels and facts; a fact that one of them lacks does not part them."""
    checks: tuple[tuple[Callable[[Pile], float | None], float], ...] = (
        (pile_size, SAME_SIZE), (lambda p: p.top, limits.level), (lambda p: p.toe, limits.level),
    )  # fmt: skip
    for fact, limit in checks:
        one, other = fact(a), fact(b)
        if one is not None and other is not None and abs(one - other) > limit:
            return False
    return _facts(a) == _facts(b)


def _facts(pile: Pile) -> tuple[object, ...]:
    post = None if pile.section is None else pile.section.designation
    return (pile.material, pile.EI_factor, pile.continuity, pile.capping_beam, post)


def _spacing_changes(piles: Sequence[Pile], limits: Limits, ring: bool) -> list[int]:
    """Piles at which the spacing changes for good, corner bays and single gaps passed over."""
    span, straight = bays(piles, ring)
    index = np.flatnonzero(straight)
    if len(index) < 2 * LASTING:
        return []
    even = span[index]
    windows = np.lib.stride_tricks.sliding_window_view(even, LASTING)
    before, after = np.median(windows, axis=1)[:-LASTING], windows[LASTING:]
    lasting = np.ptp(after, axis=1) <= limits.spacing_ratio * after.mean(axis=1)
    changed = (np.abs(after / before[:, None] - 1.0) > limits.spacing_ratio).all(axis=1) & lasting
    found: list[int] = []
    first = 0
    for k in (np.flatnonzero(changed) + LASTING).tolist():
        held = float(np.median(even[first:k]))
        if k - first >= LASTING and (np.abs(even[k : k + LASTING] / held - 1.0) > limits.spacing_ratio).all():
            found.append(int(index[k]))
            first = k
    if ring and found and abs(np.median(even[first:]) / np.median(even[:LASTING]) - 1.0) > limits.spacing_ratio:
        found.append(0)
    return found


def pile_wall(piles: Sequence[Pile], kind: WallKind, limits: Limits) -> Wall:
    """The wall that a run of piles makes. Size, top and toe of a secant wall are those of its males."""
    male = find_males(piles) if kind == "secant" else None
    bending = list(piles) if male is None else [pile for pile, is_male in zip(piles, male, strict=True) if is_male]
    bending = bending or list(piles)
    one = bending[0]
    return Wall(
        kind=kind,
        count=len(piles),
        centres=_typical(piles),
        diameter=_median([pile.diameter for pile in bending]),
        top=_median([pile.top for pile in bending]),
        toe=_median([pile.toe for pile in bending]),
        continuity=one.continuity,
        structural=_structural(piles, kind, bending, male),
        capping_beam=one.capping_beam,
        material=one.material,
        EI_factor=one.EI_factor,
        post=None if one.section is None else one.section.designation,
        sources=tuple(sorted({s for pile in piles for s in pile.sources}, key=lambda s: (s.file, s.item, s.how))),
    )


def _structural(piles: Sequence[Pile], kind: WallKind, bending: Sequence[Pile], male: Bools | None) -> Structural:
    """The piles that bend. Where nothing tells males from females, every second pile of a cut row is taken as one."""
    if kind == "king_post":
        return Structural(which="posts", count=len(piles), spacing=_typical(piles))
    if kind != "secant":
        return Structural(which="all", count=len(piles), spacing=_typical(piles))
    if male is not None:
        return Structural(which="male", count=len(bending), spacing=_typical(bending))
    centres = _typical(piles)
    if centres is None or not is_cut(piles):
        return Structural(which="male", count=len(piles), spacing=centres)
    return Structural(which="male", count=len(piles) // 2, spacing=2.0 * centres)


def is_cut(piles: Sequence[Pile]) -> bool:
    """True where neighbours of a row overlap, so that both males and females are drawn."""
    size = _median([pile_size(pile) for pile in piles])
    centres = _typical(piles)
    return size is not None and centres is not None and centres < size - 1e-3


def _typical(piles: Sequence[Pile]) -> float | None:
    """Median distance between neighbours in straight stretches."""
    if len(piles) < 2:
        return None
    span, straight = bays(piles)
    return float(np.median(span[straight] if straight.any() else span))


def _median(values: Sequence[float | None]) -> float | None:
    given = [value for value in values if value is not None]
    return float(np.median(given)) if given else None
