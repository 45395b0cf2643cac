"""Two drawn faces, or the outline of a wall's body, to a centre line with its thickness."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import shapely
from scipy.spatial import cKDTree

from ingest.members import Point, WallPiece
from ingest.trail import Question, Reading
from sections.model import Bools, Floats, Ints
from sections.perimeter.face_pairs import THICKEST, Faces, Pair, beside, candidates, drop_doubles, pair_faces

CAP_JOINT = 0.03
"""Ends of a cap and of the faces it closes meet within this, m."""
THIN = ("sheet", "king_post", "none")
"""Walls that are drawn as one line: two of them side by side are two walls."""
MOST_PAIRED = 0.7
BUILDING_WALL, EMBEDDED_WALL = 0.6, 1.25
"""Distance of two lines up to which they are faces: of any walls, or of walls of one thickness, m (judgement)."""
ROUND_A_CORNER = 2.2
"""A left-over face shorter than this many thicknesses only goes round a corner of a wall found already."""


Middle = tuple[tuple[int, int], Floats, float]


@dataclass(frozen=True, kw_only=True, eq=False)
class Centred:
    """Axes as drawn, and middles of two faces with their thickness, each with the indices of its wall pieces."""

    axes: tuple[tuple[int, Floats], ...]
    middles: tuple[Middle, ...]
    single: tuple[int, ...] = ()


def centre_lines(pieces: Sequence[tuple[int, WallPiece]], origin: Point) -> tuple[Centred, tuple[Question, ...]]:
    """Centre lines of all wall pieces, relative to `origin`.

    A closed outline, hatch or solid is first paired with itself; faces, and outlines without a second face of their own
    (the two rings of a closed wall), are paired with each other. A face without partner is taken as the wall's line.

    Returns:
        The centre lines, and a question for every place where faces could be paired otherwise.
    """
    pieces, asked = _read_as_faces(pieces, origin)
    axes = [(i, _vertices(piece, origin)) for i, piece in pieces if not _has_faces(piece)]
    faces = _faces([(i, piece) for i, piece in pieces if _has_faces(piece)], origin)
    if not len(faces.p):
        return Centred(axes=tuple(axes), middles=()), ()
    own, used, _ = _middles(faces, candidates(faces, within=True) if (faces.body >= 0).any() else None, True)
    bodies = np.unique(faces.body[used & (faces.body >= 0)])
    pool = drop_doubles(faces.pick(~np.isin(faces.body, bodies) | (faces.body < 0)))
    across: list[Middle] = []
    left: list[tuple[int, Floats]] = []
    unsure: list[tuple[Floats, Floats]] = []
    if len(pool.p):
        across, paired, unsure = _middles(pool, candidates(pool, within=False), False)
        left = _left_over(pool, paired, across)
    questions = tuple(_question(k, a, b, origin) for k, (a, b) in enumerate(unsure))
    single = tuple(sorted({i for i, _ in left}))
    return Centred(axes=(*axes, *left), middles=(*own, *across), single=single), (*asked, *questions)


def _read_as_faces(
    pieces: Sequence[tuple[int, WallPiece]], origin: Point
) -> tuple[Sequence[tuple[int, WallPiece]], list[Question]]:  # fmt: skip
    """Lines without a thickness that run beside each other in pairs nearly everywhere are faces, not axes."""
    groups: dict[tuple[str, str], list[tuple[int, WallPiece]]] = {}
    for i, piece in pieces:
        if piece.drawn == "axis" and piece.thickness is None and piece.kind not in THIN:
            groups.setdefault((piece.layer, piece.kind), []).append((i, piece))
    as_faces: set[int] = set()
    asked: list[Question] = []
    for (layer, _), members in sorted(groups.items()):
        thick = _paired_thickness(drop_doubles(_faces(members, origin))) if len(members) > 1 else None
        if thick is not None:
            as_faces |= {i for i, _ in members}
            asked.append(_face_question(len(asked) + 1, layer, thick))
    return [(i, replace(p, drawn="face") if i in as_faces else p) for i, p in pieces], asked


def _paired_thickness(faces: Faces) -> float | None:
    """Usual distance between lines if most of their length has a partner at about that distance."""
    pairs = candidates(faces, within=False)
    if not len(pairs):
        return None
    low, high, offset = beside(faces, pairs)
    shared = high - low
    covered = np.zeros(len(faces.p))
    for side in (0, 1):
        np.add.at(covered, pairs[:, side], shared)
    total = float(faces.length.sum())
    if float(np.minimum(covered, faces.length).sum()) < MOST_PAIRED * total:
        return None
    order = np.argsort(offset)
    thick = float(offset[order[np.searchsorted(np.cumsum(shared[order]), 0.5 * shared.sum())]])
    even = float(shared[np.abs(offset - thick) <= 0.05].sum()) >= 0.8 * float(shared.sum())
    return thick if thick <= BUILDING_WALL or (even and thick <= EMBEDDED_WALL) else None


def _face_question(number: int, layer: str, thick: float) -> Question:
    return Question(
        id=f"faces-or-axes-{number}",
        about=f"the wall lines of layer {layer or '0'}",
        readings=(
            Reading(reading=f"the two faces of walls about {thick:.2f} m thick",
                    evidence="nearly all run beside each other in pairs", confidence=0.8),
            Reading(reading="axes of walls that stand beside each other", evidence="they give no thickness",
                    confidence=0.2),
        ),
        brief_line=f'[[roles]] match = {{layer = "{layer or "0"}"}}, role = "wall"',
    )  # fmt: skip


def _has_faces(piece: WallPiece) -> bool:
    return piece.drawn == "face" or (piece.closed and piece.drawn in ("outline", "solid", "hatch"))


def _vertices(piece: WallPiece, origin: Point) -> Floats:
    points = np.array(piece.axis, dtype=float).reshape(-1, 2) - origin
    if piece.closed and len(points) > 2 and np.hypot(*(points[0] - points[-1])) > 1e-9:
        points = np.vstack((points, points[:1]))
    return points


def _faces(pieces: Sequence[tuple[int, WallPiece]], origin: Point) -> Faces:
    p, q, owner, body, thick = [], [], [], [], []
    for number, (i, piece) in enumerate(pieces):
        points = _vertices(piece, origin)
        step = np.append(True, np.hypot(*np.diff(points, axis=0).T) > 1e-6)
        points = points[step]
        p.append(points[:-1])
        q.append(points[1:])
        owner += [i] * (len(points) - 1)
        body += [-1 if piece.drawn == "face" else number] * (len(points) - 1)
        thick += [np.nan if piece.thickness is None else piece.thickness] * (len(points) - 1)
    empty = np.zeros((0, 2))
    return Faces(p=np.vstack([empty, *p]), q=np.vstack([empty, *q]), piece=np.array(owner, dtype=np.int64),
                 body=np.array(body, dtype=np.int64), thickness=np.array(thick, dtype=float))  # fmt: skip


def _middles(faces: Faces, pairs: Ints | None, inside: bool) -> tuple[list[Middle], Bools, list[tuple[Floats, Floats]]]:
    """Middles of the chosen pairs, which faces they used, and where the choice is open."""
    used = np.zeros(len(faces.p), dtype=bool)
    if pairs is None or not len(pairs):
        return [], used, []
    if inside:
        pairs = pairs[_inside_body(faces, pairs)]
    chosen, unsure = pair_faces(faces, pairs, _capped(faces, pairs))
    middles = []
    for pair in chosen:
        used[[pair.first, pair.second]] = True
        pieces = (int(faces.piece[pair.first]), int(faces.piece[pair.second]))
        middles.append((pieces, *_middle(faces, pair)))
    return middles, used, [(0.5 * (faces.p[a] + faces.q[a]), 0.5 * (faces.p[b] + faces.q[b])) for a, b in unsure]


def _inside_body(faces: Faces, pairs: Ints) -> Bools:
    """Pairs with the body of the wall between them, not a yard that a bent wall closes in; thin before thick."""
    middle = 0.25 * (faces.p[pairs] + faces.q[pairs]).sum(axis=1)
    ok = np.zeros(len(pairs), dtype=bool)
    for body in np.unique(faces.body[pairs[:, 0]]):
        mine = faces.body == body
        area = shapely.Polygon(faces.p[mine])
        where = faces.body[pairs[:, 0]] == body
        ok[where] = shapely.contains_xy(area, middle[where])
    return ok


def _capped(faces: Faces, pairs: Ints) -> set[tuple[int, int]]:
    """Pairs of faces whose ends a short third segment joins."""
    ends = np.vstack((faces.p, faces.q))
    owner = np.tile(np.arange(len(faces.p)), 2)
    short = np.flatnonzero(faces.length <= 1.05 * THICKEST)
    tree = cKDTree(ends)
    wanted = {(int(a), int(b)) for a, b in pairs}
    capped = set()
    at_p, at_q = (tree.query_ball_point(side[short], CAP_JOINT) for side in (faces.p, faces.q))
    for k, one, other in zip(short.tolist(), at_p, at_q, strict=True):
        for i in owner[one].tolist():
            for j in owner[other].tolist():
                if i not in (k, j) and j != k and (min(i, j), max(i, j)) in wanted:
                    capped.add((min(i, j), max(i, j)))
    return capped


def _middle(faces: Faces, pair: Pair) -> tuple[Floats, float]:
    """Line half way between two faces, and the distance between them."""
    u, v = faces.along[pair.first], faces.along[pair.second]
    points = faces.p[pair.first] + np.array([[pair.start], [pair.stop]]) * u
    foot = faces.p[pair.second] + ((points - faces.p[pair.second]) @ v)[:, None] * v
    thick = float(np.hypot(*(foot - points).T).mean())
    return 0.5 * (points + foot), thick


def _left_over(
    faces: Faces, paired: Bools, middles: Sequence[Middle]
) -> list[tuple[int, Floats]]:  # fmt: skip
    """Faces without a partner, as drawn; caps and bits round the corner of a wall found already are dropped."""
    alone = np.flatnonzero(~paired)
    if not len(alone):
        return []
    lines = shapely.linestrings(np.stack((faces.p[alone], faces.q[alone]), axis=1))
    keep = np.ones(len(alone), dtype=bool)
    if middles:
        tree = shapely.STRtree([shapely.LineString(line) for _, line, _ in middles])
        near = tree.query(lines, predicate="dwithin", distance=1.5 * THICKEST)
        thick = np.zeros(len(alone))
        np.maximum.at(thick, near[0], np.array([t for _, _, t in middles])[near[1]])
        keep = faces.length[alone] > ROUND_A_CORNER * thick
    return [(int(faces.piece[k]), np.stack((faces.p[k], faces.q[k]))) for k in alone[keep]]


def _question(number: int, a: Floats, b: Floats, origin: Point) -> Question:
    x, y = 0.5 * (a + b) + origin
    return Question(
        id=f"faces-{number + 1}",
        about=f"the faces of the wall near ({x:.2f}, {y:.2f})",
        readings=(
            Reading(reading="the two faces as paired bound one wall",
                    evidence="greatest number of pairs, thinner walls first", confidence=0.5),
            Reading(reading="one of them belongs to another wall beside it",
                    evidence="another pairing of the parallel lines there is about as good", confidence=0.5),
        ),
        brief_line='[[roles]] match = {layer = "..."}, role = "ignore" for the lines that are no face of the wall',
    )  # fmt: skip
