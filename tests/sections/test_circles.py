"""Circles through points against closed forms, and near-circular rings and parts of perimeters."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pit_lines import BOX, lines, only

from ingest.members import Pile
from ingest.model import Site
from sections.perimeter.circle_fit import fit_circle


def around(radius, turns, centre=(0.0, 0.0)):
    turns = np.asarray(turns)
    return np.column_stack((radius * np.cos(turns), radius * np.sin(turns))) + centre


def ring(points, **more):
    return Site(piles=tuple(Pile(id=f"p{k}", centre=(float(x), float(y)), **more) for k, (x, y) in enumerate(points)))


@given(radius=st.floats(1.0, 200.0), x=st.floats(-1e3, 1e3), y=st.floats(-1e3, 1e3), sweep=st.floats(0.5, 2 * np.pi))
def test_points_on_a_circle_give_it_back(radius, x, y, sweep):
    centre, found = fit_circle(around(radius, np.linspace(0.3, 0.3 + sweep, 12, endpoint=False), (x, y)))
    assert found == pytest.approx(radius, rel=1e-6)
    assert centre == pytest.approx((x, y), abs=1e-6 * radius)


def test_an_oval_ring_has_its_mean_radius():
    # r = R + w cos 2t at equal steps: by symmetry the least-squares circle is centred, with the mean radius R.
    turns = 2 * np.pi * np.arange(60) / 60
    centre, radius = fit_circle(around(10.0 + 0.05 * np.cos(2 * turns), turns))
    assert radius == pytest.approx(10.0, abs=1e-9)
    assert centre == pytest.approx((0.0, 0.0), abs=1e-9)


def test_a_short_arc_with_scatter_is_not_drawn_to_a_short_radius():
    # 60 degrees of R = 20 m with 10 mm of scatter: the plain algebraic fit is biased inwards, this one is not.
    noise = np.random.default_rng(7).normal(0.0, 0.01, (200, 30))
    turns = np.radians(np.linspace(0.0, 60.0, 30))
    found = [fit_circle(around(20.0 + n, turns))[1] for n in noise]
    assert np.mean(found) == pytest.approx(20.0, abs=0.01)


def test_points_on_a_line_have_no_circle():
    with pytest.raises(ValueError, match="line"):
        fit_circle(np.column_stack((np.arange(6.0), 2.0 * np.arange(6.0))))


@pytest.mark.parametrize("n", [8, 12, 24])
def test_a_regular_polygon_has_the_circle_through_its_corners_and_no_deviation(n):
    # methods: M7, polygon inscribed in R; A9 and A10: sagitta 0.7612 m of 8 and 0.3407 m of 12 sides at R = 10 m.
    corners = around(10.0, 2 * np.pi * np.arange(n) / n + 0.2, (5.0, 7.0))
    circle = only(Site(walls=lines([tuple(p) for p in corners]))).circle
    assert circle.sides == n
    assert circle.radius == pytest.approx(10.0, rel=1e-9)
    assert circle.centre == pytest.approx((5.0, 7.0))
    assert circle.deviation == pytest.approx(0.0, abs=1e-9)
    sagitta = {8: 0.7612046749, 12: 0.3407417371}
    if n in sagitta:
        apothem = np.hypot(*(0.5 * (corners[0] + corners[1]) - circle.centre))
        assert circle.radius - apothem == pytest.approx(sagitta[n], rel=1e-9)


def test_an_uneven_octagon_within_the_screen_reports_what_its_own_sagitta_does_not_explain():
    corners = around(10.0, 2 * np.pi * np.arange(8) / 8)
    corners[2] += (0.0, 0.08)
    circle = only(Site(walls=lines([tuple(p) for p in corners]))).circle
    assert circle.sides == 8
    assert 0.03 < circle.deviation < 0.08


@pytest.mark.parametrize("kind", ["square", "rectangle", "hexagon", "eight unequal sides", "oval"])
def test_what_is_not_near_circular_has_no_circle(kind):
    turns = 2 * np.pi * np.arange(60) / 60
    shapes = {
        "square": [(0.0, 0.0), (20.0, 0.0), (20.0, 20.0), (0.0, 20.0)],
        "rectangle": list(BOX),
        "hexagon": around(10.0, np.radians(np.arange(0, 360, 60))),
        "eight unequal sides": around(12.0, np.radians([0, 35, 88, 120, 180, 214, 275, 312])),
        "oval": np.column_stack((12.0 * np.cos(turns), 10.0 * np.sin(turns))),
    }
    shape = only(Site(walls=lines([tuple(map(float, p)) for p in shapes[kind]])))
    assert shape.circle is None


def test_a_slightly_oval_ring_of_piles_is_near_circular_with_its_deviation():
    # w0 = 60 mm at R = 12 m: greatest less least radius is 1 % of the mean.
    turns = 2 * np.pi * np.arange(80) / 80
    shape = only(ring(around(12.0 + 0.06 * np.cos(2 * turns), turns), diameter=0.85, kind="contiguous"))
    assert shape.circle.sides is None
    assert shape.circle.radius == pytest.approx(12.0, rel=1e-3)
    assert shape.circle.deviation == pytest.approx(0.06, abs=0.01)


def test_a_ring_listed_by_36_chords_is_a_circle_without_corners():
    shape = only(Site(walls=lines([tuple(p) for p in around(12.0, np.radians(np.arange(0, 360, 10)))])))
    assert shape.corners == ()
    assert (shape.circle.sides, shape.circle.radius) == (None, pytest.approx(12.0))


def test_half_a_polygon_joined_to_straights_is_a_near_circular_part():
    # Five sides of a regular decagon of R = 8 m between two straights: five sides of 36 degrees each.
    bow = around(8.0, np.radians(np.arange(-90, 91, 36)))
    points = [*map(tuple, bow), (-15.0, 8.0), (-15.0, -8.0)]
    shape = only(Site(walls=lines([tuple(map(float, p)) for p in points])))
    assert shape.circle is None
    (part,) = shape.circles
    assert part.radius == pytest.approx(8.0, rel=1e-6)
    assert (part.to - part.start) % shape.length == pytest.approx(5 * 2 * 8.0 * np.sin(np.radians(18.0)))
