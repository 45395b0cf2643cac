"""Solve the folded wall: one sparse factorisation, then cheap updates on it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import SuperLU, splu

from sections.model import Floats, Ints
from sections.screening.pattern import Pattern, make_pattern
from sections.screening.supports import Beams, Members, beam_stiffness, member_vectors
from sections.screening.wall import FoldedWall, assemble, element_unknowns, load_operator


@dataclass(frozen=True)
class Factored:
    """A factorised wall with its members. `solve` takes and returns full vectors of length `wall.size`.

    `pressing` turns a pressure (ns, ne, 2), flat, into a load; `live` are the unknowns in the order of factorisation.
    """

    wall: FoldedWall
    members: Members
    vectors: sparse.csr_matrix
    pressing: sparse.csr_matrix
    matrix: sparse.csr_matrix
    live: Ints
    scale: Floats
    factors: SuperLU
    load: Floats

    def solve(self, load: Floats) -> Floats:
        """Movement under a load vector, or (size, m) of them."""
        out = np.zeros(load.shape)
        scale = self.scale if load.ndim == 1 else self.scale[:, None]
        out[self.live] = scale * self.factors.solve(np.ascontiguousarray(scale * load[self.live]))
        return out

    def press(self, pressure: Floats) -> Floats:
        """Load of a pressure (ns, ne, 2)."""
        return np.asarray(self.pressing @ pressure.ravel())


def factorise(wall: FoldedWall, members: Members, beams: Beams, pattern: Pattern | None = None) -> Factored:
    """Assemble and factorise. Unknowns where there is no wall are left out.

    Args:
        wall, members, beams: The structure of one stage.
        pattern: That of the wall's grid, where it is known already.
    """
    pattern = pattern or make_pattern(len(wall.columns), wall.closed, len(wall.z))
    vectors = member_vectors(wall, members)
    total = (
        assemble(wall, pattern) + beam_stiffness(wall, beams) + vectors.T @ sparse.diags(members.stiffness) @ vectors
    )
    # A node no element touches has no stiffness of its own; a member alone cannot hold it.
    touched = np.zeros(wall.size, bool)
    touched[element_unknowns(wall)[wall.on]] = True
    live = pattern.order[touched[pattern.order]]
    scale = 1 / np.sqrt(total.diagonal()[live])
    scaled = ordered(total, live, scale)
    pressing = load_operator(wall)
    load = pressing @ wall.pressure.ravel() - vectors.T @ members.preload
    return Factored(wall, members, vectors, pressing, total, live, scale, factors_of(scaled), load)


def ordered(matrix: sparse.csr_matrix, live: Ints, scale: Floats) -> sparse.csc_matrix:
    """The live part of a symmetric matrix in the order of factorisation, its diagonal scaled to 1."""
    spot = np.full(matrix.shape[0], -1)
    spot[live] = np.arange(len(live))
    entries = matrix.tocoo()
    row, col = spot[entries.row], spot[entries.col]
    keep = (row >= 0) & (col >= 0)
    values = entries.data[keep] * scale[row[keep]] * scale[col[keep]]
    return sparse.csc_matrix((values, (row[keep], col[keep])), shape=(len(live), len(live)))


def factors_of(scaled: sparse.csc_matrix) -> SuperLU:
    """Factorise a symmetric positive definite matrix in the order it is given."""
    return splu(scaled, permc_spec="NATURAL", diag_pivot_thresh=0.0, options={"SymmetricMode": True})


@dataclass(frozen=True)
class Answer:
    """Movements of one stage: plan movement and its slope down the wall, (nc, 3, nz) each."""

    value: Floats
    slope: Floats
    force: Floats
    """(m,) member forces, compression positive, preload included."""


def answer(model: Factored, movement: Floats) -> Answer:
    """Shape a solution and work out the member forces."""
    shaped = movement.reshape(len(model.wall.columns), 3, len(model.wall.z), 2)
    shortening = model.vectors @ movement
    return Answer(shaped[..., 0], shaped[..., 1], model.members.stiffness * shortening + model.members.preload)
