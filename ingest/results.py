"""Results of an analysis that come back as CSV: section, stage, member, quantity, value, unit, and whatever else."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Sequence
from difflib import get_close_matches
from pathlib import Path
from typing import TYPE_CHECKING, cast

from ingest.errors import InputError
from ingest.model import Quantity, ResultRow
from ingest.receive import check_readable, shown

if TYPE_CHECKING:
    from _csv import Reader

COLUMNS = ("section", "stage", "member", "quantity", "value", "unit")
_FORCE = ("kN/m", "kN/rad", "kN")
UNITS: dict[str, tuple[str, ...]] = {
    "N": _FORCE,
    "V": _FORCE,
    "M": ("kNm/m", "kNm/rad", "kNm"),
    "hoop": _FORCE,
    "reaction": (*_FORCE, "kPa"),
    "settlement": ("m", "mm"),
}
"""Units a quantity may come in."""

Problem = tuple[str, str, str]


def read_results(path: str | Path) -> tuple[ResultRow, ...]:
    """Read a table of analysis results.

    Args:
        path: CSV with a header; comma, or semicolon with decimal comma.

    Returns:
        One record per row, in the order of the file; further columns in `extra`.

    Raises:
        InputError: With every faulty row of the file and its line.
    """
    path = Path(path)
    check_readable(path)
    name = shown(path.name)
    table = _table(name, path.read_bytes())
    header = _header(name, table)
    rows: list[ResultRow] = []
    problems: list[Problem] = []
    comma = table.dialect.delimiter == ";"
    try:
        for cells in table:
            if any(cell.strip() for cell in cells):
                row = _row(header, cells, table.line_num, comma)
                if isinstance(row, ResultRow):
                    rows.append(row)
                else:
                    problems.append(row)
    except csv.Error as error:
        problems.append((f"line {table.line_num}", f"is no CSV: {error}", "save the table as CSV again"))
    if problems:
        raise InputError(name, *problems[0], problems[1:])
    if not rows:
        raise InputError(name, "line 2", "holds no rows below its header", "export the results again")
    return tuple(rows)


def _table(name: str, raw: bytes) -> Reader:
    if b"\x00" in raw:
        raise InputError(name, f"byte {raw.index(0)}", "is no text", "save the table as CSV in UTF-8")
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = raw.decode("cp1252", "replace")
    first = text.split("\n", 1)[0]
    delimiter = ";" if first.count(";") > first.count(",") else ","
    return csv.reader(io.StringIO(text, newline=""), delimiter=delimiter, strict=True)


def _header(name: str, table: Reader) -> list[str]:
    try:
        header = [cell.strip() for cell in next(table)]
    except (StopIteration, csv.Error) as error:
        raise InputError(name, "line 1", "has no header", f"the first line must be {','.join(COLUMNS)}") from error
    plain = [cell.lower() for cell in header]
    for column in COLUMNS:
        if column not in plain:
            near = get_close_matches(column, plain, 1)
            remedy = f'rename column "{near[0]}"' if near else f"the first line must name {', '.join(COLUMNS)}"
            raise InputError(name, "line 1", f'column "{column}" is missing', remedy)
        if plain.count(column) > 1:
            raise InputError(name, "line 1", f'column "{column}" stands twice', "keep one of them")
    twice = next((cell for n, cell in enumerate(header) if cell in header[:n]), None)
    if twice is not None:
        raise InputError(name, "line 1", f'column "{twice}" stands twice', "keep one of them, or rename it")
    return [low if low in COLUMNS else cell for low, cell in zip(plain, header, strict=True)]


def _row(header: Sequence[str], cells: Sequence[str], line: int, comma: bool) -> ResultRow | Problem:
    place = f"line {line}"
    if len(cells) != len(header):
        return place, f"has {len(cells)} values for {len(header)} columns", "check separators and quotes"
    values = {key: cell.strip() for key, cell in zip(header, cells, strict=True)}
    blank = next((key for key in COLUMNS if not values[key]), None)
    if blank is not None:
        return place, f"{blank} is blank", f"fill in {blank}"
    quantity = next((known for known in UNITS if known.lower() == values["quantity"].lower()), None)
    if quantity is None:
        near = get_close_matches(values["quantity"], UNITS, 1)
        remedy = f'did you mean "{near[0]}"?' if near else f"use one of {', '.join(UNITS)}"
        return place, f'quantity "{values["quantity"]}" is not known', remedy
    unit = values["unit"].replace(" ", "").replace("kN.m", "kNm").replace("kN·m", "kNm").replace("kN*m", "kNm")
    if unit not in UNITS[quantity]:
        allowed = ", ".join(UNITS[quantity])
        return place, f'unit "{values["unit"]}" does not fit {quantity}', f"give {quantity} in one of {allowed}"
    value = _number(values["value"], comma)
    if value is None:
        return place, f'value "{values["value"]}" {unit} is no finite number', "give a finite number"
    extra = {key: cell for key, cell in zip(header, cells, strict=True) if key not in COLUMNS}
    return ResultRow(
        line=line,
        section=values["section"],
        stage=values["stage"],
        member=values["member"],
        quantity=cast(Quantity, quantity),
        value=value,
        unit=unit,
        extra=extra,
    )


def _number(text: str, comma: bool) -> float | None:
    try:
        value = float(text.replace(",", ".") if comma else text)
    except ValueError:
        return None
    return value if math.isfinite(value) else None
