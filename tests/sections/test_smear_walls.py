"""Pile walls, posts, continuous walls, bearing piles and slabs per metre run, and back."""

from __future__ import annotations

from math import inf, isclose, nan, pi, sqrt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from row_rules import also, assert_rows_hold, back
from shapely import Point, unary_union

from sections.member import RealMember
from sections.smearing import bearing_row, king_posts
from sections.smearing import wall as smear_wall
from sections.smearing.wall_rows import (
    post,
    round_pile,
    smear_bearing_row,
    smear_continuous_wall,
    smear_hard_hard,
    smear_pile_wall,
    smear_sheet_wall,
    smear_slab_strip,
)

diameters = st.floats(0.3, 3.0)
ratios = st.floats(1.0, 6.0)
E = 33.0e6


def wall_of(diameter, spacing, **more):
    pile = round_pile(diameter=diameter, E=E, unit_weight=25.0, centres=spacing, which="all")
    return smear_pile_wall(pile, **more)


@given(diameter=diameters, ratio=ratios, factor=st.floats(0.2, 1.0), soil=st.one_of(st.none(), st.floats(14.0, 22.0)))
def test_a_pile_wall_keeps_the_rules_and_its_solid_wall_has_EA_and_EI(diameter, ratio, factor, soil):
    made = wall_of(diameter, ratio * diameter, EI_factor=factor, soil=soil)
    assert_rows_hold(made)
    section = made.section
    assert isclose(section.E_kPa * section.thickness, section.EA_kN_per_m, rel_tol=1e-12)
    assert isclose(section.E_kPa * section.thickness**3 / 12, section.EI_kNm2_per_m, rel_tol=1e-12)
    assert section.thickness == pytest.approx(diameter * sqrt(3 * factor) / 2)
    assert section.net_of_soil is (soil is not None)


@given(diameter=diameters, ratio=ratios)
def test_doubling_the_spacing_of_piles_halves_the_wall_and_doubles_the_way_back(diameter, ratio):
    one, two = wall_of(diameter, ratio * diameter), wall_of(diameter, 2 * ratio * diameter)
    for key in ("EA_kN_per_m", "EI_kNm2_per_m", "weight_kN_per_m2"):
        assert isclose(getattr(two.section, key), getattr(one.section, key) / 2, rel_tol=1e-12)
    assert [b.factor for b in two.back] == [pytest.approx(2 * a.factor) for a in one.back]


@given(diameter=diameters, ratio=ratios, EI_factor=st.floats(0.2, 1.0), curvature=st.floats(1e-5, 1e-2))
def test_moment_taken_back_to_one_pile_is_its_EI_times_the_curvature(diameter, ratio, EI_factor, curvature):
    made = wall_of(diameter, ratio * diameter, EI_factor=EI_factor)
    M = made.section.EI_kNm2_per_m * curvature * back(made, "M", "kNm/m").factor
    assert isclose(M, EI_factor * E * pi * diameter**4 / 64 * curvature, rel_tol=1e-9)


def test_net_weight_is_that_of_pile_less_soil():
    # by hand: D 0.75 at 1.00: (25 - 18) pi 0.75^2/4 = 3.092505 kN/m2
    assert wall_of(0.75, 1.0, soil=18.0).section.weight_kN_per_m2 == pytest.approx(3.0925052684)
    assert smear_wall.wall_weight(25.0, smear_wall.circle_area(0.75), 1.0, 18.0) == pytest.approx(3.0925052684)


def test_only_males_count_in_a_hard_soft_secant_wall():
    male = round_pile(diameter=0.88, E=E, unit_weight=25.0, centres=0.65, which="male")
    every = round_pile(diameter=0.88, E=E, unit_weight=25.0, centres=0.65, which="all")
    assert (male.spacing, male.centres, every.spacing) == (1.30, 0.65, 0.65)
    assert smear_pile_wall(male).section.EI_kNm2_per_m * 2 == pytest.approx(
        smear_pile_wall(every).section.EI_kNm2_per_m
    )


