"""Combining bands and the verdict words, held by hand-worked cases and by properties that no site may break."""

from __future__ import annotations

import tomllib
from dataclasses import replace
from itertools import permutations
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ingest.model import OUTPUTS, Limits
from sections.found import CriterionResult
from sections.model import Mechanism
from sections.proposal import WORST_FIRST, Verdict
from sections.verdicts.margins import MARGINS, StationMargins
from sections.verdicts.verdict import (
    HOLDS,
    NOT_2D,
    NOT_ASSESSED,
    OVER,
    UNDECIDED,
    UNDER,
    combine,
    combine_results,
    find_dominant,
    score_of,
    settle,
    share_weighted,
    worst_first,
)

VALUES = tomllib.loads((Path(__file__).parent / "check_values_ratios.toml").read_text())["value"]
CASES = [v for v in VALUES if v["case"] in ("combine", "combine with load", "one mechanism")]
LIMITS = Limits()
NO_MARGIN = StationMargins(e_low=np.zeros((1, 1)), e_high=np.zeros((1, 1)), not_measured=np.zeros((1, 1), dtype=bool))


def result(
    low: float | None,
    high: float | None,
    mechanism: Mechanism = "corner",
    *,
    missing: bool = False,
    gate: bool = False,
    **more: object,
) -> CriterionResult:
    """One criterion at one station for one output."""
    spoken = low is not None
    return CriterionResult(
        code=str(more.pop("code", mechanism)),
        mechanism=mechanism,
        basis="test",
        reference="test",
        low=np.array([[np.nan if low is None else low]]),
        high=np.array([[np.nan if high is None else high]]),
        assessed=np.array([[spoken]]),
        gate=np.array([[gate]]),
        missing=np.array([[missing]]),
        sentence=("said",),
        **more,  # type: ignore[arg-type]
    )


def verdict_of(*results: CriterionResult, margins: StationMargins = NO_MARGIN) -> tuple[float, float, str]:
    combined = combine_results(settle(results), margins, LIMITS)
    return float(combined.low[0, 0]), float(combined.high[0, 0]), WORST_FIRST[int(combined.word[0, 0])]


def margin(e_low: float, e_high: float) -> StationMargins:
    return replace(NO_MARGIN, e_low=np.array([[e_low]]), e_high=np.array([[e_high]]))


def test_every_check_value_names_its_source_and_standing() -> None:
    standings = {"computed", "derived", "published, recalled", "published, seen", "judgement"}
    bad = [v["what"] for v in VALUES if not v.get("source") or v.get("standing") not in standings]
    assert not bad


@pytest.mark.parametrize("v", CASES, ids=lambda v: v["what"])
def test_the_worked_case_is_met_by_hand_bands(v: dict) -> None:  # type: ignore[type-arg]
    given_ = dict(v["given"])
    bands = [tuple(band) for band in given_.pop("bands")]
    if v["case"] == "combine with load":
        bands.append(share_weighted(given_.pop("ratio"), given_.pop("share", None)))
    if v["case"] == "one mechanism":
        bands = [(min(b[0] for b in bands), max(b[1] for b in bands))]
    low, high, word = combine(bands, **given_)
    assert (low, high) == pytest.approx(v["expect"], rel=1e-9), v["source"]
    assert word == v["word"]


@pytest.mark.parametrize("v", CASES, ids=lambda v: v["what"])
def test_the_worked_case_is_met_by_criteria_along_a_perimeter(v: dict) -> None:  # type: ignore[type-arg]
    given_ = dict(v["given"])
    names: list[Mechanism] = ["corner", "supports", "opposite_wall"]
    if v["case"] == "one mechanism":
        names = ["corner", "corner"]
    results = [result(*band, names[i]) for i, band in enumerate(given_["bands"])]
    if v["case"] == "combine with load":
        results.append(result(*share_weighted(given_["ratio"], given_.get("share")), "load"))
    low, high, word = verdict_of(*results, margins=margin(given_.get("e_low", 0.0), given_.get("e_high", 0.0)))
    assert (low, high) == pytest.approx(v["expect"], rel=1e-9), v["source"]
    assert word == v["word"]


def test_no_band_at_all_is_not_assessed_and_never_one() -> None:
    low, high, word = combine([])
    assert np.isnan(low)
    assert np.isnan(high)
    assert word == "not_assessed"
    assert verdict_of(result(None, None))[2] == "not_assessed"


