"""Implied bodies as IFC: valid, true to size by the geometry kernel, laid where the model received lies."""

from __future__ import annotations

from dataclasses import replace
from math import cos, pi, radians, sin
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.util.element
import ifcopenshell.util.geolocation
import ifcopenshell.util.shape
import ifcopenshell.validate
import numpy as np
import pytest
from builders_bim import DEPTH, RADIUS, THICKNESS, model_job, ring_job
from builders_export import STRUT_EA, Job, bare_job, empty_job, first_pit_job, showcase_job

from export.implied_ifc import write_implied_ifc
from ingest.brief import Brief
from ingest.ifc.reader import read_ifc
from ingest.model import ModelPlace
from ingest.roles import find_role
from ingest.surroundings import Place

BAY = 5.0
GEOREFERENCED = ModelPlace(origin=(438000.0, 286000.0, 5.0), rotation_deg=12.0, scale=0.9996, given=True)


def written(job: Job, folder: Path) -> Any:
    assert write_implied_ifc(job.proposal, job.definitions, job.site, folder) == "implied.ifc"
    return ifcopenshell.open(str(folder / "implied.ifc"))


def body(model: Any, name: str) -> Any:
    (found,) = [one for one in model.by_type("IfcBuildingElementProxy") if one.Name == name]
    return found


def shape(element: Any) -> Any:
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    return ifcopenshell.geom.create_shape(settings, element).geometry


def problems(model: Any, express_rules: bool = False) -> list[Any]:
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(model, logger, express_rules=express_rules)
    return list(logger.statements)


@pytest.mark.parametrize("make", [first_pit_job, showcase_job, ring_job, bare_job, empty_job])
def test_the_file_is_valid_by_the_schema(make: Any, tmp_path: Path) -> None:
    model = written(make(), tmp_path)
    assert model.schema_identifier == "IFC4X3_ADD2"
    assert problems(model) == []


@pytest.mark.slow
@pytest.mark.filterwarnings("ignore::pytest.PytestUnraisableExceptionWarning")  # the library leaves its rules open
@pytest.mark.parametrize("make", [showcase_job, ring_job])
def test_the_file_is_valid_by_the_rules_of_the_schema_too(make: Any, tmp_path: Path) -> None:
    assert problems(written(make(), tmp_path), express_rules=True) == []


def test_a_planted_fault_is_found(tmp_path: Path) -> None:
    model = written(first_pit_job(), tmp_path)
    model.by_type("IfcBuildingElementProxy")[0].GlobalId = "not an id"
    assert problems(model)


def test_bodies_of_a_plane_section_are_as_large_as_one_bay_of_it(tmp_path: Path) -> None:
    # Struts at 5 m: the bay. Wall: thickness of the section D sqrt(3)/2 (rectangle of equal I and A) x 12 m deep.
    # Strut: a sheet of the section's stiffness, t = EA'/E = 1038685.93 / 210e6 m, over 20 m. Footing 2 m, drawn 0.1 m.
    model = written(first_pit_job(), tmp_path)
    thickness = 0.75 * 3**0.5 / 2
    for name, volume in (
        ("S1 P1-wall-1", thickness * 12.0 * BAY),
        ("S1 P1-strut-1", STRUT_EA / 5.0 / 210e6 * 20.0 * BAY),
        ("S1 P1-footing-1", 2.0 * 0.1 * BAY),
    ):
        assert ifcopenshell.util.shape.get_volume(shape(body(model, name))) == pytest.approx(volume, rel=1e-3), name


def test_bodies_stand_where_the_section_has_them_in_the_world(tmp_path: Path) -> None:
    # S1 runs north at x = 115 from y = 182: wall 1 stands at y = 200, the bay reaches 2.5 m to either side of the cut.
    model = written(first_pit_job(), tmp_path)
    xyz = np.array(shape(body(model, "S1 P1-wall-1")).verts).reshape(-1, 3)
    half = 0.75 * 3**0.5 / 4
    assert xyz.min(axis=0) == pytest.approx((112.5, 200.0 - half, -12.0), abs=1e-5)
    assert xyz.max(axis=0) == pytest.approx((117.5, 200.0 + half, 0.0), abs=1e-5)


def test_bodies_of_a_ring_are_turned_about_its_axis(tmp_path: Path) -> None:
    # Pappus: volume = area x 2 pi r. Ring beam: square of area EA/E = 0.25 m2. The kernel's facets lie inside the
    # circle, so the volume is a little less (its default deflection is 1 mm).
    model = written(ring_job(), tmp_path)
    for name, area in (("S1 P1-wall-1", THICKNESS * DEPTH), ("S1 P1-waler-1", 0.25)):
        made = shape(body(model, name))
        assert ifcopenshell.util.shape.get_volume(made) == pytest.approx(area * 2 * pi * RADIUS, rel=0.01), name
        xyz = np.array(made.verts).reshape(-1, 3)
        middle = (xyz.min(axis=0) + xyz.max(axis=0))[:2] / 2
        assert middle == pytest.approx((115.0, 210.0), abs=0.02)


