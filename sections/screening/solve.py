"""Solve the folded wall: one sparse factorisation, then cheap updates on it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import SuperLU, splu

from sections.model import Floats, Ints
from sections.screening.supports import Beams, Members, beam_stiffness, member_vectors
from sections.screening.wall import FoldedWall, assemble, element_unknowns


@dataclass(frozen=True)
class Factored:
    """A factorised wall with its members. `solve` takes and returns full vectors of length `wall.size`."""

    wall: FoldedWall
    members: Members
    vectors: sparse.csr_matrix
    free: Ints
    scale: Floats
    factors: SuperLU
    load: Floats

    def solve(self, load: Floats) -> Floats:
        """Movement under a load vector, or (size, m) of them."""
        out = np.zeros(load.shape)
        scale = self.scale if load.ndim == 1 else self.scale[:, None]
        out[self.free] = scale * self.factors.solve(np.ascontiguousarray(scale * load[self.free]))
        return out


def factorise(wall: FoldedWall, members: Members, beams: Beams) -> Factored:
    """Assemble and factorise. Unknowns where there is no wall are left out."""
    stiffness, load = assemble(wall)
    vectors = member_vectors(wall, members)
    total = stiffness.tocsr() + beam_stiffness(wall, beams) + vectors.T @ sparse.diags(members.stiffness) @ vectors
    # A node no element touches has no stiffness of its own; a member alone cannot hold it.
    touched = np.unique(element_unknowns(wall)[wall.on])
    scale = 1 / np.sqrt(total.diagonal()[touched])
    scaled = sparse.diags(scale) @ total[touched][:, touched] @ sparse.diags(scale)
    factors = splu(scaled.tocsc(), permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    return Factored(wall, members, vectors, touched, scale, factors, load - vectors.T @ members.preload)


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
