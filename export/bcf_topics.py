"""What the model's author is asked: questions, doubtful findings and open assumptions, each as one topic."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from fnmatch import fnmatchcase
from itertools import chain
from typing import Any, Literal

from ingest.model import Site
from ingest.trail import Assumption, Finding, Question, Source
from sections.definition import SectionDefinition
from sections.proposal import Proposal

TopicKind = Literal["Question", "Finding", "Assumption"]
GLOBAL_ID = re.compile(r"[0-3][0-9A-Za-z_$]{21}")
LONGEST_TITLE = 120
OF_THE_ANALYSIS = frozenset(
    {
        "arching", "bearing-row", "bond-gap", "corner_strut_not_assessed", "far_wall_not_in_section", "load-row",
        "load_not_assessed", "lock-off", "member_not_smeared", "not_axisymmetric", "pit-in-pit",
        "sequence_not_laid_out", "skew-care", "skew-refused", "spacing-range", "stage_water_not_laid_out", "two_runs",
    }
)  # fmt: skip
"""Findings that advise on the analysis and ask nothing of the model's author; they stand in the report only."""


@dataclass(frozen=True, kw_only=True)
class Issue:
    """One topic before it is written.

    `sections` are those it bears on, all of them where nothing tells; `global_ids` the IFC elements it is about.
    """

    kind: TopicKind
    id: str
    title: str
    text: str
    priority: str
    sections: tuple[SectionDefinition, ...]
    global_ids: tuple[str, ...]


def find_issues(proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site) -> list[Issue]:
    """List the topics: each question, each finding of severity stop or check about data, each open assumption.

    Args:
        proposal: The proposal.
        definitions: Its sections.
        site: For the kind of each file, and what a question is about.

    Returns:
        Topics in the order questions, findings (stop first), assumptions.
    """
    models = {one.file for one in site.inputs if one.kind == "ifc"}
    found = [_asked(one, definitions, site, models) for one in _once(proposal, definitions, "questions")]
    findings = [
        one
        for one in _once(proposal, definitions, "findings")
        if one.severity != "note" and one.code not in OF_THE_ANALYSIS
    ]
    found += [_seen(one, definitions, models) for one in sorted(findings, key=lambda one: one.severity != "stop")]
    taken = [one for one in _once(proposal, definitions, "assumptions") if one.status == "open"]
    return found + [_taken(one, definitions, models) for one in taken]


def _once(proposal: Proposal, definitions: Sequence[SectionDefinition], name: str) -> list[Any]:
    """Records of the proposal and its sections, each once."""
    rows = chain(getattr(proposal, name), *(getattr(one, name) for one in definitions))
    return list({(row.id, getattr(row, "text", "")): row for row in rows}.values())


def _asked(one: Question, definitions: Sequence[SectionDefinition], site: Site, models: set[str]) -> Issue:
    rows = (f"- {reading.reading} ({reading.confidence:.2f}): {reading.evidence}" for reading in one.readings)
    readings = "\n".join(("Readings with their confidence:", *rows))
    sources = tuple(_meant(one, site))
    return Issue(
        kind="Question",
        id=one.id,
        title=_short(one.about),
        text=f"{one.about}\n\n{readings}\n\nThe brief settles it with:\n{one.brief_line}",
        priority="question",
        sections=_sections(one.id, "questions", sources, definitions),
        global_ids=_global_ids(sources, models),
    )


def _seen(one: Finding, definitions: Sequence[SectionDefinition], models: set[str]) -> Issue:
    return Issue(
        kind="Finding",
        id=one.id,
        title=_short(one.text),
        text=f"{one.where}\n{one.text}{_files(one.sources)}",
        priority=one.severity,
        sections=_sections(one.id, "findings", one.sources, definitions),
        global_ids=_global_ids(one.sources, models),
    )


def _taken(one: Assumption, definitions: Sequence[SectionDefinition], models: set[str]) -> Issue:
    return Issue(
        kind="Assumption",
        id=one.id,
        title=_short(f"{one.about}: {one.text}"),
        text=f"Taken as so until confirmed: {one.text}\nBasis: {one.basis}\nTo be confirmed by: {one.confirm_by}"
        f"{_files(one.sources)}",
        priority="confirm",
        sections=_sections(one.id, "assumptions", one.sources, definitions),
        global_ids=_global_ids(one.sources, models),
    )


def _short(words: str) -> str:
    plain = " ".join(words.split())
    return plain if len(plain) <= LONGEST_TITLE else plain[: LONGEST_TITLE - 3] + "..."


def _files(sources: Sequence[Source]) -> str:
    named = ", ".join(dict.fromkeys(f"{one.file} {one.item}".strip() for one in sources))
    return f"\nEntities: {named}" if named else ""


def _global_ids(sources: Iterable[Source], models: set[str]) -> tuple[str, ...]:
    return tuple(
        dict.fromkeys(one.item for one in sources if one.file in models and GLOBAL_ID.fullmatch(one.item) is not None)
    )


def _sections(
    name: str, kind: str, sources: Sequence[Source], definitions: Sequence[SectionDefinition]
) -> tuple[SectionDefinition, ...]:
    """Sections that list the record or hold what it is about; all where none does."""
    items = {(one.file, one.item) for one in sources}
    bears = tuple(
        one
        for one in definitions
        if any(row.id == name for row in getattr(one, kind)) or items & {(s.file, s.item) for s in _sources(one)}
    )
    return bears or tuple(definitions)


def _sources(one: SectionDefinition) -> Iterator[Source]:
    for member in one.members:
        yield from member.sources
    for load in one.loads:
        yield from load.sources


def _meant(one: Question, site: Site) -> Iterator[Source]:
    """Entities of the site that the question's line of the brief matches by id, layer or name."""
    for match in _matches(one.brief_line):
        if "id" in match:
            yield from (Source(file=row.file, item=match["id"]) for row in site.inputs if row.file in one.about)
        elif match.keys() <= {"layer", "name"}:
            for record in _records(site):
                if all(fnmatchcase(getattr(record, key).casefold(), match[key].casefold()) for key in match):
                    yield from record.sources


def _records(site: Site) -> Iterator[Any]:
    yield from (*site.walls, *site.piles, *site.supports, *site.walers)
    yield from (*site.plates, *site.columns, *site.loads, *site.receptors)


def _matches(brief_line: str) -> list[dict[str, str]]:
    try:
        tables = tomllib.loads(brief_line).values()
    except tomllib.TOMLDecodeError:
        return []
    rows = chain.from_iterable(table for table in tables if isinstance(table, list))
    found = [row["match"] for row in rows if isinstance(row, dict) and isinstance(row.get("match"), dict)]
    return [{key: str(value) for key, value in match.items()} for match in found if match]
