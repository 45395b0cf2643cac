"""The ground along the wall as the screening needs it: stiffness, stress and strength of every element."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingest.model import Site, Stratum
from sections.found import FoundPit
from sections.model import Bools, Floats, Ints
from sections.pit.ground import downwards, layers_along, water_along
from sections.screening.grid import Grid

WATER = 9.81
NU = 0.3
"""Poisson's ratio of ground that has none given (judgement; ratios hardly feel it)."""
K0_UNKNOWN = 0.5
"""Lateral stress of ground that has none given: only the shape of the load matters while limits are off (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Soil:
    """Arrays (ns, ne) at element middles and (ns, ne, 2) at their tops and bases.

    Attributes:
        E, nu, K0: kPa, -, -. weight: kN/m3 above water. su, phi, c: strength, nan where not given.
        level: (ne, 2) levels of element tops and bases, m. ground, water: (ns,) levels; water nan where not given.
        surcharge: (ns,) kPa.
        given: False where modulus or K0 of a layer had to be put in from a range.
    """

    E: Floats
    nu: Floats
    K0: Floats
    weight: Floats
    su: Floats
    phi: Floats
    c: Floats
    level: Floats
    ground: Floats
    water: Floats
    surcharge: Floats
    modulus_given: bool
    K0_given: bool

    @property
    def strength_known(self) -> bool:
        """Whether every element has drained or undrained strength, and K0."""
        return self.K0_given and bool(np.all(~np.isnan(self.su) | ~np.isnan(self.phi)))


def read_soil(site: Site, found: FoundPit, grid: Grid) -> Soil | None:
    """Lay the strata over the grid; None when no layer has a level and a unit weight."""
    points = found.stations.xy[grid.station]
    tops = layers_along(site, points)
    order = [i for i in downwards(site) if not np.any(np.isnan(tops[i]))]
    if not order or any(site.strata[i].unit_weight is None for i in order):
        return None
    level = np.column_stack([grid.top - grid.z[:-1], grid.top - grid.z[1:]])
    middle = level.mean(axis=1)
    below = tops[order][:, :, None] >= middle[None, None, :] - 1e-9
    layer = np.maximum(below.sum(axis=0) - 1, 0)
    strata = [site.strata[i] for i in order]
    depth = tops[order][layer, np.arange(len(points))[:, None]] - middle
    E = _pick(strata, layer, "E") + np.nan_to_num(_pick(strata, layer, "E_gradient")) * np.maximum(depth, 0.0)
    su = _pick(strata, layer, "su") + np.nan_to_num(_pick(strata, layer, "su_gradient")) * np.maximum(depth, 0.0)
    K0 = _pick(strata, layer, "K0")
    undrained = np.isin(layer, [i for i, stratum in enumerate(strata) if stratum.drainage == "undrained"])
    nu = _pick(strata, layer, "nu")
    ground = found.stations.ground[grid.station]
    # Where no modulus is given, 10 + 3 z MPa below the surface, run at a third and at three times that.
    usual = 10e3 + 3e3 * np.maximum(ground[:, None] - middle[None, :], 0.0)
    return Soil(
        E=np.where(np.isnan(E), usual, E),
        nu=np.where(np.isnan(nu), NU, np.minimum(nu, 0.45)),
        K0=np.where(np.isnan(K0), K0_UNKNOWN, K0),
        weight=_pick(strata, layer, "unit_weight"),
        su=np.where(undrained, su, np.nan),
        phi=np.where(undrained, np.nan, _pick(strata, layer, "phi")),
        c=np.nan_to_num(_pick(strata, layer, "c")),
        level=level,
        ground=ground,
        water=water_along(site, points),
        surcharge=found.stations.surcharge[grid.station],
        modulus_given=not bool(np.any(np.isnan(E))),
        K0_given=not bool(np.any(np.isnan(K0))),
    )


def _pick(strata: list[Stratum], layer: Ints, name: str) -> Floats:
    values = np.array([np.nan if getattr(s, name) is None else float(getattr(s, name)) for s in strata])
    return np.asarray(values[layer])


def vertical(soil: Soil, surface: Floats, water: Floats, *, total: Bools | None = None) -> Floats:
    """Vertical stress (ns, ne, 2) under a surface (ns,): effective, or total where `total` (ns, ne) is True, kPa."""
    top, base = soil.level[:, 0], soil.level[:, 1]
    upper = np.minimum(top[None, :], surface[:, None])
    height = np.maximum(upper - base[None, :], 0.0)
    stress = np.zeros((len(surface), len(top), 2))
    stress[:, :, 1] = np.cumsum(height * soil.weight, axis=1)
    stress[:, 1:, 0] = stress[:, :-1, 1]
    pore = pore_pressure(soil, np.minimum(water, surface))
    if total is not None:
        pore = np.where(total[:, :, None], 0.0, pore)
    return np.maximum(stress - pore, 0.0)


def pore_pressure(soil: Soil, water: Floats) -> Floats:
    """Hydrostatic pore pressure (ns, ne, 2) below a water level (ns,); zero where none is given."""
    head = np.nan_to_num(water, nan=-np.inf)[:, None, None] - soil.level[None, :, :]
    return np.asarray(WATER * np.maximum(head, 0.0))


def unbalanced(soil: Soil, dig: Floats) -> Floats:
    """Pressure at rest that digging to `dig` (ns,) releases, (ns, ne, 2): K0 sigma'_v + K0 q + water, above it."""
    undrained = ~np.isnan(soil.su)
    at_rest = soil.K0[:, :, None] * (vertical(soil, soil.ground, soil.water, total=undrained))
    at_rest += soil.K0[:, :, None] * soil.surcharge[:, None, None]
    at_rest += np.where(undrained[:, :, None], 0.0, pore_pressure(soil, np.minimum(soil.water, soil.ground)))
    above = (soil.level.mean(axis=1)[None, :] > dig[:, None]) & (soil.level[None, :, 1] < soil.ground[:, None])
    return np.asarray(np.where(above[:, :, None], at_rest, 0.0))


def find_limits(soil: Soil, dig: Floats) -> tuple[Floats, Floats, Floats]:
    """Relief of the retained side, reserve and lack of the excavated side, (ns, ne, 2) kPa.

    Drained ground by Rankine's active and passive stress with cohesion, undrained ground by sigma_v -/+ 2 s_u in total
    stress. The excavated side still holds K0 of the original ground.
    """
    undrained = ~np.isnan(soil.su)
    original = vertical(soil, soil.ground, soil.water, total=undrained)
    behind = original + soil.surcharge[:, None, None]
    dug = vertical(soil, dig, np.minimum(soil.water, dig), total=undrained)
    K0, su, c = soil.K0[:, :, None], np.nan_to_num(soil.su)[:, :, None], soil.c[:, :, None]
    Ka = (np.tan(np.radians(45 - np.nan_to_num(soil.phi) / 2)) ** 2)[:, :, None]
    clay = undrained[:, :, None]
    active = np.maximum(np.where(clay, behind - 2 * su, Ka * behind - 2 * c * np.sqrt(Ka)), 0.0)
    passive = np.where(clay, dug + 2 * su, dug / Ka + 2 * c / np.sqrt(Ka))
    left = passive - K0 * original
    return np.maximum(K0 * behind - active, 0.0), np.maximum(left, 0.0), np.maximum(-left, 0.0)
