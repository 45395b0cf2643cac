"""A step of the dig floor at the wall: the shallow side is pulled along by the deep one.

In a computed case (dig 8 m beside 12 m) the real deflection and moment on the shallow side were 1.24 to 1.38 times the
2D values within half a depth of the step. How far it goes on other walls is not known, so nothing is claimed near one.
Source: own computation; the reach is judgement.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Floats
from sections.pit.along import distance_along, steps_of

CODE = "floor_step"
REACH = 2.0
"""Reach of a step along the wall, in depths of its deeper side (judgement)."""


def floor_step(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Mark every output of the wall and the base as open near a step of the floor."""
    stations = found.stations
    sheet = Sheet(stations, "No step of the dig floor meets the wall within reach.")
    distance = distance_along(found, steps_of(found))
    deepest = _deepest(stations.depth)
    near = np.isfinite(distance) & (distance <= REACH * deepest + 1e-9)
    sheet.lack(near, (*WALL_OUTPUTS, "settlement", "heave_utilisation", "hydraulic_utilisation"))
    sheet.text(
        near,
        "The dig floor steps {distance:.1f} m from here; on its shallow side a 2D section can give too little. "
        "Not assessed within two excavated depths.",
    )
    return sheet.close(
        CODE,
        "floor_step",
        basis="rule: beside a step of the floor nothing is claimed",
        reference="own computation; reach by judgement",
        inputs={"distance": distance},
        speaks_of=(*WALL_OUTPUTS, "settlement", "heave_utilisation", "hydraulic_utilisation"),
        settled_by="a computation with the real floor levels along the wall",
    )


def _deepest(depth: Floats) -> Floats:
    """Largest depth of the pit, as the deeper side of a step may lie beyond the station; inf where none is known."""
    known = depth[~np.isnan(depth)]
    return np.full(len(depth), float(np.max(known)) if len(known) else np.inf)
