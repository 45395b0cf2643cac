"""Piles, king posts, struts, rakers, anchors: small models built here, compared with numbers worked by hand."""

from __future__ import annotations

from math import cos, pi, radians, sin
from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.ifc.reader import read_ifc
from ingest.parts import FileParts, Part

approx = pytest.approx


def read(model: IfcBuilder, folder: Path) -> FileParts:
    return read_ifc(model.save(folder / "model.ifc"))


def only(model: IfcBuilder, folder: Path) -> Part:
    read_parts = read(model, folder)
    assert len(read_parts.parts) == 1, read_parts.ignored
    return read_parts.parts[0]


@pytest.mark.parametrize(("unit", "metres"), [("METRE", 1.0), ("MILLIMETRE", 1e-3), ("FOOT", 0.3048), ("INCH", 0.0254)])
def test_a_round_pile_is_a_circle_with_head_and_toe(unit: str, metres: float, tmp_path: Path) -> None:
    model = IfcBuilder(unit=unit)
    model.pile("P1", at=(1.0 / metres, 2.0 / metres, -0.5 / metres), diameter=0.75 / metres, length=12.0 / metres)
    part = only(model, tmp_path)
    assert (part.form, part.cls, part.name) == ("circle", "IfcPile", "P1")
    assert part.points[0] == approx((1.0, 2.0, -0.5))
    assert (part.radius, part.z_top, part.z_bottom) == (approx(0.375), approx(-0.5), approx(-12.5))


def test_a_pile_extruded_upwards_has_its_head_on_top(tmp_path: Path) -> None:
    model = IfcBuilder()
    body = model.extrusion(model.circle(0.9), 15.0, at=(0, 0, -15))
    model.product("IfcPile", "P1", at=(3, 4, 1), body=body)
    part = only(model, tmp_path)
    assert (part.points[0], part.z_top, part.z_bottom) == (approx((3, 4, 1)), approx(1), approx(-14))


