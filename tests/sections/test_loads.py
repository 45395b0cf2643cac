"""Loads on the wall: the closed forms against quadrature of Boussinesq's stress, and what the alternatives keep."""

from __future__ import annotations

from math import atan, cos, inf, nan, pi, sin

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import dblquad, quad

from sections.smearing import load_repeats, loads, yielding_wall
from sections.smearing.footing import hand_over_footing, settlement_pressure, stress_ratio
from sections.smearing.hand_over import (
    hand_over_area,
    hand_over_line,
    hand_over_perpendicular_line,
    hand_over_point,
    hand_over_point_row,
)

distances = st.floats(0.5, 20.0)
heights = st.floats(3.0, 25.0)
halves = st.floats(0.3, 20.0)


def boussinesq(x, y, z):
    """Horizontal stress of 1 kN on a half-space, nu = 0.5 (Boussinesq 1885), written out apart from the code."""
    return 3 * x**2 * z / (2 * pi * (x**2 + y**2 + z**2) ** 2.5)


def flamant(x, z):
    return 2 * x**2 * z / (pi * (x**2 + z**2) ** 2)


def integral(f, low, high):
    return quad(f, low, high, epsrel=1e-11, epsabs=1e-14, limit=200)[0]


@settings(max_examples=40)
@given(x=distances, H=heights)
def test_widths_of_a_point_load_are_the_ratios_of_the_integrals_over_the_wall(x, H):
    force = integral(lambda z: flamant(x, z), 0, H) / integral(lambda z: boussinesq(x, 0, z), 0, H)
    moment = integral(lambda z: flamant(x, z) * (H - z), 0, H) / integral(lambda z: boussinesq(x, 0, z) * (H - z), 0, H)
    assert loads.width_by_resultant(x, H) == pytest.approx(force, rel=1e-8)
    assert loads.width_by_moment(x, H) == pytest.approx(moment, rel=1e-7)
    assert 4 * x / 3 < loads.width_by_moment(x, H) < loads.width_by_resultant(x, H) < 2 * x
    assert loads.point_width(x, H) == loads.width_by_moment(x, H)


@settings(max_examples=40)
@given(x=distances, z=st.floats(0.1, 20.0), b1=halves, b2=st.floats(-0.2, 20.0))
def test_F_is_the_integral_of_point_loads_over_the_length_of_the_line(x, z, b1, b2):
    finite = integral(lambda y: boussinesq(x, y, z), -b1, b2)
    r = float(np.hypot(x, z))
    assert float(loads.finite_length_factor(r, b1, b2)) == pytest.approx(finite / flamant(x, z), rel=1e-8)


@settings(max_examples=30)
@given(x=distances, H=heights, b1=halves, b2=st.floats(-0.2, 20.0))
def test_resultant_and_moment_of_a_short_line_are_the_integrals_of_F(x, H, b1, b2):
    def stress(z):
        return flamant(x, z) * float(loads.finite_length_factor(np.hypot(x, z), b1, b2))

    assert loads.finite_line_resultant(x, H, b1, b2) == pytest.approx(integral(stress, 0, H), rel=1e-8)
    moment = integral(lambda z: stress(z) * (H - z), 0, H)
    assert loads.finite_line_moment(x, H, b1, b2) == pytest.approx(moment, rel=1e-7)


@settings(max_examples=30)
@given(x=distances, H=heights, y=st.floats(0.0, 30.0))
def test_a_point_load_beside_the_section_is_felt_as_boussinesq_says(x, H, y):
    assert loads.point_resultant(x, H, y) == pytest.approx(integral(lambda z: boussinesq(x, y, z), 0, H), rel=1e-7)
    moment = integral(lambda z: boussinesq(x, y, z) * (H - z), 0, H)
    assert loads.point_moment(x, H, y) == pytest.approx(moment, rel=1e-7)
    assert loads.decay_along_wall(x, y) == pytest.approx(
        loads.point_resultant(x, 1e6, y) / loads.point_resultant(x, 1e6), rel=1e-6
    )
    assert loads.point_width(x, H, y) >= loads.point_width(x, H)


def test_an_area_load_is_the_double_integral_of_point_loads():
    z = 2.0
    whole = dblquad(lambda y, x: 20 * boussinesq(x, y, z), 2.0, 5.0, -2.0, 3.0, epsrel=1e-9)[0]
    assert float(loads.finite_strip_stress(20.0, 2.0, 5.0, 2.0, 3.0, z)) == pytest.approx(whole, rel=1e-8)
    depths = np.array([[0.5, 1.0], [2.0, 6.0]])
    assert loads.finite_strip_stress(20.0, 2.0, 5.0, 2.0, 3.0, depths).shape == (2, 2)
    endless = loads.finite_strip_stress(20.0, 2.0, 5.0, 1e5, 1e5, depths)
    np.testing.assert_allclose(endless, loads.strip_stress(20.0, 2.0, 5.0, depths), rtol=1e-8)


