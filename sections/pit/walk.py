"""The walk along a wall: where to stand, and what the wall and the ground are like there."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Limits, Site
from sections.found import PitShape
from sections.model import Bools, Floats, Ints, Run
from sections.pit.chainage import ON, Sides, cast, normal_at, point_at, side_of, within, wrapped
from sections.pit.floors import FloorPlan, floor_at_wall, level_behind

STRIDE = 0.5
"""Stations are at most this far apart, m."""
JUST_BEYOND = 2.0 * ON
"""A station stands for what begins at it: it is looked up this far beyond, m."""
ROWS_OF = ("contiguous", "king_post")
UNBOUND = ("contiguous", "king_post", "sheet")
"""Walls that carry neither hoop force nor bending along themselves."""


@dataclass(frozen=True, kw_only=True)
class Walk:
    """Stations along one wall before loads, supports and zones are known, arrays of length n.

    `probe` is the chainage just beyond each station at which everything piecewise is looked up.
    """

    chainage: Floats
    probe: Floats
    xy: Floats
    normal: Floats
    side: Ints
    place: Floats
    run: Ints
    top: Floats
    toe: Floats
    ground: Floats
    floor: Floats
    weight: Floats


def walk(
    site: Site, shape: PitShape, sides: Sides, plan: FloorPlan, events: Sequence[Floats], around: FloorPlan | None
) -> Walk:
    """Stand at every event and at most half a metre apart between.

    Args:
        plan: Floors of the pit.
        around: Floors of the pit this one lies in, None when it lies in none.
        events: Chainages to stand at (corners, ends of runs, supports, ends of loads); of two that are the same
            place the one listed first is kept.
    """
    edges = run_edges(shape, site.limits)
    chainage = _stand_at(shape, [sides.start, edges.reshape(-1), *events])
    probe = wrapped(shape, chainage + JUST_BEYOND)
    if not shape.closed:
        probe = np.minimum(probe, shape.length - JUST_BEYOND)
    side, _ = side_of(sides, probe)
    place = np.mod(chainage - sides.start[side], shape.length) if shape.closed else chainage - sides.start[side]
    run = run_at(shape, probe, edges)
    half = 0.5 * np.nan_to_num(thickness_of(shape, run))
    floor = floor_at_wall(plan, shape, probe, half)
    return Walk(
        chainage=chainage,
        probe=probe,
        xy=point_at(shape, chainage),
        normal=normal_at(shape, probe),
        side=side,
        place=place,
        run=run,
        top=_of_runs(shape, run, "top"),
        toe=_of_runs(shape, run, "toe"),
        ground=_retained(site, shape, probe, half, floor, around),
        floor=floor,
        weight=np.diff(np.append(chainage, shape.length)),
    )


def _retained(
    site: Site, shape: PitShape, probe: Floats, half: Floats, floor: Floats, around: FloorPlan | None
) -> Floats:
    """Retained level: the ground level, or the floor of the pit around; not known where that is the pit's own floor."""
    if around is None:
        return np.full(len(probe), np.nan if site.ground_level is None else site.ground_level)
    level = level_behind(around, shape, probe, half)
    return np.where(level - floor > site.limits.level, level, np.nan)


def _stand_at(shape: PitShape, events: Sequence[Floats]) -> Floats:
    kept = np.array([0.0]) if shape.closed else np.array([0.0, shape.length])
    for event in events:
        fresh = wrapped(shape, np.asarray(event, dtype=np.float64))
        fresh = np.unique(fresh[np.isfinite(fresh)])
        near = np.abs(fresh[:, None] - kept[None, :]) if len(kept) < 64 else _nearest(fresh, kept)[:, None]
        clear = (np.min(near, axis=1) > ON) & (shape.length - fresh > ON)
        fresh = fresh[clear]
        fresh = fresh[np.append(True, np.diff(fresh) > ON)] if len(fresh) else fresh
        kept = np.sort(np.concatenate([kept, fresh]))
    ends = np.append(kept, shape.length) if shape.closed else kept
    gap = np.diff(ends)
    parts = np.maximum(1, np.ceil(gap / STRIDE - 1e-9)).astype(np.int64)
    first = np.repeat(ends[:-1], parts)
    step = np.repeat(gap / parts, parts)
    number = np.arange(len(first)) - np.repeat(np.cumsum(parts) - parts, parts)
    stations = first + number * step
    return stations if shape.closed else np.append(stations, shape.length)


def _nearest(points: Floats, kept: Floats) -> Floats:
    index = np.searchsorted(kept, points)
    below = np.abs(points - kept[np.clip(index - 1, 0, len(kept) - 1)])
    return np.asarray(np.minimum(below, np.abs(points - kept[np.clip(index, 0, len(kept) - 1)])))


