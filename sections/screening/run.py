"""Run the screening of one pit: every variant, every stage, the ratio at every facet, and the band they span."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from sections.model import Floats, Ints
from sections.screening.demands import NAMES, over_stages, ratios, twin_demands, wall_demands
from sections.screening.limits import PressureLimits, at_element_ends, excess, settle
from sections.screening.scene import Scene, Variant, beams_of, members_of, wall_of
from sections.screening.solve import Answer, Factored, answer, factorise
from sections.screening.strips import Smeared, smear_rows, stage_twins
from sections.screening.supports import Members, select


@dataclass(frozen=True)
class VariantRatios:
    """Ratios (ns, 4) of one variant for `NAMES`, and the stage that governs in 3D and in the twin, (ns, 4) each.

    `settled` is False where the earth pressures found no balance in some stage: its ratios mean nothing then.
    """

    variant: Variant
    ratio: Floats
    stage_real: Ints
    stage_flat: Ints
    settled: bool = True


def run_variant(scene: Scene, variant: Variant) -> VariantRatios:
    """Run all stages of one variant."""
    members, rows = members_of(scene, variant) if scene.found.rows else (None, ())
    smeared = smear_rows(scene, members, rows) if members is not None else _no_rows(scene)
    smooth, piles = bay_mean(scene, smeared), scene.found.stations.rows[scene.grid.station]
    real, flat, balanced = [], [], True
    for dig_to, rows_in in scene.stages:
        wall, limits = wall_of(scene, variant, dig_to)
        keep = np.array([rows_in[r] for r in rows], bool)
        here = select(members, keep) if members is not None else _no_members()
        beams = beams_of(scene, variant, rows_in)
        found, settled = _solve(limits, factorise(wall, here, beams, scene.pattern))
        force = np.full(len(rows), np.nan)
        force[keep] = found.force
        real.append(wall_demands(wall, found, _per_metre(smeared, force), smooth, piles))
        groups, answers, which = stage_twins(wall, limits, smeared, rows_in)
        flat.append(twin_demands(groups, answers, which, len(scene.found.rows)))
        balanced &= settled and all(twin.settled for twin in answers)
    most_real, where_real = over_stages(real)
    most_flat, where_flat = over_stages(flat)
    return VariantRatios(
        variant,
        ratios(most_real, most_flat),
        np.column_stack([where_real[name] for name in NAMES]),
        np.column_stack([where_flat[name] for name in NAMES]),
        balanced,
    )


def _solve(limits: PressureLimits, model: Factored) -> tuple[Answer, bool]:
    """Answer of a stage, and whether the pressure limits came to rest."""
    if not np.any(np.isfinite(limits.relief)):
        return answer(model, model.solve(model.load)), True
    wall = model.wall
    ends, normals = wall.ends, wall.normals

    def movement(over: Floats) -> Floats:
        value = answer(model, model.solve(model.load + model.press(over))).value
        nodes = sum(np.einsum("sd,sdz->sz", normals, value[ends[:, i], :2]) for i in (0, 1)) / 2
        return at_element_ends(np.asarray(nodes))

    over, settled = settle(lambda e: excess(limits, movement(e)), np.zeros(wall.pressure.shape))
    return answer(model, model.solve(model.load + model.press(over))), settled


def _per_metre(smeared: Smeared, force: Floats) -> Floats:
    """(ns, rows) push on the wall of the member that stands for each facet over its tributary width, square to it."""
    if len(force) == 0:
        return np.zeros((smeared.member.shape[1], 0))
    each = np.where(smeared.member >= 0, force[smeared.member], np.nan) * smeared.across / smeared.tributary
    return np.asarray(each.T)


def bay_mean(scene: Scene, smeared: Smeared) -> Callable[[Floats], Floats]:
    """Mean over one bay of supports centred at each facet, within its side; the value itself where there is no row.

    The function takes (ns, ...) values. A ring has one side and goes on behind its start.
    """
    ends = np.vstack([scene.grid.points, scene.grid.points[:1]])
    lengths = np.hypot(*np.diff(ends, axis=0).T)[: len(scene.EI)]
    sides = scene.found.stations.side[scene.grid.station]
    widths = np.zeros(len(scene.EI))
    if len(smeared.tributary):
        widths = np.nan_to_num(np.max(np.nan_to_num(smeared.tributary), axis=0))
    groups = [np.flatnonzero(sides == side) for side in np.unique(sides)]
    loop = scene.grid.closed and len(groups) == 1 and not scene.found.shape.corners
    weights = [(here, _bay_weights(lengths[here], widths[here], loop=loop)) for here in groups]

    def mean(values: Floats) -> Floats:
        out = np.empty_like(values)
        for here, weight in weights:
            out[here] = weight @ values[here]
        return out

    return mean


def _bay_weights(lengths: Floats, widths: Floats, *, loop: bool) -> Floats:
    """(n, n) share of each facet of one side in the mean around each."""
    edges = np.concatenate([[0.0], np.cumsum(lengths)])
    middle, total = (edges[1:] + edges[:-1]) / 2, edges[-1]
    half = np.maximum(widths, lengths) / 2
    low, high = middle - half, middle + half
    if not loop:
        low, high = np.maximum(low, 0.0), np.minimum(high, total)
    share = np.zeros((len(lengths), len(lengths)))
    for turn in (-total, 0.0, total) if loop else (0.0,):
        upper = np.minimum(high[:, None], edges[None, 1:] + turn)
        share += np.maximum(upper - np.maximum(low[:, None], edges[None, :-1] + turn), 0.0)
    return np.asarray(share / share.sum(axis=1, keepdims=True))


def _no_members() -> Members:
    nothing = np.zeros(0, int)
    return Members(
        stiffness=np.zeros(0), column=nothing, node=nothing, far_column=nothing, far_node=nothing,
        direction=np.zeros((0, 2)), preload=np.zeros(0),
    )  # fmt: skip


def _no_rows(scene: Scene) -> Smeared:
    nothing, none = np.zeros((0, len(scene.EI))), np.zeros((0, len(scene.EI)), int)
    return Smeared(
        stiffness=nothing, tributary=nothing, across=nothing, member=none, node=none, far_node=none, partner=none
    )
