"""What both consumers take from the JSON of a section, and what an analyst must choose where it says null.

No import of the tool: a section file and a JSON parser are all there is.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import hypot
from typing import Any

import numpy as np

Json = dict[str, Any]
WATER = 9.81

CHOSEN = {"E": 30e3, "nu": 0.3, "K0": 0.6, "unit_weight": 19.0}
"""Chosen by the analyst of these tests where the section says null; statics must close whatever is chosen."""


@dataclass
class Bar:
    """A support as the section draws it: its two ends, stiffness along it, preload (tension positive) per m or rad."""

    id: str
    head: tuple[float, float]
    far: tuple[float, float]
    head_on: str
    far_on: str
    stiffness: float
    preload: float
    N_back: float
    """Factor from N of the section to the force of one member; 0 where the section gives none."""


@dataclass
class Missing:
    """Members that the section leaves without stiffness, by id."""

    ids: list[str] = field(default_factory=list)


def soil_value(materials: Json, name: str, key: str, z: float) -> float:
    """A value of a soil at a level, by its profile."""
    value = materials[name][key]
    if value is None:
        return CHOSEN[key]
    if isinstance(value, int | float):
        return float(value)
    pairs = sorted(value)
    return float(np.interp(z, [p[0] for p in pairs], [p[1] for p in pairs]))


def inside(rings: list[list[list[float]]], holes: list[list[list[float]]], x: float, z: float) -> bool:
    """Whether a point lies in any of the rings and in no hole (even-odd rule)."""
    return any(_in_ring(ring, x, z) for ring in rings) and not any(_in_ring(ring, x, z) for ring in holes)


def _in_ring(ring: list[list[float]], x: float, z: float) -> bool:
    odd = False
    for (x1, z1), (x2, z2) in zip(ring, [*ring[1:], ring[0]], strict=True):
        if (z1 > z) != (z2 > z) and x < x1 + (z - z1) * (x2 - x1) / (z2 - z1):
            odd = not odd
    return odd


def material_at(section: Json, x: float, z: float) -> str | None:
    """Soil at a point before work; None above the ground."""
    for layer in section["ground"]["layers"]:
        if inside(layer["outlines"], layer["holes"], x, z):
            return str(layer["material"])
    return None


def is_dug(section: Json, x: float, z: float) -> bool:
    """Whether a point is excavated by the last stage."""
    return any(inside([ring], [], x, z) for stage in section["stages"] for ring in stage["dig"])


def water_level(section: Json, x: float) -> float | None:
    """Level of the water before work at x."""
    for line in section["ground"]["water"]:
        (x1, z1), (x2, z2) = line["line"][0], line["line"][-1]
        if line["kind"] == "retained" and x1 - 1e-9 <= x <= x2 + 1e-9:
            return float(np.interp(x, [x1, x2], [z1, z2]))
    return None


def walls_of(section: Json) -> tuple[list[Json], list[str]]:
    """Walls that can be drawn, and those without length or bending stiffness."""
    key = "EI_kNm2_per_m" if section["kind"] == "plane_strain" else "EI_vertical_kNm2_per_m"
    walls = [member for member in section["members"] if member["role"] == "wall"]
    drawn = [wall for wall in walls if len(wall["points"]) == 2 and wall["section"][key]]
    return drawn, [wall["id"] for wall in walls if wall not in drawn]


def bars_of(section: Json) -> tuple[list[Bar], list[str]]:
    """Bars and radial springs that hold a wall, and those without stiffness. A bar with a free end holds nothing."""
    per_metre = section["kind"] == "plane_strain"
    bars, missing = [], []
    for member in section["members"]:
        if member["form"] not in ("bar", "disc", "ring") or any(end["joint"] == "free" for end in member["ends"]):
            continue
        stiffness = _plane(member) if per_metre else _ring(member)
        if stiffness is None:
            missing.append(member["id"])
            continue
        on = [end["to"] for end in member["ends"]]
        points = [tuple(point) for point in member["points"]]
        if len(points) == 1:  # a ring round the wall holds it radially
            points.append((0.0, points[0][1]))
            on.append("axis")
        made = member["section"]
        preload = made.get("preload_kN_per_m" if per_metre else "preload_kN_per_rad") or 0.0
        unit = "kN/m" if per_metre else "kN/rad"
        factor = next((b["factor"] for b in member["back"] if (b["quantity"], b["from_unit"]) == ("N", unit)), 0.0)
        bars.append(Bar(member["id"], points[0], points[1], on[0], on[1], stiffness, preload, factor))
    return bars, missing


def _plane(member: Json) -> float | None:
    if member["section"]["k_effective_kN_per_m_per_m"] is not None:
        return float(member["section"]["k_effective_kN_per_m_per_m"])
    EA = member["section"]["EA_kN_per_m"]
    return None if EA is None else EA / _length(member)


def _ring(member: Json) -> float | None:
    made = member["section"]
    if made["radial_stiffness_kN_per_m_per_rad"] is not None:
        return float(made["radial_stiffness_kN_per_m_per_rad"])
    return None if made["EA_kN_per_rad"] is None else made["EA_kN_per_rad"] / _length(member)


def _length(member: Json) -> float:
    (x1, z1), (x2, z2) = member["points"]
    return hypot(x2 - x1, z2 - z1)