@settings(max_examples=15)
@given(x1=st.floats(0.0, 6.0), width=st.floats(0.5, 8.0), H=heights, b1=halves, b2=halves)
def test_area_ratios_are_those_of_the_integrals_over_the_wall(x1, width, H, b1, b2):
    x2 = x1 + width
    force = integral(lambda x: loads.finite_line_resultant(max(x, 1e-9), H, b1, b2), x1, x2)
    moment = integral(lambda x: loads.finite_line_moment(max(x, 1e-9), H, b1, b2), x1, x2)
    strip = integral(lambda z: float(loads.strip_stress(1.0, x1, x2, z)), 1e-12, H)
    strip_moment = integral(lambda z: float(loads.strip_stress(1.0, x1, x2, z)) * (H - z), 1e-12, H)
    by_force, by_moment = loads.area_ratios(x1, x2, H, b1, b2)
    assert by_force == pytest.approx(force / strip, rel=1e-6)
    assert by_moment == pytest.approx(moment / strip_moment, rel=1e-6)
    assert 0 < by_force < 1
    assert 0 < by_moment < 1


@settings(max_examples=30)
@given(x1=st.floats(0.3, 8.0), length=st.floats(0.5, 15.0), H=heights)
def test_widths_of_a_line_square_to_the_wall_are_ratios_of_integrals_along_it(x1, length, H):
    x2 = x1 + length
    pairs = ((loads.line_resultant, loads.point_resultant), (loads.line_moment, loads.point_moment))
    for found, (endless, single) in zip(loads.perpendicular_widths(x1, x2, H), pairs, strict=True):
        wide = integral(lambda x, f=endless: f(x, H), x1, x2) / integral(lambda x, f=single: f(x, H), x1, x2)
        assert found == pytest.approx(wide, rel=1e-7)


@given(x=st.floats(0.3, 20.0), b=st.floats(0.5, 40.0), H=st.floats(4.0, 25.0))
def test_the_closed_form_of_the_own_width_never_exceeds_the_exact_one(x, b, H):
    by_force, by_moment = loads.own_width(x, b, H)
    assert loads.own_width_closed(x, b, H) <= min(by_force, by_moment) * (1 + 1e-9)


@settings(max_examples=25)
@given(x=distances, H=heights, over=st.floats(0.3, 4.0))
def test_a_row_of_loads_has_the_mean_Q_over_s_and_its_peak_behind_a_load(x, H, over):
    s = over * x
    peak = load_repeats.peak_by_resultant(x, H, s)
    n = np.arange(-6000, 6001) * s
    direct = sum(loads.point_resultant(x, H, float(y)) for y in n[5000:7001]) * s / loads.line_resultant(x, H)
    assert peak == pytest.approx(direct, rel=1e-4)
    assert peak >= 1 - 1e-9
    assert load_repeats.peak_by_moment(x, H, s) >= peak - 1e-9
    # the mean over one bay of the resultant of the whole row is that of the line Q/s
    ys = np.linspace(0, s, 65)
    row = [sum(loads.point_resultant(x, H, float(y + k * s)) for k in range(-150, 151)) for y in ys[:-1]]
    assert float(np.mean(row)) * s == pytest.approx(loads.line_resultant(x, H), rel=2e-3)


def test_a_row_far_apart_acts_as_single_loads():
    peak = load_repeats.peak_by_resultant(3.0, 8.0, 300.0)
    assert 300.0 / peak == pytest.approx(loads.width_by_resultant(3.0, 8.0), rel=1e-4)
    peak = load_repeats.peak_by_moment(3.0, 8.0, 300.0)
    assert 300.0 / peak == pytest.approx(loads.width_by_moment(3.0, 8.0), rel=1e-4)


def test_a_row_wider_apart_than_its_distance_is_flagged():
    assert load_repeats.check_load_row(3.0, 8.0, 3.0, "load-1") == ()
    finding = load_repeats.check_load_row(3.0, 8.0, 6.0, "load-1")[0]
    assert "1.26 times the mean" in finding.text


def test_a_yielding_wall_has_terzaghis_resultant_for_near_lines():
    # Terzaghi 1954 (recalled): resultant 0.55 q for m <= 0.4
    H = 6.0
    total = integral(lambda z: float(yielding_wall.line_pressure(100.0, 0.3 * H, H, z)), 0, H)
    assert total == pytest.approx(55.0, rel=0.01)
    for pressure in (yielding_wall.line_pressure, yielding_wall.point_pressure):
        near, far = pressure(100.0, 0.4 * H, H, 3.0), pressure(100.0, 0.4001 * H, H, 3.0)
        assert near == pytest.approx(far, rel=0.02)  # the two forms meet at m = 0.4


