"""The real, discrete support as every kind of section lists it."""

from __future__ import annotations

import numpy as np

from ingest.members import Material, Support
from sections.member import RealMember
from sections.smearing.member import Direction


def real_support(support: Support, material: Material | None, direction: Direction, count: int) -> RealMember:
    """One real strut, raker or anchor with what was given of it; its area from the section, else from EA and E."""
    E = material.E if material else None
    area = support.section.A if support.section else None
    return RealMember(
        EA_kN=support.EA,
        length=float(np.linalg.norm(np.subtract(support.far, support.head))),
        skew=direction.skew,
        inclination=direction.inclination,
        count=count,
        preload_kN=support.preload,
        weight_kN_per_m=support.weight,
        A_m2=area if area is not None else support.EA / E if support.EA and E else None,
        free_length=support.free_length,
        bond_length=support.bond_length,
        bond_diameter=support.bond_diameter,
        thermal_range_K=support.thermal_range,
        k_packing_kN_per_m=support.packing_stiffness,
    )
