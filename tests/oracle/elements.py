"""What the block is made of: plates and walls, their weak forms, and the order in which its unknowns are eliminated."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from skfem import BilinearForm
from skfem.helpers import dd, ddot, sym_grad

Array = np.ndarray


@dataclass(frozen=True, kw_only=True)
class Plate:
    """Wall per metre: stiffness down, along, in twist (kNm2/m); membrane along, down (kN/m) and in shear."""

    Dv: float
    Dh: float = 0.0
    Dk: float = 0.0
    Eh: float = 0.0
    Ev: float = 0.0
    G: float = 0.0


@dataclass(frozen=True)
class Path:
    """A wall in the block: its plan nodes (i, j) in order, excavated side on the left; `first` its first unknown."""

    nodes: tuple[tuple[int, int], ...]
    first: int
    depth_nodes: int
    plates: tuple[Plate, ...]
    normals: Array
    tangents: Array
    lengths: Array


def dissect(index: Array, leaf: int = 300) -> Array:
    """Order points by nested dissection of their grid indices (n, 3): halves first, the plane between them last."""
    order: list[Array] = []

    def part(ids: Array) -> None:
        where = index[ids]
        spans = np.ptp(where, axis=0)
        axis = int(np.argmax(spans))
        if len(ids) <= leaf or spans[axis] < 2:
            order.append(ids)
            return
        cut = np.sort(where[:, axis])[len(ids) // 2]
        cut = min(max(cut, where[:, axis].min() + 1), where[:, axis].max() - 1)
        part(ids[where[:, axis] < cut])
        part(ids[where[:, axis] > cut])
        order.append(ids[where[:, axis] == cut])

    part(np.arange(len(index)))
    return np.concatenate(order)


@BilinearForm
def bend(u: Array, v: Array, _: Array) -> Array:
    return ddot(dd(u), dd(v))


def plate_form(plate: Plate) -> BilinearForm:
    @BilinearForm
    def bending(u: Array, v: Array, _: Array) -> Array:
        a, b = dd(u), dd(v)
        along, down, twist = a[0, 0] * b[0, 0], a[1, 1] * b[1, 1], a[0, 1] * b[0, 1]
        return plate.Dh * along + plate.Dv * down + 4 * plate.Dk * twist

    return bending


def membrane_form(plate: Plate) -> BilinearForm:
    @BilinearForm
    def stretching(u: Array, v: Array, _: Array) -> Array:
        e, f = sym_grad(u), sym_grad(v)
        return plate.Eh * e[0, 0] * f[0, 0] + plate.Ev * e[1, 1] * f[1, 1] + 4 * plate.G * e[0, 1] * f[0, 1]

    return stretching
