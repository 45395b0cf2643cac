"""What each candidate cut could stand for, at what misfit, and which cuts a zone without any must have."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Limits
from sections.model import Bools, Floats, Ints
from sections.verdicts.candidates import Candidate
from sections.verdicts.judged import JudgedPit
from sections.verdicts.likeness import Likeness, fits, misfit
from sections.verdicts.standing import Standing
from sections.verdicts.stretches import cell_lengths
from sections.verdicts.verdict import NOT_2D

DEPTH_UNKNOWN = 5.0
"""Length of a zone that gets its own section where the excavated depth is not known, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Table:
    """What each candidate (m) could stand for among the stations of all pits (n), and at what misfit.

    Attributes:
        covers: (m, n) True where the candidate may stand for the station.
        misfit: (m, n) how much it over-does it.
        weight: (n,) length of wall of each station, m.
        needed: (z, m) candidates of which each zone without representation must have one.
        rank: (m,) order of preference among equals, best first.
        pinned: (m,) True where the engineer wants the cut.
    """

    covers: Bools
    misfit: Floats
    weight: Floats
    needed: Bools
    rank: Ints
    pinned: Bools


def tabulate(
    cuts: Sequence[Candidate],
    likeness: Likeness,
    judged: Mapping[str, Mapping[int, JudgedPit]],
    standings: Mapping[str, Mapping[int, Standing]],
    limits: Limits,
) -> Table:
    """Find which stations every candidate may stand for."""
    n = len(likeness.pit)
    covers, mis = np.zeros((len(cuts), n), dtype=bool), np.full((len(cuts), n), np.inf)
    allowed = {
        kind: _everywhere(likeness, {p: s.representable for p, s in of.items()}) for kind, of in standings.items()
    }
    seen: dict[tuple[str, int], tuple[Bools, Floats]] = {}
    for c, cut in enumerate(cuts):
        for station in cut.stations[: cut.serves]:
            i = int(likeness.first[cut.pit]) + station
            if (cut.kind, i) not in seen:
                # a cut that could not stand for its own place stands for no other
                alike = fits(likeness, i, limits) & allowed[cut.kind] & allowed[cut.kind][i]
                seen[cut.kind, i] = alike, misfit(likeness, i)
            alike, over = seen[cut.kind, i]
            covers[c] |= alike
            mis[c] = np.where(alike, np.minimum(mis[c], over), mis[c])
    weight = np.concatenate([cell_lengths(one.found) for one in judged["plane_strain"].values()])
    worth = [_worth(cut, judged, standings) for cut in cuts]
    order = sorted(range(len(cuts)), key=lambda c: (not cuts[c].pinned, worth[c], c))
    rank = np.empty(len(cuts), dtype=np.int64)
    rank[order] = np.arange(len(cuts))
    return Table(
        covers=covers,
        misfit=mis,
        weight=weight,
        needed=_needed(cuts, likeness, judged["plane_strain"], np.asarray(covers.any(axis=0)), weight),
        rank=rank,
        pinned=np.array([cut.pinned for cut in cuts], dtype=bool),
    )


def _everywhere(likeness: Likeness, by_pit: Mapping[int, Bools]) -> Bools:
    """A flag of some pits laid out over the stations of all; False elsewhere."""
    flags = np.zeros(len(likeness.pit), dtype=bool)
    for pit, values in by_pit.items():
        flags[likeness.pit == pit] = values
    return flags


def _worth(
    cut: Candidate,
    judged: Mapping[str, Mapping[int, JudgedPit]],
    standings: Mapping[str, Mapping[int, Standing]],
) -> tuple[float, ...]:
    """Sort key, best first: fit to stand for others, not shut by a gate, kind, place in its zone.

    A cut is not preferred for a kinder verdict: near a corner 2D over-states, and such a cut would show the stretch it
    stands for as better than it is.
    """
    one, standing = judged[cut.kind].get(cut.pit), standings[cut.kind].get(cut.pit)
    if one is None or standing is None:
        return (9.0,)
    i = cut.stations[0]
    shut = bool(np.any(one.combined.word[i][one.governing[i]] == NOT_2D))
    return (
        0.0 if standing.shown[i] else 1.0 if standing.provisional[i] else 2.0,
        float(shut),
        0.0 if cut.kind == "axisymmetric" else 1.0,
        *_place_in_zone(one, i),
    )


def _place_in_zone(judged: JudgedPit, station: int) -> tuple[float, float]:
    """Sort key: the longer zone first, then the smaller distance from its middle, m."""
    found = judged.found
    zone = found.pit.zones[int(found.stations.zone[station])]
    length = found.shape.length
    span = zone.to - zone.start if zone.to >= zone.start else zone.to - zone.start + length
    into = (float(found.stations.chainage[station]) - zone.start) % length
    return -round(span, 6), round(abs(into - 0.5 * span), 6)


def _needed(
    cuts: Sequence[Candidate], likeness: Likeness, judged: Mapping[int, JudgedPit], covered: Bools, weight: Floats
) -> Bools:
    """Zones of which at least one excavated depth cannot be represented, and the cuts that lie in them (z, m).

    A pit of which nothing can be represented gets a section in its longest zone, however short that is; a ring one
    axisymmetric section through each load or receptor that breaks its symmetry.
    """
    rows = []
    for p, one in judged.items():
        here = likeness.pit == p
        bare = np.where(covered[here], 0.0, weight[here])
        zone = one.found.stations.zone
        lengths = np.bincount(zone, weights=bare, minlength=len(one.found.pit.zones))
        wanted = np.flatnonzero((lengths > 0.0) & (lengths >= _least_lengths(one) - 1e-9))
        if len(wanted) == 0 and len(lengths) and not covered[here].any():
            wanted = np.array([int(np.argmax(lengths))])
        for z in wanted:
            lies = [cut.pit == p and bool(np.any(zone[list(cut.stations[: cut.serves])] == z)) for cut in cuts]
            if any(lies):
                rows.append(lies)
        rows += _spokes(cuts, p, zone)
    return np.array(rows, dtype=bool).reshape(len(rows), len(cuts))


def _spokes(cuts: Sequence[Candidate], pit: int, zone: Ints) -> list[list[bool]]:
    """Axisymmetric cuts through loads and receptors, one of which is needed in each zone that has any."""
    broken = [
        cut.kind == "axisymmetric" and cut.pit == pit and any("load" in why or "receptor" in why for why in cut.why)
        for cut in cuts
    ]
    zones = sorted({int(zone[cut.stations[0]]) for cut, breaks in zip(cuts, broken, strict=True) if breaks})
    return [
        [breaks and int(zone[cut.stations[0]]) == z for cut, breaks in zip(cuts, broken, strict=True)] for z in zones
    ]


def _least_lengths(judged: JudgedPit) -> Floats:
    """Excavated depth of each zone, m: what must be left of it to need a section; else DEPTH_UNKNOWN."""
    stations = judged.found.stations
    deepest = np.zeros(len(judged.found.pit.zones))
    np.maximum.at(deepest, stations.zone, np.nan_to_num(stations.depth))
    return np.where(deepest > 0.0, deepest, DEPTH_UNKNOWN)
