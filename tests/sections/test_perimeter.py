"""The perimeter of pits small enough to work by hand. Angles and lengths are plain geometry unless a source is given."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from ingest.model import Floor, Frame, Pile, Plate, Site, Support, WallPiece
from sections.perimeter import find_shapes

BOX = ((0.0, 0.0), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0))


def lines(points, closed=True, kind="diaphragm", thickness=0.8, **more):
    """One wall piece for each straight of a polyline."""
    ends = zip(points, [*points[1:], points[0]] if closed else points[1:], strict=False)
    return tuple(
        WallPiece(id=f"w{k}", axis=(a, b), kind=kind, thickness=thickness, **more) for k, (a, b) in enumerate(ends)
    )


def rows(points, spacing, closed=True, **more):
    """Piles along a polyline, one in every corner."""
    piles = []
    for a, b in zip(points, [*points[1:], points[0]] if closed else points[1:], strict=False):
        a, b = np.array(a), np.array(b)
        n = round(float(np.hypot(*(b - a))) / spacing)
        piles += [tuple(a + (b - a) * k / n) for k in range(n)]
    piles += [] if closed else [tuple(points[-1])]
    return tuple(Pile(id=f"p{k}", centre=(float(x), float(y)), **more) for k, (x, y) in enumerate(piles))


def only(site):
    shapes, _, _ = find_shapes(site)
    assert len(shapes) == 1
    return shapes[0]


def angles(shape):
    return [round(corner.interior_angle, 6) for corner in shape.corners]


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
    assert [(s.id, s.axis[0].tolist(), s.enclosing) for s in shapes] == [
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


def test_gaps_and_overlaps_of_20_mm_close_without_turning_the_sides():
    walls = (
        WallPiece(id="s", axis=((0.02, 0.0), (14.99, 0.0)), kind="sheet"),
        WallPiece(id="s2", axis=((15.01, 0.0), (29.98, 0.0)), kind="sheet"),
        WallPiece(id="e", axis=((30.0, -0.02), (30.0, 20.02)), kind="sheet"),
        WallPiece(id="n", axis=((30.01, 20.0), (-0.02, 20.0)), kind="sheet"),
        WallPiece(id="w", axis=((0.0, 19.98), (0.0, 0.01)), kind="sheet"),
    )
    shape = only(Site(walls=walls))
    assert shape.axis == pytest.approx(np.array(BOX), abs=1e-9)
    assert angles(shape) == [90.0] * 4


@pytest.mark.parametrize(("short", "past"), [(0.4, 0.4), (0.8, 0.0), (0.5, 0.5)])
def test_walls_that_stop_short_of_or_run_past_a_corner_by_a_thickness_meet_in_it(short, past):
    ends = [((short, 0.0), (30.0 + past, 0.0)), ((30.0, short), (30.0, 20.0 + past)),
            ((30.0 - short, 20.0), (-past, 20.0)), ((0.0, 20.0 - short), (0.0, -past))]  # fmt: skip
    walls = tuple(WallPiece(id=f"w{k}", axis=e, kind="diaphragm", thickness=0.8) for k, e in enumerate(ends))
    shape = only(Site(walls=walls))
    assert shape.axis == pytest.approx(np.array(BOX), abs=1e-9)


def test_a_gap_in_a_straight_wall_is_closed_with_a_finding_and_a_wide_one_leaves_the_perimeter_open():
    def with_gap(width):
        points = [(10.0 + width, 0.0), *BOX[1:], BOX[0], (10.0, 0.0)]
        return find_shapes(Site(walls=lines(points, closed=False)))

    (closed,), findings, _ = with_gap(0.38)
    assert closed.closed
    assert [f.code for f in findings] == ["wall-gap"]
    assert "0.38 m" in findings[0].text
    (wide,), findings, _ = with_gap(6.0)
    assert not wide.closed
    assert wide.length == pytest.approx(94.0)
    assert [f.code for f in findings] == ["wall-gap"]


def test_bearing_piles_inside_the_pit_are_not_part_of_the_wall():
    wall = rows(BOX, 1.0, diameter=0.75, kind="contiguous")
    grid = tuple(Pile(id=f"g{i}{j}", centre=(3.0 + 2.5 * i, 4.0 + 2.5 * j), diameter=0.75)
                 for i in range(9) for j in range(5))  # fmt: skip
    named = tuple(Pile(id=f"b{i}", centre=(4.2 + i, 2.0), diameter=0.75, bearing=True) for i in range(20))
    shape = only(Site(piles=(*wall, *grid, *named)))
    assert shape.piles == (tuple(range(100)),)


def test_walls_of_the_building_and_stray_lines_do_not_move_the_perimeter():
    clutter = (
        WallPiece(id="lining", axis=((0.6, 0.6), (29.4, 0.6), (29.4, 19.4), (0.6, 19.4)), closed=True, kind="concrete"),
        WallPiece(id="partition", axis=((10.0, 0.0), (10.0, 20.0)), kind="concrete", thickness=0.25),
        WallPiece(id="kerb", axis=((-5.0, 4.0), (0.0, 6.0), (-5.0, 8.0))),
        WallPiece(id="ray", axis=((-4.0, -3.0), (40.0, 30.0))),
    )
    shape = only(Site(walls=(*clutter, *lines(BOX))))
    assert shape.axis == pytest.approx(np.array(BOX))


def test_an_existing_concrete_wall_closes_what_a_sheet_wall_leaves_open():
    sheets = lines([(0.0, 10.0), (0.0, 0.0), (20.0, 0.0), (20.0, 10.0)], closed=False, kind="sheet", thickness=None)
    old = WallPiece(id="old", axis=((-5.0, 10.0), (25.0, 10.0)), kind="concrete", thickness=0.4)
    shape = only(Site(walls=(*sheets, old)))
    assert shape.length == pytest.approx(60.0)
    assert [(r.wall.kind, round(r.start, 3), round(r.to, 3)) for r in shape.runs] == [
        ("concrete", 30.0, 50.0), ("sheet", 50.0, 30.0),
    ]  # fmt: skip


def test_without_embedded_walls_the_outline_of_the_lowest_storey_is_the_perimeter():
    below = lines([(0.0, 0.0), (20.0, 0.0), (20.0, 12.0), (0.0, 12.0)], kind="concrete", thickness=0.3, toe=-4.0)
    cross = lines([(8.0, 0.0), (8.0, 12.0)], closed=False, kind="concrete", thickness=0.2, toe=-4.0)
    above = lines([(0.0, 0.0), (26.0, 0.0), (26.0, 12.0), (0.0, 12.0)], kind="concrete", thickness=0.3, toe=0.0)
    shape = only(Site(walls=(*below, *cross, *above)))
    assert shape.length == pytest.approx(64.0)
    assert shape.runs[0].wall.kind == "concrete"


def test_with_slabs_only_the_lowest_one_stands_in_and_is_asked_about():
    low = Plate(id="low", role="slab", outline=((0.0, 0.0), (20.0, 0.0), (20.0, 10.0), (0.0, 10.0)), top=-3.0)
    high = Plate(id="high", role="slab", outline=((0.0, 0.0), (24.0, 0.0), (24.0, 10.0), (0.0, 10.0)), top=0.0)
    shapes, findings, questions = find_shapes(Site(plates=(high, low)))
    assert shapes[0].length == pytest.approx(60.0)
    assert shapes[0].runs[0].wall.kind == "unknown"
    assert [f.code for f in findings] == ["perimeter-assumed"]
    assert [q.id for q in questions] == ["perimeter-assumed"]


def test_a_guide_wall_that_ends_in_the_upper_half_of_the_dig_does_not_retain():
    guide = tuple(replace(w, toe=-1.2) for w in lines([(-0.5, -0.5), (30.5, -0.5), (30.5, 20.5), (-0.5, 20.5)]))
    wall = tuple(replace(w, toe=-14.0) for w in lines(BOX))
    shapes, findings, _ = find_shapes(Site(walls=(*guide, *wall), ground_level=0.0, formation=-8.0))
    assert [s.length for s in shapes] == pytest.approx([100.0])
    assert "wall-above-formation" in [f.code for f in findings]


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
    assert sorted((a.radius, *np.round(a.centre, 6)) for a in shape.arcs) == [
        pytest.approx((6.0, 0.0, 0.0)), pytest.approx((6.0, 20.0, 0.0)),
    ]  # fmt: skip
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


def test_a_wall_inside_a_pit_that_closes_no_ring_is_reported():
    inner = WallPiece(id="i", axis=((5.0, 3.0), (15.0, 3.0)), kind="sheet")
    shapes, findings, _ = find_shapes(Site(walls=(*lines(BOX), inner)))
    assert len(shapes) == 1
    assert [f.code for f in findings] == ["wall-inside-pit"]


@pytest.mark.parametrize(
    "site",
    [
        Site(),
        Site(piles=(Pile(id="a", centre=(0.0, 0.0), diameter=0.6),)),
        Site(piles=(Pile(id="a", centre=(0.0, 0.0), diameter=0.6, kind="secant"),)),
        Site(walls=(WallPiece(id="a", axis=((3.0, 4.0), (3.0, 4.0)), kind="sheet"), WallPiece(id="b", axis=()))),
        Site(walls=(WallPiece(id="a", axis=((0.0, 0.0), (1.0, 0.0)), kind="sheet"),)),
        Site(floors=(Floor(level=-8.0, dig_level=None),)),
    ],
)
def test_a_site_without_a_wall_worth_the_name_has_no_pit(site):
    assert find_shapes(site)[0] == ()
