"""Every drawn or derived wall as a line on plan: pile rows, axes, and centre lines of faces and outlines."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ingest.members import Point, WallKind, WallPiece
from ingest.model import Site
from ingest.trail import Finding, Question
from sections.model import Floats, Ints
from sections.perimeter.double_lines import centre_lines
from sections.perimeter.pile_kinds import EMBEDDED, pile_size
from sections.perimeter.pile_rows import PileRow, find_pile_rows

PLAIN_REACH = 0.6
"""How far the end of a line of unknown thickness is extended to meet another, m (judgement)."""
WIDEST_FLANGE = 1.0
"""Longest piece of the profile of sheet piling, m (common practice, no source)."""
NO_PILES: Ints = np.zeros(0, dtype=np.int64)


@dataclass(frozen=True, kw_only=True, eq=False)
class WallLine:
    """One line of wall of one construction, in the working frame of the finder.

    Attributes:
        points: (m, 2) vertices; a closed line ends on its first point.
        kind: Kind of wall, as given; of a row of piles what most of them are.
        thickness: Thickness or pile diameter, m; None when not given.
        reach: How far the first and the last end may be extended to meet another wall, m.
        piles: (m,) index into `Site.piles` of each vertex; empty for a wall that is not a row of piles.
        piece: Index into `Site.walls`; -1 for a row of piles.
        partner: Index of the piece that is the other face, -1 where there is none.
        toe: Deepest toe along the line; None when not given.
        pace: Spacing of a row of piles at the first and the last end, m; 0 for other walls.
        kinds: Kind of the pile at each vertex; empty for a wall that is not a row of piles.
        paired: True where the line is the middle of two faces.
        sure: False for piles that nobody calls a wall and that stand too far apart to show it.
    """

    points: Floats
    kind: WallKind
    thickness: float | None
    reach: tuple[float, float]
    piles: Ints
    piece: int
    toe: float | None
    pace: tuple[float, float] = (0.0, 0.0)
    kinds: tuple[WallKind, ...] = ()
    partner: int = -1
    paired: bool = False
    sure: bool = True

    @property
    def embedded(self) -> bool:
        """True for walls that are built from the ground down to retain it."""
        return self.sure and self.kind in EMBEDDED


def gather_lines(
    site: Site, origin: Point
) -> tuple[tuple[WallLine, ...], tuple[Finding, ...], tuple[Question, ...]]:  # fmt: skip
    """All wall lines of a site relative to `origin`, in an order that does not depend on the order of the input."""
    rows = tuple(_row_line(site, row, origin) for row in find_pile_rows(site.piles))
    usable = [i for i, piece in enumerate(site.walls) if len(piece.axis) > 1]
    drawn = sorted(usable, key=lambda i: _place(site.walls[i]))
    centred, questions = centre_lines([(i, site.walls[i]) for i in drawn], origin)
    lines = [_drawn_line(site.walls[i], i, points, None) for i, points in centred.axes]
    for (i, other), points, thick in centred.middles:
        first, second = (other, i) if site.walls[i].kind == "unknown" else (i, other)
        lines.append(replace(_drawn_line(site.walls[first], first, points, thick), partner=second))
    return (*rows, *(line for line in lines if len(line.points) > 1)), _single_notes(site, centred.single), questions


def _single_notes(site: Site, single: Sequence[int]) -> tuple[Finding, ...]:
    """Faces that have no second face."""
    if not single:
        return ()
    pieces = [site.walls[i] for i in single]
    names = ", ".join(dict.fromkeys(piece.name or piece.id for piece in pieces[:5])) + (" ..." if single[5:] else "")
    return (Finding(
        id="", code="single-face", severity="check", where=names,
        text=f"{len(single)} wall faces have no second face. The line drawn is taken as the wall axis: half a "
             "thickness may be missing.",
        sources=tuple(source for piece in pieces for source in piece.sources),
    ),)  # fmt: skip


def _place(piece: WallPiece) -> tuple[Point, Point, str]:
    ends = sorted((piece.axis[0], piece.axis[-1]))
    return ends[0], ends[1], piece.id


def _row_line(site: Site, row: PileRow, origin: Point) -> WallLine:
    piles = [site.piles[i] for i in row.piles]
    points = np.array([pile.centre for pile in piles]) - origin
    sizes = [size for size in map(pile_size, piles) if size is not None]
    size = float(np.median(sizes)) if sizes else None
    index = np.array(row.piles, dtype=np.int64)
    return WallLine(
        points=np.vstack((points, points[:1])) if row.closed else points,
        kind=max(sorted(set(row.kinds)), key=row.kinds.count),
        thickness=size,
        reach=(1.3 * row.ends[0] + 0.1, 1.3 * row.ends[1] + 0.1),
        pace=row.ends,
        sure=row.sure,
        kinds=(*row.kinds, row.kinds[0]) if row.closed else row.kinds,
        piles=np.append(index, index[:1]) if row.closed else index,
        piece=-1,
        toe=lowest(pile.toe for pile in piles),
    )


def lowest(levels: Iterable[float | None]) -> float | None:
    """The lowest of the levels that are given."""
    return min((level for level in levels if level is not None), default=None)


def _drawn_line(piece: WallPiece, index: int, points: Floats, thickness: float | None) -> WallLine:
    points = points[np.append(True, np.hypot(*np.diff(points, axis=0).T) > 1e-6)]
    if piece.kind == "sheet":
        points = webs_middle(points)
    thick = thickness if thickness is not None else piece.thickness
    reach = PLAIN_REACH if thick is None else max(1.3 * thick, 0.3)
    reach = max(reach, WIDEST_FLANGE) if piece.kind == "sheet" else reach
    return WallLine(
        points=points,
        kind=piece.kind,
        thickness=thick,
        reach=(reach, reach),
        piles=NO_PILES,
        piece=index,
        toe=piece.toe,
        paired=thickness is not None,
    )


def webs_middle(points: Floats) -> Floats:
    """Axis of sheet piling drawn by its profile: the middles of its webs; any other line is returned as it is.

    A profile turns left, right, right, left ... by equal angles at short steps, webs and flanges in turn.
    """
    if len(points) < 8:
        return points
    step = np.diff(points, axis=0)
    span = np.hypot(*step.T)
    angle = np.arctan2(step[:, 1], step[:, 0])
    turn = (np.diff(angle) + np.pi) % (2 * np.pi) - np.pi
    bends = np.abs(turn) > np.radians(20.0)
    back = np.sign(turn[:-2]) == -np.sign(turn[2:])
    if span.max() > WIDEST_FLANGE or bends.mean() < 0.9 or back.mean() < 0.8:
        return points
    chord = points[4:] - points[:-4]
    along = np.arctan2(chord[:, 1], chord[:, 0])[np.clip(np.arange(len(step)) - 2, 0, len(chord) - 1)]
    off = np.abs((angle - along + np.pi) % (2 * np.pi) - np.pi)
    web = off > 0.5 * float(off.max())
    middles = 0.5 * (points[:-1] + points[1:])[web]
    return np.asarray(middles) if len(middles) > 1 else points