def test_one_computation_with_several_mechanisms_replaces_their_product() -> None:
    screening = result(0.82, 1.22, "corner", carries=("supports",), code="screening")
    corner, gap = result(0.85, 0.95, "corner"), result(1.0, 1.15, "supports")
    assert verdict_of(screening, corner, gap)[:2] == pytest.approx((0.82, 1.22))
    wider = result(1.0, 1.30, "supports")
    assert verdict_of(screening, corner, wider)[:2] == pytest.approx((0.82, 1.30))
    load = result(0.9, 1.0, "load")
    assert verdict_of(screening, corner, gap, load)[:2] == pytest.approx((0.82 * 0.9, 1.22))


def test_where_the_computation_is_silent_its_mechanisms_stand_apart_again() -> None:
    screening = result(None, None, "corner", carries=("supports",), code="screening")
    assert verdict_of(screening, result(0.65, 0.80, "corner"), result(1.26, 1.53, "supports"))[2] == "undecided"


def test_a_computation_fills_the_gap_of_the_mechanisms_it_carries_and_of_no_other() -> None:
    screening = result(0.95, 1.02, "corner", carries=("supports",), code="screening")
    gap = result(None, None, "supports", missing=True)
    step = result(None, None, "floor_step", missing=True)
    assert verdict_of(screening, gap)[2] == "holds"
    assert verdict_of(screening, gap, step)[2] == "not_assessed"


def test_a_band_with_its_own_margin_takes_no_other() -> None:
    own = result(1.0, 1.05, "opposite_wall", own_margin=True)
    assert verdict_of(own, margins=margin(0.1, 0.1))[:2] == pytest.approx((1.0, 1.05))
    both = verdict_of(own, result(0.95, 1.0, "corner"), margins=margin(0.1, 0.1))
    assert both[:2] == pytest.approx((0.95 * 0.9, 1.05 * 1.1))


def test_a_gate_shuts_whatever_else_is_said() -> None:
    assert verdict_of(result(0.97, 1.01), result(None, None, "supports", gate=True))[2] == "not_two_dimensional"


def test_a_band_by_class_alone_never_holds() -> None:
    by_class = result(0.95, 1.02, by_class_only=True)
    assert verdict_of(by_class)[2] == "undecided"
    assert verdict_of(by_class, result(0.98, 1.0, "load"))[2] == "undecided"
    assert verdict_of(result(0.5, 0.8, by_class_only=True))[2] == "over_states"


def test_a_cross_check_widens_and_never_stands_alone() -> None:
    check = result(0.40, 0.46, cross_check=True)
    assert verdict_of(check)[2] == "not_assessed"
    assert verdict_of(result(0.70, 0.85), check)[:2] == pytest.approx((0.40, 0.85))
    assert verdict_of(result(0.70, 0.85, "supports"), check)[:2] == pytest.approx((0.70, 0.85))


@pytest.mark.parametrize("relief", [(0.2, 0.4), (0.6, 0.95), (0.95, 1.05)])
def test_an_unevaluated_gap_takes_every_relief_away(relief: tuple[float, float]) -> None:
    low, high, word = verdict_of(result(*relief), result(None, None, "supports", missing=True))
    assert word == "not_assessed"
    assert np.isnan(low)
    assert np.isnan(high)


def test_an_unevaluated_gap_never_hides_a_warning() -> None:
    gap = result(None, None, "supports", missing=True)
    assert verdict_of(result(1.2, 1.4, "floor_step"), gap)[2] == "under_states"
    assert verdict_of(result(0.9, 1.4, "floor_step"), gap)[2] == "undecided"
    # a margin alone is no warning: without it the band does not pass the limit
    assert verdict_of(result(0.9, 1.0, "floor_step"), gap, margins=margin(0.1, 0.37))[2] == "not_assessed"


def test_the_retained_face_of_a_row_without_a_measured_margin_is_not_assessed() -> None:
    unknown = replace(NO_MARGIN, not_measured=np.array([[True]]))
    assert verdict_of(result(0.6, 0.9), margins=unknown)[2] == "not_assessed"


