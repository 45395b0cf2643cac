"""What the bare bytes of a DXF file show before any library reads it: cut short, damaged, or no DXF at all."""

from __future__ import annotations

import math
import re
from pathlib import Path

import numpy as np

from ingest.dxf.tagscan import NUMBER_CODES, Ints, Tags, read_double, scan_tags
from ingest.errors import InputError

SEND_AGAIN = "have the file sent or copied again; a CAD program's own check shows the same fault"
_OTHER_FORMATS = (
    (b"AC10", "a DWG drawing", "save it as DXF in the CAD program"),
    (b"AC1.", "a DWG drawing", "save it as DXF in the CAD program"),
    (b"ISO-10303-21", "a STEP file such as IFC", "give it the ending .ifc"),
    (b"PK\x03\x04", "a ZIP archive", "unpack it and name the DXF file inside"),
    (b"\x89PNG", "a PNG picture", "name the DXF file itself"),
    (b"%PDF", "a PDF document", "name the DXF file itself"),
    (b"\xff\xfe", "text in UTF-16", "save it as DXF again; the format is ASCII or UTF-8"),
    (b"\xfe\xff", "text in UTF-16", "save it as DXF again; the format is ASCII or UTF-8"),
)
_COMMA = re.compile(r"[+-]?\d*,\d+([eE][+-]?\d+)?")
_NUMBER_MARKS = np.ones(256, dtype=np.uint8)
_NUMBER_MARKS[[ord(c) for c in "0123456789+-."]] = 0
_AT_ONCE = 200_000
"""Numbers looked at in one go."""
_INT_CODES = ((60, 79), (90, 99), (170, 179), (270, 289), (370, 389), (400, 409), (420, 429), (440, 459))


def read_bytes(path: Path) -> bytes:
    """The bytes of a file.

    Raises:
        InputError: Missing, a folder, not readable or empty.
    """
    try:
        data = path.read_bytes()
    except FileNotFoundError:
        raise InputError(path.name, "", "there is no such file", f"check the path {str(path)!r}") from None
    except IsADirectoryError:
        raise InputError(path.name, "", "this is a folder", "name the DXF file in it") from None
    except PermissionError:
        raise InputError(
            path.name, "", "may not be read (no permission)", "give yourself the right to read it"
        ) from None
    except OSError as fault:
        raise InputError(path.name, "", f"cannot be opened: {fault.strerror}", "check the path and the disk") from None
    if not data:
        raise InputError(path.name, "byte 0", "the file is empty (0 bytes)", SEND_AGAIN)
    return data


def check_bytes(data: bytes, file: str) -> Tags:
    """Index the tags of a file and refuse what no reading can mend.

    Args:
        data: All bytes of the file.
        file: Its name for messages.

    Returns:
        The tags.

    Raises:
        InputError: Another format, cut short, damaged, or with coordinates that are no finite numbers; all faults found
            are in it.
    """
    _check_format(data, file)
    tags = scan_tags(data)
    if not tags.names or tags.names[0] != "SECTION":
        raise InputError(file, tags.place(0), "is no DXF file: it does not begin with a section", "name a DXF file")
    faults = [*_structure_faults(tags), *_number_faults(tags)]
    if faults:
        place, problem, remedy = faults[0]
        raise InputError(file, place, problem, remedy, faults[1:])
    return tags


def _check_format(data: bytes, file: str) -> None:
    for mark, what, remedy in _OTHER_FORMATS:
        if data.startswith(mark):
            raise InputError(file, "byte 0", f"this is {what}, not a DXF file", remedy)
    nul = data.find(b"\0")
    if nul >= 0 and not data.startswith(b"AutoCAD Binary DXF"):
        raise InputError(
            file, f"byte {nul}", "holds zero bytes, which no text DXF file does: it is damaged", SEND_AGAIN
        )


def _structure_faults(tags: Tags) -> list[tuple[str, str, str]]:
    if tags.bad_code is not None:
        place = tags.place(tags.bad_code) if tags.binary else f"line {2 * tags.bad_code + 1}"
        line = b"" if tags.binary else tags.data.splitlines()[2 * tags.bad_code].strip()[:20]
        shown = _shown(line)
        return [(place, f"{shown} is no group code: bytes are damaged or missing here or just before", SEND_AGAIN)]
    faults = []
    if not tags.ended:
        place = f"byte {len(tags.data)}" if tags.binary else f"line {2 * len(tags.codes)}"
        faults.append((place, "the file ends without its end mark (EOF): it has been cut short", SEND_AGAIN))
    if "ENTITIES" not in tags.sections:
        place = tags.place(len(tags.codes) - 1)
        faults.append((place, "the file has no section ENTITIES: nothing is drawn in it", SEND_AGAIN))
    open_ = False
    for k in tags.marks:
        name = tags.names[k]
        if open_ != (name == "ENDSEC"):
            words = f"{name} stands where the section before has not been closed or opened: bytes are missing"
            faults.append((tags.place(int(tags.zeros[k])), words, SEND_AGAIN))
            break
        open_ = name == "SECTION"
    return faults


