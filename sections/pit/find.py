"""From the site as received to the pits in it: perimeter, runs, zones, floors, supports, loads and stations."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.model import Site
from ingest.trail import Assumption, Finding, Question
from sections.found import FoundPit, PitShape
from sections.model import Floats, Neighbour, Pit
from sections.pit.chainage import area_of, find_sides
from sections.pit.floors import FloorPlan, find_floors, find_steps, floor_records
from sections.pit.mirror import find_axes
from sections.pit.near_loads import find_loads, find_receptors
from sections.pit.neighbours import find_neighbours
from sections.pit.notes import note_levels, note_supports
from sections.pit.numbering import number_rows
from sections.pit.other_members import carry_by_walers, find_members
from sections.pit.stations import stand
from sections.pit.support_ends import SupportEnds, meet_supports
from sections.pit.support_rows import find_rows
from sections.pit.world import world_pit
from sections.section.buried_rows import end_at_steps


def find_pits(site: Site) -> tuple[FoundPit, ...]:
    """Find every pit of a site, with all that is known along its wall.

    Args:
        site: The site as received, local coordinates.

    Returns:
        One record a pit, in the order of their ids; the record itself (`FoundPit.pit`) in world coordinates, its
        shape, stations and rows in local ones. Empty where the site holds no retaining wall.
    """
    from sections.perimeter.perimeter import find_shapes

    shapes, findings, questions = find_shapes(site)
    found = describe_pits(site, shapes)
    if not found:
        return ()
    # what was seen while looking for perimeters belongs to the site; the first pit carries it
    first = replace(
        found[0],
        findings=(*findings, *found[0].findings),
        questions=(*questions, *found[0].questions),
        assumptions=(*(_taken(f) for f in findings if f.code == "perimeter-assumed"), *found[0].assumptions),
    )
    return (first, *found[1:])


def _taken(finding: Finding) -> Assumption:
    """A perimeter taken from what is no wall is an assumption to sign."""
    return Assumption(
        id=f"perimeter-assumed:{finding.where}",
        code="perimeter-assumed",
        about=finding.where,
        text=finding.text,
        basis="no wall closes a perimeter there",
        sources=finding.sources,
    )


def describe_pits(site: Site, shapes: Sequence[PitShape]) -> tuple[FoundPit, ...]:
    """Describe pits whose perimeters are known."""
    wall_piles = frozenset(i for shape in shapes for run in shape.piles for i in run)
    all_ends, unmet = meet_supports(site, shapes)
    plans = {shape.id: find_floors(site, shape) for shape in shapes}
    depths = [_depth(site, plans[shape.id]) for shape in shapes]
    found = []
    for i, (shape, ends) in enumerate(zip(shapes, all_ends, strict=True)):
        notes = note_supports(site, shape, ends, unmet if i == 0 else unmet[:0])
        # of several rings around it, it lies directly in the smallest
        outer = sorted((s for s in shapes if s.id in shape.enclosing), key=lambda s: (area_of(s).area, s.id))
        around = plans[outer[0].id] if outer else None
        neighbours = find_neighbours(shapes, i, depths)
        found.append(_describe(site, shape, ends, (plans[shape.id], around), wall_piles, neighbours, notes))
    return tuple(found)


def _depth(site: Site, plan: FloorPlan) -> float:
    """Largest excavated depth, m; nan where a level is missing."""
    if site.ground_level is None or not plan.floors:
        return float("nan")
    return float(site.ground_level - np.min(plan.levels))


def _retained_level(ground: Floats) -> float | None:
    """Level of the ground around a pit where it is one and the same all round, else None."""
    if np.any(np.isnan(ground)) or np.ptp(ground) > 0.0:
        return None
    return float(ground[0])


def _describe(
    site: Site,
    shape: PitShape,
    ends: SupportEnds,
    floors: tuple[FloorPlan, FloorPlan | None],
    wall_piles: frozenset[int],
    neighbours: tuple[Neighbour, ...],
    notes: tuple[tuple[Finding, ...], tuple[Question, ...]],
) -> FoundPit:
    sides = find_sides(shape)
    plan, around = floors
    steps = find_steps(plan, shape, site.limits)
    loads = find_loads(site, shape, _depth(site, plan))
    rows = number_rows(find_rows(site, shape, sides, ends), shape.id)
    ended = end_at_steps(rows.rows, plan, shape, steps, site.limits)
    rows = replace(rows, rows=carry_by_walers(site, shape, ended))
    extra = np.array([at for step in steps for at in step.at])
    stations, zones = stand(site, shape, sides, plan, rows, loads, extra, around)
    near = tuple(load.load for load in loads)
    found, assumptions = note_levels(site, shape, plan, around is not None)
    pit = replace(
        _outline(shape, _retained_level(stations.ground)),
        zones=zones,
        symmetry=find_axes(site, shape, stations, rows.rows, near),
        floors=floor_records(plan),
        steps=steps,
        members=(*(row.member for row in rows.rows), *find_members(site, shape, wall_piles)),
        loads=near,
        receptors=find_receptors(site, shape),
        neighbours=neighbours,
    )
    return FoundPit(
        pit=world_pit(site.frame, pit),
        shape=shape,
        stations=stations,
        rows=rows.rows,
        findings=(*found, *notes[0]),
        questions=notes[1],
        assumptions=assumptions,
        loads={load.load.id: load.index for load in loads},
    )


def _outline(shape: PitShape, ground_level: float | None) -> Pit:
    """The record of a pit as far as its perimeter goes, local coordinates."""
    return Pit(
        id=shape.id,
        closed=shape.closed,
        length=shape.length,
        perimeter=tuple((float(x), float(y)) for x, y in shape.axis),
        ground_level=ground_level,
        arcs=shape.arcs,
        corners=shape.corners,
        runs=shape.runs,
        circle=shape.circle,
        circles=shape.circles,
    )
