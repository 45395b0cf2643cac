"""Ring walls, struts, anchors, piles and slabs per radian, and whether the thrust stays in the wall."""

from __future__ import annotations

from math import cos, inf, isclose, nan, pi, radians, sin, tan

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from row_rules import also, assert_rows_hold, back
from scipy.integrate import quad

from sections.member import RealMember
from sections.smearing import hand_over_ring, ring
from sections.smearing.ring_supports import (
    smear_diametral_struts,
    smear_ring_anchors,
    smear_ring_beam,
    smear_ring_bearing_piles,
    smear_ring_slab,
)
from sections.smearing.ring_wall import ring_spacing, secant_hoop, smear_ring_pile_wall, smear_ring_wall
from sections.smearing.thrust_line import check_worth_trying, find_thrust_line, two_runs_agree
from sections.smearing.wall import overlap
from sections.smearing.wall_rows import round_pile

radii = st.floats(3.0, 60.0)
counts = st.integers(3, 200)
E = 33.0e6


@given(radius=radii, count=counts, skew=st.floats(-60, 60), inclination=st.floats(-70, 70))
def test_the_whole_ring_of_anchors_is_two_pi_times_the_value_per_radian(radius, count, skew, inclination):
    real = RealMember(
        EA_kN=1.1e5, preload_kN=400.0, limit_kN=700.0, skew=skew, inclination=inclination,
        spacing=ring_spacing(radius, count), count=count,
    )  # fmt: skip
    made = smear_ring_anchors(real, radius=radius, count=count)
    assert_rows_hold(made)
    d = np.array([cos(radians(inclination)) * cos(radians(skew)), -sin(radians(inclination))])
    c = float(np.hypot(*d))
    # in the radial plane all anchors together pull with n P c along the drawn line, and stretch with n EA c^2/L at L c
    assert isclose(2 * pi * made.section.preload_kN_per_rad, count * 400.0 * c, rel_tol=1e-9)
    assert isclose(2 * pi * made.section.EA_kN_per_rad / c, count * 1.1e5 * c**2, rel_tol=1e-9)
    for unit, value in (
        ("kN/rad", made.section.preload_kN_per_rad),
        ("kN/m", made.section.preload_kN_per_rad / radius),
    ):
        assert isclose(value * back(made, "N", unit).factor, 400.0, rel_tol=1e-9)
        if abs(sin(radians(inclination))) > 1e-9:
            assert isclose(value * also(made, "N", unit, "vertical"), 400.0 * sin(radians(inclination)), rel_tol=1e-9)


@given(radius=radii, count=counts)
def test_the_whole_ring_of_bearing_piles_carries_what_its_piles_do(radius, count):
    real = RealMember(
        EA_kN=2e6, EI_kNm2=3e5, limit_kN=1500.0, diameter=0.4, contact_kPa=60.0, spacing=ring_spacing(radius, count)
    )
    if real.spacing < 0.4:
        with pytest.raises(ValueError, match="pile spacing"):
            smear_ring_bearing_piles(real, radius=radius, count=count)
        return
    made = smear_ring_bearing_piles(real, radius=radius, count=count)
    assert_rows_hold(made)
    assert isclose(2 * pi * made.section.EA_kN_per_rad, count * 2e6, rel_tol=1e-9)
    assert isclose(2 * pi * made.section.limit_kN_per_rad, count * 1500.0, rel_tol=1e-9)
    assert isclose(2 * made.section.contact_kPa * 2 * pi * radius, count * pi * 0.4 * 60.0, rel_tol=1e-9)
    for quantity, unit in (("N", "kN/rad"), ("V", "kN/rad"), ("M", "kNm/rad")):
        assert isclose(back(made, quantity, unit).factor * count, 2 * pi, rel_tol=1e-9)


@given(radius=radii, diameters=st.integers(2, 12), p=st.floats(1.0, 500.0))
def test_diametral_struts_balance_a_ring_load_and_their_disc_moves_as_they_do(radius, diameters, p):
    real = RealMember(EA_kN=5.2e6, preload_kN=-800.0, limit_kN=4000.0)
    made = smear_diametral_struts(real, radius=radius, diameters=diameters, nu=0.2)
    assert_rows_hold(made)
    # q kN/m on the circumference: each of the 2 n ends takes 2 pi R q/(2 n) and shortens its half by F R/EA
    F = p * 2 * pi * radius / (2 * diameters)
    u = F * radius / 5.2e6
    assert isclose(p * radius / made.section.radial_stiffness_kN_per_m_per_rad, u, rel_tol=1e-9)
    assert isclose(p * radius * (1 - 0.2) / made.section.disc_Et_kN_per_m, u, rel_tol=1e-9)
    assert isclose(p * back(made, "N", "kN/m").factor, F, rel_tol=1e-9)
    assert isclose(p * radius * back(made, "reaction", "kN/rad").factor, -F, rel_tol=1e-9)


