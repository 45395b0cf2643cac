"""Numbers of the brief with their unit and the range a site can have. The ranges catch slips, they judge nothing."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, PydanticCustomError, core_schema


@dataclass(frozen=True)
class Within:
    """A number from `low` to `high` in `unit`; `above` leaves the lower bound itself out."""

    low: float
    high: float
    unit: str = ""
    above: bool = False

    @property
    def allowed(self) -> str:
        """The range in words."""
        return f"{'above ' if self.above else ''}{self.low:.10g} to {self.high:.10g} {self.unit}".rstrip()

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_before_validator_function(self._checked, handler(source))

    def _checked(self, value: object) -> object:
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise _refused(f"{_shown(value)} is not a number; a bare number is wanted, {self.allowed}")
        inside = math.isfinite(value) and self.low <= value <= self.high and not (self.above and value == self.low)
        if not inside:
            said = f"{value:.10g} {self.unit}".rstrip()
            raise _refused(f"{said} lies outside the allowed range, {self.allowed}{self._slip(value)}")
        return float(value)

    def _slip(self, value: float) -> str:
        small = value / 1000
        if self.unit == "m" and math.isfinite(value) and abs(value) >= 1000 and self.low <= small <= self.high:
            return f" (in mm it would be {small:.10g} m)"
        return ""


def check_modulus(kind: str, E: float | None) -> None:
    """Refuse a modulus that no such material has, kPa: `ValueError` with the allowed range."""
    low, high = MODULI[kind]
    if E is not None and not low <= E <= high:
        raise ValueError(f"E {E:g} kPa is that of no {kind}; allowed is {low:g} to {high:g} kPa")


def _refused(message: str) -> PydanticCustomError:
    return PydanticCustomError("value", "{message}", {"message": message})


def _shown(value: object) -> str:
    text = f'"{value}"' if isinstance(value, str) else str(value).lower() if isinstance(value, bool) else str(value)
    return text if len(text) <= 60 else text[:57] + "..."


MODULI = {"concrete": (5e5, 1e8), "steel": (5e7, 2.5e8), "grout": (1e5, 1e8), "timber": (5e5, 5e7)}
"""Widest range of E by kind of material, kPa, cracked or long-term values included. It catches GPa and MPa written for
kPa. Common practice, no source."""

Level = Annotated[float, Within(-1000, 9000, "m")]
Coordinate = Annotated[float, Within(-1e8, 1e8, "m")]
Angle = Annotated[float, Within(-360, 360, "degrees")]
Inclination = Annotated[float, Within(-89, 89, "degrees below the horizontal")]
Length = Annotated[float, Within(0, 200, "m", above=True)]
Diameter = Annotated[float, Within(0, 10, "m", above=True)]
Allowance = Annotated[float, Within(0, 10, "m")]
Stress = Annotated[float, Within(0, 1e9, "kPa", above=True)]
Strength = Annotated[float, Within(0, 1e6, "kPa")]
Gradient = Annotated[float, Within(0, 1e6, "kPa per m of depth")]
UnitWeight = Annotated[float, Within(5, 90, "kN/m3")]
Poisson = Annotated[float, Within(0, 0.5)]
AtRest = Annotated[float, Within(0, 5, above=True)]
Friction = Annotated[float, Within(0, 60, "degrees")]
Permeability = Annotated[float, Within(0, 1, "m/s", above=True)]
Factor = Annotated[float, Within(0, 1, above=True)]
Rigidity = Annotated[float, Within(0, 1e9, "kN", above=True)]
BendingRigidity = Annotated[float, Within(0, 1e10, "kNm2", above=True)]
Stiffness = Annotated[float, Within(0, 1e9, "kN/m", above=True)]
Force = Annotated[float, Within(-1e5, 1e5, "kN")]
Temperature = Annotated[float, Within(0, 100, "K")]
LoadValue = Annotated[float, Within(0, 1e6, "kN, kN/m or kPa")]
RatioLow = Annotated[float, Within(0, 1, above=True)]
RatioHigh = Annotated[float, Within(1, 10)]
Tolerance = Annotated[float, Within(0, 100, above=True)]
