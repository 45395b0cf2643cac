"""A hundred invented pits with known members and changes, drawn with errors of a centimetre, at any angle."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field, replace

import numpy as np
import pytest
from pit_sites import PANEL, PILES, anchor, box, moved, moved_support, shape_of, site_of, strut

from ingest.members import Point, Support
from ingest.model import Floor
from sections.found import FoundPit
from sections.model import Wall
from sections.pit.find import describe_pits

PLANS = {
    "rectangle": lambda r: [(0.0, 0.0), (a := r(25, 60), 0.0), (a, b := r(14, 30)), (0.0, b)],
    "ell": lambda r: [(0, 0), (a := r(40, 60), 0), (a, b := r(14, 20)), (c := a * 0.55, b), (c, b + 16), (0, b + 16)],
    "wedge": lambda r: [(0.0, 0.0), (a := r(30, 50), 0.0), (a, r(24, 30)), (0.0, r(14, 20))],
    "tee": lambda r: [(0, 0), (60, 0), (60, b := r(12, 18)), (40, b), (40, b + 16), (22, b + 16), (22, b), (0, b)],
    "hexagon": lambda r: [(0, 0), (r(28, 34), -2), (42, r(10, 14)), (r(30, 36), 27), (8, r(25, 30)), (-6, 13)],
}


@dataclass
class Scene:
    """What was drawn, and the truth: (role, count, spacing, inclination) of each row, and where zones must end."""

    corners: list[Point]
    runs: list[tuple[float, float, Wall]]
    supports: list[Support] = field(default_factory=list)
    floors: list[Floor] = field(default_factory=list)
    rows: list[tuple[str, int, float | None, float]] = field(default_factory=list)
    ends: list[float] = field(default_factory=list)


def side(corners: list[Point], k: int) -> tuple[np.ndarray, np.ndarray, np.ndarray, float]:
    """Start, direction, inward normal and length of a side."""
    a, b = np.array(corners[k], float), np.array(corners[(k + 1) % len(corners)], float)
    along = (b - a) / np.hypot(*(b - a))
    return a, along, np.array([-along[1], along[0]]), float(np.hypot(*(b - a)))


def places(length: float, spacing: float, rng: np.random.Generator) -> np.ndarray:
    """Supports at a spacing, the first and last between 0.3 and 0.8 spacings from the ends."""
    first = spacing * rng.uniform(0.35, 0.65)
    return np.arange(first, length - 0.3 * spacing, spacing)


def make(seed: int) -> Scene:
    rng = np.random.default_rng(seed)
    plan = list(PLANS)[seed % len(PLANS)]
    corners = [(float(x), float(y)) for x, y in PLANS[plan](lambda lo, hi: round(float(rng.uniform(lo, hi)), 2))]
    shape = shape_of(corners)
    scene = Scene(corners=corners, runs=[(0.0, shape.length, PILES)], ends=[float(c.at) for c in shape.corners])
    order = rng.permutation(len(corners))
    anchor_rows(scene, int(order[0]), rng)
    corner_struts(scene, shape, int(order[1]), rng)
    if plan == "rectangle":
        cross_struts(scene, rng)
    rakers(scene, int(order[2]), rng)
    change_of_wall(scene, shape, int(order[-1]), rng)
    return scene


def anchor_rows(scene: Scene, k: int, rng: np.random.Generator) -> None:
    a, along, inward, length = side(scene.corners, k)
    spacing = float(rng.uniform(1.6, 3.2))
    at = places(length, spacing, rng)
    for row in range(int(rng.integers(1, 4))):
        level, dip = -1.0 - 2.2 * row, float(rng.uniform(10, 30))
        for s in at:
            head = a + (s + rng.uniform(-0.01, 0.01)) * along
            scene.supports.append(anchor((head[0], head[1]), (inward[0], inward[1]), level, 14.0, dip))
        scene.rows.append(("anchor", len(at), spacing if len(at) > 1 else None, dip))


def corner_struts(scene: Scene, shape, k: int, rng: np.random.Generator) -> None:
    if shape.corners[k].interior_angle > 150.0:
        return
    a, along, _, length = side(scene.corners, k)
    _, before, _, length_before = side(scene.corners, k - 1)
    first, count = 2.5, int(rng.integers(1, 4))
    step = float(rng.uniform(1.5, 2.0))
    if first + step * count > 0.5 * min(length, length_before):
        return
    for i in range(count):
        d = first + step * i
        one, two = a + d * along, a - d * before
        scene.supports.append(strut((one[0], one[1]), (two[0], two[1]), -5.9))
    scene.rows.append(("corner_strut", count, step if count > 1 else None, 0.0))


def cross_struts(scene: Scene, rng: np.random.Generator) -> None:
    a, b = scene.corners[2]
    spacing = float(rng.uniform(3.5, 6.0))
    at = places(a, spacing, rng)
    for level in (-2.9, -4.6)[: int(rng.integers(1, 3))]:
        ends = rng.uniform(-0.01, 0.01, (len(at), 2)) + at[:, None]
        scene.supports += [strut((p, 0.6), (q, b - 0.6), level) for p, q in ends]
        scene.rows.append(("strut", len(at), spacing, 0.0))


def rakers(scene: Scene, k: int, rng: np.random.Generator) -> None:
    a, along, inward, length = side(scene.corners, k)
    spacing = float(rng.uniform(3.0, 5.0))
    at = places(length, spacing, rng)
    for s in at:
        head, far = a + s * along + 0.4 * inward, a + s * along + 5.4 * inward
        member = strut((head[0], head[1]), (far[0], far[1]), -0.5, role="raker" if rng.random() < 0.5 else "strut")
        scene.supports.append(replace(member, far=(far[0], far[1], -5.0)))
    # 4.5 m down over 5.0 m: 41.987 degrees
    scene.rows.append(("raker", len(at), spacing if len(at) > 1 else None, 41.987))


def change_of_wall(scene: Scene, shape, k: int, rng: np.random.Generator) -> None:
    start = float(shape.at[k])
    *_, length = side(scene.corners, k)
    at = start + length * float(rng.uniform(0.3, 0.7))
    other = replace(PILES, toe=-14.0) if rng.random() < 0.5 else PANEL
    scene.runs = [(0.0, at, PILES), (at, shape.length, other)]
    scene.ends.append(at)


def judge(seed: int) -> FoundPit:
    scene = make(seed)
    rng = np.random.default_rng(1000 + seed)
    angle, shift = float(rng.uniform(0, 360)), (float(rng.uniform(-5e3, 5e3)), float(rng.uniform(-5e3, 5e3)))
    supports = [moved_support(s, angle, shift) for s in scene.supports]
    supports += [supports[i] for i in rng.integers(0, len(supports), 3)]
    rng.shuffle(supports)  # type: ignore[arg-type]
    site = site_of(supports=tuple(supports))
    return describe_pits(site, (shape_of(moved(scene.corners, angle, shift), scene.runs),))[0]


def members_right(seed: int) -> bool:
    """Roles and counts exact, spacing within 1 %, inclination within 0.5 degrees."""
    scene, pit = make(seed), judge(seed)
    rows = [row.member for row in pit.rows]
    if Counter((r.role, r.count) for r in rows) != Counter((role, n) for role, n, _, _ in scene.rows):
        return False
    for role, count, spacing, dip in scene.rows:
        like = [r for r in rows if (r.role, r.count) == (role, count)]
        near = [
            r
            for r in like
            if abs(r.inclination - dip) < 0.5 and (r.spacing == spacing or abs(r.spacing - spacing) < 0.01 * spacing)
        ]
        if not near:
            return False
    return True


def zones_right(seed: int) -> bool:
    """Every true end found within 0.25 m, and beside them only the ends of corner-strut rows."""
    scene, pit = make(seed), judge(seed)
    ends = np.array([z.to % pit.shape.length for z in pit.pit.zones])
    true = np.array(scene.ends)
    gap = np.abs((ends[:, None] - true[None, :] + pit.shape.length / 2) % pit.shape.length - pit.shape.length / 2)
    if np.any(np.min(gap, axis=0) > 0.25):
        return False
    extra = [z.ended_by for z, off in zip(pit.pit.zones, np.min(gap, axis=1), strict=True) if off > 0.25]
    return all(why.startswith("corner strut") for why in extra)


SEEDS = range(100)


def test_members_of_a_hundred_scenes():
    wrong = [seed for seed in SEEDS if not members_right(seed)]
    assert wrong == []


def test_zones_of_a_hundred_scenes():
    wrong = [seed for seed in SEEDS if not zones_right(seed)]
    assert wrong == []


@pytest.mark.parametrize("drop", [0.5, 2.0])
def test_steps_are_met_at_their_chainage_at_any_angle(drop):
    for seed in range(20):
        rng = np.random.default_rng(seed)
        angle, shift = float(rng.uniform(0, 360)), (float(rng.uniform(-5e3, 5e3)), 77.0)
        x = float(rng.uniform(8, 22))
        outline = tuple(moved(box(x, 0.0, 30.0 - x, 20.0), angle, shift))
        deep = Floor(level=-6.0 - drop, dig_level=-6.0 - drop, outline=outline)
        shape = shape_of(moved([(0.0, 0.0), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0)], angle, shift))
        site = site_of(floors=(Floor(level=-6.0, dig_level=-6.0), deep), formation=None)
        pit = describe_pits(site, (shape,))[0]
        assert pit.pit.steps[0].at == pytest.approx((x, 80.0 - x), abs=1e-3)
        ends = [z.to for z in pit.pit.zones]
        assert min(abs(e - x) for e in ends) < 0.25
        assert min(abs(e - (80.0 - x)) for e in ends) < 0.25
        assert len(ends) == 6
