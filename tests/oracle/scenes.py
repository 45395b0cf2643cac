"""The scenes of the check: plain figures of invented pits, read by the block's builder and by the screening's alike.

Ground everywhere: E = 10 + 3 z MPa, nu 0.3, 19 kN/m3, K0 0.5, dry. Depths are below a surface at level 0.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

WEIGHT, REST, NU = 19.0, 0.5, 0.3
E_WALL = 30e6
"""Modulus of the walls, kPa."""
THICKNESS, DIAMETER, CENTRES = 0.8, 0.75, 1.0
SQUARE = ((0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0))


@dataclass(frozen=True, kw_only=True)
class Prop:
    """A support: head and far end on plan, depth, stiffness along it kN/m; a far end off the wall is held still."""

    head: tuple[float, float]
    far: tuple[float, float]
    depth: float
    stiffness: float
    tie: bool


@dataclass(frozen=True, kw_only=True)
class Scene:
    """One pit.

    Attributes:
        corners: Plan, counter-clockwise.
        dig: Depth dug, or (x, depth) of strips along x: each reaches from its x to the next one.
        toe: Depth of the wall's toe.
        wall: "monolithic" panels or "rows" of piles.
        mirror: (x, y) of mirror planes; the block keeps what lies beyond them (x above, y below), None = none.
        step: Largest spacing of plan nodes along the wall, m.
        surcharge: kPa on the ground behind the southern wall.
        levels: Further depths that need a node.
        sectors: 0, or the number of like sectors of a regular polygon whose corners are given.
    """

    name: str
    title: str
    corners: tuple[tuple[float, float], ...]
    dig: tuple[tuple[float, float], ...]
    toe: float
    wall: str
    props: tuple[Prop, ...] = ()
    waler_EI: float | None = None
    mirror: tuple[float | None, float | None] = (None, None)
    step: float = 1.5
    surcharge: float = 0.0
    sectors: int = 0
    round: bool = False
    levels: tuple[float, ...] = ()

    @property
    def waler_EA(self) -> float:
        """EA of the waler, kN: a radius of gyration of 0.25 m."""
        return 16.0 * (self.waler_EI or 0.0)

    @property
    def rows(self) -> bool:
        return self.wall == "rows"

    @property
    def deepest(self) -> float:
        return max(depth for _, depth in self.dig)

    def stage(self, dug: float) -> Scene:
        """The scene dug evenly to a depth, with the supports above it in place; those below weigh nothing."""
        props = tuple(replace(p, stiffness=p.stiffness if p.depth < dug else 0.0) for p in self.props)
        depths = tuple(d for _, d in self.dig)
        return replace(self, dig=((0.0, dug),), props=props, levels=(*self.levels, *depths))

    def dig_at(self, x: float) -> float:
        return [depth for start, depth in self.dig if start <= x + 1e-9][-1]


def box(a: float, b: float) -> tuple[tuple[float, float], ...]:
    return tuple((a * x, b * y) for x, y in SQUARE)


def struts(
    places: tuple[float, ...], width: float, levels: tuple[float, ...], k: float, *, along_y: bool = True
) -> tuple[Prop, ...]:
    """Cross-lot struts between two parallel walls `width` apart."""
    turn = (lambda a, b: (a, b)) if along_y else (lambda a, b: (b, a))
    return tuple(
        Prop(head=turn(p, 0.0), far=turn(p, width), depth=z, stiffness=k, tie=True) for z in levels for p in places
    )


def anchors(corners: tuple[tuple[float, float], ...], spacing: float, levels: tuple[float, ...], k: float
            ) -> tuple[Prop, ...]:  # fmt: skip
    """Level anchors square to every side, half a spacing from its ends."""
    props = []
    for start, end in zip(np.array(corners), np.roll(np.array(corners), -1, axis=0), strict=True):
        side = float(np.hypot(*(end - start)))
        along = (end - start) / side
        out = np.array([along[1], -along[0]])
        count = round(side / spacing)
        for z in levels:
            for i in range(count):
                head = start + along * side * (i + 0.5) / count
                far = head + 15.0 * out
                props.append(Prop(head=tuple(head), far=tuple(far), depth=z, stiffness=k, tie=False))
    return tuple(props)


def polygon(sides: int, side: float | None = None, radius: float | None = None) -> tuple[tuple[float, float], ...]:
    """Regular polygon with the middle of a side due east; by the length of a side or the radius of its corners."""
    R = radius if radius is not None else (side or 1.0) / (2 * np.sin(np.pi / sides))
    angle = (np.arange(sides) - 0.5) * 2 * np.pi / sides
    return tuple((float(R * np.cos(a)), float(R * np.sin(a))) for a in angle)


def _even(start: float, stop: float, spacing: float) -> tuple[float, ...]:
    return tuple(float(v) for v in np.arange(start, stop, spacing))


def _both_ways(a: float, b: float, spacing: float, levels: tuple[float, ...], k: float) -> tuple[Prop, ...]:
    half = spacing / 2
    return (
        *struts(_even(half, a, spacing), b, levels, k),
        *struts(_even(half, b, spacing), a, levels, k * b / a, along_y=False),
    )


_L = ((0.0, 0.0), (28.0, 0.0), (28.0, 12.0), (12.0, 12.0), (12.0, 28.0), (0.0, 28.0))
_GAP = (3.0, 9.0, 15.0, 21.0, 33.0, 39.0, 45.0)
_TRAPEZOID_SURCHARGE = 30.0

SCENES: tuple[Scene, ...] = (
    Scene(
        name="square_panels", title="square 16 x 16, panels, stiff and monolithic, two levels of struts both ways",
        corners=box(16, 16), dig=((0.0, 8.0),), toe=13.0, wall="monolithic",
        props=_both_ways(16, 16, 4.0, (1.0, 5.0), 2.5e4), mirror=(8.0, 8.0), step=1.0,
    ),
    Scene(
        name="long_panels", title="long 40 x 16, panels, monolithic, two levels of struts both ways",
        corners=box(40, 16), dig=((0.0, 8.0),), toe=13.0, wall="monolithic",
        props=_both_ways(40, 16, 4.0, (1.0, 5.0), 2.5e4), mirror=(20.0, 8.0), step=1.0,
    ),
    Scene(
        name="short_rows", title="20 x 16, row of piles at 1 m, one level of struts on a waler",
        corners=box(20, 16), dig=((0.0, 6.0),), toe=11.0, wall="rows",
        props=_both_ways(20, 16, 4.0, (2.0,), 2.5e4), waler_EI=6.0e4, mirror=(10.0, 8.0), step=1.0,
    ),
    Scene(
        name="long_rows", title="40 x 16, row of piles at 1 m, one level of struts on a waler",
        corners=box(40, 16), dig=((0.0, 6.0),), toe=11.0, wall="rows",
        props=_both_ways(40, 16, 4.0, (2.0,), 2.5e4), waler_EI=6.0e4, mirror=(20.0, 8.0), step=1.0,
    ),
    Scene(
        name="cantilever", title="30 x 16, panels, monolithic, no supports",
        corners=box(30, 16), dig=((0.0, 4.0),), toe=11.0, wall="monolithic", mirror=(15.0, 8.0), step=1.0,
    ),
    Scene(
        name="ell", title="L of two legs 12 m wide and 28 m long, panels, monolithic, two levels of level anchors",
        corners=_L, dig=((0.0, 8.0),), toe=13.0, wall="monolithic", props=anchors(_L, 4.0, (2.0, 5.0), 2.5e4),
        step=2.0,
    ),
    Scene(
        name="hexagon_panels", title="hexagon of sides 12 m (120 degree corners), panels, two levels of level anchors",
        corners=polygon(6, side=12.0), dig=((-99.0, 8.0),), toe=13.0, wall="monolithic", sectors=6,
        props=anchors(polygon(6, side=12.0), 3.0, (2.0, 5.0), 2.0e4), step=0.75,
    ),
    Scene(
        name="hexagon_rows", title="the same hexagon, row of piles at 1 m without waler",
        corners=polygon(6, side=12.0), dig=((-99.0, 8.0),), toe=13.0, wall="rows", sectors=6,
        props=anchors(polygon(6, side=12.0), 2.0, (2.0, 5.0), 1.5e4), step=1.0,
    ),
    Scene(
        name="gap_panels", title="48 x 16, panels, struts at 6 m with one missing", corners=box(48, 16),
        dig=((0.0, 7.0),), toe=12.0, wall="monolithic", mirror=(None, 8.0), step=1.5,
        props=(*struts(_GAP, 16, (2.0,), 6e4), *struts((4.0, 8.0, 12.0), 48, (2.0,), 1e4, along_y=False)),
    ),
    Scene(
        name="gap_rows", title="48 x 16, row of piles at 1 m, struts at 6 m with one missing, on a waler",
        corners=box(48, 16), dig=((0.0, 7.0),), toe=12.0, wall="rows", mirror=(None, 8.0), step=1.0, waler_EI=1.5e5,
        props=(*struts(_GAP, 16, (2.0,), 6e4), *struts((4.0, 8.0, 12.0), 48, (2.0,), 1e4, along_y=False)),
    ),
    Scene(
        name="step", title="44 x 16, panels, floor 6 m deep to x = 20 and 9 m beyond, two levels of struts",
        corners=box(44, 16), dig=((0.0, 6.0), (20.0, 9.0)), toe=14.0, wall="monolithic", mirror=(None, 8.0), step=1.5,
        props=struts(_even(2.0, 44, 4.0), 16, (1.0, 4.0), 2.5e4),
    ),
    Scene(
        name="unequal", title="36 x 16, panels, 30 kPa behind the southern wall only, one level of struts",
        corners=box(36, 16), dig=((0.0, 7.0),), toe=12.0, wall="monolithic", mirror=(18.0, None), step=1.5,
        props=struts(_even(2.0, 36, 4.0), 16, (2.0,), 2.5e4), surcharge=_TRAPEZOID_SURCHARGE,
    ),
    Scene(
        name="circle_panels", title="ring of radius 8 m, 48 facets, panels, no supports", corners=polygon(48, radius=8.0),
        dig=((-99.0, 8.0),), toe=13.0, wall="monolithic", sectors=48, round=True,
    ),
    Scene(
        name="circle_rows", title="ring of radius 8 m, 48 piles without hoop, one level of level anchors",
        corners=polygon(48, radius=8.0), dig=((-99.0, 6.0),), toe=11.0, wall="rows", sectors=48, round=True,
        props=anchors(polygon(48, radius=8.0), 1.0467, (2.0,), 1.0e4),
    ),
)  # fmt: skip
STAGED = {"square_panels": (1.5, 5.5, 8.0)}
"""Scenes also solved stage by stage: a dig 0.5 m below each level before its struts are in, then the whole depth."""
BY_NAME = {scene.name: scene for scene in SCENES}
