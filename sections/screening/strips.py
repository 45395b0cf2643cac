"""The twins of a stage: one for each kind of section along the wall, with both walls where a strut ties two."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sections.model import Floats, Ints
from sections.screening.grid import node_at
from sections.screening.limits import PressureLimits, excess, settle
from sections.screening.scene import Scene
from sections.screening.supports import Members
from sections.screening.twin import Prop, Strip, TwinAnswer, cut_strip, solve_strips
from sections.screening.wall import FoldedWall


@dataclass(frozen=True, kw_only=True)
class Smeared:
    """Support rows smeared along the facets, (rows, ns): stiffness per metre of wall, tributary width, nan where none.

    `member` is the index of the real member that stands for the facet, -1 where none; `node`, `far_node` per row.
    """

    stiffness: Floats
    tributary: Floats
    member: Ints
    node: Ints
    far_node: Ints
    opposite: Ints
    """(ns,) facet across the pit, -1 where none."""


def smear_rows(scene: Scene, members: Members, rows: tuple[int, ...]) -> Smeared:
    """Smear the rows: each facet has the stiffness of its nearest member over that member's tributary width."""
    found, grid = scene.found, scene.grid
    ns, count = len(scene.EI), len(found.rows)
    stiffness, tributary = np.full((count, ns), np.nan), np.full((count, ns), np.nan)
    member, node, far_node = np.full((count, ns), -1), np.zeros(count, int), np.full(count, -1)
    owner = np.array(rows, int)
    covers = found.stations.supports
    facet_normals = found.stations.normal[grid.station]
    for r, row in enumerate(found.rows):
        mine = np.flatnonzero(owner == r)
        has = np.array([r in covers[s] for s in grid.station])
        level = scene.site.supports[row.supports[0]].head[2]
        node[r] = node_at(grid, np.array([level]))[0]
        if np.all(~np.isnan(row.far_at)) and np.all(~np.isnan(row.head_at)):
            far_node[r] = int(members.far_node[mine[0]])
        at = np.concatenate([row.head_at, row.far_at])
        width = np.concatenate([row.tributary_head, row.tributary_far])
        index = np.concatenate([mine, mine])
        known = ~np.isnan(at) & ~np.isnan(width)
        gap = np.abs(grid.middles[:, None] - at[known][None, :])
        gap = np.minimum(gap, grid.length - gap) if grid.closed else gap
        nearest = np.argmin(gap, axis=1)
        tributary[r] = np.where(has, width[known][nearest], np.nan)
        chosen = index[known][nearest]
        member[r] = np.where(has, chosen, -1)
        across = np.einsum("sd,sd->s", members.direction[chosen], facet_normals)
        stiffness[r] = members.stiffness[chosen] * across**2 / tributary[r]
    return Smeared(
        stiffness=stiffness, tributary=tributary, member=member, node=node, far_node=far_node, opposite=_opposite(scene)
    )


def _opposite(scene: Scene) -> Ints:
    facing = scene.found.stations.facing_chainage[scene.grid.station]
    known = np.nan_to_num(facing)
    gap = np.abs(scene.grid.middles[None, :] - known[:, None])
    if scene.grid.closed:
        gap = np.minimum(gap, scene.grid.length - gap)
    return np.where(np.isnan(facing), -1, np.argmin(gap, axis=1)).astype(np.int64)


def stage_twins(
    wall: FoldedWall, limits: PressureLimits, smeared: Smeared, rows_in: tuple[bool, ...]
) -> tuple[Ints, list[TwinAnswer], list[list[int]]]:
    """Solve the twins of one stage.

    Returns:
        Group of each facet (ns,), one answer per group, and per group the row of each prop.
    """
    active = [r for r, there in enumerate(rows_in) if there]
    own = _codes(wall, limits)
    pair = np.where(_tied(smeared, active), np.where(smeared.opposite >= 0, own[smeared.opposite], -1), -1)
    stiff = np.round(np.nan_to_num(smeared.stiffness[active], nan=-1.0).T, 3) if active else np.zeros((len(own), 0))
    key = np.column_stack([own, pair, stiff])
    _, first, group = np.unique(key, axis=0, return_index=True, return_inverse=True)
    answers, rows = [], []
    for facet in first:
        here = [r for r in active if not np.isnan(smeared.stiffness[r, facet])]
        other = int(smeared.opposite[facet]) if pair[facet] >= 0 else None
        props = [
            Prop(
                node=int(smeared.node[r]),
                stiffness=float(smeared.stiffness[r, facet]),
                opposite=int(smeared.far_node[r]) if other is not None else -1,
            )
            for r in here
        ]
        answers.append(_solve(wall, limits, int(facet), props, other))
        rows.append(here)
    return group.reshape(-1).astype(np.int64), answers, rows


def _codes(wall: FoldedWall, limits: PressureLimits) -> Ints:
    """(ns,) number of the kind of wall and ground at each facet."""
    parts = [wall.Dv[:, None], wall.on, wall.spring, wall.spread]
    parts += [a.reshape(len(wall.Dv), -1) for a in (wall.pressure, limits.relief, limits.reserve)]
    table = np.nan_to_num(np.column_stack(parts), posinf=1e30)
    scaled = np.round(table / np.maximum(np.max(np.abs(table), axis=0), 1e-30), 6)
    return np.unique(scaled, axis=0, return_inverse=True)[1].reshape(-1).astype(np.int64)


def _tied(smeared: Smeared, active: list[int]) -> np.ndarray:
    tied = np.zeros(len(smeared.opposite), bool)
    for r in active:
        if smeared.far_node[r] >= 0:
            tied |= ~np.isnan(smeared.stiffness[r])
    return tied


def _solve(wall: FoldedWall, limits: PressureLimits, facet: int, props: list[Prop], other: int | None) -> TwinAnswer:
    """One twin, its ground springs limited by the same iteration as the wall's."""
    facets = [facet] if other is None else [facet, other]
    strips: list[Strip] = [cut_strip(wall, f) for f in facets]
    model = solve_strips(strips, props, wall)
    if not np.any(np.isfinite(limits.relief[facets])):
        return model.answer(np.zeros((len(facets), len(wall.z) - 1, 2)))
    few = PressureLimits(
        retained_spring=limits.retained_spring[facets],
        excavated_spring=limits.excavated_spring[facets],
        relief=limits.relief[facets],
        reserve=limits.reserve[facets],
    )
    start = np.zeros((len(facets), len(wall.z) - 1, 2))
    over, _ = settle(lambda e: excess(few, model.movement(e)), start)
    return model.answer(over)
