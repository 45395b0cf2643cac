"""Construction stages of a section: the brief's own, or a template that says it is assumed."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ingest.model import Site, Stage
from ingest.trail import Assumption, Finding
from sections.definition import SectionStage, Water
from sections.member import Curve
from sections.section.cut import Interval

OVER_DIG = 0.5
"""Dig below a support's level before it is installed, m (common practice, no source)."""
AT_END = "after the last stage"
"""Stage of loads that stand on the finished floor and have none of their own."""


@dataclass(frozen=True, kw_only=True)
class Prop:
    """A support as the stages see it: member id, level, preload per metre or radian, and the words that name it."""

    id: str
    level: float
    preload: float | None
    names: frozenset[str]
    parts: tuple[str, ...] = ()
    permanent: bool = False
    """A slab: cast from the bottom up after the last dig unless the brief says otherwise."""


@dataclass(frozen=True, kw_only=True)
class DigProfile:
    """Final dig level along the pit: intervals of x with their level, and the ground level they are dug from."""

    steps: tuple[tuple[Interval, float], ...]
    ground: float

    def outlines(self, above: float, below: float) -> tuple[Curve, ...]:
        """Ground removed between two levels, no deeper than the profile itself."""
        rings = []
        for (x1, x2), floor in self.steps:
            top, base = min(above, self.ground), max(below, floor)
            if top - base > 1e-9 and x2 - x1 > 1e-9:
                rings.append(((x1, base), (x2, base), (x2, top), (x1, top)))
        return tuple(rings)

    @property
    def lowest(self) -> float:
        """Deepest level of the profile."""
        return min(level for _, level in self.steps)


def plan_stages(
    site: Site,
    dig: DigProfile,
    walls: Sequence[str],
    props: Sequence[Prop],
    loads: Mapping[str, str | None],
    water: Sequence[Water],
) -> tuple[tuple[SectionStage, ...], tuple[Assumption, ...], tuple[Finding, ...]]:
    """Lay out the stages of a section.

    Args:
        site: Its `stages` are used as given; without them a bottom-up template is laid out from the levels.
        dig: Final dig profile.
        walls: Wall member ids.
        props: Supports of the section.
        loads: Load ids with the stage of the brief in which each comes on; None from the start, AT_END at the end.
        water: Water lines; those inside the pit take turns at the first dig below the water outside.

    Returns:
        Stages (stage 0 = stress in the ground before work), what was assumed, and what did not fit.
    """
    first = _before_digging(site, dig, walls, loads, water)
    if site.stages:
        stages, findings = _given(site.stages, first, dig, props, {k: v for k, v in loads.items() if v})
        stages = _loaded(_drawn_down(stages, water), loads)
        return stages, (), (*findings, *_untold_water(site, dig, water), *_unknown_stages(site, loads))
    assumption = Assumption(
        id="stages",
        code="stages_by_template",
        about="construction stages",
        text=f"Dug from the top down to {OVER_DIG} m below each support, which is then installed, then to the dig "
        "level; slabs are cast from the bottom up, no support is removed"
        + ("; water inside is drawn down in one step" if any(line.kind == "excavated" for line in water) else ""),
        basis="common practice, no source; sequence not given",
    )
    findings = (*_untold_sequence(site), *_untold_water(site, dig, water), *_unknown_stages(site, loads))
    return _loaded(_drawn_down(_template(first, dig, props), water), loads), (assumption,), findings


def _loaded(stages: tuple[SectionStage, ...], loads: Mapping[str, str | None]) -> tuple[SectionStage, ...]:
    """Add the stage in which the loads inside the pit come on."""
    late = tuple(load for load, stage in loads.items() if stage == AT_END)
    if not late:
        return stages
    order = len(stages)
    text = "loads inside the pit come on"
    return (*stages, SectionStage(id=f"T{order}", order=order, text=text, level=stages[-1].level, loads_on=late))


