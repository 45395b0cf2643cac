"""Readers in a child process: whatever comes in, one clear error or a reading, never a crash or a hang."""

from __future__ import annotations

import os
import random
import stat
import subprocess
import sys
import time
import zipfile
from collections.abc import Callable, Iterator
from pathlib import Path

import ezdxf
import ifcopenshell
import pytest

from ingest import guard
from ingest.errors import InputError
from ingest.guard import kind_of, read_guarded, read_here
from ingest.model import FileParts

AGS = (
    '"GROUP","PROJ"\n"HEADING","PROJ_ID"\n"UNIT",""\n"TYPE","ID"\n"DATA","P"\n\n'
    '"GROUP","LOCA"\n"HEADING","LOCA_ID","LOCA_NATE","LOCA_NATN","LOCA_GL"\n"UNIT","","m","m","m"\n"TYPE","ID","2DP","2DP","2DP"\n'
    + "".join(f'"DATA","BH{n}","{500 + 7.25 * n:.2f}","{300 + 3.5 * n:.2f}","4.50"\n' for n in range(40))
)


def good_ags(path: Path) -> None:
    path.write_bytes(AGS.replace("\n", "\r\n").encode())


def good_dxf(path: Path) -> None:
    drawing = ezdxf.new("R2010", units=6)
    space = drawing.modelspace()
    for n in range(60):
        space.add_circle((100.5 + n, 200.25), 0.375, dxfattribs={"layer": "PILES"})
        space.add_line((100.5 + n, 0.0), (100.75 + n, 9.125), dxfattribs={"layer": "STRUTS"})
    drawing.saveas(path)


