"""Zones of pits whose changes are known, with the words for each boundary."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from pit_sites import (
    PANEL,
    PILES,
    anchor,
    boundaries,
    box,
    first_pit_struts,
    footing,
    found,
    rectangle,
    shape_of,
    strut,
)

from ingest.members import BarSection
from ingest.model import Borehole, Floor, Layer, Stratum
from sections.model import Circle


def test_zones_of_a_plain_rectangle_are_its_four_sides():
    pit = found(shape_of(rectangle()), supports=first_pit_struts())
    assert [(z.id, z.start, z.to) for z in pit.pit.zones] == [
        ("P1-Z1", 0.0, 30.0),
        ("P1-Z2", 30.0, 50.0),
        ("P1-Z3", 50.0, 80.0),
        ("P1-Z4", 80.0, 100.0),
    ]
    assert {z.ended_by for z in pit.pit.zones} == {"inside corner of 90 degrees"}


def test_zones_of_an_l_name_the_re_entrant_corner():
    ell = [(0.0, 0.0), (40.0, 0.0), (40.0, 20.0), (20.0, 20.0), (20.0, 40.0), (0.0, 40.0)]
    pit = found(shape_of(ell))
    # sides 40, 20, 20, 20, 20, 40 m: chainages 40, 60, 80, 100, 120, 160
    assert boundaries(pit)[80.0] == "re-entrant corner of 270 degrees"
    assert boundaries(pit)[60.0] == "inside corner of 90 degrees"
    assert [z.to for z in pit.pit.zones] == [40.0, 60.0, 80.0, 100.0, 120.0, 160.0]


def test_a_drop_of_the_toe_ends_a_zone_where_the_run_ends():
    deep = replace(PILES, toe=-13.5)
    pit = found(shape_of(rectangle(), [(0.0, 12.0, PILES), (12.0, 100.0, deep)]))
    assert boundaries(pit)[12.0] == "toe drops 1.5 m"
    # the corner at the start closes the ring: there the toe comes back up
    assert pit.pit.zones[-1].ended_by == "inside corner of 90 degrees; toe rises 1.5 m"


def test_a_toe_within_tolerance_is_no_boundary():
    pit = found(shape_of(rectangle(), [(0.0, 12.0, PILES), (12.0, 100.0, replace(PILES, toe=-12.08))]))
    assert 12.0 not in boundaries(pit)


def test_a_change_of_wall_names_both_kinds():
    pit = found(shape_of(rectangle(), [(0.0, 17.0, PILES), (17.0, 100.0, PANEL)]))
    assert boundaries(pit)[17.0] == "wall changes from contiguous to diaphragm"
    thick = found(shape_of(rectangle(), [(0.0, 17.0, PANEL), (17.0, 100.0, replace(PANEL, thickness=1.0))]))
    assert boundaries(thick)[17.0] == "wall thickness changes from 0.8 m to 1.0 m"


def test_a_change_of_strut_spacing_is_found_at_the_strut_where_it_changes():
    places = np.cumsum([7.25, 4.5, 4.5, 4.5, 4.5, 4.5, 6.0, 6.0, 6.0, 6.0])
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in places]
    pit = found(shape_of(rectangle(60.0)), supports=tuple(struts))
    # the last strut at 4.5 m stands at 7.25 + 5 x 4.5 = 29.75 m
    assert boundaries(pit)[29.75] == "strut spacing changes from 4.5 m to 6.0 m"
    south = [z.to for z in pit.pit.zones if z.to <= 60.0]
    # 7.25 m to the first strut is more than one and a half spacings, so 7.25 - 4.5 m at the corner are not propped
    assert south == pytest.approx([2.75, 29.75, 60.0])


def test_a_regular_row_is_one_zone_however_the_stations_fall():
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in 2.6 + 5.2 * np.arange(6)]
    jitter = np.random.default_rng(4).uniform(-0.02, 0.02, 6)
    moved = [
        replace(s, head=(s.head[0] + j, *s.head[1:]), far=(s.far[0] + j, *s.far[1:]))
        for s, j in zip(struts, jitter, strict=True)
    ]
    pit = found(shape_of(rectangle(31.2)), supports=tuple(moved))
    assert pit.pit.zones[0].to == pytest.approx(31.2)


def test_a_missing_strut_makes_a_zone_of_the_wide_bay():
    struts = [s for s in first_pit_struts() if s.name.startswith("N") and s.name != "N112.5"]
    pit = found(shape_of(rectangle()), supports=tuple(struts))
    south = {to: why for to, why in boundaries(pit).items() if to < 30.0}
    assert south == {
        7.5: "strut spacing changes from 5.0 m to 10.0 m",
        17.5: "strut spacing changes from 10.0 m to 5.0 m",
    }


def test_struts_that_end_half_way_leave_the_rest_unpropped_from_one_spacing_on():
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in (2.5, 7.5, 12.5)]
    pit = found(shape_of(rectangle()), supports=tuple(struts))
    # one spacing of 5 m beyond the last strut at 12.5 m
    assert boundaries(pit)[17.5] == "struts at -1.50 end"
    assert pit.stations.supports[int(np.searchsorted(pit.stations.chainage, 25.0))] == ()


def test_a_change_of_level_and_of_section_is_named():
    upper = [strut((100.0 + x, 200.0), (100.0 + x, 220.0), -1.5) for x in (2.5, 7.5, 12.5)]
    lower = [strut((100.0 + x, 200.0), (100.0 + x, 220.0), -2.0) for x in (17.5, 22.5, 27.5)]
    pit = found(shape_of(rectangle()), supports=(*upper, *lower))
    assert "strut level changes from -1.50 to -2.00" in boundaries(pit).values() or {
        "struts at -1.50 end",
        "struts at -2.00 begin",
    } & set(boundaries(pit).values())
    heavy = BarSection(designation="CHS 610x20")
    other = [strut((100.0 + x, 200.0), (100.0 + x, 220.0), -1.5, section=heavy) for x in (17.5, 22.5, 27.5)]
    changed = found(shape_of(rectangle()), supports=(*upper, *other))
    assert boundaries(changed)[15.0] == "strut section changes from CHS 508x16 to CHS 610x20"


def test_a_footing_bears_up_to_twice_its_distance_beyond_its_ends():
    # near edge 2.0 m behind the north wall, x 113.5 to 116.5: bears from x = 120.5 (chainage 59.5) to 109.5 (70.5)
    load = footing(box(113.5, 222.0, 3.0, 2.0))
    pit = found(shape_of(rectangle()), supports=first_pit_struts(), loads=(load,))
    assert boundaries(pit)[59.5] == "footing pressure changes from 0 to 150 kPa"
    assert boundaries(pit)[70.5] == "footing pressure changes from 150 to 0 kPa"
    assert len(pit.pit.zones) == 6


def test_a_surcharge_strip_and_its_end_are_named():
    strip = footing(box(80.0, 190.0, 35.0, 8.0), 10.0, "area")
    pit = found(shape_of(rectangle()), loads=(strip,))
    # strip 2 m behind the south wall, east end at x = 115: bears to 115 + 4 = 119, chainage 19
    assert boundaries(pit)[19.0] == "surcharge changes from 10 to 0 kPa"


def test_a_step_of_the_floor_ends_a_zone_where_it_meets_the_wall():
    floors = (
        Floor(level=-6.0, dig_level=-6.0, outline=None),
        Floor(level=-8.0, dig_level=-8.0, outline=box(118.0, 200.0, 12.0, 20.0)),
    )
    pit = found(shape_of(rectangle()), floors=floors, formation=None)
    assert boundaries(pit)[18.0] == "dig level drops 2.0 m"
    assert boundaries(pit)[62.0] == "dig level rises 2.0 m"


def test_dipping_strata_end_zones_where_a_top_has_moved_by_its_tolerance():
    # top of clay falls from -2 at x = 100 to -5 at x = 130, 0.1 per metre; tolerance 0.5 m: five metres a zone
    holes = tuple(
        Borehole(
            id=f"B{i}",
            location=(x, y, 0.0),
            layers=(Layer(top=0.0, base=z, code="MG"), Layer(top=z, base=-20.0, code="CL")),
        )
        for i, (x, y, z) in enumerate([(100, 190, -2.0), (130, 190, -5.0), (100, 230, -2.0), (130, 230, -5.0)])
    )
    strata = (Stratum(name="made ground", from_boreholes="MG"), Stratum(name="clay", from_boreholes="CL"))
    pit = found(shape_of(rectangle()), boreholes=holes, strata=strata)
    south = [z for z in pit.pit.zones if z.to <= 30.0]
    assert len(south) in (6, 7)
    assert south[0].ended_by.startswith("top of clay drops")
    west = [z for z in pit.pit.zones if z.start >= 80.0]
    assert len(west) == 1


def test_an_open_wall_ends_with_the_wall():
    pit = found(shape_of([(0.0, 0.0), (25.0, 0.0), (25.0, 15.0)], closed=False))
    assert [(z.start, z.to, z.ended_by) for z in pit.pit.zones] == [
        (0.0, 25.0, "inside corner of 90 degrees"),
        (25.0, 40.0, "the wall ends"),
    ]


def test_a_ring_without_a_change_is_one_zone_and_with_two_passes_the_start():
    theta = np.radians(np.arange(0.0, 360.0, 2.0))
    ring = [(12.0 * np.cos(t), 12.0 * np.sin(t)) for t in theta]
    circle = Circle(centre=(0.0, 0.0), radius=12.0, deviation=0.0, sides=None)
    pit = found(shape_of(ring, circle=circle))
    assert [(z.start, z.to) for z in pit.pit.zones] == [(0.0, pytest.approx(pit.shape.length))]
    assert pit.pit.zones[0].ended_by == "nothing changes round the ring"
    length = pit.shape.length
    deep = replace(PILES, toe=-16.0)
    two = found(shape_of(ring, [(10.0, 40.0, deep), (40.0, 10.0, PILES)], circle=circle))
    assert [(z.start, z.to) for z in two.pit.zones] == [(10.0, 40.0), (40.0, 10.0)]
    assert [z.ended_by for z in two.pit.zones] == ["toe rises 4.0 m", "toe drops 4.0 m"]
    assert length > 40.0


def test_a_start_in_the_middle_of_a_wall_does_not_cut_its_zone():
    corners = [(115.0, 200.0), *rectangle()[1:], rectangle()[0]]
    shape = shape_of(corners)
    pit = found(shape, supports=first_pit_struts())
    assert [(z.start, z.to) for z in pit.pit.zones] == [(15.0, 35.0), (35.0, 65.0), (65.0, 85.0), (85.0, 15.0)]
    stations = pit.stations
    at_start = int(np.searchsorted(stations.chainage, 0.0))
    assert stations.to_start[at_start] == pytest.approx(15.0)
    assert stations.to_end[at_start] == pytest.approx(15.0)


def test_zones_cover_the_perimeter_once():
    struts = first_pit_struts()
    pit = found(
        shape_of(rectangle(), [(0.0, 12.0, PILES), (12.0, 63.0, PANEL), (63.0, 100.0, PILES)]),
        supports=struts,
        loads=(footing(box(113.5, 222.0, 3.0, 2.0)),),
    )
    zones = pit.pit.zones
    assert sum((z.to - z.start) % 100.0 or 100.0 for z in zones) == pytest.approx(100.0)
    for one, nxt in zip(zones, zones[1:], strict=False):
        assert one.to == nxt.start


def test_anchors_that_give_way_to_struts_are_named():
    anchors = [anchor((100.0 + x, 200.0), (0.0, 1.0), -2.0) for x in (1.5, 4.5, 7.5, 10.5)]
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0), -2.0) for x in (14.0, 18.0, 22.0, 26.0)]
    pit = found(shape_of(rectangle()), supports=(*anchors, *struts))
    # half way between the last anchor at 10.5 and the first strut at 14.0
    assert boundaries(pit)[12.25] == "anchors at -2.00 end; struts at -2.00 begin"


def test_a_run_that_ends_within_half_a_spacing_of_a_corner_ends_at_the_corner():
    pit = found(shape_of(rectangle(), [(0.4, 30.0, PILES), (30.0, 49.7, PANEL), (49.7, 0.4, PILES)]))
    assert [z.to for z in pit.pit.zones] == [30.0, 50.0, 80.0, 100.0]
    assert pit.pit.zones[1].ended_by == "inside corner of 90 degrees; wall changes from diaphragm to contiguous"
    # the record keeps the runs as the piles have them
    assert [run.start for run in pit.pit.runs] == [0.4, 30.0, 49.7]
