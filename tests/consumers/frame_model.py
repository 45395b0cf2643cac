"""A frame on springs of a section from the JSON alone: walls as beams, ground as springs, supports as bars.

The spring of the ground is E over SPREAD on each side that has ground; the load is the pressure at rest of what lies
behind the wall and is dug in front of it. Round an axis everything is per radian, the hoop a spring EA_hoop/R^2.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from section_reading import Json, bars_of, is_dug, material_at, soil_value, walls_of
from space_frame import Frame

Array = np.ndarray
SPREAD = 5.0
"""Depth of ground that a spring stands for, m; an analyst's choice."""
STEP = 0.5
BESIDE = 0.3


@dataclass
class FrameAnswer:
    """Forces of the supports (kN per m or rad) and of one real member each, movements down the walls (x, y, z, turns).

    `closure` is what the sum of horizontal forces leaves, kN per m or rad.
    """

    forces: dict[str, float]
    one_member: dict[str, float]
    movement: dict[str, Array]
    levels: dict[str, Array]
    closure: float
    applied: float
    missing: list[str]


class FrameModel:
    """The frame of one section."""

    def __init__(self, section: Json, *, ground: bool = True, pressure: float | None = None) -> None:
        """`ground` False leaves the springs of the ground out; `pressure` stands in for that at rest, on every wall."""
        self.section, self.ring = section, section["kind"] == "axisymmetric"
        self.walls, no_wall = walls_of(section)
        self.bars, no_bar = bars_of(section)
        self.missing = [*no_wall, *no_bar]
        self.on_ground, self.pressure = ground, pressure

    def levels_of(self, wall: Json) -> Array:
        """Levels of the nodes of a wall, from its top down."""
        (_, top), (_, toe) = wall["points"]
        marks = {top, toe}
        for bar in self.bars:
            for at, on in ((bar.head, bar.head_on), (bar.far, bar.far_on)):
                if on == wall["id"]:
                    marks.add(min(max(at[1], toe), top))
        fine = np.linspace(top, toe, int(np.ceil((top - toe) / STEP)) + 1)
        far = [z for z in fine if min(abs(z - mark) for mark in marks) > 0.05]
        return np.array(sorted({*far, *marks}, reverse=True))

    def solve(self) -> FrameAnswer:
        """Put the pressure and the preloads on."""
        levels = {wall["id"]: self.levels_of(wall) for wall in self.walls}
        first, places = {}, []
        for wall in self.walls:
            first[wall["id"]] = len(places)
            places += [(wall["points"][0][0], 0.0, z) for z in levels[wall["id"]]]
        ends = len(places)
        for bar in self.bars:
            places += [(bar.head[0], 0.0, bar.head[1]), (bar.far[0], 0.0, bar.far[1])]
        frame = Frame(np.array(places, dtype=float))
        for wall in self.walls:
            self._wall(frame, wall, first[wall["id"]], levels[wall["id"]])
        applied = float(frame.load[0::6].sum())
        for k, bar in enumerate(self.bars):
            nodes = []
            for j, (at, on) in enumerate(((bar.head, bar.head_on), (bar.far, bar.far_on))):
                node = ends + 2 * k + j
                if on in first:
                    node = first[on] + int(np.argmin(np.abs(levels[on] - at[1])))
                nodes.append(node)
            self._bar(frame, bar.head, bar.far, nodes, bar.stiffness, bar.preload)
        frame.hold(range(len(places)), (1, 3, 5))
        frame.hold(range(ends, len(places)), (0, 2, 4))
        u = frame.solve()
        forces = {bar.id: frame.force(k, u) for k, bar in enumerate(self.bars)}
        return FrameAnswer(
            forces=forces,
            one_member={bar.id: forces[bar.id] * bar.N_back for bar in self.bars},
            movement={w["id"]: u[first[w["id"]] : first[w["id"]] + len(levels[w["id"]])] for w in self.walls},
            levels=levels,
            closure=frame.left_over(0, u),
            applied=applied,
            missing=self.missing,
        )

    def _bar(self, frame: Frame, head: Array, far: Array, nodes: list[int], stiffness: float, before: float) -> None:
        """A bar in the direction it is drawn, whatever the exact places of its nodes."""
        a, b = nodes
        kept = frame.nodes[a].copy(), frame.nodes[b].copy()
        frame.nodes[a], frame.nodes[b] = (head[0], 0.0, head[1]), (far[0], 0.0, far[1])
        frame.bar(a, b, stiffness, before)
        frame.nodes[a], frame.nodes[b] = kept

    def _wall(self, frame: Frame, wall: Json, first: int, z: Array) -> None:
        made, x = wall["section"], wall["points"][0][0]
        r = x if self.ring else 1.0
        EI = made["EI_vertical_kNm2_per_m" if self.ring else "EI_kNm2_per_m"]
        EA = made["EA_vertical_kN_per_m" if self.ring else "EA_kN_per_m"]
        hoop = (made["EA_hoop_kN_per_m"] or 0.0) / x**2 if self.ring else 0.0
        for k in range(len(z) - 1):
            frame.beam(first + k, first + k + 1, r * EA, r * EI)
        middles = np.concatenate(([z[0]], (z[:-1] + z[1:]) / 2, [z[-1]]))
        width = -np.diff(middles)
        back = -1.0 if wall["side"] == "left" else 1.0
        for k, (level, share) in enumerate(zip(z, width, strict=True)):
            frame.spring(first + k, 0, r * share * (self.bed(x, level) + hoop))
            frame.load[6 * (first + k)] -= r * share * back * self._push(x, level, back)
        frame.hold([first + len(z) - 1], [2])

    def bed(self, x: float, z: float) -> float:
        """Spring of the ground on both sides of a wall, kPa/m."""
        return sum(self._spring(x + way * BESIDE, z) for way in (-1.0, 1.0)) if self.on_ground else 0.0

    def _spring(self, x: float, z: float) -> float:
        name = material_at(self.section, x, z)
        if name is None or is_dug(self.section, x, z):
            return 0.0
        return soil_value(self.section["materials"], name, "E", z) / SPREAD

    def _push(self, x: float, z: float, back: float) -> float:
        """Pressure at rest set free by the dig in front, kPa."""
        if self.pressure is not None:
            return self.pressure
        front, behind = x - back * BESIDE, x + back * BESIDE
        name = material_at(self.section, behind, z - 1e-6)
        if name is None or not is_dug(self.section, front, z):
            return 0.0
        top = max(p[1] for p in self.section["ground"]["surface"])
        materials = self.section["materials"]
        depth = np.arange(top - 0.05, z, -0.1)
        names = [(material_at(self.section, behind, level), level) for level in depth]
        down = 0.1 * sum(soil_value(materials, one, "unit_weight", level) for one, level in names if one)
        return soil_value(materials, name, "K0", z) * down
