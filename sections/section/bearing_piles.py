"""Rows of bearing piles across the cut, drawn as sheets with what the sheet keeps and what it gets wrong."""

from __future__ import annotations

from collections.abc import Sequence
from math import sqrt

import numpy as np

from ingest.members import Pile
from ingest.model import Site
from ingest.trail import Finding
from sections.member import End, PerMetre, RealMember, SectionMember
from sections.model import Floats
from sections.section.cut import Cut
from sections.smearing.bearing_row import check_bearing_row, find_bearing_row
from sections.smearing.support_rows import Smeared
from sections.smearing.wall import circle_area, circle_inertia
from sections.smearing.wall_rows import smear_bearing_row

IN_LINE = 0.3
"""Piles whose places along the cut differ by less than this stand in one row across it, m (judgement)."""
NEAR = 8.0
"""Piles farther from the plane of the cut than this say nothing of it, m (judgement)."""


def bearing_members(site: Site, cut: Cut) -> tuple[tuple[SectionMember, ...], tuple[Finding, ...]]:
    """Make a sheet of each row of like bearing piles that crosses the cut inside the pit.

    Piles that stand alone, or in rows too open to act as a sheet, are left out and reported: springs or nothing.
    """
    piles = _bearing_piles(site, cut)
    x, y = (cut.x_of([p.centre for p in piles]), cut.y_of([p.centre for p in piles])) if piles else ([], [])
    members: list[SectionMember] = []
    findings: list[Finding] = []
    pit = cut.walls[0].found.stations.pit
    for number, row in enumerate(_rows(np.asarray(x), piles), start=1):
        name = f"{pit}-bearing_pile-{number}"
        first = piles[row[0]]
        spacing = None if first.diameter is None else _spacing(np.asarray(y)[row], first.diameter)
        if spacing is None or first.diameter is None:
            findings.append(_alone(name, first))
            continue
        findings += check_bearing_row(first.diameter, spacing, name)
        if find_bearing_row(first.diameter, spacing, first.diameter).treat_as != "springs":
            members.append(_member(site, name, [piles[i] for i in row], float(np.mean(np.asarray(x)[row])), spacing))
            if not members[-1].smear:
                findings.append(_soft(name, first))
    return tuple(members), tuple(findings)


def _bearing_piles(site: Site, cut: Cut) -> list[Pile]:
    inside = cut.pit_interval()
    in_walls = {index for wall in cut.walls for run in wall.found.shape.piles for index in run}
    piles = [p for i, p in enumerate(site.piles) if i not in in_walls and p.bearing is not False]
    if not piles:
        return []
    x, y = cut.x_of([p.centre for p in piles]), cut.y_of([p.centre for p in piles])
    near = (x > inside[0]) & (x < inside[1]) & (np.abs(y) <= NEAR)
    return [piles[i] for i in np.flatnonzero(near)]


def _rows(x: Floats, piles: Sequence[Pile]) -> list[list[int]]:
    """Indices of piles by row: like diameter and toe, places along the cut within IN_LINE of their neighbour."""
    order = sorted(range(len(piles)), key=lambda i: (piles[i].diameter or 0.0, piles[i].toe or 0.0, x[i]))
    rows: list[list[int]] = []
    for i in order:
        last = piles[rows[-1][-1]] if rows else None
        alike = last is not None and last.diameter == piles[i].diameter and last.toe == piles[i].toe
        if alike and x[i] - x[rows[-1][-1]] <= IN_LINE:
            rows[-1].append(i)
        else:
            rows.append([i])
    return sorted(rows, key=lambda row: float(x[row[0]]))


def _spacing(y: Floats, diameter: float) -> float | None:
    """Spacing of a row across the cut, the middle one of its gaps; circles within a diameter are one pile."""
    gaps = np.diff(np.sort(y))
    gaps = gaps[gaps >= diameter - 1e-6]
    return float(np.median(gaps)) if len(gaps) else None


def _alone(name: str, pile: Pile) -> Finding:
    return Finding(
        id=f"{name}-alone",
        code="bearing_pile_not_in_a_row",
        severity="note",
        where=name,
        text="A bearing pile near the cut stands in no row across it: no wall is drawn; use a spring or leave it out",
        sources=pile.sources,
    )


def _soft(name: str, pile: Pile) -> Finding:
    return Finding(
        id=f"{name}-stiffness",
        code="pile_input_missing",
        severity="check",
        where=name,
        text=f"The modulus of {name} is not given: its stiffness is not in the section",
        sources=pile.sources,
    )


def _member(site: Site, name: str, row: Sequence[Pile], x: float, spacing: float) -> SectionMember:
    first = row[0]
    diameter = first.diameter or 0.0
    material = next((m for m in site.materials if m.id == first.material), None)
    thickness = diameter * sqrt(3) / 2
    real = RealMember(diameter=diameter, spacing=spacing, count=len(row))
    smeared = Smeared(real=real, section=PerMetre(thickness=thickness), smear=(), back=())
    if material and material.E:
        area = circle_area(diameter)
        weight = None if material.unit_weight is None else material.unit_weight * area
        real = RealMember(
            EA_kN=material.E * area,
            EI_kNm2=material.E * circle_inertia(diameter),
            weight_kN_per_m=weight,
            diameter=diameter,
            spacing=spacing,
            count=len(row),
            E_kPa=material.E,
        )
        smeared = smear_bearing_row(real, sheet_thickness=thickness)
    points = tuple((x, level) for level in (first.top, first.toe) if level is not None)
    return SectionMember(
        id=name,
        role="bearing_pile",
        side="none",
        material=first.material if material else None,
        form="sheet",
        points=points,
        ends=tuple(End(to="ground", at=point, joint="free") for point in points),
        real=smeared.real,
        section=smeared.section,
        smear=smeared.smear,
        back=smeared.back,
        sources=tuple(source for pile in row for source in pile.sources),
    )
