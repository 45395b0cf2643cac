"""Inserts that show only what lies in a clipping outline."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import replace
from typing import Any

import numpy as np

from ingest.dxf.curves import SAGITTA, Floats, flatten_conic
from ingest.members import Point3
from ingest.parts import Part

_HOW = "cut at the insert's clipping outline"


def clipping_outline(entity: Any, base: Any) -> tuple[Floats, bool] | None:
    """The clipping outline of an insert in the units of its block.

    Args:
        entity: The INSERT.
        base: Base point of the block.

    Returns:
        Vertices of shape (n, 3) and whether what lies inside is hidden instead; None for an insert that is not clipped.
    """
    if not entity.has_extension_dict:
        return None
    from ezdxf.xclip import XClip

    clip = XClip(entity)
    if not clip.has_clipping_path or not clip.is_clipping_enabled:
        return None
    path = clip.get_block_clipping_path()
    corners = np.array([(p.x, p.y) for p in path.inner_polygon()], dtype=np.float64).reshape(-1, 2)
    if len(corners) < 2:
        return None
    if len(corners) == 2:
        (a, b), (c, d) = corners
        corners = np.array([[a, b], [c, b], [c, d], [a, d]])
    return np.column_stack((corners, np.full(len(corners), base.z))), bool(path.is_inverted_clip)


def clip_parts(parts: Iterable[Part], outline: Floats, hidden_inside: bool) -> list[Part]:
    """Keep what a clipped insert shows.

    Args:
        parts: Parts of one copy of the insert, m.
        outline: Clipping outline on plan, m, shape (n, 3) or (n, 2).
        hidden_inside: Whether the inside is hidden instead of the outside.

    Returns:
        Parts inside; lines, circles and outlines that cross the clipping outline are cut there, texts and points go by
        their place.
    """
    import shapely

    window = shapely.make_valid(shapely.Polygon(outline[:, :2]))
    kept: list[Part] = []
    for part in parts:
        shape = _shape(part)
        inside = window.covers(shape)
        if inside if not hidden_inside else not window.intersects(shape):
            kept.append(part)
        elif part.form in ("path", "outline", "circle"):
            rest = shape.difference(window) if hidden_inside else shape.intersection(window)
            if part.form != "outline":  # a ring cut where it happens to start comes in two
                rest = shapely.line_merge(rest)
            kept += [replace(part, **_cut(part, piece), evidence=_HOW) for piece in _pieces(rest)]
    return kept


def _shape(part: Part) -> Any:
    import shapely

    plan = [(x, y) for x, y, _ in part.points]
    if part.form == "circle" and part.radius:
        centre, radius = np.array(part.points[0]), part.radius
        arms = np.array([[radius, 0.0, 0.0], [0.0, radius, 0.0]])
        return shapely.LineString(flatten_conic(centre, arms[0], arms[1], (0.0, math.tau), SAGITTA)[:, :2])
    if part.form == "outline" and len(plan) > 2:
        return shapely.make_valid(shapely.Polygon(plan, [[(x, y) for x, y, _ in hole] for hole in part.holes]))
    if part.form == "path":
        return shapely.LineString([*plan, plan[0]] if part.closed else plan)
    return shapely.Point(plan[0])


def _pieces(shape: Any) -> list[Any]:
    found = list(getattr(shape, "geoms", [shape]))
    return [p for p in found if p.geom_type in ("LineString", "Polygon") and not p.is_empty and p.length > 0.0]


def _cut(part: Part, piece: Any) -> dict[str, Any]:
    level = part.points[0][2]

    def ring(coords: Any) -> tuple[Point3, ...]:
        return tuple((float(x), float(y), level) for x, y in coords)

    if piece.geom_type == "Polygon":
        holes = tuple(ring(hole.coords[:-1]) for hole in piece.interiors)
        return {"points": ring(piece.exterior.coords[:-1]), "holes": holes, "closed": True}
    return {"points": ring(piece.coords), "closed": False, "form": "path", "radius": None}
