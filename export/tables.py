"""Tables that leave the office: members, loads, criteria, assumptions as CSV, and the same sheets in one workbook."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from export.canonical import round_number
from export.table_files import Cell, Sheet, csv_text, write_workbook
from ingest.model import NOTICE
from ingest.trail import Assumption, Source
from sections.definition import SectionDefinition
from sections.member import SectionMember
from sections.proposal import Proposal

WORKBOOK = "tables.xlsx"


def write_tables(proposal: Proposal, definitions: Sequence[SectionDefinition], folder: Path) -> list[str]:
    """Write `members.csv`, `loads.csv`, `criteria.csv`, `assumptions.csv` and `tables.xlsx`.

    Returns:
        The names of the files written.
    """
    sheets = table_sheets(proposal, definitions)
    for sheet in sheets:
        (folder / f"{sheet.name}.csv").write_text(csv_text(sheet), encoding="utf-8", newline="")
    write_workbook(sheets, folder / WORKBOOK)
    return [*(f"{sheet.name}.csv" for sheet in sheets), WORKBOOK]


def table_sheets(proposal: Proposal, definitions: Sequence[SectionDefinition]) -> tuple[Sheet, ...]:
    """The four tables; every row carries the notice, since rows are copied out of their file."""
    sheets = (_members(definitions), _loads(definitions), _criteria(definitions), _assumptions(proposal, definitions))
    return tuple(
        Sheet(sheet.name, (*sheet.heads, "notice"), tuple((*row, NOTICE) for row in sheet.rows)) for sheet in sheets
    )


def _members(definitions: Sequence[SectionDefinition]) -> Sheet:
    heads = (
        "section",
        "member",
        "role",
        "side",
        "form",
        "material",
        "count",
        "spacing_m",
        "skew_deg",
        "inclination_deg",
        "way",
        "quantity",
        "from",
        "from_value",
        "factor",
        "to",
        "to_value",
        "condition",
        "sources",
    )
    rows = [row for one in definitions for member in one.members for row in _member_rows(one.id, member)]
    return Sheet("members", heads, tuple(rows))


def _member_rows(section: str, one: SectionMember) -> list[tuple[Cell, ...]]:
    real = one.real
    start = (
        section,
        one.id,
        one.role,
        one.side,
        one.form,
        one.material,
        real.count,
        real.spacing,
        real.skew,
        real.inclination,
    )
    end = source_words(one.sources)
    rows: list[tuple[Cell, ...]] = []
    for line in one.smear:
        real_value = getattr(one.real, line.real_key, None)
        value = getattr(one.section, line.section_key, None)
        way = ("real to section", line.quantity, line.real_key, real_value, line.factor, line.section_key, value, None)
        rows.append((*start, *way, end))
    for back in one.back:
        first = ("section to real", back.quantity, back.from_unit, None)
        for factor, to in ((back.factor, f"{back.gives}, {back.unit}"), *((a.factor, a.gives) for a in back.also)):
            rows.append((*start, *first, factor, to, None, back.valid_if, end))
    return rows or [(*start, "no conversion", None, None, None, None, None, None, None, end)]


def source_words(sources: Sequence[Source]) -> str:
    """Sources in one cell."""
    return "; ".join(f"{one.file} {one.item} ({one.how})" for one in sources)


def _loads(definitions: Sequence[SectionDefinition]) -> Sheet:
    heads = (
        "section",
        "load",
        "kind",
        "x_from_m",
        "x_to_m",
        "level_m",
        "real_value",
        "real_unit",
        "handed_over_as",
        "value",
        "unit",
        "keeps",
        "loses",
        "sources",
    )
    rows: list[tuple[Cell, ...]] = []
    for one in definitions:
        for load in one.loads:
            xs, zs = [x for x, _ in load.at], [z for _, z in load.at]
            start = (one.id, load.id, load.kind, min(xs, default=None), max(xs, default=None), max(zs, default=None))
            real, end = (load.real.value, load.real.unit), source_words(load.sources)
            rows.append((*start, *real, "used in the section", load.section.value, load.section.unit, None, None, end))
            rows += [(*start, *real, a.name, a.value, a.unit, a.keeps, a.loses, end) for a in load.alternatives]
    return Sheet("loads", heads, tuple(rows))


def _criteria(definitions: Sequence[SectionDefinition]) -> Sheet:
    heads = (
        "section",
        "wall",
        "output",
        "mechanism",
        "criterion",
        "assessed",
        "ratio_low",
        "ratio_high",
        "sentence",
        "inputs",
        "basis",
        "reference",
    )
    rows = [
        (
            one.id,
            band.wall,
            band.output,
            band.mechanism,
            band.code,
            "yes" if band.assessed else "no",
            band.low,
            band.high,
            band.sentence,
            "; ".join(f"{key} = {_input(value)}" for key, value in band.inputs.items()),
            band.basis,
            band.reference,
        )
        for one in definitions
        for band in one.criteria
    ]
    return Sheet("criteria", heads, tuple(rows))


def _input(value: str | float | None) -> str:
    return "not given" if value is None else value if isinstance(value, str) else repr(round_number(float(value)))


def _assumptions(proposal: Proposal, definitions: Sequence[SectionDefinition]) -> Sheet:
    heads = ("id", "code", "sections", "about", "text", "basis", "sources", "confirm_by", "status", "signed_by", "date")
    where: dict[tuple[str, str], list[str]] = {}
    found: dict[tuple[str, str], Assumption] = {}
    for section, listed in [("", proposal.assumptions), *((one.id, one.assumptions) for one in definitions)]:
        for item in listed:
            found.setdefault((item.id, item.text), item)
            where.setdefault((item.id, item.text), []).extend([section] if section else [])
    rows = [
        (
            a.id,
            a.code,
            ", ".join(where[key]),
            a.about,
            a.text,
            a.basis,
            source_words(a.sources),
            a.confirm_by,
            a.status,
            None,
            None,
        )
        for key, a in found.items()
    ]
    return Sheet("assumptions", heads, tuple(rows))