@given(male=diameters, ratio=st.floats(0.6, 1.0))
def test_a_hard_hard_wall_shares_its_moment_by_second_moment_and_its_load_by_area(male, ratio):
    female, centres = ratio * male, 0.75 * male
    made = smear_hard_hard(E=E, male=male, female=female, centres=centres, unit_weight=25.0)
    assert_rows_hold(made)
    for quantity, unit, power in (("N", "kN/m", 2), ("V", "kN/m", 4), ("M", "kNm/m", 4)):
        row = back(made, quantity, unit)
        one, other = row.factor, also(made, quantity, unit, "female")
        assert "one male pile" in row.gives
        assert isclose(one + other, 2 * centres, rel_tol=1e-9)  # one pair stands for twice the centres
        assert isclose(one / other, (male / female) ** power, rel_tol=1e-9)
    EA, EI = smear_wall.hard_hard_per_metre(E, male, female, centres)
    assert isclose(made.section.EA_kN_per_m, EA, rel_tol=1e-12)
    assert isclose(made.section.EI_kNm2_per_m, EI, rel_tol=1e-12)


def test_equal_hard_hard_piles_are_a_wall_of_all_piles():
    pair = smear_hard_hard(E=E, male=0.88, female=0.88, centres=0.65, unit_weight=25.0)
    assert pair.section.EI_kNm2_per_m == pytest.approx(wall_of(0.88, 0.65).section.EI_kNm2_per_m)
    assert back(pair, "M", "kNm/m").factor == pytest.approx(0.65)


@given(diameter=diameters, lap=st.floats(0.5, 1.2), other=st.floats(0.7, 1.3))
def test_the_overlap_is_the_chord_of_the_lens_of_two_circles(diameter, lap, other):
    neighbour = other * diameter
    centres = abs(diameter - neighbour) / 2 + lap * min(diameter, neighbour)
    chord = float(smear_wall.overlap(diameter, centres, other_diameter=neighbour))
    one, two = Point(0, 0).buffer(diameter / 2, 512), Point(centres, 0).buffer(neighbour / 2, 512)
    if centres >= (diameter + neighbour) / 2:
        assert chord == 0
    elif centres**2 >= abs(diameter**2 - neighbour**2) / 4:  # chord between the centres: the lens is nowhere longer
        low, high = (one & two).bounds[1::2]
        assert chord == pytest.approx(high - low, abs=2e-3 * diameter)
    assert unary_union([one, two]).is_valid


def test_the_overlap_shrinks_with_depth_and_never_comes_back():
    depth = np.linspace(0, 40, 81)
    chord = smear_wall.overlap(0.88, 0.65, depth, set_out=0.025, verticality=200.0)
    assert np.all(np.diff(chord) <= 0)
    assert chord[-1] == 0
    assert smear_wall.overlap(0.88, 0.65, depth).shape == depth.shape


def test_a_continuous_wall_says_whether_the_plane_strain_factor_is_in():
    plain = smear_continuous_wall(E=E, thickness=0.8, unit_weight=25.0, soil=18.0)
    wide = smear_continuous_wall(E=E, thickness=0.8, nu=0.2, EI_factor=0.7)
    assert_rows_hold(plain)
    assert_rows_hold(wide)
    assert (plain.section.plane_strain_factor_included, wide.section.plane_strain_factor_included) == (False, True)
    assert plain.section.weight_kN_per_m2 == pytest.approx(7.0 * 0.8)
    assert (plain.section.thickness, plain.section.E_kPa) == (pytest.approx(0.8), pytest.approx(E))
    # a solid model adds 1/(1 - nu^2) itself: with it the solid wall has the EI handed over
    solid = wide.section.E_kPa * wide.section.thickness**3 / 12 / (1 - 0.2**2)
    assert solid == pytest.approx(wide.section.EI_kNm2_per_m)
    assert solid == pytest.approx(0.7 * E * 0.8**3 / 12 / 0.96)


