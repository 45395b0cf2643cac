"""Irregular rows: a missing or shifted support, a row that stops short, a support that stands alone.

A 2D section smears a row over its usual spacing. Beside a gap the real wall moves more (in a computed case 1.26 to 1.53
times at twice the spacing) and the supports next to it take more; by how much depends on wall and waler, so nothing is
claimed there. Source: project rule (judgement); the figures are from an own computation.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit, SupportRow
from sections.model import Bools, Floats
from sections.pit.along import beside_gap, cover_of, distance_along

CODE = "supports_gap"


def supports_gap(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Mark the wall's outputs as open around supports that stand for clearly more wall than their row usually does."""
    stations = found.stations
    sheet = Sheet(stations, "The rows of supports here are regular.")
    n = len(stations.chainage)
    irregular, lonely = np.zeros(n, dtype=bool), np.zeros(n, dtype=bool)
    width = np.zeros(n)
    cover = cover_of(stations, len(found.rows))
    for j, row in enumerate(found.rows):
        for at, tributary in ((row.head_at, row.tributary_head), (row.far_at, row.tributary_far)):
            near, widest = _around_gaps(found, row, at, tributary, limits)
            irregular |= near
            width = np.where(near, np.maximum(width, widest), width)
        lonely |= cover[:, j] & (_largest_count(row) < 2)
    sheet.lack(irregular | lonely, (*WALL_OUTPUTS, "settlement"))
    sheet.text(lonely, "One support alone holds this wall at its level: it repeats nowhere, so it cannot be smeared.")
    sheet.text(
        irregular,
        "A support near here stands for {width:.1f} m of wall, clearly more than its row usually does: beside a gap "
        "the real wall moves more than the 2D one, by how much is not assessed.",
    )
    return sheet.close(
        CODE,
        "supports",
        basis="rule: a smeared row is regular; gaps are not evaluated",
        reference="project rule (judgement)",
        inputs={"width": width},
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="a computation with every support at its real place",
    )


def _largest_count(row: SupportRow) -> int:
    return max(int(np.sum(~np.isnan(row.head_at))), int(np.sum(~np.isnan(row.far_at))))


def _around_gaps(
    found: FoundPit, row: SupportRow, at: Floats, tributary: Floats, limits: Limits
) -> tuple[Bools, Floats]:
    """Stations on the wall that a support beside a gap stands for, and one usual bay, or depth, beyond it."""
    n = len(found.stations.chainage)
    wide = beside_gap(found, at, tributary, limits.spacing_ratio)
    if not np.any(wide):
        return np.zeros(n, dtype=bool), np.zeros(n)
    usual = float(np.median(tributary[~np.isnan(tributary)]))
    widest = float(np.max(tributary[wide]))
    depth = np.where(np.isnan(found.stations.depth), np.inf, found.stations.depth)
    reach = widest / 2 + np.maximum(usual, depth)
    return distance_along(found, at[wide]) <= reach, np.full(n, widest)
