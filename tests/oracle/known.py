"""Known answers: closed forms of handbooks against the block and against the folded wall, (got, exact) by name."""

from __future__ import annotations

import dataclasses

import numpy as np
from block import Block
from elements import Plate

from sections.model import Floats
from sections.screening.hermite import moments
from sections.screening.solve import Answer, answer, factorise
from sections.screening.supports import Beams, Members
from sections.screening.wall import FoldedWall

NO_BEAMS = Beams(facet=np.zeros(0, int), node=np.zeros(0, int), EI=np.zeros(0), EA=np.zeros(0))


def thick_cylinder(rings: int) -> float:
    """Block: movement of the bore of a thick cylinder over Lame's (any handbook), radii 4 and 12 m, plane strain."""
    a, b, E, nu, p, half = 4.0, 12.0, 30e3, 0.3, 100.0, np.pi / 180
    lines = (np.linspace(a, b, rings + 1), np.array([0.0, 1.0]), np.array([0.0, 1.0]))
    block = Block(lines, np.zeros((rings, 1)), lambda z: E + 0 * z, nu,
                  lambda r, s: (r * np.cos(half * s), r * np.sin(half * s)))  # fmt: skip
    block.held = [block.dofs[2]]
    block.roll(block.vertex[:, 0], (0, 1))
    block.roll(block.vertex[:, -1], (-np.sin(half), np.cos(half)))
    path = block.wall([(0, 0), (0, 1)], [Plate(Dv=1e-6)], 1.0)
    block.load(path, lambda f, z: -p + 0 * z)
    block.hold_turn(path, 0, (0, 1))
    block.hold_turn(path, 1, (-np.sin(half), np.cos(half)))
    block.solve()
    exact = p * a * (1 + nu) / E * ((1 - 2 * nu) * a**2 + b**2) / (b**2 - a**2)
    return float(block.U[block.dofs[0, block.vertex[0, 0, 0]]] / exact)


def bare_wall(columns: Floats, z: Floats, D: float, pressure: float, *, along: bool = True) -> FoldedWall:
    """A straight wall without ground."""
    ns, ne = len(columns) - 1, len(z) - 1
    one, none = np.ones(ns), np.zeros((ns, ne))
    return FoldedWall(
        columns=columns, closed=False, z=z, on=np.ones((ns, ne), bool), Dv=D * one, Dh=D * one * along,
        Dk=D * one * along / 2, Eht=1e3 * D * one, Gt=1e3 * D * one, spring=none, spread=none, corner_spring=none,
        pressure=np.full((ns, ne, 2), pressure),
    )  # fmt: skip


def held_at(column: list[int], node: list[int], direction: list[tuple[float, float]], stiffness: float) -> Members:
    """Springs to ground."""
    count = len(column)
    none = np.full(count, -1)
    return Members(
        stiffness=np.full(count, stiffness), column=np.array(column), node=np.array(node), far_column=none,
        far_node=none, direction=np.array(direction), preload=np.zeros(count),
    )  # fmt: skip


def solved(wall: FoldedWall, members: Members) -> Answer:
    model = factorise(wall, members, NO_BEAMS)
    return answer(model, model.solve(model.load))


def navier_plate(cells: int = 8) -> float:
    """Folded wall: middle of a simply supported square plate under even load, w D/(q a4); Navier: 0.0040624."""
    n = cells + 1
    columns = np.column_stack([np.linspace(0, 1, n), np.zeros(n)])
    wall = bare_wall(columns, np.linspace(0, 1, n), 1.0, 1.0)
    edge = [(c, k) for c in range(n) for k in range(n) if c in (0, cells) or k in (0, cells)]
    normal = [(0.0, 1.0)] * len(edge) + [(1.0, 0.0)] * 2
    members = held_at([c for c, _ in edge] + [0, 0], [k for _, k in edge] + [0, cells], normal, 1e7)
    found = solved(wall, members)
    return float(found.value[cells // 2, 1, cells // 2])


def hetenyi_beam(per_b: int = 8) -> tuple[float, float]:
    """Folded wall, upright strip on springs, point load in its middle: w/(P b/2 k) and M/(P/4 b), Hetenyi 1946."""
    EI, k, P = 1e5, 1e4, 100.0
    b = (k / (4 * EI)) ** 0.25
    z = np.linspace(0, 16 / b, 16 * per_b + 1)
    wall = bare_wall(np.array([(0.0, 0.0), (1.0, 0.0)]), z, EI, 0.0, along=False)
    wall = dataclasses.replace(wall, spring=np.full((1, len(z) - 1), k))
    middle = len(z) // 2
    members = held_at([0, 1, 0], [0, 0, 0], [(1.0, 0.0)] * 3, 1e3)
    model = factorise(wall, members, NO_BEAMS)
    load = np.zeros(wall.size)
    for column, turn in ((0, P / 12), (1, -P / 12)):
        load[((column * 3 + 1) * len(z) + middle) * 2] = P / 2
        load[((column * 3 + 2) * len(z) + middle) * 2] = turn
    found = answer(model, model.solve(load))
    w, slope = found.value[0, 1], found.slope[0, 1]
    M = moments(z, w, slope, np.full(len(z) - 1, EI))
    return float(w[middle] / (P * b / 2 / k)), float(M[middle] / (P / 4 / b))


def ring_under_pressure(facets: int) -> float:
    """Folded wall: closing of a thin ring over p R2/(E t) (any handbook)."""
    radius, p, angle = 10.0, 100.0, np.arange(facets) * 2 * np.pi / facets
    columns = radius * np.column_stack([np.cos(angle), np.sin(angle)])
    z = np.arange(0.0, 17.0)
    open_wall = bare_wall(np.vstack([columns, columns[:1]]), z, 1e6, p)
    wall = dataclasses.replace(open_wall, columns=columns, closed=True, Eht=np.full(facets, 3e7),
                               Gt=np.full(facets, 1.2e7))  # fmt: skip
    members = held_at([0, facets // 2, facets // 4, 3 * facets // 4], [0] * 4,
                      [(0.0, 1.0), (0.0, 1.0), (1.0, 0.0), (1.0, 0.0)], 1.0)  # fmt: skip
    value = solved(wall, members).value[:, :2]
    w = np.einsum("cd,cdz->cz", -columns / radius, value)
    return float(w.mean() * 3e7 / (p * radius**2))
