"""From bands to verdicts: the rules of combining, in one place, for arrays and for a handful of bands.

A ratio is the real three-dimensional demand over the demand of the 2D section; larger is worse.

1. Criteria of one mechanism are alternatives: their hull. A cross-check widens a hull and never makes one.
2. Across mechanisms relief never offsets excess: low is the product of min(1, low), high that of max(1, high). A band
   that stands alone is taken as it is. One computation that carries several mechanisms replaces their product.
3. The margin of the model is applied once, to the combined band.
4. An excess that survives every relief stays an excess.

Source: project rules (judgement), with worked cases in `tests/sections/test_verdict.py`.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import get_args

import numpy as np

from ingest.model import Limits
from sections.found import Bands, CriterionResult
from sections.model import Bools, Floats, Ints, Mechanism
from sections.proposal import WORST_FIRST, Verdict, VerdictWord
from sections.verdicts.margins import StationMargins

TOLERANCE = 1e-9
"""Slack of every comparison with a limit: bands of exactly 0.9 to 1.1 hold."""

NOT_2D, UNDER, UNDECIDED, NOT_ASSESSED, OVER, HOLDS = range(len(WORST_FIRST))
MECHANISMS: tuple[Mechanism, ...] = get_args(Mechanism)


@dataclass(frozen=True, kw_only=True)
class Combined:
    """Bands after combining, arrays (n, o); nan where not assessed.

    Attributes:
        low, high: With the model's margin.
        bare_low, bare_high: Without it.
        word: Index into WORST_FIRST.
        missing: True where something that bears on the output is there and could not be evaluated.
    """

    low: Floats
    high: Floats
    bare_low: Floats
    bare_high: Floats
    word: Ints
    missing: Bools
    e_low: Floats
    e_high: Floats
    """Margin that was applied."""
    not_measured: Bools
    """True where no margin exists."""


def share_weighted(ratio: float, share: float | None) -> tuple[float, float]:
    """Band of an output of which a load makes the share `share`, its own ratio being `ratio`.

    The real demand is (1 - f) + f r of the 2D one. With the share unknown it lies anywhere between 1 and r.
    """
    if share is None:
        return min(1.0, ratio), max(1.0, ratio)
    value = 1.0 + share * (ratio - 1.0)
    return value, value


def combine(
    bands: Sequence[tuple[float, float]], e_low: float = 0.0, e_high: float = 0.0, limits: Limits | None = None
) -> tuple[float, float, VerdictWord]:
    """Combine a handful of bands, one per mechanism, loads already share-weighted.

    Args:
        bands: (low, high) of each mechanism.
        e_low, e_high: Margin of the model.
        limits: Limits of the verdict; the defaults when left out.

    Returns:
        Band with the margin, and the verdict word; nan and `not_assessed` without any band.
    """
    low = np.array([[[band[0]]] for band in bands]).reshape(len(bands), 1, 1)
    high = np.array([[[band[1]]] for band in bands]).reshape(len(bands), 1, 1)
    low, high = combine_arrays(low, high, np.array([[e_low]]), np.array([[e_high]]), limits or Limits())
    word = words_of(low, high, limits or Limits())
    return float(low[0, 0]), float(high[0, 0]), WORST_FIRST[int(word[0, 0])]


def combine_arrays(low: Floats, high: Floats, e_low: Floats, e_high: Floats, limits: Limits) -> tuple[Floats, Floats]:
    """Combine mechanisms (m, n, o) into bands (n, o); nan where a mechanism says nothing.

    Args:
        low, high: Bands of the mechanisms.
        e_low, e_high: Margins (n, o).
        limits: For the limit beyond which a surviving excess stays.
    """
    silent = np.isnan(low)
    count = np.sum(~silent, axis=0)
    relief = np.prod(np.where(silent, 1.0, np.clip(low, 0.0, 1.0)), axis=0)
    excess = np.prod(np.where(silent, 1.0, np.maximum(high, 1.0)), axis=0)
    most_low = np.max(np.where(silent, -np.inf, low), axis=0, initial=-np.inf)
    most_high = np.max(np.where(silent, -np.inf, high), axis=0, initial=-np.inf)
    alone = count == 1
    all_relieve = ~alone & (most_high <= 1.0)

    survives = (1.0 - e_low) * np.maximum(1.0, most_low) * relief
    lower = np.where(survives > limits.ratio_high + TOLERANCE, survives, relief * (1.0 - e_low))
    # a band that stands alone may reach below zero: the margin still widens it
    single = np.where(alone, most_low, 0.0)
    lower = np.where(alone, single - e_low * np.abs(single), lower)
    upper = np.where(alone, most_high, excess) * (1.0 + e_high)
    upper = np.where(all_relieve, np.maximum(1.0, most_high * (1.0 + e_high)), upper)
    none = count == 0
    return np.where(none, np.nan, lower), np.where(none, np.nan, upper)


def words_of(low: Floats, high: Floats, limits: Limits) -> Ints:
    """Verdict (index into WORST_FIRST) of bands of any shape; gates and gaps come on top."""
    word = np.where(low < limits.ratio_low - TOLERANCE, OVER, HOLDS)
    word = np.where(high > limits.ratio_high + TOLERANCE, UNDECIDED, word)
    word = np.where(low > limits.ratio_high + TOLERANCE, UNDER, word)
    return np.where(np.isnan(low) | np.isnan(high), NOT_ASSESSED, word)


def settle(results: Sequence[CriterionResult]) -> tuple[CriterionResult, ...]:
    """Settle what criteria may say beside each other.

    A cross-check counts only where another criterion of its mechanism speaks: it never stands alone. A band by class of
    wall alone is for want of better: it stands aside wherever a computation that carries its mechanism speaks.
    """
    settled = []
    for result in results:
        if result.by_class_only:
            computed = [one.assessed for one in results if one.carries and _covers(one, result.mechanism)]
            better = np.any(computed, axis=0) if computed else np.zeros_like(result.assessed)
            missing = None if result.missing is None else result.missing & ~better
            settled.append(replace(result, assessed=result.assessed & ~better, missing=missing))
        elif result.cross_check:
            spoken = [one.assessed for one in results if not one.cross_check and _covers(one, result.mechanism)]
            backed = np.any(spoken, axis=0) if spoken else np.zeros_like(result.assessed)
            settled.append(replace(result, assessed=result.assessed & backed))
        else:
            settled.append(result)
    return tuple(settled)


def _covers(result: CriterionResult, mechanism: Mechanism) -> bool:
    return mechanism == result.mechanism or mechanism in result.carries


def hulls(results: Sequence[CriterionResult]) -> tuple[Floats, Floats, Bools]:
    """Hull of every mechanism, and of every computation that carries several in their place.

    Args:
        results: Settled results.

    Returns:
        low, high (m, n, o), nan where silent; missing (n, o), where a gap is not filled by such a computation.
    """
    shape = results[0].low.shape
    low = {name: np.full(shape, np.nan) for name in MECHANISMS}
    high = {name: np.full(shape, np.nan) for name in MECHANISMS}
    gaps = {name: np.zeros(shape, dtype=bool) for name in MECHANISMS}
    for result in results:
        if result.carries:
            continue
        name = result.mechanism
        low[name] = np.where(result.assessed, np.fmin(low[name], result.low), low[name])
        high[name] = np.where(result.assessed, np.fmax(high[name], result.high), high[name])
        if result.missing is not None:
            gaps[name] |= result.missing
    carriers = [_carry(result, low, high, gaps) for result in results if result.carries]
    lows = [*low.values(), *(one[0] for one in carriers)]
    highs = [*high.values(), *(one[1] for one in carriers)]
    return np.stack(lows), np.stack(highs), np.any(list(gaps.values()), axis=0)


def _carry(
    result: CriterionResult, low: dict[Mechanism, Floats], high: dict[Mechanism, Floats], gaps: dict[Mechanism, Bools]
) -> tuple[Floats, Floats]:
    """Let one computation stand for all its mechanisms where it is assessed; what they said widens it."""
    own_low, own_high = result.low.copy(), result.high.copy()
    for name in {result.mechanism, *result.carries}:
        own_low = np.where(result.assessed, np.fmin(own_low, low[name]), own_low)
        own_high = np.where(result.assessed, np.fmax(own_high, high[name]), own_high)
        low[name] = np.where(result.assessed, np.nan, low[name])
        high[name] = np.where(result.assessed, np.nan, high[name])
        gaps[name] &= ~result.assessed
    if result.missing is not None:
        gaps[result.mechanism] |= result.missing
    return own_low, own_high


def combine_results(results: Sequence[CriterionResult], margins: StationMargins, limits: Limits) -> Combined:
    """Combine everything the criteria said along one perimeter.

    Args:
        results: One settled result per criterion, arrays (n, o).
        margins: Margin of the model (n, o); not applied where every band holds its own.
        limits: Limits of the verdict.

    A gap that bears on an output lets no relief stand: `holds` and `over_states` become `not_assessed` and lose their
    band. A warning that the bands give before any margin stays, with the band of what could be assessed: a gap must
    never hide it.
    """
    low, high, missing = hulls(results)
    missing = missing | margins.not_measured
    bare = np.any([result.assessed & (not result.own_margin) for result in results], axis=0)
    zero = np.zeros(bare.shape)
    e_low, e_high = np.where(bare, margins.e_low, zero), np.where(bare, margins.e_high, zero)
    with_low, with_high = combine_arrays(low, high, e_low, e_high, limits)
    bare_low, bare_high = combine_arrays(low, high, zero, zero, limits)
    word = words_of(with_low, with_high, limits)
    by_class = np.any([result.assessed & result.by_class_only for result in results], axis=0)
    word = np.where(by_class & (word == HOLDS), UNDECIDED, word)
    warns = np.nan_to_num(bare_high, nan=0.0) > limits.ratio_high + TOLERANCE
    word = np.where(missing & ~((word < NOT_ASSESSED) & warns), NOT_ASSESSED, word)
    gate = np.any([result.gate for result in results], axis=0)
    word = np.where(gate, NOT_2D, word)
    hide = (word == NOT_ASSESSED) | gate
    return Combined(
        low=np.where(hide, np.nan, with_low),
        high=np.where(hide, np.nan, with_high),
        bare_low=np.where(hide, np.nan, bare_low),
        bare_high=np.where(hide, np.nan, bare_high),
        word=word.astype(np.int64),
        missing=missing,
        e_low=e_low,
        e_high=e_high,
        not_measured=margins.not_measured,
    )


def find_dominant(results: Sequence[CriterionResult], combined: Combined, limits: Limits) -> Ints:
    """Criterion (index into `results`) that decides each verdict (n, o); -1 where none does.

    The gate that shuts; else the gap; else the largest excess where the band passes the upper limit; else the end that
    lies farther from 1.
    """
    stack = [np.where(result.assessed, result.low, np.nan) for result in results]
    relief = np.stack([np.where(np.isnan(low), -np.inf, 1.0 - low) for low in stack])
    excess = np.stack([np.where(r.assessed, np.nan_to_num(r.high) - 1.0, -np.inf) for r in results])
    over = combined.high > limits.ratio_high + TOLERANCE
    worse = np.where(np.max(relief, axis=0) > np.max(excess, axis=0), relief.argmax(axis=0), excess.argmax(axis=0))
    decides = np.where(over, excess.argmax(axis=0), worse)
    spoken = np.any([result.assessed for result in results], axis=0)
    gaps = np.stack([np.zeros_like(r.gate) if r.missing is None else r.missing for r in results])
    gates = np.stack([result.gate for result in results])
    decides = np.where(spoken, decides, -1)
    decides = np.where(combined.word == NOT_ASSESSED, np.where(np.any(gaps, axis=0), gaps.argmax(axis=0), -1), decides)
    return np.where(combined.word == NOT_2D, gates.argmax(axis=0), decides).astype(np.int64)


def gather(results: Sequence[CriterionResult], chainage: Floats, outputs: tuple[str, ...]) -> Bands:
    """Stack the criteria of one perimeter into arrays (k, n, o)."""
    return Bands(
        chainage=chainage,
        low=np.stack([np.where(result.assessed, result.low, np.nan) for result in results]),
        high=np.stack([np.where(result.assessed, result.high, np.nan) for result in results]),
        assessed=np.stack([result.assessed for result in results]),
        criteria=tuple(result.code for result in results),
        outputs=outputs,
    )


def score_of(low: Floats, high: Floats, word: Ints, missing: Bools, governing: Bools) -> Floats:
    """Representativeness score per station (n,): least over its assessed outputs of 100 max(0, min(low, 1/high)).

    Geometric, not a factor of safety. nan while a governing output is not assessed or rests on a gap; 0 where a gate
    shuts an output.
    """
    shut = np.any(word == NOT_2D, axis=1)
    open_ = np.any(governing & ((word == NOT_ASSESSED) | missing), axis=1)
    spoken = word != NOT_ASSESSED
    with np.errstate(divide="ignore", invalid="ignore"):
        worth = 100.0 * np.clip(np.minimum(low, 1.0 / high), 0.0, None)
    least = np.min(np.where(spoken & ~np.isnan(worth), worth, np.inf), axis=1)
    return np.where(shut, 0.0, np.where(open_ | ~np.isfinite(least), np.nan, least))


def worst_first(verdicts: Iterable[Mapping[str, Verdict]]) -> dict[str, Verdict]:
    """Worst verdict by output over the walls of a section, in the order of WORST_FIRST; of equal words the higher."""
    worst: dict[str, Verdict] = {}
    for wall in verdicts:
        for output, verdict in wall.items():
            if output not in worst or _badness(verdict) < _badness(worst[output]):
                worst[output] = verdict
    return worst


def _badness(verdict: Verdict) -> tuple[int, float, float]:
    low = 0.0 if verdict.low is None else verdict.low
    high = float("inf") if verdict.high is None else verdict.high
    return WORST_FIRST.index(verdict.verdict), -high, low
