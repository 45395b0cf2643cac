"""What a station's verdicts allow: shown, provisional, or its own analysis, with the reason and what to do."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sections.model import Bools, Ints
from sections.proposal import WORST_FIRST
from sections.verdicts.judged import JudgedPit
from sections.verdicts.sentences import NAMES
from sections.verdicts.verdict import NOT_2D, NOT_ASSESSED, OVER, TOLERANCE, UNDECIDED, UNDER


@dataclass(frozen=True, kw_only=True)
class Standing:
    """Whether the stations of one pit may be represented, arrays (n,) and (n, o).

    Attributes:
        shown: Every governing output is `holds` or `over_states`.
        provisional: The rest is not assessed or narrowly undecided, and at least one governing output is assessed.
        open: (n, o) the outputs that are not yet shown.
    """

    shown: Bools
    provisional: Bools
    open: Bools

    @property
    def representable(self) -> Bools:
        """Shown or provisional."""
        return np.asarray(self.shown | self.provisional)


def find_standing(judged: JudgedPit) -> Standing:
    """Judge whether each station may be represented by a section cut elsewhere.

    *Narrowly* undecided compares the band before the model's own margin with `Limits.ratio_narrow`. Measured with the
    margin, no row of piles could ever be represented, not even provisionally, as its margin alone is 0.37. The verdict
    itself keeps the margin.
    """
    c, governing, limits = judged.combined, judged.governing, judged.limits
    good = (c.word >= OVER) & ~c.missing
    with np.errstate(invalid="ignore"):
        narrow = (c.word == UNDECIDED) & (c.bare_high <= limits.ratio_narrow + TOLERANCE)
    tolerable = good | narrow | (c.word == NOT_ASSESSED)
    spoken = governing & (c.word != NOT_ASSESSED) & ~c.missing
    shown = np.all(good | ~governing, axis=1) & np.any(governing, axis=1)
    provisional = ~shown & np.all(tolerable | ~governing, axis=1) & np.any(spoken, axis=1)
    return Standing(shown=shown, provisional=provisional, open=governing & ~good)


def open_outputs(judged: JudgedPit, standing: Standing) -> tuple[Ints, tuple[tuple[str, ...], ...]]:
    """Outputs not yet shown, as an index (n,) into the sets that occur; set 0 is empty."""
    bits = standing.open @ (1 << np.arange(standing.open.shape[1]))
    bits = np.where(standing.provisional, bits, 0)
    kinds, index = np.unique(np.append(0, bits), return_inverse=True)
    sets = tuple(tuple(name for o, name in enumerate(judged.outputs) if int(kind) >> o & 1) for kind in kinds)
    return index[1:].astype(np.int64), sets


@dataclass(frozen=True, kw_only=True)
class Reasons:
    """Why stations are not represented: index (n,) into pairs of reason and what to do."""

    index: Ints
    pairs: tuple[tuple[str, str], ...]


ALIKE = (
    "the verdicts would allow it, but no section that may be cut is alike here and no worse",
    "allow a cut here, or analyse this stretch on its own",
)


def find_reasons(judged: JudgedPit, standing: Standing) -> Reasons:
    """Name for each station the worst thing that keeps it from being represented."""
    c, governing = judged.combined, judged.governing
    words = np.where(governing, c.word, len(WORST_FIRST))
    with np.errstate(invalid="ignore"):
        narrow = c.bare_high <= judged.limits.ratio_narrow + TOLERANCE
    blocking = (words == NOT_2D) | (words == UNDER) | ((words == UNDECIDED) & ~narrow)
    nothing = ~blocking.any(axis=1) & ~standing.representable
    blocking |= nothing[:, None] & governing
    worst = np.min(np.where(blocking, words, len(WORST_FIRST)), axis=1)
    chief = (blocking & (words == worst[:, None])).argmax(axis=1)
    rows = np.arange(len(worst))
    decides = judged.dominant[rows, chief]
    listed = blocking @ (1 << np.arange(blocking.shape[1]))
    keys = np.column_stack([standing.representable, worst, decides, listed])
    kinds, index = np.unique(keys, axis=0, return_inverse=True)
    pairs = tuple(_pair(judged, *(int(value) for value in kind)) for kind in kinds)
    return Reasons(index=index.reshape(-1).astype(np.int64), pairs=pairs)


def _pair(judged: JudgedPit, representable: int, worst: int, decides: int, listed: int) -> tuple[str, str]:
    if representable:
        return ALIKE
    outputs = [NAMES[name] for o, name in enumerate(judged.outputs) if listed >> o & 1]
    chief = None if decides < 0 else judged.results[decides]
    by = "" if chief is None else f" (criterion {chief.code})"
    settled = "its own analysis" if chief is None or not chief.settled_by else chief.settled_by
    return f"{_words(worst, outputs)}{by}", f"needs its own analysis; settled by {settled}" if chief else settled


def _words(worst: int, outputs: Sequence[str]) -> str:
    named = ", ".join(outputs)
    if worst == NOT_2D:
        return f"no 2D section describes {named} here"
    if worst == UNDER:
        return f"the 2D answer is too small for {named}"
    if worst == UNDECIDED:
        return f"the band of {named} reaches too far past the limit"
    return f"nothing that governs is assessed: {named}"
