"""A still picture of a scene through a depth buffer, as a small indexed PNG: for paper, and where scripts are off."""

from __future__ import annotations

import base64
import struct
import zlib
from collections.abc import Sequence
from dataclasses import dataclass
from math import cos, radians, sin

import numpy as np
from numpy.typing import NDArray

from export.report.solids import Solid
from sections.model import Floats

YAW, PITCH = 38.0, 24.0
WIDTH, HEIGHT = 900, 648
MARGIN = 24
LIFT = 0.08
"""An edge counts as seen when it lies at most this far behind the nearest face, m."""
PAPER, INK = (253, 252, 247), (27, 38, 49)
ACCENT = (11, 90, 104)
TONES = 8
ROWS: Floats = np.arange(HEIGHT) + np.float64(0.5)
PAPER_INDEX, INK_INDEX, FIRST_PLAIN, FIRST_MARKED = 0, 1, 2, 2 + TONES


@dataclass(frozen=True)
class Scale:
    """From metres as seen to pixels; one for both pictures of a pair, so that they compare."""

    k: float
    middle: Floats

    def pixels(self, seen: Floats) -> Floats:
        """Right, down, depth."""
        x = WIDTH / 2 + (seen[:, 0] - self.middle[0]) * self.k
        y = HEIGHT / 2 - (seen[:, 1] - self.middle[1]) * self.k
        return np.column_stack((x, y, seen[:, 2]))


def turned(points: Floats, yaw: float = YAW, pitch: float = PITCH) -> Floats:
    """Points as seen: right, up, and depth towards the eye, m."""
    a, b = radians(yaw), radians(pitch)
    right = np.array((cos(a), sin(a), 0.0))
    up = np.array((-sin(a) * sin(b), cos(a) * sin(b), cos(b)))
    eye = np.array((sin(a) * cos(b), -cos(a) * cos(b), sin(b)))
    return np.asarray(points @ np.column_stack((right, up, eye)))


def common_scale(solids: Sequence[Solid]) -> Scale:
    """The scale at which all bodies fit."""
    seen = turned(np.vstack([solid.points for solid in solids]))
    low, high = seen.min(axis=0), seen.max(axis=0)
    room = np.array((WIDTH - 2 * MARGIN, HEIGHT - 2 * MARGIN))
    k = float(np.min(room / np.maximum(high[:2] - low[:2], 1e-6)))
    return Scale(k, (low + high) / 2)


class Sheet:
    """Pixels as palette indices, and the depth of what is seen at each."""

    def __init__(self) -> None:
        self.index = np.full((HEIGHT, WIDTH), PAPER_INDEX, dtype=np.uint8)
        self.depth = np.full((HEIGHT, WIDTH), -np.inf)

    def face(self, ring: list[list[float]], index: int) -> None:
        """Fill a convex ring given in pixels and depth, row by row between its left and right side."""
        plane = _plane(ring)
        ys = [p[1] for p in ring]
        top, foot = max(int(min(ys)), 0), min(int(max(ys)) + 1, HEIGHT)
        if plane is None or foot <= top:
            return
        first, last = _sides(ring, ROWS[top:foot])
        count = np.maximum(last - first + 1, 0)
        total = int(count.sum())
        rows = np.repeat(np.arange(top, foot), count)
        columns = np.arange(total) - np.repeat(np.cumsum(count) - count - first, count)
        place = rows * WIDTH + columns
        z = plane[0] * (columns + 0.5) + plane[1] * (rows + 0.5) + plane[2]
        seen = z > self.depth.ravel()[place]
        self.depth.ravel()[place[seen]] = z[seen]
        self.index.ravel()[place[seen]] = index

    def edge(self, a: Floats, b: Floats) -> None:
        """Draw a line two pixels wide where nothing stands before it."""
        n = int(max(abs(b[0] - a[0]), abs(b[1] - a[1]), 1)) + 1
        line = a + np.linspace(0.0, 1.0, n)[:, None] * (b - a)
        xs, ys = np.floor(line[:, 0]).astype(int), np.floor(line[:, 1]).astype(int)
        for dx, dy in ((0, 0), (1, 0), (0, 1)):
            x = np.minimum(np.maximum(xs + dx, 0), WIDTH - 1)
            y = np.minimum(np.maximum(ys + dy, 0), HEIGHT - 1)
            seen = line[:, 2] + LIFT >= self.depth[y, x]
            self.index[y[seen], x[seen]] = INK_INDEX


