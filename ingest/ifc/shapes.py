"""The shapes a body can have, in the file's own numbers: extrusions, sweeps, meshes, lines."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.facets import Facets
from ingest.ifc.frames import NO_FRAME, Triple
from ingest.ifc.profiles import Profile, Ring

Floats: TypeAlias = NDArray[np.float64]


@dataclass(slots=True)
class HalfSpace:
    """A plane that cuts a body: what lies on the side of its normal stays when `keep_above`.

    `boundary` limits the cut to a prism over this ring in the coordinates of `boundary_frame`.
    """

    frame: int
    keep_above: bool
    boundary: Ring | None = None
    boundary_frame: int = NO_FRAME


@dataclass(slots=True)
class Extrusion:
    """A profile moved along a vector, both in the coordinates of `frame`; cuts as in the coordinates of the item."""

    profile: Profile
    frame: int
    vector: Triple
    cuts: tuple[HalfSpace | Extrusion, ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(slots=True)
class Sweep:
    """A profile or a disc moved along a curve (n, 3).

    `reference` is the direction the profile's x axis keeps to, in the coordinates of the item; None when the
    profile's y axis stays upright.
    """

    points: Floats
    profile: Profile
    notes: tuple[str, ...] = ()
    reference: Triple | None = None


@dataclass(slots=True)
class Line:
    """A bare curve (n, 3) or a single point (1, 3), which may carry a text.

    `way` runs from the first to the second of two points.
    """

    points: Floats
    way: Triple = (0.0, 0.0, 0.0)
    text: str = ""


Shape: TypeAlias = Extrusion | Sweep | Facets | Line
Described: TypeAlias = tuple[tuple[Shape, int], ...]
"""Shapes, each with the row of its mapping in the operator table."""


def make_line(points: Floats) -> Line:
    """A bare curve from its points."""
    if len(points) != 2:
        return Line(points)
    x, y, z = (points[1] - points[0]).tolist()
    return Line(points, (x, y, z))


def noted(body: Shape, note: str) -> Shape:
    """The same body with one more note."""
    if isinstance(body, Line):
        return body
    return body if note in body.notes else replace(body, notes=(*body.notes, note))
