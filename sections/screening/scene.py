"""From a pit to the screening's arrays: wall stiffness, ground, members and walers of one variant and one stage."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from ingest.members import Material
from ingest.model import Site
from sections.found import FoundPit, SupportRow
from sections.model import Bools, Floats, Ints, Wall
from sections.screening.grid import Grid, column_at, make_grid, node_at
from sections.screening.limits import PressureLimits
from sections.screening.pattern import Pattern, make_pattern
from sections.screening.soil import Soil, find_limits, read_soil, unbalanced
from sections.screening.stages import ScreenStage, lay_stages
from sections.screening.supports import Beams, Members
from sections.screening.wall import FoldedWall
from sections.smearing.wall import circle_inertia

BEAM_EI = 1.0e6
"""EI of a capping beam that may be there, kNm2 (judgement)."""
WALER_EI = (5.0e4, 1.0e6)
"""EI of a waler that is there but has none given, kNm2: softest and stiffest tried (judgement)."""
GYRATION = 0.25
"""Radius of gyration that turns the EI of a waler or beam into the EA it is taken to have, m (judgement)."""
WALER_LEVEL = 1.0
"""A waler within this height of a row is the row's, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Variant:
    """One way of reading what is not known. `along`: share of the vertical stiffness that the wall has along itself."""

    name: str
    along: float
    membrane: bool
    beam_EI: float
    waler_EI: float | None = None
    spread: float = 1.0
    support: float = 1.0
    modulus: float = 1.0


@dataclass(frozen=True, kw_only=True)
class Scene:
    """What stays the same in every variant and stage of one pit."""

    site: Site
    found: FoundPit
    grid: Grid
    soil: Soil
    EI: Floats
    """(ns,) kNm2/m."""
    EA: Floats
    on: Bools
    stages: tuple[ScreenStage, ...]
    stage_names: tuple[str, ...] = ()
    """Per stage the level dug to (no deeper than the floor) and which rows are in."""

    @cached_property
    def pattern(self) -> Pattern:
        """Pattern of the matrix, the same in every variant and stage."""
        return make_pattern(len(self.grid.points), self.grid.closed, len(self.grid.z))


def make_scene(site: Site, found: FoundPit) -> tuple[Scene | None, str]:
    """Gather a pit for the screening, or say what is missing."""
    stations = found.stations
    for name, values in (
        ("ground", stations.ground),
        ("dig", stations.floor),
        ("toe", stations.toe),
        ("top", stations.top),
    ):
        if np.any(np.isnan(values)):
            return None, f"{name} level of the wall is not given everywhere"
    bending, stretching, missing = _stiffness(site, found)
    if missing:
        return None, missing
    lacking = [row.member.id for row in found.rows if any(site.supports[i].EA is None for i in row.supports)]
    if lacking:
        return None, f"axial stiffness of {', '.join(lacking)} is not given"
    stages, names = lay_stages(site, found)
    levels = [site.supports[i].head[2] for row in found.rows for i in row.supports]
    levels += [level for level, _ in stages] + [s.top_level for s in site.strata if s.top_level is not None]
    grid = make_grid(found, np.array(levels, float))
    soil = read_soil(site, found, grid)
    if soil is None:
        return None, "unit weights or levels of the strata are not given"
    run = stations.run[grid.station]
    middle = soil.level.mean(axis=1)
    top, toe = stations.top[grid.station], stations.toe[grid.station]
    on = (middle[None, :] < top[:, None]) & (middle[None, :] > toe[:, None])
    return (
        Scene(
            site=site,
            found=found,
            grid=grid,
            soil=soil,
            EI=bending[run],
            EA=stretching[run],
            on=on,
            stages=stages,
            stage_names=names,
        ),
        "",
    )


