"""Results that come back: read whole, or every faulty row named with its line."""

from __future__ import annotations

from pathlib import Path

import pytest

from ingest.errors import InputError
from ingest.results import read_results

HEAD = "section,stage,member,quantity,value,unit,run\n"


def written(folder: Path, text: str | bytes) -> Path:
    path = folder / "results.csv"
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    return path


def problems_in(folder: Path, text: str | bytes) -> tuple[tuple[str, str, str], ...]:
    with pytest.raises(InputError) as caught:
        read_results(written(folder, text))
    return caught.value.problems


def test_rows_are_read_with_their_line_and_the_columns_of_others(tmp_path: Path) -> None:
    rows = read_results(
        written(tmp_path, HEAD + 'S1,dig 2,P1-strut-1,N,-150.5,kN/m,"a, b"\n\nS1,dig 2,P1-W,M,80,kN.m/m,c\n')
    )
    assert [(row.line, row.quantity, row.value, row.unit, row.extra) for row in rows] == [
        (2, "N", -150.5, "kN/m", {"run": "a, b"}),
        (4, "M", 80.0, "kNm/m", {"run": "c"}),
    ]


def test_columns_may_stand_in_any_order_and_numbers_may_have_a_decimal_comma(tmp_path: Path) -> None:
    text = "unit;value;quantity;member;stage;section\nmm;12,5;settlement;ground;dig 1;S1\n"
    (row,) = read_results(written(tmp_path, b"\xef\xbb\xbf" + text.encode()))
    assert (row.section, row.value, row.unit) == ("S1", 12.5, "mm")


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ("S1,a,b,N,nan,kN/m,x", ("nan", "finite")),
        ("S1,a,b,N,1e999,kN/m,x", ("1e999", "finite")),
        ("S1,a,b,N,12 kN,kN/m,x", ("12 kN",)),
        ("S1,a,b,Q,12,kN/m,x", ('"Q"',)),
        ("S1,a,b,M,12,kN/m,x", ("kN/m", "M")),
        ("S1,a,b,settlement,12,cm,x", ("cm",)),
        ("S1,a,,N,12,kN,x", ("member is blank",)),
        ("S1,a,b,N,12", ("5 values for 7 columns",)),
    ],
)
def test_a_faulty_row_is_named_with_its_line(tmp_path: Path, row: str, words: tuple[str, ...]) -> None:
    ((place, problem, remedy),) = problems_in(tmp_path, HEAD + "S1,a,b,N,1,kN,x\n" + row + "\n")
    assert place == "line 3"
    assert all(word in problem for word in words), problem
    assert remedy


def test_all_faulty_rows_come_at_once(tmp_path: Path) -> None:
    problems = problems_in(tmp_path, HEAD + "S1,a,b,N,x,kN,\nS1,a,b,N,1,kN,\nS1,a,b,Z,1,kN,\n")
    assert [place for place, _, _ in problems] == ["line 2", "line 4"]


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("section,stage,member,quantity,values,unit\n", '"values"'),
        ("", "empty"),
        (HEAD, "no rows"),
        (HEAD + 'S1,"a,b\n', "CSV"),
        (b"\x00\x01", "no text"),
        ("section,section,stage,member,quantity,value,unit\n", "twice"),
    ],
)
def test_a_table_without_its_columns_is_refused(tmp_path: Path, text: str | bytes, words: str) -> None:
    ((_, problem, remedy),) = problems_in(tmp_path, text)
    assert words in problem + remedy
