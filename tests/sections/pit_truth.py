"""Pits as they are, before anybody draws them: chains of straights and arcs with known corners, runs and circles.

A perimeter is walked counter-clockwise, the dig on its left. None of the finder's code is used.
"""

from __future__ import annotations

import math
import random
from dataclasses import dataclass, field

import numpy as np


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
        angle = (math.atan2(v[1], v[0]) - math.atan2(u[1], u[0])) * (1 if self.ccw else -1) % (2 * math.pi)
        return angle if angle > 1e-9 else 2 * math.pi

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
    """A run from `start` to `stop`, as distances along the bits from the first one."""

    start: float
    stop: float
    kind: str
    spacing: float | None = None
    size: float | None = None
    toe: float = -14.0
    count: int | None = None
    spacings: tuple[float, float] | None = None
    last_drawn: bool = True


@dataclass
class TruthPit:
    bits: list[Bit]
    closed: bool = True
    runs: list[TruthRun] = field(default_factory=list)
    circle: tuple | None = None
    shares: tuple[float, float] | None = None
    """Distances between which the wall is another pit's too and is drawn there."""

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
            shares=self.shares,
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
    """Six unequal sides, some corners re-entrant."""
    while True:
        angles = sorted(r.uniform(0, 2 * math.pi) for _ in range(6))
        gaps = [(angles[(k + 1) % 6] - angles[k]) % (2 * math.pi) for k in range(6)]
        if min(gaps) < math.radians(35):
            continue
        radii = [r.uniform(16, 26) for _ in angles]
        pit = polygon([(q * math.cos(a), q * math.sin(a)) for q, a in zip(radii, angles, strict=True)])
        if all(abs(180 - angle) > 6 for _, angle in pit.corners()):
            return pit


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


def eight_unequal(r):
    """Eight sides of a circle that are far from equal: no circle."""
    radius = r.uniform(10, 20)
    shares = [r.uniform(0.6, 1.6) for _ in range(8)]
    ends = np.cumsum(shares) / sum(shares) * 2 * math.pi
    return polygon([(radius * math.cos(a), radius * math.sin(a)) for a in ends])


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
    p = [np.array(v, dtype=float) for v in ((0, 0), (c - w, 0), (c + w, 0), (a, 0), (a, b - q), (a - q, b), (0, b))]
    return TruthPit(bits=[
        Bit(p[0], p[1]), Bit(p[1], p[2], np.array([c, radius - rise])), Bit(p[2], p[3]), Bit(p[3], p[4]),
        Bit(p[4], p[5], np.array([a - q, b - q])), Bit(p[5], p[6]), Bit(p[6], p[0]),
    ])  # fmt: skip


def bulge_in(r):
    """A rectangle into which one wall bends as an arc: ground juts into the pit."""
    a, b = r.uniform(30, 50), r.uniform(20, 35)
    c, w = a / 2, r.uniform(6, 10)
    rise = w * r.uniform(0.3, 0.8)
    radius = (w * w + rise * rise) / (2 * rise)
    p = [np.array(v, dtype=float) for v in ((0, 0), (c - w, 0), (c + w, 0), (a, 0), (a, b), (0, b))]
    return TruthPit(bits=[Bit(p[0], p[1]), Bit(p[1], p[2], np.array([c, rise - radius]), ccw=False), Bit(p[2], p[3]),
                          Bit(p[3], p[4]), Bit(p[4], p[5]), Bit(p[5], p[0])])  # fmt: skip


def open_u(r):
    a, b, c = r.uniform(15, 50), r.uniform(10, 30), r.uniform(10, 30)
    return polygon([(0, b), (0, 0), (a, 0), (a, c)], closed=False)


def open_ell(r):
    a, b = r.uniform(20, 60), r.uniform(15, 40)
    return polygon([(0, b), (0, 0), (a, r.uniform(-4, 4))], closed=False)


def open_line(r):
    return polygon([(0, 0), (r.uniform(20, 80), 0)], closed=False)


CLOSED = (rectangle, ell, tee, wedge, hexagon, circle, shaft, stadium, rounded, bulge_in, eight_unequal)
OPEN = (open_u, open_ell, open_line)


def shifted(pit, by):
    return pit.moved(lambda p: p + np.array(by))


def two_close(r):
    one, two = rectangle(r), r.choice((rectangle, ell))(r)
    width = one.outline()[:, 0].max()
    return [one, shifted(two, (width + r.uniform(3, 8), r.uniform(-5, 5)))]


def two_sharing(r):
    """Two rectangles with one wall between them; the second may be shorter or longer than the first."""
    a, b, c = r.uniform(12, 35), r.uniform(12, 30), r.uniform(12, 35)
    low, high = r.choice(((0.0, b), (0.25 * b, b), (0.2 * b, 0.75 * b)))
    first = [(0, 0), (a, 0), *([(a, low)] if low else []), *([(a, high)] if high < b else []), (a, b), (0, b)]
    one = polygon(first)
    two = polygon([(a, low), (a + c, low), (a + c, high), (a, high)])
    two.shares = (two.length - (high - low), two.length)
    return [one, two]


def ring_in_ring(r):
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


SEVERAL = (two_close, two_sharing, ring_in_ring)
