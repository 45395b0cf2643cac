"""Two independent readers of the JSON rebuild every section: statics close, and real members come back as in space.

The readers (`plane_model.py` with scikit-fem, `frame_model.py` with a small textbook frame) import nothing of the tool.
"""

from __future__ import annotations

import ast
import json
from collections.abc import Sequence
from dataclasses import replace
from math import cos, pi, radians, sin, tan
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from builders_cut import make_cut
from frame_model import FrameModel
from pit_sites import PANEL, PILES, anchor, found, rectangle, shape_of, site_of, strut
from plane_model import PlaneModel
from space_frame import Frame

from export.cli import main
from export.section_json import section_text
from ingest.members import Material, Point, Support
from ingest.model import Site, Stratum
from sections.found import FoundPit
from sections.model import Circle, Structural, Wall
from sections.section.cut import Cut
from sections.section.define import Judged, define_section

Json = dict[str, Any]
SAMPLES = Path(__file__).parents[2] / "samples"
SITES = ["first_pit"] + [
    pytest.param(name, marks=pytest.mark.slow) for name in ("tannery_lane", "quarry_road", "weir_shaft")
]  # type: ignore[list-item]
EA = 210e6 * 0.02473061737  # CHS 508 x 16
CONCRETE = Material(id="C30", kind="concrete", E=33e6, unit_weight=25.0)
WALL = replace(
    PILES, material="C30", EI_factor=0.7, structural=Structural(which="all", count=100, spacing=PILES.centres)
)
CLAY = Stratum(name="clay", top_level=0.0, unit_weight=20.0, E=30e3, E_gradient=2e3, nu=0.3, K0=0.8)
PRESSURE = 60.0


@pytest.mark.parametrize("name", ["plane_model", "frame_model", "space_frame", "section_reading"])
def test_the_readers_know_nothing_of_the_tool(name: str) -> None:
    tree = ast.parse((Path(__file__).parent / f"{name}.py").read_text())
    named = [node.module or "" for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)]
    named += [one.name for node in ast.walk(tree) if isinstance(node, ast.Import) for one in node.names]
    assert not {module.split(".")[0] for module in named} & {"ingest", "sections", "export"}


@pytest.mark.parametrize("name", SITES)
def test_both_readers_rebuild_every_section_of_a_sample_and_its_statics_close(name: str, tmp_path: Path) -> None:
    folder, out = SAMPLES / name, tmp_path / "out"
    inputs = sorted(str(path) for path in folder.iterdir() if path.suffix in (".ifc", ".dxf", ".ags"))
    assert main(["propose", *inputs, "--brief", str(folder / "brief.toml"), "--out", str(out), "--quiet"]) == 0
    sections = [json.loads(path.read_text()) for path in sorted((out / "sections").glob("*.json"))]
    assert sections
    for section in sections:
        plane, frame = PlaneModel(section).solve(), FrameModel(section).solve()
        size = abs(plane.applied[1])
        assert abs(plane.closure[1]) < 1e-9 * size, section["id"]
        if section["kind"] == "plane_strain":
            assert abs(plane.closure[0]) < 1e-9 * size, section["id"]
        assert abs(frame.closure) < 1e-9 * size, section["id"]
        assert 0.0 < plane.movement < 0.2
        # What neither could draw stiff is named to the engineer.
        told = {finding["where"] for finding in section["findings"]}
        assert set(plane.missing) <= told, section["id"]
        assert plane.forces.keys() == frame.forces.keys()


def test_ground_at_rest_that_nobody_digs_does_not_move() -> None:
    """The release of a pit without a dig is nothing: weight and stress at rest hold each other."""
    section, _ = make_section(rectangle(), (115, 182), (115, 238), [15.0, 65.0], struts())
    for stage in section["stages"]:
        stage["dig"] = []
    for member in section["members"]:
        member["section"]["preload_kN_per_m"] = None
    assert PlaneModel(section).solve().movement < 1e-9


# ---- real members in space against the smeared section ---------------------------------------------------------------


