"""The proposal: pits, zones, stations, bands, verdicts and the sections chosen, as `proposal.json` holds them.

Plan coordinates of these records are world metres. Chainage runs counter-clockwise with the excavated side on the left.
The definition of one section is in `sections.definition`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Annotated, Literal

import numpy as np
from numpy.typing import NDArray
from pydantic import Field

from ingest.model import Limits, Point, Point3, Role, WallKind
from ingest.record import record
from ingest.trail import Assumption, Finding, LedgerEntry, NotAssessed, Question, Source

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

From = Annotated[float, Field(alias="from")]
VerdictWord = Literal["not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds"]
WORST_FIRST: tuple[VerdictWord, ...] = (
    "not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds",
)  # fmt: skip
Mechanism = Literal[
    "corner", "supports", "opposite_wall", "floor_step", "wall_change", "load", "ground", "water", "shape", "neighbour"
]


@record
class Arc:
    """A circular stretch of the perimeter, listed exactly."""

    start: From
    to: float
    centre: Point
    radius: float
    ccw: bool


@record
class Corner:
    """A corner with its interior angle measured inside the pit, degrees."""

    at: float
    point: Point
    interior_angle: float
    kind: Literal["inside", "re-entrant"]


@record
class Structural:
    """The piles that bend, with their own spacing."""

    which: Literal["all", "male", "posts"]
    count: int | None
    spacing: float | None


@record
class Wall:
    """The wall of one run. A pile wall has `diameter` and `centres`, a continuous one `thickness`."""

    kind: WallKind
    count: int | None = None
    centres: float | None = None
    thickness: float | None = None
    diameter: float | None = None
    top: float | None = None
    toe: float | None = None
    continuity: Literal["monolithic", "jointed", "unknown"] = "unknown"
    structural: Structural | None = None
    capping_beam: bool | None = None
    material: str | None = None
    EI_factor: float | None = None
    post: str | None = None
    """Designation of a king post or sheet profile."""
    sources: tuple[Source, ...] = ()


@record
class Run:
    """A stretch of perimeter of one construction."""

    start: From
    to: float
    wall: Wall


@record
class Zone:
    """A maximal stretch on which nothing that matters to a cut changes."""

    id: str
    start: From
    to: float
    signature: dict[str, str | float | None]
    ended_by: str


@record
class Circle:
    """A near-circular ring: mean radius, largest deviation from it, number of sides (None for a true arc).

    Of a regular polygon `radius` is that of the circle through its corners, `deviation` what its own sides leave over.
    """

    centre: Point
    radius: float
    deviation: float
    sides: int | None


@record
class CirclePart:
    """A near-circular part of a perimeter."""

    start: From
    to: float
    centre: Point
    radius: float
    deviation: float


@record
class Axis:
    """A mirror axis of the plan. `complete` when walls, floors, supports and loads mirror too."""

    point: Point
    direction: float
    overlap: float
    complete: bool
    all_diameters: bool = False
    broken_by: tuple[str, ...] = ()


@record
class PitFloor:
    """A floor of the pit, world outline."""

    level: float
    dig_level: float | None
    outline: tuple[Point, ...]


@record
class Step:
    """A change of dig level inside the pit, and the chainages where it meets the wall."""

    line: tuple[Point, ...]
    drop: float
    at: tuple[float, ...]


@record
class Along:
    """Where one end of a member (or a row of them) stands along a pit."""

    pit: str
    start: From
    to: float
    end: Literal["head", "far"]


@record
class Member:
    """A row of like members, listed once even where it meets two walls."""

    id: str
    role: Role
    count: int
    spacing: float | None
    spacing_range: tuple[float, float] | None
    inclination: float | None
    skew: float | None
    level: float | None
    free_length: float | None
    bond_length: float | None
    along: tuple[Along, ...]
    sources: tuple[Source, ...]


@record
class PitLoad:
    """A load near a pit, world points."""

    id: str
    kind: Literal["point", "line", "area", "footing"]
    value: float | None
    within_pit: bool
    points: tuple[Point, ...]
    sources: tuple[Source, ...]


@record
class PitReceptor:
    """A receptor and its least distance to the wall axis, m."""

    id: str
    kind: str
    points: tuple[Point, ...]
    distance: float


@record
class Neighbour:
    """Another pit nearby."""

    pit: str
    distance: float
    interacts: bool


@record
class Pit:
    """One excavation."""

    id: str
    closed: bool
    length: float
    perimeter: tuple[Point, ...]
    ground_level: float | None
    arcs: tuple[Arc, ...] = ()
    corners: tuple[Corner, ...] = ()
    runs: tuple[Run, ...] = ()
    zones: tuple[Zone, ...] = ()
    circle: Circle | None = None
    circles: tuple[CirclePart, ...] = ()
    symmetry: tuple[Axis, ...] = ()
    floors: tuple[PitFloor, ...] = ()
    steps: tuple[Step, ...] = ()
    members: tuple[Member, ...] = ()
    loads: tuple[PitLoad, ...] = ()
    receptors: tuple[PitReceptor, ...] = ()
    neighbours: tuple[Neighbour, ...] = ()


@record
class Verdict:
    """What is said of one output at one wall or station: the band after margins, the word, and one plain sentence."""

    low: float | None
    high: float | None
    verdict: VerdictWord
    provisional: bool
    dominant: str | None
    stage: str | None
    sentence: str
    margin: tuple[float, float] | None = None
    """Margin of the model's error that is in the band: low x (1 - first), high x (1 + second)."""
    margin_measured: bool = True
    """False where no margin was ever measured: no relief may be claimed."""


