"""Exact optimal segmentation of a series: fewest or cheapest stretches, by optimal partitioning with prefix sums.

Method: Jackson et al. (2005), IEEE Signal Processing Letters 12 (recalled); the answer is exact, not a search.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sections.model import Floats, Ints


@dataclass(frozen=True, kw_only=True)
class Segmentation:
    """Stretches of a series: index after the last value of each, and the cost F(n) with F(0) = -penalty."""

    ends: Ints
    cost: float


def segment(values: Floats, weights: Floats, penalty: float, limit: float | None = None) -> Segmentation:
    """Split a series where the sum of squared deviations within stretches plus a penalty each is least.

    Args:
        values: (n,) or (n, c) channels, each divided by its tolerance.
        weights: (n,) wall length each value stands for.
        penalty: Cost of one more stretch.
        limit: Where given, no channel may span more than this within one stretch.

    Returns:
        The cheapest split; among equals the one whose last stretch is longest.
    """
    count = len(values)
    if count == 0:
        return Segmentation(ends=np.zeros(0, dtype=np.int64), cost=-penalty)
    table = np.asarray(values, dtype=np.float64).reshape(count, -1)
    # about its mean a series of levels near 100 keeps its digits in the squares
    table = table - np.average(table, axis=0, weights=weights)
    weight = np.concatenate([[0.0], np.cumsum(weights)])
    first = np.vstack([np.zeros(table.shape[1]), np.cumsum(weights[:, None] * table, axis=0)])
    second = np.concatenate([[0.0], np.cumsum(weights * np.einsum("ij,ij->i", table, table))])
    best = np.full(count + 1, np.inf)
    best[0] = -penalty
    back = np.zeros(count + 1, dtype=np.int64)
    least = 0
    for end in range(1, count + 1):
        if limit is not None:
            least = _first_alike(table, least, end - 1, limit)
        span = first[end] - first[least:end]
        mass = weight[end] - weight[least:end]
        within = second[end] - second[least:end] - np.einsum("ij,ij->i", span, span) / mass
        total = best[least:end] + np.maximum(within, 0.0) + penalty
        lowest = float(np.min(total))
        chosen = int(np.flatnonzero(total <= lowest + 1e-9 * (1.0 + abs(lowest)))[0])
        best[end], back[end] = total[chosen], least + chosen
    return Segmentation(ends=_walk_back(back), cost=float(best[count]))


def _first_alike(table: Floats, least: int, newest: int, limit: float) -> int:
    """First index from which all values are within `limit` of the newest (given that they are of one another)."""
    apart = np.flatnonzero(np.any(np.abs(table[least:newest] - table[newest]) > limit * (1.0 + 1e-9), axis=1))
    return least + int(apart[-1]) + 1 if len(apart) else least


def _walk_back(back: Ints) -> Ints:
    ends = []
    end = len(back) - 1
    while end > 0:
        ends.append(end)
        end = int(back[end])
    return np.array(ends[::-1], dtype=np.int64)


def alike_stretches(values: Floats, weights: Floats) -> Ints:
    """Fewest stretches in each of which every channel spans at most its tolerance (one unit); ends of each.

    Among splits into equally few stretches the one with the least sum of squares. Equal neighbours are taken
    together first: the cost is concave in where a run of equal values is cut, so no best split cuts one.
    """
    if len(values) == 0:
        return np.zeros(0, dtype=np.int64)
    table = np.asarray(values, dtype=np.float64).reshape(len(values), -1)
    change = np.flatnonzero(np.any(np.abs(np.diff(table, axis=0)) > 1e-9, axis=1)) + 1
    starts = np.concatenate([[0], change])
    block_weights = np.add.reduceat(np.maximum(weights, 1e-9), starts)
    # a stretch that spans one unit costs at most a quarter of its weight in each channel
    penalty = 1.0 + 0.25 * table.shape[1] * float(np.sum(block_weights))
    blocks = segment(table[starts], block_weights, penalty, limit=1.0).ends
    return np.append(starts, len(table))[blocks].astype(np.int64)


def group_alike(values: Floats, tolerance: float) -> Ints:
    """Label values so that neighbours in size closer than `tolerance` share a label; -1 for nan."""
    labels = np.full(len(values), -1, dtype=np.int64)
    known = np.flatnonzero(~np.isnan(values))
    if len(known) == 0:
        return labels
    order = known[np.argsort(values[known], kind="stable")]
    jumps = np.diff(values[order]) > tolerance * (1.0 + 1e-9) + 1e-12
    labels[order] = np.concatenate([[0], np.cumsum(jumps)])
    return labels
