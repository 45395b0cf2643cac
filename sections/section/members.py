"""Analysis results per metre or per radian, turned back into the force of each real member."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from difflib import get_close_matches
from math import isfinite
from typing import TypeVar

from ingest.errors import InputError
from ingest.model import ResultRow
from ingest.record import record
from sections.definition import SectionDefinition
from sections.member import Back, SectionMember
from sections.proposal import Verdict

T = TypeVar("T")
SUPPORTS = ("strut", "corner_strut", "raker", "anchor", "slab")


@record
class MemberForce:
    """One result taken back: `value` in `unit` on one real member, what it gives, and how far to trust it.

    `ratio_low`, `ratio_high`: band of the real demand over the section's, None where not assessed.
    """

    row: ResultRow
    factor: float
    value: float
    unit: str
    gives: str
    ratio_low: float | None
    ratio_high: float | None
    verdict: str
    caution: str


@record
class Governing:
    """The largest value of one kind on one member over sections and stages; `sign` is that of the value."""

    member: str
    gives: str
    sign: str
    value: float
    unit: str
    section: str
    stage: str
    ratio_low: float | None
    ratio_high: float | None
    verdict: str


def member_actions(definitions: Iterable[SectionDefinition], results: Iterable[ResultRow]) -> tuple[MemberForce, ...]:
    """Turn results of sections back into member forces.

    Args:
        definitions: Sections the results belong to.
        results: Rows in the units the section's `back` rows name (kN/m, kNm/m, kN/rad ...).

    Returns:
        For every row its own conversion, followed by what the same value gives besides (thrust along the waler ...).

    Raises:
        InputError: Unknown section, stage, member, quantity or unit, with the line of the row.
    """
    by_id: dict[str, SectionDefinition] = {}
    for definition in definitions:
        if by_id.setdefault(definition.id, definition) != definition:
            remedy = "name the section files of one run only"
            raise InputError("", f"section {definition.id}", "two different section files bear this id", remedy)
    forces: list[MemberForce] = []
    for row in results:
        definition = _named(row, "section", row.section, by_id)
        _named(row, "stage", row.stage, {stage.id: stage for stage in definition.stages})
        member = _named(row, "member", row.member, {member.id: member for member in definition.members})
        back = _way_back(row, member)
        verdict = _verdict(row, definition, member)
        forces.append(_force(row, back.factor, back.unit, back.gives, verdict, back.valid_if))
        forces += [_force(row, also.factor, back.unit, also.gives, verdict, back.valid_if) for also in back.also]
    return tuple(forces)


def find_governing(forces: Iterable[MemberForce]) -> tuple[Governing, ...]:
    """Return the largest value of each sign, by member and kind, over sections and stages."""
    worst: dict[tuple[str, str, str], MemberForce] = {}
    for force in forces:
        key = (force.row.member, force.gives, "+" if force.value >= 0 else "-")
        if key not in worst or abs(force.value) > abs(worst[key].value):
            worst[key] = force
    return tuple(
        Governing(
            member=member,
            gives=gives,
            sign=sign,
            value=force.value,
            unit=force.unit,
            section=force.row.section,
            stage=force.row.stage,
            ratio_low=force.ratio_low,
            ratio_high=force.ratio_high,
            verdict=force.verdict,
        )
        for (member, gives, sign), force in sorted(worst.items())
    )


def _named(row: ResultRow, what: str, name: str, known: Mapping[str, T]) -> T:
    if name in known:
        return known[name]
    near = get_close_matches(name, known, n=1)
    hint = f"; did you mean {near[0]!r}?" if near else f"; known are {', '.join(sorted(known))}"
    raise InputError("", f"line {row.line}", f"unknown {what} {name!r}{hint}", f"name a {what} of the section file")


def _way_back(row: ResultRow, member: SectionMember) -> Back:
    same = [back for back in member.back if back.quantity == row.quantity]
    if not same:
        known = ", ".join(sorted({back.quantity for back in member.back})) or "none"
        raise InputError(
            "",
            f"line {row.line}",
            f"quantity {row.quantity} of {member.id} has no way back",
            f"this member takes back: {known}",
        )
    for back in same:
        if back.from_unit == row.unit:
            return back
    units = ", ".join(back.from_unit for back in same)
    raise InputError(
        "", f"line {row.line}", f"unit {row.unit!r} does not fit {row.quantity} of {member.id}", f"give it in {units}"
    )


def _output(row: ResultRow, member: SectionMember) -> str | None:
    """The output of the verdict table a result belongs to; None for quantities that carry no ratio."""
    if row.quantity == "M" and member.role == "wall":
        return "wall_moment_excavated_face" if row.value >= 0 else "wall_moment_retained_face"
    if row.quantity == "N" and member.role in SUPPORTS:
        return "support_force"
    return {"hoop": "hoop_force", "settlement": "settlement"}.get(row.quantity)


def _verdict(row: ResultRow, definition: SectionDefinition, member: SectionMember) -> Verdict | None:
    output = _output(row, member)
    if output is None:
        return None
    for wall in definition.walls:
        if wall.member == member.id:
            return wall.verdicts.get(output)
    return definition.verdicts.get(output)


def _force(row: ResultRow, factor: float, unit: str, gives: str, verdict: Verdict | None, valid_if: str) -> MemberForce:
    if verdict is None:
        word, caution = "not_assessed", "no ratio of real to 2D demand is worked out for this quantity"
    else:
        word, caution = verdict.verdict, verdict.sentence
    value = row.value * factor
    if not isfinite(value):
        problem = f"value {row.value:g} {row.unit} times factor {factor:g} is too large for a number"
        raise InputError("", f"line {row.line}", problem, "check the value and the section file")
    return MemberForce(
        row=row,
        factor=factor,
        value=value,
        unit=unit,
        gives=gives,
        ratio_low=verdict.low if verdict else None,
        ratio_high=verdict.high if verdict else None,
        verdict=word,
        caution="; ".join(part for part in (caution, f"valid if {valid_if}" if valid_if else "") if part),
    )
