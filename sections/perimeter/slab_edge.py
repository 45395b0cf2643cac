"""A perimeter where no wall makes one: the edge of the lowest slab stands in, as an assumption that is asked about."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace

import numpy as np
import shapely

from ingest.members import Plate, WallPiece
from ingest.model import Site
from ingest.trail import Finding, Question, Reading, Source
from sections.found import PitShape

Shapes = tuple[tuple[PitShape, ...], tuple[Finding, ...], tuple[Question, ...]]
SAME_FLOOR = 0.5
"""Slabs whose undersides are within this of the lowest are one floor, m (judgement)."""
JOINT = 0.05
"""Slabs with a joint narrower than this are one slab, m."""


def from_slab(site: Site, seen: Iterable[Finding], find_shapes: Callable[[Site], Shapes]) -> Shapes:
    """With slabs and no walls to go by, the outline of the lowest floor stands in for the perimeter.

    Args:
        site: The site.
        seen: Findings so far.
        find_shapes: The finder, for a site with the stand-in alone.

    Returns:
        As `find_shapes`; no pit where there is no slab either.
    """
    slabs = [plate for plate in site.plates if plate.role == "slab" and len(plate.outline) > 2]
    if not slabs:
        return (), numbered_findings(seen), ()
    lowest = min(_underside(slab) for slab in slabs)
    floor = [slab for slab in slabs if _underside(slab) <= lowest + SAME_FLOOR]
    area = _joined(floor)
    mine = [slab for slab in floor if shapely.Polygon(slab.outline).buffer(0).intersects(area)]
    found = {Source(file=s.file, item=s.item, how="assumed") for slab in mine for s in slab.sources}
    sources = tuple(sorted(found, key=lambda s: (s.file, s.item)))
    axis = tuple((float(x), float(y)) for x, y in area.exterior.coords[:-1])
    stand_in = WallPiece(id=mine[0].id, axis=axis, closed=True, kind="unknown", sources=sources)
    shapes, _, questions = find_shapes(replace(site, walls=(stand_in,), piles=(), plates=()))
    if not shapes:
        return (), numbered_findings(seen), ()
    where = mine[0].name or mine[0].id
    note = Finding(
        id="", code="perimeter-assumed", severity="check", where=where, sources=sources,
        text="No wall closes a perimeter. The outline of the lowest slab stands in for the wall axis, and the kind of "
             "wall is not known: every distance from the wall is an assumption to confirm.",
    )  # fmt: skip
    return shapes, numbered_findings((*seen, note)), (*questions, _question(where))


def _underside(plate: Plate) -> float:
    levels = [level for level in (plate.underside, plate.top) if level is not None]
    return min(levels, default=np.inf)


def _joined(slabs: Sequence[Plate]) -> shapely.Polygon:
    """Largest area that slabs of one floor make together."""
    grown = [shapely.Polygon(slab.outline).buffer(0).buffer(0.5 * JOINT, join_style="mitre") for slab in slabs]
    union = shapely.union_all(grown).buffer(-0.5 * JOINT, join_style="mitre")
    parts = [part for part in getattr(union, "geoms", [union]) if isinstance(part, shapely.Polygon)]
    return max(parts, key=lambda part: part.area)


def numbered_findings(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Findings of the perimeter with their ids."""
    return tuple(replace(finding, id=f"shape-{k + 1}") for k, finding in enumerate(findings))


def _question(where: str) -> Question:
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
