"""The main job in one call: pits found, judged, cuts chosen, sections defined."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import TypeVar

import numpy as np

from ingest.model import Site
from ingest.trail import Assumption, Finding, NotAssessed, Question
from sections.criteria.screening import variants_of
from sections.definition import SectionDefinition, SupportLoss
from sections.found import FoundPit
from sections.model import Floats
from sections.perimeter.perimeter import find_shapes
from sections.pit.find import find_pits
from sections.proposal import ChosenSection, Proposal, ProposalFrame, SectionWall, StationTable
from sections.screening.losses import find_losses
from sections.screening.scene import make_scene
from sections.section.cut import Cut
from sections.section.define import Judged, define_section, wall_names
from sections.verdicts.candidates import cut_of
from sections.verdicts.choice import Choice, Chosen, choose
from sections.verdicts.judged import JudgedPit, judge_stations
from sections.verdicts.severity import find_severity, severity_at
from sections.verdicts.verdict import worst_first

Tell = Callable[[str, int, int], None]
Row = TypeVar("Row", Assumption, Finding, Question)


def _silent(stage: str, done: int, total: int) -> None:
    """Say nothing."""


def propose(site: Site, progress: Tell = _silent) -> tuple[Proposal, tuple[SectionDefinition, ...]]:
    """Propose the sections of a site.

    Args:
        site: As `read_site` gives it.
        progress: Called with stage, done, total.

    Returns:
        The proposal and one definition per chosen section, in the same order. Without a pit both are empty of sections
        and the findings say why.
    """
    progress("find the perimeter", 0, 4)
    founds = find_pits(site)
    progress("judge every metre", 1, 4)
    plane = tuple(judge_stations(site, found) for found in founds)
    rings = {i: judge_stations(site, found, axisymmetric=True) for i, found in enumerate(founds) if found.stations.ring}
    progress("choose the cuts", 2, 4)
    choice = choose(site, plane, rings=rings) if founds else None
    losses = [_losses(site, found) for found in founds]
    severity = [find_severity(site, found) for found in founds]
    rows: list[ChosenSection] = []
    definitions: list[SectionDefinition] = []
    for number, one in enumerate(choice.chosen if choice else (), start=1):
        progress("define sections", number, len(choice.chosen if choice else ()))
        judged = rings[one.candidate.pit] if one.candidate.kind == "axisymmetric" else plane[one.candidate.pit]
        pit = one.candidate.pit
        row, definition = define_chosen(site, founds, judged, one, f"S{number}", losses[pit], severity[pit])
        rows.append(row)
        definitions.append(definition)
    round_ = {one.candidate.pit for one in choice.chosen if one.candidate.kind == "axisymmetric"} if choice else set()
    shown = [rings[i] if i in round_ else one for i, one in enumerate(plane)]
    return _assemble(site, founds, shown, choice, rows, definitions), tuple(definitions)


def _assemble(
    site: Site,
    founds: Sequence[FoundPit],
    plane: Sequence[JudgedPit],
    choice: Choice | None,
    rows: Sequence[ChosenSection],
    definitions: Sequence[SectionDefinition],
) -> Proposal:
    """Put the proposal together, each finding, question and assumption once."""
    assumptions = (
        *_dry(site, founds),
        *site.assumptions,
        *(a for found in founds for a in found.assumptions),
        *(a for one in definitions for a in one.assumptions),
    )
    findings = (
        *site.findings,
        *(() if founds else find_shapes(site)[1]),
        *(f for found in founds for f in found.findings),
        *(f for one in definitions for f in one.findings),
    )
    return Proposal(
        limits=site.limits,
        frame=ProposalFrame(offset=site.frame.offset, rotation_deg=site.frame.rotation_deg, crs=site.frame.crs),
        pits=tuple(found.pit for found in founds),
        sections=tuple(rows),
        unrepresented=choice.unrepresented if choice else (),
        stations={one.found.pit.id: _table(one, choice, i) for i, one in enumerate(plane)},
        ledger=site.ledger,
        questions=_by_id((*site.questions, *(q for found in founds for q in found.questions))),
        assumptions=_by_id(assumptions),
        findings=_by_id(findings),
        not_assessed=_not_assessed(site, choice),
    )


def _dry(site: Site, founds: Sequence[FoundPit]) -> tuple[Assumption, ...]:
    """Water outside that nobody told of is an assumption to sign, wherever a wall retains."""
    if site.water_retained is not None or not founds or any(hole.water is not None for hole in site.boreholes):
        return ()
    return (
        Assumption(
            id="water-outside",
            code="water-outside",
            about="the water outside",
            text="No water stands behind the wall: neither its pressure nor flow under the toe is in any section",
            basis="[levels] water_retained is not given and no borehole tells of water",
        ),
    )


def define_chosen(
    site: Site,
    founds: Sequence[FoundPit],
    judged: JudgedPit,
    chosen: Chosen,
    name: str,
    losses: tuple[SupportLoss, ...],
    severity: Mapping[str, Floats],
) -> tuple[ChosenSection, SectionDefinition]:
    """Define one chosen cut and list it as the proposal does."""
    cut = cut_of(chosen.candidate, founds)
    walls = _walls(cut, judged)
    scores = [judged.score_at(wall.station) for wall in cut.walls]
    score = None if any(value is None for value in scores) else min(value for value in scores if value is not None)
    verdicts = worst_first(wall.verdicts for wall in walls)
    stands_for = sum(_length(judged.found, stretch.start, stretch.to) for stretch in chosen.represents)
    definition = define_section(
        site,
        cut,
        Judged(
            id=name,
            walls=walls,
            criteria=tuple(
                row
                for met, wall in zip(cut.walls, walls, strict=True)
                for row in judged.rows_at(met.station, wall.member)
            ),
            verdicts=verdicts,
            represents=chosen.represents,
            score=score,
            losses=losses,
            stands_for=stands_for or None,
        ),
    )
    row = ChosenSection(
        id=name,
        file=f"sections/{name}.json",
        kind=chosen.candidate.kind,
        line=definition.line,
        score=score,
        severity=severity_at(severity, cut.walls[0].station),
        walls=walls,
        verdicts=verdicts,
        represents=chosen.represents,
    )
    return row, definition


def _walls(cut: Cut, judged: JudgedPit) -> tuple[SectionWall, ...]:
    members = wall_names(cut)
    return tuple(
        SectionWall(
            pit=judged.found.pit.id,
            at=wall.at,
            side=wall.side,  # type: ignore[arg-type]
            member=members[wall.side],
            verdicts=judged.verdicts_at(wall.station),
        )
        for wall in cut.walls
    )


def _losses(site: Site, found: FoundPit) -> tuple[SupportLoss, ...]:
    scene, _ = make_scene(site, found)
    return () if scene is None else find_losses(scene, variants_of(scene)[0])


def _length(found: FoundPit, start: float, to: float) -> float:
    return to - start if to >= start else to - start + found.shape.length


def _table(judged: JudgedPit, choice: Choice | None, pit: int) -> StationTable:
    stations = judged.found.stations
    owner = choice.section[pit] if choice else np.full(len(stations.chainage), -1)
    return StationTable(
        chainage=tuple(float(value) for value in stations.chainage),
        floor=_listed(stations.floor),
        retained=_listed(stations.ground),
        section=tuple(f"S{index + 1}" if index >= 0 else None for index in owner.tolist()),
        outputs=judged.station_outputs(),
    )


def _listed(values: Floats) -> tuple[float | None, ...]:
    return tuple(None if np.isnan(value) else float(value) for value in values)


def _by_id(rows: Sequence[Row]) -> tuple[Row, ...]:
    """Rows once each; different rows under one id get numbers, so that no section's row hides another's."""
    seen: dict[str, Row] = {}
    for row in rows:
        name, number = row.id or f"note-{len(seen) + 1}", 1
        while (key := name if number == 1 else f"{name}-{number}") in seen and seen[key] != replace(row, id=key):
            number += 1
        seen.setdefault(key, replace(row, id=key))
    return tuple(seen.values())


def _not_assessed(site: Site, choice: Choice | None) -> tuple[NotAssessed, ...]:
    rows = [
        NotAssessed(
            what="installation, dewatering, overall stability, services, obstructions, neighbouring works",
            why="no criterion of this tool looks at them",
            what_to_do="check them apart from these sections",
        )
    ]
    if choice and choice.gap > 0:
        rows.append(
            NotAssessed(
                what="whether fewer sections would do",
                why=f"the integer programme was stopped with a gap of {choice.gap:.1%}",
                what_to_do="run again, or pin the sections wanted",
            )
        )
    return (*site.not_assessed, *rows)
