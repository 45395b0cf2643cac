"""Where a wall ends and what lies along it, on shapes whose answer is plain geometry."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from builders_ratios import ELL, Row, piles, polygon_pit, ring_pit, spot, struts_across

from sections.model import Arc, Run
from sections.pit.along import (
    CURVE,
    FREE,
    INSIDE,
    NONE,
    REENTRANT,
    bay_of,
    beside_gap,
    cover_of,
    distance_along,
    find_ends,
    gaps_of,
    is_rectangle,
)
from sections.pit.wall_changes import changes_of, toe_steps_of


def test_the_wall_of_a_rectangle_ends_at_its_corners() -> None:
    _, found = polygon_pit()
    ends = find_ends(found)
    for chainage, back, ahead, length in ((10.0, 10.0, 20.0, 30.0), (45.0, 15.0, 5.0, 20.0), (99.5, 19.5, 0.5, 20.0)):
        i = spot(found, chainage)
        assert (ends.back[i], ends.ahead[i], ends.length[i]) == pytest.approx((back, ahead, length))
        assert (ends.back_kind[i], ends.ahead_kind[i]) == (INSIDE, INSIDE)
        assert ends.to_inside[i] == min(back, ahead)
    corner = spot(found, 30.0)
    assert (ends.back[corner], ends.ahead[corner]) == (0.0, 0.0)


def test_the_wall_of_an_l_ends_once_in_a_reentrant_corner() -> None:
    _, found = polygon_pit(ELL)
    ends = find_ends(found)
    i = spot(found, 100.0)  # 60 + 30 is the inside corner at 90, the re-entrant one at 120
    assert (ends.back[i], ends.back_kind[i], ends.ahead[i], ends.ahead_kind[i]) == (10.0, INSIDE, 20.0, REENTRANT)
    assert ends.ahead_angle[i] == pytest.approx(270.0)
    assert ends.has(REENTRANT)[i]
    assert not ends.has(REENTRANT)[spot(found, 30.0)]


def test_a_ring_never_ends() -> None:
    _, found = ring_pit()
    ends = find_ends(found)
    assert np.all(np.isinf(ends.length))
    assert np.all(ends.back_kind == NONE)
    assert np.all(np.isnan(ends.inside_angle))


def test_an_open_wall_ends_free() -> None:
    _, found = polygon_pit(((0.0, 0.0), (40.0, 0.0), (40.0, 20.0)), closed=False)
    ends = find_ends(found)
    i, j = spot(found, 10.0), spot(found, 50.0)
    assert (ends.back[i], ends.back_kind[i], ends.ahead[i], ends.ahead_kind[i]) == (10.0, FREE, 30.0, INSIDE)
    assert (ends.back[j], ends.back_kind[j], ends.ahead[j], ends.ahead_kind[j]) == (10.0, INSIDE, 10.0, FREE)


def test_a_straight_wall_ends_where_a_curve_begins() -> None:
    _, found = polygon_pit()
    arc = Arc(start=24.0, to=36.0, centre=(124.0, 206.0), radius=6.0, ccw=True)
    radius = np.where((found.stations.chainage >= 24.0) & (found.stations.chainage < 36.0), 6.0, np.nan)
    found = replace(
        found,
        shape=replace(found.shape, arcs=(arc,), corners=tuple(c for c in found.shape.corners if c.at != 30.0)),
        stations=replace(found.stations, radius=radius),
    )
    ends = find_ends(found)
    i = spot(found, 20.0)
    assert (ends.ahead[i], ends.ahead_kind[i]) == (4.0, CURVE)
    assert ends.back_kind[spot(found, 30.0)] == NONE


@pytest.mark.parametrize(
    ("angle", "felt"), [(149.0, INSIDE), (150.0, None), (180.0, None), (190.0, None), (210.0, None), (211.0, REENTRANT)]
)
def test_a_blunt_corner_does_not_end_a_wall(angle: float, felt: int | None) -> None:
    _, found = polygon_pit()
    corners = tuple(replace(c, interior_angle=angle) if c.at == 30.0 else c for c in found.shape.corners)
    ends = find_ends(replace(found, shape=replace(found.shape, corners=corners)))
    i = spot(found, 25.0)
    if felt is None:
        assert (ends.ahead[i], ends.ahead_kind[i]) == (25.0, INSIDE)
    else:
        assert (ends.ahead[i], ends.ahead_kind[i]) == (5.0, felt)


def test_distances_run_round_a_closed_wall_and_stop_at_the_ends_of_an_open_one() -> None:
    _, closed = polygon_pit()
    assert distance_along(closed, np.array([99.0]))[0] == 1.0
    assert np.all(np.isinf(distance_along(closed, np.zeros(0))))
    _, open_ = polygon_pit(((0.0, 0.0), (60.0, 0.0)), closed=False)
    assert distance_along(open_, np.array([59.0]))[0] == 59.0


def test_bays_and_gaps_of_a_row() -> None:
    row = struts_across([102.5, 107.5, 112.5, 122.5, 127.5], (200.0, 220.0))
    _, found = polygon_pit(rows=(row,))
    assert bay_of(found)[spot(found, 10.0)] == 5.0
    assert bay_of(found)[spot(found, 40.0)] == 0.0
    # tributary widths 5, 5, 7.5, 7.5, 5: the two beside the gap stand out, on both walls
    assert sorted(gaps_of(found)) == pytest.approx([12.5, 22.5, 57.5, 67.5])
    assert cover_of(found.stations, 1)[spot(found, 10.0), 0]
    assert not cover_of(found.stations, 1)[spot(found, 40.0), 0]


@pytest.mark.parametrize(
    ("xs", "beside"),
    [
        ([102.5, 107.5, 112.5, 117.5, 122.5, 127.5], []),
        ([102.5, 107.5, 113.0, 118.5, 124.0], [24.0]),  # 5.5 m beside 5.0 m is in step; the last holds 8.75 m
        ([102.5, 107.5, 117.5], [7.5, 17.5]),  # of two gaps the larger is the odd one; 12.5 m to the corner as well
        ([107.5, 112.5, 117.5, 122.5, 127.5], [7.5]),  # the first one stands 7.5 m from the corner
        ([107.5, 122.5], []),
        ([110.0, 120.0], [10.0, 20.0]),  # each holds 15 m of wall, one and a half bays
        ([115.0], []),
    ],
)
def test_a_gap_is_told_from_the_usual_bay(xs: list[float], beside: list[float]) -> None:
    _, found = polygon_pit(rows=(struts_across(xs, (200.0, 220.0)),))
    row = found.rows[0]
    told = row.head_at[beside_gap(found, row.head_at, row.tributary_head)]
    assert list(told) == pytest.approx(beside)


def test_changes_of_wall_and_of_toe() -> None:
    _, found = polygon_pit()
    runs = (
        Run(start=0.0, to=30.0, wall=piles()),
        Run(start=30.0, to=60.0, wall=piles(count=30)),
        Run(start=60.0, to=100.0, wall=piles(toe=-14.0)),
    )
    found = replace(found, shape=replace(found.shape, runs=runs))
    assert list(changes_of(found)) == [0.0, 60.0]
    assert list(toe_steps_of(found)) == [0.0, 60.0]


def test_only_a_rectangle_is_one() -> None:
    assert is_rectangle(polygon_pit()[1])
    assert is_rectangle(polygon_pit(turn=33.0)[1])
    assert not is_rectangle(polygon_pit(ELL)[1])
    assert not is_rectangle(ring_pit()[1])
    assert not is_rectangle(polygon_pit(((0, 0), (30, 0), (30, 20), (4, 20)))[1])
    assert not is_rectangle(polygon_pit(((0.0, 0.0), (60.0, 0.0)), closed=False)[1])


def test_anchors_have_no_far_wall() -> None:
    anchors = Row(ends=tuple(((x, 200.0), (x, 188.0)) for x in (102.5, 107.5)), role="anchor")
    _, found = polygon_pit(rows=(anchors,))
    assert np.all(np.isnan(found.rows[0].far_at))
    assert bay_of(found)[spot(found, 5.0)] == 5.0
