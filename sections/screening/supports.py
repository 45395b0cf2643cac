"""Members and walers of the folded wall: each at its real place, along its real direction."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse

from sections.model import Bools, Floats, Ints
from sections.screening.hermite import line_matrices
from sections.screening.wall import FoldedWall, unknown


@dataclass(frozen=True, kw_only=True)
class Members:
    """m members as springs k (u.d)^2 / 2; `far` = -1 where the far end stands on ground held still.

    Attributes:
        stiffness: (m,) along the member's axis, the whole support chain, kN/m.
        column, node: (m,) where the head stands. far_column, far_node: the far end on the wall, or -1.
        direction: (m, 2) plan components of the unit vector from head to far end (shorter than 1 when inclined).
        preload: (m,) lock-off load that acts on the wall whatever it does, kN, compression positive.
    """

    stiffness: Floats
    column: Ints
    node: Ints
    far_column: Ints
    far_node: Ints
    direction: Floats
    preload: Floats

    def __len__(self) -> int:
        """Number of members."""
        return len(self.stiffness)


def member_vectors(wall: FoldedWall, members: Members) -> sparse.csr_matrix:
    """(m, size) matrix D whose rows give the shortening of each member from the unknowns: D U = u_head.d - u_far.d."""
    m = np.arange(len(members))
    rows, cols, values = [], [], []
    for part in (0, 1):
        rows.append(m)
        cols.append(unknown(wall, members.column, part, members.node))
        values.append(members.direction[:, part])
        two = members.far_column >= 0
        rows.append(m[two])
        cols.append(unknown(wall, members.far_column[two], part, members.far_node[two]))
        values.append(-members.direction[two, part])
    entries = (np.concatenate(values), (np.concatenate(rows), np.concatenate(cols)))
    return sparse.csr_matrix(entries, shape=(len(members), wall.size))


@dataclass(frozen=True, kw_only=True)
class Beams:
    """Walers and capping beams: on facets `facet` at node `node`, EI kNm2 about the vertical axis, EA kN."""

    facet: Ints
    node: Ints
    EI: Floats
    EA: Floats


def beam_stiffness(wall: FoldedWall, beams: Beams) -> sparse.csr_matrix:
    """Stiffness of beams that follow the wall: bending EI w_ss^2 and stretch EA u_s^2."""
    if len(beams.facet) == 0:
        return sparse.csr_matrix((wall.size, wall.size))
    normals, tangents = wall.normals[beams.facet], wall.tangents[beams.facet]
    line = line_matrices(np.hypot(*wall.chords[beams.facet].T))
    across, slide = np.zeros((len(beams.facet), 4, 6)), np.zeros((len(beams.facet), 2, 6))
    across[:, 0, 0:2] = across[:, 2, 3:5] = normals
    across[:, 1, 2] = across[:, 3, 5] = 1.0
    slide[:, 0, 0:2] = slide[:, 1, 3:5] = tangents
    block = np.einsum("bai,bac,bcj->bij", across, line.bend * beams.EI[:, None, None], across)
    block += np.einsum("bai,bac,bcj->bij", slide, line.slope1 * beams.EA[:, None, None], slide)
    ends = wall.ends[beams.facet]
    index = np.stack([unknown(wall, ends[:, end], part, beams.node) for end in (0, 1) for part in (0, 1, 2)], axis=1)
    entries = (block.ravel(), (np.repeat(index, 6, -1).ravel(), np.tile(index, (1, 6)).ravel()))
    return sparse.csr_matrix(entries, shape=(wall.size, wall.size))


def select(members: Members, keep: Bools) -> Members:
    """The members present in a stage."""
    return Members(**{name: getattr(members, name)[keep] for name in Members.__dataclass_fields__})