def make_section(
    corners: Sequence[Point], start: Point, end: Point, at: list[float], supports: Sequence[Support], wall: Wall = WALL
) -> tuple[Json, FoundPit]:
    site = site_of(supports=tuple(supports), materials=(CONCRETE,), strata=(CLAY,))
    shape = shape_of(corners)
    pit = found(replace(shape, runs=tuple(replace(run, wall=wall) for run in shape.runs)), **_given(site))
    return _json(site, make_cut(pit, start, end, at)), pit


def _given(site: Site) -> dict[str, object]:
    return {"supports": site.supports, "materials": site.materials, "strata": site.strata}


def _json(site: Site, cut: Cut) -> Json:
    judged = Judged(id="S1", walls=(), criteria=(), verdicts={}, represents=(), score=None)
    return json.loads(section_text(define_section(site, cut, judged), None))  # type: ignore[no-any-return]


def struts(skew: float = 0.0, preload: float = -200.0) -> list[Support]:
    shift = 20.0 * tan(radians(skew))
    return [strut((x, 200.0), (x + shift, 220.0), EA=EA, preload=preload) for x in np.arange(102.5, 130.0 - shift, 5.0)]


class Strips:
    """Strips of real wall in space, each of the width one real member holds, with the ground as springs."""

    def __init__(self, section: Json, model: FrameModel, width: float) -> None:
        self.section, self.model, self.width = section, model, width
        self.places: list[tuple[float, float, float]] = []
        self.walls: list[tuple[int, np.ndarray, tuple[float, float], Json]] = []

    def wall(self, wall: Json, at: Point, into: tuple[float, float]) -> None:
        """A strip at a plan point, with the direction into the pit; levels as the smeared wall has them."""
        levels = self.model.levels_of(wall)
        self.walls.append((len(self.places), levels, into, wall))
        self.places += [(at[0], at[1], float(z)) for z in levels]

    def solve(
        self, bars: Sequence[tuple[tuple[int, float], tuple[int, float] | tuple[float, float, float], float]]
    ) -> list[float]:
        """Forces of real bars: (wall, level) to (wall, level) or to a fixed point, with the preload."""
        places, ends = list(self.places), []
        for _, far, _ in bars:
            if len(far) == 3:
                places.append(far)
        frame = Frame(np.array(places))
        for first, levels, into, wall in self.walls:
            self._strip(frame, first, levels, into, wall)
        fixed, numbers = len(self.places), []
        for near, far, preload in bars:
            a = self._node(near)  # type: ignore[arg-type]
            if len(far) == 3:
                b, fixed = fixed, fixed + 1
                ends.append(b)
            else:
                b = self._node(far)  # type: ignore[arg-type]
            numbers.append(frame.bar(a, b, EA / float(np.linalg.norm(frame.nodes[b] - frame.nodes[a])), preload))
        frame.hold(ends, range(6))
        self.movement = frame.solve()
        return [frame.force(number, self.movement) for number in numbers]

    def _node(self, place: tuple[int, float]) -> int:
        first, levels, _, _ = self.walls[place[0]]
        return first + int(np.argmin(np.abs(levels - place[1])))

    def _strip(self, frame: Frame, first: int, z: np.ndarray, into: tuple[float, float], wall: Json) -> None:
        real, piles = wall["real"], self.width / wall["real"]["spacing"]
        for k in range(len(z) - 1):
            frame.beam(first + k, first + k + 1, real["EA_kN"] * piles, 0.7 * real["EI_kNm2"] * piles)
        way = 0 if abs(into[0]) > 0.5 else 1
        share = -np.diff(np.concatenate(([z[0]], (z[:-1] + z[1:]) / 2, [z[-1]])))
        x = wall["points"][0][0]
        for k, (level, height) in enumerate(zip(z, share, strict=True)):
            frame.spring(first + k, way, self.width * height * self.model.bed(x, level))
            frame.load[6 * (first + k) + way] += self.width * height * PRESSURE * into[way]
        nodes = range(first, first + len(z))
        # The row repeats: no movement along the wall, no turn about the normal or the upright axis.
        frame.hold(nodes, (1 - way, 3 + way, 5))
        frame.hold([first + len(z) - 1], [2])


