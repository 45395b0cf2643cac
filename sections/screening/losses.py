"""What the loss of one real support does: the worst member of each row, in ratios to the whole arrangement.

An accidental situation for the engineer to see beside the section; it never enters the band of the normal one. Linear
ground, final dig, the first reading of what is not known.
"""

from __future__ import annotations

import numpy as np

from sections.definition import SupportLoss
from sections.model import Floats
from sections.screening.demands import FLOOR_OF_MOMENT, wall_demands
from sections.screening.loss import lose_each, lose_members
from sections.screening.scene import Scene, Variant, beams_of, members_of, wall_of
from sections.screening.solve import Factored, answer, factorise

MOST = 600
"""Members beyond which single losses are not worked out: their influence matrix grows with the square."""


def find_losses(scene: Scene, variant: Variant) -> tuple[SupportLoss, ...]:
    """Lose each support in turn and keep the worst of every row (gap movement), worst row first."""
    if not scene.found.rows:
        return ()
    members, rows = members_of(scene, variant)
    if len(members) > MOST:
        return ()
    dig_to, rows_in = max(scene.stages, key=lambda stage: (sum(stage[1]), -stage[0]))
    wall, _ = wall_of(scene, variant, dig_to)
    model = factorise(wall, members, beams_of(scene, variant, rows_in))
    movement = model.solve(model.load)
    gap, neighbour = lose_each(model.solve, model.vectors, members.stiffness, movement)
    losses = []
    for r, row in enumerate(scene.found.rows):
        mine = np.flatnonzero(np.array(rows) == r)
        if not np.any(np.isfinite(gap[mine])):
            continue
        worst = int(mine[np.nanargmax(gap[mine])])
        near = [i for i in (worst - 1, worst + 1) if i in mine]
        moments = _moment_ratios(model, movement, worst)
        losses.append(
            SupportLoss(
                member=row.member.id,
                at=float(np.nan_to_num(row.head_at[worst - int(mine[0])])),
                gap_movement=float(gap[worst]),
                neighbour_force=float(np.max(neighbour[worst, near])) if near else None,
                wall_moment_excavated_face=moments[0],
                wall_moment_retained_face=moments[1],
            )
        )
    return tuple(sorted(losses, key=lambda loss: (-loss.gap_movement, loss.member)))


def _moment_ratios(model: Factored, movement: Floats, lost: int) -> tuple[float, float]:
    """Largest ratio of the wall moment on either face, after over before, faces of next to no moment floored."""
    loss = lose_members(model.solve, model.vectors, model.members.stiffness, movement, [lost])
    none = np.zeros((len(model.wall.Dv), 0))
    before = wall_demands(model.wall, answer(model, movement), none)
    after = wall_demands(model.wall, answer(model, loss.movement), none)
    floor = FLOOR_OF_MOMENT * max(float(before.excavated.max()), float(before.retained.max()))
    return (
        float(np.max(after.excavated / np.maximum(before.excavated, floor))),
        float(np.max(after.retained / np.maximum(before.retained, floor))),
    )
