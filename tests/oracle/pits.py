"""From a scene to its block, cut down by symmetry, to its plane slices, and to ratios along the wall."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from block import Block
from elements import Array, Path
from props import ends_of, near_opposite, nearest_ends, side_of
from scenes import NU, Prop, Scene
from slices import Slice, modulus, plate_of, pressure, solve_slice

REACH = 4.0
"""Ground beyond the wall and depth of the base below the surface, in excavated depths (base: 3.5)."""


def grade(start: float, length: float, count: int, ratio: float) -> Array:
    weights = ratio ** np.arange(count)
    return start + np.cumsum(weights / weights.sum() * length)


def fill(marks: Sequence[float], step: float) -> Array:
    marks = np.unique(np.round(marks, 6))
    pieces = [np.linspace(a, b, max(1, int(np.ceil((b - a) / step - 1e-4))) + 1)[:-1]
              for a, b in zip(marks[:-1], marks[1:], strict=True)]  # fmt: skip
    return np.concatenate([*pieces, marks[-1:]])


def depth_lines(scene: Scene, step: float = 1.0) -> Array:
    marks = [0.0, scene.toe, *(p.depth for p in scene.props), *(d for _, d in scene.dig), *scene.levels]
    return np.concatenate(
        [fill(marks, step), grade(scene.toe, 3.5 * max((scene.deepest, *scene.levels)) - scene.toe, 6, 1.5)]
    )


@dataclass(frozen=True)
class Model:
    """The block of a scene: its wall, per facet side, place along it, point, and a cutter of plane slices."""

    block: Block
    path: Path
    side: Array
    place: Array
    points: Array
    force: Array
    """(props,) compression, nan outside the model, kN."""
    cut: Callable[[int], Slice]


def tensor_model(scene: Scene, refine: float = 1.0) -> Model:
    """Block of a pit with sides along x and y, cut at its mirror planes."""
    deepest = max((scene.deepest, *scene.levels))
    far = REACH * deepest
    marks = [[c[k] for c in scene.corners] + [p.head[k] for p in scene.props if p.tie or _on_side(scene, p, k)]
             for k in (0, 1)]  # fmt: skip
    marks[0] += [x for x, _ in scene.dig]
    mx, my = scene.mirror
    if mx is not None:
        marks[0] = [mx, *(v for v in marks[0] if v > mx)]
    if my is not None:
        marks[1] = [my, *(v for v in marks[1] if v < my)]
    inner = [fill(m, scene.step / refine) for m in marks]
    X = inner[0] if mx is not None else np.concatenate([-grade(-inner[0][0], far, 8, 1.4)[::-1], inner[0]])
    X = np.concatenate([X, grade(inner[0][-1], far, 8, 1.4)])
    Y = np.concatenate([-grade(-inner[1][0], far, 8, 1.4)[::-1], inner[1]])
    Y = Y if my is not None else np.concatenate([Y, grade(inner[1][-1], far, 8, 1.4)])
    Z = depth_lines(scene, 1.0 / refine)
    pit = shapely.Polygon(scene.corners)
    xc, yc = (X[1:] + X[:-1]) / 2, (Y[1:] + Y[:-1]) / 2
    inside = shapely.contains_xy(pit, *np.meshgrid(xc, yc, indexing="ij"))
    dig = np.where(inside, np.array([scene.dig_at(x) if x > 0 else 0.0 for x in xc])[:, None], 0.0)
    block = Block((X, Y, Z), dig, modulus, NU)
    for plane, normal in ((block.vertex[0], (1, 0)), (block.vertex[-1], (1, 0)), (block.vertex[:, 0], (0, 1)),
                          (block.vertex[:, -1], (0, 1))):  # fmt: skip
        block.roll(plane, normal)
    nodes = _trace(scene, pit, X, Y)
    path = block.wall(nodes, [plate_of(scene)] * (len(nodes) - 1), scene.toe)
    for column, node in ((0, nodes[0]), (len(nodes) - 1, nodes[-1])):
        if nodes[0] != nodes[-1]:
            block.hold_turn(path, column, (1, 0) if mx is not None and X[node[0]] == mx else (0, 1))
    xy = np.array([(X[i], Y[j]) for i, j in nodes])
    middles = (xy[1:] + xy[:-1]) / 2
    cells = [(int(np.searchsorted(X, m[0] + 1e-3 * n[0])) - 1, int(np.searchsorted(Y, m[1] + 1e-3 * n[1])) - 1)
             for m, n in zip(middles, path.normals, strict=True)]  # fmt: skip
    dug = [float(dig[c]) for c in cells]
    return _finish(scene, block, path, xy, dug, lambda f: _profile(f, path, cells, X, Y, dig))


def _on_side(scene: Scene, prop: Prop, k: int) -> bool:
    """Whether a prop square to its side needs a grid line in direction k."""
    return abs(prop.far[k] - prop.head[k]) < 1e-9


def _trace(scene: Scene, pit: shapely.Polygon, X: Array, Y: Array) -> list[tuple[int, int]]:
    """Plan nodes along the wall, counter-clockwise; closed rings repeat the first node."""
    mx, my = scene.mirror
    kept = shapely.box(mx if mx is not None else -1e3, -1e3, 1e3, my if my is not None else 1e3)
    outline = shapely.geometry.polygon.orient(shapely.intersection(pit, kept), 1.0)
    points = np.array(outline.exterior.coords)[:-1]
    wall = [not (a[0] == b[0] == mx or a[1] == b[1] == my) for a, b in _pairs(points)]
    first = next((i for i in range(len(wall)) if wall[i] and not wall[i - 1]), 0)
    nodes: list[tuple[int, int]] = []
    for i in range(len(points)):
        a, b = points[(first + i) % len(points)], points[(first + i + 1) % len(points)]
        if wall[(first + i) % len(points)]:
            nodes += _between(a, b, X, Y)[int(bool(nodes)) :]
    return nodes


def _pairs(points: Array) -> list[tuple[Array, Array]]:
    return list(zip(points, np.roll(points, -1, axis=0), strict=True))


def _between(a: Array, b: Array, X: Array, Y: Array) -> list[tuple[int, int]]:
    (i, j), (m, n) = [(int(np.argmin(abs(X - p[0]))), int(np.argmin(abs(Y - p[1])))) for p in (a, b)]
    count = abs(m - i) + abs(n - j)
    return [(i + (m - i) * s // count, j + (n - j) * s // count) for s in range(count + 1)]


def _profile(
    facet: int, path: Path, cells: Sequence[tuple[int, int]], X: Array, Y: Array, dig: Array
) -> tuple[Array, Array, float]:
    """Lines across, depth dug in each strip between them, and the place of the wall, in the sense of its normal."""
    (i, j), n = cells[facet], path.normals[facet]
    lines, dug = (Y, dig[i]) if abs(n[1]) > 0.5 else (X, dig[:, j])
    spot = path.nodes[facet][1] if abs(n[1]) > 0.5 else path.nodes[facet][0]
    sense = np.sign(n[1] if abs(n[1]) > 0.5 else n[0])
    at = lines[spot] * sense
    return (lines * sense, dug, at) if sense > 0 else ((lines * sense)[::-1], dug[::-1], at)


def sector_model(scene: Scene, refine: float = 1.0) -> Model:
    """Block of half a sector of a regular polygon, from the middle of a side to its corner."""
    half = np.pi / scene.sectors
    apothem = float(np.hypot(*scene.corners[0]) * np.cos(half))
    width = apothem * np.tan(half)
    heads = [p.head[1] / width for p in scene.props if p.head[0] > 0 and -1e-9 <= p.head[1] <= width]
    s = fill([0.0, *heads, 1.0], scene.step / refine / width)
    X = np.concatenate([[0.2], fill([1.0, apothem], 1.5)[:-1], apothem + np.array([-0.7, 0.0])])
    X = np.unique(np.round(np.concatenate([X, grade(apothem, REACH * scene.deepest, 10, 1.4)]), 6))
    Z = depth_lines(scene, 1.0 / refine)
    wall = int(np.argmin(abs(X - apothem)))
    dig = np.zeros((len(X) - 1, len(s) - 1))
    dig[:wall] = scene.deepest
    block = Block((X, s, Z), dig, modulus, NU, lambda x, y: (x, x * y * np.tan(half)))
    block.roll(block.vertex[0], (1, 0))
    block.roll(block.vertex[-1], (1, 0))
    block.roll(block.vertex[:, 0], (0, 1))
    across = (-np.sin(half), np.cos(half))
    block.roll(block.vertex[:, -1], across)
    nodes = [(wall, j) for j in range(len(s))]
    path = block.wall(nodes, [plate_of(scene)] * (len(nodes) - 1), scene.toe)
    block.hold_turn(path, 0, (0, 1))
    block.hold_turn(path, len(nodes) - 1, across)
    xy = np.column_stack([np.full(len(s), apothem), s * width])
    lines = np.concatenate([[-0.0], X[1:]])
    profile = -lines[::-1], np.where(lines[1:] <= apothem + 1e-6, scene.deepest, 0.0)[::-1], -apothem
    return _finish(scene, block, path, xy, [scene.deepest] * (len(s) - 1), lambda f: profile)


def _finish(
    scene: Scene, block: Block, path: Path, xy: Array, dug: Sequence[float],
    profile: Callable[[int], tuple[Array, Array, float]],
) -> Model:  # fmt: skip
    block.load(path, lambda f, z: pressure(scene, path.normals[f], dug[f])(z))
    if scene.waler_EI is not None:
        for depth in sorted({p.depth for p in scene.props}):
            block.beam(path, depth, scene.waler_EI, scene.waler_EA)
    held = [_hang(scene, block, path, xy, prop) for prop in scene.props]
    block.solve()
    force = np.array([np.nan if h is None else prop.stiffness * h[1] * sum(block.U[u] * w for u, w in h[0])
                      for h, prop in zip(held, scene.props, strict=True)])  # fmt: skip
    middles = (xy[1:] + xy[:-1]) / 2
    where = [side_of(np.array(scene.corners), m) for m in middles]
    side, place = np.array([w[0] for w in where]), np.array([w[1] for w in where])
    ends, cache = ends_of(scene), {}

    def cut(facet: int) -> Slice:
        lines, strips, at = profile(facet)
        near = nearest_ends(scene, ends, int(side[facet]), float(place[facet]))
        across = near_opposite(scene, ends, near, middles[facet], path.normals[facet])
        key = (tuple(strips), at, tuple(path.normals[facet].round(6)),
               tuple((scene.props[e.prop].stiffness / e.width, scene.props[e.prop].depth) for e in near),
               tuple((scene.props[e.prop].stiffness / e.width, scene.props[e.prop].depth) for e in across))  # fmt: skip
        if key not in cache:
            cache[key] = solve_slice(scene, lines, strips, at, path.normals[facet], near, across, block.depth)
        return cache[key]

    return Model(block, path, side, place, middles, force, cut)


def _hang(
    scene: Scene, block: Block, path: Path, xy: Array, prop: Prop
) -> tuple[list[tuple[int, float]], float] | None:
    """Hang a prop in the block; its unknowns and by what their sum is multiplied to give its shortening."""
    head, far = np.array(prop.head), np.array(prop.far)
    unit = (far - head) / np.hypot(*(far - head))
    gaps = [np.hypot(*(xy - end).T) for end in (head, far)]
    met = [int(np.argmin(gap)) if gap.min() < 1e-4 else -1 for gap in gaps]
    mirror = (None, 0.0) if scene.sectors else scene.mirror
    on_plane = any(m is not None and abs(head[k] - m) < 1e-9 and abs(unit[k]) < 1e-9
                   for k, m in enumerate(mirror))  # fmt: skip
    share = 0.5 if on_plane else 1.0
    if met[0] < 0 and (met[1] < 0 or not prop.tie):
        return None
    sense = 1.0 if prop.tie else -1.0
    if prop.tie and min(met) >= 0:
        unknowns = [*block.at(path, met[0], prop.depth, unit), *block.at(path, met[1], prop.depth, -unit)]
        block.spring(unknowns, share * prop.stiffness)
        return unknowns, 1.0
    column, direction = (met[0], unit) if met[0] >= 0 else (met[1], -unit)
    unknowns = block.at(path, column, prop.depth, sense * direction)
    # a strut cut by the plane across it is twice as stiff on what is left of it
    block.spring(unknowns, share * prop.stiffness * (2.0 if prop.tie else 1.0))
    return unknowns, 2.0 if prop.tie else 1.0
