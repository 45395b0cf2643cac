"""Bulges, arcs and entity planes against hand figures, a general CAD library and geometry itself."""

from __future__ import annotations

import math

import numpy as np
import pytest
from ezdxf.math import OCS, Vec2, Vec3, bulge_to_arc
from hypothesis import given
from hypothesis import strategies as st

from ingest.dxf.curves import (
    SAGITTA,
    chord_angle,
    circle_of_bulges,
    entity_axes,
    flatten_bulges,
    flatten_conic,
)

# M17 BG1: R = c (1 + b^2) / (4 |b|), sagitta = |b| c / 2, angle = 4 atan(b); recalled, arithmetic by hand
BG1 = [
    (1.0, 10.0, 5.0, 5.0, 180.0),
    (math.tan(math.pi / 8), 10.0, 7.071067812, 2.071067812, 90.0),
    (0.2, 10.0, 13.0, 1.0, 45.23972989),
]


def arc_points(chord: float, bulge: float, sagitta: float) -> np.ndarray:
    ends = np.array([[0.0, 0.0]]), np.array([[chord, 0.0]])
    points, _ = flatten_bulges(*ends, np.array([bulge]), sagitta)
    return np.vstack((points, ends[1]))


@pytest.mark.parametrize(("bulge", "chord", "radius", "rise", "degrees"), BG1)
def test_a_bulge_gives_the_radius_rise_and_angle_of_its_definition(
    bulge: float, chord: float, radius: float, rise: float, degrees: float
) -> None:
    points = arc_points(chord, bulge, 1e-6)
    centre = np.array([chord / 2, radius - rise])  # counter-clockwise from left to right: the arc hangs below
    assert np.hypot(*(points - centre).T) == pytest.approx(radius, rel=1e-8)
    assert -points[:, 1].min() == pytest.approx(rise, abs=1e-5)
    steps = np.hypot(*np.diff(points, axis=0).T)
    assert math.degrees(2 * np.arcsin(steps / 2 / radius).sum()) == pytest.approx(degrees, rel=1e-8)


@given(
    x=st.floats(-1e3, 1e3), y=st.floats(-1e3, 1e3), length=st.floats(0.1, 500), turn=st.floats(-3.1, 3.1),
    bulge=st.floats(-8, 8).filter(lambda b: abs(b) > 1e-3),
)  # fmt: skip
def test_bulged_segments_lie_on_the_arc_a_cad_library_constructs(
    x: float, y: float, length: float, turn: float, bulge: float
) -> None:
    start, end = (x, y), (x + length * math.cos(turn), y + length * math.sin(turn))
    centre, _, _, radius = bulge_to_arc(Vec2(start), Vec2(end), bulge)
    points, _ = flatten_bulges(np.array([start]), np.array([end]), np.array([bulge]), SAGITTA)
    points = np.vstack((points, [end]))
    assert np.hypot(points[:, 0] - centre.x, points[:, 1] - centre.y) == pytest.approx(radius, rel=1e-9, abs=1e-9)
    middles = (points[1:] + points[:-1]) / 2
    sagittas = radius - np.hypot(middles[:, 0] - centre.x, middles[:, 1] - centre.y)
    assert sagittas.max() <= SAGITTA * (1 + 1e-6)


def test_many_segments_in_one_go_are_those_one_by_one() -> None:
    rng = np.random.default_rng(3)
    starts, ends = rng.uniform(-50, 50, (40, 2)), rng.uniform(-50, 50, (40, 2))
    bulges = np.where(rng.random(40) < 0.4, 0.0, rng.uniform(-2, 2, 40))
    points, counts = flatten_bulges(starts, ends, bulges, SAGITTA)
    alone = [flatten_bulges(starts[k : k + 1], ends[k : k + 1], bulges[k : k + 1], SAGITTA)[0] for k in range(40)]
    assert counts.tolist() == [len(piece) for piece in alone]
    assert np.allclose(points, np.vstack(alone), atol=1e-12)
    assert (counts[bulges == 0.0] == 1).all()


def test_a_segment_without_length_or_bulge_is_its_start_alone() -> None:
    same = np.array([[2.0, 3.0]])
    assert flatten_bulges(same, same, np.array([0.5]), SAGITTA)[0].tolist() == [[2.0, 3.0]]
    assert flatten_bulges(same, same + 1, np.array([0.0]), SAGITTA)[0].tolist() == [[2.0, 3.0]]


def test_a_chord_of_a_twelve_metre_ring_keeps_five_millimetres() -> None:
    # s = R (1 - cos(a/2)): R = 12 m, s = 5 mm -> a = 2 acos(1 - 0.005/12) = 0.057737 rad = 3.308 degrees, by hand
    assert math.degrees(chord_angle(np.array([12.0]), 0.005)[0]) == pytest.approx(3.308, abs=5e-4)


def test_small_circles_keep_at_least_eight_chords_and_huge_ones_stay_bounded() -> None:
    round_ = (0.0, math.tau)
    axis = np.array([1.0, 0, 0]), np.array([0, 1.0, 0])
    small = flatten_conic(np.zeros(3), 0.002 * axis[0], 0.002 * axis[1], round_, SAGITTA)
    huge = flatten_conic(np.zeros(3), 1e9 * axis[0], 1e9 * axis[1], round_, SAGITTA)
    assert len(small) == 9
    assert len(huge) == 10_001


def test_an_ellipse_keeps_its_axes() -> None:
    points = flatten_conic(np.array([5.0, 1, 0]), np.array([3.0, 0, 0]), np.array([0, 2.0, 0]), (0, math.tau), SAGITTA)
    assert ((points[:, 0] - 5) / 3) ** 2 + ((points[:, 1] - 1) / 2) ** 2 == pytest.approx(1.0)
    assert points[:, 0].max() == pytest.approx(8.0)


@pytest.mark.parametrize("normal", [(0, 0, -1), (0.01, 0.01, 1), (1, 0, 0), (0, -1, 0), (0.3, -0.5, 0.2), (0, 0, -7)])
def test_entity_planes_agree_with_a_cad_library(normal: tuple[float, float, float]) -> None:
    axes = entity_axes(Vec3(normal))
    assert axes is not None
    for point in ((1, 0, 0), (0, 1, 0), (0, 0, 1), (3, -2, 5)):
        assert np.array(point) @ axes == pytest.approx(tuple(OCS(normal).to_wcs(point)), abs=1e-12)


def test_the_plane_of_the_world_needs_no_axes() -> None:
    assert entity_axes(None) is None
    assert entity_axes(Vec3(0, 0, 1)) is None
    assert entity_axes(Vec3(0, 0, 0)) is None


def test_two_half_circles_make_a_circle_and_other_arcs_do_not() -> None:
    two = np.array([[0.0, 0.0], [1.0, 0.0]])
    assert circle_of_bulges(two, np.array([1.0, 1.0])) == pytest.approx((0.5, 0.0, 0.5))
    quarters = np.array([[1.0, 0], [0, 1], [-1, 0], [0, -1]])
    assert circle_of_bulges(quarters, np.full(4, math.tan(math.pi / 8))) == pytest.approx((0.0, 0.0, 1.0))
    assert circle_of_bulges(two, np.array([1.0, -1.0])) is None
    assert circle_of_bulges(two, np.array([0.5, 0.5])) is None
    assert circle_of_bulges(quarters * [2, 1], np.full(4, math.tan(math.pi / 8))) is None