def _unknown_stages(site: Site, loads: Mapping[str, str | None]) -> tuple[Finding, ...]:
    known = {None, AT_END, *(stage.name for stage in site.stages)}
    return tuple(
        Finding(
            id=f"stage-{load}",
            code="load_never_on",
            severity="check",
            where=load,
            text=f"Load {load} comes on in stage {stage!r}, which the brief does not have: it is never on",
        )
        for load, stage in loads.items()
        if stage not in known
    )


def _drawn_down(stages: tuple[SectionStage, ...], water: Sequence[Water]) -> tuple[SectionStage, ...]:
    """Put the water of the dug pit into the first stage that digs below the water outside."""
    outside = [level for line in water if line.kind == "retained" for _, level in line.line]
    dug = tuple(line.id for line in water if not line.before_work)
    if not any(line.kind == "excavated" for line in water):
        return stages
    level = max(outside, default=float("inf"))
    first = next((k for k, stage in enumerate(stages) if stage.dig and (stage.level or 0.0) < level), None)
    return tuple(replace(stage, water=dug) if k == first else stage for k, stage in enumerate(stages))


def _untold_water(site: Site, dig: DigProfile, water: Sequence[Water]) -> tuple[Finding, ...]:
    """What the brief says of water that no stage carries, and what it does not say."""
    found = []
    outside = max((level for line in water if line.kind == "retained" for _, level in line.line), default=-float("inf"))
    if outside > dig.lowest and not any(line.kind == "excavated" for line in water):
        text = (
            f"The dig goes to {dig.lowest:.2f}, below the water outside at {outside:.2f}; the water inside is not given"
        )
        found.append(("stage-water-inside", "water_inside_missing", text))
    told = [stage.name for stage in site.stages if stage.water is not None]
    if told:
        text = f"The water levels of the stages {', '.join(told)} are not laid out; one level inside holds for all"
        found.append(("stage-water", "stage_water_not_laid_out", text))
    return tuple(Finding(id=name, code=code, severity="check", where="stages", text=text) for name, code, text in found)


def _before_digging(
    site: Site, dig: DigProfile, walls: Sequence[str], loads: Mapping[str, str | None], water: Sequence[Water]
) -> tuple[SectionStage, ...]:
    """Stress in the ground, then the wall."""
    from_start = tuple(load for load, stage in loads.items() if stage is None)
    return (
        SectionStage(
            id="T0",
            order=0,
            text="stress in the ground before work",
            level=dig.ground,
            loads_on=from_start,
            water=tuple(line.id for line in water if line.kind == "retained"),
            assumed=False,
        ),
        SectionStage(
            id="T1", order=1, text="wall installed", level=dig.ground, install=(*walls,), assumed=not site.stages
        ),
    )


def _template(first: tuple[SectionStage, ...], dig: DigProfile, props: Sequence[Prop]) -> tuple[SectionStage, ...]:
    stages, above = list(first), dig.ground
    for level in sorted({prop.level for prop in props if not prop.permanent}, reverse=True):
        here = [prop for prop in props if prop.level == level and not prop.permanent]
        below = min(above, max(level - OVER_DIG, dig.lowest))
        stages.append(_dig_stage(len(stages), f"dig to {below:.2f}", dig, above, below))
        stages.append(_install_stage(len(stages), "install", below, here))
        above = below
    if above - dig.lowest > 1e-9:
        stages.append(_dig_stage(len(stages), f"dig to {dig.lowest:.2f}", dig, above, dig.lowest))
    for level in sorted({prop.level for prop in props if prop.permanent}):
        here = [prop for prop in props if prop.level == level and prop.permanent]
        stages.append(_install_stage(len(stages), "cast", dig.lowest, here))
    return tuple(stages)


def _dig_stage(order: int, text: str, dig: DigProfile, above: float, below: float) -> SectionStage:
    return SectionStage(id=f"T{order}", order=order, text=text, level=below, dig=dig.outlines(above, below))


