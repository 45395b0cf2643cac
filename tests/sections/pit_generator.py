"""Invented pits with known truth, made without any of the finder's code.

A pit is a chain of straight and curved pieces walked counter-clockwise; its corners, arcs and runs are known before
anything is drawn. Drawing then splits, shifts, doubles, shuffles, turns and moves it.
"""

from __future__ import annotations

import math
import random
from dataclasses import dataclass, field, replace

import numpy as np

from ingest.model import BarSection, Limits, Pile, Plate, Site, Support, WallPiece

PILE_KINDS = ("contiguous", "secant", "king_post")
LINE_KINDS = ("diaphragm", "sheet")


@dataclass
class Bit:
    """A straight (centre None) or an arc from `a` to `b` about `centre`."""

    a: np.ndarray
    b: np.ndarray
    centre: np.ndarray | None = None
    ccw: bool = True

    @property
    def radius(self):
        return float(np.hypot(*(self.a - self.centre)))

    @property
    def sweep(self):
        u, v = self.a - self.centre, self.b - self.centre
        angle = math.atan2(v[1], v[0]) - math.atan2(u[1], u[0])
        angle %= 2 * math.pi
        if angle < 1e-12:
            angle = 2 * math.pi
        return angle if self.ccw else 2 * math.pi - angle if angle < 2 * math.pi else angle

    @property
    def length(self):
        return self.radius * self.sweep if self.centre is not None else float(np.hypot(*(self.b - self.a)))

    def at(self, s):
        if self.centre is None:
            return self.a + (self.b - self.a) * (s / self.length)
        u = self.a - self.centre
        angle = math.atan2(u[1], u[0]) + (1 if self.ccw else -1) * s / self.radius
        return self.centre + self.radius * np.array([math.cos(angle), math.sin(angle)])

    def ahead(self, s):
        if self.centre is None:
            return (self.b - self.a) / self.length
        out = (self.at(s) - self.centre) / self.radius
        return (1 if self.ccw else -1) * np.array([-out[1], out[0]])


@dataclass
class TruthRun:
    """A run from `start` to `stop` (distance along the bits from the first one)."""

    start: float
    stop: float
    kind: str
    spacing: float | None = None
    size: float | None = None
    toe: float = -14.0
    count: int | None = None
    spacings: tuple[float, float] | None = None


@dataclass
class TruthPit:
    bits: list[Bit]
    closed: bool = True
    runs: list[TruthRun] = field(default_factory=list)
    circle: tuple | None = None

    @property
    def length(self):
        return sum(bit.length for bit in self.bits)

    def bit_at(self, s):
        if self.closed:
            s %= self.length
        for bit in self.bits:
            if s < bit.length - 1e-9 or bit is self.bits[-1]:
                return bit, min(s, bit.length)
            s -= bit.length
        raise AssertionError

    def at(self, s):
        bit, rest = self.bit_at(s)
        return bit.at(rest)

    def outline(self, step=0.05):
        points = []
        for bit in self.bits:
            n = 1 if bit.centre is None else max(int(bit.length / step), 8)
            points += [bit.at(bit.length * k / n) for k in range(n)]
        if not self.closed:
            points.append(self.bits[-1].b)
        return np.array(points)

    def corners(self):
        """(point, interior angle) wherever two bits meet at an angle."""
        found = []
        count = len(self.bits)
        for k in range(count if self.closed else count - 1):
            one, two = self.bits[k], self.bits[(k + 1) % count]
            u, v = one.ahead(one.length), two.ahead(0.0)
            turn = math.degrees(math.atan2(u[0] * v[1] - u[1] * v[0], u @ v))
            if abs(turn) > 0.01:
                found.append((one.b, 180.0 - turn))
        return found

    def moved(self, turn):
        return TruthPit(
            bits=[Bit(turn(b.a), turn(b.b), None if b.centre is None else turn(b.centre), b.ccw) for b in self.bits],
            closed=self.closed,
            runs=self.runs,
            circle=None if self.circle is None else (turn(np.array(self.circle[0])), *self.circle[1:]),
        )


def polygon(points, closed=True):
    points = [np.array(p, dtype=float) for p in points]
    pairs = zip(points, points[1:] + points[:1] if closed else points[1:], strict=False)
    return TruthPit(bits=[Bit(a, b) for a, b in pairs], closed=closed)


