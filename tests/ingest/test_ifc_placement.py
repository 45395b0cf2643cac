"""Placements, against ifcopenshell's own utility and against numbers worked by hand."""

from __future__ import annotations

from pathlib import Path

import ifcopenshell.util.placement
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from ifc_builder import IfcBuilder

from ingest.ifc.frames import FrameTable
from ingest.ifc.placement import PlacementTable
from ingest.ifc.reader import read_ifc

approx = pytest.approx

numbers = st.floats(-1e4, 1e4).map(lambda v: round(v, 3))
points = st.tuples(numbers, numbers, numbers)
ways = st.tuples(*[st.integers(-3, 3)] * 3).filter(any)


@settings(max_examples=40, deadline=None)
@given(links=st.lists(st.tuples(points, ways, ways), min_size=1, max_size=12))
def test_chains_agree_with_the_librarys_own_placements(links: list) -> None:
    model = IfcBuilder()
    above = None
    chain = []
    for at, up, other in links:
        first = np.cross(
            up, other
        )  # the utility takes the first axis as it is written, so it must be square to the third
        axes = (up, first) if first.any() else (None, None)
        above = model.file.create_entity("IfcLocalPlacement", above, model.axis3(at, *axes))
        chain.append(above)
    table = PlacementTable(FrameTable())
    rows = [table.row(placement) for placement in reversed(chain)]
    world, bad = table.solve()
    assert not bad[rows].any()
    for row, placement in zip(rows, reversed(chain), strict=True):
        expected = ifcopenshell.util.placement.get_local_placement(placement)
        np.testing.assert_allclose(world[row], expected, rtol=0, atol=1e-8)


@pytest.mark.parametrize("length", [1, 2, 5])
def test_placements_in_a_circle_are_found(length: int) -> None:
    model = IfcBuilder()
    ring = [model.file.create_entity("IfcLocalPlacement", None, model.axis3((1, 0, 0))) for _ in range(length)]
    for one, above in zip(ring, ring[1:] + ring[:1], strict=True):
        one.PlacementRelTo = above
    hanging = model.file.create_entity("IfcLocalPlacement", ring[0], model.axis3((0, 0, 0)))
    free = model.file.create_entity("IfcLocalPlacement", None, model.axis3((0, 0, 0)))
    table = PlacementTable(FrameTable())
    rows = [table.row(placement) for placement in (hanging, *ring, free)]
    assert table.solve()[1][rows].tolist() == [True] * (length + 1) + [False]


def test_an_element_in_a_circle_is_named_and_the_others_are_read(tmp_path: Path) -> None:
    model = IfcBuilder()
    bad = model.pile("bad", at=(0, 0, 0), diameter=0.6, length=10)
    model.pile("good", at=(9, 0, 0), diameter=0.6, length=10)
    bad.ObjectPlacement.PlacementRelTo = bad.ObjectPlacement
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert [part.name for part in read.parts] == ["good"]
    assert read.ignored == {"placement refers to itself or cannot be read": 1}
    assert bad.GlobalId in read.losses[0]


