"""Model `tannery_lane`, an invented undercroft for tram stabling between two streets, beside a canal.

Run: python samples/make_tannery_lane.py [FOLDER]
"""

from __future__ import annotations

import sys
from math import cos, dist, radians, sin
from pathlib import Path

from drawing import Point, add_line, add_text, new_drawing, save_drawing
from ground_data import Hole, write_ags
from ifc_model import SiteModel

FOLDER = Path(__file__).parent / "tannery_lane"
EAST, NORTH, TURN = 438_250.0, 286_120.0, 12.0
"""World place of the south-west corner, and how far the wall along the canal is turned from the easting axis."""

CORNERS = ((0.0, 0.0), (48.0, 0.0), (41.0, 24.0), (24.0, 24.0), (24.0, 37.0), (0.0, 37.0))
"""Wall axis, counter-clockwise from the canal side: 48, 25, 17, 13, 24 and 37 m long."""
SECANT_CENTRES, SECANT_DIAMETER = 0.75, 1.0
CONTIGUOUS_CENTRES, CONTIGUOUS_DIAMETER = 1.0, 0.9
TOP, TOE_MALE, TOE_FEMALE, TOE_CONTIGUOUS = 9.0, -13.0, -6.0, -12.0
FORMATION, RAFT_TOP, LIFT_PIT = -2.8, -2.0, -4.6
STRUT_LEVELS = (7.4, 3.8, 0.4)
TUBES = ((0.610, 0.0125), (0.813, 0.016), (0.813, 0.020))
WALER_INSET = 0.95
"""Distance of the waler's axis from the wall axis."""
ACROSS = (
    *(((x, 0.0), (x, 37.0)) for x in (7.0, 11.0, 15.0, 19.0)),
    *(((x, 0.0), (x, 24.0)) for x in (25.5, 30.0, 34.5, 39.0)),
    *(((0.0, y), (48.0 - 7.0 * y / 24.0, y)) for y in (8.0, 12.5, 17.0, 21.5)),
    *(((0.0, y), (24.0, y)) for y in (26.0, 30.0)),
)
"""Cross-lot struts, wall axis to wall axis; the four that reach the eastern street meet it 16.3 degrees askew."""
AT_CORNERS = (
    ((4.0, 0.0), (0.0, 4.0)),
    ((44.0, 0.0), (46.88, 3.84)),
    ((24.0, 33.5), (20.5, 37.0)),
    ((3.5, 37.0), (0.0, 33.5)),
)
BEARING = tuple(
    (x, y) for y, count in ((8.0, 13), (16.0, 13), (30.0, 6)) for x in (4.0 + 3.0 * i for i in range(count))
)
COLUMNS = tuple((x, y) for y, count in ((8.0, 7), (16.0, 7), (30.0, 3)) for x in (4.0 + 6.0 * i for i in range(count)))
COLUMN_LOAD = 2400.0


def world(point: Point) -> Point:
    """A point of the site in world metres, to a tenth of a millimetre."""
    c, s = cos(radians(TURN)), sin(radians(TURN))
    x, y = point
    return round(EAST + c * x - s * y, 4), round(NORTH + s * x + c * y, 4)


def along(start: Point, end: Point, centres: float) -> list[Point]:
    """Points at even centres from the start of a side up to, but not at, its end."""
    count = round(dist(start, end) / centres)
    (x1, y1), (x2, y2) = start, end
    return [(x1 + (x2 - x1) * i / count, y1 + (y2 - y1) * i / count) for i in range(count)]


def inset(ring: tuple[Point, ...], by: float) -> list[Point]:
    """Corners of a counter-clockwise ring moved inwards by a distance."""
    moved = []
    for before, here, after in zip((ring[-1], *ring[:-1]), ring, (*ring[1:], ring[0]), strict=True):
        a, b = dist(before, here), dist(here, after)
        u = ((here[0] - before[0]) / a, (here[1] - before[1]) / a)
        v = ((after[0] - here[0]) / b, (after[1] - here[1]) / b)
        reach = by / (1 + u[0] * v[0] + u[1] * v[1])
        moved.append((here[0] - reach * (u[1] + v[1]), here[1] + reach * (u[0] + v[0])))
    return moved


def mm(*numbers: float) -> tuple[float, ...]:
    """Metres as millimetres, to a thousandth of a millimetre."""
    return tuple(round(1000.0 * number, 3) for number in numbers)