def test_the_deciding_criterion_is_the_one_that_drives_the_verdict() -> None:
    corner, gap = result(0.65, 0.80, code="corner"), result(1.26, 1.53, "supports", code="gap")
    load = result(0.9, 1.0, "load", code="load")
    shut = result(None, None, "shape", gate=True, code="ring")
    missing = result(None, None, "floor_step", missing=True, code="step")

    def decides(*results: CriterionResult) -> str | None:
        settled = settle(results)
        combined = combine_results(settled, NO_MARGIN, LIMITS)
        index = int(find_dominant(settled, combined, LIMITS)[0, 0])
        return None if index < 0 else settled[index].code

    assert decides(corner, gap, load) == "gap"
    assert decides(corner, load) == "corner"
    assert decides(corner, shut) == "ring"
    assert decides(corner, missing) == "step"
    assert decides(result(None, None)) is None


# --- properties ------------------------------------------------------------------------------------------------------

bands_ = st.tuples(st.floats(0.05, 2.0), st.floats(0.0, 1.0)).map(lambda t: (t[0], t[0] + t[1]))
margins_ = st.floats(0.0, 0.4)


@given(st.lists(bands_, min_size=1, max_size=5), margins_, margins_)
def test_the_order_of_bands_does_not_matter(bands: list[tuple[float, float]], e_low: float, e_high: float) -> None:
    first = combine(bands, e_low, e_high)
    for order in list(permutations(bands))[:6]:
        again = combine(list(order), e_low, e_high)
        assert again[:2] == pytest.approx(first[:2], rel=1e-12)


@given(st.lists(bands_, min_size=1, max_size=5), margins_, margins_)
def test_low_never_passes_high(bands: list[tuple[float, float]], e_low: float, e_high: float) -> None:
    low, high, _ = combine(bands, e_low, e_high)
    assert low <= high + 1e-12


@given(st.lists(bands_, min_size=1, max_size=4), bands_, margins_, margins_)
def test_relief_of_one_mechanism_never_lowers_the_excess_of_another(
    bands: list[tuple[float, float]], more: tuple[float, float], e_low: float, e_high: float
) -> None:
    """The high end never falls when a mechanism is added, but for the margin on bands that all relieve."""
    high = combine(bands, e_low, e_high)[1]
    after = combine([*bands, more], e_low, e_high)[1]
    excess = max(1.0, max(band[1] for band in bands))
    assert after >= excess * (1.0 if excess <= 1.0 else 1.0 + e_high) - 1e-9
    if excess > 1.0:
        assert after >= high - 1e-9


@given(st.floats(1.11, 3.0), st.floats(0.05, 0.999), st.floats(0.0, 0.5))
def test_excess_never_becomes_holds_or_over_states_by_relief(excess: float, relief: float, width: float) -> None:
    word = combine([(excess, excess + width), (relief, min(1.0, relief + width))])[2]
    assert word in ("under_states", "undecided")


@given(st.lists(bands_, min_size=1, max_size=4), st.data())
def test_dropping_a_band_that_applies_never_shows_a_station_nor_raises_its_score(
    bands: list[tuple[float, float]], data: st.DataObject
) -> None:
    """A criterion that loses its input is a gap: what is left is no relief, has no score, and is at most a warning."""
    names: list[Mechanism] = ["corner", "supports", "load", "floor_step"]
    dropped = data.draw(st.integers(0, len(bands) - 1))
    results = [result(*band, names[i]) for i, band in enumerate(bands)]
    results[dropped] = result(None, None, names[dropped], missing=True)
    settled = settle(results)
    combined = combine_results(settled, NO_MARGIN, LIMITS)
    word = int(combined.word[0, 0])
    assert word not in (OVER, HOLDS)
    if word == NOT_ASSESSED:
        assert np.isnan(combined.low[0, 0])
    governing = np.array([[True]])
    score = score_of(combined.low, combined.high, combined.word, combined.missing, governing)
    assert np.isnan(score[0])


@given(st.lists(bands_, min_size=2, max_size=5))
def test_an_alternative_of_one_mechanism_only_ever_widens_its_hull(bands: list[tuple[float, float]]) -> None:
    full = verdict_of(*(result(*band) for band in bands))
    for i in range(len(bands)):
        rest = [band for j, band in enumerate(bands) if j != i]
        left = verdict_of(*(result(*band) for band in rest))
        assert left[0] >= full[0] - 1e-12
        assert left[1] <= full[1] + 1e-12


@given(bands_, margins_, margins_, margins_)
def test_a_wider_margin_never_narrows_the_band(band: tuple[float, float], e: float, more: float, e_high: float) -> None:
    narrow, wide = combine([band], e, e_high), combine([band], min(e + more, 0.9), e_high + more)
    assert wide[0] <= narrow[0] + 1e-12
    assert wide[1] >= narrow[1] - 1e-12


