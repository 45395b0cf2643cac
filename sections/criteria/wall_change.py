"""Changes of wall along the perimeter: another kind, size or toe, a wall that stops, a stretch without a wall.

A stiff wall beside a weak one attracts what the weak one sheds; a short panel beside a long one likewise.
Source: project rule (judgement): nothing is claimed near a change.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.pit.along import FREE, distance_along, find_ends
from sections.pit.wall_changes import changes_of, kinds_at

CODE = "wall_change"
REACH = 1.0
"""Reach of a change along the wall, in excavated depths (judgement)."""


def wall_change(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Mark the wall's outputs as open within one depth of a change of wall or of its end, and where no wall stands."""
    stations = found.stations
    sheet = Sheet(stations, "The wall is of one construction within one excavated depth.")
    ends = find_ends(found)
    back = np.where(ends.back_kind == FREE, ends.back, np.inf)
    ahead = np.where(ends.ahead_kind == FREE, ends.ahead, np.inf)
    to_end = np.minimum(back, ahead)
    to_change = distance_along(found, changes_of(found))
    reach = REACH * np.where(np.isnan(stations.depth), np.inf, stations.depth) + 1e-9
    kinds = kinds_at(found)
    affected = (*WALL_OUTPUTS, "settlement")
    near_end = np.isfinite(to_end) & (to_end <= reach)
    sheet.lack(near_end, affected)
    sheet.text(near_end, "The wall ends {to_end:.1f} m from here; what lies beyond is not known: nothing is claimed.")
    near_change = np.isfinite(to_change) & (to_change <= reach)
    sheet.lack(near_change, affected)
    sheet.text(near_change, "The construction of the wall changes {to_change:.1f} m from here: not assessed so near.")
    bare = np.isin(kinds, ("none", "unknown"))
    sheet.lack(bare, affected)
    sheet.text(bare, "No wall, or a wall of unknown kind, stands here.")
    return sheet.close(
        CODE,
        "wall_change",
        basis="rule: beside a change of wall nothing is claimed",
        reference="project rule (judgement)",
        inputs={"to_end": to_end, "to_change": to_change},
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="a computation with the real walls along the perimeter",
    )
