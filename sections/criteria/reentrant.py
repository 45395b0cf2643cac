"""Corners that point into the dig: no 2D section near them, no sure anchor force farther out.

The ground at a re-entrant corner is a wedge between two excavated faces; both sets of supports load it, and nothing
repeats along the wall. Source: project rule (judgement; no closed formula is known). Stability there is the lowest of
the whole perimeter (abstract of a thesis on an excavated metro pit, seen).
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.along import GENTLE_TO, STRAIGHT_TO, bay_of, distance_along
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.model import CriterionResult, Floats, FoundPit

CODE = "reentrant"
GENTLE_HIGH = 1.2
"""High end at a wall turned out by 10 to 30 degrees (judgement)."""


def reentrant(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Shut every output within max(He, support bay) of a re-entrant corner, and the force as far as anchors reach."""
    stations = found.stations
    sheet = Sheet(stations, "No corner points into the dig within reach.")
    sharp, gentle = _corners(found)
    to_sharp, to_gentle = distance_along(found, sharp), distance_along(found, gentle)
    bay = bay_of(found)
    # with the depth not known the whole wall may be within reach
    reach = np.maximum(np.where(np.isnan(stations.depth), np.inf, stations.depth), bay)
    anchors = anchor_reach(site, found)

    turned = np.isfinite(to_gentle) & (to_gentle <= reach + 1e-9)
    sheet.say(turned, (*WALL_OUTPUTS, "settlement"), 1.0, GENTLE_HIGH)
    sheet.text(
        turned,
        "The wall turns out by 10 to 30 degrees {to_gentle:.1f} m from here: real movement, moment and force are "
        "1.00 to 1.20 times the 2D value (judgement).",
    )
    beyond = np.isfinite(to_sharp) & (to_sharp <= anchors + 1e-9)
    sheet.lack(beyond, ("support_force",))
    sheet.text(
        beyond,
        "Re-entrant corner at {to_sharp:.1f} m, within the {anchors:.1f} m that anchors reach on plan: they may cross "
        "those of the other wall or leave through its face, so the support force is not assessed.",
    )
    near = np.isfinite(to_sharp) & (to_sharp <= reach + 1e-9)
    sheet.shut(near, sheet.outputs)
    sheet.text(
        near,
        "Re-entrant corner at {to_sharp:.1f} m, nearer than one excavated depth or support bay ({reach:.1f} m): the "
        "ground is a wedge between two excavated faces and no 2D section describes it.",
    )
    return sheet.close(
        CODE,
        "corner",
        basis="rule: nothing repeats along the wall at a corner that points into the dig",
        reference="project rule (judgement)",
        inputs={
            "to_sharp": to_sharp,
            "to_gentle": to_gentle,
            "reach": reach,
            "anchors": np.full(len(reach), anchors),
        },
        speaks_of=sheet.outputs,
        settled_by="an analysis in three dimensions, or a check of each anchor against every wall, floor and anchor",
    )


def _corners(found: FoundPit) -> tuple[Floats, Floats]:
    """Chainages of the re-entrant and of the gently turned corners; those of a ring do not count."""
    corners = () if found.shape.circle is not None else found.shape.corners
    sharp = [corner.at for corner in corners if corner.interior_angle > GENTLE_TO + 1e-9]
    gentle = [corner.at for corner in corners if STRAIGHT_TO + 1e-9 < corner.interior_angle <= GENTLE_TO + 1e-9]
    return np.array(sharp), np.array(gentle)


def anchor_reach(site: Site, found: FoundPit) -> float:
    """Longest plan length of the pit's anchors, m; 0 without anchors."""
    held = [index for row in found.rows if row.member.role == "anchor" for index in row.supports]
    if not held:
        return 0.0
    head = np.array([site.supports[index].head[:2] for index in held])
    far = np.array([site.supports[index].far[:2] for index in held])
    return float(np.max(np.hypot(*(far - head).T)))
