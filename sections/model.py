"""The proposal: pits, zones, stations, bands, verdicts and the sections chosen, as `proposal.json` holds them.

Plan coordinates of these records are world metres. Chainage runs counter-clockwise with the excavated side on the left.
The definition of one section is in `sections.definition`.
"""

from __future__ import annotations

from typing import Annotated, Literal

import numpy as np
from numpy.typing import NDArray
from pydantic import Field

from ingest.members import Point, Role, WallKind
from ingest.record import record
from ingest.trail import Source

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

From = Annotated[float, Field(alias="from")]
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
