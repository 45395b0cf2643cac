"""Walls: the centre line is worked out from the body, never taken from the reference line."""

from __future__ import annotations

from math import cos, hypot, pi, radians, sin
from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.ifc.reader import read_ifc
from ingest.parts import Part

approx = pytest.approx


def only(model: IfcBuilder, folder: Path) -> Part:
    read = read_ifc(model.save(folder / "model.ifc"))
    assert len(read.parts) == 1, read.ignored
    return read.parts[0]


@pytest.mark.parametrize(("thickness", "offset"), [(0.3, 0.0), (0.3, 0.15), (0.8, -0.4), (0.8, 0.6)])
def test_the_reference_line_is_not_the_centre_line(thickness: float, offset: float, tmp_path: Path) -> None:
    model = IfcBuilder()
    model.wall("W", (0, 0, -4), (10, 0, -4), thickness, 4.0, offset=offset)
    part = only(model, tmp_path)
    assert part.form == "path"
    assert part.points == (approx((0, offset, -4)), approx((10, offset, -4)))
    assert (part.thickness, part.z_bottom, part.z_top) == (approx(thickness), approx(-4), approx(0))


def test_a_wall_in_any_direction_keeps_its_side(tmp_path: Path) -> None:
    model = IfcBuilder()
    a = radians(37)
    model.wall("W", (5, 5, 0), (5 + 10 * cos(a), 5 + 10 * sin(a), 0), 0.5, 3.0, offset=0.25)
    part = only(model, tmp_path)
    # 0.25 to the left of the line, seen along it
    assert part.points[0] == approx((5 - 0.25 * sin(a), 5 + 0.25 * cos(a), 0))


