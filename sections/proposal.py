"""What is proposed: verdicts, chosen sections, what they stand for, and the whole as `proposal.json` holds it."""

from __future__ import annotations

from typing import Literal

from ingest.members import Point, Point3
from ingest.model import Limits
from ingest.record import record
from ingest.trail import Assumption, Finding, LedgerEntry, NotAssessed, Question
from sections.model import From, Mechanism, Pit

VerdictWord = Literal["not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds"]


WORST_FIRST: tuple[VerdictWord, ...] = (
    "not_two_dimensional", "under_states", "undecided", "not_assessed", "over_states", "holds",
)  # fmt: skip


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
