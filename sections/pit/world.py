"""From the local frame to the world the output files are written in."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.members import Point
from ingest.model import Frame
from sections.model import Floats, Pit, Zone


def to_world(frame: Frame, points: Sequence[Point] | Floats) -> tuple[Point, ...]:
    """World plan points: offset plus the local points turned counter-clockwise by the frame's rotation."""
    turned = np.asarray(points, dtype=np.float64).reshape(-1, 2) @ _rotation(frame).T
    moved = turned + np.asarray(frame.offset[:2])
    return tuple((float(x), float(y)) for x, y in moved)


def to_local(frame: Frame, points: Sequence[Point] | Floats) -> tuple[Point, ...]:
    """The way back of `to_world`."""
    moved = np.asarray(points, dtype=np.float64).reshape(-1, 2) - np.asarray(frame.offset[:2])
    return tuple((float(x), float(y)) for x, y in moved @ _rotation(frame))


def _rotation(frame: Frame) -> Floats:
    angle = np.radians(frame.rotation_deg)
    return np.array([[np.cos(angle), -np.sin(angle)], [np.sin(angle), np.cos(angle)]])


def world_pit(frame: Frame, pit: Pit) -> Pit:
    """A pit found in local coordinates, with every point and direction in the world."""

    def _point(local: Point) -> Point:
        return to_world(frame, [local])[0]

    return replace(
        pit,
        perimeter=to_world(frame, pit.perimeter),
        arcs=tuple(replace(arc, centre=_point(arc.centre)) for arc in pit.arcs),
        corners=tuple(replace(corner, point=_point(corner.point)) for corner in pit.corners),
        zones=tuple(_turned(frame, zone) for zone in pit.zones),
        circle=None if pit.circle is None else replace(pit.circle, centre=_point(pit.circle.centre)),
        circles=tuple(replace(part, centre=_point(part.centre)) for part in pit.circles),
        symmetry=tuple(
            replace(axis, point=_point(axis.point), direction=(axis.direction + frame.rotation_deg) % 180.0)
            for axis in pit.symmetry
        ),
        floors=tuple(replace(floor, outline=to_world(frame, floor.outline)) for floor in pit.floors),
        steps=tuple(replace(step, line=to_world(frame, step.line)) for step in pit.steps),
        loads=tuple(replace(load, points=to_world(frame, load.points)) for load in pit.loads),
        receptors=tuple(replace(receptor, points=to_world(frame, receptor.points)) for receptor in pit.receptors),
    )


def _turned(frame: Frame, zone: Zone) -> Zone:
    """A zone whose direction of wall is that in the world."""
    direction = zone.signature.get("direction")
    if not isinstance(direction, float):
        return zone
    return replace(zone, signature={**zone.signature, "direction": (direction + frame.rotation_deg) % 360.0})
