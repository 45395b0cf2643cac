"""Piles, columns, beams, struts, anchors: round upright bodies and straight bars along their centroid."""

from __future__ import annotations

from collections.abc import Sequence
from math import atan2, degrees, hypot, sqrt

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.bodies import Placed
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.facets import Facets
from ingest.ifc.fits import fit_bar, fit_cylinder
from ingest.ifc.frames import Triple
from ingest.ifc.plan import is_flat, is_upright, prism, profile_upright
from ingest.ifc.profiles import Profile
from ingest.ifc.shapes import Extrusion, HalfSpace, Line, Sweep
from ingest.members import BarSection, Point3
from ingest.parts import Part

Floats = NDArray[np.float64]

CENTRE, CENTROID = 5, 10
"""Cardinal points in the middle of a section (IFC4, IfcCardinalPointReference)."""
WIDEST_PILE = 3.0
"""Round upright bodies wider than this are no piles: EN 1536 covers bored piles up to 3.0 m diameter."""


def bar_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """The part of a slender element.

    Raises:
        NoPart: If it has neither body nor axis.
    """
    if not element.bodies:
        return (_from_axis(element, sections),)
    main, notes = _main_body(element.bodies)
    shape = main.shape
    if isinstance(shape, Extrusion):
        return (_extruded(element, main, shape, sections, notes),)
    if isinstance(shape, Sweep):
        return (_swept(element, main, shape, sections, notes),)
    if isinstance(shape, Facets):
        return (_meshed(element, main, shape, notes),)
    return (_from_points(element, main.points(), notes, None),)


def _main_body(bodies: Sequence[Placed]) -> tuple[Placed, tuple[str, ...]]:
    """The longest body stands for the element; the others are said to be left out."""
    if len(bodies) == 1:
        return bodies[0], ()
    best = max(range(len(bodies)), key=lambda i: (_length(bodies[i]), -i))
    return bodies[best], (f"longest of {len(bodies)} bodies",)


def _length(body: Placed) -> float:
    if isinstance(body.shape, Extrusion):
        return sqrt(sum(v * v for v in body.vector))
    points = body.points()
    return float(np.linalg.norm(np.ptp(points, axis=0))) if len(points) else 0.0


def is_pile_shape(body: Placed) -> bool:
    """True for an upright extrusion of a full or hollow circle."""
    shape = body.shape
    return isinstance(shape, Extrusion) and shape.profile.is_round and is_upright(body.vector) and is_flat(body)


def round_part(element: Element, body: Placed, sections: SectionTable, notes: tuple[str, ...] = ()) -> Part:
    """A 'circle' part: point at the head, radius, head and toe level, m."""
    shape = body.shape
    assert isinstance(shape, Extrusion)
    profile, scale = shape.profile, body.scale
    (ox, oy, oz), (a, b, _), (d, e, _), rise = body.origin, body.x, body.y, body.vector[2]
    u, v = profile.centre
    top, bottom = (oz + rise, oz) if rise > 0 else (oz, oz + rise)
    if shape.cuts:
        whole = prism(body)
        top, bottom, notes = whole.top, whole.bottom, notes + whole.notes
    hollow = profile.kind == "hollow circle"
    return element.part(
        "circle",
        ((ox + u * a + v * d, oy + u * b + v * e, top),),
        ("upright extrusion of a hollow circle" if hollow else "upright extrusion of a circle", *notes, *shape.notes),
        radius=profile.size[0] * scale,
        thickness=profile.size[1] * scale if hollow else None,
        z_top=top,
        z_bottom=bottom,
        section=sections.section(profile, scale, None) if hollow else None,
    )


