"""The rows of an AGS4 file by group, with everything noted that does not keep to the format."""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Iterator
from dataclasses import dataclass, field

from ingest.errors import InputError
from ingest.units import metres_per

AGAIN = "export the data again as AGS4"
LEAST_WHOLE = 0.9
"""Share of lines that must be whole for a file to be read at all (judgement)."""
_NO_NUMBER = re.compile(r"^[+-]?(?:nan|inf|infinity)$", re.I)


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One DATA row: line in the file, values by heading."""

    line: int
    values: dict[str, str]


@dataclass(slots=True, kw_only=True)
class Group:
    """One group; groups of one name are laid together."""

    name: str
    units: dict[str, str] = field(default_factory=dict)
    rows: list[Row] = field(default_factory=list)


@dataclass(slots=True, kw_only=True)
class Rows:
    """All groups of a file, the count of DATA rows, and what was lost or set right."""

    file: str
    groups: dict[str, Group] = field(default_factory=dict)
    entities: int = 0
    stray: int = 0
    losses: list[str] = field(default_factory=list)

    def group(self, name: str) -> Group:
        """The group, an empty one when the file has none."""
        return self.groups.get(name) or Group(name=name)

    def number(self, row: Row, heading: str, group: str) -> float | None:
        """A value in metres or as it stands; None when blank or no number (noted).

        Raises:
            InputError: For nan, infinite or absurd values: such a file is damaged.
        """
        text = row.values.get(heading, "").strip()
        if not text:
            return None
        try:
            value = float(text.replace(",", ".") if text.count(",") == 1 and "." not in text else text)
        except ValueError:
            self.losses.append(f'line {row.line}: {heading} "{text[:30]}" is no number')
            return None
        if not math.isfinite(value) or _NO_NUMBER.match(text) or abs(value) > 1e8:
            problem = f"{heading} = {text[:30]} is no place on a site; allowed is a finite number up to 1e8"
            raise InputError(self.file, f"line {row.line}", problem, AGAIN)
        return value * self._scale(group, heading)

    def _scale(self, group: str, heading: str) -> float:
        unit = self.group(group).units.get(heading, "").strip()
        if unit in ("", "m"):
            return 1.0
        try:
            return metres_per(unit)
        except ValueError:
            self._note_once(f'unit "{unit}" of {heading} is not known; taken as m')
            return 1.0

    def _note_once(self, text: str) -> None:
        if text not in self.losses:
            self.losses.append(text)


def read_rows(file: str, raw: bytes) -> Rows:
    """Split an AGS4 file into groups and rows.

    Raises:
        InputError: AGS3, no group at all, a file cut off in the middle of a row, or mostly broken lines.
    """
    rows = Rows(file=file)
    text = _decode(file, raw, rows)
    lines = text.splitlines()
    broken = 0
    state = _State()
    for number, line in enumerate(lines, 1):
        if not line.strip():
            continue
        cells = _cells(line)
        if cells is None:
            broken += 1
            rows.losses.append(f"line {number}: not a row of quoted values; left out")
        else:
            _take(cells, number, rows, state)
    _check_whole(file, lines, broken, rows, state)
    return rows


@dataclass(slots=True)
class _State:
    group: Group | None = None
    headings: list[str] = field(default_factory=list)


def _decode(file: str, raw: bytes, rows: Rows) -> str:
    if b"\x00" in raw:
        at = raw.index(b"\x00")
        raise InputError(file, f"byte {at}", "holds zero bytes; AGS4 is plain text", AGAIN)
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = raw.decode("cp1252", "replace")
        if "\N{REPLACEMENT CHARACTER}" in text:
            text = raw.decode("latin-1")
        return text


def _cells(line: str) -> list[str] | None:
    if any(ord(c) < 32 and c != "\t" for c in line):
        return None
    try:
        cells = next(csv.reader([line], strict=True))
    except (csv.Error, StopIteration):
        return None
    quoted = line.lstrip().startswith('"') and line.rstrip().endswith('"')
    return cells if quoted and (len(cells) > 1 or cells[0].startswith("*")) else None


def _take(cells: list[str], number: int, rows: Rows, state: _State) -> None:
    kind = cells[0].strip()
    if kind == "GROUP":
        _open(cells[1].strip(), number, rows, state)
    elif kind == "HEADING":
        state.headings = _headings(cells[1:], number, rows)
    elif kind == "DATA":
        rows.entities += 1
        _data(cells[1:], number, rows, state)
    elif kind == "UNIT" and state.group is not None:
        state.group.units.update(zip(state.headings, cells[1:], strict=False))
    elif kind.startswith("*"):
        raise InputError(rows.file, f"line {number}", "is AGS 3; only AGS 4 is read", AGAIN)
    elif kind not in ("TYPE", "UNIT"):
        rows.losses.append(f'line {number}: unknown kind of row "{kind[:20]}"; left out')


def _open(name: str, number: int, rows: Rows, state: _State) -> None:
    if name in rows.groups:
        rows.losses.append(f"line {number}: group {name} stands twice; its rows are laid together")
    state.group = rows.groups.setdefault(name, Group(name=name))
    state.headings = []


def _headings(cells: list[str], number: int, rows: Rows) -> list[str]:
    headings = [cell.strip() for cell in cells]
    for name in dict.fromkeys(headings):
        if name and headings.count(name) > 1:
            rows.losses.append(f"line {number}: heading {name} stands twice; the first is read")
    return headings


def _data(cells: list[str], number: int, rows: Rows, state: _State) -> None:
    if state.group is None or not state.headings:
        rows.stray += 1
        rows.losses.append(f"line {number}: data without group or heading; left out")
        return
    if len(cells) != len(state.headings):
        rows.losses.append(
            f"line {number}: {len(cells)} values for {len(state.headings)} headings of {state.group.name}; "
            + ("the missing ones are blank" if len(cells) < len(state.headings) else "the extra ones are left out")
        )
    values: dict[str, str] = {}
    for heading, cell in zip(state.headings, cells, strict=False):
        values.setdefault(heading, cell)
    state.group.rows.append(Row(line=number, values=values))


def _check_whole(file: str, lines: list[str], broken: int, rows: Rows, state: _State) -> None:
    if not rows.groups:
        raise InputError(file, "line 1", "holds no AGS4 group", AGAIN)
    filled = [line for line in lines if line.strip()]
    if broken and _cells(filled[-1]) is None:
        problem = "ends in the middle of a row: the file is cut off"
        raise InputError(file, f"line {len(lines)}", problem, "copy or export the file again")
    if broken > (1 - LEAST_WHOLE) * len(filled):
        problem = f"{broken} of {len(filled)} lines are no rows of quoted values: the file is damaged"
        raise InputError(file, "line 1", problem, AGAIN)
    last = state.group
    if last is not None and not state.headings:
        raise InputError(file, f"line {len(lines)}", f"ends after the start of group {last.name}: cut off", AGAIN)
    missing = [name for name in ("PROJ", "TRAN", "UNIT", "TYPE") if name not in rows.groups]
    if missing:
        rows.losses.append(f"no group {', '.join(missing)}, which every AGS4 file has; the file may be cut off")


def each(group: Group) -> Iterator[Row]:
    """Rows of a group that name a hole."""
    return (row for row in group.rows if row.values.get("LOCA_ID", "").strip())
