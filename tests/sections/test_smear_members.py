"""Struts, rakers and anchors per metre run: proved from bar theory in space, at any inclination, skew and spacing."""

from __future__ import annotations

from dataclasses import replace
from math import cos, inf, isclose, nan, radians, sin

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from row_rules import also, assert_rows_hold, back
from scipy.integrate import quad

from sections.member import RealMember
from sections.smearing import member as smear
from sections.smearing.checks import check_arching, check_skew, check_spacing, may_be_smeared
from sections.smearing.support_rows import smear_corner_strut, smear_support

skews = st.floats(-80.0, 80.0)
inclinations = st.floats(-80.0, 80.0)
spacings = st.floats(0.5, 20.0)
lengths = st.floats(2.0, 60.0)
forces = st.floats(-5000.0, 5000.0)
roles = st.sampled_from(("strut", "raker", "anchor"))
CHS_EA, CHS_EI = 5193429.648, 157308.984


def full_member(skew, inclination, spacing, **more) -> RealMember:
    rest = {"EA_kN": CHS_EA, "EI_kNm2": CHS_EI, "weight_kN_per_m": 1.9, "preload_kN": -500.0, "limit_kN": 3000.0}
    return RealMember(skew=skew, inclination=inclination, spacing=spacing, **({"free_strain": 2e-4} | rest | more))


def unit_vector(skew, inclination) -> np.ndarray:
    psi, delta = radians(skew), radians(inclination)
    return np.array([cos(delta) * cos(psi), cos(delta) * sin(psi), -sin(delta)])


@given(skew=skews, inclination=inclinations, spacing=spacings, role=roles)
def test_real_value_times_factor_is_the_section_value_and_preload_comes_back(skew, inclination, spacing, role):
    made = smear_support(full_member(skew, inclination, spacing), role)
    assert len(made.smear) == 6
    assert_rows_hold(made)


@given(skew=skews, inclination=inclinations, spacing=spacings, length=lengths)
def test_the_row_is_as_stiff_in_the_plane_as_bars_in_space_whose_wall_end_cannot_move_along_the_wall(
    skew, inclination, spacing, length
):
    # bar in space: K = EA/L d d^T, the movement along the wall held; per metre of wall divided by the spacing
    d = unit_vector(skew, inclination)
    space = (CHS_EA / length / spacing) * np.outer(d, d)[np.ix_([0, 2], [0, 2])]
    made = smear_support(full_member(skew, inclination, spacing), "strut")
    direction = smear.Direction(skew=skew, inclination=inclination)
    alpha = radians(direction.apparent_inclination)
    p = np.array([cos(alpha), -sin(alpha)])
    plane = made.section.EA_kN_per_m / smear.projected_length(length, direction) * np.outer(p, p)
    np.testing.assert_allclose(plane, space, rtol=1e-9, atol=1e-6)


@given(skew=skews, inclination=inclinations, spacing=spacings, ux=st.floats(-0.05, 0.05), uz=st.floats(-0.05, 0.05))
def test_force_taken_back_is_the_force_of_the_bar_in_space(skew, inclination, spacing, ux, uz):
    length, d = 12.0, unit_vector(skew, inclination)
    N_space = CHS_EA / length * float(d @ np.array([ux, 0.0, uz]))
    made = smear_support(full_member(skew, inclination, spacing), "anchor")
    direction = smear.Direction(skew=skew, inclination=inclination)
    alpha = radians(direction.apparent_inclination)
    drawn = smear.projected_length(length, direction)
    N = made.section.EA_kN_per_m / drawn * (ux * cos(alpha) - uz * sin(alpha))
    assert isclose(N * back(made, "N", "kN/m").factor, N_space, rel_tol=1e-9, abs_tol=1e-6)
    for word, part in (("vertical", -d[2]), ("horizontal", d[0])):
        if abs(sin(radians(inclination))) > 1e-9:
            assert isclose(N * also(made, "N", "kN/m", word), N_space * part, rel_tol=1e-9, abs_tol=1e-6)
    if abs(d[1]) > 1e-9:
        assert isclose(N * also(made, "N", "kN/m", "along"), N_space * abs(d[1]), rel_tol=1e-9, abs_tol=1e-6)


