"""Line matrices against numerical integration and beam tables."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.polynomial import Polynomial
from scipy.integrate import quad

from sections.screening.hermite import line_matrices, moments

H = 1.7
SHAPES = [
    Polynomial([1, 0, -3 / H**2, 2 / H**3]),
    Polynomial([0, 1, -2 / H, 1 / H**2]),
    Polynomial([0, 0, 3 / H**2, -2 / H**3]),
    Polynomial([0, 0, -1 / H, 1 / H**2]),
]


@pytest.mark.parametrize(("name", "order"), [("mass", 0), ("slope", 1), ("bend", 2)])
def test_cubic_matrices_equal_quadrature_of_the_shape_functions(name: str, order: int) -> None:
    got = getattr(line_matrices(np.array([H])), name)[0]
    for i, a in enumerate(SHAPES):
        for j, b in enumerate(SHAPES):
            product = a.deriv(order) * b.deriv(order) if order else a * b
            assert got[i, j] == pytest.approx(quad(product, 0, H)[0], abs=1e-12)


def test_loads_equal_quadrature() -> None:
    got = line_matrices(np.array([H]))
    for i, shape in enumerate(SHAPES):
        assert got.even[0, i] == pytest.approx(quad(shape, 0, H)[0])
        assert got.ramp[0, i] == pytest.approx(quad(shape * Polynomial([0, 1 / H]), 0, H)[0])


def test_simply_supported_beam_under_uniform_load_has_the_tables_deflection_and_moment() -> None:
    # 5 q l^4 / (384 EI) and q l^2 / 8: any beam table (Roark, Table 8.1).
    q, length, EI, n = 10.0, 8.0, 5000.0, 16
    z = np.linspace(0, length, n + 1)
    m = line_matrices(np.diff(z))
    K, F = np.zeros((2 * n + 2, 2 * n + 2)), np.zeros(2 * n + 2)
    for e in range(n):
        K[2 * e : 2 * e + 4, 2 * e : 2 * e + 4] += EI * m.bend[e]
        F[2 * e : 2 * e + 4] += q * m.even[e]
    free = [i for i in range(2 * n + 2) if i not in (0, 2 * n)]
    U = np.zeros(2 * n + 2)
    U[free] = np.linalg.solve(K[np.ix_(free, free)], F[free])
    assert U[n] == pytest.approx(5 * q * length**4 / 384 / EI, rel=1e-9)
    M = moments(z, U[0::2], U[1::2], np.full(n, EI))
    assert M[n // 2] == pytest.approx(q * length**2 / 8, rel=0.01)
