"""King posts drawn by their outline: the section their block is named after, and materials a model names."""

from __future__ import annotations

from math import cos, pi, radians, sin
from pathlib import Path

import pytest
from site_builder import brief_of, part, parts_of

from ingest.members import BarSection, Point3
from ingest.model import Site
from ingest.parts import Part
from ingest.site import site_of

# UC 305x305x118: 314.5 mm deep, 307.4 mm wide (BS 4-1, recalled).
DEEP, WIDE = 0.3145, 0.3074


def post(x: float, *, turn: float = 0.0, size: float = 1.0, name: str = "UC 305x305x118") -> Part:
    c, s = cos(radians(turn)), sin(radians(turn))
    corners = [(sx * WIDE / 2 * size, sy * DEEP / 2 * size) for sx, sy in ((-1, -1), (1, -1), (1, 1), (-1, 1))]
    ring: tuple[Point3, ...] = tuple((x + c * u - s * v, s * u + c * v, 0.0) for u, v in corners)
    return part("outline", *ring, item=f"P{x:g}", layer="KING-POSTS", name=name, closed=True)


def read(tmp_path: Path, *posts: Part) -> Site:
    brief = brief_of(tmp_path, "[levels]\ntop = 0.0\n[[walls]]\ntoe = -9.0\n")
    return site_of([parts_of(*posts)], brief)


@pytest.mark.parametrize("turn", [0.0, 25.0, 90.0])
def test_a_post_however_turned_is_the_section_its_block_is_named_after(tmp_path: Path, turn: float) -> None:
    site = read(tmp_path, *(post(2.4 * n, turn=turn) for n in range(6)))
    assert len(site.piles) == 6
    for pile in site.piles:
        assert pile.section is not None
        assert pile.section.designation == "UC 305x305x118"
        assert pytest.approx(150.2e-4, rel=0.005) == pile.section.A  # handbook tables, recalled
    assert "post-section" in {assumption.code for assumption in site.assumptions}


def test_a_post_drawn_at_another_size_is_not_what_its_block_is_named(tmp_path: Path) -> None:
    site = read(tmp_path, *(post(2.4 * n, size=1.3) for n in range(6)))
    sections = [pile.section for pile in site.piles]
    assert {(s.designation, s.A) for s in sections if s} == {("as drawn", None)}
    assert [s.width for s in sections if s] == pytest.approx([WIDE * 1.3] * 6)
    assert "post-size" in {finding.code for finding in site.findings}


def test_a_name_that_is_no_section_says_nothing(tmp_path: Path) -> None:
    site = read(tmp_path, *(post(2.4 * n, name="POST-TYPE-A") for n in range(6)))
    assert {pile.section.designation for pile in site.piles if pile.section} == {"as drawn"}
    assert not [finding for finding in site.findings if finding.code == "post-size"]


def test_lagging_between_posts_asks_for_no_toe(tmp_path: Path) -> None:
    lagging = part("path", (0.0, 0.0, 0.0), (12.0, 0.0, 0.0), item="L1", layer="LAGGING")
    brief = '[levels]\ntop = 0.0\n[[walls]]\nmatch = { layer = "KING-POSTS" }\ntoe = -9.0\n'
    posts = [post(2.4 * n) for n in range(6)]
    site = site_of([parts_of(lagging, *posts)], brief_of(tmp_path, brief))
    assert not [question for question in site.questions if "toe" in question.about]


def test_a_slab_is_of_the_material_the_model_names_where_the_brief_describes_it(tmp_path: Path) -> None:
    ring = ((0.0, 0.0, 0.0), (6.0, 0.0, 0.0), (6.0, 4.0, 0.0), (0.0, 4.0, 0.0))
    slabs = [
        part("prism", *ring, item=f"S{n}", layer="SLAB", material=name, z_bottom=-1.0 - n, z_top=-0.5 - n)
        for n, name in enumerate(("c32/40", "C16/20"))
    ]
    brief = '[[materials]]\nid = "C32/40"\nkind = "concrete"\nconcrete_class = "C32/40"\n'
    site = site_of([parts_of(*slabs)], brief_of(tmp_path, brief))
    assert sorted((plate.underside, plate.material) for plate in site.plates) == [(-2.0, None), (-1.0, "C32/40")]


def test_a_waler_has_the_stiffness_of_its_section(tmp_path: Path) -> None:
    tube = BarSection(designation="CHS 508x16", A=pi * (0.508**2 - 0.476**2) / 4)
    ends = ((0.0, 0.0, -1.0), (9.0, 0.0, -1.0))
    made = [part("bar", *ends, layer="WALER", section=tube, material="plain steel")]
    brief = '[[materials]]\nid = "plain steel"\nkind = "steel"\nE = 200e6\n'
    site = site_of([parts_of(*made)], brief_of(tmp_path, brief))
    (waler,) = site.walers
    assert (waler.material, waler.level) == ("plain steel", -1.0)
    assert pytest.approx(200e6 * 0.02473061737) == waler.EA  # pi (D^2 - d^2)/4
