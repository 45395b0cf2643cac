"""DXF drawings: audit clean, in metres and world coordinates, cuts read back, hostile names as text."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import ezdxf
import pytest
from builders_export import CORNERS, HOSTILE, Job

from export.drawing import write_drawings
from export.drawing_style import LAYERS


@pytest.fixture(scope="module")
def drawn(first_pit: Job, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("drawn")
    names = write_drawings(first_pit.proposal, first_pit.definitions, first_pit.site, folder)
    assert names == ["plan.dxf", "sections/S1.dxf", "sections/S2.dxf"]
    return folder


@pytest.mark.parametrize("name", ["plan.dxf", "sections/S1.dxf", "sections/S2.dxf"])
def test_a_drawing_audits_clean_in_metres(drawn: Path, name: str) -> None:
    drawing = ezdxf.readfile(drawn / name)
    audit = drawing.audit()
    assert (audit.errors, audit.fixes) == ([], [])
    assert drawing.header["$INSUNITS"] == 6
    assert {entity.dxf.layer for entity in drawing.modelspace()} <= {row[3] for row in LAYERS.values()}


def test_layer_names_have_the_fields_of_iso_13567() -> None:
    # ISO 13567-2 clause 5: agent 2, element 6, presentation 2 characters (recalled)
    for *_, name in LAYERS.values():
        assert (len(name), name[:2], name[8:]) == (10, "GQ", name[8] + "-")
        assert name[8] in "ETDH"


def test_the_cuts_of_the_plan_are_the_lines_of_the_sections(drawn: Path, first_pit: Job) -> None:
    space = ezdxf.readfile(drawn / "plan.dxf").modelspace()
    lines = [
        ((e.dxf.start.x, e.dxf.start.y), (e.dxf.end.x, e.dxf.end.y)) for e in space.query('LINE[layer=="GQCUTS--E-"]')
    ]
    for section in first_pit.proposal.sections:
        assert section.line in lines


def test_the_perimeter_lies_on_the_wall_axis(drawn: Path) -> None:
    (line,) = ezdxf.readfile(drawn / "plan.dxf").modelspace().query('LWPOLYLINE[layer=="GQPERIM-E-"]')
    assert tuple((x, y) for x, y, *_ in line.get_points()) == CORNERS
    assert line.closed


def test_a_section_is_dimensioned_and_its_wall_is_as_thick_as_it_is(drawn: Path) -> None:
    space = ezdxf.readfile(drawn / "sections/S1.dxf").modelspace()
    assert sorted(round(dimension.get_measurement(), 3) for dimension in space.query("DIMENSION")) == [18.0, 18.0, 20.0]
    bodies = [line for line in space.query('LWPOLYLINE[layer=="GQWALL--E-"]') if line.closed]
    xs = [x for x, *_ in bodies[0].get_points()]
    assert max(xs) - min(xs) == pytest.approx(0.75)


def test_every_verdict_has_a_line_type_of_its_own() -> None:
    words = ("holds", "over_states", "undecided", "not_assessed", "under_states", "not_two_dimensional")
    assert len({LAYERS[word][1] for word in words}) == 6


def test_names_from_files_stay_text(first_pit: Job, tmp_path: Path) -> None:
    evil = "%%u{\\fArial;X}^J\n" + HOSTILE
    pit = first_pit.proposal.pits[0]
    proposal = replace(first_pit.proposal, pits=(replace(pit, zones=(replace(pit.zones[0], id=evil),)),))
    write_drawings(proposal, (), None, tmp_path)
    texts = [entity.dxf.text for entity in ezdxf.readfile(tmp_path / "plan.dxf").modelspace().query("TEXT")]
    (said,) = [text for text in texts if "Arial" in text]
    assert "%%" not in said
    assert "\n" not in said
    assert "\u202e" not in said
    assert '<script>alert("x")</script>' in said


def test_the_same_objects_give_the_same_drawing_bytes(first_pit: Job, drawn: Path, tmp_path: Path) -> None:
    for name in write_drawings(first_pit.proposal, first_pit.definitions, first_pit.site, tmp_path):
        assert (tmp_path / name).read_bytes() == (drawn / name).read_bytes()
    assert ezdxf.options.write_fixed_meta_data_for_testing is False
