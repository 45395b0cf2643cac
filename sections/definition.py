"""The neutral definition of one section, as `sections/S1.json` holds it.

Section coordinates: x along the cut from the line's first point, z = level; axisymmetric: x = r from the axis. Forces
and stiffnesses are per metre run of wall in plane strain and per radian in axisymmetry, never both.
"""

from __future__ import annotations

from dataclasses import field
from typing import Literal

from ingest.members import Point
from ingest.record import record
from ingest.trail import Assumption, Finding, NotAssessed, Question, Source
from sections.member import XZ, Curve, SectionMember
from sections.proposal import Band, Represents, SectionWall, Verdict


@record
class Half:
    """Whether the section may be halved at `at_x`, and why."""

    is_half: bool
    at_x: float | None
    basis: str


@record
class RingAxis:
    """The axis of an axisymmetric section (world point) and the radius of the wall axis, m."""

    point: Point
    r_of_wall: float


@record
class Extent:
    """Size of the model and what its edges are."""

    x: tuple[float, float]
    z: tuple[float, float]
    left: Literal["roller", "fixed", "symmetry", "axis"]
    right: Literal["roller", "fixed", "symmetry", "axis"]
    base: Literal["roller", "fixed", "symmetry", "axis"]
    basis: str


@record
class SectionMaterial:
    """A material of the section. Profiles are (level, value) pairs; `standing` says where each field comes from."""

    kind: Literal["soil", "concrete", "steel", "grout", "timber"]
    unit_weight: float | None = None
    unit_weight_sat: float | None = None
    E: tuple[XZ, ...] | None = None
    nu: float | None = None
    K0: float | None = None
    c: float | None = None
    phi: float | None = None
    su: tuple[XZ, ...] | None = None
    permeability: float | None = None
    drainage: str | None = None
    wall_friction_ratio: float | None = None
    standing: dict[str, Literal["given", "assumed", "missing"]] = field(default_factory=dict)


@record
class GroundLayer:
    """One layer by its outlines (rings, not repeated) in section coordinates."""

    id: str
    material: str
    outlines: tuple[Curve, ...]
    holes: tuple[Curve, ...] = ()


@record
class Water:
    """A water line. Before work the level outside holds inside the pit too: side "excavated", kind "retained"."""

    id: str
    side: Literal["left", "right", "excavated"]
    line: Curve
    kind: Literal["retained", "excavated"]

    @property
    def before_work(self) -> bool:
        """True for the water that stood inside the pit before it was dug."""
        return self.side == "excavated" and self.kind == "retained"


@record
class Ground:
    """Surface, layers and water; `nearest_borehole` is the distance to it, m."""

    surface: Curve
    layers: tuple[GroundLayer, ...]
    water: tuple[Water, ...]
    nearest_borehole: float | None


@record
class Alternative:
    """Another way of handing a load over, what it keeps and what it loses."""

    name: Literal["pressure_kept", "total_kept", "equal_effect", "absent"]
    value: float | None
    unit: str
    keeps: str
    loses: str


@record
class LoadValue:
    """A load's value with its unit."""

    value: float | None
    unit: str


@record
class SectionLoad:
    """A load as the section carries it."""

    id: str
    kind: Literal["point", "line", "area", "footing"]
    direction: Literal["down"]
    at: Curve
    real: LoadValue
    section: LoadValue
    alternatives: tuple[Alternative, ...]
    sources: tuple[Source, ...] = ()


@record
class SectionStage:
    """A construction stage; stage 0 is the stress in the ground before work."""

    id: str
    order: int
    text: str
    level: float | None
    dig: tuple[Curve, ...] = ()
    install: tuple[str, ...] = ()
    remove: tuple[str, ...] = ()
    preload: dict[str, float] = field(default_factory=dict)
    loads_on: tuple[str, ...] = ()
    loads_off: tuple[str, ...] = ()
    water: tuple[str, ...] = ()
    drainage: str | None = None
    assumed: bool = True


@record
class BalanceLine:
    """One line of the balance, kN per m (or per radian); horizontal positive with x, vertical positive down."""

    text: str
    value: float | None
    unit: str


@record
class Balance:
    """Horizontal and vertical forces that the section must close with."""

    horizontal: tuple[BalanceLine, ...]
    vertical: tuple[BalanceLine, ...]


@record
class Implied:
    """What the section implies when extruded or revolved, beside what is really there."""

    about: str
    quantity: Literal["volume", "count", "stiffness", "contact_area", "load"]
    real: float | None
    implied: float | None
    ratio: float | None
    grade: Literal["fair", "care", "serious"]
    do_in_inputs: str
    read_outputs: str


@record
class Action:
    """An action that no 2D section can show, with its size where it can be worked out."""

    name: str
    size: float | None
    unit: str
    at: str


@record
class SupportLoss:
    """Loss of one real member of a row: ratios to the whole arrangement. Accidental, never part of a verdict's band.

    `at`: chainage of the member whose loss is worst. `gap_movement`: movement of its place; `neighbour_force`: force of
    its worse neighbour; face moments: the largest ratio anywhere along the wall.
    """

    member: str
    at: float
    gap_movement: float
    neighbour_force: float | None
    wall_moment_excavated_face: float
    wall_moment_retained_face: float


@record
class SectionReceptor:
    """A receptor where the cut meets or passes it."""

    id: str
    kind: str
    at: Curve
    distance: float


@record
class SectionDefinition:
    """One section, enough to rebuild the analysis with nothing but a JSON parser."""

    id: str
    kind: Literal["plane_strain", "axisymmetric"]
    line: tuple[Point, Point]
    represents: tuple[Represents, ...]
    verdicts: dict[str, Verdict]
    """The worst of the walls by output; `walls` has them one by one."""
    walls: tuple[SectionWall, ...]
    score: float | None
    half: Half
    axis: RingAxis | None
    extent: Extent
    materials: dict[str, SectionMaterial]
    ground: Ground
    members: tuple[SectionMember, ...]
    loads: tuple[SectionLoad, ...]
    stages: tuple[SectionStage, ...]
    criteria: tuple[Band, ...]
    balance: Balance
    implied: tuple[Implied, ...]
    actions_without_twin: tuple[Action, ...]
    losses: tuple[SupportLoss, ...] = ()
    """The worst three losses of a single support among the rows of the section."""
    receptors: tuple[SectionReceptor, ...] = ()
    questions: tuple[Question, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    findings: tuple[Finding, ...] = ()
    not_assessed: tuple[NotAssessed, ...] = ()
