"""Names of layers and objects broken into words, and what the words mean in the trade."""

from __future__ import annotations

import re
import tomllib
import unicodedata
from fnmatch import fnmatchcase
from functools import cache, lru_cache
from importlib.resources import files
from typing import Any, cast

from ingest.members import Role, WallKind
from ingest.record import record

Phrase = tuple[str, ...]

OWN_AGENT = "GQ"
"""Agent field (ISO 13567-2) of the layers of this tool's own drawings: no name of the trade begins with it."""
_OWN_LAYER = re.compile(OWN_AGENT + r"[-A-Z]{6}[ETDH]-")
_LANGUAGES = ("en", "de", "fr", "es", "it", "nl", "pt", "pl", "sv")
_NOT_DECOMPOSED = str.maketrans({"ł": "l", "ø": "o", "đ": "d", "æ": "ae", "œ": "oe"})
_UMLAUTS = (("ue", "u"), ("oe", "o"), ("ae", "a"))
_WORD = re.compile(r"[a-z]+|[0-9]+")


@record
class Meaning:
    """One meaning found in a name: the role, the word that said so, and how specific it is.

    `role` is None for a pile whose duty the place decides.
    """

    role: Role | None
    word: str
    language: str
    confidence: float
    wall_kind: WallKind | None = None
    use: str = ""


def split_words(name: str) -> tuple[str, ...]:
    """Break a name into lower-case words and numbers without accents.

    Example:
        >>> split_words("A-WALL_Böschung D750")
        ('a', 'wall', 'boschung', 'd', '750')
    """
    camel = re.sub(r"(?<=[a-z])(?=[A-Z])", " ", name)
    flat = unicodedata.normalize("NFKD", camel.casefold().translate(_NOT_DECOMPOSED))
    return tuple(_WORD.findall("".join(letter for letter in flat if not unicodedata.combining(letter))))


def layer_name(layer: str) -> str:
    """A layer's own name: the prefix of the drawing it was bound from taken off, words of ISO 13567-2 fields only."""
    from ingest.dxf.layers import read_iso_fields, split_xref

    fields = read_iso_fields(layer)
    return split_xref(layer)[1] if fields is None else f"{fields.element} {fields.user}".replace("-", " ")


def is_own_layer(layer: str) -> bool:
    """Whether a layer is one of this tool's own drawings, bound into another drawing or not.

    Example:
        >>> is_own_layer("GQWALL--E-"), is_own_layer("overlay$0$GQCUTS--E-"), is_own_layer("G-WALL--E-")
        (True, True, False)
    """
    from ingest.dxf.layers import split_xref

    return _OWN_LAYER.fullmatch(split_xref(layer)[1].upper()) is not None


def find_meanings(name: str) -> tuple[Meaning, ...]:
    """Find what a layer or object name means, best first.

    A longer phrase wins over a shorter one that stands inside it: "pile cap" is no pile.
    """
    return _meanings(tuple("0" if word.isdigit() else word for word in split_words(name)))


@lru_cache(maxsize=65536)
def _meanings(words: tuple[str, ...]) -> tuple[Meaning, ...]:
    hits = [hit for spelling in _spellings(words) for hit in _hits(spelling)]
    kept = [
        hit
        for hit in hits
        if not any(other is not hit and _inside(hit[0], other[0]) and other[0] != hit[0] for other in hits)
    ]
    best: dict[tuple[str | None, str | None, str], Meaning] = {}
    for _, meaning in kept:
        key = (meaning.role, meaning.wall_kind, meaning.use)
        if key not in best or meaning.confidence > best[key].confidence:
            best[key] = meaning
    return tuple(sorted(best.values(), key=lambda m: (-m.confidence, m.role or "", m.wall_kind or "", m.word)))


def _spellings(words: tuple[str, ...]) -> tuple[tuple[str, ...], ...]:
    folded = words
    for long, short in _UMLAUTS:
        folded = tuple(word.replace(long, short) for word in folded)
    return (words,) if folded == words else (words, folded)


def _hits(words: tuple[str, ...]) -> list[tuple[tuple[int, int], Meaning]]:
    found = []
    for start, word in enumerate(words):
        for number, language, phrase in _beginning(word):
            joined = len(phrase) > 1 and fnmatchcase(word, "".join(phrase))
            if not joined and not _continues(phrase, words, start):
                continue
            span = (start, start + 1 if joined else start + len(phrase))
            entry, unless = _vocabulary()[number]
            if any(_continues(bar, words, at) for bar in unless for at in range(len(words))):
                continue
            found.append((span, _meaning(entry, words[span[0] : span[1]], language)))
    return found


def _meaning(entry: dict[str, Any], words: tuple[str, ...], language: str) -> Meaning:
    return Meaning(
        role=None if entry["role"] == "pile" else cast(Role, entry["role"]),
        word=" ".join(words),
        language=language,
        confidence=entry["confidence"],
        wall_kind=entry.get("wall_kind"),
        use=entry.get("use", ""),
    )


def _continues(phrase: Phrase, words: tuple[str, ...], start: int) -> bool:
    pairs = zip(phrase, words[start : start + len(phrase)], strict=False)
    return start + len(phrase) <= len(words) and all(fnmatchcase(word, piece) for piece, word in pairs)


@lru_cache(maxsize=65536)
def _beginning(word: str) -> tuple[tuple[int, str, Phrase], ...]:
    """Phrases that a word begins, or that it is when written as one."""
    return tuple(
        (number, language, phrase)
        for number, (entry, _) in enumerate(_vocabulary())
        for language in _LANGUAGES
        for phrase in map(_phrase, entry.get(language, ()))
        if fnmatchcase(word, phrase[0]) or (len(phrase) > 1 and fnmatchcase(word, "".join(phrase)))
    )


@cache
def _phrase(text: str) -> Phrase:
    return tuple(text.split())


def _inside(small: tuple[int, int], large: tuple[int, int]) -> bool:
    return large[0] <= small[0] and small[1] <= large[1]


@cache
def _vocabulary() -> tuple[tuple[dict[str, Any], tuple[Phrase, ...]], ...]:
    data = tomllib.loads(files("ingest").joinpath("roles_layers.toml").read_text(encoding="utf-8"))
    return tuple((entry, tuple(map(_phrase, entry.get("unless", ())))) for entry in data["meaning"])
