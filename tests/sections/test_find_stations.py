"""Stations: the walk, distances to corners, the wall opposite, loads."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pit_sites import PANEL, PILES, box, first_pit_struts, footing, found, rectangle, shape_of, strut

from ingest.members import Load, Receptor
from sections.model import Arc, Circle
from sections.pit.chainage import cast, find_sides, locate, normal_at, point_at, side_of, within

ELL = [(0.0, 0.0), (40.0, 0.0), (40.0, 20.0), (20.0, 20.0), (20.0, 40.0), (0.0, 40.0)]


def station(pit, chainage):
    return int(np.searchsorted(pit.stations.chainage, chainage - 1e-6))


def test_the_walk_is_dense_and_stands_at_corners_supports_and_ends():
    pit = found(shape_of(rectangle(), [(0.0, 12.3, PILES), (12.3, 100.0, PANEL)]), supports=first_pit_struts())
    chainage = pit.stations.chainage
    assert np.max(np.diff(np.append(chainage, 100.0))) <= 0.5 + 1e-9
    assert np.all(np.diff(chainage) > 0)
    for place in (0.0, 30.0, 50.0, 80.0, 12.3, 2.5, 77.5, 97.5):
        assert np.min(np.abs(chainage - place)) < 1e-9
    assert len(pit.stations.xy) == len(pit.stations.normal) == len(pit.stations.supports) == len(chainage)


def test_distances_to_the_corners_and_their_angles():
    stations = found(shape_of(ELL)).stations
    i = int(np.searchsorted(stations.chainage, 70.0))  # 10 m along the third side, 60 to 80
    assert (stations.to_start[i], stations.to_end[i], stations.side_length[i]) == (10.0, 10.0, 20.0)
    assert (stations.angle_start[i], stations.angle_end[i]) == (pytest.approx(90.0), pytest.approx(270.0))
    assert stations.to_corner[i] == 10.0


def test_a_corner_belongs_to_the_side_that_begins_there():
    stations = found(shape_of(rectangle())).stations
    i = int(np.searchsorted(stations.chainage, 30.0))
    assert (stations.side[i], stations.to_start[i], stations.to_end[i]) == (1, 0.0, 20.0)
    assert stations.normal[i] == pytest.approx([-1.0, 0.0])


def test_the_wall_opposite_of_an_l():
    stations = found(shape_of(ELL)).stations
    # from (10, 0) straight up to (10, 40); from (30, 0) to (30, 20)
    for chainage, distance, there in ((10.0, 40.0, 110.0), (30.0, 20.0, 70.0)):
        i = int(np.searchsorted(stations.chainage, chainage))
        assert stations.facing[i] == pytest.approx(distance)
        assert stations.facing_chainage[i] == pytest.approx(there)
        assert stations.facing_skew[i] == pytest.approx(0.0, abs=1e-6)
    assert not stations.facing_like[int(np.searchsorted(stations.chainage, 10.0))]  # 40 m faces 20 m


def test_the_wall_opposite_of_a_wedge_is_skew_by_its_angle():
    # north wall rises from y = 20 to y = 20 + 30 tan 10 degrees
    rise = 30.0 * np.tan(np.radians(10.0))
    stations = found(shape_of([(0.0, 0.0), (30.0, 0.0), (30.0, 20.0 + rise), (0.0, 20.0)])).stations
    i = int(np.searchsorted(stations.chainage, 15.0))
    assert stations.facing_skew[i] == pytest.approx(10.0)
    assert stations.facing[i] == pytest.approx(20.0 + rise / 2)
    assert not stations.facing_like[i]


def test_like_walls_face_each_other_until_kind_depth_or_load_differ():
    shape = shape_of(rectangle())
    assert np.all(found(shape).stations.facing_like)
    mixed = shape_of(rectangle(), [(0.0, 30.0, PANEL), (30.0, 100.0, PILES)])
    pit = found(mixed).stations
    assert not np.any(pit.facing_like[pit.side == 0])
    assert not np.any(pit.facing_like[pit.side == 2])
    assert np.all(pit.facing_like[pit.side == 1])
    loaded = found(shape, loads=(footing(box(90.0, 190.0, 50.0, 8.0), 20.0, "area"),)).stations
    assert not np.any(loaded.facing_like[loaded.side == 0])


def test_an_open_wall_faces_nothing_and_has_no_corner_at_its_ends():
    stations = found(shape_of([(0.0, 0.0), (25.0, 0.0), (25.0, 15.0)], closed=False)).stations
    i = int(np.searchsorted(stations.chainage, 5.0))
    assert np.isinf(stations.to_start[i])
    assert np.isnan(stations.angle_start[i])
    assert stations.to_end[i] == 20.0
    assert np.isinf(stations.facing[i])
    assert stations.chainage[-1] == 40.0
    assert stations.side[-1] == 1


def test_a_circle_is_one_side_that_faces_itself_across_its_diameter():
    theta = np.radians(np.arange(0.0, 360.0, 1.0))
    ring = [(12.0 * np.cos(t), 12.0 * np.sin(t)) for t in theta]
    circle = Circle(centre=(0.0, 0.0), radius=12.0, deviation=0.0, sides=None)
    stations = found(shape_of(ring, circle=circle)).stations
    assert stations.ring
    assert set(stations.side.tolist()) == {0}
    assert np.all(np.isinf(stations.to_corner))
    assert stations.facing == pytest.approx(24.0, rel=1e-3)
    assert stations.radius == pytest.approx(12.0)
    assert np.max(stations.facing_skew) < 1.1


def test_what_the_kind_of_wall_says_of_its_continuity():
    walls = [replace(PILES, kind=kind) for kind in ("contiguous", "king_post", "sheet", "secant")]
    walls += [replace(PANEL, continuity=c) for c in ("monolithic", "jointed", "unknown")]
    expected = {
        0: (True, False, True), 1: (True, False, True), 2: (True, False, False), 3: (False, False, False),
        4: (False, True, False), 5: (True, False, False), 6: (False, False, False),
    }  # fmt: skip
    for i, wall in enumerate(walls):
        stations = found(shape_of(rectangle(), [(0.0, 100.0, wall)])).stations
        assert (stations.jointed[0], stations.monolithic[0], stations.rows[0]) == expected[i]


def test_a_beam_along_the_wall_is_ruled_out_only_by_knowledge():
    plain = replace(PILES, capping_beam=False)
    none = [replace(s, waler=False) for s in first_pit_struts()]
    shape = shape_of(rectangle(), [(0.0, 100.0, plain)])
    assert not np.any(found(shape, supports=tuple(none)).stations.beam)
    assert np.all(found(shape, supports=first_pit_struts()).stations.beam)
    assert not np.any(found(shape).stations.beam)
    assert np.all(found(shape_of(rectangle())).stations.beam)


def test_rows_hold_the_stations_of_both_walls_they_tie():
    stations = found(shape_of(rectangle()), supports=first_pit_struts()).stations
    assert {held for held, side in zip(stations.supports, stations.side, strict=True) if side in (0, 2)} == {(0,)}
    assert {held for held, side in zip(stations.supports, stations.side, strict=True) if side in (1, 3)} == {(1,)}


def test_a_load_bears_on_the_walls_it_stands_behind_and_on_no_other():
    # footing behind the north-east corner, 1 m north and 1 m east of it: behind both walls
    load = footing(box(131.0, 221.0, 2.0, 2.0))
    stations = found(shape_of(rectangle()), loads=(load,)).stations
    loaded = stations.chainage[[bool(ids) for ids in stations.load_ids]]
    # by hand: 1 m behind each wall, ends 1 m past the corner: bears on the 2 x 1 - 1 = 1 m next to the corner
    assert loaded.min() == pytest.approx(49.0)
    assert loaded.max() == pytest.approx(51.0, abs=0.51)
    assert stations.surcharge.max() == 0.0


def test_a_load_more_than_two_depths_behind_does_not_bear():
    near = footing(box(110.0, 231.9, 5.0, 5.0), 20.0, "area")
    far = footing(box(110.0, 232.1, 5.0, 5.0), 20.0, "area")
    assert found(shape_of(rectangle()), loads=(near,)).stations.surcharge.max() == 20.0
    assert found(shape_of(rectangle()), loads=(far,)).stations.surcharge.max() == 0.0


def test_the_pit_itself_keeps_a_load_from_a_wall_behind_it():
    # a load beyond the east arm of a U-shaped pit bears on the arm's own wall, not on the wall across the arm
    u = [(0, 0), (30, 0), (30, 20), (20, 20), (20, 8), (10, 8), (10, 20), (0, 20)]
    load = footing(box(31.0, 12.0, 2.0, 4.0), 30.0, "area")
    stations = found(shape_of([(float(x), float(y)) for x, y in u]), loads=(load,), formation=-15.0).stations
    sides = {int(side) for side, ids in zip(stations.side, stations.load_ids, strict=True) if ids}
    assert sides == {1}


def test_loads_and_receptors_of_the_record():
    inside = footing(box(110.0, 205.0, 4.0, 4.0))
    line = Load(id="x", kind="line", value=40.0, points=((100.0, 225.0), (130.0, 225.0)), level=0.0)
    tunnel = Receptor(id="t", kind="tunnel", points=((90.0, 190.0), (140.0, 190.0)), level=-15.0)
    pit = found(shape_of(rectangle()), loads=(inside, line), receptors=(tunnel,))
    assert [(load.id, load.within_pit) for load in pit.pit.loads] == [("P1-load-1", True), ("P1-load-2", False)]
    assert pit.loads == {"P1-load-1": 0, "P1-load-2": 1}
    assert [(r.id, r.distance) for r in pit.pit.receptors] == [("P1-receptor-1", 10.0)]
    assert not any("P1-load-1" in ids for ids in pit.stations.load_ids)


@given(st.floats(0.0, 159.99), st.floats(0.05, 3.0))
def test_a_point_laid_on_the_wall_comes_back_to_its_chainage(chainage, inward):
    shape = shape_of(ELL)
    point = point_at(shape, np.array([chainage])) + inward * normal_at(shape, np.array([chainage]))
    found_at = locate(shape, point)
    side, place = side_of(find_sides(shape), np.array([chainage]))
    clear = min(place[0], find_sides(shape).length[side[0]] - place[0])
    if clear > inward:  # nearer a corner than its offset, the other wall may be nearer
        assert found_at.at[0] == pytest.approx(chainage, abs=1e-6)
        assert found_at.offset[0] == pytest.approx(inward, abs=1e-9)


def test_offsets_outside_are_negative_at_corners_too():
    shape = shape_of(ELL)
    offset = locate(shape, np.array([[-1.0, -1.0], [41.0, -1.0], [21.0, 21.0], [19.0, 19.0], [10.0, -2.0]])).offset
    assert (offset < 0).tolist() == [True, True, True, False, True]


def test_a_ray_meets_the_nearest_wall_and_a_vertex_counts():
    shape = shape_of(ELL)
    distance, at = cast(shape, np.array([[5.0, 5.0], [10.0, 30.0]]), np.array([[1.0, 0.0], [1.0, 0.0]]))
    assert distance == pytest.approx([35.0, 10.0])
    assert at == pytest.approx([45.0, 90.0])
    diagonal = np.array([[1.0, 1.0]]) / np.sqrt(2.0)
    assert cast(shape, np.array([[0.0, 0.0]]), diagonal)[0] == pytest.approx([np.hypot(20.0, 20.0)])


def test_normals_on_an_arc_are_radial():
    theta = np.radians(np.linspace(0.0, 180.0, 31))
    corners = [(10.0 * np.cos(t), 10.0 * np.sin(t)) for t in theta]
    shape = shape_of(corners)
    length = float(shape.at[-1])
    shape = replace(shape, arcs=(Arc(start=0.0, to=length, centre=(0.0, 0.0), radius=10.0, ccw=True),))
    chainage = np.array([1.3, 7.7])
    point = point_at(shape, chainage)
    expected = -point / np.hypot(*point.T)[:, None]
    assert normal_at(shape, chainage) == pytest.approx(expected)
    stations = found(shape).stations
    assert stations.radius[5] == 10.0
    assert np.isnan(stations.radius[-1])


def test_a_stretch_may_pass_the_start():
    chainage = np.array([0.0, 5.0, 50.0, 95.0])
    assert within(chainage, 90.0, 10.0, 100.0).tolist() == [True, True, False, True]
    assert within(chainage, 5.0, 50.0, 100.0).tolist() == [False, True, False, False]
    assert within(chainage, 0.0, 100.0, 100.0).all()


def test_a_strut_off_square_is_held_by_the_wall_it_meets():
    pit = found(shape_of(rectangle()), supports=(strut((110.0, 200.0), (115.0, 220.0)),))
    assert pit.rows[0].member.skew == pytest.approx(np.degrees(np.arctan(5.0 / 20.0)))
    assert station(pit, 10.0) in [i for i, held in enumerate(pit.stations.supports) if held]
