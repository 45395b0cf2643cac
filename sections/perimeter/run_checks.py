"""What the runs of a perimeter show that an engineer should look at: gaps in rows, unexplained secant rows."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.members import Pile
from ingest.model import Site
from ingest.trail import Finding
from sections.found import PitShape
from sections.model import Run
from sections.perimeter.pile_walls import bays, find_males, is_cut

GAP = 1.5
"""A bay longer than this many spacings is a gap in the row."""


def check_runs(site: Site, shape: PitShape) -> list[Finding]:
    """Findings on the runs of one pit, in order of chainage."""
    found = []
    for run, members in zip(shape.runs, shape.piles, strict=True):
        piles = [site.piles[i] for i in members]
        if len(piles) > 2:
            found += _gaps(shape, run, piles)
            found += _secant(shape, run, piles)
            found += _unnamed(shape, run, piles)
    return found


def _gaps(shape: PitShape, run: Run, piles: Sequence[Pile]) -> list[Finding]:
    span, straight = bays(piles)
    usual = run.wall.centres
    if usual is None:
        return []
    return [
        Finding(
            id="", code="pile-gap", severity="check",
            where=f"{shape.id}, between {_name(piles[k])} and {_name(piles[k + 1])}",
            text=f"{span[k]:.2f} m between two piles where {usual:.2f} m is usual: a pile may be missing.",
            sources=(*piles[k].sources, *piles[k + 1].sources),
        )
        for k in np.flatnonzero(straight & (span > GAP * usual)).tolist()
    ]  # fmt: skip


def _unnamed(shape: PitShape, run: Run, piles: Sequence[Pile]) -> list[Finding]:
    if run.wall.kind != "king_post" or any(pile.kind or pile.section or pile.bearing is False for pile in piles):
        return []
    return [Finding(
        id="", code="posts-by-place", severity="check", where=_where(shape, run),
        text=f"Nothing says that these {len(piles)} piles are a wall. They stand too far apart for a contiguous one "
             "and are taken as king posts because they close the perimeter.",
    )]  # fmt: skip


def _where(shape: PitShape, run: Run) -> str:
    return f"{shape.id}, ch {run.start:.2f} to {run.to:.2f}"


def _name(pile: Pile) -> str:
    return pile.name or pile.id


def _secant(shape: PitShape, run: Run, piles: Sequence[Pile]) -> list[Finding]:
    if run.wall.kind != "secant" or find_males(piles) is not None:
        return []
    text = (
        "Nothing tells the males of this secant wall from its females: every second pile is taken as a male."
        if is_cut(piles)
        else "The piles of this secant wall do not cut into each other: they are taken as males, without females."
    )
    return [Finding(id="", code="secant-males", severity="check", where=_where(shape, run), text=text)]
