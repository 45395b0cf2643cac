"""Where the props of a scene stand on the sides of the wall, and what each of them stands for."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from elements import Array
from scenes import Scene


@dataclass(frozen=True)
class End:
    """One end of a prop on one side of the wall: place along the side, the width it stands for."""

    prop: int
    side: int
    place: float
    width: float


def ends_of(scene: Scene) -> list[End]:
    """Ends of all props on the sides of the pit, with the rule of half gaps, to the end of the side at its ends."""
    corners = np.array(scene.corners)
    found: list[tuple[int, int, float]] = []
    lengths = np.hypot(*(np.roll(corners, -1, axis=0) - corners).T)
    for number, prop in enumerate(scene.props):
        for point in (prop.head, prop.far) if prop.tie else (prop.head,):
            side, place = side_of(corners, np.array(point))
            found.append((number, side, place))
    ends = []
    for number, side, place in found:
        depth = scene.props[number].depth
        level = sorted(p for n, s, p in found if s == side and scene.props[n].depth == depth)
        i = level.index(place)
        low = (level[i - 1] + place) / 2 if i else 0.0
        high = (level[i + 1] + place) / 2 if i + 1 < len(level) else float(lengths[side])
        ends.append(End(number, side, place, high - low))
    return ends


def side_of(corners: Array, point: Array) -> tuple[int, float]:
    chord = np.roll(corners, -1, axis=0) - corners
    length = np.hypot(*chord.T)
    along = np.einsum("sd,sd->s", point - corners, chord) / length
    off = abs(chord[:, 0] * (point - corners)[:, 1] - chord[:, 1] * (point - corners)[:, 0]) / length
    off = np.where((along > -1e-6) & (along < length + 1e-6), off, np.inf)
    side = int(np.argmin(off))
    return side, float(along[side])


def nearest_ends(scene: Scene, ends: Sequence[End], side: int, place: float) -> list[End]:
    """Per level the prop end of a side nearest to a place on it."""
    here = [e for e in ends if e.side == side]
    levels = sorted({scene.props[e.prop].depth for e in here})
    return [min((e for e in here if scene.props[e.prop].depth == z), key=lambda e: abs(e.place - place))
            for z in levels]  # fmt: skip


def near_opposite(scene: Scene, ends: Sequence[End], near: Sequence[End], point: Array, normal: Array) -> list[End]:
    """Prop ends of the wall across that are held still at their other end."""
    corners = np.array(scene.corners)
    ray = shapely.LineString([point + 0.01 * normal, point + 200 * normal])
    hit = shapely.intersection(ray, shapely.Polygon(corners).exterior)
    if hit.is_empty:
        return []
    spot = min((np.array(p.coords[0]) for p in getattr(hit, "geoms", [hit])), key=lambda p: np.hypot(*(p - point)))
    side, place = side_of(corners, spot)
    return [e for e in nearest_ends(scene, ends, side, place) if not scene.props[e.prop].tie]
