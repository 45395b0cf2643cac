"""The site as received: walls, supports, floors, loads and ground, in metres, kilonewtons, kilopascals and degrees.

`None` always means *not given*; it is never a default. Levels are in the model's datum, plan coordinates in the local
frame of `Frame` unless a docstring says world.
"""

from __future__ import annotations

from dataclasses import field
from typing import Annotated, Literal

from pydantic import Field

from ingest.record import record
from ingest.trail import Assumption, Finding, LedgerEntry, NotAssessed, Question, Source

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
Form = Literal["path", "outline", "circle", "point", "text", "bar", "prism", "mesh"]
LoadKind = Literal["point", "line", "area", "footing"]

OUTPUTS = (
    "wall_deflection",
    "wall_moment_excavated_face",
    "wall_moment_retained_face",
    "support_force",
    "settlement",
    "heave_utilisation",
    "hydraulic_utilisation",
)
RING_OUTPUTS = (*OUTPUTS, "hoop_force")
GOVERNING = OUTPUTS[:4]

NOTICE = (
    "Screening aid. It proposes and screens sections; it does not design. Local codes and a licensed engineer decide."
)


@record
class Limits:
    """Limits and tolerances; the brief may change each one, and the report prints them all.

    Ratios are real three-dimensional demand over two-dimensional demand. `ratio_narrow` bounds how far a
    band may reach, before the model's own margin of error, and still represent provisionally (judgement).
    """

    ratio_low: float = 0.9
    ratio_high: float = 1.1
    ratio_narrow: float = 1.25
    governing: tuple[str, ...] = GOVERNING
    plan: float = 0.05
    """Gap or overlap that still closes a wall line, m."""
    level: float = 0.1
    """Levels closer than this count as alike, m."""
    spacing_ratio: float = 0.1
    """Spacings within this fraction count as alike."""
    stiffness_ratio: float = 0.1
    surcharge: float = 5.0
    """Surcharges within this count as alike, kPa."""
    direction: float = 2.0
    """Change of wall direction below this is no corner on a straight wall, degrees."""


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
class Part:
    """One thing a reader found, before anybody has said what it is for.

    `points`: path and outline vertices (a ring is not repeated), circle and point and text one point, bar its two ends
    (head or upper end first), prism the plan outline. `z_bottom`, `z_top` bound it where known. `tags` holds properties
    and attributes as the file has them, name to text, numbers already in m, kN, kPa where the file says their unit.
    """

    source: Source
    form: Form
    points: tuple[Point3, ...]
    layer: str = ""
    cls: str = ""
    name: str = ""
    closed: bool = False
    holes: tuple[tuple[Point3, ...], ...] = ()
    radius: float | None = None
    thickness: float | None = None
    z_bottom: float | None = None
    z_top: float | None = None
    section: BarSection | None = None
    material: str = ""
    text: str = ""
    tags: dict[str, str] = field(default_factory=dict)
    evidence: str = ""
    faces: tuple[tuple[int, ...], ...] = ()
    """Faces of a mesh as rings of point numbers."""


@record
class Layer:
    """One stratum met in a borehole, levels in m."""

    top: float
    base: float
    code: str
    description: str = ""


@record
class Borehole:
    """A hole with its strata from the top down; `water` is the level of the water met, if any."""

    id: str
    location: Point3
    layers: tuple[Layer, ...]
    water: float | None = None
    sources: tuple[Source, ...] = ()


@record
class ModelPlace:
    """How a model's own coordinates lie in the world: world = origin + scale Rz(rotation, counter-clockwise) model, m.

    `given` when the file says so itself, in a map conversion or what stands for one.
    """

    origin: Point3 = (0.0, 0.0, 0.0)
    rotation_deg: float = 0.0
    scale: float = 1.0
    given: bool = False


