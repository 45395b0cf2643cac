"""What is found does not change when the site is moved, turned, reordered, or its members drawn twice."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pit_sites import PANEL, PILES, anchor, box, footing, found, moved, moved_support, shape_of, strut

from ingest.members import Support
from ingest.model import Frame
from sections.found import FoundPit

ELL = [(0.0, 0.0), (40.0, 0.0), (40.0, 18.0), (22.0, 18.0), (22.0, 36.0), (0.0, 36.0)]


def supports_of_the_l() -> list[Support]:
    struts = [strut((x, 0.0), (x, 18.0), -2.0) for x in (26.0, 30.5, 35.0)]
    struts += [strut((x, 0.0), (x, 36.0), -2.0) for x in (3.0, 8.0, 13.0)]
    struts += [strut((0.0, y), (22.0, y), -3.5) for y in (21.0, 26.0, 31.0)]
    struts.append(strut((3.5, 0.0), (0.0, 3.5), -3.5))
    anchors = [anchor((x, 36.0), (0.0, -1.0), -1.0) for x in (2.0, 5.0, 8.0, 14.0, 17.0, 20.0)]
    return struts + anchors


RUNS = [(0.0, 31.0, PILES), (31.0, 148.0, replace(PANEL, toe=-14.0)), (148.0, 152.0, PILES)]


def looks(pit: FoundPit) -> list[tuple[object, ...]]:
    """Rows without ids and chainages: what an engineer would list of them."""
    rows = []
    for row in pit.rows:
        m = row.member
        # which end is called the head hangs on where chainage starts
        both = (row.tributary_head, row.tributary_far)
        widths = tuple(sorted(tuple(np.sort(np.round(w, 4)).tolist()) for w in both if not np.isnan(w).any()))
        spacing = None if m.spacing is None else round(m.spacing, 4)
        rows.append((m.role, m.count, spacing, round(m.level, 4), round(m.inclination, 3), round(m.skew, 3), widths))
    return sorted(rows, key=str)


def lengths(pit: FoundPit) -> list[float]:
    return sorted(round((z.to - z.start) % pit.shape.length, 3) for z in pit.pit.zones)


def reasons(pit: FoundPit) -> list[str]:
    return sorted(z.ended_by for z in pit.pit.zones)


LOAD = footing(box(44.0, 5.0, 3.0, 3.0))


def base() -> FoundPit:
    return found(shape_of(ELL, RUNS), supports=tuple(supports_of_the_l()), loads=(LOAD,))


@settings(max_examples=20, deadline=None)
@given(st.floats(0, 360), st.floats(-6e3, 6e3), st.floats(-6e3, 6e3))
def test_rows_and_zones_do_not_change_when_the_site_is_turned_and_shifted(angle, east, north):
    shift = (east, north)
    turned = found(
        shape_of(moved(ELL, angle, shift), RUNS),
        supports=tuple(moved_support(s, angle, shift) for s in supports_of_the_l()),
        loads=(replace(LOAD, points=tuple(moved(LOAD.points, angle, shift))),),
    )
    plain = base()
    assert looks(turned) == looks(plain)
    assert lengths(turned) == pytest.approx(lengths(plain), abs=2e-3)
    assert reasons(turned) == reasons(plain)
    assert turned.stations.facing == pytest.approx(plain.stations.facing, rel=1e-6, abs=1e-5)


@settings(max_examples=20, deadline=None)
@given(st.permutations(range(len(supports_of_the_l()))), st.integers(0, 2**16 - 1))
def test_order_and_direction_of_drawing_do_not_matter(order, flips):
    members = supports_of_the_l()
    drawn = [members[i] for i in order]
    drawn = [
        replace(s, head=s.far, far=s.head) if s.role == "strut" and flips >> i & 1 else s for i, s in enumerate(drawn)
    ]
    shuffled = found(shape_of(ELL, RUNS), supports=tuple(drawn), loads=(LOAD,))
    plain = base()
    assert [row.member for row in shuffled.rows] == [row.member for row in plain.rows]
    assert shuffled.pit.zones == plain.pit.zones
    assert shuffled.pit.symmetry == plain.pit.symmetry


@settings(max_examples=15, deadline=None)
@given(st.sets(st.integers(0, len(supports_of_the_l()) - 1)), st.floats(0, 0.02))
def test_members_drawn_twice_count_once(twice, slip):
    members = supports_of_the_l()
    copies = [replace(members[i], head=(members[i].head[0] + slip, *members[i].head[1:])) for i in sorted(twice)]
    doubled = found(shape_of(ELL, RUNS), supports=(*members, *copies), loads=(LOAD,))
    assert [(r.member.role, r.member.count) for r in doubled.rows] == [
        (r.member.role, r.member.count) for r in base().rows
    ]


@settings(max_examples=20, deadline=None)
@given(st.integers(0, 5))
def test_the_start_of_chainage_does_not_matter(first):
    corners = ELL[first:] + ELL[:first]
    offset = float(shape_of(ELL).at[first])
    runs = [(round((a - offset) % 152.0, 6), round((b - offset) % 152.0, 6), w) for a, b, w in RUNS]
    other = found(shape_of(corners, runs), supports=tuple(supports_of_the_l()), loads=(LOAD,))
    assert looks(other) == looks(base())
    assert lengths(other) == pytest.approx(lengths(base()), abs=2e-3)
    assert reasons(other) == reasons(base())


@settings(max_examples=10, deadline=None)
@given(st.floats(-180, 180), st.floats(-1e6, 1e6), st.floats(-1e6, 1e6))
def test_the_record_is_in_world_coordinates(angle, east, north):
    frame = Frame(offset=(east, north, 0.0), rotation_deg=angle)
    pit = found(shape_of(ELL, RUNS), supports=tuple(supports_of_the_l()), loads=(LOAD,), frame=frame).pit
    assert np.array(pit.perimeter) == pytest.approx(np.array(moved(ELL, angle, (east, north))), abs=1e-6)
    assert np.array(pit.loads[0].points) == pytest.approx(np.array(moved(LOAD.points, angle, (east, north))), abs=1e-6)
    assert pit.corners[0].point == pytest.approx(pit.perimeter[0])
    assert pit.length == 152.0


def test_equal_input_gives_equal_output():
    one, two = base(), base()
    assert one.pit == two.pit
    assert np.array_equal(one.stations.facing, two.stations.facing)
