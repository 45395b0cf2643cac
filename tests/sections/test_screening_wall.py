"""The folded wall against plates, rings, endless walls and a three-dimensional elastic block of the same idealisation.

The block's figures were computed once with our own finite elements (linear elastic, wall as a surface, same lateral
release); they measure the discretisation, not the truth.
"""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from sections.screening.demands import Demands, over_stages, ratios, twin_demands, wall_demands
from sections.screening.solve import Answer, answer, factorise
from sections.screening.supports import Beams, Members, select
from sections.screening.twin import Prop, solve_twin
from sections.screening.wall import FoldedWall
from tests.sections.builders_screening import NO_BEAMS, folded, rectangle, ring, smeared

LEVELS = (1.0, 4.0, 7.0)


def solved(wall: FoldedWall, members: Members, beams: Beams = NO_BEAMS) -> Answer:
    model = factorise(wall, members, beams)
    movement = model.solve(model.load)
    return answer(model, movement)


def deflection_ratio(wall: FoldedWall, members: Members, props: list[Prop]) -> np.ndarray:
    real = wall_demands(wall, solved(wall, members), np.zeros((len(wall.Dv), 0)))
    return real.deflection / solve_twin(wall, 0, props).w.max()


@pytest.mark.parametrize(
    ("length", "monolithic", "EI", "at", "block"),
    [
        (20, True, 1.28e6, (2, 5, 10), (0.12, 0.38, 0.60)),
        (40, True, 1.28e6, (2, 5, 10, 20), (0.13, 0.42, 0.80, 0.99)),
        (20, False, 2.7e5, (2, 5, 10), (0.74, 0.87, 0.92)),
        (40, False, 2.7e5, (2, 5, 10, 20), (0.75, 0.89, 0.96, 0.99)),
    ],
)
def test_a_rectangle_20_m_wide_moves_as_the_elastic_block_does(
    length: float, monolithic: bool, EI: float, at: tuple[int, ...], block: tuple[float, ...]
) -> None:
    wall = folded(rectangle(length, 20), EI=EI, monolithic=monolithic)
    members, props = smeared(wall, LEVELS, 8e3)
    ratio = deflection_ratio(wall, members, props)
    got = [(ratio[d - 1] + ratio[d]) / 2 for d in at]
    assert got == pytest.approx(block, abs=0.05)


def test_a_ring_under_even_pressure_closes_by_p_R2_over_E_t() -> None:
    # Thin ring, any handbook: u = p R^2 / (E t). Convergence with facets is O(1/n^2).
    radius, error = 10.0, []
    for facets in (24, 48, 96):
        wall = folded(ring(radius, facets), levels=(), lateral=0.0)
        off = np.zeros_like(wall.spring)
        wall = dataclasses.replace(
            wall, spring=off, spread=off, corner_spring=off, pressure=np.full_like(wall.pressure, 100.0)
        )
        members, _ = smeared(wall, (), 1.0)
        w = np.einsum("cd,cdz->cz", -wall.columns / radius, solved(wall, members).value[:, :2])
        error.append(1 - w.mean() * wall.Eht[0] / (100 * radius**2))
    assert abs(error[2]) < 0.002
    assert error[0] / error[1] == pytest.approx(4, rel=0.15)


def test_an_endless_even_wall_has_the_ratio_one() -> None:
    wall = folded(np.column_stack([np.arange(60.0), np.zeros(60)]), closed=False)
    members, props = smeared(wall, LEVELS, 8e3)
    ratio = deflection_ratio(wall, members, props)
    assert ratio[5:-5] == pytest.approx(1, abs=0.005)


