"""Units of IFC files against the definitions: SI prefixes, the foot of 1959, the survey foot, the degree."""

from __future__ import annotations

from math import pi
from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.errors import InputError
from ingest.ifc.reader import read_ifc
from ingest.ifc.units import read_units

approx = pytest.approx


def one_pile(model: IfcBuilder, size: float = 1.0) -> IfcBuilder:
    model.pile("P", at=(0, 0, 0), diameter=0.6 * size, length=10 * size)
    model.pile("Q", at=(20 * size, 0, 0), diameter=0.6 * size, length=10 * size)
    return model


@pytest.mark.parametrize(
    ("unit", "metres", "name"),
    [
        ("METRE", 1.0, "m"),
        ("CENTIMETRE", 0.01, "cm"),
        ("MILLIMETRE", 0.001, "mm"),
        ("FOOT", 0.3048, "foot"),  # international yard and pound agreement, 1959
        ("INCH", 0.0254, "inch"),
        ("US SURVEY FOOT", 1200 / 3937, "us_survey_foot"),  # Mendenhall order, 1893
    ],
)
def test_the_length_unit_is_read_by_its_definition(unit: str, metres: float, name: str, tmp_path: Path) -> None:
    read = read_ifc(one_pile(IfcBuilder(unit=unit), 1 / metres).save(tmp_path / "m.ifc"))
    assert (read.length_unit, read.unit_scale) == (name, approx(metres, rel=1e-12))
    assert read.parts[0].z_bottom == approx(-10)


def test_the_engineers_word_stands_above_the_file(tmp_path: Path) -> None:
    path = one_pile(IfcBuilder(unit="MILLIMETRE")).save(tmp_path / "m.ifc")
    read = read_ifc(path, length_unit="metre")
    assert (read.length_unit, read.parts[0].z_bottom) == ("m", approx(-10))
    assert not read.questions


def test_a_misspelt_length_unit_is_refused(tmp_path: Path) -> None:
    path = one_pile(IfcBuilder()).save(tmp_path / "m.ifc")
    with pytest.raises(InputError, match="nearest known unit is metre"):
        read_ifc(path, length_unit="metrez")


def test_millimetres_that_hold_metres_are_asked_about(tmp_path: Path) -> None:
    read = read_ifc(one_pile(IfcBuilder(unit="MILLIMETRE")).save(tmp_path / "m.ifc"))
    assert [finding.code for finding in read.findings] == ["ifc-unit-size"]
    assert 'length_unit = "m"' in read.questions[0].brief_line


@pytest.mark.parametrize(("size", "unit"), [(1.0, "m"), (1000.0, "mm")])
def test_a_missing_unit_is_assumed_by_the_size_of_the_site(size: float, unit: str, tmp_path: Path) -> None:
    read = read_ifc(one_pile(IfcBuilder(unit=None), size).save(tmp_path / "m.ifc"))
    assert read.length_unit == unit
    assert read.parts[0].z_bottom == approx(-10)
    assert [assumption.code for assumption in read.assumptions] == ["length-unit"]
    assert len(read.questions) == 1


def test_a_bare_number_as_conversion_factor_is_read(tmp_path: Path) -> None:
    path = one_pile(IfcBuilder(unit="FOOT"), 1 / 0.3048).save(tmp_path / "m.ifc")
    text = path.read_text()
    assert "IFCRATIOMEASURE(0.3048)" in text
    path.write_text(text.replace("IFCRATIOMEASURE(0.3048)", "0.3048"))
    assert read_ifc(path).unit_scale == approx(0.3048, rel=1e-12)


def test_a_foot_without_a_factor_has_the_one_of_its_definition(tmp_path: Path) -> None:
    model = one_pile(IfcBuilder(unit="FOOT"), 1 / 0.3048)
    unit = model.file.by_type("IfcConversionBasedUnit")[0]
    unit.ConversionFactor.ValueComponent = model.file.create_entity("IfcRatioMeasure", 0.0)
    assert read_ifc(model.save(tmp_path / "m.ifc")).unit_scale == approx(0.3048, rel=1e-12)


