"""The stages the screening runs: those of the brief, or digs before each support level and the whole depth."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ingest.model import Site
from sections.found import FoundPit

OVER_DIG = 0.5
"""Dig below a support level before it is installed, m (common practice, no source)."""

ScreenStage = tuple[float, tuple[bool, ...]]
"""Level dug to, and which support rows are in."""


def lay_stages(site: Site, found: FoundPit) -> tuple[tuple[ScreenStage, ...], tuple[str, ...]]:
    """Stages of a pit with their names; the ratio is one of maxima over all of them.

    The brief's stages are run as given: each dig with the supports then in, and once more after every removal. Rows no
    stage installs are in from the start of the digging, as a section would have to assume.
    """
    if site.stages and found.rows:
        return _given(site, found)
    if site.stages:
        return ((_lowest(found), ()),), ("final dig",)
    return _template(found)


def _template(found: FoundPit) -> tuple[tuple[ScreenStage, ...], tuple[str, ...]]:
    levels = [row.member.level if row.member.level is not None else float("inf") for row in found.rows]
    lowest = _lowest(found)
    stages: list[ScreenStage] = []
    for level in sorted({round(level, 3) for level in levels if np.isfinite(level)}, reverse=True):
        dig = level - OVER_DIG
        if dig > lowest:
            stages.append((dig, tuple(other > level + 1e-3 for other in levels)))
    names = tuple(f"dig to {dig:.2f}" for dig, _ in stages)
    return (*stages, (lowest, tuple(True for _ in levels))), (*names, "final dig")


def _given(site: Site, found: FoundPit) -> tuple[tuple[ScreenStage, ...], tuple[str, ...]]:
    words = [_words(site, found, r) for r in range(len(found.rows))]
    told = [any(_named(words[r], stage.install) for stage in site.stages) for r in range(len(words))]
    there = [not one for one in told]
    level, lowest = float(np.max(found.stations.ground)), _lowest(found)
    stages: list[ScreenStage] = []
    names: list[str] = []

    def run(name: str) -> None:
        stage = (level, tuple(there))
        if not stages or stages[-1] != stage:
            stages.append(stage)
            names.append(name)

    for given in site.stages:
        if given.dig_to is not None and given.dig_to < level:
            level = max(given.dig_to, lowest)
            run(given.name)
        there = [now or _named(words[r], given.install) for r, now in enumerate(there)]
        if any(now and _named(words[r], given.remove) for r, now in enumerate(there)):
            there = [now and not _named(words[r], given.remove) for r, now in enumerate(there)]
            run(given.name)
    if level > lowest + 1e-6 or not stages:
        level = lowest
        run("final dig")
    return tuple(stages), tuple(names)


def _lowest(found: FoundPit) -> float:
    return float(np.min(found.stations.floor))


def _words(site: Site, found: FoundPit, row: int) -> frozenset[str]:
    """Names by which a stage may call a row: its layer, name, group or id."""
    supports = [site.supports[i] for i in found.rows[row].supports]
    names = {name for support in supports for name in (support.layer, support.name, support.group) if name}
    return frozenset({*names, found.rows[row].member.id})


def _named(words: frozenset[str], names: Sequence[str]) -> bool:
    return any(name in words for name in names)
