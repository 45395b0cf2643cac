"""What the numbers of an IFC file mean: its project units, and measures turned into m, kN, kPa and degrees."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from math import pi
from typing import Any

from ingest.errors import InputError
from ingest.ifc.unreadable import UNREADABLE
from ingest.units import METRES, metres_per
from ingest.units import unit_name as short_name

Entity = Any

_PREFIXES = {
    "EXA": 1e18, "PETA": 1e15, "TERA": 1e12, "GIGA": 1e9, "MEGA": 1e6, "KILO": 1e3, "HECTO": 1e2, "DECA": 1e1,
    "DECI": 1e-1, "CENTI": 1e-2, "MILLI": 1e-3, "MICRO": 1e-6, "NANO": 1e-9, "PICO": 1e-12, "FEMTO": 1e-15,
    "ATTO": 1e-18,
}  # fmt: skip
_POWERS = {"SQUARE_METRE": 2, "CUBIC_METRE": 3}
_MEASURES = {
    "IfcLengthMeasure": ("LENGTHUNIT", 1.0),
    "IfcPositiveLengthMeasure": ("LENGTHUNIT", 1.0),
    "IfcNonNegativeLengthMeasure": ("LENGTHUNIT", 1.0),
    "IfcAreaMeasure": ("AREAUNIT", 1.0),
    "IfcVolumeMeasure": ("VOLUMEUNIT", 1.0),
    "IfcPlaneAngleMeasure": ("PLANEANGLEUNIT", 180 / pi),
    "IfcPositivePlaneAngleMeasure": ("PLANEANGLEUNIT", 180 / pi),
    "IfcForceMeasure": ("FORCEUNIT", 1e-3),
    "IfcLinearForceMeasure": ("LINEARFORCEUNIT", 1e-3),
    "IfcPlanarForceMeasure": ("PLANARFORCEUNIT", 1e-3),
    "IfcTorqueMeasure": ("TORQUEUNIT", 1e-3),
    "IfcPressureMeasure": ("PRESSUREUNIT", 1e-3),
    "IfcModulusOfElasticityMeasure": ("MODULUSOFELASTICITYUNIT", 1e-3),
    "IfcShearModulusMeasure": ("SHEARMODULUSUNIT", 1e-3),
    "IfcLinearStiffnessMeasure": ("LINEARSTIFFNESSUNIT", 1e-3),
}
"""Measure type: kind of unit it is given in, and the factor from SI to m, m2, m3, degrees, kN, kN/m, kPa, kNm."""
_FALLBACK = {
    "AREAUNIT": (("LENGTHUNIT", 2),),
    "VOLUMEUNIT": (("LENGTHUNIT", 3),),
    "LINEARFORCEUNIT": (("FORCEUNIT", 1), ("LENGTHUNIT", -1)),
    "PLANARFORCEUNIT": (("FORCEUNIT", 1), ("LENGTHUNIT", -2)),
    "TORQUEUNIT": (("FORCEUNIT", 1), ("LENGTHUNIT", 1)),
    "LINEARSTIFFNESSUNIT": (("FORCEUNIT", 1), ("LENGTHUNIT", -1)),
}
"""Kinds that are built from others when the project assigns none of their own (forces and areas only)."""


@dataclass(frozen=True, slots=True)
class ProjectUnits:
    """Factors from the file's units to SI.

    Attributes:
        length: Metres per project length unit.
        name: Short name of that unit, as `ingest.units` has it, or the file's own word.
        declared: False when the file assigns no length unit at all.
        factors: Kind of unit (LENGTHUNIT, FORCEUNIT ...) to SI per unit.
        doubts: Sentences on what had to be taken as so.
    """

    length: float
    name: str
    declared: bool
    factors: dict[str, float]
    doubts: tuple[str, ...] = ()

    @property
    def angle(self) -> float:
        """Radians per plane angle unit; the standard's own default is the radian."""
        return self.factors.get("PLANEANGLEUNIT", 1.0)

    def factor(self, measure: str) -> float | None:
        """Factor from a number of this measure type to m, m2, m3, degrees, kN, kN/m, kPa or kNm; None for others."""
        known = _MEASURES.get(measure)
        if known is None:
            return None
        kind, to_ours = known
        return to_ours * self.si(kind)

    def si(self, kind: str) -> float:
        """SI units per unit of this kind (LENGTHUNIT, FORCEUNIT ...)."""
        if kind in self.factors:
            return self.factors[kind]
        product = 1.0
        for part, power in _FALLBACK.get(kind, ()):
            product *= self.si(part) ** power
        return product


