"""Areas and second moments of profiles, against handbook figures and an independent library."""

from __future__ import annotations

from math import pi
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from ifc_builder import IfcBuilder

from ingest.ifc.curves import CurveReader
from ingest.ifc.profiles import Profile, ProfileReader, moments

approx = pytest.approx


def read(kind: str, *values: Any) -> Profile:
    model = IfcBuilder()
    entity = model.file.create_entity(kind, "AREA", "p", model.axis2(), *values)
    return ProfileReader(CurveReader(1e-3, 1.0)).read(entity)


# Tables of EN 10365 and EN 10056, recalled: area cm2, second moment about the main axis cm4; sizes in mm.
@pytest.mark.parametrize(
    ("kind", "sizes", "area", "second"),
    [
        ("IfcIShapeProfileDef", (300.0, 300.0, 11.0, 19.0, 27.0), 149.1, 25170.0),  # HEB 300
        ("IfcIShapeProfileDef", (150.0, 300.0, 7.1, 10.7, 15.0), 53.81, 8356.0),  # IPE 300
        ("IfcUShapeProfileDef", (300.0, 100.0, 9.5, 15.0, 15.0, 0.0), 56.6, 7823.0),  # UPE 300
    ],
)
def test_rolled_sections_have_the_figures_of_the_tables(
    kind: str, sizes: tuple[float, ...], area: float, second: float
) -> None:
    found = moments(read(kind, *sizes))
    assert approx(area, rel=2e-3) == found.A / 100
    assert found.Ixx / 1e4 == approx(second, rel=2e-3)


@pytest.mark.parametrize("name", ["HEA200", "HEB300", "HEM600", "IPE300", "UPE300", "UC152x152x37", "L100x100x10"])
def test_a_section_agrees_with_an_independent_library(name: str) -> None:
    from structuralcodes.geometry import profiles

    family = next(f for f in (profiles.HE, profiles.IPE, profiles.UPE, profiles.UC, profiles.L) if name in f.profiles())
    other = family(name)
    if family is profiles.L:
        found = moments(read("IfcLShapeProfileDef", other.h, other.b, other.t, other.r1, other.r2))
    elif family is profiles.UPE:
        found = moments(read("IfcUShapeProfileDef", other.h, other.b, other.tw, other.tf, other.r, 0.0))
    else:
        found = moments(read("IfcIShapeProfileDef", other.b, other.h, other.tw, other.tf, other.r))
    assert approx(other.A, rel=2e-3) == found.A
    assert found.largest[0] == approx(max(other.Icsi, other.Ieta), rel=3e-3)


def test_round_sections_are_exact() -> None:
    full, tube = read("IfcCircleProfileDef", 0.375), read("IfcCircleHollowProfileDef", 0.254, 0.016)
    assert (moments(full).A, moments(full).Ixx) == (approx(pi * 0.375**2), approx(pi * 0.375**4 / 4))
    assert approx(pi * (0.254**2 - 0.238**2)) == moments(tube).A


def test_hollow_and_rounded_rectangles() -> None:
    # RHS 200 x 100 x 8, sharp corners: A = bd - (b - 2t)(d - 2t)
    hollow = moments(read("IfcRectangleHollowProfileDef", 200.0, 100.0, 8.0, None, None))
    assert approx(200 * 100 - 184 * 84) == hollow.A
    # rounded corners take away (4 - pi) r2
    rounded = moments(read("IfcRoundedRectangleProfileDef", 300.0, 200.0, 30.0))
    assert approx(300 * 200 - (4 - pi) * 30**2, rel=1e-3) == rounded.A


def test_cold_formed_sections_have_the_area_of_their_sheet() -> None:
    # sharp corners: web d t + flanges 2 (b - t) t + lips 2 (g - t) t
    c = moments(read("IfcCShapeProfileDef", 200.0, 75.0, 3.0, 20.0, None))
    assert approx(200 * 3 + 2 * 72 * 3 + 2 * 17 * 3) == c.A
    z = moments(read("IfcZShapeProfileDef", 200.0, 60.0, 6.0, 8.0, None, None))
    assert approx(200 * 6 + 2 * 54 * 8) == z.A


