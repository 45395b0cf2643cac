"""Loss of one support, or of several at once, by a low-rank update of the factorisation that is there already.

Plane strain can only remove a whole row; here one real member goes. An accidental situation, listed beside the section
and never combined into the band of the normal one. Source: Sherman & Morrison 1950 (matrix identity).
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from scipy import sparse

from sections.model import Floats


@dataclass(frozen=True)
class Loss:
    """What the loss of members does.

    Attributes:
        movement: Unknowns without them.
        gap: (k,) movement at each lost member's place over that before.
        force: (m,) force of every member after the loss, 0 for the lost ones, kN.
    """

    movement: Floats
    gap: Floats
    force: Floats


def lose_members(
    solve: Callable[[Floats], Floats],
    vectors: sparse.csr_matrix,
    stiffness: Floats,
    movement: Floats,
    lost: Sequence[int],
) -> Loss:
    """Take members out of a solved structure.

    Args:
        solve: Solves the structure with all members for load columns (size, k).
        vectors: (m, size) rows that give the shortening of each member.
        stiffness: (m,) of the members, kN/m.
        movement: (size,) solution with all members.
        lost: Indices of the members that go.

    Raises:
        ValueError: Nothing would hold the structure without them.
    """
    D = np.asarray(vectors[list(lost)].todense()).T
    C = solve(D)
    before = D.T @ movement
    flexibility = np.diag(1 / stiffness[list(lost)]) - D.T @ C
    if np.linalg.matrix_rank(flexibility, tol=1e-12 * float(np.max(1 / stiffness[list(lost)]))) < len(lost):
        raise ValueError("nothing holds the structure without these members")
    after = movement + C @ np.linalg.solve(flexibility, before)
    force = stiffness * (vectors @ after)
    force[list(lost)] = 0.0
    return Loss(after, np.asarray((D.T @ after) / before), force)


def lose_each(
    solve: Callable[[Floats], Floats], vectors: sparse.csr_matrix, stiffness: Floats, movement: Floats
) -> tuple[Floats, Floats]:
    """Lose every member one by one, all with one block of right-hand sides.

    Returns:
        gap (m,): movement of its place over that before; neighbour (m, m): force of member j when i is lost over its
        force before, nan on the diagonal.
    """
    C = solve(np.asarray(vectors.todense()).T)
    A = np.asarray(vectors @ C)
    own = stiffness * np.diag(A)
    shortening = np.asarray(vectors @ movement)
    with np.errstate(divide="ignore", invalid="ignore"):
        gap = np.where(own < 1 - 1e-9, 1 / (1 - own), np.nan)
        change = A.T * (stiffness * shortening * gap)[:, None]
        neighbour = 1 + change / shortening[None, :]
    np.fill_diagonal(neighbour, np.nan)
    return gap, neighbour
