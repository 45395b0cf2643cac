"""From files to one site: the first pit as drawn, and what is asked, assumed and accounted for."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from site_builder import WALL, brief_of, draw_pit, part, parts_of, read_pit

from ingest.brief import Brief, read_brief
from ingest.errors import InputError
from ingest.site import read_site, site_of, write_starting_brief


def test_the_first_pit_is_read_whole(tmp_path: Path) -> None:
    site = read_pit(tmp_path)
    assert len(site.piles) == 100
    pile = site.piles[0]
    assert (pile.centre, pile.diameter, pile.kind, pile.top, pile.toe) == (
        (100.0, 200.0),
        0.75,
        "contiguous",
        0.0,
        -12.0,
    )
    assert pile.material == "concrete"
    assert pile.bearing is False
    assert len(site.supports) == 10
    assert {support.head[2] for support in site.supports} == {-1.5}
    assert sorted(round(math.dist(s.head, s.far)) for s in site.supports) == [20] * 6 + [30] * 4
    assert site.walers[0].level == -1.5
    assert site.loads[0].value == 150.0
    assert (site.loads[0].kind, site.loads[0].level) == ("footing", -1.0)
    assert site.floors[0].level == -6.0
    assert site.frame.offset == (0.0, 0.0, 0.0)
    assert not site.questions


def test_rigidity_of_a_strut_comes_from_its_section(tmp_path: Path) -> None:
    # A = pi (0.508^2 - 0.476^2)/4 = 0.0247306 m2; EN 1993-1-1 cl. 3.2.6 (recalled) E = 210 GPa; weight 78.5 kN/m3 x A
    strut = read_pit(tmp_path).supports[0]
    assert pytest.approx(210e6 * math.pi * (0.508**2 - 0.476**2) / 4) == strut.EA
    assert pytest.approx(210e6 * math.pi * (0.508**4 - 0.476**4) / 64) == strut.EI
    assert strut.weight == pytest.approx(78.5 * 0.0247306, rel=1e-5)
    assert strut.preload == -200.0


def test_the_ledger_adds_up_and_names_the_uses(tmp_path: Path) -> None:
    book = read_pit(tmp_path).ledger["pit.dxf"]
    assert (book.entities, book.used, book.context, book.ignored) == (112, 112, 0, 0)
    assert book.roles == {"load": 1, "strut": 10, "waler": 1, "wall": 100}


def test_national_grid_coordinates_become_local_ones(tmp_path: Path) -> None:
    near, far = tmp_path / "near", tmp_path / "far"
    near.mkdir()
    far.mkdir()
    site, moved = read_pit(near), read_pit(far, shift=(530_000.0, 180_000.0))
    # centre of the data (530115, 180212) rounded down to 1000 m
    assert moved.frame.offset == (530_000.0, 180_000.0, 0.0)
    assert moved.piles[0].centre == pytest.approx(site.piles[0].centre)
    assert [s.head for s in moved.supports] == [pytest.approx(s.head) for s in site.supports]


def test_without_a_brief_everything_missing_is_asked_and_nothing_is_made_up(tmp_path: Path) -> None:
    site = read_pit(tmp_path, brief="")
    asked = "\n".join(question.about for question in site.questions)
    for word in (
        "ground level",
        "formation level",
        "toe level",
        "STRUTS: level",
        "STRUTS: section",
        "footing or receptor",
    ):
        assert word in asked
    assert site.ground_level is None
    assert site.piles[0].toe is None
    assert all(support.EA is None and not support.level_given for support in site.supports)
    assert [question.id for question in site.questions] == [f"Q{n}" for n in range(1, len(site.questions) + 1)]


def test_a_starting_brief_reads_back_and_its_lines_do_too_when_taken_up(tmp_path: Path) -> None:
    site = read_pit(tmp_path, brief="")
    path = tmp_path / "start.toml"
    write_starting_brief(site, path)
    assert read_brief(path).site.name == ""
    text = path.read_text()
    assert '# role = "strut"' in text
    assert "STRUTS: level of the supports is not given" in text
    line = next(question.brief_line for question in site.questions if "level of the supports" in question.about)
    (tmp_path / "taken.toml").write_text(line.replace("nan", "-1.5"))
    taken = read_site([tmp_path / "pit.dxf"], tmp_path / "taken.toml")
    assert {support.head[2] for support in taken.supports} == {-1.5}
    with pytest.raises(InputError, match="there already"):
        write_starting_brief(site, path)


def test_shapes_that_cannot_be_their_role_are_ignored_with_the_reason() -> None:
    bent = part("path", (0.0, 0.0, 0.0), (5.0, 5.0, 0.0), (10.0, 0.0, 0.0), layer="STRUTS", item="b")
    open_slab = part("path", (0.0, 0.0, 0.0), (5.0, 5.0, 0.0), layer="SLAB", item="s")
    book = site_of([parts_of(bent, open_slab)], Brief()).ledger["a.dxf"]
    assert (book.used, book.ignored) == (0, 2)
    assert book.reasons == {"strut that is not one straight member": 1, "slab without an outline on plan": 1}


def test_an_entity_of_many_parts_counts_once() -> None:
    grid = [
        part("circle", (3.0 * n, 0.0, 0.0), radius=0.3, layer="BEARING PILES", item="one insert") for n in range(25)
    ]
    site = site_of([parts_of(*grid, context={"dimension": 3}, ignored={"proxy": 2})], Brief())
    assert len(site.piles) == 25
    book = site.ledger["a.dxf"]
    assert (book.entities, book.used, book.context, book.ignored) == (6, 1, 3, 2)


def test_a_ledger_that_does_not_add_up_is_a_fault_of_the_tool() -> None:
    file = replace(parts_of(WALL), entities=7)
    with pytest.raises(RuntimeError, match="does not add up"):
        site_of([file], Brief())


def test_ignored_layers_are_ignored(tmp_path: Path) -> None:
    brief = brief_of(tmp_path, "[files.'a.dxf']\nignore_layers = ['SHEET PILES']\n")
    site = site_of([parts_of(WALL)], brief)
    assert not site.walls
    assert site.ledger["a.dxf"].reasons == {"layer ignored by the brief": 1}


def test_files_far_apart_are_asked_about_and_laid_together_by_the_brief(tmp_path: Path) -> None:
    other = part("path", (5000.0, 0.0, 0.0), (5020.0, 0.0, 0.0), layer="STRUTS", item="s", file="b.dxf")
    files = [parts_of(WALL), parts_of(other, file="b.dxf")]
    site = site_of(files, Brief())
    assert [finding.code for finding in site.findings] == ["files-apart"]
    assert any("b.dxf" in question.brief_line for question in site.questions)
    brief = brief_of(tmp_path, "[files.'b.dxf']\nshift = [10.0, -5000.0]\nrotation_deg = 90.0\n")
    laid = site_of(files, brief)
    assert not laid.findings
    # (5000, 0) turned by 90 degrees is (0, 5000), shifted to (10, 0); (5020, 0) goes to (10, 20)
    assert [laid.supports[0].head[:2], laid.supports[0].far[:2]] == [
        pytest.approx((10.0, 0.0)),
        pytest.approx((10.0, 20.0)),
    ]
    assert {entry.file: entry.registered.rotation_deg for entry in laid.inputs if entry.registered} == {
        "a.dxf": 0.0,
        "b.dxf": 90.0,
    }


def test_points_of_the_brief_are_world_coordinates(tmp_path: Path) -> None:
    wall = part("path", (500_000.0, 180_000.0, 0.0), (500_020.0, 180_000.0, 0.0), layer="SHEET PILES")
    text = "[[loads]]\npoints = [[500005, 180010]]\nkind = 'point'\nvalue = 900.0\n[site]\nstart = [500000, 180000]\n"
    site = site_of([parts_of(wall)], brief_of(tmp_path, text))
    assert site.frame.offset == (500_000.0, 180_000.0, 0.0)
    assert site.loads[0].points == ((5.0, 10.0),)
    assert site.start == (0.0, 0.0)


def test_an_assumption_confirmed_in_the_brief_is_marked(tmp_path: Path) -> None:
    text = "[levels]\nformation = -6.0\n[[decisions.confirm]]\nassumption = 'dig-allowance'\nby = 'me'\n"
    site = site_of([parts_of(WALL)], brief_of(tmp_path, text))
    assert {a.code: a.status for a in site.assumptions} == {"dig-allowance": "confirmed"}
    assert site.confirmed == ("dig-allowance",)


def test_hostile_names_stay_data(tmp_path: Path) -> None:
    names = ["<script>x</script> WALL", '=cmd|"a" STRUTS', "../../SLAB", "\u202eANCHOR\nS"]
    ring = ((0.0, 0.0, 0.0), (9.0, 0.0, 0.0), (9.0, 9.0, 0.0), (0.0, 9.0, 0.0))
    parts = [part("path", *ring, closed=True, layer=name, item=name) for name in names]
    site = site_of([parts_of(*parts)], Brief())
    path = tmp_path / "start.toml"
    write_starting_brief(site, path)
    read_brief(path)
    stated = [line for line in path.read_text().split("\n") if line and not line.startswith("#")]
    assert stated == ["[site]", 'name = ""', "[levels]"]


def test_a_file_name_that_is_no_input_is_named(tmp_path: Path) -> None:
    draw_pit(tmp_path / "pit.dxf")
    (tmp_path / "b.toml").write_text("[files.'pitt.dxf']\nlength_unit = 'm'\n")
    with pytest.raises(InputError, match=r"pitt\.dxf"):
        read_site([tmp_path / "pit.dxf"], tmp_path / "b.toml")


def test_an_unreadable_file_stops_the_run_or_is_left_out_with_a_finding(tmp_path: Path) -> None:
    draw_pit(tmp_path / "pit.dxf")
    (tmp_path / "bad.ifc").write_text("prose")
    files = [tmp_path / "pit.dxf", tmp_path / "bad.ifc"]
    with pytest.raises(InputError):
        read_site(files)
    site = read_site(files, skip_unreadable=True)
    assert "file-skipped" in {finding.code for finding in site.findings}
    assert len(site.piles) == 100


@settings(deadline=None, max_examples=25)
@given(st.permutations(range(8)))
def test_the_order_of_the_input_does_not_matter(order: list[int]) -> None:
    line = ((0.0, 0.0, 0.0), (9.0, 0.0, 0.0))
    layers = ["SHEET PILES", "STRUTS", "STRUTS", "WALER", "ANCHORS", "FOOTING", "COLUMNS", "LOADS"]
    parts = [
        part("path", *((x + n, y + 2 * n, z) for x, y, z in line), layer=layer, item=str(n))
        for n, layer in enumerate(layers)
    ]
    straight, mixed = site_of([parts_of(*parts)], Brief()), site_of([parts_of(*(parts[n] for n in order))], Brief())
    assert straight == mixed


def test_members_that_differ_in_their_number_only_are_asked_about_once() -> None:
    bars = [
        part(
            "bar",
            (5.0 * n, 0.0, -1.5),
            (5.0 * n, 20.0, -1.5),
            cls="IfcMember",
            name=f"Strut {n}",
            item=str(n),
            file="m.ifc",
        )
        for n in range(6)
    ]
    site = site_of([parts_of(*bars, file="m.ifc")], Brief())
    assert {support.group for support in site.supports} == {"Strut *"}
    (question,) = [q for q in site.questions if "section of the supports" in q.about]
    assert 'match = { name = "Strut *" }' in question.brief_line


def test_what_the_brief_names_and_the_files_do_not_have_is_a_finding(tmp_path: Path) -> None:
    text = (
        "[[supports]]\nmatch = { layer = 'STRUT' }\n[[stages]]\nname = 'dig'\ninstall = ['SHEET PILE']\n"
        "[[strata]]\nname = 'clay'\nfrom_boreholes = 'LC'\n"
    )
    site = site_of([parts_of(replace(WALL, layer="STRUTS"))], brief_of(tmp_path, text))
    found = {finding.code: finding for finding in site.findings}
    assert set(found) == {"brief-match", "stage-member", "stratum-code"}
    assert 'layer "STRUTS"' in found["brief-match"].text
    assert found["brief-match"].where == "brief.toml, line 2, supports[1].match"
