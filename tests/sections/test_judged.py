"""Whole pits judged: what would make each verdict unsafe, what missing input does, and what must not change it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from builders_ratios import ELL, Row, column, diaphragm, piles, polygon_pit, ring_pit, spot, struts_across, struts_along
from hypothesis import given, settings
from hypothesis import strategies as st

from ingest.members import Load
from ingest.model import GOVERNING, OUTPUTS, Limits, Site, Stratum
from sections.criteria import CRITERIA
from sections.found import CriterionResult, FoundPit
from sections.model import Run, Step
from sections.proposal import WORST_FIRST
from sections.verdicts.judged import JudgedPit, judge_stations
from sections.verdicts.margins import margins_at
from sections.verdicts.verdict import HOLDS, NOT_2D, NOT_ASSESSED, OVER, UNDECIDED, UNDER

W, EXC, RET, FORCE = OUTPUTS[:4]
STRUTS = (
    struts_across([102.5 + 5 * i for i in range(6)], (200.0, 220.0), waler=False),
    struts_along([202.5 + 5 * i for i in range(4)], (100.0, 130.0), waler=False),
)
RELIEF = (OVER, HOLDS)
CLAY = Stratum(name="clay", top_level=0.0, unit_weight=18.0, su=80.0, permeability=1e-6)


def word(judged: JudgedPit, chainage: float, output: str = W) -> int:
    return int(judged.combined.word[spot(judged.found, chainage), judged.outputs.index(output)])


def monolithic_pit(**more: object) -> tuple[Site, FoundPit]:
    """Near its corners this pit is `over_states` in deflection by class alone: relief that others must not use."""
    return polygon_pit(wall=diaphragm(), rows=STRUTS, beam=False, **more)  # type: ignore[arg-type]


# --- what real arrangement would make each verdict unsafe ------------------------------------------------------------


def test_over_states_near_a_corner_is_by_class_of_a_continuous_wall() -> None:
    # d = 0.5 He: [0.06, 0.75], margin of a wall near a corner 0.06/0.13: [0.0564, 0.8475]
    judged = judge_stations(*monolithic_pit())
    i, o = spot(judged.found, 3.0), column(W)
    assert word(judged, 3.0) == OVER
    assert (judged.combined.low[i, o], judged.combined.high[i, o]) == pytest.approx((0.0564, 0.8475))


UNKNOWN_LOAD = Load(id="L", kind="area", value=None, points=((102.0, 190.0), (108.0, 190.0), (108.0, 195.0)))
UNSAFE = {
    "a strut missing beside the corner": lambda s, f: (
        polygon_pit(wall=diaphragm(), beam=False, rows=(struts_across([112.5, 117.5, 122.5, 127.5], (200.0, 220.0)),))
    ),
    "one strut alone": lambda s, f: (
        polygon_pit(wall=diaphragm(), beam=False, rows=(struts_across([103.0], (200.0, 220.0)),))
    ),
    "a step of the floor": lambda s, f: (
        s,
        replace(f, pit=replace(f.pit, steps=(Step(line=((105.0, 200.0), (105.0, 220.0)), drop=2.0, at=(5.0,)),))),
    ),
    "a change of wall": lambda s, f: (
        s,
        replace(f, shape=replace(f.shape, runs=(
            Run(start=0.0, to=5.0, wall=diaphragm()), Run(start=5.0, to=100.0, wall=piles())
        ))),
    ),
    "a load of unknown size": lambda s, f: (
        replace(s, loads=(UNKNOWN_LOAD,)),
        replace(
            f,
            loads={"P1-load-1": 0},
            stations=replace(f.stations, load_ids=tuple(("P1-load-1",) for _ in f.stations.chainage)),
        ),
    ),
    "a curved wall": lambda s, f: (s, replace(f, stations=replace(f.stations, radius=np.full(200, 40.0)))),
    "corner struts": lambda s, f: polygon_pit(
        wall=diaphragm(), beam=False,
        rows=(Row(ends=tuple(((100.0 + d, 200.0), (100.0, 200.0 + d)) for d in (3.0, 6.0, 9.0)), role="corner_strut"),),
    ),
    "a base prone to heave": lambda s, f: (replace(s, strata=(replace(CLAY, su=20.0),)), f),
    "a depth outside the cases": lambda s, f: polygon_pit(wall=diaphragm(), rows=STRUTS, beam=False, floor=-4.0),
    "no depth": lambda s, f: polygon_pit(wall=diaphragm(), rows=STRUTS, beam=False, floor=float("nan")),
}  # fmt: skip


@pytest.mark.parametrize("name", UNSAFE)
def test_no_relief_stands_beside_what_was_not_evaluated(name: str) -> None:
    site, found = UNSAFE[name](*monolithic_pit())
    judged = judge_stations(site, found)
    assert word(judged, 3.0) not in RELIEF
    assert judged.score_at(spot(judged.found, 3.0)) is None


def test_a_strut_missing_anywhere_is_never_called_adequate_near_it() -> None:
    for missing in range(6):
        xs = [102.5 + 5 * i for i in range(6) if i != missing]
        site, found = polygon_pit(wall=diaphragm(), beam=False, rows=(struts_across(xs, (200.0, 220.0)),))
        judged = judge_stations(site, found)
        gap = np.abs(found.stations.chainage - (2.5 + 5 * missing)) <= 5.0
        assert not np.isin(judged.combined.word[gap][:, :4], RELIEF).any(), missing


def test_nothing_at_a_reentrant_corner_is_saved_by_a_good_band() -> None:
    def splendid(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
        n, o = len(found.stations.chainage), len(OUTPUTS)
        return CriterionResult(
            code="splendid", mechanism="supports", basis="", reference="", low=np.full((n, o), 0.99),
            high=np.full((n, o), 1.01), assessed=np.ones((n, o), dtype=bool), gate=np.zeros((n, o), dtype=bool),
            sentence=("",) * n,
        )  # fmt: skip

    site, found = polygon_pit(ELL)
    judged = judge_stations(site, found, criteria=[*CRITERIA, splendid])
    assert np.all(judged.combined.word[spot(found, 120.0)] == NOT_2D)
    assert judged.score_at(spot(found, 120.0)) == 0.0
    assert word(judged, 90.0 + 15.0) == NOT_ASSESSED


def test_a_band_by_class_alone_is_nowhere_called_adequate() -> None:
    for wall in (diaphragm(), diaphragm(continuity="jointed"), diaphragm(continuity="unknown"), piles()):
        for beam in (True, False):
            site, found = polygon_pit(wall=wall, rows=STRUTS, beam=beam)
            assert not np.any(judge_stations(site, found).combined.word[:, :4] == HOLDS)


def test_a_row_of_piles_is_undecided_by_its_margin_and_says_by_class_only() -> None:
    # 6 m from the corner: [0.87, 0.99], margin of rows 0.10/0.37: [0.783, 1.3563]
    judged = judge_stations(*polygon_pit(rows=STRUTS, beam=False))
    i, o = spot(judged.found, 6.0), column(W)
    assert word(judged, 6.0) == UNDECIDED
    assert (judged.combined.low[i, o], judged.combined.high[i, o]) == pytest.approx((0.783, 1.3563))
    assert (judged.combined.bare_low[i, o], judged.combined.bare_high[i, o]) == pytest.approx((0.87, 0.99))
    verdict = judged.verdicts_at(i)[W]
    for part in ("0.78 to 1.36", "0.87 to 0.99", "by class", "Settled by", "6.0 m"):
        assert part in verdict.sentence
    assert verdict.dominant == "corner_class"
    assert verdict.provisional
    assert verdict.stage == "final dig"


def test_the_pit_with_walers_is_assessed_in_deflection_only() -> None:
    judged = judge_stations(*polygon_pit(rows=STRUTS, beam=True))
    words = judged.combined.word[spot(judged.found, 15.0)]
    assert words[0] == UNDECIDED
    assert np.all(words[1:] == NOT_ASSESSED)
    reasons = judged.verdicts_at(spot(judged.found, 15.0))
    assert "neither waler nor capping beam" in reasons[EXC].sentence
    assert "undrained strength" in reasons["heave_utilisation"].sentence
    assert "Water levels" in reasons["hydraulic_utilisation"].sentence
    assert "never stand alone" in reasons["settlement"].sentence


# --- each output fed a case known to be worse in three dimensions ----------------------------------------------------


def turned_out() -> tuple[Site, FoundPit]:
    return polygon_pit(((0.0, 0.0), (30.0, 0.0), (60.0, -10.919), (60.0, 40.0), (0.0, 40.0)), rows=(), beam=False)


@pytest.mark.parametrize("output", [W, EXC, RET, FORCE, "settlement"])
def test_a_wall_turned_out_reads_above_one(output: str) -> None:
    site, found = turned_out()
    reentrant = CRITERIA[0](site, found, Limits())
    assert reentrant.code == "reentrant"
    i = int(np.argmin(np.abs(found.stations.chainage - 28.0)))
    assert reentrant.high[i, column(output)] == 1.2
    judged = judge_stations(site, found)
    assert judged.combined.word[i, column(output)] == UNDECIDED
    assert judged.combined.high[i, column(output)] > 1.1


def test_a_turned_wall_opposite_reads_above_one_in_force_and_movement() -> None:
    top = [20.0 + (60.0 - x) * np.tan(np.radians(30.0)) for x in range(3, 60, 6)]
    struts = Row(ends=tuple(((float(x), 0.0), (float(x), y)) for x, y in zip(range(3, 60, 6), top, strict=True)))
    corners = ((0.0, 0.0), (60.0, 0.0), (60.0, 20.0), (0.0, 20.0 + 60.0 * np.tan(np.radians(30.0))))
    site, found = polygon_pit(corners, rows=(struts,), beam=False)
    judged = judge_stations(site, found)
    north = int(np.argmin(np.hypot(*(found.stations.xy - [30.0, 20.0 + 30.0 * np.tan(np.radians(30.0))]).T)))
    assert judged.combined.bare_high[north, column(FORCE)] >= 1.3333
    assert judged.combined.bare_high[north, column(W)] >= 1.3333


def test_seepage_at_a_corner_under_states_and_governs() -> None:
    site = Site(strata=(CLAY,), water_retained=0.0, water_excavated=-6.0)
    judged = judge_stations(*polygon_pit(site=site, wall=diaphragm(toe=-10.0), rows=STRUTS, beam=False))
    o = column("hydraulic_utilisation")
    i = spot(judged.found, 1.5)
    assert word(judged, 1.5, "hydraulic_utilisation") == UNDER
    assert (judged.combined.low[i, o], judged.combined.high[i, o]) == (1.25, 1.9)
    assert judged.governing[i, o]


def test_heave_reads_as_a_relief_never_as_a_danger() -> None:
    judged = judge_stations(*polygon_pit(site=Site(strata=(CLAY,)), rows=STRUTS))
    assert word(judged, 15.0, "heave_utilisation") == OVER
    assert judged.combined.high[spot(judged.found, 15.0), column("heave_utilisation")] < 1.0


# --- governing, provisional, scores ----------------------------------------------------------------------------------


def test_other_outputs_govern_as_soon_as_they_are_assessed_and_the_brief_may_say_otherwise() -> None:
    site = Site(strata=(CLAY,))
    pit = polygon_pit(site=site, rows=STRUTS)
    heave = column("heave_utilisation")
    assert judge_stations(*pit).governing[:, heave].all()
    told = Limits(governing=("wall_deflection",))
    named = judge_stations(*pit, limits=told).governing
    assert named[:, 0].all()
    assert not named[:, 1:].any()
    assert Limits().governing == GOVERNING


def test_a_verdict_on_assumed_inputs_is_provisional_and_says_which() -> None:
    known = Site(strata=(CLAY,), water_retained=-3.0)
    bare = judge_stations(*polygon_pit(wall=diaphragm(continuity="unknown"), rows=STRUTS, beam=False))
    sentence = bare.verdicts_at(spot(bare.found, 3.0))[W].sentence
    for part in ("the ground", "the water outside", "continuous along itself"):
        assert part in sentence
    told = judge_stations(*polygon_pit(site=known, wall=diaphragm(), rows=STRUTS, beam=False))
    sentence = told.verdicts_at(spot(told.found, 3.0))[W].sentence
    assert "the ground;" not in sentence
    assert told.provisional[spot(told.found, 3.0), 0]  # by class only


def test_the_score_is_none_while_a_governing_output_is_open() -> None:
    judged = judge_stations(*polygon_pit(rows=STRUTS, beam=True))
    assert judged.score_at(spot(judged.found, 15.0)) is None
    only = judge_stations(*polygon_pit(rows=STRUTS, beam=True), limits=Limits(governing=(W,)))
    # by class [0.28, 1.05] with 0.10/0.37: [0.252, 1.4385]
    assert only.score_at(spot(only.found, 15.0)) == pytest.approx(25.2)


# --- margins by class ------------------------------------------------------------------------------------------------


def margin(found: FoundPit, chainage: float, output: str) -> tuple[float, float]:
    margins = margins_at(found)
    i, o = spot(found, chainage), column(output)
    return float(margins.e_low[i, o]), float(margins.e_high[i, o])


def test_the_margin_follows_the_class_of_the_station() -> None:
    long = ((0.0, 0.0), (100.0, 0.0), (100.0, 30.0), (0.0, 30.0))
    _, found = polygon_pit(long, wall=diaphragm())
    assert margin(found, 50.0, W) == (0.03, 0.05)  # beyond 3 He (18 m) of everything, like wall opposite
    assert margin(found, 10.0, W) == (0.06, 0.13)
    assert margin(found, 10.0, EXC) == (0.09, 0.10)
    assert margin(found, 10.0, RET) == (0.41, 0.27)
    _, unlike = polygon_pit(long, wall=diaphragm(), facing_like=False)
    assert margin(unlike, 50.0, W) == (0.06, 0.27)
    assert margin(unlike, 50.0, EXC) == (0.09, 0.10)
    _, row = polygon_pit(long, wall=piles())
    assert margin(row, 50.0, W) == (0.10, 0.37)
    assert margin(row, 50.0, EXC) == (0.20, 0.24)
    assert margin(row, 50.0, FORCE) == (0.03, 0.05)
    assert margins_at(row).not_measured[:, column(RET)].all()
    gap = (struts_across([10.0, 20.0, 30.0, 50.0, 60.0, 70.0, 80.0, 90.0], (0.0, 30.0)),)
    _, gapped = polygon_pit(long, wall=diaphragm(), rows=gap)
    assert margin(gapped, 40.0, RET) == (0.43, 0.70)
    assert margin(found, 50.0, "heave_utilisation") == (0.0, 0.0)


def test_an_unknown_depth_takes_the_wider_margin() -> None:
    _, found = polygon_pit(((0.0, 0.0), (100.0, 0.0), (100.0, 30.0), (0.0, 30.0)), wall=diaphragm(), floor=float("nan"))
    assert margin(found, 50.0, W) == (0.06, 0.13)


# --- what must not change anything -----------------------------------------------------------------------------------


@settings(max_examples=15, deadline=None)
@given(st.floats(-180.0, 180.0), st.floats(-4e5, 6e5), st.floats(-4e5, 6e6))
def test_turning_and_moving_the_site_changes_no_verdict(turn: float, east: float, north: float) -> None:
    here = judge_stations(*monolithic_pit())
    there = judge_stations(*monolithic_pit(turn=turn, shift=(east, north)))
    assert np.array_equal(here.combined.word, there.combined.word)
    assert np.allclose(here.combined.low, there.combined.low, atol=1e-6, equal_nan=True)


def test_a_symmetric_pit_has_symmetric_bands() -> None:
    judged = judge_stations(*monolithic_pit())
    at = judged.found.stations.chainage
    for chainage in at[(at > 0.0) & (at < 30.0)]:
        i, j = spot(judged.found, chainage), spot(judged.found, 30.0 - chainage)
        assert np.allclose(judged.combined.low[i], judged.combined.low[j], equal_nan=True)


def test_a_longer_wall_is_never_farther_from_the_plane() -> None:
    lows = []
    for length in (20.0, 30.0, 60.0, 120.0):
        _, found = pit = polygon_pit(((0, 0), (length, 0), (length, 30), (0, 30)), wall=diaphragm(continuity="jointed"))
        judged = judge_stations(*pit)
        lows.append(float(judged.combined.bare_low[spot(found, length / 2), 0]))
    assert lows == sorted(lows)


@pytest.mark.parametrize("drop", ["toe", "strata", "water", "continuity", "supports", "depth"])
def test_dropping_an_input_never_narrows_a_band_nor_raises_a_score(drop: str) -> None:
    site = Site(strata=(CLAY,), water_retained=0.0, water_excavated=-6.0)
    wall = diaphragm(toe=-10.0, continuity="jointed")
    full = judge_stations(*polygon_pit(site=site, wall=wall, rows=STRUTS, beam=False))
    changed: dict[str, object] = {"site": site, "wall": wall, "rows": STRUTS, "beam": False}
    changed |= {
        "toe": {"toe": float("nan")},
        "strata": {"site": replace(site, strata=())},
        "water": {"site": replace(site, water_retained=None)},
        "continuity": {"wall": replace(wall, continuity="unknown")},
        "supports": {"rows": ()},
        "depth": {"floor": float("nan")},
    }[drop]
    less = judge_stations(*polygon_pit(**changed))  # type: ignore[arg-type]
    both = ~np.isnan(full.combined.low) & ~np.isnan(less.combined.low)
    assert np.all(less.combined.low[both] <= full.combined.low[both] + 1e-9)
    assert np.all(less.combined.high[both] >= full.combined.high[both] - 1e-9)
    assert not np.any(np.isnan(full.combined.low) & ~np.isnan(less.combined.low))
    assert np.all(np.nan_to_num(less.scores, nan=0.0) <= np.nan_to_num(full.scores, nan=0.0) + 1e-9)
    relief = np.isin(less.combined.word, RELIEF) & (less.combined.word > full.combined.word)
    assert not relief.any()


# --- records ---------------------------------------------------------------------------------------------------------


def test_the_rows_of_criteria_combine_to_the_verdict_by_hand() -> None:
    from sections.verdicts.verdict import combine

    judged = judge_stations(*monolithic_pit())
    i = spot(judged.found, 3.0)
    rows = [row for row in judged.rows_at(i, "P1-wall-1") if row.output == W]
    assert {row.code for row in rows} >= {"corner_class", "supports_gap", "floor_step"}
    assert all(row.sentence and row.reference and row.wall == "P1-wall-1" for row in rows)
    bands = [(row.low, row.high) for row in rows if row.assessed]
    margins = margins_at(judged.found)
    low, high, said = combine(bands, margins.e_low[i, 0], margins.e_high[i, 0])  # type: ignore[arg-type]
    verdict = judged.verdicts_at(i)[W]
    assert (verdict.low, verdict.high, verdict.verdict) == (pytest.approx(low), pytest.approx(high), said)


def test_the_table_along_the_perimeter_agrees_with_the_stations() -> None:
    judged = judge_stations(*polygon_pit(ELL, rows=(), beam=False))
    table = judged.station_outputs()
    assert tuple(table) == OUTPUTS
    for chainage in (30.0, 95.0, 120.0, 0.0):
        i = spot(judged.found, chainage)
        for name, verdict in judged.verdicts_at(i).items():
            assert table[name].verdict[i] == verdict.verdict
            assert table[name].low[i] == verdict.low
            assert table[name].dominant[i] == verdict.dominant


def test_every_sentence_is_whole_and_both_ends_are_in_it() -> None:
    for pit in (monolithic_pit(), polygon_pit(ELL), ring_pit(), turned_out()):
        judged = judge_stations(*pit)
        for i in range(0, len(judged.found.stations.chainage), 7):
            for verdict in judged.verdicts_at(i).values():
                assert verdict.sentence.endswith(".")
                assert "nan" not in verdict.sentence
                assert ".." not in verdict.sentence
                if verdict.low is not None and verdict.high is not None:
                    assert f"{verdict.low:.2f} to {verdict.high:.2f}" in verdict.sentence


def test_a_ring_is_judged_for_both_idealisations() -> None:
    site, found = ring_pit()
    plane, ring = judge_stations(site, found), judge_stations(site, found, axisymmetric=True)
    assert np.all(plane.combined.word[:, :4] == NOT_2D)
    assert ring.outputs[-1] == "hoop_force"
    assert np.all(ring.combined.word == NOT_ASSESSED)
    assert "pressure level by level" in ring.verdicts_at(0)["hoop_force"].sentence


def test_an_open_wall_is_not_assessed_and_says_why() -> None:
    judged = judge_stations(*polygon_pit(((0.0, 0.0), (60.0, 0.0)), closed=False))
    assert np.all(judged.combined.word == NOT_ASSESSED)
    assert "No inside corner" in judged.verdicts_at(spot(judged.found, 30.0))[W].sentence
    assert {WORST_FIRST[w] for w in np.unique(judged.combined.word)} == {"not_assessed"}


def test_a_perimeter_of_300_m_is_judged_whole_and_the_same_twice() -> None:
    rows = [struts_across([2.5 + 5 * i for i in range(18)], (0.0, 60.0), level=-1.0 - 2 * k) for k in range(4)]
    pit = polygon_pit(((0, 0), (90, 0), (90, 60), (0, 60)), rows=rows, floor=-10.0, site=Site(strata=(CLAY,)))
    once, again = judge_stations(*pit), judge_stations(*pit)
    assert len(once.combined.word) == len(pit[1].stations.chainage)
    assert np.array_equal(once.combined.word, again.combined.word)
