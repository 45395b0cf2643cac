"""Materials, strata, stages, limits and decisions: what the brief alone says, checked and put in records."""

from __future__ import annotations

from typing import Literal

from ingest.brief import Brief
from ingest.brief_tables import CutTable
from ingest.concrete import concrete_material
from ingest.members import Material, Point
from ingest.model import Limits, LineDecision, Stage, Stratum
from ingest.notes import Notes
from ingest.register import Moved
from ingest.trail import Source


def build_materials(notes: Notes) -> tuple[Material, ...]:
    """Make the materials; a concrete class gives E by EN 1992-1-1 Table 3.1.

    Raises:
        InputError: For an unknown strength class, with its line.
    """
    made = []
    for number, entry in enumerate(notes.brief.materials):
        if entry.concrete_class is None:
            basis = "brief" if entry.E is not None else ""
            made.append(Material(id=entry.id, kind=entry.kind, E=entry.E, unit_weight=entry.unit_weight, basis=basis))
            continue
        try:
            concrete = concrete_material(entry.id, entry.concrete_class)
        except ValueError as error:
            path = ("materials", number, "concrete_class")
            raise notes.stop(str(error), "correct the class, or give E in kPa instead", *path) from error
        weight = concrete.unit_weight if entry.unit_weight is None else entry.unit_weight
        made.append(Material(id=entry.id, kind="concrete", E=concrete.E, unit_weight=weight, basis=concrete.basis))
    return tuple(made)


def build_strata(brief: Brief) -> tuple[Stratum, ...]:
    """Make the strata in the order of the brief."""
    return tuple(
        Stratum(**dict(entry), sources=(Source(file=brief.file, item=f"strata[{number + 1}]"),))
        for number, entry in enumerate(brief.strata)
    )


def build_stages(brief: Brief) -> tuple[tuple[Stage, ...], str | None]:
    """Make the stages, and the sequence when the brief gives that instead."""
    sequence = next((entry.sequence for entry in brief.stages if entry.sequence), None)
    stages = [dict(entry) for entry in brief.stages if entry.sequence is None]
    for stage in stages:
        del stage["sequence"]
    return tuple(Stage(**stage) for stage in stages), sequence


def build_lines(brief: Brief) -> tuple[LineDecision, ...]:
    """Make the engineer's decisions on cuts, world coordinates."""
    decisions = brief.decisions
    return (
        *(_line("pin", entry) for entry in decisions.pin),
        *(_line("forbid", entry) for entry in decisions.forbid),
        *(_line("move", entry, entry.to) for entry in decisions.move),
    )


def build_limits(brief: Brief) -> Limits:
    """Limits and tolerances: those of the brief, the published defaults for the rest."""
    return Limits(**{name: value for name, value in dict(brief.limits).items() if value is not None})


def start_of(brief: Brief, moved: Moved) -> Point | None:
    """Where chainage starts, local."""
    return None if brief.site.start is None else moved.to_local(brief.site.start)


def _line(
    kind: Literal["pin", "forbid", "move"], entry: CutTable, to: tuple[Point, Point] | None = None
) -> LineDecision:
    return LineDecision(kind=kind, line=entry.line, to=to, by=entry.by, date=entry.date, because=entry.because)
