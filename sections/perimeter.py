"""From the site to the perimeters of its pits: which walls retain, how they run, where chainage starts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TypeVar

import numpy as np
import shapely

from ingest.model import Plate, Point, Site, WallPiece
from ingest.trail import Finding, Question, Reading, Source
from sections.circles import find_circle, find_parts
from sections.corners import find_arcs, find_corners, start_outline
from sections.model import Arc, Circle, CirclePart, PitShape
from sections.open_walls import find_witnesses, oriented
from sections.outline import Outline, build_outline
from sections.ring_choice import choose_rings
from sections.rings import Trace
from sections.run_checks import check_runs
from sections.runs import find_runs, stretches_along
from sections.sides import Samples, find_sides, sample_way
from sections.wall_lines import WallLine, gather_lines

CUT_CORNER = 0.3
"""A straight shorter than this between two sides that meet only cuts their corner, m (judgement)."""

Centred = TypeVar("Centred", Arc, Circle, CirclePart)
Shapes = tuple[tuple[PitShape, ...], tuple[Finding, ...], tuple[Question, ...]]


@dataclass(frozen=True, kw_only=True, eq=False)
class Way:
    """A perimeter on the way to its shape."""

    trace: Trace
    samples: Samples
    outline: Outline


def find_shapes(site: Site) -> Shapes:
    """Find the perimeter of every pit of a site.

    Args:
        site: The site in local coordinates.

    Returns:
        The pits by chainage start from south to north, then west to east; what was seen; what is asked. No pits where
        there is neither a wall nor a slab to go by.
    """
    origin = _origin(site)
    lines, seen, questions = gather_lines(site, origin)
    choice = choose_rings(site, lines, origin) if lines else None
    if choice is None or not choice.traces:
        return _from_slab(site)
    ways, asked = _ways(site, choice.traces, lines, origin)
    starts = _starts(site, ways, origin)
    made = [_shape(site, way, lines, origin, start) for way, start in zip(ways, starts, strict=True)]
    shapes, findings = _numbered(site, made)
    every = [*seen, *choice.findings, *findings]
    numbered = tuple(replace(f, id=f"shape-{k + 1}") for k, f in enumerate(every))
    return shapes, numbered, (*questions, *choice.questions, *asked)


def _origin(site: Site) -> Point:
    """A round point amid the walls: the finder works near zero, whatever the grid."""
    points = [p for piece in site.walls for p in piece.axis] + [pile.centre for pile in site.piles]
    if not points:
        return (0.0, 0.0)
    x, y = np.round(np.median(np.array(points), axis=0))
    return (float(x), float(y))


def _ways(
    site: Site, traces: Sequence[Trace], lines: Sequence[WallLine], origin: Point
) -> tuple[list[Way], list[Question]]:  # fmt: skip
    witnesses = find_witnesses(site, origin)
    ways: list[Way] = []
    asked: list[Question] = []
    for trace in traces:
        turned = trace
        if not trace.closed:
            turned, question = oriented(trace, witnesses, origin)
            if question is not None:
                asked.append(replace(question, id=f"{question.id}-{len(asked) + 1}"))
        samples, sides = find_sides(sample_way(turned, lines))
        outline = build_outline(samples, sides, CUT_CORNER)
        ways.append(Way(trace=turned, samples=samples, outline=outline))
    return ways, asked


def _starts(site: Site, ways: Sequence[Way], origin: Point) -> list[Point | None]:
    """The start that the brief asks for goes to the pit it lies nearest to."""
    starts: list[Point | None] = [None] * len(ways)
    if site.start is not None:
        local = (site.start[0] - origin[0], site.start[1] - origin[1])
        rings = [shapely.LinearRing(w.outline.points) if w.outline.closed else shapely.LineString(w.outline.points)
                 for w in ways]  # fmt: skip
        starts[int(np.argmin(shapely.distance(rings, shapely.Point(local))))] = local
    return starts


def _shape(site: Site, way: Way, lines: Sequence[WallLine], origin: Point, start: Point | None) -> PitShape:
    direction = site.limits.direction
    outline = start_outline(way.outline, direction, -site.frame.rotation_deg, start)
    corners = find_corners(outline, direction)
    circle = find_circle(outline, way.samples, direction)
    parts = find_parts(outline, way.samples, direction) if circle is None else ()
    runs, piles = find_runs(site, outline, stretches_along(site, outline, way.trace, lines), [c.at for c in corners])
    return PitShape(
        id="",
        closed=outline.closed,
        axis=outline.points + origin,
        at=outline.at,
        length=outline.length,
        arcs=tuple(_moved(arc, origin) for arc in find_arcs(outline)),
        corners=tuple(replace(c, point=_shift(c.point, origin)) for c in corners),
        runs=runs,
        circle=None if circle is None else _moved(circle, origin),
        circles=tuple(_moved(part, origin) for part in parts),
        piles=piles,
    )


def _shift(point: Point, origin: Point) -> Point:
    return (point[0] + origin[0], point[1] + origin[1])


def _moved(item: Centred, origin: Point) -> Centred:
    return replace(item, centre=_shift(item.centre, origin))


def _numbered(site: Site, shapes: Sequence[PitShape]) -> tuple[tuple[PitShape, ...], list[Finding]]:
    """Pits by northing then easting of their start, each with the pits it lies in, and what their runs show."""
    angle = np.radians(site.frame.rotation_deg)
    east, north = np.array([np.cos(angle), -np.sin(angle)]), np.array([np.sin(angle), np.cos(angle)])
    ordered = sorted(shapes, key=lambda s: (round(float(s.axis[0] @ north), 2), round(float(s.axis[0] @ east), 2)))
    named = [replace(shape, id=f"P{k + 1}") for k, shape in enumerate(ordered)]
    areas = {s.id: shapely.Polygon(s.axis) for s in named if s.closed}
    within = {
        s.id: tuple(k for k, area in areas.items() if k != s.id and area.contains(areas[s.id].representative_point())
                    and area.area > areas[s.id].area)
        for s in named if s.closed
    }  # fmt: skip
    final = tuple(replace(s, enclosing=within.get(s.id, ())) for s in named)
    return final, [finding for s in final for finding in check_runs(site, s)]


def _from_slab(site: Site) -> Shapes:
    """With slabs and no walls to go by, the outline of the lowest slab stands in for the perimeter."""
    slabs = [plate for plate in site.plates if plate.role == "slab" and len(plate.outline) > 2]
    if not slabs:
        return (), (), ()
    slab = min(slabs, key=lambda s: (_underside(s), -shapely.Polygon(s.outline).area, s.outline))
    sources = tuple(Source(file=s.file, item=s.item, how="assumed") for s in slab.sources)
    stand_in = WallPiece(id=slab.id, axis=slab.outline, closed=True, kind="unknown", sources=sources)
    shapes, findings, questions = find_shapes(replace(site, walls=(stand_in,), piles=(), plates=()))
    where = slab.name or slab.id
    note = Finding(
        id="shape-slab", code="perimeter-assumed", severity="check", where=where, sources=sources,
        text="No wall closes a perimeter. The outline of the lowest slab stands in for the wall axis, and the kind of "
             "wall is not known: every distance from the wall is an assumption to confirm.",
    )  # fmt: skip
    return shapes, (*findings, note), (*questions, _slab_question(where))


def _underside(plate: Plate) -> float:
    levels = [level for level in (plate.underside, plate.top) if level is not None]
    return min(levels, default=np.inf)


def _slab_question(where: str) -> Question:
    return Question(
        id="perimeter-assumed",
        about="where the retaining wall stands",
        readings=(
            Reading(reading=f"along the edge of the lowest slab ({where})", evidence="no wall closes a perimeter",
                    confidence=0.4),
            Reading(reading="outside it, by working space", evidence="slabs are often cast free of the wall",
                    confidence=0.6),
        ),
        brief_line='[[roles]] match = {layer = "..."}, role = "wall", wall_kind = "..."',
    )  # fmt: skip