def rectangle(r):
    a, b = r.uniform(8, 60), r.uniform(8, 40)
    return polygon([(0, 0), (a, 0), (a, b), (0, b)])


def ell(r):
    a, b = r.uniform(20, 50), r.uniform(20, 50)
    c, d = r.uniform(0.35, 0.65) * a, r.uniform(0.35, 0.65) * b
    return polygon([(0, 0), (a, 0), (a, d), (c, d), (c, b), (0, b)])


def tee(r):
    a, b, c = r.uniform(24, 50), r.uniform(8, 15), r.uniform(8, 20)
    u, v = r.uniform(0.2, 0.4) * a, r.uniform(0.6, 0.8) * a
    return polygon([(u, -c), (v, -c), (v, 0), (a, 0), (a, b), (0, b), (0, 0), (u, 0)])


def wedge(r):
    a = r.uniform(30, 50)
    angle = math.radians(r.uniform(35, 80))
    b = r.uniform(18, 30)
    return polygon([(0, 0), (a, 0), (a, r.uniform(4, 8)), (b * math.cos(angle), b * math.sin(angle))])


def hexagon(r):
    while True:
        angles = sorted(r.uniform(0, 2 * math.pi) for _ in range(6))
        gaps = [(angles[(k + 1) % 6] - angles[k]) % (2 * math.pi) for k in range(6)]
        if min(gaps) > math.radians(35):
            break
    radii = [r.uniform(16, 26) for _ in angles]
    points = [(q * math.cos(a), q * math.sin(a)) for q, a in zip(radii, angles, strict=True)]
    pit = polygon(points)
    return pit if all(abs(180 - angle) > 6 for _, angle in pit.corners()) else hexagon(r)


def circle(r):
    radius = r.uniform(5, 25)
    start = np.array([radius, 0.0])
    pit = TruthPit(bits=[Bit(start, start, np.zeros(2))])
    pit.circle = ((0.0, 0.0), radius, None)
    return pit


def shaft(r):
    n, radius = r.randint(8, 24), r.uniform(6, 16)
    pit = polygon([(radius * math.cos(2 * math.pi * k / n), radius * math.sin(2 * math.pi * k / n)) for k in range(n)])
    pit.circle = ((0.0, 0.0), radius, n)
    return pit


def stadium(r):
    a, q = r.uniform(10, 40), r.uniform(5, 12)
    p = [np.array(v) for v in ((0.0, -q), (a, -q), (a, q), (0.0, q))]
    return TruthPit(bits=[Bit(p[0], p[1]), Bit(p[1], p[2], np.array([a, 0.0])), Bit(p[2], p[3]),
                          Bit(p[3], p[0], np.array([0.0, 0.0]))])  # fmt: skip


def rounded(r):
    """A rectangle with one rounded corner and a circular bay in one side that meets it at an angle."""
    a, b, q = r.uniform(30, 50), r.uniform(20, 35), r.uniform(4, 8)
    c, w = a / 2, r.uniform(5, 8)
    rise = w * r.uniform(0.4, 0.9)
    radius = (w * w + rise * rise) / (2 * rise)
    p = [np.array(v) for v in ((0, 0), (c - w, 0), (c + w, 0), (a, 0), (a, b - q), (a - q, b), (0, b))]
    p = [v.astype(float) for v in p]
    return TruthPit(bits=[
        Bit(p[0], p[1]), Bit(p[1], p[2], np.array([c, radius - rise])), Bit(p[2], p[3]), Bit(p[3], p[4]),
        Bit(p[4], p[5], np.array([a - q, b - q])), Bit(p[5], p[6]), Bit(p[6], p[0]),
    ])  # fmt: skip


def open_u(r):
    a, b, c = r.uniform(15, 50), r.uniform(10, 30), r.uniform(10, 30)
    return polygon([(0, b), (0, 0), (a, 0), (a, c)], closed=False)


def open_ell(r):
    a, b = r.uniform(20, 60), r.uniform(15, 40)
    return polygon([(0, b), (0, 0), (a, r.uniform(-4, 4))], closed=False)


