"""Entries of the brief that fit nothing in the files: a misspelt layer must not pass in silence."""

from __future__ import annotations

from collections.abc import Sequence
from difflib import get_close_matches

from ingest.brief_tables import Match
from ingest.matching import fits
from ingest.model import Site
from ingest.notes import Notes
from ingest.parts import Part

TABLES = ("roles", "floors", "walls", "supports", "loads", "receptors")


def note_unmatched(parts: Sequence[Part], site: Site, notes: Notes) -> None:
    """Report matches that fit no entity and stages that install what is not there.

    Args:
        parts: All parts.
        site: The site built from them.
        notes: Takes one finding for each, with the nearest name the files have.
    """
    kinds = list({(part.layer, part.cls, part.name): part for part in parts}.values())
    for table in TABLES:
        for number, entry in enumerate(getattr(notes.brief, table)):
            match: Match | None = entry.match
            if match is None:
                continue
            if not any(fits(match, part) for part in (parts if match.id else kinds)):
                _see(match, kinds, table, number, notes)
    _check_stages(parts, site, notes)
    _check_strata(site, notes)


def _check_strata(site: Site, notes: Notes) -> None:
    met = sorted({layer.code for hole in site.boreholes for layer in hole.layers if layer.code})
    for number, entry in enumerate(notes.brief.strata):
        if entry.from_boreholes is not None and entry.from_boreholes not in met:
            near = get_close_matches(entry.from_boreholes, met, 1)
            hint = f"; the boreholes have {', '.join(near or met[:8]) or 'no strata'}"
            where = f"{notes.brief.file}, {notes.brief.place('strata', number, 'from_boreholes')}"
            notes.see("stratum-code", "check", where, f'no borehole meets "{entry.from_boreholes}"{hint}')


def _see(match: Match, kinds: Sequence[Part], table: str, number: int, notes: Notes) -> None:
    wanted = {"layer": match.layer, "class": match.cls, "name": match.name, "id": match.id}
    said = ", ".join(f'{key} = "{value}"' for key, value in wanted.items() if value)
    known = {"layer": [p.layer for p in kinds], "class": [p.cls for p in kinds], "name": [p.name for p in kinds]}
    near = [
        f'{key} "{close[0]}"'
        for key, names in known.items()
        if wanted[key] and (close := get_close_matches(wanted[key] or "", sorted(set(names)), 1))
    ]
    hint = f"; the files have {', '.join(near)}" if near else ""
    text = f"match {said} fits no entity of the files{hint}"
    notes.see("brief-match", "check", f"{notes.brief.file}, {notes.brief.place(table, number, 'match')}", text)


def _check_stages(parts: Sequence[Part], site: Site, notes: Notes) -> None:
    asked = [
        (number, key, name)
        for number, entry in enumerate(notes.brief.stages)
        for key in ("install", "remove")
        for name in getattr(entry, key)
    ]
    if not asked:
        return
    known = {text for part in parts for text in (part.layer, part.name, part.source.item) if text}
    known |= {support.id for support in site.supports} | {plate.id for plate in site.plates}
    plain = {text.casefold() for text in known}
    for number, key, name in asked:
        if name.casefold() not in plain:
            near = get_close_matches(name, sorted(known), 1)
            hint = f'; did you mean "{near[0]}"?' if near else ""
            where = f"{notes.brief.file}, {notes.brief.place('stages', number, key)}"
            notes.see("stage-member", "check", where, f'"{name}" is no layer, name or id of the files{hint}')
