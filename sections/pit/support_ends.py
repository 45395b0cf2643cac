"""Which supports belong to which pit, and where on its wall their ends bear."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely

from ingest.model import Site
from ingest.trail import Source
from sections.found import PitShape
from sections.model import Bools, Floats, Ints
from sections.pit.chainage import Located, Sides, area_of, cast, find_sides, locate, segment_at, segments_of, side_of
from sections.pit.support_copies import apart, drop_copies, ends_of

REACH = 1.5
"""A support end this near the wall axis bears on the wall, m (judgement: half a thick wall, a waler, a packer)."""
SLOPE = 5.0
"""A member steeper than this is inclined on purpose, degrees (judgement)."""
STEEP = 30.0
"""A member steeper than this stands on the floor, however near a wall its foot is, degrees (judgement)."""
SHARP = 45.0
"""Across an inside corner sharper than this a strut is a cross strut, nearly square to both walls, degrees."""


@dataclass(frozen=True, kw_only=True)
class SupportEnds:
    """The supports of one pit, arrays of length k.

    Attributes:
        index: Index into `Site.supports`.
        role: strut, corner_strut, raker or anchor, as geometry has it.
        drawn: The role the file or the brief gave.
        turned: True where head and far end are swapped against the site's record.
        head, far: (k, 3) ends.
        level_given: False where the levels of the ends are not known.
        head_at, far_at: Chainage where each end meets the wall, nan where it does not.
        head_side, far_side: Side of the wall, -1 where it does not meet.
        beyond: Pit whose wall the far end meets when it is another pit's (a strut between a ring and one within it),
            "" when none; beyond_at: chainage there, nan when none.
        copies: Sources of the duplicates left out, by index into `Site.supports`.
    """

    index: Ints
    role: tuple[str, ...]
    drawn: tuple[str, ...]
    turned: Bools
    head: Floats
    far: Floats
    level_given: Bools
    head_at: Floats
    far_at: Floats
    head_side: Ints
    far_side: Ints
    copies: dict[int, tuple[Source, ...]]
    beyond: tuple[str, ...] = ()
    beyond_at: Floats | None = None

    @property
    def head_level(self) -> Floats:
        """Level of the heads, m; nan where not given."""
        return np.where(self.level_given, self.head[:, 2], np.nan)

    @property
    def far_level(self) -> Floats:
        """Level of the far ends, m; nan where not given."""
        return np.where(self.level_given, self.far[:, 2], np.nan)


@dataclass(frozen=True, kw_only=True)
class _Meeting:
    """What all supports are to one pit: both ends on its wall, and whether the member runs inside it."""

    head: Located
    far: Located
    head_met: Bools
    far_met: Bools
    inside: Bools
    cost: Floats


def meet_supports(site: Site, shapes: Sequence[PitShape]) -> tuple[tuple[SupportEnds, ...], Ints]:
    """Give every support to the pit whose wall it bears on.

    Returns:
        The supports of each pit, and the indices of those that bear on no wall.
    """
    kept, copies = drop_copies(site.supports, site.limits)
    members = [site.supports[i] for i in kept]
    if not members or not shapes:
        none = np.zeros(0, dtype=np.int64)
        return tuple(_select(site, shape, none, None, copies) for shape in shapes), kept
    head, far = ends_of(members)
    anchor = np.array([member.role == "anchor" for member in members])
    meetings = [_meet(site, shape, head, far, anchor) for shape in shapes]
    cost = np.vstack([meeting.cost for meeting in meetings])
    owner = np.argmin(cost, axis=0)
    met = np.isfinite(np.min(cost, axis=0))
    found = []
    for i, (shape, meeting) in enumerate(zip(shapes, meetings, strict=True)):
        chosen = np.flatnonzero(met & (owner == i))
        ends = _select(site, shape, chosen, (meeting, kept, head, far), copies)
        others = [(other, m) for other, m in zip(shapes, meetings, strict=True) if other is not shape]
        found.append(_reach_beyond(ends, chosen, others))
    return tuple(found), kept[~met]


def _reach_beyond(ends: SupportEnds, chosen: Ints, others: Sequence[tuple[PitShape, _Meeting]]) -> SupportEnds:
    """Note the far ends of struts that bear on the wall of another pit."""
    at = np.full(len(chosen), np.nan)
    pit = [""] * len(chosen)
    loose = np.isnan(ends.far_at) & np.array([role == "strut" for role in ends.role], dtype=bool)
    for shape, meeting in others:
        met = np.where(ends.turned, meeting.head_met[chosen], meeting.far_met[chosen]) & loose & np.isnan(at)
        at[met] = np.where(ends.turned, meeting.head.at[chosen], meeting.far.at[chosen])[met]
        pit = [shape.id if hit else known for hit, known in zip(met, pit, strict=True)]
    return replace(ends, beyond=tuple(pit), beyond_at=at)


def _meet(site: Site, shape: PitShape, head: Floats, far: Floats, anchor: Bools) -> _Meeting:
    thickest = max((run.wall.thickness or run.wall.diameter or 0.0 for run in shape.runs), default=0.0)
    plan = apart(head[:, :2], far[:, :2])
    reach = np.minimum(max(REACH, thickest + 0.5), 0.45 * np.maximum(plan, 0.1))
    sides = find_sides(shape)
    first = _bear(shape, sides, head, far, reach)
    second = _bear(shape, sides, far, head, reach)
    middle = 0.5 * (head + far)[:, :2]
    if shape.closed:
        area = area_of(shape)
        shapely.prepare(area)
        inside = np.asarray(shapely.contains_xy(area, middle[:, 0], middle[:, 1]))
    else:
        inside = locate(shape, middle).offset > 0.0
    head_met, far_met = first.distance <= reach, second.distance <= reach
    far_unmet = np.where(anchor, 0.0, 10.0)
    # an end off the wall, or a member on the wrong side of it, speaks against this pit but does not rule it out
    cost = np.where(head_met, first.distance, 10.0) + np.where(far_met, second.distance, far_unmet)
    cost += np.where(inside == anchor, 5.0, 0.0)
    cost = np.where(head_met | far_met, cost, np.inf)
    return _Meeting(head=first, far=second, head_met=head_met, far_met=far_met, inside=inside, cost=cost)


def _bear(shape: PitShape, sides: Sides, end: Floats, other: Floats, reach: Floats) -> Located:
    """Lay ends on the wall the member runs against; an end that merely passes near a wall bears on none.

    The foot of a raker beside a side wall is near that wall and has nothing to do with it.
    """
    located = locate(shape, end[:, :2])
    near = np.flatnonzero(located.distance <= reach)
    away = np.full(len(end), np.inf)
    along = end[near, :2] - other[near, :2]
    along /= np.maximum(np.hypot(along[:, 0], along[:, 1]), 1e-12)[:, None]
    back = reach[near]
    hit, met = cast(shape, end[near, :2] - back[:, None] * along, along)
    good = hit <= 3.0 * back
    near, met = near[good], met[good]
    away[near] = located.distance[near]
    side, local = side_of(sides, located.at[near])
    corner = (np.minimum(local, sides.length[side] - local) < 2.0 * reach[near]) & (not sides.loop)
    at, distance = _foot_on(shape, end[near[corner], :2], met[corner])
    fits = distance <= reach[near[corner]]
    chosen = near[corner][fits]
    located.at[chosen] = at[fits]
    away[chosen] = distance[fits]
    return Located(at=located.at, distance=away, offset=located.offset)


def _foot_on(shape: PitShape, points: Floats, met: Floats) -> tuple[Floats, Floats]:
    """Chainage and distance of the foot of each point on the straight piece of wall at chainage `met`."""
    piece = segment_at(shape, met)
    start, vector, length = segments_of(shape)
    unit = vector[piece] / length[piece][:, None]
    run = np.clip(np.einsum("ij,ij->i", points - start[piece], unit), 0.0, length[piece] - 1e-6)
    return shape.at[piece] + run, apart(points, start[piece] + run[:, None] * unit)


def _select(
    site: Site,
    shape: PitShape,
    chosen: Ints,
    all_of: tuple[_Meeting, Ints, Floats, Floats] | None,
    copies: dict[int, tuple[Source, ...]],
) -> SupportEnds:
    """The supports of one pit, each with its head on the wall and its role as the geometry has it."""
    if all_of is None:
        flat, tall = np.zeros(0), np.zeros((0, 3))
        never = np.zeros(0, dtype=bool)
        return SupportEnds(
            index=chosen, role=(), drawn=(), turned=never, head=tall, far=tall, level_given=never, head_at=flat,
            far_at=flat, head_side=chosen, far_side=chosen, copies={},
        )  # fmt: skip
    meeting, kept, head, far = all_of
    index = kept[chosen]
    drawn = tuple(site.supports[i].role for i in index)
    one_ended = np.array([role in ("anchor", "raker") for role in drawn], dtype=bool)
    head_met, far_met = meeting.head_met[chosen], meeting.far_met[chosen]
    head_at = np.where(head_met, meeting.head.at[chosen], np.nan)
    far_at = np.where(far_met, meeting.far.at[chosen], np.nan)
    sides = find_sides(shape)
    one, other = _sides_of(sides, head_at), _sides_of(sides, far_at)
    # the head of an anchor or raker is drawn first; of a strut it is the end on the side that comes first
    later = (other < one) | ((other == one) & (far_at < head_at))
    backwards = head_met & far_met & ~one_ended & later
    turned = (~head_met & far_met) | backwards
    head, far = head[chosen], far[chosen]
    head, far = np.where(turned[:, None], far, head), np.where(turned[:, None], head, far)
    head_at, far_at = np.where(turned, far_at, head_at), np.where(turned, head_at, far_at)
    far_at = np.where(one_ended | (slope_of(head, far) > STEEP), np.nan, far_at)
    head_side, far_side = _sides_of(sides, head_at), _sides_of(sides, far_at)
    role = _roles(sides, drawn, head, far, far_side, head_side, meeting.inside[chosen])
    return SupportEnds(
        index=index, role=role, drawn=drawn, turned=turned, head=head, far=far,
        level_given=np.array([site.supports[i].level_given for i in index], dtype=bool), head_at=head_at, far_at=far_at,
        head_side=head_side, far_side=far_side, copies={int(i): copies[int(i)] for i in index if int(i) in copies},
    )  # fmt: skip


def _sides_of(sides: Sides, at: Floats) -> Ints:
    known = ~np.isnan(at)
    index, _ = side_of(sides, np.where(known, at, 0.0))
    return np.where(known, index, -1).astype(np.int64)


def slope_of(head: Floats, far: Floats) -> Floats:
    """Inclination below the horizontal from head to far end, degrees; nan without levels."""
    drop = head[:, 2] - far[:, 2]
    return np.asarray(np.degrees(np.arctan2(drop, apart(head[:, :2], far[:, :2]))))


def _roles(
    sides: Sides, drawn: tuple[str, ...], head: Floats, far: Floats, far_side: Ints, head_side: Ints, inside: Bools
) -> tuple[str, ...]:
    slope = slope_of(head, far)
    count = len(sides.start)
    follows = (head_side - far_side == 1) | ((head_side == 0) & (far_side == count - 1))
    leads = (far_side - head_side == 1) | ((far_side == 0) & (head_side == count - 1))
    angle = np.where(leads, sides.angle_end[head_side], np.where(follows, sides.angle_start[head_side], np.nan))
    across = (far_side >= 0) & (head_side != far_side) & (angle > SHARP) & (angle < 180.0)
    return tuple(
        _role(drawn[i], bool(across[i]), int(far_side[i]), float(slope[i]), bool(inside[i])) for i in range(len(drawn))
    )


def _role(drawn: str, across: bool, far_side: int, slope: float, inside: bool) -> str:
    if drawn in ("anchor", "raker"):
        return drawn
    if across:
        return "corner_strut"
    if far_side < 0 and slope > SLOPE:
        return "raker" if inside else "anchor"
    return drawn
