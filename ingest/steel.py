"""Steel sections by designation: tubes worked out from their size, I and H sections from a table of nominal sizes.

Source of constants: EN 1993-1-1 cl. 3.2.6 and EN 1992-1-1 cl. 3.3.6 (recalled), density 7850 kg/m3 (recalled).
"""

from __future__ import annotations

import re
import tomllib
from difflib import get_close_matches
from functools import cache
from importlib.resources import files
from math import pi
from typing import Literal

from ingest.errors import require, require_positive
from ingest.members import BarSection
from ingest.record import record

E_STEEL, G_STEEL, NU_STEEL = 210.0e6, 81.0e6, 0.3
"""kPa, kPa, plain number."""
E_STRAND, E_PRESTRESSING_BAR = 195.0e6, 205.0e6
"""kPa."""
ALPHA_T = 12.0e-6
"""Thermal strain of steel, 1/K."""
DENSITY = 7850.0
"""kg/m3."""
UNIT_WEIGHT = DENSITY * 9.81 / 1000
"""kN/m3; EN 1991-1-1 Annex A gives 77.0 to 78.5 (recalled)."""

WIDEST = 5.0
"""m; wider than any steel tube of a dig. Common practice, no source."""

HOLLOW = {"CHS": "CHS 508x16", "SHS": "SHS 300x12.5", "RHS": "RHS 400x200x10"}
"""Hollow sections are worked out from any size; an example of each."""

Axis = Literal["major", "minor"]


@record
class SteelShape:
    """Area m2 and second moments m4 of a section about its two axes; overall depth and width m."""

    A: float
    I_major: float
    I_minor: float
    depth: float
    width: float


def tube(diameter: float, wall: float) -> SteelShape:
    """Circular hollow section: A = pi (D^2 - d^2)/4, I = pi (D^4 - d^4)/64. Lengths in m.

    Raises:
        ValueError: The wall is not above 0 and below half the diameter.
    """
    require(diameter, "tube diameter", "m", above=0.0, most=WIDEST)
    require(wall, "tube wall", "m", above=0.0, below=diameter / 2)
    inner = diameter - 2 * wall
    I = pi * (diameter**4 - inner**4) / 64  # noqa: E741  the trade's symbol
    A = pi * (diameter**2 - inner**2) / 4
    return SteelShape(A=A, I_major=I, I_minor=I, depth=diameter, width=diameter)


def box(depth: float, width: float, wall: float) -> SteelShape:
    """Square or rectangular hollow section with rounded corners. Lengths in m.

    Assumes:
        Hot-finished corners as for calculation, outer radius 1.5 t and inner 1.0 t (EN 10210-2, recalled). A
        cold-formed section of the same size is rounder and a little lighter.

    Raises:
        ValueError: The wall is not above 0 and below a third of the shorter side.
    """
    require(depth, "box depth", "m", above=0.0, most=WIDEST)
    require(width, "box width", "m", above=0.0, most=WIDEST)
    require(wall, "box wall", "m", above=0.0, below=min(depth, width) / 3)
    inner = (depth - 2 * wall, width - 2 * wall)
    solid, hole = _rounded(depth, width, 1.5 * wall), _rounded(*inner, wall)
    across, across_hole = _rounded(width, depth, 1.5 * wall), _rounded(inner[1], inner[0], wall)
    return SteelShape(
        A=solid[0] - hole[0],
        I_major=solid[1] - hole[1],
        I_minor=across[1] - across_hole[1],
        depth=depth,
        width=width,
    )


def rolled(h: float, b: float, tw: float, tf: float, r: float) -> SteelShape:
    """I or H section with root fillets; overall depth, flange width, web, flange and root radius in m.

    Source: three rectangles and four fillets (square less quarter circle), parallel-axis theorem.
    """
    for value, what in ((h, "depth"), (b, "flange width"), (tw, "web"), (tf, "flange")):
        require_positive(value, what, "m")
    require(tf, "flange", "m", below=h / 2)
    require(tw, "web", "m", below=b)
    require(r, "root radius", "m", least=0.0, most=min(h / 2 - tf, (b - tw) / 2))
    clear = h - 2 * tf
    a, c, own = _fillet(r)
    major = (b * h**3 - (b - tw) * clear**3) / 12 + 4 * (own + a * (clear / 2 - c) ** 2)
    minor = (2 * tf * b**3 + clear * tw**3) / 12 + 4 * (own + a * (tw / 2 + c) ** 2)
    return SteelShape(A=2 * b * tf + clear * tw + 4 * a, I_major=major, I_minor=minor, depth=h, width=b)