@record
class SectionWall:
    """One wall of a section: where it stands on the perimeter and what is said of it."""

    pit: str
    at: float
    side: Literal["left", "right"]
    member: str
    verdicts: dict[str, Verdict]


@record
class Represents:
    """A stretch a section stands for. `provisional` names the outputs not yet shown; empty means shown."""

    pit: str
    start: From
    to: float
    provisional: tuple[str, ...] = ()


@record
class ChosenSection:
    """One section of the proposal; its definition is in `file`."""

    id: str
    file: str
    kind: Literal["plane_strain", "axisymmetric"]
    line: tuple[Point, Point]
    score: float | None
    severity: dict[str, float | None]
    walls: tuple[SectionWall, ...]
    verdicts: dict[str, Verdict]
    """The worst of the walls by output, in the order of WORST_FIRST."""
    represents: tuple[Represents, ...]


@record
class Unrepresented:
    """A stretch that needs its own analysis, and what to do about it."""

    pit: str
    start: From
    to: float
    reason: str
    what_to_do: str


@record
class StationOutput:
    """Band and verdict of one output at every station of a pit; None where not assessed."""

    low: tuple[float | None, ...]
    high: tuple[float | None, ...]
    verdict: tuple[VerdictWord, ...]
    dominant: tuple[str | None, ...]


@record
class StationTable:
    """The stations of one pit. `floor` is the dig level at the wall, `retained` the ground level behind it."""

    chainage: tuple[float, ...]
    floor: tuple[float | None, ...]
    retained: tuple[float | None, ...]
    section: tuple[str | None, ...]
    outputs: dict[str, StationOutput]


@record
class ProposalFrame:
    """How the tool worked inside; every coordinate written is world."""

    offset: Point3
    rotation_deg: float
    crs: str | None


@record
class Proposal:
    """The whole proposal; export adds schema, tool, notice, hashes and the list of files written."""

    limits: Limits
    frame: ProposalFrame
    pits: tuple[Pit, ...]
    sections: tuple[ChosenSection, ...]
    unrepresented: tuple[Unrepresented, ...]
    stations: dict[str, StationTable]
    ledger: dict[str, LedgerEntry]
    questions: tuple[Question, ...]
    assumptions: tuple[Assumption, ...]
    findings: tuple[Finding, ...]
    not_assessed: tuple[NotAssessed, ...]


