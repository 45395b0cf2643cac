"""The two-dimensional twin: the same wall, ground and pressure cut at one facet, supports smeared, one wall or two."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.linalg import cho_factor, cho_solve

from sections.model import Floats, Ints
from sections.screening.hermite import LineMatrices, line_matrices, moments
from sections.screening.limits import at_element_ends
from sections.screening.wall import DOWN, FoldedWall


@dataclass(frozen=True, kw_only=True)
class Prop:
    """A smeared support of the twin: node on its wall (0 or 1) and stiffness per metre.

    `opposite` is its node on the second wall, -1 where its far end is held still.
    """

    node: int
    stiffness: float
    opposite: int = -1
    wall: int = 0


@dataclass(frozen=True)
class TwinAnswer:
    """Deflection and moment (excavated face positive) down the first wall, force per metre of each of its props."""

    z: Floats
    w: Floats
    M: Floats
    force: Floats
    settled: bool = True
    """Whether the pressure limits came to rest."""


@dataclass(frozen=True)
class Strip:
    """One metre of wall without supports: stiffness (2 nz, 2 nz), load, and where the wall is (ne,)."""

    stiffness: Floats
    load: Floats
    bending: Floats


@dataclass(frozen=True)
class TwinModel:
    """One or two strips joined by props, factorised. `free` are the unknowns that have wall."""

    z: Floats
    down: LineMatrices
    strips: Sequence[Strip]
    props: Sequence[Prop]
    free: Ints
    factor: tuple[Floats, bool]
    load: Floats

    def solve(self, extra: Floats) -> Floats:
        """Unknowns under the load and an extra pressure (strips, ne, 2)."""
        load = self.load + np.concatenate([_pressure_load(self.down, e) for e in extra])
        U = np.zeros(len(load))
        U[self.free] = cho_solve(self.factor, load[self.free])
        return U

    def movement(self, extra: Floats) -> Floats:
        """Deflection (strips, ne, 2) at element tops and bases under an extra pressure."""
        w = self.solve(extra)[0::2].reshape(len(self.strips), -1)
        return at_element_ends(w)

    def answer(self, extra: Floats) -> TwinAnswer:
        """Answer of the first wall."""
        U = self.solve(extra)
        size = 2 * len(self.z)
        w, slope = U[0:size:2], U[1:size:2]
        M = moments(self.z, w, slope, self.strips[0].bending)
        two = len(self.strips) > 1
        own = [p for p in self.props if p.wall == 0]
        far = [U[size + 2 * p.opposite] if two and p.opposite >= 0 else 0.0 for p in own]
        force = np.array([p.stiffness * (w[p.node] + other) for p, other in zip(own, far, strict=True)])
        return TwinAnswer(self.z, w, M, force)


def cut_strip(wall: FoldedWall, facet: int) -> Strip:
    """One metre of the wall at a facet."""
    down, on = line_matrices(np.diff(wall.z)), wall.on[facet].astype(float)
    bending = wall.Dv[facet] * on
    element = (
        bending[:, None, None] * down.bend
        + (wall.spring[facet] * on)[:, None, None] * down.mass
        + (DOWN * wall.spread[facet] * on)[:, None, None] * down.slope
    )
    size = 2 * len(wall.z)
    stiffness = np.zeros((size, size))
    index = 2 * np.arange(len(on))[:, None] + np.arange(4)
    np.add.at(stiffness, (index[:, :, None], index[:, None, :]), element)
    return Strip(stiffness, _pressure_load(down, wall.pressure[facet] * on[:, None]), bending)


def _pressure_load(down: LineMatrices, pressure: Floats) -> Floats:
    """Load vector (2 nz,) of a pressure (ne, 2) linear down each element."""
    each = pressure[:, :1] * (down.even - down.ramp) + pressure[:, 1:] * down.ramp
    index = 2 * np.arange(len(each))[:, None] + np.arange(4)
    return np.bincount(index.ravel(), each.ravel(), 2 * len(each) + 2).astype(float)


def solve_strips(strips: Sequence[Strip], props: Sequence[Prop], wall: FoldedWall) -> TwinModel:
    """Join strips by their props and factorise."""
    size = len(strips[0].load)
    K = np.zeros((size * len(strips), size * len(strips)))
    for i, strip in enumerate(strips):
        K[i * size : (i + 1) * size, i * size : (i + 1) * size] = strip.stiffness
    two = len(strips) > 1
    for prop in props:
        spot = [prop.wall * size + 2 * prop.node] + ([size + 2 * prop.opposite] if two and prop.opposite >= 0 else [])
        K[np.ix_(spot, spot)] += prop.stiffness
    own = np.concatenate([strip.stiffness.diagonal() for strip in strips])
    free = np.flatnonzero(own > 0).astype(np.int64)
    factor = cho_factor(K[np.ix_(free, free)])
    load = np.concatenate([strip.load for strip in strips])
    return TwinModel(wall.z, line_matrices(np.diff(wall.z)), strips, props, free, factor, load)


def solve_twin(wall: FoldedWall, facet: int, props: Sequence[Prop], opposite: int | None = None) -> TwinAnswer:
    """Solve the section cut at a facet, linear ground.

    Args:
        wall: The folded wall; its arrays at the facet are the section.
        facet: Where the section is cut.
        props: Supports per metre of wall; those with an opposite node join both walls as springs k (w1 + w2).
        opposite: Facet of the wall across the pit, when a prop ties both.

    Returns:
        The first wall's answer.
    """
    strips = [cut_strip(wall, f) for f in ([facet] if opposite is None else [facet, opposite])]
    return solve_strips(strips, props, wall).answer(np.zeros((len(strips), len(wall.z) - 1, 2)))
