"""Rows of like supports along a wall, with their spacing and the wall length each member stands for."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Literal, cast

import numpy as np

from ingest.members import Role, Support
from ingest.model import Limits, Site
from ingest.trail import Source
from sections.found import PitShape, SupportRow
from sections.model import Along, Floats, Ints, Member
from sections.pit.chainage import Sides, normal_at, side_of
from sections.pit.segmentation import group_alike
from sections.pit.spacing import Stand, regular_spacing, spacing_changes, tributary_widths
from sections.pit.support_ends import SupportEnds, slope_of

INCLINATION = 2.0
"""Inclinations closer than this count as alike, degrees (judgement)."""
SKEW = 5.0
"""Skews closer than this count as alike, degrees (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Rows:
    """The support rows of one pit and where their ends stand on its sides."""

    rows: tuple[SupportRow, ...]
    stands: tuple[Stand, ...]


@dataclass(frozen=True, kw_only=True)
class _Ends:
    """What is needed of every support end to sort it into rows, arrays (k,)."""

    ends: SupportEnds
    head_place: Floats
    far_place: Floats
    head_level: Ints
    far_level: Ints
    inclination: Floats
    skew: Floats


def find_rows(site: Site, shape: PitShape, sides: Sides, ends: SupportEnds) -> Rows:
    """Sort the supports of one pit into rows of like role, level, section, inclination and skew along each side.

    Row ids are given later; until then `Member.id` is empty. Tributary widths follow the rule of half gaps: half
    the gap to either neighbour at the same level, and up to the end of the wall at the end of a row.
    """
    if len(ends.index) == 0:
        return Rows(rows=(), stands=())
    facts = _facts(site, shape, sides, ends)
    groups = _groups(site, sides, facts)
    parts: list[tuple[Ints, int, bool]] = []
    for parent, group in enumerate(groups):
        order = _along_side(facts.head_place[group], float(sides.total), sides.loop)
        members = group[order]
        places = np.unwrap(facts.head_place[members], period=sides.total) if sides.loop else facts.head_place[members]
        cuts = spacing_changes(np.diff(places), site.limits.spacing_ratio)
        pieces = np.split(members, [cut + 1 for cut in cuts])
        parts += [(piece, parent, i > 0) for i, piece in enumerate(pieces)]
    stands = tuple(stand for stand in _stands(facts, sides, parts))
    rows = tuple(
        _row(site, shape, facts, piece, [stand for stand in stands if stand.row == i], stands, sides)
        for i, (piece, _, _) in enumerate(parts)
    )
    return Rows(rows=rows, stands=stands)


def _facts(site: Site, shape: PitShape, sides: Sides, ends: SupportEnds) -> _Ends:
    levels = group_alike(np.concatenate([ends.head_level, ends.far_level]), site.limits.level)
    count = len(ends.index)
    plan = ends.far[:, :2] - ends.head[:, :2]
    normal = normal_at(shape, np.nan_to_num(ends.head_at))
    across = np.abs(np.einsum("ij,ij->i", plan, normal))
    along = np.abs(plan[:, 0] * normal[:, 1] - plan[:, 1] * normal[:, 0])
    inclination = slope_of(ends.head, ends.far)
    given = np.array([site.supports[i].inclination_given for i in ends.index], dtype=bool)
    return _Ends(
        ends=ends,
        head_place=side_of(sides, np.nan_to_num(ends.head_at))[1],
        far_place=np.where(np.isnan(ends.far_at), np.nan, side_of(sides, np.nan_to_num(ends.far_at))[1]),
        head_level=levels[:count],
        far_level=levels[count:],
        inclination=np.where(given, inclination, np.nan),
        skew=np.where(along < 1e-6 * across, 0.0, np.degrees(np.arctan2(along, across))),
    )


def _groups(site: Site, sides: Sides, facts: _Ends) -> list[Ints]:
    """Indices of the members of each row, before a change of spacing parts them."""
    ends = facts.ends
    members = [site.supports[i] for i in ends.index]
    # parallel struts across a ring are one kind though each meets the wall at its own angle
    skew = np.where(np.array(ends.role) == "anchor", facts.skew, 0.0) if sides.loop else facts.skew
    columns = [
        _codes(ends.role),
        _codes((_section_of(member), member.material or "") for member in members),
        ends.head_side,
        ends.far_side,
        _codes(ends.beyond),
        facts.head_level,
        group_alike(facts.inclination, INCLINATION),
        group_alike(skew, SKEW),
        *(_codes_alike(members, name, site.limits) for name in ("EA", "free_length", "bond_length", "preload")),
    ]
    _, label = np.unique(np.column_stack(columns), axis=0, return_inverse=True)
    flat = label.reshape(-1)
    return [np.flatnonzero(flat == i).astype(np.int64) for i in range(int(flat.max()) + 1)]


def _codes(values: Iterable[object]) -> Ints:
    listed = [str(value) for value in values]
    return np.unique(listed, return_inverse=True)[1].astype(np.int64)


def _section_of(member: Support) -> str:
    section = member.section
    if section is None:
        return ""
    return section.designation or f"{section.A} {section.diameter} {section.width} {section.depth}"


def _codes_alike(members: Sequence[Support], name: str, limits: Limits) -> Ints:
    """Labels of a property, values within the stiffness tolerance alike; not given is a label of its own."""
    value = np.array([np.nan if getattr(m, name) is None else abs(getattr(m, name)) for m in members])
    return group_alike(np.log(np.maximum(value, 1e-9)), float(np.log1p(limits.stiffness_ratio)))


def _along_side(places: Floats, total: float, loop: bool) -> Ints:
    """Order along the side; round a ring it begins behind the widest gap."""
    order = np.argsort(places, kind="stable")
    if not loop or len(order) < 2:
        return order.astype(np.int64)
    gaps = np.diff(np.append(places[order], places[order[0]] + total))
    widest = int(np.argmax(gaps >= np.max(gaps) - 1e-6))
    regular = np.ptp(gaps) <= 0.1 * np.min(gaps)
    return order.astype(np.int64) if regular else np.roll(order, -(widest + 1)).astype(np.int64)


def _stands(facts: _Ends, sides: Sides, parts: Sequence[tuple[Ints, int, bool]]) -> Iterable[Stand]:
    before: Ints = np.zeros(0, dtype=np.int64)
    for row, (piece, parent, follows) in enumerate(parts):
        for end, place, level, side in (
            ("head", facts.head_place, facts.head_level, facts.ends.head_side),
            ("far", facts.far_place, facts.far_level, facts.ends.far_side),
        ):
            if side[piece[0]] < 0:
                continue
            values = place[piece]
            if sides.loop:
                values = np.unwrap(values, period=sides.total)
            order = np.argsort(values, kind="stable")
            shared = float(place[before[-1]]) if follows else float("nan")
            if sides.loop and follows:
                shared += sides.total * round((float(values[0]) - shared) / sides.total)
            yield Stand(
                row=row,
                end=end,
                side=int(side[piece[0]]),
                level=int(level[piece[0]]),
                places=values[order],
                order=tuple(int(i) for i in order),
                parent=parent,
                shared=shared,
            )
        before = piece


def _row(
    site: Site,
    shape: PitShape,
    facts: _Ends,
    piece: Ints,
    own: Sequence[Stand],
    stands: Sequence[Stand],
    sides: Sides,
) -> SupportRow:
    ends = facts.ends
    widths = {stand.end: _widths(stand, stands, sides) for stand in own}
    nothing = np.full(len(piece), np.nan)
    head = widths.get("head", nothing)
    indices = tuple(int(i) for i in ends.index[piece])
    return SupportRow(
        member=_member(site, shape, facts, piece, own, head, sides),
        supports=indices,
        head_at=ends.head_at[piece],
        far_at=ends.far_at[piece],
        tributary_head=head,
        tributary_far=widths.get("far", nothing),
        waler=_given_waler([site.supports[i] for i in indices]),
        turned=ends.turned[piece],
    )


def _widths(stand: Stand, stands: Sequence[Stand], sides: Sides) -> Floats:
    level = [other for other in stands if other.side == stand.side and other.level == stand.level]
    widths = tributary_widths(stand, level, float(sides.length[stand.side]), sides.loop)
    placed = np.empty(len(widths))
    placed[list(stand.order)] = widths
    return placed


def _member(
    site: Site,
    shape: PitShape,
    facts: _Ends,
    piece: Ints,
    own: Sequence[Stand],
    widths: Floats,
    sides: Sides,
) -> Member:
    ends = facts.ends
    members = [site.supports[i] for i in ends.index[piece]]
    head = next(stand for stand in own if stand.end == "head")
    gaps = np.diff(head.bays)
    if sides.loop and len(gaps) and _closes(head, sides):
        gaps = np.append(gaps, head.places[0] + sides.total - head.places[-1])
    uneven = len(piece) > 1 and float(np.max(widths)) > (1.0 + site.limits.spacing_ratio) * float(np.min(widths))
    return Member(
        id="",
        role=cast(Role, ends.role[piece[0]]),
        count=len(piece),
        spacing=regular_spacing(gaps, site.limits.spacing_ratio),
        spacing_range=(float(np.min(widths)), float(np.max(widths))) if uneven else None,
        inclination=_mean(facts.inclination[piece]),
        skew=_mean(facts.skew[piece]),
        level=_mean(ends.head_level[piece]),
        free_length=_mean(_column(members, "free_length")),
        bond_length=_mean(_column(members, "bond_length")),
        along=(*(_along(shape, stand, sides) for stand in own), *_along_beyond(ends, piece)),
        sources=_sources(ends, piece, members),
    )


def _closes(head: Stand, sides: Sides) -> bool:
    """Whether a row goes all round a ring: its closing gap is no wider than the widest within it."""
    closing = head.places[0] + sides.total - head.places[-1]
    return bool(closing <= 1.1 * np.max(np.diff(head.places)))


def _along(shape: PitShape, stand: Stand, sides: Sides) -> Along:
    if sides.loop and len(stand.places) > 2 and _closes(stand, sides):
        return Along(pit=shape.id, start=0.0, to=shape.length, end=cast(Literal["head", "far"], stand.end))
    start = float(sides.start[stand.side]) + stand.places[[0, -1]]
    first, last = np.mod(start, shape.length) if shape.closed else start
    return Along(pit=shape.id, start=float(first), to=float(last), end=cast(Literal["head", "far"], stand.end))


def _along_beyond(ends: SupportEnds, piece: Ints) -> tuple[Along, ...]:
    """Where the far ends stand on the wall of another pit."""
    if ends.beyond_at is None or not ends.beyond[piece[0]]:
        return ()
    at = ends.beyond_at[piece]
    return (Along(pit=ends.beyond[piece[0]], start=float(np.min(at)), to=float(np.max(at)), end="far"),)


def _sources(ends: SupportEnds, piece: Ints, members: Sequence[Support]) -> tuple[Source, ...]:
    listed: dict[tuple[str, str], Source] = {}
    for index, member in zip(ends.index[piece], members, strict=True):
        for source in (*member.sources, *ends.copies.get(int(index), ())):
            listed.setdefault((source.file, source.item), source)
    return tuple(listed[key] for key in sorted(listed))


def _column(members: Sequence[Support], name: str) -> Floats:
    return np.array([np.nan if getattr(m, name) is None else getattr(m, name) for m in members])


def _mean(values: Floats) -> float | None:
    """Mean of values all given, else None."""
    return None if np.any(np.isnan(values)) else float(np.mean(values))


def _given_waler(members: Sequence[Support]) -> bool | None:
    given = {member.waler for member in members}
    if True in given:
        return True
    return False if given == {False} else None
