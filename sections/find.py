"""From the site as received to the pits in it: perimeter, runs, zones, floors, supports, loads and stations."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.model import Site
from sections.chainage import find_sides
from sections.floors import FloorPlan, find_floors, find_steps, floor_records
from sections.mirror import find_axes
from sections.model import FoundPit, Ints, Neighbour, Pit, PitShape
from sections.near_loads import find_loads, find_receptors
from sections.neighbours import find_neighbours
from sections.numbering import number_rows
from sections.pit_members import carry_by_walers, find_members
from sections.pit_notes import note_levels, note_supports
from sections.stations import stand
from sections.support_ends import SupportEnds, meet_supports
from sections.support_rows import find_rows
from sections.world import (
    to_world,
    world_arcs,
    world_axes,
    world_circle,
    world_circles,
    world_corners,
    world_floors,
    world_loads,
    world_receptors,
    world_steps,
)


def find_pits(site: Site) -> tuple[FoundPit, ...]:
    """Find every pit of a site, with all that is known along its wall.

    Args:
        site: The site as received, local coordinates.

    Returns:
        One record a pit, in the order of their ids; the record itself (`FoundPit.pit`) in world coordinates, its
        shape, stations and rows in local ones. Empty where the site holds no retaining wall.
    """
    from sections.perimeter import find_shapes

    shapes, findings, questions = find_shapes(site)
    found = describe_pits(site, shapes)
    if not found:
        return ()
    # what was seen while looking for perimeters belongs to the site; the first pit carries it
    first = replace(found[0], findings=(*findings, *found[0].findings), questions=(*questions, *found[0].questions))
    return (first, *found[1:])


def describe_pits(site: Site, shapes: Sequence[PitShape]) -> tuple[FoundPit, ...]:
    """Describe pits whose perimeters are known."""
    wall_piles = frozenset(i for shape in shapes for run in shape.piles for i in run)
    all_ends, unmet = meet_supports(site, shapes)
    depths = [_depth(site, find_floors(site, shape)) for shape in shapes]
    found = []
    for i, (shape, ends) in enumerate(zip(shapes, all_ends, strict=True)):
        strays = unmet if i == 0 else unmet[:0]
        found.append(_describe(site, shape, ends, strays, wall_piles, find_neighbours(shapes, i, depths)))
    return tuple(found)


def _depth(site: Site, plan: FloorPlan) -> float:
    """Largest excavated depth, m; nan where a level is missing."""
    if site.ground_level is None or not plan.floors:
        return float("nan")
    return float(site.ground_level - np.min(plan.levels))


def _describe(
    site: Site,
    shape: PitShape,
    ends: SupportEnds,
    strays: Ints,
    wall_piles: frozenset[int],
    neighbours: tuple[Neighbour, ...],
) -> FoundPit:
    sides = find_sides(shape)
    plan = find_floors(site, shape)
    steps = find_steps(plan, shape, site.limits)
    loads = find_loads(site, shape, _depth(site, plan))
    rows = number_rows(find_rows(site, shape, sides, ends), shape.id)
    rows = replace(rows, rows=carry_by_walers(site, shape, rows.rows))
    extra = np.array([at for step in steps for at in step.at])
    stations, zones = stand(site, shape, sides, plan, rows, loads, extra)
    members = (*(row.member for row in rows.rows), *find_members(site, shape, wall_piles))
    near = tuple(load.load for load in loads)
    level_findings, assumptions = note_levels(site, shape, plan)
    support_findings, questions = note_supports(site, shape, ends, strays)
    frame = site.frame
    pit = Pit(
        id=shape.id,
        closed=shape.closed,
        length=shape.length,
        perimeter=to_world(frame, shape.axis),
        ground_level=site.ground_level,
        arcs=world_arcs(frame, shape.arcs),
        corners=world_corners(frame, shape.corners),
        runs=shape.runs,
        zones=zones,
        circle=world_circle(frame, shape.circle),
        circles=world_circles(frame, shape.circles),
        symmetry=world_axes(frame, find_axes(site, shape, stations, rows.rows, near)),
        floors=world_floors(frame, floor_records(plan)),
        steps=world_steps(frame, steps),
        members=members,
        loads=world_loads(frame, near),
        receptors=world_receptors(frame, find_receptors(site, shape)),
        neighbours=neighbours,
    )
    return FoundPit(
        pit=pit,
        shape=shape,
        stations=stations,
        rows=rows.rows,
        findings=(*level_findings, *support_findings),
        questions=questions,
        assumptions=assumptions,
        loads={load.load.id: load.index for load in loads},
    )
