"""The coordinates that files for the BIM side are written in: those of the model received, else the world's."""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, floor, radians, sin

from ingest.members import Point3
from ingest.model import ModelPlace, Site
from sections.proposal import ProposalFrame

NEAR, ROUND = 10_000.0, 1000.0
"""Coordinates farther out than NEAR get a base, rounded down to ROUND, m: viewers count in single precision."""
PLACES = 6


@dataclass(frozen=True)
class ModelFrame:
    """How model coordinates lie in the world.

    Attributes:
        source: The IFC file whose coordinates these are, "" where there is none.
        place: Shift, turn and scale from the model to the world.
        crs: Map grid, None when not given.
        mapped: True where a map conversion takes the model to the world, as the source has it or the grid asks.
        base: Point of the model near the site, to place it by.
    """

    source: str
    place: ModelPlace
    crs: str | None
    mapped: bool
    base: Point3

    @classmethod
    def of(cls, site: Site, frame: ProposalFrame) -> ModelFrame:
        """The frame of the first IFC model received; without one the world, shifted where a map grid is named."""
        source = next((one.file for one in site.inputs if one.kind == "ifc" and one.file in site.places), "")
        if source:
            place = site.places[source]
            moved = place != ModelPlace(given=place.given)
            mapped = place.given or (frame.crs is not None and moved)
        else:
            mapped = frame.crs is not None
            place = ModelPlace(origin=frame.offset if mapped else (0.0, 0.0, 0.0))
        whole = cls(source, place, frame.crs, mapped, (0.0, 0.0, 0.0))
        x, y, z = (floor(v / ROUND) * ROUND if abs(v) > NEAR else 0.0 for v in whole.to_model(frame.offset))
        return cls(source, place, frame.crs, mapped, (x, y, z))

    def to_model(self, point: Point3) -> Point3:
        """A world point in model coordinates, m."""
        x, y, z = (a - b for a, b in zip(point, self.place.origin, strict=True))
        x, y = self.turn((x, y, 0.0))[:2]
        k = self.place.scale
        return round(x / k, PLACES) + 0.0, round(y / k, PLACES) + 0.0, round(z / k, PLACES) + 0.0

    def turn(self, way: Point3) -> Point3:
        """A world direction in the model."""
        angle = radians(-self.place.rotation_deg)
        c, s = cos(angle), sin(angle)
        return c * way[0] - s * way[1], s * way[0] + c * way[1], way[2]
