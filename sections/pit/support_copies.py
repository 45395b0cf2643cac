"""Supports drawn twice: which one is kept, and the sources of its copies."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components
from scipy.spatial import cKDTree

from ingest.members import Support
from ingest.model import Limits
from ingest.trail import Source
from sections.model import Floats, Ints


def drop_copies(supports: Sequence[Support], limits: Limits) -> tuple[Ints, dict[int, tuple[Source, ...]]]:
    """Indices of the supports without duplicates, and the sources of the duplicates of each one kept.

    Two members of one role whose ends fall on each other, either way round, are one member drawn twice.
    """
    if not supports:
        return np.zeros(0, dtype=np.int64), {}
    head, far = ends_of(supports)
    scale = np.array([1.0, 1.0, limits.plan / limits.level])
    head, far = head * scale, far * scale
    pairs = cKDTree(0.5 * (head + far)).query_pairs(limits.plan, output_type="ndarray")
    one, two = pairs[:, 0], pairs[:, 1]
    straight = np.maximum(apart(head[one], head[two]), apart(far[one], far[two]))
    crossed = np.maximum(apart(head[one], far[two]), apart(far[one], head[two]))
    role = np.array([support.role for support in supports])
    same = (np.minimum(straight, crossed) <= limits.plan) & (role[one] == role[two])
    # which of two copies is kept must not hang on the order of the input
    order = np.array(sorted(range(len(supports)), key=lambda i: _identity(supports[i])))
    links = coo_array((np.ones(int(np.sum(same))), (one[same], two[same])), shape=(len(supports), len(supports)))
    group = connected_components(links, directed=False)[1]
    _, first = np.unique(group[order], return_index=True)
    kept = np.sort(order[first])
    keeper = dict(zip(group[kept].tolist(), kept.tolist(), strict=True))
    copies: dict[int, tuple[Source, ...]] = {}
    for lost in sorted(set(range(len(supports))) - set(kept.tolist())):
        copies[keeper[int(group[lost])]] = (*copies.get(keeper[int(group[lost])], ()), *supports[lost].sources)
    return kept.astype(np.int64), copies


def _identity(support: Support) -> tuple[object, ...]:
    return tuple((source.file, source.item) for source in support.sources), support.head, support.far, support.id


def apart(a: Floats, b: Floats) -> Floats:
    """Distances (k,) between points (k, d)."""
    return np.asarray(np.linalg.norm(a - b, axis=1))


def ends_of(supports: Sequence[Support]) -> tuple[Floats, Floats]:
    """Heads and far ends (k, 3) as the site has them."""
    head = np.array([support.head for support in supports], dtype=np.float64).reshape(-1, 3)
    far = np.array([support.far for support in supports], dtype=np.float64).reshape(-1, 3)
    return head, far
