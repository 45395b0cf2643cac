"""Layer names as a draughtsman reads them: readable letters, xref prefixes, fields of the ISO standard, words."""

from __future__ import annotations

import difflib
import re
from typing import Any

from ingest.dxf.text import decode
from ingest.record import record

_WORD = re.compile(r"[^\W\d_]+|\d+")
_CAMEL = re.compile(r"(?<=[a-zäöüß])(?=[A-ZÄÖÜ])")
_ISO = re.compile(r"([A-Z][-_A-Z0-9])([-_A-Z0-9]{6})([-_A-Z][-_0-9])([-_A-Z0-9]*)")
_ISO_REST = (("status", 1), ("sector", 4), ("phase", 1), ("projection", 1), ("scale", 1), ("work_package", 2))


@record
class IsoFields:
    """Fields of a layer name after ISO 13567-2, fill characters kept.

    Mandatory: agent responsible (2 places, clause 6.1), element (6, clause 6.2), presentation (2, clause 6.3). Then, as
    far as the name goes: status (1), sector (4), phase (1), projection (1), scale (1), work package (2), user defined
    (any length), clauses 7.1 to 7.7.
    """

    agent: str
    element: str
    presentation: str
    status: str = ""
    sector: str = ""
    phase: str = ""
    projection: str = ""
    scale: str = ""
    work_package: str = ""
    user: str = ""


def split_xref(name: str) -> tuple[str, str]:
    """Take the prefix of a drawing bound in off a layer name.

    Returns:
        Drawing and layer; the drawing is "" for a layer of its own.

    Example:
        >>> split_xref("xref-house-08$0$A-WALL"), split_xref("plan|WAND"), split_xref("WAND")
        (('xref-house-08', 'A-WALL'), ('plan', 'WAND'), ('', 'WAND'))
    """
    found = re.fullmatch(r"(.*)(?:\$\d+\$|\|)(.+)", name)
    return (found[1], found[2]) if found else ("", name)


def read_iso_fields(name: str) -> IsoFields | None:
    """Read a layer name by the fields of ISO 13567-2; None when it does not have their form.

    Args:
        name: Layer name, xref prefix taken off or not.

    Returns:
        The fields. Many plain names are ten letters long, so one is taken only with a digit in the element and a letter
        and a fill character or digit in the presentation.

    Example:
        >>> read_iso_fields("A-B374--E-").element
        'B374--'
        >>> read_iso_fields("A-WALL-FULL-EXST") is None
        True
    """
    found = _ISO.fullmatch(split_xref(decode(name))[1].upper())
    if found is None or not any(c.isdigit() for c in found[2]):
        return None
    rest, fields = found[4], {}
    for field, width in _ISO_REST:
        fields[field], rest = rest[:width], rest[width:]
    return IsoFields(agent=found[1], element=found[2], presentation=found[3], user=rest, **fields)


def layer_words(name: str) -> tuple[str, ...]:
    r"""Words of a layer name, lower case, in order.

    Args:
        name: As the file has it; xref prefixes and ``\U+XXXX`` escapes are dealt with.

    Returns:
        Letters and numbers apart; for an ISO 13567-2 name the words of its element field and of its user field.

    Example:
        >>> layer_words("xref-house$0$A-WALL"), layer_words("BaugrubenVerbau_02")
        (('a', 'wall'), ('baugruben', 'verbau', '02'))
    """
    plain = split_xref(decode(name))[1]
    fields = read_iso_fields(plain)
    if fields is not None:
        plain = f"{fields.element} {fields.user}".replace("-", " ")
    return tuple(word.casefold() for word in _WORD.findall(_CAMEL.sub(" ", plain).replace("_", " ")))


@record
class LayerUse:
    """What to know of a layer when something is drawn on it; `state` is off, frozen or ""."""

    name: str
    state: str
    left_out: bool


class LayerTable:
    """The layers of one drawing: readable names, which are off or frozen, which the brief leaves out."""

    def __init__(self, document: Any, ignore: tuple[str, ...]) -> None:
        """Args: the loaded drawing, the layers the brief leaves out."""
        self.ignored = frozenset(decode(name).casefold() for name in ignore)
        self.names: set[str] = set()
        self._uses: dict[str, LayerUse] = {}
        self._state: dict[str, str] = {}
        for layer in document.layers:
            name = decode(str(layer.dxf.name))
            self.names.add(name)
            if layer.is_frozen():
                self._state[name.casefold()] = "frozen"
            elif layer.is_off():
                self._state[name.casefold()] = "off"

    def use(self, raw: str) -> LayerUse:
        """What to know of a layer, by its name in the file."""
        found = self._uses.get(raw)
        if found is None:
            name = decode(raw)
            folded = name.casefold()
            found = LayerUse(name=name, state=self._state.get(folded, ""), left_out=folded in self.ignored)
            self._uses[raw] = found
        return found

    def nearest(self, wanted: str, used: set[str]) -> str:
        """The layer whose name is closest to one that does not exist, "" when none is near."""
        near = difflib.get_close_matches(wanted.casefold(), sorted(name.casefold() for name in used), n=1, cutoff=0.6)
        return next((name for name in sorted(used) if near and name.casefold() == near[0]), "")
