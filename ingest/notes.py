"""Where the building of a site writes what it asks, assumes and sees, and which parts gave nothing."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field, replace

from ingest.brief import Brief
from ingest.errors import InputError
from ingest.matching import alike
from ingest.parts import Part
from ingest.roles import RoleGiven
from ingest.trail import Assumption, Finding, NotAssessed, Question, Reading, Severity, Source


@dataclass
class Notes:
    """Collected while the records are built; handed over to the site at the end in a fixed order."""

    brief: Brief
    questions: list[Question] = field(default_factory=list)
    assumptions: list[Assumption] = field(default_factory=list)
    _assumed: set[str] = field(default_factory=set)
    findings: list[Finding] = field(default_factory=list)
    not_assessed: list[NotAssessed] = field(default_factory=list)
    refused: dict[int, str] = field(default_factory=dict)
    used_texts: set[int] = field(default_factory=set)

    def refuse(self, part: Part, reason: str) -> None:
        """Keep a part out of the records, for the reason the ledger will give."""
        self.refused[id(part)] = reason

    def ask(self, about: str, brief_line: str, readings: Iterable[tuple[str, str, float]] = ()) -> None:
        """Ask what only the engineer can settle, with the line of the brief that settles it."""
        options = tuple(Reading(reading=r, evidence=e, confidence=c) for r, e, c in readings)
        self.questions.append(Question(id="", about=about, readings=options, brief_line=brief_line))

    def assume(self, code: str, about: str, text: str, basis: str, sources: Iterable[Source] = ()) -> None:
        """Write down what is taken as so; once for each code and subject."""
        id_ = f"{code}:{slug(about)}" if about else code
        if id_ not in self._assumed:
            self._assumed.add(id_)
            self.assumptions.append(
                Assumption(id=id_, code=code, about=about, text=text, basis=basis, sources=tuple(sources))
            )

    def see(self, code: str, severity: Severity, where: str, text: str, sources: Iterable[Source] = ()) -> None:
        """Report what a check saw."""
        self.findings.append(
            Finding(id="", code=code, severity=severity, where=where, text=text, sources=tuple(sources))
        )

    def material_of(self, part: Part) -> str | None:
        """Material of the brief that the model names on a part; None where it names none the brief describes."""
        named = part.material.casefold()
        return next((entry.id for entry in self.brief.materials if entry.id.casefold() == named), None)

    def stop(self, problem: str, remedy: str, *path: str | int) -> InputError:
        """The error for a fault of the brief, with its line."""
        return InputError(self.brief.file, self.brief.place(*path), problem, remedy)

    def numbered(self) -> tuple[tuple[Question, ...], tuple[Assumption, ...], tuple[Finding, ...]]:
        """Everything in a fixed order with its ids; assumptions the brief confirms are marked so."""
        confirmed = {entry.assumption for entry in self.brief.decisions.confirm}
        questions = sorted(dict.fromkeys(self.questions), key=lambda q: (q.about, q.brief_line))
        findings = sorted(dict.fromkeys(self.findings), key=lambda f: (f.severity, f.code, f.where, f.text))
        assumptions = sorted(self.assumptions, key=lambda a: a.id)
        return (
            tuple(replace(q, id=f"Q{n}") for n, q in enumerate(questions, 1)),
            tuple(replace(a, status="confirmed") if {a.id, a.code} & confirmed else a for a in assumptions),
            tuple(replace(f, id=f"F{n}") for n, f in enumerate(findings, 1)),
        )


def slug(text: str) -> str:
    """A short name made of the letters and digits of a text."""
    return re.sub(r"[^a-z0-9]+", "-", text.casefold()).strip("-")[:60]


def label(given: RoleGiven) -> str:
    """How the engineer knows parts of one kind: by layer, else by name but for its numbers, else by class."""
    part = given.part
    return part.layer or alike(part.name) or part.cls
