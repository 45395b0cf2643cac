"""Which lines make the perimeter: gaps, corners drawn short, clutter, building walls, slabs, guide walls."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from pit_lines import BOX, angles, lines, only, rows

from ingest.members import Pile, Plate, WallPiece
from ingest.model import Floor, Site
from sections.perimeter.perimeter import find_shapes


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
