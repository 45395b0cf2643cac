"""One product on its way to a part: who it is, what it is made of, and its placed bodies and lines."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.bodies import Placed
from ingest.ifc.classes import Group
from ingest.ifc.profiles import Moments, Profile, moments
from ingest.ifc.relations import MaterialUse
from ingest.ifc.shapes import Line
from ingest.members import BarSection, Point3
from ingest.parts import Form, Part
from ingest.trail import Source

Floats = NDArray[np.float64]


class NoPart(Exception):  # noqa: N818  a reason for the ledger, not an error
    """An element that gives no part; the message is the reason the ledger shows."""


@dataclass(slots=True)
class Element:
    """A product with everything its part is made from. `length` is metres per file unit."""

    source: Source
    cls: str
    group: Group
    name: str
    layer: str
    material: MaterialUse | None
    tags: dict[str, str]
    length: float
    bodies: Sequence[Placed] = ()
    axes: Sequence[Placed] = ()
    footprints: Sequence[Placed] = ()
    openings: Sequence[Placed] = ()
    origin: Point3 = (0.0, 0.0, 0.0)
    profile: Profile | None = None
    """Cross-section assigned with the material, read only when the element has no body."""
    of_parts: int = 0
    """Number of parts the bodies were taken from, 0 when they are the element's own."""

    def part(self, form: Form, points: Sequence[Point3], evidence: Sequence[str], **more: Any) -> Part:
        """A part of this element; evidence sentences are joined."""
        said = (*evidence, f"body taken from its {self.of_parts} parts") if self.of_parts else tuple(evidence)
        return Part(
            source=self.source,
            form=form,
            points=tuple(points),
            layer=self.layer,
            cls=self.cls,
            name=self.name,
            material=self.material.name if self.material else "",
            tags=self.tags,
            evidence=_joined(said),
            **more,
        )

    def axis_line(self) -> Floats | None:
        """World points (n, 3) of the line the file draws along the element."""
        for body in self.axes:
            if isinstance(body.shape, Line) and len(body.shape.points) > 1:
                return body.points()
        return None


@lru_cache(maxsize=1024)
def _joined(said: tuple[str, ...]) -> str:
    """Sentences joined; the same words of many elements are one string in memory."""
    return "; ".join(filter(None, said))


class SectionTable:
    """Cross-sections of bars in metres, each profile worked out once."""

    def __init__(self) -> None:
        self._moments: dict[int, tuple[Profile, Moments]] = {}
        self._sections: dict[tuple[int, float, tuple[float, float] | None], BarSection] = {}

    def moments(self, profile: Profile) -> Moments:
        """Area and second moments in file units; the profile is kept so that its id stays its own."""
        known = self._moments.get(id(profile))
        if known is None:
            known = self._moments[id(profile)] = (profile, moments(profile))
        return known[1]

    def section(self, profile: Profile, scale: float, level_way: tuple[float, float] | None) -> BarSection:
        """Cross-section in m.

        Args:
            profile: In file units.
            scale: Metres per unit.
            level_way: Direction in the profile's coordinates that is level on site: I is taken about it. None for
                an upright bar, whose I is the largest there is.
        """
        way = level_way and (round(level_way[0], 12), round(level_way[1], 12))
        key = (id(profile), round(scale, 12), way)
        if key not in self._sections:
            self._sections[key] = self._work_out(profile, scale, level_way)
        return self._sections[key]

    def _work_out(self, profile: Profile, scale: float, level_way: tuple[float, float] | None) -> BarSection:
        m = self.moments(profile)
        second = m.largest[0] if level_way is None else m.about(level_way)
        width, depth = _extents(profile, level_way)
        return BarSection(
            designation=profile.name or _words(profile, scale),
            A=m.A * scale**2,
            I=second * scale**4,
            diameter=2 * profile.size[0] * scale if profile.is_round else None,
            width=None if profile.is_round else width * scale,
            depth=None if profile.is_round else depth * scale,
        )


def _extents(profile: Profile, level_way: tuple[float, float] | None) -> tuple[float, float]:
    """Width along the level direction and depth across it, in file units."""
    c, s = level_way or profile.way
    at = np.array([p for ring in profile.outlines for p in ring])
    along, across = at @ np.array([c, s]), at @ np.array([-s, c])
    return float(np.ptp(along)), float(np.ptp(across))


def _words(profile: Profile, scale: float) -> str:
    sizes = " x ".join(format(round(s * scale * 1000, 3), "g") for s in profile.size)
    if profile.kind == "circle":
        return f"circle {format(round(2000 * profile.size[0] * scale, 3), 'g')}"
    if profile.kind == "hollow circle":
        r, wall = profile.size
        return f"tube {format(round(2000 * r * scale, 3), 'g')} x {format(round(1000 * wall * scale, 3), 'g')}"
    return f"{profile.kind} {sizes}".strip()
