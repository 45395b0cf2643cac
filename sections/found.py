"""What is found about one pit, as arrays along its wall, and what criteria say of it; local coordinates."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from ingest.trail import Assumption, Finding, Question
from sections.model import Arc, Bools, Circle, CirclePart, Corner, Floats, Ints, Mechanism, Member, Pit, Run


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
