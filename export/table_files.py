"""How a table becomes a file: CSV that no spreadsheet takes for formulas, and a workbook of equal bytes every time."""

from __future__ import annotations

import csv
import io
import zipfile
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

from export.canonical import round_number
from ingest.model import NOTICE

Cell = str | float | int | None
FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")
EPOCH = datetime(1980, 1, 1)
LONGEST_CELL = 32_000
"""A cell of the workbook holds at most 32 767 characters (ECMA-376)."""


@dataclass(frozen=True)
class Sheet:
    """One table: heads carry their units."""

    name: str
    heads: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]


def csv_text(sheet: Sheet) -> str:
    r"""One table as CSV (RFC 4180). A text that a spreadsheet would take for a formula gets a leading apostrophe.

    Example:
        >>> csv_text(Sheet("t", ("name", "width_m"), (("=1+1", 0.5), ("-3", None))))
        "name,width_m\r\n'=1+1,0.5\r\n-3,\r\n"
    """
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow([_csv_cell(head) for head in sheet.heads])
    writer.writerows([[_csv_cell(cell) for cell in row] for row in sheet.rows])
    return out.getvalue()


def _csv_cell(cell: Cell) -> str:
    if cell is None:
        return ""
    if isinstance(cell, str):
        return f"'{cell}" if cell.startswith(FORMULA_STARTS) and not is_number(cell) else cell
    return repr(round_number(float(cell))) if isinstance(cell, float) else str(cell)


def is_number(words: str) -> bool:
    """Whether a text is a plain number, such as a level or an id made of digits.

    Example:
        >>> is_number("-12.5"), is_number("-2+3"), is_number("-inf")
        (True, False, False)
    """
    try:
        value = float(words)
    except ValueError:
        return False
    return value - value == 0 and words == words.strip()


def write_workbook(sheets: Sequence[Sheet], path: Path) -> None:
    """Write the sheets as one workbook: every text a text, every number a number, fixed dates, so equal bytes."""
    import xlsxwriter  # type: ignore[import-untyped]

    options = {"strings_to_formulas": False, "strings_to_urls": False, "strings_to_numbers": False}
    made = io.BytesIO()
    with xlsxwriter.Workbook(made, {**options, "in_memory": True}) as book:
        book.set_properties({"title": "cutworthy tables", "comments": NOTICE, "created": EPOCH})
        head = book.add_format({"bold": True, "text_wrap": True, "valign": "top", "bottom": 1})
        wrap = book.add_format({"text_wrap": True, "valign": "top"})
        for sheet in sheets:
            _fill(book.add_worksheet(sheet.name), sheet, head, wrap)
    path.write_bytes(_sorted_archive(made.getvalue()))


def _sorted_archive(data: bytes) -> bytes:
    """The same ZIP with its members by name and the fixed date."""
    out = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(data)) as old, zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as new:
        for name in sorted(old.namelist()):
            info = zipfile.ZipInfo(name, EPOCH.timetuple()[:6])
            info.compress_type = zipfile.ZIP_DEFLATED
            new.writestr(info, old.read(name))
    return out.getvalue()


def _fill(page: Any, sheet: Sheet, head: Any, wrap: Any) -> None:
    page.set_landscape()
    page.set_paper(9)
    page.fit_to_pages(1, 0)
    page.repeat_rows(0)
    page.freeze_panes(1, 0)
    page.set_footer(f"&L{NOTICE}&R&P / &N")
    for column, name in enumerate(sheet.heads):
        page.write_string(0, column, name, head)
        longest = max((len(str(row[column])) for row in sheet.rows if row[column] is not None), default=0)
        page.set_column(column, column, min(max(len(name) * 0.8, longest, 8), 48))
    for line, row in enumerate(sheet.rows, start=1):
        for column, cell in enumerate(row):
            if isinstance(cell, str):
                page.write_string(line, column, cell[:LONGEST_CELL], wrap)
            elif cell is not None:
                page.write_number(line, column, round_number(float(cell)), wrap)
