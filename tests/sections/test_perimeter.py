"""The perimeter of pits small enough to work by hand. Where no source is given, plain geometry."""

from __future__ import annotations

import numpy as np
import pytest
from pit_lines import BOX, angles, lines, only, rows

from ingest.members import Pile, Support, WallPiece
from ingest.model import Frame, Site
from sections.perimeter.perimeter import find_shapes


def test_the_first_pit_has_its_hundred_piles_four_corners_and_one_run():
    # 30 x 20 m, south-west corner at (100, 200), D 0.75 at 1.00 m, one pile in each corner: 2 (30 + 20) / 1.00 = 100.
    corners = [(x + 100.0, y + 200.0) for x, y in BOX]
    shape = only(Site(piles=rows(corners, 1.0, diameter=0.75, kind="contiguous", top=0.0, toe=-12.0)))
    assert shape.id == "P1"
    assert shape.closed
    assert shape.axis == pytest.approx(np.array(corners))
    assert shape.at == pytest.approx([0.0, 30.0, 50.0, 80.0])
    assert shape.length == pytest.approx(100.0)
    assert angles(shape) == [90.0] * 4
    assert [c.kind for c in shape.corners] == ["inside"] * 4
    (run,) = shape.runs
    assert (run.start, run.to) == (0.0, pytest.approx(100.0))
    assert (run.wall.kind, run.wall.count, run.wall.diameter, run.wall.top, run.wall.toe) == (
        "contiguous", 100, 0.75, 0.0, -12.0,
    )  # fmt: skip
    assert run.wall.centres == pytest.approx(1.0)
    assert (run.wall.structural.which, run.wall.structural.count) == ("all", 100)
    assert shape.piles == (tuple(range(100)),)


def test_an_l_shaped_pit_has_one_re_entrant_corner():
    # methods: CK1, corners of (0,0),(2,0),(2,1),(1,1),(1,2),(0,2) are 90, 90, 90, 270, 90, 90; here ten times as large.
    points = [(0.0, 0.0), (20.0, 0.0), (20.0, 10.0), (10.0, 10.0), (10.0, 20.0), (0.0, 20.0)]
    shape = only(Site(walls=lines(points)))
    assert angles(shape) == [90.0, 90.0, 90.0, 270.0, 90.0, 90.0]
    assert [c.kind for c in shape.corners].index("re-entrant") == 3
    assert [c.at for c in shape.corners] == pytest.approx([0.0, 20.0, 30.0, 40.0, 50.0, 60.0])


def test_a_regular_hexagon_has_corners_of_120_degrees_and_starts_at_the_lower_left():
    # Side = circumradius = 12 m; two corners share the least northing, -12 sin 60: the western one starts.
    points = [(12 * np.cos(np.radians(60 * k)), 12 * np.sin(np.radians(60 * k))) for k in range(6)]
    shape = only(Site(walls=lines(points)))
    assert angles(shape) == [120.0] * 6
    assert shape.length == pytest.approx(72.0)
    assert shape.axis[0] == pytest.approx([-6.0, -12 * np.sin(np.radians(60.0))])
    assert shape.circle is None


def test_a_ring_of_piles_is_an_arc_without_corners_that_starts_due_east():
    radius, count = 12.5, 78
    turn = 2 * np.pi * (np.arange(count) + 0.3) / count
    centres = np.column_stack((40 + radius * np.cos(turn), 60 + radius * np.sin(turn)))
    piles = [Pile(id=f"p{k}", centre=(x, y), diameter=0.88, kind="contiguous") for k, (x, y) in enumerate(centres)]
    shape = only(Site(piles=tuple(piles)))
    assert shape.corners == ()
    assert shape.axis[0] == pytest.approx([52.5, 60.0], abs=1e-6)
    (arc,) = shape.arcs
    assert (arc.start, arc.to, arc.ccw) == (0.0, pytest.approx(shape.length), True)
    assert (arc.radius, *arc.centre) == pytest.approx((12.5, 40.0, 60.0))
    assert shape.circle.radius == pytest.approx(12.5)
    assert shape.circle.sides is None
    # chords of at most 5 mm rise: the list of points stays within 5 mm of the circle
    middles = 0.5 * (shape.axis + np.roll(shape.axis, -1, axis=0))
    assert np.hypot(*(middles - (40.0, 60.0)).T).min() >= radius - 0.005 - 1e-9
    assert shape.runs[0].wall.count == count


