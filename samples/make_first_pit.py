"""Draw the setting-out drawing of `first_pit`, an invented rectangular basement.

Run: python samples/make_first_pit.py
"""

from __future__ import annotations

from pathlib import Path

import ezdxf

FOLDER = Path(__file__).parent / "first_pit"
WEST, SOUTH, LENGTH, WIDTH = 100.0, 200.0, 30.0, 20.0
DIAMETER, CENTRES = 0.75, 1.0
STRUT_SPACING = 5.0


def pile_centres() -> list[tuple[float, float]]:
    """One pile a metre round the wall axis, one at each corner: 100 piles."""
    east, north = WEST + LENGTH, SOUTH + WIDTH
    along = [WEST + i * CENTRES for i in range(round(LENGTH / CENTRES))]
    up = [SOUTH + i * CENTRES for i in range(round(WIDTH / CENTRES))]
    return (
        [(x, SOUTH) for x in along]
        + [(east, y) for y in up]
        + [(east + WEST - x, north) for x in along]
        + [(WEST, north + SOUTH - y) for y in up]
    )


def strut_lines() -> list[tuple[tuple[float, float], tuple[float, float]]]:
    """Cross-lot struts, axis to axis: six across the width, four along the length."""
    east, north = WEST + LENGTH, SOUTH + WIDTH
    first = STRUT_SPACING / 2
    across = [((WEST + first + i * STRUT_SPACING, SOUTH), (WEST + first + i * STRUT_SPACING, north)) for i in range(6)]
    along = [((WEST, SOUTH + first + i * STRUT_SPACING), (east, SOUTH + first + i * STRUT_SPACING)) for i in range(4)]
    return across + along


def draw() -> None:
    """Write `first_pit.dxf`; the same bytes at every run."""
    ezdxf.options.write_fixed_meta_data_for_testing = True
    drawing = ezdxf.new("R2010", units=6)
    space = drawing.modelspace()
    for layer in ("WALL-PILES-CONTIGUOUS", "STRUTS", "WALER", "FOOTING-NEIGHBOUR", "TEXT"):
        drawing.layers.add(layer)
    for centre in pile_centres():
        space.add_circle(centre, DIAMETER / 2, dxfattribs={"layer": "WALL-PILES-CONTIGUOUS"})
    for start, end in strut_lines():
        space.add_line(start, end, dxfattribs={"layer": "STRUTS"})
    inset = DIAMETER / 2 + 0.15
    west, south, east, north = WEST + inset, SOUTH + inset, WEST + LENGTH - inset, SOUTH + WIDTH - inset
    space.add_lwpolyline(
        [(west, south), (east, south), (east, north), (west, north)], close=True, dxfattribs={"layer": "WALER"}
    )
    x, y = WEST + 13.5, SOUTH + WIDTH + 2.0
    space.add_lwpolyline(
        [(x, y), (x + 3.0, y), (x + 3.0, y + 2.0), (x, y + 2.0)],
        close=True,
        dxfattribs={"layer": "FOOTING-NEIGHBOUR"},
    )
    space.add_text(
        "CONTIGUOUS BORED PILES 750 DIA @ 1000 C/C", height=0.6, dxfattribs={"layer": "TEXT", "insert": (101, 196)}
    )
    FOLDER.mkdir(exist_ok=True)
    drawing.saveas(FOLDER / "first_pit.dxf")


if __name__ == "__main__":
    draw()
