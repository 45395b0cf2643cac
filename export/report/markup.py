"""Markup by construction: every text is escaped unless it is already `Html`, so names from files stay text."""

from __future__ import annotations

import re
from collections.abc import Iterable
from html import escape
from math import isfinite

CONTROL = re.compile(
    "[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u061c\u200e\u200f\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff\ufffe\uffff]"
)
SURROGATE = re.compile("[\ud800-\udfff]")


class Html(str):
    """Text that is markup already."""

    __slots__ = ()

    def __add__(self, other: str) -> Html:
        """Markup with more after it; plain text is escaped."""
        return Html(str.__add__(self, text(other)))


Child = str | Html | None


def clean(text: str) -> str:
    r"""Replace control and direction-changing characters by a visible mark; they could hide or reorder what is read.

    Example:
        >>> clean("pile\u202egnp.exe")
        'pile\ufffdgnp.exe'
    """
    return SURROGATE.sub("\ufffd", CONTROL.sub("\ufffd", text))


def text(value: str) -> Html:
    """Escape one text; markup passes."""
    return value if isinstance(value, Html) else Html(escape(clean(value), quote=True))


def join(parts: Iterable[Child]) -> Html:
    """Escape and join."""
    return Html("".join(text(part) for part in parts if part is not None))


def tag(name: str, /, *children: Child, **attributes: str | float | bool | None) -> Html:
    """One element: `class_` loses its underscore, other underscores become hyphens; None and False are left out.

    Example:
        >>> tag("b", "a < b", class_="x")
        '<b class="x">a &lt; b</b>'
    """
    marks = "".join(_attribute(key, value) for key, value in attributes.items())
    if not children and name in VOID:
        return Html(f"<{name}{marks}>")
    if not children and name in DRAWN:
        return Html(f"<{name}{marks}/>")
    return Html(f"<{name}{marks}>{join(children)}</{name}>")


VOID = frozenset({"meta", "input", "br", "hr", "link", "img"})
DRAWN = frozenset({"line", "path", "polygon", "polyline", "circle", "rect", "use", "ellipse"})
KEPT = frozenset({"viewBox", "patternUnits", "patternTransform", "preserveAspectRatio", "textLength", "lengthAdjust"})


def _attribute(key: str, value: str | float | bool | None) -> str:
    if value is None or value is False:
        return ""
    name = key if key in KEPT else key.rstrip("_").replace("_", "-")
    if value is True:
        return f' {name}=""'
    shown = number(value) if isinstance(value, int | float) else text(value)
    return f' {name}="{shown}"'


def number(value: float) -> str:
    """A coordinate in a drawing: two decimals, no trailing zeros.

    Example:
        >>> number(3.14159), number(-0.001), number(12.0)
        ('3.14', '0', '12')
    """
    if not isfinite(value):
        raise ValueError("a coordinate of a drawing is not finite")
    short = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if short in ("-0", "") else short
