"""The perimeter of a large site."""

from __future__ import annotations

import pytest
from pit_lines import rows

from ingest.model import Site
from sections.perimeter.perimeter import find_shapes


def pit(side, spacing):
    return Site(piles=rows([(0.0, 0.0), (side, 0.0), (side, side), (0.0, side)], spacing, diameter=0.18,
                           kind="contiguous"))  # fmt: skip


def test_five_thousand_piles_along_a_kilometre_are_all_in_the_wall():
    site = pit(250.0, 0.2)
    assert len(site.piles) == 5000
    shapes, _, _ = find_shapes(site)
    assert sum(len(run) for shape in shapes for run in shape.piles) == 5000


def test_twenty_pits_side_by_side_are_all_found():
    piles = []
    for x in range(0, 800, 40):
        corners = [(x, 0.0), (x + 20.0, 0.0), (x + 20.0, 12.0), (x, 12.0)]
        piles += rows(corners, 1.0, diameter=0.8, kind="contiguous")
    shapes, _, _ = find_shapes(Site(piles=tuple(piles)))
    assert [shape.length for shape in shapes] == pytest.approx([64.0] * 20)
