"""What `members` writes: the rows that came in with the force of one real member, and the governing ones apart."""

from __future__ import annotations

from collections.abc import Sequence

from export.canonical import canonical_text
from export.table_files import Cell, Sheet, csv_text
from ingest.model import NOTICE
from sections.section.members import Governing, MemberForce

COLUMNS = ("section", "stage", "member", "quantity", "value", "unit")
ADDED = ("factor", "member_value", "member_unit", "gives", "ratio_low", "ratio_high", "verdict", "caution")
GOVERNING_COLUMNS = (
    "member",
    "gives",
    "sign",
    "member_value",
    "member_unit",
    "section",
    "stage",
    "ratio_low",
    "ratio_high",
    "verdict",
    "caution",
)


def write_members(forces: Sequence[MemberForce]) -> str:
    """The table as CSV text: the input's columns, its further columns as they came, then what was worked out.

    A further column that bears the name of an added one keeps its values under `given_<name>`.
    """
    extra = list(dict.fromkeys(key for force in forces for key in force.row.extra))
    heads = (*COLUMNS, *(f"given_{key}" if key in (*ADDED, "notice") else key for key in extra), *ADDED, "notice")
    rows: list[tuple[Cell, ...]] = []
    for force in forces:
        rows.append((*_given(force).values(), *(force.row.extra.get(key) for key in extra), *_made(force), NOTICE))
    return csv_text(Sheet("members", heads, tuple(rows)))


def write_governing(governing: Sequence[Governing]) -> str:
    """The largest value of each sign per member and kind, as CSV text; every row repeats the notice."""
    rows = tuple(
        (
            one.member,
            one.gives,
            one.sign,
            one.value,
            one.unit,
            one.section,
            one.stage,
            one.ratio_low,
            one.ratio_high,
            one.verdict,
            NOTICE,
        )
        for one in governing
    )
    return csv_text(Sheet("governing", GOVERNING_COLUMNS, rows))


def members_json(forces: Sequence[MemberForce]) -> str:
    """The same as JSON text: the notice, and one object per value with the columns of the table as keys."""
    rows = [
        {**_given(force), **dict(zip(ADDED, _made(force), strict=True)), "extra": force.row.extra} for force in forces
    ]
    return canonical_text({"notice": NOTICE, "members": rows}).rstrip("\n")


def _given(force: MemberForce) -> dict[str, Cell]:
    return {key: getattr(force.row, key) for key in COLUMNS}


def _made(force: MemberForce) -> tuple[Cell, ...]:
    return (
        force.factor,
        force.value,
        force.unit,
        force.gives,
        force.ratio_low,
        force.ratio_high,
        force.verdict,
        force.caution,
    )
