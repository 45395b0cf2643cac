"""The fewest cuts that cover what can be covered, then the closest fit, as an integer programme.

Solved with HiGHS through scipy. Like stations are merged first, and like candidates, so a site of hundreds of supports
is a programme of a few dozen unknowns. A limit on nodes and time stops it; the gap left is reported.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from sections.model import Bools, Floats, Ints

if TYPE_CHECKING:
    from scipy.optimize import LinearConstraint

SECONDS, NODES = 20.0, 20_000
NO_GAP = 1e-9
TIE, SCALE = 1e-6, 1e3
"""Cost of one place in the order of preference, which only decides between equals; scale above the solver's slack."""


class Cover(NamedTuple):
    """Candidates (m) against stations (n); see `choice.Table`."""

    covers: Bools
    misfit: Floats
    weight: Floats
    needed: Bools
    rank: Ints
    pinned: Bools


def solve_cover(cover: Cover) -> tuple[Ints, float]:
    """Pick candidates: all pinned ones, as few more as cover everything coverable, of those the closest fit.

    Args:
        cover: Tables of candidates and stations.

    Returns:
        Indices of the picked candidates, rising, and the relative gap left (0 when solved to the end).
    """
    groups = _groups(cover)
    keep = _candidates(cover, groups)
    small = Cover(
        groups.covers[keep],
        groups.misfit[keep],
        groups.weight,
        cover.needed[:, keep],
        cover.rank[keep],
        cover.pinned[keep],
    )
    if len(keep) == 0:
        return np.zeros(0, dtype=np.int64), 0.0
    count, gap = _fewest(small)
    picked, fit_gap = _closest(small, count)
    return np.sort(keep[picked]).astype(np.int64), max(gap, fit_gap)


def _groups(cover: Cover) -> Cover:
    """Merge the stations that every candidate treats alike; those that nobody covers drop out."""
    live = cover.covers.any(axis=0)
    covers, weight = cover.covers[:, live], cover.weight[live]
    mis = np.where(covers, np.round(cover.misfit[:, live], 9), -1.0)
    _, first, index = np.unique(mis, axis=1, return_index=True, return_inverse=True)
    total = np.zeros(len(first))
    np.add.at(total, index.reshape(-1), weight)
    return cover._replace(covers=covers[:, first], misfit=np.where(covers, mis, 0.0)[:, first], weight=total)


def _candidates(cover: Cover, groups: Cover) -> Ints:
    """Of candidates that do the same, keep the best ranked; those that do nothing drop out; pinned ones stay."""
    useful = groups.covers.any(axis=1) | cover.needed.any(axis=0) | cover.pinned
    best: dict[tuple[bytes, bytes, bytes], int] = {}
    kept = [int(c) for c in np.flatnonzero(cover.pinned)]
    for c in np.argsort(cover.rank, kind="stable").tolist():
        if useful[c] and not cover.pinned[c]:
            does = (groups.covers[c].tobytes(), groups.misfit[c].tobytes(), cover.needed[:, c].tobytes())
            best.setdefault(does, c)
    return np.array(sorted([*kept, *best.values()]), dtype=np.int64)


def _fewest(cover: Cover) -> tuple[int, float]:
    """Least number of candidates that cover every group, stand in every zone that needs one, and hold the pinned."""
    from scipy.optimize import LinearConstraint

    m = len(cover.covers)
    rows = np.vstack([cover.covers.T, cover.needed]).astype(np.float64)
    x, gap = _solve(np.ones(m), [LinearConstraint(rows, lb=1.0)] if len(rows) else [], m, cover.pinned)
    return (m, gap) if x is None else (round(float(np.sum(x))), gap)


def _closest(cover: Cover, count: int) -> tuple[Ints, float]:
    """Of the choices of `count` candidates the one with the least misfit, weighted by length; then by rank.

    Unknowns: one per candidate, then one per candidate and group it covers, the share of the group given to it.
    """
    from scipy.optimize import LinearConstraint
    from scipy.sparse import csc_array

    m, g = cover.covers.shape
    pairs_c, pairs_g = np.nonzero(cover.covers)
    k = len(pairs_c)
    edge, ones = np.arange(k), np.ones(k)
    share = cover.weight[pairs_g] / max(float(cover.weight.sum()), 1.0)
    cost = np.concatenate([TIE * (1.0 + _place(cover.rank)), share * cover.misfit[pairs_c, pairs_g]])
    given = csc_array((ones, (pairs_g, m + edge)), shape=(g, m + k))
    only = csc_array(
        (np.repeat([1.0, -1.0], k), (np.tile(edge, 2), np.concatenate([m + edge, pairs_c]))), shape=(k, m + k)
    )
    as_many = np.concatenate([np.ones(m), np.zeros(k)])[None, :]
    constraints = [LinearConstraint(as_many, ub=float(count))]
    if k:
        constraints += [LinearConstraint(given, lb=1.0, ub=1.0), LinearConstraint(only, ub=0.0)]
    if len(cover.needed):
        stand = np.hstack([cover.needed.astype(np.float64), np.zeros((len(cover.needed), k))])
        constraints.append(LinearConstraint(stand, lb=1.0))
    x, gap = _solve(SCALE * cost, constraints, m, cover.pinned)
    return (np.arange(m), gap) if x is None else (np.flatnonzero(x[:m] > 0.5), gap)


def _solve(
    cost: Floats, constraints: list[LinearConstraint], integers: int, pinned: Bools
) -> tuple[Floats | None, float]:
    """Run the programme: the first `integers` unknowns are 0 or 1, the rest between; None when stopped too early."""
    from scipy.optimize import Bounds, milp

    rest = len(cost) - integers
    solved = milp(
        cost,
        constraints=constraints,
        integrality=np.concatenate([np.ones(integers, dtype=np.int64), np.zeros(rest, dtype=np.int64)]),
        bounds=Bounds(np.concatenate([pinned.astype(np.float64), np.zeros(rest)]), 1.0),
        options={"time_limit": SECONDS, "node_limit": NODES, "mip_rel_gap": 0.0},
    )
    if solved.x is None:
        return None, 1.0
    gap = float(solved.mip_gap or 0.0)
    return np.asarray(solved.x), gap if gap > NO_GAP else 0.0


def _place(rank: Ints) -> Floats:
    """Order of preference counted from 0 without gaps."""
    return np.argsort(np.argsort(rank, kind="stable")).astype(np.float64)
