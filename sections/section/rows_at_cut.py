"""Which rows of supports a cut meets, with the real member nearest to it and where its two ends stand."""

from __future__ import annotations

from dataclasses import dataclass
from typing import cast

import numpy as np

from ingest.members import Point3, Support
from ingest.model import Limits, Site
from sections.found import FoundPit, SupportRow
from sections.section.cut import Cut, CutWall
from sections.smearing.member import Direction, find_direction
from sections.smearing.support_rows import SupportRole

SQUARE = 2.0
"""A corner this near to 90 degrees counts as square, and a corner strut this near to level as level (judgement)."""


@dataclass(frozen=True, kw_only=True)
class RowAtCut:
    """One row as the cut meets it: the nearest real member, the wall length it stands for, and where it is drawn."""

    row: SupportRow
    wall: CutWall
    support: Support
    near: Point3
    off: Point3
    """Ends of the real member: the one on this wall and the other."""
    tributary: float
    off_at: float
    """Chainage at which the other end meets the wall of the same pit; nan where it does not."""

    @property
    def role(self) -> SupportRole:
        """Role as the geometry has it, which may differ from what the file called it."""
        return cast(SupportRole, self.row.member.role)

    @property
    def direction(self) -> Direction:
        """Direction of the real member, from this wall."""
        normal = self.wall.found.stations.normal[self.wall.station]
        return find_direction(self.near, self.off, (float(normal[1]), float(-normal[0])))

    @property
    def off_station(self) -> int | None:
        """Station of the wall nearest to the other end; None where it stands on no wall of this pit."""
        if np.isnan(self.off_at):
            return None
        return nearest_station(self.wall.found, self.off_at)


def nearest_station(found: FoundPit, at: float) -> int:
    """Index of the station nearest to a chainage."""
    gap = np.abs(found.stations.chainage - at)
    if found.pit.closed:
        gap = np.minimum(gap, found.pit.length - gap)
    return int(np.argmin(gap))


def rows_at(site: Site, cut: Cut) -> tuple[RowAtCut, ...]:
    """Rows whose tributary width covers the cut, each once, from the first wall that has it."""
    met: dict[str, RowAtCut] = {}
    for wall in cut.walls:
        stations = wall.found.stations
        for index in stations.supports[wall.station]:
            row = wall.found.rows[index]
            nearest = _nearest(site, row, wall)
            if nearest is not None and row.member.id not in met:
                met[row.member.id] = nearest
    return tuple(met[name] for name in sorted(met))


def _nearest(site: Site, row: SupportRow, wall: CutWall) -> RowAtCut | None:
    length = wall.found.pit.length
    best: tuple[float, int, bool] | None = None
    for at, head in ((row.head_at, True), (row.far_at, False)):
        gap = np.abs(at - wall.at)
        gap = np.where(np.isnan(gap), np.inf, np.minimum(gap, length - gap) if wall.found.pit.closed else gap)
        place = int(np.argmin(gap))
        if np.isfinite(gap[place]) and (best is None or gap[place] < best[0]):
            best = float(gap[place]), place, head
    if best is None:
        return None
    _, place, head = best
    width = float((row.tributary_head if head else row.tributary_far)[place])
    support = site.supports[row.supports[place]]
    turned = row.turned is not None and bool(row.turned[place])
    near, off = (support.head, support.far) if head != turned else (support.far, support.head)
    off_at = float((row.far_at if head else row.head_at)[place])
    return RowAtCut(row=row, wall=wall, support=support, near=near, off=off, tributary=width, off_at=off_at)


def wall_of_other_end(met: RowAtCut, cut: Cut) -> CutWall | None:
    """The wall of the section that the other end of a strut holds up there; None when it holds another stretch."""
    station = met.off_station
    if station is None or met.role != "strut":
        return None
    side = met.wall.found.stations.side
    for other in cut.walls:
        same_pit = other is not met.wall and other.found is met.wall.found
        if same_pit and side[other.station] == side[station] and _covers(met.row, other):
            return other
    return None


def _covers(row: SupportRow, wall: CutWall) -> bool:
    """Whether the tributary width of a row covers the place where the cut meets a wall."""
    return any(wall.found.rows[i] is row for i in wall.found.stations.supports[wall.station])


def why_no_corner_strut(met: RowAtCut, limits: Limits) -> str:
    """Why the rule of corner struts does not hold for a row, in words; empty where it holds.

    The rule supposes two like walls at a right angle that move alike, and a level strut.
    """
    station = met.off_station
    if station is None:
        return "its far end meets no wall of this pit"
    found, here = met.wall.found, met.wall.station
    normal = found.stations.normal
    off_square = abs(float(np.degrees(np.arcsin(np.clip(normal[here] @ normal[station], -1.0, 1.0)))))
    if off_square > SQUARE:
        return f"the corner is {off_square:.1f} degrees off a right angle"
    if abs(met.direction.inclination) > SQUARE:
        return f"it slopes by {abs(met.direction.inclination):.1f} degrees"
    unlike = [name for name, same in _alike(found, here, station, limits).items() if not same]
    return f"the two walls differ in {', '.join(unlike)}" if unlike else ""


def _alike(found: FoundPit, a: int, b: int, limits: Limits) -> dict[str, bool]:
    """Whether two stations have like construction, depth and load."""
    stations = found.stations
    first, second = (found.pit.runs[int(stations.run[i])].wall for i in (a, b))
    depth = stations.depth
    return {
        "construction": _size(first) == _size(second),
        "depth": bool(abs(depth[a] - depth[b]) <= limits.level),
        "surcharge": bool(abs(stations.surcharge[a] - stations.surcharge[b]) <= limits.surcharge),
    }


def _size(wall: object) -> tuple[object, ...]:
    return tuple(getattr(wall, name) for name in ("kind", "diameter", "thickness", "centres", "material", "EI_factor"))
