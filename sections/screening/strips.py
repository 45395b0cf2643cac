"""Supports smeared along the wall, and the twins of a stage: one for each kind of section along it.

A strut ties its wall to the wall at its other end; the section then holds both walls, each with its own supports.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from sections.found import SupportRow
from sections.model import Bools, Floats, Ints
from sections.pit.along import cover_of
from sections.screening.grid import facet_at
from sections.screening.limits import PressureLimits, excess, settle
from sections.screening.scene import Scene
from sections.screening.supports import Members
from sections.screening.twin import Prop, Strip, TwinAnswer, cut_strip, solve_strips
from sections.screening.wall import FoldedWall


@dataclass(frozen=True, kw_only=True)
class Smeared:
    """Support rows smeared along the facets, (rows, ns) each.

    Attributes:
        stiffness: Per metre of wall, square to it, kN/m/m; nan where the row does not hold the facet.
        tributary: Width the member stands for, m.
        across: Part of a member's compression that pushes the wall back, square to it; negative where tension holds it.
        member: Index of the real member that stands for the facet, -1 where none.
        node: Node of its end on this wall. far_node: node of its other end on the wall, -1 where that is held still.
        partner: Facet of the wall at its other end, -1 where that is held still.
    """

    stiffness: Floats
    tributary: Floats
    across: Floats
    member: Ints
    node: Ints
    far_node: Ints
    partner: Ints


def smear_rows(scene: Scene, members: Members, rows: tuple[int, ...]) -> Smeared:
    """Smear the rows: each facet has the stiffness of its nearest member over that member's tributary width."""
    station = scene.grid.station
    covers = cover_of(scene.found.stations, len(scene.found.rows))[station]
    facing = facet_at(scene.grid, scene.found.stations.facing_chainage[station])
    owner = np.array(rows, int)
    each = [
        _smear_row(scene, members, np.flatnonzero(owner == r), row, covers[:, r], facing)
        for r, row in enumerate(scene.found.rows)
    ]
    return Smeared(**{name: np.array([part[name] for part in each]) for name in Smeared.__dataclass_fields__})


def _smear_row(
    scene: Scene, members: Members, mine: Ints, row: SupportRow, has: Bools, facing: Ints
) -> dict[str, np.ndarray]:
    grid, count = scene.grid, len(mine)
    at = np.concatenate([row.head_at, row.far_at])
    width = np.concatenate([row.tributary_head, row.tributary_far])
    known = np.flatnonzero(~np.isnan(at) & ~np.isnan(width))
    gap = np.abs(grid.middles[:, None] - at[known][None, :])
    gap = np.minimum(gap, grid.length - gap) if grid.closed else gap
    end = known[np.argmin(gap, axis=1)]
    chosen, far = mine[end % count], end >= count
    normals = scene.found.stations.normal[grid.station]
    across = np.einsum("sd,sd->s", members.direction[chosen], normals) * np.where(far, -1.0, 1.0)
    tied = members.far_column[chosen] >= 0
    other = facet_at(grid, np.where(far, row.head_at[end % count], row.far_at[end % count]))
    side = scene.found.stations.side[grid.station]
    # square off the wall where that is the wall the member leads to; else where the member stands
    other = np.where((facing >= 0) & (side[facing] == side[other]), facing, other)
    nodes = np.where(far, members.far_node[chosen], members.node[chosen])
    ends = np.where(far, members.node[chosen], members.far_node[chosen])
    return {
        "stiffness": np.where(has, members.stiffness[chosen] * across**2 / width[end], np.nan),
        "tributary": np.where(has, width[end], np.nan),
        "across": across,
        "member": np.where(has, chosen, -1),
        "node": nodes,
        "far_node": np.where(tied, ends, -1),
        "partner": np.where(tied & has, other, -1),
    }


