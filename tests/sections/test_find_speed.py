"""A perimeter of 1,000 m with 5,000 piles and 2,000 members, without the reading."""

from __future__ import annotations

import numpy as np
import pytest
from pit_sites import PILES, anchor, box, footing, shape_of, site_of, strut

from ingest.members import Pile
from ingest.model import Borehole, Layer, Site, Stratum
from sections.found import PitShape
from sections.pit.find import describe_pits


def made(base: float) -> tuple[Layer, Layer]:
    return Layer(top=0.0, base=base, code="MG"), Layer(top=base, base=-30.0, code="CL")


def big_site(scale: int = 1) -> tuple[Site, PitShape]:
    """A long pit with a re-entrant corner: `scale` times about 250 m of wall, 1,250 piles and 500 members."""
    a = 115.0 * scale
    corners = [(0.0, 0.0), (a, 0.0), (a, 50.0), (0.6 * a, 50.0), (0.6 * a, 30.0), (0.0, 30.0)]
    shape = shape_of(corners)
    edges = np.linspace(0.0, shape.length, 5)
    runs = [(float(p), float(q), PILES) for p, q in zip(edges, edges[1:], strict=False)]
    shape = shape_of(corners, runs)
    members = [
        strut((x, 0.0), (x, 50.0 if x > 0.6 * a else 30.0), level)
        for level in (-1.5, -4.0, -6.5)
        for x in np.arange(3.0, a - 1.0, 4.0)
        if abs(x - 0.6 * a) > 0.5
    ]
    members += [
        anchor((x, 0.0), (0.0, 1.0), level) for level in np.arange(-2.0, -8.0, -1.0) for x in np.arange(1.0, a, 1.5)
    ]
    assert len(members) >= 500 * scale
    members = members[: 500 * scale]
    piles = tuple(
        Pile(id="", centre=(float(x), float(y)), diameter=0.6, bearing=True, toe=-20.0)
        for x, y in zip(np.linspace(1.0, a - 1.0, 1250 * scale), np.tile([5.0, 25.0], 625 * scale), strict=True)
    )
    holes = tuple(
        Borehole(id=f"B{i}", location=(x, y, 0.0), layers=made(-3.0 - 0.01 * x))
        for i, (x, y) in enumerate([(0.0, -5.0), (a, -5.0), (a, 60.0), (0.0, 60.0), (a / 2, 15.0)])
    )
    strata = (Stratum(name="made ground", from_boreholes="MG"), Stratum(name="clay", from_boreholes="CL"))
    loads = tuple(footing(box(20.0 * i, -6.0, 4.0, 3.0), 20.0 + i, "area") for i in range(3 * scale))
    return site_of(supports=tuple(members), piles=piles, boreholes=holes, strata=strata, loads=loads), shape


def test_a_kilometre_of_wall_with_two_thousand_members_is_found_whole():
    site, shape = big_site(4)
    assert shape.length > 1000.0
    (found,) = describe_pits(site, (shape,))
    assert found.pit.zones[-1].to == pytest.approx(shape.length)
    assert sum(len(row.supports) for row in found.rows) == 2000
