"""Pressure limits, beams on springs and the loss of a support, against values worked by hand and closed forms."""

from __future__ import annotations

from math import pi

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import sparse

from ingest.members import Material, Pile, WallPiece
from ingest.model import Floor, Site, Stratum
from sections.found import FoundPit
from sections.pit.find import find_pits
from sections.screening.hermite import line_matrices
from sections.screening.limits import PressureLimits, excess, settle
from sections.screening.loss import lose_each, lose_members
from sections.screening.scene import Variant, make_scene, wall_of
from sections.screening.soil import Soil, find_limits, unbalanced


def two_kinds_of_wall() -> tuple[Site, FoundPit]:
    """A 30 x 20 m pit, three sides of 0.8 m panels whose joints nobody has told of, the north side of bored piles."""
    concrete = Material(id="c", kind="concrete", E=30e6, unit_weight=25.0)
    common = {"top": 0.0, "toe": -12.0, "material": "c", "EI_factor": 1.0}
    panels = WallPiece(
        id="w", axis=((0.0, 20.0), (0.0, 0.0), (30.0, 0.0), (30.0, 20.0)), kind="diaphragm", thickness=0.8, **common
    )  # type: ignore[arg-type]
    piles = tuple(
        Pile(id=f"p{i}", centre=(29.0 - i, 20.0), diameter=0.75, kind="contiguous", continuity="jointed", **common)  # type: ignore[arg-type]
        for i in range(29)
    )
    site = Site(
        walls=(panels,),
        piles=piles,
        materials=(concrete,),
        ground_level=0.0,
        formation=-6.0,
        floors=(Floor(level=-6.0, dig_level=-6.0),),
        strata=(
            Stratum(name="s", top_level=0.0, unit_weight=19.0, E=30e3, K0=0.5, phi=30.0, c=0.0, drainage="drained"),
        ),
    )
    (found,) = find_pits(site)
    return site, found


def ground(*, depth: int = 16, weight: float = 20.0, K0: float = 0.5, phi: float = 30.0, water: float = np.nan) -> Soil:
    """One facet, 1 m elements from the surface at 0; Kp = 3 and Ka = 1/3 with phi = 30."""
    one = np.ones((1, depth))
    return Soil(
        E=one * 30e3,
        nu=one * 0.3,
        K0=one * K0,
        weight=one * weight,
        su=one * np.nan,
        phi=one * phi,
        c=one * 0.0,
        level=np.column_stack([-np.arange(depth), -np.arange(1, depth + 1)]).astype(float),
        ground=np.zeros(1),
        water=np.full(1, water),
        surcharge=np.zeros(1),
        modulus_given=True,
        K0_given=True,
    )


def integral(values: np.ndarray, first: int, last: int) -> float:
    return float(values[0, first:last].mean(axis=1).sum())


@pytest.mark.parametrize(("toe", "reserve", "lack"), [(16, 400.0, 100.0), (14, 100.0, 100.0)])
def test_the_reserve_under_the_dig_counts_what_the_ground_already_holds(toe: int, reserve: float, lack: float) -> None:
    # Dig 10 m, 20 kN/m3, Kp 3, K0 .5, y below the dig: Kp 20 y - .5 * 20 (10 + y) = 50 y - 100.
    # Lack over the top 2 m: 100 * 2 / 2 = 100. Reserve: 25 (D - 2)^2 = 400 for D = 6, 100 for D = 4.
    _, left, missing = find_limits(ground(), np.array([-10.0]))
    assert integral(missing, 10, toe) == pytest.approx(lack)
    assert integral(left, 10, toe) == pytest.approx(reserve)


def test_the_retained_pressure_can_fall_from_rest_to_active() -> None:
    # (K0 - Ka) gamma z = (1/2 - 1/3) * 20 * 6 = 20 kPa at 6 m.
    relief, _, _ = find_limits(ground(), np.array([-10.0]))
    assert relief[0, 5, 1] == pytest.approx(20.0)


