"""Bond lengths, support chains, opposite walls and over-dig."""

from __future__ import annotations

from math import cos, inf, isclose, nan, pi, radians, sin

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from row_rules import assert_rows_hold, back
from scipy.optimize import minimize

from sections.member import RealMember
from sections.smearing import anchors, chain, opposite_wall, overdig
from sections.smearing import member as smear

points = st.tuples(*[st.floats(-10, 10)] * 3)
CHS_EA = 5193429.648


@given(skew=st.floats(-60, 60), inclination=st.floats(0, 60), spacing=st.floats(0.8, 6.0), D=st.floats(0.08, 0.4))
def test_both_faces_of_the_bond_sheet_hold_what_the_grout_body_does(skew, inclination, spacing, D):
    tau, L = 150.0, 6.0
    real = RealMember(
        EA_kN=3e5, skew=skew, inclination=inclination, spacing=spacing, bond_diameter=D, contact_kPa=tau,
        limit_kN=pi * D * L * tau, preload_kN=None,
    )  # fmt: skip
    made = anchors.smear_bond_length(real)
    assert_rows_hold(made)
    drawn = smear.projected_length(L, smear.Direction(skew=skew, inclination=inclination))
    assert isclose(2 * made.section.contact_kPa * drawn, made.section.limit_kN_per_m, rel_tol=1e-9)
    assert isclose(made.section.limit_kN_per_m * back(made, "N", "kN/m").factor, pi * D * L * tau, rel_tol=1e-9)
    assert made.section.resists == "tension"


def test_a_lock_off_load_above_six_tenths_of_the_tendon_is_flagged():
    # EN 1537:1999, 9.8
    assert anchors.check_lock_off(600.0, 1000.0, "P1-anchor-1") == ()
    assert anchors.check_lock_off(601.0, 1000.0, "P1-anchor-1")[0].code == "lock-off"


@settings(max_examples=60, deadline=None)
@given(a0=points, a1=points, b0=points, b1=points)
def test_the_gap_between_two_bond_lengths_is_the_least_distance_of_their_points(a0, a1, b0, b1):
    ends = np.array([[a0, a1], [b0, b1]])
    gap = anchors.least_bond_gap(ends)

    def apart(st_):
        p = ends[0, 0] + st_[0] * (ends[0, 1] - ends[0, 0])
        q = ends[1, 0] + st_[1] * (ends[1, 1] - ends[1, 0])
        return float(np.sum((p - q) ** 2))

    starts = [(s, t) for s in (0.0, 0.5, 1.0) for t in (0.0, 0.5, 1.0)]
    best = min(float(minimize(apart, start, bounds=[(0, 1), (0, 1)]).fun) for start in starts)
    assert gap == pytest.approx(best**0.5, abs=1e-3)
    assert gap == pytest.approx(anchors.least_bond_gap(ends[::-1, ::-1]), abs=1e-9)


def test_fanned_bond_lengths_closer_than_one_and_a_half_metres_are_flagged():
    # EN 1997-1, 8.4(7): two level bonds 1.4 m apart over one another, crossing at right angles on plan
    ends = np.array([[[0.0, 0, 0], [6, 0, 0]], [[3, -3, -1.4], [3, 3, -1.4]], [[40, 0, 0], [46, 0, 0]]])
    assert anchors.least_bond_gap(ends) == pytest.approx(1.4)
    assert anchors.check_bond_gap(ends, "row 1")[0].code == "bond-gap"
    ends[1, :, 2] = -1.5
    assert anchors.check_bond_gap(ends, "row 1") == ()
    assert anchors.least_bond_gap(ends[:1]) == inf


@pytest.mark.parametrize("bad", [np.zeros((2, 3)), np.full((2, 2, 3), nan)])
def test_bond_lengths_of_the_wrong_shape_are_refused(bad):
    with pytest.raises(ValueError, match="allowed is"):
        anchors.least_bond_gap(bad)


links = st.one_of(st.just(inf), st.floats(1e3, 1e8))


@given(packing=links, waler=links, end=links, L=st.floats(1.0, 60.0), u=st.floats(1e-4, 0.05))
def test_the_parts_of_a_chain_shorten_together_by_the_movement(packing, waler, end, L, u):
    link = chain.support_chain(CHS_EA, L, k_packing=packing, k_waler=waler, k_end=end)
    N = link.k_effective * u
    assert isclose(N * L / CHS_EA + N / packing + N / waler + N / end, u, rel_tol=1e-9)
    assert 0 < link.phi <= 1 + 1e-12
    assert isclose(link.phi, link.k_effective * L / CHS_EA, rel_tol=1e-12)


