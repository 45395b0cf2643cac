"""Checks of sense on whole pits: what must be 1 is 1, symmetry stays, and how a pit is drawn changes nothing."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st
from pit_sites import anchor, box, moved, moved_support, rectangle, shape_of, strut

from ingest.members import Load, Material, Point, Support
from ingest.model import OUTPUTS, Limits, Site, Stratum
from sections.criteria.screening import screening
from sections.found import FoundPit
from sections.model import Wall
from sections.pit.find import describe_pits
from sections.screening.run import VariantRatios, run_variant
from sections.screening.scene import Scene, Variant, make_scene

PANELS = Wall(kind="diaphragm", thickness=0.8, top=0.0, toe=-12.0, material="C", continuity="monolithic",
              capping_beam=False)  # fmt: skip
THIN = replace(PANELS, thickness=0.6)
GROUND = Stratum(name="sand", top_level=0.0, unit_weight=19.0, E=10e3, E_gradient=3e3, nu=0.3, K0=0.5)
STRONG = replace(GROUND, phi=32.0, c=2.0)
WHOLE = Variant(name="whole", along=1.0, membrane=True, beam_EI=0.0)
DEFLECTION, EXCAVATED, RETAINED, FORCE = range(4)


def site(supports: tuple[Support, ...] = (), ground: Stratum = GROUND, **more: object) -> Site:
    given_ = {
        "ground_level": 0.0, "wall_top": 0.0, "formation": -7.0, "dig_allowance": 0.0, "strata": (ground,),
        "supports": supports, "materials": (Material(id="C", kind="concrete", E=30e6),),
    }  # fmt: skip
    return Site(**{**given_, **more})  # type: ignore[arg-type]


def screened(
    one: Site, corners: list[Point], runs: list[tuple[float, float, Wall]], closed: bool = True
) -> tuple[FoundPit, Scene, VariantRatios]:
    found = describe_pits(one, (shape_of(corners, runs, closed=closed),))[0]
    scene, why = make_scene(one, found)
    assert scene is not None, why
    return found, scene, run_variant(scene, WHOLE)


def whole(length: float) -> list[tuple[float, float, Wall]]:
    return [(0.0, length, PANELS)]


def at_points(scene: Scene, ratio: np.ndarray, points: np.ndarray) -> np.ndarray:
    """Ratios of the facets whose middles are nearest to points."""
    ends = np.vstack([scene.grid.points, scene.grid.points[:1]]) if scene.grid.closed else scene.grid.points
    middles = (ends[1:] + ends[:-1]) / 2
    gaps = np.linalg.norm(middles[None] - points[:, None], axis=2)
    assert gaps.min(axis=1).max() < 1e-6
    return ratio[gaps.argmin(axis=1)]


def middles(scene: Scene) -> np.ndarray:
    ends = np.vstack([scene.grid.points, scene.grid.points[:1]]) if scene.grid.closed else scene.grid.points
    return (ends[1:] + ends[:-1]) / 2


def even_struts(
    length: float, width: float, EA: float = 4e5, spacing: float = 2.0, level: float = -2.0
) -> tuple[Support, ...]:
    places = np.arange(spacing / 2, length, spacing)
    return tuple(strut((float(x), 0.0), (float(x), width), level, f"S{x}", EA=EA) for x in places)


def even_anchors(
    length: float, y: float, inward: Point, level: float, EA: float = 2e5, **more: float
) -> tuple[Support, ...]:
    places = np.arange(1.0, length, 2.0)
    return tuple(anchor((float(x), y), inward, level, free_length=15.0, EA=EA, **more) for x in places)


@pytest.mark.parametrize("ground", [GROUND, STRONG], ids=["linear", "limited"])
@pytest.mark.parametrize("dip", [0.0, 25.0])
def test_the_middle_of_a_long_anchored_wall_has_the_ratio_one_in_every_output(ground: Stratum, dip: float) -> None:
    # an open wall 70 m long, anchors at 2 m on one level: nothing there is three-dimensional but the spacing
    held = even_anchors(70.0, 0.0, (0.0, 1.0), -2.0, dip=dip)
    _, scene, run = screened(site(held, ground), [(0.0, 0.0), (70.0, 0.0)], whole(70.0), closed=False)
    middle = np.abs(scene.grid.middles - 35.0) < 4.0
    assert run.settled
    assert run.ratio[middle][:, [DEFLECTION, EXCAVATED]] == pytest.approx(1.0, abs=0.005)
    assert run.ratio[middle][:, RETAINED] == pytest.approx(1.0, abs=0.02)
    assert run.ratio[middle][:, FORCE] == pytest.approx(1.0, abs=0.01)


@settings(max_examples=4, phases=(Phase.generate,))
@given(
    st.floats(0.0, 30.0), st.booleans(), st.booleans(), st.booleans(), st.sampled_from([1e5, 4e5, 2e6])
)  # fmt: skip
def test_a_long_pit_with_unlike_sides_is_still_plane_in_its_middle(
    surcharge: float, thin: bool, anchored: bool, limited: bool, EA: float
) -> None:
    # whatever differs between the two long walls, a section through the middle of 70 m holds all of it
    length, width = 70.0, 14.0
    supports = even_struts(length, width, EA)
    if anchored:
        supports += even_anchors(length, width, (0.0, -1.0), -4.0, dip=0.0)
    load = Load(id="Q", kind="area", value=surcharge, points=box(-50.0, -60.0, 200.0, 60.0), level=0.0)
    runs = [(0.0, length, PANELS), (length, 2 * (length + width), THIN if thin else PANELS)]
    one = site(supports, STRONG if limited else GROUND, loads=(load,))
    _, scene, run = screened(one, rectangle(length, width, 0.0, 0.0), runs)
    points = middles(scene)
    middle = (np.abs(points[:, 0] - length / 2) < 3.0) & run.settled
    assert middle.any()
    assert run.ratio[middle][:, [DEFLECTION, FORCE]] == pytest.approx(1.0, abs=0.025)
    assert run.ratio[middle][:, EXCAVATED] == pytest.approx(1.0, abs=0.04)
    # below 1 only where it is taken against a quarter of the largest moment of the section
    assert np.all(run.ratio[middle][:, RETAINED] < 1.02)


def test_corner_struts_between_two_like_walls_give_one_ratio_on_both() -> None:
    # a square with struts across two opposite corners: the diagonal is a mirror line, and the forces push the wall back
    corner = tuple(strut((d, 0.0), (0.0, d), -2.0, f"C{d}", role="corner_strut", EA=3e5) for d in (3.0, 6.0, 9.0))
    other = tuple(strut((16.0 - d, 16.0), (16.0, 16.0 - d), -2.0, f"D{d}", role="corner_strut", EA=3e5)
                  for d in (3.0, 6.0, 9.0))  # fmt: skip
    _, scene, run = screened(site((*corner, *other)), rectangle(16.0, 16.0, 0.0, 0.0), whole(64.0))
    points = middles(scene)
    mirrored = at_points(scene, run.ratio, points[:, ::-1])
    assert np.allclose(run.ratio, mirrored, atol=1e-6, equal_nan=True)
    assert np.nanmin(run.ratio[:, FORCE]) > 0.0


@settings(max_examples=4, phases=(Phase.generate,))
@given(st.floats(10.0, 30.0), st.floats(8.0, 20.0), st.booleans())
def test_a_symmetric_pit_has_symmetric_ratios(length: float, width: float, limited: bool) -> None:
    bays = max(2, round(length / 4))
    places = (np.arange(bays) + 0.5) * length / bays
    props = tuple(strut((float(x), 0.0), (float(x), width), -2.0, f"S{x}", EA=4e5) for x in places)
    one = site(props, STRONG if limited else GROUND)
    _, scene, run = screened(one, rectangle(length, width, 0.0, 0.0), whole(2 * (length + width)))
    points = middles(scene)
    for image in (np.array([length, 0.0]) + points * [-1, 1], np.array([0.0, width]) + points * [1, -1]):
        mirrored = at_points(scene, run.ratio, image)
        assert np.allclose(run.ratio[:, :FORCE], mirrored[:, :FORCE], rtol=2e-3, atol=1e-4)
        # half way between two struts either may stand for the facet
        one_strut = np.ptp(np.sort(np.abs(points[:, :1] - places), axis=1)[:, :2], axis=1) > 1e-3
        assert np.allclose(run.ratio[one_strut, FORCE], mirrored[one_strut, FORCE], rtol=2e-3, equal_nan=True)


@settings(max_examples=4, phases=(Phase.generate,))
@given(st.floats(-180.0, 180.0), st.floats(-1e4, 1e4), st.floats(5.0, 55.0))
def test_turning_moving_and_splitting_a_pit_changes_no_ratio(angle: float, shift: float, cut: float) -> None:
    length, width = 20.0, 12.0
    props = even_struts(length, width, spacing=4.0)
    _, scene, run = screened(site(props), rectangle(length, width, 0.0, 0.0), whole(64.0))
    turned = tuple(moved_support(p, angle, (shift, -shift)) for p in props)
    corners = moved(rectangle(length, width, 0.0, 0.0), angle, (shift, -shift))
    runs = [(0.0, cut, PANELS), (cut, 64.0, PANELS)]
    _, again, other = screened(site(turned), corners, runs)
    for k in range(4):
        known = ~np.isnan(other.ratio[:, k])
        read = np.interp(scene.grid.middles, again.grid.middles[known], other.ratio[known, k])
        # a facet at a corner may lie on either wall; half way between two struts either may stand for the facet
        doubt = np.array([0.0, 20.0, 32.0, 52.0, 64.0, *(np.arange(4.0, 52.0, 4.0) if k == FORCE else ())])
        away = np.min(np.abs(scene.grid.middles[:, None] - doubt), axis=1) > 1.0
        here = away & ~np.isnan(run.ratio[:, k])
        assert read[here] == pytest.approx(run.ratio[here, k], abs=0.02)


def test_earth_pressures_that_find_no_balance_leave_every_output_not_assessed(monkeypatch: pytest.MonkeyPatch) -> None:
    one = site(even_anchors(30.0, 0.0, (0.0, 1.0), -2.0), replace(STRONG, phi=20.0))
    found, _, run = screened(one, [(0.0, 0.0), (30.0, 0.0)], whole(30.0), closed=False)
    assert run.settled
    assert screening(one, found, Limits()).assessed[:, : len(OUTPUTS[:4])].all()
    monkeypatch.setattr("sections.screening.limits.MOST_STEPS", 1)
    said = screening(one, found, Limits())
    assert not said.assessed.any()
    assert "no balance" in said.sentence[0]
