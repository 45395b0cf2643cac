"""The invented sites, end to end: what was built into them by their scripts comes out again.

Figures are those of the scripts in `samples/`; whatever is computed from them has its source beside it. The checks that
any script can make of the written files stand in `test_sample_files.py`.
"""

from __future__ import annotations

import subprocess
import sys
from math import atan, atan2, cos, degrees, hypot, pi, radians, sin
from pathlib import Path

import numpy as np
import pytest

from ingest.model import Site
from ingest.site import read_site
from sections.found import FoundPit
from sections.model import Member, Pit
from sections.pit.find import find_pits
from sections.pit.ground import find_bedding

SAMPLES = Path(__file__).parents[1] / "samples"
SITES = ("tannery_lane", "quarry_road", "weir_shaft")
INPUTS = (".ifc", ".dxf", ".ags")


def inputs_of(name: str) -> list[Path]:
    return sorted(path for path in (SAMPLES / name).iterdir() if path.suffix in INPUTS)


def read(name: str) -> tuple[Site, FoundPit]:
    site = read_site(inputs_of(name), SAMPLES / name / "brief.toml")
    (found,) = find_pits(site)
    return site, found


@pytest.fixture(scope="module")
def tannery() -> tuple[Site, FoundPit]:
    return read("tannery_lane")


@pytest.fixture(scope="module")
def quarry() -> tuple[Site, FoundPit]:
    return read("quarry_road")


@pytest.fixture(scope="module")
def shaft() -> tuple[Site, FoundPit]:
    return read("weir_shaft")


def rows(pit: Pit, role: str) -> list[Member]:
    return [member for member in pit.members if member.role == role]


@pytest.mark.parametrize("name", SITES)
def test_the_script_of_a_site_makes_its_inputs_byte_for_byte(name: str, tmp_path: Path) -> None:
    script = SAMPLES / f"make_{name}.py"
    subprocess.run([sys.executable, str(script), str(tmp_path)], check=True, timeout=120)
    made = sorted(path.name for path in tmp_path.iterdir())
    assert made == [path.name for path in inputs_of(name)]
    for path in inputs_of(name):
        assert (tmp_path / path.name).read_bytes() == path.read_bytes(), path.name


@pytest.mark.parametrize("name", [*SITES, "first_pit", "first_pit_ifc"])
def test_a_site_says_that_it_is_invented_and_is_small(name: str) -> None:
    assert "invented" in (SAMPLES / name / "README.md").read_text()
    assert max(path.stat().st_size for path in (SAMPLES / name).iterdir()) < 1_000_000


@pytest.mark.parametrize("name", SITES)
def test_every_entity_is_accounted_for_and_nothing_is_in_doubt(name: str) -> None:
    site, found = read(name)
    for book in site.ledger.values():
        assert book.entities == book.used + book.context + book.ignored
        assert not book.losses
    assert not site.questions
    assert not found.questions


# ---- Tannery Lane ---------------------------------------------------------------------------------------------------

SLANT = degrees(atan2(24, 7))
"""The eastern side runs 7 m back on 24 m: its corners are 73.74 and 106.26 degrees."""


def test_tannery_lane_has_six_unequal_sides_two_of_them_askew_and_one_re_entrant_corner(
    tannery: tuple[Site, FoundPit],
) -> None:
    pit = tannery[1].pit
    assert pit.closed
    assert pit.length == pytest.approx(48 + 25 + 17 + 13 + 24 + 37, abs=1e-3)
    assert [corner.at for corner in pit.corners] == pytest.approx([0, 48, 73, 90, 103, 127], abs=1e-3)
    angles = [90, SLANT, 180 - SLANT, 270, 90, 90]
    assert [corner.interior_angle for corner in pit.corners] == pytest.approx(angles, abs=1e-3)
    assert [c.kind for c in pit.corners] == ["inside", "inside", "inside", "re-entrant", "inside", "inside"]


def test_tannery_lane_lies_where_its_map_conversion_puts_it(tannery: tuple[Site, FoundPit]) -> None:
    # Origin (438250, 286120), turned by 12 degrees; the model is in millimetres.
    c, s = cos(radians(12)), sin(radians(12))
    corners = ((0, 0), (48, 0), (41, 24), (24, 24), (24, 37), (0, 37))
    world = np.array([(438250 + c * x - s * y, 286120 + s * x + c * y) for x, y in corners])
    assert np.array(tannery[1].pit.perimeter) == pytest.approx(world, abs=1e-3)
    assert tannery[0].frame.offset == (438000.0, 286000.0, 0.0)


