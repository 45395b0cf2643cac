"""Every product is a part, context or ignored, and the counts add up."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.ifc.reader import read_ifc
from ingest.parts import FileParts


def adds_up(read: FileParts) -> None:
    items = {part.source.item for part in read.parts}
    assert len(items) + sum(read.context.values()) + sum(read.ignored.values()) == read.entities


def test_site_building_and_storey_are_no_entities(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.pile("P", at=(0, 0, 0), diameter=0.6, length=8)
    model.storey.ObjectPlacement.RelativePlacement = model.axis3((0, 0, -3.5))
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.entities == 1
    assert [(part.cls, part.text, part.z_top) for part in read.setting] == [("IfcBuildingStorey", "storey", -3.5)]


def test_each_product_has_one_fate(tmp_path: Path) -> None:
    model = IfcBuilder()
    model.pile("P", at=(0, 0, 0), diameter=0.6, length=8)
    model.product("IfcDoor", "D", body=model.extrusion(model.rectangle(1, 0.1), 2))
    model.product("IfcSpace", "room")
    model.product("IfcPile", "bare")
    assembly = model.product("IfcElementAssembly", "group")
    model.aggregate(assembly, [model.wall("W", (0, 0, 0), (5, 0, 0), 0.3, 3)])
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    adds_up(read)
    assert read.entities == 6
    assert Counter(part.cls for part in read.parts) == {"IfcPile": 1, "IfcWall": 1}
    assert read.context == {"assembly of other elements": 1, "door": 1, "space": 1}
    assert read.ignored == {"no geometry": 1}


def test_a_body_of_a_kind_that_is_not_read_is_named(tmp_path: Path) -> None:
    model = IfcBuilder()
    sphere = model.file.create_entity("IfcSphere", model.axis3((0, 0, 0)), 2.0)
    model.product("IfcBuildingElementProxy", "ball", body=sphere, body_type="CSG")
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert read.ignored == {"IfcSphere is not read": 1}


def test_a_global_id_used_twice_is_told_apart(tmp_path: Path) -> None:
    model = IfcBuilder()
    first = model.pile("P1", at=(0, 0, 0), diameter=0.6, length=8)
    second = model.pile("P2", at=(3, 0, 0), diameter=0.6, length=8)
    second.GlobalId = first.GlobalId
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    adds_up(read)
    assert [part.source.item for part in read.parts] == [first.GlobalId, f"{first.GlobalId}#{second.id()}"]
    assert [finding.code for finding in read.findings] == ["ifc-damage"]


def test_names_layers_groups_and_classification_are_kept(tmp_path: Path) -> None:
    model = IfcBuilder()
    pile = model.pile("P1", at=(0, 0, 0), diameter=0.6, length=8, Tag="A-17", PredefinedType="BORED")
    pile.ObjectType = "R300"
    shapes = list(pile.Representation.Representations)
    model.file.create_entity("IfcPresentationLayerAssignment", "WALL-PILES", None, shapes)
    group = model.root("IfcGroup", "phase 1")
    model.file.create_entity("IfcRelAssignsToGroup", model.guid("g"), None, None, None, [pile], None, group)
    code = model.file.create_entity("IfcClassificationReference", Identification="Pr_20", Name="piles")
    model.file.create_entity("IfcRelAssociatesClassification", model.guid("k"), None, None, None, [pile], code)
    model.associate(pile, model.material("C30/37"))
    (part,) = read_ifc(model.save(tmp_path / "m.ifc")).parts
    assert (part.layer, part.material, part.source.item) == ("WALL-PILES", "C30/37", pile.GlobalId)
    expected = {
        "ObjectType": "R300", "Tag": "A-17", "PredefinedType": "BORED", "Storey": "storey", "Group": "phase 1",
        "Classification": "Pr_20 piles",
    }  # fmt: skip
    assert part.tags == expected


def test_texts_and_points_of_annotations_are_parts(tmp_path: Path) -> None:
    model = IfcBuilder()
    note = model.product("IfcAnnotation", "note", at=(5, 5, 0))
    text = model.file.create_entity("IfcTextLiteral", "+12.50", model.axis2((1, 2)), "RIGHT")
    shape = model.representation("Annotation", "Annotation2D", [text, model.polyline((0, 0), (3, 0))])
    note.Representation = model.file.create_entity("IfcProductDefinitionShape", None, None, [shape])
    first, second = read_ifc(model.save(tmp_path / "m.ifc")).parts
    assert (first.form, first.text, first.points) == ("text", "+12.50", ((6.0, 7.0, 0.0),))
    assert (second.form, len(second.points)) == ("path", 2)
    assert first.source == second.source


def test_one_file_read_twice_is_the_same(tmp_path: Path) -> None:
    model = IfcBuilder()
    for i in range(5):
        model.pile(f"P{i}", at=(i, 0, 0), diameter=0.6, length=8)
    path = model.save(tmp_path / "m.ifc")
    assert read_ifc(path) == read_ifc(path)


@pytest.mark.parametrize("name", ["<script>alert(1)</script>", "=1+1", "../../etc", "a\nb", "\u202eevil"])
def test_hostile_names_are_data(name: str, tmp_path: Path) -> None:
    model = IfcBuilder()
    model.pile(name, at=(0, 0, 0), diameter=0.6, length=8)
    assert read_ifc(model.save(tmp_path / "m.ifc")).parts[0].name == name


def test_parts_go_through_json_unchanged(tmp_path: Path) -> None:
    from pydantic import TypeAdapter

    model = IfcBuilder()
    model.wall("W", (0, 0, 0), (5, 0, 0), 0.3, 3)
    model.bar("S", (0, 0, 0), (5, 0, 0), model.circle(0.5, 0.016))
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    adapter = TypeAdapter(FileParts)
    assert adapter.validate_json(adapter.dump_json(read)) == read