CLOSED = (rectangle, ell, tee, wedge, hexagon, circle, shaft, stadium, rounded)
OPEN = (open_u, open_ell)


def shifted(pit, by):
    return pit.moved(lambda p: p + np.array(by))


@dataclass
class Scene:
    name: str
    site: Site
    pits: list[TruthPit]
    gap: float = 0.0


class Draughtsman:
    """Draws walls into a site, with the faults real drawings have."""

    def __init__(self, r, gap):
        self.r, self.gap = r, gap
        self.walls, self.piles, self.supports, self.plates = [], [], [], []
        self.drawn_shared = []

    def run(self, pit, run):
        if run.kind in PILE_KINDS:
            self.row(pit, run)
        else:
            self.line(pit, run)

    def row(self, pit, run):
        """Piles at from, from + s ... below to; an open way has one at its very end too.

        Set out side by side, with a pile in every corner, or (where all sides are long) once round without regard to
        corners.
        """
        ends = [run.start, *self.breaks(pit, run), run.stop]
        if pit.circle is not None and len(ends) > 2:
            run.spacing = min(run.spacing, 0.49 * min(np.diff(ends)))  # fewer piles to a side make no polygon
        if min(np.diff(ends)) > 6 * run.spacing and self.r.random() < 0.3 and len(ends) > 2:
            ends = [run.start, run.stop]
        lengths = np.diff(ends)
        while np.ptp(lengths / np.maximum(np.round(lengths / run.spacing), 1)) > 0.08 * run.spacing:
            run.spacing *= 0.95
        places = []
        for a, b in zip(ends, ends[1:], strict=False):
            n = max(round((b - a) / run.spacing), 1)
            places += [a + (b - a) * k / n for k in range(n)]
        if not pit.closed and abs(run.stop - pit.length) < 1e-6:
            places.append(run.stop)
        run.spacings = (float(np.diff(places).min()), float(np.diff(places).max()))
        run.spacing = float(np.median(np.diff(places)))
        run.count = len(places)
        for k, s in enumerate(places):
            x, y = pit.at(s)
            male = run.kind == "secant" and k % 2 == 1
            size = run.size * (0.8 if run.kind == "secant" and not male else 1.0)
            self.piles.append(Pile(
                id=f"pile{len(self.piles)}", centre=(float(x), float(y)), kind=run.kind,
                diameter=None if run.kind == "king_post" else size,
                section=BarSection(designation="H", width=0.3, depth=0.3) if run.kind == "king_post" else None,
                top=0.0, toe=run.toe + (0.0 if male or run.kind != "secant" else 4.0),
            ))  # fmt: skip

    def line(self, pit, run):
        """The wall as axis lines, as two faces, or as panel outlines."""
        style = self.r.choice(("axis", "axis", "face", "panel")) if run.kind == "diaphragm" else "axis"
        cuts = [run.start, *self.breaks(pit, run), run.stop]
        ways = [self.way(pit, a, b) for a, b in zip(cuts, cuts[1:], strict=False)]
        if style == "axis":
            for way in ways:
                for bit in self.split(way):
                    self.piece(self.frayed(bit), run, "axis", run.size)
        elif style == "face":
            whole = len(pit.runs) == 1 and pit.closed
            for side in (0.5, -0.5):
                for way in ways:
                    self.piece(offset(way, side * run.size), run, "face", None)
            del whole
        else:
            for way in ways:
                left, right = offset(way, 0.5 * run.size), offset(way, -0.5 * run.size)
                self.piece([*left, *right[::-1]], run, "outline", None, closed=True)

    def breaks(self, pit, run):
        """Distances of the ends of bits inside a run: a wall bends there, and a new piece begins."""
        ends, s = [], 0.0
        for bit in pit.bits:
            s += bit.length
            if run.start + 1e-6 < s < run.stop - 1e-6:
                ends.append(s)
        return ends

    def way(self, pit, a, b):
        bit, rest = pit.bit_at(a + 1e-9)
        if bit.centre is None:
            return [pit.at(a), bit.at(rest + b - a - 1e-9)]
        steps = max(math.ceil((b - a) / bit.radius / (2 * math.acos(1 - 0.005 / bit.radius))), 2)
        return [bit.at(rest - 1e-9 + (b - a) * k / steps) for k in range(steps + 1)]

    def split(self, way):
        if len(way) > 2:
            k = self.r.randint(1, len(way) - 1)
            return [way] if self.r.random() < 0.5 or k in (0, len(way) - 1) else [way[: k + 1], way[k:]]
        parts = self.r.choice((1, 1, 2, 3))
        shares = sorted([0.0, 1.0, *(self.r.uniform(0.1, 0.9) for _ in range(parts - 1))])
        if min(np.diff(shares)) * np.hypot(*(way[1] - way[0])) < 0.3:
            return [way]
        points = [way[0] + (way[1] - way[0]) * s for s in shares]
        return [[p, q] for p, q in zip(points, points[1:], strict=False)]

    def frayed(self, way):
        """Ends moved along the wall by up to half the gap, so that two neighbours make up to the whole of it."""
        first, last = way[0] - way[1], way[-1] - way[-2]
        a, b = (self.r.uniform(-0.5, 0.5) * self.gap for _ in "ab")
        return [way[0] + a * first / np.hypot(*first), *way[1:-1], way[-1] + b * last / np.hypot(*last)]

    def piece(self, points, run, drawn, thickness, closed=False):
        self.walls.append(WallPiece(
            id=f"wall{len(self.walls)}", axis=tuple((float(x), float(y)) for x, y in points), closed=closed,
            drawn=drawn, kind=run.kind, thickness=thickness, top=0.0, toe=run.toe,
        ))  # fmt: skip

    def clutter(self, pits):
        """Short lines of nothing in particular inside and around, some across the wall."""
        box = np.vstack([pit.outline() for pit in pits])
        low, high = box.min(axis=0) - 8, box.max(axis=0) + 8
        for _ in range(self.r.randint(2, 8)):
            p = np.array([self.r.uniform(low[k], high[k]) for k in (0, 1)])
            angle, span = self.r.uniform(0, 7), self.r.uniform(0.5, 6)
            q = p + span * np.array([math.cos(angle), math.sin(angle)])
            self.walls.append(WallPiece(id=f"wall{len(self.walls)}", axis=(tuple(map(float, p)), tuple(map(float, q)))))

    def bearing_grid(self, pit):
        """Unnamed piles in a grid under the floor."""
        middle = pit.outline().mean(axis=0)
        for i in range(-1, 2):
            for j in range(-1, 2):
                self.piles.append(Pile(id=f"pile{len(self.piles)}", diameter=0.6, layer="FOUNDATION",
                                       centre=(float(middle[0] + 2.4 * i), float(middle[1] + 2.4 * j))))  # fmt: skip

    def anchors(self, pit):
        for s in np.arange(2.0, pit.length - 1.0, 3.0):
            bit, rest = pit.bit_at(float(s))
            head, ahead = bit.at(rest), bit.ahead(rest)
            far = head + 10 * np.array([ahead[1], -ahead[0]])
            self.supports.append(Support(id=f"anchor{len(self.supports)}", role="anchor", head=(*map(float, head), -2.0),
                                         far=(*map(float, far), -6.0)))  # fmt: skip

    def site(self, angle, move, doubles):
        r = self.r
        c, s = math.cos(angle), math.sin(angle)

        def turn(p):
            return (c * p[0] - s * p[1] + move[0], s * p[0] + c * p[1] + move[1])

        walls = [replace(w, axis=tuple(turn(p) for p in w.axis)) for w in self.walls]
        piles = [replace(p, centre=turn(p.centre)) for p in self.piles]
        walls += [replace(w, id=w.id + "again") for w in walls if r.random() < doubles]
        piles += [replace(p, id=p.id + "again", centre=(p.centre[0] + r.uniform(-0.01, 0.01), p.centre[1]))
                  for p in piles if r.random() < doubles]  # fmt: skip
        r.shuffle(walls)
        r.shuffle(piles)
        supports = [replace(u, head=(*turn(u.head), u.head[2]), far=(*turn(u.far), u.far[2])) for u in self.supports]
        plates = [replace(q, outline=tuple(turn(p) for p in q.outline)) for q in self.plates]
        return Site(walls=tuple(walls), piles=tuple(piles), supports=tuple(supports), plates=tuple(plates),
                    formation=-8.0, ground_level=0.0, limits=Limits()), turn  # fmt: skip