def test_tannery_lane_has_a_secant_wall_along_the_canal_whose_males_bend(tannery: tuple[Site, FoundPit]) -> None:
    secant, contiguous = tannery[1].pit.runs
    assert (secant.start, secant.to) == pytest.approx((0, 48), abs=1e-3)
    assert (secant.wall.kind, secant.wall.count, secant.wall.diameter) == ("secant", 64, pytest.approx(1.0))
    assert secant.wall.centres == pytest.approx(0.75, abs=1e-4)
    assert secant.wall.structural is not None
    assert (secant.wall.structural.which, secant.wall.structural.count) == ("male", 32)
    assert secant.wall.structural.spacing == pytest.approx(1.5, abs=1e-4)
    assert (secant.wall.toe, secant.wall.material) == (-13.0, "C32/40")  # of the males; the females stop at -6
    wall = contiguous.wall
    assert (wall.kind, wall.count, wall.toe) == ("contiguous", 25 + 17 + 13 + 24 + 37, -12.0)
    assert wall.diameter == pytest.approx(0.9)


def test_tannery_lane_has_three_levels_of_struts_in_four_rows_each(tannery: tuple[Site, FoundPit]) -> None:
    struts = rows(tannery[1].pit, "strut")
    assert [strut.level for strut in struts] == pytest.approx([7.4, 3.8, 0.4] * 4)
    # Rows by chainage: across to the north wall, across to the re-entrant wall, to the slanting street, to the nook.
    # The third is 4.5 m apart square to itself, so 4.5 / sin(slant) along the slanting wall that its heads stand on.
    for level in range(3):
        found = [(s.count, s.spacing, s.skew) for s in struts[level::3]]
        askew = 90 - SLANT
        expected = [(4, 4.0, 0.0), (4, 4.5, 0.0), (4, 4.5 / sin(radians(SLANT)), askew), (2, 4.0, 0.0)]
        assert [value for row in found for value in row] == pytest.approx(
            [v for row in expected for v in row], abs=1e-4
        )


def test_tannery_lane_has_a_corner_strut_at_four_of_its_corners_and_level(tannery: tuple[Site, FoundPit]) -> None:
    corner = rows(tannery[1].pit, "corner_strut")
    assert [strut.count for strut in corner] == [1] * 12
    # Equal distances from the corner along both walls: the strut is half the corner's angle off each normal.
    skews = [45.0, SLANT / 2, 45.0, 45.0]
    assert [strut.skew for strut in corner[::3]] == pytest.approx(skews, abs=1e-3)


def test_tannery_lane_has_a_waler_a_side_and_level_that_runs_from_corner_to_corner(
    tannery: tuple[Site, FoundPit],
) -> None:
    walers = rows(tannery[1].pit, "waler")
    assert len(walers) == 18
    sides = [(0, 48), (48, 73), (73, 90), (90, 103), (103, 127), (127, 164)]
    along = [[(a.start, a.to) for a in waler.along] for waler in walers[::3]]
    assert all(len(one) == 1 for one in along), along
    assert [value for one in along for value in one[0]] == pytest.approx([v for side in sides for v in side], abs=0.01)


def test_tannery_lane_stands_on_rows_of_piles_under_columns(tannery: tuple[Site, FoundPit]) -> None:
    site, found = tannery
    (piles,) = rows(found.pit, "bearing_pile")
    assert (piles.count, piles.level) == (13 + 13 + 6, pytest.approx(-2.8))
    assert piles.spacing == pytest.approx(3.0, abs=1e-3)
    (columns,) = rows(found.pit, "column")
    assert columns.count == 7 + 7 + 3
    assert columns.spacing == pytest.approx(6.0, abs=1e-3)
    bearing = [pile for pile in site.piles if pile.bearing]
    assert {(pile.material, pile.toe) for pile in bearing} == {("C32/40", -24.0)}  # named by the model


def test_tannery_lane_has_a_lift_pit_near_one_wall(tannery: tuple[Site, FoundPit]) -> None:
    found = tannery[1]
    assert [(floor.level, floor.dig_level) for floor in found.pit.floors] == [
        pytest.approx((-2.8, -3.1)),
        pytest.approx((-4.6, -4.9)),
    ]
    (step,) = found.pit.steps
    assert (step.drop, step.at) == (pytest.approx(1.8), ())
    # It lies 1.6 m off the wall axis from chainage 81 to 85 and is 1.8 m deeper: it rules within 1.5 times that.
    deep = found.stations.chainage[found.stations.floor < -4.0]
    reach = ((1.5 * 1.8) ** 2 - (1.6 - 0.45) ** 2) ** 0.5
    assert deep.min() == pytest.approx(81 - reach, abs=0.6)
    assert deep.max() == pytest.approx(85 + reach, abs=0.6)


