"""Point loads inside the pit, such as columns on the raft: rows of them across the cut, spread over their spacing."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.members import Load
from ingest.model import Site
from ingest.trail import Finding
from sections.definition import Alternative, LoadValue, SectionLoad
from sections.model import Floats
from sections.section.cut import Cut

IN_LINE = 0.3
"""Loads whose places along the cut differ by less than this stand in one row across it, m (judgement)."""
NEAR = 8.0
"""Loads farther from the plane of the cut than this say nothing of it, nor stand loads farther apart in a row, m
(judgement)."""


@dataclass(frozen=True, kw_only=True)
class LoadRow:
    """Like point loads in one row across the cut; `spacing` None for one that stands alone near the cut."""

    id: str
    load: Load
    x: float
    spacing: float | None


def inside_rows(site: Site, cut: Cut) -> tuple[LoadRow, ...]:
    """Rows of point loads inside the pit near a plane-strain cut, each known by its member nearest to the plane."""
    found = cut.walls[0].found
    within = {load.id for load in found.pit.loads if load.within_pit and load.kind == "point"}
    names = sorted(within & set(found.loads))
    loads = [site.loads[found.loads[name]] for name in names]
    if not loads:
        return ()
    spots = [load.points[0] for load in loads]
    x, y = cut.x_of(spots), cut.y_of(spots)
    low, high = cut.pit_interval()
    near = np.flatnonzero((x > low) & (x < high) & (np.abs(y) <= NEAR))
    rows = []
    for row in _rows(x, loads, near.tolist()):
        nearest = min(row, key=lambda i: (abs(y[i]), names[i]))
        rows.append(LoadRow(id=names[nearest], load=loads[nearest], x=float(np.mean(x[row])), spacing=_spacing(y[row])))
    return tuple(rows)


def _rows(x: Floats, loads: Sequence[Load], near: list[int]) -> list[list[int]]:
    rows: list[list[int]] = []
    for i in sorted(near, key=lambda i: (loads[i].value or 0.0, x[i])):
        last = rows[-1][-1] if rows else None
        if last is not None and loads[last].value == loads[i].value and x[i] - x[last] <= IN_LINE:
            rows[-1].append(i)
        else:
            rows.append([i])
    return rows


def _spacing(y: Floats) -> float | None:
    gaps = np.diff(np.sort(y))
    gaps = gaps[gaps > 0.05]
    spacing = float(np.median(gaps)) if len(gaps) else np.inf
    return spacing if spacing <= NEAR + IN_LINE else None


def row_load(row: LoadRow) -> tuple[SectionLoad, Finding | None]:
    """The section's load of one row: the load of one member over the spacing, with what that keeps.

    One that stands alone has no spacing: it is listed without a value, and the finding says so.
    """
    load, value = row.load, None
    if load.value is not None and row.spacing is not None:
        value = load.value / row.spacing
    level = 0.0 if load.level is None else load.level
    made = SectionLoad(
        id=row.id,
        kind="point",
        direction="down",
        at=((row.x, level),),
        real=LoadValue(value=load.value, unit="kN"),
        section=LoadValue(value=value, unit="kN/m"),
        alternatives=() if value is None else _alternatives(value),
        sources=load.sources,
    )
    return made, None if value is not None else _unknown(row)


def _alternatives(value: float) -> tuple[Alternative, ...]:
    return (
        Alternative(
            name="total_kept", value=value, unit="kN/m", keeps="the load of the row per metre along the wall",
            loses="the peak under each column and the raft's bending between them",
        ),
        Alternative(name="absent", value=0.0, unit="kN/m", keeps="the ground unloaded by the dig", loses="the load"),
    )  # fmt: skip


def _unknown(row: LoadRow) -> Finding:
    lacks = "its value is not given" if row.load.value is None else "it stands in no row across the cut"
    return Finding(
        id=f"{row.id}-load",
        code="load_not_assessed",
        severity="check",
        where=row.id,
        text=f"point load {row.id} inside the pit: {lacks}, so no load per metre stands for it",
        sources=row.load.sources,
    )