def add_walls(model: SiteModel) -> None:
    """Secant piles along the canal, female and male in turn from the south-west corner; contiguous piles elsewhere."""
    secant = along(CORNERS[0], CORNERS[1], SECANT_CENTRES)
    for n, at in enumerate(secant):
        male = n % 2 == 1
        name, toe = (f"SECANT MALE {n + 1}", TOE_MALE) if male else (f"SECANT FEMALE {n + 1}", TOE_FEMALE)
        add_pile(model, name, "WALL-PILES-SECANT", at, SECANT_DIAMETER, toe, "C32/40" if male else "C8/10")
    ring = (*CORNERS[1:], CORNERS[0])
    sides = zip(ring[:-1], ring[1:], strict=True)
    piles = [point for start, end in sides for point in along(start, end, CONTIGUOUS_CENTRES)]
    for n, at in enumerate(piles, start=1):
        name = f"CONTIGUOUS {n}"
        add_pile(model, name, "WALL-PILES-CONTIGUOUS", at, CONTIGUOUS_DIAMETER, TOE_CONTIGUOUS, "C32/40")


def add_pile(
    model: SiteModel, name: str, layer: str, at: Point, diameter: float, toe: float, material: str,
    top: float = TOP, kind: str = "BORED",
) -> None:  # fmt: skip
    """A bored pile from its head downwards."""
    circle = model.add("IfcCircleProfileDef", "AREA", None, model.flat(), *mm(diameter / 2))
    solid = model.extrusion(circle, mm(top - toe)[0], (0.0, 0.0, -1.0))
    model.element("IfcPile", name, layer, model.frame(mm(*at, top)), solid, kind, material)


def shortened(start: Point, end: Point) -> tuple[Point, Point]:
    """A strut drawn from wall axis to wall axis cut back to the walers at either end."""
    from shapely import LineString, Polygon

    inner = Polygon(inset(CORNERS, WALER_INSET)).intersection(LineString((start, end)))
    a, b = inner.coords[0], inner.coords[-1]
    return (a[0], a[1]), (b[0], b[1])


def add_supports(model: SiteModel) -> None:
    """At each level a waler on every side, cross-lot struts and corner struts, all to the axis of the waler."""
    for number, (level, (diameter, wall)) in enumerate(zip(STRUT_LEVELS, TUBES, strict=True), start=1):
        sizes = mm(diameter / 2, wall)
        tube = model.add(
            "IfcCircleHollowProfileDef", "AREA", f"CHS {1000 * diameter:g}x{1000 * wall:g}", model.flat(), *sizes
        )
        for kind, drawn in (("STRUT", ACROSS), ("CORNER STRUT", AT_CORNERS)):
            for n, ends in enumerate(drawn, start=1):
                (x1, y1), (x2, y2) = shortened(*ends)
                layer = f"{kind.replace(' ', '-')}S-L{number}"
                bar = (mm(x1, y1, level), mm(x2, y2, level))
                model.bar("IfcMember", f"{kind} L{number}-{n}", layer, bar, tube, "STRUT", "steel S355")
        beam = model.add("IfcIShapeProfileDef", "AREA", "welded 700x450", model.flat(), *mm(0.450, 0.700, 0.014, 0.030))
        ring = inset(CORNERS, WALER_INSET)
        for n, (start, end) in enumerate(zip(ring, (*ring[1:], ring[0]), strict=True), start=1):
            bar = (mm(*start, level), mm(*end, level))
            model.bar("IfcBeam", f"WALER L{number}-{n}", f"WALERS-L{number}", bar, beam, "BEAM", "steel S355")


def add_floor(model: SiteModel) -> None:
    """Raft, lift pit, bearing piles, columns on every second pile and what they carry."""
    ring = [mm(*point) for point in inset(CORNERS, SECANT_DIAMETER / 2 + 0.05)]
    model.plate("IfcSlab", "RAFT", "RAFT", ring, mm(FORMATION, RAFT_TOP), "BASESLAB", "C32/40")
    pit = [mm(*point) for point in ((29.0, 19.2), (33.0, 19.2), (33.0, 22.4), (29.0, 22.4))]
    model.plate("IfcSlab", "LIFT PIT BASE", "LIFT-PIT", pit, mm(LIFT_PIT, LIFT_PIT + 0.6), "BASESLAB", "C32/40")
    for n, at in enumerate(BEARING, start=1):
        add_pile(model, f"BEARING PILE {n}", "BEARING-PILES", at, 0.75, -24.0, "C32/40", FORMATION, "SUPPORT")
    square = model.add("IfcRectangleProfileDef", "AREA", "600 x 600", model.flat(), *mm(0.6, 0.6))
    for n, at in enumerate(COLUMNS, start=1):
        solid = model.extrusion(square, mm(6.0)[0])
        model.element("IfcColumn", f"COLUMN {n}", "COLUMNS", model.frame(mm(*at, RAFT_TOP)), solid, "COLUMN", "C40/50")
        model.point_load(f"COLUMN LOAD {n}", mm(*at, RAFT_TOP), COLUMN_LOAD)


