"""From the local frame to the world the output files are written in."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingest.model import Frame, Point
from sections.model import (
    Arc,
    Axis,
    Circle,
    CirclePart,
    Corner,
    Floats,
    PitFloor,
    PitLoad,
    PitReceptor,
    Step,
)


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


def world_arcs(frame: Frame, arcs: Sequence[Arc]) -> tuple[Arc, ...]:
    """Arcs with their centres in the world."""
    return tuple(replace(arc, centre=to_world(frame, [arc.centre])[0]) for arc in arcs)


def world_corners(frame: Frame, corners: Sequence[Corner]) -> tuple[Corner, ...]:
    """Corners with their points in the world."""
    return tuple(replace(corner, point=to_world(frame, [corner.point])[0]) for corner in corners)


def world_circle(frame: Frame, circle: Circle | None) -> Circle | None:
    """A circle with its centre in the world."""
    return None if circle is None else replace(circle, centre=to_world(frame, [circle.centre])[0])


def world_circles(frame: Frame, circles: Sequence[CirclePart]) -> tuple[CirclePart, ...]:
    """Circle parts with their centres in the world."""
    return tuple(replace(part, centre=to_world(frame, [part.centre])[0]) for part in circles)


def world_floors(frame: Frame, floors: Sequence[PitFloor]) -> tuple[PitFloor, ...]:
    """Floors with their outlines in the world."""
    return tuple(replace(floor, outline=to_world(frame, floor.outline)) for floor in floors)


def world_steps(frame: Frame, steps: Sequence[Step]) -> tuple[Step, ...]:
    """Steps with their lines in the world."""
    return tuple(replace(step, line=to_world(frame, step.line)) for step in steps)


def world_loads(frame: Frame, loads: Sequence[PitLoad]) -> tuple[PitLoad, ...]:
    """Loads with their points in the world."""
    return tuple(replace(load, points=to_world(frame, load.points)) for load in loads)


def world_receptors(frame: Frame, receptors: Sequence[PitReceptor]) -> tuple[PitReceptor, ...]:
    """Receptors with their points in the world."""
    return tuple(replace(receptor, points=to_world(frame, receptor.points)) for receptor in receptors)


def world_axes(frame: Frame, axes: Sequence[Axis]) -> tuple[Axis, ...]:
    """Mirror axes in the world."""
    return tuple(
        replace(axis, point=to_world(frame, [axis.point])[0], direction=(axis.direction + frame.rotation_deg) % 180.0)
        for axis in axes
    )
