"""The neutral definition of one section, as `sections/S1.json` holds it.

Section coordinates: x along the cut from the line's first point, z = level; axisymmetric: x = r from the axis. Forces
and stiffnesses are per metre run of wall in plane strain and per radian in axisymmetry, never both.
"""

from __future__ import annotations

from dataclasses import field
from typing import Literal

from ingest.model import Point, Role
from ingest.record import record
from ingest.trail import Assumption, Finding, NotAssessed, Question, Source
from sections.model import Band, Represents, SectionWall, Verdict

XZ = tuple[float, float]
Curve = tuple[XZ, ...]
Side = Literal["left", "right", "both", "none"]


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
class End:
    """One end of a member: what it stands on."""

    to: str
    at: XZ
    joint: Literal["pinned", "fixed", "free"]


@record
class RealMember:
    """The real, discrete member."""

    EA_kN: float | None = None
    EI_kNm2: float | None = None
    length: float | None = None
    spacing: float | None = None
    spacing_range: tuple[float, float] | None = None
    skew: float | None = None
    inclination: float | None = None
    count: int | None = None
    preload_kN: float | None = None
    weight_kN_per_m: float | None = None
    A_m2: float | None = None
    limit_kN: float | None = None
    free_length: float | None = None
    bond_length: float | None = None
    bond_diameter: float | None = None
    diameter: float | None = None
    centres: float | None = None
    thickness: float | None = None
    E_kPa: float | None = None
    thermal_range_K: float | None = None
    k_packing_kN_per_m: float | None = None
    k_waler_kN_per_m: float | None = None
    k_end_kN_per_m: float | None = None
    k_effective_kN_per_m: float | None = None
    L_eff: float | None = None
    free_strain: float | None = None
    """Thermal strain or lack of fit of the member, lengthening positive."""
    contact_kPa: float | None = None
    """Limit of friction between grout or shaft and ground."""


@record
class PerMetre:
    """The member as the plane-strain section has it, per metre run of wall."""

    EA_kN_per_m: float | None = None
    EI_kNm2_per_m: float | None = None
    weight_kN_per_m2: float | None = None
    net_of_soil: bool = False
    plane_strain_factor_included: bool = False
    thickness: float | None = None
    E_kPa: float | None = None
    preload_kN_per_m: float | None = None
    resists: Literal["both", "compression", "tension"] = "both"
    limit_kN_per_m: float | None = None
    contact_kPa: float | None = None
    k_effective_kN_per_m_per_m: float | None = None
    free_strain: float | None = None
    soil_displaced_m3_per_m2: float | None = None
    """Of a wall: soil in its place per m2 of elevation. Where the mesh still holds that soil the net weight is
    weight_kN_per_m2 less the unit weight of the soil times this."""


@record
class PerRadian:
    """The member as the axisymmetric section has it: walls per metre of circumference, all else per radian."""

    EA_vertical_kN_per_m: float | None = None
    EA_hoop_kN_per_m: float | None = None
    EI_vertical_kNm2_per_m: float | None = None
    EI_hoop_kNm2_per_m: float | None = None
    EA_hoop_by_level: tuple[XZ, ...] | None = None
    EA_kN_per_rad: float | None = None
    EI_kNm2_per_rad: float | None = None
    radial_stiffness_kN_per_m_per_rad: float | None = None
    disc_Et_kN_per_m: float | None = None
    nu: float | None = None
    weight_kN_per_m2: float | None = None
    net_of_soil: bool = False
    plane_strain_factor_included: bool = False
    thickness: float | None = None
    E_kPa: float | None = None
    preload_kN_per_rad: float | None = None
    resists: Literal["both", "compression", "tension"] = "both"
    limit_kN_per_rad: float | None = None
    contact_kPa: float | None = None
    soil_displaced_m3_per_m2: float | None = None


@record
class BelowFormation:
    """What posts find below formation, where they are separate piles and no wall; shares are per metre of wall.

    `clay_N_p`: (level, N_p): clay gives at most N_p s_u on the width of a post, times `active_share` per metre of wall.
    """

    level: float
    width: float
    active_share: float
    """Of active pressure and water, width over spacing."""
    passive_share_coarse: float
    """Of the plane-strain passive of coarse soil, min(spacing, 3 width) over spacing."""
    no_passive_to: float
    """Level down to which no passive is counted."""
    clay_N_p: tuple[XZ, ...]
    how: str
    basis: str


@record
class SmearParts:
    """The factors whose product turns a real value into the section's."""

    per_spacing: float = 1.0
    cos_beta_power: float = 1.0
    phi: float = 1.0
    EI_factor: float = 1.0
    plane_strain: float = 1.0
    net_of_soil: float = 1.0
    """Weight less that of the soil displaced, over the full weight."""

    @property
    def product(self) -> float:
        """The factor itself."""
        stiffness = self.per_spacing * self.cos_beta_power * self.phi * self.EI_factor * self.plane_strain
        return stiffness * self.net_of_soil


@record
class Smear:
    """Real value times `factor` equals the section's value."""

    quantity: str
    real_key: str
    section_key: str
    factor: float
    parts: SmearParts


@record
class AlsoGives:
    """A further result of the same analysis value, such as the thrust along the waler."""

    gives: str
    factor: float


@record
class Back:
    """Analysis value (in `from_unit`) times `factor` gives the force of one real member."""

    quantity: Literal["N", "V", "M", "hoop", "reaction", "settlement"]
    from_unit: str
    factor: float
    gives: str
    unit: str
    also: tuple[AlsoGives, ...] = ()
    valid_if: str = ""


@record
class SectionMember:
    """One member of the section, real and smeared, with the way back."""

    id: str
    role: Role
    side: Side
    material: str | None
    form: Literal["beam", "bar", "sheet", "block", "ring", "disc"]
    points: Curve
    ends: tuple[End, ...]
    real: RealMember
    section: PerMetre | PerRadian
    smear: tuple[Smear, ...]
    back: tuple[Back, ...]
    sources: tuple[Source, ...] = ()
    assumptions: tuple[str, ...] = ()
    below_formation: BelowFormation | None = None
    """Of king posts; None for every other member."""


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
