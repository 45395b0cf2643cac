"""The folded wall: the whole perimeter as one orthotropic plate and membrane on spreading ground.

Energy per facet, s along the wall, z downwards, w into the pit, u along the wall:

    1/2 [ Dv w_zz^2 + Dh w_ss^2 + 4 Dk w_sz^2                      plate
          + Eht u_s^2 + Gt u_z^2                                    membrane
          + k w^2 + SLIP k u^2 + ACROSS G w_s^2 + DOWN G w_z^2 ]    ground: springs k, spreading G
    + corner law + walers + members - p w

Own method, checked against plates, beams on elastic foundation, rings and a three-dimensional elastic block of the same
idealisation. Only ratios of its answers to those of its two-dimensional twin are used, never movements.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse

from sections.model import Bools, Floats, Ints
from sections.screening.hermite import LineMatrices, line_matrices
from sections.screening.pattern import Pattern

SLIP = 0.05
"""Ground resistance along the wall as a share of that across it (tuned to the block on one L-shaped pit)."""
ACROSS, DOWN = 1.0, 0.5
"""Shares of the ground's spreading stiffness along and down the wall (tuned to the block on four rectangles)."""


@dataclass(frozen=True, kw_only=True)
class FoldedWall:
    """Arrays of one perimeter; ns facets between columns, ne elements down the wall.

    Attributes:
        columns: (nc, 2) plan points, counter-clockwise, excavated side on the left; a facet joins neighbours.
        closed: Whether the last column joins the first.
        z: (ne + 1,) depth of the nodes below the highest wall top, m, rising.
        on: (ns, ne) where the wall exists.
        Dv, Dh, Dk, Eht, Gt: (ns,) plate stiffness down, along and in twist kNm; membrane kN/m.
        spring: (ns, ne) kPa/m, spread: (ns, ne) kN/m: ground on both sides as it stands in this stage.
        corner_spring: (ns, ne) geometric mean sqrt(k_r G_r) of the retained ground, for the corner law.
        pressure: (ns, ne, 2) unbalanced pressure at the top and base of each element, kPa.
    """

    columns: Floats
    closed: bool
    z: Floats
    on: Bools
    Dv: Floats
    Dh: Floats
    Dk: Floats
    Eht: Floats
    Gt: Floats
    spring: Floats
    spread: Floats
    corner_spring: Floats
    pressure: Floats

    @property
    def ends(self) -> Ints:
        """(ns, 2) columns at the two ends of each facet."""
        start = np.arange(len(self.Dv))
        return np.column_stack([start, (start + 1) % len(self.columns)])

    @property
    def chords(self) -> Floats:
        """(ns, 2) vectors along the facets."""
        ends = self.ends
        return np.asarray(self.columns[ends[:, 1]] - self.columns[ends[:, 0]])

    @property
    def tangents(self) -> Floats:
        """(ns, 2) unit vectors along the facets."""
        chord = self.chords
        return np.asarray(chord / np.hypot(chord[:, 0], chord[:, 1])[:, None])

    @property
    def normals(self) -> Floats:
        """(ns, 2) unit vectors into the pit."""
        t = self.tangents
        return np.column_stack([-t[:, 1], t[:, 0]])

    @property
    def size(self) -> int:
        """Number of unknowns: (Ux, Uy, turn) times (value, slope) at every node."""
        return len(self.columns) * 6 * len(self.z)


def unknown(wall: FoldedWall, column: Ints, part: int, node: Ints, slope: int = 0) -> Ints:
    """Index of an unknown: `part` 0 and 1 plan movement, 2 turn about the vertical."""
    return np.asarray(((column * 3 + part) * len(wall.z) + node) * 2 + slope)


def along_matrices(wall: FoldedWall, along: LineMatrices) -> dict[str, Floats]:
    """Matrices along the facets in the unknowns (Ux, Uy, turn) of their two columns: (ns, 6, 6) each."""
    ns = len(wall.Dv)
    across, slide = np.zeros((ns, 4, 6)), np.zeros((ns, 2, 6))
    across[:, 0, 0:2] = across[:, 2, 3:5] = wall.normals
    across[:, 1, 2] = across[:, 3, 5] = 1.0
    slide[:, 0, 0:2] = slide[:, 1, 3:5] = wall.tangents

    def turned(matrix: Floats, by: Floats) -> Floats:
        return np.asarray(np.einsum("sai,sab,sbj->sij", by, matrix, by, optimize=True))

    return {
        "mass": turned(along.mass, across),
        "slope": turned(along.slope, across),
        "bend": turned(along.bend, across),
        "slip": turned(along.mass1, slide),
        "stretch": turned(along.slope1, slide),
        "load": np.einsum("sai,sa->si", across, along.even),
    }


