"""The computed ratio: the whole wall as one folded plate on spreading ground against its own 2D twin.

Every reading of what is not known is run (continuity of the wall, spreading depth, support chain, ground modulus,
waler) and the band is the hull of them all. Ratios of demands over construction stages; its movements are never shown.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np

from ingest.model import OUTPUTS, Limits, Site
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit, Stations
from sections.model import Bools, Floats, Ints, Mechanism
from sections.pit.along import distance_along, gaps_of
from sections.screening.run import VariantRatios, run_variant
from sections.screening.scene import BEAM_EI, WALER_EI, Scene, Variant, make_scene
from sections.verdicts.margins import peak_factor

CODE = "screening"
CARRIES: tuple[Mechanism, ...] = ("corner", "supports", "wall_change", "floor_step", "opposite_wall")
WORKERS = 2
"""Readings run side by side; the sparse factorisation lets go of the interpreter while it works."""
TENTH = 0.1
"""Share of the vertical stiffness that a wall with weak joints may have along itself (judgement)."""
ROW_FACE = "the retained face of a row of piles peaks at the supports, finer than any model here resolves"
BASIS = "folded wall on spreading ground against its own 2D twin, this tool's own computation"
REFERENCE = "own method, checked against an elastic block of the same idealisation, not against the field"


def screening(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Compute the ratio of the wall's demands to those of its 2D twin along the whole perimeter."""
    stations = found.stations
    scene, why = make_scene(site, found)
    if scene is None:
        return _silent(stations, why)
    with ThreadPoolExecutor(max_workers=WORKERS) as pool:
        runs = list(pool.map(partial(run_variant, scene), variants_of(scene)))
    restless = [run.variant.name for run in runs if not run.settled]
    if restless:
        return _silent(stations, f"earth pressures found no balance with {restless[0]}: the wall may not stand")
    low, high = band_of(scene, runs, limits_on=scene.soil.strength_known)
    sheet = Sheet(stations, "Not computed here.")
    for o, name in enumerate(WALL_OUTPUTS):
        # The retained face of a row of piles peaks at strut heads that neither model nor oracle resolves.
        able = ~np.isnan(low[:, o]) & ~(stations.rows & (name == "wall_moment_retained_face"))
        sheet.say(able, (name,), low[:, o], high[:, o])
    off = "" if scene.soil.strength_known else " Ground strength is not known: values above 1 are lower bounds."
    words = f"Computed along the whole perimeter, stage by stage, over {len(runs)} readings of what is not known.{off}"
    sheet.text(~np.isnan(low[:, 0]), words)
    return sheet.close(
        CODE,
        "corner",
        basis=BASIS,
        reference=REFERENCE,
        settled_by=widest(runs),
        carries=CARRIES,
        silence={"wall_moment_retained_face": ROW_FACE},
        stages=_stages(scene, runs[0]),
    )


def _silent(stations: Stations, why: str) -> CriterionResult:
    sheet = Sheet(stations, f"Not computed: {why}.")
    return sheet.close(CODE, "corner", basis=BASIS, reference=REFERENCE, settled_by=why)


def _stages(scene: Scene, base: VariantRatios) -> tuple[tuple[str, ...], Ints]:
    """Names of the stages, and which governs the real demand of the first variant at each station and output."""
    stations, grid = scene.found.stations, scene.grid
    facet = np.clip(np.searchsorted(grid.chainage, stations.chainage, side="right") - 1, 0, len(grid.station) - 1)
    index = np.full((len(stations.chainage), len(OUTPUTS)), -1)
    for o, name in enumerate(WALL_OUTPUTS):
        index[:, OUTPUTS.index(name)] = base.stage_real[facet, o]
    return scene.stage_names, index.astype(np.int64)


def variants_of(scene: Scene) -> tuple[Variant, ...]:
    """Every reading of what is not known: continuity first, then each range by itself on the outermost ones."""
    basics = _continuities(scene)
    supports = [scene.site.supports[i] for row in scene.found.rows for i in row.supports]
    walers = [scene.site.supports[row.supports[0]].waler_EI for row in scene.found.rows if row.waler]
    ranges: list[tuple[str, dict[str, Any]]] = [("spreading depth", {"spread": share}) for share in (0.5, 2.0)]
    if any(support.packing_stiffness is None for support in supports):
        ranges.append(("support chain", {"support": 1 / 3}))
    if not scene.soil.modulus_given:
        ranges += [("ground modulus", {"modulus": 1 / 3}), ("ground modulus", {"modulus": 3.0})]
    if any(EI is None for EI in walers):
        ranges.append(("EI of the waler", {"waler_EI": WALER_EI[1]}))
    outermost = basics[:1] if len(basics) == 1 else (basics[0], basics[-1])
    changed = [replace(base, name=f"{name} ({base.name})", **change) for base in outermost for name, change in ranges]
    return (*basics, *changed)


