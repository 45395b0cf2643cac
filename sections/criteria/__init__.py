"""One criterion a file: how far the 2D answer may be from the real one, along a whole perimeter at once.

Each is a function `(site, found, limits) -> CriterionResult` in one of the tuples below; add one line here and its test
runs with the others. What a criterion cannot say is not assessed, with the reason, and never a band of 1 to 1.
"""

from __future__ import annotations

from collections.abc import Callable

from ingest.model import Limits, Site
from sections.criteria.anchor_clash import anchor_clash
from sections.criteria.corner_class import corner_class
from sections.criteria.corner_shape import corner_shape
from sections.criteria.floor_step import floor_step
from sections.criteria.ground import ground
from sections.criteria.heave import heave_shape
from sections.criteria.loads import loads
from sections.criteria.opposite_wall import opposite_wall
from sections.criteria.plane_strain_ratio import plane_strain_ratio
from sections.criteria.reentrant import reentrant
from sections.criteria.ring_thrust import ring_thrust
from sections.criteria.screening import screening
from sections.criteria.shape import shape
from sections.criteria.supports_gap import supports_gap
from sections.criteria.supports_skew import supports_skew
from sections.criteria.wall_change import wall_change
from sections.criteria.water import water_gradient
from sections.found import CriterionResult, FoundPit

Criterion = Callable[[Site, FoundPit, Limits], CriterionResult]

CRITERIA: tuple[Criterion, ...] = (
    reentrant,
    anchor_clash,
    shape,
    supports_skew,
    supports_gap,
    floor_step,
    wall_change,
    ground,
    loads,
    opposite_wall,
    screening,
    corner_class,
    plane_strain_ratio,
    corner_shape,
    heave_shape,
    water_gradient,
)
"""Criteria of plane-strain sections. Of several gates or gaps the first listed is named as the deciding one."""

RING_CRITERIA: tuple[Criterion, ...] = (ring_thrust,)
"""Criteria of axisymmetric sections."""