def by_name(handed):
    return {row.name: row.value for row in handed.alternatives}


@settings(max_examples=25)
@given(Q=st.floats(1.0, 1e4), x=distances, dig=heights, below=st.floats(1.0, 10.0), stands_for=st.floats(2.0, 60.0))
def test_variants_of_a_point_load_keep_what_their_names_say(Q, x, dig, below, stands_for):
    depths = (dig, dig + below)
    handed = hand_over_point(Q, x=x, depths=depths, stands_for=stands_for)
    kept = by_name(handed)
    assert kept["pressure_kept"] == Q
    assert kept["total_kept"] * stands_for == pytest.approx(Q)
    assert kept["absent"] == 0
    assert handed.section.value == kept["equal_effect"]
    assert_equal_effect(
        kept["equal_effect"],
        [(loads.line_resultant(x, H), Q * loads.point_resultant(x, H)) for H in depths]
        + [(loads.line_moment(x, H), Q * loads.point_moment(x, H)) for H in depths],
    )


def assert_equal_effect(value, effects):
    """The value has at least each real effect, and exactly the governing one."""
    ratios = [value * plane / real for plane, real in effects]
    assert min(ratios) == pytest.approx(1.0, rel=1e-9)


@settings(max_examples=20)
@given(p=st.floats(5.0, 300.0), x1=st.floats(0.2, 8.0), width=st.floats(0.5, 5.0), b1=halves, b2=halves, dig=heights)
def test_variants_of_a_patch_keep_what_their_names_say(p, x1, width, b1, b2, dig):
    x2, depths = x1 + width, (dig, dig + 6.0)
    kept = by_name(hand_over_area(p, x1=x1, x2=x2, b1=b1, b2=b2, depths=depths, stands_for=30.0))
    assert kept["pressure_kept"] == p
    assert kept["total_kept"] * width * 30.0 == pytest.approx(p * width * (b1 + b2))
    assert kept["absent"] == 0
    effects = []
    for H in depths:
        for endless, finite in (
            (loads.line_resultant, loads.finite_line_resultant),
            (loads.line_moment, loads.finite_line_moment),
        ):
            plane = integral(lambda x, f=endless, H=H: f(x, H), x1, x2)
            effects.append((plane, p * integral(lambda x, f=finite, H=H: f(x, H, b1, b2), x1, x2)))
    ratios = [kept["equal_effect"] * plane / real for plane, real in effects]
    assert min(ratios) == pytest.approx(1.0, rel=1e-7)


@given(q=st.floats(1.0, 500.0), x=distances, b1=halves, b2=halves, dig=heights)
def test_variants_of_a_line_load_keep_what_their_names_say(q, x, b1, b2, dig):
    depths = (dig, dig + 5.0)
    handed = hand_over_line(q, x=x, b1=b1, b2=b2, depths=depths, stands_for=20.0)
    kept = by_name(handed)
    assert kept["pressure_kept"] == q
    assert kept["total_kept"] * 20.0 == pytest.approx(q * (b1 + b2))
    effects = [(loads.line_resultant(x, H), q * loads.finite_line_resultant(x, H, b1, b2)) for H in depths]
    effects += [(loads.line_moment(x, H), q * loads.finite_line_moment(x, H, b1, b2)) for H in depths]
    assert_equal_effect(kept["equal_effect"], effects)
    assert handed.section.value in (q, kept["equal_effect"])


def test_a_line_load_long_enough_is_handed_over_whole():
    long = hand_over_line(40.0, x=2.0, b1=60.0, b2=60.0, depths=(6.0, 12.0))
    assert (long.section.value, long.share) == (40.0, 1.0)
    short = hand_over_line(40.0, x=2.0, b1=3.0, b2=3.0, depths=(6.0, 12.0))
    assert short.section.value < 40.0
    assert by_name(short)["total_kept"] is None


def test_a_close_row_is_its_mean_and_a_wide_row_its_peak():
    # by hand: 100 kN each 2 m at 3 m: 50 kN/m
    close = hand_over_point_row(100.0, x=3.0, spacing=2.0, depths=(8.0,))
    assert close.section.value == pytest.approx(50.0)
    wide = hand_over_point_row(100.0, x=3.0, spacing=9.0, depths=(8.0,))
    assert wide.section.value == pytest.approx(100 / 9 * load_repeats.peak_by_moment(3.0, 8.0, 9.0))
    assert by_name(wide)["total_kept"] == pytest.approx(100 / 9)
    assert wide.section.value > 1.7 * 100 / 9


