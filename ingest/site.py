"""All files of one excavation -> one Site."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from difflib import get_close_matches
from pathlib import Path
from typing import TypeVar

from ingest.basement import ground_given, sort_building
from ingest.brief import Brief, read_brief
from ingest.build_floors import build_columns, build_floors, build_plates
from ingest.build_ground import build_limits, build_lines, build_materials, build_stages, build_strata, start_of
from ingest.build_loads import build_loads, build_receptors
from ingest.build_supports import build_supports, build_walers
from ingest.build_walls import build_walls
from ingest.errors import InputError
from ingest.guard import READERS, kind_of, read_guarded
from ingest.ledger import make_ledger
from ingest.level_order import note_level_order
from ingest.members import Role
from ingest.missing import note_missing
from ingest.model import InputFile, Site
from ingest.notes import Notes
from ingest.parts import FileParts
from ingest.plausible_size import check_sizes
from ingest.register import Moved, check_registration, lay_files, model_places
from ingest.roles import RoleGiven, find_roles
from ingest.starting_brief import write_starting_brief
from ingest.tie_texts import tie_texts
from ingest.unmatched import note_unmatched

__all__ = ["READERS", "read_site", "site_of", "write_starting_brief"]

Tell = Callable[[str, int, int], None]
Named = TypeVar("Named")


def read_site(
    files: Sequence[str | Path],
    brief_path: str | Path | None = None,
    *,
    skip_unreadable: bool = False,
    read_limit: float | None = None,
    progress: Tell | None = None,
) -> Site:
    """Read all files and the brief into one site.

    Args:
        files: IFC, DXF and AGS files, told apart by content.
        brief_path: The brief, if there is one.
        skip_unreadable: Go on without a file that cannot be read, with a finding.
        read_limit: Seconds one reader may take; None for 60 s and 3 s a MB.
        progress: Called with stage, done, total.

    Returns:
        The site; everything of it in the local frame, with its trail.

    Raises:
        InputError: For a file or brief that cannot be used.
    """
    tell = progress or (lambda stage, done, total: None)
    brief = read_brief(brief_path) if brief_path is not None else Brief()
    paths = [Path(file) for file in files]
    _check_names(paths, brief)
    notes = Notes(brief=brief)
    read: list[FileParts] = []
    for number, path in enumerate(paths):
        tell(f"reading {path.name}", number, len(paths))
        try:
            read.append(_read_one(path, notes, read_limit))
        except InputError as error:
            if not skip_unreadable:
                raise
            notes.see("file-skipped", "check", path.name, f"left out, it cannot be read: {error.problem}")
    tell("finding roles", len(paths), len(paths))
    return site_of(sorted(read, key=lambda file: (file.kind, file.file)), brief, notes)


def site_of(files: Sequence[FileParts], brief: Brief, notes: Notes | None = None) -> Site:
    """Build the site from what the readers took from the files.

    Args:
        files: One entry per file, in any order.
        brief: The engineer's brief.
        notes: Notes already taken while reading.
    """
    notes = notes or Notes(brief=brief)
    for file in files:
        notes.questions += file.questions
        notes.assumptions += file.assumptions
        notes.findings += file.findings
    moved = lay_files(files, brief)
    given = find_roles([part for file in moved.files for part in file.parts], brief)
    given, ground = sort_building(given, moved.files, notes)
    check_registration(moved, given, notes)
    notes.questions += [item.question for item in given if item.question is not None]
    site = _records(given, moved, ground, notes)
    note_missing(site, notes)
    check_sizes(site, notes)
    note_level_order(site, notes)
    note_unmatched([item.part for item in given], site, notes)
    questions, assumptions, findings = notes.numbered()
    return replace(
        site,
        ledger=make_ledger(moved.files, given, notes),
        questions=questions,
        assumptions=assumptions,
        findings=findings,
        not_assessed=tuple(notes.not_assessed),
    )


def _records(given: Sequence[RoleGiven], moved: Moved, ground: float | None, notes: Notes) -> Site:
    brief = notes.brief

    def having(*roles: Role) -> list[RoleGiven]:
        """Parts with one of these roles."""
        return [item for item in given if item.role in roles]

    materials = build_materials(notes)
    tied = tie_texts(given, notes)
    caps = [item for item in having("waler") if item.use == "capping_beam"]
    walers = [item for item in having("waler") if item.use != "capping_beam"]
    walls, piles = build_walls(having("wall", "bearing_pile"), caps, tied, notes)
    supports = build_supports(having("strut", "corner_strut", "raker", "anchor"), walls, piles, materials, tied, notes)
    dug = [item for item in given if item.role == "slab" and item.use == "floor"]
    stages, sequence = build_stages(brief)
    return Site(
        name=brief.site.name,
        date=brief.site.date,
        frame=moved.frame,
        inputs=_inputs(moved, brief),
        start=start_of(brief, moved),
        ground_level=ground_given(brief, ground),
        formation=brief.levels.formation,
        wall_top=brief.levels.top,
        dig_allowance=brief.levels.dig_allowance,
        water_retained=brief.levels.water_retained,
        water_excavated=brief.levels.water_excavated,
        materials=materials,
        walls=_ordered("wall", walls),
        piles=_ordered("pile", piles),
        supports=_ordered("support", supports),
        walers=_ordered("waler", build_walers(walers, supports, materials, notes)),
        plates=_ordered("plate", build_plates([i for i in having("slab", "footing") if i.use != "floor"], notes)),
        columns=_ordered("column", build_columns(having("column"), notes)),
        loads=_ordered("load", build_loads(having("load"), tied, moved, notes)),
        receptors=_ordered("receptor", build_receptors(having("receptor"), moved, notes)),
        boreholes=tuple(sorted((hole for file in moved.files for hole in file.boreholes), key=lambda hole: hole.id)),
        strata=build_strata(brief),
        floors=build_floors(dug, notes),
        stages=stages,
        sequence=sequence,
        lines=build_lines(brief),
        confirmed=tuple(entry.assumption for entry in brief.decisions.confirm),
        limits=build_limits(brief),
        places=model_places(moved),
    )


def _ordered(word: str, records: Sequence[Named]) -> tuple[Named, ...]:
    """Sort by role and place, never by the order of the input, and number."""
    ordered = sorted(records, key=_place)
    return tuple(replace(record, id=f"{word}-{n}") for n, record in enumerate(ordered, 1))  # type: ignore[type-var]


def _place(record: object) -> tuple[object, ...]:
    where = next(
        value
        for name in ("centre", "head", "axis", "outline", "points")
        if (value := getattr(record, name, None)) is not None
    )
    far = getattr(record, "far", ())
    return (
        str(getattr(record, "role", "") or getattr(record, "kind", "") or ""),
        where,
        far,
        tuple((source.file, source.item) for source in record.sources),  # type: ignore[attr-defined]
    )


def _inputs(moved: Moved, brief: Brief) -> tuple[InputFile, ...]:
    rows = [
        InputFile(
            file=file.file,
            sha256=file.sha256,
            kind=file.kind,
            schema_or_version=file.schema_or_version,
            length_unit=file.length_unit,
            registered=moved.registered[file.file],
        )
        for file in moved.files
    ]
    if brief.file:
        rows.append(
            InputFile(file=brief.file, sha256=brief.sha256, kind="brief", schema_or_version="1", length_unit="m")
        )
    return tuple(rows)


def _read_one(path: Path, notes: Notes, read_limit: float | None) -> FileParts:
    entry = notes.brief.files.get(path.name)
    kind = kind_of(path)
    if kind == "ags" and entry is not None and entry.length_unit is not None:
        where = f"{notes.brief.file}, {notes.brief.place('files', path.name, 'length_unit')}"
        notes.see("length-unit", "note", where, "an AGS4 file states its own units; length_unit changes nothing")
    options = {
        "length_unit": entry.length_unit if entry else None,
        "ignore_layers": entry.ignore_layers if entry else (),
    }
    return read_guarded(path, kind, options, read_limit=read_limit)


def _check_names(paths: Sequence[Path], brief: Brief) -> None:
    names = [path.name for path in paths]
    for name in brief.files:
        if name not in names:
            near = get_close_matches(name, names, 1)
            remedy = f'did you mean "{near[0]}"?' if near else f"files of this run: {', '.join(names)}"
            raise InputError(brief.file, brief.place("files", name), f'"{name}" is no file of this run', remedy)
    twice = next((name for name in names if names.count(name) > 1), None)
    if twice is not None:
        raise InputError(twice, "", "two files of this run have the same name", "rename one of them")
