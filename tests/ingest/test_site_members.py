"""Walls, piles and supports of a site: from parts and brief to records."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import pytest
from site_builder import WALL, brief_of, drawn_as, part, parts_of, wall_line

from ingest.brief import Brief
from ingest.errors import InputError
from ingest.site import site_of
from ingest.trail import Source


def test_an_anchor_runs_its_free_and_bond_length_down_its_inclination(tmp_path: Path) -> None:
    line = part("path", (10.0, 14.0, 0.0), (10.0, 0.0, 0.0), layer="ANCHORS", item="a")
    text = (
        "[[supports]]\nmatch = { layer = 'ANCHORS' }\nlevel = -2.0\ninclination = 30.0\nfree_length = 8.0\n"
        "bond_length = 6.0\npreload = 350.0\n"
    )
    site = site_of([parts_of(WALL, line)], brief_of(tmp_path, text))
    (anchor,) = site.supports
    assert anchor.head == (10.0, 0.0, -2.0)
    # 14 m at 30 degrees: 14 cos 30 = 12.1244 m on plan, 14 sin 30 = 7 m down
    assert anchor.far == pytest.approx((10.0, 12.124356, -9.0))
    assert [finding.code for finding in site.findings] == ["anchor-length"]  # drawn 14.00 m long


def test_an_anchor_without_inclination_says_so() -> None:
    line = part("path", (10.0, 0.0, 0.0), (10.0, 14.0, 0.0), layer="ANCHORS", item="a")
    site = site_of([parts_of(WALL, line)], Brief())
    assert not site.supports[0].inclination_given
    assert any("inclination" in question.about for question in site.questions)


def test_a_raker_goes_down_from_the_wall(tmp_path: Path) -> None:
    line = part("path", (10.0, 6.0, 0.0), (10.0, 0.0, 0.0), layer="RAKERS", item="r")
    brief = brief_of(tmp_path, "[[supports]]\nmatch = { layer = 'RAKERS' }\nlevel = -1.0\ninclination = 45.0\n")
    (raker,) = site_of([parts_of(WALL, line)], brief).supports
    assert raker.head == (10.0, 0.0, -1.0)
    assert raker.far == pytest.approx((10.0, 6.0, -7.0))


def test_a_strut_drawn_once_for_two_levels_is_two_struts(tmp_path: Path) -> None:
    line = part("path", (10.0, 0.0, 0.0), (10.0, 20.0, 0.0), layer="STRUTS", item="s")
    text = "".join(
        f"[[supports]]\nmatch = {{ layer = 'STRUTS' }}\nlevel = {z}\nEA = {EA}\n"
        for z, EA in ((-1.5, 1e6), (-5.0, 2e6))
    )
    site = site_of([parts_of(line)], brief_of(tmp_path, text + "[[supports]]\nthermal_range = 15.0\n"))
    assert sorted((s.head[2], s.EA, s.thermal_range) for s in site.supports) == [(-5.0, 2e6, 15.0), (-1.5, 1e6, 15.0)]
    assert site.ledger["a.dxf"].used == 1


def test_a_strut_drawn_by_its_outline_has_its_axis(tmp_path: Path) -> None:
    ring = ((9.75, 0.0, 0.0), (10.25, 0.0, 0.0), (10.25, 20.0, 0.0), (9.75, 20.0, 0.0))
    site = site_of([parts_of(part("path", *ring, closed=True, layer="STRUTS"))], Brief())
    assert (site.supports[0].head[:2], site.supports[0].far[:2]) == ((10.0, 0.0), (10.0, 20.0))


@pytest.mark.parametrize(("role", "preload"), [("strut", 200.0), ("raker", 10.0), ("anchor", -300.0)])
def test_a_preload_of_the_wrong_sign_is_refused_with_its_line(tmp_path: Path, role: str, preload: float) -> None:
    line = part("path", (10.0, 0.0, 0.0), (10.0, 14.0, 0.0), layer="M", item="a")
    brief = brief_of(tmp_path, f"[[supports]]\nmatch = {{ layer = 'M' }}\nrole = '{role}'\npreload = {preload}\n")
    with pytest.raises(InputError) as caught:
        site_of([parts_of(WALL, line)], brief)
    assert caught.value.place == "line 4, supports[1].preload"
    assert f"{preload:g} kN" in caught.value.problem


@pytest.mark.parametrize(
    ("text", "place", "words"),
    [
        ("[[supports]]\nsection = 'HEB 301'\n", "line 2", "HEB 300"),
        ("[[materials]]\nid = 'c'\nkind = 'concrete'\nconcrete_class = 'C31/37'\n", "line 4", "C30/37"),
        ("[[walls]]\ntoe = 5.0\n[levels]\ntop = 1.0\n", "line 2", "5 m"),
    ],
)
def test_what_the_brief_says_of_sections_classes_and_levels_must_be_known(
    tmp_path: Path, text: str, place: str, words: str
) -> None:
    line = part("path", (10.0, 0.0, 0.0), (10.0, 14.0, 0.0), layer="STRUTS", item="a")
    with pytest.raises(InputError) as caught:
        site_of([parts_of(WALL, line)], brief_of(tmp_path, text))
    assert caught.value.place.startswith(place)
    assert words in str(caught.value)


def test_a_wall_drawn_as_a_slender_outline_has_axis_and_thickness() -> None:
    ring = ((0.0, 0.0, 0.0), (20.0, 0.0, 0.0), (20.0, 0.8, 0.0), (0.0, 0.8, 0.0))
    (wall,) = site_of([parts_of(part("outline", *ring, layer="DIAPHRAGM WALL"))], Brief()).walls
    assert [*wall.axis] == [pytest.approx((0.0, 0.4)), pytest.approx((20.0, 0.4))]
    assert wall.thickness == pytest.approx(0.8)
    assert wall.kind == "diaphragm"


def test_a_toe_that_only_the_model_has_and_cannot_be_is_not_taken(tmp_path: Path) -> None:
    wall = replace(WALL, z_bottom=-2.0, z_top=3.0)
    site = site_of([parts_of(wall)], brief_of(tmp_path, "[levels]\ntop = -5.0\n"))
    assert (site.walls[0].top, site.walls[0].toe) == (-5.0, None)
    assert {finding.code for finding in site.findings} == {"wall-levels"}


def test_two_parallel_lines_a_walls_thickness_apart_are_faces_and_one_alone_is_the_axis() -> None:
    near, far = wall_line((0, 0), (20, 0), item="1"), wall_line((0.5, 0.8), (20, 0.8), item="2")
    assert drawn_as(near, far) == [("face", False, None)] * 2
    assert drawn_as(near) == [("axis", False, None)]
    assert drawn_as(near, replace(far, layer="SECANT WALL")) == [("axis", False, None)] * 2
    axes = [replace(line, layer="WALL AXIS DIAPHRAGM") for line in (near, far)]
    assert drawn_as(*axes) == [("axis", False, None)] * 2


def test_the_two_rings_of_a_wall_are_faces_and_a_ring_alone_is_the_axis() -> None:
    outer = wall_line((0, 0), (30, 0), (30, 10), (0, 10), item="1", closed=True)
    inner = wall_line((0.8, 0.8), (29.2, 0.8), (29.2, 9.2), (0.8, 9.2), item="2", closed=True)
    assert drawn_as(outer, inner) == [("face", True, None)] * 2
    assert drawn_as(outer) == [("axis", True, None)]


def test_one_ring_round_the_body_of_a_bent_wall_is_its_outline() -> None:
    body = wall_line((0, 0), (20, 0), (20, 15), (19.2, 15), (19.2, 0.8), (0, 0.8), item="1", closed=True)
    assert drawn_as(body) == [("outline", True, None)]


def test_a_panel_drawn_by_its_outline_has_axis_and_thickness() -> None:
    panel = wall_line((0, 0), (6, 0), (6, 0.8), (0, 0.8), item="1", closed=True)
    assert drawn_as(panel) == [("outline", False, pytest.approx(0.8))]


def test_a_circle_wider_than_any_pile_is_the_wall_of_a_shaft() -> None:
    outer = part("circle", (0.0, 0.0, 0.0), radius=6.0, layer="SHAFT WALL", item="1", closed=True)
    site = site_of([parts_of(outer)], Brief())
    assert not site.piles
    (wall,) = site.walls
    assert wall.closed
    assert all(math.hypot(x, y) == pytest.approx(6.0) for x, y in wall.axis)
    inner = replace(outer, radius=5.4, source=Source(file="a.dxf", item="2"))
    assert drawn_as(outer, inner) == [("face", True, None)] * 2


@pytest.mark.parametrize(("layer", "male"), [("SECANT-MALE", True), ("Secant piles primary", False), ("SECANT", None)])
def test_male_and_female_piles_are_told_by_their_layer(layer: str, male: bool | None) -> None:
    piles = [part("circle", (0.9 * n, 0.0, 0.0), radius=0.44, layer=layer, item=str(n)) for n in range(6)]
    assert {pile.male for pile in site_of([parts_of(*piles)], Brief()).piles} == {male}


def test_a_drawn_capping_beam_is_known_to_the_walls_it_runs_along_and_is_no_waler() -> None:
    beam = wall_line((0, 0.2), (20, 0.2), item="b", layer="CAPPING BEAM")
    other = wall_line((0, 15), (20, 15), item="o")
    site = site_of([parts_of(wall_line((0, 0), (20, 0), item="w"), other, beam)], Brief())
    assert [(wall.axis[0][1], wall.capping_beam) for wall in site.walls] == [(0.0, True), (15.0, None)]
    assert not site.walers
    assert site.ledger["a.dxf"].roles == {"wall": 2, "waler": 1}
