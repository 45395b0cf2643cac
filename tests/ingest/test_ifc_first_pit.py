"""The sample basement as IFC says the same as its drawing, and its script writes the same bytes each time."""

from __future__ import annotations

import importlib.util
from collections import Counter
from math import pi
from pathlib import Path
from types import ModuleType

import pytest

from ingest.ifc.reader import read_ifc
from ingest.parts import FileParts

approx = pytest.approx
SAMPLES = Path(__file__).parents[2] / "samples"


def load(name: str) -> ModuleType:
    spec = importlib.util.spec_from_file_location(name, SAMPLES / f"{name}.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="module")
def read() -> FileParts:
    return read_ifc(SAMPLES / "first_pit_ifc" / "first_pit.ifc")


def test_everything_of_the_model_is_used(read: FileParts) -> None:
    assert (read.entities, read.context, read.ignored, read.losses) == (112, {}, {}, ())
    layers = {"WALL-PILES-CONTIGUOUS": 100, "STRUTS": 10, "WALER": 1, "FOOTING-NEIGHBOUR": 1}
    assert Counter(part.layer for part in read.parts) == layers


def test_piles_stand_where_the_drawing_has_them(read: FileParts) -> None:
    drawing = load("make_first_pit")
    piles = [part for part in read.parts if part.cls == "IfcPile"]
    assert [part.points[0][:2] for part in piles] == [approx(centre, abs=1e-9) for centre in drawing.pile_centres()]
    assert {(part.radius, part.z_top, part.z_bottom) for part in piles} == {(0.375, 0.0, -12.0)}


def test_struts_run_where_the_drawing_has_them(read: FileParts) -> None:
    drawing = load("make_first_pit")
    struts = [part for part in read.parts if part.layer == "STRUTS"]
    for part, (start, end) in zip(struts, drawing.strut_lines(), strict=True):
        assert part.points == (approx((*start, -1.5), abs=1e-9), approx((*end, -1.5), abs=1e-9))
    section = struts[0].section
    assert section is not None
    # CHS 508 x 16: A = pi (508^2 - 476^2) / 4 mm2
    assert (section.designation, section.A) == ("CHS 508x16", approx(pi * (0.508**2 - 0.476**2) / 4))


def test_waler_and_footing_are_those_of_the_drawing(read: FileParts) -> None:
    waler = next(part for part in read.parts if part.layer == "WALER")
    inset = 0.75 / 2 + 0.15
    assert (waler.form, waler.closed, len(waler.points)) == ("path", True, 4)
    assert waler.points[0] == approx((100 + inset, 200 + inset, -1.5))
    footing = next(part for part in read.parts if part.cls == "IfcFooting")
    assert sorted(point[:2] for point in footing.points) == [
        approx(corner) for corner in ((113.5, 222), (113.5, 224), (116.5, 222), (116.5, 224))
    ]
    assert footing.z_bottom == approx(-1.0)


def test_the_script_writes_the_same_bytes(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    module = load("make_first_pit_ifc")
    monkeypatch.setattr(module, "FOLDER", tmp_path)
    module.write_model()
    assert (tmp_path / "first_pit.ifc").read_bytes() == (SAMPLES / "first_pit_ifc" / "first_pit.ifc").read_bytes()
