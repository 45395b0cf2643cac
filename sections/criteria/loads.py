"""Loads behind the wall that are short along it: endless in the section, ended in truth.

The section hands a load over with its real effect on the wall, the larger of resultant and moment down to formation
and toe. The others of these effects are then r to 1 times what is handed over. How much of an output a load makes is
not known without a 2D run with and without it, so the band is [r, 1]. Source: elastic half-space, Boussinesq, Flamant.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ingest.members import Load
from ingest.model import Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Bools, Floats
from sections.verdicts.verdict import share_weighted

CODE = "loads"
NEAREST = 0.1
"""A point or line load nearer to the wall than this has no bounded elastic effect on it, m (judgement)."""
GAUSS, WEIGHT = np.polynomial.legendre.leggauss(24)


@dataclass(frozen=True, kw_only=True)
class _Seen:
    """A load as the stations (n,) see it: distances behind the wall and along it, and depths below it to act over."""

    near: Floats
    far: Floats
    low: Floats
    high: Floats
    heights: Floats


def loads(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Give [r, 1] for the loads that bear on each station; a load without value or level leaves the outputs open."""
    stations = found.stations
    sheet = Sheet(stations, "No load bears on the wall here.")
    n = len(stations.chainage)
    least = np.full(n, np.nan)
    affected = (*WALL_OUTPUTS, "settlement")
    for name, load, here in _bearing(site, found):
        ratio = np.full(n, np.nan)
        if load.value is not None:
            seen = _see(found, load, here)
            ratio[here] = _ratio(load, seen)
        able = here & ~np.isnan(ratio)
        sheet.lack(here & ~able, affected)
        sheet.text(here & ~able, f"Value, place or level of load {_plain(name)} leaves its effect on the wall open.")
        low = np.array([share_weighted(float(value), None)[0] for value in ratio[able]])
        least[able] = np.fmin(least[able], low)
    able = ~np.isnan(least)
    sheet.say(able, WALL_OUTPUTS, least, 1.0)
    open_ = sheet.missing.any(axis=1)
    sheet.lack(able, ("settlement",))
    sheet.text(
        able & ~open_,
        "Loads that end along the wall act with {least:.2f} to 1.00 times what the section carries for them; their "
        "share of each output is not known.",
    )
    return sheet.close(
        CODE,
        "load",
        basis="elastic half-space: effects of the real load over the one handed over, by resultant and moment",
        reference="Boussinesq 1885, Flamant 1892 (recalled); integrals derived",
        inputs={"least": least},
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="the load's share of the output: the 2D section run with and without it",
        silence={"settlement": "a load's effect on the wall says nothing of the settlement under it"},
    )


def _plain(name: str) -> str:
    return name.replace("{", "(").replace("}", ")")


def _bearing(site: Site, found: FoundPit) -> Iterator[tuple[str, Load, Bools]]:
    """Loads by id with the stations they bear on."""
    for name, index in sorted(found.loads.items()):
        here = np.array([name in listed for listed in found.stations.load_ids])
        if np.any(here):
            yield name, site.loads[index], here


def _see(found: FoundPit, load: Load, here: Bools) -> _Seen:
    stations = found.stations
    normal = stations.normal[here]
    gap = np.asarray(load.points, dtype=np.float64)[None, :, :] - stations.xy[here][:, None, :]
    back = -np.einsum("npk,nk->np", gap, normal)
    along = gap[:, :, 0] * normal[:, None, 1] - gap[:, :, 1] * normal[:, None, 0]
    level = stations.ground[here] if load.level is None else np.full(len(normal), load.level)
    heights = np.column_stack([level - stations.floor[here], level - stations.toe[here]])
    return _Seen(
        near=back.min(axis=1),
        far=back.max(axis=1),
        low=along.min(axis=1),
        high=along.max(axis=1),
        heights=np.where(heights > 1e-6, heights, np.nan),
    )


