"""Slabs, footings, cuts and terrain: outlines with holes between two levels, steps and pieces kept apart."""

from __future__ import annotations

from math import cos, pi, sin
from pathlib import Path

import pytest
import shapely
from ifc_builder import IfcBuilder

from ingest.ifc.reader import read_ifc
from ingest.parts import FileParts, Part

approx = pytest.approx

SQUARE = ((0, 0), (10, 0), (10, 8), (0, 8))


def read(model: IfcBuilder, folder: Path) -> FileParts:
    return read_ifc(model.save(folder / "model.ifc"))


def area(part: Part) -> float:
    return shapely.Polygon([p[:2] for p in part.points], [[p[:2] for p in hole] for hole in part.holes]).area


def test_a_slab_is_an_outline_between_two_levels(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    ring = [(1000 * x, 1000 * y) for x, y in SQUARE]
    hole = [(2000, 2000), (3000, 2000), (3000, 4000), (2000, 4000)]
    model.slab("raft", ring, -6000, -5200, holes=[hole])
    (part,) = read(model, tmp_path).parts
    assert (part.form, part.closed) == ("prism", True)
    assert (part.z_bottom, part.z_top) == (approx(-6), approx(-5.2))
    assert area(part) == approx(80 - 2)
    assert len(part.holes) == 1


def test_a_slab_extruded_downwards_has_its_underside_below(tmp_path: Path) -> None:
    model = IfcBuilder()
    body = model.extrusion(model.outline(*SQUARE), 0.5, way=(0, 0, -1))
    model.product("IfcSlab", "S", at=(0, 0, -3), body=body)
    (part,) = read(model, tmp_path).parts
    assert (part.z_bottom, part.z_top) == (approx(-3.5), approx(-3))


@pytest.mark.parametrize(("depth", "left"), [(2.0, 80 - 4), (0.2, 80)])
def test_an_opening_that_goes_through_is_a_hole(depth: float, left: float, tmp_path: Path) -> None:
    model = IfcBuilder()
    slab = model.slab("S", SQUARE, 0.0, 0.5)
    body = model.extrusion(model.rectangle(2, 2), depth)
    opening = model.product("IfcOpeningElement", "O", at=(5, 4, 0.4 if depth < 1 else -1), body=body)
    model.file.create_entity("IfcRelVoidsElement", model.guid("v"), None, None, None, slab, opening)
    found = read(model, tmp_path)
    assert area(found.parts[0]) == approx(left)
    assert found.context == {"opening": 1}
    assert ("does not go through" in found.parts[0].evidence) == (depth < 1)


def test_steps_of_a_raft_are_parts_of_their_own(tmp_path: Path) -> None:
    model = IfcBuilder()
    bodies = [
        model.extrusion(model.outline(*SQUARE), 0.6),
        model.extrusion(model.rectangle(2, 2, (4, 4)), 0.6, at=(0, 0, -1.5)),
    ]
    model.product("IfcSlab", "raft with lift pit", at=(0, 0, -6), body=bodies)
    first, second = read(model, tmp_path).parts
    assert (first.z_bottom, second.z_bottom) == (approx(-6), approx(-7.5))
    assert (area(first), area(second)) == (approx(80), approx(4))
    assert first.source == second.source


def test_pieces_apart_are_parts_of_their_own(tmp_path: Path) -> None:
    model = IfcBuilder()
    bodies = [model.extrusion(model.rectangle(s, s, (10 * i, 0)), 0.5) for i, s in enumerate((1.0, 2.0))]
    model.product("IfcFooting", "two pads", body=bodies)
    assert [area(part) for part in read(model, tmp_path).parts] == [approx(4), approx(1)]


def test_a_strip_footing_extruded_along_its_length(tmp_path: Path) -> None:
    model = IfcBuilder()
    body = model.extrusion(model.rectangle(0.9, 0.3), 12.0, up=(0, 1, 0), first=(1, 0, 0))
    model.product("IfcFooting", "strip", at=(5, 0, -1), body=body)
    (part,) = read(model, tmp_path).parts
    assert area(part) == approx(0.9 * 12)
    assert (part.z_bottom, part.z_top) == (approx(-1.15), approx(-0.85))


def test_a_swept_beam_keeps_the_side_its_profile_lies_on(tmp_path: Path) -> None:
    model = IfcBuilder()
    line = model.polyline((0, 0, 0), (10, 0, 0))
    profile = model.outline((0, 0.2), (0.5, 0.2), (0.5, 1.2), (0, 1.2))
    up = model.direction((0, 0, 1))
    solid = model.file.create_entity("IfcFixedReferenceSweptAreaSolid", profile, None, line, None, None, up)
    model.product("IfcFooting", "F", body=solid, body_type="AdvancedSweptSolid")
    (part,) = read(model, tmp_path).parts
    # the profile's x axis keeps to the reference (up), its y axis lies to the right of the line
    assert (part.z_bottom, part.z_top) == (approx(0), approx(0.5))
    assert {round(y, 6) for _, y, _ in part.points} == {-1.2, -0.2}


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3_ADD2"])
def test_a_faceted_slab_is_its_shadow_on_plan(schema: str, tmp_path: Path) -> None:
    model = IfcBuilder(schema=schema)
    add = model.file.create_entity
    corners = [(float(x), float(y), z) for z in (0.0, 0.4) for x, y in SQUARE]
    rings = [(3, 2, 1, 0), (4, 5, 6, 7), (0, 1, 5, 4), (1, 2, 6, 5), (2, 3, 7, 6), (3, 0, 4, 7)]
    faces = [
        add("IfcFace", [add("IfcFaceOuterBound", add("IfcPolyLoop", [model.point(corners[i]) for i in ring]), True)])
        for ring in rings
    ]
    brep = add("IfcFacetedBrep", add("IfcClosedShell", faces))
    model.product("IfcSlab", "S", at=(0, 0, -2), body=brep, body_type="Brep")
    (part,) = read(model, tmp_path).parts
    assert area(part) == approx(80)
    assert (part.z_bottom, part.z_top) == (approx(-2), approx(-1.6))
    assert "fills to 100%" in part.evidence


def test_a_revolved_base_is_round(tmp_path: Path) -> None:
    model = IfcBuilder()
    profile = model.outline((0, 0), (3, 0), (3, 1), (0, 1))
    axis = model.file.create_entity("IfcAxis1Placement", model.point((0, 0, 0)), model.direction((0, 1, 0)))
    solid = model.file.create_entity(
        "IfcRevolvedAreaSolid", profile, model.axis3((0, 0, 0), up=(0, -1, 0), first=(1, 0, 0)), axis, 2 * pi
    )
    model.product("IfcFooting", "base", at=(20, 20, -5), body=solid)
    (part,) = read(model, tmp_path).parts
    assert area(part) == approx(pi * 9, rel=5e-3)  # a polygon of 48 sides
    assert (part.z_bottom, part.z_top) == (approx(-5), approx(-4))


def test_terrain_keeps_its_faces(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    points = [(float(x), float(y), 0.1 * x) for x in (0, 50) for y in (0, 40)]
    listed = model.file.create_entity("IfcCartesianPointList3D", points)
    mesh = model.file.create_entity("IfcTriangulatedFaceSet", listed, None, None, [[1, 3, 2], [2, 3, 4]])
    model.product("IfcGeographicElement", "ground", PredefinedType="TERRAIN", body=mesh, body_type="Tessellation")
    (part,) = read(model, tmp_path).parts
    assert (part.form, part.faces) == ("mesh", ((0, 2, 1), (1, 2, 3)))
    assert (part.z_bottom, part.z_top) == (approx(0), approx(5))


def test_an_earthworks_cut_is_read_though_it_is_a_void(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    body = model.extrusion(model.outline(*SQUARE), 6.0)
    model.product("IfcEarthworksCut", "dig", at=(0, 0, -6), body=body, PredefinedType="EXCAVATION")
    (part,) = read(model, tmp_path).parts
    assert (part.cls, part.z_bottom, part.tags["PredefinedType"]) == ("IfcEarthworksCut", approx(-6), "EXCAVATION")


def test_a_footprint_or_a_box_stands_in_for_a_missing_body(tmp_path: Path) -> None:
    model = IfcBuilder()
    slab = model.product("IfcSlab", "drawn")
    ring = model.polyline(*SQUARE, SQUARE[0])
    shape = model.representation("FootPrint", "Curve2D", [ring])
    slab.Representation = model.file.create_entity("IfcProductDefinitionShape", None, None, [shape])
    boxed = model.product("IfcSlab", "boxed")
    box = model.file.create_entity("IfcBoundingBox", model.point((1, 1, 0)), 4.0, 3.0, 0.5)
    shape = model.representation("Box", "BoundingBox", [box])
    boxed.Representation = model.file.create_entity("IfcProductDefinitionShape", None, None, [shape])
    first, second = read(model, tmp_path).parts
    assert (first.form, first.z_top, len(first.points)) == ("outline", None, 4)
    assert (second.form, second.z_top) == ("prism", approx(0.5))
    assert "bounding box only" in second.evidence


def test_a_round_slab_is_no_pile(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.product("IfcSlab", "disc", body=model.extrusion(model.circle(8.0), 0.6))
    ring = [(4 * cos(2 * pi * i / 48), 4 * sin(2 * pi * i / 48)) for i in range(48)]
    (part,) = read(model, tmp_path).parts
    assert part.form == "prism"
    assert area(part) == approx(shapely.Polygon(ring).area)
