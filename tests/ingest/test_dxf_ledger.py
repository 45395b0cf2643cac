"""Every entity of a drawing is accounted for, in every release of the format, as text and binary."""

from __future__ import annotations

import os
from collections import Counter
from pathlib import Path
from typing import Any

import ezdxf
import numpy as np
import pytest
from dxf_builder import assert_account_closes, read, save
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ingest.dxf import draw
from ingest.dxf.reader import read_dxf
from ingest.dxf.tagscan import scan_tags

RELEASES = ["R12", "R2000", "R2004", "R2007", "R2010", "R2013", "R2018"]


def draw_simple(doc: Any, space: Any) -> None:
    """What every release can hold."""
    doc.layers.add("WALL")
    doc.blocks.new("PILE").add_circle((0, 0), 0.375)
    for k in range(5):
        space.add_blockref("PILE", (k, 0), dxfattribs={"layer": "WALL"})
    space.add_line((0, 0), (30, 20), dxfattribs={"layer": "STRUTS"})
    space.add_polyline2d([(0, 0, 1), (10, 0, 0)], format="xyb")
    space.add_arc((5, 5), 2, 30, 120)
    space.add_text("Sohle \u00b10,00", height=0.25).set_placement((1, 1))
    space.add_point((1, 2, 3))


@pytest.mark.parametrize("binary", [False, True])
@pytest.mark.parametrize("version", RELEASES)
def test_every_release_gives_the_same_parts(tmp_path: Path, version: str, binary: bool) -> None:
    found = read(tmp_path, draw_simple, version=version, binary=binary, length_unit="m")
    other = read(tmp_path, draw_simple, version="R2010", length_unit="m")
    assert_account_closes(found)
    assert found.entities == other.entities == 10
    assert found.schema_or_version.startswith(f"{version} (AC10")
    for one, two in zip(found.parts, other.parts, strict=True):
        assert (one.form, one.layer, one.cls, one.text, one.radius) == (
            two.form,
            two.layer,
            two.cls,
            two.text,
            two.radius,
        )
        assert np.array(one.points) == pytest.approx(np.array(two.points), abs=1e-9)


@pytest.mark.parametrize("binary", [False, True])
@pytest.mark.parametrize("version", RELEASES)
def test_the_bare_tags_hold_as_many_entities_as_the_library_loads(tmp_path: Path, version: str, binary: bool) -> None:
    path = save(tmp_path, draw_simple, version=version, binary=binary)
    tags = scan_tags(path.read_bytes())
    document = ezdxf.readfile(path)
    assert tags.ended
    assert tags.count_entities() == Counter(e.dxftype() for block in document.blocks for e in block)
    assert tags.header("$ACADVER") == document.dxfversion


def test_paper_space_and_unused_blocks_are_counted_and_left_aside(tmp_path: Path) -> None:
    def draw_all(doc: Any, space: Any) -> None:
        draw_simple(doc, space)
        sheet, second = doc.layout("Layout1"), doc.new_layout("Section A")
        sheet.add_line((0, 0), (1, 0))
        sheet.add_text("title")
        second.add_line((0, 0), (1, 0))
        unused = doc.blocks.new("UNUSED")
        unused.add_line((0, 0), (1, 0))
        unused.add_blockref("DEEPER", (0, 0))
        doc.blocks.new("DEEPER").add_line((0, 0), (1, 0))
        doc.blocks.new("ON SHEET").add_line((0, 0), (1, 0))
        second.add_blockref("ON SHEET", (0, 0))

    found = read(tmp_path, draw_all)
    assert_account_closes(found)
    assert found.ignored == {"paper space": 4, "block never inserted": 3}
    assert found.entities == 10 + 4 + 3
    assert "paper-space" in {finding.code for finding in found.findings}


def test_entities_without_handles_are_known_by_their_line(tmp_path: Path) -> None:
    path = tmp_path / "bare.dxf"
    line = "  0\nLINE\n  8\n0\n 10\n0.0\n 20\n0.0\n 11\n{}.0\n 21\n9.0\n"
    text = "  0\nSECTION\n  2\nENTITIES\n" + line.format(1) + line.format(2) + "  0\nENDSEC\n  0\nEOF\n"
    path.write_text(text)
    items = [part.source.item for part in read_dxf(path).parts]
    assert items == ["line 6", "line 18"]
    assert [text.splitlines()[int(item.split()[1]) - 1] for item in items] == ["LINE", "LINE"]


kinds = st.lists(
    st.sampled_from(["line", "dot", "circle", "text", "blank", "insert", "missing", "array", "hidden", "ray", "sheet"]),
    max_size=30,
)


