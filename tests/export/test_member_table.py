"""The table of member forces: input columns kept, worked-out columns behind, nothing a spreadsheet would run."""

from __future__ import annotations

import csv
import io
import json

from export.member_table import ADDED, COLUMNS, members_json, write_governing, write_members
from ingest.model import NOTICE, ResultRow
from sections.section.members import Governing, MemberForce


def force(**more: object) -> MemberForce:
    row = ResultRow(
        line=2,
        section="S1",
        stage="4",
        member="P1-strut-1",
        quantity="N",
        value=-100.0,
        unit="kN/m",
        extra={"note": "=HYPERLINK(1)", "factor": "mine"},
    )
    given: dict[str, object] = {
        "row": row,
        "factor": 5.0,
        "value": -500.0,
        "unit": "kN",
        "gives": "axial force of one strut",
        "ratio_low": None,
        "ratio_high": None,
        "verdict": "not_assessed",
        "caution": NOTICE,
    }
    return MemberForce(**{**given, **more})  # type: ignore[arg-type]


def read(text: str) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(text, newline="")))


def test_input_columns_come_first_then_further_ones_then_what_was_worked_out() -> None:
    text = write_members([force()])
    assert text.splitlines()[0].split(",") == [*COLUMNS, "note", "given_factor", *ADDED, "notice"]


def test_minus_100_kn_per_m_at_5_m_is_minus_500_kn_per_strut() -> None:
    # N = 100 kN/m x 5.00 m = 500 kN, compression (by hand)
    (row,) = read(write_members([force()]))
    assert (row["value"], row["factor"], row["member_value"], row["member_unit"]) == ("-100.0", "5.0", "-500.0", "kN")
    assert (row["ratio_low"], row["verdict"], row["caution"]) == ("", "not_assessed", NOTICE)


def test_further_columns_survive_without_becoming_formulas() -> None:
    (row,) = read(write_members([force()]))
    assert row["note"] == "'=HYPERLINK(1)"
    assert row["given_factor"] == "mine"


def test_governing_values_repeat_the_notice() -> None:
    one = Governing(
        member="P1-strut-1",
        gives="axial force",
        sign="-",
        value=-500.0,
        unit="kN",
        section="S1",
        stage="4",
        ratio_low=0.9,
        ratio_high=1.05,
        verdict="holds",
    )
    (row,) = read(write_governing([one]))
    assert (row["member_value"], row["stage"], row["ratio_high"], row["caution"]) == ("-500.0", "4", "1.05", NOTICE)


def test_the_json_says_the_same_under_the_notice() -> None:
    tree = json.loads(members_json([force()]))
    assert tree["notice"] == NOTICE
    assert tree["members"][0]["member_value"] == -500.0
    assert tree["members"][0]["extra"]["factor"] == "mine"


def test_every_row_of_the_member_table_carries_the_notice() -> None:
    head, *rows = csv.reader(write_members([force(), force()]).splitlines())
    assert head[-1] == "notice"
    assert [row[-1] for row in rows] == [NOTICE, NOTICE]
