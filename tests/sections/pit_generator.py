"""Invented sites with known truth, made without any of the finder's code: shapes, constructions, drawing faults."""

from __future__ import annotations

import math
import random
from dataclasses import dataclass

import numpy as np
from pit_drawing import LINE_KINDS, PILE_KINDS, Draughtsman
from pit_truth import CLOSED, OPEN, SEVERAL, TruthPit, TruthRun

from ingest.model import Site

GRIDS = ((0.0, 0.0), (120.0, -45.0), (531204.0, 181033.0))


@dataclass
class Scene:
    name: str
    site: Site
    pits: list[TruthPit]


def spacing_of(r, kind, size):
    if kind == "contiguous":
        return size + r.choice((0.1, 0.15, 0.25))
    return 0.8 * size if kind == "secant" else r.uniform(1.8, 2.8)


def make_runs(r, pit, kinds):
    """Split the perimeter at corners or in the middle of a side, and give every stretch a construction."""
    total = pit.length if pit.shares is None else pit.shares[0]
    cuts = [0.0]
    if len(kinds) > 1:
        ends = np.cumsum([bit.length for bit in pit.bits])[:-1].tolist()
        at_corners = [s for s in ends if 6 < s < total - 6] if r.random() < 0.5 else []
        anywhere = sorted(total * (k + r.uniform(0.3, 0.7)) / len(kinds) for k in range(1, len(kinds)))
        anywhere = [min(ends + [0.0], key=lambda e: abs(e - s)) if min(abs(e - s) for e in ends + [0.0]) < 2 else s
                    for s in anywhere]  # fmt: skip
        some = sorted(r.sample(at_corners, min(len(kinds) - 1, len(at_corners))))
        cuts += some if len(some) == len(kinds) - 1 and min(np.diff([0.0, *some, total])) > 6 else anywhere
    pit.runs = []
    for k, start in enumerate(cuts):
        kind = kinds[k]
        size = {"king_post": 0.3, "sheet": 0.4}.get(kind, r.choice((0.6, 0.75, 0.9, 1.0)))
        stop = cuts[k + 1] if k + 1 < len(cuts) else total
        spacing = spacing_of(r, kind, size) if kind in PILE_KINDS else None
        pit.runs.append(TruthRun(start, stop, kind, spacing, size, r.choice((-12.0, -14.0, -16.0))))


def make_scene(seed):
    """Scene number `seed`: a site and the truth about its pits, in the frame of the site."""
    r = random.Random(seed)
    group = r.choice((CLOSED,) * 6 + (OPEN, SEVERAL, SEVERAL))
    shape = r.choice(group)
    made = shape(r)
    pits = made if isinstance(made, list) else [made]
    pen = Draughtsman(r, r.choice((0.0, 0.005, 0.02)))
    for pit in pits:
        plain = pit.circle is not None or pit.length < 45
        count = 1 if plain else r.choice((1, 1, 2, 3) if pit.length > 70 else (1, 1, 2))
        make_runs(r, pit, r.sample(PILE_KINDS + LINE_KINDS, count))
        pen.draw(pit)
        if not pit.closed:
            pen.anchors(pit)
    if r.random() < 0.3:
        pen.clutter(pits)
    if r.random() < 0.3 and shape.__name__ == "rectangle" and min(np.ptp(pits[0].outline(), axis=0)) > 14:
        r.choice((pen.bearing_grid, pen.partitions))(pits[0])
    site, turn = pen.site(r.uniform(0, 2 * math.pi), r.choice(GRIDS), r.choice((0.0, 0.1)))
    return Scene(shape.__name__, site, [pit.moved(lambda p: np.array(turn(p))) for pit in pits])
