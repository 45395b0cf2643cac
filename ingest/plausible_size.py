"""Walls no site has: lengths read in the wrong unit are refused before anything is worked out along them."""

from __future__ import annotations

from math import dist
from statistics import median

from ingest.errors import InputError
from ingest.members import Pile
from ingest.model import Site
from ingest.notes import Notes
from ingest.trail import Source

LONGEST = 5000.0
"""m; longest single piece of wall. Common practice, no source."""
MOST_WALL = 20_000.0
"""m; all walls of a file. Common practice, no source."""
THINNEST, THICKEST = 0.05, 10.0
"""m; diameter of a pile in a wall. Common practice, no source."""
REMEDY = 'give its unit in the brief, [files."NAME"] length_unit, or correct the drawing'


def check_sizes(site: Site, notes: Notes) -> None:
    """Refuse a file whose wall piles or walls have the size of no wall; point out single piles that have.

    Raises:
        InputError: A wall longer than `LONGEST`, or half of a file's wall piles too thin or too thick.
    """
    apart = any(finding.code == "files-apart" for finding in notes.findings)
    total: dict[str, float] = {}
    for wall in site.walls:
        length = sum(dist(a, b) for a, b in zip(wall.axis, wall.axis[1:], strict=False))
        if length > LONGEST and apart:
            # Which unit is right is asked already, from the other file: `inspect` must be able to show it.
            where = wall.sources[0].file if wall.sources else wall.id
            notes.see(
                "wall-size", "stop", where, f"a wall {length:.0f} m long, longer than any: answer the question first"
            )
            return
        if length > LONGEST:
            raise _refused(wall.sources, f"is a wall {length:.0f} m long, longer than any: the unit may be wrong")
        file = wall.sources[0].file if wall.sources else ""
        total[file] = total.get(file, 0.0) + length
        if total[file] > MOST_WALL:
            raise _refused(wall.sources, f"is one of walls above {MOST_WALL:g} m in all: the unit may be wrong")
    by_file: dict[str, list[Pile]] = {}
    for pile in site.piles:
        if not pile.bearing and pile.diameter is not None and pile.sources:
            by_file.setdefault(pile.sources[0].file, []).append(pile)
    for _, piles in sorted(by_file.items()):
        _check_diameters(piles, notes)


def _check_diameters(piles: list[Pile], notes: Notes) -> None:
    odd = [p for p in piles if p.diameter is not None and not THINNEST <= p.diameter <= THICKEST]
    if not odd:
        return
    usual = median(p.diameter for p in piles if p.diameter is not None)
    text = f"a wall pile {odd[0].diameter:.3g} m in diameter: allowed is {THINNEST:g} to {THICKEST:g} m"
    if not THINNEST <= usual <= THICKEST:
        raise _refused(odd[0].sources, f"is {text}; the unit may be wrong")
    sources = tuple(source for pile in odd for source in pile.sources)
    notes.see("pile-size", "check", odd[0].sources[0].file, f"{len(odd)} x {text}", sources)


def _refused(sources: tuple[Source, ...], problem: str) -> InputError:
    first = sources[0] if sources else None
    return InputError(first.file if first else "", first.item if first else "wall", problem, REMEDY)