@given(skew=st.floats(10, 80), packing=links, waler=links, u=st.floats(1e-4, 0.05))
def test_the_chain_of_a_corner_strut_shortens_from_both_ends(skew, packing, waler, u):
    L = 6.0
    link = chain.corner_chain(CHS_EA, L, skew, k_packing=packing, k_waler=waler)
    # whole strut with both its ends: N (L/EA + 2/k_p + 2/k_w) = u (cos + sin)
    c, s = cos(radians(skew)), sin(radians(skew))
    N = u * (c + s) / (L / CHS_EA + 2 / packing + 2 / waler)
    assert isclose(link.k_effective * u * c, N, rel_tol=1e-9)


def test_at_45_degrees_a_corner_chain_is_one_end_over_half_the_length():
    corner = chain.corner_chain(CHS_EA, 6.0, 45.0, k_packing=2e5, k_waler=3e5)
    half = chain.support_chain(CHS_EA, 3.0, k_packing=2e5, k_waler=3e5)
    assert corner.k_effective == pytest.approx(half.k_effective)
    assert corner.phi == pytest.approx(half.phi)


def test_an_unknown_chain_is_a_range_of_one_third_to_one():
    low, high = chain.chain_range(CHS_EA, 10.0)
    assert (low.phi, high.phi) == (pytest.approx(1 / 3), 1.0)
    assert high.k_effective == pytest.approx(CHS_EA / 10)


@given(inclination=st.floats(-90, 90), k_v=st.floats(1e3, 1e6), k_h=st.floats(1e3, 1e6), N=st.floats(1.0, 1e3))
def test_a_foot_moves_along_the_raker_as_its_two_springs_do(inclination, k_v, k_h, N):
    d = radians(inclination)
    along = N * cos(d) / k_h * cos(d) + N * sin(d) / k_v * sin(d)
    assert isclose(N / chain.stiffness_along(k_v, k_h, inclination), along, rel_tol=1e-9)


def test_a_slab_gives_no_support_at_an_opening_that_touches_the_wall():
    assert chain.slab_at_opening(0.0, 4.0) == "no_support"
    assert chain.slab_at_opening(6.0, 4.0) == "not_assessed"
    assert chain.slab_at_opening(6.1, 4.0) == "net_width"


def test_a_round_footing_of_equal_area():
    assert chain.equal_area_radius(pi * 4) == pytest.approx(2.0)


@given(skew=st.floats(-60, 60), N=st.floats(1.0, 5000.0), s=st.floats(1.0, 10.0))
def test_support_of_a_turned_wall_and_the_force_it_needs(skew, N, s):
    # per metre of the turned wall: force square to it over the spacing along it
    per_metre = N * cos(radians(skew)) / opposite_wall.spacing_on(s, skew)
    assert isclose(per_metre, opposite_wall.support_share(skew) * N / s, rel_tol=1e-9)
    assert isclose(opposite_wall.force_ratio(skew) * opposite_wall.support_share(skew), 1.0, rel_tol=1e-12)
    assert isclose(opposite_wall.thrust_along(N, skew), N * sin(radians(skew)), rel_tol=1e-9, abs_tol=1e-9)
    assert opposite_wall.support_share(skew, skew) == pytest.approx(1.0)


def test_one_cut_serves_both_walls_up_to_ten_degrees():
    assert opposite_wall.one_cut_serves_both(-10.0)
    assert not opposite_wall.one_cut_serves_both(10.1)


def test_one_code_takes_the_larger_and_the_other_the_smaller_over_dig():
    for h in np.linspace(0, 20, 41):
        assert overdig.overdig_bs8002(float(h)) >= overdig.overdig_en1997(float(h))


@pytest.mark.parametrize("bad", [0.0, -1.0, nan, -inf])
@pytest.mark.parametrize(
    "call",
    [
        lambda v: chain.support_chain(v, 10.0),
        lambda v: chain.support_chain(1e6, v),
        lambda v: chain.support_chain(1e6, 10.0, k_packing=v),
        lambda v: chain.corner_chain(1e6, 6.0, 45.0, k_waler=v),
        lambda v: chain.packing_stiffness(v, 0.09, 0.1),
        lambda v: chain.footing_stiffness(v, 1e4, 0.3),
        lambda v: chain.stiffness_along(v, 1e4, 30.0),
        lambda v: chain.free_strain(v, 10.0),
        lambda v: anchors.bond_sheet(v, 6.0, 200.0, 2.0),
        lambda v: anchors.bond_sheet(0.15, 6.0, v, 2.0),
        lambda v: anchors.largest_lock_off(v),
        lambda v: opposite_wall.spacing_on(v, 10.0),
    ],
)
def test_physical_nonsense_is_refused_with_the_allowed_range(call, bad):
    with pytest.raises(ValueError, match="allowed is"):
        call(bad)


def test_refusals_name_value_and_unit():
    with pytest.raises(ValueError, match=r"friction limit = -5 kPa: allowed is above 0 kPa"):
        anchors.bond_sheet(0.15, 6.0, -5.0, 2.0)
    with pytest.raises(ValueError, match=r"height = nan m: allowed is at least 0 m"):
        overdig.overdig_en1997(nan)
