"""Rows of supports: hand-worked spacings, tributary widths, roles and ids."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from pit_sites import (
    CHS,
    anchor,
    box,
    first_pit_struts,
    found,
    rectangle,
    shape_of,
    strut,
)

from ingest.members import BarSection, Pile, Plate, Waler
from sections.model import Circle
from sections.pit.spacing import bay_spacings, regular_spacing, spacing_changes


def by_id(pit, name):
    return next(row for row in pit.rows if row.member.id == name)


def test_struts_of_the_first_pit_stand_in_two_rows_of_six_and_four_at_five_metres():
    # by hand: six at 5 m on a 30 m wall, 2.5 m to either end: each stands for 2.5 + 2.5 = 5.0 m
    pit = found(shape_of(rectangle()), supports=first_pit_struts())
    assert [row.member.id for row in pit.rows] == ["P1-strut-1", "P1-strut-2"]
    south, east = pit.rows
    assert (south.member.count, south.member.spacing, south.member.spacing_range) == (6, pytest.approx(5.0), None)
    assert (east.member.count, east.member.spacing, east.member.spacing_range) == (4, pytest.approx(5.0), None)
    for row in pit.rows:
        assert row.tributary_head == pytest.approx(5.0)
        assert row.tributary_far == pytest.approx(5.0)
        assert (row.member.inclination, row.member.skew, row.member.level) == (0.0, pytest.approx(0.0), -1.5)


def test_a_strut_between_two_walls_is_listed_once_with_both_its_ends():
    pit = found(shape_of(rectangle()), supports=first_pit_struts())
    head, far = pit.rows[0].member.along
    assert (head.pit, head.start, head.to, head.end) == ("P1", 2.5, 27.5, "head")
    # north wall runs from chainage 50 at its east end to 80: x = 127.5 is at 52.5, x = 102.5 at 77.5
    assert (far.pit, far.start, far.to, far.end) == ("P1", 52.5, 77.5, "far")
    assert len([m for m in pit.pit.members if m.role == "strut"]) == 2


def test_direction_of_drawing_makes_no_difference_and_is_recorded():
    struts = first_pit_struts()
    mixed = tuple(replace(s, head=s.far, far=s.head) if i % 2 else s for i, s in enumerate(struts))
    one, two = found(shape_of(rectangle()), supports=struts), found(shape_of(rectangle()), supports=mixed)
    assert [r.member for r in one.rows] == [r.member for r in two.rows]
    assert two.rows[0].turned is not None
    assert two.rows[0].turned.tolist() == [False, True, False, True, False, True]


def test_ends_at_the_inner_face_or_at_the_waler_count_as_meeting_the_wall():
    struts = [strut((x, 200.9), (x, 219.1), name=f"N{x}") for x in np.arange(102.5, 130.0, 5.0)]
    pit = found(shape_of(rectangle()), supports=tuple(struts))
    assert pit.rows[0].head_at == pytest.approx(np.arange(2.5, 30.0, 5.0))
    assert pit.rows[0].far_at == pytest.approx(np.arange(77.5, 50.0, -5.0))


def test_an_end_three_metres_short_of_the_wall_is_reported_and_not_used():
    pit = found(shape_of(rectangle()), supports=(strut((115.0, 205.0), (115.0, 215.0), name="S9"),))
    assert pit.rows == ()
    assert [finding.code for finding in pit.findings] == ["support-off-wall"]
    assert "S9" in pit.findings[0].text


def test_a_missing_strut_leaves_one_row_with_a_range_of_widths():
    # by hand: struts at 2.5, 7.5, 17.5, 22.5, 27.5: the neighbours of the gap stand for 2.5 + 5.0 = 7.5 m
    struts = [s for s in first_pit_struts() if s.name.startswith("N") and s.name != "N112.5"]
    pit = found(shape_of(rectangle()), supports=tuple(struts))
    row = pit.rows[0]
    assert row.member.count == 5
    assert row.member.spacing == pytest.approx(5.0)
    assert row.tributary_head == pytest.approx([5.0, 7.5, 7.5, 5.0, 5.0])
    assert row.member.spacing_range == pytest.approx((5.0, 7.5))


def test_an_end_strut_stands_for_half_the_gap_and_all_the_wall_up_to_its_end():
    # by hand: struts at 4, 9, 14, 19, 24 on 30 m: first 4 + 2.5 = 6.5, last 2.5 + 6 = 8.5
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in (4.0, 9.0, 14.0, 19.0, 24.0)]
    pit = found(shape_of(rectangle()), supports=tuple(struts))
    assert pit.rows[0].tributary_head == pytest.approx([6.5, 5.0, 5.0, 5.0, 8.5])
    assert float(np.sum(pit.rows[0].tributary_head)) == pytest.approx(30.0)


def test_where_the_spacing_changes_one_row_ends_and_another_begins():
    # five gaps of 4.5 m, then four of 6.0 m, on a 60 m wall
    places = np.cumsum([6.75, 4.5, 4.5, 4.5, 4.5, 4.5, 6.0, 6.0, 6.0, 6.0])
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in places]
    pit = found(shape_of(rectangle(60.0)), supports=tuple(struts))
    assert [row.member.count for row in pit.rows] == [6, 4]
    assert [row.member.spacing for row in pit.rows] == [pytest.approx(4.5), pytest.approx(6.0)]
    # the strut at the change stands for 2.25 + 3.0 m
    assert pit.rows[0].tributary_head[-1] == pytest.approx(5.25)


def test_duplicates_are_counted_once_and_keep_their_sources():
    struts = first_pit_struts()
    again = tuple(
        replace(s, head=s.far, far=s.head, sources=(replace(s.sources[0], item=s.name + "b"),)) for s in struts
    )
    pit = found(shape_of(rectangle()), supports=struts + again)
    assert [row.member.count for row in pit.rows] == [6, 4]
    assert len(pit.rows[0].member.sources) == 12
    assert [f.code for f in pit.findings] == ["support-twice"]


def test_levels_sections_and_skews_that_differ_make_rows_of_their_own():
    shape = shape_of(rectangle())
    upper = [strut((x, 200.0), (x, 220.0), -1.5) for x in (105.0, 115.0, 125.0)]
    lower = [strut((x, 200.0), (x, 220.0), -4.0) for x in (105.0, 115.0, 125.0)]
    heavy = BarSection(designation="CHS 610x20")
    other = [strut((x, 200.0), (x, 220.0), -1.5, section=heavy) for x in (110.0, 120.0)]
    pit = found(shape, supports=(*upper, *lower, *other))
    assert [(r.member.count, r.member.level) for r in pit.rows] == [(3, -1.5), (3, -4.0), (2, -1.5)]
    skewed = found(shape, supports=(*upper, strut((107.0, 200.0), (112.0, 220.0))))
    # by hand: 5 m along for 20 m across: atan(0.25) = 14.04 degrees
    assert sorted(r.member.skew for r in skewed.rows) == pytest.approx([0.0, 14.0362], abs=1e-3)


def test_a_strut_across_an_inside_corner_is_a_corner_strut_whatever_it_was_drawn_as():
    # 4 m either way from the south-west corner: 45 degrees, each wall
    pit = found(shape_of(rectangle()), supports=(strut((104.0, 200.0), (100.0, 204.0)),))
    row = pit.rows[0]
    assert row.member.role == "corner_strut"
    assert row.member.id == "P1-corner_strut-1"
    assert row.head_at == pytest.approx([4.0])
    assert row.far_at == pytest.approx([96.0])
    assert row.member.skew == pytest.approx(45.0)
    assert any(f.code == "read-as-corner_strut" for f in pit.findings)


def test_a_corner_strut_drawn_to_the_inner_faces_lies_on_the_right_walls():
    # faces 0.6 m inside; 1.0 m from the corner the nearer wall is not always the one it bears on
    pit = found(shape_of(rectangle()), supports=(strut((101.6, 200.6), (100.6, 201.6)),))
    assert pit.rows[0].member.role == "corner_strut"
    assert pit.rows[0].head_at == pytest.approx([1.6])
    assert pit.rows[0].far_at == pytest.approx([98.4])


def test_a_strut_across_a_re_entrant_corner_lies_in_the_ground_and_bears_on_nothing():
    ell = [(0.0, 0.0), (40.0, 0.0), (40.0, 20.0), (20.0, 20.0), (20.0, 40.0), (0.0, 40.0)]
    pit = found(shape_of(ell), supports=(strut((10.0, 0.0), (10.0, 40.0)), strut((0.0, 30.0), (20.0, 30.0))))
    assert [row.member.role for row in pit.rows] == ["strut", "strut"]


def test_a_strut_that_falls_to_the_floor_is_a_raker():
    # by hand: 5 m across, 4.5 m down: atan(0.9) = 41.987 degrees
    raker = replace(strut((115.0, 200.0), (115.0, 205.0), -1.5), far=(115.0, 205.0, -6.0))
    pit = found(shape_of(rectangle()), supports=(raker,))
    assert pit.rows[0].member.role == "raker"
    assert pit.rows[0].member.inclination == pytest.approx(41.987, abs=1e-3)
    assert np.isnan(pit.rows[0].far_at[0])
    assert len(pit.rows[0].member.along) == 1


def test_anchors_behind_the_wall_stand_in_rows_downwards():
    anchors = [
        anchor((100.0 + x, 200.0), (0.0, 1.0), level, free_length=8.0, bond_length=6.0)
        for level in (-2.0, -4.5)
        for x in np.arange(1.5, 30.0, 3.0)
    ]
    pit = found(shape_of(rectangle()), supports=tuple(anchors[::-1]))
    assert [(r.member.id, r.member.level, r.member.count) for r in pit.rows] == [
        ("P1-anchor-1", -2.0, 10),
        ("P1-anchor-2", -4.5, 10),
    ]
    for row in pit.rows:
        assert row.member.spacing == pytest.approx(3.0)
        assert row.tributary_head == pytest.approx(3.0)
        assert row.member.inclination == pytest.approx(20.0)
        assert (row.member.free_length, row.member.bond_length) == (8.0, 6.0)
        assert np.all(np.isnan(row.far_at))


def test_a_member_drawn_as_strut_behind_the_wall_is_asked_about():
    wrong = replace(anchor((115.0, 200.0), (0.0, 1.0), -2.0), role="strut")
    pit = found(shape_of(rectangle()), supports=(wrong,))
    assert pit.rows[0].member.role == "anchor"
    assert len(pit.questions) == 1
    assert pit.questions[0].readings[0].reading == "anchor"


def test_anchors_round_a_ring_have_one_spacing_and_the_whole_ring():
    radius, n = 10.0, 24
    theta = np.radians(np.arange(0.0, 360.0, 1.0))
    ring = [(radius * np.cos(t), radius * np.sin(t)) for t in theta]
    circle = Circle(centre=(0.0, 0.0), radius=radius, deviation=0.0, sides=None)
    shape = shape_of(ring, circle=circle)
    heads = np.radians(np.arange(n) * 360.0 / n + 5.0)
    anchors = [anchor((radius * np.cos(t), radius * np.sin(t)), (-np.cos(t), -np.sin(t)), -3.0) for t in heads]
    pit = found(shape, supports=tuple(anchors))
    assert len(pit.rows) == 1
    member = pit.rows[0].member
    assert member.count == n
    # arc length 2 pi R / n = 2.618 m, along chords a little less
    assert member.spacing == pytest.approx(shape.length / n, rel=1e-4)
    assert (member.along[0].start, member.along[0].to) == (0.0, shape.length)
    assert pit.rows[0].tributary_head == pytest.approx(shape.length / n, rel=1e-4)


def test_corner_strut_and_cross_struts_of_one_level_share_the_wall_between_them():
    # corner strut at 3 m, cross struts at 8, 13, 18, 23, 27: the corner strut stands for 3 + 2.5 m
    struts = [strut((100.0 + x, 200.0), (100.0 + x, 220.0)) for x in (8.0, 13.0, 18.0, 23.0)]
    corner = strut((103.0, 200.0), (100.0, 203.0))
    pit = found(shape_of(rectangle()), supports=(*struts, corner))
    rows = {row.member.role: row for row in pit.rows}
    assert rows["corner_strut"].tributary_head == pytest.approx([5.5])
    assert rows["strut"].tributary_head == pytest.approx([5.0, 5.0, 5.0, 9.5])


def test_pairs_of_anchors_are_a_regular_pattern():
    gaps = np.array([1.0, 3.0, 1.0, 3.0, 1.0, 3.0])
    assert bay_spacings(gaps, 0.1) == pytest.approx(2.0)
    assert regular_spacing(gaps, 0.1) == pytest.approx(2.0)
    assert spacing_changes(gaps, 0.1) == ()


def test_one_odd_gap_does_not_part_a_row_but_another_regular_spacing_does():
    assert spacing_changes(np.array([5.0, 5.0, 9.0, 5.0, 5.0]), 0.1) == ()
    assert spacing_changes(np.array([4.5, 4.5, 4.5, 6.0, 6.0]), 0.1) == (3,)
    assert regular_spacing(np.array([5.0, 5.02, 4.98, 10.0, 5.0]), 0.1) == pytest.approx(5.0)
    assert regular_spacing(np.array([]), 0.1) is None


def test_a_drawn_waler_carries_the_row_at_its_level_and_no_other():
    points = ((100.4, 200.4), (129.6, 200.4), (129.6, 219.6), (100.4, 219.6), (100.4, 200.4))
    struts = first_pit_struts()
    lower = tuple(replace(s, head=(*s.head[:2], -4.0), far=(*s.far[:2], -4.0), name=s.name + "L") for s in struts)
    pit = found(shape_of(rectangle()), supports=struts + lower, walers=(Waler(id="", points=points, level=-1.5),))
    assert {row.member.level: row.waler for row in pit.rows} == {-1.5: True, -4.0: None}
    walers = [m for m in pit.pit.members if m.role == "waler"]
    assert [(w.id, w.count, w.along[0].start, w.along[0].to) for w in walers] == [("P1-waler-1", 1, 0.0, 100.0)]


def test_bearing_piles_and_slabs_within_the_pit_are_members_and_wall_piles_are_not():
    inside = [Pile(id="", centre=(105.0 + 3 * i, 210.0), diameter=0.9, bearing=True, toe=-20.0) for i in range(5)]
    outside = Pile(id="", centre=(150.0, 210.0), diameter=0.9, bearing=True, toe=-20.0)
    slab = Plate(id="", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), underside=-6.0)
    pit = found(shape_of(rectangle()), piles=(*inside, outside), plates=(slab,))
    members = {member.role: member for member in pit.pit.members}
    assert (members["bearing_pile"].count, members["bearing_pile"].spacing) == (5, pytest.approx(3.0))
    assert members["slab"].along[0].to - members["slab"].along[0].start == pytest.approx(100.0)


def test_supports_without_level_or_section_keep_their_gap_in_the_record():
    bare = strut((115.0, 200.0), (115.0, 220.0), section=None, level_given=False, inclination_given=False)
    member = found(shape_of(rectangle()), supports=(bare,)).rows[0].member
    assert (member.level, member.inclination, member.spacing) == (None, None, None)


def test_struts_of_two_pits_that_share_a_wall_go_each_to_its_own_pit():
    from pit_sites import site_of

    from sections.pit.find import describe_pits

    west, east = shape_of(rectangle(20.0, 20.0)), shape_of(rectangle(20.0, 20.0, west=120.0), pit="P2")
    struts = (strut((100.0, 210.0), (120.0, 210.0)), strut((120.0, 210.0), (140.0, 210.0)))
    one, two = describe_pits(site_of(supports=struts), (west, east))
    assert [len(pit.rows) for pit in (one, two)] == [1, 1]
    assert (one.rows[0].supports, two.rows[0].supports) == ((0,), (1,))
    assert one.pit.neighbours[0].distance == 0.0
    assert one.pit.neighbours[0].interacts
    assert CHS.designation == "CHS 508x16"
