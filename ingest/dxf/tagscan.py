"""The bare tags of a DXF file, without a library: group codes, where each value stands, and in which section."""

from __future__ import annotations

import struct
import sys
from collections import Counter
from dataclasses import dataclass, field
from itertools import zip_longest
from typing import Any

import numpy as np
from numpy.typing import NDArray

Ints = NDArray[np.signedinteger[Any]]

BINARY_MARK = b"AutoCAD Binary DXF\r\n\x1a\x00"
SUBENTITIES = {"VERTEX", "SEQEND", "ATTRIB"}
"""Listed after the entity they belong to, never counted alone."""
_MARKS = {"SECTION", "ENDSEC", "EOF"}
_PIECE = 1 << 22
"""Bytes of a text file looked at in one go."""
_BLANK = np.zeros(256, dtype=np.bool_)
_BLANK[[9, 13, 32]] = True
NUMBER_CODES = ((10, 59), (110, 149), (210, 239), (460, 469), (1010, 1059))


@dataclass(slots=True)
class Tags:
    """All tags up to the end mark. `starts` and `stops` bound the bytes of each value."""

    data: bytes
    binary: bool
    codes: Ints
    starts: Ints
    stops: Ints
    ended: bool
    """Whether the end mark (0, EOF) was found."""
    bad_code: int | None = None
    """Number of tags before the first one whose group code is none; what follows it means nothing."""
    zeros: Ints = field(default_factory=lambda: np.empty(0, dtype=np.int64))
    names: list[str] = field(default_factory=list)
    """Value of each tag with group code 0, in step with `zeros`."""
    marks: list[int] = field(default_factory=list)
    """Where SECTION, ENDSEC and EOF stand in `names`."""
    sections: dict[str, tuple[int, int]] = field(default_factory=dict)
    """Section name -> first and last tag index (last excluded); the first one of a name."""

    def value(self, index: int) -> bytes:
        """The bytes of a value."""
        return self.data[self.starts[index] : self.stops[index]]

    def values(self, indices: Ints) -> list[bytes]:
        """The bytes of many values."""
        data = self.data
        spans = zip(self.starts[indices].tolist(), self.stops[indices].tolist(), strict=True)
        return [data[a:b] for a, b in spans]

    def place(self, index: int) -> str:
        """Where a value stands: its line in a text file, its byte in a binary one."""
        if not self.binary:
            return f"line {2 * index + 2}"
        known = len(self.codes)
        return f"byte {self.starts[index] if index < known else self.stops[-1] if known else len(BINARY_MARK)}"

    def header(self, variable: str) -> str | None:
        """First value of a header variable, None where the file does not set it."""
        first, last = self.sections.get("HEADER", (0, 0))
        wanted = variable.encode()
        for index in (np.flatnonzero(self.codes[first:last] == 9) + first).tolist():
            if self.value(index) == wanted and index + 1 < last:
                return self._plain(index + 1)
        return None

    def _plain(self, index: int) -> str:
        raw = self.value(index)
        if self.binary and 60 <= self.codes[index] <= 79:
            return str(int.from_bytes(raw, "little", signed=True))
        return raw.decode("latin-1").strip()

    def count_entities(self) -> Counter[str]:
        """Entities by type in the sections ENTITIES and BLOCKS; what belongs to another entity is not counted."""
        counts: Counter[str] = Counter()
        for section in ("ENTITIES", "BLOCKS"):
            first, last = self.sections.get(section, (0, 0))
            a, b = np.searchsorted(self.zeros, (first, last)).tolist()
            counts.update(self.names[a:b])
        for name in (*SUBENTITIES, "BLOCK", "ENDBLK", "SECTION", "ENDSEC", "EOF"):
            counts.pop(name, None)
        return counts


def scan_tags(data: bytes) -> Tags:
    """Index the tags of a whole file.

    Args:
        data: Bytes of a text or binary DXF file.

    Returns:
        Its tags; a file cut short has `ended` False, a damaged one `bad_code`.
    """
    tags = _scan_binary(data) if data.startswith(BINARY_MARK) else _scan_text(data)
    tags.zeros = np.flatnonzero(tags.codes == 0)
    words = tags.values(tags.zeros)
    known = {word: sys.intern(word.decode("latin-1")) for word in set(words)}
    tags.names = [known[word] for word in words]
    _find_sections(tags)
    return tags