@record
class Band:
    """One row of a section's `criteria`: what one criterion says of one output at one wall."""

    code: str
    mechanism: Mechanism
    output: str
    wall: str
    low: float | None
    high: float | None
    assessed: bool
    basis: str
    reference: str
    inputs: dict[str, str | float | None]
    sentence: str
    gate: bool = False
    """No 2D section may be trusted for this output."""
    gap: bool = False
    """What it looks at is there and could not be evaluated: no relief may be claimed."""
    carries: tuple[Mechanism, ...] = ()
    """Further mechanisms this one computation contains; it stands for their product, their hulls only widen it."""
    by_class_only: bool = False
    """The band comes from the class of wall and place alone: never `holds`."""


@dataclass(frozen=True, kw_only=True)
class Stations:
    """One pit walked along its wall axis, as arrays of length n (local coordinates, m and degrees; nan = not given).

    Attributes:
        pit: Id of the pit.
        chainage: Station, m.
        xy: (n, 2) point of the wall axis.
        normal: (n, 2) unit vector into the pit.
        side: Index of the side (stretch between corners; one side for a ring).
        side_length: Length of that side, m.
        to_start, to_end: Distance along the wall to the corner at either end of the side; inf where there is none.
        angle_start, angle_end: Interior angle there; nan where the wall just ends or the ring has no corner.
        radius: Radius of a curved wall, nan on straights.
        ring: True where the whole perimeter is a near-circular ring.
        ground: Retained level; floor: dig level at the wall; top, toe: wall ends.
        run: Index into `Pit.runs`. zone: index into `Pit.zones`.
        jointed: True where the wall carries no bending or membrane force along itself for sure (rows of piles, jointed
            panels); monolithic: True where continuity is confirmed. Neither: unknown.
        rows: True for rows of piles or posts.
        beam: True where a waler or capping beam is known or possible along the wall.
        facing: Distance to the wall opposite along the normal, inf when none; facing_chainage, facing_skew: where it
            is met, and the angle between the two normals less 180 degrees (0 = parallel walls).
        facing_like: True where the wall opposite is of like kind, depth, load and length.
        supports: Tuple per station of indices into `FoundPit.rows` for the rows whose tributary width covers it.
        surcharge: Largest area pressure that bears on the station, kPa.
        load_ids: Tuple per station of the loads that bear on it.
    """

    pit: str
    closed: bool
    chainage: Floats
    xy: Floats
    normal: Floats
    side: Ints
    side_length: Floats
    to_start: Floats
    to_end: Floats
    angle_start: Floats
    angle_end: Floats
    radius: Floats
    ring: bool
    ground: Floats
    floor: Floats
    top: Floats
    toe: Floats
    run: Ints
    zone: Ints
    jointed: Bools
    monolithic: Bools
    rows: Bools
    beam: Bools
    facing: Floats
    facing_chainage: Floats
    facing_skew: Floats
    facing_like: Bools
    supports: tuple[tuple[int, ...], ...]
    surcharge: Floats
    load_ids: tuple[tuple[str, ...], ...]

    @property
    def depth(self) -> Floats:
        """Excavated depth He at the wall, m; nan where a level is missing."""
        return self.ground - self.floor

    @property
    def to_corner(self) -> Floats:
        """Distance to the nearer corner of the side, m; inf where there is none."""
        return np.minimum(self.to_start, self.to_end)


@dataclass(frozen=True, kw_only=True)
class Bands:
    """Criteria bands at stations: arrays (k criteria, n stations, o outputs); nan where not assessed."""

    chainage: Floats
    low: Floats
    high: Floats
    assessed: Bools
    criteria: tuple[str, ...]
    outputs: tuple[str, ...]


