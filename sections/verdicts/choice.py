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
from sections.model import Bools, Ints
from sections.proposal import Represents, Unrepresented
from sections.verdicts.candidates import Candidate, find_candidates
from sections.verdicts.choice_table import Table, tabulate
from sections.verdicts.cover_programme import Cover, solve_cover
from sections.verdicts.judged import JudgedPit
from sections.verdicts.likeness import Likeness, find_likeness
from sections.verdicts.standing import Standing, find_reasons, find_standing, open_outputs
from sections.verdicts.stretches import cell_lengths, find_stretches

NOBODY = -1


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


def assign(table: Table, picked: Ints) -> Ints:
    """Candidate that stands for each station (n,): of the picked ones the closest fit, then the better ranked; -1."""
    if len(picked) == 0:
        return np.full(table.covers.shape[1], NOBODY)
    order = picked[np.argsort(table.rank[picked])]
    cost = np.where(table.covers[order], np.round(table.misfit[order], 9), np.inf)
    best = np.argmin(cost, axis=0)
    return np.where(np.isfinite(cost.min(axis=0)), order[best], NOBODY).astype(np.int64)


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