def test_a_longer_wall_comes_nearer_to_one() -> None:
    middles = []
    for length in (20, 30, 40, 60):
        wall = folded(rectangle(length, 20))
        members, props = smeared(wall, LEVELS, 8e3)
        middles.append(deflection_ratio(wall, members, props)[length // 2])
    assert np.all(np.diff(middles) > -1e-3)
    assert middles[-1] == pytest.approx(1, abs=0.02)


def discrete(wall: FoldedWall, at: list[int], k: float) -> tuple[Members, list[Prop]]:
    node = int(np.argmin(abs(wall.z - 4.0)))
    count = len(at)
    members = Members(
        stiffness=np.full(count, k),
        column=np.array(at),
        node=np.full(count, node),
        far_column=np.full(count, -1),
        far_node=np.full(count, -1),
        direction=np.tile([[0.0, 1.0]], (count, 1)),
        preload=np.zeros(count),
    )
    return members, [Prop(node=node, stiffness=k / 6)]


def test_a_missing_strut_makes_the_gap_worse_than_2d_and_never_unloads_the_two_neighbours() -> None:
    wall = folded(np.column_stack([np.arange(0, 73.0), np.zeros(73)]), closed=False, levels=(4.0,))
    members, props = discrete(wall, list(range(3, 72, 6)), 48e3)
    whole = solved(wall, members)
    keep = np.arange(len(members)) != 6
    gap = select(members, keep)
    broken = solved(wall, gap)
    real = wall_demands(wall, broken, np.zeros((72, 0)))
    flat = solve_twin(wall, 0, props)
    assert real.deflection[36:42].max() / flat.w.max() > 1.1
    assert broken.force[5] + broken.force[6] > whole.force[5] + whole.force[7]


def test_the_deep_neighbour_of_a_floor_step_drags_the_shallow_side_above_its_2d_answer() -> None:
    shallow, deep = folded(rectangle(40, 20), He=8.0), folded(rectangle(40, 20), He=12.0)
    z = np.union1d(shallow.z, deep.z)
    assert np.array_equal(z, shallow.z)
    step = np.arange(len(shallow.Dv)) % 60 >= 20
    fields = ("spring", "spread", "pressure")
    wall = dataclasses.replace(
        shallow,
        **{
            f: np.where(step.reshape(-1, *[1] * (getattr(deep, f).ndim - 1)), getattr(deep, f), getattr(shallow, f))
            for f in fields
        },
    )
    members, props = smeared(wall, LEVELS, 8e3)
    ratio = deflection_ratio(wall, members, props)
    assert 1.15 < ratio[19] < 1.35  # the block gives 1.24


def test_stages_are_compared_by_their_maxima_and_the_stage_is_known() -> None:
    def demand(value: float) -> Demands:
        return Demands(np.array([value]), np.array([value]), np.array([value]), np.zeros((1, 0)))

    most, where = over_stages([demand(2.0), demand(5.0), demand(3.0)])
    assert most.deflection[0] == 5.0
    assert where["wall_deflection"][0] == 1


def test_a_face_with_next_to_no_moment_in_2d_is_taken_against_a_quarter_of_the_largest() -> None:
    real = Demands(np.array([1.0]), np.array([100.0]), np.array([20.0]), np.zeros((1, 0)))
    flat = Demands(np.array([1.0]), np.array([100.0]), np.array([1.0]), np.zeros((1, 0)))
    assert ratios(real, flat)[0, 2] == pytest.approx(0.8)


def test_twins_are_laid_out_by_group() -> None:
    wall = folded(rectangle(20, 20))
    _, props = smeared(wall, LEVELS, 8e3)
    twins = [solve_twin(wall, 0, props), solve_twin(wall, 0, props[:1])]
    laid = twin_demands(np.array([0, 1, 1]), twins, [[0, 1, 2], [0]], 3)
    assert laid.deflection[1] == laid.deflection[2] > laid.deflection[0]
    assert np.isnan(laid.support[1, 1])


def test_two_like_walls_tied_by_a_strut_act_as_one_wall_on_half_the_strut() -> None:
    wall = folded(rectangle(20, 20), levels=(4.0,))
    node = int(np.argmin(abs(wall.z - 4.0)))
    both = solve_twin(wall, 0, [Prop(node=node, stiffness=4e3, opposite=node)], opposite=40)
    one = solve_twin(wall, 0, [Prop(node=node, stiffness=8e3)])
    assert both.w == pytest.approx(one.w)
    assert both.force == pytest.approx(one.force)
