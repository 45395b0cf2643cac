"""A small frame of bars and beams in space by the direct stiffness method, for checks of what a section hands over.

Textbook structural mechanics (Euler-Bernoulli beams, pin-ended bars, springs), written for these tests; it imports
nothing of the tool. Unknowns of a node: three movements, three turns.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

Array = np.ndarray


@dataclass
class Frame:
    """Nodes (n, 3); bars, beams, springs and loads are added, then `solve` gives the movements (n, 6)."""

    nodes: Array
    bars: list[tuple[int, int, float, float]] = field(default_factory=list)
    """Start, end, EA/L in kN/m, force before anything moves (tension positive) in kN."""

    def __post_init__(self) -> None:
        size = 6 * len(self.nodes)
        self.K, self.load = np.zeros((size, size)), np.zeros(size)
        self.held: set[int] = set()
        self.springs = np.zeros(size)

    def bar(self, a: int, b: int, stiffness: float, before: float = 0.0) -> int:
        """A pin-ended bar by its stiffness EA/L; returns its number."""
        d = self.direction(a, b)
        self._add(np.outer(d, d) * stiffness, range(len(d)))
        self.load -= before * d
        self.bars.append((a, b, stiffness, before))
        return len(self.bars) - 1

    def direction(self, a: int, b: int) -> Array:
        """Row that gives the elongation of a bar from all movements."""
        p = (self.nodes[b] - self.nodes[a]) / np.linalg.norm(self.nodes[b] - self.nodes[a])
        d = np.zeros(6 * len(self.nodes))
        d[6 * a : 6 * a + 3] -= p
        d[6 * b : 6 * b + 3] += p
        return d

    def beam(self, a: int, b: int, EA: float, EI: float) -> None:
        """A round beam: the same EI both ways, no torsion (its turn about its own axis is to be held)."""
        run = self.nodes[b] - self.nodes[a]
        L = float(np.linalg.norm(run))
        x = run / L
        y = np.cross([0.0, 0.0, 1.0], x) if abs(x[2]) < 0.9 else np.cross([0.0, 1.0, 0.0], x)
        y /= np.linalg.norm(y)
        turn = np.kron(np.eye(4), np.array([x, y, np.cross(x, y)]))
        self._add(turn.T @ _local(EA, EI, L) @ turn, [*range(6 * a, 6 * a + 6), *range(6 * b, 6 * b + 6)])

    def spring(self, node: int, way: int, stiffness: float) -> None:
        """A spring to what holds still, by unknown 0..5."""
        self.K[6 * node + way, 6 * node + way] += stiffness
        self.springs[6 * node + way] += stiffness

    def hold(self, nodes: Sequence[int], ways: Sequence[int]) -> None:
        """Hold unknowns of nodes."""
        self.held |= {6 * node + way for node in nodes for way in ways}

    def _add(self, part: Array, at: Sequence[int]) -> None:
        at = np.asarray(list(at))
        self.K[np.ix_(at, at)] += part

    def solve(self) -> Array:
        """Movements of all nodes (n, 6)."""
        free = np.setdiff1d(np.arange(len(self.load)), sorted(self.held))
        u = np.zeros(len(self.load))
        u[free] = np.linalg.solve(self.K[np.ix_(free, free)], self.load[free])
        self.residual = self.K @ u - self.load
        return u.reshape(-1, 6)

    def left_over(self, way: int, u: Array) -> float:
        """Sum of all forces in one of the three directions: loads, springs, and what held nodes take; 0 when closed."""
        springs = float((self.springs * u.ravel())[way::6].sum())
        held = sorted(one for one in self.held if one % 6 == way)
        return float(self.load[way::6].sum() - springs + self.residual[held].sum())

    def force(self, bar: int, u: Array) -> float:
        """Axial force of a bar, tension positive."""
        a, b, stiffness, before = self.bars[bar]
        return before + stiffness * float(self.direction(a, b) @ u.ravel())


def _local(EA: float, EI: float, L: float) -> Array:
    K = np.zeros((12, 12))
    K[np.ix_([0, 6], [0, 6])] = EA / L * np.array([[1, -1], [-1, 1]])
    bend = EI / L**3 * np.array(
        [[12, 6 * L, -12, 6 * L], [6 * L, 4 * L**2, -6 * L, 2 * L**2], [-12, -6 * L, 12, -6 * L],
         [6 * L, 2 * L**2, -6 * L, 4 * L**2]]
    )  # fmt: skip
    K[np.ix_([1, 5, 7, 11], [1, 5, 7, 11])] += bend
    sign = np.array([1.0, -1.0, 1.0, -1.0])
    K[np.ix_([2, 4, 8, 10], [2, 4, 8, 10])] += bend * np.outer(sign, sign)
    return K
