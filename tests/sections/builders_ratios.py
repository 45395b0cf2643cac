"""Small pits for the tests of ratios, verdicts and choice: a polygon or a ring with stations, built without the finder.

Lengths m, levels m, angles degrees. A polygon is given counter-clockwise from the vertex where its chainage starts.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ingest.members import Point, Role, Support
from ingest.model import Site
from sections import found as found_rows
from sections import model as m
from sections.pit.chainage import cast, find_sides, locate, normal_at, point_at, side_of

RECTANGLE = ((100.0, 200.0), (130.0, 200.0), (130.0, 220.0), (100.0, 220.0))
ELL = ((0.0, 0.0), (60.0, 0.0), (60.0, 30.0), (30.0, 30.0), (30.0, 60.0), (0.0, 60.0))


@dataclass(frozen=True, kw_only=True)
class Row:
    """A row of supports by the plan points of their heads and far ends."""

    ends: tuple[tuple[Point, Point], ...]
    level: float = -1.5
    drop: float = 0.0
    role: Role = "strut"
    EA: float | None = 5.2e6
    waler: bool | None = None


def struts_across(xs: Sequence[float], y: tuple[float, float], level: float = -1.5, waler: bool | None = None) -> Row:
    """Struts parallel to y at some x."""
    return Row(ends=tuple(((x, y[0]), (x, y[1])) for x in xs), level=level, waler=waler)


def struts_along(ys: Sequence[float], x: tuple[float, float], level: float = -1.5, waler: bool | None = None) -> Row:
    """Struts parallel to x at some y."""
    return Row(ends=tuple(((x[0], y), (x[1], y)) for y in ys), level=level, waler=waler)


def polygon_pit(
    corners: Sequence[Point] = RECTANGLE,
    *,
    site: Site | None = None,
    rows: Sequence[Row] = (),
    wall: m.Wall | None = None,
    closed: bool = True,
    ground: float = 0.0,
    floor: float = -6.0,
    step: float = 0.5,
    turn: float = 0.0,
    shift: Point = (0.0, 0.0),
    **channels: object,
) -> tuple[Site, found_rows.FoundPit]:
    """A pit of straight walls. `channels` overrides fields of its stations (scalars or arrays)."""
    axis = _moved(np.asarray(corners, dtype=float), turn, shift)
    lengths = np.hypot(*np.diff(np.vstack([axis, axis[:1]]) if closed else axis, axis=0).T)
    at = np.concatenate([[0.0], np.cumsum(lengths)])
    shape = found_rows.PitShape(
        id="P1",
        closed=closed,
        axis=axis,
        at=at[:-1] if closed else at,
        length=float(at[-1]),
        arcs=(),
        corners=_corners(axis, at, closed),
        runs=(m.Run(start=0.0, to=float(at[-1]), wall=wall or piles()),),
        circle=None,
        circles=(),
    )
    moved = tuple(
        replace(row, ends=tuple(tuple(map(tuple, _moved(np.asarray(pair), turn, shift))) for pair in row.ends))  # type: ignore[misc]
        for row in rows
    )
    return _found(site or Site(), shape, moved, ground, floor, step, channels)


def ring_pit(
    radius: float = 12.0,
    *,
    site: Site | None = None,
    wall: m.Wall | None = None,
    ground: float = 0.0,
    floor: float = -10.0,
    step: float = 0.5,
    **channels: object,
) -> tuple[Site, found_rows.FoundPit]:
    """A round pit about (0, 0), chainage from due east."""
    n = 720
    angle = 2 * np.pi * np.arange(n) / n
    length = 2 * np.pi * radius
    shape = found_rows.PitShape(
        id="P1",
        closed=True,
        axis=radius * np.column_stack([np.cos(angle), np.sin(angle)]),
        at=radius * angle,
        length=length,
        arcs=(m.Arc(start=0.0, to=length, centre=(0.0, 0.0), radius=radius, ccw=True),),
        corners=(),
        runs=(m.Run(start=0.0, to=length, wall=wall or diaphragm()),),
        circle=m.Circle(centre=(0.0, 0.0), radius=radius, deviation=0.0, sides=None),
        circles=(),
    )
    return _found(site or Site(), shape, (), ground, floor, step, {"radius": radius, "ring": True, **channels})


def piles(**fields: object) -> m.Wall:
    """A contiguous row, 0.75 m at 1.00 m."""
    return replace(
        m.Wall(
            kind="contiguous", diameter=0.75, centres=1.0, top=0.0, toe=-12.0, continuity="jointed", material="C30/37",
            structural=m.Structural(which="all", count=100, spacing=1.0),
        ),
        **fields,  # type: ignore[arg-type]
    )  # fmt: skip


def diaphragm(**fields: object) -> m.Wall:
    """A diaphragm wall of 0.8 m."""
    return replace(
        m.Wall(kind="diaphragm", thickness=0.8, top=0.0, toe=-12.0, continuity="monolithic", material="C30/37"),
        **fields,  # type: ignore[arg-type]
    )


def spot(found: found_rows.FoundPit, chainage: float) -> int:
    """Index of the station at a chainage."""
    index = int(np.argmin(np.abs(found.stations.chainage - chainage)))
    assert abs(found.stations.chainage[index] - chainage) < 1e-6, f"no station at {chainage}"
    return index


def column(output: str) -> int:
    """Column of an output."""
    from ingest.model import OUTPUTS

    return OUTPUTS.index(output)


def _moved(points: m.Floats, turn: float, shift: Point) -> m.Floats:
    c, s = np.cos(np.radians(turn)), np.sin(np.radians(turn))
    return points @ np.array([[c, s], [-s, c]]) + np.asarray(shift)


def _corners(axis: m.Floats, at: m.Floats, closed: bool) -> tuple[m.Corner, ...]:
    corners = []
    n = len(axis)
    for i in range(n) if closed else range(1, n - 1):
        before, after = axis[i] - axis[i - 1], axis[(i + 1) % n] - axis[i]
        turn = np.degrees(np.arctan2(before[0] * after[1] - before[1] * after[0], before @ after))
        if abs(turn) < 1e-6:
            continue
        angle = 180.0 - float(turn)
        corners.append(
            m.Corner(
                at=float(at[i]),
                point=(float(axis[i, 0]), float(axis[i, 1])),
                interior_angle=angle,
                kind="inside" if angle < 180.0 else "re-entrant",
            )
        )
    return tuple(corners)


def _found(
    site: Site,
    shape: found_rows.PitShape,
    rows: Sequence[Row],
    ground: float,
    floor: float,
    step: float,
    channels: dict[str, object],
) -> tuple[Site, found_rows.FoundPit]:
    supports: list[Support] = list(site.supports)
    held = [_support_row(shape, row, supports, j) for j, row in enumerate(rows)]
    chainage = np.arange(0.0, shape.length - 1e-6, step)
    if not shape.closed:
        chainage = np.append(chainage, shape.length)
    stations = _stations(shape, chainage, ground, floor, held, channels)
    pit = m.Pit(
        id=shape.id,
        closed=shape.closed,
        length=shape.length,
        perimeter=tuple((float(x), float(y)) for x, y in shape.axis),
        ground_level=ground,
        corners=shape.corners,
        runs=shape.runs,
        arcs=shape.arcs,
        zones=_zones(shape),
        circle=shape.circle,
        members=tuple(row.member for row in held),
    )
    found = found_rows.FoundPit(pit=pit, shape=shape, stations=stations, rows=tuple(held))
    return replace(site, supports=tuple(supports)), found


def _zones(shape: found_rows.PitShape) -> tuple[m.Zone, ...]:
    sides = find_sides(shape)
    ends = [(start, (start + length) % shape.length) for start, length in zip(sides.start, sides.length, strict=True)]
    return tuple(
        m.Zone(id=f"P1-Z{i + 1}", start=float(a), to=float(b) or shape.length, signature={}, ended_by="corner")
        for i, (a, b) in enumerate(ends)
    )


def _support_row(shape: found_rows.PitShape, row: Row, supports: list[Support], number: int) -> found_rows.SupportRow:
    first = len(supports)
    for k, (head, far) in enumerate(row.ends):
        supports.append(
            Support(
                id=f"{row.role}-{number}-{k}",
                role=row.role,  # type: ignore[arg-type]
                head=(*head, row.level),
                far=(*far, row.level - row.drop),
                EA=row.EA,
                waler=row.waler,
            )
        )
    heads = locate(shape, np.array([pair[0] for pair in row.ends]))
    fars = locate(shape, np.array([pair[1] for pair in row.ends]))
    head_at = np.where(heads.distance < 0.1, heads.at, np.nan)
    far_at = np.where(fars.distance < 0.1, fars.at, np.nan)
    gaps = np.diff(np.sort(head_at))
    member = m.Member(
        id=f"P1-{row.role}-{number + 1}",
        role=row.role,
        count=len(row.ends),
        spacing=float(np.median(gaps)) if len(gaps) else None,
        spacing_range=(float(gaps.min()), float(gaps.max())) if len(gaps) else None,
        inclination=None,
        skew=None,
        level=row.level,
        free_length=None,
        bond_length=None,
        along=(),
        sources=(),
    )
    return found_rows.SupportRow(
        member=member,
        supports=tuple(range(first, first + len(row.ends))),
        head_at=head_at,
        far_at=far_at,
        tributary_head=_tributary(shape, head_at),
        tributary_far=_tributary(shape, far_at),
        waler=row.waler,
    )


def _tributary(shape: found_rows.PitShape, at: m.Floats) -> m.Floats:
    """Half the gap to each neighbour; an end member also holds the wall up to its corner."""
    width = np.full(len(at), np.nan)
    if np.all(np.isnan(at)):
        return width
    sides = find_sides(shape)
    side, local = side_of(sides, np.where(np.isnan(at), 0.0, at))
    for s in np.unique(side[~np.isnan(at)]):
        members = np.flatnonzero((side == s) & ~np.isnan(at))
        order = members[np.argsort(local[members])]
        edges = np.concatenate([[0.0], (local[order][1:] + local[order][:-1]) / 2, [sides.length[s]]])
        width[order] = np.diff(edges)
    return width


def _stations(
    shape: found_rows.PitShape,
    chainage: m.Floats,
    ground: float,
    floor: float,
    rows: Sequence[found_rows.SupportRow],
    channels: dict[str, object],
) -> found_rows.Stations:
    n = len(chainage)
    sides = find_sides(shape)
    side, local = side_of(sides, chainage)
    length = sides.length[side]
    normal = normal_at(shape, chainage)
    facing, facing_at = cast(shape, point_at(shape, chainage), normal)
    met = np.isfinite(facing)
    other = normal_at(shape, np.where(met, facing_at, 0.0))
    skew = np.degrees(np.arccos(np.clip(-np.einsum("ij,ij->i", normal, other), -1, 1)))
    wall = shape.runs[0].wall
    base: dict[str, object] = {
        "ground": ground,
        "floor": floor,
        "top": wall.top if wall.top is not None else np.nan,
        "toe": wall.toe if wall.toe is not None else np.nan,
        "radius": np.nan,
        "run": 0,
        "zone": side,
        "jointed": wall.continuity == "jointed",
        "monolithic": wall.continuity == "monolithic",
        "rows": wall.kind in ("contiguous", "king_post"),
        "beam": any(row.waler is not False for row in rows) if rows else False,
        "facing": facing,
        "facing_chainage": facing_at,
        "facing_skew": np.where(met, skew, np.nan),
        "facing_like": met,
        "surcharge": 0.0,
        "ring": False,
        "supports": _held(sides, side, rows, n),
        "load_ids": ((),) * n,
    }
    base.update(channels)
    kinds = {"run": np.int64, "zone": np.int64}
    flags = ("jointed", "monolithic", "rows", "beam", "facing_like")
    arrays = {
        name: value
        if name in ("supports", "load_ids", "ring")
        else np.broadcast_to(np.asarray(value, dtype=bool if name in flags else kinds.get(name, np.float64)), n).copy()
        for name, value in base.items()
    }
    return found_rows.Stations(
        pit=shape.id,
        closed=shape.closed,
        chainage=chainage,
        xy=point_at(shape, chainage),
        normal=normal,
        side=side,
        side_length=length,
        to_start=np.full(n, np.inf) if sides.loop else local,
        to_end=np.full(n, np.inf) if sides.loop else length - local,
        angle_start=sides.angle_start[side],
        angle_end=sides.angle_end[side],
        **arrays,  # type: ignore[arg-type]
    )


def _held(sides: object, side: m.Ints, rows: Sequence[found_rows.SupportRow], n: int) -> tuple[tuple[int, ...], ...]:
    held: list[list[int]] = [[] for _ in range(n)]
    for j, row in enumerate(rows):
        for ends in (row.head_at, row.far_at):
            known = ends[~np.isnan(ends)]
            if len(known):
                carried = np.unique(side_of(sides, known)[0])  # type: ignore[arg-type]
                for i in np.flatnonzero(np.isin(side, carried)):
                    if j not in held[i]:
                        held[i].append(j)
    return tuple(tuple(one) for one in held)