def stage_twins(
    wall: FoldedWall, limits: PressureLimits, smeared: Smeared, rows_in: tuple[bool, ...]
) -> tuple[Ints, list[TwinAnswer], list[list[int]]]:
    """Solve the twins of one stage.

    Returns:
        Group of each facet (ns,), one answer per group, and per group the row of each prop.
    """
    active = [r for r, there in enumerate(rows_in) if there]
    own = _codes(wall, limits)
    pair = _partner(smeared, active, len(own))
    key = np.column_stack([own, np.where(pair >= 0, own[pair], -1), *_keys(smeared, active, pair)])
    _, first, group = np.unique(key, axis=0, return_index=True, return_inverse=True)
    answers, rows = [], []
    for facet in first:
        other = int(pair[facet])
        here = [r for r in active if not np.isnan(smeared.stiffness[r, facet])]
        props = [_prop(smeared, r, int(facet), other) for r in here]
        if other >= 0:
            props += _props_across(smeared, active, int(facet), other)
        answers.append(_solve(wall, limits, [int(facet), other] if other >= 0 else [int(facet)], props))
        rows.append(here)
    return group.reshape(-1).astype(np.int64), answers, rows


def _partner(smeared: Smeared, active: list[int], count: int) -> Ints:
    """(ns,) facet of the second wall: that of the first row in place that ties one; -1 where none does."""
    pair = np.full(count, -1)
    for r in reversed(active):
        pair = np.where(smeared.partner[r] >= 0, smeared.partner[r], pair)
    return pair.astype(np.int64)


def _keys(smeared: Smeared, active: list[int], pair: Ints) -> list[Floats]:
    """Columns that tell one set of supports from another: own stiffness, ties, and those of the second wall."""
    own = np.round(np.nan_to_num(smeared.stiffness, nan=-1.0), 3)
    return [
        column
        for r in active
        for column in (own[r], np.where(smeared.partner[r] >= 0, 1.0, 0.0), np.where(pair >= 0, own[r][pair], -2.0))
    ]


def _ties(smeared: Smeared, row: int, facet: int, other: int) -> bool:
    """Whether the row ties the facet to the second wall: its partner has the same members there."""
    return bool(smeared.partner[row, facet] >= 0 and other >= 0 and smeared.partner[row, other] >= 0)


def _prop(smeared: Smeared, row: int, facet: int, other: int) -> Prop:
    stiffness = float(smeared.stiffness[row, facet])
    node, far = int(smeared.node[row, facet]), int(smeared.far_node[row, facet])
    if _ties(smeared, row, facet, other):
        return Prop(node=node, stiffness=stiffness, opposite=far)
    # led to a third wall: that one is taken to move alike, so that the middle of the member stands still
    return Prop(node=node, stiffness=stiffness * (2.0 if smeared.partner[row, facet] >= 0 else 1.0))


def _props_across(smeared: Smeared, active: list[int], facet: int, other: int) -> list[Prop]:
    """Supports of the second wall that do not lead to the first."""
    return [
        Prop(
            node=int(smeared.node[r, other]),
            stiffness=float(smeared.stiffness[r, other]) * (2.0 if smeared.partner[r, other] >= 0 else 1.0),
            wall=1,
        )
        for r in active
        if not np.isnan(smeared.stiffness[r, other]) and not _ties(smeared, r, facet, other)
    ]


def _codes(wall: FoldedWall, limits: PressureLimits) -> Ints:
    """(ns,) number of the kind of wall and ground at each facet."""
    parts = [wall.Dv[:, None], wall.on, wall.spring, wall.spread]
    parts += [a.reshape(len(wall.Dv), -1) for a in (wall.pressure, limits.relief, limits.reserve)]
    table = np.nan_to_num(np.column_stack(parts), posinf=-1.0)
    scaled = np.round(table / np.maximum(np.max(np.abs(table), axis=0), 1e-30), 6)
    return np.unique(scaled, axis=0, return_inverse=True)[1].reshape(-1).astype(np.int64)


def _solve(wall: FoldedWall, limits: PressureLimits, facets: list[int], props: list[Prop]) -> TwinAnswer:
    """One twin, its ground springs limited by the same iteration as the wall's."""
    strips: list[Strip] = [cut_strip(wall, f) for f in facets]
    model = solve_strips(strips, props, wall)
    start = np.zeros((len(facets), len(wall.z) - 1, 2))
    if not np.any(np.isfinite(limits.relief[facets])):
        return model.answer(start)
    few = PressureLimits(
        retained_spring=limits.retained_spring[facets],
        excavated_spring=limits.excavated_spring[facets],
        relief=limits.relief[facets],
        reserve=limits.reserve[facets],
    )
    over, settled = settle(lambda e: excess(few, model.movement(e)), start)
    return replace(model.answer(over), settled=settled)