def element_unknowns(wall: FoldedWall) -> Ints:
    """(ns, ne, 24) unknowns of each element, (6 along) x (4 down)."""
    ne = len(wall.z) - 1
    nodes = np.column_stack([np.arange(ne), np.arange(1, ne + 1)])
    parts = (wall.ends[:, :, None] * 3 + np.arange(3)).reshape(-1, 6)
    downs = (nodes[:, :, None] * 2 + np.arange(2)).reshape(-1, 4)
    index = parts[:, None, :, None] * (2 * len(wall.z)) + downs[None, :, None, :]
    return np.asarray(index.reshape(len(parts), ne, 24))


def assemble(wall: FoldedWall, pattern: Pattern) -> sparse.csr_matrix:
    """Stiffness of wall, ground and corners; members and walers are added apart."""
    lengths = np.hypot(*wall.chords.T)
    along, down = along_matrices(wall, line_matrices(lengths)), line_matrices(np.diff(wall.z))
    on = wall.on.astype(float)
    terms = (
        (wall.Dv[:, None] * on, along["mass"], down.bend),
        (wall.Dh[:, None] * on, along["bend"], down.mass),
        (4 * wall.Dk[:, None] * on, along["slope"], down.slope),
        (wall.Eht[:, None] * on, along["stretch"], down.mass),
        (wall.Gt[:, None] * on, along["slip"], down.slope),
        (wall.spring * on, along["mass"] + SLIP * along["slip"], down.mass),
        (ACROSS * wall.spread * on, along["slope"], down.mass),
        (DOWN * wall.spread * on, along["mass"], down.slope),
    )
    s_parts = np.stack([s_part.reshape(-1, 36) for _, s_part, _ in terms], axis=-1)
    z_parts = np.stack([z_part.reshape(-1, 16) for _, _, z_part in terms], axis=1)
    factors = np.stack([factor for factor, _, _ in terms], axis=-1)
    elements = np.matmul(s_parts[:, None], factors[..., None] * z_parts[None])
    return sparse.csr_matrix(pattern.gather(elements) + corner_law(wall, down))


def load_operator(wall: FoldedWall) -> sparse.csr_matrix:
    """Matrix (size, ns ne 2) from a pressure that is linear down each element and even along each facet to its load."""
    ns, ne = wall.on.shape
    down = line_matrices(np.diff(wall.z))
    along = along_matrices(wall, line_matrices(np.hypot(*wall.chords.T)))["load"]
    depthwise = np.stack([down.even - down.ramp, down.ramp], axis=-1)
    values = np.einsum("si,ekp,se->seikp", along, depthwise, wall.on.astype(float))
    rows = np.broadcast_to(element_unknowns(wall)[..., None], (ns, ne, 24, 2))
    cols = np.broadcast_to(np.arange(ns * ne * 2).reshape(ns, ne, 1, 2), (ns, ne, 24, 2))
    entries = (values.ravel(), (rows.ravel(), cols.ravel()))
    return sparse.csr_matrix(entries, shape=(wall.size, ns * ne * 2))


def corner_law(wall: FoldedWall, down: LineMatrices) -> sparse.csr_matrix:
    """Springs that the ground round an inside corner adds to both walls there: f sqrt(k_r G_r) per metre of depth.

    f = t (1 + t) with t = turn / 90 degrees; 0 at re-entrant corners. Own empirical fit to the elastic block, chosen to
    hold for right angles and to fade on arcs.
    """
    nc = len(wall.columns)
    here = np.arange(nc) if wall.closed else np.arange(1, nc - 1)
    before, after = (here - 1) % nc, here % nc
    t = wall.tangents
    turn = np.arctan2(t[before, 0] * t[after, 1] - t[before, 1] * t[after, 0], np.sum(t[before] * t[after], axis=1))
    share = np.maximum(turn / (np.pi / 2), 0.0)
    factor = share * (1 + share)
    rows, cols, values = [], [], []
    nodes = np.column_stack([np.arange(len(wall.z) - 1), np.arange(1, len(wall.z))])
    for facet in (before, after):
        normal = wall.normals[facet]
        k = factor[:, None] * wall.corner_spring[facet] * wall.on[facet]
        keep = np.nonzero(factor > 1e-9)[0]
        downs = (nodes[:, :, None] * 2 + np.arange(2)).reshape(-1, 4)
        base = here[keep][:, None, None] * 3 + np.arange(2)[None, :, None]
        index = (base[:, None] * (2 * len(wall.z)) + downs[None, :, None, :]).reshape(len(keep), len(downs), 8)
        outer = normal[keep, :, None] * normal[keep, None, :]
        block = np.einsum("ce,cij,ekl->ceikjl", k[keep], outer, down.mass).reshape(*index.shape, 8)
        rows.append(np.repeat(index, 8, -1).ravel())
        cols.append(np.tile(index, (1, 1, 8)).ravel())
        values.append(block.ravel())
    shape = (wall.size, wall.size)
    return sparse.csr_matrix((np.concatenate(values), (np.concatenate(rows), np.concatenate(cols))), shape=shape)