def _install_stage(order: int, verb: str, level: float, props: Sequence[Prop]) -> SectionStage:
    return SectionStage(
        id=f"T{order}",
        order=order,
        text=f"{verb} {', '.join(prop.id for prop in props)}",
        level=level,
        install=tuple(part for prop in props for part in (prop.id, *prop.parts)),
        preload={prop.id: prop.preload for prop in props if prop.preload is not None},
    )


def _given(
    brief: Sequence[Stage],
    first: tuple[SectionStage, ...],
    dig: DigProfile,
    props: Sequence[Prop],
    loads: Mapping[str, str],
) -> tuple[tuple[SectionStage, ...], tuple[Finding, ...]]:
    stages, above, findings = list(first), dig.ground, []
    installed: set[str] = set()
    for given in brief:
        order = len(stages)
        put = _named(props, given.install)
        out = _named(props, given.remove)
        below = above if given.dig_to is None else given.dig_to
        stages.append(
            SectionStage(
                id=f"T{order}",
                order=order,
                text=given.name,
                level=below,
                dig=dig.outlines(above, below),
                install=tuple(part for prop in put for part in (prop.id, *prop.parts)),
                remove=tuple(part for prop in out for part in (prop.id, *prop.parts)),
                preload={prop.id: prop.preload for prop in put if prop.preload is not None},
                loads_on=tuple(load for load, stage in loads.items() if stage == given.name),
                drainage=given.drainage,
                assumed=False,
            )
        )
        installed |= {prop.id for prop in put}
        above = min(above, below)
    findings += _gaps_in_sequence(props, installed, above, dig)
    return tuple(stages), tuple(findings)


def _named(props: Sequence[Prop], names: Sequence[str]) -> list[Prop]:
    return [prop for prop in props if any(name == prop.id or name in prop.names for name in names)]


def _gaps_in_sequence(props: Sequence[Prop], installed: set[str], reached: float, dig: DigProfile) -> list[Finding]:
    findings = [
        Finding(
            id=f"stage-{prop.id}",
            code="never_installed",
            severity="check",
            where=prop.id,
            text=f"No stage of the brief installs {prop.id} at level {prop.level:.2f}",
        )
        for prop in props
        if prop.id not in installed
    ]
    if reached - dig.lowest > 1e-6:
        findings.append(
            Finding(
                id="stage-dig",
                code="dig_not_reached",
                severity="check",
                where="stages",
                text=f"The stages of the brief stop at {reached:.2f}; the dig level here is {dig.lowest:.2f}",
            )
        )
    return findings


def _untold_sequence(site: Site) -> tuple[Finding, ...]:
    if site.sequence in (None, "bottom_up"):
        return ()
    return (
        Finding(
            id="stage-sequence",
            code="sequence_not_laid_out",
            severity="check",
            where="stages",
            text=f"Sequence {site.sequence!r} has no template: give [[stages]] in the brief; a bottom-up one is shown",
        ),
    )


def dig_profile(interval: Interval, floors: Sequence[tuple[tuple[Interval, ...], float]], ground: float) -> DigProfile:
    """Lay floors over each other along the pit: the deepest one rules where several meet.

    Args:
        interval: The pit along the cut.
        floors: For each floor its stretches of x and its dig level; the first covers the whole pit.
        ground: Level dug from.
    """
    edges = sorted({*interval, *(edge for spans, _ in floors for span in spans for edge in span)})
    edges = [edge for edge in edges if interval[0] <= edge <= interval[1]]
    steps: list[tuple[Interval, float]] = []
    for a, b in zip(edges[:-1], edges[1:], strict=True):
        middle = (a + b) / 2
        levels = [level for spans, level in floors if any(s <= middle <= e for s, e in spans)]
        if levels and b - a > 1e-9:
            level = float(np.min(levels))
            if steps and steps[-1][1] == level:
                steps[-1] = ((steps[-1][0][0], b), level)
            else:
                steps.append(((a, b), level))
    return DigProfile(steps=tuple(steps), ground=ground)
