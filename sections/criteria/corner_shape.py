"""Published shape of the movement along a wall between two inside corners of a clay pit.

Roboski & Finno 2006: d(x)/d_max = 1 - 0.5 erfc(2.8 (x + a)/(0.5 L - den)). Two versions circulate, with 0.015 and
with 0.15 in the denominator; neither is taken over the other, the band spans both until someone reads the paper. The
shape of Mu & Huang 2016 nearly vanishes at the corner and serves as a lower bound only. All constants are recalled or
seen at second hand. Times the plane strain ratio it gives the ratio along the wall (project rule). A cross-check.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ingest.model import Limits, Site
from sections.criteria.plane_strain_ratio import find_plane_strain_ratio
from sections.criteria.sheet import MOVEMENTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Floats
from sections.pit.along import find_ends

CODE = "corner_shape"
C_NUMERATOR, C_DENOMINATORS = 0.015, (0.015, 0.15)
SLOPE, STEEPNESS = 0.035, 2.8


def shape_offset(L: ArrayLike, He: ArrayLike, c: float = C_NUMERATOR) -> Floats:
    """Offset of the fit, a = L (c + 0.035 ln(He/L)), m."""
    L = np.asarray(L, float)
    return np.asarray(L * (c + SLOPE * np.log(np.asarray(He) / L)))


def error_function_shape(x: ArrayLike, L: ArrayLike, He: ArrayLike, c_den: float) -> Floats:
    """Movement at distance x from the nearer corner over that at mid-wall (Roboski & Finno 2006).

    Args:
        x: From the nearer corner, m, at most L/2.
        L: Length of the wall, m.
        He: Excavated depth, m.
        c_den: 0.015 or 0.15, the two versions in circulation.
    """
    from scipy.special import erfc

    a, den = shape_offset(L, He), shape_offset(L, He, c_den)
    return np.asarray(1.0 - 0.5 * erfc(STEEPNESS * (np.asarray(x) + a) / (0.5 * np.asarray(L, float) - den)))


def reach_of_share(share: float, L: float, He: float, c_den: float) -> float:
    """Distance from the corner at which a share of the mid-wall movement is reached, m."""
    from scipy.special import erfcinv

    a, den = float(shape_offset(L, He)), float(shape_offset(L, He, c_den))
    return -a + (0.5 * L - den) * float(erfcinv(2.0 * (1.0 - share))) / STEEPNESS


def bell_shape(x: ArrayLike, L: ArrayLike, He: ArrayLike) -> Floats:
    """Movement over that at mid-wall after Mu & Huang 2016, exp(-pi (s/W)^2), s from mid-wall; a lower bound only."""
    L = np.asarray(L, float)
    W = bell_width(L, He)
    return np.asarray(np.exp(-np.pi * ((0.5 * L - np.asarray(x)) / W) ** 2))


def bell_width(L: ArrayLike, He: ArrayLike) -> Floats:
    """W = (L/2)(0.069 ln(He/L) + 1.03), m."""
    L = np.asarray(L, float)
    return np.asarray(L / 2 * (0.069 * np.log(np.asarray(He) / L) + 1.03))


def corner_shape(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Give movements min(1, PSR) d(x)/d_max along walls between two inside corners, both versions as one band."""
    stations, ends = found.stations, find_ends(found)
    published = find_plane_strain_ratio(site, found)
    sheet = Sheet(stations, published.why or "Outside the range of the published analyses.")
    x, L, He = np.minimum(ends.back, ends.ahead), ends.length, stations.depth
    able = ~np.isnan(published.ratio) & np.isfinite(L) & (L > 0.0)
    low, high = np.full(len(x), np.nan), np.full(len(x), np.nan)
    if np.any(able):
        place = x[able], L[able], He[able]
        shapes = np.array([error_function_shape(*place, c_den) for c_den in C_DENOMINATORS])
        low[able] = published.ratio[able] * np.minimum(shapes.min(axis=0), bell_shape(*place))
        high[able] = published.ratio[able] * shapes.max(axis=0)
    sheet.say(able, MOVEMENTS, low, high)
    sheet.text(
        able,
        "Published shape of movement {x:.1f} m from the corner of a {length:.1f} m wall, times the plane strain ratio "
        "{ratio:.2f}: {low:.2f} to {high:.2f} times the 2D value.",
    )
    return sheet.close(
        CODE,
        "corner",
        basis="error-function fit to measured movements of clay pits, two versions; bell shape as lower bound",
        reference="Roboski & Finno 2006, Can. Geotech. J. 43(1), 43; Mu & Huang 2016 (constants recalled)",
        inputs={"x": x, "length": L, "ratio": published.ratio, "low": low, "high": high},
        cross_check=True,
        recalled=True,
        speaks_of=MOVEMENTS,
        settled_by="the paper itself, for the constant in its denominator",
    )