def test_an_open_wall_has_its_dig_on_the_left_as_the_anchors_show():
    # A U drawn from its north-east end; anchors run outwards, so the dig is inside the U.
    points = [(40.0, 25.0), (40.0, 0.0), (0.0, 0.0), (0.0, 15.0)]
    anchors = [((0.0, 8.0, -2.0), (-9.0, 8.0, -6.0)), ((20.0, 0.0, -2.0), (20.0, -9.0, -6.0))]
    supports = [Support(id=f"a{k}", role="anchor", head=h, far=f) for k, (h, f) in enumerate(anchors)]
    shape = only(Site(walls=lines(points, closed=False), supports=tuple(supports)))
    assert not shape.closed
    assert shape.axis == pytest.approx(np.array(points[::-1]))
    assert shape.length == pytest.approx(80.0)
    assert angles(shape) == [90.0, 90.0]
    assert [c.at for c in shape.corners] == pytest.approx([15.0, 55.0])


@pytest.mark.parametrize(("far_y", "first"), [(-9.0, (0.0, 0.0)), (9.0, (50.0, 0.0))])
def test_the_anchors_of_a_straight_wall_say_which_way_it_is_walked(far_y, first):
    anchor = Support(id="a", role="anchor", head=(20.0, 0.0, -2.0), far=(20.0, far_y, -6.0))
    shapes, _, questions = find_shapes(Site(walls=lines([(0.0, 0.0), (50.0, 0.0)], closed=False), supports=(anchor,)))
    assert shapes[0].axis[0] == pytest.approx(first)
    assert questions == ()


def test_a_straight_wall_with_nothing_beside_it_asks_for_its_excavated_side():
    _, _, questions = find_shapes(Site(walls=lines([(0.0, 0.0), (50.0, 0.0)], closed=False)))
    assert len(questions) == 1
    assert "which side" in questions[0].about


def test_corners_within_a_centimetre_of_the_least_northing_count_as_equal():
    tilted = [(0.0, 0.008), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0)]
    assert only(Site(walls=lines(tilted))).axis[0] == pytest.approx([0.0, 0.008])
    steeper = [(0.0, 0.012), *tilted[1:]]
    assert only(Site(walls=lines(steeper))).axis[0] == pytest.approx([30.0, 0.0])


def test_the_start_given_in_the_brief_overrides_the_corner_farthest_south():
    at_corner = only(Site(walls=lines(BOX), start=(30.02, 19.99)))
    assert at_corner.axis[0] == pytest.approx([30.0, 20.0])
    assert [c.at for c in at_corner.corners] == pytest.approx([0.0, 30.0, 50.0, 80.0])
    mid_side = only(Site(walls=lines(BOX), start=(12.0, -3.0)))
    assert mid_side.axis[0] == pytest.approx([12.0, 0.0])
    assert [c.at for c in mid_side.corners] == pytest.approx([18.0, 38.0, 68.0, 88.0])


def test_south_and_east_are_those_of_the_world_when_the_working_frame_is_turned():
    # world = local turned by +90 degrees: world northing is local x, world easting is minus local y.
    frame = Frame(rotation_deg=90.0)
    assert only(Site(walls=lines(BOX), frame=frame)).axis[0] == pytest.approx([0.0, 20.0])
    turn = 2 * np.pi * np.arange(60) / 60
    ring = [Pile(id=f"p{k}", centre=(10 * np.cos(t), 10 * np.sin(t)), diameter=0.9, kind="contiguous")
            for k, t in enumerate(turn)]  # fmt: skip
    assert only(Site(piles=tuple(ring), frame=frame)).axis[0] == pytest.approx([0.0, -10.0], abs=1e-6)


