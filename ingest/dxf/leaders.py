"""Plain leaders tied to the texts they belong to."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.dxf.annotation import Leader
from ingest.parts import Part

REACH = 4.0
"""A leader belongs to a text at most this many letter heights from its end (judgement)."""


def tie_leaders(parts: tuple[Part, ...], leaders: Sequence[Leader], scale: float) -> tuple[Part, ...]:
    """Give texts the points of their leaders as a tag `leader`, "x y" in metres, several parted by "; ".

    Args:
        parts: Parts of one drawing, m.
        leaders: Its plain leaders, drawing units.
        scale: Metres per drawing unit.

    Returns:
        The parts; a leader that names no note goes to the text nearest to its end.
    """
    if not leaders:
        return parts
    texts = [k for k, part in enumerate(parts) if part.form == "text"]
    if not texts:
        return parts
    by_item = {parts[k].source.item: k for k in texts}
    places = np.array([parts[k].points[0][:2] for k in texts])
    heights = np.array([float(parts[k].tags.get("height", "0")) for k in texts])
    tips: dict[int, list[str]] = {}
    for leader in leaders:
        target = by_item.get(leader.note)
        if target is None:
            gaps = np.hypot(*(places - np.array(leader.tail[:2]) * scale).T)
            nearest = int(np.argmin(gaps))
            if gaps[nearest] > REACH * heights[nearest]:
                continue
            target = texts[nearest]
        tips.setdefault(target, []).append(f"{leader.tip[0] * scale!r} {leader.tip[1] * scale!r}")
    tied = list(parts)
    for k, points in tips.items():
        known = parts[k].tags.get("leader")
        tags = {**parts[k].tags, "leader": "; ".join(([known] if known else []) + points)}
        tied[k] = replace(parts[k], tags=tags)
    return tuple(tied)