def _ratio(load: Load, seen: _Seen) -> Floats:
    """Least ratio of the real effect to what may be handed over (m,); nan where it has no bounded effect."""
    short = np.maximum(seen.high - seen.low, 0.0)
    if load.kind == "point" or len(load.points) == 1:
        return _point_ratio(seen)
    if load.kind == "line":
        towards = seen.far - seen.near > short
        middle = (seen.near + seen.far) / 2
        parallel = _as_handed(*area_ratio(middle - 0.01, middle + 0.01, seen.low, seen.high, seen.heights))
        parallel = np.where(middle < NEAREST, np.nan, parallel)
        # handed over in the plane of the load: seen from a plane beside it the near end falls off fastest
        off = np.maximum(0.0, np.maximum(seen.low, -seen.high))
        fall = (seen.near**2 / (seen.near**2 + off**2)) ** 1.5
        return np.where(towards, np.where(seen.near < NEAREST, np.nan, fall), parallel)
    ratio = _as_handed(*area_ratio(np.maximum(seen.near, 0.0), seen.far, seen.low, seen.high, seen.heights))
    return np.where((seen.near < -1e-6) | (short < 1e-9), np.nan, ratio)


def _point_ratio(seen: _Seen) -> Floats:
    """A point load is handed over by the smaller width of resultant and moment: the other effect is over-stated."""
    x2 = np.maximum(seen.near, NEAREST)[:, None] ** 2
    a2 = x2 + np.maximum(np.abs(seen.low), np.abs(seen.high))[:, None] ** 2
    H2 = seen.heights**2
    line_force, line_moment = _line_effects(np.sqrt(x2), seen.heights)
    force = x2 / (2 * np.pi) * (a2**-1.5 - (a2 + H2) ** -1.5) / line_force
    moment = x2 * seen.heights / (2 * np.pi) * (a2**-1.5 - 1 / (a2 * np.sqrt(a2 + H2))) / line_moment
    both = np.concatenate([force, moment], axis=1)
    return np.where(seen.near < NEAREST, np.nan, np.fmin.reduce(both, axis=1) / np.fmax.reduce(both, axis=1))


def area_ratio(near: Floats, far: Floats, low: Floats, high: Floats, heights: Floats) -> tuple[Floats, Floats]:
    """Least and largest effect on the wall of a loaded rectangle over that of an endless strip of its pressure (m,).

    Args:
        near, far: Edges behind the wall, m.
        low, high: Its ends along the wall from the station, m, high above low.
        heights: Depths to act over (m, h), m; nan where not known. Over these, by resultant and by moment.
    """
    half = (far - near)[:, None, None] / 2
    x = near[:, None, None] + half * (1 + GAUSS)
    H = heights[:, :, None]
    force = (_side_force(x, H, high) - _side_force(x, H, low)) / 2
    moment = (_side_moment(x, H, high) - _side_moment(x, H, low)) / 2
    strip_force, strip_moment = _line_effects(x, H)
    by_force = np.sum(WEIGHT * force, axis=2) / np.sum(WEIGHT * strip_force, axis=2)
    by_moment = np.sum(WEIGHT * moment, axis=2) / np.sum(WEIGHT * strip_moment, axis=2)
    both = np.clip(np.concatenate([by_force, by_moment], axis=1), 0.0, 1.0)
    return np.asarray(np.fmin.reduce(both, axis=1)), np.asarray(np.fmax.reduce(both, axis=1))


def _as_handed(least: Floats, most: Floats) -> Floats:
    """The section carries the largest of the effects: the others are the real demand over what it carries."""
    return np.asarray(np.divide(least, most, out=np.full(np.shape(least), np.nan), where=most > 0))


def _line_effects(x: Floats, H: Floats) -> tuple[Floats, Floats]:
    """Resultant down to H and moment about H of an endless line of 1 kN/m."""
    return H**2 / (x**2 + H**2) / np.pi, (H - x * np.arctan(H / x)) / np.pi


def _side_force(x: Floats, H: Floats, end: Floats) -> Floats:
    """Resultant of a line from the station to `end` (odd in it), twice its share."""
    b = end[:, None, None]
    u = x**2 + H**2
    return np.asarray(b / np.pi * (1 / np.sqrt(x**2 + b**2) - x**2 / (u * np.sqrt(u + b**2))))


def _side_moment(x: Floats, H: Floats, end: Floats) -> Floats:
    b = end[:, None, None]
    u = x**2 + H**2
    return np.asarray((H * b / np.sqrt(x**2 + b**2) - x * np.arctan(b * H / (x * np.sqrt(u + b**2)))) / np.pi)
