"""Freeze the block's ratios of every scene: `python tests/oracle/make_figures.py [scene ...]` writes figures.json.

Named scenes are made anew and the others kept. Some minutes for all of them on one core.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path

import numpy as np

sys.path[:0] = [str(Path(__file__).parents[2]), str(Path(__file__).parent)]
from ratios import OUTPUTS, Ratios, oracle_ratios, staged_ratios  # noqa: E402
from scenes import BY_NAME, SCENES, STAGED  # noqa: E402

FIGURES = Path(__file__).with_name("figures.json")
COMMAND = "python tests/oracle/make_figures.py"
REFINED = {"square_panels": 1.5, "short_rows": 1.5}
"""Scenes solved again on a finer mesh, to know the error of the mesh."""


def figures_of(made: Ratios) -> dict[str, object]:
    """The frozen figures of one solved scene."""
    return {
        "unknowns": made.unknowns,
        "x": [round(float(v), 3) for v in made.points[:, 0]],
        "y": [round(float(v), 3) for v in made.points[:, 1]],
        **{
            name: [None if np.isnan(v) else round(float(v), 4) for v in made.ratio[:, k]]
            for k, name in enumerate(OUTPUTS)
        },
    }


def main(names: list[str]) -> None:
    """Make the figures of the named scenes, or of all."""
    stored = json.loads(FIGURES.read_text()) if FIGURES.exists() else {"scenes": {}, "refined": {}}
    stored.setdefault("staged", {})
    stored["command"] = COMMAND
    for name in names or [scene.name for scene in SCENES]:
        scene = BY_NAME[name]
        stored["scenes"][name] = figures_of(oracle_ratios(scene))
        if name in REFINED:
            finer = figures_of(oracle_ratios(scene, REFINED[name]))
            stored["refined"][name] = {"refine": REFINED[name], **finer}
        if name in STAGED:
            stored["staged"][name] = {"digs": STAGED[name], **figures_of(staged_ratios(scene, STAGED[name]))}
    stored["scenes"] = {scene.name: stored["scenes"][scene.name] for scene in SCENES if scene.name in stored["scenes"]}
    FIGURES.write_text(json.dumps(stored, indent=None, separators=(",", ":")).replace('},"', '},\n"') + "\n")


if __name__ == "__main__":
    main(sys.argv[1:])
