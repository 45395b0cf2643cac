"""How a verdict looks: a line pattern first, an area pattern second, a colour last."""

from __future__ import annotations

from collections.abc import Sequence

from export.report.markup import Html, join, tag
from export.report.scale import path_data
from export.report.sheet_marks import SMALL, letters
from export.report.words import VERDICT_NAMES
from ingest.members import Point

TWO_STROKES = ("under_states", "not_two_dimensional")
BEST_FIRST = ("holds", "over_states", "undecided", "not_assessed", "under_states", "not_two_dimensional")


def verdict_line(points: Sequence[Point], word: str, **marks: str) -> Html:
    """A verdict drawn along a line given in units; two strokes for the patterns that need them."""
    data = path_data(points)
    inner = tag("path", d=data, class_="v-core") if word in TWO_STROKES else None
    return tag("g", tag("path", d=data, class_="v-line"), inner, class_=f"verdict v-{word}", **marks)


def swatch(word: str) -> Html:
    """A short sample of a verdict's line for tables and legends in the page."""
    return tag(
        "svg",
        verdict_line([(2.0, 7.0), (46.0, 7.0)], word),
        class_="swatch",
        viewBox="0 0 48 14",
        width=48,
        height=14,
        aria_hidden="true",
        focusable="false",
    )


def named_swatch(word: str, after: str = "") -> Html:
    """Sample and word."""
    return tag("span", swatch(word), " ", VERDICT_NAMES[word] + after, class_="verdict-word")


def legend(at: Point, step: float, words: Sequence[str] = BEST_FIRST) -> Html:
    """The legend inside a drawing, in one row."""
    x, y = at
    return join(
        tag(
            "g",
            verdict_line([(x + n * step, y), (x + n * step + 42, y)], word),
            letters((x + n * step + 48, y + 4), VERDICT_NAMES[word], SMALL),
        )
        for n, word in enumerate(words)
    )


def area_patterns() -> Html:
    """Fill patterns of the verdicts, by id `area-<word>`."""
    return join(
        (
            _pattern("holds", 6, "M0 3H6"),
            _pattern("over_states", 7, "M-1 8L8 -1M-1 1L1 -1M6 8L8 6"),
            _pattern("undecided", 8, "M0 0L8 8M8 0L0 8"),
            _pattern("not_assessed", 9, "M4 4h1"),
            _pattern("under_states", 5, "M2.5 0V5"),
            _pattern("not_two_dimensional", 10, "M0 2L2.5 7L5 2L7.5 7L10 2"),
        )
    )


def _pattern(word: str, size: float, data: str) -> Html:
    return tag(
        "pattern",
        tag("path", d=data, class_=f"a-{word}"),
        id=f"area-{word}",
        width=size,
        height=size,
        patternUnits="userSpaceOnUse",
    )
