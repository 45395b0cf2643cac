"""Survey `quarry_road`, an invented cutting open on one side, held by king posts, anchors and rakers.

Run: python samples/make_quarry_road.py [FOLDER]
"""

from __future__ import annotations

import sys
from math import cos, radians, sin
from pathlib import Path
from typing import Any

from drawing import Point, add_layer, add_line, add_text, new_drawing, save_drawing
from ground_data import Hole, write_ags

FOLDER = Path(__file__).parent / "quarry_road"
WEST_END = (2140.0, 4710.0)
"""Local survey grid, metres. The wall runs east, then bends 25 degrees to the north; the dig is on its north side."""
CENTRES = 2.4
BAYS = (21, 13)
"""Bays of the western and of the eastern leg: 50.4 m and 31.2 m."""
BEND = 25.0
GROUND, UPPER, LOWER = 112.4, 107.8, 105.2
STEP_AT = 24.0
"""Chainage at which the dig drops from the upper to the lower level, m."""
POST = "UC 305x305x118"
POST_SIZE = (0.3145, 0.3074, 0.0120, 0.0187)
"""Depth, flange width, web and flange of the post, m."""
ANCHOR_ROWS = ((110.6, 15.0, 12.0, 0), (107.6, 20.0, 10.0, 10))
"""Level of the head, inclination in degrees, length on plan, first bay of the western leg that has one."""
RAKERS_AT = tuple(3.6 + 4.8 * i for i in range(6))
RAKER_LENGTH = 7.0
CRANE_RAILS = (15.0, 18.0)


def on_wall(chainage: float, into: float = 0.0) -> Point:
    """A point by its chainage along the wall and its distance into the dig (negative: behind the wall)."""
    west = BAYS[0] * CENTRES
    turn = radians(BEND) if chainage > west + 1e-9 else 0.0
    along = max(0.0, chainage - west)
    x = min(chainage, west) + along * cos(radians(BEND)) - into * sin(turn)
    y = along * sin(radians(BEND)) + into * cos(turn)
    return round(WEST_END[0] + x, 4), round(WEST_END[1] + y, 4)


def from_leg(leg: int, along: float, into: float) -> Point:
    """A point by its distance along one leg, beyond its ends too, and its distance into the dig."""
    turn = radians(BEND) * leg
    west = BAYS[0] * CENTRES * leg
    x = west + along * cos(turn) - into * sin(turn)
    y = along * sin(turn) + into * cos(turn)
    return round(WEST_END[0] + x, 4), round(WEST_END[1] + y, 4)


def draw_posts(drawing: Any) -> None:
    """King posts as inserts of one block, webs across the wall, and the lagging between them."""
    depth, width, web, flange = POST_SIZE
    h, b, w, t = depth / 2, width / 2, web / 2, depth / 2 - flange
    ring = [(-b, -h), (b, -h), (b, -t), (w, -t), (w, t), (b, t), (b, h), (-b, h), (-b, t), (-w, t), (-w, -t), (-b, -t)]
    block = drawing.blocks.new(POST)
    block.add_lwpolyline(ring, close=True, dxfattribs={"layer": "0"})
    space = drawing.modelspace()
    add_layer(space, "KING-POSTS")
    for n in range(sum(BAYS) + 1):
        turn = BEND if n > BAYS[0] else BEND / 2 if n == BAYS[0] else 0.0
        attributes = {"layer": "KING-POSTS", "rotation": turn}
        space.add_blockref(POST, on_wall(n * CENTRES), dxfattribs=attributes)
    for n in range(sum(BAYS)):
        add_line(space, "LAGGING", [on_wall(n * CENTRES + 0.16), on_wall((n + 1) * CENTRES - 0.16)])


def draw_supports(space: Any) -> None:
    """Two rows of anchors behind the western leg, rakers to a raft strip inside the eastern one."""
    for row, (_, _, reach, first) in enumerate(ANCHOR_ROWS, start=1):
        for bay in range(first, BAYS[0]):
            along = (bay + 0.5) * CENTRES
            add_line(space, f"ANCHORS-ROW-{row}", [from_leg(0, along, 0.0), from_leg(0, along, -reach)])
        level = f"ANCHORS ROW {row} LEVEL {ANCHOR_ROWS[row - 1][0]:.2f}"
        add_text(space, level, from_leg(0, 26.0 + row, -ANCHOR_ROWS[row - 1][2] - 1.0))
    for along in RAKERS_AT:
        add_line(space, "RAKERS", [from_leg(1, along, 0.0), from_leg(1, along, RAKER_LENGTH)])
    strip = [from_leg(1, along, into) for along, into in ((1.5, 6.2), (30.0, 6.2), (30.0, 8.6), (1.5, 8.6))]
    add_line(space, "RAFT-STRIP", strip, closed=True, level=LOWER)


