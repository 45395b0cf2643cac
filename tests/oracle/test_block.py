"""The block and the folded wall against closed forms of handbooks."""

from __future__ import annotations

import pytest
from known import hetenyi_beam, navier_plate, ring_under_pressure, thick_cylinder


def test_the_bore_of_a_thick_cylinder_opens_as_lame_says() -> None:
    # Lame: u = p a (1 + nu)/E ((1 - 2 nu) a2 + b2)/(b2 - a2). Linear bricks come to it from below, as 1/n2.
    error = [1 - thick_cylinder(rings) for rings in (8, 16, 32)]
    assert error[2] == pytest.approx(0.0, abs=0.0012)
    assert error[0] / error[1] == pytest.approx(4.0, rel=0.2)
    assert error[1] / error[2] == pytest.approx(4.0, rel=0.3)


def test_a_simply_supported_square_plate_sags_as_navier_says() -> None:
    # Navier's series: w = 0.0040624 q a4/D (Timoshenko & Woinowsky-Krieger 1959, table 8: 0.00406, recalled).
    assert navier_plate() == pytest.approx(0.0040624, rel=1e-3)


def test_a_point_load_on_a_long_beam_on_springs_gives_hetenyis_movement_and_moment() -> None:
    # Hetenyi 1946 (recalled): w = P b/(2 k), M = P/(4 b), b = (k/4 EI)^(1/4); elements of 1/(8 b).
    w, M = hetenyi_beam()
    assert w == pytest.approx(1.0, abs=5e-4)
    assert pytest.approx(1.0, abs=5e-3) == M


def test_a_thin_ring_closes_by_p_R2_over_Et() -> None:
    error = [1 - ring_under_pressure(facets) for facets in (24, 48, 96)]
    assert abs(error[2]) < 0.001
    assert error[0] / error[1] == pytest.approx(4.0, rel=0.1)
