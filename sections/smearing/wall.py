"""Pile walls, sheet walls and continuous walls per metre run: EA, EI, weight, and the solid wall that has both.

Source: geometry of the circle and the rectangle; which piles count follows trade usage (EN 1536, CIRIA C760, recalled).
"""

from __future__ import annotations

from math import pi, sqrt
from typing import Literal

import numpy as np

from ingest.errors import require, require_positive
from sections.model import Floats

Which = Literal["all", "male", "posts"]


def circle_area(diameter: float) -> float:
    """Area of a round pile, m2."""
    return pi * require_positive(diameter, "pile diameter", "m") ** 2 / 4


def circle_inertia(diameter: float) -> float:
    """Second moment of area of a round pile, m4."""
    return pi * require_positive(diameter, "pile diameter", "m") ** 4 / 64


def structural_spacing(centres: float, which: Which) -> float:
    """Spacing of the piles that bend, m, from the distance between neighbouring piles of any kind as drawn.

    In hard/soft and hard/firm secant walls only the male (secondary, reinforced) piles bend; they stand at twice the
    distance of neighbours. Dividing by the drawn distance instead would double the stiffness.
    """
    require_positive(centres, "pile centres", "m")
    return 2 * centres if which == "male" else centres


def per_metre(E: float, A: float, I: float, spacing: float, EI_factor: float = 1.0) -> tuple[float, float]:  # noqa: E741
    """EA in kN/m and EI in kNm2/m of equal piles or posts at one spacing.

    Args:
        E: Modulus, kPa.
        A: Area of one pile, m2.
        I: Second moment of one pile, m4.
        spacing: Of the piles that bend, m.
        EI_factor: Cracking and creep, above 0 and at most 1; a named input, never hidden.
    """
    require_positive(E, "modulus E", "kPa")
    require_positive(spacing, "spacing", "m")
    require(EI_factor, "EI factor", above=0.0, most=1.0)
    EA = E * require_positive(A, "area A", "m2") / spacing
    return EA, EI_factor * E * require_positive(I, "second moment I", "m4") / spacing


def hard_hard_per_metre(E: float, male: float, female: float, centres: float) -> tuple[float, float]:
    """EA and EI per metre of a secant wall whose males and females (diameters, m) are both reinforced.

    Assumes:
        Each pile bends by itself, no composite action; one modulus E for both.
    """
    A = circle_area(male) + circle_area(female)
    return per_metre(E, A, circle_inertia(male) + circle_inertia(female), 2 * require_positive(centres, "centres", "m"))


def continuous_per_metre(E: float, thickness: float, nu: float | None = None) -> tuple[float, float]:
    """EA = E t in kN/m and EI = E t^3/12 in kNm2/m of a continuous wall, with 1/(1 - nu^2) on EI when nu is given.

    Whether the receiving program applies that factor by itself must be known before it is given here.
    """
    require_positive(E, "modulus E", "kPa")
    require_positive(thickness, "wall thickness", "m")
    return E * thickness, E * thickness**3 / 12 * (1.0 if nu is None else plane_strain_factor(nu))


def sheet_per_metre(E: float, A: float, I: float, beta_D: float = 1.0) -> tuple[float, float]:  # noqa: E741
    """EA and EI of a sheet wall from its catalogue A (m2/m) and I (m4/m).

    Args:
        E: Modulus, kPa.
        A: Area per metre, m2/m.
        I: Second moment per metre, m4/m.
        beta_D: Reduction of U-profiles for slip in their locks, EN 1993-5 cl. 6.4 and National Annex (recalled).
    """
    return per_metre(E, A, I, 1.0, beta_D)


def plane_strain_factor(nu: float) -> float:
    """1/(1 - nu^2): bending of a wide plate over that of a beam. Only for continuous walls, never for rows of piles."""
    return 1.0 / (1.0 - require(nu, "Poisson's ratio", least=0.0, below=0.5) ** 2)


def wall_weight(unit_weight: float, A: float, spacing: float, soil: float = 0.0) -> float:
    """Weight of a row of piles per m2 of elevation, kN/m2.

    Args:
        unit_weight: Of the pile, kN/m3.
        A: Area of one pile, m2.
        spacing: Of the piles that are counted, m.
        soil: Unit weight of the soil the pile displaces, kN/m3: give it when the mesh still holds that soil.
    """
    require_positive(unit_weight, "unit weight", "kN/m3")
    require(soil, "unit weight of soil", "kN/m3", least=0.0)
    return (unit_weight - soil) * require_positive(A, "area A", "m2") / require_positive(spacing, "spacing", "m")


def equivalent_wall(EA: float, EI: float) -> tuple[float, float]:
    """Thickness in m and modulus in kPa of the solid wall that has both EA (kN/m) and EI (kNm2/m).

    For round piles the thickness is D sqrt(3)/2 whatever the spacing.
    """
    require_positive(EA, "EA per metre", "kN/m")
    thickness = sqrt(12 * require_positive(EI, "EI per metre", "kNm2/m") / EA)
    return thickness, EA / thickness


def thickness_keeping_EI(I: float, spacing: float) -> float:  # noqa: E741
    """Thickness in m of a solid wall of the real modulus with the right EI: (12 I/s)^(1/3). Its EA is wrong.

    Assumes:
        Vertical load in the wall does not matter.
    """
    I_per_metre = require_positive(I, "second moment I", "m4") / require_positive(spacing, "spacing", "m")
    return float((12 * I_per_metre) ** (1 / 3))


def overlap(
    diameter: float,
    centres: float,
    depth: Floats | float = 0.0,
    *,
    set_out: float = 0.0,
    verticality: float | None = None,
    other_diameter: float | None = None,
) -> Floats:
    """Length of the common chord of two neighbouring secant piles down the wall, m; 0 where they no longer meet.

    Args:
        diameter: Of one pile, m.
        centres: Distance between neighbours as set out, m.
        depth: Below the guide wall, m; any shape.
        set_out: Deviation of each pile at the top, m.
        verticality: n of a deviation 1:n; None for piles that run true.
        other_diameter: Of the neighbour where it differs, m.

    Assumes:
        The neighbours deviate away from each other, each by set_out + depth/n.
    """
    r1 = require_positive(diameter, "pile diameter", "m") / 2
    r2 = r1 if other_diameter is None else require_positive(other_diameter, "diameter of the neighbour", "m") / 2
    require(centres, "pile centres", "m", above=abs(r1 - r2))
    require(set_out, "set-out deviation", "m", least=0.0)
    z = np.asarray(depth, dtype=float)
    require(float(np.min(z)), "depth", "m", least=0.0)
    lean = 0.0 if verticality is None else 1.0 / require_positive(verticality, "verticality 1:n")
    apart = centres + 2 * (set_out + z * lean)
    reach = (apart**2 + r1**2 - r2**2) / (2 * apart)
    return np.asarray(2 * np.sqrt(np.maximum(r1**2 - reach**2, 0.0)))
