"""Ground by standard hatches in ink: clay dashes, sand dots, gravel rings, rock courses; what is not known stays plain.

The signs follow common practice of borehole logs and geological sections (no source followed in detail).
"""

from __future__ import annotations

from export.report.markup import Html, join, tag

WORDS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("made", ("made ground", "fill", "auffüllung", "remblai", "ophoging", "relleno", "riporto", "mg")),
    ("peat", ("peat", "torf", "tourbe", "veen", "turba", "torba", "organic")),
    ("chalk", ("chalk", "kreide", "craie", "krijt", "creta")),
    ("rock", ("rock", "stone", "fels", "roche", "rots", "roca", "roccia", "mudstone", "limestone", "granite", "shale")),
    ("gravel", ("gravel", "kies", "gravier", "grind", "grava", "ghiaia")),
    ("sand", ("sand", "sable", "zand", "arena", "sabbia")),
    ("silt", ("silt", "schluff", "limon", "limo", "leem", "loess", "löss")),
    ("clay", ("clay", "ton", "argile", "klei", "arcilla", "argilla", "till", "lehm", "marl", "mergel")),
)


def hatch_of(name: str) -> str | None:
    """Sign of a material by the last word of the trade in its name, None when no word is known.

    The main soil stands last in English names ("sandy clay"), so the word that ends furthest right wins.

    Example:
        >>> hatch_of("stiff sandy CLAY"), hatch_of("made ground"), hatch_of("layer 3")
        ('clay', 'made', None)
    """
    plain = name.lower().replace("_", " ")
    found = [(place, kind) for kind, words in WORDS for word in words for place in (_ends(plain, word),) if place]
    return max(found)[1] if found else None


def _ends(text: str, word: str) -> int:
    """Where a word ends in a text, 0 when it does not stand there as a word of its own (a plural counts)."""
    from re import escape, finditer

    ends = [match.end() for match in finditer(rf"(?<![a-zäöü]){escape(word)}(?:s|e|es)?(?![a-zäöü])", text)]
    if not ends and len(word) > 4:
        ends = [match.end() for match in finditer(escape(word), text)]
    return max(ends, default=0)


def ground_patterns() -> Html:
    """The signs as fill patterns, by id `ground-<kind>`."""
    ring = tag("circle", cx=6, cy=6, r=3.2) + tag("circle", cx=17, cy=15, r=4.2)
    return join(
        (
            _pattern("clay", 26, 16, tag("path", d="M2 4H14M15 12H27M-11 12H1")),
            _pattern("silt", 18, 18, tag("path", d="M4 2V8M13 10V16M8 14h1M16 5h1")),
            _pattern("sand", 16, 14, tag("path", d="M3 3h1.4M11 6h1.4M6 11h1.4M14 12h1.4", stroke_width=1.5)),
            _pattern("gravel", 24, 22, ring),
            _pattern("made", 24, 20, tag("path", d="M3 3l6 6M9 3l-6 6M15 12l5 5M20 12l-5 5")),
            _pattern("peat", 24, 14, tag("path", d="M2 8q3 -6 5 0q2 -6 5 0M15 13q2 -5 4 0")),
            _pattern("rock", 32, 20, tag("path", d="M0 .5H32M0 10.5H32M8 .5V10M24 10.5V20")),
            _pattern("chalk", 28, 18, tag("path", d="M0 .5H28M0 9.5H28M7 .5V9M11 .5V9M21 9.5V18")),
        )
    )


def _pattern(kind: str, width: float, height: float, drawn: Html) -> Html:
    return tag("pattern", drawn, id=f"ground-{kind}", width=width, height=height, patternUnits="userSpaceOnUse")
