"""What a careless or hostile user does at the command line: one clear error each, never a fault of the tool."""

from __future__ import annotations

import json
import os
from collections.abc import Callable
from pathlib import Path

import pytest

from export.cli import main

PIT = Path(__file__).resolve().parents[1] / "samples" / "first_pit"
DRAWING, BRIEF = str(PIT / "first_pit.dxf"), (PIT / "brief.toml").read_text(encoding="utf-8")
HEAD = "section,stage,member,quantity,value,unit"

Capture = pytest.CaptureFixture[str]
Brief = Callable[..., Path]


@pytest.fixture
def brief(tmp_path: Path) -> Brief:
    """Make a brief of the first pit with one thing put in place of another."""

    def make(old: str = "", new: str = "") -> Path:
        assert old in BRIEF
        path = tmp_path / "brief.toml"
        path.write_text(BRIEF.replace(old, new, 1) if old else BRIEF + new, encoding="utf-8")
        return path

    return make


@pytest.fixture(scope="module")
def proposed(tmp_path_factory: pytest.TempPathFactory) -> str:
    """The first section of the first pit, as the tool writes it."""
    out = tmp_path_factory.mktemp("hostile") / "out"
    assert main(["propose", DRAWING, "--brief", str(PIT / "brief.toml"), "--out", str(out), "--quiet"]) == 0
    return (out / "sections" / "S1.json").read_text(encoding="utf-8")


@pytest.fixture
def section(tmp_path: Path, proposed: str) -> Path:
    """A section file to tamper with."""
    path = tmp_path / "S1.json"
    path.write_text(proposed, encoding="utf-8")
    return path


@pytest.fixture
def results(tmp_path: Path) -> Path:
    """One row of results that fits the section."""
    path = tmp_path / "results.csv"
    path.write_text(f"{HEAD}\nS1,T2,P1-wall-1,M,38.0,kNm/m\n", encoding="utf-8")
    return path


def refused(capture: Capture, *arguments: object) -> str:
    """Run the command, which must end with 2 and a remedy, and return what it said."""
    try:
        code = main([str(word) for word in arguments])
    except SystemExit as end:
        code = int(str(end.code))
    said = capture.readouterr().err
    assert code == 2, said
    assert "To fix" in said
    assert len(said.splitlines()) <= 3
    return said


@pytest.mark.parametrize("seconds", ["nan", "inf", "-1", "0", "soon"])
def test_a_time_limit_that_is_no_time_is_refused(seconds: str, capsys: Capture) -> None:
    assert "--read-limit" in refused(capsys, "inspect", DRAWING, f"--read-limit={seconds}")


def test_a_schema_that_does_not_exist_is_refused_with_the_known_names(capsys: Capture) -> None:
    assert "proposal, section" in refused(capsys, "schema", "../proposal")


@pytest.mark.parametrize("line", ["1e308,1e308,-1e308,-1e308", "0,0,1e12,0"])
def test_a_line_beyond_any_site_is_refused_before_anything_overflows(line: str, capsys: Capture) -> None:
    assert "--line" in refused(capsys, "judge", DRAWING, f"--line={line}")


def test_an_output_folder_that_links_to_itself_is_refused(tmp_path: Path, capsys: Capture) -> None:
    (tmp_path / "loop").symlink_to("loop")
    refused(capsys, "propose", DRAWING, "--out", tmp_path / "loop")


def test_an_output_folder_with_too_long_a_name_is_refused(tmp_path: Path, capsys: Capture) -> None:
    assert "too long" in refused(capsys, "propose", DRAWING, "--out", tmp_path / ("x" * 300))


def test_a_starting_brief_below_a_file_is_refused(tmp_path: Path, capsys: Capture) -> None:
    (tmp_path / "file").write_text("x")
    refused(capsys, "inspect", DRAWING, "--write-brief", tmp_path / "file" / "brief.toml")


@pytest.mark.parametrize("target", [".", "file/out.csv", "x" * 300])
def test_a_result_table_that_cannot_be_written_is_refused(
    target: str, tmp_path: Path, section: Path, results: Path, capsys: Capture
) -> None:
    (tmp_path / "file").write_text("x")
    refused(capsys, "members", section, results, "--out", tmp_path / target)


@pytest.mark.parametrize("target", ["S1.json", "results.csv"])
def test_a_result_table_never_replaces_what_it_was_made_from(
    target: str, tmp_path: Path, section: Path, results: Path, capsys: Capture
) -> None:
    before = (tmp_path / target).read_bytes()
    refused(capsys, "members", section, results, "--out", tmp_path / target)
    assert (tmp_path / target).read_bytes() == before


def test_two_different_sections_of_one_id_are_refused_not_the_last_one_taken(
    tmp_path: Path, section: Path, results: Path, capsys: Capture
) -> None:
    tree = json.loads(section.read_text(encoding="utf-8"))
    for member in tree["members"]:
        member["back"] = [{**back, "factor": 7.0} for back in member["back"]]
    other = tmp_path / "other.json"
    other.write_text(json.dumps(tree), encoding="utf-8")
    assert "S1" in refused(capsys, "members", section, other, results)
    assert main(["members", str(section), str(section), str(results)]) == 0  # the same one twice does no harm


def test_a_result_too_large_for_its_factor_is_refused_not_written_as_infinite(
    section: Path, results: Path, capsys: Capture
) -> None:
    tree = json.loads(section.read_text(encoding="utf-8"))
    for member in tree["members"]:
        member["back"] = [{**back, "factor": 1e300} for back in member["back"]]
    section.write_text(json.dumps(tree), encoding="utf-8")
    results.write_text(f"{HEAD}\nS1,T2,P1-wall-1,M,1e200,kNm/m\n", encoding="utf-8")
    assert "line 2" in refused(capsys, "members", section, results, "--out", results.with_name("out.csv"))


