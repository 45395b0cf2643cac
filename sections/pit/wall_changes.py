"""What makes one run of wall like another, and where along a perimeter that changes."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from sections.found import FoundPit
from sections.model import Floats, Run


def changes_of(found: FoundPit) -> Floats:
    """Chainages at which the construction of the wall changes; runs that only end there, at a corner, do not count."""
    shape = found.shape
    runs = sorted(shape.runs, key=lambda run: run.start)
    if len(runs) < 2:
        return np.zeros(0)
    pairs = zip([runs[-1], *runs[:-1]] if shape.closed else runs[:-1], runs if shape.closed else runs[1:], strict=True)
    return np.array(sorted(run.start for before, run in pairs if construction_of(before) != construction_of(run)))


class Construction(NamedTuple):
    """What makes one run of wall like another: numbers that have a tolerance, levels, and all that must be the same."""

    size: tuple[float | None, ...]
    levels: tuple[float | None, float | None]
    labels: tuple[object, ...]


def construction_of(run: Run) -> Construction:
    """Construction of a run: thickness, diameter, pile centres and factor on EI; top and toe; kind and the rest."""
    wall = run.wall
    bending = (None, None) if wall.structural is None else (wall.structural.which, wall.structural.spacing)
    return Construction(
        size=(wall.thickness, wall.diameter, wall.centres, wall.EI_factor, bending[1]),
        levels=(wall.top, wall.toe),
        labels=(wall.kind, wall.continuity, wall.material, wall.post, wall.capping_beam, bending[0]),
    )


def kinds_at(found: FoundPit) -> NDArray[np.str_]:
    """Kind of wall at each station; "unknown" where no run was found."""
    return np.array([*(run.wall.kind for run in found.shape.runs), "unknown"])[found.stations.run]


def toe_steps_of(found: FoundPit) -> Floats:
    """Chainages at which the toe of the wall changes, or is not known on one side."""
    runs = sorted(found.shape.runs, key=lambda run: run.start)
    return np.array(
        sorted(
            run.start
            for before, run in zip([runs[-1], *runs[:-1]], runs, strict=True)
            if before.wall.toe != run.wall.toe and (found.shape.closed or run.start > 0.0)
        )
    )
