"""What `inspect` and `propose` say on standard output, in words and as data."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from typing import Any

from pydantic import TypeAdapter

from ingest.model import NOTICE, Site
from ingest.trail import Finding, Question
from sections.found import FoundPit
from sections.model import Pit, Run
from sections.proposal import Proposal, Verdict
from sections.verdicts.judge_line import JudgedLine


def describe(site: Site, found: Sequence[FoundPit]) -> str:
    """Tell what was found in the files, per file the ledger, then the pits, questions and what is missing."""
    lines = [site.name or "Site without a name", ""]
    for entry in site.inputs:
        lines.append(f"{entry.file}: {entry.kind} {entry.schema_or_version}, lengths in {entry.length_unit}")
        if entry.file in site.ledger:
            lines += _ledger_lines(site, entry.file)
    lines += ["", *(line for pit in found for line in _pit_lines(pit.pit))]
    if not found:
        lines.append("No excavation found: no wall or floor outline from which a perimeter could be built")
    lines += _role_lines(site)
    lines += _question_lines((*site.questions, *(q for pit in found for q in pit.questions)))
    lines += _finding_lines((*site.findings, *(f for pit in found for f in pit.findings)))
    return "\n".join([*lines, "", NOTICE])


def _ledger_lines(site: Site, file: str) -> list[str]:
    book = site.ledger[file]
    lines = [f"  {book.entities} entities = {book.used} used + {book.context} context + {book.ignored} ignored"]
    lines += [f"    used as {role}: {count}" for role, count in sorted(book.roles.items())]
    lines += [f"    not used, {reason}: {count}" for reason, count in sorted(book.reasons.items())]
    return lines + [f"    lost: {loss}" for loss in book.losses]


def _role_lines(site: Site) -> list[str]:
    """One line per layer or class and role: what was decided, why, how sure."""
    seen: dict[tuple[str, str, str], list[float]] = {}
    for group in (
        site.walls,
        site.piles,
        site.supports,
        site.walers,
        site.plates,
        site.columns,
        site.loads,
        site.receptors,
    ):
        for item in group:
            if item.evidence:
                label = item.layer or _numbered(item.name)
                seen.setdefault((label, item.evidence.role, _numbered(item.evidence.why)), []).append(
                    item.evidence.confidence
                )
    lines = ["", "Roles"] if seen else []
    for (label, role, why), sure in sorted(seen.items()):
        lines.append(f"  {label or '(no layer)'}: {len(sure)} as {role} ({why}; confidence {min(sure):.2f})")
    return lines


def _numbered(words: str) -> str:
    """A name without its running number, so that PILE 1 to PILE 32 are one line; numbers of the brief's lines stay."""
    return re.sub(r"(?<=[ _.-])\d+(?=\"|$)", "*", words)


def _pit_lines(pit: Pit) -> list[str]:
    kind = "closed" if pit.closed else "open"
    lines = [f"Pit {pit.id}: {kind} perimeter, {pit.length:.2f} m, {len(pit.corners)} corners, {len(pit.zones)} zones"]
    lines += [f"  {run.start:7.2f} to {run.to:7.2f}  {_wall_words(run)}" for run in pit.runs]
    for member in pit.members:
        spacing = "" if member.spacing is None else f" at {member.spacing:.2f} m"
        level = "" if member.level is None else f", level {member.level:.2f}"
        lines.append(f"  {member.id}: {member.count} {member.role}{spacing}{level}")
    return lines


def _wall_words(run: Run) -> str:
    wall = run.wall
    size = f", {wall.thickness:.2f} m thick" if wall.thickness else ""
    if wall.diameter and wall.centres:
        size = f", {wall.count} piles of {wall.diameter:.2f} m at {wall.centres:.2f} m"
    elif wall.kind == "king_post" and wall.centres:
        size = f", {wall.count} posts {wall.post or ''} at {wall.centres:.2f} m".replace("  ", " ")
    toe = ", toe not given" if wall.toe is None else f", toe {wall.toe:.2f}"
    return f"{wall.kind} wall{size}{toe}"


def _question_lines(questions: Iterable[Question]) -> list[str]:
    lines: list[str] = []
    for question in questions:
        lines.append(f"  ? {question.about}")
        lines += [f"      {r.reading}: {r.evidence} ({r.confidence:.2f})" for r in question.readings]
        lines += [f"      settle it: {line}" for line in question.brief_line.splitlines()]
    return ["", "Questions", *lines] if lines else []


def _finding_lines(findings: Iterable[Finding]) -> list[str]:
    lines = [f"  {finding.severity}: {finding.where}: {finding.text}" for finding in findings]
    return ["", "Findings", *lines] if lines else []


