"""Structural actions, boreholes and strata."""

from __future__ import annotations

from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.ifc.reader import read_ifc

approx = pytest.approx


def topology(model: IfcBuilder, kind: str, item: object) -> object:
    shape = model.file.create_entity("IfcTopologyRepresentation", model.contexts["Axis"], "Reference", kind, [item])
    return model.file.create_entity("IfcProductDefinitionShape", None, None, [shape])


def vertex(model: IfcBuilder, at: tuple[float, float, float]) -> object:
    return model.file.create_entity("IfcVertexPoint", model.point(at))


def test_a_column_load_acts_where_its_connection_stands(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    model.force_unit()
    node = model.product("IfcStructuralPointConnection", "node")
    node.Representation = topology(model, "Vertex", vertex(model, (5000.0, 6000.0, -1000.0)))
    force = model.file.create_entity("IfcStructuralLoadSingleForce", "G+Q", 10.0, 0.0, -850.0, 0.0, 0.0, 0.0)
    action = model.product("IfcStructuralPointAction", "column C3", AppliedLoad=force, GlobalOrLocal="GLOBAL_COORDS")
    action.ObjectPlacement = None
    model.file.create_entity("IfcRelConnectsStructuralActivity", model.guid("c"), None, None, None, node, action)
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    (part,) = read.parts
    assert (part.form, part.points[0]) == ("point", approx((5, 6, -1)))
    # 850 kN downwards
    assert (part.tags["load_kind"], part.tags["load_unit"], part.tags["load_value"]) == ("point", "kN", "850")
    assert part.tags["force_x"] == "10"
    assert read.context == {"analysis model": 1}


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3_ADD2"])
def test_line_and_area_loads_keep_their_unit(schema: str, tmp_path: Path) -> None:
    model = IfcBuilder(schema=schema)
    model.force_unit()
    add = model.file.create_entity
    line = add("IfcStructuralLoadLinearForce", None, 0.0, 0.0, -40.0, 0.0, 0.0, 0.0)
    edge = add("IfcEdge", vertex(model, (0.0, 0.0, 0.0)), vertex(model, (12.0, 0.0, 0.0)))
    crane = model.product("IfcStructuralLinearAction", "crane track", AppliedLoad=line, GlobalOrLocal="GLOBAL_COORDS")
    crane.Representation = topology(model, "Edge", edge)
    plane = add("IfcStructuralLoadPlanarForce", None, 0.0, 0.0, -20.0)
    loop = add(
        "IfcPolyLoop", [model.point(p) for p in ((0.0, 0.0, 0.0), (8.0, 0.0, 0.0), (8.0, 5.0, 0.0), (0.0, 5.0, 0.0))]
    )
    face = add("IfcFace", [add("IfcFaceOuterBound", loop, True)])
    store = model.product("IfcStructuralPlanarAction", "store", AppliedLoad=plane, GlobalOrLocal="GLOBAL_COORDS")
    store.Representation = topology(model, "Face", face)
    first, second = read_ifc(model.save(tmp_path / "m.ifc")).parts
    assert (first.form, first.tags["load_value"], first.tags["load_unit"]) == ("path", "40", "kN/m")
    assert (second.form, second.tags["load_value"], second.tags["load_unit"]) == ("outline", "20", "kPa")
    assert len(second.points) == 4


def test_a_load_in_local_axes_gives_no_value(tmp_path: Path) -> None:
    model = IfcBuilder()
    force = model.file.create_entity("IfcStructuralLoadSingleForce", None, 0.0, 0.0, -1000.0, 0.0, 0.0, 0.0)
    action = model.product("IfcStructuralPointAction", "P", AppliedLoad=force, GlobalOrLocal="LOCAL_COORDS")
    action.Representation = topology(model, "Vertex", vertex(model, (0.0, 0.0, 0.0)))
    (part,) = read_ifc(model.save(tmp_path / "m.ifc")).parts
    assert "load_value" not in part.tags
    assert part.tags["force_z"] == "-1"


def borehole(model: IfcBuilder, tops: list[float]) -> object:
    hole = model.product("IfcBorehole", "BH1", at=(30, 40, 2.5))
    strata = []
    for name, top, base in zip(("made ground", "stiff clay"), tops, tops[1:], strict=False):
        body = model.extrusion(model.circle(0.15), top - base, at=(0, 0, base))
        strata.append(model.product("IfcGeotechnicalStratum", name, relative_to=hole.ObjectPlacement, body=body))
        model.associate(strata[-1], model.material(f"{name} material"))
    model.aggregate(hole, strata)
    return hole


def test_a_borehole_has_the_levels_of_its_strata(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    hole = borehole(model, [0.0, -3.0, -20.0])
    model.properties(hole, "Pset_BoreholeCommon", GroundwaterDepth=model.measure("IfcLengthMeasure", 4.0))
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    (found,) = read.boreholes
    assert (found.id, found.location, found.water) == ("BH1", approx((30, 40, 2.5)), approx(-1.5))
    assert [(layer.code, layer.top, layer.base) for layer in found.layers] == [
        ("made ground", approx(2.5), approx(-0.5)),
        ("stiff clay", approx(-0.5), approx(-17.5)),
    ]
    assert found.layers[1].description == "stiff clay material"
    assert read.context == {"borehole": 1, "stratum of a borehole": 2}
    assert not read.parts


def test_a_borehole_without_depths_is_ignored_with_a_reason(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    hole = model.product("IfcBorehole", "BH1")
    model.aggregate(hole, [model.product("IfcGeotechnicalStratum", "clay")])
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert not read.boreholes
    assert read.ignored == {"borehole without strata that have a depth": 1}
    assert read.context == {"stratum of a borehole": 1}


def test_a_stratum_of_its_own_is_a_mesh(tmp_path: Path) -> None:
    model = IfcBuilder(schema="IFC4X3_ADD2")
    points = [(0.0, 0.0, -3.0), (50.0, 0.0, -3.5), (50.0, 40.0, -4.0), (0.0, 40.0, -3.2)]
    listed = model.file.create_entity("IfcCartesianPointList3D", points)
    mesh = model.file.create_entity("IfcTriangulatedFaceSet", listed, None, None, [[1, 2, 3], [1, 3, 4]])
    model.product("IfcGeotechnicalStratum", "top of clay", body=mesh, body_type="Tessellation")
    (part,) = read_ifc(model.save(tmp_path / "m.ifc")).parts
    assert (part.form, part.name, len(part.faces)) == ("mesh", "top of clay", 2)
