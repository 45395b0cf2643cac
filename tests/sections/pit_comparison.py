"""What the finder says of an invented pit, held against the truth; every difference in one plain line."""

from __future__ import annotations

import numpy as np
import shapely

OVERLAP = 0.995
ANGLE = 0.5
NEAR_CORNER = 0.3
CIRCLE = 0.001


def overlap(shape, pit):
    """Area of intersection over union; for an open wall 1 less the largest distance over 100 m, -1 if turned round."""
    truth = pit.outline()
    near_zero = truth[0].copy()  # areas of almost equal shapes are delicate far from the origin
    axis, truth = shape.axis - near_zero, truth - near_zero
    if pit.closed:
        a, b = shapely.Polygon(axis), shapely.Polygon(truth)
        return a.intersection(b).area / a.union(b).area if a.is_valid else 0.0
    a, b = shapely.LineString(axis), shapely.LineString(truth)
    away = max(shapely.hausdorff_distance(p, q, densify=0.05) for p, q in ((a, b), (b, a)))
    turned = (axis[-1] - axis[0]) @ (truth[-1] - truth[0]) < 0
    return -1.0 if turned else 1.0 - away / 100.0


def differences(scene, shapes):
    """All differences, as (what, text)."""
    found = []
    if len(shapes) != len(scene.pits):
        found.append(("pits", f"{len(shapes)} pits for {len(scene.pits)}"))
    for pit in scene.pits:
        same = [s for s in shapes if s.closed == pit.closed]
        if not same:
            found.append(("overlap", "no such pit"))
            continue
        shape = max(same, key=lambda s: overlap(s, pit))
        value = overlap(shape, pit)
        if value < OVERLAP:
            found.append(("overlap", f"overlap {value:.4f}"))
        found += [("corners", text) for text in corner_faults(shape, pit)]
        found += [("runs", text) for text in run_faults(shape, pit)]
        found += [("circle", text) for text in circle_faults(shape, pit)]
    return found


def corner_faults(shape, pit):
    left = list(shape.corners)
    for point, angle in pit.corners():
        near = [c for c in left if np.hypot(*(np.array(c.point) - point)) <= NEAR_CORNER]
        if not near:
            yield f"corner of {angle:.1f} degrees missed"
            continue
        corner = min(near, key=lambda c: np.hypot(*(np.array(c.point) - point)))
        left.remove(corner)
        if abs(corner.interior_angle - angle) > ANGLE:
            yield f"{corner.interior_angle:.2f} degrees for {angle:.2f}"
        if (corner.kind == "inside") != (angle < 180):
            yield f"{corner.kind} at {angle:.1f} degrees"
    for corner in left:
        yield f"no corner of {corner.interior_angle:.1f} degrees there"


def run_faults(shape, pit):
    """Kinds at mid-run, boundaries within half a pile spacing, counts and centres; a shared wall is not looked at."""
    line = shapely.LineString(np.vstack((shape.axis, shape.axis[:1])) if shape.closed else shape.axis)

    def at(s):
        return line.project(shapely.Point(pit.at(s))) % (shape.length if shape.closed else np.inf)

    if len(shape.runs) != len(pit.runs) and pit.shares is None:
        yield f"runs {[(r.wall.kind, round(r.start, 2), round(r.to, 2)) for r in shape.runs]}"
    for k, run in enumerate(pit.runs):
        middle = at(0.5 * (run.start + run.stop))
        held = [r for r in shape.runs if r.start <= middle < r.to or (r.to <= r.start and not r.to <= middle < r.start)]
        if [r.wall.kind for r in held] != [run.kind]:
            yield f"{[r.wall.kind for r in held]} for {run.kind}"
            continue
        yield from wall_faults(held[0].wall, run, len(pit.runs) == 1 and pit.shares is None)
        if (k or (pit.closed and len(pit.runs) > 1)) and pit.shares is None:
            allowed = 0.5 * max(r.spacing or 0.1 for r in (run, pit.runs[k - 1]))
            yield from boundary_faults(shape, at(run.start), allowed)


def wall_faults(wall, run, whole):
    if run.spacings and not 0.985 * run.spacings[0] <= (wall.centres or 0.0) <= 1.01 * run.spacings[1]:
        yield f"centres {wall.centres:.3f} for {run.spacings}"
    if run.kind == "diaphragm" and abs((wall.thickness or 0) - run.size) > 0.01:
        yield f"thickness {wall.thickness} for {run.size}"
    if whole and run.count not in (None, wall.count):
        yield f"{wall.count} piles for {run.count}"


def boundary_faults(shape, at, allowed):
    away = min(abs((r.start - at + shape.length / 2) % shape.length - shape.length / 2) for r in shape.runs)
    if away > allowed + 0.02:
        yield f"boundary off by {away:.2f} m, allowed {allowed:.2f} m"


def circle_faults(shape, pit):
    if pit.circle is None:
        if shape.circle is not None:
            yield f"a circle of {shape.circle.radius:.2f} m where there is none"
        return
    centre, radius, sides = pit.circle
    circle = shape.circle
    if circle is None:
        yield "circle missed"
    elif circle.sides != sides or abs(circle.radius - radius) > CIRCLE * radius:
        yield f"circle {circle.radius:.4f} of {circle.sides} sides for {radius:.4f} of {sides}"
    elif np.hypot(*(np.array(circle.centre) - centre)) > CIRCLE * radius:
        yield "centre of the circle is off"
