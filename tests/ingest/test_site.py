"""From files to one site: the first pit as drawn, and small sites built from parts."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import ezdxf
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ingest.brief import Brief, read_brief
from ingest.errors import InputError
from ingest.model import FileParts, Part, Point3, Site
from ingest.site import read_site, site_of, write_starting_brief
from ingest.trail import Source

BRIEF = """
[site]
name = "Pit"
ground_level = 0.0
[levels]
formation = -6.0
top = 0.0
[[materials]]
id = "concrete"
kind = "concrete"
concrete_class = "C30/37"
[[materials]]
id = "steel"
kind = "steel"
E = 210e6
unit_weight = 78.5
[[walls]]
match = { layer = "WALL-PILES-CONTIGUOUS" }
material = "concrete"
continuity = "jointed"
toe = -12.0
[[supports]]
match = { layer = "STRUTS" }
level = -1.5
section = "CHS 508x16"
material = "steel"
preload = -200.0
waler = true
[[loads]]
match = { layer = "FOOTING-NEIGHBOUR" }
kind = "footing"
value = 150.0
level = -1.0
[[strata]]
name = "clay"
top_level = -3.0
E = 40e3
"""


def draw_pit(path: Path, shift: tuple[float, float] = (0.0, 0.0)) -> None:
    """30 x 20 m, piles D 0.75 at 1.00, six struts across and four along, waler, footing; metres."""
    dx, dy = shift
    drawing = ezdxf.new("R2010", units=6)
    space = drawing.modelspace()
    ring = [(100.0 + n, 200.0) for n in range(30)] + [(130.0, 200.0 + n) for n in range(20)]
    ring += [(230.0 - x, 420.0 - y) for x, y in ring]
    for x, y in ring:
        space.add_circle((x + dx, y + dy), 0.375, dxfattribs={"layer": "WALL-PILES-CONTIGUOUS"})
    lines = [((102.5 + 5 * n, 200.0), (102.5 + 5 * n, 220.0)) for n in range(6)]
    lines += [((100.0, 202.5 + 5 * n), (130.0, 202.5 + 5 * n)) for n in range(4)]
    for (x1, y1), (x2, y2) in lines:
        space.add_line((x1 + dx, y1 + dy), (x2 + dx, y2 + dy), dxfattribs={"layer": "STRUTS"})
    for layer, points in (
        ("WALER", [(100.5, 200.5), (129.5, 200.5), (129.5, 219.5), (100.5, 219.5)]),
        ("FOOTING-NEIGHBOUR", [(113.5, 222.0), (116.5, 222.0), (116.5, 224.0), (113.5, 224.0)]),
    ):
        space.add_lwpolyline([(x + dx, y + dy) for x, y in points], close=True, dxfattribs={"layer": layer})
    drawing.saveas(path)


def read_pit(folder: Path, brief: str = BRIEF, shift: tuple[float, float] = (0.0, 0.0)) -> Site:
    draw_pit(folder / "pit.dxf", shift)
    (folder / "brief.toml").write_text(brief)
    return read_site([folder / "pit.dxf"], folder / "brief.toml")


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


# --- small sites built from parts


def part(form: str, *points: Point3, item: str = "1", file: str = "a.dxf", **more: Any) -> Part:
    return Part(source=Source(file=file, item=item), form=form, points=points, **more)  # type: ignore[arg-type]


def parts_of(*parts: Part, file: str = "a.dxf", **more: Any) -> FileParts:
    count = len({part.source.item for part in parts}) + sum(more.get("context", {}).values())
    return FileParts(
        file=file, sha256="0" * 64, kind=file.rpartition(".")[2], schema_or_version="x", length_unit="m",
        unit_scale=1.0, entities=count + sum(more.get("ignored", {}).values()), parts=parts, **more,
    )  # fmt: skip


def brief_of(folder: Path, text: str) -> Brief:
    path = folder / "brief.toml"
    path.write_text(text)
    return read_brief(path)


WALL = part("path", (0.0, 0.0, 0.0), (20.0, 0.0, 0.0), layer="SHEET PILES", item="w")


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


def test_a_toe_that_only_the_model_has_and_cannot_be_is_not_taken(tmp_path: Path) -> None:
    wall = replace(WALL, z_bottom=-2.0, z_top=3.0)
    site = site_of([parts_of(wall)], brief_of(tmp_path, "[levels]\ntop = -5.0\n"))
    assert (site.walls[0].top, site.walls[0].toe) == (-5.0, None)
    assert {finding.code for finding in site.findings} == {"wall-levels"}


def drawn_as(*parts: Part) -> list[tuple[str, bool, float | None]]:
    walls = site_of([parts_of(*parts)], Brief()).walls
    return [(wall.drawn, wall.closed, wall.thickness) for wall in walls]


def wall_line(*points: tuple[float, float], item: str, layer: str = "DIAPHRAGM WALL", closed: bool = False) -> Part:
    return part("path", *((x, y, 0.0) for x, y in points), item=item, layer=layer, closed=closed)


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
