"""What an inside corner does to a wall, by class of wall and place alone, when nothing better has been computed.

Deflection for every class; support force and moment only where the class is sure, because a waler or capping beam
moves both along the wall; moment only for jointed walls and rows without either. The criterion is the ground that the
others stand on: where it cannot speak, the outputs of the wall are not assessed, whatever another criterion relieves.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.corner_table import DEPTH_RANGE, DISTANCE, LENGTH, NEAR, SHORT, WALL_RANGE, hull_between
from sections.criteria.sheet import MOMENTS, WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit, Stations
from sections.model import Bools, Floats
from sections.pit.along import ACUTE, INSIDE, ORTHOGONAL, REENTRANT, STRAIGHT_FROM, WallEnds, find_ends

CODE = "corner_class"
SILENCE = {
    **dict.fromkeys(
        MOMENTS,
        "by class of wall alone moments are known only for jointed walls and rows that have neither waler nor capping "
        "beam, and of rows only on the excavated face",
    ),
    "support_force": "by class of wall alone support forces are known only where supports are known and neither waler "
    "nor capping beam may carry them along the wall",
}


@dataclass(frozen=True, kw_only=True)
class _Place:
    """Where a station stands: distances to its corners in depths, and the weight of each corner (1 = square)."""

    depth: Floats
    near: Floats
    far: Floats
    near_weight: Floats
    far_weight: Floats
    length: Floats
    angle: Floats

    @property
    def acute(self) -> Bools:
        """True where the nearer corner is sharper than the range taken as square."""
        return np.asarray(self.angle < ACUTE - 1e-9)


def corner_class(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Judge every station by the distance to the nearer inside corner and the length of its wall, both over depth."""
    stations, ends = found.stations, find_ends(found)
    sheet = Sheet(stations, "No inside corner ends this wall, so the class of wall says nothing of it.")
    place = _place(stations, ends)
    able = _able(stations, ends, place, sheet)
    plain = ~stations.beam
    jointed, monolithic = stations.jointed & plain, stations.monolithic & plain
    supported = np.array([len(held) > 0 for held in stations.supports])

    _say(sheet, able & ~monolithic, ("wall_deflection",), "deflection", "jointed", place)
    _say(sheet, able & ~jointed, ("wall_deflection",), "deflection", "monolithic", place)
    _say(sheet, able & jointed, MOMENTS[:1], "moment", "jointed", place)
    # the mean of the retained face over a bay has no measured margin for rows
    _say(sheet, able & jointed & ~stations.rows, MOMENTS[1:], "moment", "jointed", place)
    _say(sheet, able & plain & supported & ~monolithic, ("support_force",), "force", "jointed", place)
    _say(sheet, able & plain & supported & ~jointed, ("support_force",), "force", "monolithic", place)
    for o, name in enumerate(sheet.outputs):
        if name in WALL_OUTPUTS:
            sheet.missing[:, o] = np.isnan(sheet.low[:, o])
    _word(sheet, able, place, stations)
    deflection = sheet.outputs.index("wall_deflection")
    return sheet.close(
        CODE,
        "corner",
        basis="range of 45 computed cases by class of wall; own folded-wall model, no measurement",
        reference="own computation, rounded outward; oblique corners by linear blend (judgement)",
        inputs={
            "distance": ends.to_inside,
            "distance_over_depth": place.near,
            "length_over_depth": place.length,
            "depth": place.depth,
            "angle": place.angle,
            "low": sheet.low[:, deflection],
            "high": sheet.high[:, deflection],
        },
        by_class_only=True,
        settled_by="a computation of the whole perimeter with the real wall, supports and ground (screening)",
        silence=SILENCE,
    )


def _place(stations: Stations, ends: WallEnds) -> _Place:
    depth = np.where(stations.depth > 0.0, stations.depth, np.nan)
    back = np.where(ends.back_kind == INSIDE, ends.back, np.inf)
    ahead = np.where(ends.ahead_kind == INSIDE, ends.ahead, np.inf)
    nearer_back = back <= ahead
    weights = _weight(ends.back_angle), _weight(ends.ahead_angle)
    return _Place(
        depth=depth,
        near=np.where(nearer_back, back, ahead) / depth,
        far=np.where(nearer_back, ahead, back) / depth,
        near_weight=np.where(nearer_back, *weights),
        far_weight=np.where(nearer_back, *weights[::-1]),
        length=ends.length / depth,
        angle=ends.inside_angle,
    )