def test_a_chain_softens_diametral_struts():
    real = RealMember(EA_kN=5.0e6, k_effective_kN_per_m=2.5e5, L_eff=10.0)
    made = smear_diametral_struts(real, radius=10.0, diameters=2, nu=0.2)
    assert made.section.radial_stiffness_kN_per_m_per_rad == pytest.approx(0.5 * 2 * 5.0e6 / (pi * 10.0))
    assert_rows_hold(made)


@given(radius=radii, ratio=st.floats(1.0, 3.0), diameter=st.floats(0.4, 1.5))
def test_a_ring_of_contiguous_piles_has_four_stiffnesses_and_none_along_the_ring(radius, ratio, diameter):
    pile = round_pile(diameter=diameter, E=E, unit_weight=25.0, centres=ratio * diameter, which="all")
    made = smear_ring_pile_wall(pile, radius=radius, EI_factor=0.7, soil=18.0)
    assert_rows_hold(made)
    section = made.section
    assert (section.EA_hoop_kN_per_m, section.EI_hoop_kNm2_per_m) == (0.0, 0.0)
    assert section.EA_vertical_kN_per_m == pytest.approx(pile.EA_kN / pile.spacing)
    assert section.EI_vertical_kNm2_per_m == pytest.approx(0.7 * pile.EI_kNm2 / pile.spacing)
    assert isclose(back(made, "M", "kNm/rad").factor * radius, back(made, "M", "kNm/m").factor, rel_tol=1e-12)
    assert not [row for row in made.back if row.quantity == "hoop"]


def test_a_secant_ring_carries_hoop_only_in_the_overlap_left_at_each_level():
    # by hand, D 0.88 at 0.65, 25 mm and 1:200: chord 0.533 at the top, 0.228 at 15 m, 0 at 20 m
    depth = np.array([0.0, 15.0, 20.0])
    hoop = secant_hoop(overlap(0.88, 0.65, depth, set_out=0.025, verticality=200.0), -depth, 10.0e6)
    pile = round_pile(diameter=0.88, E=E, unit_weight=25.0, centres=0.65, which="male")
    section = smear_ring_pile_wall(pile, radius=10.0, hoop=hoop).section
    assert section.EA_hoop_kN_per_m == 0.0
    assert section.EA_hoop_by_level[0] == (0.0, pytest.approx(5.33e6, rel=1e-3))
    assert section.EA_hoop_by_level[1][1] == pytest.approx(2.28e6, rel=1e-3)
    assert section.EI_hoop_kNm2_per_m == 0.0


def test_a_ring_of_panels_loses_its_step_in_hoop_and_bends_along_the_ring_only_without_joints():
    jointed = smear_ring_wall(E=E, thickness=0.8, radius=12.5, jointed=True, joint_step=0.05, unit_weight=25.0, nu=0.2)
    whole = smear_ring_wall(E=E, thickness=0.8, radius=12.5, jointed=False)
    assert_rows_hold(jointed)
    assert_rows_hold(whole)
    assert jointed.section.EA_hoop_kN_per_m == pytest.approx(E * 0.75)
    assert (jointed.section.EI_hoop_kNm2_per_m, whole.section.EI_hoop_kNm2_per_m) == (0.0, pytest.approx(1.408e6))
    assert jointed.section.EI_vertical_kNm2_per_m == pytest.approx(1.408e6 / 0.96)
    # thin ring: the hoop stiffness handed over gives u = p R^2/(E t) of the check value 1.183712 mm
    assert 200.0 * 12.5**2 / whole.section.EA_hoop_kN_per_m == pytest.approx(1.183712121e-3)


@given(radius=radii, q=st.floats(1.0, 1e3))
def test_a_ring_beam_returns_its_hoop_force_from_the_reaction_on_the_wall(radius, q):
    made = smear_ring_beam(RealMember(EA_kN=2.6e7, limit_kN=9000.0), radius=radius)
    assert_rows_hold(made)
    hoop = ring.hoop_force(q, radius)
    assert isclose(q * back(made, "reaction", "kN/m").factor, -hoop, rel_tol=1e-9)
    assert isclose(q * radius * back(made, "reaction", "kN/rad").factor, -hoop, rel_tol=1e-9)
    assert back(made, "hoop", "kN").factor == 1.0
    assert isclose(q * radius / made.section.radial_stiffness_kN_per_m_per_rad, hoop * radius / 2.6e7, rel_tol=1e-9)


