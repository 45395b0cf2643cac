"""Published ratio of wall movement in three dimensions to plane strain, at the middle of a wall of a clay pit.

Finno, Blackburn & Roboski 2007: PSR = 1 - exp(-k C L/He) + 0.05 (L/B - 1). The formula and its constants are recalled,
its meaning and that it is 1 beyond L/He = 6 were seen in the abstract. A cross-check: it widens the band of another
criterion of the corner and never stands alone.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ingest.model import Limits, Site
from sections.criteria.sheet import MOVEMENTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Bools, Floats
from sections.pit.along import REENTRANT, bay_of, cover_of, find_ends, is_rectangle
from sections.verdicts.basal import find_basal_safety, find_clay
from sections.verdicts.wall_bending import EI_at

CODE = "plane_strain_ratio"
MIDDLE = 0.05
"""Half width of the stretch that counts as the middle of a wall, in wall lengths (judgement)."""
SLENDER = (0.5, 12.0)
STIFFNESS = (32.0, 3200.0)
SAFE = 1.8
"""Safety against basal heave above which the ratio no longer grows."""
REFERENCE = "Finno, Blackburn & Roboski 2007, J. Geotech. Geoenviron. Eng. 133(1), 30 (formula recalled, abstract seen)"


def system_stiffness(EI: ArrayLike, unit_weight: ArrayLike, spacing: ArrayLike) -> Floats:
    """S = EI/(gamma h^4), EI in kNm2 per m of wall, unit weight kN/m3, mean vertical support spacing m."""
    return np.asarray(np.asarray(EI, float) / (np.asarray(unit_weight, float) * np.asarray(spacing, float) ** 4))


def plane_strain_ratio_formula(L: ArrayLike, B: ArrayLike, He: ArrayLike, S: ArrayLike, FS: ArrayLike) -> Floats:
    """PSR as published, neither capped nor checked for its validity; see `valid_for`.

    Args:
        L: Length of the wall considered, m.
        B: The other side of the pit, m.
        He: Excavated depth, m.
        S: System stiffness, pure number.
        FS: Safety against basal heave in the plane; above 1.8 it counts as 1.8.
    """
    L = np.asarray(L, float)
    k = 1.0 - 0.0001 * np.asarray(S)
    C = 1.0 - 0.5 * (SAFE - np.minimum(FS, SAFE))
    return np.asarray(1.0 - np.exp(-k * C * L / He) + 0.05 * (L / np.asarray(B) - 1.0))


def valid_for(L: ArrayLike, He: ArrayLike, S: ArrayLike, FS: ArrayLike) -> Bools:
    """True inside the range of the published analyses; outside nothing is assessed, never clipped to the edge."""
    slender = np.asarray(L, float) / np.asarray(He)
    stable = np.asarray(FS) >= 1.0
    return np.asarray(_inside(slender, SLENDER) & _inside(np.asarray(S), STIFFNESS) & stable)


def _inside(value: Floats, limits: tuple[float, float]) -> Bools:
    return np.asarray((value >= limits[0] - 1e-9) & (value <= limits[1] + 1e-9))


@dataclass(frozen=True, kw_only=True)
class PlaneStrainRatio:
    """The ratio along one perimeter, arrays (n,): capped at 1, nan where not valid, with why."""

    ratio: Floats
    S: Floats
    FS: Floats
    length: Floats
    why: str


def find_plane_strain_ratio(site: Site, found: FoundPit) -> PlaneStrainRatio:
    """Evaluate the published ratio wherever ground, wall and supports are inside its validity."""
    stations, ends = found.stations, find_ends(found)
    n = len(stations.chainage)
    nothing = np.full(n, np.nan)
    spacing = mean_vertical_spacing(found)
    FS = find_basal_safety(site, found)
    EI = EI_at(site, found)
    why = _why_not(site, found, spacing, FS, EI)
    if why:
        return PlaneStrainRatio(ratio=nothing, S=nothing, FS=FS, length=ends.length, why=why)
    S = system_stiffness(EI, find_clay(site, stations, stations.facing).unit_weight, spacing)
    L, He = ends.length, stations.depth
    good = valid_for(L, He, S, FS) & ~ends.has(REENTRANT)
    with np.errstate(invalid="ignore"):
        ratio = np.minimum(1.0, plane_strain_ratio_formula(L, stations.facing, He, S, FS))
    return PlaneStrainRatio(ratio=np.where(good, ratio, np.nan), S=S, FS=FS, length=L, why="")


def _why_not(site: Site, found: FoundPit, spacing: Floats, FS: Floats, EI: Floats) -> str:
    """The first thing that keeps the whole pit outside the range of the published analyses; empty when nothing does."""
    clay = site.strata and all(stratum.su is not None for stratum in site.strata)
    checks = (
        (not is_rectangle(found), "The pit is no rectangle with four inside corners."),
        (not clay, "The ground is not clay throughout, or its undrained strength is not given."),
        (bool(np.all(np.isnan(spacing))), "Fewer than two support levels have no vertical spacing."),
        (bool(np.all(np.isnan(FS))), "The safety against basal heave is not known."),
        (bool(np.all(np.isnan(EI))), "The bending stiffness of the wall is not known."),
    )
    return next((words for fails, words in checks if fails), "")


def mean_vertical_spacing(found: FoundPit) -> Floats:
    """Mean distance between the support levels at each station (n,), m; nan with fewer than two levels."""
    of_row = np.array([np.nan if row.member.level is None else row.member.level for row in found.rows])
    levels = np.unique(of_row[~np.isnan(of_row)])
    cover = cover_of(found.stations, len(of_row))
    held = np.zeros((len(cover), len(levels)), dtype=bool)
    for j, level in enumerate(levels):
        held[:, j] = cover[:, of_row == level].any(axis=1)
    count = held.sum(axis=1)
    top = np.max(np.where(held, levels, -np.inf), axis=1, initial=-np.inf)
    bottom = np.min(np.where(held, levels, np.inf), axis=1, initial=np.inf)
    several = count >= 2
    span = np.where(several, top, 0.0) - np.where(several, bottom, 0.0)
    return np.where(several, span / np.maximum(count - 1, 1), np.nan)


def plane_strain_ratio(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Give movements the published ratio at the middle of each wall, inside its validity only."""
    stations, ends = found.stations, find_ends(found)
    published = find_plane_strain_ratio(site, found)
    sheet = Sheet(stations, published.why or "Outside the range of the published analyses, or not at mid-wall.")
    length = np.where(np.isfinite(ends.length), ends.length, 0.0)
    middle = np.abs(np.where(length > 0.0, ends.back - 0.5 * length, np.inf)) <= MIDDLE * length + 1e-9
    able = ~np.isnan(published.ratio) & middle & (bay_of(found) > 0.0)
    sheet.say(able, MOVEMENTS, published.ratio, published.ratio)
    sheet.text(
        able,
        "Published plane strain ratio for the middle of a clay pit's wall: {ratio:.2f} (system stiffness {S:.0f}, "
        "safety against basal heave {FS:.2f}).",
    )
    return sheet.close(
        CODE,
        "corner",
        basis="150 published finite-element analyses of rectangular pits in clay",
        reference=REFERENCE,
        inputs={"ratio": published.ratio, "S": published.S, "FS": published.FS, "length": published.length},
        cross_check=True,
        recalled=True,
        speaks_of=MOVEMENTS,
        settled_by="a computation of the whole perimeter (screening)",
    )