def _stiffness(site: Site, found: FoundPit) -> tuple[Floats, Floats, str]:
    """EI and EA per metre of each run."""
    materials = {m.id: m for m in site.materials}
    values = [_run_stiffness(run.wall, materials.get(run.wall.material or ""), site, found, i)
              for i, run in enumerate(found.pit.runs)]  # fmt: skip
    for run, value in zip(found.pit.runs, values, strict=True):
        if value is None:
            empty = np.zeros(0)
            return empty, empty, f"stiffness of the {run.wall.kind} wall from chainage {run.start:.2f} is not given"
    table = np.array([value for value in values if value is not None])
    return table[:, 0], table[:, 1], ""


def _run_stiffness(
    wall: Wall, material: Material | None, site: Site, found: FoundPit, index: int
) -> tuple[float, float] | None:
    if material is None or material.E is None:
        return None
    factor = 1.0 if wall.EI_factor is None else wall.EI_factor
    if wall.thickness and wall.kind in ("diaphragm", "concrete", "masonry"):
        return material.E * wall.thickness**3 / 12 * factor, material.E * wall.thickness
    spacing = wall.structural.spacing if wall.structural else None
    if wall.diameter and spacing and wall.kind in ("contiguous", "secant"):
        return material.E * circle_inertia(wall.diameter) / spacing * factor, material.E * wall.diameter / 2
    if wall.kind == "king_post" and spacing and found.shape.piles:
        post = site.piles[found.shape.piles[index][0]].section
        if post and post.I and post.A:
            return material.E * post.I / spacing * factor, material.E * post.A / spacing
    return None


def wall_of(scene: Scene, variant: Variant, dig_to: float) -> tuple[FoldedWall, PressureLimits]:
    """The folded wall of one variant in one stage, with what its ground springs can carry."""
    soil, grid = scene.soil, scene.grid
    station = grid.station
    dig = np.maximum(scene.found.stations.floor[station], dig_to)
    height = scene.found.stations.top[station] - scene.found.stations.toe[station]
    spread = height * variant.spread
    E = soil.E * (1.0 if soil.modulus_given else variant.modulus)
    retained = E / (1 - soil.nu**2) / spread[:, None]
    shear = E / 2 / (1 + soil.nu) * spread[:, None] / 3
    below = soil.level.mean(axis=1)[None, :] < dig[:, None]
    relief, reserve, lack = find_limits(soil, dig)
    pressure = unbalanced(soil, dig)
    known = soil.strength_known
    if known:
        pressure = pressure + np.where(below[:, :, None], lack, 0.0)
    along, membrane = _continuity(scene, variant)
    wall = FoldedWall(
        columns=grid.points,
        closed=grid.closed,
        z=grid.z,
        on=scene.on,
        Dv=scene.EI,
        Dh=scene.EI * along,
        Dk=scene.EI * along / 2,
        Eht=membrane,
        Gt=membrane / 2.4,
        spring=retained * (1 + below),
        spread=shear * (1 + below),
        corner_spring=np.sqrt(retained * shear),
        pressure=pressure,
    )
    both = np.repeat(retained[:, :, None], 2, axis=2)
    unlimited = np.full(both.shape, np.inf)
    limits = PressureLimits(
        retained_spring=both,
        excavated_spring=both * below[:, :, None],
        relief=relief if known else unlimited,
        reserve=np.where(below[:, :, None], reserve, np.inf) if known else unlimited,
    )
    return wall, limits


def _continuity(scene: Scene, variant: Variant) -> tuple[Floats, Floats]:
    """Share of stiffness along the wall, and membrane stiffness, (ns,) each.

    A variant is a reading of what is not known: it changes nothing where joints or continuity are confirmed. A row of
    piles beside panels never becomes a plate because the panels might be one.
    """
    jointed = scene.found.stations.jointed[scene.grid.station]
    whole = scene.found.stations.monolithic[scene.grid.station]
    along = np.where(jointed, 0.0, np.where(whole, 1.0, variant.along))
    membrane = np.where(jointed, 0.0, np.where(whole | variant.membrane, 1.0, 0.0))
    return along, scene.EA * membrane