def _number_faults(tags: Tags) -> list[tuple[str, str, str]]:
    """Numbers of figures that are none; elsewhere in the file the library may mend them."""
    where = _figure_numbers(tags)
    if not len(where):
        return []
    suspects = _binary_suspects(tags, where) if tags.binary else _text_suspects(tags, where)
    kinds: dict[str, list[int]] = {}
    for index in suspects:
        kind = _number_kind(tags, index)
        if kind:
            kinds.setdefault(kind, []).append(index)
    return [_describe(tags, kind, found) for kind, found in sorted(kinds.items(), key=lambda item: item[1][0])]


def _describe(tags: Tags, kind: str, found: list[int]) -> tuple[str, str, str]:
    shown = "" if tags.binary else _shown(tags.value(found[0]))
    count = f" ({len(found)} such numbers)" if len(found) > 1 else ""
    remedies = {
        "decimal comma": "export the drawing again with a decimal point",
        "not finite": "erase or redraw these entities in the CAD program",
    }
    words = {
        "decimal comma": f"decimal comma in {shown}; read as it stands the point would move",
        "not finite": f"coordinate {shown} is not a finite number".replace("  ", " "),
        "no number": f"{shown} stands where a number must be; the bytes are damaged",
    }
    return (tags.place(found[0]) + _owner(tags, found[0]), words[kind] + count, remedies.get(kind, SEND_AGAIN))


def _shown(raw: bytes) -> str:
    return repr(raw[:20].decode("ascii", "backslashreplace"))


def _owner(tags: Tags, index: int) -> str:
    """The entity a value belongs to, in words."""
    k = int(np.searchsorted(tags.zeros, index, side="right")) - 1
    if k < 0:
        return ""
    first, last = int(tags.zeros[k]), int(tags.zeros[k + 1]) if k + 1 < len(tags.zeros) else len(tags.codes)
    handles = np.flatnonzero(tags.codes[first:last] == 5)
    handle = tags.value(first + int(handles[0])).decode("ascii", "replace") if len(handles) else ""
    return f", {tags.names[k]} {handle}".rstrip()


def _in(codes: Ints, ranges: tuple[tuple[int, int], ...]) -> np.ndarray:
    found = np.zeros(1072, dtype=bool)
    for low, high in ranges:
        found[low : high + 1] = True
    return found[codes]


def _figure_numbers(tags: Tags) -> Ints:
    """Indices of the real numbers in the sections that hold figures."""
    pieces = []
    for section in ("BLOCKS", "ENTITIES"):
        first, last = tags.sections.get(section, (0, 0))
        pieces.append(np.flatnonzero(_in(tags.codes[first:last], NUMBER_CODES)) + first)
    return np.sort(np.concatenate(pieces))


def _text_suspects(tags: Tags, where: Ints) -> list[int]:
    """Numbers with a foreign byte in them, none at all, or an exponent."""
    suspects: list[int] = []
    for first in range(0, len(where), _AT_ONCE):
        some = where[first : first + _AT_ONCE]
        starts, stops = tags.starts[some], tags.stops[some]
        low, high = int(starts[0]), max(int(stops[-1]), int(starts[-1]) + 1)
        marks = _NUMBER_MARKS[np.frombuffer(tags.data[low:high] + b"0", dtype=np.uint8)]
        spans = np.column_stack((starts, np.maximum(stops, starts + 1))).ravel() - low
        worst = np.maximum.reduceat(marks, spans)[::2]
        suspects += some[(worst > 0) | (stops <= starts)].tolist()
    return suspects


def _binary_suspects(tags: Tags, where: Ints) -> list[int]:
    return [index for index in where.tolist() if not math.isfinite(read_double(tags.value(index)))]


def _number_kind(tags: Tags, index: int) -> str:
    """What is wrong with a number, "" for nothing."""
    if tags.binary:
        return "not finite"
    text = tags.value(index).decode("latin-1")
    try:
        return "" if math.isfinite(float(text)) else "not finite"
    except ValueError:
        return "decimal comma" if _COMMA.fullmatch(text) else "no number"


def find_bad_number(tags: Tags) -> tuple[str, str] | None:
    """The first number in the whole file that cannot be read, for the message when a library gave up.

    Returns:
        Its place and what stands there, or None.
    """
    if tags.binary:
        return None
    real, whole = _in(tags.codes, NUMBER_CODES), _in(tags.codes, _INT_CODES)
    for index in np.flatnonzero(real | whole).tolist():
        text = tags.value(index).decode("latin-1")
        try:
            float(text) if real[index] else int(text)
        except ValueError:
            return tags.place(index) + _owner(tags, index), text[:20]
    return None
