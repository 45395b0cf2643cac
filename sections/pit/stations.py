"""The stations of one pit: the wall, its surroundings and its supports, evaluated densely along the perimeter."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Site
from sections.found import PitShape, Stations, SupportRow
from sections.model import Bools, Floats, Ints, Zone
from sections.pit.chainage import Sides
from sections.pit.cover import find_covers, rows_at
from sections.pit.floors import FloorPlan
from sections.pit.ground import layers_along
from sections.pit.near_loads import NearLoad, bearing, load_ends
from sections.pit.signature import sign
from sections.pit.support_rows import Rows
from sections.pit.walk import Walk, face, flags_of, radius_at, walk
from sections.pit.zones import find_zones


@dataclass(frozen=True, kw_only=True)
class Surroundings:
    """What bears on each station: the largest area, footing (kPa) and line load (kN/m), and the loads by id."""

    surcharge: Floats
    footing: Floats
    line_load: Floats
    load_ids: tuple[tuple[str, ...], ...]


def stand(
    site: Site,
    shape: PitShape,
    sides: Sides,
    plan: FloorPlan,
    rows: Rows,
    loads: Sequence[NearLoad],
    extra: Floats,
    around: FloorPlan | None = None,
) -> tuple[Stations, tuple[Zone, ...]]:
    """Walk a pit and divide it into zones.

    Args:
        extra: Further chainages to stand at (steps of the floor, boreholes).
        around: Floors of the pit this one lies in.
    """
    depth = _largest_depth(site, plan)
    covers = find_covers(rows, sides, site.limits, single=depth if np.isfinite(depth) else np.inf)
    events = [_ends_of_curves(shape), *_support_places(rows.rows), extra]
    events += [sides.start[c.side] + np.array([c.start, c.to]) for c in covers]
    events += [load_ends(shape, near.load, depth) for near in loads]
    steps = walk(site, shape, sides, plan, events, around)
    bearing_on = _surround(shape, steps, loads)
    levels = np.array([np.nan if row.member.level is None else row.member.level for row in rows.rows])
    spacing, held = rows_at(covers, sides, steps, levels + site.limits.level)
    pressures = {
        "surcharge": bearing_on.surcharge,
        "footing": bearing_on.footing,
        "line load": bearing_on.line_load,
    }
    signature = sign(site, shape, steps, rows.rows, spacing, held, pressures, layers_along(site, steps.xy))
    sections = {row.member.id: _section_of(site, row) for row in rows.rows}
    zones, zone = find_zones(shape, sides, steps, signature, rows.rows, sections)
    return _assemble(site, shape, sides, steps, bearing_on, (held, zone), rows.rows), zones


def _largest_depth(site: Site, plan: FloorPlan) -> float:
    if site.ground_level is None or not plan.floors:
        return float("nan")
    return float(site.ground_level - np.min(plan.levels))


def _ends_of_curves(shape: PitShape) -> Floats:
    ends = [(arc.start, arc.to) for arc in shape.arcs] + [(part.start, part.to) for part in shape.circles]
    return np.array(ends, dtype=np.float64).reshape(-1)


def _support_places(rows: Sequence[SupportRow]) -> list[Floats]:
    places = [row.head_at for row in rows] + [row.far_at for row in rows]
    return [np.concatenate(places)] if places else []


def _section_of(site: Site, row: SupportRow) -> str:
    section = site.supports[row.supports[0]].section
    return "" if section is None else section.designation


def _surround(shape: PitShape, steps: Walk, loads: Sequence[NearLoad]) -> Surroundings:
    count = len(steps.chainage)
    largest = {kind: np.zeros(count) for kind in ("area", "footing", "line", "point")}
    ids: list[list[str]] = [[] for _ in range(count)]
    for near in loads:
        on = bearing(shape, near.load, steps.probe, steps.ground - steps.floor)
        kind = largest[near.load.kind]
        kind[on] = np.maximum(kind[on], near.load.value or 0.0)
        for i in np.flatnonzero(on):
            ids[i].append(near.load.id)
    return Surroundings(
        surcharge=largest["area"],
        footing=largest["footing"],
        line_load=largest["line"],
        load_ids=tuple(tuple(listed) for listed in ids),
    )


def _assemble(
    site: Site,
    shape: PitShape,
    sides: Sides,
    steps: Walk,
    around: Surroundings,
    marks: tuple[tuple[tuple[int, ...], ...], Ints],
    rows: Sequence[SupportRow],
) -> Stations:
    held, zone = marks
    jointed, monolithic, in_rows = flags_of(shape, steps.run)
    opposite = face(shape, steps, sides, around.surcharge, site.limits)
    start, end = sides.angle_start[steps.side], sides.angle_end[steps.side]
    place = np.clip(steps.place, 0.0, None)
    return Stations(
        pit=shape.id,
        closed=shape.closed,
        chainage=steps.chainage,
        xy=steps.xy,
        normal=steps.normal,
        side=steps.side,
        side_length=sides.length[steps.side],
        to_start=np.where(np.isnan(start), np.inf, place),
        to_end=np.where(np.isnan(end), np.inf, np.clip(sides.length[steps.side] - place, 0.0, None)),
        angle_start=start,
        angle_end=end,
        radius=radius_at(shape, steps.probe),
        ring=shape.circle is not None,
        ground=steps.ground,
        floor=steps.floor,
        top=steps.top,
        toe=steps.toe,
        run=steps.run,
        zone=zone,
        jointed=jointed,
        monolithic=monolithic,
        rows=in_rows,
        beam=_beam(shape, steps, held, rows),
        facing=opposite.distance,
        facing_chainage=opposite.chainage,
        facing_skew=opposite.skew,
        facing_like=opposite.like,
        supports=held,
        surcharge=around.surcharge,
        load_ids=around.load_ids,
    )


def _beam(shape: PitShape, steps: Walk, held: tuple[tuple[int, ...], ...], rows: Sequence[SupportRow]) -> Bools:
    """A beam along the wall is possible unless capping beam and walers are both known to be absent."""
    capped = np.array([run.wall.capping_beam is not False for run in shape.runs] + [True])
    walers = np.array([any(rows[i].waler is not False for i in station) for station in held], dtype=bool)
    return np.asarray(capped[steps.run] | walers)
