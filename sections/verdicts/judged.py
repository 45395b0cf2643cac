"""Every criterion at every station of one pit, combined: bands, words, scores, and sentences when they are asked."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import GOVERNING, OUTPUTS, RING_OUTPUTS, Limits, Site
from sections.criteria import CRITERIA, RING_CRITERIA, Criterion
from sections.found import Bands, CriterionResult, FoundPit
from sections.model import Bools, Floats, Ints
from sections.proposal import WORST_FIRST, Band, StationOutput, Verdict
from sections.verdicts.margins import StationMargins, margins_at
from sections.verdicts.sentences import Said, build_sentence
from sections.verdicts.verdict import (
    NOT_2D,
    NOT_ASSESSED,
    UNDECIDED,
    Combined,
    combine_results,
    find_dominant,
    gather,
    score_of,
    settle,
)

RETAINED = "wall_moment_retained_face"
UNMEASURED = "margins measured with model and block both resolved to single piles"
STAGE = "final dig"
"""The stage every criterion of this table speaks of, unless a computation takes the stages one by one."""


@dataclass(frozen=True, kw_only=True)
class JudgedPit:
    """One pit judged at all its stations, arrays (n, o) in the order of `outputs`.

    Attributes:
        found: The pit.
        limits: Limits it was judged by.
        outputs: Keys of the outputs.
        results: What each criterion said.
        combined: Bands and verdict words.
        dominant: Index into `results` of the criterion that decides; -1 where none does.
        governing: Outputs that decide what a section may stand for.
        provisional: Where a verdict rests on something not confirmed.
        unconfirmed: (n,) per station, the inputs not confirmed, as an index into `reasons`.
        reasons: Those inputs in words.
    """

    found: FoundPit
    limits: Limits
    outputs: tuple[str, ...]
    results: tuple[CriterionResult, ...]
    combined: Combined
    dominant: Ints
    governing: Bools
    provisional: Bools
    unconfirmed: Ints
    reasons: tuple[tuple[str, ...], ...]

    @property
    def scores(self) -> Floats:
        """Representativeness score of each station (n,), 0 to 100; nan while a governing output is not assessed."""
        c = self.combined
        return score_of(c.low, c.high, c.word, c.missing, self.governing)

    def score_at(self, station: int) -> float | None:
        """Score of one station, None while a governing output is not assessed."""
        value = float(self.scores[station])
        return None if np.isnan(value) else value

    def bands(self) -> Bands:
        """What every criterion said, stacked."""
        return gather(self.results, self.found.stations.chainage, self.outputs)

    def verdicts_at(self, station: int) -> dict[str, Verdict]:
        """Verdicts of one station by output, with their sentences."""
        return {name: self._verdict(station, o) for o, name in enumerate(self.outputs)}

    def rows_at(self, station: int, wall: str) -> tuple[Band, ...]:
        """Rows of the criteria table for one wall of a section: one for every criterion and output it can speak of."""
        rows: list[Band] = []
        for result in self.results:
            spoken = [o for o, name in enumerate(self.outputs) if name in result.speaks_of]
            rows += [self._row(result, station, o, wall) for o in spoken]
        return tuple(rows)

    def station_outputs(self) -> dict[str, StationOutput]:
        """Bands and verdicts along the whole perimeter, as the proposal lists them."""
        codes = np.array([*(result.code for result in self.results), ""])
        c = self.combined
        return {
            name: StationOutput(
                low=_listed(c.low[:, o]),
                high=_listed(c.high[:, o]),
                verdict=tuple(WORST_FIRST[word] for word in c.word[:, o]),
                dominant=tuple(str(code) or None for code in codes[self.dominant[:, o]]),
            )
            for o, name in enumerate(self.outputs)
        }

    def _row(self, result: CriterionResult, i: int, o: int, wall: str) -> Band:
        assessed = bool(result.assessed[i, o])
        return Band(
            code=result.code,
            mechanism=result.mechanism,
            output=self.outputs[o],
            wall=wall,
            low=float(result.low[i, o]) if assessed else None,
            high=float(result.high[i, o]) if assessed else None,
            assessed=assessed,
            basis=result.basis,
            reference=result.reference,
            inputs={name: _finite(values[i]) for name, values in result.inputs.items()},
            sentence=self._criterion_sentence(result, i, o),
            gate=bool(result.gate[i, o]),
            gap=bool(_missing(result)[i, o]),
            carries=result.carries,
            by_class_only=result.by_class_only,
        )

    def _criterion_sentence(self, result: CriterionResult, i: int, o: int) -> str:
        """The criterion's sentence, or why it leaves out this output while it speaks of others."""
        name = self.outputs[o]
        silent = np.isnan(result.low[i, o]) and not result.gate[i, o] and not bool(np.all(np.isnan(result.low[i])))
        if silent and name in result.silence:
            words = result.silence[name]
            return f"{words[:1].upper()}{words[1:]}."
        return result.sentence[i]

    def _verdict(self, i: int, o: int) -> Verdict:
        c = self.combined
        word = WORST_FIRST[int(c.word[i, o])]
        low, high = _finite(c.low[i, o]), _finite(c.high[i, o])
        decides = int(self.dominant[i, o])
        chief = None if decides < 0 else self.results[decides]
        gaps = [
            self._criterion_sentence(result, i, o)
            for result in self.results
            if result is not chief and _missing(result)[i, o]
        ]
        unmeasured = word == "not_assessed" and self.outputs[o] == RETAINED and bool(self.found.stations.rows[i])
        bare = _finite(c.bare_low[i, o]), _finite(c.bare_high[i, o])
        said = Said(
            output=self.outputs[o],
            word=word,
            low=low,
            high=high,
            bare=None if bare[0] is None or bare[1] is None else (bare[0], bare[1]),
            stage=self._stage(i, o),
            decides=self._unspoken(i, o) if chief is None or unmeasured else self._criterion_sentence(chief, i, o),
            gaps=gaps,
            settled_by=UNMEASURED if unmeasured else self._settled_by(chief, i, o),
            by_class=any(r.by_class_only and r.assessed[i, o] for r in self.results),
            provisional=self._why_provisional(i, o),
        )
        return Verdict(
            low=low,
            high=high,
            verdict=word,
            provisional=bool(self.provisional[i, o]),
            dominant=None if chief is None else chief.code,
            stage=None if word in ("not_assessed", "not_two_dimensional") else self._stage(i, o),
            sentence=build_sentence(said, self.limits),
            margin=None if low is None else (float(c.e_low[i, o]), float(c.e_high[i, o])),
            margin_measured=not bool(c.not_measured[i, o]),
        )

    def _settled_by(self, chief: CriterionResult | None, i: int, o: int) -> str:
        """What would settle the verdict; where only the model's own margin carries the band past the limit, that."""
        by_margin = self.combined.word[i, o] == UNDECIDED and self.combined.bare_high[i, o] <= self.limits.ratio_high
        if by_margin:
            return "a computation in three dimensions: the margin of this tool's own model decides, no input would"
        return "" if chief is None else chief.settled_by

    def _stage(self, i: int, o: int) -> str:
        """Stage that governs: that of the computation which takes them one by one, else the final dig."""
        for result in self.results:
            if result.stages is not None and result.assessed[i, o] and result.stages[1][i, o] >= 0:
                return result.stages[0][int(result.stages[1][i, o])]
        return STAGE

    def _why_provisional(self, i: int, o: int) -> tuple[str, ...]:
        if not self.provisional[i, o]:
            return ()
        recalled = [
            f"{r.code.replace('_', ' ')} quotes constants from memory"
            for r in self.results
            if r.recalled and r.assessed[i, o]
        ]
        return (*self.reasons[int(self.unconfirmed[i])], *recalled)

    def _unspoken(self, i: int, o: int) -> str:
        if self.outputs[o] == RETAINED and self.found.stations.rows[i]:
            return "No margin has been measured for the retained face of rows of piles."
        name = self.outputs[o]
        if name == "settlement":
            return "Only published ratios speak of it, and those never stand alone."
        speaks = [r for r in self.results if name in r.speaks_of and not r.cross_check]
        if not speaks:
            return "No criterion of this version speaks of it."
        return self._criterion_sentence(speaks[-1], i, o)


