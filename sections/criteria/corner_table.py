"""Ratios near inside corners by class of wall alone, as data: the range of 45 computed cases, rounded outward.

Folded-wall model, one final stage, linear; excavated depth 5 to 18 m, wall 1.3 to 2 times as long as the dig is deep,
rectangles with square corners, random ground, walls, levels and support stiffness. It bounds nothing outside that.
The cases without supports count as force 0, so the support force has no lower end.
"""

from __future__ import annotations

import numpy as np

from sections.model import Floats

DISTANCE = np.array([0.25, 0.5, 1.0, 1.5, 2.0, 3.0])
"""Distance to the nearer inside corner over excavated depth."""
LENGTH = np.array([1.0, 1.5, 2.0, 3.0, 4.0])
"""Length of the wall over excavated depth; at most the last one counts as short."""
DEPTH_RANGE = (5.0, 18.0)
WALL_RANGE = (1.3, 2.0)
"""Length of the wall over excavated depth, from its top to its toe."""

Row = tuple[Floats, Floats]


def _row(*pairs: tuple[float, float]) -> Row:
    return np.array([pair[0] for pair in pairs]), np.array([pair[1] for pair in pairs])


NEAR: dict[tuple[str, str], Row] = {
    ("deflection", "monolithic"): _row(
        (0.03, 0.48), (0.06, 0.75), (0.14, 0.94), (0.22, 0.99), (0.28, 1.00), (0.33, 1.05)
    ),
    ("deflection", "jointed"): _row((0.58, 0.85), (0.73, 0.94), (0.87, 0.99), (0.94, 1.0), (0.97, 1.0), (0.98, 1.0)),
    ("moment", "jointed"): _row((0.71, 1.19), (0.83, 1.07), (0.95, 1.03), (0.98, 1.01), (0.99, 1.01), (0.99, 1.01)),
    ("force", "monolithic"): _row(*((0.0, high) for high in (0.48, 0.77, 0.98, 1.08, 1.21, 1.23))),
    ("force", "jointed"): _row(*((0.0, high) for high in (0.94, 0.98, 1.0, 1.0, 1.0, 1.0))),
}  # fmt: skip
"""By distance to the corner. The monolithic moment row exists too but is not used: see `corner_class`."""

_HIGH_ONLY = np.inf
SHORT: dict[tuple[str, str], Row] = {
    ("deflection", "monolithic"): _row((-0.04, 0.54), (0.0, 0.76), (0.0, 0.88), (0.04, 0.98), (0.12, 1.01)),
    ("deflection", "jointed"): _row((0.49, 0.87), (0.66, 0.95), (0.77, 0.98), (0.89, 1.00), (0.94, 1.00)),
    ("moment", "jointed"): _row(*((_HIGH_ONLY, high) for high in (1.13, 1.08, 1.05, 1.02, 1.01))),
    ("force", "monolithic"): _row(*((0.0, high) for high in (0.55, 0.79, 0.95, 1.10, 1.34))),
    ("force", "jointed"): _row(*((0.0, high) for high in (0.96, 0.99, 1.00, 1.00, 1.00))),
}
"""At the middle of a wall, by its length; of the moment only the high end is known, so it lowers no low end."""


def hull_between(columns: Floats, row: Row, at: Floats) -> Row:
    """Hull of the two columns on either side of `at` (n,); a value on a column takes that column alone.

    Beyond the last column the last one counts; below the first the answer is nan.
    """
    upper = np.clip(np.searchsorted(columns, at - 1e-9), 0, len(columns) - 1)
    lower = np.clip(np.searchsorted(columns, at + 1e-9, side="right") - 1, 0, len(columns) - 1)
    inside = ~np.isnan(at) & (at >= columns[0] - 1e-9)
    low, high = row
    return (
        np.where(inside, np.minimum(low[lower], low[upper]), np.nan),
        np.where(inside, np.maximum(high[lower], high[upper]), np.nan),
    )