def good_ifc(path: Path) -> None:
    model = ifcopenshell.file(schema="IFC4")
    make = model.create_entity
    unit = make("IfcUnitAssignment", [make("IfcSIUnit", None, "LENGTHUNIT", None, "METRE")])
    origin = make("IfcAxis2Placement3D", make("IfcCartesianPoint", (0.0, 0.0, 0.0)))
    context = make("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, origin)
    make("IfcProject", ifcopenshell.guid.new(), None, "P", None, None, None, None, [context], unit)
    for n in range(30):
        at = make("IfcAxis2Placement3D", make("IfcCartesianPoint", (1.25 * n, 2.5, -0.75)))
        disc = make("IfcCircleProfileDef", "AREA", None, None, 0.375)
        up = make("IfcDirection", (0.0, 0.0, 1.0))
        body = make("IfcExtrudedAreaSolid", disc, origin, up, 12.25)
        shape = make("IfcShapeRepresentation", context, "Body", "SweptSolid", [body])
        whole = make("IfcProductDefinitionShape", None, None, [shape])
        make(
            "IfcPile",
            ifcopenshell.guid.new(),
            None,
            f"pile {n}",
            None,
            None,
            make("IfcLocalPlacement", None, at),
            whole,
        )
    model.write(str(path))


MAKERS: dict[str, Callable[[Path], None]] = {"dxf": good_dxf, "ifc": good_ifc, "ags": good_ags}


@pytest.fixture(scope="module", params=sorted(MAKERS))
def good(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("good") / f"site.{request.param}"
    MAKERS[request.param](path)
    return path


def numbers_replaced(data: bytes, kind: str, by: bytes) -> bytes:
    """One in twenty of the numbers with decimals becomes something else, the first of them included."""
    import re

    count = -1

    def swap(found: re.Match[bytes]) -> bytes:
        nonlocal count
        count += 1
        return found[0] if count % 20 else by

    if kind == "dxf":  # coordinates of entities, not settings of the header
        start = data.index(b"ENTITIES")
        return data[:start] + re.sub(rb"(?<=\n)-?\d+\.\d+(?=\r?\n)", swap, data[start:])
    start = data.index(b"DATA;") if kind == "ifc" else data.index(b'"LOCA"')
    return data[:start] + re.sub(rb"-?\d+\.\d+", swap, data[start:])


def flipped(data: bytes, count: int) -> bytes:
    rng, out = random.Random(7), bytearray(data)
    for at in rng.sample(range(len(out)), count):
        out[at] ^= 1 << rng.randrange(8)
    return bytes(out)


def broken_copies(good: Path) -> Iterator[tuple[str, bytes]]:
    """The sixteen cases that are made of bytes; the other four are made of the file system."""
    data, kind = good.read_bytes(), good.suffix[1:]
    rng = random.Random(11)
    yield "cut in half", data[: len(data) // 2]
    yield "first 100 bytes", data[:100]
    yield "tail cut", data[:-40]
    yield "20 flipped bits", flipped(data, 20)
    yield "one percent flipped", flipped(data, len(data) // 100)
    yield "empty", b""
    yield "picture", b"\x89PNG\r\n\x1a\n" + bytes(64)
    yield "prose", b"This is a letter about a drawing that was never made.\n" * 40
    yield "random", rng.randbytes(5000)
    yield "zero bytes", bytes(4096)
    yield "archive", b"PK\x03\x04" + rng.randbytes(400)
    yield "utf-16", data.decode("latin-1").encode("utf-16")
    yield "numbers to nan", numbers_replaced(data, kind, b"nan")
    yield "numbers to 1e999", numbers_replaced(data, kind, b"1e999")


def read_or_error(path: Path) -> FileParts | InputError:
    try:
        return read_guarded(path, kind_of(path), read_limit=20.0)
    except InputError as error:
        return error


def is_clear(error: InputError, name: str) -> bool:
    lines = str(error).split("\n")
    return error.file == name and len(lines) <= 3 and "Traceback" not in str(error) and bool(error.remedy)


def test_a_good_file_is_read(good: Path) -> None:
    parts = read_guarded(good, kind_of(good))
    assert parts.kind == good.suffix[1:]
    assert len(parts.parts) >= 30
    assert parts == read_here(good, kind_of(good))


def test_broken_content_is_refused_clearly_or_read_with_its_losses_told(good: Path, tmp_path: Path) -> None:
    whole = read_guarded(good, kind_of(good))
    faults = []
    for case, data in broken_copies(good):
        path = tmp_path / f"broken{good.suffix}"
        path.write_bytes(data)
        start = time.monotonic()
        outcome = read_or_error(path)
        if time.monotonic() - start > 10:
            faults.append(f"{case}: took more than 10 s")
        if isinstance(outcome, InputError):
            if not is_clear(outcome, path.name):
                faults.append(f"{case}: {outcome}")
        elif not (outcome.losses or outcome.findings) and outcome.entities != whole.entities:
            faults.append(f"{case}: {outcome.entities} of {whole.entities} entities read without a word")
        elif "flipped" not in case and not outcome.losses:
            faults.append(f"{case}: read as if nothing had happened")
    assert not faults, "\n".join(faults)


def test_what_the_file_system_refuses_is_told(good: Path, tmp_path: Path) -> None:
    folder, none, loop, shut = (tmp_path / f"{name}{good.suffix}" for name in ("folder", "none", "loop", "shut"))
    folder.mkdir()
    loop.symlink_to(loop)
    shut.write_bytes(good.read_bytes())
    shut.chmod(0)
    fifo = tmp_path / f"pipe{good.suffix}"
    os.mkfifo(fifo)
    words = {folder: "folder", none: "does not exist", loop: "leads back", shut: "permission", fifo: "pipe"}
    for path, word in words.items():
        outcome = read_or_error(path)
        assert isinstance(outcome, InputError)
        assert is_clear(outcome, path.name)
        assert word in outcome.problem
    shut.chmod(stat.S_IRUSR | stat.S_IWUSR)


def test_a_wrong_extension_and_a_newline_in_the_name_do_not_matter(good: Path, tmp_path: Path) -> None:
    for name in ("site.txt", f"two\nlines{good.suffix}", "site.ifc", f"=cmd {good.suffix}"):
        path = tmp_path / name
        path.write_bytes(good.read_bytes())
        assert isinstance(read_or_error(path), FileParts), name


def test_names_in_messages_stay_on_their_line(tmp_path: Path) -> None:
    path = tmp_path / "a\nb\u202e.dxf"
    path.write_bytes(b"prose")
    outcome = read_or_error(path)
    assert isinstance(outcome, InputError)
    assert len(str(outcome).split("\n")) == 2


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"<?xml version='1.0'?><!DOCTYPE x [<!ENTITY a 'b'>]><ifc/>", "declares entities"),
        (b"<?xml version='1.0'?><ifcXML/>", "STEP text only"),
        (b"%PDF-1.7 ...", "a PDF document"),
        (b"AC1032\x00\x00", "a DWG drawing"),
    ],
)
def test_other_formats_are_named(tmp_path: Path, content: bytes, words: str) -> None:
    path = tmp_path / "model.ifc"
    path.write_bytes(content)
    with pytest.raises(InputError, match=words):
        kind_of(path)


def test_a_packed_model_is_read_and_a_bomb_is_not(tmp_path: Path) -> None:
    plain, packed, bomb = tmp_path / "m.ifc", tmp_path / "m.ifczip", tmp_path / "b.ifczip"
    good_ifc(plain)
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.write(plain, "../inside.ifc")
    with (
        zipfile.ZipFile(bomb, "w", zipfile.ZIP_DEFLATED) as archive,
        archive.open("m.ifc", "w", force_zip64=True) as inside,
    ):
        inside.write(b"ISO-10303-21;")
        for _ in range(80):
            inside.write(bytes(1_000_000))
    outcome = read_or_error(packed)
    assert isinstance(outcome, FileParts)
    assert len(outcome.parts) == 30
    refused = read_or_error(bomb)
    assert isinstance(refused, InputError)
    assert is_clear(refused, bomb.name)
    assert not (tmp_path.parent / "inside.ifc").exists()


HOSTILE = {
    "hang": "import time\ndef read(path):\n    time.sleep(60)\n",
    "crash": "import os, signal\ndef read(path):\n    os.kill(os.getpid(), signal.SIGSEGV)\n",
    "memory": "def read(path):\n    return [bytes(50_000_000) for _ in range(100)]\n",
    "exit": "import os\ndef read(path):\n    os._exit(3)\n",
    "chatter": "import os\nfrom ingest.ags import read_ags\n"
    "def read(path):\n    print('noise')\n    os.write(1, b'noise')\n    return read_ags(path)\n",
    "fault": "def read(path):\n    raise KeyError(str(path))\n",
}


@pytest.fixture
def hostile_reader(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Callable[[str], Path]:
    """A file whose reader does what the test wants, found by the child on its own path."""
    site = tmp_path / "site"
    site.mkdir()

    def make(what: str) -> Path:
        (site / "hostile_reader.py").write_text(HOSTILE[what])
        monkeypatch.setenv("PYTHONPATH", str(site))
        path = tmp_path / "site.ags"
        good_ags(path)
        return path

    return make


@pytest.mark.parametrize(
    ("what", "words"),
    [("hang", "not read within"), ("crash", "signal 11"), ("memory", "GB"), ("exit", "code 3"), ("fault", "KeyError")],
)
def test_a_reader_that_misbehaves_is_one_clear_error(
    what: str, words: str, hostile_reader: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    path = hostile_reader(what)
    monkeypatch.setattr(guard, "_command", hostile_command)
    start = time.monotonic()
    with pytest.raises(InputError) as caught:
        read_guarded(path, "ags", read_limit=3.0)
    assert words in caught.value.problem
    assert is_clear(caught.value, path.name)
    assert str(path.parent) not in str(caught.value)
    assert time.monotonic() - start < 8


def test_chatter_of_a_library_does_not_spoil_the_answer(
    hostile_reader: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    path = hostile_reader("chatter")
    monkeypatch.setattr(guard, "_command", hostile_command)
    assert len(read_guarded(path, "ags").boreholes) == 40


def hostile_command(kind: str, path: str, memory: int) -> list[str]:
    """The child with one reader replaced."""
    code = (
        "import sys; from ingest import guard; guard.READERS['ags'] = 'hostile_reader:read'; "
        f"sys.argv[1:] = [{kind!r}, {path!r}, '{memory}']; sys.exit(guard.main())"
    )
    return [sys.executable, "-P", "-c", code]


@pytest.mark.parametrize(
    ("kind", "heavy"),
    [
        ("ags", {"numpy", "scipy", "shapely", "ezdxf", "ifcopenshell"}),
        ("dxf", {"ifcopenshell", "scipy", "networkx"}),
        ("ifc", {"ezdxf", "networkx"}),
    ],
)
def test_a_child_loads_only_what_its_reader_needs(kind: str, heavy: set[str]) -> None:
    module = guard.READERS[kind].partition(":")[0]  # type: ignore[index]
    code = f"import sys, ingest.guard, ingest.model, {module}; print(*sys.modules)"
    home = str(Path(guard.__file__).parents[1])
    loaded = subprocess.run(
        [sys.executable, "-c", code], cwd=home, capture_output=True, text=True, check=True
    ).stdout.split()
    assert not heavy & set(loaded)


def test_a_child_is_up_in_half_a_second_or_four_times_an_import_of_numpy(tmp_path: Path) -> None:
    path = tmp_path / "site.ags"
    good_ags(path)
    numpy = min(seconds(lambda: subprocess.run([sys.executable, "-c", "import numpy"], check=True)) for _ in range(3))
    child = min(seconds(lambda: read_guarded(path, "ags")) for _ in range(3))
    assert child < max(0.5, 4 * numpy)


def seconds(work: Callable[[], object]) -> float:
    start = time.monotonic()
    work()
    return time.monotonic() - start
