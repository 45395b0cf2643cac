"""Whatever is drawn, finding gives a record that adds up; pits within pits and beside each other."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pit_sites import PANEL, PILES, box, first_pit_struts, footing, found, rectangle, shape_of, site_of, strut

from ingest.members import Column, Load, Pile, Plate, Receptor, Support, Waler
from ingest.model import Borehole, Floor, Layer, Stratum
from sections.found import Stations
from sections.model import Circle
from sections.pit.find import describe_pits, find_pits

RING = [(12.0 * np.cos(t), 12.0 * np.sin(t)) for t in np.radians(np.arange(0.0, 360.0, 3.0))]
SHAPES = (
    shape_of(rectangle(30.0, 20.0, 0.0, 0.0)),
    shape_of([(0.0, 0.0), (40.0, 0.0), (40.0, 18.0), (22.0, 18.0), (22.0, 36.0), (0.0, 36.0)]),
    shape_of([(0.0, 0.0), (30.0, 0.0), (12.0, 25.0)], [(5.0, 20.0, PILES), (20.0, 5.0, PANEL)]),
    shape_of(RING, circle=Circle(centre=(0.0, 0.0), radius=12.0, deviation=0.0, sides=None)),
    shape_of([(0.0, 0.0), (30.0, 0.0)], closed=False),
    shape_of([(0.0, 20.0), (0.0, 0.0), (30.0, 0.0), (35.0, 20.0)], closed=False),
    replace(shape_of(rectangle(10.0, 8.0, 0.0, 0.0)), runs=(), piles=()),
)

place = st.floats(-45, 45).map(lambda v: round(v * 4) / 4)
level = st.sampled_from([0.0, -1.5, -1.55, -4.0, -9.0])
point = st.tuples(place, place)
some = st.none() | st.floats(-20, 5)

supports = st.builds(
    Support,
    id=st.just(""),
    role=st.sampled_from(["strut", "corner_strut", "raker", "anchor"]),
    head=st.tuples(place, place, level),
    far=st.tuples(place, place, level),
    level_given=st.booleans(),
    inclination_given=st.booleans(),
    free_length=st.none() | st.just(8.0),
    waler=st.none() | st.booleans(),
)
loads = st.builds(
    Load,
    id=st.just(""),
    kind=st.sampled_from(["point", "line", "area", "footing"]),
    value=st.none() | st.floats(0, 200),
    points=st.lists(point, min_size=1, max_size=5).map(tuple),
)
outlines = st.lists(point, min_size=3, max_size=6).map(tuple)
floors = st.builds(Floor, level=st.floats(-12, -2), dig_level=st.none(), outline=st.none() | outlines)
plates = st.builds(Plate, id=st.just(""), role=st.sampled_from(["slab", "footing"]), outline=outlines, underside=some)
walers = st.builds(Waler, id=st.just(""), points=st.lists(point, min_size=1, max_size=5).map(tuple), level=some)
piles = st.builds(Pile, id=st.just(""), centre=point, diameter=st.none() | st.just(0.6), bearing=st.booleans())
columns = st.builds(Column, id=st.just(""), centre=point, width=st.none() | st.just(0.4), foot=some)
receptors = st.builds(Receptor, id=st.just(""), kind=st.just("building"), points=st.lists(point, max_size=5).map(tuple))


@st.composite
def boreholes(draw):
    tops = sorted(draw(st.lists(st.floats(-20, 0), min_size=1, max_size=4)), reverse=True)
    codes = draw(st.lists(st.sampled_from(["A", "B", "C"]), min_size=len(tops), max_size=len(tops)))
    layers = tuple(Layer(top=t, base=t - 1.0, code=c) for t, c in zip(tops, codes, strict=True))
    return Borehole(id="B", location=(*draw(point), tops[0]), layers=layers, water=draw(some))


STRATA = (
    Stratum(name="a", from_boreholes="A"),
    Stratum(name="b", from_boreholes="B"),
    Stratum(name="c", top_level=-9.0),
)


@settings(max_examples=80, deadline=None)
@given(
    st.sampled_from(SHAPES),
    st.lists(supports, max_size=12),
    st.lists(loads, max_size=3),
    st.lists(floors, max_size=3),
    st.lists(plates, max_size=3),
    st.lists(walers, max_size=2),
    st.lists(piles, max_size=4),
    st.tuples(st.lists(columns, max_size=3), st.lists(receptors, max_size=2), st.lists(boreholes(), max_size=5)),
    st.tuples(st.none() | st.just(0.0), st.none() | st.just(-6.0)),
)
def test_the_record_adds_up_whatever_is_drawn(shape, members, burden, digs, slabs, beams, stakes, others, levels):
    site = site_of(
        supports=tuple(members), loads=tuple(burden), floors=tuple(digs), plates=tuple(slabs), walers=tuple(beams),
        piles=tuple(stakes), columns=tuple(others[0]), receptors=tuple(others[1]), boreholes=tuple(others[2]),
        strata=STRATA, ground_level=levels[0], formation=levels[1], dig_allowance=None,
    )  # fmt: skip
    pit = describe_pits(site, (shape,))[0]
    stations, count = pit.stations, len(pit.stations.chainage)
    for field in fields(Stations):
        value = getattr(stations, field.name)
        if isinstance(value, (np.ndarray, tuple)):
            assert len(value) == count, field.name
    assert np.all(np.diff(stations.chainage) > 0)
    assert np.max(np.diff(np.append(stations.chainage, shape.length))) <= 0.5 + 1e-6
    lengths = [z.to - z.start if z.to > z.start else z.to - z.start + shape.length for z in pit.pit.zones]
    assert sum(lengths) == pytest.approx(shape.length)
    assert set(stations.zone.tolist()) == set(range(len(pit.pit.zones)))
    ids = [m.id for m in pit.pit.members]
    assert len(ids) == len(set(ids))
    assert all(name.startswith("P1-") for name in ids)
    used = [i for row in pit.rows for i in row.supports]
    assert len(used) == len(set(used))
    for row in pit.rows:
        assert row.member.count == len(row.supports) == len(row.head_at) == len(row.tributary_head)
        assert np.all(row.tributary_head > -1e-9)
        assert not np.any(np.isnan(row.head_at))
    for held in stations.supports:
        assert all(0 <= i < len(pit.rows) for i in held)


def test_a_site_without_a_wall_holds_no_pit():
    assert find_pits(site_of()) == ()


def test_a_pit_within_a_pit_retains_the_floor_around_it():
    outer = shape_of(rectangle(40.0, 30.0, 0.0, 0.0))
    inner = replace(shape_of(rectangle(10.0, 8.0, 15.0, 11.0), pit="P2"), enclosing=("P1",))
    floors = (
        Floor(level=-6.0, dig_level=-6.0),
        Floor(level=-11.0, dig_level=-11.0, outline=box(15.0, 11.0, 10.0, 8.0)),
    )
    one, two = describe_pits(site_of(floors=floors, formation=None), (outer, inner))
    assert set(one.stations.ground.tolist()) == {0.0}
    assert set(one.stations.floor.tolist()) == {-6.0}
    assert set(two.stations.ground.tolist()) == {-6.0}
    assert set(two.stations.depth.tolist()) == {5.0}
    assert two.pit.ground_level == -6.0
    # without a floor of its own nothing is known of how deep the inner one is
    flat = describe_pits(site_of(), (outer, inner))[1]
    assert np.all(np.isnan(flat.stations.ground))
    assert any(f.code == "pit-in-pit" for f in flat.findings)


def test_a_strut_between_a_ring_and_the_ring_within_it_is_listed_once_with_both_pits():
    outer = shape_of(rectangle(40.0, 30.0, 0.0, 0.0))
    inner = replace(shape_of(rectangle(10.0, 8.0, 15.0, 11.0), pit="P2"), enclosing=("P1",))
    members = tuple(strut((x, 0.0), (x, 11.0)) for x in (16.0, 20.0, 24.0))
    one, two = describe_pits(site_of(supports=members), (outer, inner))
    assert [row.member.count for row in one.rows] == [3]
    assert two.rows == ()
    assert [(a.pit, a.start, a.to, a.end) for a in one.rows[0].member.along] == [
        ("P1", 16.0, 24.0, "head"),
        ("P2", 1.0, 9.0, "far"),
    ]


def test_two_pits_side_by_side_interact_within_twice_the_deeper_one():
    west = shape_of(rectangle(20.0, 20.0, 0.0, 0.0))
    near, far = (shape_of(rectangle(20.0, 20.0, 20.0 + gap, 0.0), pit="P2") for gap in (11.9, 12.1))
    assert [n.interacts for n in describe_pits(site_of(), (west, near))[0].pit.neighbours] == [True]
    pits = describe_pits(site_of(), (west, far))
    assert [(n.pit, round(n.distance, 3), n.interacts) for n in pits[0].pit.neighbours] == [("P2", 12.1, False)]
    assert [n.pit for n in pits[1].pit.neighbours] == ["P1"]


def test_a_strut_with_a_loose_end_is_reported():
    pit = found(shape_of(rectangle()), supports=(strut((115.0, 200.0), (115.0, 210.0), name="half"),))
    assert [f.code for f in pit.findings] == ["strut-far-end"]
    assert "half" in pit.findings[0].text


def test_the_first_pit_as_a_whole():
    pit = found(
        shape_of(rectangle()),
        supports=first_pit_struts(),
        loads=(footing(box(113.5, 222.0, 3.0, 2.0)),),
        dig_allowance=None,
    )
    assert (pit.pit.length, len(pit.pit.corners), pit.pit.ground_level) == (100.0, 4, 0.0)
    assert [(m.id, m.count, m.spacing) for m in pit.pit.members] == [("P1-strut-1", 6, 5.0), ("P1-strut-2", 4, 5.0)]
    # three stations by hand: mid south wall, 5 m up the east wall, opposite the footing
    stations = pit.stations
    for at, corner, facing, held, loads in (
        (15.0, 15.0, 20.0, (0,), ()),
        (35.0, 5.0, 30.0, (1,), ()),
        (65.0, 15.0, 20.0, (0,), ("P1-load-1",)),
    ):
        i = int(np.argmin(np.abs(stations.chainage - at)))
        assert stations.to_corner[i] == pytest.approx(corner)
        assert stations.facing[i] == pytest.approx(facing)
        assert stations.supports[i] == held
        assert stations.load_ids[i] == loads
        assert stations.depth[i] == 6.0
