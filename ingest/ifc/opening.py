"""Open an IFC file, and say what the library lost on the way without a word."""

from __future__ import annotations

import hashlib
import re
import tempfile
import zipfile
from collections import Counter
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path
from typing import Any

import ifcopenshell

from ingest.errors import InputError

Entity = Any
Model = Any

MAGIC = b"ISO-10303-21"
TRAILER = b"END-ISO-10303-21"
ZIP_LIMIT = 2 * 1024**3
"""Largest unpacked size taken from an IFCZIP, bytes."""
ZIP_RATIO = 200
"""Largest ratio of unpacked to packed size; real IFC text packs 5 to 20 times (common practice, no source)."""
EXPORT_AGAIN = "export the model again, or send the file as it left the authoring program"
_INSTANCE = re.compile(rb"#\s*\d+\s*=")
_HIDDEN = re.compile(rb"/\*.*?\*/|'(?:[^']|'')*'", re.S)
_SCHEMA = re.compile(rb"FILE_SCHEMA\s*\(\s*\(\s*'([^']*)'", re.I)
_LOST = re.compile(r"Instance reference #(\d+) used by instance #(\d+)")
_TWICE = re.compile(r"Overwriting instance with name #(\d+)")


@dataclass(frozen=True, slots=True)
class Opened:
    """A loaded model, the hash of its bytes, and what was lost when it was loaded."""

    model: Model
    sha256: str
    losses: tuple[str, ...]


def open_model(path: Path) -> Opened:
    """Load an IFC file (STEP text, or one packed in an IFCZIP).

    Raises:
        InputError: If the file cannot be read, is no IFC text, has a schema that is no released standard or holds
            text that is not valid.
    """
    data = _read_bytes(path)
    sha256 = hashlib.sha256(data).hexdigest()
    if data.startswith(b"PK"):
        text = _unpack(path, data)
        with tempfile.TemporaryDirectory() as folder:
            inner = Path(folder) / "packed.ifc"
            inner.write_bytes(text)
            return _load(path, inner, text, sha256)
    return _load(path, path, data, sha256)


def _read_bytes(path: Path) -> bytes:
    if path.is_dir():
        raise InputError(path.name, "", "is a folder, not a file", "name the IFC file itself")
    try:
        data = path.read_bytes()
    except OSError as error:
        raise InputError(
            path.name, "", f"cannot be read: {error.strerror or error}", "check the path and the rights of the file"
        ) from error
    if not data:
        raise InputError(path.name, "", "is empty (0 bytes)", EXPORT_AGAIN)
    return data


def _unpack(path: Path, data: bytes) -> bytes:
    try:
        with zipfile.ZipFile(BytesIO(data)) as packed:
            members = [m for m in packed.infolist() if m.filename.lower().endswith(".ifc")]
            if len(members) != 1:
                raise InputError(
                    path.name, "", f"is a ZIP with {len(members)} .ifc files in it, one is needed", "unpack it first"
                )
            size = members[0].file_size
            if size > ZIP_LIMIT or size > ZIP_RATIO * max(members[0].compress_size, 1):
                raise InputError(
                    path.name,
                    "",
                    f"would unpack to {size} bytes, {size // max(members[0].compress_size, 1)} times its size",
                    "unpack it yourself and name the .ifc, if you trust it",
                )
            return packed.read(members[0])
    except (zipfile.BadZipFile, NotImplementedError, RuntimeError, OSError, EOFError) as error:
        raise InputError(path.name, "", f"is a ZIP that cannot be unpacked: {error}", EXPORT_AGAIN) from error


def _check_start(path: Path, data: bytes) -> None:
    head = data[:4096].lstrip()
    if data[:2] in (b"\xff\xfe", b"\xfe\xff") or b"I\0S\0O\0" in data[:16]:
        raise InputError(path.name, "byte 0", "is UTF-16 text; IFC is plain ASCII", "save it as plain text, no BOM")
    if data.startswith(b"\xef\xbb\xbf"):
        raise InputError(path.name, "byte 0", "starts with a byte-order mark", "save it as plain text, without BOM")
    if head.startswith(b"<"):
        raise InputError(path.name, "byte 0", "is XML; ifcXML is not read", "export as IFC (STEP text, .ifc)")
    if not head.startswith(MAGIC):
        start = head[:16].decode("ascii", "replace")
        raise InputError(path.name, "byte 0", f"starts with {start!r}, not with ISO-10303-21", "name an IFC file")


