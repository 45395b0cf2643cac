"""Margins of model error by class of station and output, as data, and the factors on a local peak.

They were measured as the ratio of an elastic block in three dimensions to the folded-wall model: the high margin is the
95 % point where the block is above 1, the low one the 95 % point of the model over the block. Block and model share
their idealisation and their author, so a margin says nothing of the ground itself; one point in twenty lies outside.
The verdict reads this table and the report prints it; narrower values are earned by a better model only.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from ingest.model import OUTPUTS
from sections.found import FoundPit
from sections.model import Bools, Floats
from sections.pit.along import distance_along, find_ends, gaps_of, steps_of
from sections.pit.wall_changes import changes_of

Class = Literal["far", "near", "change", "unlike", "rows"]

MEASURED = "first measured set: fifteen scenes of an elastic block against the folded wall, 768 stations"
OWN_ORACLE = "own oracle, 2026-12-01, fourteen scenes of the second block; high ends lay inside the first set and stay"
AS_DEFLECTION = "taken as for wall deflection (judgement): a trough is scaled on the wall's movement"
FAR = 3.0
"""Reach of corners, steps, gaps and changes along the wall, in excavated depths (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Margin:
    """A band [low, high] becomes [low (1 - e_low), high (1 + e_high)]."""

    of: Class
    output: str
    e_low: float
    e_high: float
    source: str


def _rows(of: Class, values: dict[str, tuple[float, float]], *again: str) -> tuple[Margin, ...]:
    """Margins of one class; `again` names the outputs whose low end the second block widened."""
    return tuple(
        Margin(of=of, output=name, e_low=low, e_high=high, source=_source(name, again))
        for name, (low, high) in values.items()
    )


def _source(name: str, again: tuple[str, ...]) -> str:
    if name == "settlement":
        return AS_DEFLECTION
    return OWN_ORACLE if name in again else MEASURED


_DEFLECTION, _EXCAVATED, _RETAINED, _FORCE, _SETTLEMENT = OUTPUTS[:5]

MARGINS: tuple[Margin, ...] = (
    *_rows(
        "far",
        {**dict.fromkeys(OUTPUTS[:5], (0.03, 0.05)), _EXCAVATED: (0.06, 0.05), _RETAINED: (0.06, 0.05)},
        _EXCAVATED,
        _RETAINED,
    ),
    *_rows(
        "near",
        {
            _DEFLECTION: (0.06, 0.13), _EXCAVATED: (0.09, 0.10), _RETAINED: (0.41, 0.27), _FORCE: (0.06, 0.13),
            _SETTLEMENT: (0.06, 0.13),
        },
        _EXCAVATED,
        _RETAINED,
    ),
    *_rows("change", {_RETAINED: (0.43, 0.70)}, _RETAINED),
    *_rows("unlike", {_DEFLECTION: (0.06, 0.27), _FORCE: (0.06, 0.27), _SETTLEMENT: (0.06, 0.27)}),
    *_rows(
        "rows",
        {_DEFLECTION: (0.10, 0.37), _EXCAVATED: (0.20, 0.24), _RETAINED: (0.10, 0.70), _SETTLEMENT: (0.10, 0.37)},
    ),
)  # fmt: skip
"""Classes add up: a station takes the largest margin of all the classes it is in. `far` excludes the others but `rows`.
The retained face of a row of piles has no measured margin at all: see `not_measured`."""

PEAK_MONOLITHIC, PEAK_ROWS, PEAK_LIMITS_OFF = 1.15, 1.65, 1.25


def peak_factor(rows: Bools | bool, limits_on: bool) -> Floats:
    """Factor on the high end of a local peak that the folded wall finds (gap, missing member).

    Args:
        rows: True for rows of piles; any shape.
        limits_on: Whether the earth-pressure limits were on.
    """
    return np.where(rows, PEAK_ROWS, PEAK_MONOLITHIC) * (1.0 if limits_on else PEAK_LIMITS_OFF)


@dataclass(frozen=True, kw_only=True)
class StationMargins:
    """Margins at the stations, arrays (n, o); `not_measured` where no margin exists and none may be claimed."""

    e_low: Floats
    e_high: Floats
    not_measured: Bools


def margins_at(found: FoundPit) -> StationMargins:
    """Find the margin of each output at each station from the class it is in.

    Where the depth is not known the station counts as near, which is the wider margin.
    """
    stations = found.stations
    reach = FAR * np.where(np.isnan(stations.depth), np.inf, stations.depth)
    change = _distance_to_changes(found) <= reach
    ends = find_ends(found)
    felt = np.minimum(ends.back, ends.ahead) <= reach
    near = change | felt | ~stations.facing_like
    members: dict[Class, Bools] = {
        "far": np.ones(len(reach), dtype=bool),
        "near": near,
        "change": change,
        "unlike": ~stations.facing_like,
        "rows": stations.rows,
    }
    shape = (len(reach), len(OUTPUTS))
    e_low, e_high, not_measured = np.zeros(shape), np.zeros(shape), np.zeros(shape, dtype=bool)
    for margin in MARGINS:
        o, here = OUTPUTS.index(margin.output), members[margin.of]
        e_low[here, o] = np.maximum(e_low[here, o], margin.e_low)
        e_high[here, o] = np.maximum(e_high[here, o], margin.e_high)
    not_measured[stations.rows, OUTPUTS.index(_RETAINED)] = True
    return StationMargins(e_low=e_low, e_high=e_high, not_measured=not_measured)


def _distance_to_changes(found: FoundPit) -> Floats:
    """Distance along the wall to the nearest change of wall, step of the floor or gap in a row of supports, m."""
    changes = np.concatenate([changes_of(found), steps_of(found), gaps_of(found)])
    return distance_along(found, changes)
