"""Mirror axes: closed forms of the plan overlap, and what breaks an axis."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st
from pit_sites import PANEL, PILES, box, first_pit_struts, footing, found, moved, rectangle, shape_of, strut

from ingest.model import Floor, Limits
from sections.model import Circle
from sections.pit.mirror import cut_mirrors
from sections.pit.symmetry import mirrored, overlap_at, plan_axes


def polygon(n, start=0.0):
    theta = np.radians(start + np.arange(n) * 360.0 / n)
    return [(float(np.cos(t)), float(np.sin(t))) for t in theta]


SQUARE = [(0, 0), (1, 0), (1, 1), (0, 1)]
L_EQUAL = [(0, 0), (2, 0), (2, 1), (1, 1), (1, 2), (0, 2)]
L_LONG = [(0, 0), (4, 0), (4, 1), (1, 1), (1, 2), (0, 2)]


def rect(a, b):
    return [(0, 0), (a, 0), (a, b), (0, b)]


# closed forms derived by hand and checked with a polygon library for the project's table of methods
CHECKS = [
    (SQUARE, 0.0, 1.0),
    (SQUARE, 45.0, 1.0),
    (SQUARE, 22.5, np.cos(np.pi / 4)),
    *[(polygon(n), 0.5 * 180.0 / n, np.cos(np.pi / n)) for n in (3, 5, 6, 8, 12)],
    (rect(2, 1), float(np.degrees(np.arctan2(1, 2))), 5 / 11),
    (rect(3, 1), float(np.degrees(np.arctan2(1, 3))), 0.3846153846),
    (rect(4, 3), float(np.degrees(np.arctan2(3, 4))), 0.6410256410),
    (rect(2, 1), 45.0, 1 / 3),
    (rect(3, 1), 45.0, 0.2),
    (rect(4, 3), 45.0, 0.6),
    (rect(3, 1), 0.0, 1.0),
    (rect(3, 1), 90.0, 1.0),
    (L_EQUAL, 45.0, 1.0),
    (L_EQUAL, 0.0, 0.5),
    (L_EQUAL, -45.0, 0.4594594595),
    (L_LONG, 0.0, 0.4705882353),
    (L_LONG, 90.0, 0.5151515152),
    ([(0, 0), (1, 0), (0, 1)], 45.0, 1.0),
    ([(0, 0), (1, 0), (0, 1)], 0.0, 0.5),
    ([(0, 0), (3, 0), (0, 4)], 0.0, 0.5),
    ([(0, 0), (3, 0), (0, 4)], 90.0, 0.5),
    ([(0, 0), (4, 0), (3, 2), (1, 2)], 90.0, 1.0),
    ([(0, 0), (4, 0), (3, 2), (1, 2)], 0.0, 0.6530612245),
]


@pytest.mark.parametrize(("corners", "direction", "expected"), CHECKS)
def test_overlap_of_plans_with_known_closed_forms(corners, direction, expected):
    outline = shapely.Polygon(corners)
    if len(corners) in (3, 5) and expected < 1.0 and corners[0] == (1.0, 0.0):
        # a polygon of odd number has an axis through each vertex; halfway lies a quarter of 360/n further on
        direction = 180.0 / len(corners) / 2.0
    assert overlap_at(outline, direction)[0] == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize(
    ("corners", "direction", "overlap"),
    [
        (L_LONG, 172.25, 0.62425),
        ([(0, 0), (4, 0), (0, 3)], 53.0, 0.7705),
        ([(0, 0), (3, 0), (4, 2), (1, 2)], 113.25, 0.7528),
    ],
)
def test_best_direction_on_a_quarter_degree_grid(corners, direction, overlap):
    grid = np.arange(0.0, 180.0, 0.25)
    scores = overlap_at(shapely.Polygon(corners), grid)
    # 5e-5 is the rounding of the table
    assert np.max(scores) == pytest.approx(overlap, abs=1e-4)
    # a plan that turns onto itself by 180 degrees scores alike at right angles, so any of the best will do
    best = grid[scores > np.max(scores) - 1e-6]
    assert np.min(np.abs(best - direction)) <= 0.5


def test_centroid_of_the_equal_l():
    outline = shapely.Polygon(L_EQUAL)
    assert (outline.centroid.x, outline.centroid.y) == (pytest.approx(5 / 6), pytest.approx(5 / 6))


def directions(corners):
    return [round(d, 3) for d, _ in plan_axes(shape_of([(float(x), float(y)) for x, y in corners]))]


def test_axes_of_plain_plans():
    assert directions(rect(30, 20)) == [0.0, 90.0]
    assert directions(SQUARE) == [0.0, 45.0, 90.0, 135.0]
    assert directions(L_EQUAL) == [45.0]
    assert directions([(0, 0), (4, 0), (3, 2), (1, 2)]) == [90.0]
    assert directions([(0, 0), (9, 0), (11, 5), (4, 8), (1, 6)]) == []
    assert directions(polygon(6)) == [0.0, 30.0, 60.0, 90.0, 120.0, 150.0]
    assert len(directions(polygon(12, 7.0))) == 12
    # point symmetry is not mirror symmetry
    assert directions([(0, 0), (3, 0), (4, 2), (1, 2)]) == []


@settings(max_examples=25, deadline=None)
@given(st.floats(0, 360), st.floats(5, 40), st.floats(1.3, 6))
def test_axes_turn_with_the_plan(angle, b, ratio):
    axes = plan_axes(shape_of(moved(rect(b * ratio, b), angle, (311.0, -42.0))))
    assert len(axes) == 2
    for direction, overlap in axes:
        assert overlap == pytest.approx(1.0, abs=1e-6)
        off = (direction - angle) % 90.0
        assert min(off, 90.0 - off) < 0.01


def test_mirroring_twice_gives_the_points_back():
    points = np.array([[1.0, 2.0], [-3.0, 5.0]])
    assert mirrored(mirrored(points, (0.5, 0.2), 33.0), (0.5, 0.2), 33.0) == pytest.approx(points)
    assert mirrored(points, (0.0, 0.0), 0.0) == pytest.approx(points * [1.0, -1.0])


def axis(pit, direction):
    return next(a for a in pit.pit.symmetry if abs(a.direction - direction) < 0.01)


def test_a_footing_behind_one_wall_breaks_one_axis():
    pit = found(shape_of(rectangle()), supports=first_pit_struts(), loads=(footing(box(113.5, 222.0, 3.0, 2.0)),))
    # the footing is centred on x = 115: it mirrors east to west, not north to south
    assert axis(pit, 90.0).complete
    assert axis(pit, 0.0).broken_by == ("loads: 1 of 1 have no mirror image",)


def test_a_missing_strut_breaks_the_axis_it_is_not_on():
    struts = tuple(s for s in first_pit_struts() if s.name != "N112.5")
    pit = found(shape_of(rectangle()), supports=struts)
    assert axis(pit, 0.0).complete
    assert axis(pit, 90.0).broken_by == ("supports: 1 of 9 have no mirror image",)


def test_another_wall_on_one_side_breaks_an_axis():
    shape = shape_of(rectangle(), [(0.0, 30.0, PANEL), (30.0, 100.0, PILES)])
    pit = found(shape)
    assert axis(pit, 90.0).complete
    assert axis(pit, 0.0).broken_by == ("walls: 60.0 m of wall has no mirror image",)


def test_a_step_breaks_an_axis_and_levels_too():
    floors = (
        Floor(level=-6.0, dig_level=-6.0),
        Floor(level=-8.0, dig_level=-8.0, outline=box(118.0, 200.0, 12.0, 20.0)),
    )
    pit = found(shape_of(rectangle()), floors=floors, formation=None)
    assert axis(pit, 0.0).complete
    assert axis(pit, 90.0).broken_by[0].startswith("floors: ")


def test_a_circle_has_every_diameter_until_something_stands_on_one():
    theta = np.radians(np.arange(0.0, 360.0, 1.0))
    ring = [(12.0 * np.cos(t), 12.0 * np.sin(t)) for t in theta]
    circle = Circle(centre=(0.0, 0.0), radius=12.0, deviation=0.0, sides=None)
    shape = shape_of(ring, circle=circle)
    whole = found(shape).pit.symmetry
    assert [(a.all_diameters, a.complete) for a in whole] == [(True, True)]
    propped = found(shape, supports=(strut((-12.0, 0.0), (12.0, 0.0)),)).pit.symmetry
    assert [(a.all_diameters, a.complete, a.broken_by) for a in propped] == [(True, False, ("supports",))]


def test_half_of_a_cut_may_stand_for_the_whole_only_where_both_walls_agree():
    pit = found(shape_of(rectangle()), supports=first_pit_struts())
    station = int(np.searchsorted(pit.stations.chainage, 15.0))
    yes, why = cut_mirrors(pit.stations, pit.rows, station, Limits())
    assert yes
    assert "0.1 m" in why
    deep = replace(PILES, toe=-14.0)
    uneven = found(shape_of(rectangle(), [(0.0, 30.0, deep), (30.0, 100.0, PILES)]))
    no, why = cut_mirrors(uneven.stations, uneven.rows, station, Limits())
    assert not no
    assert why == "toe differs: -14.00 and -12.00"
