"""Layer names: fields of ISO 13567-2, prefixes of bound drawings, escapes, words; hidden and left-out layers."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from dxf_builder import assert_account_closes, parts_of, read

from ingest.dxf.layers import layer_words, read_iso_fields, split_xref

# ISO 13567-2:2017, clauses 6.1 to 6.3 and 7.1 to 7.7: agent 2, element 6, presentation 2, status 1, sector 4, phase 1,
# projection 1, scale 1, work package 2, user defined; widths from a published summary of the clauses
NAME = "A-" + "B374--" + "E-" + "N" + "0102" + "1" + "P" + "C" + "B1" + "ROOF"


def test_the_fields_of_a_standard_name_stand_at_their_places() -> None:
    fields = read_iso_fields(NAME)
    assert fields is not None
    assert (fields.agent, fields.element, fields.presentation) == ("A-", "B374--", "E-")
    assert (fields.status, fields.sector, fields.phase, fields.projection) == ("N", "0102", "1", "P")
    assert (fields.scale, fields.work_package, fields.user) == ("C", "B1", "ROOF")


@pytest.mark.parametrize("length", range(10, len(NAME)))
def test_optional_fields_may_be_left_off_from_the_end(length: int) -> None:
    fields = read_iso_fields(NAME[:length])
    assert fields is not None
    joined = "".join(getattr(fields, name) for name in fields.__slots__)
    assert joined == NAME[:length]


@pytest.mark.parametrize(
    "name", ["A-WALL", "A-WALL-FULL-EXST", "WALL-PILES-CONTIGUOUS", "STRUTS", "0", "Baugrube", "A-B374", "1234567890"]
)
def test_plain_names_are_not_taken_for_standard_ones(name: str) -> None:
    assert read_iso_fields(name) is None


def test_a_standard_name_is_found_behind_the_prefix_of_a_bound_drawing() -> None:
    fields = read_iso_fields("xref-plan$0$S-C250--H-")
    assert fields is not None
    assert (fields.agent, fields.element, fields.presentation) == ("S-", "C250--", "H-")


@pytest.mark.parametrize(
    ("name", "drawing", "own"),
    [
        ("xref-Bishop-Overland-08$0$A-WALL", "xref-Bishop-Overland-08", "A-WALL"),
        ("plan|WAND", "plan", "WAND"),
        ("a$0$b$0$c", "a$0$b", "c"),
        ("PLAIN", "", "PLAIN"),
        ("US$ RATE", "", "US$ RATE"),
    ],
)
def test_the_prefix_of_a_bound_drawing_is_taken_off(name: str, drawing: str, own: str) -> None:
    assert split_xref(name) == (drawing, own)


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("xref-house$0$A-WALL", ("a", "wall")),
        ("BaugrubenVerbau_02", ("baugruben", "verbau", "02")),
        (r"\U+039B\U+0391_WALL", ("\u03bb\u03b1", "wall")),
        ("pieux s\u00e9cants", ("pieux", "s\u00e9cants")),
        ("PILE750", ("pile", "750")),
        ("A-B374--E-N01021PCB1ROOF", ("b", "374", "roof")),
    ],
)
def test_a_layer_name_falls_into_words(name: str, words: tuple[str, ...]) -> None:
    assert layer_words(name) == words


def test_escaped_layer_names_are_read_as_the_draughtsman_sees_them(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_line((0, 0), (9, 0), dxfattribs={"layer": r"\U+039B\U+0391\U+0393"})

    (part,) = parts_of(tmp_path, draw, version="R12")
    assert part.layer == "\u039b\u0391\u0393"


def test_content_of_hidden_layers_is_read_marked_and_told(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        doc.layers.add("OLD").off()
        doc.layers.add("COLD").freeze()
        doc.blocks.new("B").add_line((0, 0), (1, 0), dxfattribs={"layer": "OLD"})
        for layer in ("OLD", "COLD", "SHOWN"):
            space.add_line((0, 0), (9, 0), dxfattribs={"layer": layer})
        space.add_blockref("B", (0, 0))

    found = read(tmp_path, draw)
    states = [part.tags.get("layer_state") for part in found.parts if part.layer != "SHOWN"]
    assert sorted(states) == ["frozen", "off", "off"]
    (finding,) = [f for f in found.findings if f.code == "layer-hidden"]
    assert "COLD (frozen)" in finding.text
    assert "OLD (off)" in finding.text
    assert "SHOWN" not in finding.text


def test_layers_the_brief_leaves_out_are_ignored_by_that_reason(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        block = doc.blocks.new("B")
        block.add_line((0, 0), (1, 0), dxfattribs={"layer": "Furniture"})
        block.add_circle((0, 0), 1)
        space.add_line((0, 0), (9, 0), dxfattribs={"layer": "FURNITURE"})
        space.add_blockref("B", (0, 0), dxfattribs={"layer": "furniture"})
        space.add_blockref("B", (0, 0), dxfattribs={"layer": "PILES"})

    found = read(tmp_path, draw, ignore_layers=("furniture",))
    assert_account_closes(found)
    assert found.ignored == {"layer ignored by the brief": 2}
    assert [(part.form, part.layer) for part in found.parts] == [("circle", "PILES")]


def test_a_misspelt_layer_of_the_brief_gets_the_nearest_name(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_line((0, 0), (9, 0), dxfattribs={"layer": "FURNITURE"})

    found = read(tmp_path, draw, ignore_layers=("FURNITUR",))
    (finding,) = [f for f in found.findings if f.code == "layer-unknown"]
    assert 'nearest is "FURNITURE"' in finding.text
    assert len(found.parts) == 1
