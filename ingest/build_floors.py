"""Slabs, footings, columns and dig floors of the site."""

from __future__ import annotations

from collections.abc import Sequence

from ingest.brief_tables import FloorTable
from ingest.figures import centroid, extent, outline_of, plan
from ingest.matching import find_entry, match_line
from ingest.members import Column, Plate, Point
from ingest.model import Floor
from ingest.notes import Notes, label
from ingest.parts import Part
from ingest.roles import RoleGiven
from ingest.trail import Source


def build_plates(given: Sequence[RoleGiven], notes: Notes) -> tuple[Plate, ...]:
    """Make slabs and footings from parts that have an outline.

    Args:
        given: Parts with role slab or footing, dig outlines left out.
        notes: Takes the parts that give nothing.
    """
    plates = []
    for item in given:
        part = item.part
        ring = outline_of(part) or (plan(part.points) if part.form == "mesh" and len(part.points) > 2 else None)
        if ring is None or item.role not in ("slab", "footing"):
            notes.refuse(part, f"{item.role} without an outline on plan")
            continue
        plates.append(
            Plate(
                id="",
                role="slab" if item.role == "slab" else "footing",
                outline=ring,
                holes=tuple(plan(hole) for hole in part.holes),
                top=part.z_top,
                underside=part.z_bottom,
                material=notes.material_of(part),
                layer=part.layer,
                name=part.name,
                evidence=item.evidence,
                sources=(part.source,),
            )
        )
    return tuple(plates)


def build_columns(given: Sequence[RoleGiven], notes: Notes) -> tuple[Column, ...]:
    """Make columns from outlines, circles, points and upright bars."""
    columns = []
    for item in given:
        part = item.part
        if part.form == "path" and not part.closed:
            notes.refuse(part, "column without a shape on plan")
            continue
        ring = outline_of(part)
        width = 2 * part.radius if part.radius else max(extent(ring)) if ring else part.thickness
        foot = min(point[2] for point in part.points) if part.form == "bar" else part.z_bottom
        columns.append(
            Column(
                id="",
                centre=centroid(part),
                width=width,
                foot=foot,
                layer=part.layer,
                name=part.name,
                evidence=item.evidence,
                sources=(part.source,),
            )
        )
    return tuple(columns)


def build_floors(given: Sequence[RoleGiven], notes: Notes) -> tuple[Floor, ...]:
    """Make the dig floors: outlines with a level first, then what fills the pit.

    Args:
        given: Parts that the brief's [[floors]] or their wording make dig outlines.
        notes: Takes missing levels and the unconfirmed dig allowance.
    """
    brief = notes.brief
    floors = []
    for item in given:
        found = find_entry(brief.floors, item.part)
        entry = found[1] if found else FloorTable()
        ring = outline_of(item.part)
        if ring is None:
            notes.refuse(item.part, "dig outline that is not closed")
            continue
        level = entry.level if entry.level is not None else _drawn(item.part)
        level = level if level is not None else brief.levels.formation
        if level is None:
            notes.refuse(item.part, "dig outline without a level")
            notes.ask(f"{label(item)}: to which level is it dug?", _floor_line(item.part))
            continue
        floors.append(_floor(level, entry, ring, item.part.name or item.part.layer, (item.part.source,), notes))
    for number, entry in enumerate(brief.floors):
        if entry.match is None and entry.level is not None:
            source = Source(file=brief.file, item=f"floors[{number + 1}]")
            floors.append(_floor(entry.level, entry, None, "", (source,), notes))
    whole = any(floor.outline is None for floor in floors)
    if brief.levels.formation is not None and not whole:
        source = Source(file=brief.file, item="levels.formation")
        floors.append(_floor(brief.levels.formation, FloorTable(), None, "formation", (source,), notes))
    return tuple(floors)


def _floor(
    level: float,
    entry: FloorTable,
    ring: tuple[Point, ...] | None,
    name: str,
    sources: tuple[Source, ...],
    notes: Notes,
) -> Floor:
    allowance = entry.dig_allowance if entry.dig_allowance is not None else notes.brief.levels.dig_allowance
    if allowance is None:
        notes.assume(
            "dig-allowance",
            name or f"{level:g} m",
            f"blinding, drainage and caps below the floor at {level:g} m are left out of the dig level",
            "no dig_allowance is given; a floor's level is the underside of its slab",
            sources,
        )
    dig_level = None if allowance is None else level - allowance
    return Floor(level=level, dig_level=dig_level, outline=ring, name=name, sources=sources)


def _drawn(part: Part) -> float | None:
    if part.z_bottom is not None:
        return part.z_bottom
    return part.points[0][2] if any(point[2] for point in part.points) else None


def _floor_line(part: Part) -> str:
    return f"[[floors]]\n{match_line(part.layer, '', '', part.source.item)}\nlevel = nan"