def run_edges(shape: PitShape, limits: Limits) -> Floats:
    """Chainages (runs, 2) at which each run begins and ends, moved to a corner or the end of a curve close by.

    A run of piles ends half way to the next pile; where a corner lies within half a spacing, the corner is meant.
    """
    edges = np.array([(run.start, run.to) for run in shape.runs], dtype=np.float64).reshape(-1, 2)
    curves = [(arc.start, arc.to) for arc in shape.arcs] + [(part.start, part.to) for part in shape.circles]
    marks = np.array([corner.at for corner in shape.corners] + [end for ends in curves for end in ends])
    if len(marks) == 0 or len(edges) == 0:
        return edges
    widest = max((run.wall.centres or 0.0 for run in shape.runs), default=0.0)
    gap = marks[None, None, :] - edges[:, :, None]
    if shape.closed:
        gap = np.mod(gap + 0.5 * shape.length, shape.length) - 0.5 * shape.length
    nearest = np.take_along_axis(gap, np.argmin(np.abs(gap), axis=2)[:, :, None], axis=2)[:, :, 0]
    moved = edges + np.where(np.abs(nearest) <= max(limits.plan, 0.5 * widest), nearest, 0.0)
    whole = edges[:, 1] - edges[:, 0] >= shape.length - ON
    if shape.closed:
        to_end = (np.abs(moved[:, 1]) < ON) & (moved[:, 0] > ON)
        moved[to_end, 1] = shape.length
    # a run must not lose its length by the move
    kept = whole | (np.abs(moved[:, 1] - moved[:, 0]) < ON)
    return np.where(kept[:, None], edges, moved)


def run_at(shape: PitShape, chainage: Floats, edges: Floats) -> Ints:
    """Index of the run at each chainage, by the edges (runs, 2) of the runs; -1 where no run was found."""
    run = np.full(len(chainage), -1, dtype=np.int64)
    for i, (start, to) in enumerate(edges):
        run[within(chainage, float(start), float(to), shape.length)] = i
    return run


def _of_runs(shape: PitShape, run: Ints, name: str) -> Floats:
    values = [getattr(stretch.wall, name) for stretch in shape.runs]
    table = np.array([np.nan if value is None else value for value in values] + [np.nan], dtype=np.float64)
    return np.asarray(table[run])


def thickness_of(shape: PitShape, run: Ints) -> Floats:
    """Thickness of the wall, or the diameter of its piles, at each station; nan where neither is given."""
    thick, wide = _of_runs(shape, run, "thickness"), _of_runs(shape, run, "diameter")
    return np.asarray(np.where(np.isnan(thick), wide, thick))


def flags_of(shape: PitShape, run: Ints) -> tuple[Bools, Bools, Bools]:
    """Jointed, monolithic and rows, as `Stations` has them; all False where no run was found."""
    runs = shape.runs
    rows = np.array([stretch.wall.kind in ROWS_OF for stretch in runs] + [False])
    loose = np.array([_is_unbound(stretch) for stretch in runs] + [False])
    whole = np.array(
        [stretch.wall.continuity == "monolithic" and not _is_unbound(stretch) for stretch in runs] + [False]
    )
    return loose[run], whole[run], rows[run]


def _is_unbound(run: Run) -> bool:
    return run.wall.kind in UNBOUND or run.wall.continuity == "jointed"


def radius_at(shape: PitShape, chainage: Floats) -> Floats:
    """Radius of a curved wall at each chainage, nan on straights."""
    radius = np.full(len(chainage), np.nan)
    for part in shape.circles:
        radius[within(chainage, part.start, part.to, shape.length)] = part.radius
    if shape.circle is not None:
        radius[:] = shape.circle.radius
    for arc in shape.arcs:
        radius[within(chainage, arc.start, arc.to, shape.length)] = arc.radius
    return radius


@dataclass(frozen=True, kw_only=True)
class Facing:
    """The wall opposite: distance along the normal, chainage where it is met, skew, whether it is alike."""

    distance: Floats
    chainage: Floats
    skew: Floats
    like: Bools


def face(shape: PitShape, steps: Walk, sides: Sides, surcharge: Floats, limits: Limits) -> Facing:
    """Look square off the wall to the wall opposite.

    A wall opposite is alike when its kind, thickness, depth, surcharge and length agree within the tolerances and
    it is parallel within the tolerance of direction.
    """
    distance, at = cast(shape, steps.xy, steps.normal, least=0.05)
    met = np.isfinite(distance)
    there = wrapped(shape, np.where(met, at, 0.0))
    skew, there = _skew(shape, steps.normal, there)
    skew = np.where(met, skew, np.nan)
    here = np.searchsorted(steps.chainage, there + ON, side="right") - 1
    thick = thickness_of(shape, steps.run)
    kinds = np.unique([str(run.wall.kind) for run in shape.runs] or [""], return_inverse=True)[1]
    kind = np.append(kinds, -1)[steps.run]
    depth = steps.ground - steps.floor
    length = sides.length[steps.side]
    like = met & (skew <= limits.direction) & (kind == kind[here])
    like &= _close(thick, thick[here], 0.01) & _close(depth, depth[here], limits.level) & ~np.isnan(depth)
    like &= np.abs(surcharge - surcharge[here]) <= limits.surcharge
    like &= np.abs(length - length[here]) <= 0.1 * length
    return Facing(distance=distance, chainage=np.where(met, there, np.nan), skew=skew, like=like)


def _skew(shape: PitShape, normal: Floats, there: Floats) -> tuple[Floats, Floats]:
    """Skew to the wall met; where a corner is met, to the wall of the two that faces more squarely."""
    before = wrapped(shape, there - JUST_BEYOND)
    first = -np.einsum("ij,ij->i", normal, normal_at(shape, before))
    second = -np.einsum("ij,ij->i", normal, normal_at(shape, wrapped(shape, there + 1e-6)))
    squarer = first > second + 1e-3
    angle = np.degrees(np.arccos(np.clip(np.where(squarer, first, second), -1.0, 1.0)))
    return angle, np.where(squarer, before, there)


def _close(one: Floats, other: Floats, tolerance: float) -> Bools:
    both_unknown = np.isnan(one) & np.isnan(other)
    return np.asarray(both_unknown | (np.abs(one - other) <= tolerance))
