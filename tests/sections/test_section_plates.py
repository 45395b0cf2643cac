"""Slabs of a section: where they hold the wall and where an opening leaves it without one."""

from __future__ import annotations

import pytest
from builders_cut import make_cut
from pit_sites import box, found, rectangle, shape_of, site_of

from ingest.members import Material, Plate, Point
from ingest.trail import Source
from sections.section.plates import SlabParts, slab_parts

NAMES = {"left": "P1-wall-1", "right": "P1-wall-2"}
CONCRETE = Material(id="C30", kind="concrete", E=33e6, unit_weight=25.0)


def slab(*holes: tuple[Point, ...], material: str | None = "C30") -> SlabParts:
    plate = Plate(
        id="1", role="slab", outline=box(100.4, 200.4, 29.2, 19.2), holes=holes, top=-5.5, underside=-6.0,
        material=material, sources=(Source(file="a.ifc", item="slab"),),
    )  # fmt: skip
    site = site_of(plates=(plate,), materials=(CONCRETE,))
    pit = found(shape_of(rectangle()), plates=(plate,))
    return slab_parts(site, make_cut(pit, (115, 182), (115, 238), [15.0, 65.0]), NAMES)


def ends(parts: SlabParts) -> list[list[tuple[str, str]]]:
    return [[(end.to, end.joint) for end in member.ends] for member in parts.members]


def test_a_slab_from_wall_to_wall_props_both() -> None:
    parts = slab()
    assert ends(parts) == [[("P1-wall-1", "pinned"), ("P1-wall-2", "pinned")]]
    assert parts.members[0].section.EA_kN_per_m == pytest.approx(33e6 * 0.5)  # type: ignore[union-attr]
    assert parts.members[0].section.k_effective_kN_per_m_per_m == pytest.approx(33e6 * 0.5 / 19.2)  # type: ignore[union-attr]
    assert parts.actions == ()


def test_an_opening_that_touches_the_wall_leaves_it_without_a_prop_and_lists_the_edge_beam() -> None:
    parts = slab(box(112.0, 200.4, 6.0, 2.6))
    assert ends(parts) == [[("ground", "free"), ("P1-wall-2", "pinned")]]
    (action,) = parts.actions
    assert "6.00 m" in action.name
    assert "3.000 m2" in action.name  # w a^2/12, both ends fixed


def test_a_strip_too_narrow_between_wall_and_opening_is_no_prop() -> None:
    # 0.5 m of slab beside the wall, then an opening 0.3 m wide: neither strip may hold the wall.
    parts = slab(box(112.0, 200.9, 6.0, 0.3))
    assert ends(parts) == [[("ground", "free"), ("P1-wall-2", "pinned")]]
    assert len(parts.actions) == 1


def test_an_opening_in_the_middle_leaves_two_strips_with_an_end_on_nothing() -> None:
    parts = slab(box(112.0, 208.0, 6.0, 3.0))
    assert ends(parts) == [
        [("P1-wall-1", "pinned"), ("ground", "free")],
        [("ground", "free"), ("P1-wall-2", "pinned")],
    ]
    assert all(member.section.k_effective_kN_per_m_per_m is None for member in parts.members)  # type: ignore[union-attr]


def test_a_slab_of_unknown_modulus_says_that_its_stiffness_is_missing() -> None:
    parts = slab(material=None)
    assert [finding.code for finding in parts.findings] == ["slab_input_missing"]
