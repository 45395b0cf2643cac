"""Concrete by strength class: stiffness, tensile strength and weight, EN 1992-1-1:2004 Table 3.1."""

from __future__ import annotations

import re
from math import log
from typing import Literal

from ingest.errors import require_positive
from ingest.members import Material
from ingest.record import record

Aggregate = Literal["quartzite", "limestone", "sandstone", "basalt"]

CUBE_OF_CYLINDER = {
    12: 15, 16: 20, 20: 25, 25: 30, 28: 35, 30: 37, 32: 40, 35: 45, 40: 50, 45: 55, 50: 60, 55: 67, 60: 75, 70: 85,
    80: 95, 90: 105,
}  # fmt: skip
"""Cylinder and cube strength of each class, N/mm2. C28/35 and C32/40 are United Kingdom classes, not in Table 3.1."""

TABLE_ECM = {
    12: 27, 16: 29, 20: 30, 25: 31, 30: 33, 35: 34, 40: 35, 45: 36, 50: 37, 55: 38, 60: 39, 70: 41, 80: 42, 90: 44,
}  # fmt: skip
"""Ecm as Table 3.1 prints it, rounded, GPa."""

AGGREGATE_FACTOR: dict[Aggregate, float] = {"quartzite": 1.0, "limestone": 0.9, "sandstone": 0.7, "basalt": 1.2}
"""On Ecm, EN 1992-1-1 cl. 3.1.3(2) (recalled)."""

ALPHA_T = 10.0e-6
"""Thermal strain of concrete, 1/K, EN 1992-1-1 cl. 3.1.3(5) (recalled)."""
NU_UNCRACKED, NU_CRACKED = 0.2, 0.0
"""Poisson's ratio, EN 1992-1-1 cl. 3.1.3(4) (recalled)."""
UNIT_WEIGHT_PLAIN, UNIT_WEIGHT_REINFORCED, UNIT_WEIGHT_FRESH_EXTRA = 24.0, 25.0, 1.0
"""kN/m3, EN 1991-1-1 Annex A; fresh concrete weighs 1 more (recalled)."""


@record
class Concrete:
    """Properties of one strength class.

    `fck`, `fcm`, `fctm` in N/mm2; `Ecm` in kPa by the expression of Table 3.1; `Ecm_table` in kPa as the table prints
    it, None for a class the table does not hold.
    """

    designation: str
    fck: float
    fcm: float
    fctm: float
    Ecm: float
    Ecm_table: float | None


def mean_strength(fck: float) -> float:
    """Mean cylinder strength fcm = fck + 8, N/mm2. Source: EN 1992-1-1:2004 Table 3.1."""
    return require_positive(fck, "cylinder strength fck", "N/mm2") + 8.0


def elastic_modulus(fck: float, aggregate: Aggregate = "quartzite") -> float:
    """Secant modulus Ecm = 22 (fcm/10)^0.3 GPa, returned in kPa. Source: EN 1992-1-1:2004 Table 3.1, cl. 3.1.3(2).

    Assumes:
        Quartzite aggregate unless another is named; the factor of the others is the standard's rough figure.
    """
    return float(22.0e6 * (mean_strength(fck) / 10.0) ** 0.3 * AGGREGATE_FACTOR[aggregate])


def tensile_strength(fck: float) -> float:
    """Mean tensile strength fctm, N/mm2. Source: EN 1992-1-1:2004 Table 3.1."""
    fcm = mean_strength(fck)
    return float(0.30 * fck ** (2 / 3)) if fck <= 50 else 2.12 * log(1 + fcm / 10)


def find_concrete(designation: str) -> Concrete:
    """Read a strength class such as "C30/37" or "C30".

    Raises:
        ValueError: Unknown class, or cylinder and cube strength that do not belong together; names the nearest known.
    """
    match = re.fullmatch(r"C?\s*(\d+)(?:\s*/\s*(\d+))?", designation.strip().upper())
    fck = int(match.group(1)) if match else 0
    cube = match.group(2) if match else None
    if fck not in CUBE_OF_CYLINDER or (cube is not None and int(cube) != CUBE_OF_CYLINDER[fck]):
        raise ValueError(f"concrete class {designation!r} is not known; {_nearest(fck)}")
    table = TABLE_ECM.get(fck)
    return Concrete(
        designation=f"C{fck}/{CUBE_OF_CYLINDER[fck]}",
        fck=float(fck),
        fcm=mean_strength(fck),
        fctm=tensile_strength(fck),
        Ecm=elastic_modulus(fck),
        Ecm_table=None if table is None else table * 1.0e6,
    )


def concrete_material(id: str, designation: str, aggregate: Aggregate = "quartzite") -> Material:
    """Make the structural material of a reinforced concrete class, uncracked.

    Assumes:
        Short-term, uncracked stiffness: a factor for cracking and creep is a separate, named input. Reinforced concrete
        weighs 25 kN/m3 (EN 1991-1-1 Annex A).
    """
    concrete = find_concrete(designation)
    E = elastic_modulus(concrete.fck, aggregate)
    return Material(
        id=id,
        kind="concrete",
        E=E,
        unit_weight=UNIT_WEIGHT_REINFORCED,
        basis=(
            f"{concrete.designation}, {aggregate}: Ecm = 22 (fcm/10)^0.3 = {E / 1e6:.2f} GPa, uncracked, "
            "EN 1992-1-1 Table 3.1; reinforced 25 kN/m3, EN 1991-1-1 Annex A"
        ),
    )


def _nearest(fck: int) -> str:
    if fck == 0:
        return "known are C12/15 to C90/105"
    closest = min(CUBE_OF_CYLINDER, key=lambda known: (abs(known - fck), known))
    return f"nearest known: C{closest}/{CUBE_OF_CYLINDER[closest]}"