def judge_stations(
    site: Site, found: FoundPit, limits: Limits | None = None, *, axisymmetric: bool = False,
    criteria: Sequence[Criterion] | None = None,
) -> JudgedPit:  # fmt: skip
    """Judge every station of a pit by every criterion.

    Args:
        site: The site as received.
        found: The pit.
        limits: Limits of the verdicts; those of the site when left out.
        axisymmetric: Judge axisymmetric sections instead of plane-strain ones.
        criteria: Criteria to use instead of the usual ones.
    """
    limits = site.limits if limits is None else limits
    outputs = RING_OUTPUTS if axisymmetric else OUTPUTS
    chosen = criteria or (RING_CRITERIA if axisymmetric else CRITERIA)
    results = settle([criterion(site, found, limits) for criterion in chosen])
    combined = combine_results(results, _margins(found, outputs), limits)
    unconfirmed, reasons = _unconfirmed(site, found)
    assessed = combined.word != NOT_ASSESSED
    recalled = np.any([result.assessed & (result.recalled or result.by_class_only) for result in results], axis=0)
    provisional = assessed & (combined.word != NOT_2D) & (recalled | (unconfirmed > 0)[:, None])
    return JudgedPit(
        found=found,
        limits=limits,
        outputs=outputs,
        results=results,
        combined=combined,
        dominant=find_dominant(results, combined, limits),
        governing=_governing(combined, outputs, limits),
        provisional=provisional,
        unconfirmed=unconfirmed,
        reasons=reasons,
    )


