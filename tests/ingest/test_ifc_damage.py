"""Broken and hostile IFC files: one clear error, or read with its losses named; never a crash, never silently."""

from __future__ import annotations

import random
import re
import zipfile
from collections.abc import Callable
from pathlib import Path

import pytest
from ifc_builder import IfcBuilder

from ingest.errors import InputError
from ingest.ifc.opening import count_instances
from ingest.ifc.reader import read_ifc

PILES = 30


def build() -> IfcBuilder:
    model = IfcBuilder()
    for i in range(PILES):
        pile = model.pile(f"P{i}", at=(i, 0.5, 0), diameter=0.75, length=12)
        model.properties(pile, "Pset", Toe=model.measure("IfcLengthMeasure", -12.5))
    for i in range(6):
        model.wall(f"W{i}", (0, 5 + i, 0), (9.25, 5 + i, 0), 0.35, 3.125, offset=0.175)
    return model


@pytest.fixture(scope="module")
def whole(tmp_path_factory: pytest.TempPathFactory) -> bytes:
    return build().save(tmp_path_factory.mktemp("ifc") / "whole.ifc").read_bytes()


def write(folder: Path, data: bytes, name: str = "broken.ifc") -> Path:
    path = folder / name
    path.write_bytes(data)
    return path


def refused(path: Path) -> InputError:
    with pytest.raises(InputError) as caught:
        read_ifc(path)
    lines = str(caught.value).splitlines()
    assert len(lines) <= 3
    assert path.name in lines[0]
    assert caught.value.remedy
    return caught.value


@pytest.mark.parametrize(
    ("damage", "word"),
    [
        (lambda data: b"", "empty"),
        (lambda data: data[:100], "not valid"),
        (lambda data: b"\xef\xbb\xbf" + data, "byte-order"),
        (lambda data: data.decode().encode("utf-16"), "UTF-16"),
        (lambda data: b"\x89PNG\r\n\x1a\n" + bytes(200), "starts with"),
        (lambda data: b"An excavation is ten metres deep. " * 20, "starts with"),
        (lambda data: bytes(2000), "starts with"),
        (lambda data: random.Random(1).randbytes(4000), "starts with"),
        (lambda data: b"<?xml version='1.0'?><ifcXML/>", "XML"),
        (lambda data: re.sub(rb"\(12\.", b"(1e999", data).replace(b"0.5,0.)", b"1e999,0.)"), "not valid"),
        (lambda data: data.replace(b"0.5,0.)", b"nan,0.)"), "not valid"),
        (lambda data: data.replace(b"IFC4'", b"IFC4X3_RC3'"), "IFC4X3_RC3"),
        (lambda data: data.replace(b"IFC4'", b"IFC9'"), "IFC9"),
    ],
)  # fmt: skip
def test_what_is_no_ifc_is_refused_in_one_message(
    damage: Callable[[bytes], bytes], word: str, whole: bytes, tmp_path: Path
) -> None:
    assert word in refused(write(tmp_path, damage(whole))).problem


def test_a_folder_and_a_missing_file_are_refused(tmp_path: Path) -> None:
    assert "folder" in refused(tmp_path).problem
    assert "cannot be read" in refused(tmp_path / "missing.ifc").problem


def test_a_draft_schema_says_what_to_do(whole: bytes, tmp_path: Path) -> None:
    error = refused(write(tmp_path, whole.replace(b"IFC4'", b"IFC4X3_RC3'")))
    assert (error.place, "IFC4X3_ADD2" in error.remedy) == ("FILE_SCHEMA", True)


@pytest.mark.parametrize("share", [0.3, 0.5, 0.9, 0.995])
def test_a_file_that_breaks_off_is_read_with_its_loss_named(share: float, whole: bytes, tmp_path: Path) -> None:
    read = read_ifc(write(tmp_path, whole[: int(len(whole) * share)]))
    assert "breaks off" in read.losses[0]
    assert "ifc-loss" in [finding.code for finding in read.findings]


def test_an_id_used_twice_is_a_loss(whole: bytes, tmp_path: Path) -> None:
    line = next(line for line in whole.split(b"\n") if b"IFCPILE(" in line)
    read = read_ifc(write(tmp_path, whole.replace(line, line + b"\n" + line)))
    assert any("used twice" in loss for loss in read.losses)
    assert read.entities == PILES + 6


def test_a_reference_that_leads_nowhere_is_a_loss(whole: bytes, tmp_path: Path) -> None:
    line = next(line for line in whole.split(b"\n") if b"IFCCIRCLEPROFILEDEF(" in line)
    read = read_ifc(write(tmp_path, whole.replace(line + b"\n", b"")))
    assert any("lead nowhere" in loss for loss in read.losses)
    assert read.ignored == {"geometry cannot be read": 1}


def test_a_text_that_is_not_closed_is_a_loss(whole: bytes, tmp_path: Path) -> None:
    read = read_ifc(write(tmp_path, whole.replace(b"'P29'", b"'P29")))
    assert any("not closed" in loss for loss in read.losses)
    assert read_ifc(write(tmp_path, whole.replace(b"DATA;", b"DATA;\n/* don't ask */"))).losses == ()


