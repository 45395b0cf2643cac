"""Inserted blocks: scaled, mirrored, turned, nested, in arrays, with attributes; hand figures and a CAD library."""

from __future__ import annotations

import math
from collections import Counter
from pathlib import Path
from typing import Any

import ezdxf
import numpy as np
import pytest
from dxf_builder import assert_account_closes, flat, only_part, parts_of, read, save
from ezdxf import xclip
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ingest.dxf import blocks, draw
from ingest.dxf.reader import read_dxf
from ingest.errors import InputError

PILE = "PILE-750"


def add_pile(doc: Any, base: tuple[float, float] = (0, 0)) -> Any:
    block = doc.blocks.new(PILE, base_point=base)
    block.add_circle((0, 0), 0.375)
    block.add_line((-0.5, 0), (0.5, 0))
    return block


def test_an_insert_is_one_entity_with_the_parts_of_its_block(tmp_path: Path) -> None:
    def draw_piles(doc: Any, space: Any) -> None:
        add_pile(doc)
        for x in (0, 1, 2):
            space.add_blockref(PILE, (x, 5), dxfattribs={"layer": "WALL"})

    found = read(tmp_path, draw_piles)
    assert found.entities == 3
    assert Counter(part.form for part in found.parts) == {"circle": 3, "path": 3}
    circles = [part for part in found.parts if part.form == "circle"]
    assert [flat(part)[0] for part in circles] == [(0, 5), (1, 5), (2, 5)]
    assert {(part.radius, part.name) for part in circles} == {(0.375, PILE)}


