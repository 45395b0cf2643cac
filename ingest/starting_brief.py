"""A first brief for the engineer: what was found, what was guessed, what is asked, as lines to uncomment."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

from ingest.brief_lines import one_line, quoted
from ingest.errors import InputError
from ingest.matching import match_line
from ingest.members import Column, Load, Pile, Plate, Receptor, Support, Waler, WallPiece
from ingest.model import NOTICE, Site
from ingest.receive import shown

Recorded = WallPiece | Pile | Support | Waler | Plate | Column | Load | Receptor


def write_starting_brief(site: Site, path: str | Path) -> None:
    """Write a brief in which every guess and every question is a commented line with its evidence.

    Args:
        site: The site as read.
        path: Where to write; an existing file is left alone.

    Raises:
        InputError: The file is there already, or its folder is not.
    """
    text = "\n".join(_lines(site)) + "\n"
    path = Path(path)
    try:
        with path.open("x", encoding="utf-8", newline="\n") as stream:
            stream.write(text)
    except FileExistsError as error:
        remedy = "choose another name; a brief is never overwritten"
        raise InputError(shown(path.name), "", "is there already", remedy) from error
    except OSError as error:
        problem = f"cannot be written: {error.strerror or error}"
        raise InputError(shown(path.name), "", problem, "check the folder and its rights") from error


def _lines(site: Site) -> Iterator[str]:
    yield "# Starting brief. Lengths m, forces kN, stresses kPa, angles degrees; plan coordinates world."
    yield f"# {NOTICE}"
    yield "# Take the # off a line to state it; a line left commented changes nothing."
    yield ""
    yield "[site]"
    yield f"name = {quoted(site.name)}"
    yield from _given_or_asked("ground_level", site.ground_level)
    yield ""
    yield "[levels]"
    yield from _given_or_asked("formation", site.formation)
    yield from _given_or_asked("top", site.wall_top)
    yield from _given_or_asked("dig_allowance", site.dig_allowance)
    yield from _given_or_asked("water_retained", site.water_retained)
    yield from _given_or_asked("water_excavated", site.water_excavated)
    yield from _files(site)
    yield from _roles(site)
    yield from _questions(site)
    yield from _assumptions(site)


def _given_or_asked(key: str, value: float | None) -> Iterator[str]:
    yield f"# {key} = nan    # m, not given" if value is None else f"{key} = {value!r}"


def _files(site: Site) -> Iterator[str]:
    for entry in site.inputs:
        if entry.kind == "brief":
            continue
        yield ""
        yield f"# {one_line(entry.file)}: {entry.kind} {one_line(entry.schema_or_version)}, read in {entry.length_unit}"
        yield f"# [files.{quoted(entry.file)}]"
        if entry.kind != "ags":
            yield f"# length_unit = {quoted(entry.length_unit)}"
        yield "# shift = [0.0, 0.0]"


def _roles(site: Site) -> Iterator[str]:
    found: dict[tuple[str, str, str], tuple[int, str, float]] = {}
    for item in _records(site):
        evidence = item.evidence
        if evidence is None or evidence.why.startswith("brief") or not (item.layer or item.name):
            continue
        kind = str(item.kind or "") if isinstance(item, WallPiece | Pile) and evidence.role == "wall" else ""
        key = (match_line(item.layer, item.name, ""), evidence.role, kind)
        count, why, confidence = found.get(key, (0, evidence.why, evidence.confidence))
        found[key] = (count + 1, why, min(confidence, evidence.confidence))
    if found:
        yield ""
        yield "# Roles as found; state the ones that are wrong."
    for (line, role, kind), (count, why, confidence) in sorted(found.items()):
        yield ""
        yield f"# {count} found: {one_line(why)} (confidence {confidence:.2f})"
        yield "# [[roles]]"
        yield f"# {line}"
        yield f'# role = "{role}"'
        if kind:
            yield f'# wall_kind = "{kind}"'


def _records(site: Site) -> Iterator[Recorded]:
    yield from site.walls
    yield from site.piles
    yield from site.supports
    yield from site.walers
    yield from site.plates
    yield from site.columns
    yield from site.loads
    yield from site.receptors


def _questions(site: Site) -> Iterator[str]:
    if site.questions:
        yield ""
        yield "# Questions; the lines below each one settle it."
    for question in site.questions:
        yield ""
        yield f"# {question.id}: {one_line(question.about)}"
        for reading in question.readings:
            yield f"#   {one_line(reading.reading)}: {one_line(reading.evidence)} (confidence {reading.confidence:.2f})"
        for line in question.brief_line.split("\n"):
            yield f"# {one_line(line)}"


def _assumptions(site: Site) -> Iterator[str]:
    if site.assumptions:
        yield ""
        yield "# Assumptions; confirm the ones that hold."
    for assumption in site.assumptions:
        yield ""
        about = f"{assumption.about}: " if assumption.about else ""
        yield f"# {one_line(about + assumption.text)} ({one_line(assumption.basis)})"
        yield "# [[decisions.confirm]]"
        yield f"# assumption = {quoted(assumption.id)}"
        yield '# by = ""'