def _continuities(scene: Scene) -> tuple[Variant, ...]:
    """How the wall may act along itself: all four unless the brief or the kind of wall settles it."""
    stations = scene.found.stations
    beam = any(run.wall.capping_beam is not False for run in scene.found.pit.runs)
    jointed = Variant(name="continuity: jointed", along=0.0, membrane=False, beam_EI=0.0)
    capped = Variant(name="continuity: jointed with a capping beam", along=0.0, membrane=False, beam_EI=BEAM_EI)
    whole = Variant(name="continuity: monolithic", along=1.0, membrane=True, beam_EI=0.0)
    weak = Variant(name="continuity: weak joints", along=TENTH, membrane=True, beam_EI=0.0)
    if bool(np.all(stations.monolithic)):
        return (whole,)
    if bool(np.all(stations.jointed)):
        return (jointed, capped) if beam else (jointed,)
    return (whole, weak, capped, jointed) if beam else (whole, weak, jointed)


def band_of(scene: Scene, runs: list[VariantRatios], *, limits_on: bool) -> tuple[Floats, Floats]:
    """Band (n, 4) at the stations before any margin: the hull of the runs, its peaks beside gaps raised."""
    low, high = hull(scene, runs)
    peak = peak_factor(scene.found.stations.rows, limits_on)[:, None]
    return low, np.where(_near_gap(scene.found)[:, None] & (high > 1), high * peak, high)


def hull(scene: Scene, runs: list[VariantRatios]) -> tuple[Floats, Floats]:
    """Band (n, 4) at the stations: least and largest ratio of all runs, read between facets of one side."""
    stack = np.array([run.ratio for run in runs])
    silent = np.any(np.isnan(stack), axis=0)
    low = np.where(silent, np.nan, stack.min(axis=0))
    high = np.where(silent, np.nan, stack.max(axis=0))
    return _at_stations(scene, low), _at_stations(scene, high)


def _at_stations(scene: Scene, values: Floats) -> Floats:
    stations, grid = scene.found.stations, scene.grid
    facet_side, out = stations.side[grid.station], np.full((len(stations.chainage), values.shape[1]), np.nan)
    for side in np.unique(stations.side):
        here, facets = np.flatnonzero(stations.side == side), np.flatnonzero(facet_side == side)
        if len(facets) == 0:
            continue
        for o in range(values.shape[1]):
            out[here, o] = np.interp(stations.chainage[here], grid.middles[facets], values[facets, o])
    return out


def _near_gap(found: FoundPit) -> Bools:
    """Stations within one bay of a gap in a row of supports."""
    gaps = gaps_of(found)
    if len(gaps) == 0:
        return np.zeros(len(found.stations.chainage), bool)
    spacing = max((row.member.spacing or 0.0 for row in found.rows), default=0.0)
    return np.asarray(distance_along(found, gaps) <= spacing + 1e-9)


SETTLES = {
    "continuity": "drawings of the wall's joints and capping beam ([[walls]] continuity, capping_beam)",
    "support chain": "the stiffness of what packs the supports ([[supports]] packing_stiffness)",
    "ground modulus": "the modulus of the ground ([[strata]] E)",
    "EI of the waler": "the bending stiffness of the waler ([[supports]] waler_EI)",
}
"""What an engineer can look up, by the unknown. How far the ground spreads load along the wall is no input at all."""


def widest(runs: list[VariantRatios]) -> str:
    """What would narrow the band most, in words that fit behind "settled by"."""
    base = runs[0].ratio[:, 0]
    names = [run.variant.name.split(" (")[0].split(":")[0] for run in runs]
    moved = dict.fromkeys(names[1:], 0.0)
    for name, run in zip(names[1:], runs[1:], strict=True):
        moved[name] = max(moved[name], float(np.nanmean(np.abs(run.ratio[:, 0] - base))))
    ordered = [name for name, _ in sorted(moved.items(), key=lambda pair: (-pair[1], pair[0])) if name in SETTLES]
    return SETTLES[ordered[0]] if ordered else "a computation in three dimensions"