def test_lines_square_to_the_wall_are_spread_by_their_width_or_spacing():
    single = hand_over_perpendicular_line(50.0, x1=2.0, x2=8.0, depths=(8.0,))
    assert single.section.unit == "kPa"
    assert single.section.value == pytest.approx(50.0 / min(loads.perpendicular_widths(2.0, 8.0, 8.0)))
    row = hand_over_perpendicular_line(50.0, x1=2.0, x2=8.0, depths=(8.0,), spacing=2.0)
    assert row.section.value == pytest.approx(25.0)
    wide = hand_over_perpendicular_line(50.0, x1=2.0, x2=8.0, depths=(8.0,), spacing=200.0)
    assert wide.section.value == pytest.approx(single.section.value, rel=1e-3)


def test_a_footing_for_two_purposes_carries_both_pressures():
    # 2 x 2 m, 200 kPa, 1 m from the wall, H 8: by moment 0.532628 of it; settlement at 2 m 0.6113 of it (B = 2)
    handed = hand_over_footing(200.0, x1=1.0, x2=3.0, b1=1.0, b2=1.0, depths=(8.0,), settlement_depth=2.0)
    assert handed.section.value == pytest.approx(200 * 0.532628, rel=1e-5)
    wall, under = (row for row in handed.alternatives if row.name == "equal_effect")
    assert wall.value == handed.section.value
    assert under.value == pytest.approx(200 * 0.6113102, rel=1e-6)
    assert "settlement" in under.keeps


def test_a_long_footing_keeps_its_pressure_for_settlement():
    assert settlement_pressure(150.0, 2.0, 10.0, 4.0) == 150.0
    assert settlement_pressure(150.0, 2.0, 9.9, 4.0) == pytest.approx(150.0 * stress_ratio(2.0, 9.9, 4.0))


def test_stress_under_a_footing_is_the_double_integral_of_point_loads():
    # vertical stress of 1 kN: 3 z^3/(2 pi R^5) (Boussinesq 1885)
    z = 3.0
    whole = dblquad(lambda y, x: 3 * z**3 / (2 * pi * (x**2 + y**2 + z**2) ** 2.5), -1.0, 1.0, -2.0, 2.0)[0]
    a = 2 * atan(1.0 / z)
    assert stress_ratio(2.0, 4.0, z) == pytest.approx(whole / ((a + sin(a)) / pi), rel=1e-7)
    assert cos(a) < 1


@pytest.mark.parametrize("bad", [0.0, -1.0, nan, inf])
@pytest.mark.parametrize(
    "call",
    [
        lambda v: loads.width_by_resultant(v, 8.0),
        lambda v: loads.width_by_resultant(3.0, v),
        lambda v: loads.point_width(v, 8.0),
        lambda v: loads.own_width(3.0, v, 8.0),
        lambda v: loads.finite_length_factor(v, 1.0, 1.0),
        lambda v: loads.perpendicular_widths(v, 30.0, 8.0),
        lambda v: loads.area_ratios(1.0, 3.0, v, 1.0, 1.0),
        lambda v: load_repeats.peak_by_resultant(3.0, 8.0, v),
        lambda v: load_repeats.peak_near_surface(v, 2.0),
        lambda v: yielding_wall.line_pressure(1.0, v, 6.0, 1.0),
        lambda v: hand_over_point(100.0, x=3.0, depths=(8.0, v)),
        lambda v: hand_over_point(100.0, x=3.0, depths=(8.0,), stands_for=v),
        lambda v: hand_over_point_row(100.0, x=3.0, spacing=v, depths=(8.0,)),
        lambda v: settlement_pressure(100.0, v, 2.0, 1.0),
    ],
)
def test_physical_nonsense_is_refused_with_the_allowed_range(call, bad):
    with pytest.raises(ValueError, match="allowed is"):
        call(bad)


@pytest.mark.parametrize(
    "call",
    [
        lambda: hand_over_point(nan, x=3.0, depths=(8.0,)),
        lambda: hand_over_point(100.0, x=3.0, depths=()),
        lambda: loads.finite_length_factor(2.0, 1.0, -1.0),
        lambda: loads.strip_stress(10.0, 3.0, 3.0, 1.0),
        lambda: hand_over_area(10.0, x1=-0.5, x2=2.0, b1=1.0, b2=1.0, depths=(8.0,)),
    ],
)
def test_a_load_that_cannot_be_is_refused(call):
    with pytest.raises(ValueError, match="allowed is"):
        call()
