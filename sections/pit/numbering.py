"""Ids of members: `<pit>-<role>-<n>`, n in order of chainage, then downwards, never by the order of the input."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from sections.model import Member
from sections.pit.segmentation import group_alike
from sections.pit.support_rows import Rows


def number_rows(rows: Rows, pit: str) -> Rows:
    """Give ids `<pit>-<role>-<n>`, n in order of chainage, then downwards."""
    by_role: dict[str, list[int]] = defaultdict(list)
    for i, row in enumerate(rows.rows):
        by_role[row.member.role].append(i)
    named = list(rows.rows)
    order: list[int] = []
    for role in sorted(by_role):
        for n, i in enumerate(in_order([rows.rows[j].member for j in by_role[role]]), start=1):
            index = by_role[role][i]
            named[index] = replace(named[index], member=replace(named[index].member, id=f"{pit}-{role}-{n}"))
            order.append(index)
    place = {old: new for new, old in enumerate(order)}
    return Rows(
        rows=tuple(named[i] for i in order),
        stands=tuple(replace(stand, row=place[stand.row]) for stand in rows.stands),
    )


def in_order(members: Sequence[Member]) -> list[int]:
    """Indices in order of chainage, then downwards; starts within 0.1 m of each other count as equal."""
    start = np.array([member.along[0].start if member.along else np.inf for member in members])
    step = group_alike(np.where(np.isinf(start), 1e9, start), 0.1)
    level = [np.inf if member.level is None else -member.level for member in members]
    inclination = [member.inclination or 0.0 for member in members]
    return sorted(range(len(members)), key=lambda i: (step[i], level[i], round(inclination[i], 1), start[i]))