def test_a_whole_file_has_no_losses(whole: bytes, tmp_path: Path) -> None:
    read = read_ifc(write(tmp_path, whole))
    assert (read.losses, read.findings, len(read.parts)) == ((), (), PILES + 6)


def test_a_wrong_extension_and_an_odd_name_are_read(whole: bytes, tmp_path: Path) -> None:
    assert len(read_ifc(write(tmp_path, whole, "model.dxf")).parts) == PILES + 6
    assert len(read_ifc(write(tmp_path, whole, "a\nb 'c'.ifc")).parts) == PILES + 6


def test_instances_in_comments_and_texts_are_not_counted_as_lost(whole: bytes, tmp_path: Path) -> None:
    assert count_instances(b"#1=IFCA();\n#2= IFCB(#1);#3 =IFCC((#1,#2),\n#2);", 3) == 3
    assert count_instances(b"#1=IFCA('\n#5=x');\n/* #2=IFCB(); */\n#3=IFCC(#1);", 2) == 2
    text = whole.replace(b"'P3'", b"'a;\n#999999=b'").replace(b"DATA;", b"DATA;\n/* #77777=IFCWALL($); */")
    assert read_ifc(write(tmp_path, text)).losses == ()


def test_a_packed_file_is_read_and_a_bomb_is_not(whole: bytes, tmp_path: Path) -> None:
    packed = tmp_path / "model.ifczip"
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("model.ifc", whole)
    assert len(read_ifc(packed).parts) == PILES + 6
    bomb = tmp_path / "bomb.ifczip"
    with zipfile.ZipFile(bomb, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("model.ifc", b"ISO-10303-21;" + b" " * 50_000_000)
    assert "times its size" in refused(bomb).problem
    none = tmp_path / "none.ifczip"
    with zipfile.ZipFile(none, "w") as archive:
        archive.writestr("readme.txt", "no model")
    assert "0 .ifc files" in refused(none).problem


def test_bodies_that_refer_to_themselves_are_left_out(tmp_path: Path) -> None:
    model = build()
    source = model.mapped([model.extrusion(model.circle(1.0), 3)], model.operator())
    column = model.product("IfcColumn", "loop", body=source, body_type="MappedRepresentation")
    source.MappingSource.MappedRepresentation.Items = [source]
    body = model.file.create_entity("IfcBooleanResult", "DIFFERENCE", model.extrusion(model.circle(1.0), 3), source)
    body.FirstOperand = body
    model.product("IfcColumn", "cut by itself", body=body, body_type="CSG")
    composite = model.file.create_entity("IfcCompositeProfileDef", "AREA", None, [model.circle(1.0), model.circle(2.0)])
    composite.Profiles = [composite, composite]
    model.product("IfcColumn", "profile of itself", body=model.extrusion(composite, 2.0))
    read = read_ifc(model.save(tmp_path / "m.ifc"))
    assert column.GlobalId in str(read.losses)
    assert (len(read.parts), sum(read.ignored.values())) == (PILES + 6, 3)


def mutate(data: bytes, chance: random.Random) -> bytes:
    """One of: cut off, flip bytes, cut out, rewire references, repeat lines, spoil numbers, insert rubbish."""
    kind = chance.randrange(7)
    if kind == 0:
        return data[: chance.randrange(200, len(data))]
    if kind == 1:
        spoilt = bytearray(data)
        for _ in range(chance.choice((5, 100))):
            spoilt[chance.randrange(len(spoilt))] = chance.randrange(256)
        return bytes(spoilt)
    if kind == 2:
        start = chance.randrange(len(data))
        return data[:start] + data[start + chance.randrange(1, 400) :]
    if kind == 3:
        ids = re.findall(rb"#\d+", data)
        return re.sub(rb"#\d+", lambda m: chance.choice(ids) if chance.random() < 0.01 else m[0], data)
    if kind == 4:
        lines = data.split(b"\n")
        at = chance.randrange(8, len(lines))
        return b"\n".join(lines[:at] + lines[at - 3 : at] + lines[at:])
    if kind == 5:
        wrong = (b"1.E+300", b"-0.", b"1.E-300", b"99999999.", b"0.")
        return re.sub(rb"\d+\.\d*", lambda m: chance.choice(wrong) if chance.random() < 0.02 else m[0], data)
    at = chance.randrange(len(data))
    return data[:at] + chance.randbytes(chance.randrange(1, 30)) + data[at:]


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(10))
def test_mutated_files_are_read_or_refused(seed: int, whole: bytes, tmp_path: Path) -> None:
    """Twenty mutations each: never another exception, the counts add up, and a silent loss of products is named."""
    for number in range(20):
        data = mutate(whole, random.Random(1000 * seed + number))
        try:
            read = read_ifc(write(tmp_path, data))
        except InputError:
            continue
        items = {part.source.item for part in read.parts}
        assert len(items) + sum(read.context.values()) + sum(read.ignored.values()) == read.entities
        if read.entities != PILES + 6:
            assert read.losses, f"seed {seed}, mutation {number}: {read.entities} entities and no loss named"
