"""Tables of the page: one way to write them, and the reading of the contract's keys as symbol and unit."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence

from export.report.markup import Child, Html, join, tag
from ingest.trail import Source

LONGEST_WORD, LONGEST_ID = 24, 16
MARKS = re.compile(r"<[^>]*>")
UNIT_STARTS = frozenset({"kN", "kNm2", "kPa", "K"})


def table(
    caption: str, heads: Sequence[str], rows: Iterable[Sequence[Child]], class_: str = "", named: bool = True
) -> Html:
    """A table in its own scroll box.

    Args:
        caption: What it shows; also the name of the scroll box for a screen reader.
        heads: Column heads; one that ends with a unit in brackets or starts with "#" is set to the right.
        rows: Cells; the first one of each row heads it when `named`.
        class_: Class of the table.
        named: Whether the first cell of a row names the row.
    """
    right = [head.startswith("#") for head in heads]
    top = tag(
        "tr",
        *(
            tag("th", head.lstrip("#"), scope="col", class_="n" if n else None)
            for head, n in zip(heads, right, strict=True)
        ),
    )
    body = []
    for row in rows:
        cells = []
        for place, (cell, n) in enumerate(zip(row, right, strict=True)):
            mark = " ".join(word for word, on in (("n", n), ("long", _has_long_word(cell))) if on) or None
            first = place == 0 and named
            if first and isinstance(cell, str) and not isinstance(cell, Html) and len(cell) <= LONGEST_ID:
                mark = f"{mark or ''} id".strip()
            cells.append(tag("th", cell, scope="row", class_=mark) if first else tag("td", cell, class_=mark))
        body.append(tag("tr", *cells))
    if not body:
        return tag("p", f"{caption}: none.", class_="none")
    inner = tag("table", tag("caption", caption), tag("thead", top), tag("tbody", *body), class_=class_ or None)
    return tag("div", inner, class_="wide", tabindex="0", role="region", aria_label=caption)


def _has_long_word(cell: Child) -> bool:
    """Whether a cell holds a word that must be broken to fit a sheet of paper."""
    return any(len(word) > LONGEST_WORD for word in MARKS.sub(" ", cell or "").split())


def key_words(key: str) -> tuple[str, str]:
    """Symbol and unit of a contract key.

    Example:
        >>> key_words("EI_kNm2_per_m"), key_words("preload_kN"), key_words("k_effective_kN_per_m_per_m")
        (('EI', 'kNm²/m'), ('preload', 'kN'), ('k effective', 'kN/m/m'))
        >>> key_words("thickness")
        ('thickness', 'm')
    """
    parts = key.split("_")
    for place, part in enumerate(parts):
        if part in UNIT_STARTS and place > 0:
            unit = " ".join(parts[place:]).replace(" per ", "/")
            return " ".join(parts[:place]), unit.replace("m2", "m²")
    return key.replace("_", " "), {"skew": "°", "inclination": "°", "count": "", "nu": ""}.get(key, "m")


def source_list(sources: Sequence[Source], most: int = 3) -> Html:
    """Sources in short: the first few entities, then how many more."""
    if not sources:
        return tag("span", "no source entity", class_="none")
    shown = [tag("span", f"{one.file} {one.item} ({one.how})", class_="source") for one in sources[:most]]
    more = f" and {len(sources) - most} more" if len(sources) > most else None
    return join([*_between(shown, Html("; ")), more])


def _between(parts: Sequence[Html], mark: Html) -> list[Html]:
    out: list[Html] = []
    for n, part in enumerate(parts):
        out += [mark, part] if n else [part]
    return out


def listing(items: Iterable[Child], class_: str | None = None) -> Html:
    """A plain list; nothing when there is nothing to list."""
    entries = [tag("li", item) for item in items]
    return tag("ul", *entries, class_=class_) if entries else Html("")
