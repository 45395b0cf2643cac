"""Outlines of parametric sections about the middle of their bounding box, roots and toes rounded.

Each function returns (outer ring (n, 2), inner ring or None, (depth, width, ...)) in the file's units. Attribute names
are those of IFC; the shapes follow IFC4X3, 8.15 (profile resource).
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

Entity = Any
Floats = NDArray[np.float64]
Shape = tuple[Floats, Floats | None, tuple[float, ...]]
STEPS_PER_CORNER = 8


def i_shape(p: Entity) -> Shape:
    """Symmetric or asymmetric I and H section; the lower flange is the one at negative y."""
    info = p.get_info(recursive=False)
    lower = info.get("BottomFlangeWidth", info.get("OverallWidth"))
    lower_t = info.get("BottomFlangeThickness", info.get("FlangeThickness"))
    lower_r = _zero(info.get("BottomFlangeFilletRadius", info.get("FilletRadius")))
    upper = info.get("TopFlangeWidth", lower)
    upper_t = info.get("TopFlangeThickness") or lower_t
    upper_r = _zero(info.get("TopFlangeFilletRadius", lower_r))
    depth, web = p.OverallDepth, p.WebThickness
    _positive(lower, lower_t, upper, upper_t, depth, web)
    if web > min(lower, upper) or lower_t + upper_t > depth:
        raise ValueError(f"I section {depth} deep with a web of {web} and flanges of {lower_t}")
    b, h, w, u = lower / 2, depth / 2, web / 2, upper / 2
    low, top = -h + lower_t, h - upper_t
    points = [
        (-b, -h), (b, -h), (b, low), (w, low), (w, top), (u, top),
        (u, h), (-u, h), (-u, top), (-w, top), (-w, low), (-b, low),
    ]  # fmt: skip
    radii = [0, 0, 0, lower_r, upper_r, 0, 0, 0, 0, upper_r, lower_r, 0]
    return round_corners(points, radii), None, (depth, max(lower, upper), web, lower_t)


def channel(p: Entity) -> Shape:
    """U section: web at negative x, flanges towards positive x."""
    depth, width, web, flange = p.Depth, p.FlangeWidth, p.WebThickness, p.FlangeThickness
    _positive(depth, width, web, flange)
    h, b, root, toe = depth / 2, width / 2, _zero(p.FilletRadius), _zero(p.EdgeRadius)
    points = [
        (-b, -h), (b, -h), (b, -h + flange), (-b + web, -h + flange),
        (-b + web, h - flange), (b, h - flange), (b, h), (-b, h),
    ]  # fmt: skip
    return round_corners(points, [0, 0, toe, root, root, toe, 0, 0]), None, (depth, width, web, flange)


def angle(p: Entity) -> Shape:
    """L section: upright leg at negative x, lying leg at negative y."""
    depth, width, t = p.Depth, p.Width or p.Depth, p.Thickness
    _positive(depth, width, t)
    h, b, root, toe = depth / 2, width / 2, _zero(p.FilletRadius), _zero(p.EdgeRadius)
    points = [(-b, -h), (b, -h), (b, -h + t), (-b + t, -h + t), (-b + t, h), (-b, h)]
    return round_corners(points, [0, 0, toe, root, toe, 0]), None, (depth, width, t)


def tee(p: Entity) -> Shape:
    """T section: flange at positive y."""
    depth, width, web, flange = p.Depth, p.FlangeWidth, p.WebThickness, p.FlangeThickness
    _positive(depth, width, web, flange)
    h, b, w, root = depth / 2, width / 2, web / 2, _zero(p.FilletRadius)
    edge, foot = _zero(p.FlangeEdgeRadius), _zero(p.WebEdgeRadius)
    low = h - flange
    points = [(-w, -h), (w, -h), (w, low), (b, low), (b, h), (-b, h), (-b, low), (-w, low)]
    return round_corners(points, [foot, foot, root, edge, 0, 0, edge, root]), None, (depth, width, web, flange)


def zed(p: Entity) -> Shape:
    """Z section: lower flange towards positive x, upper one towards negative x."""
    depth, width, web, flange = p.Depth, p.FlangeWidth, p.WebThickness, p.FlangeThickness
    _positive(depth, width, web, flange)
    h, w, root, edge = depth / 2, web / 2, _zero(p.FilletRadius), _zero(p.EdgeRadius)
    x = width - w
    points = [
        (-w, -h), (x, -h), (x, -h + flange), (w, -h + flange),
        (w, h), (-x, h), (-x, h - flange), (-w, h - flange),
    ]  # fmt: skip
    return round_corners(points, [0, 0, edge, root, 0, 0, edge, root]), None, (depth, 2 * width - web, web, flange)


def cold_channel(p: Entity) -> Shape:
    """C section of bent sheet: web at negative x, lips of length `Girth` at the free ends of the flanges."""
    depth, width, t, girth = p.Depth, p.Width, p.WallThickness, p.Girth
    _positive(depth, width, t, girth)
    h, b, inner = depth / 2, width / 2, _zero(p.InternalFilletRadius)
    outer = inner + t if inner else 0.0
    points = [
        (-b, -h), (b, -h), (b, -h + girth), (b - t, -h + girth), (b - t, -h + t), (-b + t, -h + t),
        (-b + t, h - t), (b - t, h - t), (b - t, h - girth), (b, h - girth), (b, h), (-b, h),
    ]  # fmt: skip
    radii = [outer, outer, 0, 0, inner, inner, inner, inner, 0, 0, outer, outer]
    return round_corners(points, radii), None, (depth, width, t)


def rounded_rectangle(p: Entity) -> Shape:
    """Full rectangle with rounded corners, or hollow rectangle."""
    width, depth = p.XDim, p.YDim
    _positive(width, depth)
    wall = getattr(p, "WallThickness", None)
    if wall is None:
        return round_corners(_box(width, depth), [_zero(p.RoundingRadius)] * 4), None, (depth, width)
    _positive(wall)
    if 2 * wall >= min(width, depth):
        raise ValueError(f"hollow section {width} by {depth} with a wall of {wall}")
    outer = round_corners(_box(width, depth), [_zero(p.OuterFilletRadius)] * 4)
    inner = round_corners(_box(width - 2 * wall, depth - 2 * wall), [_zero(p.InnerFilletRadius)] * 4)
    return outer, inner, (depth, width, wall)


def trapezium(p: Entity) -> Shape:
    """Trapezium by its lower and upper side; the offset shifts the upper one."""
    lower, upper, depth, shift = p.BottomXDim, p.TopXDim, p.YDim, p.TopXOffset
    _positive(lower, upper, depth)
    left, right = min(-lower / 2, -lower / 2 + shift), max(lower / 2, -lower / 2 + shift + upper)
    middle = (left + right) / 2
    start = -lower / 2 - middle
    ring = [
        (start, -depth / 2),
        (start + lower, -depth / 2),
        (start + shift + upper, depth / 2),
        (start + shift, depth / 2),
    ]
    return np.array(ring), None, (depth, right - left)


def ellipse(p: Entity) -> Shape:
    """Ellipse as a polygon of 48 sides."""
    a, b = p.SemiAxis1, p.SemiAxis2
    _positive(a, b)
    t = np.linspace(0, 2 * np.pi, 48, endpoint=False)
    return np.column_stack([a * np.cos(t), b * np.sin(t)]), None, (2 * b, 2 * a)


def _box(width: float, depth: float) -> list[tuple[float, float]]:
    a, b = width / 2, depth / 2
    return [(-a, -b), (a, -b), (a, b), (-a, b)]


def _zero(value: float | None) -> float:
    return float(value or 0.0)


def _positive(*sizes: float | None) -> None:
    for size in sizes:
        if size is None or not 0 < size < float("inf"):
            raise ValueError(f"a section with a size of {size}")


def round_corners(points: list[tuple[float, float]], radii: list[float]) -> Floats:
    """Replace corners by arcs that touch both sides; a radius too large for its sides is cut down to fit."""
    at = np.array(points, float)
    made: list[Floats] = []
    for i, radius in enumerate(radii):
        before, here, after = at[i - 1], at[i], at[(i + 1) % len(at)]
        if radius <= 0:
            made.append(here[None, :])
            continue
        a, b = before - here, after - here
        la, lb = np.linalg.norm(a), np.linalg.norm(b)
        a, b = a / la, b / lb
        half = np.arccos(np.clip(a @ b, -1, 1)) / 2
        reach = min(radius / np.tan(half), la, lb)
        bisector = (a + b) / np.linalg.norm(a + b)
        centre = here + bisector * reach / np.cos(half)
        made.append(_corner_arc(centre, here + a * reach, here + b * reach))
    return np.concatenate(made)


def _corner_arc(centre: Floats, start: Floats, end: Floats) -> Floats:
    a, b = start - centre, end - centre
    turn = np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b)
    t = turn * np.linspace(0, 1, STEPS_PER_CORNER + 1)
    return np.asarray(centre + np.cos(t)[:, None] * a + np.sin(t)[:, None] * np.array([-a[1], a[0]]))