def write_model(path: Path) -> None:
    """The structure: IFC4X3 in millimetres, laid on the map by a map conversion."""
    model = SiteModel("Tannery Lane", "IFC4X3", "MILLI")
    model.map_conversion(EAST, NORTH, (cos(radians(TURN)), sin(radians(TURN))), 0.001, "national grid (invented)")
    add_walls(model)
    add_supports(model)
    add_floor(model)
    model.save(path, "make_tannery_lane.py")


def beside(side: int, start: float, end: float, near: float, far: float) -> list[Point]:
    """Outline of a strip behind a side: from and to along it, least and largest distance behind the wall axis."""
    (x1, y1), (x2, y2) = CORNERS[side], CORNERS[(side + 1) % 6]
    length = dist((x1, y1), (x2, y2))
    ux, uy = (x2 - x1) / length, (y2 - y1) / length
    spots = ((start, near), (start, far), (end, far), (end, near))
    return [(x1 + s * ux + d * uy, y1 + s * uy - d * ux) for s, d in spots]


def draw_setting_out(path: Path) -> None:
    """The setting-out drawing in world metres: streets, canal, neighbour, tunnel, grid and wall line."""
    drawing = new_drawing("R2013")
    space = drawing.modelspace()
    rings: dict[str, list[list[Point]]] = {
        "SURCHARGE-STREET": [beside(5, -3.0, 40.0, 1.5, 9.0), beside(1, -2.0, 27.0, 1.5, 9.5)],
        "FOOTING-NEIGHBOUR": [beside(4, 6.0, 15.0, 2.5, 4.0)],
        "NEIGHBOUR-BUILDING": [beside(4, 4.0, 18.0, 2.4, 14.0)],
        "TUNNEL": [beside(1, -20.0, 45.0, 10.5, 16.5)],
    }
    for layer, outlines in rings.items():
        for ring in outlines:
            add_line(space, layer, [world(point) for point in ring], closed=True)
    add_line(space, "CANAL-EDGE", [world((-15.0, -7.0)), world((65.0, -7.0))])
    for x in (4.0, 10.0, 16.0, 22.0, 28.0, 34.0, 40.0):
        add_line(space, "GRID", [world((x, -4.0)), world((x, 41.0))])
    for y in (8.0, 16.0, 30.0):
        add_line(space, "GRID", [world((-4.0, y)), world((52.0, y))])
    notes = (
        ("TANNERY LANE", (-8.0, 18.0)),
        ("WHARF STREET", (52.0, 14.0)),
        ("CANAL, WATER LEVEL +6.50", (10.0, -9.0)),
        ("ALL LEVELS IN METRES ABOVE DATUM", (-8.0, 46.0)),
    )
    for text, at in notes:
        add_text(space, text, world(at), height=0.8, turn=TURN)
    save_drawing(drawing, path)


def write_boreholes(path: Path) -> None:
    """Five boreholes; the clay falls gently towards the canal."""
    words = {
        "MG": "Soft to firm brown sandy gravelly CLAY with brick (MADE GROUND)",
        "ALV": "Soft grey organic CLAY (ALLUVIUM)",
        "RTD": "Medium dense brown sandy GRAVEL (RIVER TERRACE)",
        "CLY": "Stiff fissured grey CLAY",
    }
    table = (
        ("BH1", (-5.0, -3.5), 9.0, (3.0, 5.2, 9.6), 2.6),
        ("BH2", (53.0, 3.0), 9.1, (2.4, 4.9, 9.1), 2.7),
        ("BH3", (46.0, 30.0), 8.9, (2.0, 4.0, 7.6), 3.1),
        ("BH4", (-6.0, 41.0), 9.0, (2.6, 4.1, 7.4), 3.3),
        ("BH5", (18.0, 14.0), 9.0, (2.7, 4.6, 8.5), 2.9),
    )
    holes = []
    for name, at, level, tops, water in table:
        edges = (0.0, *tops, 30.0)
        strata = tuple((a, b, code, words[code]) for a, b, code in zip(edges[:-1], edges[1:], words, strict=True))
        holes.append(Hole(name=name, place=world(at), level=level, strata=strata, water=water))
    write_ags(path, "Tannery Lane (invented)", holes)


def write_site(folder: Path = FOLDER) -> None:
    """Write the three inputs; the same bytes at every run."""
    write_model(folder / "tannery_lane.ifc")
    draw_setting_out(folder / "setting_out.dxf")
    write_boreholes(folder / "boreholes.ags")


if __name__ == "__main__":
    write_site(Path(sys.argv[1]) if len(sys.argv) > 1 else FOLDER)