def test_undrained_ground_is_limited_by_twice_its_strength_in_total_stress() -> None:
    soil = ground(K0=1.0)
    clay = Soil(**{**{f: getattr(soil, f) for f in Soil.__dataclass_fields__}, "su": np.full((1, 16), 40.0)})
    relief, reserve, lack = find_limits(clay, np.array([-10.0]))
    # At 6 m: 120 kPa at rest, active 120 - 80: relief 80. At 12 m: passive 2*20 + 80 = 120, at rest 240: lack 120.
    assert relief[0, 5, 1] == pytest.approx(80.0)
    assert reserve[0, 11, 1] == 0.0
    assert lack[0, 11, 1] == pytest.approx(120.0)


def test_digging_releases_rest_pressure_and_water_down_to_the_dig_level_only() -> None:
    # At 4 m with water at 2 m: K0 (40 + 2 * 10.19) + 2 * 9.81 = .5 * 60.38 + 19.62 = 49.81 kPa.
    p = unbalanced(ground(water=-2.0), np.array([-6.0]))
    assert p[0, 3, 1] == pytest.approx(49.81)
    assert np.all(p[0, 6:] == 0)


def test_a_spring_beyond_its_limit_carries_its_limit() -> None:
    # One spring 100 kPa/m limited to 5 kPa beside a firm one of 100, load 20: 100 w + 5 = 20, w = 0.15.
    limits = PressureLimits(
        retained_spring=np.full((1, 1, 2), 100.0),
        excavated_spring=np.zeros((1, 1, 2)),
        relief=np.full((1, 1, 2), 5.0),
        reserve=np.full((1, 1, 2), np.inf),
    )
    over, reached = settle(lambda e: excess(limits, (20.0 + e) / 200.0), np.zeros((1, 1, 2)))
    assert reached
    assert (20.0 + over[0, 0, 0]) / 200.0 == pytest.approx(0.15, rel=1e-3)


def beam(EI: float, k_s: float, k_g: float, spacing: float = 6.0, struts: int = 41):  # type: ignore[no-untyped-def]
    """Beam on ground k_g with struts k_s, ends free one bay beyond the last strut, 8 elements a bay."""
    per_bay, bays = 8, struts + 1
    nodes = per_bay * bays + 1
    m = line_matrices(np.full(nodes - 1, spacing / per_bay))
    K, F = np.zeros((2 * nodes, 2 * nodes)), np.zeros(2 * nodes)
    for e in range(nodes - 1):
        i = slice(2 * e, 2 * e + 4)
        K[i, i] += EI * m.bend[e] + k_g * m.mass[e]
        F[i] += m.even[e]
    at = 2 * per_bay * np.arange(1, struts + 1)
    vectors = sparse.csr_matrix((np.ones(struts), (np.arange(struts), at)), shape=(struts, 2 * nodes))
    K += vectors.T.toarray() @ (k_s * vectors.toarray())
    return K, F, vectors


def test_two_heads_joined_by_a_spring_lose_the_first_support() -> None:
    # k 1000 each, joined by 500, load 1 and 1. By hand: movement after the loss 4 mm and 2 mm, gap 4, neighbour 2.
    K = np.array([[1500.0, -500.0], [-500.0, 1500.0]])
    vectors = sparse.csr_matrix(np.eye(2))
    loss = lose_members(lambda b: np.linalg.solve(K, b), vectors, np.full(2, 1e3), np.linalg.solve(K, [1.0, 1.0]), [0])
    assert loss.movement == pytest.approx([0.004, 0.002])
    assert loss.gap == pytest.approx([4.0])
    assert loss.force == pytest.approx([0.0, 2.0])


