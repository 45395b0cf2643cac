"""The two-dimensional twin: the same wall, ground and pressure cut at one facet, supports smeared, one wall or two."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sections.model import Floats
from sections.screening.hermite import line_matrices, moments
from sections.screening.wall import DOWN, FoldedWall


@dataclass(frozen=True, kw_only=True)
class Prop:
    """A smeared support of the twin: node and stiffness per metre; `opposite` is its node on the second wall or -1."""

    node: int
    stiffness: float
    opposite: int = -1


@dataclass(frozen=True)
class TwinAnswer:
    """Deflection and moment (excavated face positive) down the first wall, force per metre of each prop."""

    z: Floats
    w: Floats
    M: Floats
    force: Floats


def strip(wall: FoldedWall, facet: int) -> tuple[Floats, Floats]:
    """Stiffness (2 nz, 2 nz) and load of one metre of wall at a facet, without supports."""
    down = line_matrices(np.diff(wall.z))
    size = 2 * len(wall.z)
    stiffness, load = np.zeros((size, size)), np.zeros(size)
    for e in np.nonzero(wall.on[facet])[0]:
        i = slice(2 * e, 2 * e + 4)
        stiffness[i, i] += (
            wall.Dv[facet] * down.bend[e]
            + wall.spring[facet, e] * down.mass[e]
            + DOWN * wall.spread[facet, e] * down.slope[e]
        )
        top, base = wall.pressure[facet, e]
        load[i] += top * (down.even[e] - down.ramp[e]) + base * down.ramp[e]
    return stiffness, load


def solve_twin(wall: FoldedWall, facet: int, props: Sequence[Prop], opposite: int | None = None) -> TwinAnswer:
    """Solve the section cut at a facet.

    Args:
        wall: The folded wall; its arrays at the facet are the section.
        facet: Where the section is cut.
        props: Supports per metre of wall; those with an opposite node join both walls as springs k (w1 + w2).
        opposite: Facet of the wall across the pit, when a prop ties both.

    Returns:
        The first wall's answer.
    """
    first, load = strip(wall, facet)
    size = len(load)
    K, F = first, load
    if opposite is not None:
        second, load2 = strip(wall, opposite)
        K = np.block([[first, np.zeros((size, size))], [np.zeros((size, size)), second]])
        F = np.concatenate([load, load2])
    for prop in props:
        spot = [2 * prop.node] + ([size + 2 * prop.opposite] if prop.opposite >= 0 and opposite is not None else [])
        K[np.ix_(spot, spot)] += prop.stiffness
    free = np.nonzero(K.diagonal() > 0)[0]
    U = np.zeros(len(F))
    U[free] = np.linalg.solve(K[np.ix_(free, free)], F[free])
    w, slope = U[0:size:2], U[1:size:2]
    M = moments(wall.z, w, slope, np.where(wall.on[facet], wall.Dv[facet], 0.0))
    across = [U[size + 2 * p.opposite] if p.opposite >= 0 and opposite is not None else 0.0 for p in props]
    force = np.array([p.stiffness * (w[p.node] + far) for p, far in zip(props, across, strict=True)])
    return TwinAnswer(wall.z, w, M, force)
