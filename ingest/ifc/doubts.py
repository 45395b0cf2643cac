"""What a reader took as so, what wants a look, and what only the engineer can say."""

from __future__ import annotations

import json

import numpy as np

from ingest.ifc.georeference import Georeference
from ingest.ifc.units import ProjectUnits
from ingest.parts import Part
from ingest.trail import Assumption, Finding, Question, Reading, Severity

LEAST_EXTENT = 1.0
GREATEST_EXTENT = 20_000.0
"""Sites smaller or larger than this, m, are taken for a wrong unit (judgement)."""
LIKELY_EXTENT = (5.0, 500.0)
"""Extent of a likely site, m (common practice, no source)."""
SHOWN = 5


class Doubts:
    """Collects findings, assumptions and questions of one file in the order they come up."""

    def __init__(self, file: str) -> None:
        self._file = file
        self._findings: list[Finding] = []
        self._assumptions: list[Assumption] = []
        self._questions: list[Question] = []
        self._damaged: dict[str, str] = {}
        self._unplaced: dict[str, str] = {}

    def findings(self) -> tuple[Finding, ...]:
        """All findings so far."""
        return tuple(self._findings)

    def assumptions(self) -> tuple[Assumption, ...]:
        """All assumptions so far."""
        return tuple(self._assumptions)

    def questions(self) -> tuple[Question, ...]:
        """All questions so far."""
        return tuple(self._questions)

    def _find(self, code: str, severity: Severity, text: str) -> None:
        number = len(self._findings) + 1
        self._findings.append(
            Finding(id=f"{self._file}-F{number}", code=code, severity=severity, where=self._file, text=text)
        )

    def note_damage(self, item: str, why: str) -> None:
        """An element whose attributes or geometry could not be read."""
        self._damaged.setdefault(item, why[:120])

    def note_unplaced(self, item: str, why: str | None) -> None:
        """An element that cannot be placed."""
        self._unplaced.setdefault(item, why or "its placement leads back to itself")

    def about_damage(self, damage: list[str], losses: list[str]) -> None:
        """Turn damage into losses and findings."""
        for text in damage:
            self._find("ifc-damage", "check", text)
        for found, what in ((self._damaged, "cannot be read"), (self._unplaced, "cannot be placed")):
            if found:
                first = "; ".join(f"{item} ({why})" for item, why in list(found.items())[:SHOWN])
                losses.append(f"{len(found)} elements {what}: {first}")
        for text in losses:
            self._find("ifc-loss", "check", text)

    def about_georeference(self, georeference: Georeference) -> None:
        """Findings and assumptions of the map conversion."""
        for code, text in georeference.checks:
            self._find(f"ifc-{code}", "note" if code == "true-north" else "check", text)
        for code, text, basis in georeference.assumed:
            self._assume(code, text, basis)

    def _assume(self, code: str, text: str, basis: str) -> None:
        number = len(self._assumptions) + 1
        self._assumptions.append(
            Assumption(id=f"{self._file}-A{number}", code=code, about=self._file, text=text, basis=basis)
        )

    def about_units(self, units: ProjectUnits, parts: list[Part]) -> str | None:
        """Ask about the length unit when it is missing, or when the model has an unlikely size.

        Returns:
            A likelier unit when the file declares none and this one gives no likely site; else None.
        """
        for text in units.doubts:
            self._find("ifc-unit", "check", text)
        extent = extent_of(parts)
        likely = not parts or LEAST_EXTENT <= extent <= GREATEST_EXTENT
        better = _better_unit(extent / units.length)
        text = f"the model is {extent:.4g} m across in {units.name}"
        if not units.declared:
            if parts and not LIKELY_EXTENT[0] <= extent <= LIKELY_EXTENT[1] and better != units.name:
                return better
            self._assume("length-unit", f"no length unit is declared; {units.name} was used", text)
            other = "mm" if units.name == "m" else "m"
            self._ask(units.name, (units.name, text, 0.6), (other, "the other unit in common use", 0.2))
        elif not likely:
            self._find("ifc-unit-size", "check", f"{text}, its declared unit")
            self._ask(better, (units.name, f"declared in the file, but {text}", 0.3), (better, "a likely site", 0.5))
        return None

    def _ask(self, unit: str, *readings: tuple[str, str, float]) -> None:
        """Ask for the length unit; the brief line offers `unit`."""
        self._questions.append(
            Question(
                id=f"{self._file}-Q{len(self._questions) + 1}",
                about=f"{self._file}: length unit",
                readings=tuple(
                    Reading(reading=f"the unit is {name}", evidence=why, confidence=share)
                    for name, why, share in readings
                ),
                brief_line=f'[files.{json.dumps(self._file)}]\nlength_unit = "{unit}"',
            )
        )


def extent_of(parts: list[Part]) -> float:
    """Largest side of the box about all parts, m, their heights included; 0 without parts."""
    at = [point for part in parts for point in part.points]
    if not at:
        return 0.0
    levels = [z for part in parts for z in (part.z_bottom, part.z_top) if z is not None]
    tall = max(levels) - min(levels) if levels else 0.0
    return max(float(np.ptp(np.array(at), axis=0).max()), tall)


def _better_unit(size: float) -> str:
    """Unit that makes a model of this many units a likely site."""
    for unit, metres in (("m", 1.0), ("mm", 1e-3), ("cm", 1e-2), ("foot", 0.3048)):
        if LIKELY_EXTENT[0] <= size * metres <= LIKELY_EXTENT[1]:
            return unit
    return "m" if size < 1000 else "mm"
