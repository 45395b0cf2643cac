"""The unit of a drawing: declared, missing, or contradicted by what is drawn. A pit is 5 to 500 m (M17)."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from dxf_builder import read

from ingest.dxf.drawing_unit import INSUNITS
from ingest.dxf.measures import written_length
from ingest.errors import InputError
from ingest.parts import FileParts


def draw_pit(scale: float, *, letters: bool = True) -> Any:
    """A pit of 30 x 20 m with piles of 0.75 m and letters of 0.25 m, in units of 1/scale metres."""

    def draw(doc: Any, space: Any) -> None:
        corners = [(0, 0), (30, 0), (30, 20), (0, 20)]
        space.add_polyline2d([(x * scale, y * scale) for x, y in corners], close=True)
        for k in range(31):
            space.add_circle((k * scale, 0), 0.375 * scale)
        for k in range(4 if letters else 0):
            space.add_text(f"P{k}", height=0.25 * scale).set_placement((k * scale, scale))

    return draw


def codes(found: FileParts) -> set[str]:
    return {finding.code for finding in found.findings}


def test_codes_of_units_are_those_of_the_dxf_reference() -> None:
    # DXF reference, header variable $INSUNITS
    reference = {
        1: "inch",
        2: "foot",
        3: "mile",
        4: "mm",
        5: "cm",
        6: "m",
        7: "km",
        10: "yard",
        14: "dm",
        21: "us_survey_foot",
    }
    assert {code: INSUNITS[code] for code in reference} == reference
    assert 0 not in INSUNITS


@pytest.mark.parametrize(
    ("code", "scale", "unit"), [(6, 1, "m"), (4, 1000, "mm"), (1, 39.37, "inch"), (2, 3.281, "foot")]
)
def test_a_declared_unit_that_fits_is_taken_without_a_word(tmp_path: Path, code: int, scale: float, unit: str) -> None:
    found = read(tmp_path, draw_pit(scale), units=code)
    assert (found.length_unit, found.questions, found.assumptions) == (unit, (), ())
    assert not codes(found) & {"unit-missing", "unit-implausible"}


@pytest.mark.parametrize(("scale", "unit"), [(1, "m"), (1000, "mm"), (100, "cm")])
def test_a_missing_unit_is_taken_from_the_sizes_assumed_and_asked_about(
    tmp_path: Path, scale: float, unit: str
) -> None:
    found = read(tmp_path, draw_pit(scale), units=0)
    assert found.length_unit == unit
    assert "unit-missing" in codes(found)
    (question,) = found.questions
    assert question.readings[0].reading == unit
    assert question.brief_line == f'[files."drawing.dxf"]\nlength_unit = "{unit}"'
    assert sum(reading.confidence for reading in question.readings) == pytest.approx(1, abs=0.03)
    (assumption,) = found.assumptions
    assert unit in assumption.text


def test_a_header_without_the_variable_is_a_missing_unit_not_metres(tmp_path: Path) -> None:
    # the library fills in a default of its own for such files
    found = read(tmp_path, draw_pit(1000), units=None, version="R12")
    assert (found.length_unit, "unit-missing" in codes(found)) == ("mm", True)


def test_a_drawing_that_shows_nothing_of_known_size_says_so(tmp_path: Path) -> None:
    found = read(tmp_path, lambda doc, space: space.add_circle((0, 0), 1), units=None, version="R12")
    assert "nothing in it tells the unit" in found.assumptions[0].basis
    assert len(found.questions[0].readings) > 2


def test_a_pit_of_thirty_millimetres_is_taken_in_metres_and_asked_about(tmp_path: Path) -> None:
    found = read(tmp_path, draw_pit(1), units=4)
    assert found.length_unit == "m"
    (finding,) = [f for f in found.findings if f.code == "unit-implausible"]
    assert "says mm ($INSUNITS = 4)" in finding.text
    assert {reading.reading for reading in found.questions[0].readings} >= {"m"}


def test_a_declared_unit_is_kept_while_nothing_clear_speaks_against_it(tmp_path: Path) -> None:
    # half a metre wide: odd for a site, but no other unit is clearly right
    def draw(doc: Any, space: Any) -> None:
        space.add_line((0, 0), (500, 0))

    found = read(tmp_path, draw, units=4)
    assert found.length_unit == "mm"
    assert "unit-implausible" in codes(found)
    assert found.questions[0].brief_line.endswith('"mm"')


def test_dimensions_in_feet_and_inches_beat_a_declared_millimetre(tmp_path: Path) -> None:
    # style with DIMLUNIT 4 (architectural): one unit is one inch; 192 units are 16 feet
    def draw(doc: Any, space: Any) -> None:
        doc.dimstyles.get("Standard").dxf.dimlunit = 4
        space.add_lwpolyline([(0, 0), (1200, 0), (1200, 800)])
        space.add_linear_dim((0, 50), (0, 0), (192, 0)).render()

    found = read(tmp_path, draw, units=4)
    assert found.length_unit == "inch"
    assert "feet and inches" in found.assumptions[0].basis


def test_dimension_texts_with_a_unit_settle_the_drawing(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_linear_dim((0, 50), (0, 0), (6.5, 0), text="6500 mm").render()
        space.add_line((0, 0), (900, 0))

    found = read(tmp_path, draw, units=0)
    assert found.length_unit == "m"
    assert "6500 mm" in found.assumptions[0].basis


def test_the_brief_overrides_what_the_drawing_says(tmp_path: Path) -> None:
    found = read(tmp_path, draw_pit(1), units=4, length_unit="metres")
    assert (found.length_unit, found.unit_scale, found.questions) == ("m", 1.0, ())


def test_an_unknown_unit_of_the_brief_is_one_clear_error(tmp_path: Path) -> None:
    with pytest.raises(InputError) as caught:
        read(tmp_path, draw_pit(1), length_unit="furlongs")
    assert caught.value.file == "drawing.dxf"
    assert "furlongs" in caught.value.problem


def test_a_plan_inside_one_block_is_measured_too(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        plan = doc.blocks.new("PLAN")
        draw_pit(1)(doc, plan)
        space.add_blockref("PLAN", (500, 500), dxfattribs={"xscale": 1000, "yscale": 1000})

    assert read(tmp_path, draw, units=0).length_unit == "mm"


@pytest.mark.parametrize(
    ("text", "metres"),
    [
        ("16'-0\"", 4.8768), ("5'-6\"", 1.6764), ("7 1/2\"", 0.1905), ("6'", 1.8288), ("6.50 m", 6.5), ("6500mm", 6.5),
        ("88 cm", 0.88), ("6500", None), ("", None), ("see plan", None), ("m", None),
    ],
)  # fmt: skip
def test_dimension_texts_are_read_with_their_unit(text: str, metres: float | None) -> None:
    # international foot 0.3048 m, inch 0.0254 m exactly
    assert written_length(text) == (None if metres is None else pytest.approx(metres))