def _extruded(element: Element, body: Placed, shape: Extrusion, sections: SectionTable, notes: tuple[str, ...]) -> Part:
    if is_pile_shape(body):
        return round_part(element, body, sections, notes)
    m = sections.moments(shape.profile)
    (ox, oy, oz), (a, b, c), (d, e, f), (vx, vy, vz) = body.origin, body.x, body.y, body.vector
    start = (ox + m.x * a + m.y * d, oy + m.x * b + m.y * e, oz + m.x * c + m.y * f)
    end = (start[0] + vx, start[1] + vy, start[2] + vz)
    start, end, cut_words = cut_ends(body, shape, start, end)
    upright = is_upright(body.vector)
    section = sections.section(shape.profile, body.scale, None if upright else level_way(body))
    if upright:
        element.tags.setdefault("DepthDirection", _depth_direction(body, shape.profile))
    said = [f"extrusion of a {_article(shape.profile)} along its centroid", *notes, *shape.notes]
    said += cut_words
    if shape.profile.note:
        said.append(shape.profile.note)
    return _bar(element, start, end, said, section)


def cut_ends(body: Placed, shape: Extrusion, start: Triple, end: Triple) -> tuple[Triple, Triple, list[str]]:
    """Shorten a bar where planes cut its centroid line; other cuts are said to be left out."""
    if not shape.cuts:
        return start, end, []
    low, high, said = 0.0, 1.0, []
    a, way = np.array(start), np.array(end) - np.array(start)
    for cut in shape.cuts:
        if not isinstance(cut, HalfSpace) or cut.boundary is not None:
            said.append("a cut was left out")
            continue
        frame = body.base @ body.frames[cut.frame]
        keep = frame[:3, 2] if cut.keep_above else -frame[:3, 2]
        speed, here = float(way @ keep), float((frame[:3, 3] - a) @ keep)
        if abs(speed) < 1e-9:
            said.append("a cut along its length was left out")
        elif speed > 0:
            low = max(low, here / speed)
        else:
            high = min(high, here / speed)
    if not low < high or (low, high) == (0.0, 1.0):
        return start, end, list(dict.fromkeys(said if low < high else [*said, "a cut was left out"]))
    (p, q, r), (s, t, u) = (a + low * way).tolist(), (a + high * way).tolist()
    return (p, q, r), (s, t, u), list(dict.fromkeys(["ends cut by planes, where these meet its centroid", *said]))


def _article(profile: Profile) -> str:
    return {"i": "I section", "u": "U section", "l": "L section", "t": "T section", "c": "C section"}.get(
        profile.kind, profile.kind
    )


def _depth_direction(body: Placed, profile: Profile) -> str:
    """Direction on plan of the profile's own y axis (the depth of an I section), degrees from east."""
    u, v = profile.way
    x, y = -v * body.x[0] + u * body.y[0], -v * body.x[1] + u * body.y[1]
    return format(round(degrees(atan2(y, x)) % 180.0, 6), "g")


def level_way(body: Placed) -> tuple[float, float]:
    """The direction in the profile's coordinates that is level on site."""
    zx, zy = body.x[2], body.y[2]
    size = hypot(zx, zy)
    return (1.0, 0.0) if size < 1e-12 else (zy / size, -zx / size)


def _bar(element: Element, start: Point3, end: Point3, said: list[str], section: BarSection | None) -> Part:
    """A 'bar' part, head or upper end first."""
    if end[2] > start[2] + 1e-6:
        start, end = end, start
    return element.part(
        "bar", (start, end), said, section=section, z_top=max(start[2], end[2]), z_bottom=min(start[2], end[2])
    )


def _swept(element: Element, body: Placed, shape: Sweep, sections: SectionTable, notes: tuple[str, ...]) -> Part:
    points = body.points()
    scale = float(np.linalg.norm(body.base[:3, 0]))
    turned = np.ptp(profile_upright(body, shape), axis=0) - np.ptp(np.array(shape.profile.outlines[0]) * scale, axis=0)
    section = sections.section(shape.profile, scale, (0.0, 1.0) if np.abs(turned).max() > 1e-9 else (1.0, 0.0))
    said = (f"{_article(shape.profile)} swept along a curve", *notes, *shape.notes)
    straight = _straight(points)
    if straight is None:
        return _path(element, points, said, section)
    start, end = straight
    if shape.profile.is_round and is_upright((end[0] - start[0], end[1] - start[1], end[2] - start[2])):
        high, low = (start, end) if start[2] >= end[2] else (end, start)
        wall = shape.profile.size[1] * scale if shape.profile.kind == "hollow circle" else None
        return element.part(
            "circle",
            (high,),
            said,
            radius=shape.profile.size[0] * scale,
            thickness=wall,
            z_top=high[2],
            z_bottom=low[2],
        )
    return _bar(element, start, end, list(said), section)


