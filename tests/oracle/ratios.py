"""Ratios along the wall of a scene's block: demands in three dimensions over those of its plane slice."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from elements import Array
from pits import Model, sector_model, tensor_model
from props import End, ends_of, nearest_ends
from scenes import Scene
from slices import Slice

OUTPUTS = ("wall_deflection", "wall_moment_excavated_face", "wall_moment_retained_face", "support_force")

FLOOR = 0.25
"""A demand is taken against at least this share of the section's largest of its kind."""


@dataclass(frozen=True)
class Ratios:
    """Per facet the point on plan, the side, and the four ratios (n, 4), nan where there is none."""

    points: Array
    side: Array
    ratio: Array
    unknowns: int


@dataclass(frozen=True)
class Demands:
    """Per facet deflection and both moments, of the block (bay means where they count) and of its slice, (n, 3)."""

    model: Model
    real: Array
    flat: Array
    near: list[list[End]]
    slices: list[Slice]


def demands(scene: Scene, refine: float = 1.0) -> Demands:
    """Solve the block of a scene and its slices."""
    model = (sector_model if scene.sectors else tensor_model)(scene, refine)
    facets = range(len(model.path.lengths))
    slices = [model.cut(f) for f in facets]
    ends = ends_of(scene)
    w, M = (np.array(part) for part in zip(*[_profiles(model, f) for f in facets], strict=True))
    near = [nearest_ends(scene, ends, int(model.side[f]), float(model.place[f])) for f in facets]
    width = np.array([max((e.width for e in n), default=0.0) for n in near])
    meant = _bay_mean(scene, model, M, width)
    if scene.rows:
        w, M = _bay_mean(scene, model, w, width), meant
    use = np.column_stack([w.max(axis=1), np.maximum(M.max(axis=1), 0.0), np.maximum(-meant.min(axis=1), 0.0)])
    flat = np.array([(s.deflection, s.excavated, s.retained) for s in slices])
    return Demands(model, use, flat, near, slices)


def floored(flat: Array) -> Array:
    """2D demands as they are divided by: a face moment never below a quarter of the section's largest."""
    largest = flat[:, 1:].max(axis=1)
    return np.column_stack([flat[:, 0], np.maximum(flat[:, 1:], FLOOR * largest[:, None])])


def oracle_ratios(scene: Scene, refine: float = 1.0) -> Ratios:
    """Ratios of one stage."""
    d = demands(scene, refine)
    support = [_support(scene, d.model, n, s) for n, s in zip(d.near, d.slices, strict=True)]
    ratio = np.column_stack([d.real / floored(d.flat), support])
    return Ratios(d.model.points, d.model.side, ratio, d.model.block.unknowns)


def staged_ratios(scene: Scene, digs: Sequence[float]) -> Ratios:
    """Ratios of the maxima over stages, without support forces; each stage is a block of its own."""
    levels = tuple(sorted({*scene.levels, *digs}))
    stages = [demands(replace(scene, levels=levels).stage(dug)) for dug in digs]
    real = np.max([d.real for d in stages], axis=0)
    flat = np.max([d.flat for d in stages], axis=0)
    first = stages[-1].model
    ratio = np.column_stack([real / floored(flat), np.full(len(real), np.nan)])
    return Ratios(first.points, first.side, ratio, sum(d.model.block.unknowns for d in stages))


def _profiles(model: Model, facet: int) -> tuple[Array, Array]:
    """Deflection and moment down a facet."""
    return model.block.deflection(model.path, facet), model.block.moment(model.path, facet)


def _bay_mean(scene: Scene, model: Model, values: Array, width: Array) -> Array:
    """Mean of profiles (n, nz) over one bay round each facet, within its side; mirror planes show what lies behind."""
    out = values.copy()
    corners = np.array(scene.corners)
    side_length = np.hypot(*(np.roll(corners, -1, axis=0) - corners).T)
    for side in np.unique(model.side):
        here = np.flatnonzero(model.side == side)
        here = here[np.argsort(model.place[here])]
        place, value = model.place[here], values[here]
        total = side_length[side]
        if model.path.lengths[here].sum() < total - 1e-6:
            place = np.concatenate([place, total - place[::-1]])
            order = np.argsort(place)
            place, value = place[order], np.concatenate([value, value[::-1]])[order]
        edges = np.concatenate([[0.0], np.cumsum(_lengths(place))])
        sums = np.vstack([np.zeros(values.shape[1]), np.cumsum(value * np.diff(edges)[:, None], axis=0)])
        low = np.maximum(model.place[here] - width[here] / 2, 0.0)
        high = np.minimum(model.place[here] + width[here] / 2, total)
        wide = high - low > 1e-9
        gained = np.array([np.interp(high, edges, part) - np.interp(low, edges, part) for part in sums.T]).T
        out[here] = np.where(wide[:, None], gained / np.where(wide, high - low, 1.0)[:, None], values[here])
    return out


def _lengths(place: Array) -> Array:
    """Lengths of facets that fill a side, from their middles."""
    edges, at = [0.0], 0.0
    for middle in place:
        at = 2 * middle - at
        edges.append(at)
    return np.diff(edges)


def _support(scene: Scene, model: Model, near: list[End], flat: Slice) -> float:
    """Worst level at a facet: force of the nearest prop over its width against the slice's force per metre."""
    largest = max(flat.force.values(), default=0.0)
    if largest <= 0:
        return float("nan")
    each = []
    for e in near:
        mate = _mate(scene, model, e)
        z = scene.props[e.prop].depth
        each.append(model.force[mate] / e.width / max(flat.force[z], FLOOR * largest))
    return float(max(each))


def _mate(scene: Scene, model: Model, end: End) -> int:
    """The prop itself, or its image where the model does not hold it."""
    if not np.isnan(model.force[end.prop]):
        return end.prop
    own = scene.props[end.prop]
    kept = [i for i, p in enumerate(scene.props) if p.depth == own.depth and not np.isnan(model.force[i])]
    image = _images(scene, own.head)
    return min(kept, key=lambda i: min(np.hypot(*(np.array(scene.props[i].head) - q)) for q in image))


def _images(scene: Scene, point: tuple[float, float]) -> list[Array]:
    mx, my = scene.mirror
    x = [point[0]] + ([2 * mx - point[0]] if mx is not None else [])
    y = [point[1]] + ([2 * my - point[1]] if my is not None else [])
    return [np.array((a, b)) for a in x for b in y]
