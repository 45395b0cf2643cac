"""A linear elastic model of a section in scikit-fem, plane strain or axisymmetric, from the JSON alone.

The ground is meshed in rectangles fitted to the levels and places the section names; walls are beams bonded to it,
supports springs, the excavation the release of the stress at rest on what is left. Per metre run, or per radian.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import spsolve
from section_reading import WATER, Bar, Json, bars_of, is_dug, material_at, soil_value, walls_of, water_level
from skfem import Basis, BilinearForm, ElementQuad0, ElementQuad1, ElementVector, LinearForm, MeshQuad
from skfem.helpers import ddot, sym_grad, trace

Array = np.ndarray
COARSE = 2.0
"""Largest side of an element, m."""
NEAR = 0.05
"""Places nearer to each other than this share a line of the mesh, m."""


@dataclass
class Answer:
    """Result of a run. Forces are kN per m or per radian; `closure` is what the sum of all forces leaves, x and z.

    Round an axis the radial forces of a ring hold each other: there only z says anything.
    """

    forces: dict[str, float]
    movement: float
    applied: Array
    reactions: Array
    missing: list[str]

    @property
    def closure(self) -> Array:
        """Applied forces and reactions together."""
        return self.applied + self.reactions


class PlaneModel:
    """The model of one section."""

    def __init__(self, section: Json) -> None:
        self.section = section
        self.ring = section["kind"] == "axisymmetric"
        self.walls, no_wall = walls_of(section)
        self.bars, no_bar = bars_of(section)
        self.missing = [*no_wall, *no_bar]
        self.mesh = MeshQuad.init_tensor(*self._lines())
        self.basis = Basis(self.mesh, ElementVector(ElementQuad1()), intorder=3)
        self.layers = [material_at(section, *self.mesh.p[:, cell].mean(axis=1)) for cell in self.mesh.t.T]
        self.left = np.array([k for k, c in enumerate(self._centres()) if self.layers[k] and not is_dug(section, *c)])

    def _centres(self) -> Array:
        return self.mesh.p[:, self.mesh.t].mean(axis=1).T

    def _lines(self) -> tuple[Array, Array]:
        """Lines of the mesh through everything the section names: walls first, then what else is drawn."""
        section = self.section
        members = sorted(section["members"], key=lambda member: member["role"] != "wall")
        spots = [point for member in members for point in member["points"]]
        spots += [point for load in section["loads"] for point in load["at"]]
        rings = [ring for stage in section["stages"] for ring in stage["dig"]]
        rings += [ring for layer in section["ground"]["layers"] for ring in layer["outlines"]]
        spots += [point for ring in rings for point in ring]
        x, z = section["extent"]["x"], section["extent"]["z"]
        return _divided(x, [p[0] for p in spots]), _divided(z, [p[1] for p in spots])

    # ---- matrices ---------------------------------------------------------------------------------------------------

    def _soil(self, key: str) -> Array:
        return np.array([
            soil_value(self.section["materials"], name, key, z) if name else 0.0
            for name, (_, z) in zip(self.layers, self._centres(), strict=True)
        ])  # fmt: skip

    def _ground(self) -> sparse.csr_matrix:
        E, nu = self._soil("E"), np.minimum(self._soil("nu"), 0.49)
        lame, shear = E * nu / ((1 + nu) * (1 - 2 * nu)), E / (2 * (1 + nu))
        basis = Basis(self.mesh, ElementVector(ElementQuad1()), intorder=3, elements=self.left)
        flat = basis.with_element(ElementQuad0())
        ring = self.ring

        @BilinearForm
        def work(u, v, w):  # type: ignore[no-untyped-def]
            a, b = sym_grad(u), sym_grad(v)
            if not ring:
                return w.lame * trace(a) * trace(b) + 2 * w.shear * ddot(a, b)
            hu, hv = u[0] / w.x[0], v[0] / w.x[0]
            volume = (trace(a) + hu) * (trace(b) + hv)
            return (w.lame * volume + 2 * w.shear * (ddot(a, b) + hu * hv)) * w.x[0]

        return work.assemble(basis, lame=flat.interpolate(lame), shear=flat.interpolate(shear))

    def _release(self) -> Array:
        """Weight of what is left less its stress at rest: the forces that the excavation sets free."""
        weight, K0 = self._soil("unit_weight"), self._soil("K0")
        over = self._overburden(weight)
        basis = Basis(self.mesh, ElementVector(ElementQuad1()), intorder=3, elements=self.left)
        flat = basis.with_element(ElementQuad0())
        centre = self._centres()
        levels = np.array([water_level(self.section, x) if water_level(self.section, x) is not None else -1e9
                           for x, _ in centre])  # fmt: skip
        ring = self.ring

        @LinearForm
        def free(v, w):  # type: ignore[no-untyped-def]
            down = w.over + w.weight * (w.mid - w.x[1])
            pore = WATER * np.maximum(w.level - w.x[1], 0.0)
            side = w.K0 * (down - pore) + pore
            strain = side * v.grad[0, 0] + down * v.grad[1, 1] - w.weight * v[1]
            return (strain + side * v[0] / w.x[0]) * w.x[0] if ring else strain

        fields = {"over": over, "weight": weight, "mid": centre[:, 1], "K0": K0, "level": levels}
        return free.assemble(basis, **{name: flat.interpolate(value) for name, value in fields.items()})

    def _overburden(self, weight: Array) -> Array:
        """Vertical total stress at the middle of each element before work."""
        z = self.mesh.p[1, self.mesh.t]
        height, centre = z.max(axis=0) - z.min(axis=0), self._centres()
        over = np.zeros(len(weight))
        for x in np.unique(np.round(centre[:, 0], 6)):
            column = np.flatnonzero(np.abs(centre[:, 0] - x) < 1e-5)
            column = column[np.argsort(-centre[column, 1])]
            through = np.cumsum(weight[column] * height[column])
            over[column] = through - 0.5 * weight[column] * height[column]
        return over

    def _node(self, x: float, z: float) -> int:
        return int(np.argmin(np.hypot(self.mesh.p[0] - x, self.mesh.p[1] - z)))

    def _wall_nodes(self, wall: Json) -> Array:
        (x, top), (_, toe) = wall["points"]
        on = np.flatnonzero((np.abs(self.mesh.p[0] - x) < 1e-9) & (self.mesh.p[1] <= top + NEAR))
        on = on[self.mesh.p[1, on] >= toe - NEAR]
        return on[np.argsort(-self.mesh.p[1, on])]

    def _beams(self, size: int, turns: dict[str, Array]) -> sparse.csr_matrix:
        rows, columns, values = [], [], []
        for wall in self.walls:
            nodes, made, r = self._wall_nodes(wall), wall["section"], wall["points"][0][0] if self.ring else 1.0
            EI = made["EI_vertical_kNm2_per_m"] if self.ring else made["EI_kNm2_per_m"]
            EA = made["EA_vertical_kN_per_m"] if self.ring else made["EA_kN_per_m"]
            hoop = (made["EA_hoop_kN_per_m"] or 0.0) / r**2 if self.ring else 0.0
            for k, (a, b) in enumerate(zip(nodes[:-1], nodes[1:], strict=True)):
                h = float(self.mesh.p[1, a] - self.mesh.p[1, b])
                K = r * _beam(EI, EA, hoop, h)
                at = [2 * a, turns[wall["id"]][k], 2 * b, turns[wall["id"]][k + 1], 2 * a + 1, 2 * b + 1]
                rows += np.repeat(at, 6).tolist()
                columns += np.tile(at, 6).tolist()
                values += K.ravel().tolist()
        return sparse.coo_matrix((values, (rows, columns)), shape=(size, size)).tocsr()

    # ---- solution ---------------------------------------------------------------------------------------------------

    def _end(self, at: tuple[float, float], on: str) -> int | None:
        """Node an end stands on; None for what holds still."""
        if on in {wall["id"] for wall in self.walls}:
            wall = next(one for one in self.walls if one["id"] == on)
            return self._node(wall["points"][0][0], at[1])
        return None

    def _springs(self, size: int, loads: Array) -> tuple[sparse.csr_matrix, list[tuple[Bar, Array]]]:
        """Bars as springs along themselves, with their preload as forces on their ends."""
        total, drawn = sparse.csr_matrix((size, size)), []
        for bar in self.bars:
            run = np.array([bar.far[0] - bar.head[0], bar.far[1] - bar.head[1]])
            p = run / hypot(*run)
            d = np.zeros(size)  # elongation = d . u
            for sign, at, on in ((-1.0, bar.head, bar.head_on), (1.0, bar.far, bar.far_on)):
                node = self._end(at, on)
                if node is not None:
                    d[2 * node : 2 * node + 2] += sign * p
            loads -= bar.preload * d
            column = sparse.csr_matrix(d).T
            total = total + bar.stiffness * (column @ column.T)
            drawn.append((bar, d))
        return total, drawn

    def _surface(self, size: int) -> Array:
        force = np.zeros(size)
        for load in self.section["loads"]:
            value, unit = load["section"]["value"], load["section"]["unit"]
            if value is None:
                continue
            xs, z = [p[0] for p in load["at"]], load["at"][0][1]
            if unit == "kN/m":
                node = self._node(xs[0], z)
                force[2 * node + 1] -= value * (self.mesh.p[0, node] if self.ring else 1.0)
            elif unit == "kPa":
                self._spread(force, value, min(xs), max(xs), z)
        return force

    def _spread(self, force: Array, p: float, x1: float, x2: float, z: float) -> None:
        level = self.mesh.p[1, self._node(x1, z)]
        on = np.flatnonzero(np.abs(self.mesh.p[1] - level) < 1e-9)
        on = on[np.argsort(self.mesh.p[0, on])]
        for a, b in zip(on[:-1], on[1:], strict=True):
            xa, xb = self.mesh.p[0, a], self.mesh.p[0, b]
            if x1 - 1e-6 <= xa and xb <= x2 + 1e-6:
                for node in (a, b):
                    force[2 * node + 1] -= p * (xb - xa) / 2 * ((xa + xb) / 2 if self.ring else 1.0)

    def solve(self) -> Answer:
        """Release the excavation and put the loads and preloads on."""
        plain = self.basis.N
        turns, size = {}, plain
        for wall in self.walls:
            count = len(self._wall_nodes(wall))
            turns[wall["id"]] = np.arange(size, size + count)
            size += count
        loads = np.zeros(size)
        loads[:plain] = self._release()
        loads += self._surface(size)
        springs, drawn = self._springs(size, loads)
        ground = self._ground()
        K = sparse.bmat([[ground, None], [None, sparse.csr_matrix((size - plain, size - plain))]]).tocsr()
        K = (K + self._beams(size, turns) + springs).tocsr()
        held = self._held(size, K)
        free = np.setdiff1d(np.arange(size), held)
        u = np.zeros(size)
        u[free] = spsolve(K[free][:, free].tocsc(), loads[free])
        residual = K @ u - loads
        forces = {bar.id: bar.preload + bar.stiffness * float(d @ u) for bar, d in drawn}
        across = np.arange(0, plain, 2)
        at_ends = sum((bar.stiffness * float(d @ u) * _unheld(d, plain) for bar, d in drawn), np.zeros(2))
        sums = [np.array([v[across].sum(), v[across + 1].sum()]) for v in (loads[:plain], residual[:plain])]
        return Answer(
            forces=forces,
            movement=float(np.max(np.abs(u[across]))),
            applied=sums[0],
            reactions=sums[1] - at_ends,
            missing=self.missing,
        )

    def _held(self, size: int, K: sparse.csr_matrix) -> Array:
        """Rollers at the sides, fixed base, the axis, and whatever nothing is joined to."""
        (x1, x2), (z1, _) = self.section["extent"]["x"], self.section["extent"]["z"]
        sides = np.flatnonzero((np.abs(self.mesh.p[0] - x1) < 1e-9) | (np.abs(self.mesh.p[0] - x2) < 1e-9))
        base = np.flatnonzero(np.abs(self.mesh.p[1] - z1) < 1e-9)
        loose = np.flatnonzero(np.asarray(abs(K).sum(axis=1)).ravel() == 0)
        return np.unique(np.concatenate([2 * sides, 2 * base, 2 * base + 1, loose]))


def _unheld(d: Array, plain: int) -> Array:
    """Sum of a bar's direction over the ends that are on nodes: zero when both are."""
    return np.array([d[0:plain:2].sum(), d[1:plain:2].sum()])