def test_tannery_lane_has_columns_inside_streets_and_a_footing_outside_and_two_receptors(
    tannery: tuple[Site, FoundPit],
) -> None:
    pit = tannery[1].pit
    inside = [load for load in pit.loads if load.within_pit]
    assert [(load.kind, load.value) for load in inside] == [("point", 2400.0)] * 17
    outside = sorted((load.kind, load.value) for load in pit.loads if not load.within_pit)
    assert outside == [("area", 10.0), ("area", 10.0), ("footing", 160.0)]
    assert [(r.kind, round(r.distance, 3)) for r in pit.receptors] == [("building", 2.4), ("tunnel", 10.5)]


# ---- Quarry Road ----------------------------------------------------------------------------------------------------


def test_quarry_road_is_an_open_wall_of_king_posts_with_one_blunt_corner(quarry: tuple[Site, FoundPit]) -> None:
    site, found = quarry
    pit = found.pit
    assert not pit.closed
    assert pit.length == pytest.approx(21 * 2.4 + 13 * 2.4, abs=1e-3)
    assert pit.perimeter[0] == pytest.approx((2140.0, 4710.0))  # the dig, to the north, on the left going east
    (corner,) = pit.corners
    assert (corner.at, corner.interior_angle) == (pytest.approx(50.4, abs=1e-3), pytest.approx(180 - 25, abs=0.01))
    (run,) = pit.runs
    assert (run.wall.kind, run.wall.count, run.wall.post) == ("king_post", 35, "UC 305x305x118")
    assert run.wall.centres == pytest.approx(2.4, abs=1e-3)
    # UC 305x305x118: A = 150 cm2, I = 27670 cm4 (handbook tables to BS 4-1, recalled).
    section = next(pile.section for pile in site.piles if pile.section is not None)
    area, second = section.A, section.I
    assert area == pytest.approx(150e-4, rel=0.005)
    assert second == pytest.approx(27670e-8, rel=0.005)


def test_quarry_road_has_two_rows_of_anchors_and_the_lower_one_stops_at_the_step(
    quarry: tuple[Site, FoundPit],
) -> None:
    found = quarry[1]
    upper, lower = rows(found.pit, "anchor")
    assert (upper.count, lower.count) == (21, 11)
    for row, level, dip, free, bond in ((upper, 110.6, 15.0, 7.0, 5.5), (lower, 107.6, 20.0, 5.5, 5.2)):
        assert row.spacing == pytest.approx(2.4, abs=1e-3)
        values = (row.level, row.inclination, row.skew, row.free_length, row.bond_length)
        assert values == pytest.approx((level, dip, 0.0, free, bond), abs=1e-4)
        assert row.spacing_range is None
    # The upper dig stops at 107.8, above the lower row: its first anchor, at 25.2, stands for the wall from 24.0.
    held = [found.rows.index(row) for row in found.rows if row.member.id == lower.id]
    covered = [c for c, rows_ in zip(found.stations.chainage, found.stations.supports, strict=True) if held[0] in rows_]
    assert min(covered) == pytest.approx(24.0, abs=1e-3)
    assert found.rows[held[0]].tributary_head[0] == pytest.approx(2.4, abs=1e-3)


def test_quarry_road_has_rakers_down_to_a_strip_in_the_dig(quarry: tuple[Site, FoundPit]) -> None:
    site, found = quarry
    (rakers,) = rows(found.pit, "raker")
    assert (rakers.count, rakers.level) == (6, pytest.approx(110.2))
    assert (rakers.spacing, rakers.inclination) == (pytest.approx(4.8, abs=1e-3), pytest.approx(35.0, abs=1e-6))
    feet = [support.far for support in site.supports if support.role == "raker"]
    assert [z for _, _, z in feet] == pytest.approx([110.2 - 7.0 * 0.70020754] * 6, abs=1e-3)  # tan 35
    assert len(rows(found.pit, "slab")) == 1


def test_quarry_road_steps_from_the_upper_to_the_lower_dig(quarry: tuple[Site, FoundPit]) -> None:
    stations, pit = quarry[1].stations, quarry[1].pit
    (step,) = pit.steps
    assert (step.drop, step.at) == (pytest.approx(2.6), pytest.approx((24.0,), abs=1e-3))
    west, east = stations.chainage < 24.0 - 1e-6, stations.chainage > 24.0 + 1e-6
    assert set(np.round(stations.floor[west], 6)) == {107.8}
    assert set(np.round(stations.floor[east], 6)) == {105.2}