def test_a_further_column_that_stands_twice_is_refused_not_dropped(
    section: Path, results: Path, capsys: Capture
) -> None:
    results.write_text(f"{HEAD},note,note\nS1,T2,P1-wall-1,M,38.0,kNm/m,a,b\n", encoding="utf-8")
    assert '"note"' in refused(capsys, "members", section, results)


def test_a_column_named_like_a_formula_leaves_as_text(section: Path, results: Path, capsys: Capture) -> None:
    results.write_text(f"{HEAD},=cmd|x\nS1,T2,P1-wall-1,M,38.0,kNm/m,a\n", encoding="utf-8")
    assert main(["members", str(section), str(results)]) == 0
    assert ",'=cmd|x," in capsys.readouterr().out


@pytest.mark.parametrize("text", ['{"a": ' + "9" * 6000 + "}", "[" * 100_000])
def test_a_section_no_json_reader_takes_is_refused(text: str, section: Path, results: Path, capsys: Capture) -> None:
    section.write_text(text, encoding="utf-8")
    assert "S1.json" in refused(capsys, "members", section, results)


def test_a_pipe_is_neither_a_section_nor_a_brief(tmp_path: Path, results: Path, capsys: Capture) -> None:
    # a null device stands for the pipe: were it opened, the run would go on with an empty text instead of hanging
    assert "device or pipe" in refused(capsys, "members", os.devnull, results)
    assert "device or pipe" in refused(capsys, "inspect", DRAWING, "--brief", os.devnull)


@pytest.mark.parametrize("text", ["\nx = " + "[" * 3000 + "]" * 3000, "\nx = " + "9" * 6000])
def test_a_brief_no_toml_reader_takes_is_refused(text: str, brief: Brief, capsys: Capture) -> None:
    assert "brief.toml" in refused(capsys, "inspect", DRAWING, "--brief", brief("", text))


@pytest.mark.parametrize("designation", ["CHS -508x16", "CHS 508x-16", "CHS 99999999x9999", "SHS 90000x100"])
def test_a_steel_section_no_mill_can_make_is_refused(designation: str, brief: Brief, capsys: Capture) -> None:
    said = refused(capsys, "inspect", DRAWING, "--brief", brief("CHS 508x16", designation))
    assert "supports[1].section" in said


@pytest.mark.parametrize("modulus", ["210", "210e3"])
def test_a_modulus_in_gpa_or_mpa_is_refused(modulus: str, brief: Brief, capsys: Capture) -> None:
    # steel 210 GPa = 210e6 kPa (EN 1993-1-1, 3.2.6, recalled)
    assert "kPa" in refused(capsys, "inspect", DRAWING, "--brief", brief("E = 210e6", f"E = {modulus}"))


@pytest.mark.parametrize("formation", ["0.0", "2.0"])
def test_a_dig_that_does_not_go_below_the_ground_is_refused(formation: str, brief: Brief, capsys: Capture) -> None:
    said = refused(capsys, "inspect", DRAWING, "--brief", brief("formation = -6.0", f"formation = {formation}"))
    assert "levels.formation" in said


@pytest.mark.parametrize(
    ("old", "new", "what"),
    [
        ("toe = -12.0", "toe = -5.0", "toe"),
        ("level = -1.5", "level = 5.0", "above the top"),
        ("level = -1.5", "level = -8.0", "below the dig"),
        ("top_level = -3.0", "top_level = 3.0", "stiff clay"),
        ("top_level = -3.0", "top_level = 0.0", "stiff clay"),
        ("top = 0.0", "top = 0.0\nwater_retained = 500.0", "water"),
    ],
)
def test_levels_the_wrong_way_round_are_pointed_out(
    old: str, new: str, what: str, brief: Brief, capsys: Capture
) -> None:
    assert main(["inspect", DRAWING, "--brief", str(brief(old, new))]) == 0
    told = capsys.readouterr().out.partition("Findings")[2]
    assert any(what in line for line in told.splitlines() if "check" in line)


def test_levels_in_order_draw_no_remark(brief: Brief, capsys: Capture) -> None:
    assert main(["inspect", DRAWING, "--brief", str(brief())]) == 0
    assert "Findings" not in capsys.readouterr().out


def _ring(path: Path, scale: float, wall: str) -> Path:
    import ezdxf

    drawing = ezdxf.new("R2010")
    drawing.header["$INSUNITS"] = 6
    space = drawing.modelspace()
    corners = [(0.0, 0.0), (30 * scale, 0.0), (30 * scale, 20 * scale), (0.0, 20 * scale)]
    if wall == "piles":
        for n in range(30):
            space.add_circle((n * scale, 0.0), 0.375 * scale, dxfattribs={"layer": "WALL-PILES-CONTIGUOUS"})
    else:
        space.add_lwpolyline(corners, close=True, dxfattribs={"layer": "DIAPHRAGM WALL"})
    drawing.saveas(path)
    return path


@pytest.mark.parametrize(("wall", "scale"), [("line", 1000.0), ("piles", 1000.0), ("piles", 0.001)])
def test_a_drawing_in_the_wrong_unit_is_refused_at_once(
    wall: str, scale: float, tmp_path: Path, capsys: Capture
) -> None:
    # 100 km of wall in place of 100 m; piles of 750 m or 0.75 mm in place of 0.75 m
    assert "unit" in refused(capsys, "inspect", _ring(tmp_path / "unit.dxf", scale, wall))
