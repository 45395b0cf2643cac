"""Seepage into the dig: the gradient at the wall's foot is larger in three dimensions, most of all in corners.

Bands of an own computation: steady flow, homogeneous ground, thin tight wall, water held at the retained surface and at
formation, impermeable base; two methods agree, neither is a measurement. They hold only if the 2D section too is run
with water held at the retained level right behind the wall. Reach along the wall in H + d, dig depth plus embedment.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Bools, Floats
from sections.pit.along import ORTHOGONAL, WallEnds, distance_along, find_ends, steps_of
from sections.pit.ground import downwards, layers_along, water_along
from sections.pit.wall_changes import kinds_at, toe_steps_of

CODE = "water_gradient"
TIGHT = ("diaphragm", "secant", "sheet", "concrete")
AQUICLUDE = 0.01
"""A stratum this much less permeable than those above it, at the toe, is taken as tight (judgement)."""

Band = tuple[float, float]
AT_CORNER: Band = (1.25, 1.9)
NEAR_CORNER: Band = (1.1, 1.9)
FARTHER: Band = (1.0, 1.5)
LONG: Band = (1.0, 1.3)
LONG_BEYOND: Band = (1.0, 1.2)
VERY_LONG: Band = (1.0, 1.1)
ROUND_NARROW: Band = (1.3, 1.65)
ROUND_WIDE: Band = (1.0, 1.65)


def hydraulic_band(distance: Floats, length: Floats, other: Floats, H: Floats, d: Floats) -> tuple[Floats, Floats]:
    """Band of the hydraulic utilisation on a straight wall, arrays (n,).

    Args:
        distance: To the nearer inside corner, m.
        length: Of the wall, m; 0 at the corner itself.
        other: Length of the other side, m.
        H: Excavated depth, m.
        d: Embedment of the wall below formation, m.
    """
    reach = H + d
    slack = 1e-9
    with np.errstate(divide="ignore", invalid="ignore"):
        slender = length / other
    cases: list[tuple[Bools, Band]] = [
        (distance <= d / 2 + slack, AT_CORNER),
        (distance <= 0.5 * reach + slack, NEAR_CORNER),
        (distance <= reach + slack, FARTHER),
        (slender < 3.0 - slack, FARTHER),
        (distance <= 2.0 * reach + slack, LONG),
        (slender < 6.0 - slack, LONG_BEYOND),
    ]
    where = [case[0] for case in cases]
    low = np.select(where, [case[1][0] for case in cases], VERY_LONG[0])
    high = np.select(where, [case[1][1] for case in cases], VERY_LONG[1])
    return low, high


def round_band(radius: Floats, H: Floats, d: Floats) -> tuple[Floats, Floats]:
    """Band for a round dig judged by a plane-strain section."""
    narrow = radius <= H + d + 1e-9
    return np.where(narrow, ROUND_NARROW[0], ROUND_WIDE[0]), np.where(narrow, ROUND_NARROW[1], ROUND_WIDE[1])


@dataclass(frozen=True, kw_only=True)
class _Flow:
    H: Floats
    d: Floats
    distance: Floats


def water_gradient(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Give the band of the hydraulic utilisation where water levels, permeability and a tight wall are known."""
    stations, ends = found.stations, find_ends(found)
    sheet = Sheet(stations, "Water levels or permeability are not given.")
    flow = _Flow(H=stations.depth, d=stations.floor - stations.toe, distance=ends.to_inside)
    able = _able(site, found, ends, flow, sheet)
    low, high = hydraulic_band(flow.distance, ends.length, stations.facing, flow.H, flow.d)
    if stations.ring:
        low, high = round_band(stations.radius, flow.H, flow.d)
    blunt = ends.inside_angle > ORTHOGONAL + 1e-9
    sheet.say(able, ("hydraulic_utilisation",), np.where(blunt, np.minimum(low, 1.0), low), high)
    place = "Round dig of {radius:.1f} m radius" if stations.ring else "Inside corner at {distance:.1f} m"
    layered = "; the ground is layered, so the high end may be passed" if _permeabilities(site).size > 1 else ""
    sheet.text(
        able,
        f"{place}, dig and embedment {{reach:.1f}} m together: the real gradient at the wall's foot is {{low:.2f}} to "
        f"{{high:.2f}} times that of the plane, run with water held at the retained level behind the wall{layered}.",
    )
    return sheet.close(
        CODE,
        "water",
        basis="steady flow into rectangular and round digs, own computation, rounded outward; no measurement",
        reference="own computation by finite elements and by finite differences",
        inputs={
            "distance": flow.distance, "reach": flow.H + flow.d, "radius": stations.radius, "low": low, "high": high,
        },
        own_margin=True,
        speaks_of=("hydraulic_utilisation",),
        settled_by="water levels on both sides and the permeability of the ground, then a flow net in three dimensions",
    )  # fmt: skip


def _able(site: Site, found: FoundPit, ends: WallEnds, flow: _Flow, sheet: Sheet) -> Bools:
    """Say why a station cannot be judged, the first reason that applies, and tell which ones can."""
    stations = found.stations
    outside = water_along(site, stations.xy)
    told = site.water_excavated is not None and _permeabilities(site).size > 0
    given = ~np.isnan(outside) if told else np.zeros(len(outside), dtype=bool)
    to_toe_step = distance_along(found, toe_steps_of(found))
    to_step = distance_along(found, steps_of(found))
    corner = np.isfinite(flow.distance) & ~ends.has_acute
    straight = given & (not stations.ring)
    reasons: tuple[tuple[Bools, str], ...] = (
        (given & (np.isnan(flow.H) | np.isnan(flow.d)), "Dig level or toe of the wall is not given."),
        (given & (outside <= stations.floor + 1e-9), "The water outside stands at or below formation."),
        (given & (flow.d <= 0.0), "The wall does not reach below formation."),
        (given & ~np.isin(kinds_at(found), TIGHT), "The wall lets water through or is of unknown kind."),
        (straight & ~np.isfinite(stations.facing), "The dig is open: no wall stands opposite."),
        (straight & ~corner, "No inside corner of 60 to 150 degrees ends this wall."),
        (given & (np.minimum(to_toe_step, to_step) <= flow.d), "A step of toe or floor lies within one embedment."),
        (given & _toe_in_aquiclude(site, found), "The toe stands in a tight layer: uplift of the plug rules."),
    )
    able = given.copy()
    for where, words in reversed(reasons):
        sheet.text(where, words)
        able &= ~where
    return able


def _permeabilities(site: Site) -> Floats:
    """Different permeabilities of the strata; empty unless every stratum gives one."""
    values = [stratum.permeability for stratum in site.strata]
    return np.array([]) if not values or None in values else np.unique(np.array(values, dtype=np.float64))


def _toe_in_aquiclude(site: Site, found: FoundPit) -> Bools:
    """True where the stratum at the toe is much tighter than every one above it."""
    stations = found.stations
    tops = layers_along(site, stations.xy)
    at_toe, above = np.full(len(stations.toe), np.nan), np.full(len(stations.toe), np.nan)
    for i in downwards(site):
        value = site.strata[i].permeability
        begins = tops[i] > stations.toe
        above = np.where(begins, np.fmin(above, at_toe), above)
        at_toe = np.where(begins, np.nan if value is None else value, at_toe)
    return np.asarray(at_toe <= AQUICLUDE * above)
