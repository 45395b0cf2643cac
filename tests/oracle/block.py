"""A three-dimensional linear elastic block with the retaining wall as a surface: the outside check of the screening.

Brick elements for the ground (scikit-fem), bonded to the wall on both sides, the excavated ground left out. The wall is
a conforming plate (Bogner-Fox-Schmit element) with its membrane, or, where it carries nothing along itself, a row of
upright beams. Only the unbalanced pressure on the wall is released (no heave of the floor), in one step. Springs stand
for supports, beams for walers; the base is held, the far sides roll. Nothing of `sections` is imported here.

Simplified: columns, ground and wall meet at nodes only; arcs are chords; the wall's weight and friction are left out.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from elements import Array, Path, Plate, bend, dissect, membrane_form, plate_form
from scipy import sparse
from scipy.sparse.linalg import splu
from skfem import (
    Basis,
    BilinearForm,
    ElementHex1,
    ElementLineHermite,
    ElementLineP1,
    ElementQuad1,
    ElementQuadBFS,
    ElementVector,
    LinearForm,
    MeshHex,
    MeshLine,
    MeshQuad,
)
from skfem.helpers import ddot, eye, sym_grad, trace
from skfem.models import laplace

HELD = 1e10
"""Spring for symmetry planes that do not follow an axis, kN/m: stiffer ones lose digits."""


class Block:
    """Ground on a mapped grid, walls, springs and beams added one by one, then solved once."""

    def __init__(
        self,
        lines: tuple[Array, Array, Array],
        dig: Array,
        modulus: Callable[[Array], Array],
        nu: float = 0.3,
        plan: Callable[[Array, Array], tuple[Array, Array]] | None = None,
    ) -> None:
        """Lay the ground: grid lines (x, y, depth), depth dug in each plan cell, modulus by depth, map of the plan."""
        mesh = MeshHex.init_tensor(*lines)
        self.shape = tuple(len(line) for line in lines)
        nearest = [np.argmin(abs(mesh.p[i][:, None] - lines[i][None, :]), axis=1) for i in range(3)]
        self.grid = np.array(nearest).T
        self.vertex = np.zeros(self.shape, int)
        self.vertex[tuple(nearest)] = np.arange(mesh.p.shape[1])
        middle = mesh.p[:, mesh.t].mean(axis=1)
        cell = [np.clip(np.searchsorted(lines[i], middle[i]) - 1, 0, self.shape[i] - 2) for i in (0, 1)]
        keep = np.flatnonzero(middle[2] > np.asarray(dig)[cell[0], cell[1]])
        points = mesh.p.copy()
        if plan is not None:
            points[0], points[1] = plan(mesh.p[0], mesh.p[1])
        self.points, self.depth, self.dig = points, lines[2], np.asarray(dig)
        basis = Basis(MeshHex(points, mesh.t), ElementVector(ElementHex1()), elements=keep, intorder=2)
        self.dofs = basis.nodal_dofs

        @BilinearForm
        def elastic(u: Array, v: Array, w: Array) -> Array:
            E = modulus(w.x[2])
            e, f = sym_grad(u), sym_grad(v)
            shear, volume = E / (2 * (1 + nu)), E * nu / ((1 + nu) * (1 - 2 * nu))
            return 2 * shear * ddot(e, f) + volume * ddot(eye(trace(e), 3), f)

        self.parts = [elastic.assemble(basis).tocoo()]
        self.size = basis.N
        self.place = np.zeros((basis.N, 3), int)
        for part in range(3):
            self.place[self.dofs[part]] = self.grid
        self.loads: list[tuple[Array, Array]] = []
        self.held = [self.dofs[part, self.vertex[:, :, -1].ravel()] for part in range(3)]

    def roll(self, nodes: Array, normal: Sequence[float]) -> None:
        """Hold the movement of vertices along a plan direction (a symmetry plane or a far side)."""
        nodes, direction = np.unique(nodes), np.asarray(normal, float)
        if np.max(abs(direction)) > 1 - 1e-9:
            self.held.append(self.dofs[int(np.argmax(abs(direction))), nodes])
            return
        for node in nodes:
            self.spring([(int(self.dofs[part, node]), float(direction[part])) for part in (0, 1)], HELD)

    def spring(self, unknowns: Sequence[tuple[int, float]], stiffness: float) -> None:
        """Spring on a weighted sum of unknowns, kN/m."""
        at, weight = np.array([u for u, _ in unknowns]), np.array([w for _, w in unknowns])
        self._add(at, stiffness * np.outer(weight, weight))

    def wall(self, nodes: Sequence[tuple[int, int]], plates: Sequence[Plate], toe: float) -> Path:
        """Put a wall along plan nodes down to the depth `toe`; one plate per facet."""
        down = int(np.argmin(abs(self.depth - toe))) + 1
        xy = np.array([self.points[:2, self.vertex[i, j, 0]] for i, j in nodes])
        chord = np.diff(xy, axis=0)
        length = np.hypot(*chord.T)
        tangent = chord / length[:, None]
        normal = np.column_stack([-tangent[:, 1], tangent[:, 0]])
        path = Path(tuple(nodes), self.size, down, tuple(plates), normal, tangent, length)
        where = np.array([(i, j, k) for i, j in nodes for k in range(down)])
        self.place = np.vstack([self.place, *[where] * 4])
        self.size += 4 * len(where)
        for facet, plate in enumerate(plates):
            self._facet(path, facet, plate)
        return path

    def load(self, path: Path, pressure: Callable[[int, Array], Array]) -> None:
        """Press on a wall: `pressure(facet, depth)` in kPa, positive into the pit."""
        for facet, plate in enumerate(path.plates):

            @LinearForm
            def pressed(v: Array, w: Array, facet: int = facet) -> Array:
                return pressure(facet, w.x[-1]) * v

            for basis, turn, share in self._plates(path, facet, plate):
                self.loads.append((turn.T @ (share * pressed.assemble(basis)), turn))

    def beam(self, path: Path, depth: float, EI: float, EA: float) -> None:
        """Add a waler or capping beam along a whole wall, bending and stretching, whole round its corners."""
        node = self._level(depth)
        for facet, length in enumerate(path.lengths):
            mesh = MeshLine(np.array([0.0, length]))
            for element, kinds, form in (
                (ElementLineHermite(), ("w", "ws"), bend),
                (ElementLineP1(), ("u",), laplace),
            ):
                basis = Basis(mesh, element, intorder=4)
                turn = self._turn(path, facet, basis, lambda p: (int(p[0] > 0), node), kinds)
                self._add_turned((EA if len(kinds) == 1 else EI) * form.assemble(basis), turn)

    def at(self, path: Path, column: int, depth: float, direction: Sequence[float]) -> list[tuple[int, float]]:
        """Unknowns of the plan movement of a wall node along a direction, for `spring`."""
        i, j = path.nodes[column]
        node = self.vertex[i, j, int(np.argmin(abs(self.depth - depth)))]
        return [(int(self.dofs[part, node]), float(direction[part])) for part in (0, 1)]

    def hold_turn(self, path: Path, column: int, normal: Sequence[float]) -> None:
        """Make a wall end lie on a symmetry plane with this normal: no turn, no slope across it."""
        for node in range(path.depth_nodes):
            slot = self._slots(path, column, node)
            self.held.append(np.array([slot[0], slot[3]]))
            self.spring([(slot[1], normal[0]), (slot[2], normal[1])], HELD)

    def solve(self) -> Block:
        """Assemble and solve directly; answers by `deflection` and `moment`."""
        rows, cols, values = (
            np.concatenate(a) for a in zip(*[(p.row, p.col, p.data) for p in self.parts], strict=True)
        )
        K = sparse.coo_matrix((values, (rows, cols)), (self.size, self.size)).tocsr()
        F = np.zeros(self.size)
        for values, _ in self.loads:
            F[: len(values)] += values
        diagonal = K.diagonal()
        live = diagonal > 1e-9
        live[np.concatenate(self.held)] = False
        ids = np.flatnonzero(live)
        ids = ids[dissect(self.place[ids])]
        scale = 1 / np.sqrt(diagonal[ids])
        D = sparse.diags(scale)
        factors = splu(
            (D @ K[ids][:, ids] @ D).tocsc(), "NATURAL", diag_pivot_thresh=0.0, options={"SymmetricMode": True}
        )
        self.U = np.zeros(self.size)
        self.U[ids] = scale * factors.solve(scale * F[ids])
        self.unknowns = len(ids)
        return self

    def deflection(self, path: Path, facet: int) -> Array:
        """Mean movement into the pit down a facet, square to it, m."""
        return self._down(path, facet)[0]

    def moment(self, path: Path, facet: int) -> Array:
        """Mean vertical bending moment down a facet, tension on the excavated face positive, kNm/m."""
        w, t = self._down(path, facet)
        h = np.diff(self.depth[: path.depth_nodes])
        top = (6 * (w[1:] - w[:-1]) / h - 4 * t[:-1] - 2 * t[1:]) / h
        base = (6 * (w[:-1] - w[1:]) / h + 2 * t[:-1] + 4 * t[1:]) / h
        curve = np.append(top, base[-1])
        curve[1:-1] = (top[1:] + base[:-1]) / 2
        return -path.plates[facet].Dv * curve

    def _down(self, path: Path, facet: int) -> tuple[Array, Array]:
        """Mean deflection and slope along a facet: of its ends and, for a plate, h/12 of the change of turn."""
        n = path.normals[facet]
        values = []
        for column in (facet, facet + 1):
            i, j = path.nodes[column]
            nodes = self.vertex[i, j, : path.depth_nodes]
            slots = np.array([self._slots(path, column, k) for k in range(path.depth_nodes)])
            plan, slope = self.U[self.dofs[:2, nodes]], self.U[slots[:, 1:3].T]
            values.append((n @ plan, n @ slope, self.U[slots[:, 0]], self.U[slots[:, 3]]))
        (w0, t0, r0, q0), (w1, t1, r1, q1) = values
        by = path.lengths[facet] / 12 * bool(path.plates[facet].Dh)
        return (w0 + w1) / 2 + by * (r0 - r1), (t0 + t1) / 2 + by * (q0 - q1)

    def _slots(self, path: Path, column: int, node: int) -> list[int]:
        """Own unknowns of a wall node: turn, slope down (x, y), slope of the turn."""
        count = len(path.nodes) * path.depth_nodes
        # a closed wall ends on its first column
        column = 0 if path.nodes[column] == path.nodes[0] else column
        return [path.first + part * count + column * path.depth_nodes + node for part in range(4)]

    def _facet(self, path: Path, facet: int, plate: Plate) -> None:
        for basis, turn, share in self._plates(path, facet, plate):
            form = plate_form(plate) if plate.Dh else bend
            self._add_turned(share * (1.0 if plate.Dh else plate.Dv) * form.assemble(basis), turn)
        if plate.Eh or plate.Ev:
            basis = Basis(self._sheet(path, facet), ElementVector(ElementQuad1()))
            turn = self._turn(path, facet, basis, self._spot(path, facet), ("u", "v"))
            self._add_turned(membrane_form(plate).assemble(basis), turn)

    def _plates(self, path: Path, facet: int, plate: Plate) -> list[tuple[Basis, sparse.csr_matrix, float]]:
        """Bases of the bending elements of a facet, how they hang on the unknowns, and the share of each."""
        if plate.Dh:
            basis = Basis(self._sheet(path, facet), ElementQuadBFS(), intorder=6)
            return [(basis, self._turn(path, facet, basis, self._spot(path, facet), ("w", "ws", "wz", "wsz")), 1.0)]
        basis = Basis(MeshLine(self.depth[: path.depth_nodes]), ElementLineHermite(), intorder=6)
        return [
            (basis, self._turn(path, facet, basis, lambda p, e=end: (e, self._level(p[0])), ("w", "wz")),
             path.lengths[facet] / 2)
            for end in (0, 1)
        ]  # fmt: skip

    def _sheet(self, path: Path, facet: int) -> MeshQuad:
        return MeshQuad.init_tensor(np.array([0.0, path.lengths[facet]]), self.depth[: path.depth_nodes])

    def _level(self, depth: float) -> int:
        return int(np.argmin(abs(self.depth - depth)))

    def _spot(self, path: Path, facet: int) -> Callable[[Array], tuple[int, int]]:
        return lambda p: (int(p[0] > path.lengths[facet] / 2), self._level(p[1]))

    def _turn(
        self, path: Path, facet: int, basis: Basis, spot: Callable[[Array], tuple[int, int]], kinds: Sequence[str]
    ) -> sparse.csr_matrix:
        """Matrix that makes an element's own unknowns from those of the block."""
        rows, cols, values = [], [], []
        n, t = path.normals[facet], path.tangents[facet]
        for vertex, point in enumerate(basis.mesh.p.T):
            end, level = spot(point)
            column = facet + end
            node = self.vertex[(*path.nodes[column], level)]
            turn, sx, sy, twist = self._slots(path, column, level)
            ux, uy, uz = self.dofs[:, node]
            terms = {
                "w": ((ux, n[0]), (uy, n[1])), "ws": ((turn, 1.0),), "wz": ((sx, n[0]), (sy, n[1])),
                "wsz": ((twist, 1.0),), "u": ((ux, t[0]), (uy, t[1])), "v": ((uz, 1.0),),
            }  # fmt: skip
            for kind, row in zip(kinds, basis.nodal_dofs[:, vertex], strict=True):
                for col, value in terms[kind]:
                    rows.append(row), cols.append(col), values.append(value)
        return sparse.csr_matrix((values, (rows, cols)), (basis.N, self.size))

    def _add(self, at: Array, block: Array) -> None:
        index = np.repeat(at, len(at)), np.tile(at, len(at))
        self.parts.append(sparse.coo_matrix((block.ravel(), index), (self.size, self.size)))

    def _add_turned(self, element: sparse.csr_matrix, turn: sparse.csr_matrix) -> None:
        self.parts.append((turn.T @ element @ turn).tocoo())
