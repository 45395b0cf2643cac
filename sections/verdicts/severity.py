"""How severe a section's place is, as a vector to rank by; nothing is blended and nothing here is for design.

For movement and stability only: a stiffer wall moves less and takes more moment and force, so this says nothing of
those, and never whether one section may stand for another place. Formulas are recalled unless marked as seen.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import cos, inf, radians, sin, tan

import numpy as np
from numpy.typing import ArrayLike

from ingest.model import Site
from sections.criteria.plane_strain_ratio import find_plane_strain_ratio, mean_vertical_spacing
from sections.found import FoundPit
from sections.model import Floats
from sections.verdicts.basal import find_basal_safety, find_clay
from sections.verdicts.wall_bending import EI_at

WATER = 9.81
"""Unit weight of water, kN/m3."""

ORDER: tuple[tuple[str, bool], ...] = (
    ("basal_safety", False),
    ("excavated_depth", True),
    ("surcharge", True),
    ("system_stiffness_by_water", False),
    ("plane_strain_ratio", True),
    ("receptor_distance_over_depth", False),
)
"""Indices in the order of looking (judgement), with True where larger is worse."""


def stiffness_by_water(EI: ArrayLike, h: ArrayLike) -> Floats:
    """System stiffness EI/(gamma_w h^4), EI in kNm2 per m, h mean vertical support spacing in m.

    Source: Clough, Smith & Sweeney 1989, Clough & O'Rourke 1990 (recalled). Not to be mixed with `stiffness_by_soil`.
    """
    return np.asarray(np.asarray(EI, float) / (WATER * np.asarray(h, float) ** 4))


def stiffness_by_soil(EI: ArrayLike, h: ArrayLike, unit_weight: ArrayLike) -> Floats:
    """System stiffness EI/(gamma_t h^4), by the soil's weight. Source: Mana & Clough 1981, seen in UFC 3-220-20."""
    return np.asarray(np.asarray(EI, float) / (np.asarray(unit_weight, float) * np.asarray(h, float) ** 4))


def displacement_flexibility(EI: float, h: float) -> float:
    """h^5/EI, m5 per kNm2/m. Source: Addenbrooke 1994 (recalled)."""
    return h**5 / EI


def stability_number(unit_weight: ArrayLike, H: ArrayLike, su: ArrayLike) -> Floats:
    """N = gamma H/s_u (seen)."""
    return np.asarray(np.asarray(unit_weight, float) * np.asarray(H) / np.asarray(su))


def spandrel_settlement(distance: ArrayLike) -> Floats:
    """Settlement over its maximum at the wall, by distance over excavated depth. Source: Hsieh & Ou 1998 (recalled)."""
    d = np.asarray(distance, float)
    near, beyond = 1.0 - 0.636 * np.sqrt(d), 0.342 - 0.171 * np.sqrt(d)
    return np.asarray(np.clip(np.where(d <= 2.0, near, beyond), 0.0, None))


def concave_settlement(distance: ArrayLike) -> Floats:
    """Settlement over its maximum, half a depth behind the wall. Source: Hsieh & Ou 1998 (0.1 at 2 recalled)."""
    return np.asarray(np.interp(np.asarray(distance, float), [0.0, 0.5, 2.0, 4.0], [0.5, 1.0, 0.1, 0.0]))


def unsupported_height(su: float, unit_weight: float) -> float:
    """Critical height of a vertical cut, 4 s_u/gamma, m (seen in UFC 3-220-20)."""
    return 4.0 * su / unit_weight


def apparent_pressure_sand(unit_weight: float, H: float, phi: float) -> tuple[float, float]:
    """Pressure 0.65 Ka gamma H in kPa and its resultant in kN/m. Source: Terzaghi & Peck 1967 (recalled).

    Temporary works, braced cuts deeper than about 6 m; water is added apart.
    """
    Ka = tan(radians(45.0 - phi / 2.0)) ** 2
    p = 0.65 * Ka * unit_weight * H
    return p, p * H


