"""The ground along any line: tops of the strata that never cross, water, and how far the nearest borehole is."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ingest.model import Borehole, Site, Stratum
from sections.model import Floats
from sections.pit.tin import Surface, level_at, make_surface


@dataclass(frozen=True, kw_only=True)
class Bedding:
    """How one stratum lies: dip and strike of the best plane through its top, degrees, and what they rest on.

    Azimuths are clockwise from the local y axis. `pinched` names the boreholes in which the stratum is missing.
    """

    name: str
    dip: float
    dip_direction: float | None
    strike: float | None
    boreholes: int
    thickness: tuple[float, float] | None
    pinched: tuple[str, ...]


def borehole_tops(site: Site) -> Floats:
    """Top of each stratum in each borehole (n strata, k holes), m; nan where the hole does not tell.

    A stratum that a hole does not meet, though it meets a lower one, has pinched out there: its top is that of the
    next lower stratum met. A hole that ends above tells nothing.
    """
    tops = np.full((len(site.strata), len(site.boreholes)), np.nan)
    for j, hole in enumerate(site.boreholes):
        below = np.nan
        for i in reversed(downwards(site)):
            stratum = site.strata[i]
            if stratum.from_boreholes is None:
                continue
            met = _first_met(hole, stratum.from_boreholes, above=below)
            below = below if met is None else met
            tops[i, j] = below
    return tops


def _first_met(hole: Borehole, code: str, above: float) -> float | None:
    """Highest top of a code in a hole; layers below `above` (the next lower stratum) are lenses of it."""
    met = [layer.top for layer in hole.layers if layer.code == code and not layer.top < above]
    return max(met, default=None)


def downwards(site: Site) -> tuple[int, ...]:
    """Indices of the strata from the top down.

    The order of the brief stands unless the levels given contradict it; then the levels rule.
    """
    given = [i for i, stratum in enumerate(site.strata) if stratum.top_level is not None]
    levels = [site.strata[i].top_level for i in given]
    falling = all(a >= b for a, b in zip(levels, levels[1:], strict=False) if a is not None and b is not None)
    if falling or len(given) < len(site.strata):
        return tuple(range(len(site.strata)))
    return tuple(sorted(given, key=lambda i: (-(site.strata[i].top_level or 0.0), i)))


def find_surfaces(site: Site) -> tuple[Surface | None, ...]:
    """Top surface of each stratum that comes from boreholes; None for a stratum with a level of its own or none."""
    tops = borehole_tops(site)
    places = hole_points(site.boreholes)
    return tuple(
        make_surface(places, tops[i]) if stratum.from_boreholes is not None else None
        for i, stratum in enumerate(site.strata)
    )


def hole_points(holes: Sequence[Borehole]) -> Floats:
    """Plan points (k, 2) of boreholes."""
    return np.array([hole.location[:2] for hole in holes], dtype=np.float64).reshape(-1, 2)


def layers_along(site: Site, points: ArrayLike) -> Floats:
    """Top level of each stratum of the site at points (n, 2): levels (n strata, n points), in the order of the strata.

    Tops never cross: a stratum whose top would lie above that of the one over it pinches that one out. A stratum
    without any level is nan and does not bound the others.
    """
    spots = np.asarray(points, dtype=np.float64).reshape(-1, 2)
    levels = np.full((len(site.strata), len(spots)), np.nan)
    for i, (stratum, surface) in enumerate(zip(site.strata, find_surfaces(site), strict=True)):
        levels[i] = _top(stratum, surface, spots)
    order = list(downwards(site))
    known = [i for i in order if not np.all(np.isnan(levels[i]))]
    if known:
        levels[known] = np.minimum.accumulate(levels[known], axis=0)
    return levels


def _top(stratum: Stratum, surface: Surface | None, spots: Floats) -> Floats:
    if surface is not None:
        return level_at(surface, spots)
    return np.full(len(spots), np.nan if stratum.top_level is None else stratum.top_level)


def nearest_borehole(site: Site, points: ArrayLike) -> Floats:
    """Distance from points (n, 2) to the nearest borehole, m; inf without boreholes."""
    spots = np.asarray(points, dtype=np.float64).reshape(-1, 2)
    holes = hole_points(site.boreholes)
    if len(holes) == 0:
        return np.full(len(spots), np.inf)
    gap = spots[:, None, :] - holes[None, :, :]
    return np.asarray(np.min(np.hypot(gap[..., 0], gap[..., 1]), axis=1))


def water_along(site: Site, points: ArrayLike) -> Floats:
    """Outside water level at points (n, 2): the brief's, else the surface through the levels met in the boreholes."""
    spots = np.asarray(points, dtype=np.float64).reshape(-1, 2)
    if site.water_retained is not None:
        return np.full(len(spots), site.water_retained)
    met = np.array([np.nan if hole.water is None else hole.water for hole in site.boreholes], dtype=np.float64)
    surface = make_surface(hole_points(site.boreholes), met)
    return np.full(len(spots), np.nan) if surface is None else level_at(surface, spots)


def find_bedding(site: Site) -> tuple[Bedding, ...]:
    """Dip, strike, range of thickness and pinching out of each stratum that comes from boreholes."""
    tops = borehole_tops(site)
    order = list(downwards(site))
    beds = []
    for i, surface in enumerate(find_surfaces(site)):
        code = site.strata[i].from_boreholes
        if surface is None or code is None:
            continue
        under = order[order.index(i) + 1] if order.index(i) + 1 < len(order) else None
        thickness = tops[i] - tops[under] if under is not None else np.array([np.nan])
        holes = zip(site.boreholes, tops[i], strict=True)
        missing = (hole.id for hole, top in holes if not np.isnan(top) and _first_met(hole, code, np.nan) is None)
        beds.append(
            Bedding(
                name=site.strata[i].name,
                dip=surface.dip,
                dip_direction=surface.dip_direction,
                strike=surface.strike,
                boreholes=int(np.sum(~np.isnan(tops[i]))),
                thickness=None
                if np.all(np.isnan(thickness))
                else (float(np.nanmin(thickness)), float(np.nanmax(thickness))),
                pinched=tuple(sorted(missing)),
            )
        )
    return tuple(beds)
