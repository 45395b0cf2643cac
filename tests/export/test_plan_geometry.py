"""The geometry under the drawings: perimeter by chainage, offsets, stretches, frames and round scales."""

from __future__ import annotations

from dataclasses import replace
from math import cos, pi, sin

import pytest
from builders_export import Job
from hypothesis import given
from hypothesis import strategies as st

from export.report.along import Perimeter, stretches, worst_words
from export.report.plan_site import to_world
from export.report.scale import RATIOS, clip, fit, round_ratio, round_step, units_per_metre
from sections.model import Pit
from sections.proposal import ProposalFrame, StationOutput, StationTable

LENGTHS = st.floats(0.01, 1e5)


def test_the_retained_side_lies_outside_a_pit_walked_counter_clockwise(first_pit: Job) -> None:
    line = Perimeter.of(first_pit.proposal.pits[0])
    assert line.point(15.0) == (115.0, 200.0)
    assert line.square_off(15.0, 2.0) == (115.0, 198.0)
    assert line.square_off(40.0, 2.0) == (132.0, 210.0)
    assert line.point(0.0, 1.0) == pytest.approx((99.0, 199.0))  # mitred at the corner
    assert line.normal(65.0) == pytest.approx((0.0, 1.0))


def test_a_stretch_may_pass_the_start(first_pit: Job) -> None:
    line = Perimeter.of(first_pit.proposal.pits[0])
    assert line.part(98.0, 3.0) == [(100.0, 202.0), (100.0, 200.0), (103.0, 200.0)]


def test_an_open_perimeter_is_not_closed() -> None:
    pit = Pit(id="P1", closed=False, length=7.0, perimeter=((0.0, 0.0), (4.0, 0.0), (4.0, 3.0)), ground_level=None)
    line = Perimeter.of(pit)
    assert line.point(7.0) == (4.0, 3.0)
    assert line.part(0.0, 7.0) == [(0.0, 0.0), (4.0, 0.0), (4.0, 3.0)]
    assert line.square_off(2.0, 1.0) == (2.0, -1.0)


def test_a_chorded_ring_keeps_the_length_of_its_arc() -> None:
    # 120 chords of a circle of 15 m are 94.237 m long, the arc 94.248 m: chainage follows the arc
    ring = tuple((15 * cos(2 * pi * n / 120), 15 * sin(2 * pi * n / 120)) for n in range(120))
    line = Perimeter.of(Pit(id="P1", closed=True, length=2 * pi * 15, perimeter=ring, ground_level=None))
    assert line.length == pytest.approx(94.2478, abs=1e-4)
    assert line.point(2 * pi * 15 / 4) == pytest.approx((0.0, 15.0), abs=1e-9)


def test_stations_stand_for_half_the_way_to_their_neighbours() -> None:
    found = stretches([0.0, 1.0, 2.0, 3.0], ["a", "a", "b", "a"], 4.0)
    assert [(part.start, part.to, part.value) for part in found] == [(0.0, 1.5, "a"), (1.5, 2.5, "b"), (2.5, 4.0, "a")]


@given(st.lists(st.sampled_from("abc"), min_size=1, max_size=40))
def test_stretches_cover_the_perimeter_once(values: list[str]) -> None:
    chainage = [float(n) for n in range(len(values))]
    found = stretches(chainage, values, float(len(values)))
    assert (found[0].start, found[-1].to) == (0.0, float(len(values)))
    assert all(a.to == b.start and a.value != b.value for a, b in zip(found, found[1:], strict=False))


def test_an_output_without_stations_counts_as_not_assessed() -> None:
    good = StationOutput(low=(0.95,), high=(1.0,), verdict=("holds",), dominant=(None,))
    table = StationTable(
        chainage=(0.0,), floor=(None,), retained=(None,), section=(None,), outputs={"settlement": good}
    )
    assert worst_words(table, ("settlement",)) == ("holds",)
    assert worst_words(table, ("settlement", "support_force")) == ("not_assessed",)
    bad = replace(good, verdict=("under_states",))
    assert worst_words(replace(table, outputs={"settlement": bad}), ("settlement", "x")) == ("under_states",)


def test_world_is_offset_plus_the_turned_local_point() -> None:
    # 90 degrees counter-clockwise: local x points north
    world = to_world(ProposalFrame(offset=(500000.0, 180000.0, 0.0), rotation_deg=90.0, crs=None))
    assert world((3.0, 1.0, -6.0)) == pytest.approx((499999.0, 180003.0))


@given(LENGTHS, LENGTHS)
def test_a_drawing_fits_at_a_round_scale(wide: float, high: float) -> None:
    view = fit([(1000.0, 2000.0), (1000.0 + wide, 2000.0 + high)], 900.0, 800.0, margin=40.0)
    assert view.ratio in RATIOS
    for x, y in ((view.x(1000.0), view.y(2000.0)), (view.x(1000.0 + wide), view.y(2000.0 + high))):
        assert -1e-6 <= x <= 900.0 + 1e-6
        assert -1e-6 <= y <= view.height + 1e-6


@given(LENGTHS)
def test_steps_and_scales_are_round_and_large_enough(size: float) -> None:
    step = round_step(size)
    assert step >= size * (1 - 1e-8)
    assert f"{step:e}"[0] in "125"
    assert units_per_metre(round_ratio(units_per_metre(size * 10))) <= units_per_metre(size * 10) * (1 + 1e-8)


def test_a_cut_is_clipped_to_the_sheet() -> None:
    view = fit([(0.0, 0.0), (10.0, 10.0)], 100.0, 100.0)
    (west, east), _ = view.x_range, view.y_range
    inside = clip((west - 50.0, 5.0), (east + 50.0, 5.0), view)
    assert inside is not None
    assert (*inside[0], *inside[1]) == pytest.approx((west, 5.0, east, 5.0))
    assert clip((west - 50.0, 500.0), (east + 50.0, 500.0), view) is None