@given(radius=radii, share=st.floats(0.0, 0.95), nu=st.floats(0.0, 0.4))
def test_a_slab_with_a_hole_is_softer_and_a_wide_hole_leaves_a_thin_ring(radius, share, nu):
    solid = smear_ring_slab(E=E, thickness=0.3, radius=radius, nu=nu)
    open_ = smear_ring_slab(E=E, thickness=0.3, radius=radius, nu=nu, hole=share * radius)
    assert_rows_hold(open_)
    k, k0 = (made.section.radial_stiffness_kN_per_m_per_rad for made in (open_, solid))
    assert k <= k0 * (1 + 1e-12)
    assert k0 == pytest.approx(E * 0.3 / (1 - nu))
    if share > 0.9:
        thin = E * 0.3 * (1 - share) / ((1 + share) / 2)  # E b/R of a ring of width (1 - share) R
        assert k == pytest.approx(thin, rel=0.06)


def test_lame_and_the_thin_ring_agree_for_thin_rings():
    thick = ring.thick_ring_movement(200.0, E, 0.2, 12.46, 12.54)
    assert thick == pytest.approx(ring.ring_movement(200.0, E, 0.08, 12.5), rel=0.01)
    assert np.mean(ring.thick_ring_hoop(200.0, 12.46, 12.54)) * 0.08 == pytest.approx(200 * 12.54, rel=1e-4)


@given(n=st.integers(3, 60), R=radii, p=st.floats(1.0, 300.0))
def test_a_polygon_is_in_balance_and_nears_the_circle(n, R, p):
    found = ring.find_polygon(n, R, p)
    # half the polygon: pressure on its width across two opposite corners or sides equals two hoop forces
    assert found.apothem == pytest.approx(R - found.sagitta)
    assert found.M_corner == pytest.approx(2 * found.M_mid)
    assert pi * found.equal_area_radius**2 == pytest.approx(n * found.side * found.apothem / 2)
    area, around = n * found.side * found.apothem / 2, n * found.side
    assert found.quotient == pytest.approx(4 * pi * area / around**2)
    assert pytest.approx(p * found.side / (2 * tan(pi / n))) == found.N
    assert found.eccentricity == pytest.approx(found.M_corner / found.N)


@pytest.mark.parametrize("ground", [0.0, 500.0, 2.0e4, 5.0e6])
def test_the_ring_under_two_struts_sums_to_no_mean_moment_and_equals_its_plain_series(ground):
    EI, R = 1.408e6, 10.0
    theta = np.linspace(0, pi, 20001)
    M = ring.strut_moment(3.0, R, theta, EI, ground=ground)
    assert np.trapezoid(M, theta) == pytest.approx(0.0, abs=1e-3 * np.max(np.abs(M)))
    m = np.arange(2.0, 40000.0, 2.0)
    plain = 2 * 3.0 * R / pi * np.sum((m**2 - 1) * np.cos(m * 0.4) / ((m**2 - 1) ** 2 + ground * R**4 / EI))
    assert float(ring.strut_moment(3.0, R, 0.4, EI, ground=ground)) == pytest.approx(plain, rel=1e-4, abs=1e-4)


def test_uneven_pressure_in_mode_three_bends_less_than_in_mode_two():
    two, three = (ring.uneven_moment(20.0, 12.5, 1.408e6, mode=m) for m in (2, 3))
    assert three / two == pytest.approx(3 / 8)
    assert ring.uneven_movement(20.0, 12.5, 1.408e6, mode=3) == pytest.approx(20 * 12.5**4 / (64 * 1.408e6))


def test_a_ring_past_its_buckling_pressure_is_rejected():
    assert ring.shape_moment(2200.0, 12.5, 0.05, 1.408e6) == inf
    line = find_thrust_line(N=1000.0, M_shape=inf, thickness=0.8)
    assert line.word == "reject"


@given(e=st.floats(0.0, 1.0), t=st.floats(0.3, 1.5), N=st.floats(1.0, 5000.0), step=st.floats(0.0, 0.1))
def test_the_thrust_stays_within_a_sixth_and_leaves_beyond_a_half(e, t, N, step):
    line = find_thrust_line(
        N=N, M_shape=e * N / 2, M_uneven=-e * N / 4, M_struts=e * N / 4, thickness=t, joint_step=step
    )
    left = t - step
    assert line.eccentricity == pytest.approx(e)
    if abs(e - left / 6) > 1e-6 and abs(e - left / 2) > 1e-6:
        assert line.word == ("stays" if e < left / 6 else "not_two_dimensional" if e < left / 2 else "reject")


