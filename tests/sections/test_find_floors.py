"""Dig floors, steps and the dig level at the wall, by hand."""

from __future__ import annotations

import numpy as np
import pytest
from pit_sites import PANEL, box, found, rectangle, shape_of, site_of

from ingest.members import Plate
from ingest.model import Floor
from sections.pit.floors import find_floors, find_steps, floor_at_wall


def at(pit, chainage):
    """Dig level at the station that stands there."""
    index = int(np.searchsorted(pit.stations.chainage, chainage + 1e-6)) - 1
    return float(pit.stations.floor[index])


def floor(level, outline=None, allowance=0.0):
    return Floor(level=level, dig_level=None if allowance is None else level - allowance, outline=outline)


def test_formation_alone_fills_the_pit():
    pit = found(shape_of(rectangle()))
    assert [(f.level, f.dig_level) for f in pit.pit.floors] == [(-6.0, -6.0)]
    assert np.all(pit.stations.floor == -6.0)
    assert np.all(pit.stations.depth == 6.0)


def test_the_dig_level_lies_the_allowance_below_the_slab():
    pit = found(shape_of(rectangle()), dig_allowance=0.35)
    assert pit.pit.floors[0].dig_level == pytest.approx(-6.35)
    assert np.all(pit.stations.floor == -6.35)
    assert pit.assumptions == ()


def test_without_an_allowance_the_slab_rules_and_an_assumption_says_so():
    pit = found(shape_of(rectangle()), dig_allowance=None)
    assert pit.pit.floors[0].dig_level is None
    assert np.all(pit.stations.floor == -6.0)
    assert [a.code for a in pit.assumptions] == ["dig-allowance"]


def test_a_step_across_the_pit_has_its_line_drop_and_two_chainages():
    floors = (floor(-6.0), floor(-8.0, box(118.0, 200.0, 12.0, 20.0)))
    pit = found(shape_of(rectangle()), floors=floors, formation=None)
    assert len(pit.pit.steps) == 1
    step = pit.pit.steps[0]
    assert step.drop == pytest.approx(2.0)
    # x = 118 meets the south wall at chainage 18 and the north wall at 50 + 12 = 62
    assert step.at == pytest.approx((18.0, 62.0))
    assert sorted(step.line) == [(118.0, 200.0), (118.0, 220.0)]
    assert at(pit, 10.0) == -6.0
    assert at(pit, 25.0) == -8.0
    assert at(pit, 40.0) == -8.0
    # areas by hand: 18 x 20 and 12 x 20
    areas = {f.level: _area(f.outline) for f in pit.pit.floors}
    assert areas == {-6.0: pytest.approx(360.0), -8.0: pytest.approx(240.0)}


def _area(outline):
    x, y = np.array(outline).T
    return 0.5 * float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y))


def test_a_pit_deeper_by_two_rules_within_three_metres_of_the_wall():
    # lift pit 2.0 m deeper, its edge 2.5 m from the face of the north wall: 2.5 <= 1.5 x 2.0
    near = (floor(-6.0), floor(-8.0, box(112.0, 214.1, 4.0, 3.0)))
    pit = found(shape_of(rectangle(), [(0.0, 100.0, PANEL)]), floors=near, formation=None)
    # north axis y = 220, wall 0.8 m: face at 219.6, pit edge at 217.1
    assert at(pit, 50.0 + 16.0) == -8.0
    assert at(pit, 16.0) == -6.0
    assert pit.pit.steps[0].at == ()
    far = (floor(-6.0), floor(-8.0, box(112.0, 213.0, 4.0, 3.0)))
    pit = found(shape_of(rectangle(), [(0.0, 100.0, PANEL)]), floors=far, formation=None)
    # edge at 216.0: 3.6 m from the face, beyond 3.0 m
    assert np.all(pit.stations.floor == -6.0)


def test_floors_of_the_building_come_from_the_lowest_slabs():
    slabs = (
        Plate(id="", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), underside=-3.2, top=-3.0),
        Plate(id="", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), underside=-6.3, top=-6.0),
        Plate(id="", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), underside=0.1, top=0.3),
        Plate(id="", role="footing", outline=box(110.0, 208.0, 3.0, 3.0), underside=-7.0, top=-6.3),
    )
    pit = found(shape_of(rectangle()), plates=slabs, formation=None)
    assert sorted(f.level for f in pit.pit.floors) == [-7.0, -6.3]
    assert np.all(pit.stations.floor == -6.3)


def test_a_slab_above_the_formation_is_no_dig_floor():
    slab = Plate(id="", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), underside=-3.2)
    pit = found(shape_of(rectangle()), plates=(slab,))
    assert [f.level for f in pit.pit.floors] == [-6.0]


def test_a_slab_drawn_in_strips_is_one_floor_and_no_step():
    strips = tuple(
        Plate(id="", role="slab", outline=box(100.4 + 7.3 * i, 200.4, 7.28, 19.2), underside=-6.0) for i in range(4)
    )
    pit = found(shape_of(rectangle()), plates=strips, formation=None)
    assert len(pit.pit.floors) == 1
    assert pit.pit.steps == ()


def test_floors_drawn_with_a_gap_still_give_the_step_between_them():
    slabs = (
        Plate(id="", role="slab", outline=box(100.0, 200.0, 17.98, 20.0), underside=-6.0),
        Plate(id="", role="slab", outline=box(118.0, 200.0, 12.0, 20.0), underside=-8.0),
    )
    pit = found(shape_of(rectangle()), plates=slabs, formation=None)
    assert pit.pit.steps[0].at == pytest.approx((18.0, 62.0), abs=0.06)


def test_without_any_level_nothing_is_made_up():
    pit = found(shape_of(rectangle()), formation=None, ground_level=None)
    assert pit.pit.floors == ()
    assert np.all(np.isnan(pit.stations.floor))
    assert {f.code for f in pit.findings} == {"ground-level", "dig-level"}
    assert all(f.severity == "check" for f in pit.findings)


def test_floor_outside_the_pit_is_left_out_and_one_across_its_edge_is_cut():
    site = site_of(
        floors=(floor(-6.0), floor(-9.0, box(140.0, 200.0, 5.0, 5.0)), floor(-7.0, box(95.0, 195.0, 10.0, 10.0)))
    )
    shape = shape_of(rectangle())
    plan = find_floors(site, shape)
    assert [f.level for f in plan.floors] == [-6.0, -7.0]
    assert plan.areas[1].area == pytest.approx(25.0)
    assert [step.at for step in find_steps(plan, shape, site.limits)] == [pytest.approx((5.0, 95.0))]
    level = floor_at_wall(plan, shape, np.array([2.0, 10.0, 97.0]), np.zeros(3))
    assert level.tolist() == [-7.0, -6.0, -7.0]
