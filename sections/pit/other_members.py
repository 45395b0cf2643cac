"""Members of a pit other than its supports: walers, bearing piles, columns, slabs and footings."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import shapely
from scipy.spatial import cKDTree
from shapely.geometry.base import BaseGeometry

from ingest.members import Plate, Role, Waler
from ingest.model import Site
from ingest.trail import Source
from sections.found import PitShape, SupportRow
from sections.model import Along, Bools, Floats, Member
from sections.pit.chainage import ON, area_of, locate, normal_at
from sections.pit.numbering import in_order
from sections.pit.segmentation import group_alike
from sections.pit.support_ends import REACH

WALER_LEVEL = 1.0
"""A waler within this height of a row carries it, m (judgement)."""
STEP = 0.25
"""Distance at which a waler is laid on the wall, m."""
ACROSS = 0.5
"""Sine of the largest angle between a waler and the wall it runs along (judgement)."""
WALER_SHARE = 0.8
"""A waler that runs along this share of a row carries it (judgement)."""


def find_members(site: Site, shape: PitShape, wall_piles: frozenset[int]) -> tuple[Member, ...]:
    """Walers, bearing piles, columns, slabs and footings of one pit, each role numbered in order of chainage.

    Args:
        wall_piles: Indices into `Site.piles` of the piles that stand in a wall.
    """
    found = {
        "waler": _walers(site, shape),
        "bearing_pile": _bearing_piles(site, shape, wall_piles),
        "column": _columns(site, shape),
        "slab": _plates(site, shape, "slab"),
        "footing": _plates(site, shape, "footing"),
    }
    members: list[Member] = []
    for role, listed in found.items():
        order = in_order(listed)
        members += [replace(listed[i], id=f"{shape.id}-{role}-{n}") for n, i in enumerate(order, start=1)]
    return tuple(members)


def _member(role: Role, count: int, level: float | None, along: tuple[Along, ...], sources: Sequence[Source]) -> Member:
    return Member(
        id="", role=role, count=count, spacing=None, spacing_range=None, inclination=None, skew=None, level=level,
        free_length=None, bond_length=None, along=along, sources=_in_file_order(sources),
    )  # fmt: skip


def _in_file_order(sources: Sequence[Source]) -> tuple[Source, ...]:
    return tuple(sorted({(s.file, s.item): s for s in sources}.values(), key=lambda s: (s.file, s.item)))


def waler_stretches(shape: PitShape, waler: Waler) -> tuple[tuple[float, float], ...]:
    """Stretches of wall, as (from, to), along which a waler runs.

    Where it merely passes the end of another wall, in a sharp corner, it runs across that wall and not along it.
    """
    line = shapely.LineString(waler.points) if len(waler.points) > 1 else shapely.Point(waler.points[0])
    dense = shapely.get_coordinates(shapely.segmentize(line, STEP) if line.length > 0.0 else line)
    pieces = np.diff(dense, axis=0)
    spots = np.concatenate([dense[:-1], dense[1:]])
    found = locate(shape, spots)
    way = np.tile(pieces / np.maximum(np.hypot(*pieces.T), 1e-9)[:, None], (2, 1))
    across = np.abs(np.einsum("ij,ij->i", way, normal_at(shape, found.at)))
    return _stretches(found.at[(found.distance <= REACH) & (across <= ACROSS)], shape)


def _stretches(at: Floats, shape: PitShape) -> tuple[tuple[float, float], ...]:
    """Join chainages less than a metre apart into stretches, across the start of a closed wall too.

    A stretch that stops short of a corner by no more than its reach from the wall goes up to the corner.
    """
    if len(at) == 0:
        return ()
    at = np.sort(at)
    parts = np.split(at, np.flatnonzero(np.diff(at) > 1.0) + 1)
    joined: list[tuple[float, float]] = []
    for part in parts:
        start, to = _to_corner(shape, float(part[0]), -1.0), _to_corner(shape, float(part[-1]), 1.0)
        if joined and start <= joined[-1][1] + ON:
            start = joined.pop()[0]
        joined.append((start, to))
    closing = joined[0][0] + shape.length - joined[-1][1]
    if not shape.closed or closing > (ON if len(joined) > 1 else 1.0):
        return tuple(joined)
    if len(joined) == 1:
        return ((0.0, shape.length),)
    return (*joined[1:-1], (joined[-1][0], joined[0][1]))


def _to_corner(shape: PitShape, place: float, way: float) -> float:
    corners = np.array([corner.at for corner in shape.corners])
    if shape.closed:
        corners = np.concatenate([corners, corners + shape.length])
    ahead = way * (corners - place)
    near = corners[(ahead >= 0.0) & (ahead <= REACH + STEP)]
    return float(near[0]) if len(near) else place


def _walers(site: Site, shape: PitShape) -> list[Member]:
    members = []
    for waler in site.walers:
        along = tuple(
            Along(pit=shape.id, start=start, to=to, end="head")
            for start, to in waler_stretches(shape, waler)
            if (to - start) % shape.length > 0.5 or to - start >= shape.length
        )
        if along:
            members.append(_member("waler", 1, waler.level, along, waler.sources))
    return members


def carry_by_walers(site: Site, shape: PitShape, rows: Sequence[SupportRow]) -> tuple[SupportRow, ...]:
    """Mark the rows that a drawn waler carries: it runs along most of the row within a metre of its level."""
    runs = [(waler, waler_stretches(shape, waler)) for waler in site.walers]
    return tuple(row if row.waler is not None else replace(row, waler=_carried(shape, row, runs)) for row in rows)


def _carried(
    shape: PitShape, row: SupportRow, runs: Sequence[tuple[Waler, tuple[tuple[float, float], ...]]]
) -> bool | None:
    level = row.member.level
    on = np.zeros(len(row.head_at), dtype=bool)
    for waler, stretches in runs:
        if level is not None and waler.level is not None and abs(level - waler.level) > WALER_LEVEL:
            continue
        for start, to in stretches:
            on |= _holds(row.head_at, start, to, shape)
    return True if len(on) and float(np.mean(on)) >= WALER_SHARE else None


def _holds(at: Floats, start: float, to: float, shape: PitShape) -> Bools:
    span = to - start if to >= start else to - start + shape.length
    return np.asarray(np.mod(at - start + 0.25, shape.length) <= span + 0.5)


def _bearing_piles(site: Site, shape: PitShape, wall_piles: frozenset[int]) -> list[Member]:
    """Bearing piles inside the pit, grouped by diameter, toe and top, with the spacing to the nearest pile."""
    index = [
        i
        for i, pile in enumerate(site.piles)
        if i not in wall_piles
        and (pile.bearing or (pile.evidence is not None and pile.evidence.role == "bearing_pile"))
    ]
    index = _inside(shape, index, [site.piles[i].centre for i in index])
    piles = [site.piles[i] for i in index]
    sizes = [(pile.diameter, pile.toe, pile.top) for pile in piles]
    members = []
    for group in _alike(sizes):
        centres = np.array([piles[i].centre for i in group])
        sources = [source for i in group for source in piles[i].sources]
        member = _member("bearing_pile", len(group), piles[group[0]].top, (), sources)
        members.append(_spaced(member, centres, site.limits.spacing_ratio))
    return members


def _spaced(member: Member, centres: Floats, ratio: float) -> Member:
    if len(centres) < 2:
        return member
    nearest = np.asarray(cKDTree(centres).query(centres, k=2)[0])[:, 1]
    low, high = float(np.min(nearest)), float(np.max(nearest))
    uneven = high > (1.0 + ratio) * low
    return replace(member, spacing=float(np.median(nearest)), spacing_range=(low, high) if uneven else None)


def _columns(site: Site, shape: PitShape) -> list[Member]:
    index = _inside(shape, list(range(len(site.columns))), [column.centre for column in site.columns])
    columns = [site.columns[i] for i in index]
    members = []
    for group in _alike([(column.width, column.foot, None) for column in columns]):
        sources = [source for i in group for source in columns[i].sources]
        member = _member("column", len(group), columns[group[0]].foot, (), sources)
        members.append(_spaced(member, np.array([columns[i].centre for i in group]), site.limits.spacing_ratio))
    return members


def _inside(shape: PitShape, index: list[int], points: Sequence[tuple[float, float]]) -> list[int]:
    if not index:
        return []
    spots = np.array(points, dtype=np.float64)
    if shape.closed:
        area = area_of(shape)
        shapely.prepare(area)
        inside = shapely.contains_xy(area, spots[:, 0], spots[:, 1])
    else:
        inside = locate(shape, spots).offset > 0.0
    return [i for i, within in zip(index, inside, strict=True) if within]


def _alike(sizes: Sequence[tuple[float | None, ...]]) -> list[list[int]]:
    """Groups of members whose sizes and levels agree within 0.1 m, not given being a size of its own."""
    if not sizes:
        return []
    table = np.array([[np.nan if v is None else v for v in row] for row in sizes], dtype=np.float64)
    labels = np.column_stack([group_alike(table[:, k], 0.1 if k else 0.02) for k in range(table.shape[1])])
    _, group = np.unique(labels, axis=0, return_inverse=True)
    flat = group.reshape(-1)
    return [np.flatnonzero(flat == i).tolist() for i in range(int(flat.max()) + 1)]


def _plates(site: Site, shape: PitShape, role: Role) -> list[Member]:
    members = []
    for plate in site.plates:
        if plate.role != role or len(plate.outline) < 3:
            continue
        outline = shapely.make_valid(shapely.Polygon(plate.outline))
        spot = shapely.point_on_surface(outline)
        if _inside(shape, [0], [(spot.x, spot.y)]):
            along = _edge_along(shape, plate, outline)
            members.append(_member(role, 1, plate.underside, along, plate.sources))
    return members


def _edge_along(shape: PitShape, plate: Plate, outline: BaseGeometry) -> tuple[Along, ...]:
    """Stretches of wall that a slab reaches."""
    if plate.role != "slab":
        return ()
    edge = shapely.get_coordinates(shapely.segmentize(outline.boundary, 0.25))
    found = locate(shape, edge)
    stretches = _stretches(found.at[found.distance <= REACH], shape)
    return tuple(
        Along(pit=shape.id, start=start, to=to, end="head") for start, to in stretches if abs(to - start) > 1.0
    )