def test_a_U_profile_sheet_wall_is_reduced_for_slip_in_its_locks():
    made = smear_sheet_wall(E=210e6, A=0.02, I=4.5e-4, weight=1.57, beta_D=0.7)
    assert_rows_hold(made)
    assert made.section.EI_kNm2_per_m == pytest.approx(0.7 * 94500)
    assert back(made, "M", "kNm/m").unit == "kNm/m"


def test_king_posts_keep_the_rules_and_come_back_per_post():
    made = smear_pile_wall(post(E=210e6, A=149.1e-4, I=25166e-8, unit_weight=77.0, spacing=2.5, width=0.3), name="post")
    assert_rows_hold(made)
    assert back(made, "M", "kNm/m").gives == "bending moment of one post"
    assert back(made, "M", "kNm/m").factor == 2.5


@given(depth=st.floats(0.0, 12.0), width=st.floats(0.2, 1.0), ignored=st.floats(0.0, 3.0))
def test_clay_resistance_on_posts_is_the_integral_of_its_pressure(depth, width, ignored):
    z = np.linspace(min(ignored, depth), depth, 20001)
    pressure = king_posts.clay_pressure(z, 50.0, width, 2.5)
    assert king_posts.clay_resistance(depth, 50.0, width, 2.5, ignored=ignored) == pytest.approx(
        float(np.trapezoid(pressure, z)), rel=1e-6, abs=1e-9
    )


def test_posts_find_no_passive_near_formation_unless_the_brief_says_so():
    # by hand, b 0.4: max(0.5, 0.6) = 0.6 m ignored: 52.8 - 18.0 to 1.2 m
    assert king_posts.ignored_depth(0.3) == 0.5
    assert king_posts.ignored_depth(0.4) == pytest.approx(0.6)
    assert king_posts.clay_resistance(1.2, 50.0, 0.4, 2.5) == pytest.approx(34.8)
    assert king_posts.clay_resistance(0.4, 50.0, 0.4, 2.5) == 0.0


@given(width=st.floats(0.2, 1.5), spacing=st.floats(2.0, 4.0))
def test_posts_load_on_their_width_and_find_passive_on_three(width, spacing):
    assert king_posts.active_share(width, spacing) == pytest.approx(width / spacing)
    assert king_posts.passive_share(width, spacing) == pytest.approx(min(1.0, 3 * width / spacing))


def test_a_wall_friction_factor_cannot_bring_the_passive_down_to_that_of_posts():
    # by hand, phi 32, delta 16: 3.2546/(5.7748 cos 16) = 0.586 is left, where posts b 0.3 at 2.0 m have 0.45
    assert king_posts.least_interface_share(32.0, 16.0) > 1.3 * king_posts.passive_share(0.3, 2.0)


def test_plain_passive_is_rankine():
    # Rankine 1857: tan^2(45 + phi/2)
    for phi in (20.0, 30.0, 40.0):
        rankine = np.tan(np.radians(45 + phi / 2)) ** 2
        assert king_posts.coulomb_passive(phi, 0.0) == pytest.approx(rankine, rel=1e-12)


@given(diameter=diameters, ratio=st.floats(1.0, 6.0), tau=st.floats(5.0, 200.0))
def test_a_bearing_row_drawn_as_a_sheet_has_the_shaft_friction_of_its_piles(diameter, ratio, tau):
    spacing = ratio * diameter
    real = RealMember(
        EA_kN=1e6,
        EI_kNm2=1e5,
        weight_kN_per_m=10.0,
        spacing=spacing,
        diameter=diameter,
        contact_kPa=tau,
        limit_kN=900.0,
    )
    made = smear_bearing_row(real, sheet_thickness=0.5)
    assert_rows_hold(made)
    per_metre = 2 * made.section.contact_kPa  # two faces
    assert isclose(per_metre * spacing, pi * diameter * tau, rel_tol=1e-9)
    row = bearing_row.find_bearing_row(diameter, spacing, 0.5)
    assert isclose(row.base * 0.5 * spacing, pi * diameter**2 / 4, rel_tol=1e-9)
    assert isclose(row.blocked, 1 / ratio, rel_tol=1e-9)