def test_square_and_cubic_feet_typed_as_lengths_are_not_taken(tmp_path: Path) -> None:
    model = one_pile(IfcBuilder(unit="FOOT"), 1 / 0.3048)
    units = model.project.UnitsInContext
    metre = model.file.create_entity("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
    wrong = [
        model.converted("LENGTHUNIT", name, model.file.create_entity("IfcRatioMeasure", 0.3048**power), metre)
        for name, power in (("ft2", 2), ("ft3", 3))
    ]
    units.Units = [*wrong, *units.Units]
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.unit_scale == approx(0.3048, rel=1e-12)
    assert [finding.code for finding in read.findings] == ["ifc-unit"]


def test_the_degree_is_read_for_trimmed_arcs(tmp_path: Path) -> None:
    model = IfcBuilder(angle="DEGREE")
    circle = model.file.create_entity("IfcCircle", model.axis2(), 10.0)
    trims = [[model.measure("IfcParameterValue", angle)] for angle in (0.0, 90.0)]
    arc = model.file.create_entity("IfcTrimmedCurve", circle, *trims, True, "PARAMETER")
    model.product("IfcWall", "W", axis=arc)
    part = read_ifc(model.save(tmp_path / "m.ifc")).parts[0]
    assert (part.points[0], part.points[-1]) == (approx((10, 0, 0)), approx((0, 10, 0)))


def test_forces_pressures_and_angles_become_kilonewtons_kilopascals_and_degrees() -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    model.force_unit()
    units = read_units(model.file, "m.ifc")
    assert units.factor("IfcPositiveLengthMeasure") == approx(1e-3)
    assert units.factor("IfcAreaMeasure") == approx(1e-6)
    assert units.factor("IfcForceMeasure") == approx(1.0)  # the project's own unit is the kN
    assert units.factor("IfcPlanarForceMeasure") == approx(1e6)  # kN/mm2, built from both
    assert units.factor("IfcPressureMeasure") == approx(1e-3)  # pascal: no unit of its own is assigned
    assert units.factor("IfcPlaneAngleMeasure") == approx(180 / pi)
    assert units.factor("IfcLabel") is None


def test_properties_are_converted_where_their_measure_is_known(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    pile = model.pile("P", at=(0, 0, 0), diameter=600, length=10000)
    model.properties(
        pile,
        "Pset_Own",
        Diameter=model.measure("IfcPositiveLengthMeasure", 600.0),
        Capacity=model.measure("IfcForceMeasure", 1.5e6),
        Inclination=model.measure("IfcPlaneAngleMeasure", pi / 6),
        Count=model.measure("IfcInteger", 4),
        Tested=model.measure("IfcBoolean", True),
        Level=model.measure("IfcText", " -9.000"),
        Length=model.measure("IfcReal", 10.0),
    )
    tags = read_ifc(model.save(tmp_path / "m.ifc")).parts[0].tags
    assert (tags["Diameter"], tags["Capacity"], tags["Inclination"]) == ("0.6", "1500", "30")
    assert (tags["Count"], tags["Tested"], tags["Level"], tags["Length"]) == ("4", "true", " -9.000", "10")


def test_a_property_with_a_unit_of_its_own_is_converted_by_it(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    pile = model.pile("P", at=(0, 0, 0), diameter=600, length=10000)
    pset = model.properties(pile, "Pset_Own", Cover=model.measure("IfcLengthMeasure", 3.0))
    pset.HasProperties[0].Unit = model.length_unit("INCH")
    assert read_ifc(model.save(tmp_path / "m.ifc")).parts[0].tags["Cover"] == "0.0762"


def test_one_name_in_two_sets_keeps_both_values(tmp_path: Path) -> None:
    model = IfcBuilder()
    pile = model.pile("P", at=(0, 0, 0), diameter=0.6, length=10)
    model.properties(pile, "Design", Load=model.measure("IfcForceMeasure", 1000.0))
    model.properties(pile, "Test", Load=model.measure("IfcForceMeasure", 1500.0))
    tags = read_ifc(model.save(tmp_path / "m.ifc")).parts[0].tags
    assert (tags["Load"], tags["Test: Load"]) == ("1", "1.5")