@settings(max_examples=25, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(chosen=kinds, chunk=st.integers(1, 7))
def test_the_account_closes_whatever_a_drawing_holds(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, chosen: list[str], chunk: int
) -> None:
    def draw_chosen(doc: Any, space: Any) -> None:
        doc.blocks.new("PILE").add_circle((0, 0), 0.375)
        for k, kind in enumerate(chosen):
            add = {
                "line": lambda k=k: space.add_line((k, 0), (k, 9)),
                "dot": lambda k=k: space.add_line((k, 0), (k, 0)),
                "circle": lambda k=k: space.add_circle((k, 0), 1),
                "text": lambda: space.add_text("-6.00"),
                "blank": lambda: space.add_text(""),
                "insert": lambda k=k: space.add_blockref("PILE", (k, 0)),
                "missing": lambda: space.add_blockref("NOWHERE", (0, 0)),
                "array": lambda: space.add_blockref(
                    "PILE", (0, 0), dxfattribs={"column_count": 4, "column_spacing": 1}
                ),
                "hidden": lambda: space.add_line((0, 0), (1, 1), dxfattribs={"invisible": 1}),
                "ray": lambda: space.add_ray((0, 0), (1, 0)),
                "sheet": lambda: doc.layout("Layout1").add_line((0, 0), (1, 1)),
            }
            add[kind]()

    monkeypatch.setattr(draw, "CHUNK", chunk)
    found = read(tmp_path, draw_chosen)
    assert_account_closes(found)
    # a block nobody inserts counts its one circle
    unused = 0 if {"insert", "array"} & set(chosen) else 1
    assert found.entities == len(chosen) + unused
    assert sum(part.form == "circle" for part in found.parts) == (
        chosen.count("circle") + chosen.count("insert") + 4 * chosen.count("array")
    )


def test_the_same_file_gives_the_same_reading(tmp_path: Path) -> None:
    path = save(tmp_path, draw_simple)
    assert read_dxf(path) == read_dxf(path)


def test_progress_is_told_chunk_by_chunk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(draw, "CHUNK", 4)
    done: list[int] = []
    read_dxf(save(tmp_path, draw_simple), progress=done.append)
    assert done == [4, 8, 10]


def test_a_georeference_is_told_and_not_applied(tmp_path: Path) -> None:
    def draw_place(doc: Any, space: Any) -> None:
        space.add_line((0, 0), (30, 0))
        data = space.new_geodata()
        data.coordinate_system_definition = "<x/>"
        data.dxf.design_point = (10, 20, 0)
        data.dxf.reference_point = (530207.5, 179366.75, 0)

    found = read(tmp_path, draw_place)
    (finding,) = [f for f in found.findings if f.code == "georeference"]
    assert "(10, 20)" in finding.text
    assert "(530207.5, 179366.75)" in finding.text
    assert found.parts[0].points[0] == (0, 0, 0)


def corpus() -> list[Path]:
    folder = os.environ.get("CUTWORTHY_CORPUS")
    return sorted((Path(folder) / "dxf").glob("*.dxf")) if folder else []


@pytest.mark.corpus
@pytest.mark.parametrize("path", corpus(), ids=lambda path: path.stem)
def test_real_drawings_are_read_and_their_account_closes(path: Path) -> None:
    found = read_dxf(path)
    assert_account_closes(found)
    assert found.entities > 0
    assert all(np.isfinite(part.points).all() for part in found.parts)
    expected = Counter(e.dxftype() for e in _modelspace(path))
    assert found.entities >= sum(expected.values())
    if found.parts:
        assert {part.source.file for part in found.parts} == {path.name}


@pytest.mark.corpus
@pytest.mark.parametrize("path", corpus(), ids=lambda path: path.stem)
def test_real_linework_stands_where_a_cad_library_puts_it(path: Path) -> None:
    """Boxes round lines, polylines, arcs and circles of the modelspace, against the library's own curves."""
    from ezdxf.path import make_path

    found = read_dxf(path)
    boxes: dict[str, list[np.ndarray]] = {}
    for part in found.parts:
        if part.cls in ("LINE", "LWPOLYLINE", "ARC", "CIRCLE", "ELLIPSE", "SPLINE") and part.source.item:
            points = np.array(part.points)
            reach = np.array([part.radius, part.radius, 0.0]) if part.radius else np.zeros(3)
            boxes.setdefault(part.source.item, []).extend([points - reach, points + reach])
    fine = 0.001 / found.unit_scale
    for entity in _modelspace(path):
        own = boxes.get(entity.dxf.handle)
        width = entity.dxftype() == "LWPOLYLINE" and entity.has_width
        if own is None or entity.dxftype() not in ("LINE", "LWPOLYLINE", "ARC", "CIRCLE", "ELLIPSE") or width:
            continue
        wanted = np.array([tuple(p) for p in make_path(entity).flattening(fine)]) * found.unit_scale
        have = np.concatenate(own)
        assert have.min(axis=0) == pytest.approx(wanted.min(axis=0), abs=0.0061), entity
        assert have.max(axis=0) == pytest.approx(wanted.max(axis=0), abs=0.0061), entity


def _modelspace(path: Path) -> list[Any]:
    from ezdxf import recover

    try:
        return list(ezdxf.readfile(path).modelspace())
    except (ValueError, ezdxf.DXFError):
        return list(recover.readfile(path)[0].modelspace())


@pytest.mark.corpus
def test_a_house_in_inches_that_says_millimetres_is_found_out() -> None:
    # the corpus' own note: garage opening 192 is 16 feet
    path = next(p for p in corpus() if p.stem == "floor-plan-house-01")
    found = read_dxf(path)
    assert found.length_unit == "inch"
    assert found.questions
    measured = [float(part.tags["measured"]) for part in found.parts if part.cls == "DIMENSION"]
    assert any(length == pytest.approx(16 * 0.3048, abs=1e-4) for length in measured)