@given(skew=skews, inclination=inclinations, spacing=spacings)
def test_strain_energy_of_the_drawn_bar_and_beam_is_that_of_the_real_one(skew, inclination, spacing):
    length = 10.0
    direction = smear.Direction(skew=skew, inclination=inclination)
    made = smear_support(full_member(skew, inclination, spacing), "strut")
    c, drawn = direction.cos_beta, smear.projected_length(length, direction)
    # axial: end movement e along the drawn bar is c e along the real one
    real = CHS_EA / length * (c * 1e-3) ** 2 / 2
    assert isclose(made.section.EA_kN_per_m / drawn * 1e-3**2 / 2 * spacing, real, rel_tol=1e-9)
    # bending: w(s) = (s/L)^3 at arc length s, drawn at xi = c s; curvature of the real beam against that of the drawn
    real = CHS_EI / 2 * quad(lambda s: (6 * s / length**3) ** 2, 0, length)[0]
    plane = made.section.EI_kNm2_per_m / 2 * quad(lambda xi: (6 * xi / drawn**3) ** 2, 0, drawn)[0]
    assert isclose(plane * spacing, real, rel_tol=1e-9)


@given(skew=skews, inclination=inclinations, spacing=spacings)
def test_moment_and_shear_from_self_weight_are_those_of_the_real_beam_in_the_plane(skew, inclination, spacing):
    # cantilever of true length 10 m under its own weight w: root moment w_n L^2/2, shear w_n L, w_n across the member
    w, length = 1.9, 10.0
    direction = smear.Direction(skew=skew, inclination=inclination)
    made = smear_support(full_member(skew, inclination, spacing, weight_kN_per_m=w), "raker")
    drawn = smear.projected_length(length, direction)
    across = made.section.weight_kN_per_m2 * cos(radians(direction.apparent_inclination))
    # gravity splits along the drawn member and across it, in the plane; the real beam bends under the same part
    shear = across * drawn * back(made, "V", "kN/m").factor
    moment = across * drawn**2 / 2 * back(made, "M", "kNm/m").factor
    n = np.array([sin(radians(direction.apparent_inclination)), 0.0, cos(radians(direction.apparent_inclination))])
    real_across = w * float(n @ np.array([0.0, 0.0, 1.0]))
    assert isclose(shear, real_across * length, rel_tol=1e-9)
    assert isclose(moment, real_across * length**2 / 2, rel_tol=1e-9)


@given(skew=skews, inclination=inclinations, spacing=spacings, role=roles)
def test_doubling_the_spacing_halves_every_value_per_metre(skew, inclination, spacing, role):
    one = smear_support(full_member(skew, inclination, spacing), role)
    two = smear_support(full_member(skew, inclination, 2 * spacing), role)
    for row in one.smear:
        ratio = getattr(two.section, row.section_key) / getattr(one.section, row.section_key)
        assert isclose(ratio, 1.0 if row.quantity == "free_strain" else 0.5, rel_tol=1e-12)
    for a, b in zip(one.back, two.back, strict=True):
        assert isclose(b.factor, 2 * a.factor, rel_tol=1e-12)


@given(skew=skews, inclination=inclinations, spacing=spacings)
def test_a_mirrored_member_has_the_same_values(skew, inclination, spacing):
    one = smear_support(full_member(skew, inclination, spacing), "strut")
    other = smear_support(full_member(-skew, inclination, spacing), "strut")
    assert one.section == other.section
    assert one.back == other.back
    thrust = smear.thrust_along_wall(100.0, smear.Direction(skew=skew, inclination=inclination))
    assert thrust == -smear.thrust_along_wall(100.0, smear.Direction(skew=-skew, inclination=inclination))


@given(skew=st.floats(-60, 60), inclination=st.floats(-60, 60), N=forces, role=roles)
def test_the_reaction_on_the_wall_gives_the_force_with_its_sign(skew, inclination, N, role):
    # a pulled anchor presses its wall towards the retained side; so does a compressed strut
    made = smear_support(full_member(skew, inclination, 3.0), role)
    square = N * smear.Direction(skew=skew, inclination=inclination).normal_part / 3.0
    reaction = square if role == "anchor" else -square
    assert isclose(reaction * back(made, "reaction", "kN/m").factor, N, rel_tol=1e-9, abs_tol=1e-9)


def test_a_chain_softens_the_section_by_phi_and_leaves_the_way_back_alone():
    # by hand: k 97476.8774 over 10 m of EA 5193429.648 is phi 0.1876926
    real = full_member(30.0, 0.0, 4.0, k_effective_kN_per_m=97476.8774, L_eff=10.0, length=20.0)
    soft, rigid = smear_support(real, "strut"), smear_support(full_member(30.0, 0.0, 4.0), "strut")
    assert soft.section.EA_kN_per_m / rigid.section.EA_kN_per_m == pytest.approx(0.1876926, rel=1e-6)
    assert soft.back == rigid.back
    direction = smear.Direction(skew=30.0)
    k = soft.section.k_effective_kN_per_m_per_m
    assert k == pytest.approx(soft.section.EA_kN_per_m / smear.projected_length(10.0, direction), rel=1e-12)
    whole = smear_support(real, "strut", both_walls_drawn=True)
    drawn = whole.section.EA_kN_per_m / smear.projected_length(20.0, direction)
    assert whole.section.k_effective_kN_per_m_per_m == pytest.approx(drawn, rel=1e-12)
    assert_rows_hold(soft)
    assert_rows_hold(whole)


