"""What was seen while the retaining rings were chosen, in sentences an engineer can check on the plan."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.members import Point
from ingest.model import Site
from ingest.trail import Finding, Question, Reading
from sections.model import Bools
from sections.perimeter.rings import Trace, find_open
from sections.perimeter.wall_graph import WallGraph
from sections.perimeter.wall_lines import WallLine

SAME_WAY = 15.0
"""A wall that goes on within this beyond a gap is the same straight wall, degrees."""


def twin_note(at: Point) -> Finding:
    """Two rings that can only be one wall."""
    return Finding(
        id="", code="wall-drawn-twice", severity="note", where=_place(at),
        text="Two rings lie closer together than a pit could: one wall drawn twice, or a lining. "
             "The one of better evidence (piles, then faces, then lines) is taken.",
    )  # fmt: skip


def gap_notes(ways: Sequence[Trace], origin: Point) -> list[Finding]:
    """Open walls whose two ends are so near each other that a ring was meant."""
    found = []
    for way in ways:
        a, b = way.points[0] + origin, way.points[-1] + origin
        gap = float(np.hypot(*(b - a)))
        if gap <= 0.25 * way.length:
            found.append(Finding(
                id="", code="wall-gap", severity="check", where=f"{_place(a)} to {_place(b)}",
                text=f"{gap:.2f} m between the two ends of the wall, too far to close: read as an open perimeter.",
            ))  # fmt: skip
    return found


def bridge_notes(ways: Sequence[Trace], lines: Sequence[WallLine], limit: float, origin: Point) -> list[Finding]:
    """Gaps in a straight drawn wall that are wider than the limit and were closed all the same."""
    is_row = np.array([len(line.piles) > 0 for line in lines])
    found = []
    for way in ways:
        step = np.roll(way.points, -1, axis=0) - way.points if way.closed else np.diff(way.points, axis=0)
        span = np.hypot(*step.T)
        unit = step / np.maximum(span, 1e-12)[:, None]
        made = (way.graph.part[way.edges] < 0) & (span > limit)
        before, after = np.roll(unit, 1, axis=0), np.roll(unit, -1, axis=0)
        straight = np.minimum((before * unit).sum(axis=1), (after * unit).sum(axis=1)) >= np.cos(np.radians(SAME_WAY))
        line = way.graph.line[way.edges]
        row = is_row[np.roll(line, 1)] | is_row[line] | is_row[np.roll(line, -1)]
        for k in np.flatnonzero(made & straight & ~row).tolist():
            found.append(Finding(
                id="", code="wall-gap", severity="check", where=_place(way.points[k] + 0.5 * step[k] + origin),
                text=f"{span[k]:.2f} m between two pieces of wall in one line, limit {limit:.2f} m. It is taken as "
                     "closed; confirm that the wall goes on.",
            ))  # fmt: skip
    return found


def aside_notes(rest: WallGraph, inside: Bools, wings: Bools, least: float, origin: Point) -> list[Finding]:
    """Retaining walls of some length that are on no perimeter: inside a pit, or running on from its wall."""
    found = []
    for mask, code, text in (
        (inside, "wall-inside-pit", "stands inside a pit without closing a ring"),
        (wings, "wall-runs-on", "runs on from the perimeter without closing a ring"),
    ):
        for way in find_open(rest.pick(mask)):
            if way.length >= least:
                found.append(Finding(
                    id="", code=code, severity="check", where=_place(way.points.mean(axis=0) + origin),
                    text=f"A retaining wall of {way.length:.1f} m {text}. It is not part of the perimeter and was not "
                         "assessed.",
                ))  # fmt: skip
    return found


def shallow_notes(site: Site, lines: Sequence[WallLine], shallow: Bools, origin: Point) -> list[Finding]:
    """Walls that end too high to retain the dig."""
    if not shallow.any():
        return []
    toe = min(line.toe for line, is_shallow in zip(lines, shallow, strict=True) if is_shallow and line.toe is not None)
    return [Finding(
        id="", code="wall-above-formation", severity="note",
        where=_place(lines[int(np.flatnonzero(shallow)[0])].points[0] + origin),
        text=f"{int(shallow.sum())} wall lines end above half the depth of the dig (lowest toe {toe:.2f} m, formation "
             f"{site.formation:.2f} m) and were not taken as retaining.",
    )]  # fmt: skip


def no_ring_note(lines: Sequence[WallLine]) -> Finding:
    """Walls of a building, or of no known kind, that close nothing."""
    return Finding(
        id="", code="no-perimeter", severity="check", where="plan",
        text=f"{len(lines)} wall lines close no ring, none is of a kind that retains ground, and nothing shows a dig.",
    )  # fmt: skip


def inner_ring_question(number: int, at: Point) -> Question:
    """A ring of walls of no known kind within another."""
    return Question(
        id=f"inner-ring-{number}",
        about=f"the closed ring of walls near {_place(at)} inside another",
        readings=(
            Reading(reading="walls of the building in the pit", evidence="no kind of wall is known", confidence=0.7),
            Reading(reading="a deeper pit within the pit", evidence="it is closed and not small", confidence=0.3),
        ),
        brief_line='[[roles]] match = {layer = "..."}, role = "wall", wall_kind = "sheet"',
    )


def _place(at: Sequence[float]) -> str:
    return f"({at[0]:.2f}, {at[1]:.2f})"