def offset(way, by):
    """A way moved sideways (positive to the left), ends square, bends mitred."""
    moved = []
    for k, p in enumerate(way):
        back = p - way[k - 1] if k else way[1] - way[0]
        ahead = way[k + 1] - p if k + 1 < len(way) else p - way[k - 1]
        u, v = (np.array([-d[1], d[0]]) / np.hypot(*d) for d in (back, ahead))
        moved.append(p + by * (u + v) / (1 + u @ v))
    return moved


def spacing_of(r, kind, size):
    if kind == "contiguous":
        return size + r.choice((0.1, 0.15, 0.25))
    return 0.8 * size if kind == "secant" else r.uniform(1.8, 2.8)


def make_runs(r, pit, kinds):
    """Split the perimeter at corners or in the middle of a side, and give every stretch a construction."""
    total = pit.length
    if len(kinds) == 1:
        cuts = [0.0]
    else:
        ends = np.cumsum([bit.length for bit in pit.bits])[:-1].tolist()
        pool = [s for s in ends if 4 < s < total - 4] if r.random() < 0.5 else []
        pool = pool or [r.uniform(0.25, 0.75) * total]
        cuts = [0.0, r.choice(pool)]
    pit.runs = []
    for k, start in enumerate(cuts):
        kind = kinds[k]
        size = {"king_post": 0.3, "sheet": 0.4}.get(kind, r.choice((0.6, 0.75, 0.9, 1.0)))
        stop = cuts[k + 1] if k + 1 < len(cuts) else total
        spacing = spacing_of(r, kind, size) if kind in PILE_KINDS else None
        pit.runs.append(TruthRun(start, stop, kind, spacing, size, r.choice((-12.0, -14.0, -16.0))))


