"""Bodies that a section implies when carried along the wall or round the axis, as outlines in the section plane."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import hypot, sqrt

from export.report.solids import thick_line
from ingest.members import Point
from sections.definition import SectionDefinition, SectionLoad
from sections.member import PerMetre, SectionMember

NOMINAL = 0.10
"""Drawn size of a body that the section gives none, m; said in its properties."""


@dataclass(frozen=True, kw_only=True)
class Body:
    """Outline in the section plane (x, level), m, and where its thickness comes from."""

    id: str
    ring: tuple[Point, ...]
    basis: str


def bay_of(definition: SectionDefinition) -> float:
    """Length of wall shown, m: the widest spacing of the supports, else of the wall's own members, else 1 m."""
    spaced = [one for one in definition.members if one.real.spacing]
    supports = [one.real.spacing or 0.0 for one in spaced if one.form == "bar" and one.role != "slab"]
    return max(supports or [one.real.spacing or 0.0 for one in spaced] or [1.0])


def member_body(one: SectionMember, definition: SectionDefinition) -> Body | None:
    """The body of one member; None where the section gives it no place."""
    if not one.points:
        return None
    if len(one.points) > 2:
        return Body(id=one.id, ring=one.points, basis="outline of the section")
    size, basis = _thickness(one, definition)
    if len(one.points) == 1:
        (x, z), half = one.points[0], size / 2
        ring = ((x - half, z - half), (x + half, z - half), (x + half, z + half), (x - half, z + half))
        return Body(id=one.id, ring=ring, basis=basis)
    (ax, az), (bx, bz) = one.points
    if hypot(bx - ax, bz - az) < 1e-6:
        return None
    return Body(id=one.id, ring=tuple(thick_line((ax, az), (bx, bz), size)), basis=basis)


def load_body(one: SectionLoad) -> Body | None:
    """The strip of a load, drawn NOMINAL high; None where the section gives it no place."""
    if not one.at:
        return None
    xs, z = [x for x, _ in one.at], max(level for _, level in one.at)
    low, high = min(xs), max(xs)
    basis = f"drawn {NOMINAL} m high"
    if high - low < NOMINAL:
        low, high = low - NOMINAL / 2, high + NOMINAL / 2
        basis += f" and {NOMINAL} m wide, the load has no width"
    return Body(id=one.id, ring=((low, z), (high, z), (high, z + NOMINAL), (low, z + NOMINAL)), basis=basis)


def _thickness(one: SectionMember, definition: SectionDefinition) -> tuple[float, str]:
    """Thickness in the section plane, m, and its basis; that of the section's own stiffness wherever there is one."""
    E = _modulus(one, definition)
    if one.form == "ring":
        if one.real.EA_kN and E:
            return sqrt(one.real.EA_kN / E), "square of the area EA/E of the ring"
        return NOMINAL, f"drawn {NOMINAL} m, no size given"
    if one.section.thickness:
        return one.section.thickness, "thickness of the section"
    stiffness = one.section.EA_kN_per_m if isinstance(one.section, PerMetre) else one.section.disc_Et_kN_per_m
    if stiffness and E:
        return stiffness / E, "thickness of a sheet with the section's stiffness, EA per metre over E"
    for size, words in ((one.real.thickness, "real thickness"), (one.real.diameter, "real diameter")):
        if size:
            return size, words
    return NOMINAL, f"drawn {NOMINAL} m thick, no stiffness given"


def _modulus(one: SectionMember, definition: SectionDefinition) -> float | None:
    for value in (one.section.E_kPa, one.real.E_kPa):
        if value:
            return value
    material = definition.materials.get(one.material or "")
    profile: Sequence[Point] = (material.E if material else None) or ()
    return profile[0][1] if profile else None