@settings(max_examples=50)
@given(st.integers(1, 6), st.integers(1, 4), st.integers(0, 2**32 - 1))
def test_arrays_and_single_bands_agree(n: int, k: int, seed: int) -> None:
    rng = np.random.default_rng(seed)
    low = rng.uniform(0.3, 1.4, (k, n, 1))
    high = low + rng.uniform(0.0, 0.5, (k, n, 1))
    spoken = rng.random((k, n, 1)) < 0.7
    names: list[Mechanism] = ["corner", "supports", "load", "floor_step"]
    results = [
        CriterionResult(
            code=names[i], mechanism=names[i], basis="", reference="",
            low=np.where(spoken[i], low[i], np.nan), high=np.where(spoken[i], high[i], np.nan), assessed=spoken[i],
            gate=np.zeros((n, 1), dtype=bool), sentence=("",) * n,
        )
        for i in range(k)
    ]  # fmt: skip
    margins = StationMargins(
        e_low=np.full((n, 1), 0.05), e_high=np.full((n, 1), 0.1), not_measured=np.zeros((n, 1), dtype=bool)
    )
    combined = combine_results(results, margins, LIMITS)
    for j in range(n):
        bands = [(float(low[i, j, 0]), float(high[i, j, 0])) for i in range(k) if spoken[i, j, 0]]
        one = combine(bands, 0.05, 0.1)
        assert WORST_FIRST[int(combined.word[j, 0])] == one[2]
        assert (combined.low[j, 0], combined.high[j, 0]) == pytest.approx(one[:2], nan_ok=True)


# --- scores and walls ------------------------------------------------------------------------------------------------


def score(low: list[float], high: list[float], word: list[int], governing: list[bool]) -> float:
    none = np.zeros((1, len(low)), dtype=bool)
    return float(score_of(np.array([low]), np.array([high]), np.array([word]), none, np.array([governing]))[0])


def test_the_score_is_the_worse_end_of_the_worst_assessed_output() -> None:
    assert score([0.92, 0.8], [1.05, 1.0], [HOLDS, OVER], [True, True]) == pytest.approx(80.0)
    assert score([0.95, 1.0], [1.0, 1.6], [HOLDS, UNDECIDED], [True, False]) == pytest.approx(62.5)
    assert score([-0.04, 1.0], [0.5, 1.0], [OVER, HOLDS], [True, True]) == 0.0


def test_there_is_no_score_while_a_governing_output_is_not_assessed() -> None:
    assert np.isnan(score([0.95, np.nan], [1.0, np.nan], [HOLDS, NOT_ASSESSED], [True, True]))
    assert score([0.95, np.nan], [1.0, np.nan], [HOLDS, NOT_ASSESSED], [True, False]) == pytest.approx(95.0)


def test_a_section_that_is_no_section_scores_nothing() -> None:
    assert score([0.95, np.nan], [1.0, np.nan], [HOLDS, NOT_2D], [True, True]) == 0.0


def said(word: str, low: float | None = None, high: float | None = None) -> Verdict:
    return Verdict(low=low, high=high, verdict=word, provisional=False, dominant=None, stage=None, sentence="")  # type: ignore[arg-type]


def test_the_worst_wall_speaks_for_the_section() -> None:
    walls = [
        {"a": said("holds", 0.95, 1.0), "b": said("undecided", 0.9, 1.2), "c": said("not_assessed")},
        {"a": said("not_assessed"), "b": said("undecided", 0.8, 1.4), "c": said("under_states", 1.2, 1.3)},
    ]
    worst = worst_first(walls)
    assert [worst[name].verdict for name in "abc"] == ["not_assessed", "undecided", "under_states"]
    assert worst["b"].high == 1.4


def test_the_words_are_ordered_worst_first() -> None:
    words = [WORST_FIRST[i] for i in (NOT_2D, UNDER, UNDECIDED, NOT_ASSESSED, OVER, HOLDS)]
    assert words == [
        "not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds"
    ]  # fmt: skip


def test_every_margin_is_for_a_known_output_and_says_where_it_comes_from() -> None:
    assert all(row.output in OUTPUTS and row.source and 0.0 <= row.e_low < 1.0 and row.e_high >= 0.0 for row in MARGINS)