@record
class FileParts:
    """What one reader took from one file. `entities` is the file's own count, `ignored` counts them by reason."""

    file: str
    sha256: str
    kind: Literal["ifc", "dxf", "ags"]
    schema_or_version: str
    length_unit: str
    unit_scale: float
    entities: int
    parts: tuple[Part, ...] = ()
    boreholes: tuple[Borehole, ...] = ()
    context: dict[str, int] = field(default_factory=dict)
    ignored: dict[str, int] = field(default_factory=dict)
    losses: tuple[str, ...] = ()
    crs: str | None = None
    findings: tuple[Finding, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    questions: tuple[Question, ...] = ()
    setting: tuple[Part, ...] = ()
    """Storeys with their level and the site's own terrain: shown, but no entities of the ledger."""
    place: ModelPlace | None = None
    """Of an IFC model; None where its conversion to the map is no plain shift, turn and scale."""


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


@record
class Floor:
    """A dig floor: `level` is the underside of its slab, `dig_level` lies a dig allowance below it.

    `outline` is None for a floor that fills the pit.
    """

    level: float
    dig_level: float | None
    outline: tuple[Point, ...] | None = None
    name: str = ""
    sources: tuple[Source, ...] = ()


@record
class Stratum:
    """A layer of ground with whatever the engineer has given of it (kPa, kN/m3, degrees, m/s).

    Gradients are kPa per m of depth below `top_level`.
    """

    name: str
    top_level: float | None = None
    from_boreholes: str | None = None
    unit_weight: float | None = None
    E: float | None = None
    E_gradient: float | None = None
    nu: float | None = None
    K0: float | None = None
    c: float | None = None
    phi: float | None = None
    su: float | None = None
    su_gradient: float | None = None
    drainage: str | None = None
    permeability: float | None = None
    sources: tuple[Source, ...] = ()


@record
class Stage:
    """A construction stage as the brief words it."""

    name: str
    dig_to: float | None = None
    install: tuple[str, ...] = ()
    remove: tuple[str, ...] = ()
    water: float | None = None
    drainage: str | None = None


@record
class LineDecision:
    """A cut the engineer pins, forbids or moves, world coordinates."""

    kind: Literal["pin", "forbid", "move"]
    line: tuple[Point, Point]
    to: tuple[Point, Point] | None = None
    by: str = ""
    date: str = ""
    because: str = ""


@record
class Registered:
    """How a file was laid onto the site."""

    shift: Point = (0.0, 0.0)
    rotation_deg: float = 0.0
    scale: float = 1.0
    residual: float | None = None


@record
class InputFile:
    """One input of the run."""

    file: str
    sha256: str
    kind: Literal["ifc", "dxf", "ags", "brief"]
    schema_or_version: str
    length_unit: str
    registered: Registered | None = None


@record
class Frame:
    """World = offset + Rz(rotation_deg, counter-clockwise) local."""

    offset: Point3 = (0.0, 0.0, 0.0)
    rotation_deg: float = 0.0
    crs: str | None = None


@record
class Site:
    """All that was received, with its trail. Plan coordinates are local to `frame`."""

    name: str = ""
    date: str | None = None
    frame: Frame = Frame()
    inputs: tuple[InputFile, ...] = ()
    start: Point | None = None
    """Where chainage starts, local."""
    ground_level: float | None = None
    formation: float | None = None
    wall_top: float | None = None
    dig_allowance: float | None = None
    water_retained: float | None = None
    water_excavated: float | None = None
    materials: tuple[Material, ...] = ()
    walls: tuple[WallPiece, ...] = ()
    piles: tuple[Pile, ...] = ()
    supports: tuple[Support, ...] = ()
    walers: tuple[Waler, ...] = ()
    plates: tuple[Plate, ...] = ()
    columns: tuple[Column, ...] = ()
    loads: tuple[Load, ...] = ()
    receptors: tuple[Receptor, ...] = ()
    boreholes: tuple[Borehole, ...] = ()
    strata: tuple[Stratum, ...] = ()
    floors: tuple[Floor, ...] = ()
    stages: tuple[Stage, ...] = ()
    sequence: str | None = None
    lines: tuple[LineDecision, ...] = ()
    confirmed: tuple[str, ...] = ()
    limits: Limits = Limits()
    ledger: dict[str, LedgerEntry] = field(default_factory=dict)
    questions: tuple[Question, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    findings: tuple[Finding, ...] = ()
    not_assessed: tuple[NotAssessed, ...] = ()
    places: dict[str, ModelPlace] = field(default_factory=dict)
    """Where each IFC model lies in the world, by file, the brief's shift and turn included."""


Quantity = Literal["N", "V", "M", "hoop", "reaction", "settlement"]


@record
class ResultRow:
    """One row of an analysis result that comes back; `line` is its line in the file."""

    line: int
    section: str
    stage: str
    member: str
    quantity: Quantity
    value: Annotated[float, Field(allow_inf_nan=False)]
    unit: str
    extra: dict[str, str] = field(default_factory=dict)
