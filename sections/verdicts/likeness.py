"""Which stations are so alike that one section may stand for another place.

Wall, supports and strata must be alike within tolerance; dig depth, surcharge, outside water and toe may be no worse
than where the section is cut. Stiffness is never "not worse": a stiffer wall or support moves less and takes more.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from ingest.members import Load
from ingest.model import Limits, Site
from sections.found import FoundPit, SupportRow
from sections.model import Bools, Floats, Ints
from sections.pit.along import cover_of
from sections.pit.chainage import ON
from sections.pit.ground import layers_along, water_along
from sections.pit.signature import STRATA
from sections.pit.wall_changes import Construction, construction_of

SIZE = 0.01
"""Thickness, diameter and pile centres within this fraction count as one size (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Likeness:
    """What is compared between the stations of all pits, one pit after the other (n stations).

    Attributes:
        first: Index of each pit's first station.
        pit: Index of the pit of each station.
        type: Kind of wall and supports of each station, as an index into `alike`.
        alike: (k, k) True where two kinds are alike within tolerance.
        facing_type: The same of the wall that a strut ties the station to; -1 where none.
        depth, surcharge, toe, water, span, facing_depth: What numbers are compared; nan where not given. `span` is the
            width of the pit where a strut ties both walls.
        strata: (s, n) tops of the strata.
        loads: (n, l) how many loads of each sort bear on the station.
    """

    first: Ints
    pit: Ints
    type: Ints
    alike: Bools
    facing_type: Ints
    depth: Floats
    surcharge: Floats
    toe: Floats
    water: Floats
    span: Floats
    facing_depth: Floats
    strata: Floats
    loads: Ints


def find_likeness(site: Site, founds: Sequence[FoundPit], limits: Limits) -> Likeness:
    """Gather what must be alike at every station of every pit."""
    types: dict[_Type, int] = {}
    kinds = [_types_of(site, found, types) for found in founds]
    sizes = np.array([len(kind) for kind in kinds], dtype=np.int64)
    ties = [tied_to(found) for found in founds]
    facing = [np.where(tie >= 0, kind[tie], -1) for kind, tie in zip(kinds, ties, strict=True)]
    depth = [found.stations.depth for found in founds]
    across = [np.where(tie >= 0, one[tie], np.nan) for one, tie in zip(depth, ties, strict=True)]
    spans = [np.where(tie >= 0, f.stations.facing, np.nan) for f, tie in zip(founds, ties, strict=True)]
    points = np.concatenate([found.stations.xy for found in founds])
    return Likeness(
        first=np.concatenate([[0], np.cumsum(sizes)[:-1]]).astype(np.int64),
        pit=np.repeat(np.arange(len(founds)), sizes).astype(np.int64),
        type=np.concatenate(kinds),
        alike=np.array([[_alike(a, b, limits) for b in types] for a in types], dtype=bool).reshape(len(types), -1),
        facing_type=np.concatenate(facing),
        depth=np.concatenate(depth),
        surcharge=np.concatenate([found.stations.surcharge for found in founds]),
        toe=np.concatenate([found.stations.toe for found in founds]),
        water=water_along(site, points),
        span=np.concatenate(spans),
        facing_depth=np.concatenate(across),
        strata=layers_along(site, points),
        loads=_load_table(site, founds),
    )


def fits(likeness: Likeness, section: int, limits: Limits) -> Bools:
    """True at the stations (n,) that are alike a section cut at one station, and no worse."""
    like, i = likeness, section
    same = like.alike[like.type[i], like.type] & _like_facing(like, i)
    same &= _close(like.span, i, limits.stiffness_ratio * np.abs(np.nan_to_num(like.span[i])))
    same &= _close(like.facing_depth, i, limits.level)
    for tops in like.strata:
        same &= _close(tops, i, STRATA * limits.level)
    same &= ~_worse(like.depth, i, limits.level) & ~np.isnan(like.depth)
    same &= ~_worse(like.surcharge, i, limits.surcharge)
    same &= ~_worse(like.toe, i, limits.level)
    same &= ~_worse(like.water, i, limits.level)
    return np.asarray(same & np.all(like.loads <= like.loads[i], axis=1))


def misfit(likeness: Likeness, section: int) -> Floats:
    """How much the section over-does each station (n,): shares of depth, toe and surcharge, and loads not there."""
    like, i = likeness, section
    depth = like.depth[i] if like.depth[i] > 0.0 else 1.0
    heavy = max(like.surcharge[i], 1.0)
    total = np.nan_to_num((like.depth[i] - like.depth) / depth) + np.nan_to_num((like.toe[i] - like.toe) / depth)
    total += np.abs(like.surcharge[i] - like.surcharge) / heavy
    return np.asarray(np.clip(total, 0.0, None) + np.sum(np.clip(like.loads[i] - like.loads, 0, None), axis=1))


def tied_to(found: FoundPit) -> Ints:
    """Station of the wall opposite that a strut ties each station to (n,); -1 where none does."""
    stations = found.stations
    n = len(stations.chainage)
    across = np.array([row.member.role == "strut" and _reaches(row) for row in found.rows], dtype=bool)
    cover = cover_of(stations, len(found.rows)) & across
    met = ~np.isnan(stations.facing_chainage)
    opposite = station_under(found, np.where(met, stations.facing_chainage, 0.0))
    shared = (cover & cover[opposite]).any(axis=1) if n else np.zeros(0, dtype=bool)
    return np.where(met & shared, opposite, -1).astype(np.int64)


def station_under(found: FoundPit, chainages: Floats) -> Ints:
    """Index of the station that stands for each chainage (m,): the last one at or before it.

    At a corner a station belongs to the wall that begins there, so the nearest one may stand on the wrong wall.
    """
    index = np.searchsorted(found.stations.chainage, chainages + ON, side="right") - 1
    return np.where(index < 0, len(found.stations.chainage) - 1, index).astype(np.int64)


def nearest_station(found: FoundPit, chainages: Floats) -> Ints:
    """Index of the station nearest to each chainage (m,)."""
    stations = found.stations.chainage
    after = np.searchsorted(stations, chainages)
    before, after = np.clip(after - 1, 0, len(stations) - 1), np.clip(after, 0, len(stations) - 1)
    back, ahead = np.abs(chainages - stations[before]), np.abs(stations[after] - chainages)
    index = np.where(back <= ahead, before, after)
    if found.shape.closed:
        round_ = found.shape.length - chainages + stations[0] < np.minimum(back, ahead)
        index = np.where(round_, 0, index)
    return index.astype(np.int64)


def _reaches(row: SupportRow) -> bool:
    return bool(np.any(~np.isnan(row.head_at) & ~np.isnan(row.far_at)))


class _Held(NamedTuple):
    """One row of supports: what must be the same, and numbers with a tolerance, level first."""

    labels: tuple[object, ...]
    numbers: tuple[float | None, ...]


_Type = tuple[Construction | None, tuple[_Held, ...]]


def _types_of(site: Site, found: FoundPit, types: dict[_Type, int]) -> Ints:
    """Index into `types` of every station; new kinds of wall and supports are added to it."""
    stations = found.stations
    bays = np.round(bays_at(found), 2).tolist()
    known: dict[tuple[int, tuple[tuple[int, float], ...]], int] = {}
    index = np.zeros(len(stations.chainage), dtype=np.int64)
    for i, (number, held) in enumerate(zip(stations.run.tolist(), stations.supports, strict=True)):
        key = (number, tuple((j, bays[i][j]) for j in held))
        if key not in known:
            run = None if number < 0 else found.shape.runs[number]
            rows = tuple(sorted((_held(site, found, j, bay) for j, bay in key[1]), key=_by_level))
            made: _Type = (None if run is None else construction_of(run), rows)
            known[key] = types.setdefault(made, len(types))
        index[i] = known[key]
    return index


def bays_at(found: FoundPit) -> Floats:
    """Distance between the supports on either side of each station, by row (n, rows), m.

    Beyond the outermost support that of the outermost bay; 0 where a row has one support, or none, on this wall.
    """
    stations = found.stations
    bays = np.zeros((len(stations.chainage), len(found.rows)))
    for j, row in enumerate(found.rows):
        at = np.concatenate([row.head_at, row.far_at])
        at = np.sort(at[~np.isnan(at)])
        side = stations.side[station_under(found, at)]
        for one in np.unique(side):
            places, here = at[side == one], stations.side == one
            if len(places) > 1:
                bay = np.clip(np.searchsorted(places, stations.chainage[here], side="right") - 1, 0, len(places) - 2)
                bays[here, j] = np.diff(places)[bay]
    return bays


def _held(site: Site, found: FoundPit, j: int, bay: float) -> _Held:
    row = found.rows[j]
    member = row.member
    first = site.supports[row.supports[0]]
    section = "" if first.section is None else first.section.designation
    length = float(np.hypot(*np.subtract(first.far, first.head)[:2])) if member.role in ("anchor", "raker") else None
    labels = (member.role, section, first.material, row.waler)
    numbers = (member.level, bay, first.EA, member.free_length, length, member.inclination, member.skew)
    return _Held(labels=labels, numbers=numbers)


def _alike(a: _Type, b: _Type, limits: Limits) -> bool:
    return _same_wall(a[0], b[0]) and _same_supports(a[1], b[1], limits)


def _same_wall(a: Construction | None, b: Construction | None) -> bool:
    """Like construction; its levels are compared apart, as a deeper toe may be better."""
    if a is None or b is None or a.labels[0] in ("none", "unknown"):
        return False
    return a.labels == b.labels and all(_same(x, y, SIZE, 0.0) for x, y in zip(a.size, b.size, strict=True))


def _same_supports(a: Sequence[_Held], b: Sequence[_Held], limits: Limits) -> bool:
    """Like rows level by level, the columns being those of `_held`."""
    stiff = limits.stiffness_ratio
    ratios = (0.0, limits.spacing_ratio, stiff, stiff, stiff, 0.0, 0.0)
    slack = (limits.level, 0.0, 0.0, 0.0, 0.0, limits.direction, limits.direction)
    return len(a) == len(b) and all(
        one.labels == other.labels and all(map(_same, one.numbers, other.numbers, ratios, slack))
        for one, other in zip(a, b, strict=True)
    )


def _by_level(support: _Held) -> tuple[float, str]:
    level = support.numbers[0]
    return (np.inf if level is None else -level, str(support.labels))


def _same(a: float | None, b: float | None, ratio: float, slack: float) -> bool:
    if a is None or b is None:
        return a is b
    return abs(a - b) <= ratio * max(abs(a), abs(b)) + slack + 1e-9


def _like_facing(like: Likeness, i: int) -> Bools:
    mine = like.facing_type[i]
    if mine < 0:
        return np.asarray(like.facing_type < 0)
    return np.asarray((like.facing_type >= 0) & like.alike[mine, like.facing_type])


def _close(values: Floats, i: int, tolerance: float) -> Bools:
    both = np.isnan(values) & np.isnan(values[i])
    return np.asarray(both | (np.abs(values - values[i]) <= tolerance + 1e-9))


def _worse(values: Floats, i: int, tolerance: float) -> Bools:
    """True where a value is larger than the section's, or known on one side only."""
    unlike = np.isnan(values) != np.isnan(values[i])
    return np.asarray(unlike | (values > values[i] + tolerance + 1e-9))


def _load_table(site: Site, founds: Sequence[FoundPit]) -> Ints:
    """Loads by sort that bear on each station: two loads of one sort are alike in kind, size, level and distance."""
    sorts: dict[tuple[object, ...], int] = {}
    entries: list[tuple[int, int]] = []
    start = 0
    for found in founds:
        column = {name: _sort_of(site.loads[index], found, sorts) for name, index in found.loads.items()}
        for i, names in enumerate(found.stations.load_ids):
            entries += [(start + i, column.get(name, sorts.setdefault((name,), len(sorts)))) for name in names]
        start += len(found.stations.chainage)
    table = np.zeros((start, len(sorts)), dtype=np.int64)
    for row, sort in entries:
        table[row, sort] += 1
    return table


def _sort_of(load: Load, found: FoundPit, sorts: dict[tuple[object, ...], int]) -> int:
    points = np.asarray(load.points, dtype=np.float64).reshape(-1, 2)
    closed = np.vstack([points, points[:1]])
    edges = tuple(sorted(round(float(edge), 1) for edge in np.hypot(*np.diff(closed, axis=0).T)))
    wall = found.stations.xy
    gaps = np.hypot(points[:, None, 0] - wall[None, :, 0], points[:, None, 1] - wall[None, :, 1])
    reach = (round(float(gaps.min()), 1), round(float(gaps.min(axis=1).max()), 1)) if len(points) else ()
    key = (load.kind, load.value, load.level, load.stage, edges, reach)
    return sorts.setdefault(key, len(sorts))