def _scan_text(data: bytes) -> Tags:
    """Go through the lines in pieces of some megabytes: large arrays cost more than the work on them."""
    if b"\n" not in data:
        data = data.replace(b"\r", b"\n")
    raw = np.frombuffer(data, dtype=np.uint8)
    found = [(np.empty(0, dtype=np.int16), np.empty(0, dtype=np.int64), np.empty(0, dtype=np.int64))]
    at, count, span = 3 if data.startswith(b"\xef\xbb\xbf") else 0, 0, _PIECE
    bad_code: int | None = None
    ended = False
    while at < len(data) and bad_code is None and not ended:
        ends = _line_ends(raw, at, span)
        if len(ends) < 2:
            if at + span >= len(data):
                break
            span *= 2  # a line longer than the piece
            continue
        begins = np.concatenate(([at], ends[:-1] + 1))
        at = int(ends[-1]) + 1
        codes, bad, starts, stops = _read_pairs(raw, begins, ends)
        keep, bad_at, ended = _cut(data, codes, bad, starts, stops)
        bad_code = count + bad_at if bad_at is not None else None
        found.append((codes[:keep], starts[:keep], stops[:keep]))
        count += keep
    merged = [np.concatenate(arrays) for arrays in zip(*found, strict=True)]
    return Tags(data, False, merged[0], merged[1], merged[2], ended, bad_code)