def members_of(scene: Scene, variant: Variant) -> tuple[Members, tuple[int, ...]]:
    """All members of the pit, and the row each belongs to."""
    parts = [_row_members(scene, row, variant) for row in scene.found.rows]
    rows = tuple(i for i, part in enumerate(parts) for _ in range(len(part)))
    fields = Members.__dataclass_fields__
    return Members(**{name: np.concatenate([getattr(p, name) for p in parts]) for name in fields}), rows


def _row_members(scene: Scene, row: SupportRow, variant: Variant) -> Members:
    site, grid = scene.site, scene.grid
    supports = [site.supports[i] for i in row.supports]
    turned = row.turned if row.turned is not None else np.zeros(len(supports), bool)
    head = np.array([s.far if t else s.head for s, t in zip(supports, turned, strict=True)])
    far = np.array([s.head if t else s.far for s, t in zip(supports, turned, strict=True)])
    length = np.linalg.norm(far - head, axis=1)
    member = np.array([s.free_length or size for s, size in zip(supports, length, strict=True)])
    packing = np.array([1 / s.packing_stiffness if s.packing_stiffness else 0.0 for s in supports])
    share = np.where(packing > 0, 1.0, variant.support)
    stiffness = share / (member / np.array([s.EA or 0.0 for s in supports]) + 2 * packing)
    on_wall = ~np.isnan(row.far_at)
    return Members(
        stiffness=stiffness,
        column=column_at(grid, row.head_at),
        node=node_at(grid, head[:, 2]),
        far_column=column_at(grid, row.far_at),
        far_node=np.where(on_wall, node_at(grid, far[:, 2]), -1),
        direction=(far - head)[:, :2] / length[:, None],
        preload=np.zeros(len(supports)),
    )


def beams_of(scene: Scene, variant: Variant, rows_in: Sequence[bool]) -> Beams:
    """Walers of the rows in place, along all facets of their wall, and the capping beam of the variant."""
    ns = len(scene.EI)
    parts: list[tuple[Ints, int, float, float]] = []
    for row, there in zip(scene.found.rows, rows_in, strict=True):
        level = row.member.level
        if not there or not row.waler or level is None:
            continue
        given = scene.site.supports[row.supports[0]].waler_EI
        bending = given if given is not None else variant.waler_EI or WALER_EI[0]
        node = int(node_at(scene.grid, np.array([level]))[0])
        parts.append((np.flatnonzero(_along(scene, row)), node, bending, _waler_EA(scene.site, level, bending)))
    if variant.beam_EI > 0:
        parts.append((np.arange(ns), 0, variant.beam_EI, variant.beam_EI / GYRATION**2))
    counts = [len(facets) for facets, _, _, _ in parts]
    return Beams(
        facet=np.concatenate([np.zeros(0, int), *(facets for facets, _, _, _ in parts)]),
        node=np.repeat([node for _, node, _, _ in parts], counts).astype(int),
        EI=np.repeat([bending for _, _, bending, _ in parts], counts).astype(float),
        EA=np.repeat([stretching for _, _, _, stretching in parts], counts).astype(float),
    )


def _waler_EA(site: Site, level: float, EI: float) -> float:
    """EA of the softest waler drawn at a level, kN; of one as stout as its EI where none is known."""
    drawn = [w.EA for w in site.walers if w.EA and w.level is not None and abs(w.level - level) <= WALER_LEVEL]
    return min(drawn, default=EI / GYRATION**2)


def _along(scene: Scene, row: SupportRow) -> Bools:
    """Facets on the sides where a row stands."""
    sides = scene.found.stations.side[scene.grid.station]
    at = np.concatenate([row.head_at, row.far_at])
    chainage = scene.found.stations.chainage
    met = {int(scene.found.stations.side[np.argmin(np.abs(chainage - a))]) for a in at[~np.isnan(at)]}
    return np.asarray(np.isin(sides, sorted(met)))
