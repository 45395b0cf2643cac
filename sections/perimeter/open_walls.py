"""Walls that close no ring: which side is dug, by what stands on either side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely

from ingest.members import Point
from ingest.model import Site
from ingest.trail import Question, Reading
from sections.model import Floats
from sections.perimeter.rings import Trace
from sections.perimeter.wall_graph import cross

NEARBY = 80.0
"""Things farther than this from a wall say nothing of its sides, m."""
BENT = 60.0
"""A way that turns by more than this in all closes in on its excavated side, degrees (common practice, no source)."""

CLOSED_IN = 170.0
"""A way that turns by this much in all leaves no doubt, degrees."""


@dataclass(frozen=True, kw_only=True)
class Witness:
    """One thing that tells the sides apart: a point, whether it stands on the excavated side, and its weight."""

    at: Point
    excavated: bool
    weight: float
    what: str


def find_witnesses(site: Site, origin: Point) -> tuple[Witness, ...]:
    """Everything on the plan that tells an excavated side from a retained side."""
    found: list[tuple[Point, bool, float, str]] = []
    for support in site.supports:
        far = (support.far[0], support.far[1])
        found.append((far, support.role != "anchor", 3.0, support.role))
    for plate in site.plates:
        found.append((_middle(plate.outline), True, 2.0 if plate.role == "slab" else 0.5, plate.role))
    found += [(_middle(floor.outline), True, 3.0, "floor") for floor in site.floors if floor.outline]
    found += [(column.centre, True, 0.5, "column") for column in site.columns]
    found += [(pile.centre, True, 0.5, "bearing pile") for pile in site.piles if pile.bearing]
    found += [(_middle(load.points), False, 0.5, "load") for load in site.loads if load.points]
    found += [(_middle(one.points), False, 0.5, "receptor") for one in site.receptors if one.points]
    return tuple(
        Witness(at=(x - origin[0], y - origin[1]), excavated=dug, weight=weight, what=what)
        for (x, y), dug, weight, what in found
    )


def _middle(points: Sequence[Point]) -> Point:
    x, y = np.array(points, dtype=float).mean(axis=0)
    return (float(x), float(y))


def oriented(trace: Trace, witnesses: Sequence[Witness], origin: Point) -> tuple[Trace, Question | None]:
    """The way with its excavated side on the left, and a question where nothing or little says which side that is."""
    points = trace.points
    votes, seen = _votes(points, witnesses)
    bend = _total_turn(points)
    if votes:
        evidence, value = f"the {', the '.join(seen)} beside it", votes
    elif abs(bend) >= BENT:
        evidence, value = f"the wall bends by {abs(bend):.0f} degrees in all, the dig being inside the bend", bend
    else:
        evidence, value = "nothing beside it tells; south or west to north or east as drawn", _northward(points)
    turned = trace if value > 0 else trace.reversed()
    if votes and abs(bend) < BENT or votes * bend > 0 or (not votes and abs(bend) >= CLOSED_IN):
        return turned, None
    return turned, _question(turned, evidence, origin, 0.7 if votes or abs(bend) >= BENT else 0.5)


def _votes(points: Floats, witnesses: Sequence[Witness]) -> tuple[float, list[str]]:
    """Weighted count of witnesses: positive when the left is the excavated side."""
    if not witnesses:
        return 0.0, []
    at = np.array([w.at for w in witnesses])
    apart = shapely.distance(
        np.asarray(shapely.linestrings(np.stack((points[:-1], points[1:]), axis=1)))[:, None],
        np.asarray(shapely.points(at))[None, :],
    )
    near, away = apart.argmin(axis=0), apart.min(axis=0)
    along = points[near + 1] - points[near]
    s = ((at - points[near]) * along).sum(axis=1) / (along**2).sum(axis=1)
    side = np.sign(cross(along, at - points[near]))
    counts = (away <= NEARBY) & (away > 0.05) & (s > -0.5) & (s < 1.5)
    weight = np.array([w.weight * (1 if w.excavated else -1) for w in witnesses])
    return float((weight * side)[counts].sum()), sorted({w.what for w, ok in zip(witnesses, counts, strict=True) if ok})


def _total_turn(points: Floats) -> float:
    step = np.diff(points, axis=0)
    step = step[np.hypot(*step.T) > 1e-6]
    angle = np.arctan2(step[:, 1], step[:, 0])
    turns = (np.diff(angle) + np.pi) % (2 * np.pi) - np.pi
    return float(np.degrees(turns.sum()))


def _northward(points: Floats) -> float:
    dx, dy = points[-1] - points[0]
    return float(dx if abs(dx) >= abs(dy) else dy)


def _question(trace: Trace, evidence: str, origin: Point, confidence: float) -> Question:
    a, b = trace.points[0] + origin, trace.points[-1] + origin
    place = f"from ({a[0]:.2f}, {a[1]:.2f}) to ({b[0]:.2f}, {b[1]:.2f})"
    return Question(
        id="excavated-side",
        about=f"which side of the open wall {place} is dug",
        readings=(
            Reading(reading="the left, walking that way", evidence=evidence, confidence=confidence),
            Reading(reading="the right", evidence="nothing excludes it", confidence=round(1.0 - confidence, 2)),
        ),
        brief_line='[[floors]] match = {layer = "..."}, level = ...  (a floor on the excavated side settles it)',
    )
