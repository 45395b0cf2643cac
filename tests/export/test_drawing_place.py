"""The plan overlay lies on the drawing it was made from, and the reader knows its own drawings again."""

from __future__ import annotations

from dataclasses import replace
from math import cos, radians, sin
from pathlib import Path

import ezdxf
import numpy as np
import pytest
from builders_export import CORNERS, Job, first_pit_job
from ezdxf import transform
from ezdxf.addons.importer import Importer
from ezdxf.math import Matrix44

from export.drawing import write_drawings
from export.drawing_place import DrawingPlace
from export.drawing_style import LAYERS
from ingest.dxf.reader import read_dxf
from ingest.model import InputFile, Registered, Site
from ingest.site import read_site
from ingest.words import is_own_layer

PIT = Path(__file__).parents[2] / "samples" / "first_pit"
SHIFT, TURN = (512.0, -340.0), 30.0
FILES = '[files."{name}"]\nlength_unit = "mm"\nshift = [512.0, -340.0]\nrotation_deg = 30.0\n'


def turned_job() -> Job:
    """The first pit from one drawing in millimetres, turned by 30 degrees and shifted onto the site."""
    job = first_pit_job()
    drawing = replace(job.site.inputs[0], length_unit="mm", registered=Registered(shift=SHIFT, rotation_deg=TURN))
    return replace(job, site=replace(job.site, inputs=(drawing, *job.site.inputs[1:])))


def in_drawing(x: float, y: float) -> tuple[float, float]:
    """World metres to the drawing: p = Rz(-30 deg) (world - shift), in mm."""
    c, s = cos(radians(TURN)), sin(radians(TURN))
    dx, dy = x - SHIFT[0], y - SHIFT[1]
    return 1000 * (c * dx + s * dy), 1000 * (-s * dx + c * dy)


def test_the_plan_stands_in_the_unit_and_coordinates_of_the_source(tmp_path: Path) -> None:
    job = turned_job()
    write_drawings(job.proposal, job.definitions, job.site, tmp_path)
    drawing = ezdxf.readfile(tmp_path / "plan.dxf")
    audit = drawing.audit()
    assert (audit.errors, audit.fixes) == ([], [])
    assert drawing.header["$INSUNITS"] == 4
    assert drawing.header["$LTSCALE"] == 1000.0
    (line,) = drawing.modelspace().query('LWPOLYLINE[layer=="GQPERIM-E-"]')
    for (x, y, *_), corner in zip(line.get_points(), CORNERS, strict=True):
        assert (x, y) == pytest.approx(in_drawing(*corner), abs=1e-6)
    letters = {entity.dxf.height for entity in drawing.modelspace().query("TEXT")}
    assert min(letters) == pytest.approx(200.0)
    assert any("first_pit.dxf, unit mm" in entity.dxf.text for entity in drawing.modelspace().query("TEXT"))
    assert ezdxf.readfile(tmp_path / "sections/S1.dxf").header["$INSUNITS"] == 6


def test_the_reader_reads_the_cuts_back(tmp_path: Path) -> None:
    job = turned_job()
    write_drawings(job.proposal, job.definitions, job.site, tmp_path)
    read = read_dxf(tmp_path / "plan.dxf")
    assert (read.length_unit, read.findings) == ("mm", ())
    c, s = cos(radians(TURN)), sin(radians(TURN))
    found = set()
    for part in read.parts:
        if part.layer == "GQCUTS--E-" and part.form == "path":
            (ax, ay, _), (bx, by, _) = part.points
            ends = [(SHIFT[0] + c * x - s * y, SHIFT[1] + s * x + c * y) for x, y in ((ax, ay), (bx, by))]
            found.add(tuple(round(value, 4) for end in ends for value in end))
    cuts = {tuple(value for end in section.line for value in end) for section in job.proposal.sections}
    assert len(cuts) == 2
    assert cuts <= found


