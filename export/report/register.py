"""The register a person signs, and the account of the inputs."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import fields
from typing import TypeVar

from export.report.markup import Html, join, tag
from export.report.tables import listing, source_list, table
from export.report.words import figure, fixed, output_name
from ingest.model import InputFile, Limits
from ingest.trail import LedgerEntry
from sections.definition import SectionDefinition
from sections.proposal import Proposal

T = TypeVar("T")
Definitions = Sequence[SectionDefinition]
LIMIT_WORDS = {
    "ratio_low": ("below this a band over-states", ""),
    "ratio_high": ("above this a band is not safe to rely on", ""),
    "ratio_narrow": ("still represents provisionally up to here, before the model's own margin", ""),
    "plan": ("gap or overlap that still closes a wall line", "m"),
    "level": ("levels closer than this are alike", "m"),
    "spacing_ratio": ("spacings within this fraction are alike", ""),
    "stiffness_ratio": ("stiffnesses within this fraction are alike", ""),
    "surcharge": ("surcharges within this are alike", "kPa"),
    "direction": ("less change of direction is no corner", "°"),
}


def merged(first: Iterable[T], others: Iterable[Iterable[T]], key: Callable[[T], object]) -> list[T]:
    """All of them once, in order of first appearance."""
    found: dict[object, T] = {}
    for one in (*first, *(item for group in others for item in group)):
        found.setdefault(key(one), one)
    return list(found.values())


def register(proposal: Proposal, definitions: Definitions) -> Html:
    """Assumptions to sign off, questions, findings."""
    return join(
        [_assumptions(proposal, definitions), _questions(proposal, definitions), _findings(proposal, definitions)]
    )


def _assumptions(proposal: Proposal, definitions: Definitions) -> Html:
    rows = [
        [
            one.id,
            tag("span", tag("b", one.about), tag("br"), one.text),
            one.basis,
            source_list(one.sources),
            one.confirm_by,
            one.status,
            tag("span", "name, date", class_="sign"),
        ]
        for one in merged(proposal.assumptions, (d.assumptions for d in definitions), lambda a: (a.id, a.text))
    ]
    heads = ["No.", "What was taken as so", "Basis", "Source", "To confirm", "Status", "Sign"]
    return tag("h3", "Assumptions to sign off") + table("Assumptions", heads, rows, "register")


def _questions(proposal: Proposal, definitions: Definitions) -> Html:
    rows = [
        [
            one.id,
            one.about,
            listing(
                (f"{r.reading} (confidence {fixed(r.confidence, 2)}): {r.evidence}" for r in one.readings), "tight"
            ),
            tag("code", one.brief_line),
        ]
        for one in merged(proposal.questions, (d.questions for d in definitions), lambda q: (q.id, q.about))
    ]
    return tag("h3", "Questions") + table(
        "Questions", ["No.", "About", "Readings", "Line of the brief that settles it"], rows
    )


def _findings(proposal: Proposal, definitions: Definitions) -> Html:
    found = merged(proposal.findings, (d.findings for d in definitions), lambda f: (f.id, f.text))
    rows = [[one.id, one.severity, one.where, one.text, source_list(one.sources)] for one in found]
    return tag("h3", "Findings") + table("Findings", ["No.", "Severity", "Where", "What", "Source"], rows)


def not_assessed(proposal: Proposal, definitions: Definitions) -> Html:
    """What was not looked at, why, and what closes the gap."""
    rows = [
        [one.what, one.why, one.what_to_do]
        for one in merged(proposal.not_assessed, (d.not_assessed for d in definitions), lambda n: (n.what, n.why))
    ]
    return table("Not assessed", ["What", "Why", "What to do"], rows)


def limits_table(limits: Limits) -> Html:
    """Every limit and tolerance of the run."""
    rows = [
        [
            field.name.replace("_", " "),
            figure(getattr(limits, field.name), LIMIT_WORDS[field.name][1]),
            LIMIT_WORDS[field.name][0],
        ]
        for field in fields(limits)
        if field.name in LIMIT_WORDS
    ]
    rows.append(
        ["governing outputs", ", ".join(output_name(o).lower() for o in limits.governing), "verdicts that decide"]
    )
    return table("Limits and tolerances of this run", ["Limit", "Value", "Meaning"], rows)


def ledger(entries: dict[str, LedgerEntry]) -> Html:
    """The account of each file: entities = used + context + ignored."""
    rows = []
    for file, one in entries.items():
        roles = ", ".join(f"{name.replace('_', ' ')} {number}" for name, number in one.roles.items())
        reasons = ", ".join(f"{name} {number}" for name, number in one.reasons.items())
        rows.append(
            [
                file,
                str(one.entities),
                str(one.used),
                str(one.context),
                str(one.ignored),
                roles or "none",
                reasons or "none",
                "; ".join(one.losses) or "none noticed",
            ]
        )
    heads = ["File", "#Entities", "#Used", "#Context", "#Ignored", "Used as", "Ignored because", "Losses in reading"]
    return table("Ledger: every entity of every file", heads, rows)


def inputs_table(inputs: Sequence[InputFile]) -> Html:
    """Inputs with hash and registration."""
    rows = []
    for one in inputs:
        laid = "not needed"
        if one.registered is not None:
            r = one.registered
            laid = f"shift {fixed(r.shift[0], 3)}, {fixed(r.shift[1], 3)} m, "
            laid += f"rotation {fixed(r.rotation_deg, 4)}°, scale {figure(r.scale)}"
            laid += "" if r.residual is None else f", residual {fixed(r.residual, 3)} m"
        rows.append(
            [
                one.file,
                one.kind.upper() if one.kind != "brief" else "brief",
                one.schema_or_version,
                one.length_unit,
                laid,
                tag("code", one.sha256, class_="hash"),
            ]
        )
    return table("Inputs", ["File", "Kind", "Schema or version", "Unit", "Laid onto the site", "SHA-256"], rows)
