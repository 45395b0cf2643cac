"""Demands of the folded wall and of its twin, facet by facet, and their ratio over construction stages."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from sections.model import Bools, Floats, Ints
from sections.screening.hermite import moments
from sections.screening.solve import Answer
from sections.screening.twin import TwinAnswer
from sections.screening.wall import FoldedWall

FLOOR_OF_MOMENT = 0.25
"""A face moment is taken against at least this share of the section's largest: below it a ratio means nothing."""
NAMES = ("wall_deflection", "wall_moment_excavated_face", "wall_moment_retained_face", "support_force")


@dataclass(frozen=True)
class Demands:
    """Demands at every facet (ns,), and per support row (ns, rows) the force per metre of wall; nan where no row."""

    deflection: Floats
    excavated: Floats
    retained: Floats
    support: Floats


def wall_demands(
    wall: FoldedWall,
    answer: Answer,
    support: Floats,
    smooth: Callable[[Floats], Floats] | None = None,
    rows: Bools | None = None,
) -> Demands:
    """Demands of the three-dimensional answer at the middle of each facet.

    Args:
        wall, answer: The wall and how it moves.
        support: (ns, rows) kN per metre of wall.
        smooth: Mean over one bay of supports along the wall, of (ns, nz) values. The moment on the retained face peaks
            at the heads of supports: it is averaged at each depth before the largest is taken, so that supports at an
            even spacing alone make no difference to 2D.
        rows: (ns,) True for rows of piles, whose movement and moment on the excavated face are such means too.
    """
    # A cubic between columns: its middle is the mean of its ends plus h/8, its own mean h/12, of the change of turn.
    movement, tension = _profiles(wall, answer, 1 / 8)
    mean_movement, mean_tension = _profiles(wall, answer, 1 / 12)
    bay = smooth or (lambda values: values)
    mean_tension = bay(mean_tension)
    if rows is not None and np.any(rows):
        movement = np.where(rows[:, None], bay(mean_movement), movement)
        tension = np.where(rows[:, None], mean_tension, tension)
    return Demands(_largest(movement), _largest(tension), _largest(-mean_tension), support)


def _profiles(wall: FoldedWall, answer: Answer, share: float) -> tuple[Floats, Floats]:
    """Deflection and moment down each facet (ns, nz): mean of its ends plus a share of h times the change of turn."""
    ends, normals, length = wall.ends, wall.normals, np.hypot(*wall.chords.T)
    w = [np.einsum("sd,sdz->sz", normals, answer.value[ends[:, i], :2]) for i in (0, 1)]
    slope = [np.einsum("sd,sdz->sz", normals, answer.slope[ends[:, i], :2]) for i in (0, 1)]
    by = share * length[:, None]
    profile = (w[0] + w[1]) / 2 + by * (answer.value[ends[:, 0], 2] - answer.value[ends[:, 1], 2])
    steep = (slope[0] + slope[1]) / 2 + by * (answer.slope[ends[:, 0], 2] - answer.slope[ends[:, 1], 2])
    return profile, moments(wall.z, profile, steep, np.where(wall.on, wall.Dv[:, None], 0.0))


def twin_demands(groups: Ints, answers: Sequence[TwinAnswer], rows: Sequence[Sequence[int]], count: int) -> Demands:
    """Demands of the twins laid out along the facets.

    Args:
        groups: (ns,) which twin each facet has.
        answers: One per group. rows: Per group the support row of each prop. count: Number of rows.
    """
    per = {
        "deflection": np.array([_largest(a.w) for a in answers]),
        "excavated": np.array([_largest(a.M) for a in answers]),
        "retained": np.array([_largest(-a.M) for a in answers]),
    }
    support = np.full((len(answers), count), np.nan)
    for g, (twin, which) in enumerate(zip(answers, rows, strict=True)):
        support[g, list(which)] = twin.force
    return Demands(per["deflection"][groups], per["excavated"][groups], per["retained"][groups], support[groups])


def _largest(values: Floats) -> Floats:
    return np.asarray(np.maximum(values.max(axis=-1), 0.0))


def over_stages(stages: Sequence[Demands]) -> tuple[Demands, dict[str, Ints]]:
    """Largest of each demand over stages, and the stage it comes from by output name."""
    out, where = {}, {}
    for name, key in zip(NAMES, ("deflection", "excavated", "retained", "support"), strict=True):
        stack = np.array([getattr(stage, key) for stage in stages])
        known = np.where(np.isnan(stack), -1.0, stack)
        out[key] = np.where(np.all(np.isnan(stack), axis=0), np.nan, known.max(axis=0))
        where[name] = known.max(axis=2, initial=-1.0).argmax(axis=0) if key == "support" else known.argmax(axis=0)
    return Demands(**out), where


def ratios(real: Demands, flat: Demands) -> Floats:
    """(ns, 4) real over flat for `NAMES`, both over stages; nan where the flat demand is nothing."""
    floor = FLOOR_OF_MOMENT * np.maximum(flat.excavated, flat.retained)
    return np.column_stack(
        [
            _over(real.deflection, flat.deflection),
            _over(real.excavated, np.maximum(flat.excavated, floor)),
            _over(real.retained, np.maximum(flat.retained, floor)),
            _support_ratio(real.support, flat.support),
        ]
    )


def _support_ratio(real: Floats, flat: Floats) -> Floats:
    """Worst row at each facet; a row is taken against at least a quarter of the largest row of the section."""
    if flat.shape[1] == 0:
        return np.full(len(flat), np.nan)
    known = np.where(np.isnan(flat), 0.0, flat)
    largest = known.max(axis=1, keepdims=True)
    each = np.where(np.isnan(flat) | np.isnan(real), -np.inf, _over(real, np.maximum(known, FLOOR_OF_MOMENT * largest)))
    worst = np.where(np.isnan(each), -np.inf, each).max(axis=1)
    return np.where(np.isfinite(worst), worst, np.nan)


def _over(real: Floats, flat: Floats) -> Floats:
    return np.asarray(np.divide(real, flat, out=np.full(np.shape(real), np.nan), where=flat > 1e-12))
