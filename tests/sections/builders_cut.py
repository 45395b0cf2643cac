"""A cut through an invented pit at given walls, for tests of what a section is made of."""

from __future__ import annotations

import numpy as np

from ingest.members import Point
from sections.found import FoundPit
from sections.section.cut import Cut, CutWall


def make_cut(pit: FoundPit, start: Point, end: Point, at: list[float], kind: str = "plane_strain") -> Cut:
    """A line with its walls by chainage: the first retains to the left, the second to the right."""
    line, walls = np.subtract(end, start) / np.hypot(*np.subtract(end, start)), []
    for place, side in zip(at, ("left", "right"), strict=False):
        station = int(np.argmin(np.abs(pit.stations.chainage - place)))
        x = float(np.dot(pit.stations.xy[station] - np.asarray(start), line))
        walls.append(CutWall(found=pit, station=station, x=x, side="right" if kind == "axisymmetric" else side))
    return Cut(kind=kind, start=start, end=end, walls=tuple(walls))