def _beam(EI: float, EA: float, hoop: float, h: float) -> Array:
    """Upright beam between two nodes h apart: (u, turn) of upper and lower node, then their vertical movements.

    Hermite bending plus a foundation of `hoop` (kN/m per m2), both consistent; axial EA. Standard structural mechanics.
    """
    bend = EI / h**3 * np.array(
        [[12, 6 * h, -12, 6 * h], [6 * h, 4 * h**2, -6 * h, 2 * h**2], [-12, -6 * h, 12, -6 * h],
         [6 * h, 2 * h**2, -6 * h, 4 * h**2]]
    )  # fmt: skip
    bed = hoop * h / 420 * np.array(
        [[156, 22 * h, 54, -13 * h], [22 * h, 4 * h**2, 13 * h, -3 * h**2], [54, 13 * h, 156, -22 * h],
         [-13 * h, -3 * h**2, -22 * h, 4 * h**2]]
    )  # fmt: skip
    K = np.zeros((6, 6))
    K[:4, :4] = bend + bed
    K[4:, 4:] = EA / h * np.array([[1, -1], [-1, 1]])
    return K


def _divided(extent: list[float], wanted: list[float]) -> Array:
    """Lines within an extent through the wanted places, the first of those nearer than NEAR, none beyond COARSE."""
    kept = [*extent]
    for value in wanted:
        if extent[0] < value < extent[1] and min(abs(value - one) for one in kept) > NEAR:
            kept.append(value)
    kept.sort()
    parts = [
        np.linspace(a, b, int(np.ceil((b - a) / COARSE)) + 1)[:-1] for a, b in zip(kept[:-1], kept[1:], strict=True)
    ]
    return np.append(np.concatenate(parts), kept[-1])
