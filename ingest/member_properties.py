"""Values of supports from the properties of a model, whichever set they stand in."""

from __future__ import annotations

import math
import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

from ingest.notes import Notes
from ingest.parts import Part


def read_property(part: Part, field: str, about: str, notes: Notes) -> float | None:
    """A value of a support that one of the part's properties gives.

    Args:
        part: The part with its tags.
        field: free_length, bond_length, bond_diameter (m), preload (kN) or inclination (degrees).
        about: The support in the engineer's words.
        notes: Takes the assumption that a bare number stands in that unit, or the finding that it cannot.

    Returns:
        The value; None where no property gives one that can be.
    """
    if not part.tags:
        return None
    entry = _table()[field]
    named = {name.casefold(): name for name in part.tags}
    found = next((named[name] for name in entry["names"] if name in named), None)
    if found is None or not part.tags[found].strip():
        return None
    try:
        value = float(part.tags[found])
    except ValueError:
        return None
    unit = entry["unit"]
    if not math.isfinite(value) or not entry["low"] <= value <= entry["high"]:
        text = f"property {found} = {value:g} cannot be {unit}: {entry['low']:g} to {entry['high']:g} would; not taken"
        notes.see("property-value", "check", about, text, (part.source,))
        return None
    field_words = field.replace("_", " ")
    text = f"{field_words} from property {found}, its bare number taken as {unit}"
    notes.assume("property-unit", f"{about} {field_words}", text, "the model gives the number", (part.source,))
    return value


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(files("ingest").joinpath("member_properties.toml").read_text(encoding="utf-8"))