@pytest.mark.parametrize(
    ("spacing", "word", "findings"), [(1.2, "wall", 0), (1.3, "sheet", 1), (2.4, "sheet", 1), (2.5, "springs", 1)]
)
def test_bearing_piles_are_a_wall_to_two_diameters_and_a_sheet_to_four(spacing, word, findings):
    assert bearing_row.find_bearing_row(0.6, spacing, 0.5).treat_as == word
    assert len(bearing_row.check_bearing_row(0.6, spacing, "row")) == findings


def test_a_slab_strip_keeps_the_net_width_between_openings():
    # by hand: 0.3 m slab, 6 m bay with 2 m open: E 33e6 x 0.3 x 4/6 = 6.6e6 kN/m
    made = smear_slab_strip(E=E, thickness=0.3, unit_weight=25.0, bay=6.0, net_width=4.0, EI_factor=0.5, nu=0.2)
    assert_rows_hold(made)
    assert made.section.EA_kN_per_m == pytest.approx(6.6e6)
    assert made.section.EI_kNm2_per_m == pytest.approx(0.5 * E * 0.3**3 / 12 * 4 / 6 / 0.96)
    assert back(made, "N", "kN/m").factor == 6.0
    assert smear_slab_strip(E=E, thickness=0.3).section.EA_kN_per_m == pytest.approx(9.9e6)


@pytest.mark.parametrize("bad", [0.0, -0.6, nan, inf])
@pytest.mark.parametrize(
    "call",
    [
        lambda v: wall_of(v, 1.0),
        lambda v: wall_of(0.6, v),
        lambda v: round_pile(diameter=0.6, E=v, unit_weight=25.0, centres=1.0, which="all"),
        lambda v: round_pile(diameter=0.6, E=E, unit_weight=v, centres=1.0, which="all"),
        lambda v: smear_continuous_wall(E=E, thickness=v),
        lambda v: smear_continuous_wall(E=E, thickness=0.8, EI_factor=v),
        lambda v: smear_sheet_wall(E=210e6, A=v, I=1e-4),
        lambda v: smear_slab_strip(E=E, thickness=0.3, bay=v),
        lambda v: smear_wall.equivalent_wall(v, 1.0),
        lambda v: smear_wall.thickness_keeping_EI(v, 1.0),
        lambda v: smear_wall.overlap(v, 0.6),
        lambda v: king_posts.passive_share(v, 2.0),
        lambda v: king_posts.clay_pressure(1.0, v, 0.3, 2.0),
        lambda v: bearing_row.shaft_factor(v, 2.0),
        lambda v: post(E=E, A=0.01, I=v, unit_weight=77.0, spacing=2.0),
    ],
)
def test_physical_nonsense_is_refused_with_the_allowed_range(call, bad):
    with pytest.raises(ValueError, match="allowed is"):
        call(bad)


@pytest.mark.parametrize(
    "call",
    [
        lambda: smear_wall.plane_strain_factor(0.5),
        lambda: smear_wall.plane_strain_factor(-0.1),
        lambda: wall_of(0.6, 1.0, EI_factor=1.1),
        lambda: king_posts.coulomb_passive(30.0, 31.0),
        lambda: king_posts.passive_share(0.5, 0.4),
        lambda: bearing_row.flow_round_factor(1.01),
        lambda: smear_slab_strip(E=E, thickness=0.3, bay=4.0, net_width=4.1),
        lambda: king_posts.clay_factor(np.array([0.0, -0.1]), 0.4),
    ],
)
def test_a_value_outside_its_range_is_refused(call):
    with pytest.raises(ValueError, match="allowed is"):
        call()