def test_a_column_stands_where_grid_lines_cross(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    lines = [((0, 0), (0, 9000)), ((6000, 0), (6000, 9000)), ((0, 0), (9000, 0)), ((0, 5000), (9000, 5000))]
    axes = [
        model.file.create_entity("IfcGridAxis", name, model.polyline(*line), True)
        for name, line in zip("ABXY", lines, strict=True)
    ]
    model.product("IfcGrid", "grid", at=(100000, 0, 0), UAxes=axes[:2], VAxes=axes[2:])
    crossing = model.file.create_entity("IfcVirtualGridIntersection", [axes[1], axes[3]], [0.0, 250.0, 0.0])
    column = model.product("IfcColumn", "C", body=model.extrusion(model.circle(400), 3000))
    column.ObjectPlacement = model.file.create_entity("IfcGridPlacement", PlacementLocation=crossing)
    part = read_ifc(model.save(tmp_path / "m.ifc")).parts[0]
    # B at x = 6 in the grid, which stands at x = 100; Y at y = 5 moved 0.25 to its left
    assert part.points[0] == approx((106.0, 5.25, 3.0))


def test_a_frame_with_its_first_axis_along_its_third_still_stands() -> None:
    model = IfcBuilder()
    table = FrameTable()
    row = table.row(model.axis3((1, 2, 3), up=(1, 0, 0), first=(2, 0, 0)))
    matrix = table.matrix(row)
    np.testing.assert_allclose(matrix[:3, :3] @ matrix[:3, :3].T, np.eye(3), atol=1e-12)
    assert np.linalg.det(matrix) == approx(1)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3_ADD2"])
def test_the_attributes_read_by_position_stand_where_the_schema_has_them(schema: str) -> None:
    from ingest.ifc import attributes

    declared = ifcopenshell.ifcopenshell_wrapper.schema_by_name(schema)
    expected = {
        ("IfcPile", "GlobalId"): attributes.GUID,
        ("IfcPile", "Name"): attributes.NAME,
        ("IfcPile", "Description"): attributes.DESCRIPTION,
        ("IfcPile", "ObjectType"): attributes.OBJECT_TYPE,
        ("IfcPile", "ObjectPlacement"): attributes.PLACEMENT,
        ("IfcPile", "Representation"): attributes.REPRESENTATION,
        ("IfcPile", "Tag"): attributes.TAG,
        ("IfcLocalPlacement", "PlacementRelTo"): attributes.RELATIVE_TO,
        ("IfcLocalPlacement", "RelativePlacement"): attributes.RELATIVE_PLACEMENT,
        ("IfcAxis2Placement3D", "Location"): attributes.LOCATION,
        ("IfcAxis2Placement3D", "Axis"): attributes.AXIS,
        ("IfcAxis2Placement3D", "RefDirection"): attributes.REF_DIRECTION,
        ("IfcAxis2Placement2D", "RefDirection"): attributes.REF_DIRECTION_2D,
        ("IfcCartesianPoint", "Coordinates"): attributes.COORDINATES,
        ("IfcDirection", "DirectionRatios"): attributes.COORDINATES,
        ("IfcProductDefinitionShape", "Representations"): attributes.REPRESENTATIONS,
        ("IfcShapeRepresentation", "RepresentationIdentifier"): attributes.IDENTIFIER,
        ("IfcShapeRepresentation", "RepresentationType"): attributes.REPRESENTATION_TYPE,
        ("IfcShapeRepresentation", "Items"): attributes.ITEMS,
        ("IfcExtrudedAreaSolid", "SweptArea"): attributes.SWEPT_AREA,
        ("IfcExtrudedAreaSolid", "Position"): attributes.POSITION,
        ("IfcExtrudedAreaSolid", "ExtrudedDirection"): attributes.EXTRUDED_DIRECTION,
        ("IfcExtrudedAreaSolid", "Depth"): attributes.DEPTH,
        ("IfcCircleProfileDef", "ProfileName"): attributes.PROFILE_NAME,
        ("IfcCircleProfileDef", "Position"): attributes.PROFILE_POSITION,
        ("IfcMappedItem", "MappingSource"): attributes.MAPPING_SOURCE,
        ("IfcMappedItem", "MappingTarget"): attributes.MAPPING_TARGET,
        ("IfcRepresentationMap", "MappingOrigin"): attributes.MAPPING_ORIGIN,
        ("IfcRepresentationMap", "MappedRepresentation"): attributes.MAPPED_REPRESENTATION,
        ("IfcRelDefinesByProperties", "RelatedObjects"): attributes.RELATED_OBJECTS,
        ("IfcRelDefinesByProperties", "RelatingPropertyDefinition"): attributes.RELATING,
        ("IfcRelContainedInSpatialStructure", "RelatedElements"): attributes.RELATED_ELEMENTS,
        ("IfcRelContainedInSpatialStructure", "RelatingStructure"): attributes.RELATING_STRUCTURE,
        ("IfcRelAggregates", "RelatingObject"): attributes.WHOLE,
        ("IfcRelAggregates", "RelatedObjects"): attributes.PARTS,
    }
    for (entity, name), position in expected.items():
        names = [a.name() for a in declared.declaration_by_name(entity).as_entity().all_attributes()]
        assert names[position] == name, entity
