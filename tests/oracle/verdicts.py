"""Verdicts of the screening at the block's stations, and the dangerous ones among them.

Dangerous: the block is above 1.1 by more than the error of its mesh, and the verdict says `holds` or `over_states`.
`bare`: the one reading that is the block's own wall, with the margins and nothing else. `full`: all readings, as the
product runs them where the brief gives what the scene gives.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from scenes import SCENES, Scene
from screened import Screening, base_variant, chainages, screen

from ingest.model import OUTPUTS, Limits
from sections.criteria.screening import band_of, variants_of
from sections.model import Bools, Floats
from sections.proposal import WORST_FIRST
from sections.screening.run import run_variant
from sections.verdicts.margins import margins_at
from sections.verdicts.verdict import combine_arrays, words_of

FIGURES = json.loads(Path(__file__).with_name("figures.json").read_text())
NAMES = OUTPUTS[:4]
MESH = {"wall_deflection": 0.03, "wall_moment_excavated_face": 0.03, "wall_moment_retained_face": 0.07,
        "support_force": 0.01}  # fmt: skip
"""Error of the block's mesh, from the scenes solved on a finer one (`test_the_mesh_error_is_as_stated`)."""
RETAINED = NAMES.index("wall_moment_retained_face")
NEAR_HEAD = 1.05
"""The support force is compared within this of a support, m: farther off two of them may stand for one facet."""


def frozen(scene: Scene, table: str = "scenes") -> tuple[Floats, Floats]:
    """Points (n, 2) and ratios (n, 4) of the block, nan where there is none."""
    stored = FIGURES[table][scene.name]
    points = np.column_stack([stored["x"], stored["y"]])
    ratio = np.array([[np.nan if v is None else v for v in stored[name]] for name in NAMES], float).T
    heads = np.array([end for p in scene.props for end in ((p.head, p.far) if p.tie else (p.head,))]).reshape(-1, 2)
    if len(heads):
        away = np.min(np.linalg.norm(points[:, None] - heads[None], axis=2), axis=1) > NEAR_HEAD
        ratio[away, 3] = np.nan
    return points, ratio


@dataclass(frozen=True)
class Compared:
    """One scene: block and screening (n, 4) at points, bands and words of a reading, classes of the points."""

    scene: Scene
    points: Floats
    block: Floats
    screening: Floats
    low: Floats
    high: Floats
    word: list[list[str]]
    found: Screening

    @property
    def inner(self) -> Bools:
        """(n,) True beyond a fifth of the depth from every corner: nearer the block has no sharp answer itself."""
        if self.scene.round:
            return np.ones(len(self.points), bool)
        gaps = np.linalg.norm(self.points[:, None] - np.array(self.scene.corners)[None], axis=2)
        return np.asarray(gaps.min(axis=1) >= 0.2 * self.scene.deepest)

    @property
    def dangerous(self) -> Bools:
        """(n, 4) True where the block warns and the verdict does not."""
        mesh = np.array([MESH[name] for name in NAMES])
        calm = np.isin(np.array(self.word), ("holds", "over_states"))
        return np.asarray((self.block > 1.1 + mesh) & calm)


def compare(scene: Scene, *, full: bool = False) -> Compared:
    """Compare a scene, its margins and verdicts taken through the product's own tables and rules."""
    points, block = frozen(scene)
    screened = screen(scene)
    variants = variants_of(screened.scene) if full else (base_variant(scene),)
    runs = [run_variant(screened.scene, variant) for variant in variants]
    low, high = band_of(screened.scene, runs, limits_on=True)
    margins = margins_at(screened.found)
    low, high = combine_arrays(low[None], high[None], margins.e_low[:, :4], margins.e_high[:, :4], Limits())
    stations = screened.found.stations
    where = chainages(screened.found, points)
    near = [int(np.argmin(np.where(stations.side == _side(stations, p), abs(stations.chainage - c), np.inf)))
            for p, c in zip(points, where, strict=True)]  # fmt: skip
    word = words_of(low, high, Limits())[near]
    names = [[WORST_FIRST[i] for i in row] for row in word]
    for row, silent in zip(names, margins.not_measured[near, RETAINED], strict=True):
        row[RETAINED] = "not_assessed" if silent else row[RETAINED]
    return Compared(scene, points, block, screened.at(points), low[near], high[near], names, screened)


def _side(stations: object, point: Floats) -> int:
    return int(stations.side[np.argmin(np.hypot(*(stations.xy - point).T))])  # type: ignore[attr-defined]


def compare_all(*, full: bool = False) -> list[Compared]:
    """All scenes that have frozen figures."""
    return [compare(scene, full=full) for scene in SCENES if scene.name in FIGURES["scenes"]]
