"""A draughtsman who draws invented pits into a site, with the faults that real drawings have."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from ingest.members import BarSection, Pile, Support, WallPiece
from ingest.model import Site

PILE_KINDS = ("contiguous", "secant", "king_post")
LINE_KINDS = ("diaphragm", "sheet")


def offset(way, by):
    """A way moved sideways (positive to the left), ends square, bends mitred."""
    moved = []
    for k, p in enumerate(way):
        back = p - way[k - 1] if k else way[1] - way[0]
        ahead = way[k + 1] - p if k + 1 < len(way) else p - way[k - 1]
        u, v = (np.array([-d[1], d[0]]) / np.hypot(*d) for d in (back, ahead))
        moved.append(p + by * (u + v) / (1 + u @ v))
    return moved


def ring_offset(points, by):
    """A closed way moved sideways with mitred corners."""
    return offset([points[-1], *points, points[0]], by)[1:-1]


class Draughtsman:
    """Draws walls, piles, supports; `gap` is the largest gap or overlap between two pieces of one wall, m."""

    def __init__(self, r, gap):
        self.r, self.gap = r, gap
        self.walls, self.piles, self.supports = [], [], []

    def draw(self, pit):
        whole = len(pit.runs) == 1 and pit.closed and pit.shares is None and pit.runs[0].kind == "diaphragm"
        if whole and self.r.random() < 0.4:
            self.two_rings(pit, pit.runs[0])
            return
        for run in pit.runs:
            if run.kind in PILE_KINDS:
                self.row(pit, run)
            else:
                self.line(pit, run)

    def bits_of(self, pit, run):
        """Distances at which a bit of the perimeter begins or ends within a run, its own ends included."""
        ends, s = [], 0.0
        for bit in pit.bits:
            s += bit.length
            if run.start + 1e-6 < s < run.stop - 1e-6:
                ends.append(s)
        return [run.start, *ends, run.stop]

    def row(self, pit, run):
        """Piles at from, from + s ... below to; an open way has one at its very end too.

        Set out side by side, with a pile in every corner, or (where all sides are long) once round without regard to
        corners.
        """
        places = self.places(pit, run)
        run.spacings = (float(np.diff(places).min()), float(np.diff(places).max()))
        run.spacing = float(np.median(np.diff(places)))
        run.count = len(places)
        styles = ("diameter", "diameter", "toe", "said")
        style, named = self.r.choice(styles), self.r.random() < 0.8
        for k, s in enumerate(places):
            self.pile(pit.at(s), run, k % 2 == 1, style, named)

    def places(self, pit, run):
        """Distances of the piles; spacings of the sides differ by less than a tenth."""
        ends = self.bits_of(pit, run)
        if pit.circle is not None and len(ends) > 2:
            run.spacing = min(run.spacing, 0.49 * min(np.diff(ends)))  # fewer piles to a side make no polygon
        arcs = [bit.length for bit in pit.bits if bit.centre is not None]
        run.spacing = min([run.spacing, *(0.2 * length for length in arcs)])  # fewer posts make no arc
        if min(np.diff(ends)) > 6 * run.spacing and self.r.random() < 0.3 and len(ends) > 2:
            ends = [run.start, run.stop]
        ends = self.evened(run, ends)
        places = []
        for a, b in zip(ends, ends[1:], strict=False):
            n = max(round((b - a) / run.spacing), 1)
            places += [a + (b - a) * k / n for k in range(n)]
        if not pit.closed and abs(run.stop - pit.length) < 1e-6:
            places.append(run.stop)
        return places[1:] if pit.shares is not None and run.start == 0.0 else places

    def evened(self, run, ends):
        """Choose a spacing that suits all sides, or else set out once round."""
        lengths = np.diff(ends)
        while np.ptp(lengths / np.maximum(np.round(lengths / run.spacing), 1)) > 0.08 * run.spacing:
            run.spacing *= 1.02 if run.kind == "contiguous" else 0.95
            if run.kind != "king_post" and not 0.6 <= run.spacing / run.size <= 1.5:
                run.spacing = run.size * (1.2 if run.kind == "contiguous" else 0.8)
                return [run.start, run.stop]
        return ends

    def pile(self, at, run, odd, style, named):
        male = run.kind == "secant" and odd
        smaller = run.kind == "secant" and not male and style == "diameter"
        steel = run.kind == "king_post"
        self.piles.append(Pile(
            id=f"pile{len(self.piles)}", centre=(float(at[0]), float(at[1])),
            kind=run.kind if named or steel else None,
            male=male if style == "said" and run.kind == "secant" else None,
            diameter=None if steel else run.size * (0.85 if smaller else 1.0),
            section=BarSection(designation="H", width=0.3, depth=0.3) if steel else None,
            top=0.0, toe=run.toe + (4.0 if run.kind == "secant" and not male and style in ("diameter", "toe") else 0.0),
        ))  # fmt: skip

    def line(self, pit, run):
        """The wall as axis lines, as two faces, or as panel outlines."""
        ends = self.bits_of(pit, run)
        ways = [self.way(pit, a, b) for a, b in zip(ends, ends[1:], strict=False)]
        style = self.r.choice(("axis", "axis", "face", "panel", "short")) if run.kind == "diaphragm" else "axis"
        if style == "short" and (min(np.diff(ends)) < 4 or any(len(way) > 2 for way in ways)):
            style = "axis"
        for k, way in enumerate(ways):
            self.stretch(way, run, style, (k > 0, k < len(ways) - 1))

    def stretch(self, way, run, style, inner):
        """One straight or arc of a wall; `inner` tells at which ends the same wall goes on round a corner."""
        if style in ("axis", "short"):
            for part in self.split(self.shortened(way, run, inner) if style == "short" else way):
                self.piece(self.frayed(part), run, "axis", run.size)
        elif style == "face":
            for side in (0.5, -0.5):
                for part in self.split(offset(way, side * run.size)):
                    self.piece(part, run, "face", None)
        else:
            for part in self.panels(way):
                left, right = offset(part, 0.5 * run.size), offset(part, -0.5 * run.size)
                self.piece([*left, *right[::-1]], run, "outline", None, closed=True)

    def two_rings(self, pit, run):
        """Both faces of a closed wall as closed rings."""
        ends = [0.0, *np.cumsum([bit.length for bit in pit.bits])]
        points = [p for a, b in zip(ends, ends[1:], strict=False) for p in self.way(pit, a, b)[:-1]]
        drawn = self.r.choice(("face", "outline"))
        for side in (0.5, -0.5):
            self.piece(ring_offset(points, side * run.size), run, drawn, None, closed=True)

    def panels(self, way):
        """Straight ways as panels of about 6 m that touch."""
        span = float(np.hypot(*(way[-1] - way[0])))
        if len(way) > 2 or span < 8 or self.r.random() < 0.5:
            return [way]
        n = round(span / 6)
        points = [way[0] + (way[1] - way[0]) * k / n for k in range(n + 1)]
        return [[p, q] for p, q in zip(points, points[1:], strict=False)]

    def shortened(self, way, run, inner):
        """Drawn from face to face: at corners of a run one wall stops short and the other runs through."""
        along = (way[1] - way[0]) / np.hypot(*(way[1] - way[0]))
        first, last = (0.5 * run.size if end else 0.0 for end in inner)
        return [way[0] + first * along, way[1] + self.r.choice((-1, 1)) * last * along]

    def way(self, pit, a, b):
        bit, rest = pit.bit_at(a + 1e-9)
        if bit.centre is None:
            return [pit.at(a), bit.at(rest + b - a - 1e-9)]
        steps = max(math.ceil((b - a) / bit.radius / (2 * math.acos(1 - 0.005 / bit.radius))), 2)
        return [bit.at(rest - 1e-9 + (b - a) * k / steps) for k in range(steps + 1)]

    def split(self, way):
        r = self.r
        if len(way) > 2:
            if r.random() < 0.15:
                return [[p, q] for p, q in zip(way, way[1:], strict=False)]
            k = r.randint(1, len(way) - 1)
            return [way] if r.random() < 0.5 or k == len(way) - 1 else [way[: k + 1], way[k:]]
        parts = r.choice((1, 1, 2, 3))
        shares = sorted([0.0, 1.0, *(r.uniform(0.1, 0.9) for _ in range(parts - 1))])
        if min(np.diff(shares)) * np.hypot(*(way[1] - way[0])) < 0.3:
            return [way]
        points = [way[0] + (way[1] - way[0]) * s for s in shares]
        return [[p, q] for p, q in zip(points, points[1:], strict=False)]

    def frayed(self, way):
        """Ends moved along the wall by up to half the gap, so that two neighbours make up to the whole of it."""
        first, last = way[0] - way[1], way[-1] - way[-2]
        a, b = (self.r.uniform(-0.5, 0.5) * self.gap for _ in "ab")
        ends = way[0] + a * first / np.hypot(*first), way[-1] + b * last / np.hypot(*last)
        return [ends[0], *way[1:-1], ends[1]]

    def piece(self, points, run, drawn, thickness, closed=False):
        self.walls.append(WallPiece(
            id=f"wall{len(self.walls)}", axis=tuple((float(x), float(y)) for x, y in points), closed=closed,
            drawn=drawn, kind=run.kind, thickness=thickness, top=0.0, toe=run.toe,
        ))  # fmt: skip

    def clutter(self, pits):
        """Short lines of nothing in particular inside and around, some across the wall."""
        box = np.vstack([pit.outline() for pit in pits])
        low, high = box.min(axis=0) - 8, box.max(axis=0) + 8
        for _ in range(self.r.randint(2, 12)):
            p = np.array([self.r.uniform(low[k], high[k]) for k in (0, 1)])
            angle, span = self.r.uniform(0, 7), self.r.choice((0.5, 3.0, 6.0, 20.0))
            q = p + span * np.array([math.cos(angle), math.sin(angle)])
            self.walls.append(WallPiece(id=f"wall{len(self.walls)}", axis=(tuple(map(float, p)), tuple(map(float, q)))))

    def bearing_grid(self, pit):
        """Unnamed piles in a grid under the floor."""
        middle = pit.outline().mean(axis=0)
        for i in range(-1, 2):
            for j in range(-1, 2):
                self.piles.append(Pile(id=f"pile{len(self.piles)}", diameter=0.6, layer="FOUNDATION",
                                       centre=(float(middle[0] + 2.4 * i), float(middle[1] + 2.4 * j))))  # fmt: skip

    def partitions(self, pit):
        """Concrete walls of the building inside, some up to the retaining wall."""
        middle = pit.outline().mean(axis=0)
        ends = [pit.at(self.r.uniform(0, pit.length)) for _ in range(3)]
        for end in ends:
            self.walls.append(WallPiece(id=f"wall{len(self.walls)}", kind="concrete", thickness=0.25,
                                        axis=(tuple(map(float, middle)), tuple(map(float, end)))))  # fmt: skip

    def anchors(self, pit):
        for s in np.arange(2.0, pit.length - 1.0, 3.0):
            bit, rest = pit.bit_at(float(s))
            head, ahead = bit.at(rest), bit.ahead(rest)
            far = head + 10 * np.array([ahead[1], -ahead[0]])
            number = len(self.supports)
            self.supports.append(Support(id=f"anchor{number}", role="anchor", head=(*map(float, head), -2.0),
                                         far=(*map(float, far), -6.0)))  # fmt: skip

    def site(self, angle, move, doubles):
        """The site turned by `angle` and moved, in any order, with a share of everything drawn twice."""
        r = self.r
        c, s = math.cos(angle), math.sin(angle)

        def turn(p):
            return (c * p[0] - s * p[1] + move[0], s * p[0] + c * p[1] + move[1])

        walls = [replace(w, axis=tuple(turn(p) for p in w.axis)) for w in self.walls]
        piles = [replace(p, centre=turn(p.centre)) for p in self.piles]
        walls += [replace(w, id=w.id + "again") for w in walls if r.random() < doubles]
        piles += [replace(p, id=p.id + "again", centre=(p.centre[0] + r.uniform(-0.005, 0.005), p.centre[1]))
                  for p in piles if r.random() < doubles]  # fmt: skip
        r.shuffle(walls)
        r.shuffle(piles)
        supports = [replace(u, head=(*turn(u.head[:2]), u.head[2]), far=(*turn(u.far[:2]), u.far[2]))
                    for u in self.supports]  # fmt: skip
        site = Site(walls=tuple(walls), piles=tuple(piles), supports=tuple(supports), formation=-8.0, ground_level=0.0)
        return site, turn
