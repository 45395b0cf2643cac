"""Cuts worth trying: at supports and midway between, through loads, steps, receptors, boreholes, on mirror axes."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from ingest.members import Point
from ingest.model import Limits, LineDecision, Site
from sections.found import FoundPit
from sections.model import Floats, Ints
from sections.pit.along import steps_of
from sections.pit.chainage import cast, line_of, locate
from sections.pit.wall_changes import changes_of
from sections.pit.world import to_local
from sections.section.cut import Cut, CutWall
from sections.smearing.opposite_wall import ONE_CUT_LIMIT
from sections.verdicts.likeness import nearest_station, station_under, tied_to

BEHIND, INSIDE, NARROW = 3.0, 2.0, 4.0
"""Reach of a cut behind a wall and into the pit, width of a pit that is cut whole; excavated depths (judgement)."""
BESIDE = 0.5
"""A cut beside a step or change stands this far from it, m."""


@dataclass(frozen=True, kw_only=True)
class Candidate:
    """One cut that might become a section, local coordinates.

    Attributes:
        pit: Index of the pit in the order found.
        kind: Plane strain, or axisymmetric (then the line runs from the axis outwards).
        stations: Stations of the pit the cut is judged at; it is square to the wall of the first.
        at: Distance along the line at which it meets each of them, m.
        line: From the retained side of the first wall.
        serves: How many of the stations it may stand for: one where the second wall is turned by more than 10 degrees.
        why: What the cut was drawn for.
        pinned: True where the engineer wants it.
    """

    pit: int
    kind: Literal["plane_strain", "axisymmetric"]
    stations: tuple[int, ...]
    at: tuple[float, ...]
    line: tuple[Point, Point]
    serves: int = 1
    why: tuple[str, ...] = ()
    pinned: bool = False


def find_candidates(site: Site, founds: Sequence[FoundPit], limits: Limits | None = None) -> tuple[Candidate, ...]:
    """Draw the candidate cuts of all pits, with the engineer's decisions on lines carried out.

    Args:
        site: The site; its `lines` hold the decisions, world coordinates.
        founds: Its pits.
        limits: Tolerances; those of the site when left out.
    """
    limits = site.limits if limits is None else limits
    drawn: list[Candidate] = []
    for p, found in enumerate(founds):
        places = _places(site, found)
        tied = tied_to(found)
        drawn += [_cut_at(found, p, station, why, tied) for station, why in sorted(places.items())]
        if found.stations.ring:
            drawn += [_spoke(found, p, station, why) for station, why in sorted(places.items()) if _on_spoke(why)]
    for decision in site.lines:
        line = to_local(site.frame, decision.line)
        if decision.kind in ("forbid", "move"):
            drawn = [one for one in drawn if not _same_line(one.line, (line[0], line[1]), limits)]
        if decision.kind in ("pin", "move"):
            drawn += _pinned(site, founds, decision)
    return tuple(sorted(drawn, key=lambda one: (one.pit, one.stations[0], one.kind, not one.pinned, one.line)))


def cut_of(candidate: Candidate, founds: Sequence[FoundPit]) -> Cut:
    """The cut of a candidate, as a section is built on it."""
    found = founds[candidate.pit]
    sides = ("right",) if candidate.kind == "axisymmetric" else ("left", "right")
    walls = tuple(
        CutWall(found=found, station=station, x=x, side=side)
        for station, x, side in zip(candidate.stations, candidate.at, sides, strict=False)
    )
    return Cut(kind=candidate.kind, start=candidate.line[0], end=candidate.line[1], walls=walls)


def _places(site: Site, found: FoundPit) -> dict[int, tuple[str, ...]]:
    """Stations to cut at, with what each cut is drawn for."""
    places: dict[int, list[str]] = {}
    for why, chainages in _reasons(site, found):
        known = np.asarray(chainages, dtype=np.float64)
        known = known[np.isfinite(known)]
        if found.shape.closed:
            known = np.mod(known, found.shape.length)
        for station in nearest_station(found, np.clip(known, 0.0, found.shape.length)).tolist():
            listed = places.setdefault(station, [])
            if why not in listed:
                listed.append(why)
    return {station: tuple(whys) for station, whys in places.items()}


def _reasons(site: Site, found: FoundPit) -> Iterator[tuple[str, Floats]]:
    yield "middle of the zone", _zone_middles(found)
    for row in found.rows:
        for at in (row.head_at, row.far_at):
            known = np.sort(at[~np.isnan(at)])
            yield "at a support", known
            yield "midway between supports", _midway(found, known)
    yield "through a load", _beside(found, [site.loads[index].points for index in found.loads.values()])
    beside = np.concatenate([steps_of(found), changes_of(found)])
    yield "beside a step or change", np.concatenate([beside - BESIDE, beside + BESIDE])
    yield "through a receptor", _beside(found, [receptor.points for receptor in site.receptors])
    yield "through a borehole", _beside(found, [(hole.location[:2],) for hole in site.boreholes])
    yield "on a mirror axis", _axis_chainages(site, found)
    if found.stations.ring:
        yield "due east", np.zeros(1)


def _zone_middles(found: FoundPit) -> Floats:
    length = found.shape.length
    starts = np.array([zone.start for zone in found.pit.zones])
    ends = np.array([zone.to for zone in found.pit.zones])
    return np.asarray(starts + 0.5 * np.where(ends < starts, ends - starts + length, ends - starts))


def _midway(found: FoundPit, at: Floats) -> Floats:
    """Chainages half way between neighbours that stand on one side of the wall."""
    if len(at) < 2:
        return np.zeros(0)
    side = found.stations.side[nearest_station(found, at)]
    return np.asarray(0.5 * (at[1:] + at[:-1])[side[1:] == side[:-1]])


def _beside(found: FoundPit, things: Sequence[Sequence[Point]]) -> Floats:
    """Chainages nearest to things that lie within reach of the pit: middle and nearest point of each."""
    import shapely

    depth = np.nanmax(found.stations.depth, initial=0.0)
    reach = BEHIND * depth if depth > 0.0 else np.inf
    wall, points = line_of(found.shape), []
    for outline in things:
        if not outline:
            continue
        thing = shapely.MultiPoint(outline) if len(outline) < 3 else shapely.Polygon(outline).convex_hull
        if len(outline) == 2:
            thing = shapely.LineString(outline)
        if shapely.distance(wall, thing) > reach:
            continue
        near = shapely.shortest_line(thing, wall)
        points += [shapely.get_coordinates(near)[0], shapely.get_coordinates(thing.centroid)[0]]
    return locate(found.shape, np.array(points).reshape(-1, 2)).at


def _axis_chainages(site: Site, found: FoundPit) -> Floats:
    """Where mirror axes meet the wall; the axes of the record are in world coordinates."""
    at: list[float] = []
    for axis in found.pit.symmetry:
        angle = np.radians(axis.direction)
        ahead = np.array(axis.point) + [np.cos(angle), np.sin(angle)]
        start, other = (np.array(point) for point in to_local(site.frame, [axis.point, (ahead[0], ahead[1])]))
        along = (other - start) / np.hypot(*(other - start))
        _, hit = cast(found.shape, np.array([start, start]), np.array([along, -along]))
        at += hit.tolist()
    return np.array(at)


def _depth(found: FoundPit, station: int) -> float:
    """Depth that sets the size of a cut: the station's, else the deepest known, else a third of the wall's length.

    It changes how far the line is drawn, never what is judged.
    """
    depth = found.stations.depth
    if depth[station] > 0.0:
        return float(depth[station])
    deepest = float(np.nanmax(depth, initial=0.0))
    return deepest if deepest > 0.0 else found.shape.length / 30.0


def _cut_at(found: FoundPit, pit: int, station: int, why: tuple[str, ...], tied: Ints) -> Candidate:
    stations = found.stations
    He = _depth(found, station)
    xy, normal, width = stations.xy[station], stations.normal[station], float(stations.facing[station])
    whole = np.isfinite(width) and (tied[station] >= 0 or width < NARROW * He)
    start = xy - BEHIND * He * normal
    judged, at = [station], [BEHIND * He]
    serves = 1
    inside = INSIDE * He if not np.isfinite(width) else min(INSIDE * He, 0.5 * width)
    if whole:
        opposite = int(station_under(found, np.array([stations.facing_chainage[station]]))[0])
        judged, at = [station, opposite], [BEHIND * He, BEHIND * He + width]
        serves = 2 if abs(float(stations.facing_skew[station])) <= ONE_CUT_LIMIT + 1e-6 else 1
        inside = width + BEHIND * _depth(found, opposite)
    end = xy + inside * normal
    return Candidate(
        pit=pit,
        kind="plane_strain",
        stations=tuple(judged),
        at=tuple(at),
        line=(_point(start), _point(end)),
        serves=serves,
        why=why,
    )


def _on_spoke(why: Sequence[str]) -> bool:
    return any(reason in ("due east", "through a load", "through a receptor") for reason in why)


def _spoke(found: FoundPit, pit: int, station: int, why: tuple[str, ...]) -> Candidate:
    """An axisymmetric cut: from the axis outwards, one azimuth for each neighbour that breaks the symmetry."""
    circle = found.shape.circle
    centre = np.array(found.shape.axis.mean(axis=0) if circle is None else circle.centre)
    out = found.stations.xy[station] - centre
    # One ring has one radius, that of equal perimeter, whichever way the cut looks.
    radius = found.shape.length / (2 * np.pi)
    end = centre + out / np.hypot(*out) * (radius + BEHIND * _depth(found, station))
    return Candidate(
        pit=pit, kind="axisymmetric", stations=(station,), at=(radius,), line=(_point(centre), _point(end)), why=why
    )


def _pinned(site: Site, founds: Sequence[FoundPit], decision: LineDecision) -> list[Candidate]:
    """The engineer's own line, judged at the first wall it enters a pit by and, where it goes on, at the next."""
    wanted = decision.line if decision.kind == "pin" or decision.to is None else decision.to
    start, end = (np.array(point) for point in to_local(site.frame, wanted))
    length = float(np.hypot(*(end - start)))
    if length == 0.0:
        return []
    along = (end - start) / length
    for p, found in enumerate(founds):
        hits = _crossings(found, start, along, length)
        entering = [k for k, (_, station) in enumerate(hits) if along @ found.stations.normal[station] > 0.0]
        if not entering:
            continue
        first = entering[0]
        met = hits[first : first + 2]
        skew = abs(float(found.stations.facing_skew[met[0][1]]))
        return [
            Candidate(
                pit=p,
                kind="plane_strain",
                stations=tuple(station for _, station in met),
                at=tuple(x for x, _ in met),
                line=(_point(start), _point(end)),
                serves=2 if len(met) == 2 and skew <= ONE_CUT_LIMIT + 1e-6 else 1,
                why=("pinned in the brief",),
                pinned=True,
            )
        ]
    return []


