"""Ground: triangulated surfaces against an independent library, planes, pinching out, water, nearest borehole."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pit_sites import site_of
from scipy.interpolate import LinearNDInterpolator
from scipy.spatial import ConvexHull, Delaunay

from ingest.model import Borehole, Layer, Stratum
from sections.pit.ground import borehole_tops, find_bedding, layers_along, nearest_borehole, water_along
from sections.pit.tin import level_at, make_surface

CODES = (
    Stratum(name="made ground", from_boreholes="MG"),
    Stratum(name="gravel", from_boreholes="GR"),
    Stratum(name="clay", from_boreholes="CL"),
)


def hole(name, x, y, *layers, water=None):
    """A borehole by (code, top) pairs and its base."""
    tops = [top for _, top in layers[:-1]]
    bases = [*tops[1:], layers[-1]]
    listed = tuple(Layer(top=t, base=b, code=c) for (c, t), b in zip(layers[:-1], bases, strict=True))
    return Borehole(id=name, location=(x, y, tops[0]), layers=listed, water=water)


@settings(max_examples=30, deadline=None)
@given(st.integers(0, 10_000), st.integers(4, 25))
def test_inside_the_hull_the_surface_is_that_of_scipy(seed, count):
    # outside source: scipy, linear interpolation on its own Delaunay triangles of the same points
    rng = np.random.default_rng(seed)
    points = rng.uniform(0.0, 100.0, (count, 2)).round(2)
    if len(np.unique(points, axis=0)) < count:
        return
    levels = rng.uniform(-10.0, 0.0, count)
    surface = make_surface(points, levels)
    asked = rng.uniform(0.0, 100.0, (60, 2))
    theirs = LinearNDInterpolator(Delaunay(points), levels)(asked)
    inside = ~np.isnan(theirs)
    assert level_at(surface, asked)[inside] == pytest.approx(theirs[inside], abs=1e-6)
    assert surface.hull.area == pytest.approx(ConvexHull(points).volume)


@given(st.floats(-0.2, 0.2), st.floats(-0.2, 0.2))
def test_a_plane_is_a_plane_inside_and_beyond_the_hull(east, north):
    points = np.array([[0.0, 0.0], [50.0, 0.0], [50.0, 40.0], [0.0, 40.0], [20.0, 15.0]])
    surface = make_surface(points, -3.0 + points @ [east, north])
    asked = np.array([[25.0, 20.0], [150.0, -60.0], [-20.0, 20.0]])
    assert level_at(surface, asked) == pytest.approx(-3.0 + asked @ [east, north], abs=1e-9)
    assert surface.dip == pytest.approx(np.degrees(np.arctan(np.hypot(east, north))), abs=1e-6)


def test_dip_and_strike_by_hand():
    # falls 1 in 10 towards the east: dip atan(0.1) = 5.7106, dip direction 090, strike 000
    points = np.array([[0.0, 0.0], [50.0, 0.0], [50.0, 40.0], [0.0, 40.0]])
    surface = make_surface(points, -0.1 * points[:, 0])
    assert surface.dip == pytest.approx(5.710593, abs=1e-6)
    assert surface.dip_direction == pytest.approx(90.0)
    assert surface.strike == pytest.approx(0.0)
    level = make_surface(points, np.full(4, -2.0))
    assert (level.dip, level.dip_direction, level.strike) == (0.0, None, None)


def test_the_surface_has_no_step_at_the_edge_of_the_hull():
    rng = np.random.default_rng(3)
    points = rng.uniform(0.0, 100.0, (12, 2))
    surface = make_surface(points, rng.uniform(-10.0, 0.0, 12))
    edge = np.array([surface.hull.exterior.interpolate(t).coords[0] for t in np.linspace(0.0, 200.0, 40)])
    outward = edge - points.mean(axis=0)
    outward /= np.hypot(*outward.T)[:, None]
    assert level_at(surface, edge + 1e-4 * outward) == pytest.approx(level_at(surface, edge - 1e-4 * outward), abs=1e-3)


def test_one_two_and_collinear_boreholes():
    one = make_surface(np.array([[10.0, 10.0]]), np.array([-4.0]))
    assert level_at(one, np.array([[10.0, 10.0], [90.0, -5.0]])) == pytest.approx([-4.0, -4.0])
    two = make_surface(np.array([[0.0, 0.0], [20.0, 0.0]]), np.array([-4.0, -6.0]))
    # along the line 1 in 10, level across it, and on beyond its ends
    assert level_at(two, np.array([[10.0, 0.0], [10.0, 30.0], [40.0, 0.0]])) == pytest.approx([-5.0, -5.0, -8.0])
    three = make_surface(np.array([[0.0, 0.0], [10.0, 0.0], [20.0, 0.0]]), np.array([-4.0, -6.0, -4.0]))
    assert level_at(three, np.array([[5.0, 0.0], [15.0, 7.0]])) == pytest.approx([-5.0, -5.0])
    assert make_surface(np.array([[0.0, 0.0]]), np.array([np.nan])) is None


def test_horizontal_strata_lie_where_the_brief_puts_them():
    levels = layers_along(site_of(), [[0.0, 0.0], [50.0, 3.0]])
    assert levels.tolist() == [[0.0, 0.0], [-3.0, -3.0]]
    assert layers_along(site_of(strata=()), [[0.0, 0.0]]).shape == (0, 1)
    bare = layers_along(site_of(strata=(Stratum(name="clay"),)), [[0.0, 0.0]])
    assert np.isnan(bare).all()


def test_a_stratum_that_a_hole_misses_pinches_out_there():
    holes = (
        hole("B1", 0.0, 0.0, ("MG", 0.0), ("GR", -2.0), ("CL", -5.0), -20.0),
        hole("B2", 40.0, 0.0, ("MG", 0.0), ("CL", -3.0), -20.0),
    )
    site = site_of(strata=CODES, boreholes=holes)
    assert borehole_tops(site).tolist() == [[0.0, 0.0], [-2.0, -3.0], [-5.0, -3.0]]
    levels = layers_along(site, [[0.0, 0.0], [20.0, 0.0], [40.0, 0.0]])
    # gravel 3 m, then 1.5 m half way, then nothing
    assert levels[1] - levels[2] == pytest.approx([3.0, 1.5, 0.0])
    gravel = next(bed for bed in find_bedding(site) if bed.name == "gravel")
    assert gravel.pinched == ("B2",)
    assert gravel.thickness == (0.0, 3.0)


def test_a_hole_that_ends_early_says_nothing_of_what_lies_below():
    holes = (
        hole("B1", 0.0, 0.0, ("MG", 0.0), ("GR", -2.0), ("CL", -5.0), -20.0),
        hole("B2", 40.0, 0.0, ("MG", 0.0), -1.5),
    )
    tops = borehole_tops(site_of(strata=CODES, boreholes=holes))
    assert np.isnan(tops[1:, 1]).all()
    levels = layers_along(site_of(strata=CODES, boreholes=holes), [[40.0, 0.0]])
    assert levels[:, 0].tolist() == [0.0, -2.0, -5.0]


def test_a_lens_below_the_next_stratum_does_not_move_its_top():
    holes = (hole("B1", 0.0, 0.0, ("MG", 0.0), ("CL", -3.0), ("GR", -6.0), ("CL", -7.0), -20.0),)
    site = site_of(strata=(CODES[0], CODES[2]), boreholes=holes)
    assert borehole_tops(site).tolist() == [[0.0], [-3.0]]


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 10_000))
def test_tops_never_cross(seed):
    rng = np.random.default_rng(seed)
    holes = []
    for i in range(6):
        depth = np.cumsum(rng.uniform(0.1, 4.0, 3))
        holes.append(hole(f"B{i}", *rng.uniform(0, 60, 2), ("MG", 0.0), ("GR", -depth[0]), ("CL", -depth[1]), -30.0))
    site = site_of(strata=CODES, boreholes=tuple(holes))
    levels = layers_along(site, rng.uniform(-60, 120, (80, 2)))
    assert np.all(np.diff(levels, axis=0) <= 1e-9)


def test_strata_listed_out_of_order_are_taken_by_their_levels():
    strata = (Stratum(name="clay", top_level=-3.0), Stratum(name="made ground", top_level=0.0))
    assert layers_along(site_of(strata=strata), [[0.0, 0.0]]).tolist() == [[-3.0], [0.0]]


def test_water_comes_from_the_brief_or_else_from_the_holes():
    holes = (
        hole("B1", 0.0, 0.0, ("MG", 0.0), -20.0, water=-2.0),
        hole("B2", 40.0, 0.0, ("MG", 0.0), -20.0, water=-4.0),
    )
    assert water_along(site_of(water_retained=-1.0, boreholes=holes), [[20.0, 0.0]]).tolist() == [-1.0]
    assert water_along(site_of(boreholes=holes), [[20.0, 5.0]]) == pytest.approx([-3.0])
    assert np.isnan(water_along(site_of(), [[20.0, 5.0]])).all()


def test_how_far_the_nearest_borehole_is():
    holes = (hole("B1", 0.0, 0.0, ("MG", 0.0), -20.0), hole("B2", 40.0, 0.0, ("MG", 0.0), -20.0))
    site = site_of(boreholes=holes)
    assert nearest_borehole(site, [[3.0, 4.0], [40.0, 9.0]]).tolist() == [5.0, 9.0]
    assert np.isinf(nearest_borehole(site_of(), [[0.0, 0.0]])).all()
