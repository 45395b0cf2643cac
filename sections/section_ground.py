"""The ground of a section: surface, layers without gaps or overlaps, water, and the materials they are made of."""

from __future__ import annotations

from collections.abc import Sequence
from typing import cast

import numpy as np
from shapely import Polygon, make_valid
from shapely.geometry.base import BaseGeometry

from ingest.model import Site, Stratum
from sections.cut import Cut
from sections.definition import XZ, Curve, GroundLayer, SectionMaterial, Water
from sections.model import Floats

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
    parts = [part for part in getattr(shape, "geoms", [shape]) if isinstance(part, Polygon) and part.area > THIN]
    return tuple(_ring(part) for part in sorted(parts, key=lambda part: part.bounds))


def _ring(shape: Polygon) -> Curve:
    """Counter-clockwise outline from its lowest leftmost vertex, collinear vertices left out."""
    points = np.asarray(cast(Polygon, shape.normalize()).exterior.coords)[:-1]
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
    "unit_weight", "unit_weight_sat", "E", "nu", "K0", "c", "phi", "su", "permeability", "drainage",
    "wall_friction_ratio",
)  # fmt: skip


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
    """Water behind each wall and inside the pit, where the brief gives levels."""
    lines = []
    inside = cut.pit_interval()
    if site.water_retained is not None:
        for wall in cut.walls:
            span = (0.0, wall.x) if wall.side == "left" else (wall.x, cut.length)
            lines.append(_water(f"water-{wall.side}", wall.side, span, site.water_retained, "retained"))
    if site.water_excavated is not None:
        lines.append(_water("water-excavated", "excavated", inside, site.water_excavated, "excavated"))
    return tuple(lines)


def _water(name: str, side: str, span: tuple[float, float], level: float, kind: str) -> Water:
    line = ((span[0], level), (span[1], level))
    return Water(id=name, side=side, line=line, kind=kind)  # type: ignore[arg-type]
