"""What each command does: from parsed options to an exit code and the text for standard output."""

from __future__ import annotations

import argparse
import json
import os
from collections.abc import Sequence
from contextlib import AbstractContextManager
from math import isfinite
from pathlib import Path
from typing import TYPE_CHECKING

from ingest.errors import InputError
from ingest.members import Point
from ingest.model import Site

if TYPE_CHECKING:
    from export.progress import Tell

Answer = tuple[int, str]
FARTHEST = 1e8
"""m; no coordinate of a projected system lies farther out, and the brief takes none that does."""


def run_inspect(options: argparse.Namespace) -> Answer:
    """Read the files and tell what was found, what is missing and what is in doubt."""
    from export.inventory import describe, describe_json
    from ingest.site import write_starting_brief
    from sections.pit.find import find_pits

    site = _read(options)
    pits = find_pits(site)
    if options.write_brief:
        _make_folder(Path(options.write_brief))
        write_starting_brief(site, Path(options.write_brief))
    if options.json:
        return 0, json.dumps(describe_json(site, pits), indent=2, ensure_ascii=False)
    return 0, "" if options.quiet else describe(site, pits)


def run_propose(options: argparse.Namespace) -> Answer:
    """Do the main job and write the folder; 1 when no section could be written."""
    from export.folder import check_folder
    from export.inventory import summarise, summarise_json
    from export.writer import write_all
    from sections.propose import propose

    folder = Path(options.out)
    check_folder(folder)
    site = _read_to_judge(options)
    with _progress(options) as tell:
        proposal, definitions = propose(site, progress=tell)
        tell("write", 0, 1)
        written = write_all(proposal, definitions, site, folder)
    code = 0 if definitions else 1
    if options.json:
        return code, json.dumps(summarise_json(proposal, folder, written), indent=2, ensure_ascii=False)
    return code, "" if options.quiet else summarise(proposal, folder)


def run_judge(options: argparse.Namespace) -> Answer:
    """Judge an engineer's own line."""
    from export.inventory import describe_line, line_json
    from sections.verdicts.judge_line import judge_line

    line = _line(options.line)
    site = _read_to_judge(options)
    judged = judge_line(site, line)
    if options.json:
        return 0, json.dumps(line_json(judged), indent=2, ensure_ascii=False)
    return 0, "" if options.quiet else describe_line(judged, site.limits.governing)


def _line(text: str) -> tuple[Point, Point]:
    parts = text.split(",")
    try:
        x1, y1, x2, y2 = (float(part) for part in parts)
    except ValueError:
        remedy = "give four numbers in world metres: --line x1,y1,x2,y2"
        raise InputError("", f"--line {text}", "is not four numbers", remedy) from None
    if not all(isfinite(value) and abs(value) <= FARTHEST for value in (x1, y1, x2, y2)) or (x1, y1) == (x2, y2):
        raise InputError("", f"--line {text}", "is no line", f"give two points in world metres, within {FARTHEST:g}")
    return (x1, y1), (x2, y2)


def run_members(options: argparse.Namespace) -> Answer:
    """Turn results of sections back into member forces."""
    from export.member_table import members_json, write_governing, write_members
    from export.section_json import read_section
    from ingest.results import read_results
    from sections.section.members import find_governing, member_actions

    definitions = [read_section(Path(name)) for name in options.sections]
    rows = read_results(Path(options.results))
    try:
        forces = member_actions(definitions, rows)
    except InputError as error:
        raise InputError(options.results, error.place, error.problem, error.remedy, error.others) from None
    if options.json:
        return 0, members_json(forces)
    text = write_members(forces)
    if not options.out:
        return 0, text.rstrip("\n")
    target = Path(options.out)
    governing = target.with_name(target.name + ".governing.csv")
    _spare_inputs((target, governing), [Path(name) for name in (*options.sections, options.results)])
    _make_folder(target)
    _write(target, text)
    _write(governing, write_governing(find_governing(forces)))
    return 0, "" if options.quiet else f"{target}: {len(forces)} member values\n{governing}: governing values"


def _spare_inputs(targets: Sequence[Path], inputs: Sequence[Path]) -> None:
    taken = {os.path.realpath(given) for given in inputs}
    for target in targets:
        if os.path.realpath(target) in taken:
            raise InputError(str(target), "", "is a file this run reads from", "choose another name for --out")


def _make_folder(target: Path) -> None:
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise InputError(
            str(target), "", f"its folder cannot be made: {error.strerror}", "name a folder you may write to"
        ) from None


def _write(target: Path, text: str) -> None:
    try:
        target.write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise InputError(str(target), "", f"cannot be written: {error.strerror}", "name a file you may write") from None


def run_schema(options: argparse.Namespace) -> Answer:
    """Print one published schema, or their names."""
    from export.schema import SCHEMAS, read_schema

    if not options.name:
        return 0, "\n".join(SCHEMAS)
    if options.name not in SCHEMAS:
        raise InputError("", f"schema {options.name}", "is not known", f"name one of: {', '.join(SCHEMAS)}")
    return 0, read_schema(options.name)


def _read_to_judge(options: argparse.Namespace) -> Site:
    """Read the files; a finding that stops the run ends it here, while `inspect` still shows everything."""
    site = _read(options)
    for finding in site.findings:
        if finding.severity == "stop":
            raise InputError(
                finding.where, "", finding.text, "see the questions of `cutworthy inspect`, answer in the brief"
            )
    return site


def _read(options: argparse.Namespace) -> Site:
    from ingest.site import read_site

    brief = Path(options.brief) if options.brief else None
    with _progress(options) as tell:
        return read_site(
            [Path(name) for name in options.files],
            brief,
            skip_unreadable=options.skip_unreadable,
            read_limit=options.read_limit,
            progress=tell,
        )


def _progress(options: argparse.Namespace) -> AbstractContextManager[Tell]:
    from export.progress import show_progress

    return show_progress(quiet=options.quiet or options.json)