def drawn(section: Json, role: str) -> Json:
    return next(m for m in section["members"] if m["role"] == role and m["form"] == "bar")


def walls_in(section: Json) -> list[Json]:
    return [m for m in section["members"] if m["role"] == "wall"]


@pytest.mark.parametrize("skew", [0.0, 12.0, 25.0])
def test_struts_in_space_carry_what_the_section_gives_back(skew: float) -> None:
    section, _ = make_section(rectangle(), (115, 182), (115, 238), [15.0, 65.0], struts(skew))
    model = FrameModel(section, pressure=PRESSURE)
    answer = model.solve()
    member = drawn(section, "strut")
    assert member["real"]["skew"] == pytest.approx(skew) or member["real"]["skew"] == pytest.approx(-skew)
    space = Strips(section, model, member["real"]["spacing"])
    left, right = walls_in(section)
    space.wall(left, (112.5, 200.0), (0.0, 1.0))
    space.wall(right, (112.5 + 20.0 * tan(radians(skew)), 220.0), (0.0, -1.0))
    (force,) = space.solve([((0, -1.5), (1, -1.5), -200.0)])
    assert force < -200.0
    assert answer.one_member[member["id"]] == pytest.approx(force, rel=1e-6)
    first = space.movement[: len(answer.levels[left["id"]]), 1]
    assert answer.movement[left["id"]][:, 0] == pytest.approx(first, rel=1e-6, abs=1e-9)


@pytest.mark.parametrize(("dip", "skew"), [(0.0, 0.0), (25.0, 0.0), (30.0, 18.0)])
def test_anchors_in_space_carry_what_the_section_gives_back(dip: float, skew: float) -> None:
    free, c, s = 9.0, cos(radians(skew)), sin(radians(skew))
    row = [
        anchor((x, 200.0), (s, c), -2.0, length=15.0, dip=dip, EA=EA, preload=350.0, free_length=free, bond_length=6.0)
        for x in np.arange(105.0, 126.0, 2.5)
    ]
    section, _ = make_section(rectangle(), (115, 182), (115, 221), [15.0], row)
    model = FrameModel(section, pressure=PRESSURE)
    answer, member = model.solve(), drawn(section, "anchor")
    space = Strips(section, model, member["real"]["spacing"])
    (left,) = walls_in(section)
    space.wall(left, (115.0, 200.0), (0.0, 1.0))
    run, drop = free * cos(radians(dip)), free * sin(radians(dip))
    (force,) = space.solve([((0, -2.0), (115.0 - run * s, 200.0 - run * c, -2.0 - drop), 350.0)])
    assert answer.one_member[member["id"]] == pytest.approx(force, rel=1e-6)
    back = next(b for b in member["back"] if b["quantity"] == "N")
    per_metre = answer.forces[member["id"]]
    also = {one["gives"].split(" ")[0]: one["factor"] * per_metre for one in back["also"]}
    # The three parts of the real force: along the wall, down, and square to it.
    if skew:
        assert also["thrust"] == pytest.approx(force * cos(radians(dip)) * s, rel=1e-6)
    if dip:
        assert also["vertical"] == pytest.approx(force * sin(radians(dip)), rel=1e-6)
        assert also["horizontal"] == pytest.approx(force * cos(radians(dip)) * c, rel=1e-6)


def test_rakers_in_space_carry_what_the_section_gives_back() -> None:
    row = [
        Support(id="", role="raker", head=(x, 200.0, -1.0), far=(x + 1.0, 207.0, -5.5), EA=EA)
        for x in np.arange(105.0, 126.0, 4.0)
    ]
    section, _ = make_section(rectangle(), (115, 182), (115, 221), [15.0], row)
    model = FrameModel(section, pressure=PRESSURE)
    answer, member = model.solve(), drawn(section, "raker")
    space = Strips(section, model, member["real"]["spacing"])
    (left,) = walls_in(section)
    space.wall(left, (113.0, 200.0), (0.0, 1.0))
    (force,) = space.solve([((0, -1.0), (114.0, 207.0, -5.5), 0.0)])
    assert force < 0.0
    assert answer.one_member[member["id"]] == pytest.approx(force, rel=1e-6)


