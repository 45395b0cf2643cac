"""The pit inside a building model: which walls stand in the ground, which slabs lie lowest, where the ground is."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.brief import Brief
from ingest.matching import match_line
from ingest.members import Evidence
from ingest.notes import Notes, label
from ingest.parts import FileParts, Part
from ingest.roles import RoleGiven
from ingest.trail import Source

IN_GROUND = 0.3
"""A wall that begins this far below the ground stands in it, m (judgement)."""
SAME_STOREY = 0.5
"""Walls that begin within this of the lowest belong to its storey, m (judgement)."""
SUPERSTRUCTURE = "superstructure"


def sort_building(
    given: Sequence[RoleGiven], files: Sequence[FileParts], notes: Notes
) -> tuple[tuple[RoleGiven, ...], float | None]:
    """Tell the walls and slabs that hold ground from the building on top of them.

    Args:
        given: Roles of all parts.
        files: The files, for storeys and terrain.
        notes: Takes the reasoning, as assumptions, findings and questions.

    Returns:
        The roles, what stands above ground turned into context, and the ground level when it was worked out.
    """
    plain = [item for item in given if item.role == "wall" and not item.retaining]
    held = any(item.retaining for item in given if item.role == "wall")
    if held:
        return _beside_retaining(given, notes), None
    walls = [item for item in plain if item.part.z_bottom is not None]
    if not walls:
        _ask_plain(plain, notes)
        return tuple(given), None
    ground = notes.brief.site.ground_level
    found = None
    if ground is None:
        found = ground = _ground(files, given, notes)
    used = _lowest(walls, ground, notes)
    return tuple(_above_ground(item, used, ground) for item in given), found


def _beside_retaining(given: Sequence[RoleGiven], notes: Notes) -> tuple[RoleGiven, ...]:
    """Where something is said to retain, walls that are just walls belong to the building."""
    out = []
    for item in given:
        plain = item.role == "wall" and not item.retaining
        if plain and item.part.z_bottom is None:
            _ask_plain([item], notes)
        out.append(_context(item, "wall of the building, others retain") if plain else item)
    return tuple(out)


def _ask_plain(walls: Sequence[RoleGiven], notes: Notes) -> None:
    for item in walls:
        if item.evidence.confidence >= 1:
            continue
        match = match_line(item.part.layer, item.part.name, item.part.cls)
        notes.ask(
            f"{label(item)}: do these walls hold the ground?",
            f'[[roles]]\n{match}\nrole = "wall"\nwall_kind = "concrete"',
            (
                ("they are walls of a building", "the name says wall and nothing of ground", 0.5),
                ("they retain", "they are the only walls, or drawn beside others", 0.4),
            ),
        )


def _ground(files: Sequence[FileParts], given: Sequence[RoleGiven], notes: Notes) -> float:
    """Ground level from terrain, else from the storey nearest to the zero of the building, else that zero."""
    setting = [part for file in files for part in file.setting]
    terrain = [p for p in [*setting, *(item.part for item in given)] if p.form == "mesh" and _is_terrain(p)]
    if terrain:
        level = float(np.median([point[2] for part in terrain for point in part.points]))
        basis = f"middle level of the terrain of the model ({len(terrain)} meshes)"
        sources = tuple(part.source for part in terrain[:5])
    else:
        storeys = [part for part in setting if part.cls == "IfcBuildingStorey" and part.z_bottom is not None]
        nearest = min(storeys, key=lambda part: abs(part.z_bottom or 0.0), default=None)
        level = (nearest.z_bottom or 0.0) if nearest is not None else 0.0
        name = f'storey "{nearest.name}"' if nearest is not None else "the zero of the model"
        basis = f"{name}, the level nearest to the zero of the building; no terrain and no brief"
        sources = (nearest.source,) if nearest is not None else ()
    level = round(level, 3)
    notes.assume("ground-level", "", f"ground at {level:g} m", basis, sources)
    readings = ((f"{level:g} m", basis, 0.5),)
    notes.ask("ground level behind the wall is not given", f"[site]\nground_level = {level!r}", readings)
    return level


def _is_terrain(part: Part) -> bool:
    return part.cls in ("IfcSite", "IfcGeographicElement")


def _lowest(walls: Sequence[RoleGiven], ground: float, notes: Notes) -> set[int]:
    bottoms = {id(item.part): item.part.z_bottom for item in walls if item.part.z_bottom is not None}
    buried = {key for key, bottom in bottoms.items() if bottom < ground - IN_GROUND}
    lowest = min(bottoms.values())
    if buried:
        text = f"{len(buried)} of {len(walls)} walls begin below the ground at {ground:g} m and are taken to hold it"
        code = "basement-walls"
    else:
        buried = {key for key, bottom in bottoms.items() if bottom <= lowest + SAME_STOREY}
        text = (
            f"no wall begins below the ground at {ground:g} m; the {len(buried)} walls of the lowest storey "
            f"(from {lowest:g} m) give the outline, and nothing says that ground is held"
        )
        code = "no-basement"
    sources: list[Source] = [item.part.source for item in walls if id(item.part) in buried]
    notes.see(code, "check", sources[0].file, text, sources[:20])
    return buried


def _above_ground(item: RoleGiven, used: set[int], ground: float) -> RoleGiven:
    part = item.part
    if item.evidence.confidence >= 1 or part.z_bottom is None:
        return item
    if item.role == "wall" and id(part) not in used:
        return _context(item, SUPERSTRUCTURE)
    if item.role in ("slab", "footing", "column", "strut", "raker", "anchor", "waler") and part.z_bottom >= ground:
        return _context(item, SUPERSTRUCTURE)
    return item


def _context(item: RoleGiven, why: str) -> RoleGiven:
    said = f"{why}: {item.evidence.role} ({item.evidence.why})"
    evidence = Evidence(role="context", why=said, confidence=item.evidence.confidence)
    return replace(item, evidence=evidence, question=None)


def ground_given(brief: Brief, found: float | None) -> float | None:
    """Ground level of the brief, else the one worked out."""
    return brief.site.ground_level if brief.site.ground_level is not None else found