def two_close(r):
    one, two = rectangle(r), r.choice((rectangle, ell))(r)
    width = one.outline()[:, 0].max()
    return [one, shifted(two, (width + r.uniform(3, 8), r.uniform(-5, 5)))]


def nested(r):
    a, b = r.uniform(40, 60), r.uniform(40, 60)
    outer = polygon([(0, 0), (a, 0), (a, b), (0, b)])
    inner = r.choice((rectangle, shaft, circle))(random.Random(r.random()))
    size = np.ptp(inner.outline(), axis=0).max()
    scale = min(1.0, 25.0 / size)
    inner = inner.moved(lambda p: p * scale)
    if inner.circle is not None:
        inner.circle = (inner.circle[0], inner.circle[1] * scale, inner.circle[2])
    middle = 0.5 * (inner.outline().min(axis=0) + inner.outline().max(axis=0))
    return [outer, shifted(inner, np.array([a / 2, b / 2]) - middle)]


def make_scene(seed):
    """Scene number `seed`: a site and the truth about its pits, in the frame of the site."""
    r = random.Random(seed)
    name, pits = _choose(r)
    gap = r.choice((0.0, 0.005, 0.02))
    pen = Draughtsman(r, gap)
    for pit in pits:
        count = 2 if r.random() < 0.35 and pit.length > 40 and name not in ("circle", "shaft") else 1
        kinds = r.sample(PILE_KINDS + LINE_KINDS, count)
        make_runs(r, pit, kinds)
        for run in pit.runs:
            pen.run(pit, run)
        if not pit.closed:
            pen.anchors(pit)
    if r.random() < 0.3:
        pen.clutter(pits)
    if r.random() < 0.2 and pits[0].closed and name == "rectangle":
        pen.bearing_grid(pits[0])
    grid = r.choice(((0.0, 0.0), (120.0, -45.0), (531204.0, 181033.0)))
    site, turn = pen.site(r.uniform(0, 2 * math.pi), grid, r.choice((0.0, 0.1)))
    return Scene(name, site, [pit.moved(lambda p: np.array(turn(p))) for pit in pits], gap)


def _choose(r):
    kind = r.choice(("closed",) * 6 + ("open", "two", "nested"))
    if kind == "two":
        return "two close", two_close(r)
    if kind == "nested":
        return "ring in ring", nested(r)
    make = r.choice(CLOSED if kind == "closed" else OPEN)
    return make.__name__, [make(r)]