def _margins(found: FoundPit, outputs: tuple[str, ...]) -> StationMargins:
    """Margins in the columns of `outputs`; outputs without a measured margin get none."""
    known = margins_at(found)
    more = len(outputs) - len(OUTPUTS)
    pad = ((0, 0), (0, more))
    return StationMargins(
        e_low=np.pad(known.e_low, pad), e_high=np.pad(known.e_high, pad), not_measured=np.pad(known.not_measured, pad)
    )


def _governing(combined: Combined, outputs: tuple[str, ...], limits: Limits) -> Bools:
    """Outputs that govern: as the brief says; by default the wall's own, and others as soon as they are assessed."""
    named = np.isin(outputs, limits.governing)
    if limits.governing != GOVERNING:
        return np.broadcast_to(named, combined.word.shape)
    return np.asarray(named | (combined.word != NOT_ASSESSED))


def _unconfirmed(site: Site, found: FoundPit) -> tuple[Ints, tuple[tuple[str, ...], ...]]:
    """Inputs a verdict rests on that nobody gave: soil and water for all, continuity of the wall station by station."""
    common: list[str] = []
    if not site.strata or any(stratum.unit_weight is None for stratum in site.strata):
        common.append("the ground")
    if site.water_retained is None:
        common.append("the water outside")
    stations = found.stations
    continuity = ~(stations.jointed | stations.monolithic)
    # index 0: nothing open; 1: what is open everywhere; 2: the continuity of the wall besides
    index = np.where(continuity, 2, 1 if common else 0)
    return index.astype(np.int64), ((), tuple(common), (*common, "whether the wall is continuous along itself"))


def _missing(result: CriterionResult) -> Bools:
    return np.zeros_like(result.gate) if result.missing is None else result.missing


def _finite(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None


def _listed(values: Floats) -> tuple[float | None, ...]:
    return tuple(None if np.isnan(value) else float(value) for value in values)