def test_a_model_that_was_georeferenced_is_met_in_its_own_coordinates_and_on_the_map(tmp_path: Path) -> None:
    model = written(model_job(GEOREFERENCED, "grid"), tmp_path)
    (conversion,) = model.by_type("IfcMapConversion")
    assert (conversion.Eastings, conversion.Northings, conversion.OrthogonalHeight) == (438000.0, 286000.0, 5.0)
    assert (conversion.XAxisAbscissa, conversion.XAxisOrdinate) == pytest.approx((cos(radians(12)), sin(radians(12))))
    assert conversion.Scale == pytest.approx(0.9996)
    assert conversion.TargetCRS.Name == "grid"
    xyz = np.array(shape(body(model, "S1 P1-wall-1")).verts).reshape(-1, 3)
    world = np.array([ifcopenshell.util.geolocation.auto_xyz2enh(model, *point) for point in xyz.tolist()])
    half = 0.75 * 3**0.5 / 4
    assert world.min(axis=0) == pytest.approx((112.5, 200.0 - half, -12.0), abs=2e-3)
    assert world.max(axis=0) == pytest.approx((117.5, 200.0 + half, 0.0), abs=2e-3)


def test_the_files_own_reader_finds_the_bodies_in_the_world_and_takes_them_for_context(tmp_path: Path) -> None:
    written(model_job(GEOREFERENCED, "grid"), tmp_path)
    read = read_ifc(tmp_path / "implied.ifc")
    assert read.place is not None
    assert read.place.origin == pytest.approx(GEOREFERENCED.origin, abs=1e-6)
    assert (read.place.rotation_deg, read.place.scale) == pytest.approx((12.0, 0.9996))
    assert read.crs == "grid"
    assert len(read.parts) == 7  # two walls and a strut in each of two sections, and a footing
    assert {find_role(part, Brief(), Place()).role for part in read.parts} == {"context"}
    wall = next(part for part in read.parts if part.name == "S1 P1-wall-1")
    assert min(x for x, *_ in wall.points) == pytest.approx(112.5, abs=1e-3)


def test_property_sets_name_the_real_elements_and_carry_the_values_per_metre(tmp_path: Path) -> None:
    job = model_job()
    model = written(job, tmp_path)
    sets = ifcopenshell.util.element.get_psets(body(model, "S1 P1-strut-1"))
    assert sets["Cutworthy_PerMetre"]["EA_kN_per_m"] == pytest.approx(STRUT_EA / 5.0, rel=1e-8)
    assert sets["Cutworthy_Real"]["spacing"] == 5.0
    assert sets["Cutworthy_Real"]["Elements"] == ["first_pit.dxf: 201"]
    assert sets["Cutworthy_Implied"]["stiffness"].startswith("real 5.193")
    assert "licensed engineer" in sets["Cutworthy_Implied"]["Notice"]
    group = next(one for one in model.by_type("IfcGroup") if one.Name == "Section S1")
    assert ifcopenshell.util.element.get_psets(group)["Cutworthy_Section"]["Bay_m"] == BAY
    assert "licensed engineer" in model.by_type("IfcProject")[0].Description


def test_no_body_counts_as_a_real_wall_or_member(tmp_path: Path) -> None:
    model = written(showcase_job(), tmp_path)
    assert {one.is_a() for one in model.by_type("IfcElement")} == {"IfcBuildingElementProxy"}


@pytest.mark.parametrize("make", [first_pit_job, model_job, ring_job])
def test_the_same_job_gives_the_same_bytes_and_no_id_twice(make: Any, tmp_path: Path) -> None:
    model = written(make(), tmp_path)
    before = (tmp_path / "implied.ifc").read_bytes()
    written(make(), tmp_path)
    assert (tmp_path / "implied.ifc").read_bytes() == before
    ids = [one.GlobalId for one in model.by_type("IfcRoot")]
    assert len(ids) == len(set(ids))


def test_without_a_model_bodies_stand_in_the_world_or_on_the_grid_that_is_named(tmp_path: Path) -> None:
    # Shift of 438 km and 286 km, as the frame of a site far out has it.
    plain = written(far_job(None), tmp_path)
    assert len(plain.by_type("IfcMapConversion")) == 0
    xyz = np.array(shape(body(plain, "S1 P1-wall-1")).verts).reshape(-1, 3)
    assert xyz.min(axis=0)[0] == pytest.approx(438112.5, abs=1e-3)
    on_grid = written(far_job("grid"), tmp_path)
    assert on_grid.by_type("IfcMapConversion")[0].Eastings == 438000.0
    near = np.array(shape(body(on_grid, "S1 P1-wall-1")).verts).reshape(-1, 3)
    assert near.min(axis=0)[0] == pytest.approx(112.5, abs=1e-5)
    assert ifcopenshell.util.geolocation.auto_xyz2enh(on_grid, *near.min(axis=0).tolist())[0] == pytest.approx(438112.5)


def far_job(crs: str | None) -> Job:
    job = first_pit_job()
    east, north = 438000.0, 286000.0
    frame = replace(job.proposal.frame, offset=(east, north, 0.0), crs=crs)
    lines = [[(x + east, y + north) for x, y in one.line] for one in job.definitions]
    definitions = tuple(replace(one, line=(a, b)) for one, (a, b) in zip(job.definitions, lines, strict=True))
    return Job(site=job.site, proposal=replace(job.proposal, frame=frame), definitions=definitions)