@pytest.fixture(scope="module")
def overlaid(tmp_path_factory: pytest.TempPathFactory) -> tuple[Site, Site]:
    """The sample drawing in millimetres, turned and shifted: alone, and with the plan drawn over it in one file."""
    folder = tmp_path_factory.mktemp("overlaid")
    drawing = ezdxf.readfile(PIT / "first_pit.dxf")
    c, s = 1000 * cos(radians(-TURN)), 1000 * sin(radians(-TURN))
    (x, y), matrix = SHIFT, (c, s, 0, 0, -s, c, 0, 0, 0, 0, 1000, 0)
    transform.inplace(drawing.modelspace(), Matrix44((*matrix, s * y - c * x, -s * x - c * y, 0, 1)))
    drawing.header["$INSUNITS"] = 4
    drawing.saveas(folder / "pit.dxf")
    job = turned_job()
    write_drawings(job.proposal, job.definitions, job.site, folder)
    brief = (PIT / "brief.toml").read_text(encoding="utf-8")
    both = ezdxf.readfile(folder / "pit.dxf")
    for name in ("plan.dxf", "sections/S1.dxf"):
        other = ezdxf.readfile(folder / name)
        importer = Importer(other, both)
        importer.import_modelspace()
        importer.finalize()
    both.saveas(folder / "both.dxf")
    sites = []
    for name in ("pit.dxf", "both.dxf"):
        (folder / f"{name}.toml").write_text(f"{brief}\n{FILES.format(name=name)}", encoding="utf-8")
        sites.append(read_site([folder / name], folder / f"{name}.toml"))
    return sites[0], sites[1]


def test_the_drawings_laid_into_the_source_change_nothing_that_is_read(overlaid: tuple[Site, Site]) -> None:
    alone, both = overlaid
    assert len(alone.piles) == 100
    for name in ("walls", "piles", "supports", "walers", "plates", "loads", "receptors", "boreholes", "floors"):
        before, after = getattr(alone, name), getattr(both, name)
        assert [_place(one) for one in before] == [_place(one) for one in after], name
    assert both.questions == ()
    before, after = (sum(entry.used for entry in site.ledger.values()) for site in overlaid)
    assert before == after
    assert sum(entry.context for entry in both.ledger.values()) > 50


def _place(record: object) -> tuple[object, ...]:
    names = ("centre", "head", "far", "axis", "outline", "points", "diameter", "value", "kind", "role", "level")
    return tuple(getattr(record, name, None) for name in names)


def test_the_drawing_that_was_turned_is_the_first_pit(overlaid: tuple[Site, Site]) -> None:
    centres = np.array([pile.centre for pile in overlaid[0].piles])
    assert centres.min(axis=0) == pytest.approx((100.0, 200.0), abs=1e-6)
    assert centres.max(axis=0) == pytest.approx((130.0, 220.0), abs=1e-6)


def test_every_layer_of_the_tool_is_known_as_its_own() -> None:
    assert all(is_own_layer(row[3]) for row in LAYERS.values())
    assert not any(is_own_layer(name) for name in ("G-WALL--E-", "WALL-PILES-CONTIGUOUS", "GQ", "GQWALL--E", "GC-MUR"))


@pytest.mark.parametrize(
    ("kinds", "source"), [(("dxf", "ags", "brief"), "a.dxf"), (("dxf", "dxf"), ""), (("dxf", "ifc"), ""), ((), "")]
)
def test_the_plan_lies_on_a_drawing_only_where_it_is_the_only_one(kinds: tuple[str, ...], source: str) -> None:
    inputs = tuple(
        InputFile(
            file=f"{'abc'[n]}.{kind}", sha256="", kind=kind, schema_or_version="", length_unit="mm",  # type: ignore[arg-type]
            registered=Registered(),
        )
        for n, kind in enumerate(kinds)
    )  # fmt: skip
    place = DrawingPlace.of(Site(inputs=inputs))
    assert place.source == source
    assert place.insunits == (4 if source else 6)
