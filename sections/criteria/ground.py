"""Ground that does not repeat along the wall, or that moves as a whole from below.

Layers that dip along the wall make neighbouring strips unlike; a base prone to heave moves the toe, which the corner
classes do not hold. Source: project rules (judgement).
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import MOMENTS, WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Floats
from sections.pit.ground import layers_along, nearest_borehole
from sections.verdicts.basal import PRONE, find_basal_safety

CODE = "ground"
STEEP = 15.0
"""Dip along the wall from which nothing is claimed, degrees (judgement)."""
FAR = 50.0
"""Distance to the nearest borehole that is named as large, m (judgement)."""
PACE = 1.0


def ground(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Leave the wall's outputs open where layers dip steeply along the wall or the base is prone to heave."""
    stations = found.stations
    sheet = Sheet(stations, "Nothing is known of the ground along the wall.")
    dip = dip_along_wall(site, found)
    distance = nearest_borehole(site, stations.xy)
    safety = find_basal_safety(site, found)
    told = np.full(len(dip), len(site.strata) > 0)
    sheet.text(told, "Layers dip {dip:.1f} degrees along the wall: taken as level in the section.")
    sheet.text(
        told & np.isfinite(distance) & (distance > FAR),
        "Layers dip {dip:.1f} degrees along the wall; the nearest borehole is {distance:.0f} m away.",
    )
    prone = safety < PRONE - 1e-9
    sheet.lack(prone, ("wall_deflection", "settlement", *MOMENTS))
    sheet.text(
        prone,
        "Safety against basal heave is {safety:.2f} in the plane, below 1.5: the toe moves with the base, so movement "
        "and moment are not assessed.",
    )
    steep = dip > STEEP + 1e-9
    sheet.lack(steep, (*WALL_OUTPUTS, "settlement"))
    sheet.text(steep, "Layers dip {dip:.1f} degrees along the wall, more than 15: neighbouring strips are unlike.")
    return sheet.close(
        CODE,
        "ground",
        basis="rule: a cut repeats along the wall only where the layers nearly do",
        reference="project rule (judgement); basal heave by Bjerrum & Eide 1956 or Terzaghi 1943 (recalled)",
        inputs={"dip": dip, "distance": distance, "safety": safety},
        recalled=True,
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="boreholes along the wall and an analysis in three dimensions",
    )


def dip_along_wall(site: Site, found: FoundPit) -> Floats:
    """Steepest slope of any layer along the wall at the stations (n,), degrees; nan without layers."""
    stations = found.stations
    n = len(stations.chainage)
    if not site.strata:
        return np.full(n, np.nan)
    along = np.column_stack([stations.normal[:, 1], -stations.normal[:, 0]])
    before = layers_along(site, stations.xy - PACE * along)
    after = layers_along(site, stations.xy + PACE * along)
    slope = np.degrees(np.arctan(np.abs(after - before) / (2 * PACE)))
    known = ~np.isnan(slope)
    return np.where(known.any(axis=0), np.max(np.where(known, slope, 0.0), axis=0), np.nan)
