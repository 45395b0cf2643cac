"""What the notes on a drawing say in numbers: levels with and without sign, diameters, spacings, counts, loads."""

from __future__ import annotations

import re
import tomllib
from fnmatch import fnmatchcase
from functools import cache
from importlib.resources import files
from typing import Any, Literal

from ingest.record import record
from ingest.words import split_words

_NUMBER = r"\d+(?:[.,]\d+)?"
_SIZE = rf"(?P<size>{_NUMBER})(?:\s?(?P<unit>mm|cm|m)\b)?"
_SIGNED = re.compile(
    rf"(?<![\w.,])(?P<sign>[+\-\u2212\u00b1])\s?(?P<size>{_NUMBER})(?P<unit>\s?(?:mm|m)\b)?(?![\w.,]*\d)"
)
_PLAIN = re.compile(rf"(?<![\w.,@\u2300\u00d8\u00f8])(?P<size>{_NUMBER})(?P<unit>\s?(?:mm|m)\b)?")
_DATUM = re.compile(
    r"(?<![\w.,])(?P<size>\d+[.,]\d+)(?P<unit>\s?m\b)?\s?(?:m?A?OD|\u00fc\.?\s?(?:NN|M)|NN|NHN|NAP|NGF|TAW|n\.?p\.?m)\b"
)
_MARK = "[\u2300\u00d8\u00f8\u2205\u03c6]"
_ROUND = (
    re.compile(rf"(?:{_MARK}|\b[dD]\s?=?)\s?{_SIZE}"),
    re.compile(rf"(?<![\w.,]){_SIZE}\s?{_MARK}(?!\s?\d)"),
)
_AT = (
    re.compile(rf"(?:@|\b[aes]\s?=\s?|c/c\s|\bh\.?o\.?h\.?)\s*{_SIZE}"),
    re.compile(rf"\ba\s(?P<size>{_NUMBER})\s?(?P<unit>m)\b"),
    re.compile(rf"{_SIZE}\s?(?:c/c|c\.c\.|o\.c\.)"),
)
_BAR = re.compile(r"\b[A-Z]\d{1,2}\s?$")
_WORDED = re.compile(
    rf"(?:(?P<before>{_NUMBER})\s?(?P<unit_before>mm|cm|m)?)?\s?(?P<word>[^\W\d_]{{2,}})"
    rf"(?=\.?\s?[:=]?\s?(?:(?P<after>{_NUMBER})(?:\s?(?P<unit_after>mm|cm|m)\b)?)?)"
)
_COUNT = re.compile(r"(?<![\w.,])(?P<size>\d{1,4})\s?(?:(?P<word>[^\W\d_]{2,})|[xX\u00d7](?![\w]))")
_LOAD = re.compile(
    rf"(?<![\w.,])(?<!\d\s)(?P<size>{_NUMBER})\s?"
    r"(?P<unit>kPa|k[Nn]\s?/\s?(?:m\s?(?:\u00b2|\^?2)|qm|sqm)|k[Nn]\s?/\s?(?:ml|lfm|mb|m)|k[Nn]|MN)(?![\w\u00b2\u00b3^]|\s?[/\u00b7])"
)
_STRENGTH = re.compile(r"\b(?:[cs]u|c'?|[Ee]\w*|f\w*|tau|q[cs]|\u03c4)\s?=\s?$")
METRES_TO, MILLIMETRES_FROM = 5.0, 150.0
"""A bare diameter is in metres up to here, in millimetres from there on; between, centimetres are usual too and it
says nothing (common practice, no source). A bare spacing is in metres up to three times as much."""


@record
class Note:
    """Numbers of one text: levels and lengths in m, None where it does not say."""

    level: float | None = None
    toe: float | None = None
    top: float | None = None
    diameter: float | None = None
    spacing: float | None = None
    count: int | None = None
    load: float | None = None
    load_unit: Literal["kPa", "kN/m", "kN"] | None = None


def read_note(text: str) -> Note:
    r"""Read the numbers of a note.

    Args:
        text: Plain text, one or several lines.

    Returns:
        What it says. A bare number without sign, unit or word is no level.

    Example:
        >>> note = read_note("10no. 600 dia @ 750 c/c")
        >>> note.count, note.diameter, note.spacing
        (10, 0.6, 0.75)
        >>> read_note("q = 20 kN/m2").load, read_note("E = 30000 kN/m2").load
        (20.0, None)
        >>> read_note("TOE LEVEL -12.00").toe, read_note("-1,50").level, read_note("12").level
        (-12.0, -1.5, None)
    """
    load, unit = _load(text)
    levels = _levels(text)
    diameter, spacing = _diameter(text), _spacing(text)
    return Note(**levels, diameter=diameter, spacing=spacing, count=_count(text), load=load, load_unit=unit)


