"""Near-circular perimeters and parts of them: arcs, regular polygons, rings that are nearly round.

A screen that says where an axisymmetric section is worth trying; the thrust line decides, not this.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from sections.model import Circle, CirclePart, Floats
from sections.perimeter.circle_fit import fit_circle
from sections.perimeter.corners import corner_vertices
from sections.perimeter.outline import Outline
from sections.perimeter.sides import Samples, Side

SPREAD = 0.02
"""Largest (greatest less least radius) over mean radius of a ring that is worth trying as a circle (judgement)."""
LEAST_QUOTIENT = 0.97
"""Least 4 pi area / perimeter squared of a ring that is not a regular polygon (judgement)."""
LEAST_SIDES = 8
PART_SWEEP = 45.0
"""Least sweep of an arc that is listed as a near-circular part, degrees."""
SAME_SIDE = 0.05
SAME_TURN = 1.5
"""Sides of a polygonal part are alike within 5 %, and turn alike within 1.5 degrees."""


def find_circle(outline: Outline, samples: Samples, direction: float) -> Circle | None:
    """The circle that a whole ring is near to, None where it is not.

    A regular polygon of eight or more sides gives the circle through its corners, and its number of sides; its
    deviation is what is left after the polygon's own sagitta is taken off.

    Args:
        outline: The wall axis.
        samples: The points it was made from.
        direction: Turn that makes a corner, degrees.
    """
    if not outline.closed:
        return None
    corners = corner_vertices(outline, direction)
    if len(corners) >= LEAST_SIDES and not len(outline.arcs):
        regular = _regular(outline.points[corners])
        if regular is not None:
            return regular
    points = samples.xy[~samples.middle] if len(outline.arcs) else _dense(outline)
    return _near_circle(outline, points, bool(len(outline.arcs)) and not corners)


def _regular(corners: Floats) -> Circle | None:
    """Regular polygon of least squares through corners in order: rotation and size as one complex number."""
    count = len(corners)
    z = corners[:, 0] + 1j * corners[:, 1]
    centre = z.mean()
    unit = np.exp(2j * np.pi * np.arange(count) / count)
    size = ((z - centre) / unit).mean()
    radius = float(abs(size))
    off = np.abs(z - centre - size * unit)
    side = np.abs(np.roll(z, -1) - z)
    if off.max() > 0.5 * SPREAD * radius or np.ptp(side) > SAME_SIDE * side.mean():
        return None
    return Circle(centre=(float(centre.real), float(centre.imag)), radius=radius, deviation=float(off.max()),
                  sides=count)  # fmt: skip


def _dense(outline: Outline) -> Floats:
    """Points along the outline at equal steps, so that long sides count by their length."""
    count = 720
    ring = np.vstack((outline.points, outline.points[:1]))
    at = np.append(outline.at, outline.length)
    s = outline.length * np.arange(count) / count
    return np.column_stack([np.interp(s, at, ring[:, k]) for k in (0, 1)])


def _near_circle(outline: Outline, points: Floats, smooth: bool) -> Circle | None:
    try:
        centre, radius = fit_circle(points)
    except ValueError:
        return None
    from_centre = np.hypot(*(points - centre).T)
    x, y = outline.points.T
    area = 0.5 * abs(float(x @ np.roll(y, -1) - y @ np.roll(x, -1)))
    quotient = 4.0 * np.pi * area / outline.length**2
    if np.ptp(from_centre) > SPREAD * radius or quotient < LEAST_QUOTIENT:
        return None
    if smooth and len(outline.arcs) == 1:
        side = outline.arcs[0]
        centre, radius = (float(side.centre[0]), float(side.centre[1])), side.radius
        from_centre = np.hypot(*(points - centre).T)
    return Circle(centre=centre, radius=float(radius), deviation=float(np.abs(from_centre - radius).max()), sides=None)


def find_parts(outline: Outline, samples: Samples, direction: float) -> tuple[CirclePart, ...]:
    """Near-circular parts of a perimeter: arcs of at least 45 degrees, and at least four like sides with like turns."""
    parts = [part for side in outline.arcs if (part := _arc_part(outline, side, samples)) is not None]
    parts += _polygonal_parts(outline, corner_vertices(outline, direction))
    return tuple(sorted(parts, key=lambda part: part.start))


def _arc_part(outline: Outline, side: Side, samples: Samples) -> CirclePart | None:
    a, b = (np.arctan2(*(end - side.centre)[::-1]) for end in (side.first, side.last))
    sweep = np.degrees((side.turn * (b - a)) % (2 * np.pi))
    if sweep < PART_SWEEP:
        return None
    number = next(k for k, arc in enumerate(outline.arcs) if arc is side)
    mine = np.flatnonzero(outline.arc == number)
    first = int(mine[outline.arc[mine - 1] != number][0]) if len(mine) < len(outline.arc) else 0
    last = (first + len(mine)) % len(outline.points)
    block = np.arange(*side.block) % len(samples.xy)
    block = block[~samples.middle[block]]
    off = np.abs(np.hypot(*(samples.xy[block] - side.centre).T) - side.radius)
    stop = float(outline.at[last]) if last else outline.length
    return CirclePart(start=float(outline.at[first]), to=stop, centre=(float(side.centre[0]), float(side.centre[1])),
                      radius=float(side.radius), deviation=float(off.max()))  # fmt: skip


def _polygonal_parts(outline: Outline, corners: Sequence[int]) -> list[CirclePart]:
    """Runs of like sides between like corners."""
    count = len(corners)
    if count < 5:
        return []
    points = outline.points[list(corners)]
    if outline.closed:
        points = np.vstack((points, points[:2]))
    step = np.diff(points, axis=0)
    side = np.hypot(*step.T)
    angle = np.arctan2(step[:, 1], step[:, 0])
    turn = (np.degrees(np.diff(angle)) + 180.0) % 360.0 - 180.0
    straight = _straight_between(outline, corners)
    like = (np.abs(side[1:] - side[:-1]) <= SAME_SIDE * side[1:]) & (np.abs(turn) <= 45.5)
    parts = []
    k = 0
    while k < len(like):
        stop = k
        while stop < len(like) and like[stop] and abs(turn[stop] - turn[k]) <= SAME_TURN and straight[stop]:
            stop += 1
        if stop - k >= 3 and abs(turn[k:stop].sum()) >= 1.5 * PART_SWEEP:
            parts.append(_part(outline, corners, points[k : stop + 2], k, stop + 1))
        k = max(stop, k + 1)
    return parts


def _straight_between(outline: Outline, corners: Sequence[int]) -> list[bool]:
    """Whether the side after each corner holds no arc."""
    after = [*corners[1:], corners[0] + len(outline.points)]
    return [
        bool((outline.arc[np.arange(a, b) % len(outline.points)] < 0).all())
        for a, b in zip(corners, after, strict=True)
    ] * 2  # fmt: skip


def _part(outline: Outline, corners: Sequence[int], points: Floats, first: int, last: int) -> CirclePart:
    centre, radius = fit_circle(points)
    off = np.abs(np.hypot(*(points - centre).T) - radius)
    count = len(corners)
    return CirclePart(start=float(outline.at[corners[first % count]]), to=float(outline.at[corners[last % count]]),
                      centre=centre, radius=radius, deviation=float(off.max()))  # fmt: skip
