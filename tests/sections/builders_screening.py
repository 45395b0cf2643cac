"""Folded walls of the reference case: soil E = 10 + 3 z MPa, nu 0.3, dig 10 m, wall 16 m, K0 gamma 9.5, three props."""

from __future__ import annotations

import numpy as np

from sections.model import Floats
from sections.screening.supports import Beams, Members
from sections.screening.twin import Prop
from sections.screening.wall import FoldedWall

NO_BEAMS = Beams(facet=np.zeros(0, int), node=np.zeros(0, int), EI=np.zeros(0), EA=np.zeros(0))


def folded(
    columns: Floats,
    *,
    closed: bool = True,
    EI: float = 1.28e6,
    monolithic: bool = True,
    H: float = 16.0,
    He: float = 10.0,
    thickness: float = 0.8,
    levels: tuple[float, ...] = (1.0, 4.0, 7.0),
    lateral: float = 9.5,
) -> FoldedWall:
    ns = len(columns) if closed else len(columns) - 1
    z = np.unique(np.concatenate([np.arange(0, H + 1e-9, 1.0), [He], levels]))
    middle = (z[1:] + z[:-1]) / 2
    E = 10e3 + 3e3 * middle
    k, G = E / (1 - 0.3**2) / H, E / 2 / 1.3 * H / 3
    both = 1.0 + (middle > He)
    one = np.ones((ns, len(middle)))
    modulus, share = 12 * EI / thickness**3, float(monolithic)
    pressure = np.stack(
        [np.where(z[:-1] < He - 1e-9, lateral * z[:-1], 0.0), np.where(z[1:] <= He + 1e-9, lateral * z[1:], 0.0)], -1
    )
    return FoldedWall(
        columns=np.asarray(columns, float),
        closed=closed,
        z=z,
        on=one > 0,
        Dv=np.full(ns, EI),
        Dh=np.full(ns, EI * share),
        Dk=np.full(ns, EI * share / 2),
        Eht=np.full(ns, modulus * thickness * share),
        Gt=np.full(ns, modulus * thickness * share / 2.4),
        spring=one * k * both,
        spread=one * G * both,
        corner_spring=one * np.sqrt(k * G),
        pressure=np.broadcast_to(pressure, (ns, len(middle), 2)).copy(),
    )


def smeared(wall: FoldedWall, levels: tuple[float, ...], k: float) -> tuple[Members, list[Prop]]:
    """Even props of k per metre, half of each facet's at its two columns, and the same in the twin."""
    lengths, nodes = np.hypot(*wall.chords.T), [int(np.argmin(abs(wall.z - level))) for level in levels]
    count = len(lengths) * 2 * len(nodes)
    members = Members(
        stiffness=np.tile(np.repeat(k * lengths / 2, 2), len(nodes)),
        column=np.tile(wall.ends.ravel(), len(nodes)),
        node=np.repeat(np.array(nodes, int), len(lengths) * 2),
        far_column=np.full(count, -1),
        far_node=np.full(count, -1),
        direction=np.tile(np.repeat(wall.normals, 2, axis=0), (len(nodes), 1)),
        preload=np.zeros(count),
    )
    return members, [Prop(node=node, stiffness=k) for node in nodes]


def rectangle(length: float, width: float, step: float = 1.0) -> Floats:
    corners = np.array([(0, 0), (length, 0), (length, width), (0, width)], float)
    points = []
    for start, end in zip(corners, np.roll(corners, -1, axis=0), strict=True):
        count = round(float(np.hypot(*(end - start))) / step)
        points += [start + (end - start) * i / count for i in range(count)]
    return np.array(points)


def ring(radius: float, facets: int) -> Floats:
    angle = np.arange(facets) * 2 * np.pi / facets
    return radius * np.column_stack([np.cos(angle), np.sin(angle)])
