"""What the notes on a drawing say in numbers: levels with and without sign, diameters, spacings, counts."""

from __future__ import annotations

import re
import tomllib
from fnmatch import fnmatchcase
from functools import cache
from importlib.resources import files

from ingest.record import record
from ingest.words import split_words

_NUMBER = r"\d+(?:[.,]\d+)?"
_SIGNED = re.compile(
    rf"(?<![\w.,])(?P<sign>[+\-\u2212\u00b1])\s?(?P<size>{_NUMBER})(?P<unit>\s?(?:mm|m)\b)?(?![\w.,]*\d)"
)
_PLAIN = re.compile(rf"(?<![\w.,@\u2300\u00d8\u00f8])(?P<size>{_NUMBER})(?P<unit>\s?(?:mm|m)\b)?")
_ROUND = re.compile(rf"(?:[\u2300\u00d8\u00f8\u2205]|\b[dD]\s?=?)\s?(?P<size>{_NUMBER})")
_AT = re.compile(
    rf"(?:@|\b[aes]\s?=\s?|c/c\s)\s*(?P<size>{_NUMBER})|(?P<before>{_NUMBER})\s?(?:mm|m)?\s?(?:c/c|c/c\.|c\.c\.|o\.c\.)"
)
_WORDED = re.compile(
    rf"(?P<before>{_NUMBER})?\s?(?:mm|m)?\s?(?P<word>[^\W\d_]{{2,}})(?=\.?\s?[:=]?\s?(?P<after>{_NUMBER})?)"
)
_COUNT = re.compile(r"(?<![\w.,])(?P<size>\d{1,4})\s?(?:(?P<word>[^\W\d_]{2,})|[xX\u00d7](?![\w]))")
MILLIMETRES_FROM = 20.0
"""A diameter or spacing from here on is in millimetres (common practice, no source)."""


@record
class Note:
    """Numbers of one text: levels and lengths in m, None where it does not say."""

    level: float | None = None
    toe: float | None = None
    top: float | None = None
    diameter: float | None = None
    spacing: float | None = None
    count: int | None = None


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
        >>> read_note("TOE LEVEL -12.00").toe, read_note("-1,50").level, read_note("12").level
        (-12.0, -1.5, None)
    """
    return Note(**_levels(text), diameter=_diameter(text), spacing=_spacing(text), count=_count(text))


def _levels(text: str) -> dict[str, float | None]:
    found: dict[str, float | None] = {"level": None, "toe": None, "top": None}
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
    signed = list(_SIGNED.finditer(line))
    if signed:
        return signed
    worded = any(_is(word, kind) for word in split_words(line) for kind in ("toe", "top", "level"))
    taken = [match.span() for pattern in (_ROUND, _AT) for match in pattern.finditer(line)]
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
    sizes = [match["size"] for match in _ROUND.finditer(text)]
    for match in _WORDED.finditer(text):
        if _is("".join(split_words(match["word"])), "diameter"):
            sizes += [size for size in (match["before"], match["after"]) if size]
    return _length(sizes[0]) if sizes else None


def _spacing(text: str) -> float | None:
    sizes = [match["size"] or match["before"] for match in _AT.finditer(text)]
    for match in _WORDED.finditer(text):
        if _is("".join(split_words(match["word"])), "spacing"):
            sizes += [size for size in (match["after"], match["before"]) if size]
    return _length(sizes[0]) if sizes else None


def _count(text: str) -> int | None:
    for match in _COUNT.finditer(text):
        if match["word"] is None or _is("".join(split_words(match["word"])), "count"):
            return int(match["size"])
    return None


def _length(size: str) -> float | None:
    value = float(size.replace(",", "."))
    if value <= 0:
        return None
    return value / 1000 if value >= MILLIMETRES_FROM else value


def _is(word: str, kind: str) -> bool:
    return any(fnmatchcase(word, pattern) for pattern in _words()[kind])


@cache
def _words() -> dict[str, list[str]]:
    return tomllib.loads(files("ingest").joinpath("text_words.toml").read_text(encoding="utf-8"))
