"""Names of layers and objects broken into words, and what the words mean in the trade."""

from __future__ import annotations

import re
import tomllib
import unicodedata
from fnmatch import fnmatchcase
from functools import cache
from importlib.resources import files
from typing import Any, cast

from ingest.model import Role, WallKind
from ingest.record import record

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
        >>> split_words("A-WALL_BasementØ750")
        ('a', 'wall', 'basement', 'o', '750')
    """
    camel = re.sub(r"(?<=[a-z])(?=[A-Z])", " ", name)
    flat = unicodedata.normalize("NFKD", camel.casefold().translate(_NOT_DECOMPOSED))
    return tuple(_WORD.findall("".join(letter for letter in flat if not unicodedata.combining(letter))))


def layer_name(layer: str) -> str:
    """A layer's own name: the prefix of the drawing it was bound from taken off, words of ISO 13567-2 fields only."""
    from ingest.dxf.layers import read_iso_fields, split_xref

    fields = read_iso_fields(layer)
    return split_xref(layer)[1] if fields is None else f"{fields.element} {fields.user}".replace("-", " ")


@cache
def find_meanings(name: str) -> tuple[Meaning, ...]:
    """Find what a layer or object name means, best first.

    A longer phrase wins over a shorter one that stands inside it: "pile cap" is no pile.
    """
    words = split_words(name)
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
    for entry, phrases, unless in _vocabulary():
        if any(_find(phrase, words) for phrase in unless):
            continue
        for language, phrase in phrases:
            span = _find(phrase, words)
            if span:
                role = None if entry["role"] == "pile" else cast(Role, entry["role"])
                meaning = Meaning(
                    role=role,
                    word=" ".join(words[span[0] : span[1]]),
                    language=language,
                    confidence=entry["confidence"],
                    wall_kind=entry.get("wall_kind"),
                    use=entry.get("use", ""),
                )
                found.append((span, meaning))
    return found


def _find(phrase: tuple[str, ...], words: tuple[str, ...]) -> tuple[int, int] | None:
    for start in range(len(words) - len(phrase) + 1):
        if all(fnmatchcase(words[start + n], piece) for n, piece in enumerate(phrase)):
            return start, start + len(phrase)
    if len(phrase) > 1:
        joined = "".join(phrase)
        return next(((n, n + 1) for n, word in enumerate(words) if fnmatchcase(word, joined)), None)
    return None


def _inside(small: tuple[int, int], large: tuple[int, int]) -> bool:
    return large[0] <= small[0] and small[1] <= large[1]


Phrase = tuple[str, ...]


@cache
def _vocabulary() -> tuple[tuple[dict[str, Any], tuple[tuple[str, Phrase], ...], tuple[Phrase, ...]], ...]:
    data = tomllib.loads(files("ingest").joinpath("roles_layers.toml").read_text(encoding="utf-8"))
    entries = []
    for entry in data["meaning"]:
        phrases = tuple(
            (language, tuple(phrase.split())) for language in _LANGUAGES for phrase in entry.get(language, ())
        )
        entries.append((entry, phrases, tuple(tuple(phrase.split()) for phrase in entry.get("unless", ()))))
    return tuple(entries)
