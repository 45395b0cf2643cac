"""Every entity of every file accounted for: used for what, context, or ignored and why."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

from ingest.notes import Notes
from ingest.parts import FileParts
from ingest.roles import RoleGiven
from ingest.trail import LedgerEntry

BORED = ("borehole", "stratum of a borehole")
"""What the IFC reader counts as context because it became a borehole."""
APART = ("superstructure", "wall of the building")
"""Reasons the ledger gives by name."""


def make_ledger(files: Sequence[FileParts], given: Sequence[RoleGiven], notes: Notes) -> dict[str, LedgerEntry]:
    """Close the books of all files.

    Args:
        files: The files as read.
        given: One role per part, in the order of the files' parts.
        notes: Knows the parts that gave no record, and why.

    Returns:
        One entry per file.

    Raises:
        RuntimeError: When the counts of a file do not add up; that is a fault of the tool.
    """
    by_file: dict[str, list[RoleGiven]] = {file.file: [] for file in files}
    for item in given:
        by_file[item.part.source.file].append(item)
    return {file.file: _entry(file, by_file[file.file], notes) for file in files}


def _entry(file: FileParts, given: Sequence[RoleGiven], notes: Notes) -> LedgerEntry:
    fate: dict[str, tuple[int, str, str]] = {}
    for item in given:
        now = _fate(item, notes)
        key = item.part.source.item
        if key not in fate or now < fate[key]:
            fate[key] = now
    kinds = Counter(kind for kind, _, _ in fate.values())
    roles = Counter(role for _, role, _ in fate.values() if role)
    reasons = Counter(reason for _, _, reason in fate.values() if reason)
    reasons.update(file.context)
    reasons.update(file.ignored)
    bored = sum(file.context.get(reason, 0) for reason in BORED)  # boreholes come as records, not as parts
    if bored:
        roles["stratum"] += bored
    reasons.update({reason: -count for reason, count in file.context.items() if reason in BORED})
    entry = LedgerEntry(
        entities=file.entities,
        used=kinds[0] + bored,
        context=kinds[1] + sum(file.context.values()) - bored,
        ignored=kinds[2] + sum(file.ignored.values()),
        roles=dict(sorted(roles.items())),
        reasons={reason: count for reason, count in sorted(reasons.items()) if count > 0},
        losses=file.losses,
    )
    if entry.entities != entry.used + entry.context + entry.ignored:
        counts = f"{entry.used} used + {entry.context} context + {entry.ignored} ignored"
        raise RuntimeError(f"the ledger of {file.file} does not add up: {entry.entities} entities, {counts}")
    return entry


def _fate(item: RoleGiven, notes: Notes) -> tuple[int, str, str]:
    """Used (0), context (1) or ignored (2), the role, the reason; an entity has the best fate of its parts."""
    refusal = notes.refused.get(id(item.part))
    if refusal is not None:
        return 2, "", refusal
    if item.role == "ignore":
        return 2, "", item.evidence.why
    if item.role == "context" or (item.role == "level" and id(item.part) not in notes.used_texts):
        return 1, "", "text that names no member" if item.role == "level" else _short(item)
    return 0, item.role, ""


def _short(item: RoleGiven) -> str:
    why = item.evidence.why
    if why.startswith("brief"):
        return "the brief says context"
    return why.partition(":")[0] if why.startswith(APART) else "no role"