def test_without_hoop_force_nothing_holds_the_joints():
    assert find_thrust_line(N=0.0, M_shape=1.0, thickness=0.8).word == "reject"
    assert find_thrust_line(N=0.0, M_shape=0.0, thickness=0.8).word == "stays"


def test_reasons_not_to_try_a_ring_are_named():
    assert check_worth_trying(0.01, 0.98, 0.05) == ()
    assert len(check_worth_trying(0.03, 0.96, 0.2)) == 3
    assert check_worth_trying(0.01, 0.95, 0.05, least_quotient=0.948) == ()


def test_two_runs_agree_within_fifteen_per_cent_of_the_larger():
    assert two_runs_agree(100.0, 85.0)
    assert not two_runs_agree(100.0, 84.9)
    assert not two_runs_agree(100.0, -100.0)


def test_a_footing_beside_a_ring_keeps_what_each_alternative_says():
    # footing 2 across x 3 along the ring, 200 kPa, at r 8: Q = 1200 kN
    handed = hand_over_ring.hand_over_ring_footing(200.0, r=8.0, L=3.0)
    by_name = {row.name: row.value for row in handed.alternatives}
    assert by_name["pressure_kept"] == handed.section.value == 200.0
    total = quad(lambda r: by_name["total_kept"] * 2 * pi * r, 7.0, 9.0)[0]
    assert total == pytest.approx(1200.0)
    assert by_name["absent"] == 0.0
    assert by_name["equal_effect"] is None
    point = hand_over_ring.hand_over_ring_point(1200.0, r=8.0)
    assert {row.name: row.value for row in point.alternatives}["total_kept"] == pytest.approx(1200 / (16 * pi))


@pytest.mark.parametrize("bad", [0.0, -2.0, nan, inf])
@pytest.mark.parametrize(
    "call",
    [
        lambda v: ring.ring_stiffness(E, 0.8, v),
        lambda v: ring.ring_stiffness(v, 0.8, 10.0),
        lambda v: ring.buckling_pressure(v, 10.0),
        lambda v: ring.find_polygon(8, v, 1.0),
        lambda v: ring.disc_stiffness(E, v, 10.0, 0.2),
        lambda v: ring.ground_spring(v, 0.3, 10.0),
        lambda v: ring_spacing(v, 8),
        lambda v: smear_ring_anchors(RealMember(skew=0.0, inclination=0.0, EA_kN=1.0), radius=v, count=8),
        lambda v: smear_ring_beam(RealMember(EA_kN=1.0), radius=v),
        lambda v: find_thrust_line(N=1.0, M_shape=1.0, thickness=v),
        lambda v: hand_over_ring.ring_line_load(100.0, v),
        lambda v: secant_hoop([0.5], [0.0], v),
    ],
)
def test_physical_nonsense_is_refused_with_the_allowed_range(call, bad):
    with pytest.raises(ValueError, match="allowed is"):
        call(bad)


@pytest.mark.parametrize(
    "call",
    [
        lambda: ring.find_polygon(2, 10.0, 1.0),
        lambda: ring.uneven_moment(1.0, 10.0, 1.0, mode=1),
        lambda: ring.pair_factor(10.0, 10.0),
        lambda: ring.thick_ring_hoop(1.0, 2.0, 2.0),
        lambda: find_thrust_line(N=1.0, M_shape=1.0, thickness=0.8, joint_step=0.8),
        lambda: find_thrust_line(N=1.0, M_shape=nan, thickness=0.8),
        lambda: secant_hoop([-0.1], [0.0], 1e6),
        lambda: ring_spacing(10.0, 0),
    ],
)
def test_a_value_outside_its_range_is_refused(call):
    with pytest.raises(ValueError, match="allowed is"):
        call()


def test_a_pair_of_struts_beside_the_axis_is_as_stiff_radially_as_their_cosine():
    """Offset c: shortened u cos from either end over a length 2 R cos, so N = EA u/R; its radial part is N cos."""
    EA, R, c, u = 5.0e6, 10.0, 6.0, 1e-3
    cosine = 0.8
    made = smear_diametral_struts(RealMember(EA_kN=EA, preload_kN=-500.0), radius=R, diameters=2, nu=0.2, offset=c)
    assert_rows_hold(made)
    N = EA * 2 * u * cosine / (2 * R * cosine)
    per_radian = 4 * N * cosine / (2 * pi)
    assert made.section.radial_stiffness_kN_per_m_per_rad * u == pytest.approx(per_radian)
    assert per_radian * back(made, "N", "kN/rad").factor == pytest.approx(N)
    assert made.section.preload_kN_per_rad * back(made, "N", "kN/rad").factor == pytest.approx(-500.0)
