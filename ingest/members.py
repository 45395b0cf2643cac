"""The members of a site as received: walls, piles, supports, slabs, loads, receptors. Metres, kN, kPa, degrees."""

from __future__ import annotations

from typing import Literal

from ingest.record import record
from ingest.trail import Source

Point = tuple[float, float]


Point3 = tuple[float, float, float]


Role = Literal[
    "wall", "strut", "corner_strut", "raker", "anchor", "waler", "bearing_pile", "slab", "footing", "column",
    "load", "receptor", "level", "stratum", "context", "ignore",
]  # fmt: skip


WallKind = Literal[
    "diaphragm", "secant", "contiguous", "sheet", "king_post", "concrete", "masonry", "none", "unknown"
]  # fmt: skip


Continuity = Literal["monolithic", "jointed", "unknown"]


LoadKind = Literal["point", "line", "area", "footing"]


@record
class BarSection:
    """Cross-section of one member: area m2, second moment for bending in the vertical plane m4."""

    designation: str
    A: float | None = None
    I: float | None = None  # noqa: E741  the trade's symbol
    diameter: float | None = None
    width: float | None = None
    depth: float | None = None


@record
class Evidence:
    """Why an entity has its role: the words shown to the engineer, and a confidence from 0 to 1."""

    role: Role
    why: str
    confidence: float


@record
class Material:
    """A structural material. E in kPa, unit weight in kN/m3."""

    id: str
    kind: Literal["concrete", "steel", "grout", "timber"]
    E: float | None = None
    unit_weight: float | None = None
    basis: str = ""


@record
class WallPiece:
    """A stretch of wall drawn by its line, its two faces, its outline or its solid.

    `axis` is the centre line. `faces` are the drawn faces when the axis was worked out from them.
    """

    id: str
    axis: tuple[Point, ...]
    closed: bool = False
    drawn: Literal["axis", "face", "outline", "solid", "hatch"] = "axis"
    kind: WallKind = "unknown"
    thickness: float | None = None
    top: float | None = None
    toe: float | None = None
    material: str | None = None
    EI_factor: float | None = None
    continuity: Continuity = "unknown"
    capping_beam: bool | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Pile:
    """One upright pile or post. `section` describes a post that is not round; `male` marks a secondary secant pile."""

    id: str
    centre: Point
    diameter: float | None
    kind: WallKind | None = None
    bearing: bool | None = None
    male: bool | None = None
    section: BarSection | None = None
    top: float | None = None
    toe: float | None = None
    material: str | None = None
    EI_factor: float | None = None
    continuity: Continuity = "unknown"
    capping_beam: bool | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Support:
    """One real strut, corner strut, raker or anchor from its head at the wall to its far end."""

    id: str
    role: Literal["strut", "corner_strut", "raker", "anchor"]
    head: Point3
    far: Point3
    group: str = ""
    section: BarSection | None = None
    EA: float | None = None
    EI: float | None = None
    weight: float | None = None
    """Self-weight, kN per m of member."""
    material: str | None = None
    free_length: float | None = None
    bond_length: float | None = None
    bond_diameter: float | None = None
    preload: float | None = None
    """kN per member, tension positive: a strut's is negative."""
    thermal_range: float | None = None
    packing_stiffness: float | None = None
    """kN/m along the member."""
    waler: bool | None = None
    waler_EI: float | None = None
    continuous_at_corners: bool | None = None
    level_given: bool = True
    inclination_given: bool = True
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Waler:
    """A beam along the wall. EI in kNm2 about the vertical axis, EA in kN."""

    id: str
    points: tuple[Point, ...]
    level: float | None = None
    EI: float | None = None
    EA: float | None = None
    material: str | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Plate:
    """A slab, raft or footing by its outline; `underside` is the level a floor is known by."""

    id: str
    role: Literal["slab", "footing"]
    outline: tuple[Point, ...]
    holes: tuple[tuple[Point, ...], ...] = ()
    top: float | None = None
    underside: float | None = None
    material: str | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Column:
    """A column by its centre, its width on plan and its foot level."""

    id: str
    centre: Point
    width: float | None = None
    foot: float | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Load:
    """A load on the ground: point kN, line kN/m, area and footing kPa; positive downwards."""

    id: str
    kind: LoadKind
    value: float | None
    points: tuple[Point, ...]
    level: float | None = None
    stage: str | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()


@record
class Receptor:
    """A neighbour that must not be hurt: building, tunnel, track, utility."""

    id: str
    kind: str
    points: tuple[Point, ...]
    level: float | None = None
    sensitivity: str | None = None
    layer: str = ""
    name: str = ""
    evidence: Evidence | None = None
    sources: tuple[Source, ...] = ()
