"""What breaks a mirror axis of the plan, attribute by attribute; and whether one cut mirrors about its middle."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import shapely
from scipy.spatial import cKDTree
from shapely.geometry.base import BaseGeometry

from ingest.model import Limits, Site
from sections.found import PitShape, Stations, SupportRow
from sections.model import Axis, Bools, Floats, Ints, PitLoad
from sections.pit.chainage import area_of, locate, point_at
from sections.pit.ground import layers_along
from sections.pit.near_loads import shape_of
from sections.pit.symmetry import FULL, circle_axis, mirrored, plan_axes

PLACE = 0.1
"""A mirror image within this distance of its counterpart counts, m (judgement)."""
STRATA = 5.0
"""Tops of strata within this many level tolerances count as alike (judgement)."""


def find_axes(
    site: Site, shape: PitShape, stations: Stations, rows: Sequence[SupportRow], loads: Sequence[PitLoad]
) -> tuple[Axis, ...]:
    """Mirror axes of a pit, local coordinates, each with what breaks it.

    An axis is complete when the plan mirrors within one part in a hundred of its area and walls, floors, supports,
    loads and ground mirror within the tolerances; of a true circle one entry stands for all diameters.
    """
    whole = circle_axis(shape)
    if whole is not None:
        broken = _broken_everywhere(site, shape, stations, rows, loads)
        if not broken:
            return (whole,)
        whole = replace(whole, complete=False, broken_by=broken)
        return (whole,)
    if not shape.closed:
        return ()
    centre = area_of(shape).centroid
    axes = []
    for direction, overlap in plan_axes(shape):
        point = (float(centre.x), float(centre.y))
        broken = what_breaks(site, shape, stations, rows, loads, point, direction)
        if overlap < FULL:
            broken = (f"plan: overlap {overlap:.3f}", *broken)
        axes.append(Axis(point=point, direction=direction, overlap=overlap, complete=not broken, broken_by=broken))
    return tuple(axes)


def _broken_everywhere(
    site: Site, shape: PitShape, stations: Stations, rows: Sequence[SupportRow], loads: Sequence[PitLoad]
) -> tuple[str, ...]:
    """What breaks a circle: whatever breaks one of three diameters that no struts or loads favour together."""
    assert shape.circle is not None
    words: dict[str, None] = {}
    for direction in (0.0, 67.0, 131.0):
        for text in what_breaks(site, shape, stations, rows, loads, shape.circle.centre, direction):
            words.setdefault(text.split(":")[0])
    return tuple(words)


def what_breaks(
    site: Site,
    shape: PitShape,
    stations: Stations,
    rows: Sequence[SupportRow],
    loads: Sequence[PitLoad],
    centre: tuple[float, float],
    direction: float,
) -> tuple[str, ...]:
    """Attributes that have no mirror image about an axis, each with how much of it."""
    ends = np.append(stations.chainage[1:], shape.length) if shape.closed else stations.chainage[1:]
    start = stations.chainage[: len(ends)]
    middle, weight = 0.5 * (start + ends), ends - start
    spots = point_at(shape, middle)
    found = locate(shape, mirrored(spots, centre, direction))
    met = found.distance <= max(PLACE, 0.01 * np.sqrt(area_of(shape).area))
    there = np.clip(np.searchsorted(stations.chainage, found.at, side="right") - 1, 0, len(start) - 1)
    here = np.arange(len(start))
    words = [
        _share("walls", weight[met], _walls_alike(shape, stations, here, there, site.limits)[met]),
        _share("floors", weight[met], _levels_alike(stations, here, there, site.limits)[met]),
        _share("ground", weight[met], _ground_alike(site, spots, point_at(shape, found.at))[met]),
        _supports(site, rows, centre, direction),
        _loads(loads, site.limits, centre, direction),
    ]
    return tuple(word for word in words if word)


def _share(what: str, weight: Floats, alike: Bools) -> str:
    """Words for the length of wall without a mirror image; places where two stretches meet may differ by a station."""
    broken = float(np.sum(weight[~alike]))
    return f"{what}: {broken:.1f} m of wall has no mirror image" if broken > max(1.0, 0.01 * np.sum(weight)) else ""


def _walls_alike(shape: PitShape, stations: Stations, here: Ints, there: Ints, limits: Limits) -> Bools:
    keys: dict[object, int] = {}
    walls = [replace(run.wall, sources=(), count=None, structural=None, top=None, toe=None) for run in shape.runs]
    rounded = [replace(w, centres=None if w.centres is None else round(w.centres, 1)) for w in walls]
    label = np.array([keys.setdefault(str(wall), len(keys)) for wall in rounded] + [-1])[stations.run]
    alike = label[here] == label[there]
    for values in (stations.top, stations.toe):
        alike &= _close(values[here], values[there], limits.level)
    return np.asarray(alike)


def _levels_alike(stations: Stations, here: Ints, there: Ints, limits: Limits) -> Bools:
    floors = _close(stations.floor[here], stations.floor[there], limits.level)
    return floors & _close(stations.ground[here], stations.ground[there], limits.level)


def _close(one: Floats, other: Floats, tolerance: float) -> Bools:
    return np.asarray((np.isnan(one) & np.isnan(other)) | (np.abs(one - other) <= tolerance + 1e-9))


def _ground_alike(site: Site, here: Floats, there: Floats) -> Bools:
    if not site.strata:
        return np.ones(len(here), dtype=bool)
    one, other = layers_along(site, here), layers_along(site, there)
    return np.asarray(np.all(_close(one, other, STRATA * site.limits.level), axis=0))


def _supports(site: Site, rows: Sequence[SupportRow], centre: tuple[float, float], direction: float) -> str:
    index = [i for row in rows for i in row.supports]
    kind = np.repeat(np.arange(len(rows)), [len(row.supports) for row in rows])
    if not index:
        return ""
    members = [site.supports[i] for i in index]
    head = np.array([member.head for member in members])
    far = np.array([member.far for member in members])
    image_head, image_far = head.copy(), far.copy()
    image_head[:, :2] = mirrored(head[:, :2], centre, direction)
    image_far[:, :2] = mirrored(far[:, :2], centre, direction)
    both = np.vstack([np.hstack([head, far]), np.hstack([far, head])])
    gap, nearest = cKDTree(both).query(np.hstack([image_head, image_far]), distance_upper_bound=4.0 * PLACE)
    looks = np.array([_looks(row) for row in rows])
    met = np.isfinite(gap) & (gap <= 2.0 * PLACE)
    partner = kind[np.where(met, nearest % len(index), 0)]
    alone = ~met | (looks[partner] != looks[kind])
    return f"supports: {int(np.sum(alone))} of {len(index)} have no mirror image" if np.any(alone) else ""


def _looks(row: SupportRow) -> str:
    return f"{row.member.role} {row.member.free_length} {row.member.bond_length}"


def _loads(loads: Sequence[PitLoad], limits: Limits, centre: tuple[float, float], direction: float) -> str:
    alone = 0
    shapes = [shape_of(load) for load in loads]
    for load, outline in zip(loads, shapes, strict=True):
        image = shapely.transform(outline, lambda points: mirrored(points, centre, direction))
        alone += not any(
            other.kind == load.kind and _same_value(load, other, limits) and _same_place(image, there)
            for other, there in zip(loads, shapes, strict=True)
        )
    return f"loads: {alone} of {len(loads)} have no mirror image" if alone else ""


def _same_value(one: PitLoad, other: PitLoad, limits: Limits) -> bool:
    if one.value is None or other.value is None:
        return one.value == other.value
    return abs(one.value - other.value) <= limits.surcharge


def _same_place(one: BaseGeometry, other: BaseGeometry) -> bool:
    return bool(shapely.hausdorff_distance(one, other, densify=0.25) <= 4.0 * PLACE)


def cut_mirrors(stations: Stations, rows: Sequence[SupportRow], station: int, limits: Limits) -> tuple[bool, str]:
    """Whether the cut from a station square to the wall opposite mirrors about its middle, and why or why not.

    Compared are wall, levels, surcharge and the levels and spacings of the supports of both walls, within the
    tolerances of `limits`.
    """
    if not np.isfinite(stations.facing[station]):
        return False, "no wall opposite"
    there = int(np.searchsorted(stations.chainage, stations.facing_chainage[station] + 1e-3, side="right") - 1)
    if not stations.facing_like[station]:
        return False, "the wall opposite differs in kind, depth, load, length or direction"
    for name, tolerance in (
        ("ground", limits.level),
        ("floor", limits.level),
        ("top", limits.level),
        ("toe", limits.level),
    ):
        values = getattr(stations, name)
        if not _close(values[[station]], values[[there]], tolerance)[0]:
            return False, f"{name} differs: {values[station]:.2f} and {values[there]:.2f}"
    one, other = _signature(rows, stations.supports[station]), _signature(rows, stations.supports[there])
    if one != other:
        return False, "the supports of the two walls differ"
    text = f"both walls agree within {limits.level:g} m in level and {limits.surcharge:g} kPa in surcharge"
    return True, text


def _signature(rows: Sequence[SupportRow], held: tuple[int, ...]) -> list[tuple[str, float | None, float | None]]:
    members = [rows[i].member for i in held]
    return sorted(
        ((m.role, None if m.level is None else round(m.level, 1), m.spacing and round(m.spacing, 1)) for m in members),
        key=str,
    )
