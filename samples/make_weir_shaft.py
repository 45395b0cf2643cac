"""Model `weir_shaft`, an invented twelve-sided drop shaft of diaphragm panels.

Run: python samples/make_weir_shaft.py [FOLDER]
"""

from __future__ import annotations

import sys
from math import cos, pi, sin, tan
from pathlib import Path

from ifc_model import SiteModel

FOLDER = Path(__file__).parent / "weir_shaft"
CENTRE = (412.0, 618.0)
SIDES, APOTHEM, THICKNESS = 12, 7.5, 1.2
"""Regular twelve-sided wall axis; its corners stand 15 degrees off the easting axis."""
TOP, TOE, SLAB_UNDERSIDE, SLAB_TOP = 24.0, -3.0, 3.0, 4.2
RING_LEVELS, RING_WIDTH, RING_DEPTH = (22.6, 16.0, 9.5), 0.8, 1.0
PROP_LEVEL, PROP_TUBE, PROP_BEARING = 12.6, (0.813, 0.020), 30.0
"""The one cross-prop stands square to two panels, 30 degrees off the easting axis."""
CRANE_AT, CRANE_SIDE, CRANE_TURN = (13.5, 52.0), 6.0, 23.0
"""Distance from the shaft's centre, bearing from the easting axis; side of the base, and how far it is turned."""
Point = tuple[float, float]


def polar(radius: float, degrees: float, centre: Point = CENTRE) -> Point:
    """A point by its distance and its angle from the easting axis."""
    turn = degrees * pi / 180.0
    return round(centre[0] + radius * cos(turn), 6), round(centre[1] + radius * sin(turn), 6)


def polygon(apothem: float) -> list[Point]:
    """Corners of the twelve-sided figure, counter-clockwise."""
    radius = apothem / cos(pi / SIDES)
    return [polar(radius, (n - 0.5) * 360.0 / SIDES) for n in range(SIDES)]


def add_panels(model: SiteModel) -> None:
    """Twelve panels, each from corner to corner of the wall axis."""
    corners = polygon(APOTHEM)
    length = round(2.0 * APOTHEM * tan(pi / SIDES), 6)
    profile = model.add("IfcRectangleProfileDef", "AREA", None, model.flat((length / 2.0, 0.0)), length, THICKNESS)
    for n, (start, end) in enumerate(zip(corners, (*corners[1:], corners[0]), strict=True), start=1):
        way = (end[0] - start[0], end[1] - start[1], 0.0)
        frame = model.frame((*start, TOE), (0.0, 0.0, 1.0), way)
        solid = model.extrusion(profile, TOP - TOE)
        model.element("IfcWall", f"DIAPHRAGM PANEL P{n:02d}", "DIAPHRAGM-WALL", frame, solid, None, "C35/45")


def add_supports(model: SiteModel) -> None:
    """Ring beams inside the panels, and one prop from panel to panel across the middle."""
    box = model.add("IfcRectangleProfileDef", "AREA", "ring beam", model.flat(), RING_DEPTH, RING_WIDTH)
    ring = polygon(APOTHEM - THICKNESS / 2.0 - RING_WIDTH / 2.0)
    for n, level in enumerate(RING_LEVELS, start=1):
        points = [(*point, level) for point in ring]
        model.ring_beam("IfcBeam", f"RING BEAM {n}", "RING-BEAMS", points, box, "BEAM", "C35/45")
    tube = model.add("IfcCircleHollowProfileDef", "AREA", "CHS 813x20", model.flat(), PROP_TUBE[0] / 2, PROP_TUBE[1])
    reach = APOTHEM - THICKNESS / 2.0
    ends = [(*polar(reach, PROP_BEARING + turn), PROP_LEVEL) for turn in (0.0, 180.0)]
    model.bar("IfcMember", "CROSS PROP", "CROSS-PROP", ends, tube, "STRUT", "steel S355")


def add_base(model: SiteModel) -> None:
    """Base slab between the panels, and the base of the tower crane outside."""
    ring = polygon(APOTHEM - THICKNESS / 2.0)
    model.plate("IfcSlab", "BASE SLAB", "BASE-SLAB", ring, (SLAB_UNDERSIDE, SLAB_TOP), "BASESLAB", "C35/45")
    middle, half = polar(*CRANE_AT), CRANE_SIDE / 2.0**0.5
    pad = [polar(half, CRANE_TURN + 45.0 + 90.0 * n, middle) for n in range(4)]
    model.plate("IfcFooting", "TOWER CRANE BASE", "TOWER-CRANE", pad, (22.5, 24.0), "PAD_FOOTING", "C35/45")


def write_site(folder: Path = FOLDER) -> None:
    """Write the model; the same bytes at every run."""
    model = SiteModel("Weir Shaft", "IFC4")
    add_panels(model)
    add_supports(model)
    add_base(model)
    model.save(folder / "weir_shaft.ifc", "make_weir_shaft.py")


if __name__ == "__main__":
    write_site(Path(sys.argv[1]) if len(sys.argv) > 1 else FOLDER)