def test_a_wall_shorter_than_thick_follows_its_axis(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.wall("stub", (0, 0, 0), (0.4, 0, 0), 1.0, 3.0)
    part = only(model, tmp_path)
    assert (part.thickness, part.points[1]) == (approx(1.0), approx((0.4, 0, 0)))


def test_mitred_ends_leave_thickness_and_centre_line_alone(tmp_path: Path) -> None:
    model = IfcBuilder()
    # left face 0.3 from the axis, both ends cut at 45 degrees: faces 10 and 9.4 long, centre line 9.7
    body = model.extrusion(model.outline((0, 0), (10, 0), (9.7, 0.3), (0.3, 0.3)), 3.0)
    model.product("IfcWall", "W", body=body, axis=model.polyline((0, 0), (10, 0)))
    part = only(model, tmp_path)
    assert part.points == (approx((0.15, 0.15, 0)), approx((9.85, 0.15, 0)))
    assert part.thickness == approx(0.3)
    assert "area differs" not in part.evidence


def test_a_wall_along_an_arc_keeps_its_radius(tmp_path: Path) -> None:
    model = IfcBuilder()
    inner, outer, turn = 9.7, 10.3, pi / 2
    angles = [turn * i / 90 for i in range(91)]
    ring = [(outer * cos(t), outer * sin(t)) for t in angles] + [
        (inner * cos(t), inner * sin(t)) for t in reversed(angles)
    ]
    circle = model.file.create_entity("IfcCircle", model.axis2(), 9.7)
    ends = [(9.7 * cos(t), 9.7 * sin(t)) for t in (0, turn)]
    axis = model.file.create_entity(
        "IfcTrimmedCurve", circle, [model.point(ends[0])], [model.point(ends[1])], True, "CARTESIAN"
    )
    model.product("IfcWall", "curved", body=model.extrusion(model.outline(*ring), 4.0), axis=axis)
    part = only(model, tmp_path)
    assert part.thickness == approx(0.6)
    assert all(hypot(x, y) == approx(10.0) for x, y, _ in part.points)
    assert part.points[0] == approx((10, 0, 0))
    assert part.points[-1] == approx((0, 10, 0))


def test_a_shaft_of_one_piece_is_a_closed_path(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.product("IfcWall", "ring", body=model.extrusion(model.circle(12.0, 0.8), 15.0), at=(50, 50, -15))
    part = only(model, tmp_path)
    assert (part.form, part.closed) == ("path", True)
    assert part.thickness == approx(0.8)
    # centre line half the wall thickness inside the outer radius
    assert all(hypot(x - 50, y - 50) == approx(5.6) for x, y, _ in part.points)


def test_a_rectangular_ring_of_walls_is_a_closed_path(tmp_path: Path) -> None:
    model = IfcBuilder()
    outer = [(0, 0), (20, 0), (20, 10), (0, 10)]
    inner = [(0.5, 0.5), (19.5, 0.5), (19.5, 9.5), (0.5, 9.5)]
    model.product("IfcWall", "box", body=model.extrusion(model.outline(*outer, holes=[inner]), 6.0))
    part = only(model, tmp_path)
    assert part.closed
    assert part.thickness == approx(0.5)
    assert sorted((round(x, 6), round(y, 6)) for x, y, _ in part.points) == [
        (0.25, 0.25), (0.25, 9.75), (19.75, 0.25), (19.75, 9.75),
    ]  # fmt: skip


def clipped(model: IfcBuilder, up: tuple[float, float, float], at: tuple[float, float, float]) -> None:
    body = model.extrusion(model.rectangle(10.0, 0.3, (5, 0)), 4.0)
    plane = model.file.create_entity("IfcPlane", model.axis3(at, up=up, first=(0, 1, 0)))
    half = model.file.create_entity("IfcHalfSpaceSolid", plane, False)
    cut = model.file.create_entity("IfcBooleanClippingResult", "DIFFERENCE", body, half)
    model.product("IfcWall", "W", body=cut, body_type="Clipping", axis=model.polyline((0, 0), (10, 0)))


def test_a_level_cut_lowers_the_top(tmp_path: Path) -> None:
    model = IfcBuilder()
    clipped(model, (0, 0, 1), (0, 0, 2.5))
    assert only(model, tmp_path).z_top == approx(2.5)


def test_an_upright_cut_shortens_the_wall(tmp_path: Path) -> None:
    model = IfcBuilder()
    clipped(model, (1, 0, 0), (7, 0, 0))
    part = only(model, tmp_path)
    assert part.points == (approx((0, 0, 0)), approx((7, 0, 0)))


def test_a_sloping_cut_is_named_and_the_highest_point_kept(tmp_path: Path) -> None:
    model = IfcBuilder()
    clipped(model, (1, 0, 4), (0, 0, 3.5))
    part = only(model, tmp_path)
    # plane x + 4 z = 14: 3.5 at x = 0, 1.0 at x = 10
    assert part.z_top == approx(3.5)
    assert "slopes from 1.000 to 3.500" in part.evidence


@pytest.mark.parametrize(
    ("sense", "offset", "side"),
    [("POSITIVE", 0.0, 0.2), ("NEGATIVE", 0.0, -0.2), ("NEGATIVE", 0.2, 0.0), ("POSITIVE", -0.3, -0.1)],
)
def test_a_wall_without_body_is_moved_into_its_layers(sense: str, offset: float, side: float, tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.product("IfcWall", "W", axis=model.polyline((0, 0), (8, 0)))
    model.layers(wall, (0.1, 0.3), offset, sense)
    part = only(model, tmp_path)
    # layers run from the offset along +y (POSITIVE) or -y: their middle lies offset +- 0.2 from the line
    assert part.points == (approx((0, side, 0)), approx((8, side, 0)))
    assert part.thickness == approx(0.4)
    assert (part.z_top, part.z_bottom) == (None, None)
    assert part.material == "m0, m1"


def test_a_wall_takes_its_body_from_its_parts(tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.product("IfcWall", "W", axis=model.polyline((0, 0), (8, 0)))
    layers = [
        model.product(
            "IfcBuildingElementPart",
            f"layer {i}",
            relative_to=wall.ObjectPlacement,
            body=model.extrusion(model.rectangle(8.0, t, (4, y)), 3.0),
        )
        for i, (t, y) in enumerate(((0.1, 0.05), (0.3, 0.25)))
    ]
    model.aggregate(wall, layers)
    read = read_ifc(model.save(tmp_path / "model.ifc"))
    (part,) = read.parts
    assert part.points == (approx((0, 0.2, 0)), approx((8, 0.2, 0)))
    assert part.thickness == approx(0.4)
    assert "2 parts" in part.evidence
    assert read.context == {"part of an element read whole": 2}
    assert read.entities == 3


def test_layers_that_disagree_with_the_body_are_named(tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.wall("W", (0, 0, 0), (6, 0, 0), 0.35, 3.0)
    model.layers(wall, (0.1, 0.2), 0.0)
    assert "layers sum to 0.300 m, the body is 0.350 m thick" in only(model, tmp_path).evidence


def test_layers_tell_a_stub_from_a_wall(tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.product("IfcWall", "stub", body=model.extrusion(model.rectangle(0.3, 0.1), 2.5))
    model.layers(wall, (0.3,), 0.0)
    part = only(model, tmp_path)
    assert part.thickness == approx(0.3)
    assert part.points == (approx((0, -0.05, 0)), approx((0, 0.05, 0)))


def test_a_wall_that_is_no_strip_keeps_its_outline(tmp_path: Path) -> None:
    model = IfcBuilder()
    ring = ((0, 0), (6, 0), (6, 1), (1, 1), (1, 6), (0, 6))
    model.product("IfcWall", "L", body=model.extrusion(model.outline(*ring), 3.0))
    part = only(model, tmp_path)
    assert (part.form, part.closed, len(part.points)) == ("prism", True, 6)


def test_a_wall_extruded_along_its_length_has_the_width_of_its_profile(tmp_path: Path) -> None:
    model = IfcBuilder()
    profile = model.rectangle(0.4, 3.0, (0, 1.5))
    body = model.extrusion(profile, 12.0, up=(1, 0, 0), first=(0, 1, 0))
    model.product("IfcWall", "W", at=(0, 0, -3), body=body)
    part = only(model, tmp_path)
    assert part.points == (approx((0, 0, -3)), approx((12, 0, -3)))
    assert (part.thickness, part.z_top) == (approx(0.4), approx(0))


def test_a_meshed_wall_says_how_well_it_fits(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    points = [(x, y, z) for z in (0.0, 3.0) for x, y in ((0.0, 0.0), (8.0, 0.0), (8.0, 0.25), (0.0, 0.25))]
    faces = [[1, 3, 2], [1, 4, 3], [5, 6, 7], [5, 7, 8]]
    faces += [[a, b, b + 4] for a, b in ((1, 2), (2, 3), (3, 4), (4, 1))]
    faces += [[a, b + 4, a + 4] for a, b in ((1, 2), (2, 3), (3, 4), (4, 1))]
    listed = model.file.create_entity("IfcCartesianPointList3D", points)
    mesh = model.file.create_entity("IfcTriangulatedFaceSet", listed, None, None, faces)
    model.product("IfcWall", "W", body=mesh, body_type="Tessellation")
    part = only(model, tmp_path)
    assert part.points == (approx((0, 0.125, 0)), approx((8, 0.125, 0)))
    assert part.thickness == approx(0.25)
    assert "fitted to a mesh" in part.evidence
    assert "fills to 100%" in part.evidence


def test_the_level_comes_from_the_placement_not_from_the_storey(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.storey.Elevation = 99.0
    model.wall("W", (0, 0, -3.2), (5, 0, -3.2), 0.3, 2.9)
    part = only(model, tmp_path)
    assert (part.z_bottom, part.z_top) == (approx(-3.2), approx(-0.3))


def test_a_wall_without_body_has_the_height_of_its_layers_reference_extent(tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.product("IfcWall", "W", at=(0, 0, -3), axis=model.polyline((0, 0), (8, 0)))
    model.layers(wall, (0.4,), -0.2)
    model.file.by_type("IfcMaterialLayerSetUsage")[0].ReferenceExtent = 2.8
    part = only(model, tmp_path)
    assert (part.z_bottom, part.z_top) == (approx(-3), approx(-0.2))


def test_a_wall_with_only_a_footprint_is_its_outline(tmp_path: Path) -> None:
    model = IfcBuilder()
    wall = model.product("IfcWall", "W")
    ring = model.polyline((0, 0), (8, 0), (8, 0.3), (0, 0.3), (0, 0))
    shape = model.representation("FootPrint", "Curve2D", [ring])
    wall.Representation = model.file.create_entity("IfcProductDefinitionShape", None, None, [shape])
    part = only(model, tmp_path)
    assert (part.form, len(part.points), part.thickness) == ("outline", 4, None)
