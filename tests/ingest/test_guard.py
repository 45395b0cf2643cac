"""Readers in a child process: whatever comes in, one clear error or a reading, never a crash or a hang."""

from __future__ import annotations

import os
import random
import stat
import time
import zipfile
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from guard_builder import good_ags, good_dxf, good_ifc, is_clear

from ingest.errors import InputError
from ingest.guard import kind_of, read_guarded, read_here
from ingest.parts import FileParts

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
