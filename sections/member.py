"""A member of a section: the real one, the smeared one, and the rows that lead there and back."""

from __future__ import annotations

from typing import Literal

from ingest.members import Role
from ingest.record import record
from ingest.trail import Source

XZ = tuple[float, float]


Curve = tuple[XZ, ...]


Side = Literal["left", "right", "both", "none"]


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