@pytest.mark.parametrize(
    ("EI", "k_s", "k_g", "gap", "neighbours"),
    [
        (2.1e5, 48e3, 2e3, 3.201953, (1.2561, 0.9229, 1.0043)),
        (2.1e5, 48e3, 2e4, 1.471338, (1.0000, 0.9971)),
        (1.3e6, 48e3, 2e3, 1.962031, (1.3539, 0.9840, 0.9683)),
        (5.0e4, 2e5, 2e3, 16.4907, (1.0948, 0.9612)),
    ],
)
def test_the_middle_strut_of_a_long_waler_is_lost(
    EI: float, k_s: float, k_g: float, gap: float, neighbours: tuple[float, ...]
) -> None:
    # Computed once with a general linear solver, the structure re-solved without the strut.
    K, F, vectors = beam(EI, k_s, k_g)
    U = np.linalg.solve(K, F)
    loss = lose_members(lambda b: np.linalg.solve(K, b), vectors, np.full(41, k_s), U, [20])
    assert loss.gap[0] == pytest.approx(gap, rel=1e-4)
    before = k_s * (vectors @ U)
    assert loss.force[21 : 21 + len(neighbours)] / before[21 : 21 + len(neighbours)] == pytest.approx(
        neighbours, abs=2e-4
    )
    without = K - k_s * np.outer(vectors[20].toarray(), vectors[20].toarray())
    assert loss.movement == pytest.approx(np.linalg.solve(without, F), rel=1e-8)
    each_gap, each_neighbour = lose_each(lambda b: np.linalg.solve(K, b), vectors, np.full(41, k_s), U)
    assert each_gap[20] == pytest.approx(loss.gap[0])
    assert each_neighbour[20, 21] == pytest.approx(neighbours[0], abs=2e-4)


@settings(max_examples=12, deadline=None)
@given(st.floats(4.5, 6.5), st.floats(3, 5.5), st.floats(2.5, 4.3))
def test_losing_a_strut_never_lowers_the_sum_of_its_two_neighbours_on_close_spacing(
    a: float, b: float, c: float
) -> None:
    EI, k_s, k_g = 10.0**a, 10.0**b, 10.0**c
    spacing = min(6.0, 0.75 * pi * (4 * EI / k_g) ** 0.25)  # lambda s up to 3 pi / 4
    K, F, vectors = beam(EI, k_s, k_g, spacing, 15)
    U = np.linalg.solve(K, F)
    before = k_s * (vectors @ U)
    loss = lose_members(lambda load: np.linalg.solve(K, load), vectors, np.full(15, k_s), U, [7])
    assert loss.force[6] + loss.force[8] >= before[6] + before[8] - 1e-3 * before[7]


def test_a_point_load_on_an_endless_beam_on_springs_sinks_as_hetenyi_says() -> None:
    # Hetenyi 1946 (recalled): w0 = P lambda/(2 k), lambda = (k/(4 EI))^(1/4). EI 1e5, k 1e4, P 100: 1.988177 mm.
    n, h = 240, 0.25
    m = line_matrices(np.full(n, h))
    K, F = np.zeros((2 * n + 2, 2 * n + 2)), np.zeros(2 * n + 2)
    for e in range(n):
        i = slice(2 * e, 2 * e + 4)
        K[i, i] += 1e5 * m.bend[e] + 1e4 * m.mass[e]
    F[n] = 100.0
    assert np.linalg.solve(K, F)[n] == pytest.approx(1.988176822e-3, rel=1e-4)


def test_a_row_of_piles_beside_panels_never_becomes_a_plate() -> None:
    site, found = two_kinds_of_wall()
    scene, why = make_scene(site, found)
    assert scene is not None, why
    wall, _ = wall_of(scene, Variant(name="whole", along=1.0, membrane=True, beam_EI=0.0), -6.0)
    piles = found.stations.jointed[scene.grid.station]
    assert piles.any()
    assert not piles.all()
    assert np.all(wall.Dh[piles] == 0)
    assert np.all(wall.Eht[piles] == 0)
    assert np.all(wall.Dh[~piles] == scene.EI[~piles])