def _sides(ring: list[list[float]], rows: Floats) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """First and last pixel of each row whose middle lies in a convex ring; last before first where there is none."""
    left, right = np.full(len(rows), np.inf), np.full(len(rows), -np.inf)
    for (ax, ay, _), (bx, by, _) in zip(ring, ring[1:] + ring[:1], strict=True):
        if ay == by:
            continue
        part = (rows >= min(ay, by)) & (rows <= max(ay, by))
        x = ax + (rows[part] - ay) * ((bx - ax) / (by - ay))
        left[part], right[part] = np.minimum(left[part], x), np.maximum(right[part], x)
    first = np.ceil(np.clip(left - 0.5, 0, WIDTH)).astype(np.int64)
    return first, np.floor(np.clip(right - 0.5, -1, WIDTH - 1)).astype(np.int64)


def _plane(ring: list[list[float]]) -> tuple[float, float, float] | None:
    """Depth over the sheet as a x + b y + c; None for a face seen edge-on."""
    (ax, ay, az), *rest = ring
    for (bx, by, bz), (cx, cy, cz) in zip(rest, rest[1:], strict=False):
        ux, uy, uz, vx, vy, vz = bx - ax, by - ay, bz - az, cx - ax, cy - ay, cz - az
        area = ux * vy - uy * vx
        if abs(area) > 1e-3:
            a, b = (uz * vy - uy * vz) / area, (ux * vz - uz * vx) / area
            return a, b, az - a * ax - b * ay
    return None


def still_picture(solids: Sequence[Solid], scale: Scale) -> str:
    """The picture as a data URI."""
    sheet = Sheet()
    seen = [turned(solid.points) for solid in solids]
    pixels = [scale.pixels(points) for points in seen]
    for solid, points, dots in zip(solids, seen, pixels, strict=True):
        first = FIRST_MARKED if solid.marked else FIRST_PLAIN
        near, plain = points.tolist(), dots.tolist()
        middle = points.mean(axis=0).tolist() if solid.convex else None
        for face in solid.faces:
            tone = _tone([near[n] for n in face[:3]], middle)
            if tone is not None:
                sheet.face([plain[n] for n in face], first + tone)
    for solid, dots in zip(solids, pixels, strict=True):
        for a, b in solid.edges:
            sheet.edge(dots[a], dots[b])
    return "data:image/png;base64," + base64.b64encode(_png(sheet.index)).decode()


def _tone(corner: list[list[float]], middle: list[float] | None) -> int | None:
    """Lightest where a face looks at the eye; None for one without area, or on the far side of a convex body."""
    (ax, ay, az), (bx, by, bz), (cx, cy, cz) = corner
    ux, uy, uz, vx, vy, vz = bx - ax, by - ay, bz - az, cx - ax, cy - ay, cz - az
    nx, ny, nz = uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx
    size = (nx * nx + ny * ny + nz * nz) ** 0.5
    if middle is not None and nz * (nx * (ax - middle[0]) + ny * (ay - middle[1]) + nz * (az - middle[2])) < 0:
        return None
    return None if size < 1e-9 else min(int(abs(nz) / size * TONES), TONES - 1)


def _palette() -> bytes:
    def mixed(colour: tuple[int, int, int], share: float) -> bytes:
        """A colour thinned with paper."""
        return bytes(round(p + (c - p) * share) for p, c in zip(PAPER, colour, strict=True))

    plain = [mixed(INK, 0.36 - 0.26 * n / (TONES - 1)) for n in range(TONES)]
    marked = [mixed(ACCENT, 0.62 - 0.28 * n / (TONES - 1)) for n in range(TONES)]
    return b"".join([bytes(PAPER), mixed(INK, 0.9), *plain, *marked])


def _png(index: NDArray[np.uint8]) -> bytes:
    """An indexed PNG (ISO/IEC 15948) of 8 bits a pixel."""

    def chunk(kind: bytes, data: bytes) -> bytes:
        """Length, kind, data, check sum."""
        return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))

    rows = np.hstack((np.zeros((len(index), 1), dtype=np.uint8), index)).tobytes()
    head = struct.pack(">IIBBBBB", index.shape[1], index.shape[0], 8, 3, 0, 0, 0)
    return (
        b"\x89PNG\r\n\x1a\n"
        + chunk(b"IHDR", head)
        + chunk(b"PLTE", _palette())
        + chunk(b"IDAT", zlib.compress(rows, 6))
        + chunk(b"IEND", b"")
    )
