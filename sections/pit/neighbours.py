"""Pits beside a pit: how far away, and whether their wedges of influence touch."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import shapely

from sections.found import PitShape
from sections.model import Neighbour
from sections.pit.chainage import line_of

WEDGE = 2.0
"""The ground moves up to this many excavated depths behind a wall (judgement, as for loads)."""


def find_neighbours(shapes: Sequence[PitShape], index: int, depths: Sequence[float]) -> tuple[Neighbour, ...]:
    """Distance of every other pit from one pit, nearest first.

    Two pits interact when the distance is at most two of the larger excavated depth; where a depth is not known they
    are taken to interact.
    """
    wall = line_of(shapes[index])
    found = []
    for other, shape in enumerate(shapes):
        if other == index:
            continue
        distance = float(shapely.distance(wall, line_of(shape)))
        deepest = max(depths[index], depths[other])
        known = not np.isnan(depths[index]) and not np.isnan(depths[other])
        found.append(Neighbour(pit=shape.id, distance=distance, interacts=not known or distance <= WEDGE * deepest))
    return tuple(sorted(found, key=lambda neighbour: (neighbour.distance, neighbour.pit)))
