"""The paper trail every room writes in: where a fact came from, what was assumed, what was found, what is asked."""

from __future__ import annotations

from typing import Literal

from ingest.record import record

How = Literal["read", "derived", "assumed"]
Severity = Literal["stop", "check", "note"]


@record
class Source:
    """One entity of one file: GlobalId, DXF handle, hole id or brief key, and how the fact was taken from it."""

    file: str
    item: str
    how: How = "read"


@record
class Assumption:
    """Something the tool took as so. It stays `open` until a person confirms it in the brief."""

    id: str
    code: str
    about: str
    text: str
    basis: str
    sources: tuple[Source, ...] = ()
    confirm_by: str = "engineer"
    status: Literal["open", "confirmed"] = "open"


@record
class Finding:
    """What a check saw. `stop` ends the run, `check` wants a look, `note` is for the record."""

    id: str
    code: str
    severity: Severity
    where: str
    text: str
    sources: tuple[Source, ...] = ()


@record
class Reading:
    """One way of reading a doubtful fact, with what speaks for it. Confidence runs from 0 to 1."""

    reading: str
    evidence: str
    confidence: float


@record
class Question:
    """A doubt only the engineer can settle, and the line of the brief that settles it."""

    id: str
    about: str
    readings: tuple[Reading, ...]
    brief_line: str


@record
class NotAssessed:
    """Something the tool did not look at, why, and what would close the gap."""

    what: str
    why: str
    what_to_do: str


@record
class LedgerEntry:
    """The account of one file: entities = used + context + ignored, always."""

    entities: int
    used: int
    context: int
    ignored: int
    roles: dict[str, int]
    reasons: dict[str, int]
    losses: tuple[str, ...] = ()
