"""The block's own plane strain section: one element thick, one wall or two, supports smeared."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from block import Block
from elements import Array, Path, Plate
from props import End
from scenes import CENTRES, DIAMETER, E_WALL, NU, REST, THICKNESS, WEIGHT, Scene


@dataclass(frozen=True)
class Slice:
    """Demands of the plane slice at a facet: wall deflection, moments, force per metre by level."""

    deflection: float
    excavated: float
    retained: float
    force: dict[float, float]


def modulus(depth: Array) -> Array:
    return 10e3 + 3e3 * depth


def plate_of(scene: Scene) -> Plate:
    if scene.rows:
        # piles carry nothing along the wall; their axial stiffness holds the ground up
        return Plate(Dv=E_WALL * np.pi * DIAMETER**4 / 64 / CENTRES, Ev=E_WALL * DIAMETER / 2)
    EI, EA = E_WALL * THICKNESS**3 / 12, E_WALL * THICKNESS
    return Plate(Dv=EI, Dh=EI, Dk=EI / 2, Eh=EA, Ev=EA, G=EA / 2.4)


def pressure(scene: Scene, normal: Array, dug: float) -> Callable[[Array], Array]:
    """Pressure at rest that the dig releases, kPa; the surcharge stands behind the southern wall."""
    q = scene.surcharge if normal[1] > 0.9 else 0.0
    return lambda z: np.where(z < dug, REST * (WEIGHT * z + q), 0.0)


def solve_slice(
    scene: Scene, lines: Array, strips: Array, at: float, normal: Array, near: Sequence[End], across: Sequence[End],
    depth: Array,
) -> Slice:  # fmt: skip
    """One element of the section, in plane strain, with the far wall where the model holds it; supports smeared."""
    unit = np.array([0.0, 1.0])
    block = Block((unit, lines, depth), strips[None, :], modulus, NU)
    for plane, way in ((block.vertex[0], (1, 0)), (block.vertex[-1], (1, 0)), (block.vertex[:, 0], (0, 1)),
                       (block.vertex[:, -1], (0, 1))):  # fmt: skip
        block.roll(plane, way)
    spot = int(np.argmin(abs(lines - at)))
    end = next((j for j in range(spot, len(strips)) if strips[j] == 0), None)
    walls = [block.wall([(0, spot), (1, spot)], [plate_of(scene)], scene.toe)]
    block.load(walls[0], lambda f, z: pressure(scene, normal, float(strips[spot]))(z))
    if end is not None:
        walls.append(block.wall([(1, end), (0, end)], [plate_of(scene)], scene.toe))
        block.load(walls[1], lambda f, z: pressure(scene, -normal, float(strips[end - 1]))(z))
    for wall in walls:
        block.hold_turn(wall, 0, (1, 0))
        block.hold_turn(wall, 1, (1, 0))
    hung = _hang_props(scene, block, walls, near, across)
    block.solve()
    w, M = block.deflection(walls[0], 0), block.moment(walls[0], 0)
    force = {z: k * sum(block.U[u] * v for u, v in own[0]) for z, own, k in hung}
    return Slice(float(w.max()), float(max(M.max(), 0.0)), float(max(-M.min(), 0.0)), force)


def _hang_props(
    scene: Scene, block: Block, walls: Sequence[Path], near: Sequence[End], across: Sequence[End]
) -> list[tuple[float, list[list[tuple[int, float]]], float]]:
    """Hang the smeared supports of both walls; depth, unknowns and stiffness of those of the first."""
    hung = []
    two = len(walls) > 1
    for e in near:
        prop = scene.props[e.prop]
        own = [block.at(walls[0], c, prop.depth, (0, 1)) for c in (0, 1)]
        if prop.tie and two:
            own = [o + block.at(walls[1], 1 - c, prop.depth, (0, -1)) for c, o in enumerate(own)]
        times = 2.0 if prop.tie and not two else 1.0
        for unknowns in own:
            block.spring(unknowns, times * prop.stiffness / e.width / 2)
        hung.append((prop.depth, own, times * prop.stiffness / e.width))
    for e in across if two else ():
        for c in (0, 1):
            spring = block.at(walls[1], c, scene.props[e.prop].depth, (0, 1))
            block.spring(spring, scene.props[e.prop].stiffness / e.width / 2)
    return hung