def test_piles_take_their_shape_from_the_type(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2", unit="FOOT")
    body = model.extrusion(model.circle(1.5, 0.03125, "18 in. x 0.375 in."), 40.0, way=(0, 0, -1))
    source = model.mapped([body], model.operator())
    kind = model.root("IfcPileType", "steel pipe", PredefinedType="USERDEFINED", ElementType="HAMMERED")
    piles = [
        model.product("IfcPile", f"P{i}", at=(10 * i, 0, 0), body=source, body_type="MappedRepresentation")
        for i in range(3)
    ]
    model.typed(kind, piles)
    parts = read(model, tmp_path).parts
    assert [part.points[0][0] for part in parts] == approx([0.0, 3.048, 6.096])
    assert parts[1].radius == approx(0.75 * 0.3048)
    assert parts[1].thickness == approx(0.375 * 0.0254)  # 3/8 inch wall, from the designation
    assert parts[1].z_bottom == approx(-40 * 0.3048)
    assert (parts[1].tags["PredefinedType"], parts[1].tags["ElementType"]) == ("USERDEFINED", "HAMMERED")
    assert parts[1].section is not None
    assert parts[1].section.designation == "18 in. x 0.375 in."


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_a_mapped_copy_may_be_scaled_and_mirrored(scale: float, tmp_path: Path) -> None:
    model = IfcBuilder()
    body = model.extrusion(model.circle(1.0), 10.0, at=(2, 1, 0), way=(0, 0, -1))
    operator = model.operator(at=(100, 0, 0), x=(-1, 0, 0), y=(0, 1, 0), z=(0, 0, 1), scale=scale)
    model.product("IfcPile", "P", body=model.mapped([body], operator), body_type="MappedRepresentation")
    part = only(model, tmp_path)
    # mirrored in x about the operator's origin: x = 100 - 2 s, y = s
    assert part.points[0] == approx((100 - 2 * scale, scale, 0))
    assert (part.radius, part.z_bottom) == (approx(0.5 * scale), approx(-10 * scale))


def test_a_raked_pile_is_a_bar_with_its_head_first(tmp_path: Path) -> None:
    model = IfcBuilder()
    way = (sin(radians(10)), 0.0, -cos(radians(10)))
    body = model.extrusion(model.circle(0.6), 20.0, way=way)
    model.product("IfcPile", "raked", at=(5, 5, 0), body=body)
    part = only(model, tmp_path)
    assert part.form == "bar"
    assert part.points[0] == approx((5, 5, 0))
    assert part.points[1] == approx((5 + 20 * sin(radians(10)), 5, -20 * cos(radians(10))))
    assert part.section is not None
    assert part.section.diameter == approx(0.6)


def test_a_strut_runs_along_its_centroid_with_its_section(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    model.bar("S1", (0, 5000, -1500), (20000, 5000, -1500), model.circle(508, 16, "CHS 508x16"))
    part = only(model, tmp_path)
    assert (part.form, part.cls) == ("bar", "IfcMember")
    assert part.points == (approx((0, 5, -1.5)), approx((20, 5, -1.5)))
    assert part.section is not None
    # ring: A = pi (R2 - r2), I = pi (R4 - r4) / 4
    assert approx(pi * (0.254**2 - 0.238**2)) == part.section.A
    assert approx(pi * (0.254**4 - 0.238**4) / 4) == part.section.I
    assert part.section.designation == "CHS 508x16"


def test_depth_and_inertia_of_a_beam_follow_the_vertical(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.bar("W", (0, 0, 0), (10, 0, 0), model.rectangle(0.3, 0.6), kind="IfcBeam")
    part = only(model, tmp_path)
    assert part.section is not None
    # `bar` keeps the profile's x axis level: 0.3 wide, 0.6 deep
    assert (part.section.width, part.section.depth) == (approx(0.3), approx(0.6))
    assert approx(0.3 * 0.6**3 / 12) == part.section.I


def test_the_end_of_a_bar_off_its_profile_centre_is_its_centroid(tmp_path: Path) -> None:
    model = IfcBuilder()
    profile = model.outline((0, 0), (0.4, 0), (0.4, 0.2), (0, 0.2))
    body = model.extrusion(profile, 6.0, up=(1, 0, 0), first=(0, 1, 0))
    model.product("IfcBeam", "B", at=(0, 0, 10), body=body)
    part = only(model, tmp_path)
    # profile x runs along site y, profile y along site z: centroid at y 0.2, z 10.1
    assert part.points == (approx((0, 0.2, 10.1)), approx((6, 0.2, 10.1)))


def test_a_king_post_stands_upright_with_the_direction_of_its_depth(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    profile = model.file.create_entity(
        "IfcIShapeProfileDef", "AREA", "HEB 300", model.axis2(), 300.0, 300.0, 11.0, 19.0, 27.0
    )
    model.product("IfcColumn", "K1", at=(0, 0, -9000), first=(0, 1, 0), body=model.extrusion(profile, 9500))
    part = only(model, tmp_path)
    assert part.points == (approx((0, 0, 0.5)), approx((0, 0, -9)))
    assert part.section is not None
    # HEB 300: A = 149.1 cm2, Iy = 25170 cm4 (EN 10365 tables, recalled)
    assert approx(149.1e-4, rel=2e-3) == part.section.A
    assert approx(25170e-8, rel=2e-3) == part.section.I
    assert float(part.tags["DepthDirection"]) == approx(180.0, abs=1e-6) or float(part.tags["DepthDirection"]) == 0.0


def test_a_bar_cut_by_planes_ends_where_they_meet_its_centroid(tmp_path: Path) -> None:
    model = IfcBuilder()
    raw = model.extrusion(model.rectangle(0.2, 0.2), 10.0, up=(1, 0, 0), first=(0, 1, 0))
    plane = model.file.create_entity("IfcPlane", model.axis3((8, 0, 0), up=(1, 0, 1), first=(0, 1, 0)))
    half = model.file.create_entity("IfcHalfSpaceSolid", plane, False)
    cut = model.file.create_entity("IfcBooleanClippingResult", "DIFFERENCE", raw, half)
    model.product("IfcMember", "raker", body=cut, body_type="Clipping")
    part = only(model, tmp_path)
    # the half space above the plane is taken away; its normal is (1, 0, 1), the plane meets z = 0 at x = 8
    assert part.points[1] == approx((8, 0, 0))
    assert "cut by planes" in part.evidence


@pytest.mark.parametrize("schema", ["IFC4", "IFC4X3_ADD2"])
def test_an_anchor_may_be_swept_or_only_drawn_as_its_axis(schema: str, tmp_path: Path) -> None:
    model = IfcBuilder(schema=schema)
    line = model.polyline((0, 0, -2), (9, 0, -6))
    disk = model.file.create_entity("IfcSweptDiskSolid", line, 0.066, None)
    model.product("IfcTendon", "A1", body=disk, body_type="AdvancedSweptSolid")
    model.product("IfcTendon", "A2", at=(0, 3, 0), axis=model.polyline((0, 0, -2), (9, 0, -6)))
    first, second = read(model, tmp_path).parts
    assert (first.form, second.form) == ("bar", "bar")
    assert first.points == (approx((0, 0, -2)), approx((9, 0, -6)))
    assert second.points == (approx((0, 3, -2)), approx((9, 3, -6)))
    assert first.section is not None
    assert first.section.diameter == approx(0.132)
    assert "axis only" in second.evidence


def test_an_upright_swept_disc_is_a_pile(tmp_path: Path) -> None:
    model = IfcBuilder()
    disk = model.file.create_entity("IfcSweptDiskSolid", model.polyline((1, 1, -8), (1, 1, 0)), 0.3, None)
    model.product("IfcPile", "P", body=disk, body_type="AdvancedSweptSolid")
    part = only(model, tmp_path)
    assert (part.form, part.radius, part.z_top, part.z_bottom) == ("circle", approx(0.3), approx(0), approx(-8))


def test_a_meshed_pile_is_fitted_with_its_residual(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    ring = [(2 + 0.5 * cos(2 * pi * i / 24), 3 + 0.5 * sin(2 * pi * i / 24)) for i in range(24)]
    points = [(x, y, z) for z in (-10.0, 0.0) for x, y in ring]
    sides = [[i + 1, (i + 1) % 24 + 1, (i + 1) % 24 + 25] for i in range(24)]
    sides += [[i + 1, (i + 1) % 24 + 25, i + 25] for i in range(24)]
    listed = model.file.create_entity("IfcCartesianPointList3D", points)
    mesh = model.file.create_entity("IfcTriangulatedFaceSet", listed, None, None, sides)
    model.product("IfcPile", "P", body=mesh, body_type="Tessellation")
    part = only(model, tmp_path)
    assert (part.form, part.radius, part.z_bottom) == ("circle", approx(0.5), approx(-10))
    assert part.points[0] == approx((2, 3, 0))
    assert "residual" in part.evidence


def test_a_square_mesh_is_no_pile(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    points = [(x, y, z) for z in (0.0, 4.0) for x, y in ((0, 0), (0.4, 0), (0.4, 0.4), (0, 0.4))]
    faces = [[1, 2, 6], [1, 6, 5], [2, 3, 7], [2, 7, 6], [3, 4, 8], [3, 8, 7], [4, 1, 5], [4, 5, 8]]
    listed = model.file.create_entity("IfcCartesianPointList3D", [tuple(map(float, p)) for p in points])
    mesh = model.file.create_entity("IfcTriangulatedFaceSet", listed, None, None, faces)
    model.product("IfcColumn", "C", body=mesh, body_type="Tessellation")
    part = only(model, tmp_path)
    assert part.form == "bar"
    assert part.points == (approx((0.2, 0.2, 4)), approx((0.2, 0.2, 0)))
    assert "fitted to a mesh" in part.evidence


def test_a_proxy_is_read_by_its_shape(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.pile("bored", at=(0, 0, 0), diameter=0.6, length=10, kind="IfcBuildingElementProxy")
    wall = model.extrusion(model.rectangle(8.0, 0.4), 5.0)
    model.product("IfcBuildingElementProxy", "panel", at=(0, 10, 0), body=wall)
    slab = model.extrusion(model.rectangle(8.0, 6.0), 0.3)
    model.product("IfcBuildingElementProxy", "raft", at=(0, 20, 0), body=slab)
    anchor = model.polyline((0, 0, 0), (5, 0, -5))
    model.product("IfcBuildingElementProxy", "anchor", at=(0, 30, 0), axis=anchor)
    assert [part.form for part in read(model, tmp_path).parts] == ["circle", "path", "prism", "bar"]


def test_a_beam_without_body_takes_its_section_from_its_material(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    beam = model.product("IfcBeam", "B", axis=model.polyline((0, 0, 0), (6000, 0, 0)))
    profile = model.file.create_entity(
        "IfcMaterialProfile", None, None, model.material("S355"), model.rectangle(300, 600)
    )
    whole = model.file.create_entity("IfcMaterialProfileSet", None, None, [profile])
    model.associate(beam, model.file.create_entity("IfcMaterialProfileSetUsage", whole, 8))
    part = only(model, tmp_path)
    assert part.points == (approx((0, 0, 0)), approx((6, 0, 0)))
    assert part.section is not None
    assert approx(0.3 * 0.6**3 / 12) == part.section.I
    assert part.material == "S355"
    assert "cardinal point 8" in part.evidence