def test_an_asymmetric_section_has_its_centroid_towards_the_wide_flange() -> None:
    model = IfcBuilder()
    entity = model.file.create_entity(
        "IfcAsymmetricIShapeProfileDef", ProfileType="AREA", Position=model.axis2(), BottomFlangeWidth=400.0,
        OverallDepth=500.0, WebThickness=12.0, BottomFlangeThickness=25.0, TopFlangeWidth=200.0,
        TopFlangeThickness=15.0,
    )  # fmt: skip
    found = moments(ProfileReader(CurveReader(1e-3, 1.0)).read(entity))
    area = 400 * 25 + 200 * 15 + 460 * 12
    first = 400 * 25 * (-250 + 12.5) + 200 * 15 * (250 - 7.5) + 460 * 12 * 5
    assert (found.A, found.y) == (approx(area), approx(first / area))


def test_voids_composites_and_derived_profiles() -> None:
    model = IfcBuilder()
    reader = ProfileReader(CurveReader(1.0, 1.0))
    outer, inner = ((0, 0), (4, 0), (4, 2), (0, 2)), ((1, 0.5), (2, 0.5), (2, 1.5), (1, 1.5))
    holed = model.outline(*outer, holes=[inner])
    assert approx(8 - 1) == moments(reader.read(holed)).A
    both = model.file.create_entity(
        "IfcCompositeProfileDef", "AREA", None, [model.rectangle(2, 1), model.rectangle(2, 1, (5, 0))]
    )
    assert (moments(reader.read(both)).A, moments(reader.read(both)).x) == (approx(4), approx(2.5))
    operator = model.file.create_entity(
        "IfcCartesianTransformationOperator2D", model.direction((0, 1)), None, model.point((10, 0)), 2.0
    )
    derived = model.file.create_entity("IfcDerivedProfileDef", "AREA", None, holed, operator)
    found, base = moments(reader.read(derived)), moments(reader.read(holed))
    # twice the size, turned by 90 degrees: (x, y) -> (10 - 2 y, 2 x)
    assert (found.A, found.x, found.y) == (approx(4 * 7), approx(10 - 2 * base.y), approx(2 * base.x))
    assert found.Iyy == approx(16 * base.Ixx)


@settings(max_examples=30, deadline=None)
@given(b=st.floats(0.1, 2), d=st.floats(0.1, 2), x=st.floats(-3, 3), y=st.floats(-3, 3), turn=st.floats(-3.1, 3.1))
def test_moments_do_not_depend_on_where_a_rectangle_lies(b: float, d: float, x: float, y: float, turn: float) -> None:
    from math import cos, sin

    lying = moments(Profile("rectangle", "", (x, y), (cos(turn), sin(turn)), (b, d)))
    assert approx(b * d) == lying.A
    assert lying.Ixx + lying.Iyy == approx(b * d**3 / 12 + d * b**3 / 12)
    assert lying.largest[0] == approx(max(b * d**3, d * b**3) / 12)
    assert lying.about((cos(turn), sin(turn))) == approx(b * d**3 / 12)


@pytest.mark.parametrize(
    ("kind", "values"),
    [
        ("IfcCircleProfileDef", (0.0,)),
        ("IfcRectangleProfileDef", (1.0, -2.0)),
        ("IfcCircleHollowProfileDef", (0.2, 0.3)),
        ("IfcIShapeProfileDef", (100.0, 200.0, 120.0, 10.0)),
        ("IfcRectangleHollowProfileDef", (100.0, 100.0, 60.0)),
    ],
)
def test_sizes_that_make_no_section_are_refused(kind: str, values: tuple[float, ...]) -> None:
    with pytest.raises(ValueError, match=r"size|wall|section"):
        read(kind, *values)
