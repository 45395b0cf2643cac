"""Loads of an axisymmetric section: each becomes a ring of load round the pit, with the runs that bound it."""

from __future__ import annotations

import numpy as np

from ingest.members import Load
from ingest.model import Site
from ingest.trail import Finding
from sections.definition import Implied, LoadValue, SectionLoad
from sections.member import Curve
from sections.section.cut import Cut, CutWall
from sections.section.implied import grade
from sections.section.loads import UNITS, loads_at
from sections.smearing.hand_over import HandedOver
from sections.smearing.hand_over_ring import (
    hand_over_ring_footing,
    hand_over_ring_line,
    hand_over_ring_point,
    ring_over_footing,
)

Made = tuple[tuple[SectionLoad, ...], tuple[Implied, ...], tuple[Finding, ...]]


def ring_loads(site: Site, cut: Cut, wall: CutWall) -> Made:
    """Make the loads of an axisymmetric section, and say which could not be made.

    Args:
        site: The real loads.
        cut: From the axis of the ring outwards, through the load.
        wall: The wall it meets.
    """
    rows: list[SectionLoad] = []
    implied: list[Implied] = []
    findings: list[Finding] = []
    for name, load, _ in loads_at(site, cut):
        r = float(np.mean(np.hypot(*(np.asarray(load.points, float) - cut.start).T)))
        y = cut.y_of(load.points)
        along = float(np.ptp(y))
        handed, problem = _hand_over(name, load, r, along, cut)
        if problem:
            text = f"{problem}: it is not in this section"
            findings.append(
                Finding(id=f"{name}-load", code="load_not_assessed", severity="check", where=name, text=text)
            )
        rows.append(_load(name, load, cut, wall, handed, r))
        if handed is not None and load.value is not None:
            implied.append(_implied(name, load.value, r, along or 1.0))  # a point load stands on every metre
    return tuple(rows), tuple(implied), tuple(findings)


def _hand_over(name: str, load: Load, r: float, along: float, cut: Cut) -> tuple[HandedOver | None, str]:
    """Choose the rule by the load's shape; words where there is none."""
    if load.value is None:
        return None, f"value of load {name} is not given"
    if r <= 0:
        return None, f"load {name} stands on the axis"
    if load.kind == "point":
        return hand_over_ring_point(load.value, r=r), ""
    if load.kind == "line":
        if np.ptp(cut.x_of(load.points)) > along:
            return None, f"line load {name} runs out from the ring: no ring of load has its effect"
        return hand_over_ring_line(load.value, r=r, L=along), ""
    return hand_over_ring_footing(load.value, r=r, L=along), ""


def _load(name: str, load: Load, cut: Cut, wall: CutWall, handed: HandedOver | None, r: float) -> SectionLoad:
    level = load.level if load.level is not None else wall.level["ground"] or 0.0
    inner, outer = float(np.min(cut.x_of(load.points))), float(np.max(cut.x_of(load.points)))
    unit = handed.section.unit if handed else UNITS[load.kind]
    at: Curve = ((r, level),) if unit in ("kN", "kN/m") else ((inner, level), (outer, level))
    return SectionLoad(
        id=name,
        kind=load.kind,
        direction="down",
        at=at,
        real=LoadValue(value=load.value, unit=UNITS[load.kind]),
        section=handed.section if handed else LoadValue(value=None, unit=unit),
        alternatives=handed.alternatives if handed else (),
        sources=load.sources,
    )


def _implied(name: str, value: float, r: float, length: float) -> Implied:
    ratio = ring_over_footing(r, length)
    return Implied(
        about=name,
        quantity="load",
        real=value * length,
        implied=value * length * ratio,
        ratio=ratio,
        grade=grade(ratio),  # type: ignore[arg-type]
        do_in_inputs=f"the load becomes a ring 2 pi {r:.2f} m long: run the full ring and the mean or nothing",
        read_outputs="sway and ovalling from one side are in neither run; bound them apart",
    )
