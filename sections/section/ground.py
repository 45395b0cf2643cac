"""The ground of a section: surface, layers without gaps or overlaps, water, and the materials they are made of."""

from __future__ import annotations

from collections.abc import Sequence
from typing import cast

import numpy as np
from shapely import Polygon, make_valid
from shapely.geometry.base import BaseGeometry

from ingest.model import Site, Stratum
from ingest.trail import Finding
from sections.definition import GroundLayer, SectionMaterial, Water
from sections.member import XZ, Curve
from sections.model import Floats
from sections.pit.ground import downwards, layers_along
from sections.section.cut import Cut

THIN = 1e-6
"""A layer thinner than this has pinched out, m."""


def layer_outlines(x: Floats, tops: Floats, base: float, names: Sequence[str]) -> tuple[GroundLayer, ...]:
    """Turn layer tops along the cut into closed outlines.

    Args:
        x: (n,) section coordinate of the sample points, rising.
        tops: (k, n) top of each layer, highest first; tops never cross (a lower one is at most as high).
        base: Bottom of the model.
        names: (k,) material id of each layer.

    Returns:
        One layer for each name that has any thickness; together they fill the model below its surface exactly.
    """
    levels = np.vstack([np.maximum(tops, base), np.full(len(x), base)])
    layers = []
    for i, name in enumerate(names):
        outlines = _band_outlines(x, levels[i], levels[i + 1])
        if outlines:
            layers.append(GroundLayer(id=f"layer-{i + 1}", material=name, outlines=outlines))
    return tuple(layers)


def _band_outlines(x: Floats, top: Floats, base: Floats) -> tuple[Curve, ...]:
    """Outlines of the band between two lines, one for each stretch on which it has thickness."""
    if np.all(top - base <= THIN):
        return ()
    upper, lower = np.column_stack([x, top]), np.column_stack([x, base])[::-1]
    shape: BaseGeometry = Polygon(np.vstack([lower[::-1], upper[::-1]]))
    if not shape.is_valid:
        shape = make_valid(shape)
    parts = [part for part in _polygons(shape) if part.area > THIN]
    return tuple(_ring(part) for part in sorted(parts, key=lambda part: part.bounds))


def _polygons(shape: BaseGeometry) -> list[Polygon]:
    """Polygons of a shape, however deep its collections nest."""
    if isinstance(shape, Polygon):
        return [shape]
    return [polygon for part in getattr(shape, "geoms", ()) for polygon in _polygons(part)]


def _ring(shape: Polygon) -> Curve:
    """Counter-clockwise outline from its lowest leftmost vertex, collinear vertices left out."""
    points = np.asarray(cast(Polygon, shape.normalize()).exterior.coords)[:-1]
    points = points[np.hypot(*(points - np.roll(points, 1, 0)).T) > 1e-9]
    before, after = np.roll(points, 1, 0), np.roll(points, -1, 0)
    a, b = points - before, after - points
    bend = np.abs(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0]) > 1e-9
    points = points[bend]
    area = np.sum(points[:, 0] * np.roll(points[:, 1], -1) - points[:, 1] * np.roll(points[:, 0], -1))
    if area < 0:
        points = points[::-1]
    first = int(np.lexsort((points[:, 0], points[:, 1]))[0])
    return tuple((float(px), float(pz)) for px, pz in np.roll(points, -first, 0))


SOIL_FIELDS = (
    "unit_weight",
    "unit_weight_sat",
    "E",
    "nu",
    "K0",
    "c",
    "phi",
    "su",
    "permeability",
    "drainage",
    "wall_friction_ratio",
)


def soil_material(stratum: Stratum, base: float) -> SectionMaterial:
    """Make the section's material of a stratum; profiles run from its top level to the base of the model.

    Nothing is invented: what the brief does not give stays None and stands as `missing`, the engineer's to choose.
    """
    top = stratum.top_level
    values = {
        "unit_weight": stratum.unit_weight,
        "E": _profile(stratum.E, stratum.E_gradient, top, base),
        "nu": stratum.nu,
        "K0": stratum.K0,
        "c": stratum.c,
        "phi": stratum.phi,
        "su": _profile(stratum.su, stratum.su_gradient, top, base),
        "permeability": stratum.permeability,
        "drainage": stratum.drainage,
    }
    standing = {name: "missing" if values.get(name) is None else "given" for name in SOIL_FIELDS}
    return SectionMaterial(kind="soil", standing=standing, **values)  # type: ignore[arg-type]


