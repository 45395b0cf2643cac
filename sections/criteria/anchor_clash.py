"""Anchors near a corner that points into the dig: they may cross those of the other wall or leave through its face.

No model of this tool holds that, so no computation of the walls fills the gap: the support force stays open as far as
the longest anchor reaches on plan. Source: project rule (judgement); bonds 1.5 m apart by EN 1997-1, 8.4(7) (seen).
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.reentrant import corners_pointing_in
from sections.criteria.sheet import Sheet
from sections.found import CriterionResult, FoundPit
from sections.pit.along import distance_along

CODE = "anchor_clash"


def anchor_clash(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Leave the support force open within the plan reach of the anchors from a re-entrant corner."""
    sheet = Sheet(found.stations, "No anchor reaches a corner that points into the dig.")
    to_sharp = distance_along(found, corners_pointing_in(found)[0])
    reach = anchor_reach(site, found)
    near = np.isfinite(to_sharp) & (to_sharp <= reach + 1e-9) & (reach > 0.0)
    sheet.lack(near, ("support_force",))
    sheet.text(
        near,
        "Re-entrant corner at {to_sharp:.1f} m, within the {reach:.1f} m that anchors reach on plan: they may cross "
        "those of the other wall or leave through its face.",
    )
    return sheet.close(
        CODE,
        "neighbour",
        basis="rule: anchors of two walls that meet at a re-entrant corner cross behind it",
        reference="project rule (judgement)",
        inputs={"to_sharp": to_sharp, "reach": np.full(len(to_sharp), reach)},
        speaks_of=("support_force",),
        settled_by="a check in three dimensions of each anchor against every wall, floor and other anchor",
    )


def anchor_reach(site: Site, found: FoundPit) -> float:
    """Longest plan length of the pit's anchors, m; 0 without anchors."""
    held = [index for row in found.rows if row.member.role == "anchor" for index in row.supports]
    if not held:
        return 0.0
    head = np.array([site.supports[index].head[:2] for index in held])
    far = np.array([site.supports[index].far[:2] for index in held])
    return float(np.max(np.hypot(*(far - head).T)))