def apparent_pressure_soft_clay(unit_weight: float, H: float, su: float, m: float = 1.0) -> tuple[float, float]:
    """Pressure and resultant for soft to medium clay (gamma H/s_u above 4): trapezium rising over a quarter of H.

    Args:
        unit_weight: kN/m3.
        H: Excavated depth, m.
        su: Undrained strength, kPa.
        m: 1, or 0.4 where soft clay goes deep.

    Source: Terzaghi & Peck 1967, Peck 1969 (recalled).
    """
    p = max(unit_weight * H * (1.0 - m * 4.0 * su / (unit_weight * H)), 0.3 * unit_weight * H)
    return p, 0.875 * p * H


def apparent_pressure_stiff_clay(unit_weight: float, H: float, factor: float = 0.3) -> tuple[float, float]:
    """Pressure and resultant for stiff clay (gamma H/s_u up to 4), factor 0.2 to 0.4. Source: Peck 1969 (0.3 seen)."""
    p = factor * unit_weight * H
    return p, 0.75 * p * H


def member_factor(inclination: float, skew: float) -> float:
    """Force along a support over the level pressure it holds square to the wall, 1/(cos(dip) cos(skew)).

    Angles in degrees. Dividing by the cosine of one angle alone is right for level struts only.
    """
    return 1.0 / (cos(radians(inclination)) * cos(radians(skew)))


def uplift_and_thrust(N: float, inclination: float, skew: float) -> tuple[float, float]:
    """Vertical part of a support's force on the wall and the thrust along it, kN."""
    return N * sin(radians(inclination)), N * cos(radians(inclination)) * sin(radians(skew))


def find_severity(site: Site, found: FoundPit) -> dict[str, Floats]:
    """Every index at every station (n,); nan where it is not known."""
    stations = found.stations
    n = len(stations.chainage)
    facing = np.where(np.isfinite(stations.facing), stations.facing, np.nan)
    clay = find_clay(site, stations, facing) if site.strata else None
    nothing = np.full(n, np.nan)
    su, weight = (nothing, nothing) if clay is None else (clay.su_below, clay.unit_weight)
    EI, h = EI_at(site, found), mean_vertical_spacing(found)
    return {
        "basal_safety": find_basal_safety(site, found, plane=False),
        "excavated_depth": stations.depth,
        "surcharge": stations.surcharge,
        "system_stiffness_by_water": stiffness_by_water(EI, h),
        "plane_strain_ratio": find_plane_strain_ratio(site, found).ratio,
        "receptor_distance_over_depth": _over(_receptor_distance(site, found), stations.depth),
        "system_stiffness_by_soil": stiffness_by_soil(EI, h, weight),
        "stability_number": stability_number(weight, stations.depth, su),
    }


def severity_at(severity: Mapping[str, Floats], station: int) -> dict[str, float | None]:
    """The vector of one station: index to number, None where it is not known."""
    return {name: float(v[station]) if np.isfinite(v[station]) else None for name, v in severity.items()}


def rank_severity(vectors: Sequence[Mapping[str, float | None]]) -> tuple[int, ...]:
    """Positions of the vectors, most severe first: by each index in turn, the unknown after the known.

    For movement and stability only; no index is traded against another.
    """

    def _key(position: int) -> tuple[tuple[int, float], ...]:
        values = ((vectors[position].get(name), larger) for name, larger in ORDER)
        return tuple((1, 0.0) if value is None else (0, -value if larger else value) for value, larger in values)

    return tuple(sorted(range(len(vectors)), key=lambda position: (_key(position), position)))


def _over(distance: Floats, depth: Floats) -> Floats:
    return distance / np.where(depth > 0.0, depth, np.nan)


def _receptor_distance(site: Site, found: FoundPit) -> Floats:
    """Distance from each station to the nearest receptor on plan, m; nan without receptors."""
    import shapely

    points = shapely.points(found.stations.xy)
    least = np.full(len(found.stations.xy), inf)
    for receptor in site.receptors:
        if not receptor.points:
            continue
        outline = shapely.LineString(receptor.points) if len(receptor.points) > 1 else shapely.Point(receptor.points[0])
        least = np.minimum(least, shapely.distance(points, outline))
    return np.where(np.isfinite(least), least, np.nan)
