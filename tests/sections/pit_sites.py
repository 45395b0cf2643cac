"""Small invented pits of known shape for the tests of finding: a perimeter by its corners, struts, anchors, loads."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.members import BarSection, Load, Point, Support
from ingest.model import Site, Stratum
from ingest.trail import Source
from sections.found import FoundPit, PitShape
from sections.model import Circle, Corner, Floats, Run, Wall
from sections.pit.find import describe_pits

CHS = BarSection(designation="CHS 508x16", A=0.02473061737)
PILES = Wall(kind="contiguous", count=100, centres=1.0, diameter=0.75, top=0.0, toe=-12.0)
PANEL = Wall(kind="diaphragm", thickness=0.8, top=0.0, toe=-12.0)


def shape_of(
    corners: Sequence[Point],
    runs: Sequence[tuple[float, float, Wall]] | None = None,
    closed: bool = True,
    pit: str = "P1",
    circle: Circle | None = None,
) -> PitShape:
    """A pit by its vertices, counter-clockwise, chainage from the first; below 2 degrees no corner."""
    axis = np.array(corners, dtype=float)
    ring = np.vstack([axis, axis[:1]]) if closed else axis
    lengths = np.hypot(*np.diff(ring, axis=0).T)
    at = np.concatenate([[0.0], np.cumsum(lengths)])
    length = float(at[-1])
    return PitShape(
        id=pit,
        closed=closed,
        axis=axis,
        at=at[: len(axis)],
        length=length,
        arcs=(),
        corners=() if circle is not None and circle.sides is None else _corners(axis, at, closed),
        runs=tuple(Run(start=a, to=b, wall=w) for a, b, w in (runs or [(0.0, length, PILES)])),
        circle=circle,
        circles=(),
        piles=tuple(() for _ in (runs or [0])),
    )


def _corners(axis: Floats, at: Floats, closed: bool) -> tuple[Corner, ...]:
    before, after = axis - np.roll(axis, 1, axis=0), np.roll(axis, -1, axis=0) - axis
    turn = np.degrees(
        np.arctan2(before[:, 0] * after[:, 1] - before[:, 1] * after[:, 0], np.einsum("ij,ij->i", before, after))
    )
    kept = range(len(axis)) if closed else range(1, len(axis) - 1)
    return tuple(
        Corner(
            at=float(at[i]),
            point=(float(axis[i, 0]), float(axis[i, 1])),
            interior_angle=180.0 - float(turn[i]),
            kind="inside" if turn[i] > 0 else "re-entrant",
        )
        for i in kept
        if abs(turn[i]) > 2.0
    )


def rectangle(a: float = 30.0, b: float = 20.0, west: float = 100.0, south: float = 200.0) -> list[Point]:
    return [(west, south), (west + a, south), (west + a, south + b), (west, south + b)]


def strut(head: Point, far: Point, level: float = -1.5, name: str = "", **more: object) -> Support:
    role = more.pop("role", "strut")
    return Support(
        id=name,
        role=role,  # type: ignore[arg-type]
        head=(*head, level),
        far=(*far, level),
        section=more.pop("section", CHS),  # type: ignore[arg-type]
        name=name,
        sources=(Source(file="walls.dxf", item=name or f"{head}{far}{level}"),),
        **more,  # type: ignore[arg-type]
    )


def anchor(
    head: Point, inward: Point, level: float, length: float = 15.0, dip: float = 20.0, **more: object
) -> Support:
    """An anchor of a length (m) that falls by `dip` degrees, running against the unit vector into the pit."""
    run, drop = length * np.cos(np.radians(dip)), length * np.sin(np.radians(dip))
    far = (head[0] - run * inward[0], head[1] - run * inward[1], level - drop)
    name = f"A{head[0]:.3f}/{head[1]:.3f}/{level}"
    return Support(
        id="",
        role="anchor",
        head=(*head, level),
        far=far,
        section=CHS,
        name=name,
        sources=(Source(file="walls.dxf", item=name),),
        **more,  # type: ignore[arg-type]
    )


def first_pit_struts() -> tuple[Support, ...]:
    north = [strut((x, 200.0), (x, 220.0), name=f"N{x}") for x in np.arange(102.5, 130.0, 5.0)]
    east = [strut((130.0, y), (100.0, y), name=f"E{y}") for y in np.arange(202.5, 220.0, 5.0)]
    return (*north, *east)


def site_of(**more: object) -> Site:
    given: dict[str, object] = {
        "ground_level": 0.0,
        "formation": -6.0,
        "wall_top": 0.0,
        "dig_allowance": 0.0,
        "strata": (Stratum(name="made ground", top_level=0.0), Stratum(name="stiff clay", top_level=-3.0)),
    }
    return Site(**{**given, **more})  # type: ignore[arg-type]


def footing(points: Sequence[Point], value: float = 150.0, kind: str = "footing") -> Load:
    return Load(id="", kind=kind, value=value, points=tuple(points), level=-1.0)  # type: ignore[arg-type]


def box(west: float, south: float, a: float, b: float) -> tuple[Point, ...]:
    return ((west, south), (west + a, south), (west + a, south + b), (west, south + b))


def found(shape: PitShape, **more: object) -> FoundPit:
    return describe_pits(site_of(**more), (shape,))[0]


def boundaries(pit: FoundPit) -> dict[float, str]:
    """Where the zones end, with the reason."""
    return {round(zone.to, 3): zone.ended_by for zone in pit.pit.zones}


def moved(points: Sequence[Point], angle: float, shift: Point) -> list[Point]:
    """Points turned about the origin (degrees, counter-clockwise), then shifted."""
    c, s = np.cos(np.radians(angle)), np.sin(np.radians(angle))
    return [(c * x - s * y + shift[0], s * x + c * y + shift[1]) for x, y in points]


def moved_support(support: Support, angle: float, shift: Point) -> Support:
    head, far = moved([support.head[:2], support.far[:2]], angle, shift)
    return replace(support, head=(*head, support.head[2]), far=(*far, support.far[2]))
