"""Section, EA, EI and self-weight of a support, from the brief first, then from the model."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any

from ingest.members import BarSection, Material
from ingest.notes import Notes
from ingest.parts import Part
from ingest.steel import E_STEEL, bar_weight, find_section

Rigidity = tuple[BarSection | None, float | None, float | None, float | None]

_STEEL = re.compile(r"steel|stahl|acier|acero|acciaio|staal|aço|\bstal\b|stål|\bS ?(?:235|275|355|420|460)", re.I)


def find_rigidity(
    about: str,
    part: Part,
    entry: dict[str, Any],
    numbers: Sequence[int],
    materials: dict[str, Material],
    notes: Notes,
) -> Rigidity:
    """Work out what a support is made of.

    Args:
        about: The support in the engineer's words.
        part: The part, with the section the model gives, if any.
        entry: Merged values of the brief's [[supports]] entries.
        numbers: Numbers of these entries, for messages.
        materials: Materials of the brief by id.
        notes: Takes the assumed modulus of steel and faults of the brief.

    Returns:
        Section, EA in kN, EI in kNm2, self-weight in kN/m; None for what is not given.
    """
    section = _section(entry, numbers, notes) or part.section
    if entry["EA"] is not None:
        return section, entry["EA"], None, None
    if section is None or section.A is None:
        return section, None, None, None
    material = materials.get(entry["material"] or "")
    E = material.E if material is not None else _steel_modulus(about, part, entry, notes)
    if E is None:
        return section, None, None, None
    EA = E * section.A
    EI = None if section.I is None else E * section.I
    if material is not None and material.unit_weight is not None:
        return section, EA, EI, material.unit_weight * section.A
    steel = material is None or material.kind == "steel"
    return section, EA, EI, bar_weight(section) if steel else None


def _section(entry: dict[str, Any], numbers: Sequence[int], notes: Notes) -> BarSection | None:
    if entry["section"] is None:
        return None
    try:
        return find_section(entry["section"])
    except ValueError as error:
        number = next(n for n in numbers if notes.brief.supports[n].section == entry["section"])
        remedy = "correct the designation, or give EA in kN instead"
        raise notes.stop(str(error), remedy, "supports", number, "section") from error


def _steel_modulus(about: str, part: Part, entry: dict[str, Any], notes: Notes) -> float | None:
    """Steel's modulus where the section is a steel one; nothing where the material is anybody's guess."""
    if entry["section"] is None and not _STEEL.search(
        f"{part.material} {part.section.designation if part.section else ''}"
    ):
        return None
    notes.assume(
        "steel-modulus",
        about,
        f"E = {E_STEEL / 1e6:g} GPa for {entry['section'] or part.material or 'the section'}",
        "EN 1993-1-1 cl. 3.2.6 (recalled); no material is named",
        (part.source,),
    )
    return E_STEEL
