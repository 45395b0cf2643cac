"""What finding a pit leaves open: findings, questions and assumptions about levels and supports."""

from __future__ import annotations

import numpy as np

from ingest.model import Site
from ingest.trail import Assumption, Finding, Question, Reading, Source
from sections.found import PitShape
from sections.model import Ints
from sections.pit.floors import FloorPlan
from sections.pit.support_ends import SupportEnds

SHOWN = 5


def note_levels(
    site: Site, shape: PitShape, plan: FloorPlan, within: bool
) -> tuple[tuple[Finding, ...], tuple[Assumption, ...]]:
    """What is missing of the levels: without them no excavated depth is known.

    Args:
        within: True for a pit that lies in another one.
    """
    findings = []
    if within:
        text = "This pit lies in another: it retains that pit's floor, wherever a deeper floor of its own is known."
        findings.append(_finding(shape, "pit-in-pit", "check", "retained side", text))
    elif site.ground_level is None:
        text = "No ground level is given, so no excavated depth is known and nothing can be assessed."
        findings.append(_finding(shape, "ground-level", "check", "retained side", text))
    if not plan.floors:
        text = "No formation level, floor or slab with an underside is known, so the dig level is not known."
        findings.append(_finding(shape, "dig-level", "check", "floor", text))
    assumptions: tuple[Assumption, ...] = ()
    stated = any(assumption.code == "dig-allowance" for assumption in site.assumptions)
    if plan.floors and plan.assumed and not stated:
        assumptions = (
            Assumption(
                id=f"{shape.id}-dig-allowance",
                code="dig-allowance",
                about=shape.id,
                text="The dig level is taken at the underside of the slab: no allowance for blinding, drainage or"
                " over-dig is included.",
                basis="No dig allowance is given.",
                sources=tuple(source for floor in plan.floors for source in floor.sources),
            ),
        )
    return tuple(findings), assumptions


def _finding(
    shape: PitShape, code: str, severity: str, where: str, text: str, sources: tuple[Source, ...] = ()
) -> Finding:
    assert severity in ("check", "note")
    return Finding(
        id=f"{shape.id}-{code}",
        code=code,
        severity="check" if severity == "check" else "note",
        where=f"{shape.id}, {where}",
        text=text,
        sources=sources,
    )


def note_supports(
    site: Site, shape: PitShape, ends: SupportEnds, strays: Ints
) -> tuple[tuple[Finding, ...], tuple[Question, ...]]:
    """Supports that meet no wall, duplicates, and members that geometry reads otherwise than they were drawn."""
    findings, questions = [], []
    if len(strays):
        text = f"{len(strays)} supports bear on no wall and are not used: {_listed(site, strays)}."
        sources = tuple(source for i in strays for source in site.supports[i].sources)
        findings.append(_finding(shape, "support-off-wall", "check", "supports", text, sources))
    loose = [
        int(i)
        for i, role, at, beyond in zip(ends.index, ends.role, ends.far_at, ends.beyond, strict=True)
        if role == "strut" and np.isnan(at) and not beyond
    ]
    if loose:
        text = f"{len(loose)} struts meet a wall at one end only; what the far end bears on is not known: "
        sources = tuple(source for i in loose for source in site.supports[i].sources)
        text += f"{_listed(site, np.array(loose))}."
        findings.append(_finding(shape, "strut-far-end", "check", "supports", text, sources))
    if ends.copies:
        count = sum(len(sources) for sources in ends.copies.values())
        text = f"{count} supports are drawn twice; each is counted once."
        sources = tuple(source for i in sorted(ends.copies) for source in ends.copies[i])
        findings.append(_finding(shape, "support-twice", "note", "supports", text, sources))
    for drawn, role in sorted(set(zip(ends.drawn, ends.role, strict=True))):
        changed = [i for i in range(len(ends.role)) if (ends.drawn[i], ends.role[i]) == (drawn, role) and drawn != role]
        if not changed:
            continue
        index = ends.index[changed]
        text = f"{len(changed)} members drawn as {_word(drawn)} are read as {_word(role)} from how they lie: "
        sources = tuple(source for i in index for source in site.supports[i].sources)
        findings.append(
            _finding(shape, f"read-as-{role}", "note", "supports", f"{text}{_listed(site, index)}.", sources)
        )
        if role == "anchor":
            questions.append(_ask(shape, drawn, len(changed)))
    return tuple(findings), tuple(questions)


def _ask(shape: PitShape, drawn: str, count: int) -> Question:
    return Question(
        id=f"{shape.id}-{drawn}-behind-wall",
        about=f"{count} members drawn as {_word(drawn)} that run into the ground behind the wall of {shape.id}",
        readings=(
            Reading(
                reading="anchor", evidence="the head is at the wall, the far end lower and behind it", confidence=0.7
            ),
            Reading(reading=drawn, evidence="drawn as such", confidence=0.3),
        ),
        brief_line='[[supports]]  match = {...}, role = "anchor"',
    )


def _word(role: str) -> str:
    return role.replace("_", " ")


def _listed(site: Site, index: Ints) -> str:
    names = sorted(_name(site, int(i)) for i in index)
    more = f" and {len(names) - SHOWN} more" if len(names) > SHOWN else ""
    return ", ".join(names[:SHOWN]) + more


def _name(site: Site, index: int) -> str:
    support = site.supports[index]
    items = [source.item for source in support.sources]
    return support.name or (items[0] if items else support.id)
