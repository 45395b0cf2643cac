"""Corners that point into the dig: no 2D section near them.

The ground at a re-entrant corner is a wedge between two excavated faces; both sets of supports load it, and nothing
repeats along the wall. Source: project rule (judgement; no closed formula is known). Stability there is the lowest of
the whole perimeter (abstract of a thesis on an excavated metro pit, seen).
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Floats
from sections.pit.along import GENTLE, STRAIGHT, bay_of, distance_along, outward_turns

CODE = "reentrant"
GENTLE_HIGH = 1.2
"""High end at a wall turned out by 10 to 30 degrees (judgement)."""

TURNED = (
    "The wall turns out by 10 to 30 degrees {to_gentle:.1f} m from here: real movement, moment and force are "
    "1.00 to 1.20 times the 2D value (judgement)."
)
NEAR = (
    "Re-entrant corner at {to_sharp:.1f} m, nearer than one excavated depth or support bay ({reach:.1f} m): the "
    "ground is a wedge between two excavated faces and no 2D section describes it."
)


def reentrant(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Shut every output within max(He, support bay) of a re-entrant corner; a gentle turn is worse by up to 1.2."""
    stations = found.stations
    sheet = Sheet(stations, "No corner points into the dig within reach.")
    sharp, gentle = corners_pointing_in(found)
    to_sharp, to_gentle = distance_along(found, sharp), distance_along(found, gentle)
    bay = bay_of(found)
    # with the depth not known the whole wall may be within reach
    reach = np.maximum(np.where(np.isnan(stations.depth), np.inf, stations.depth), bay)

    turned = np.isfinite(to_gentle) & (to_gentle <= reach + 1e-9)
    sheet.say(turned, (*WALL_OUTPUTS, "settlement"), 1.0, GENTLE_HIGH)
    sheet.text(turned, TURNED)
    near = np.isfinite(to_sharp) & (to_sharp <= reach + 1e-9)
    sheet.shut(near, sheet.outputs)
    sheet.text(near, NEAR)
    return sheet.close(
        CODE,
        "corner",
        basis="rule: nothing repeats along the wall at a corner that points into the dig",
        reference="project rule (judgement)",
        inputs={"to_sharp": to_sharp, "to_gentle": to_gentle, "reach": reach},
        speaks_of=sheet.outputs,
        settled_by="an analysis in three dimensions",
    )


def corners_pointing_in(found: FoundPit) -> tuple[Floats, Floats]:
    """Chainages of the re-entrant and of the gently turned corners; those of a ring do not count."""
    at, turn = outward_turns(found)
    return at[turn > GENTLE + 1e-6], at[(turn > STRAIGHT + 1e-6) & (turn <= GENTLE + 1e-6)]