def _load(path: Path, source: Path, data: bytes, sha256: str) -> Opened:
    _check_start(path, data)
    ifcopenshell.get_log()
    try:
        model = ifcopenshell.open(source, format=".ifc")
    except ifcopenshell.SchemaError as error:
        raise _schema_refused(path, data) from error
    except (ifcopenshell.Error, OSError, RuntimeError, ValueError) as error:
        raise _syntax_refused(path, data, ifcopenshell.get_log(), str(error)) from error
    log = ifcopenshell.get_log()
    if "[SYN" in log:
        raise _syntax_refused(path, data, log, "")
    return Opened(model, sha256, find_losses(data, log, len(model.entity_names())))


def _schema_refused(path: Path, data: bytes) -> InputError:
    found = _SCHEMA.search(data)
    name = found[1].decode("ascii", "replace") if found else "not stated"
    draft = "_RC" in name.upper() or name.upper() in ("IFC4X1", "IFC4X2", "IFC2X3_FINAL")
    kind = (
        "a draft or withdrawn schema whose classes differ from the standard's" if draft else "not a schema known here"
    )
    return InputError(
        path.name,
        "FILE_SCHEMA",
        f"schema {name} is {kind}; nothing was read from it",
        "export the model as IFC2X3, IFC4 or IFC4X3_ADD2 (renaming the schema in the text loses ground layers)",
    )


def _syntax_refused(path: Path, data: bytes, log: str, error: str) -> InputError:
    lines = [line for line in log.splitlines() if line.startswith("[error]")]
    first = re.sub(r"^(\[[^]]*\]\s*)+", "", lines[0]) if lines else error.split("\n")[0]
    offset = re.search(r"offset (\d+)", first)
    line = data.count(b"\n", 0, int(offset[1])) + 1 if offset else 0
    place = f"line {line}" if line else "header" if "header" in error else ""
    what = re.sub(r"\s*at offset \d+", "", first) or "the text is not valid"
    return InputError(path.name, place, f"is not valid IFC text: {what[:160]} ({len(lines)} faults)", EXPORT_AGAIN)


def find_losses(data: bytes, log: str, loaded: int) -> tuple[str, ...]:
    """Compare the raw text with what was loaded: trailer, instances, open texts, ids used twice or never defined.

    Args:
        data: Bytes of the file.
        log: What the library wrote while it loaded them.
        loaded: Number of instances the library kept.

    Returns:
        One sentence per kind of loss, empty when nothing is missing.
    """
    losses = []
    if TRAILER not in data[-4096:]:
        losses.append(f"the file breaks off: its end marker {TRAILER.decode()} is missing after {len(data)} bytes")
    written = count_instances(data, loaded)
    if written != loaded:
        losses.append(f"{written} instances stand in the text, {loaded} were loaded")
    if data.count(b"'") % 2 and b"'" in _HIDDEN.sub(b"", data):
        losses.append("a text is not closed; what follows it was taken for text")
    twice = _TWICE.findall(log)
    if twice:
        losses.append(f"{len(twice)} ids are used twice, the first is #{twice[0]}")
    lost = _LOST.findall(log)
    if lost:
        most = Counter(item for item, _ in lost).most_common(1)[0]
        losses.append(f"{len(lost)} references lead nowhere, most often to #{most[0]} ({most[1]} times)")
    return tuple(losses)


def count_instances(data: bytes, expected: int) -> int:
    """Count the instances written in the text.

    Lines that begin with an id are counted first, which costs next to nothing and settles it for nearly every file.
    Only when that is not the number expected are comments and texts taken out and the rest searched.
    """
    quick = data.count(b"\n#") + data.startswith(b"#")
    return quick if quick == expected else len(_INSTANCE.findall(_HIDDEN.sub(b"", data)))
