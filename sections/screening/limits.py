"""Earth-pressure limits on the ground springs, by initial-stiffness iteration on one factorisation.

Retained side: the pressure at rest can fall to the active one, k_r w <= (K0 - Ka) sigma'_v. Excavated side below the
dig level: it already holds K0 of the original ground, so what is left is
k_i w <= max(0, Kp sigma'_v,dug - K0 sigma'_v,original); where that is negative the lack is added to the unbalanced
pressure. Undrained ground: sigma_v -/+ 2 s_u in total stress.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from sections.model import Floats

TOLERANCE = 1e-4
MOST_STEPS = 60
HISTORY = 6


@dataclass(frozen=True, kw_only=True)
class PressureLimits:
    """Springs and what they can carry at the top and base of each element, (ns, ne, 2), kPa/m and kPa.

    `relief`: how far the retained pressure can fall. `reserve`: how far the excavated side can still rise. inf where
    strength is not known.
    """

    retained_spring: Floats
    excavated_spring: Floats
    relief: Floats
    reserve: Floats


def excess(limits: PressureLimits, w: Floats) -> Floats:
    """Pressure the springs would carry beyond their limits, put back on the wall as load; w as (ns, ne, 2)."""
    over = np.maximum(limits.retained_spring * w - limits.relief, 0.0)
    return np.asarray(over + np.maximum(limits.excavated_spring * w - limits.reserve, 0.0))


def at_element_ends(nodes: Floats) -> Floats:
    """(ns, nz) node values as (ns, ne, 2) values at the top and base of each element."""
    return np.stack([nodes[:, :-1], nodes[:, 1:]], axis=-1)


def settle(step: Callable[[Floats], Floats], start: Floats) -> tuple[Floats, bool]:
    """Fixed point of `step` by Anderson's mixing of the last few steps (Anderson 1965).

    Returns:
        The fixed point and whether it was reached within TOLERANCE of its size.
    """
    x = start.ravel()
    xs: list[Floats] = []
    fs: list[Floats] = []
    for _ in range(MOST_STEPS):
        f = step(x.reshape(start.shape)).ravel() - x
        if np.linalg.norm(f) <= TOLERANCE * max(float(np.linalg.norm(x)), 1e-9):
            return (x + f).reshape(start.shape), True
        xs, fs = [*xs[-HISTORY:], x], [*fs[-HISTORY:], f]
        x = x + f
        if len(fs) > 1:
            dF = np.array([fs[-1] - old for old in fs[:-1]]).T
            dX = np.array([xs[-1] - old for old in xs[:-1]]).T
            share, *_ = np.linalg.lstsq(dF, fs[-1], rcond=1e-10)
            x = x - (dX + dF) @ share
    return x.reshape(start.shape), False
