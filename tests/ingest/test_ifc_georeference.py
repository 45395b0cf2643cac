"""Map conversion: the formula of the standard, and the scales that real files get wrong."""

from __future__ import annotations

import re
from math import cos, radians, sin
from pathlib import Path

import ifcopenshell.util.geolocation
import pytest
from ifc_builder import IfcBuilder

from ingest.ifc.georeference import map_matrix
from ingest.ifc.reader import read_ifc

approx = pytest.approx
C, S = cos(radians(30)), sin(radians(30))


def test_the_conversion_has_its_published_value() -> None:
    # formula of IfcMapConversion: eastings 500000, northings 180000, scale 0.001, 30 degrees, x = 10000, y = 2000
    matrix = map_matrix((500000.0, 180000.0, 12.0), (C, S), 0.001, 1.0, 1.0)
    east, north, height, _ = matrix @ (10000.0, 2000.0, 3000.0, 1.0)
    assert (east, north) == (approx(500007.6602540378, abs=1e-9), approx(180006.7320508076, abs=1e-9))
    assert height == approx(15.0)


def test_it_agrees_with_the_librarys_own_conversion() -> None:
    east, north, height = ifcopenshell.util.geolocation.xyz2enh(10, 2, 3, 500000, 180000, 12, C, S, 1.0)
    assert tuple(map_matrix((500000, 180000, 12), (C, S), 1.0, 1.0, 1.0) @ (10, 2, 3, 1))[:3] == (
        approx(east),
        approx(north),
        approx(height),
    )


def pile(
    unit: str = "MILLIMETRE", scale: float | None = 0.001, map_unit: str | None = "METRE", **more: float
) -> IfcBuilder:
    model = IfcBuilder(unit=unit)
    factor = {"MILLIMETRE": 1000.0, "METRE": 1.0}[unit]
    model.pile("P", at=(10 * factor, 2 * factor, 0), diameter=0.6 * factor, length=8 * factor)
    unit_entity = None if map_unit is None else model.length_unit(map_unit)
    east, north = more.get("east", 500000.0), more.get("north", 180000.0)
    model.map_conversion(east, north, 12.0, C, S, scale=scale, map_unit=unit_entity)
    return model


WORLD = (500000 + 10 * C - 2 * S, 180000 + 10 * S + 2 * C, 12.0)


def test_parts_stand_in_world_coordinates(tmp_path: Path) -> None:
    read = read_ifc(pile().save(tmp_path / "m.ifc"))
    (part,) = read.parts
    assert part.points[0] == approx(WORLD, abs=1e-6)
    assert (part.radius, part.z_bottom, read.crs) == (approx(0.3), approx(4.0), "EPSG:27700")
    assert not read.assumptions


def test_a_missing_scale_is_the_ratio_of_the_units(tmp_path: Path) -> None:
    read = read_ifc(pile(scale=None).save(tmp_path / "m.ifc"))
    assert read.parts[0].points[0] == approx(WORLD, abs=1e-6)
    assert [assumption.code for assumption in read.assumptions] == ["map-scale-missing"]


@pytest.mark.parametrize("scale", [1.0, 1000.0, 0.01])
def test_a_scale_that_would_blow_up_the_model_is_not_taken(scale: float, tmp_path: Path) -> None:
    read = read_ifc(pile(scale=scale).save(tmp_path / "m.ifc"))
    assert read.parts[0].radius == approx(0.3)
    assert [assumption.code for assumption in read.assumptions] == ["map-scale-wrong"]


def test_without_a_map_unit_the_numbers_are_project_units(tmp_path: Path) -> None:
    model = pile(scale=None, map_unit=None, east=500000e3, north=180000e3)
    conversion = model.file.by_type("IfcMapConversion")[0]
    conversion.OrthogonalHeight = 12000.0
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.parts[0].points[0] == approx(WORLD, abs=1e-6)
    assert not read.assumptions


def test_a_grid_scale_factor_is_applied_and_named(tmp_path: Path) -> None:
    read = read_ifc(pile(scale=0.0009996).save(tmp_path / "m.ifc"))
    assert read.parts[0].points[0][0] == approx(500000 + 0.9996 * (10 * C - 2 * S), abs=1e-6)
    assert "ifc-map-scale-factor" in [finding.code for finding in read.findings]


def test_an_incomplete_conversion_leaves_model_coordinates(tmp_path: Path) -> None:
    path = pile().save(tmp_path / "m.ifc")
    text, count = re.subn(r"(IFCMAPCONVERSION\(#\d+,#\d+),[^,]*,[^,]*,", r"\1,$,$,", path.read_text())
    assert count == 1
    path.write_text(text)
    read = read_ifc(path)
    assert read.parts[0].points[0] == approx((10, 2, 0))
    assert "ifc-map-conversion-unread" in [finding.code for finding in read.findings]


def test_a_rigid_operation_shifts(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    model.pile("P", at=(10, 2, 0), diameter=0.6, length=8)
    crs = model.file.create_entity("IfcProjectedCRS", Name="local grid")
    numbers = [model.measure("IfcLengthMeasure", value) for value in (1000.0, 2000.0)]
    model.file.create_entity("IfcRigidOperation", model.model_context, crs, *numbers, 50.0)
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert (read.parts[0].points[0], read.crs) == (approx((1010, 2002, 50)), "local grid")


def test_the_site_placement_counts_without_a_conversion(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.site.ObjectPlacement.RelativePlacement = model.axis3((300, 400, 5), first=(0, 1, 0))
    model.pile("P", at=(10, 2, 0), diameter=0.6, length=8)
    # turned by 90 degrees: (10, 2) -> (-2, 10)
    assert read_ifc(model.save(tmp_path / "m.ifc")).parts[0].points[0] == approx((298, 410, 5))


def test_an_old_schema_may_carry_it_in_property_sets(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC2X3", unit="MILLIMETRE")
    model.pile("P", at=(10000, 2000, 0), diameter=600, length=8000)
    values = {"Eastings": 500000.0, "Northings": 180000.0, "OrthogonalHeight": 12.0, "XAxisAbscissa": C,
              "XAxisOrdinate": S, "Scale": 0.001}  # fmt: skip
    model.properties(model.site, "ePSet_MapConversion", **{k: model.measure("IfcReal", v) for k, v in values.items()})
    model.properties(model.site, "ePSet_ProjectedCRS", Name=model.measure("IfcLabel", "EPSG:27700"))
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.parts[0].points[0] == approx(WORLD, abs=1e-6)
    assert read.crs == "EPSG:27700"


def test_true_north_is_named_and_nothing_turned(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.model_context.TrueNorth = model.direction((1.0, 1.0))
    model.pile("P", at=(10, 2, 0), diameter=0.6, length=8)
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.parts[0].points[0] == approx((10, 2, 0))
    assert "45.0000 degrees" in read.findings[0].text
