"""Exact segmentation against hand-worked series, an exhaustive search and an independent library."""

from __future__ import annotations

from itertools import combinations

import numpy as np
import pytest
import ruptures
from hypothesis import given
from hypothesis import strategies as st

from sections.pit.segmentation import alike_stretches, group_alike, segment

STEPS = np.array([1.0, 1, 1, 1, 5, 5, 5, 5, 2, 2])
NOISY = np.array([10, 10.2, 9.9, 10.1, 12, 12.1, 11.9, 12, 12.05, 8, 8.1, 7.9])


@pytest.mark.parametrize(
    ("series", "penalty", "ends", "cost"),
    [
        # project table, worked by exhaustive search over all splits: segment ends and F(n) with F(0) = -penalty
        (STEPS, 0.5, [4, 8, 10], 1.0),
        (STEPS, 11.99, [4, 8, 10], 23.98),
        (STEPS, 14.0, [4, 10], 26.0),
        (STEPS, 20.0, [4, 10], 32.0),
        (STEPS, 32.0, [10], 33.6),
        (NOISY, 0.5, [4, 9, 12], 1.092),
        (NOISY, 1.0, [4, 9, 12], 2.092),
        (NOISY, 5.0, [4, 9, 12], 10.092),
        (NOISY, 9.0, [9, 12], 17.62888889),
        (NOISY, 12.0, [9, 12], 20.62888889),
        (NOISY, 20.0, [9, 12], 28.62888889),
    ],
)
def test_check_values_of_optimal_partitioning(series, penalty, ends, cost):
    split = segment(series, np.ones(len(series)), penalty)
    assert split.ends.tolist() == ends
    assert split.cost == pytest.approx(cost, rel=1e-8)


def exhaustive(values, weights, penalty):
    """Least cost over all splits, with F(0) = -penalty."""
    count = len(values)
    best = np.inf
    for k in range(count):
        for cuts in combinations(range(1, count), k):
            edges = [0, *cuts, count]
            cost = penalty * k
            for a, b in zip(edges, edges[1:], strict=False):
                mean = np.average(values[a:b], weights=weights[a:b], axis=0)
                cost += float(np.sum(weights[a:b, None] * (values[a:b] - mean) ** 2))
            best = min(best, cost)
    return best


@given(
    st.lists(st.floats(-5, 5), min_size=1, max_size=9),
    st.lists(st.floats(0.1, 3), min_size=9, max_size=9),
    st.floats(0.05, 10),
)
def test_no_split_is_cheaper(values, weights, penalty):
    series, mass = np.array(values)[:, None], np.array(weights[: len(values)])
    assert segment(series, mass, penalty).cost == pytest.approx(exhaustive(series, mass, penalty), abs=1e-8)


@pytest.mark.parametrize("seed", range(6))
def test_agrees_with_ruptures_on_seeded_series(seed):
    # outside source: ruptures, exact search with the same quadratic cost
    rng = np.random.default_rng(seed)
    lengths = rng.integers(5, 25, size=6)
    series = np.concatenate([rng.normal(rng.uniform(-3, 3), 0.4, size=n) for n in lengths])
    two = np.column_stack([series, np.roll(series, 7)])
    for table, penalty in ((series[:, None], 1.5), (two, 4.0)):
        expected = ruptures.Pelt(model="l2", min_size=1, jump=1).fit(table).predict(pen=penalty)
        assert segment(table, np.ones(len(table)), penalty).ends.tolist() == expected


def test_a_step_pays_for_itself_exactly_at_the_stated_penalty():
    # a step of D = 2 between 6 m and 6 m lowers the cost by D^2 L1 L2 / (L1 + L2) = 12 = 2^2 x 6 / 2
    series = np.array([0.0, 2.0])
    weights = np.array([6.0, 6.0])
    assert segment(series, weights, 11.99).ends.tolist() == [1, 2]
    assert segment(series, weights, 12.01).ends.tolist() == [2]


@given(st.lists(st.floats(0, 4), min_size=1, max_size=40))
def test_stretches_are_alike_within_and_as_few_as_can_be(values):
    series = np.array(values)
    ends = alike_stretches(series, np.ones(len(series)))
    starts = np.concatenate([[0], ends[:-1]])
    assert ends[-1] == len(series)
    for a, b in zip(starts, ends, strict=True):
        assert np.ptp(series[a:b]) <= 1.0 + 1e-8
    # the fewest intervals of bounded range are found by going as far as one can each time
    count, first = 1, 0
    for i in range(len(series)):
        if np.ptp(series[first : i + 1]) > 1.0 + 1e-8:
            count, first = count + 1, i
    assert len(ends) == count


def test_a_step_is_cut_at_the_step_and_not_where_the_tolerance_runs_out():
    series = np.array([0.0, 0.2, 0.1, 0.9, 1.4, 1.5, 1.45])
    assert alike_stretches(series, np.ones(7)).tolist() == [3, 7]


def test_long_runs_of_equal_values_cost_nothing():
    series = np.repeat([0.0, 3.0, 0.0], [4000, 3, 4000])
    assert alike_stretches(series, np.ones(len(series))).tolist() == [4000, 4003, 8003]


def test_nothing_gives_nothing():
    assert segment(np.zeros((0, 1)), np.zeros(0), 1.0).ends.tolist() == []
    assert alike_stretches(np.zeros(0), np.zeros(0)).tolist() == []


def test_like_values_share_a_label_and_unknown_ones_stand_apart():
    labels = group_alike(np.array([-1.5, -4.0, -1.52, np.nan, -3.95]), 0.1)
    assert labels[0] == labels[2]
    assert labels[1] == labels[4]
    assert labels[0] != labels[1]
    assert labels[3] == -1
