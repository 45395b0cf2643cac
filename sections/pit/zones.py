"""Zones: the fewest stretches of wall on which nothing that matters to a cut changes, and why each one ends."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from sections.found import PitShape, SupportRow
from sections.model import Corner, Floats, Ints, Zone
from sections.pit.chainage import ON, Sides
from sections.pit.segmentation import alike_stretches
from sections.pit.signature import Signature
from sections.pit.walk import Walk, radius_at, thickness_of
from sections.pit.zone_words import corner_words, radius_words, support_words, wall_words


def find_zones(
    shape: PitShape,
    sides: Sides,
    steps: Walk,
    signature: Signature,
    rows: Sequence[SupportRow],
    sections: dict[str, str],
) -> tuple[tuple[Zone, ...], Ints]:
    """Zones of one wall and the zone of every station.

    Every corner and every change of a label ends a zone; between, the fewest zones in which no channel spans more
    than its tolerance, found exactly.

    Args:
        sections: Designation of the section of each row, by id.
    """
    starts = _zone_starts(shape, sides, steps, signature)
    count = len(steps.chainage)
    index = np.searchsorted(starts, np.arange(count), side="right") - 1
    index = np.where(index < 0, len(starts) - 1, index).astype(np.int64)
    zones = []
    for i, first in enumerate(starts):
        nxt = int(starts[(i + 1) % len(starts)])
        last = (nxt - 1) % count
        whole = len(starts) == 1
        start = 0.0 if whole else float(steps.chainage[first])
        to = shape.length if nxt == 0 or whole else float(steps.chainage[nxt])
        members = np.flatnonzero(index == i)
        zones.append(
            Zone(
                id=f"{shape.id}-Z{i + 1}",
                start=start,
                to=to,
                signature=_describe(shape, steps, signature, rows, members),
                ended_by=_ending(shape, steps, signature, rows, sections, (members, last, nxt, whole), index),
            )
        )
    return tuple(zones), index


def _zone_starts(shape: PitShape, sides: Sides, steps: Walk, signature: Signature) -> Ints:
    """Indices of the stations at which a zone begins, rising."""
    count = len(steps.chainage)
    turn = np.append(True, steps.side[1:] != steps.side[:-1]) | (signature.labels != np.roll(signature.labels, 1))
    if shape.closed:
        turn[0] = signature.labels[0] != signature.labels[-1] or (not sides.loop and steps.place[0] <= ON)
    if len(sides.start) == 1 and shape.closed and not sides.loop:
        turn[np.argmin(steps.place)] = True
    table = signature.table
    breaks = np.flatnonzero(turn)
    if len(breaks) == 0:
        breaks = np.array([_widest_jump(table)])
    starts: list[int] = []
    for first, stop in zip(breaks, np.append(breaks[1:], breaks[0] + count), strict=True):
        piece = np.arange(first, stop) % count
        ends = alike_stretches(table[piece], steps.weight[piece])
        starts += [int(piece[end]) for end in [0, *ends[:-1].tolist()]]
    if shape.closed and not np.any(turn) and len(starts) == 1:
        starts = [0]
    # the end of an open wall has no length of its own
    return np.array(sorted(i for i in starts if shape.closed or i == 0 or i < count - 1), dtype=np.int64)


def _widest_jump(table: Floats) -> int:
    """Where to open a ring that nothing hard divides: at its widest jump, which any split must have."""
    return int(np.argmax(np.max(np.abs(table - np.roll(table, 1, axis=0)), axis=1)))


def _ending(
    shape: PitShape,
    steps: Walk,
    signature: Signature,
    rows: Sequence[SupportRow],
    sections: dict[str, str],
    place: tuple[Ints, int, int, bool],
    index: Ints,
) -> str:
    members, last, nxt, whole = place
    if whole and shape.closed:
        return "nothing changes round the ring" if steps.side[last] == steps.side[nxt] else "closes on itself"
    if not shape.closed and nxt == 0:
        return "the wall ends"
    words = []
    if steps.place[nxt] <= ON:
        words += [corner_words(c) for c in _corner_at(shape, float(steps.chainage[nxt]))]
    run = [shape.runs[i].wall if i >= 0 else None for i in (int(steps.run[last]), int(steps.run[nxt]))]
    words += wall_words(run[0], run[1])
    radius = radius_at(shape, steps.probe[[last, nxt]])
    if np.isnan(radius).sum() == 1 or abs(radius[1] - radius[0]) > 0.005:
        words.append(radius_words(float(radius[0]), float(radius[1])))
    ahead = np.flatnonzero(index == index[nxt])
    words += _channel_words(signature, members, ahead, last, nxt)
    if not words or steps.place[nxt] > ON:
        words += _row_words(signature, rows, sections, last, nxt)
    return "; ".join(dict.fromkeys(words)) or "drift within the zone"


def _corner_at(shape: PitShape, chainage: float) -> list[Corner]:
    gap = [abs((corner.at - chainage + shape.length / 2) % shape.length - shape.length / 2) for corner in shape.corners]
    return [corner for corner, apart in zip(shape.corners, gap, strict=True) if apart <= ON]


def _row_words(
    signature: Signature, rows: Sequence[SupportRow], sections: dict[str, str], last: int, nxt: int
) -> list[str]:
    before, after = set(signature.held[last]), set(signature.held[nxt])
    ended = [rows[i].member for i in sorted(before - after)]
    begun = [rows[i].member for i in sorted(after - before)]
    return support_words(ended, begun, sections)


def _channel_words(signature: Signature, members: Ints, ahead: Ints, last: int, nxt: int) -> list[str]:
    """Words for every channel that changes by more than its tolerance; failing that for the one that changes most."""
    changes = []
    for channel in signature.channels:
        if np.isnan(channel.raw[[last, nxt]]).any():
            if "-" not in channel.name and np.isnan(channel.raw[[last, nxt]]).sum() == 1:
                changes.append((np.inf, channel.say(float(channel.raw[last]), float(channel.raw[nxt]))))
            continue
        jump = abs(float(channel.values[nxt] - channel.values[last]))
        drift = abs(float(np.mean(channel.values[ahead]) - np.mean(channel.values[members])))
        one, two = (last, nxt) if jump > 1.0 or jump >= drift else (int(members[0]), int(ahead[-1]))
        if max(jump, drift) > 1e-9:
            changes.append((max(jump, drift), channel.say(float(channel.raw[one]), float(channel.raw[two]))))
    strong = [text for size, text in changes if size > 1.0]
    if strong or not changes:
        return strong
    at_label = signature.labels[last] != signature.labels[nxt]
    return [] if at_label else [max(changes)[1]]


def _describe(
    shape: PitShape, steps: Walk, signature: Signature, rows: Sequence[SupportRow], members: Ints
) -> dict[str, str | float | None]:
    first = int(members[0])
    wall = shape.runs[int(steps.run[first])].wall if steps.run[first] >= 0 else None
    thick = float(thickness_of(shape, steps.run[[first]])[0])
    described: dict[str, str | float | None] = {
        "wall": "unknown" if wall is None else wall.kind,
        "thickness": None if np.isnan(thick) else thick,
        "centres": None if wall is None else wall.centres,
        "direction": _bearing(steps, members),
    }
    for channel in signature.channels:
        if "-" not in channel.name:
            mean = float(np.mean(channel.raw[members]))
            described[channel.name] = None if np.isnan(mean) else mean
    held = [rows[i].member for i in signature.held[first]]
    described["supports"] = ", ".join(_named(row.id, signature, members) for row in held) or "none"
    return described


def _named(row: str, signature: Signature, members: Ints) -> str:
    gaps = [float(np.mean(c.raw[members])) for c in signature.channels if c.name == row]
    return row + (f" at {gaps[0]:.2f} m" if gaps and not np.isnan(gaps[0]) else "")


def _bearing(steps: Walk, members: Ints) -> float | None:
    """Direction of the wall, degrees counter-clockwise from the x axis; None on a curve."""
    normal = steps.normal[members]
    if np.max(np.abs(normal - normal[0])) > 0.04:
        return None
    return float(np.round(np.degrees(np.arctan2(-normal[0, 0], normal[0, 1])) % 360.0, 6))
