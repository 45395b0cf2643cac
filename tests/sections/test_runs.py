"""Runs of one construction along a perimeter, worked by hand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from pit_lines import BOX, lines, only, rows

from ingest.members import BarSection, Pile, WallPiece
from ingest.model import Site, Source
from sections.perimeter.perimeter import find_shapes


def bounds(shape):
    return [(run.wall.kind, round(run.start, 3), round(run.to, 3)) for run in shape.runs]


def row(a, b, spacing, name, **more):
    """Piles from `a` on towards `b`, the one at `b` left out."""
    a, b = np.array(a), np.array(b)
    n = round(float(np.hypot(*(b - a))) / spacing)
    at = [a + (b - a) * k / n for k in range(n)]
    return tuple(Pile(id=f"{name}{k}", centre=(float(x), float(y)), **more) for k, (x, y) in enumerate(at))


def test_a_wall_that_changes_at_two_corners_has_two_runs_that_begin_there():
    # South and east sides contiguous at 1.00 m: 30 + 20 piles; north and west secant at 0.50 m: 60 + 40 piles.
    contiguous = row(BOX[0], BOX[1], 1.0, "a", diameter=0.8, kind="contiguous")
    contiguous += row(BOX[1], BOX[2], 1.0, "b", diameter=0.8, kind="contiguous")
    secant = row(BOX[2], BOX[3], 0.5, "c", diameter=0.6, kind="secant")
    secant += row(BOX[3], BOX[0], 0.5, "d", diameter=0.6, kind="secant")
    shape = only(Site(piles=(*secant, *contiguous)))
    assert bounds(shape) == [("contiguous", 0.0, 50.0), ("secant", 50.0, 100.0)]
    assert [run.wall.count for run in shape.runs] == [50, 100]
    assert [run.wall.centres for run in shape.runs] == pytest.approx([1.0, 0.5])


def test_the_runs_of_a_ring_sum_to_its_piles():
    piles = row(BOX[0], (18.0, 0.0), 1.0, "a", diameter=0.8, kind="contiguous")
    post = {"kind": "king_post", "diameter": None, "section": BarSection(designation="HP", depth=0.3)}
    piles += row((18.0, 0.0), BOX[1], 2.0, "b", **post)
    piles += row(BOX[1], BOX[2], 2.0, "c", **post)
    piles += row(BOX[2], BOX[3], 1.0, "d", diameter=0.8, kind="contiguous")
    piles += row(BOX[3], BOX[0], 1.0, "e", diameter=0.8, kind="contiguous")
    shape = only(Site(piles=piles))
    posts, others = sorted(shape.runs, key=lambda run: run.wall.kind == "contiguous")
    assert posts.wall.count + others.wall.count == len(piles) == 18 + 6 + 10 + 30 + 20
    assert posts.start == pytest.approx(18.0, abs=0.5)
    assert posts.to == pytest.approx(50.0)
    assert others.to == posts.start
    assert (posts.wall.post, posts.wall.diameter) == ("HP", None)
    assert (posts.wall.structural.which, posts.wall.structural.spacing) == ("posts", pytest.approx(2.0))


def test_a_toe_that_drops_begins_a_run_and_levels_within_the_tolerance_do_not():
    piles = rows(BOX, 1.0, diameter=0.8, kind="contiguous", toe=-12.0)
    deeper = tuple(replace(p, toe=-13.5) if 10 <= k < 25 else replace(p, toe=-12.04) if k > 60 else p
                   for k, p in enumerate(piles))  # fmt: skip
    shape = only(Site(piles=deeper))
    assert [(r.wall.toe, r.wall.count) for r in shape.runs] == [(-13.5, 15), (-12.0, 85)]
    assert shape.runs[0].start == pytest.approx(10.0, abs=0.5)
    assert shape.runs[0].to == pytest.approx(25.0, abs=0.5)


def test_a_spacing_that_changes_for_good_begins_a_run_and_one_missing_pile_is_reported():
    piles = rows([(0.0, 0.0), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0)], 1.0, diameter=0.75, kind="contiguous")
    wider = row((30.0, 20.0), (0.0, 20.0), 1.25, "n", diameter=0.75, kind="contiguous")
    shape = only(Site(piles=(*piles[:50], *wider, *piles[80:])))
    assert [(r.wall.count, round(r.wall.centres, 3)) for r in shape.runs] == [(24, 1.25), (70, 1.0)]
    shapes, findings, _ = find_shapes(Site(piles=piles[:15] + piles[16:]))
    assert [r.wall.count for r in shapes[0].runs] == [99]
    assert [f.code for f in findings] == ["pile-gap"]
    assert "2.00 m between two piles where 1.00 m is usual" in findings[0].text


@pytest.mark.parametrize(
    ("male", "female"),
    [
        ({"diameter": 0.9, "toe": -14.0}, {"diameter": 0.75, "toe": -14.0}),
        ({"diameter": 0.9, "toe": -14.0}, {"diameter": 0.9, "toe": -10.0}),
        ({"diameter": 0.9, "toe": -14.0, "male": True}, {"diameter": 0.9, "toe": -14.0, "male": False}),
    ],
    ids=["larger", "deeper", "said"],
)
def test_males_of_a_secant_wall_are_told_by_size_by_toe_or_by_what_is_said(male, female):
    # methods: W3 and the key note there: what bends are the males, at twice the distance between neighbours.
    piles = tuple(replace(p, **(male if k % 2 else female)) for k, p in
                  enumerate(rows(BOX, 0.625, diameter=0.9, kind="secant")))  # fmt: skip
    shapes, findings, _ = find_shapes(Site(piles=piles))
    (run,) = shapes[0].runs
    assert findings == ()
    assert run.wall.count == 160
    assert run.wall.centres == pytest.approx(0.625)
    assert (run.wall.structural.which, run.wall.structural.count) == ("male", 80)
    assert run.wall.structural.spacing == pytest.approx(1.25)
    assert (run.wall.diameter, run.wall.toe) == (0.9, -14.0)


def test_a_secant_wall_whose_piles_are_all_alike_is_taken_by_halves_and_reported():
    shapes, findings, _ = find_shapes(Site(piles=rows(BOX, 0.625, diameter=0.9, kind="secant")))
    assert shapes[0].runs[0].wall.structural.count == 80
    assert [f.code for f in findings] == ["secant-males"]
    only_males, findings, _ = find_shapes(Site(piles=rows(BOX, 1.25, diameter=0.9, kind="secant")))
    assert only_males[0].runs[0].wall.structural.count == 80
    assert [f.code for f in findings] == ["secant-males"]


@pytest.mark.parametrize(("spacing", "kind"), [(0.625, "secant"), (1.0, "contiguous"), (1.25, "contiguous")])
def test_unnamed_piles_are_a_wall_by_their_spacing_over_diameter(spacing, kind):
    # Cut into each other: secant; up to 1.8 diameters: contiguous (common practice, no source).
    shape = only(Site(piles=rows(BOX, spacing, diameter=0.8)))
    assert bounds(shape) == [(kind, 0.0, 100.0)]


def test_unnamed_piles_far_apart_are_a_wall_only_where_they_close_a_ring_and_that_is_reported():
    shapes, findings, _ = find_shapes(Site(piles=rows(BOX, 2.0, diameter=0.8)))
    assert bounds(shapes[0]) == [("king_post", 0.0, 100.0)]
    assert [f.code for f in findings] == ["posts-by-place"]
    strips = rows([(0.0, 0.0), (30.0, 0.0)], 2.0, closed=False, diameter=0.8)
    assert find_shapes(Site(piles=strips))[0] == ()


def test_piles_drawn_twice_within_20_mm_count_once():
    piles = rows(BOX, 1.0, diameter=0.75, kind="contiguous")
    again = tuple(replace(p, id=p.id + "x", centre=(p.centre[0] + 0.012, p.centre[1] - 0.012)) for p in piles[::3])
    assert only(Site(piles=(*again, *piles))).runs[0].wall.count == 100


def test_a_drawn_wall_keeps_its_facts_and_sources_and_changes_where_they_change():
    source = {k: (Source(file="plan.dxf", item=k),) for k in "ab"}
    walls = (
        WallPiece(id="a", axis=BOX[:3], kind="diaphragm", thickness=0.8, top=0.5, toe=-16.0, sources=source["a"],
                  continuity="jointed"),
        WallPiece(id="b", axis=(*BOX[2:], BOX[0]), kind="diaphragm", thickness=1.0, toe=-16.0, sources=source["b"]),
    )  # fmt: skip
    shape = only(Site(walls=walls))
    assert bounds(shape) == [("diaphragm", 0.0, 50.0), ("diaphragm", 50.0, 100.0)]
    first, second = (run.wall for run in shape.runs)
    assert (first.thickness, first.top, first.toe, first.continuity) == (0.8, 0.5, -16.0, "jointed")
    assert (second.thickness, second.top, second.continuity) == (1.0, None, "unknown")
    assert (first.sources, second.sources) == (source["a"], source["b"])
    assert first.count is None


def test_a_run_that_passes_the_start_ends_before_it_begins():
    walls = lines(BOX[:2], closed=False, kind="sheet", thickness=None)
    walls += lines((*BOX[1:], BOX[0]), closed=False)
    shape = only(Site(walls=walls, start=(15.0, 0.0)))
    assert bounds(shape) == [("diaphragm", 15.0, 85.0), ("sheet", 85.0, 15.0)]


def test_a_setting_out_line_along_a_row_is_no_wall_of_its_own():
    piles = rows(BOX, 1.0, diameter=0.75, kind="contiguous")
    line = WallPiece(id="line", axis=BOX, closed=True, kind="contiguous")
    shape = only(Site(piles=piles, walls=(line,)))
    assert [run.wall.count for run in shape.runs] == [100]
