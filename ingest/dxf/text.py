"""Words on the drawing: decoded, placed, and tied to the member they speak of."""

from __future__ import annotations

import math
import re
from typing import Any

from ingest.dxf.curves import entity_axes
from ingest.dxf.linework import incomplete, layer_of
from ingest.dxf.sketch import Left, Sketch

_UNICODE = re.compile(r"\\[Uu]\+([0-9A-Fa-f]{4})")
_INLINE = re.compile(r"\\[PNX~]|\\S([^;]*);|\\[ACcFfHTQWp][^;]*;|\\[LlOoKk]|\\([\\{}])|[{}]|\^(.)")
_PERCENT = re.compile(r"%%(?:(\d{3})|([a-zA-Z%]))")
_SIGNS = {"c": "\u00d8", "d": "\u00b0", "p": "\u00b1", "%": "%"}


def decode(text: str) -> str:
    r"""Plain words of a name or a one-line text.

    Args:
        text: As the file has it, with ``\U+XXXX`` and ``%%`` codes or undecodable bytes.

    Returns:
        Readable text that can be written as UTF-8.

    Example:
        >>> decode(r"%%c750 \U+00B10.00 %%uTOE%%u")
        'Ø750 ±0.00 TOE'
    """
    if "%%" in text:
        text = _PERCENT.sub(_sign, text)
    if "\\" in text:
        text = _UNICODE.sub(lambda found: chr(int(found[1], 16)), text)
    if not text.isascii():
        text = _writable(text)
    return text


def _sign(found: re.Match[str]) -> str:
    if found[1]:
        code = int(found[1])
        return chr(code) if code < 256 else ""
    return _SIGNS.get(found[2].lower(), "")


def _writable(text: str) -> str:
    """Bytes the code page did not cover come as lone surrogates, which no output can hold."""
    try:
        text.encode("utf-8")
    except UnicodeEncodeError:
        raw = text.encode("utf-8", "surrogateescape") if _only_escapes(text) else text.encode("utf-8", "replace")
        return raw.decode("utf-8", "replace")
    return text


def _only_escapes(text: str) -> bool:
    return all(not 0xD800 <= ord(c) <= 0xDFFF or 0xDC80 <= ord(c) <= 0xDCFF for c in text)


def sketch_text(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A TEXT or an attribute: its point, height and turn in its own plane."""
    known = vars(entity.dxf)
    at = known.get("insert")
    if known.get("halign", 0) or known.get("valign", 0):
        at = known.get("align_point") or at
    if at is None:
        return incomplete(f"{entity.dxftype()} without its place")
    words = decode(str(known.get("text", ""))).strip()
    if not words:
        return Left("context", "empty text")
    turn = math.radians(known.get("rotation", 0.0))
    height = abs(known.get("height", 1.0)) or 1.0
    return [written(entity, (at.x, at.y, at.z), words, height, turn, planar=True)]


def sketch_mtext(entity: Any, sagitta: float) -> list[Sketch] | Left:
    """A MTEXT, its formatting taken off, lines kept apart."""
    known = vars(entity.dxf)
    at = known.get("insert")
    if at is None:
        return incomplete("MTEXT without its place")
    words = decode(plain_mtext(str(entity.text))).strip()
    if not words:
        return Left("context", "empty text")
    direction = known.get("text_direction")
    turn = math.radians(known.get("rotation", 0.0))
    if direction is not None:
        turn = math.atan2(direction.y, direction.x)
    height = abs(known.get("char_height", 1.0)) or 1.0
    return [written(entity, (at.x, at.y, at.z), words, height, turn, planar=False)]


def plain_mtext(raw: str) -> str:
    r"""Text of a MTEXT without its formatting, lines kept apart.

    Args:
        raw: With the format's inline codes (DXF reference, "MTEXT"): ``\P`` new line, ``\~`` blank, ``\S1^2;`` stacked,
            ``\H2.5x;`` and the like, braces, ``^I`` tab.

    Example:
        >>> plain_mtext(r"{\H1.5x;10no. 600 dia}\P@ 750\~c/c")
        '10no. 600 dia\n@ 750 c/c'
    """
    if not any(c in raw for c in "\\{}^"):
        return raw
    return _INLINE.sub(_inline, raw)


def _inline(found: re.Match[str]) -> str:
    stacked, literal, control = found.groups()
    if stacked is not None:
        return re.sub(r"\s*[#^/]\s*", "/", stacked)
    if control is not None:
        return {"I": " ", "J": "\n", " ": "^"}.get(control, "")
    return literal or {"\\P": "\n", "\\N": "\n", "\\X": "\n", "\\~": " "}.get(found[0], "")


def written(
    entity: Any,
    at: tuple[float, float, float],
    words: str,
    height: float,
    turn: float,
    *,
    planar: bool,
) -> Sketch:
    """A text figure at a point, its height in drawing units, its turn in radians, in its own plane when planar."""
    known = vars(entity.dxf)
    x, y, z = at
    dx, dy = height * math.cos(turn), height * math.sin(turn)
    axes = entity_axes(known.get("extrusion")) if planar else None
    xyz = (x, y, z, x + dx, y + dy, z, x - dy, y + dx, z)
    return Sketch(cls=entity.dxftype(), layer=layer_of(known), form="text", xyz=xyz, text=words, axes=axes)
