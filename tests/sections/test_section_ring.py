"""An axisymmetric section: what goes round the ring, what does not, and that it sums to the real ring."""

from __future__ import annotations

from math import cos, pi, radians, sin

import pytest
from builders_cut import make_cut
from pit_sites import anchor, found, shape_of, site_of, strut

from ingest.members import Load, Material, Point
from sections.model import Circle, Structural, Wall
from sections.section.cut import Cut
from sections.section.parts import SectionParts
from sections.section.ring import ring_parts

R, CENTRE = 10.0, (50.0, 50.0)
CONCRETE = Material(id="C30", kind="concrete", E=33e6, unit_weight=25.0)
PILES = Wall(
    kind="contiguous", count=60, centres=2 * R * sin(pi / 60), diameter=0.9, top=0.0, toe=-14.0, material="C30",
    structural=Structural(which="all", count=60, spacing=2 * R * sin(pi / 60)),
)  # fmt: skip


def on_ring(degrees: float, radius: float = R) -> Point:
    return CENTRE[0] + radius * cos(radians(degrees)), CENTRE[1] + radius * sin(radians(degrees))


def ring(wall: Wall = PILES, **more: object) -> tuple[Cut, SectionParts]:
    corners = [on_ring(a) for a in range(0, 360, 3)]
    circle = Circle(centre=CENTRE, radius=R, deviation=0.0, sides=None)
    site = site_of(materials=(CONCRETE,), **more)
    shape = shape_of(corners, [(0.0, 2 * 120 * R * sin(radians(1.5)), wall)], circle=circle)
    pit = found(shape, materials=(CONCRETE,), **more)
    cut = make_cut(pit, CENTRE, on_ring(0.0, 40.0), [0.0], kind="axisymmetric")
    return cut, ring_parts(site, cut, "P1-wall-1")


def anchors(degrees: list[float], **more: object) -> tuple[object, ...]:
    made = []
    for a in degrees:
        inward = (-cos(radians(a)), -sin(radians(a)))
        made.append(anchor(on_ring(a), inward, -3.0, length=15.0, EA=1e5, preload=400.0, **more))
    return tuple(made)


def test_the_piles_of_the_ring_sum_to_the_ring() -> None:
    _, parts = ring()
    wall = parts.members[0]
    assert 2 * pi * R * wall.section.EA_vertical_kN_per_m == pytest.approx(60 * 33e6 * pi * 0.81 / 4, rel=1e-9)  # type: ignore[union-attr,operator]
    assert wall.section.EA_hoop_kN_per_m == 0.0  # type: ignore[union-attr]


def test_a_ring_wall_without_a_factor_on_its_stiffness_says_that_it_is_uncracked() -> None:
    _, parts = ring()
    assert [one.code for one in parts.assumptions] == ["uncracked_wall"]
    assert parts.members[0].assumptions == ("P1-wall-1-EI",)


def test_anchors_all_round_sum_to_the_ring_and_are_drawn_by_their_free_length() -> None:
    _, parts = ring(supports=anchors([a + 0.5 for a in range(0, 360, 15)], free_length=9.0, bond_length=6.0))
    member = parts.members[1]
    assert 2 * pi * member.section.EA_kN_per_rad == pytest.approx(24 * 1e5, rel=1e-3)  # type: ignore[union-attr,operator]
    (x1, z1), (x2, z2) = member.points
    assert x2 - x1 == pytest.approx(9.0 * cos(radians(20.0)), abs=0.01)
    assert z1 - z2 == pytest.approx(9.0 * sin(radians(20.0)), abs=0.01)
    assert [f.code for f in parts.findings] == ["bond_not_drawn"]


def test_anchors_along_a_part_of_the_ring_are_not_spread_round_it() -> None:
    _, parts = ring(supports=anchors([a + 0.5 for a in range(0, 120, 15)]))
    assert len(parts.members) == 1
    assert [f.code for f in parts.findings] == ["not_axisymmetric"]


def test_a_pair_of_struts_beside_the_axis_counts_by_its_cosine_and_asks_for_two_runs() -> None:
    chords = [strut(on_ring(90.0 + turn), on_ring(270.0 - turn), EA=5e6, role="strut") for turn in (-36.87, 36.87)]
    _, parts = ring(supports=tuple(chords))
    member = parts.members[1]
    # 6 m beside the axis of a ring of 10 m: cosine 0.8.
    assert member.section.radial_stiffness_kN_per_m_per_rad == pytest.approx(2 * 5e6 / (pi * R) * 0.8, rel=1e-3)  # type: ignore[union-attr]
    assert [f.code for f in parts.findings] == ["two_runs"]


def test_a_line_load_along_the_ring_stays_a_line_load() -> None:
    # 40 kN/m on a chord 14 m from the axis.
    line = Load(id="", kind="line", value=40.0, points=((64.0, 47.0), (64.0, 53.0)), level=0.0)
    _, parts = ring(loads=(line,))
    (load,) = parts.loads
    assert load.section.unit == "kN/m"
    assert load.section.value == 40.0
    mean = next(a.value for a in load.alternatives if a.name == "total_kept")
    r = load.at[0][0]
    assert mean == pytest.approx(40.0 * 6.0 / (2 * pi * r))


def test_a_line_load_that_runs_out_from_the_ring_is_left_to_the_engineer() -> None:
    line = Load(id="", kind="line", value=40.0, points=((62.0, 50.0), (68.0, 50.2)), level=0.0)
    _, parts = ring(loads=(line,))
    assert parts.loads[0].section.value is None
    assert [f.code for f in parts.findings] == ["load_not_assessed"]