def find_shape(designation: str) -> SteelShape:
    """Read "CHS 508x16", "SHS 300x12.5", "RHS 400x200x10", "HEB 300", "HE 300 B", "UC 305x305x97" (sizes in mm).

    Raises:
        ValueError: Unknown designation, named with the nearest known one; or a size that cannot be.
    """
    if re.search(r"(?:^|[\s,x×])-\s*\d", designation, re.IGNORECASE):
        raise ValueError(f"steel section {designation!r} has a negative size")
    kind, sizes = _split(designation)
    numbers = [float(size) / 1000 for size in sizes]
    if kind == "CHS" and len(numbers) == 2:
        return tube(numbers[0], numbers[1])
    if kind == "SHS" and len(numbers) in (2, 3) and len(set(numbers[:-1])) == 1:
        return box(numbers[0], numbers[0], numbers[-1])
    if kind == "RHS" and len(numbers) == 3:
        return box(numbers[0], numbers[1], numbers[2])
    shape = rolled_table().get(f"{kind} {'x'.join(sizes)}")
    if shape is None:
        raise ValueError(f"steel section {designation!r} is not known; nearest known: {_nearest(designation)}")
    return shape


def find_section(designation: str, axis: Axis = "major") -> BarSection:
    """Return the section of a designation, with the second moment about the axis it bends.

    Args:
        designation: As for `find_shape`.
        axis: Axis of bending in the vertical plane (members) or across the wall (posts).

    Assumes:
        The member bends about its major axis, web (or longer side) in the plane of bending, unless `axis` says minor.
    """
    shape = find_shape(designation)
    upright = axis == "major"
    return BarSection(
        designation=designation.strip(),
        A=shape.A,
        I=shape.I_major if upright else shape.I_minor,
        diameter=shape.depth if _split(designation)[0] == "CHS" else None,
        width=shape.width if upright else shape.depth,
        depth=shape.depth if upright else shape.width,
    )


def bar_rigidity(section: BarSection, E: float = E_STEEL) -> tuple[float | None, float | None]:
    """EA in kN and EI in kNm2 of one bar; None where the section does not give area or second moment."""
    require_positive(E, "modulus E", "kPa")
    EA = None if section.A is None else E * require_positive(section.A, "area A", "m2")
    EI = None if section.I is None else E * require_positive(section.I, "second moment I", "m4")
    return EA, EI


def bar_weight(section: BarSection) -> float | None:
    """Self-weight of a steel bar, kN per m of its length; None where the area is not given."""
    return None if section.A is None else UNIT_WEIGHT * require_positive(section.A, "area A", "m2")


@cache
def rolled_table() -> dict[str, SteelShape]:
    """All I and H sections known by name ("HEB 300", "UC 305x305x97")."""
    table = tomllib.loads(files("ingest").joinpath("rolled_sections.toml").read_text(encoding="utf-8"))
    return {
        f"{series} {size}": rolled(*(mm / 1000 for mm in sizes))
        for series, rows in table.items()
        for size, sizes in rows.items()
    }


def _split(designation: str) -> tuple[str, tuple[str, ...]]:
    """Series letters and sizes of a designation; "HE 300 B" reads as HEB 300."""
    text = designation.upper().replace("×", "X").replace(",", ".").strip()
    text = re.sub(r"\bS(?:235|275|355|420|460)[A-Z0-9]*", "", text)  # the steel grade is no size
    numbers = tuple(f"{float(number):g}" for number in re.findall(r"\d+(?:\.\d+)?", text))
    letters = "".join(re.findall(r"[A-Z]+", text.replace("X", " ")))
    return letters, numbers


def _nearest(designation: str) -> str:
    kind, sizes = _split(designation)
    if kind in HOLLOW:
        return f"{HOLLOW[kind]} (outside sizes x wall, mm)"
    series = [name for name in rolled_table() if name.split()[0] == kind]
    if series and sizes:
        wanted = [float(size) for size in sizes]
        return min(series, key=lambda name: _distance(name, wanted))
    close = get_close_matches(f"{kind} {'x'.join(sizes)}", [*rolled_table(), *HOLLOW.values()], n=1)
    return close[0] if close else "CHS, SHS and RHS by size, and the series HEA, HEB, HEM, IPE, UC"


def _distance(name: str, wanted: list[float]) -> float:
    sizes = [float(size) for size in _split(name)[1]]
    pairs = list(zip(sizes, wanted, strict=False))
    return sum(abs(size / want - 1) if want else 1.0 for size, want in pairs) + abs(len(sizes) - len(wanted))


def _fillet(r: float) -> tuple[float, float, float]:
    """Square of side r less a quarter circle: area, distance of centroid from the outer edge, own inertia."""
    a = (1 - pi / 4) * r**2
    if a == 0.0:
        return 0.0, 0.0, 0.0
    quarter, to_quarter = pi * r**2 / 4, r - 4 * r / (3 * pi)
    c = (r**3 / 2 - quarter * to_quarter) / a
    quarter_about_edge = pi * r**4 / 16 - quarter * (4 * r / (3 * pi)) ** 2 + quarter * to_quarter**2
    return a, c, r**4 / 3 - quarter_about_edge - a * c**2


def _rounded(depth: float, width: float, r: float) -> tuple[float, float]:
    """Area and second moment (bending over the depth) of a rectangle with rounded corners."""
    a, c, own = _fillet(r)
    return depth * width - 4 * a, width * depth**3 / 12 - 4 * (own + a * (depth / 2 - c) ** 2)
