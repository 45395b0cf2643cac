"""Exact one-dimensional matrices of cubic (Hermite) and linear line elements; products of them make the wall's element.

Degrees of freedom of a cubic element of length h: value and slope at its start, value and slope at its end.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sections.model import Floats


@dataclass(frozen=True)
class LineMatrices:
    """Matrices of m elements: cubic `mass`, `slope`, `bend` (m, 4, 4); linear `mass1`, `slope1` (m, 2, 2).

    `even` and `ramp` (m, 4) are the loads of a unit pressure, constant and rising from 0 to 1 along the element.
    """

    length: Floats
    mass: Floats
    slope: Floats
    bend: Floats
    mass1: Floats
    slope1: Floats
    even: Floats
    ramp: Floats


def line_matrices(length: Floats) -> LineMatrices:
    """Integrate products of the shape functions, of their first and of their second derivatives, in closed form."""
    h = np.asarray(length, float)
    scale = np.ones((len(h), 4))
    scale[:, 1] = scale[:, 3] = h
    both = scale[:, :, None] * scale[:, None, :]
    mass = np.array([[156, 22, 54, -13], [22, 4, 13, -3], [54, 13, 156, -22], [-13, -3, -22, 4]]) / 420
    slope = np.array([[36, 3, -36, 3], [3, 4, -3, -1], [-36, -3, 36, -3], [3, -1, -3, 4]]) / 30
    bend = np.array([[12, 6, -12, 6], [6, 4, -6, 2], [-12, -6, 12, -6], [6, 2, -6, 4]], float)
    mass1, slope1 = np.array([[2, 1], [1, 2]]) / 6, np.array([[1.0, -1.0], [-1.0, 1.0]])
    by = h[:, None, None]
    return LineMatrices(
        length=h,
        mass=mass * both * by,
        slope=slope * both / by,
        bend=bend * both / by**3,
        mass1=mass1 * by,
        slope1=slope1 / by,
        even=np.array([1 / 2, 1 / 12, 1 / 2, -1 / 12]) * scale * h[:, None],
        ramp=np.array([3 / 20, 1 / 30, 7 / 20, -1 / 20]) * scale * h[:, None],
    )


def moments(z: Floats, values: Floats, slopes: Floats, stiffness: Floats) -> Floats:
    """Bending moment along a line of cubic elements, averaged at the nodes.

    Args:
        z: (n,) node coordinates.
        values, slopes: (..., n) deflection and slope at the nodes.
        stiffness: (n - 1,) or (..., n - 1) bending stiffness of the elements.

    Returns:
        (..., n) moment -D w'', positive where the line bulges towards positive w (tension on that face).
    """
    h = np.diff(z)
    w1, w2, t1, t2 = values[..., :-1], values[..., 1:], slopes[..., :-1], slopes[..., 1:]
    start = stiffness * (6 * w1 / h**2 + 4 * t1 / h - 6 * w2 / h**2 + 2 * t2 / h)
    end = stiffness * (-6 * w1 / h**2 - 2 * t1 / h + 6 * w2 / h**2 - 4 * t2 / h)
    out = np.zeros(values.shape)
    out[..., :-1] += start / 2
    out[..., 1:] += end / 2
    out[..., 0] *= 2
    out[..., -1] *= 2
    return out