def _levels(text: str) -> dict[str, Any]:
    found: dict[str, Any] = {"level": None, "toe": None, "top": None}
    for line in re.split(r"[\n;]", text):
        before = 0
        for match in _candidates(line):
            words = split_words(line[before : match.start()])
            kinds = [kind for kind in ("toe", "top", "level") if any(_is(word, kind) for word in words)]
            kind = kinds[0] if kinds else None
            before = match.end()
            value = _level(match, kind is not None, match.group().strip() == line.strip())
            if value is not None:
                kind = kind or "level"
                found[kind] = value if found[kind] is None else found[kind]
    return found


def _candidates(line: str) -> list[re.Match[str]]:
    signed = list(_SIGNED.finditer(line)) or list(_DATUM.finditer(line))
    if signed:
        return signed
    worded = any(_is(word, kind) for word in split_words(line) for kind in ("toe", "top", "level"))
    taken = [match.span() for pattern in (*_ROUND, *_AT) for match in pattern.finditer(line)]
    plain = [m for m in _PLAIN.finditer(line) if not any(a <= m.start() < b for a, b in taken)]
    return plain[:1] if worded else []


def _level(match: re.Match[str], named: bool, alone: bool) -> float | None:
    """Metres. A whole number is a level with its unit, with sign and word, or in millimetres from a thousand on.

    "LEVEL 2" names a storey.
    """
    sign = match.groupdict().get("sign")
    size, unit = match["size"], (match["unit"] or "").strip()
    value = float(size.replace(",", "."))
    decimals = len(re.split(r"[.,]", size)[1]) if re.search(r"[.,]", size) else 0
    if not decimals and not unit and not (sign and named or value >= 1000 and (named or alone)):
        return None
    if unit == "mm" or (not unit and not decimals and value >= 1000):
        value /= 1000
    return -value if sign in ("-", "\u2212") else value


def _diameter(text: str) -> float | None:
    found = [(match["size"], match["unit"]) for pattern in _ROUND for match in pattern.finditer(text)]
    return _length([*found, *_worded(text, "diameter", ("before", "after"))], METRES_TO)


def _spacing(text: str) -> float | None:
    marked = [match for pattern in _AT for match in pattern.finditer(text)]
    # "T16@200" is reinforcement
    found = [(match["size"], match["unit"]) for match in marked if not _BAR.search(text[: match.start()])]
    return _length([*found, *_worded(text, "spacing", ("after", "before"))], 3 * METRES_TO)


def _worded(text: str, kind: str, sides: tuple[str, str]) -> list[tuple[str, str | None]]:
    """Numbers beside a word of a kind, each with its unit."""
    words = [match for match in _WORDED.finditer(text) if _is("".join(split_words(match["word"])), kind)]
    return [(match[side], match[f"unit_{side}"]) for match in words for side in sides if match[side]]


def _count(text: str) -> int | None:
    for match in _COUNT.finditer(text):
        if match["word"] is None or _is("".join(split_words(match["word"])), "count"):
            return int(match["size"])
    return None


def _load(text: str) -> tuple[float | None, Literal["kPa", "kN/m", "kN"] | None]:
    """The first load with its unit; strengths and stiffnesses are none, and thousands parted by a comma say nothing."""
    for match in _LOAD.finditer(text):
        if _STRENGTH.search(text[: match.start()]) or re.fullmatch(r"\d+,\d{3}", match["size"]):
            continue
        value = float(match["size"].replace(",", "."))
        unit = match["unit"].replace(" ", "")
        if unit == "MN":
            return value * 1000, "kN"
        if unit.lower() == "kn":
            return value, "kN"
        return value, "kN/m" if unit[3:] in ("m", "ml", "lfm", "mb") else "kPa"
    return None, None


def _length(sizes: list[tuple[str, str | None]], metres_to: float) -> float | None:
    """Metres, of the first number; None where a bare number may be centimetres or millimetres."""
    if not sizes:
        return None
    size, unit = sizes[0]
    value = float(size.replace(",", "."))
    if value <= 0:
        return None
    if unit:
        return round(value * {"mm": 0.001, "cm": 0.01, "m": 1.0}[unit], 9)
    if value >= MILLIMETRES_FROM:
        return value / 1000
    return value if value <= metres_to else None


def _is(word: str, kind: str) -> bool:
    return any(fnmatchcase(word, pattern) for pattern in _words()[kind])


@cache
def _words() -> dict[str, list[str]]:
    return tomllib.loads(files("ingest").joinpath("text_words.toml").read_text(encoding="utf-8"))