def test_a_chain_stiffer_than_its_member_is_refused():
    with pytest.raises(ValueError, match="chain factor"):
        smear_support(full_member(0.0, 0.0, 4.0, k_effective_kN_per_m=6.0e5, L_eff=10.0), "strut")


def test_a_quantity_that_is_not_given_gets_no_row():
    made = smear_support(RealMember(skew=0.0, inclination=0.0, spacing=5.0, EA_kN=1.0e6), "anchor")
    assert [row.quantity for row in made.smear] == ["EA"]
    assert made.section.preload_kN_per_m is None
    assert {row.quantity for row in made.back} == {"N", "reaction"}


@pytest.mark.parametrize("lost", ["skew", "inclination", "spacing"])
def test_what_the_projection_needs_must_be_given(lost):
    with pytest.raises(ValueError, match=f"{lost} is not given"):
        smear_support(replace(full_member(0.0, 0.0, 4.0), **{lost: None}), "strut")


@given(skew=st.floats(5.0, 85.0), spacing=spacings, length=lengths, u=st.floats(1e-4, 0.05))
def test_a_corner_strut_has_one_force_whichever_wall_it_is_read_from(skew, spacing, length, u):
    """Both walls move u into the pit: shortening u (cos + sin), two-point bar between two moving ends."""
    d = np.array([cos(radians(skew)), sin(radians(skew))])
    N = CHS_EA / length * float(d @ np.array([u, 0.0]) - d @ np.array([0.0, -u]))
    other = smear.on_other_wall(spacing, skew)
    for s, k in ((spacing, skew), other):
        real = RealMember(skew=k, inclination=0.0, spacing=s, length=length, EA_kN=CHS_EA, preload_kN=-300.0)
        made = smear_corner_strut(real)
        assert_rows_hold(made)
        drawn = smear.projected_length(made.real.L_eff, smear.Direction(skew=k))
        N_section = made.section.EA_kN_per_m / drawn * u
        assert isclose(N_section * back(made, "N", "kN/m").factor, N, rel_tol=1e-9)
        assert isclose(N_section * also(made, "N", "kN/m", "along"), N * sin(radians(k)), rel_tol=1e-9)
        assert {row.quantity for row in made.back} == {"N", "reaction"}
    # the same struts counted along either wall: n s1 and n s2 are the legs of the corner
    assert isclose(spacing / other[0], np.tan(radians(skew)), rel_tol=1e-9)


def test_thrust_adds_up_from_the_corner_to_the_shear_stop():
    # by hand: (100 + 200) sin 30
    assert smear.thrust_to_shear_stop((100.0, 200.0), 30.0) == pytest.approx(150.0)


@given(angle=st.floats(-180, 180), skew=st.floats(-85, 85), inclination=st.floats(-85, 85), length=st.floats(0.5, 80))
def test_direction_found_from_two_points_is_the_one_they_were_made_with(angle, skew, inclination, length):
    turn = radians(angle)
    along, normal = np.array([cos(turn), sin(turn)]), np.array([-sin(turn), cos(turn)])
    x, y, z = unit_vector(skew, inclination) * length
    plan = normal * x + along * y
    found = smear.find_direction((10.0, -4.0, 2.0), (10.0 + plan[0], -4.0 + plan[1], 2.0 + z), tuple(3 * along))
    assert found.skew == pytest.approx(skew, abs=1e-6)
    assert found.inclination == pytest.approx(inclination, abs=1e-6)


@given(skew=skews, inclination=inclinations)
def test_the_three_parts_of_a_direction_make_a_unit_vector_and_the_drawn_slope_is_steeper(skew, inclination):
    direction = smear.Direction(skew=skew, inclination=inclination)
    parts = (direction.normal_part, direction.along_part, direction.vertical_part)
    assert sum(part**2 for part in parts) == pytest.approx(1.0)
    assert abs(direction.apparent_inclination) >= abs(inclination) - 1e-9
    assert cos(radians(direction.beta)) == pytest.approx(direction.cos_beta)


def test_spacing_measured_square_to_skewed_members_is_longer_along_the_wall():
    assert smear.spacing_along_wall(4.0, 60.0) == pytest.approx(8.0)