def test_block_content_on_layer_0_takes_the_layer_of_its_insert(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        inner = doc.blocks.new("INNER")
        inner.add_circle((0, 0), 1)
        inner.add_line((0, 0), (1, 0), dxfattribs={"layer": "OWN"})
        outer = doc.blocks.new("OUTER")
        outer.add_blockref("INNER", (0, 0))
        outer.add_blockref("INNER", (5, 0), dxfattribs={"layer": "NESTED"})
        space.add_blockref("OUTER", (0, 0), dxfattribs={"layer": "PILES"})

    layers = Counter((part.form, part.layer) for part in parts_of(tmp_path, draw_block))
    assert layers == {("circle", "PILES"): 1, ("circle", "NESTED"): 1, ("path", "OWN"): 2}


def test_a_circle_scaled_evenly_stays_a_circle_and_unevenly_becomes_an_ellipse(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        doc.blocks.new("C").add_circle((1, 0), 1)
        for sx, sy in ((2, 2), (-2, 2), (3, 1)):
            space.add_blockref("C", (0, 0), dxfattribs={"xscale": sx, "yscale": sy, "rotation": 90})

    even, mirrored, uneven = parts_of(tmp_path, draw_block)
    assert (even.radius, flat(even)) == (pytest.approx(2), [(0, 2)])
    assert (mirrored.radius, flat(mirrored)) == (pytest.approx(2), [(0, -2)])
    assert (uneven.form, uneven.closed) == ("path", True)
    x, y = np.array(flat(uneven)).T
    assert x**2 + ((y - 3) / 3) ** 2 == pytest.approx(1, abs=1e-4)


def test_a_mirrored_arc_bends_to_the_other_side(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        block = doc.blocks.new("ARC")
        block.add_lwpolyline([(0, 0, 1), (2, 0, 0)], format="xyb")
        block.add_arc((0, 5), 1, 0, 90)
        space.add_blockref("ARC", (0, 0), dxfattribs={"yscale": -1})

    bulged, arc = parts_of(tmp_path, draw_block)
    assert max(y for _, y in flat(bulged)) == pytest.approx(1, abs=0.005)
    assert (flat(arc)[0], flat(arc)[-1]) == ((1, -5), (0, -6))


def test_an_array_of_inserts_is_one_entity_with_all_its_piles(tmp_path: Path) -> None:
    # rows and columns turn with the insert and are not scaled: by hand for 90 degrees
    def draw_array(doc: Any, space: Any) -> None:
        add_pile(doc)
        space.add_blockref(
            PILE, (10, 20),
            dxfattribs={"column_count": 3, "row_count": 2, "column_spacing": 4, "row_spacing": 6, "rotation": 90,
                        "xscale": 2, "yscale": 2},
        )  # fmt: skip

    found = read(tmp_path, draw_array)
    centres = sorted(flat(part)[0] for part in found.parts if part.form == "circle")
    assert found.entities == 1
    assert centres == [(4, 20), (4, 24), (4, 28), (10, 20), (10, 24), (10, 28)]
    assert {part.radius for part in found.parts if part.form == "circle"} == {0.75}
    assert any("row 2, column 3 of an array" in part.evidence for part in found.parts)


def test_the_base_point_of_a_block_lands_on_the_insert(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        doc.blocks.new("B", base_point=(3, 4)).add_line((3, 4), (5, 4))
        space.add_blockref("B", (10, 10), dxfattribs={"rotation": 90, "xscale": 2, "yscale": 2})

    assert flat(only_part(tmp_path, draw_block)) == [(10, 10), (10, 14)]


scales = st.sampled_from([-3.0, -1.0, 0.5, 1.0, 2.0])
spots = st.tuples(st.floats(-50, 50), st.floats(-50, 50), st.floats(-5, 5))
normals = st.sampled_from([(0, 0, 1), (0, 0, -1), (0.3, 0.2, 0.9), (1, 0, 0)])


@settings(max_examples=25, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    at=spots, inner_at=spots, turn=st.floats(0, 360), inner_turn=st.floats(0, 360), sx=scales, sy=scales, sz=scales,
    normal=normals, inner_normal=normals,
)  # fmt: skip
def test_nested_inserts_agree_with_a_cad_library(
    tmp_path: Path, at: Any, inner_at: Any, turn: float, inner_turn: float, sx: float, sy: float, sz: float,
    normal: Any, inner_normal: Any,
) -> None:  # fmt: skip
    def draw_nested(doc: Any, space: Any) -> None:
        doc.blocks.new("INNER", base_point=(1, -2, 0.5)).add_polyline3d([(0, 0, 0), (4, 0, 1), (4, 3, 2)])
        inner = {"rotation": inner_turn, "xscale": 2, "yscale": 2, "zscale": 2, "extrusion": inner_normal}
        doc.blocks.new("OUTER", base_point=(0.5, 0, 0)).add_blockref("INNER", inner_at, dxfattribs=inner)
        outer = {"rotation": turn, "xscale": sx, "yscale": sy, "zscale": sz, "extrusion": normal}
        space.add_blockref("OUTER", at, dxfattribs=outer)

    part = only_part(tmp_path, draw_nested)
    (insert,) = ezdxf.readfile(tmp_path / "drawing.dxf").modelspace()
    (inner,) = insert.doc.blocks.get("OUTER")
    placed = (inner.matrix44() @ insert.matrix44()).transform_vertices([(0, 0, 0), (4, 0, 1), (4, 3, 2)])
    assert np.array(part.points) == pytest.approx(np.array([tuple(p) for p in placed]), abs=1e-8)


def test_attributes_are_tags_of_every_part_and_texts_of_their_own(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        add_pile(doc)
        insert = space.add_blockref(PILE, (3, 4), dxfattribs={"layer": "WALL"})
        insert.add_attrib("NO", "P17", (3.5, 4.5), dxfattribs={"height": 0.2})
        insert.add_attrib("TOE", "-12.50", (3.5, 4.2), dxfattribs={"flags": 1})
        insert.add_attrib("EMPTY", "", (0, 0))

    found = read(tmp_path, draw_block)
    assert_account_closes(found)
    assert found.entities == 1
    circle = next(part for part in found.parts if part.form == "circle")
    assert circle.tags == {"NO": "P17", "TOE": "-12.50"}
    (text,) = [part for part in found.parts if part.form == "text"]
    assert (text.text, text.layer, flat(text), text.tags["attribute"]) == ("P17", "WALL", [(3.5, 4.5)], "NO")
    assert text.source == circle.source


def test_attributes_of_nested_inserts_reach_their_parts(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        add_pile(doc)
        plan = doc.blocks.new("PLAN")
        plan.add_blockref(PILE, (1, 0)).add_attrib("NO", "P1", (1, 1))
        space.add_blockref("PLAN", (10, 0), dxfattribs={"xscale": 2, "yscale": 2})

    parts = parts_of(tmp_path, draw_block)
    assert next(part for part in parts if part.form == "circle").tags["NO"] == "P1"
    text = next(part for part in parts if part.form == "text")
    assert (text.text, flat(text)) == ("P1", [(12, 2)])


def test_definitions_of_attributes_are_no_text_unless_they_are_constant(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        block = add_pile(doc)
        block.add_attdef("NO", (0, 1), "number?")
        block.add_attdef("KIND", (0, 2), "bored", dxfattribs={"flags": 2})
        space.add_blockref(PILE, (0, 0))

    assert [part.text for part in parts_of(tmp_path, draw_block) if part.text] == ["bored"]


def test_hidden_content_of_a_block_is_not_read(tmp_path: Path) -> None:
    # a block with several states of visibility keeps all of them, the unused ones marked invisible
    def draw_block(doc: Any, space: Any) -> None:
        block = doc.blocks.new("STATES")
        block.add_line((0, 0), (1, 0))
        block.add_line((0, 0), (9, 9), dxfattribs={"invisible": 1})
        space.add_blockref("STATES", (0, 0))

    assert flat(only_part(tmp_path, draw_block)) == [(0, 0), (1, 0)]


def test_widths_and_heights_scale_with_the_insert(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        inner = doc.blocks.new("WALL")
        inner.add_lwpolyline([(0, 0), (4, 0)], dxfattribs={"const_width": 0.3, "thickness": 2})
        inner.add_text("W1", height=0.1)
        doc.blocks.new("PLAN").add_blockref("WALL", (0, 0), dxfattribs={"xscale": 2, "yscale": 2, "zscale": 2})
        space.add_blockref("PLAN", (0, 0), dxfattribs={"zscale": 3})

    wall, text = parts_of(tmp_path, draw_block)
    assert wall.thickness == pytest.approx(0.6)
    assert (wall.z_bottom, wall.z_top) == (0, 12)
    assert float(text.tags["height"]) == pytest.approx(0.2)


def test_arcs_in_a_block_stay_within_five_millimetres_at_every_scale(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        doc.blocks.new("RING").add_arc((0, 0), 1, 0, 180)
        doc.blocks.new("BOW").add_lwpolyline([(-1, 0, -1), (1, 0, 0)], format="xyb")
        for name in ("RING", "BOW"):
            for scale in (1, 30):
                space.add_blockref(name, (0, 0), dxfattribs={"xscale": scale, "yscale": scale})

    for part, radius in zip(parts_of(tmp_path, draw_block), (1, 30, 1, 30), strict=True):
        points = np.array(part.points)[:, :2]
        middles = (points[1:] + points[:-1]) / 2
        assert radius - np.hypot(*middles.T).min() <= 0.005
        assert np.hypot(*points.T) == pytest.approx(radius)


def test_a_clipped_insert_shows_only_what_lies_inside(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        block = doc.blocks.new("PLAN")
        block.add_line((-10, 1), (10, 1))
        block.add_circle((2, 1), 0.5)
        block.add_circle((5, 1), 1)
        block.add_circle((20, 1), 1)
        block.add_lwpolyline([(4, 0), (6, 0), (6, 2), (4, 2)], close=True)
        block.add_solid([(4, 0), (6, 0), (4, 2), (6, 2)])
        insert = space.add_blockref("PLAN", (100, 0))
        xclip.XClip(insert).set_block_clipping_path([(0, 0), (5, 0), (5, 4), (0, 4)])

    found = read(tmp_path, draw_block)
    line, whole, half, ring, area = found.parts
    assert flat(line) == [(100, 1), (105, 1)]
    assert (whole.form, whole.radius) == ("circle", 0.5)
    assert half.form == "path"
    assert max(x for x, _ in flat(half)) <= 105
    assert max(x for x, _ in flat(ring)) == 105
    assert sorted(flat(area)) == [(104, 0), (104, 2), (105, 0), (105, 2)]
    assert all("clipping" in part.evidence for part in (line, half, ring, area))


def test_a_block_that_holds_itself_is_left_aside_by_name(tmp_path: Path) -> None:
    def draw_cycle(doc: Any, space: Any) -> None:
        one, two = doc.blocks.new("ONE"), doc.blocks.new("TWO")
        one.add_line((0, 0), (1, 0))
        one.add_blockref("TWO", (1, 0))
        two.add_blockref("ONE", (1, 0))
        space.add_blockref("ONE", (0, 0))
        space.add_line((0, 0), (5, 0))

    found = read(tmp_path, draw_cycle)
    assert_account_closes(found)
    assert len(found.parts) == 1
    assert found.ignored == {"insert of a block that holds itself or nests too deep": 1}
    assert "block-cycle" in {finding.code for finding in found.findings}


def test_a_block_that_grows_tenfold_at_each_level_is_left_aside(tmp_path: Path) -> None:
    def draw_bomb(doc: Any, space: Any) -> None:
        doc.blocks.new("L0").add_line((0, 0), (1, 0))
        for level in range(1, 12):
            block = doc.blocks.new(f"L{level}")
            for x in range(10):
                block.add_blockref(f"L{level - 1}", (x, 0))
        space.add_blockref("L11", (0, 0))
        space.add_blockref("L0", (0, 0), dxfattribs={"column_count": 30000, "row_count": 30000, "column_spacing": 1,
                                                     "row_spacing": 1})  # fmt: skip
        space.add_blockref("L2", (0, 0))

    found = read(tmp_path, draw_bomb)
    assert len(found.parts) == 100
    assert found.ignored == {f"insert that gives more than {blocks.MOST_FIGURES} figures": 2}
    assert "insert-too-large" in {finding.code for finding in found.findings}


def test_inserts_that_together_outgrow_memory_stop_the_reading(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(draw, "MOST_PARTS", 50)

    def draw_many(doc: Any, space: Any) -> None:
        add_pile(doc)
        for x in range(30):
            space.add_blockref(PILE, (x, 0))

    with pytest.raises(InputError, match="more than 50 figures"):
        read(tmp_path, draw_many)


def test_inserts_of_missing_and_foreign_blocks_are_told(tmp_path: Path) -> None:
    def draw_missing(doc: Any, space: Any) -> None:
        space.add_blockref("NOWHERE", (0, 0))
        doc.add_xref_def("survey.dwg", "SURVEY")
        space.add_blockref("SURVEY", (0, 0))
        doc.blocks.new("EMPTY")
        space.add_blockref("EMPTY", (0, 0))

    found = read(tmp_path, draw_missing)
    assert_account_closes(found)
    assert found.ignored == {
        "insert of a block that is not in the file": 1,
        "other drawing attached by reference: not read": 1,
    }
    assert found.context == {"insert that draws nothing": 1}
    assert any("survey.dwg" in finding.text for finding in found.findings)


def test_solids_inside_blocks_are_told_though_the_insert_is_read(tmp_path: Path) -> None:
    def draw_block(doc: Any, space: Any) -> None:
        block = add_pile(doc)
        block.add_3dsolid().sat = ["400 0 1 0"]
        for x in (0, 1):
            space.add_blockref(PILE, (x, 0), dxfattribs={"xscale": 1 + x})

    found = read(tmp_path, draw_block)
    assert found.losses == ("inside blocks: 1 x 3D solid: not read",)
    assert any("1 more inside blocks" in finding.text for finding in found.findings)


def test_a_table_gives_its_words_and_not_its_rules(tmp_path: Path) -> None:
    def draw_table(doc: Any, space: Any) -> None:
        block = doc.blocks.new("*T1")
        block.add_line((0, 0), (10, 0))
        block.add_mtext("P1 Ø750").set_location((1, 1))
        space.add_blockref("*T1", (5, 5))

    path = save(tmp_path, draw_table, version="R2007")
    head, tail = path.read_text(encoding="utf-8").split("ENTITIES", 1)
    # the library writes no tables: an insert of the table's block is turned into one
    path.write_text(head + "ENTITIES" + tail.replace("INSERT", "ACAD_TABLE", 1), encoding="utf-8")
    (part,) = read_dxf(path).parts
    assert (part.form, part.text, flat(part)) == ("text", "P1 Ø750", [(6, 6)])


def test_turning_a_ring_of_piles_about_its_middle_keeps_their_radius(tmp_path: Path) -> None:
    def draw_ring(doc: Any, space: Any) -> None:
        add_pile(doc)
        for k in range(12):
            turn = k * 30
            space.add_blockref(
                PILE, (6 * math.cos(math.radians(turn)), 6 * math.sin(math.radians(turn))),
                dxfattribs={"rotation": turn},
            )  # fmt: skip

    circles = [part for part in parts_of(tmp_path, draw_ring) if part.form == "circle"]
    assert [math.hypot(*part.points[0][:2]) for part in circles] == pytest.approx([6.0] * 12)
