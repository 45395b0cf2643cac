"""The engineer's brief (TOML): what the files do not say, and what the engineer overrides or decides."""

from __future__ import annotations

import hashlib
import tomllib
from pathlib import Path
from typing import Any

from pydantic import PrivateAttr, ValidationError

from ingest.brief_lines import KeyPath, find_lines
from ingest.brief_problems import place_of, problems_of
from ingest.brief_tables import (
    DecisionTables,
    FileTable,
    FloorTable,
    LevelTable,
    LimitTable,
    LoadTable,
    MaterialTable,
    ReceptorTable,
    RoleTable,
    SiteTable,
    StageTable,
    StratumTable,
    SupportTable,
    Table,
    WallTable,
)
from ingest.errors import InputError
from ingest.receive import refuse_device


class Brief(Table):
    """The whole brief. `file`, `sha256` and `line_of` tell where it came from."""

    site: SiteTable = SiteTable()
    files: dict[str, FileTable] = {}
    roles: tuple[RoleTable, ...] = ()
    levels: LevelTable = LevelTable()
    floors: tuple[FloorTable, ...] = ()
    strata: tuple[StratumTable, ...] = ()
    materials: tuple[MaterialTable, ...] = ()
    walls: tuple[WallTable, ...] = ()
    supports: tuple[SupportTable, ...] = ()
    loads: tuple[LoadTable, ...] = ()
    receptors: tuple[ReceptorTable, ...] = ()
    stages: tuple[StageTable, ...] = ()
    decisions: DecisionTables = DecisionTables()
    limits: LimitTable = LimitTable()

    _file: str = PrivateAttr("")
    _sha256: str = PrivateAttr("")
    _lines: dict[KeyPath, int] = PrivateAttr(default_factory=dict)

    @property
    def file(self) -> str:
        """Name of the file, "" for an empty brief."""
        return self._file

    @property
    def sha256(self) -> str:
        """Digest of the file's bytes."""
        return self._sha256

    def stamp(self, file: str, sha256: str, lines: dict[KeyPath, int]) -> Brief:
        """Remember the file and its lines; called once by the reader."""
        self._file, self._sha256, self._lines = file, sha256, lines
        return self

    def place(self, *path: str | int) -> str:
        """Name the place of a key in words an editor can find: "line 12, walls[1].toe"."""
        return place_of(self._lines, path)


def read_brief(path: str | Path) -> Brief:
    """Read a brief.

    Args:
        path: The TOML file.

    Returns:
        The brief; keys not given are None or empty.

    Raises:
        InputError: With every problem of the file at once, each with its line.
    """
    path = Path(path)
    try:
        refuse_device(path)
        raw = path.read_bytes()
    except OSError as error:
        reason = error.strerror or "it cannot be opened"
        raise InputError(path.name, "", f"cannot be read: {reason}", "check the path and the permissions") from error
    text, data = _parse(path.name, raw)
    lines = find_lines(text)
    try:
        brief = Brief.model_validate(_as_tuples(data))
    except ValidationError as error:
        problems = problems_of(error, data, lines, Brief)
        raise InputError(path.name, *problems[0], problems[1:]) from error
    brief.stamp(path.name, hashlib.sha256(raw).hexdigest(), lines)
    problems = _cross_check(brief)
    if problems:
        raise InputError(path.name, *problems[0], problems[1:])
    return brief


def _parse(name: str, raw: bytes) -> tuple[str, dict[str, Any]]:
    try:
        text = raw.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        remedy = "save the brief as UTF-8 text"
        raise InputError(name, f"line {line}, byte {error.start}", "is not UTF-8 text", remedy) from error
    try:
        return text, tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        what, _, where = str(error).rpartition(" (at ")
        place = where.rstrip(")").replace(" column", " column") if what else ""
        problem = f"is no valid TOML: {what or error}"
        raise InputError(name, place, problem, "texts need quotes, numbers none, every table its brackets") from error
    except (RecursionError, ValueError) as error:
        what = "nested too deeply" if isinstance(error, RecursionError) else "a number too long to be one"
        raise InputError(name, "", f"is no valid TOML: {what}", "write it as the README shows") from None


def _as_tuples(value: Any) -> Any:
    if isinstance(value, dict):
        return {key: _as_tuples(item) for key, item in value.items()}
    return tuple(_as_tuples(item) for item in value) if isinstance(value, list) else value


def _cross_check(brief: Brief) -> list[tuple[str, str, str]]:
    known = [material.id for material in brief.materials]
    found = []
    for number, name in enumerate(known):
        if name in known[:number]:
            problem = f'material id "{name}" is given twice'
            found.append((brief.place("materials", number, "id"), problem, "give each material its own id"))
    users = [("walls", n, wall.material) for n, wall in enumerate(brief.walls)]
    users += [("supports", n, support.material) for n, support in enumerate(brief.supports)]
    for table, number, used in users:
        if used is not None and used not in known:
            remedy = f'add [[materials]] with id = "{used}", or use one of: {", ".join(known) or "none given yet"}'
            found.append((brief.place(table, number, "material"), f'material "{used}" is not in [[materials]]', remedy))
    ground, formation = brief.site.ground_level, brief.levels.formation
    if ground is not None and formation is not None and formation >= ground:
        problem = f"formation {formation:g} m is not below the ground level {ground:g} m: nothing is dug"
        found.append((brief.place("levels", "formation"), problem, "correct formation or [site] ground_level"))
    return found
