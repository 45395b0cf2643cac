"""Steel sections by designation, against an independent open library and the masses in their own names."""

from __future__ import annotations

from math import inf, nan, pi

import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import Point, box
from structuralcodes.geometry.profiles import HE, IPE

from ingest import steel

NAMES = sorted(steel.rolled_table())


@pytest.mark.parametrize("name", [name for name in NAMES if name[0] in "HI"])
def test_a_rolled_section_agrees_with_an_open_library(name):
    # its fillets are chords of arcs, hence 0.05 %
    theirs = (HE if name.startswith("HE") else IPE)(name.replace(" ", ""))
    ours = steel.find_shape(name)
    assert pytest.approx(theirs.A, rel=5e-4) == ours.A * 1e6
    assert ours.I_major * 1e12 == pytest.approx(theirs.Iy, rel=5e-4)
    assert ours.I_minor * 1e12 == pytest.approx(theirs.Iz, rel=5e-4)


@pytest.mark.parametrize("name", [name for name in NAMES if name.startswith("UC")])
def test_a_column_section_weighs_what_its_name_says(name):
    # BS 4-1: the last number is the mass in kg/m, rounded
    mass = float(name.split("x")[-1])
    assert pytest.approx(mass, rel=6e-3) == steel.find_shape(name).A * steel.DENSITY


@given(D=st.floats(0.05, 2.0), share=st.floats(0.01, 0.45))
def test_a_tube_is_the_difference_of_two_circles(D, share):
    wall = share * D
    shape = steel.tube(D, wall)
    ring = Point(0, 0).buffer(D / 2, 256).difference(Point(0, 0).buffer(D / 2 - wall, 256))
    assert pytest.approx(ring.area, rel=1e-4) == shape.A
    assert shape.I_major == pytest.approx(shape.A * (D**2 + (D - 2 * wall) ** 2) / 16, rel=1e-9)


@given(h=st.floats(0.1, 0.6), b=st.floats(0.1, 0.6), share=st.floats(0.03, 0.12))
def test_a_hollow_section_lies_between_its_sharp_cornered_bounds(h, b, share):
    t = share * min(h, b)
    shape = steel.box(h, b, t)
    sharp = b * h - (b - 2 * t) * (h - 2 * t)
    outline = box(1.5 * t, 1.5 * t, b - 1.5 * t, h - 1.5 * t).buffer(1.5 * t, 128)
    hole = box(2 * t, 2 * t, b - 2 * t, h - 2 * t).buffer(t, 128)
    assert pytest.approx(outline.area - hole.area, rel=1e-4) == shape.A
    assert sharp > shape.A
    assert shape.I_major < (b * h**3 - (b - 2 * t) * (h - 2 * t) ** 3) / 12
    turned = steel.box(b, h, t)
    assert (turned.I_major, turned.I_minor) == (pytest.approx(shape.I_minor), pytest.approx(shape.I_major))


def test_fillets_add_what_a_square_less_a_quarter_circle_adds():
    # by hand: HEB 300 without fillets 2 x 300 x 19 + 262 x 11 = 14282 mm2; four fillets (4 - pi) 27^2 = 625.8 mm2
    assert pytest.approx(14282 + (4 - pi) * 27**2) == steel.find_shape("HEB 300").A * 1e6
    assert pytest.approx(14282) == steel.rolled(0.3, 0.3, 0.011, 0.019, 0.0).A * 1e6


@pytest.mark.parametrize(
    ("text", "same"),
    [
        ("chs508x16", "CHS 508x16"),
        ("CHS 508.0 × 16,0", "CHS 508x16"),
        ("CHS 508x16 S355J2H", "CHS 508x16"),
        ("HE 300 B", "HEB 300"),
        ("heb300", "HEB 300"),
        ("305x305x97 UC", "UC 305x305x97"),
        ("SHS 200x200x10", "SHS 200x10"),
        ("RHS 200x200x10", "SHS 200x10"),
    ],
)
def test_a_section_is_known_however_it_is_written(text, same):
    assert steel.find_shape(text) == steel.find_shape(same)


@pytest.mark.parametrize(
    ("text", "nearest"),
    [
        ("HEB 310", "HEB 300"),
        ("UC 305x305x96", "UC 305x305x97"),
        ("HEC 300", "HEM 300"),
        ("CHS 508", "CHS 508x16"),
        ("SHS 200x300x10", "SHS 300x12.5"),
        ("", "CHS, SHS and RHS by size"),
        ("508x16", "CHS"),
    ],
)
def test_an_unknown_section_is_refused_with_the_nearest_known(text, nearest):
    with pytest.raises(ValueError, match=nearest):
        steel.find_section(text)


@pytest.mark.parametrize("text", ["CHS 508x0", "CHS 508x300", "RHS 100x50x20"])
def test_a_size_that_cannot_be_is_refused(text):
    with pytest.raises(ValueError, match="wall = .* m: allowed is above 0 and below"):
        steel.find_section(text)


@pytest.mark.parametrize("bad", [0.0, -0.3, nan, inf])
def test_physical_nonsense_is_refused(bad):
    for call in (
        lambda: steel.tube(bad, 0.01),
        lambda: steel.box(bad, 0.3, 0.01),
        lambda: steel.rolled(0.3, bad, 0.011, 0.019, 0.027),
        lambda: steel.bar_rigidity(steel.find_section("HEB 300"), bad),
    ):
        with pytest.raises(ValueError, match="allowed is"):
            call()


def test_a_strut_and_a_post_turned_bend_about_the_axis_named():
    upright, flat = steel.find_section("HEB 400"), steel.find_section("HEB 400", "minor")
    assert (upright.depth, upright.width) == (0.4, 0.3)
    assert (flat.depth, flat.width) == (0.3, 0.4)
    assert upright.I > flat.I
    assert steel.find_section("CHS 508x16").diameter == 0.508


def test_rigidity_and_weight_of_a_bar():
    # by hand: CHS 508x16, A 0.02473061737 m2, I 7.490904001e-4 m4, 7850 kg/m3 x 9.81
    EA, EI = steel.bar_rigidity(steel.find_section("CHS 508x16"))
    assert pytest.approx(5193429.648) == EA
    assert pytest.approx(157308.984) == EI
    assert steel.bar_weight(steel.find_section("CHS 508x16")) == pytest.approx(1.904468, rel=1e-6)
    bare = steel.BarSection(designation="?")
    assert (steel.bar_rigidity(bare), steel.bar_weight(bare)) == ((None, None), None)