@given(gaps=st.lists(st.floats(0.5, 9.0), min_size=0, max_size=8), first=st.floats(0, 5), last=st.floats(0, 5))
def test_tributary_widths_cover_the_wall_once(gaps, first, last):
    at = first + np.concatenate(([0.0], np.cumsum(gaps)))
    widths = smear.find_tributary_widths(at, 0.0, float(at[-1]) + last + 1e-9)
    assert widths.sum() == pytest.approx(float(at[-1]) + last, abs=1e-6)
    assert widths.shape == at.shape
    ring = smear.find_ring_widths(at, float(at[-1]) + 1.0 + last)
    assert ring.sum() == pytest.approx(float(at[-1]) + 1.0 + last)


def test_an_end_member_takes_half_its_gap_and_the_rest_of_the_wall():
    # by hand: members at 2, 6, 11 on a wall of 14: 2 + 2; 2 + 2.5; 2.5 + 3
    np.testing.assert_allclose(smear.find_tributary_widths(np.array([2.0, 6.0, 11.0]), 0.0, 14.0), [4.0, 4.5, 5.5])


def test_widths_more_than_a_tenth_apart_give_a_range_and_no_single_spacing():
    one = check_spacing(np.array([4.0, 4.2, 4.4]), "P1-strut-1")
    assert (one.spacing, one.spacing_range, one.findings) == (pytest.approx(4.2), None, ())
    row = check_spacing(np.array([4.0, 4.2, 4.41]), "P1-strut-1")
    assert row.spacing is None
    assert row.spacing_range == (4.0, 4.41)
    assert row.findings[0].code == "spacing-range"


@pytest.mark.parametrize(
    ("skew", "role", "code", "smeared"),
    [
        (15.0, "strut", "", True),
        (15.1, "strut", "skew-care", True),
        (39.9, "anchor", "skew-care", True),
        (40.0, "strut", "skew-refused", False),
        (39.9999999, "strut", "skew-refused", False),
        (44.9999999, "strut", "skew-refused", False),
        (45.0, "corner_strut", "", True),
    ],
)
def test_skew_is_flagged_from_15_and_refused_from_40_degrees_even_by_rounding(skew, role, code, smeared):
    direction = smear.Direction(skew=skew)
    findings = check_skew(direction, "P1-strut-1", role)
    assert [finding.code for finding in findings] == ([code] if code else [])
    assert may_be_smeared(direction, role) is smeared


def test_bored_piles_wider_apart_than_two_diameters_are_flagged():
    assert check_arching(0.75, 1.5, "run 1") == ()
    assert check_arching(0.75, 1.6, "run 1")[0].code == "arching"


@pytest.mark.parametrize("bad", [0.0, -1.0, nan, inf, -inf])
@pytest.mark.parametrize(
    "call",
    [
        lambda v: smear.in_plane_stiffness(v, 10.0, 4.0, smear.Direction()),
        lambda v: smear.in_plane_stiffness(1e6, v, 4.0, smear.Direction()),
        lambda v: smear.in_plane_stiffness(1e6, 10.0, v, smear.Direction()),
        lambda v: smear.corner_length(v, 45.0),
        lambda v: smear.corner_length(6.0, v),
        lambda v: smear.on_other_wall(v, 45.0),
        lambda v: smear.spacing_along_wall(v, 0.0),
        lambda v: smear.find_tributary_widths(np.array([0.0]), 0.0, v),
        lambda v: smear_support(full_member(0.0, 0.0, v), "strut"),
        lambda v: smear_support(full_member(0.0, 0.0, 4.0, EA_kN=v), "strut"),
        lambda v: smear_support(full_member(0.0, 0.0, 4.0, EI_kNm2=v), "strut"),
        lambda v: smear_support(full_member(0.0, 0.0, 4.0, limit_kN=v), "strut"),
        lambda v: smear_support(full_member(0.0, 0.0, 4.0), "strut", EI_factor=v),
        lambda v: check_arching(v, 1.0, "run 1"),
    ],
)
def test_physical_nonsense_is_refused_with_the_allowed_range(call, bad):
    with pytest.raises(ValueError, match="allowed is"):
        call(bad)


@pytest.mark.parametrize(("skew", "inclination"), [(90.0, 0.0), (-90.0, 0.0), (nan, 0.0), (0.0, 91.0), (0.0, nan)])
def test_a_member_along_the_wall_or_beyond_upright_is_refused(skew, inclination):
    with pytest.raises(ValueError, match="degrees: allowed is"):
        smear.Direction(skew=skew, inclination=inclination)


def test_members_off_the_wall_or_out_of_order_are_refused():
    with pytest.raises(ValueError, match="spacing = -1 m"):
        smear.find_tributary_widths(np.array([2.0, 1.0]), 0.0, 5.0)
    with pytest.raises(ValueError, match="last member = 6 m"):
        smear.find_tributary_widths(np.array([2.0, 6.0]), 0.0, 5.0)
    with pytest.raises(ValueError, match="number of members"):
        smear.find_tributary_widths(np.array([]), 0.0, 5.0)
