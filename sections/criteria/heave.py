"""Basal heave of clay: a short dig uses less of the ground's strength than the plane does.

Ratio of the utilisations 1/FS, so 1/(1 + 0.2 B/L), at most 1: the gain 1 + 0.2 B/L in the safety factor itself would
read as a danger. Source: shape factor of Skempton 1951 in Bjerrum & Eide 1956, recalled.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import Sheet
from sections.found import CriterionResult, FoundPit
from sections.pit.along import is_rectangle
from sections.verdicts.basal import find_clay, heave_ratio

CODE = "heave_shape"


def heave_shape(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Compare the base of a rectangular or round dig with an endless one, where the clay's strength is known."""
    stations = found.stations
    sheet = Sheet(stations, "The undrained strength of the ground below formation is not given.")
    sides = np.array([stations.facing, stations.side_length])
    B_over_L = np.ones(len(stations.chainage)) if stations.ring else sides.min(axis=0) / sides.max(axis=0)
    fits = stations.ring or is_rectangle(found)
    width = np.where(np.isfinite(stations.facing), stations.facing, np.nan)
    strength = find_clay(site, stations, width).su_below if site.strata else np.full(len(width), np.nan)
    known = ~np.isnan(strength)
    sheet.text(known, "The dig is neither a rectangle nor round: no shape factor of basal heave fits it.")
    able = known & fits & np.isfinite(B_over_L)
    ratio = heave_ratio(B_over_L)
    sheet.say(able, ("heave_utilisation",), ratio, ratio)
    sheet.text(
        able,
        "Width over length of the dig {B_over_L:.2f}: the real utilisation of basal heave is {ratio:.2f} times that "
        "of the plane, 1/(1 + 0.2 B/L).",
    )
    return sheet.close(
        CODE,
        "shape",
        basis="bearing factor N_c = 5 (1 + 0.2 B/L)(1 + 0.2 H/B)",
        reference="Skempton 1951, Bjerrum & Eide 1956 (recalled)",
        inputs={"B_over_L": B_over_L, "ratio": ratio, "su_below": strength},
        own_margin=True,
        recalled=True,
        speaks_of=("heave_utilisation",),
        settled_by="the undrained strength of the ground over 0.7 widths below formation",
    )