def draw_dig(space: Any) -> None:
    """Outlines of the two dig levels, each drawn at its level."""
    edge = BAYS[0] * CENTRES
    upper = [from_leg(0, along, into) for along, into in ((0.0, 0.0), (STEP_AT, 0.0), (STEP_AT, 26.0), (0.0, 26.0))]
    add_line(space, "DIG-LEVEL-UPPER", upper, closed=True, level=UPPER)
    lower = [from_leg(0, STEP_AT, 0.0), from_leg(0, edge, 0.0), from_leg(1, BAYS[1] * CENTRES, 0.0)]
    lower += [from_leg(1, BAYS[1] * CENTRES, 20.0), from_leg(0, STEP_AT, 26.0)]
    add_line(space, "DIG-LEVEL-LOWER", lower, closed=True, level=LOWER)


def draw_loads(space: Any) -> None:
    """Haul road along the western leg, two crane rails that run towards the eastern one, and what else is there."""
    road = [from_leg(0, along, into) for along, into in ((-8.0, -4.0), (46.0, -4.0), (46.0, -10.0), (-8.0, -10.0))]
    add_line(space, "HAUL-ROAD", road, closed=True)
    for along in CRANE_RAILS:
        add_line(space, "CRANE-TRACK", [from_leg(1, along, -1.5), from_leg(1, along, -24.0)])
    add_line(space, "FENCE", [from_leg(0, along, -14.0) for along in (-10.0, 20.0, 45.0)])
    add_line(space, "SITE-BOUNDARY", [from_leg(0, along, -30.0) for along in (-15.0, 40.0, 90.0)])
    for n, along in enumerate((-6.0, 12.0, 30.0, 48.0)):
        add_text(space, f"+{GROUND + 0.02 * (n - 1.5):.2f}", from_leg(0, along, -12.5), layer="SPOT-LEVELS")


def draw_survey(path: Path) -> None:
    """The survey drawing; the same bytes at every run."""
    drawing = new_drawing("R2007")
    space = drawing.modelspace()
    draw_posts(drawing)
    draw_supports(space)
    draw_dig(space)
    draw_loads(space)
    add_text(space, f"KING POSTS {POST} AT 2.40 m, TIMBER LAGGING", from_leg(0, 2.0, 1.0))
    add_text(space, "RAKERS AT 4.80 m, 35 DEGREES", from_leg(1, 8.0, 3.0))
    save_drawing(drawing, path)


def write_boreholes(path: Path) -> None:
    """Six boreholes; the strata fall eastwards, along the wall, by 1 in 12."""
    words = {
        "FILL": "Loose to medium dense grey sandy gravel (QUARRY WASTE)",
        "CLAY": "Stiff reddish brown gravelly CLAY (WEATHERED MUDSTONE)",
        "MDST": "Very weak to weak reddish brown MUDSTONE",
    }
    places = ((-6.0, -6.0), (20.0, -8.0), (47.0, -7.0), (75.0, -2.0), (12.0, 12.0), (58.0, 16.0))
    holes = []
    for n, (east, north) in enumerate(places, start=1):
        fall = (east + 6.0) / 12.0
        edges = (0.0, round(1.2 + 0.5 * fall, 2), round(3.0 + fall, 2), 20.0)
        strata = tuple((a, b, code, words[code]) for a, b, code in zip(edges[:-1], edges[1:], words, strict=True))
        place = (WEST_END[0] + east, WEST_END[1] + north)
        holes.append(Hole(name=f"QR{n:02d}", place=place, level=GROUND, strata=strata))
    write_ags(path, "Quarry Road (invented)", holes)


def write_site(folder: Path = FOLDER) -> None:
    """Write the two inputs; the same bytes at every run."""
    draw_survey(folder / "survey.dxf")
    write_boreholes(folder / "boreholes.ags")


if __name__ == "__main__":
    write_site(Path(sys.argv[1]) if len(sys.argv) > 1 else FOLDER)
