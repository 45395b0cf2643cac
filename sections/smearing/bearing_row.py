"""A row of bearing piles drawn as a sheet: what the sheet gets wrong, and the factors that set it right.

Kept: total vertical load, settlement of the row, average axial and bending stiffness per metre. Wrong whatever is done:
flow of soil and water between the piles, lateral shielding, group and edge effects, punching between piles.
"""

from __future__ import annotations

from math import asin, cos, pi, sin
from typing import Literal

from ingest.errors import require, require_positive
from ingest.record import record
from ingest.trail import Finding

WALL_LIMIT, SHEET_LIMIT = 2.0, 4.0
"""s/D up to which a row is treated as a wall, and up to which it may be drawn as a sheet (judgement)."""


@record
class BearingRow:
    """Corrections of a sheet that stands for a row of piles.

    `shaft` on the strength of each face, `base` on the base resistance, `blocked` the share of the plan line that
    piles really block (the sheet blocks all of it).
    """

    treat_as: Literal["wall", "sheet", "springs"]
    shaft: float
    base: float
    blocked: float


def shaft_factor(diameter: float, spacing: float) -> float:
    """Factor on the friction of each face of the sheet, R_f = pi D/(2 s). Source: geometry, shaft over two faces."""
    return pi * _diameter(diameter, spacing) / (2 * spacing)


def base_factor(diameter: float, spacing: float, thickness: float) -> float:
    """Factor on the base resistance of the sheet, R_b = pi D^2/(4 s t). Source: geometry."""
    area = pi * _diameter(diameter, spacing) ** 2 / 4
    return area / (spacing * require_positive(thickness, "sheet thickness", "m"))


def flow_round_factor(adhesion: float) -> float:
    """Limit N_p of a round pile in clay, deep, flow all round; adhesion 0 (smooth) to 1 (rough).

    Source: Randolph & Houlsby 1984, Geotechnique 34(4) (recalled).
    """
    delta = asin(require(adhesion, "adhesion factor", least=0.0, most=1.0))
    return pi + 2 * delta + 2 * cos(delta) + 4 * (cos(delta / 2) + sin(delta / 2))


def lateral_limit(su: float, diameter: float, spacing: float, adhesion: float) -> float:
    """Limit force between ground and row per metre of wall and metre of depth, N_p s_u D/s, kPa."""
    require_positive(su, "undrained strength", "kPa")
    return flow_round_factor(adhesion) * su * _diameter(diameter, spacing) / spacing


def find_bearing_row(diameter: float, spacing: float, thickness: float) -> BearingRow:
    """All corrections of one row, with how to treat it by its s/D."""
    ratio = spacing / _diameter(diameter, spacing)
    treat: Literal["wall", "sheet", "springs"] = "springs"
    if ratio <= SHEET_LIMIT * (1 + 1e-9):
        treat = "wall" if ratio <= WALL_LIMIT * (1 + 1e-9) else "sheet"
    return BearingRow(
        treat_as=treat,
        shaft=shaft_factor(diameter, spacing),
        base=base_factor(diameter, spacing, thickness),
        blocked=1 / ratio,
    )


def check_bearing_row(diameter: float, spacing: float, where: str) -> tuple[Finding, ...]:
    """Say how far a row may be drawn as a wall: a wall to 2 D, a sheet with factors to 4 D, not at all beyond."""
    ratio = spacing / _diameter(diameter, spacing)
    if ratio <= WALL_LIMIT * (1 + 1e-9):
        return ()
    if ratio <= SHEET_LIMIT * (1 + 1e-9):
        text = f"bearing piles at {ratio:.2f} D: a sheet needs the factors on shaft and base, and blocks the ground"
    else:
        text = f"bearing piles at {ratio:.2f} D, limit {SHEET_LIMIT:g} D: no wall, use springs or leave them out"
    return (Finding(id=f"bearing-row:{where}", code="bearing-row", severity="check", where=where, text=text),)


def _diameter(diameter: float, spacing: float) -> float:
    require_positive(diameter, "pile diameter", "m")
    require(spacing, "pile spacing", "m", least=diameter)
    return diameter
