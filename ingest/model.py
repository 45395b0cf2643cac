"""The site as received: walls, supports, floors, loads and ground, in metres, kilonewtons, kilopascals and degrees.

`None` always means *not given*; it is never a default. Levels are in the model's datum, plan coordinates in the local
frame of `Frame` unless a docstring says world.
"""

from __future__ import annotations

from dataclasses import field
from typing import Annotated, Literal

from pydantic import Field

from ingest.members import (
    Column,
    Load,
    Material,
    Pile,
    Plate,
    Point,
    Point3,
    Receptor,
    Support,
    Waler,
    WallPiece,
)
from ingest.record import record
from ingest.trail import Assumption, Finding, LedgerEntry, NotAssessed, Question, Source

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