def test_a_corner_strut_between_two_walls_in_space_carries_what_the_section_gives_back() -> None:
    """Two like walls at a right angle, the strut at 45 degrees: both press, and it shortens from both ends."""
    strut_ = strut((104.0, 200.0), (100.0, 204.0), role="corner_strut", EA=EA, preload=-100.0)
    section, _ = make_section(rectangle(30.0, 30.0), (103, 182), (103, 221), [3.0], [strut_])
    model = FrameModel(section, pressure=PRESSURE)
    answer, member = model.solve(), drawn(section, "corner_strut")
    space = Strips(section, model, member["real"]["spacing"])
    (left,) = walls_in(section)
    space.wall(left, (104.0, 200.0), (0.0, 1.0))
    space.wall(left, (100.0, 204.0), (1.0, 0.0))
    (force,) = space.solve([((0, -1.5), (1, -1.5), -100.0)])
    assert answer.one_member[member["id"]] == pytest.approx(force, rel=1e-6)
    back = next(b for b in member["back"] if b["quantity"] == "N")
    thrust = next(one["factor"] for one in back["also"] if one["gives"].startswith("thrust"))
    assert thrust * answer.forces[member["id"]] == pytest.approx(force * sin(radians(45.0)), rel=1e-6)


# ---- the ring --------------------------------------------------------------------------------------------------------


def ring_section(supports: Sequence[Support] = ()) -> Json:
    R, centre = 12.5, (50.0, 50.0)
    corners = [(centre[0] + R * cos(radians(a)), centre[1] + R * sin(radians(a))) for a in range(0, 360, 3)]
    wall = replace(PANEL, material="C30", continuity="monolithic", EI_factor=1.0)
    site = site_of(materials=(CONCRETE,), strata=(CLAY,), supports=tuple(supports))
    length = 240 * R * sin(radians(1.5))
    shape = shape_of(corners, [(0.0, length, wall)], circle=Circle(centre=centre, radius=R, deviation=0.0, sides=None))
    pit = found(shape, **_given(site))
    return _json(site, make_cut(pit, centre, (centre[0] + 50.0, centre[1]), [0.0], kind="axisymmetric"))


def test_a_ring_under_even_pressure_moves_by_p_R2_over_E_t_and_carries_p_R() -> None:
    """Thin ring (statics): u = p R^2/(E t), hoop p R per metre of depth; E 33e6, t 0.8, R 12.5, p 200: 1.1837 mm."""
    section = ring_section()
    answer = FrameModel(section, ground=False, pressure=200.0).solve()
    (wall,) = walls_in(section)
    u = answer.movement[wall["id"]][:, 0]
    assert u == pytest.approx(np.full(len(u), -1.183712121e-3), rel=1e-6)
    hoop = wall["section"]["EA_hoop_kN_per_m"] * u / 12.5
    back = next(b for b in wall["back"] if b["quantity"] == "hoop")
    assert back["factor"] * hoop == pytest.approx(np.full(len(u), -2500.0), rel=1e-6)


def test_what_a_ring_of_anchors_takes_per_radian_sums_to_all_of_them() -> None:
    R, count = 12.5, 24
    ring = []
    for a in np.arange(0.5, 360.5, 360 / count):
        inward = (-cos(radians(a)), -sin(radians(a)))
        head = (50.0 - R * inward[0], 50.0 - R * inward[1])
        ring.append(anchor(head, inward, -3.0, length=15.0, dip=20.0, EA=EA, preload=400.0, free_length=9.0))
    section = ring_section(ring)
    answer = FrameModel(section, pressure=PRESSURE).solve()
    member = drawn(section, "anchor")
    per_radian = answer.forces[member["id"]]
    assert answer.one_member[member["id"]] * count == pytest.approx(2 * pi * per_radian, rel=1e-6)
    # Per metre of circumference the same force is R times less.
    per_metre = next(b for b in member["back"] if (b["quantity"], b["from_unit"]) == ("N", "kN/m"))
    assert per_metre["factor"] * per_radian / R == pytest.approx(answer.one_member[member["id"]], rel=1e-3)
