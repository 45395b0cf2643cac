"""Bending stiffness of the wall per metre run at the stations, as far as kind, size and material are known."""

from __future__ import annotations

import numpy as np

from ingest.model import Site
from sections.found import FoundPit
from sections.model import Floats, Wall
from sections.smearing.wall import circle_area, circle_inertia, continuous_per_metre, per_metre


def wall_EI(wall: Wall, E: float | None) -> float | None:
    """EI of one wall, kNm2 per m; None where something it needs is not given. Factors on EI are those of the wall."""
    factor = 1.0 if wall.EI_factor is None else wall.EI_factor
    if E is None:
        return None
    if wall.kind in ("diaphragm", "concrete") and wall.thickness:
        return factor * continuous_per_metre(E, wall.thickness)[1]
    spacing = None if wall.structural is None else wall.structural.spacing
    if wall.kind in ("contiguous", "secant") and wall.diameter and spacing:
        return per_metre(E, circle_area(wall.diameter), circle_inertia(wall.diameter), spacing, factor)[1]
    return None


def EI_at(site: Site, found: FoundPit) -> Floats:
    """EI of the wall at each station (n,), kNm2 per m; nan where not known."""
    moduli = {material.id: material.E for material in site.materials}
    values = [
        wall_EI(run.wall, None if run.wall.material is None else moduli.get(run.wall.material))
        for run in found.shape.runs
    ]
    return np.array([*(np.nan if value is None else value for value in values), np.nan])[found.stations.run]