def _crossings(found: FoundPit, start: Floats, along: Floats, length: float) -> list[tuple[float, int]]:
    """Distances along a line at which it meets the wall, each with its station, in order."""
    hits: list[tuple[float, int]] = []
    x = 0.0
    while True:
        step, chainage = cast(found.shape, (start + x * along)[None, :], along[None, :])
        if not np.isfinite(step[0]) or x + step[0] > length + 1e-6:
            return hits
        x += float(step[0])
        hits.append((x, int(nearest_station(found, chainage)[0])))


def _same_line(one: tuple[Point, Point], other: tuple[Point, Point], limits: Limits) -> bool:
    """Tell whether a cut is the one the engineer named: lying on it within half a metre, and pointing alike."""
    a, b = np.subtract(one[1], one[0]), np.subtract(other[1], other[0])
    cross = abs(a[0] * b[1] - a[1] * b[0]) / (np.hypot(*a) * np.hypot(*b))
    if cross > np.sin(np.radians(limits.direction)):
        return False
    middle = np.mean(np.array(other), axis=0) - one[0]
    return bool(abs(middle[0] * a[1] - middle[1] * a[0]) / np.hypot(*a) <= BESIDE)


def _point(xy: Floats) -> Point:
    return float(xy[0]), float(xy[1])
