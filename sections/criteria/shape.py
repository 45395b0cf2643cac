"""Curved walls: a ring carries thrust round the shaft, which a plane-strain section cannot.

Ratio 0.05 and less in computed cases of a continuous wall of 12.5 m radius (0.83 for a row of piles without hoop
stiffness): plane strain grossly over-states there, and back-analysis with it is meaningless. Source: own computation;
ring theory u = p R^2/(E t).
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.pit.wall_changes import kinds_at

CODE = "shape"
HOOPLESS = ("contiguous", "king_post", "sheet", "none")
"""Walls that carry no thrust along themselves; an unknown wall may."""


def shape(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Shut plane strain for ring walls that carry hoop thrust; leave other curved walls open."""
    stations = found.stations
    sheet = Sheet(stations, "The wall is straight here.")
    curved = ~np.isnan(stations.radius) | stations.ring
    kinds = kinds_at(found)
    affected = (*WALL_OUTPUTS, "settlement")
    sheet.lack(curved, affected)
    sheet.text(curved, "The wall is curved here; how far the curve relieves or loads it is not assessed.")
    hoop = curved & stations.ring & ~np.isin(kinds, HOOPLESS)
    sheet.shut(hoop, affected)
    sheet.text(
        hoop,
        "The wall is a ring that carries thrust round the shaft (hoop action): a plane-strain section grossly "
        "over-states movement and bending and has no hoop force. Use an axisymmetric section.",
    )
    return sheet.close(
        CODE,
        "shape",
        basis="ring theory: radial stiffness E t/R^2 that plane strain does not have",
        reference="statics of a ring; own computation",
        inputs={"radius": stations.radius},
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="an axisymmetric section, where the thrust stays in the wall",
    )
