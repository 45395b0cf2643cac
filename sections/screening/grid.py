"""Columns along the wall and nodes down it: at every support, pile run, corner and level, close enough between."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sections.found import FoundPit
from sections.model import Floats, Ints

COLUMN_STEP = 1.0
"""Largest distance between columns, m; an eighth of the excavated depth where that is less."""
NODE_STEP = 1.0
MERGE = 0.2
"""Features nearer to each other than this share a column or a node, m."""
LONG = 400.0
"""Perimeter from which columns may stand twice as far apart, m."""


@dataclass(frozen=True, kw_only=True)
class Grid:
    """Columns (nc,) by chainage with their plan points, nodes (nz,) by depth below `top`, stations of the facets."""

    chainage: Floats
    points: Floats
    closed: bool
    top: float
    z: Floats
    station: Ints
    """(ns,) station whose wall, ground and floor each facet has."""

    @property
    def middles(self) -> Floats:
        """(ns,) chainage of the middle of each facet."""
        ends = np.append(self.chainage, self.length) if self.closed else self.chainage
        return np.asarray((ends[1:] + ends[:-1]) / 2)

    length: float = 0.0


def make_grid(found: FoundPit, levels: Floats) -> Grid:
    """Lay the grid over a pit.

    Args:
        found: The pit with stations and supports.
        levels: Levels that need a node (supports, dig levels), m.
    """
    stations, shape = found.stations, found.shape
    depth = float(np.nanmax(stations.depth))
    step = min(COLUMN_STEP, depth / 8) * (2 if shape.length > LONG else 1)
    chainage = _columns(found, step)
    axis, at = shape.axis, shape.at
    if shape.closed:
        axis, at = np.vstack([axis, axis[:1]]), np.append(at, shape.length)
    points = np.column_stack([np.interp(chainage, at, axis[:, k]) for k in (0, 1)])
    top = float(np.nanmax(np.fmax(stations.top, stations.ground)))
    toe = float(np.nanmin(stations.toe))
    wanted = np.concatenate([levels, stations.floor, stations.top, stations.toe])
    z = _nodes(top - wanted[~np.isnan(wanted)], top - toe)
    ends = np.append(chainage, shape.length) if shape.closed else chainage
    middles = (ends[1:] + ends[:-1]) / 2
    station = _nearest(stations.chainage, middles)
    return Grid(
        chainage=chainage, points=points, closed=shape.closed, top=top, z=z, station=station, length=shape.length
    )


def _columns(found: FoundPit, step: float) -> Floats:
    """Chainages of columns: shape vertices and supports exactly, run and zone ends within MERGE, then filled."""
    shape, length = found.shape, found.shape.length
    hard: list[Floats] = [shape.at]
    for row in found.rows:
        hard += [row.head_at[~np.isnan(row.head_at)], row.far_at[~np.isnan(row.far_at)]]
    soft = np.array([run.start for run in found.pit.runs] + [zone.start for zone in found.pit.zones])
    fixed = (
        np.unique(np.round(np.mod(np.concatenate(hard), length), 6))
        if shape.closed
        else np.unique(np.concatenate(hard))
    )
    fixed = _apart(np.asarray(fixed, dtype=np.float64), 1e-3)
    near = np.min(np.abs(soft[:, None] - fixed[None, :]), axis=1) if len(soft) else np.zeros(0)
    fixed = np.unique(np.concatenate([fixed, _apart(np.unique(soft[near > MERGE]), MERGE)]))
    ends = np.append(fixed, length) if shape.closed else fixed
    pieces = [
        np.linspace(a, b, max(1, int(np.ceil((b - a) / step - 1e-9))), endpoint=False)
        for a, b in zip(ends[:-1], ends[1:], strict=True)
    ]
    return np.concatenate(pieces if shape.closed else [*pieces, ends[-1:]])


def _apart(values: Floats, gap: float) -> Floats:
    """Values with those nearer than `gap` to the one before left out."""
    if len(values) == 0:
        return values
    return np.asarray(values[np.concatenate([[True], np.diff(values) > gap])])


def _nodes(wanted: Floats, depth: float) -> Floats:
    """Depths of nodes from 0 to the lowest toe: wanted ones at least MERGE apart, at most NODE_STEP between."""
    inner = np.unique(np.round(wanted[(wanted > 0) & (wanted < depth)], 6))
    marks = _apart(np.concatenate([np.zeros(1), inner], dtype=np.float64), MERGE)
    marks = np.append(marks[marks < depth - MERGE], depth)
    pieces = [
        np.linspace(a, b, max(1, int(np.ceil((b - a) / NODE_STEP - 1e-9))), endpoint=False)
        for a, b in zip(marks[:-1], marks[1:], strict=True)
    ]
    return np.append(np.concatenate(pieces), depth)


def _nearest(values: Floats, wanted: Floats) -> Ints:
    right = np.clip(np.searchsorted(values, wanted), 1, len(values) - 1)
    return np.where(wanted - values[right - 1] <= values[right] - wanted, right - 1, right).astype(np.int64)


def node_at(grid: Grid, level: Floats) -> Ints:
    """(m,) node nearest to each level."""
    return np.asarray(np.argmin(np.abs((grid.top - grid.z)[None, :] - np.asarray(level)[:, None]), axis=1), np.int64)


def column_at(grid: Grid, chainage: Floats) -> Ints:
    """(m,) column nearest to each chainage; -1 for nan."""
    known = np.nan_to_num(chainage)
    gap = np.abs(grid.chainage[None, :] - known[:, None])
    if grid.closed:
        gap = np.minimum(gap, grid.length - gap)
    return np.where(np.isnan(chainage), -1, np.argmin(gap, axis=1)).astype(np.int64)


def facet_at(grid: Grid, chainage: Floats) -> Ints:
    """(m,) facet whose middle is nearest to each chainage; -1 for nan."""
    gap = np.abs(grid.middles[None, :] - np.nan_to_num(chainage)[:, None])
    if grid.closed:
        gap = np.minimum(gap, grid.length - gap)
    return np.where(np.isnan(chainage), -1, np.argmin(gap, axis=1)).astype(np.int64)