def _weight(angle: Floats) -> Floats:
    """Weight of a corner's effect: 1 up to 120 degrees, falling linearly to 0 at 150 (judgement)."""
    return np.clip((STRAIGHT_FROM - angle) / (STRAIGHT_FROM - ORTHOGONAL), 0.0, 1.0)


def _able(stations: Stations, ends: WallEnds, place: _Place, sheet: Sheet) -> Bools:
    """Say why a station cannot be judged, the first reason that applies, and tell which ones can."""
    has_corner = np.isfinite(ends.to_inside)
    wall = (np.where(np.isnan(stations.top), stations.ground, stations.top) - stations.toe) / place.depth
    short = place.length < 1.0 - 1e-9
    reasons = (
        (np.isnan(stations.depth), "The excavated depth is not given here, so no distance can be put in depths."),
        (stations.depth <= 0.0, "Nothing is excavated here."),
        (~np.isnan(stations.radius), "The wall is curved here; the class of wall is known for straight walls only."),
        (ends.has(REENTRANT), "This wall ends in a re-entrant corner, so its other end gives it no sure relief."),
        (_outside(place.depth, DEPTH_RANGE), "Excavated depth {depth:.1f} m is outside the 5 to 18 m of the cases."),
        (_outside(wall, WALL_RANGE), "Wall length over excavated depth is outside the 1.3 to 2.0 of the cases."),
        (has_corner & short, "The wall is shorter than its excavated depth; the cases do not go so far."),
        (
            has_corner & (place.near < DISTANCE[0] - 1e-9),
            "Only {distance_over_depth:.2f} of the excavated depth from the corner: nearer than 0.25 is not assessed.",
        ),
    )
    able = has_corner.copy()
    for where, words in reversed(reasons):
        sheet.text(where, words)
        able &= ~where
    return able


def _outside(value: Floats, limits: tuple[float, float]) -> Bools:
    """True where a value is known and outside; an unknown wall length is spoken of, not refused."""
    return np.asarray((value < limits[0] - 1e-9) | (value > limits[1] + 1e-9))


def _say(sheet: Sheet, where: Bools, outputs: tuple[str, ...], quantity: str, kind: str, place: _Place) -> None:
    """Give the hull of the columns beside the station, with the farther corner if the nearer is blunt, and length."""
    near = _blend(hull_between(DISTANCE, NEAR[quantity, kind], place.near), place.near_weight)
    sheet.say(where, outputs, *near)
    far_felt = where & (place.near_weight < 1.0) & np.isfinite(place.far)
    sheet.say(far_felt, outputs, *_blend(hull_between(DISTANCE, NEAR[quantity, kind], place.far), place.far_weight))
    short = where & (place.length < LENGTH[-1] - 1e-9)
    sheet.say(short, outputs, *hull_between(LENGTH, SHORT[quantity, kind], place.length))


def _blend(band: tuple[Floats, Floats], weight: Floats) -> tuple[Floats, Floats]:
    return 1.0 - weight * (1.0 - band[0]), 1.0 - weight * (1.0 - band[1])


def _word(sheet: Sheet, able: Bools, place: _Place, stations: Stations) -> None:
    band = "by class of wall alone the real deflection is {low:.2f} to {high:.2f} times the 2D value"
    corner = "nside corner at {distance:.1f} m ({distance_over_depth:.2f} of the excavated depth), wall "
    corner += "{length_over_depth:.1f} depths long"
    sheet.text(able, f"I{corner}: {band}.")
    unknown_toe = "; the toe, which is not given, is taken as within 1.3 to 2 depths below the top"
    sheet.text(able & np.isnan(stations.toe), f"I{corner}: {band}{unknown_toe}.")
    wedge = "taken as square (judgement), the ground behind it being a wedge"
    sheet.text(able & place.acute, f"Sharp i{corner}, {{angle:.0f}} degrees, {wedge}: {band}.")
