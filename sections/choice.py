"""Which cuts become sections, and which stretches of wall each stands for.

The fewest sections that represent all that can be represented, found as an integer programme; among those the closest
fit. A zone of which at least one excavated depth cannot be represented gets its best cut as well: the engineer must
analyse something there, and is told what it is worth.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Limits, Site
from sections.candidates import Candidate, find_candidates
from sections.cover_programme import Cover, solve_cover
from sections.judged import JudgedPit
from sections.likeness import Likeness, find_likeness, fits, misfit
from sections.model import Bools, Floats, Ints, Represents, Unrepresented
from sections.standing import Standing, find_reasons, find_standing, open_outputs
from sections.stretches import cell_lengths, find_stretches
from sections.verdict import NOT_2D

NOBODY = -1
DEPTH_UNKNOWN = 5.0
"""Length of a zone that gets its own section where the excavated depth is not known, m (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Chosen:
    """One cut that becomes a section, with the stretches it stands for."""

    candidate: Candidate
    represents: tuple[Represents, ...]


@dataclass(frozen=True, kw_only=True)
class Choice:
    """The sections of a site.

    Attributes:
        chosen: In order of pit and chainage: S1, S2 ...
        section: Per pit, which of `chosen` stands for each station; -1 for none.
        unrepresented: Stretches that need their own analysis.
        shown, provisional, left: Metres of wall by pit; together its length.
        gap: Relative gap of the integer programme when it was stopped; 0 when it was solved.
    """

    chosen: tuple[Chosen, ...]
    section: tuple[Ints, ...]
    unrepresented: tuple[Unrepresented, ...]
    shown: tuple[float, ...]
    provisional: tuple[float, ...]
    left: tuple[float, ...]
    gap: float


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


def choose(
    site: Site,
    judged: Sequence[JudgedPit],
    *,
    rings: Mapping[int, JudgedPit] | None = None,
    candidates: Sequence[Candidate] | None = None,
    limits: Limits | None = None,
) -> Choice:
    """Choose the sections of a site.

    Args:
        site: The site.
        judged: Every pit judged for plane strain, in order.
        rings: By index of the pit, ring pits judged for axisymmetric sections.
        candidates: Cuts to choose from; all that are worth trying when left out.
        limits: Tolerances; those of the site when left out.
    """
    limits = site.limits if limits is None else limits
    founds = [one.found for one in judged]
    cuts = tuple(find_candidates(site, founds, limits) if candidates is None else candidates)
    likeness = find_likeness(site, founds, limits)
    by_kind = {"plane_strain": dict(enumerate(judged)), "axisymmetric": dict(rings or {})}
    standings = {kind: {p: find_standing(one) for p, one in pits.items()} for kind, pits in by_kind.items()}
    table = tabulate(cuts, likeness, by_kind, standings, limits)
    picked, gap = solve_cover(Cover(table.covers, table.misfit, table.weight, table.needed, table.rank, table.pinned))
    owner = assign(table, picked)
    return _choice(cuts, picked, owner, likeness, by_kind, standings, gap)


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


def assign(table: Table, picked: Ints) -> Ints:
    """Candidate that stands for each station (n,): of the picked ones the closest fit, then the better ranked; -1."""
    if len(picked) == 0:
        return np.full(table.covers.shape[1], NOBODY)
    order = picked[np.argsort(table.rank[picked])]
    cost = np.where(table.covers[order], np.round(table.misfit[order], 9), np.inf)
    best = np.argmin(cost, axis=0)
    return np.where(np.isfinite(cost.min(axis=0)), order[best], NOBODY).astype(np.int64)


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


def _choice(
    cuts: Sequence[Candidate],
    picked: Ints,
    owner: Ints,
    likeness: Likeness,
    judged: Mapping[str, Mapping[int, JudgedPit]],
    standings: Mapping[str, Mapping[int, Standing]],
    gap: float,
) -> Choice:
    order = sorted(picked.tolist(), key=lambda c: (cuts[c].pit, cuts[c].stations[0], c))
    place = {c: k for k, c in enumerate(order)}
    represents: list[list[Represents]] = [[] for _ in order]
    sections, left_over, metres = [], [], []
    for p, one in judged["plane_strain"].items():
        own = owner[likeness.pit == p]
        section = np.array([place.get(c, NOBODY) for c in own.tolist()], dtype=np.int64)
        kinds = np.array([*(cut.kind == "axisymmetric" for cut in cuts), False])[own]
        made, rest, counted = _stretches(one, judged["axisymmetric"].get(p), section, kinds, standings, p)
        for k, stretch in made:
            represents[k].append(stretch)
        left_over += rest
        metres.append(counted)
        sections.append(section)
    return Choice(
        chosen=tuple(Chosen(candidate=cuts[c], represents=tuple(represents[place[c]])) for c in order),
        section=tuple(sections),
        unrepresented=tuple(left_over),
        shown=tuple(m[0] for m in metres),
        provisional=tuple(m[1] for m in metres),
        left=tuple(m[2] for m in metres),
        gap=gap,
    )


def _stretches(
    plane: JudgedPit,
    ring: JudgedPit | None,
    section: Ints,
    round_: Bools,
    standings: Mapping[str, Mapping[int, Standing]],
    p: int,
) -> tuple[list[tuple[int, Represents]], list[Unrepresented], tuple[float, float, float]]:
    """Stretches of one pit by section and open outputs, and the rest by reason."""
    found, standing = plane.found, standings["plane_strain"][p]
    sets_index, sets = open_outputs(plane, standing)
    shown = standing.shown
    if ring is not None:
        other = standings["axisymmetric"][p]
        more_index, more = open_outputs(ring, other)
        sets_index = np.where(round_, more_index + len(sets), sets_index)
        sets, shown = (*sets, *more), np.where(round_, other.shown, shown)
    reasons = find_reasons(plane, standing) if ring is None else find_reasons(ring, standings["axisymmetric"][p])
    base = len(sets)
    labels = np.where(section >= 0, section * base + sets_index, -1 - reasons.index)
    made, rest = [], []
    for start, to, label in find_stretches(found, labels):
        if label >= 0:
            made.append(
                (label // base, Represents(pit=found.pit.id, start=start, to=to, provisional=sets[label % base]))
            )
        else:
            reason, what = reasons.pairs[-1 - label]
            rest.append(Unrepresented(pit=found.pit.id, start=start, to=to, reason=reason, what_to_do=what))
    lengths, held = cell_lengths(found), section >= 0
    counted = (lengths[held & shown].sum(), lengths[held & ~shown].sum(), lengths[~held].sum())
    return made, rest, (float(counted[0]), float(counted[1]), float(counted[2]))
