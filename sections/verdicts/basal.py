"""Safety of the dig against basal heave of clay, in the plane and in three dimensions.

Bjerrum & Eide 1956 with the bearing factor of Skempton 1951, for narrow and deep digs; Terzaghi 1943 for wide and
shallow ones. Constants recalled. The wall below formation is left out, which is on the safe side. Only the utilisation
1/FS is a demand: its ratio is below 1 where three dimensions help, and the safety factor itself never enters a band.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ingest.model import Site
from sections.found import FoundPit, Stations
from sections.model import Floats
from sections.pit.ground import downwards, layers_along

LARGEST_H_B = 2.5
PRONE = 1.5
"""Safety below which the ground is called prone to heave (judgement)."""
BELOW = 0.7
"""Depth below formation over which the strength is averaged, in widths of the dig."""
SAMPLES = 24


def bearing_factor(H: ArrayLike, B: ArrayLike, L: ArrayLike = np.inf) -> Floats:
    """N_c = 5 (1 + 0.2 B/L)(1 + 0.2 H/B), H/B at most 2.5, B the shorter side (Skempton 1951, recalled).

    Args:
        H: Excavated depth, m.
        B: Width of the dig, m.
        L: Length, m; inf for the plane.
    """
    H, B, L = np.asarray(H, float), np.asarray(B, float), np.asarray(L, float)
    return np.asarray(5.0 * (1.0 + 0.2 * B / L) * (1.0 + 0.2 * np.minimum(H / B, LARGEST_H_B)))


def heave_ratio(B_over_L: ArrayLike, section_B_over_L: ArrayLike = 0.0) -> Floats:
    """Real utilisation over that of the section: (1 + 0.2 B/L of the section)/(1 + 0.2 B/L), larger is worse.

    Args:
        B_over_L: Shorter over longer side of the real dig.
        section_B_over_L: What the section stands for: 0 in plane strain, 1 for an axisymmetric section.
    """
    return np.asarray((1.0 + 0.2 * np.asarray(section_B_over_L)) / (1.0 + 0.2 * np.asarray(B_over_L)))


def safety_deep(N_c: ArrayLike, su: ArrayLike, unit_weight: ArrayLike, H: ArrayLike, q: ArrayLike = 0.0) -> Floats:
    """FS = N_c s_u/(gamma H + q) (Bjerrum & Eide 1956, recalled). Units kPa, kN/m3, m."""
    load = np.asarray(unit_weight, float) * np.asarray(H) + np.asarray(q)
    return np.asarray(np.asarray(N_c) * np.asarray(su) / load)


def safety_wide(
    H: ArrayLike, B: ArrayLike, T: ArrayLike, unit_weight: ArrayLike, su_below: ArrayLike, su_above: ArrayLike,
    q: ArrayLike = 0.0,
) -> Floats:  # fmt: skip
    """FS = 5.7 s_u/(H (gamma - s_u,above/B') + q), B' = min(B/sqrt 2, T) (Terzaghi 1943, recalled).

    Args:
        H: Excavated depth, m.
        B: Width of the dig, m.
        T: Depth of clay below formation down to a hard layer, m; inf for none.
        unit_weight: kN/m3.
        su_below, su_above: Undrained strength below formation and beside the dig, kPa.
        q: Surcharge, kPa.

    Returns:
        FS; inf where the clay beside the dig holds the whole load by its shear.
    """
    width = np.minimum(np.asarray(B, float) / np.sqrt(2.0), np.asarray(T, float))
    load = np.asarray(H) * (np.asarray(unit_weight) - np.asarray(su_above) / width) + np.asarray(q)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.where(load <= 0.0, np.inf, 5.7 * np.asarray(su_below) / load))


@dataclass(frozen=True, kw_only=True)
class Clay:
    """Ground at the stations as undrained clay, arrays (n,); nan where a stratum in it has no undrained strength.

    Attributes:
        su_below: Mean undrained strength over 0.7 widths below formation, kPa.
        su_above: Mean over the excavated depth, kPa.
        unit_weight: Mean over the excavated depth, kN/m3.
        thickness: Of clay below formation, m; inf when nothing else is known below.
    """

    su_below: Floats
    su_above: Floats
    unit_weight: Floats
    thickness: Floats


def find_clay(site: Site, stations: Stations, width: Floats) -> Clay:
    """Average the strata over the depths that basal heave asks for.

    Args:
        site: With its strata.
        stations: The pit's stations.
        width: Width of the dig at each station, m.
    """
    tops = layers_along(site, stations.xy)
    share = (np.arange(SAMPLES) + 0.5) / SAMPLES
    above = stations.ground[:, None] - share * stations.depth[:, None]
    below = stations.floor[:, None] - share * (BELOW * width)[:, None]
    su_above, weight = _sample(site, tops, above)
    su_below, _ = _sample(site, tops, below)
    return Clay(
        su_below=np.mean(su_below, axis=1),
        su_above=np.mean(su_above, axis=1),
        unit_weight=np.mean(weight, axis=1),
        thickness=_clay_below(site, tops, stations.floor),
    )


def _sample(site: Site, tops: Floats, levels: Floats) -> tuple[Floats, Floats]:
    """Undrained strength and unit weight at levels (n, q); nan where the stratum there does not give them."""
    su, weight = np.full(levels.shape, np.nan), np.full(levels.shape, np.nan)
    for i in downwards(site):
        stratum, top = site.strata[i], tops[i][:, None]
        here = levels <= top + 1e-9
        strength = np.nan if stratum.su is None else stratum.su
        start = top if stratum.top_level is None else stratum.top_level
        su = np.where(here, strength + (stratum.su_gradient or 0.0) * (start - levels), su)
        weight = np.where(here, np.nan if stratum.unit_weight is None else stratum.unit_weight, weight)
    return su, weight


def _clay_below(site: Site, tops: Floats, floor: Floats) -> Floats:
    """Distance from formation down to the first stratum without undrained strength; 0 when formation stands in one."""
    order = downwards(site)
    thickness = np.full(len(floor), np.inf)
    stands_in = np.zeros(len(floor), dtype=bool)
    for i in order:
        hard = site.strata[i].su is None
        begun = tops[i] >= floor - 1e-9
        stands_in = np.where(begun, not hard, stands_in)
        first = hard & ~begun & np.isinf(thickness)
        thickness = np.where(first, floor - tops[i], thickness)
    return np.where(stands_in, thickness, 0.0)


def find_basal_safety(site: Site, found: FoundPit, *, plane: bool = True) -> Floats:
    """Safety against basal heave at the stations (n,); nan where levels, width or undrained strengths are not known.

    Args:
        site: With its strata.
        found: The pit.
        plane: True for the plane (length without end), else with the real sides of the dig.
    """
    stations = found.stations
    if not site.strata:
        return np.full(len(stations.chainage), np.nan)
    facing = np.where(np.isfinite(stations.facing), stations.facing, np.nan)
    side = facing if stations.ring else stations.side_length
    B, L = (facing, np.inf) if plane else (np.fmin(facing, side), np.fmax(facing, side))
    H, clay = stations.depth, find_clay(site, stations, np.nan_to_num(facing, nan=1.0))
    deep = safety_deep(bearing_factor(H, B, L), clay.su_below, clay.unit_weight, H, stations.surcharge)
    wide = safety_wide(H, B, clay.thickness, clay.unit_weight, clay.su_below, clay.su_above, stations.surcharge)
    valid = ~np.isnan(facing) & (clay.thickness > 0.0) & (H > 0.0)
    return np.where(valid, np.where(H / B >= 1.0, deep, wide), np.nan)
