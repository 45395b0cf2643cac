"""From labels at stations to stretches of wall that cover the perimeter once, without gap or overlap."""

from __future__ import annotations

import numpy as np

from sections.found import FoundPit
from sections.model import Floats, Ints

Stretch = tuple[float, float, int]
"""Start, end and label; an end below the start passes the start of the chainage."""


def cell_edges(found: FoundPit) -> Floats:
    """Ends (n + 1,) of the length of wall each station stands for, from 0 to the length of the wall.

    Half way to the neighbour, or where a zone begins in between: a station stands for its own zone.
    """
    at, length = found.stations.chainage, found.shape.length
    if len(at) == 0:
        return np.array([0.0, length])
    edges = 0.5 * (at[1:] + at[:-1])
    starts = np.array(sorted(zone.start for zone in found.pit.zones))
    if len(starts):
        last = np.searchsorted(starts, at[1:] + 1e-9, side="right") - 1
        zone = starts[np.clip(last, 0, None)]
        begins = (last >= 0) & (zone > at[:-1] + 1e-9)
        edges = np.where(begins, zone, edges)
    return np.concatenate([[0.0], edges, [length]])


def cell_lengths(found: FoundPit) -> Floats:
    """Length of wall each station stands for (n,), m; together the length of the wall."""
    return np.asarray(np.diff(cell_edges(found)))


def find_stretches(found: FoundPit, labels: Ints) -> tuple[Stretch, ...]:
    """Merge neighbouring stations of one label; on a closed wall also across the start.

    Args:
        found: The pit.
        labels: (n,) label of each station.

    Returns:
        Stretches in order of their start; they cover the wall exactly once.
    """
    edges = cell_edges(found)
    if len(labels) == 0:
        return ()
    change = np.flatnonzero(labels[1:] != labels[:-1]) + 1
    firsts = np.concatenate([[0], change])
    bounds = np.append(edges[firsts], found.shape.length)
    stretches = [(float(bounds[k]), float(bounds[k + 1]), int(labels[first])) for k, first in enumerate(firsts)]
    if found.shape.closed and len(stretches) > 1 and stretches[0][2] == stretches[-1][2]:
        joined = (stretches[-1][0], stretches[0][1], stretches[0][2])
        stretches = [*stretches[1:-1], joined]
    return tuple(stretches)