def read_units(model: Any, file: str, length_unit: str | None = None, guess: str | None = None) -> ProjectUnits:
    """Read the units of the project.

    Args:
        model: Loaded IFC model.
        file: Name for messages.
        length_unit: The engineer's word for the length unit, which stands above the file's.
        guess: Length unit when the file declares none; metres without it.

    Raises:
        InputError: If `length_unit` is no known unit.
    """
    given = _given(file, length_unit)
    factors: dict[str, float] = {}
    doubts: list[str] = []
    lengths: list[tuple[str, float]] = []
    for unit in _assigned(model):
        kind = "unit"
        try:
            if unit.is_a("IfcMonetaryUnit"):
                continue
            kind = str(unit.UnitType)
            si = unit_factor(unit)
        except UNREADABLE:
            doubts.append(f"the {kind} {str(unit)[:80]} has no factor that can be read")
            continue
        if kind == "LENGTHUNIT":
            lengths.append((unit_name(unit), si))
        else:
            factors.setdefault(kind, si)
    name, length = _choose_length(lengths, doubts) if lengths else (guess or "m", METRES[guess or "m"])
    declared = bool(lengths)
    if given is not None:
        name, length, declared = given, METRES[given], True
    factors["LENGTHUNIT"] = length
    return ProjectUnits(length, name, declared, factors, tuple(doubts))


def _given(file: str, length_unit: str | None) -> str | None:
    if length_unit is None:
        return None
    try:
        return short_name(length_unit)
    except ValueError as error:
        raise InputError(file, "length_unit", str(error), f"use one of {', '.join(METRES)}") from error


def _assigned(model: Any) -> Iterable[Entity]:
    assignments = [getattr(project, "UnitsInContext", None) for project in model.by_type("IfcProject")]
    for one in (*assignments, *model.by_type("IfcUnitAssignment")):
        units = getattr(one, "Units", None)
        if isinstance(units, tuple):
            return units
    return ()


def _choose_length(lengths: list[tuple[str, float]], doubts: list[str]) -> tuple[str, float]:
    named = [(_known_name(name, si), si) for name, si in lengths]
    chosen = next(((name, si) for name, si in named if name in METRES), named[0])
    if len({si for _, si in lengths}) > 1:
        listed = ", ".join(f"{name} = {si:.9g}" for name, si in lengths)
        doubts.append(f"several length units are assigned ({listed}); {chosen[0]} was taken")
    return chosen


def _known_name(name: str, si: float) -> str:
    """The common name of a length of so many metres, when the file's own word for it is not known."""
    same = [known for known, metres in METRES.items() if abs(si / metres - 1) < 1e-7]
    return name if name in same or not same else same[0]


def unit_factor(unit: Entity) -> float:
    """SI units per unit: SI prefix, conversion factor or derived unit.

    A conversion factor may stand as a bare number (seen in real files). Where it is missing, a length unit of a
    defined name (inch, foot, US survey foot) has the factor of its definition.

    Raises:
        ValueError: If no factor can be told.
    """
    if unit.is_a("IfcSIUnit"):
        return _si_factor(unit)
    if unit.is_a("IfcDerivedUnit"):
        product = 1.0
        for element in unit.Elements:
            product *= unit_factor(element.Unit) ** element.Exponent
        return product
    if unit.is_a("IfcConversionBasedUnit"):
        return _conversion_factor(unit)
    raise ValueError(f"unit {unit.is_a()} has no factor")


def _si_factor(unit: Entity) -> float:
    prefix = _PREFIXES[str(unit.Prefix)] if unit.Prefix else 1.0
    name = str(unit.Name)
    return float(prefix ** _POWERS.get(name, 1) * (1e-3 if name == "GRAM" else 1.0))


def _conversion_factor(unit: Entity) -> float:
    measure = unit.ConversionFactor
    value = getattr(measure, "ValueComponent", None) if measure is not None else None
    if value is not None:
        number = float(getattr(value, "wrappedValue", value))
        base = measure.UnitComponent
        factor = number * (unit_factor(base) if base is not None else 1.0)
        if factor > 0:
            return factor
    if str(unit.UnitType) != "LENGTHUNIT":
        raise ValueError(f"unit {unit.Name} has no factor")
    return metres_per(_spoken(str(unit.Name)))


def _spoken(name: str) -> str:
    return "us_survey_foot" if name.upper() == "FOOT_US" else name


def unit_name(unit: Entity) -> str:
    """Short name of a length unit: mm, foot, us_survey_foot ...; the file's own word when it has none."""
    own = _spoken(str(getattr(unit, "Prefix", None) or "") + str(getattr(unit, "Name", None) or "unit"))
    try:
        return short_name(own)
    except ValueError:
        return own.lower()
