"""Loads of a section: what is there, what is handed over so that the wall feels the same, and the alternatives."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingest.members import Load
from ingest.model import Site
from ingest.trail import Finding
from sections.definition import LoadValue, SectionLoad
from sections.member import Curve
from sections.section.column_loads import inside_rows, row_load
from sections.section.cut import Cut, CutWall, crossings
from sections.section.stages import AT_END
from sections.smearing.hand_over import (
    HandedOver,
    hand_over_area,
    hand_over_line,
    hand_over_perpendicular_line,
    hand_over_point,
)

UNITS = {"point": "kN", "line": "kN/m", "area": "kPa", "footing": "kPa"}
NEAREST = 0.1
"""A line load that ends nearer to the wall than this has no bounded elastic effect on it, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Seen:
    """A load as one wall sees it: distances behind the wall and along it from the plane of the cut, depths below it."""

    back: tuple[float, float]
    along: tuple[float, float]
    heights: tuple[float, ...]
    """Depth of the dig level and of the toe below the load, those that are known and positive."""


def load_rows(site: Site, cut: Cut, stands_for: float | None) -> tuple[tuple[SectionLoad, ...], tuple[Finding, ...]]:
    """Make the loads of a section: those that bear on its walls there, and those the cut passes through.

    Args:
        site: The loads.
        cut: The cut.
        stands_for: Length of wall the section stands for, m; None when it stands for none.

    Returns:
        Loads and what could not be worked out. A load inside the pit is listed with its drawn value: it has no equal
        effect on the wall to keep.
    """
    made = [row_load(row) for row in inside_rows(site, cut)]
    rows, findings = [row for row, _ in made], [finding for _, finding in made if finding]
    for name, load, wall in loads_at(site, cut):
        row, problem = _row(name, load, wall, cut, stands_for)
        rows.append(row)
        if problem:
            findings.append(
                Finding(
                    id=f"{name}-load",
                    code="load_not_assessed",
                    severity="check",
                    where=name,
                    text=problem,
                    sources=load.sources,
                )
            )
    return tuple(sorted(rows, key=lambda row: row.id)), tuple(findings)


def load_stages(site: Site, cut: Cut) -> dict[str, str | None]:
    """Stage in which each load of the section comes on: None from the start, AT_END for loads inside the pit."""
    inside = inside_rows(site, cut) if cut.kind == "plane_strain" else ()
    stages = {row.id: row.load.stage or AT_END for row in inside}
    return stages | {name: load.stage for name, load, _ in loads_at(site, cut)}


def loads_at(site: Site, cut: Cut) -> list[tuple[str, Load, CutWall]]:
    """Loads of a cut by id, with the wall each is seen from."""
    met: dict[str, tuple[str, Load, CutWall]] = {}
    for wall in cut.walls:
        found = wall.found
        for name in found.stations.load_ids[wall.station]:
            met.setdefault(name, (name, site.loads[found.loads[name]], wall))
        for name, index in found.loads.items():
            load = site.loads[index]
            if len(load.points) > 2 and crossings(cut, load.points):
                met.setdefault(name, (name, load, _nearest_wall(cut, load)))
    return [met[name] for name in sorted(met)]


def _nearest_wall(cut: Cut, load: Load) -> CutWall:
    x = float(np.mean(cut.x_of(load.points)))
    return min(cut.walls, key=lambda wall: abs(wall.x - x))


def see(cut: Cut, wall: CutWall, load: Load) -> Seen:
    """Measure a load from a wall and from the plane of the cut."""
    x, y = cut.x_of(load.points), cut.y_of(load.points)
    back = wall.x - x if wall.side == "left" else x - wall.x
    level = load.level if load.level is not None else wall.level["ground"]
    below = [wall.level["floor"], wall.level["toe"]]
    heights = tuple(level - low for low in below if low is not None and level is not None and level > low)
    spans = crossings(cut, load.points) if len(load.points) > 2 else ()
    if spans:
        edges = np.array([wall.x - v if wall.side == "left" else v - wall.x for span in spans for v in span])
        return Seen(back=_ends(edges), along=_ends(y), heights=heights)
    return Seen(back=_ends(back), along=_ends(y), heights=heights)


def _ends(values: np.ndarray) -> tuple[float, float]:
    return float(np.min(values)), float(np.max(values))


def _row(name: str, load: Load, wall: CutWall, cut: Cut, stands_for: float | None) -> tuple[SectionLoad, str]:
    seen = see(cut, wall, load)
    handed, problem = None, ""
    if load.value is None:
        problem = f"value of load {name} is not given"
    elif seen.back[0] < -1e-6:
        problem = f"load {name} reaches inside the pit or over the wall: its effect on the wall is not assessed"
    elif not seen.heights:
        problem = f"levels below load {name} are not given: its effect on the wall is not assessed"
    else:
        handed, problem = _hand_over(name, load, load.value, seen, stands_for)
    value = handed.section if handed else LoadValue(value=None, unit=UNITS[load.kind])
    row = SectionLoad(
        id=name,
        kind=load.kind,
        direction="down",
        at=_drawn(cut, wall, load, seen, value.unit),
        real=LoadValue(value=load.value, unit=UNITS[load.kind]),
        section=value,
        alternatives=handed.alternatives if handed else (),
        sources=load.sources,
    )
    return row, problem


def _hand_over(
    name: str, load: Load, given: float, seen: Seen, stands_for: float | None
) -> tuple[HandedOver | None, str]:
    """Choose the rule by the load's shape and direction against the wall."""
    near, far = seen.back
    y1, y2 = seen.along
    x = (near + far) / 2
    # a load longer than the wall the section stands for has no more than its own pressure there
    whole = None if stands_for is None else max(stands_for, y2 - y1)
    if load.kind in ("area", "footing"):
        return hand_over_area(
            given, x1=max(near, 0.0), x2=far, b1=y2, b2=-y1, depths=seen.heights, stands_for=whole
        ), ""
    if near < NEAREST:
        return None, f"load {name} stands on the wall: its effect is not assessed"
    if load.kind == "point":
        return hand_over_point(given, x=x, y=(y1 + y2) / 2, depths=seen.heights, stands_for=stands_for), ""
    if far - near > y2 - y1:  # runs towards the wall: an area load in the section
        return hand_over_perpendicular_line(given, x1=near, x2=far, depths=seen.heights, stands_for=stands_for), ""
    return hand_over_line(given, x=x, b1=y2, b2=-y1, depths=seen.heights, stands_for=whole), ""


def _drawn(cut: Cut, wall: CutWall, load: Load, seen: Seen, unit: str) -> Curve:
    """Where the section carries the load, within the model."""
    sign = -1.0 if wall.side == "left" else 1.0
    level = load.level if load.level is not None else wall.level["ground"]
    z = 0.0 if level is None else level
    spots = sorted({wall.x + sign * seen.back[0], wall.x + sign * seen.back[1]})
    if unit in ("kN", "kN/m"):
        return ((sum(spots) / len(spots), z),)
    return tuple((min(max(x, 0.0), cut.length), z) for x in spots)