def describe_json(site: Site, found: Sequence[FoundPit]) -> dict[str, Any]:
    """Return the inventory as data: the same facts as `describe`, in the words of the proposal."""
    whole = TypeAdapter(Site).dump_python(site, mode="json", by_alias=True)
    pits = TypeAdapter(tuple[Pit, ...]).dump_python(tuple(pit.pit for pit in found), mode="json", by_alias=True)
    keys = ("inputs", "ledger", "questions", "assumptions", "findings", "not_assessed")
    return {"schema": "cutworthy/inventory/1", "notice": NOTICE, **{key: whole[key] for key in keys}, "pits": pits}


def summarise(proposal: Proposal, folder: Path) -> str:
    """Tell what was proposed, in a screenful."""
    lines = []
    for pit in proposal.pits:
        shown, provisional = represented(proposal, pit.id)
        rest = sum(_length(pit, s.start, s.to) for s in proposal.unrepresented if s.pit == pit.id)
        lines.append(
            f"Pit {pit.id}: {pit.length:.2f} m of wall; shown {shown:.2f} m, provisional {provisional:.2f} m, "
            f"needs its own analysis {rest:.2f} m"
        )
    for section in proposal.sections:
        score = (
            "no score (a governing output is not assessed)" if section.score is None else f"score {section.score:.0f}"
        )
        where = ", ".join(f"{wall.pit} chainage {wall.at:.2f}" for wall in section.walls)
        lines.append(f"{section.id}  {section.kind} through {where}; {score}")
        lines += verdict_lines(section.verdicts, proposal.limits.governing)
    if not proposal.sections:
        lines.append("No section could be written")
        lines += [f"  {finding.where}: {finding.text}" for finding in proposal.findings if finding.severity != "note"]
    lines += [
        "",
        _to_look_at(proposal),
        f"Report: {folder}/report.html",
        "",
        NOTICE,
    ]
    return "\n".join(lines)


def _to_look_at(proposal: Proposal) -> str:
    findings = [finding for finding in proposal.findings if finding.severity != "note"]
    counts = (
        (len(proposal.questions), "question"),
        (len(findings), "finding to look at"),
        (len(proposal.assumptions), "assumption to confirm"),
    )
    return ", ".join(f"{n} {words if n == 1 else _plural(words)}" for n, words in counts)


def _plural(words: str) -> str:
    first, *rest = words.split(" ")
    return " ".join([f"{first}s", *rest])


def represented(proposal: Proposal, pit: str) -> tuple[float, float]:
    """Metres of one pit shown and provisional; never added."""
    lengths = {p.id: p for p in proposal.pits}
    shown = provisional = 0.0
    for section in proposal.sections:
        for stretch in section.represents:
            if stretch.pit == pit:
                metres = _length(lengths[pit], stretch.start, stretch.to)
                shown, provisional = (
                    (shown, provisional + metres) if stretch.provisional else (shown + metres, provisional)
                )
    return shown, provisional


def _length(pit: Pit, start: float, to: float) -> float:
    return to - start if to >= start else to - start + pit.length


def summarise_json(proposal: Proposal, folder: Path, written: Sequence[str]) -> dict[str, Any]:
    """Return the summary as data."""
    pits = {}
    for pit in proposal.pits:
        shown, provisional = represented(proposal, pit.id)
        pits[pit.id] = {"length": pit.length, "shown": shown, "provisional": provisional}
    sections = {
        s.id: {"score": s.score, "verdicts": {o: v.verdict for o, v in s.verdicts.items()}} for s in proposal.sections
    }
    return {"notice": NOTICE, "out": str(folder), "written": list(written), "pits": pits, "sections": sections}


def verdict_lines(verdicts: Mapping[str, Verdict], outputs: Sequence[str]) -> list[str]:
    """One short line per output; the sentences are in the report and the JSON."""
    lines = []
    for output in outputs:
        if output not in verdicts:
            continue
        verdict = verdicts[output]
        band = "" if verdict.low is None or verdict.high is None else f" {verdict.low:.2f} to {verdict.high:.2f}"
        why = f" ({verdict.dominant})" if verdict.dominant else ""
        lines.append(f"    {output}: {verdict.verdict}{band}{why}{', provisional' if verdict.provisional else ''}")
    return lines


def describe_line(judged: JudgedLine, governing: Sequence[str]) -> str:
    """Tell what is said of an engineer's line."""
    lines = []
    for wall in judged.walls:
        lines.append(f"{wall.pit} chainage {wall.at:.2f}, {wall.side} wall of the cut")
        lines += verdict_lines(wall.verdicts, governing)
        lines += [f"      {wall.verdicts[o].sentence}" for o in governing if o in wall.verdicts]
    score = "no score (a governing output is not assessed)" if judged.score is None else f"score {judged.score:.0f}"
    return "\n".join([*lines, f"{score}; {judged.better}", "", NOTICE])


def line_json(judged: JudgedLine) -> dict[str, Any]:
    """The same as data."""
    return {"notice": NOTICE, **TypeAdapter(JudgedLine).dump_python(judged, mode="json", by_alias=True)}