def test_the_strata_of_quarry_road_fall_along_the_wall(quarry: tuple[Site, FoundPit]) -> None:
    mudstone = next(bed for bed in find_bedding(quarry[0]) if bed.name == "mudstone")
    assert mudstone.dip == pytest.approx(degrees(atan(1 / 12)), abs=0.05)
    assert mudstone.dip_direction == pytest.approx(90.0, abs=0.5)  # east
    ended = [zone.ended_by for zone in quarry[1].pit.zones]
    assert any("top of mudstone drops" in why for why in ended)


def test_quarry_road_carries_a_road_along_its_wall_and_rails_towards_it(quarry: tuple[Site, FoundPit]) -> None:
    loads = sorted((load.kind, load.value, load.within_pit) for load in quarry[1].pit.loads)
    assert loads == [("area", 20.0, False), ("line", 85.0, False), ("line", 85.0, False)]
    for load in quarry[1].pit.loads:
        if load.kind == "line":
            (x1, y1), (x2, y2) = load.points
            # Square to the eastern leg, which runs 25 degrees north of east.
            assert (x2 - x1) * cos(radians(25)) + (y2 - y1) * sin(radians(25)) == pytest.approx(0.0, abs=1e-3)
            assert hypot(x2 - x1, y2 - y1) == pytest.approx(22.5, abs=1e-3)


# ---- Weir Shaft -----------------------------------------------------------------------------------------------------


def test_weir_shaft_is_a_ring_of_twelve_sides(shaft: tuple[Site, FoundPit]) -> None:
    pit = shaft[1].pit
    assert pit.closed
    assert pit.circle is not None
    assert pit.circle.sides == 12
    assert pit.circle.centre == pytest.approx((412.0, 618.0), abs=1e-4)
    assert pit.circle.radius == pytest.approx(7.5 / cos(pi / 12), abs=1e-4)  # corners of a figure of apothem 7.5 m
    assert pit.circle.deviation == pytest.approx(0.0, abs=1e-4)
    assert pit.length == pytest.approx(12 * 2 * 7.5 * 0.26794919, abs=1e-3)  # tan 15
    assert [corner.interior_angle for corner in pit.corners] == pytest.approx([150.0] * 12, abs=1e-3)
    assert shaft[1].stations.ring


def test_weir_shaft_is_of_diaphragm_panels_with_ring_beams_and_one_prop(shaft: tuple[Site, FoundPit]) -> None:
    site, found = shaft
    (run,) = found.pit.runs
    assert (run.wall.kind, run.wall.thickness, run.wall.toe) == ("diaphragm", pytest.approx(1.2), -3.0)
    beams = rows(found.pit, "waler")
    assert [beam.level for beam in beams] == [22.6, 16.0, 9.5]
    assert [(a.start, a.to) for beam in beams for a in beam.along] == [(0.0, pytest.approx(found.pit.length))] * 3
    (prop,) = rows(found.pit, "strut")
    assert (prop.count, prop.level, len(prop.along)) == (1, 12.6, 2)
    assert [round(support.EA or 0.0) for support in site.supports] == [
        round(210e6 * pi * (0.813**2 - 0.773**2) / 4)  # CHS 813x20
    ]


def test_weir_shaft_mirrors_about_twelve_axes_until_prop_and_crane_are_looked_at(
    shaft: tuple[Site, FoundPit],
) -> None:
    axes = shaft[1].pit.symmetry
    assert [axis.direction for axis in axes] == pytest.approx([15.0 * n for n in range(12)], abs=1e-3)
    assert not any(axis.complete for axis in axes)
    # The prop lies 30 degrees off the easting axis: only the axes along and across it leave it in place.
    kept = [round(axis.direction) for axis in axes if not any("supports" in why for why in axis.broken_by)]
    assert kept == [30, 120]


def test_the_tower_crane_of_weir_shaft_stands_askew_outside_it(shaft: tuple[Site, FoundPit]) -> None:
    (load,) = shaft[1].pit.loads
    assert (load.kind, load.value, load.within_pit) == ("footing", 130.0, False)
    edges = np.diff(np.array([*load.points, load.points[0]]), axis=0)
    assert np.hypot(*edges.T) == pytest.approx([6.0] * 4, abs=1e-3)
    turn = np.mod(np.degrees(np.arctan2(edges[:, 1], edges[:, 0])), 90.0)
    assert turn == pytest.approx([23.0] * 4, abs=0.01)
