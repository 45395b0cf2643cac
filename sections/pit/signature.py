"""The signature of a wall along its chainage: all that matters to a cut, each with its tolerance."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from ingest.model import Limits, Site
from sections.found import PitShape, SupportRow
from sections.model import Floats, Ints, Wall
from sections.pit.walk import Walk, radius_at
from sections.pit.zone_words import ONE, amount_words, level_words, spacing_words

STRATA = 5.0
"""Tops of strata within this many level tolerances count as alike (judgement)."""


@dataclass(frozen=True, kw_only=True)
class Channel:
    """One number along the wall, divided by its tolerance in `values`, as drawn in `raw`."""

    name: str
    raw: Floats
    values: Floats
    say: Callable[[float, float], str]


@dataclass(frozen=True, kw_only=True)
class Signature:
    """All that is compared along one wall: labels whose every change ends a zone, and channels with a tolerance."""

    labels: Ints
    channels: tuple[Channel, ...]
    held: tuple[tuple[int, ...], ...]

    @property
    def table(self) -> Floats:
        """(n, c) channels in units of their tolerance, 0 where not given."""
        return np.column_stack([np.nan_to_num(channel.values) for channel in self.channels])


def sign(
    site: Site,
    shape: PitShape,
    steps: Walk,
    rows: Sequence[SupportRow],
    spacing: Floats,
    held: tuple[tuple[int, ...], ...],
    pressures: dict[str, Floats],
    tops: Floats,
) -> Signature:
    """Signature of every station.

    Args:
        spacing: (rows, n) spacing of each row at each station, nan where it does not hold the wall.
        held: Rows that hold the wall at each station.
        pressures: "surcharge" and "footing" (kPa), "line load" (kN/m), each (n,).
        tops: (n strata, n) top of each stratum at the wall.
    """
    limits = site.limits
    channels = [
        _level("top", "top of wall", steps.top, limits.level),
        _level("toe", "toe", steps.toe, limits.level),
        _level("ground", "retained level", steps.ground, limits.level),
        _level("floor", "dig level", steps.floor, limits.level),
        _scaled("surcharge", pressures["surcharge"], limits.surcharge, amount_words("surcharge", "kPa")),
        _scaled("footing", pressures["footing"], limits.surcharge, amount_words("footing pressure", "kPa")),
        _scaled("line load", pressures["line load"], limits.surcharge, amount_words("line load", "kN/m")),
        *_strata_channels(site, tops),
        *_spacing_channels(rows, spacing, limits),
    ]
    return Signature(labels=_labels(shape, steps, held, channels), channels=tuple(channels), held=held)


def _level(name: str, text: str, values: Floats, tolerance: float) -> Channel:
    return _scaled(name, values, tolerance, level_words(text))


def _scaled(name: str, values: Floats, tolerance: float, say: Callable[[float, float], str]) -> Channel:
    return Channel(name=name, raw=values, values=values / tolerance, say=say)


def _strata_channels(site: Site, tops: Floats) -> list[Channel]:
    tolerance = STRATA * site.limits.level
    names = [stratum.name or f"stratum {i + 1}" for i, stratum in enumerate(site.strata)]
    # the topmost layer begins at the surface, wherever its own top was logged
    return [
        _level(f"top of {name}", f"top of {name}", tops[i], tolerance)
        for i, name in enumerate(names)
        if i > 0 and np.ptp(np.nan_to_num(tops[i])) > 0.0
    ]


def _spacing_channels(rows: Sequence[SupportRow], spacing: Floats, limits: Limits) -> list[Channel]:
    channels = []
    for row, gaps in zip(rows, spacing, strict=True):
        if np.nanmax(gaps, initial=0.0) > 0.0:
            one = ONE.get(row.member.role, row.member.role)
            values = np.log(np.where(gaps > 0.0, gaps, 1.0)) / np.log1p(limits.spacing_ratio)
            channels.append(
                Channel(name=row.member.id, raw=gaps, values=values, say=lambda a, b, one=one: spacing_words(one, a, b))  # type: ignore[misc]
            )
    return channels


def _labels(shape: PitShape, steps: Walk, held: tuple[tuple[int, ...], ...], channels: Sequence[Channel]) -> Ints:
    """One label for each combination of side, construction, rows in place, curvature and what is not given."""
    rows = {rows: i for i, rows in enumerate(dict.fromkeys(held))}
    walls: dict[object, int] = {}
    kind = np.array([walls.setdefault(_construction(run.wall), len(walls)) for run in shape.runs] + [-1])
    radius = np.round(np.nan_to_num(radius_at(shape, steps.probe)), 2)
    given = [np.isnan(channel.values) for channel in channels if "-" not in channel.name]
    columns = [steps.side, kind[steps.run], np.array([rows[r] for r in held]), radius, *given]
    return np.unique(np.column_stack(columns), axis=0, return_inverse=True)[1].reshape(-1).astype(np.int64)


def _construction(wall: Wall) -> tuple[object, ...]:
    sizes = (wall.thickness, wall.diameter, wall.centres)
    rounded = tuple(None if size is None else round(size, 2) for size in sizes)
    return (wall.kind, *rounded, wall.continuity, wall.capping_beam, wall.material, wall.EI_factor, wall.post)
