"""The best circle through points."""

from __future__ import annotations

import numpy as np

from ingest.members import Point
from sections.model import Floats


def fit_circle(points: Floats, weights: Floats | None = None) -> tuple[Point, float]:
    """Best circle through points.

    Algebraic fit with the constraint of Taubin (1991), which is not drawn to short radii as the plain algebraic fit is,
    then least squares of the true distances (Gauss-Newton). Formulas recalled.

    Args:
        points: (n, 2) with n of at least three and not all on a line, m.
        weights: (n,) weights; equal when left out.

    Returns:
        Centre and radius, m.

    Raises:
        ValueError: If the points lie on a line.
    """
    w = np.full(len(points), 1.0 / len(points)) if weights is None else weights / weights.sum()
    mean = w @ points
    local = points - mean
    size = float(np.sqrt(w @ (local**2).sum(axis=1)))
    if size == 0.0:
        raise ValueError("all points are the same")
    x, y, r = _taubin(local / size, w)
    for _ in range(20):
        away = local / size - (x, y)
        distance = np.hypot(*away.T)
        slope = np.column_stack((-away / distance[:, None], -np.ones(len(away))))
        root = np.sqrt(w)[:, None]
        step = np.linalg.lstsq(root * slope, -root[:, 0] * (distance - r), rcond=None)[0]
        x, y, r = x + step[0], y + step[1], r + step[2]
        if np.abs(step).max() < 1e-13 * max(1.0, r):
            break
    return (float(mean[0] + size * x), float(mean[1] + size * y)), float(size * r)


def _taubin(local: Floats, w: Floats) -> tuple[float, float, float]:
    """Algebraic fit of centred, scaled points: singular vector of the scaled design."""
    z = (local**2).sum(axis=1)
    zm = float(w @ z)
    z0 = (z - zm) / (2.0 * np.sqrt(zm))
    design = np.sqrt(w)[:, None] * np.column_stack((z0, local))
    a = np.linalg.svd(design, full_matrices=False)[2][-1]
    lead = a[0] / (2.0 * np.sqrt(zm))
    if abs(lead) < 1e-9:
        raise ValueError("the points lie on a line")
    x, y = -a[1] / (2 * lead), -a[2] / (2 * lead)
    return float(x), float(y), float(np.sqrt(x * x + y * y + zm))
