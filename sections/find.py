"""From the site as received to the pits in it: perimeter, runs, zones, floors, supports, loads and stations."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.model import Site
from ingest.trail import Assumption, Finding, Question
from sections.chainage import Sides, find_sides
from sections.floors import FloorPlan, find_floors, find_steps, floor_records
from sections.model import Floats, FoundPit, Pit, PitShape, Step, SupportRow
from sections.near_loads import NearLoad, find_loads, find_receptors
from sections.neighbours import find_neighbours
from sections.pit_members import carry_by_walers, find_members
from sections.pit_notes import note_levels, note_supports
from sections.stations import stand
from sections.support_ends import SupportEnds, meet_supports
from sections.support_rows import Rows, find_rows, number_rows
from sections.symmetry import find_axes
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

    return describe_pits(site, find_shapes(site))


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
