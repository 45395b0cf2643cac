"""What is stamped on a document: its date and the ids that follow from the inputs, the same at every run."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import UTC, date, datetime
from uuid import UUID, uuid5

from ingest.model import Site

SPACE = UUID("3f0b6f0e-5c1d-5a86-9d0e-2b7d6c1f4a90")
EARLIEST = date(1980, 1, 1)
"""Day of a document where nothing gives one: the first a ZIP archive can hold."""


@dataclass(frozen=True)
class Stamp:
    """The date of the documents of one run, and the space its ids are drawn from."""

    day: date
    space: UUID

    @classmethod
    def of(cls, site: Site) -> Stamp:
        """The stamp of a site: the brief's date, else SOURCE_DATE_EPOCH, else 1980-01-01; ids by the files' hashes."""
        hashes = ",".join(sorted(one.sha256 for one in site.inputs))
        return cls(day=_given_day(site.date) or _epoch_day(os.environ) or EARLIEST, space=uuid5(SPACE, hashes))

    def guid(self, *words: str) -> UUID:
        """The id of a thing named by words."""
        return uuid5(self.space, "\n".join(words))


def _given_day(words: str | None) -> date | None:
    try:
        return date.fromisoformat((words or "")[:10])
    except ValueError:
        return None


def _epoch_day(environment: Mapping[str, str]) -> date | None:
    try:
        return datetime.fromtimestamp(int(environment.get("SOURCE_DATE_EPOCH", "")), UTC).date()
    except (ValueError, OverflowError, OSError):
        return None