def _line_ends(raw: NDArray[np.uint8], at: int, span: int) -> Ints:
    """Ends of an even number of lines from a byte on, as many as fit into the span."""
    ends = np.flatnonzero(raw[at : at + span] == 10) + at
    if at + span >= len(raw) and raw[-1] != 10:
        ends = np.append(ends, len(raw))
    return ends[: len(ends) // 2 * 2]


def _read_pairs(
    raw: NDArray[np.uint8], begins: Ints, ends: Ints
) -> tuple[NDArray[np.int16], NDArray[np.bool_], Ints, Ints]:
    """Group codes, which of them are none, and the bounds of the values, of pairs of lines."""
    ends = ends.copy()
    todo = np.arange(len(ends))
    while len(todo := todo[(ends[todo] > begins[todo]) & _BLANK[raw[ends[todo] - 1]]]):
        ends[todo] -= 1
    starts, stops = begins[1::2].copy(), ends[1::2]
    todo = np.arange(len(starts))
    while len(todo := todo[(starts[todo] < stops[todo]) & _BLANK[raw[np.minimum(starts[todo], len(raw) - 1)]]]):
        starts[todo] += 1
    codes, bad = _read_codes(raw, begins[::2], ends[::2])
    return codes, bad, starts, stops


def _read_codes(raw: NDArray[np.uint8], begins: Ints, ends: Ints) -> tuple[NDArray[np.int16], NDArray[np.bool_]]:
    """Group codes of the code lines, and which of them are none."""
    length = ends - begins
    codes = np.zeros(len(begins), dtype=np.int16)
    bad = (length < 1) | (length > 12)
    open_ = ~bad
    for back in range(12):
        there = open_ & (length > back)
        if not there.any():
            break
        byte = raw[np.where(there, ends - 1 - back, 0)]
        digit = byte - 48  # wraps for what is no digit
        open_ = there & (digit < 10)
        bad |= there & (digit > 9) & ((byte != 32) | (back == 0)) | open_ & (back > 3)
        if back < 4:
            codes += np.where(open_, digit, 0).astype(np.int16) * np.int16(10**back)
    return codes, bad | (codes > 1071)


def _cut(
    data: bytes, codes: NDArray[np.int16], bad: NDArray[np.bool_], starts: Ints, stops: Ints
) -> tuple[int, int | None, bool]:
    """How many tags count: up to the end mark, or up to the first group code that is none."""
    faults = np.flatnonzero(bad)
    zeros = np.flatnonzero((codes == 0) & (stops - starts == 3) & ~bad).tolist()
    ending = next((z for z in zeros if data[starts[z] : stops[z]] == b"EOF"), None)
    if len(faults) and (ending is None or faults[0] < ending):
        return int(faults[0]), int(faults[0]), False
    return (len(codes), None, False) if ending is None else (ending + 1, None, True)


def _find_sections(tags: Tags) -> None:
    """Note where each section begins and ends."""
    tags.marks = [k for k, name in enumerate(tags.names) if name in _MARKS]
    for k, following in zip_longest(tags.marks, tags.marks[1:]):
        at = int(tags.zeros[k])
        if tags.names[k] != "SECTION" or at + 1 >= len(tags.codes) or tags.codes[at + 1] != 2:
            continue
        title = tags.value(at + 1).decode("latin-1")
        last = int(tags.zeros[following]) if following is not None else len(tags.codes)
        tags.sections.setdefault(title, (at + 2, last))


_KINDS: tuple[tuple[int, int, str], ...] = (
    (0, 9, "s"), (10, 59, "d"), (60, 79, "h"), (90, 99, "i"), (100, 102, "s"), (105, 105, "s"), (110, 149, "d"),
    (160, 169, "q"), (170, 179, "h"), (210, 239, "d"), (270, 289, "h"), (290, 299, "b"), (300, 309, "s"),
    (310, 319, "x"), (320, 369, "s"), (370, 389, "h"), (390, 399, "s"), (400, 409, "h"), (410, 419, "s"),
    (420, 429, "i"), (430, 439, "s"), (440, 459, "i"), (460, 469, "d"), (470, 481, "s"), (999, 1003, "s"),
    (1004, 1004, "x"), (1005, 1009, "s"), (1010, 1059, "d"), (1060, 1070, "h"), (1071, 1071, "i"),
)  # fmt: skip
_SIZES = {"d": 8, "h": 2, "i": 4, "q": 8, "b": 1}
_KIND = {code: kind for low, high, kind in _KINDS for code in range(low, high + 1)}


def _scan_binary(data: bytes) -> Tags:
    """Walk through a binary file; one-byte codes up to R12, two-byte codes since R13."""
    at, short = len(BINARY_MARK), len(data) > 23 and data[23] != 0
    codes: list[int] = []
    starts: list[int] = []
    stops: list[int] = []
    ended, bad = False, None
    while at < len(data) and not ended:
        code, begin = _binary_code(data, at, short)
        kind = _KIND.get(code)
        stop = _binary_stop(data, begin, kind)
        if kind is None or stop < 0:
            bad = len(codes) if kind is None and code >= 0 else None
            break
        first = begin + 1 if kind == "x" else begin
        codes.append(code)
        starts.append(first)
        stops.append(stop)
        at = stop + 1 if kind == "s" else stop
        ended = code == 0 and data[first:stop] == b"EOF"
    arrays = [np.array(values, dtype=np.int64) for values in (codes, starts, stops)]
    return Tags(data, True, arrays[0], arrays[1], arrays[2], ended, bad)


def _binary_code(data: bytes, at: int, short: bool) -> tuple[int, int]:
    """The group code at a byte and where its value begins; -1 past the end."""
    if not short:
        return (int.from_bytes(data[at : at + 2], "little"), at + 2) if at + 2 <= len(data) else (-1, at)
    if data[at] != 255:
        return data[at], at + 1
    return (int.from_bytes(data[at + 1 : at + 3], "little"), at + 3) if at + 3 <= len(data) else (-1, at)


def _binary_stop(data: bytes, begin: int, kind: str | None) -> int:
    """Where a value ends; -1 when the file ends before it."""
    if kind == "s":
        return data.find(b"\0", begin)
    if kind == "x":
        stop = begin + 1 + data[begin] if begin < len(data) else len(data) + 1
    else:
        stop = begin + _SIZES.get(kind or "", 0)
    return stop if stop <= len(data) else -1


def read_double(raw: bytes) -> float:
    """An eight-byte number of a binary file."""
    return float(struct.unpack("<d", raw)[0])
