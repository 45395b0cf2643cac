"""The perimeter of a large site in a time that grows about as its size (processor time)."""

from __future__ import annotations

import time

import pytest
from pit_lines import rows

from ingest.model import Site
from sections.perimeter.perimeter import find_shapes


def seconds(site):
    best = float("inf")
    for _ in range(2):
        start = time.process_time()
        shapes, _, _ = find_shapes(site)
        best = min(best, time.process_time() - start)
        assert sum(len(run) for shape in shapes for run in shape.piles) == len(site.piles)
    return best


def pit(side, spacing):
    return Site(piles=rows([(0.0, 0.0), (side, 0.0), (side, side), (0.0, side)], spacing, diameter=0.18,
                           kind="contiguous"))  # fmt: skip


def test_five_thousand_piles_along_a_kilometre_take_well_under_a_second_and_grow_near_linearly():
    large, small = pit(250.0, 0.2), pit(62.5, 0.2)
    assert (len(large.piles), len(small.piles)) == (5000, 1248)
    long = seconds(large)
    assert long < 1.0
    assert long < 7.0 * seconds(small)


def test_twenty_pits_side_by_side_are_all_found():
    piles = []
    for x in range(0, 800, 40):
        corners = [(x, 0.0), (x + 20.0, 0.0), (x + 20.0, 12.0), (x, 12.0)]
        piles += rows(corners, 1.0, diameter=0.8, kind="contiguous")
    shapes, _, _ = find_shapes(Site(piles=tuple(piles)))
    assert [shape.length for shape in shapes] == pytest.approx([64.0] * 20)
