"""DXF drawings whose bytes never change, for the scripts of this folder that draw an invented site."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import ezdxf
from ezdxf.filemanagement import new

Point = tuple[float, float]


def new_drawing(version: str) -> Any:
    """An empty drawing in metres."""
    ezdxf.options.write_fixed_meta_data_for_testing = True
    return new(version, units=6)


def add_line(space: Any, layer: str, points: Sequence[Point], *, closed: bool = False, level: float = 0.0) -> None:
    """A polyline on its layer, at a level where the drawing has one."""
    add_layer(space, layer)
    space.add_lwpolyline(points, close=closed, dxfattribs={"layer": layer, "elevation": level})


def add_text(space: Any, text: str, at: Point, *, layer: str = "TEXT", height: float = 0.5, turn: float = 0.0) -> None:
    """A note, turned by degrees."""
    add_layer(space, layer)
    space.add_text(text, height=height, rotation=turn, dxfattribs={"layer": layer, "insert": at})


def add_layer(space: Any, layer: str) -> None:
    """A layer, unless it is there already."""
    if layer not in space.doc.layers:
        space.doc.layers.add(layer)


def save_drawing(drawing: Any, path: Path) -> None:
    """Write the drawing; its classes are listed by name, since the library takes them from a set."""
    for name in sorted(drawing.entitydb.dxf_types_in_use()):
        drawing.classes.add_class(name)
    path.parent.mkdir(parents=True, exist_ok=True)
    drawing.saveas(path)