def test_pits_are_numbered_from_south_to_north_and_rings_within_rings_know_their_outer_ring():
    inner = [(10.0, 5.0), (20.0, 5.0), (20.0, 15.0), (10.0, 15.0)]
    south = [(x + 3.0, y - 40.0) for x, y in BOX]
    walls = lines(inner, kind="sheet", thickness=None) + lines(BOX) + lines(south)
    shapes, _, _ = find_shapes(Site(walls=walls))
    assert [(s.id, np.round(s.axis[0], 6).tolist(), s.enclosing) for s in shapes] == [
        ("P1", [3.0, -40.0], ()), ("P2", [0.0, 0.0], ()), ("P3", [10.0, 5.0], ("P2",)),
    ]  # fmt: skip


def test_two_pits_that_share_a_wall_have_it_both():
    # The shared wall x = 30 is drawn once, as a row of piles; it is in both perimeters with the same piles.
    east = ((30.0, 0.0), (55.0, 0.0), (55.0, 20.0), (30.0, 20.0))
    drawn = lines((BOX[1], BOX[0], BOX[3], BOX[2]), closed=False) + lines(east, closed=False, kind="sheet")
    piles = rows([(30.0, 1.0), (30.0, 19.0)], 1.0, closed=False, diameter=0.8, kind="contiguous")
    shapes, _, _ = find_shapes(Site(walls=drawn, piles=piles))
    assert [s.length for s in shapes] == pytest.approx([100.0, 90.0])
    for shape in shapes:
        row = [(run, piles) for run, piles in zip(shape.runs, shape.piles, strict=True) if piles]
        assert len(row) == 1
        assert sorted(row[0][1]) == list(range(19))
        assert row[0][0].wall.count == 19


def test_arcs_that_run_into_straights_make_no_corners_and_are_listed_exactly():
    # A stadium: straights of 20 m, half circles of 6 m radius, chorded for the drawing at 5 mm rise.
    step = 2 * np.arccos(1 - 0.005 / 6.0)
    n = int(np.ceil(np.pi / step))
    turn = np.pi * np.arange(n + 1) / n - np.pi / 2
    east = [(20.0 + 6 * np.cos(t), 6 * np.sin(t)) for t in turn]
    west = [(-6 * np.cos(t), -6 * np.sin(t)) for t in turn]
    walls = [WallPiece(id="e", axis=tuple(east), kind="sheet"), WallPiece(id="w", axis=tuple(west), kind="sheet")]
    walls += [WallPiece(id="s", axis=((0.0, -6.0), (20.0, -6.0)), kind="sheet"),
              WallPiece(id="n", axis=((20.0, 6.0), (0.0, 6.0)), kind="sheet")]  # fmt: skip
    shape = only(Site(walls=tuple(walls)))
    assert shape.corners == ()
    west_arc, east_arc = sorted(shape.arcs, key=lambda arc: arc.centre)
    assert (west_arc.radius, *west_arc.centre) == pytest.approx((6.0, 0.0, 0.0), abs=1e-6)
    assert (east_arc.radius, *east_arc.centre) == pytest.approx((6.0, 20.0, 0.0), abs=1e-6)
    assert shape.length == pytest.approx(40 + 12 * np.pi, rel=2e-4)
    assert len(shape.circles) == 2


def test_a_twelve_sided_shaft_has_twelve_corners_and_is_a_circle_of_twelve_sides():
    # Interior angle of a regular n-gon: 180 - 360 / n = 150 degrees.
    points = [(10 * np.cos(np.radians(30 * k)), 10 * np.sin(np.radians(30 * k))) for k in range(12)]
    shape = only(Site(walls=lines(points)))
    assert angles(shape) == [150.0] * 12
    assert (shape.circle.sides, shape.circle.radius, shape.circle.deviation) == (
        12, pytest.approx(10.0), pytest.approx(0.0, abs=1e-9),
    )  # fmt: skip