def _profile(value: float | None, gradient: float | None, top: float | None, base: float) -> tuple[XZ, ...] | None:
    """(level, value) pairs; a gradient needs the level it starts from."""
    if value is None or (gradient and top is None):
        return None
    if not gradient or top is None:
        level = base if top is None else top
        return ((level, value),)
    return ((top, value), (base, value + gradient * (top - base)))


def water_lines(site: Site, cut: Cut) -> tuple[Water, ...]:
    """Water behind each wall, and inside the pit before work and when dug, where the brief gives levels."""
    lines = []
    inside = cut.pit_interval()
    if site.water_retained is not None:
        for wall in cut.walls:
            span = (0.0, wall.x) if wall.side == "left" else (wall.x, cut.length)
            lines.append(_water(f"water-{wall.side}", wall.side, span, site.water_retained, "retained"))
        lines.append(_water("water-before", "excavated", inside, site.water_retained, "retained"))
    if site.water_excavated is not None:
        lines.append(_water("water-excavated", "excavated", inside, site.water_excavated, "excavated"))
    return tuple(lines)


def _water(name: str, side: str, span: tuple[float, float], level: float, kind: str) -> Water:
    line = ((span[0], level), (span[1], level))
    return Water(id=name, side=side, line=line, kind=kind)  # type: ignore[arg-type]


def layers_of_cut(
    site: Site, cut: Cut, base: float
) -> tuple[tuple[GroundLayer, ...], dict[str, tuple[tuple[float, str], ...]], tuple[Finding, ...]]:
    """Layers of a section, the column of layer tops behind each wall, and what is missing.

    Args:
        site: Its strata and boreholes.
        cut: The cut.
        base: Bottom of the model.

    Returns:
        Layers; per side ("left", "right") the tops just behind that wall, highest first; findings.
    """
    order = list(downwards(site))
    x = sample_x(site, cut)
    tops = layers_along(site, np.array([cut.point(float(v)) for v in x]))
    told = [i for i in order if not np.any(np.isnan(tops[i]))]
    findings = tuple(
        Finding(
            id=f"stratum-{site.strata[i].name}",
            code="stratum_without_level",
            severity="check",
            where=site.strata[i].name,
            text=f"Stratum {site.strata[i].name} has no level along this cut: it is not in the section",
        )
        for i in order
        if i not in told
    )
    if not told:
        return (), {}, (*findings, _no_ground())
    names = [site.strata[i].name for i in told]
    surface = _surface_levels(cut, x)
    kept = np.minimum(tops[told], surface)
    kept[0] = surface  # made ground or not, the uppermost stratum reaches the surface
    columns = {wall.side: _column(x, kept, names, wall.x) for wall in cut.walls}
    return layer_outlines(x, kept, base, names), columns, findings


def sample_x(site: Site, cut: Cut) -> Floats:
    """Where the ground is sampled along a cut: its ends for level strata, every metre where boreholes tell."""
    if not any(stratum.from_boreholes for stratum in site.strata):
        return np.array([0.0, cut.length])
    return np.linspace(0.0, cut.length, max(2, int(np.ceil(cut.length)) + 1))


def _surface_levels(cut: Cut, x: Floats) -> Floats:
    """Ground level along the cut: that of the nearest wall; the middle of the pit takes the line between them."""
    levels = [(wall.x, wall.level["ground"]) for wall in cut.walls]
    known = [(at, level) for at, level in levels if level is not None]
    if not known:
        return np.zeros(len(x))
    return np.asarray(np.interp(x, [at for at, _ in known], [level for _, level in known]))


def surface_line(cut: Cut) -> Curve:
    """Ground surface before work: level behind each wall, straight between them."""
    inner = [wall.x for wall in cut.walls]
    x = np.array(sorted({0.0, cut.length, *inner}))
    z = _surface_levels(cut, x)
    line = [(float(a), float(b)) for a, b in zip(x, z, strict=True)]
    flat = len({level for _, level in line}) == 1
    return (line[0], line[-1]) if flat else tuple(line)


def _column(x: Floats, tops: Floats, names: Sequence[str], at: float) -> tuple[tuple[float, str], ...]:
    levels = [float(np.interp(at, x, row)) for row in tops]
    below = [*levels[1:], -np.inf]
    return tuple((top, name) for top, name, base in zip(levels, names, below, strict=True) if top - base > THIN)


def _no_ground() -> Finding:
    return Finding(
        id="ground",
        code="ground_not_given",
        severity="check",
        where="ground",
        text="No strata are given: the section has no ground; add [[strata]] to the brief or AGS boreholes",
    )
