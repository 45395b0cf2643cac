"""Where a wall ends and what lies along it: corners that are felt, ends, curves, support bays, distances."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import chain

import numpy as np

from sections.found import FoundPit, Stations
from sections.model import Bools, Corner, Floats, Ints, Run

NONE, INSIDE, FREE, CURVE, REENTRANT = range(5)
"""Kinds of end of a straight wall, mildest first: where two coincide the later one counts."""

STRAIGHT_FROM, STRAIGHT, GENTLE = 150.0, 10.0, 30.0
"""An inside corner of 150 degrees and more is none; a turn out of the pit up to 10 degrees is none, up to 30 gentle
(judgement)."""
ARC_PIECES = 16
"""Pieces in which an arc that turns out of the pit is counted."""
ORTHOGONAL, ACUTE = 120.0, 60.0
"""Inside corners from 60 to 120 degrees count as square; sharper ones too, and are flagged (judgement)."""
SAME_PLACE = 0.01
"""Features of the wall closer than this are one place, m."""


@dataclass(frozen=True, kw_only=True)
class WallEnds:
    """The wall each station stands on, up to where it turns, bends or stops, arrays (n,).

    Corners too blunt to be felt do not end it. Distances are inf where it never ends.

    Attributes:
        back, ahead: Distance to the end against and with the chainage, m.
        back_kind, ahead_kind: NONE, INSIDE, FREE, CURVE or REENTRANT.
        back_angle, ahead_angle: Interior angle of the corner there, degrees; nan for other ends.
    """

    back: Floats
    ahead: Floats
    back_kind: Ints
    ahead_kind: Ints
    back_angle: Floats
    ahead_angle: Floats

    @property
    def length(self) -> Floats:
        """Length of the wall between its ends, m; inf where it never ends."""
        return self.back + self.ahead

    @property
    def to_inside(self) -> Floats:
        """Distance to the nearer inside corner, m; inf where there is none."""
        back = np.where(self.back_kind == INSIDE, self.back, np.inf)
        ahead = np.where(self.ahead_kind == INSIDE, self.ahead, np.inf)
        return np.minimum(back, ahead)

    @property
    def inside_angle(self) -> Floats:
        """Interior angle of the nearer inside corner, degrees; nan where there is none."""
        back = np.where(self.back_kind == INSIDE, self.back, np.inf)
        ahead = np.where(self.ahead_kind == INSIDE, self.ahead, np.inf)
        angle = np.where(back <= ahead, self.back_angle, self.ahead_angle)
        return np.where(np.isfinite(self.to_inside), angle, np.nan)

    @property
    def has_acute(self) -> Bools:
        """True where an inside corner sharper than the range taken as square ends the wall."""
        back = (self.back_kind == INSIDE) & (self.back_angle < ACUTE - 1e-9)
        return np.asarray(back | ((self.ahead_kind == INSIDE) & (self.ahead_angle < ACUTE - 1e-9)))

    def has(self, kind: int) -> Bools:
        """True where either end is of this kind."""
        return np.asarray((self.back_kind == kind) | (self.ahead_kind == kind))


def find_ends(found: FoundPit) -> WallEnds:
    """Find the two ends of the wall at every station; the corners of a ring, being a curve in pieces, do not count."""
    stations = found.stations
    at, kind, angle = _features(found)
    back, back_kind, back_angle = _nearest(found, at, kind, angle, -1.0)
    ahead, ahead_kind, ahead_angle = _nearest(found, at, kind, angle, 1.0)
    curved = ~np.isnan(stations.radius)
    return WallEnds(
        back=np.where(curved, np.inf, back),
        ahead=np.where(curved, np.inf, ahead),
        back_kind=np.where(curved, NONE, back_kind),
        ahead_kind=np.where(curved, NONE, ahead_kind),
        back_angle=np.where(curved, np.nan, back_angle),
        ahead_angle=np.where(curved, np.nan, ahead_angle),
    )


def _features(found: FoundPit) -> tuple[Floats, Ints, Floats]:
    """Chainage, kind and angle of whatever ends a straight wall, worst kind first."""
    shape = found.shape
    rows: list[tuple[float, int, float]] = []
    if shape.circle is None:
        inside = [corner for corner in shape.corners if corner.interior_angle < STRAIGHT_FROM]
        rows += [(corner.at, _inside_kind(found, corner), corner.interior_angle) for corner in inside]
        at, turn = outward_turns(found)
        rows += [
            (a, REENTRANT, 180.0 + t) for a, t in zip(at.tolist(), turn.tolist(), strict=True) if t > GENTLE + 1e-6
        ]
    if not shape.closed:
        rows += [(0.0, FREE, np.nan), (shape.length, FREE, np.nan)]
    rows += [(at, CURVE, np.nan) for arc in shape.arcs for at in (arc.start, arc.to)]
    rows.sort(key=lambda row: (-row[1], row[0]))
    return (
        np.array([row[0] for row in rows]),
        np.array([row[1] for row in rows], dtype=np.int64),
        np.array([row[2] for row in rows]),
    )


def _inside_kind(found: FoundPit, corner: Corner) -> int:
    """Tell what an inside corner does: it holds nothing where the wall on one of its sides is not there."""
    touching = [run.wall.kind for run in found.shape.runs if _touches(found, run, corner.at)]
    return FREE if "none" in touching else INSIDE


def outward_turns(found: FoundPit) -> tuple[Floats, Floats]:
    """Where the wall turns out of the pit, and by how much within one excavated depth around, degrees.

    A re-entrant corner drawn as several blunt ones, or rounded, is one: turns that stand close add up. Straight walls
    and rings have none; with the depth not known all of them add up.
    """
    shape = found.shape
    if shape.circle is not None:
        return np.zeros(0), np.zeros(0)
    deepest = float(np.nanmax(found.stations.depth, initial=0.0))
    turns = [(corner.at, corner.interior_angle - 180.0) for corner in shape.corners if corner.interior_angle > 180.0]
    for arc in shape.arcs:
        length = (arc.to - arc.start) % shape.length
        if not arc.ccw and length > 0.0:
            places = arc.start + length * (np.arange(ARC_PIECES) + 0.5) / ARC_PIECES
            each = float(np.degrees(length / arc.radius)) / ARC_PIECES
            turns += [(float(place % shape.length), each) for place in places]
    at, turn = np.array([one[0] for one in turns]), np.array([one[1] for one in turns])
    apart = np.abs(at[:, None] - at[None, :])
    apart = np.minimum(apart, np.abs(shape.length - apart)) if shape.closed else apart
    near = apart <= (0.5 * deepest if deepest > 0.0 else np.inf) + SAME_PLACE
    return at, np.asarray(near @ turn)


def _touches(found: FoundPit, run: Run, at: float) -> bool:
    return any(_same_place(found, at, end) for end in (run.start, run.to)) or _inside_run(run.start, run.to, at)


def _inside_run(start: float, to: float, at: float) -> bool:
    return start <= at <= to if to >= start else at >= start or at <= to


def _same_place(found: FoundPit, a: float, b: float) -> bool:
    apart = abs(a - b)
    return min(apart, abs(found.shape.length - apart)) < SAME_PLACE if found.shape.closed else apart < SAME_PLACE


def _nearest(found: FoundPit, at: Floats, kind: Ints, angle: Floats, sense: float) -> tuple[Floats, Ints, Floats]:
    """Distance, kind and angle of the next feature in one direction."""
    n = len(found.stations.chainage)
    if len(at) == 0:
        return np.full(n, np.inf), np.full(n, NONE), np.full(n, np.nan)
    gap = sense * (at[None, :] - found.stations.chainage[:, None])
    gap = np.where(np.abs(gap) < SAME_PLACE, 0.0, gap)
    if found.shape.closed:
        length = found.shape.length
        gap = np.mod(gap, length)
        gap = np.where(gap > length - SAME_PLACE, 0.0, gap)
    else:
        gap = np.where(gap < 0.0, np.inf, gap)
    # features at one place: the first listed is the worst, so a later one must be clearly nearer to win
    least = np.min(gap, axis=1)
    first = np.argmax(gap <= least[:, None] + SAME_PLACE, axis=1)
    rows = np.arange(n)
    return gap[rows, first], kind[first], angle[first]


def distance_along(found: FoundPit, chainages: Floats) -> Floats:
    """Distance along the wall from each station (n,) to the nearest of some chainages, m; inf when there are none."""
    n = len(found.stations.chainage)
    if len(chainages) == 0:
        return np.full(n, np.inf)
    apart = np.abs(found.stations.chainage[:, None] - np.asarray(chainages, dtype=np.float64)[None, :])
    if found.shape.closed:
        apart = np.minimum(apart, np.abs(found.shape.length - apart))
    return np.asarray(np.min(apart, axis=1))


def cover_of(stations: Stations, rows: int) -> Bools:
    """Support rows at the stations as a table (n stations, rows)."""
    cover = np.zeros((len(stations.chainage), rows), dtype=bool)
    counts = np.array([len(held) for held in stations.supports], dtype=np.int64)
    index = np.fromiter(chain.from_iterable(stations.supports), dtype=np.int64, count=int(counts.sum()))
    cover[np.repeat(np.arange(len(counts)), counts), index] = True
    return cover


def bay_of(found: FoundPit) -> Floats:
    """Largest spacing of the support rows at each station (n,), m; 0 where none is known."""
    spacing = np.array([_row_spacing(row.member.spacing, row.head_at) for row in found.rows])
    if len(spacing) == 0:
        return np.zeros(len(found.stations.chainage))
    return np.asarray(np.max(np.where(cover_of(found.stations, len(spacing)), spacing, 0.0), axis=1))


def _row_spacing(spacing: float | None, at: Floats) -> float:
    if spacing is not None:
        return spacing
    heads = np.sort(at[~np.isnan(at)])
    return float(np.max(np.diff(heads))) if len(heads) > 1 else 0.0


def is_rectangle(found: FoundPit) -> bool:
    """Tell whether the pit is closed by four straight walls at right angles, within 5 degrees (judgement)."""
    shape = found.shape
    felt = [corner for corner in shape.corners if not STRAIGHT_FROM <= corner.interior_angle <= 180.0 + STRAIGHT]
    square = all(abs(corner.interior_angle - 90.0) <= 5.0 for corner in felt)
    return shape.closed and shape.circle is None and not shape.arcs and len(felt) == 4 and square


def steps_of(found: FoundPit) -> Floats:
    """Chainages at which a step of the dig floor meets the wall."""
    return np.array(sorted(at for step in found.pit.steps for at in step.at))


def gaps_of(found: FoundPit, ratio: float = 0.1) -> Floats:
    """Chainages of supports beside a gap in their row, at either end, on either wall."""
    at = [
        place[beside_gap(found, place, width, ratio)]
        for row in found.rows
        for place, width in ((row.head_at, row.tributary_head), (row.far_at, row.tributary_far))
    ]
    return np.concatenate(at) if at else np.zeros(0)


def beside_gap(found: FoundPit, at: Floats, width: Floats, ratio: float = 0.1) -> Bools:
    """True for the members of one row that stand beside a gap clearly larger than the usual one.

    Args:
        found: The pit.
        at: (k,) chainage of the members on this wall; nan where they do not meet it.
        width: (k,) length of wall each one stands for, m: shows an end member that stands too far from the wall's end.
        ratio: What counts as clearly larger.

    The usual gap is the lower median of those on one side of the pit: of two unlike gaps the larger is the odd one.
    """
    beside = np.zeros(len(at), dtype=bool)
    met = np.flatnonzero(~np.isnan(at))
    under = np.searchsorted(found.stations.chainage, at[met] + 1e-3, side="right") - 1
    side = found.stations.side[under]
    for one in np.unique(side):
        members = met[side == one][np.argsort(at[met[side == one]], kind="stable")]
        gaps = np.diff(at[members])
        if len(gaps) == 0:
            continue
        most = float(np.sort(gaps)[(len(gaps) - 1) // 2]) * (1.0 + ratio) + 1e-9
        beside[members[:-1][gaps > most]] = True
        beside[members[1:][gaps > most]] = True
        beside[members[width[members] > most]] = True
    return beside
