"""Tables: formula-safe, units in heads, equal bytes, and read by an independent library."""

from __future__ import annotations

import csv
import io
import zipfile
from dataclasses import replace
from pathlib import Path

import openpyxl
import pytest
from builders_export import HOSTILE, STRUT_EA, Job
from hypothesis import given
from hypothesis import strategies as st

from export.table_files import FORMULA_STARTS, Sheet, csv_text, is_number
from export.tables import write_tables
from ingest.model import NOTICE


def rows_of(path: Path) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(path.read_text(encoding="utf-8"), newline="")))


@given(st.text())
def test_no_cell_starts_a_formula_and_every_text_survives(words: str) -> None:
    text = csv_text(Sheet("t", ("a", "b"), ((words, 1.5),)))
    (_, (cell, number)) = list(csv.reader(io.StringIO(text, newline="")))
    assert is_number(cell) or not cell.startswith(FORMULA_STARTS)
    assert cell.removeprefix("'") == words.removeprefix("'")
    assert number == "1.5"


def test_negative_numbers_stay_numbers() -> None:
    assert csv_text(Sheet("t", ("a", "b"), ((-12.5, "-12.5"),))) == "a,b\r\n-12.5,-12.5\r\n"


def test_members_list_the_strut_there_and_back(first_pit: Job, tmp_path: Path) -> None:
    write_tables(first_pit.proposal, first_pit.definitions, tmp_path)
    there, back, *_ = [row for row in rows_of(tmp_path / "members.csv") if row["member"] == "P1-strut-1"]
    assert (float(there["from_value"]), float(there["factor"]), float(there["to_value"])) == pytest.approx(
        (STRUT_EA, 0.2, STRUT_EA / 5), rel=1e-8
    )
    assert (there["spacing_m"], there["way"], back["way"], back["factor"]) == (
        "5.0",
        "real to section",
        "section to real",
        "5.0",
    )


def test_every_row_carries_the_notice(first_pit: Job, tmp_path: Path) -> None:
    write_tables(first_pit.proposal, first_pit.definitions, tmp_path)
    for name in ("members", "loads", "criteria", "assumptions"):
        rows = rows_of(tmp_path / f"{name}.csv")
        assert rows
        assert {row["notice"] for row in rows} == {NOTICE}


def test_loads_list_every_alternative(first_pit: Job, tmp_path: Path) -> None:
    write_tables(first_pit.proposal, first_pit.definitions, tmp_path)
    given = [(row["handed_over_as"], row["value"]) for row in rows_of(tmp_path / "loads.csv")]
    assert given == [
        ("used in the section", "78.3"),
        ("pressure_kept", "150.0"),
        ("equal_effect", "78.3"),
        ("absent", "0.0"),
    ]


def test_criteria_that_could_not_be_evaluated_have_no_band(first_pit: Job, tmp_path: Path) -> None:
    write_tables(first_pit.proposal, first_pit.definitions, tmp_path)
    blank = [row for row in rows_of(tmp_path / "criteria.csv") if row["assessed"] == "no"]
    assert blank
    assert {(row["ratio_low"], row["ratio_high"]) for row in blank} == {("", "")}


def test_an_assumption_shared_by_sections_is_listed_once_with_both(first_pit: Job, tmp_path: Path) -> None:
    write_tables(first_pit.proposal, first_pit.definitions, tmp_path)
    assert [(row["id"], row["sections"]) for row in rows_of(tmp_path / "assumptions.csv")] == [
        ("A1", "S1, S2"),
        ("A2", "S1, S2"),
    ]


def test_the_workbook_holds_the_same_sheets_as_text_and_numbers(showcase: Job, tmp_path: Path) -> None:
    write_tables(showcase.proposal, showcase.definitions, tmp_path)
    book = openpyxl.load_workbook(tmp_path / "tables.xlsx")
    assert book.sheetnames == ["members", "loads", "criteria", "assumptions"]
    for sheet in book:
        table = rows_of(tmp_path / f"{sheet.title}.csv")
        assert sheet.max_row == len(table) + 1
        assert [cell.value for cell in sheet[1]] == list(table[0])
        assert not [cell for row in sheet.iter_rows() for cell in row if cell.data_type == "f" or cell.hyperlink]
    assumed = [[cell.value for cell in row] for row in book["assumptions"].iter_rows(min_row=2)]
    assert assumed[2][3] == HOSTILE
    assert assumed[2][5] == "=1+1"
    assert isinstance(book["members"]["N2"].value, int | float)


def test_a_text_longer_than_a_cell_holds_is_cut_in_the_workbook_only(first_pit: Job, tmp_path: Path) -> None:
    long = replace(first_pit.proposal.assumptions[0], text="x" * 40_000)
    proposal = replace(first_pit.proposal, assumptions=(long,))
    write_tables(proposal, (), tmp_path)
    assert len(rows_of(tmp_path / "assumptions.csv")[0]["text"]) == 40_000
    assert len(openpyxl.load_workbook(tmp_path / "tables.xlsx")["assumptions"]["E2"].value) == 32_000


def test_the_workbook_has_fixed_dates_and_equal_bytes(first_pit: Job, tmp_path: Path) -> None:
    (tmp_path / "a").mkdir()
    (tmp_path / "b").mkdir()
    for name in ("a", "b"):
        write_tables(first_pit.proposal, first_pit.definitions, tmp_path / name)
    book = tmp_path / "a" / "tables.xlsx"
    assert book.read_bytes() == (tmp_path / "b" / "tables.xlsx").read_bytes()
    with zipfile.ZipFile(book) as archive:
        assert {info.date_time[:3] for info in archive.infolist()} == {(1980, 1, 1)}
        assert b"1980-01-01" in archive.read("docProps/core.xml")