@dataclass(frozen=True, kw_only=True)
class CriterionResult:
    """What one criterion says along one perimeter, arrays (n stations, o outputs).

    `low`, `high` are nan where `assessed` is False; `sentence` says, per station, why it could not be assessed or,
    where it could, the plain sentence. `inputs` are arrays of length n that go into the record.

    Attributes:
        gate: True where the criterion says that no 2D section may be trusted at all.
        missing: True where what the criterion looks at is there and bears on the output, but could not be evaluated
            in full: no relief may be claimed there. None: nowhere.
        own_margin: The band holds its own margin of error.
        by_class_only: The band comes from the class of wall and place alone, so it can never be `holds`.
        cross_check: The band widens that of another criterion of its mechanism and never stands alone.
        recalled: A constant in it is quoted from memory, so a verdict on it is provisional.
        carries: Further mechanisms that the same computation contains.
        settled_by: What would narrow the band or close the gap, in words that fit behind "settled by".
        speaks_of: Outputs it can speak of at all.
        silence: Why it does not speak of an output where it speaks of others, by output.
    """

    code: str
    mechanism: Mechanism
    basis: str
    reference: str
    low: Floats
    high: Floats
    assessed: Bools
    gate: Bools
    sentence: Sequence[str]
    inputs: dict[str, Floats] = field(default_factory=dict)
    own_margin: bool = False
    by_class_only: bool = False
    missing: Bools | None = None
    cross_check: bool = False
    recalled: bool = False
    carries: tuple[Mechanism, ...] = ()
    settled_by: str = ""
    speaks_of: tuple[str, ...] = ()
    silence: dict[str, str] = field(default_factory=dict)
    stages: tuple[tuple[str, ...], Ints] | None = None
    """Stages by name, and which of them governs the real demand, (n, o) indices; -1 where not known."""


@dataclass(frozen=True, kw_only=True)
class PitShape:
    """The perimeter of one pit as found, local coordinates, before it is written in world metres.

    Attributes:
        id: "P1", "P2" ... by chainage start from south to north, then west to east.
        closed: False for an open perimeter.
        axis: (m, 2) wall axis, counter-clockwise, excavated side on the left, arcs chorded at 5 mm sagitta; the first
            vertex is where chainage starts and is not repeated at the end of a closed perimeter.
        at: (m,) chainage of each vertex.
        length: Length of the axis, m.
        arcs, corners, runs, circle, circles: As in `Pit`, but local coordinates.
        piles: Per run, the indices into `Site.piles` in order of chainage (empty for walls that are not piles).
        enclosing: Ids of pits this one lies in (rings within rings).
    """

    id: str
    closed: bool
    axis: Floats
    at: Floats
    length: float
    arcs: tuple[Arc, ...]
    corners: tuple[Corner, ...]
    runs: tuple[Run, ...]
    circle: Circle | None
    circles: tuple[CirclePart, ...]
    piles: tuple[tuple[int, ...], ...] = ()
    enclosing: tuple[str, ...] = ()


@dataclass(frozen=True, kw_only=True)
class SupportRow:
    """A row of like supports as one pit sees it.

    Attributes:
        member: The row as the proposal lists it.
        supports: (k,) indices into `Site.supports`, duplicates left out, in order of chainage of the head.
        head_at, far_at: (k,) chainage where head and far end meet this pit's wall; nan where they do not.
        tributary_head, tributary_far: (k,) wall length each one stands for at either end, m; nan where none.
        waler: True when a waler carries the row, None when not known.
        turned: (k,) True where the row's head is the `far` of the site's support (a strut drawn the other way round).
    """

    member: Member
    supports: tuple[int, ...]
    head_at: Floats
    far_at: Floats
    tributary_head: Floats
    tributary_far: Floats
    waler: bool | None
    turned: Bools | None = None


@dataclass(frozen=True, kw_only=True)
class FoundPit:
    """Everything found about one pit: the record, its shape and stations in local coordinates, its support rows.

    `loads` says which of `Site.loads` each id of `Pit.loads` is.
    """

    pit: Pit
    shape: PitShape
    stations: Stations
    rows: tuple[SupportRow, ...]
    findings: tuple[Finding, ...] = ()
    questions: tuple[Question, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    loads: dict[str, int] = field(default_factory=dict)
