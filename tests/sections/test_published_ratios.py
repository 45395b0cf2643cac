"""Published and computed formulas of ratios and severity against their check values; each value names its source."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ingest.model import Limits
from sections.criteria.corner_shape import bell_shape, bell_width, error_function_shape, reach_of_share, shape_offset
from sections.criteria.loads import area_ratio
from sections.criteria.plane_strain_ratio import plane_strain_ratio_formula, system_stiffness, valid_for
from sections.criteria.water import hydraulic_band, round_band
from sections.smearing.loads import area_ratios
from sections.smearing.opposite_wall import force_ratio, support_share
from sections.verdicts import severity as sv
from sections.verdicts.basal import bearing_factor, heave_ratio, safety_deep, safety_wide
from sections.verdicts.margins import peak_factor
from sections.verdicts.verdict import words_of

VALUES = tomllib.loads((Path(__file__).parent / "check_values_ratios.toml").read_text())["value"]
PLACES = np.array([0.0, 0.05, 0.1, 0.2, 0.3, 0.5])


def arrays(**given_: float) -> dict[str, np.ndarray]:
    return {name: np.array([value]) for name, value in given_.items()}


def hydraulic(**given_: float) -> list[float]:
    low, high = hydraulic_band(**arrays(**given_))
    return [float(low[0]), float(high[0])]


def peak(peak: float, rows: bool, limits_on: bool) -> float:
    return float(peak * peak_factor(rows, limits_on))


def ratio_of_a_wall(t: float, E: float, unit_weight: float, h: float) -> list[float]:
    """S, k and PSR of a wall of thickness t in a square pit of L/He = 2 with FS 1.8."""
    S = float(system_stiffness(E * t**3 / 12, unit_weight, h))
    psr = float(plane_strain_ratio_formula(L=20.0, B=20.0, He=10.0, S=S, FS=1.8))
    return [S, 1.0 - 1e-4 * S, psr]


def load_ratio(near: float, far: float, half: float, H: float) -> float:
    one = np.array([1.0])
    return float(area_ratio(near * one, far * one, -half * one, half * one, np.array([[H]]))[0][0])


CASES: dict[str, Callable[..., Any]] = {
    "peak": peak,
    "hydraulic": hydraulic,
    "heave": lambda B_over_L: [float(heave_ratio(B_over_L))] * 2,
    "plane strain ratio": lambda **g: float(plane_strain_ratio_formula(**g)),
    "shape": lambda L, He, c_den: list(error_function_shape(PLACES * L, L, He, c_den)),
    "bell": lambda L, He: list(bell_shape(np.array([0.0, 0.1, 0.2, 0.3, 0.5]) * L, L, He)),
    "bearing factor": lambda **g: float(bearing_factor(**g)),
    "safety deep": lambda H, B, L, su, unit_weight, q: float(
        safety_deep(bearing_factor(H, B, L), su, unit_weight, H, q)
    ),
    "safety wide": lambda H, B, T, unit_weight, su: float(safety_wide(H, B, T, unit_weight, su, su)),
    "opposite wall": lambda psi: [support_share(psi), force_ratio(psi)],
    "stiffness by water": lambda **g: float(sv.stiffness_by_water(**g)),
    "stiffness by soil": lambda **g: float(sv.stiffness_by_soil(**g)),
    "spandrel": lambda d: list(sv.spandrel_settlement(d)),
    "concave": lambda d: list(sv.concave_settlement(d)),
    "flexibility": lambda **g: sv.displacement_flexibility(**g),
    "apparent pressure stiff clay": lambda **g: list(sv.apparent_pressure_stiff_clay(**g)),
    "apparent pressure sand": lambda **g: list(sv.apparent_pressure_sand(**g)),
    "apparent pressure soft clay": lambda **g: list(sv.apparent_pressure_soft_clay(**g)),
    "member factor": lambda **g: sv.member_factor(**g),
    "load ratio": load_ratio,
    "load ratio by resultant": load_ratio,
}
ROUNDED = {"shape": 6e-5, "bell": 6e-5, "spandrel": 6e-5, "opposite wall": 1e-7, "member factor": 1e-6}
"""Absolute tolerance of values that are published or printed with few figures."""


@pytest.mark.parametrize("v", [v for v in VALUES if v["case"] in CASES], ids=lambda v: f"{v['case']}: {v['what']}")
def test_check_value_is_met(v: dict[str, Any]) -> None:
    got = CASES[v["case"]](**v["given"])
    loose = {"load ratio": 1e-6, "load ratio by resultant": 1e-5}
    rounded = ROUNDED.get(v["case"], loose.get(v["case"], 0.0))
    assert got == pytest.approx(v["expect"], rel=1e-8, abs=rounded), v["source"]
    if "word" in v:
        low, high = np.array([[v["expect"][0]]]), np.array([[v["expect"][1]]])
        from sections.proposal import WORST_FIRST

        assert WORST_FIRST[int(words_of(low, high, Limits())[0, 0])] == v["word"]


@pytest.mark.parametrize(
    "v", [v for v in VALUES if v["case"].startswith("plane strain ratio")], ids=lambda v: v["what"]
)
def test_the_published_ratio_answers_inside_its_range_only(v: dict[str, Any]) -> None:
    if v["case"] == "plane strain ratio":
        g = v["given"]
        assert bool(valid_for(g["L"], g["He"], g["S"], g["FS"])) is v["valid"]
    else:
        got = ratio_of_a_wall(**v["given"])
        assert got == pytest.approx(v["expect"], abs=6e-7, rel=1e-8), v["source"]
        assert bool(valid_for(20.0, 10.0, got[0], 1.8)) is v["valid"]


@pytest.mark.parametrize("v", [v for v in VALUES if v["case"] == "shape"], ids=lambda v: f"{v['what']}, {v['given']}")
def test_the_shape_has_its_offset_and_its_plane_strain_reach(v: dict[str, Any]) -> None:
    g = v["given"]
    assert float(shape_offset(g["L"], g["He"])) == pytest.approx(v["a"], rel=1e-9), v["source"]
    assert reach_of_share(0.95, g["L"], g["He"], g["c_den"]) == pytest.approx(v["x95"], rel=1e-8), v["source"]
    at_reach = float(error_function_shape(v["x95"], g["L"], g["He"], g["c_den"]))
    assert at_reach == pytest.approx(0.95, abs=1e-8)


def test_no_check_value_lies_unused() -> None:
    others = {"combine", "combine with load", "one mechanism", "plane strain ratio of a wall"}
    assert {v["case"] for v in VALUES} <= {*CASES, *others, "hydraulic holds", "round holds"}


def test_the_bell_shape_has_its_width() -> None:
    v = next(v for v in VALUES if v["case"] == "bell")
    assert float(bell_width(**v["given"])) == pytest.approx(v["W"], rel=1e-9), v["source"]


# L/He: x95/He, x95/(L/2), d(0)/d_max, PSR for k = C = 1 and L = B; computed from the recalled formulas
TABLE = [
    (2, 0.442, 0.442, 0.471, 0.8647),
    (3, 0.723, 0.482, 0.430, 0.9502),
    (4, 1.021, 0.510, 0.402, 0.9817),
    (6, 1.651, 0.550, 0.365, 0.9975),
    (8, 2.316, 0.579, 0.341, 0.9997),
    (10, 3.005, 0.601, 0.323, 1.0000),
]
WIDE = {
    2: (0.329, 0.461),
    3: (0.554, 0.406),
    4: (0.796, 0.370),
    6: (1.315, 0.324),
    8: (1.867, 0.294),
    10: (2.445, 0.273),
}


@pytest.mark.parametrize("row", TABLE, ids=lambda row: f"L/He = {row[0]}")
def test_the_corner_reach_follows_the_length_over_depth(row: tuple[float, ...]) -> None:
    He, L = 10.0, row[0] * 10.0
    x95 = reach_of_share(0.95, L, He, 0.015)
    assert x95 / He == pytest.approx(row[1], abs=6e-4)
    assert x95 / (L / 2) == pytest.approx(row[2], abs=6e-4)
    assert float(error_function_shape(0.0, L, He, 0.015)) == pytest.approx(row[3], abs=6e-4)
    assert float(plane_strain_ratio_formula(L, L, He, 0.0, 1.8)) == pytest.approx(row[4], abs=6e-5)
    other = WIDE[int(row[0])]
    assert reach_of_share(0.95, L, He, 0.15) / He == pytest.approx(other[0], abs=6e-4)
    assert float(error_function_shape(0.0, L, He, 0.15)) == pytest.approx(other[1], abs=6e-4)


@pytest.mark.parametrize("v", [v for v in VALUES if v["case"].endswith("holds")], ids=lambda v: v["what"])
def test_the_computed_seepage_ratio_lies_in_the_band_of_its_place(v: dict[str, Any]) -> None:
    low, high = (round_band if v["case"].startswith("round") else hydraulic_band)(**arrays(**v["given"]))
    assert low[0] <= v["expect"][0] <= high[0], v["source"]


# distance from the corner, wall length, other side: bands of the table by place, H 6, d 4 (H + d = 10); own computation
PLACES_OF_WATER = [
    (2.0, 20, 20, (1.25, 1.9)),
    (2.001, 20, 20, (1.1, 1.9)),
    (5.0, 20, 20, (1.1, 1.9)),
    (5.001, 20, 20, (1.0, 1.5)),
    (10.0, 20, 20, (1.0, 1.5)),
    (15.0, 50, 20, (1.0, 1.5)),
    (15.0, 60, 20, (1.0, 1.3)),
    (20.0, 60, 20, (1.0, 1.3)),
    (20.001, 60, 20, (1.0, 1.2)),
    (20.001, 120, 20, (1.0, 1.1)),
    (20.0, 120, 20, (1.0, 1.3)),
    (15.0, 20, 120, (1.0, 1.5)),
]


@pytest.mark.parametrize("row", PLACES_OF_WATER, ids=str)
def test_the_seepage_band_follows_the_place(row: tuple[float, float, float, tuple[float, float]]) -> None:
    distance, length, other, band = row
    assert hydraulic(distance=distance, length=length, other=other, H=6.0, d=4.0) == list(band)


def test_a_round_dig_is_worse_the_narrower_it_is() -> None:
    low, high = round_band(np.array([10.0, 10.01]), np.array([6.0, 6.0]), np.array([4.0, 4.0]))
    assert (list(low), list(high)) == ([1.3, 1.0], [1.65, 1.65])


@given(st.floats(0.0, 40.0), st.floats(0.0, 40.0), st.floats(20.0, 200.0), st.floats(10.0, 200.0))
def test_seepage_is_never_called_better_than_the_plane_nor_milder_nearer_a_corner(
    a: float, b: float, length: float, other: float
) -> None:
    near, far = sorted((a, b))
    low, high = hydraulic_band(
        np.array([near, far]), np.full(2, length), np.full(2, other), np.full(2, 8.0), np.full(2, 5.0)
    )
    assert np.all(low >= 1.0)
    assert low[0] >= low[1]
    assert high[0] >= high[1]


@given(st.floats(0.0, 1.0))
def test_heave_in_a_short_dig_is_a_relief_never_a_danger(B_over_L: float) -> None:
    assert 1 / 1.2 - 1e-12 <= float(heave_ratio(B_over_L)) <= 1.0


def test_heave_reads_above_one_where_the_section_flatters_the_base() -> None:
    """A round section standing for an endless dig: the real base is worse by 1.2."""
    assert float(heave_ratio(0.0, section_B_over_L=1.0)) == pytest.approx(1.2)


@given(st.floats(0.3, 15.0), st.floats(0.2, 20.0), st.floats(0.2, 20.0), st.floats(-15.0, 15.0), st.floats(3.0, 20.0))
def test_the_load_ratio_agrees_with_the_loads_of_a_section(
    near: float, width: float, half: float, offset: float, H: float
) -> None:
    """Two ways of integrating the same stress: this criterion's arrays and the hand-over of a section."""
    one = np.array([1.0])
    got = area_ratio(near * one, (near + width) * one, (offset - half) * one, (offset + half) * one, np.array([[H]]))
    expect = area_ratios(near, near + width, H, offset + half, half - offset)
    assert [float(one[0]) for one in got] == pytest.approx([min(expect), max(expect)], abs=2e-4)


def test_the_vector_is_ranked_index_by_index_and_the_unknown_comes_last() -> None:
    base = {"basal_safety": 1.5, "excavated_depth": 8.0, "surcharge": 10.0}
    vectors = [base, base | {"basal_safety": 1.2}, base | {"basal_safety": None}, base | {"surcharge": 20.0}]
    assert sv.rank_severity(vectors) == (1, 3, 0, 2)


def test_a_force_is_split_into_uplift_and_thrust_that_close() -> None:
    up, along = sv.uplift_and_thrust(1000.0, 35.0, 20.0)
    square = 1000.0 / sv.member_factor(35.0, 20.0)
    assert up**2 + along**2 + square**2 == pytest.approx(1000.0**2)