def _straight(points: Floats) -> tuple[Triple, Triple] | None:
    """Both ends when all points lie within 1 mm of the line between them."""
    way = points[-1] - points[0]
    length = float(np.linalg.norm(way))
    if length < 1e-6:
        return None
    off = np.linalg.norm(np.cross(points - points[0], way / length), axis=1)
    if off.max() > 1e-3:
        return None
    (a, b, c), (d, e, f) = points[0].tolist(), points[-1].tolist()
    return (a, b, c), (d, e, f)


def _path(element: Element, points: Floats, said: tuple[str, ...], section: BarSection | None) -> Part:
    closed = bool(np.linalg.norm(points[0] - points[-1]) < 1e-6)
    at = points[:-1] if closed else points
    return element.part(
        "path",
        [(x, y, z) for x, y, z in at.tolist()],
        said,
        closed=closed,
        section=section,
        z_top=float(at[:, 2].max()),
        z_bottom=float(at[:, 2].min()),
    )


def _meshed(element: Element, body: Placed, shape: Facets, notes: tuple[str, ...]) -> Part:
    points = body.points()
    cylinder = fit_cylinder(points, shape.faces)
    if cylinder is not None:
        said = (f"fitted to a mesh: upright cylinder, residual {cylinder.residual * 1000:.1f} mm", *notes)
        return element.part(
            "circle",
            ((*cylinder.centre, cylinder.top),),
            said,
            radius=cylinder.radius,
            z_top=cylinder.top,
            z_bottom=cylinder.bottom,
        )
    bar = fit_bar(points)
    section = BarSection(designation="fitted to a mesh", width=bar.width, depth=bar.depth)
    said = (f"fitted to a mesh: box about its points, which it fills to {bar.filled:.0%}", *notes)
    return _bar(element, bar.start, bar.end, list(said), section)


def _from_axis(element: Element, sections: SectionTable) -> Part:
    line = element.axis_line()
    if line is None:
        raise NoPart("no geometry")
    said = ["its axis only; it has no body"]
    section = None
    if element.profile is not None:
        section = sections.section(element.profile, element.length, (1.0, 0.0))
        said.append("section assigned with its material, taken upright")
        point = element.material.cardinal_point if element.material else None
        if point not in (None, CENTROID, CENTRE):
            said.append(f"the axis is at cardinal point {point} of the section, not at its centroid")
    return _from_points(element, line, tuple(said), section)


def _from_points(element: Element, points: Floats, said: tuple[str, ...], section: BarSection | None) -> Part:
    straight = _straight(points) if len(points) > 1 else None
    if straight is not None:
        return _bar(element, *straight, list(said), section)
    if len(points) > 1:
        return _path(element, points, said, section)
    x, y, z = points[0].tolist()
    return element.part("point", ((x, y, z),), said, z_top=z, z_bottom=z)


def line_parts(element: Element) -> tuple[Part, ...]:
    """Parts of an annotation or alignment: its curves as paths, its points as points."""
    made = []
    for body in (*element.bodies, *element.axes, *element.footprints):
        if not isinstance(body.shape, Line):
            continue
        points = body.points()
        if body.shape.text:
            x, y, z = points[0].tolist()
            made.append(element.part("text", ((x, y, z),), ("a text",), text=body.shape.text))
        elif len(points) == 1:
            made.append(_from_points(element, points, ("a point",), None))
        else:
            made.append(_path(element, points, ("a curve",), None))
    if not made:
        raise NoPart("annotation without lines or points")
    return tuple(made)
