"""Rows of supports that end where the dig does not go down to them: beyond a step of the floor they would be buried."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.model import Limits
from sections.found import PitShape, SupportRow
from sections.model import Bools, Floats, Step
from sections.pit.floors import FloorPlan, floor_at_wall

BEYOND = 0.25
"""How far beyond a step the floor is looked up, m."""


def end_at_steps(
    rows: Sequence[SupportRow], plan: FloorPlan, shape: PitShape, steps: Sequence[Step], limits: Limits
) -> tuple[SupportRow, ...]:
    """Let the outermost support of a row stand for the wall up to a floor step beyond which the row is buried.

    Args:
        rows: With tributary widths up to the end of the wall.
        plan: Floors of the pit.
        shape: Its perimeter.
        steps: Steps of its floor.
        limits: Tolerances of levels and spacings.
    """
    at = np.array([place for step in steps for place in step.at])
    if len(at) == 0:
        return tuple(rows)
    half = 0.5 * max((run.wall.thickness or run.wall.diameter or 0.0 for run in shape.runs), default=0.0)
    beyond = np.concatenate([at - BEYOND, at + BEYOND])
    floors = floor_at_wall(plan, shape, beyond, np.full(len(beyond), half)).reshape(2, -1)
    return tuple(_trimmed(row, shape, at, floors, limits) for row in rows)


def _trimmed(row: SupportRow, shape: PitShape, at: Floats, floors: Floats, limits: Limits) -> SupportRow:
    if row.member.level is None:
        return row
    buried = floors > row.member.level + limits.level
    head = _widths(row.head_at, row.tributary_head, shape, at, buried)
    far = _widths(row.far_at, row.tributary_far, shape, at, buried)
    uneven = len(head) > 1 and float(np.max(head)) > (1.0 + limits.spacing_ratio) * float(np.min(head))
    spread = (float(np.min(head)), float(np.max(head))) if uneven else None
    return replace(row, member=replace(row.member, spacing_range=spread), tributary_head=head, tributary_far=far)


def _widths(places: Floats, widths: Floats, shape: PitShape, at: Floats, buried: Bools) -> Floats:
    """Widths with the end shares cut at the steps; `buried` (2, k) says so before and behind each step."""
    out = widths.copy()
    met = np.flatnonzero(~np.isnan(places))
    for i in met:
        for side, way in enumerate((-1.0, 1.0)):
            others = _ahead(places[met], places[i], way, shape)
            inner = _ahead(places[met], places[i], -way, shape)
            gap = np.where(buried[side], _ahead(at, places[i], way, shape), np.inf)
            nearest, share = float(np.min(gap)), 0.5 * float(np.min(inner))
            if np.isfinite(share) and nearest + share < out[i] and np.min(others) > nearest:
                out[i] = nearest + share
    return np.asarray(out)


def _ahead(at: Floats, place: float, way: float, shape: PitShape) -> Floats:
    """Distances from a place to others in one direction along the wall, inf for those not that way."""
    gap = way * (at - place)
    if shape.closed:
        gap = np.mod(gap + 0.5 * shape.length, shape.length) - 0.5 * shape.length
    return np.where(gap > 1e-6, gap, np.inf)
