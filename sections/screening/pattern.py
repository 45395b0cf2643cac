"""Where the wall's elements go in the sparse matrix, and the order of factorisation: one for all stages and readings.

Unknowns are numbered column by column, in each by part (two plan movements, turn), node and value or slope. A column
meets its two neighbours, a node those above and below, so every place in the matrix follows by counting.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse

from sections.model import Floats, Ints

LEAF = 8
"""Nodes below which a piece of the wall is not cut further."""


@dataclass(frozen=True, kw_only=True)
class Pattern:
    """Sparsity of the wall's stiffness.

    Attributes:
        size: Number of unknowns. starts, places: row starts and column numbers (compressed rows).
        slot: (ns * ne * 576,) place of each entry of the elements, ordered (facet, element, i, j, k, l) with i, j of
            the 6 unknowns along and k, l of the 4 down.
        order: (size,) unknowns in the order of factorisation, by nested dissection of the grid.
    """

    size: int
    starts: Ints
    places: Ints
    slot: Ints
    order: Ints

    def gather(self, elements: Floats) -> sparse.csr_matrix:
        """Sum element matrices (ns, ne, 36, 16) into the sparse matrix."""
        data = np.bincount(self.slot, elements.reshape(-1), len(self.places))
        return sparse.csr_matrix((data, self.places, self.starts), shape=(self.size, self.size))


def make_pattern(columns: int, closed: bool, nodes: int) -> Pattern:
    """Count out the pattern of a wall of so many columns, and nodes down each."""
    ns = columns if closed else columns - 1
    ends = np.column_stack([np.arange(ns), (np.arange(ns) + 1) % columns])
    beside = _beside(columns, closed)
    above, below = np.maximum(np.arange(nodes) - 1, 0), np.minimum(np.arange(nodes) + 1, nodes - 1)
    across, down = np.sum(beside >= 0, axis=1), below - above + 1
    row = 6 * across[:, None] * down[None, :]
    # all rows of one column and node are alike
    counts = np.broadcast_to(row[:, None, :, None], (columns, 3, nodes, 2)).reshape(-1)
    starts = np.concatenate([[0], np.cumsum(counts)])
    rank = np.sum((beside[ends][:, :, None, :] >= 0) & (beside[ends][:, :, None, :] < ends[:, None, :, None]), axis=-1)
    slot = _slots(starts, ends, rank, down, above, nodes)
    places = np.empty(starts[-1], np.int64)
    places[slot] = _columns_of(ends, nodes).reshape(-1)
    return Pattern(
        size=columns * 6 * nodes,
        starts=starts,
        places=places,
        slot=slot,
        order=_dissection(columns, nodes),
    )


def _beside(columns: int, closed: bool) -> Ints:
    """(nc, 3) columns that meet at each column, itself among them; -1 where there is none."""
    here = np.arange(columns)
    before, after = here - 1, here + 1
    if closed:
        return np.column_stack([before % columns, here, after % columns])
    return np.column_stack([before, here, np.where(after < columns, after, -1)])


def _slots(starts: Ints, ends: Ints, rank: Ints, down: Ints, above: Ints, nodes: int) -> Ints:
    ne = nodes - 1
    part, slope = np.tile(np.arange(3), 2), np.tile(np.arange(2), 2)
    end, level = np.repeat([0, 1], 3), np.repeat([0, 1], 2)
    node = np.arange(ne)[:, None] + level
    row = ((ends[:, end] * 3 + part)[:, None, :, None] * nodes + node[None, :, None, :]) * 2 + slope
    wide = 2 * down[node]
    # within a row: columns in order, in each the three parts, in each the nodes above to below
    first = rank[:, end][:, :, end] * 3 + part
    tail = 2 * (node[:, None, :] - above[node][:, :, None]) + slope
    slot = starts[row][:, :, :, None, :, None] + first[:, None, :, :, None, None] * wide[None, :, None, None, :, None]
    return np.asarray((slot + tail[None, :, None, None, :, :]).reshape(-1), np.int64)


def _columns_of(ends: Ints, nodes: int) -> Ints:
    """Column number of every element entry, in the order of the slots."""
    ne, ns = nodes - 1, len(ends)
    part, slope = np.tile(np.arange(3), 2), np.tile(np.arange(2), 2)
    node = np.arange(ne)[:, None] + np.repeat([0, 1], 2)
    col = ((ends[:, np.repeat([0, 1], 3)] * 3 + part)[:, None, :, None] * nodes + node[None, :, None, :]) * 2 + slope
    return np.asarray(np.broadcast_to(col[:, :, None, :, None, :], (ns, ne, 6, 6, 4, 4)))


def _dissection(columns: int, nodes: int) -> Ints:
    """Unknowns by nested dissection of the grid of columns and nodes: halves first, the line between them last."""
    pieces: list[tuple[Ints, Ints]] = []

    def part(left: int, right: int, top: int, base: int) -> None:
        wide, deep = right - left, base - top
        if wide <= 0 or deep <= 0:
            return
        if wide * deep <= LEAF or max(wide, deep) < 3:
            pieces.append((np.arange(left, right), np.arange(top, base)))
        elif wide >= deep:
            middle = (left + right) // 2
            part(left, middle, top, base)
            part(middle + 1, right, top, base)
            pieces.append((np.array([middle]), np.arange(top, base)))
        else:
            middle = (top + base) // 2
            part(left, right, top, middle)
            part(left, right, middle + 1, base)
            pieces.append((np.arange(left, right), np.array([middle])))

    part(0, columns, 0, nodes)
    three, two = np.arange(3), np.arange(2)
    return np.concatenate(
        [
            (((c[:, None, None, None] * 3 + three[:, None]) * nodes + k[:, None, None]) * 2 + two).reshape(-1)
            for c, k in pieces
        ]
    )
