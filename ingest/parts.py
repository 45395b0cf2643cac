"""What a reader hands over, before anybody has said what it is for."""

from __future__ import annotations

from dataclasses import field
from typing import Literal

from ingest.members import BarSection, Point3
from ingest.model import Borehole, ModelPlace
from ingest.record import record
from ingest.trail import Assumption, Finding, Question, Source

Form = Literal["path", "outline", "circle", "point", "text", "bar", "prism", "mesh"]


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
