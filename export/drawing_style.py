"""Layers, line types and lettering of the DXF drawings."""

from __future__ import annotations

from typing import Any

from export.report.markup import clean
from ingest.members import Point

METRES = 6
LETTERS = 0.25
"""Height of lettering, m: 2.5 mm at 1 to 100."""
LONGEST_TEXT = 240

LINE_TYPES: dict[str, tuple[str, tuple[float, ...]]] = {
    "CW-OVER": ("long dashes: over-states", (2.0, 1.6, -0.4)),
    "CW-UNDECIDED": ("dash dot: undecided", (1.9, 1.1, -0.3, 0.2, -0.3)),
    "CW-BLANK": ("short dashes far apart: not assessed", (0.6, 0.2, -0.4)),
    "CW-UNDER": ("dashes close together: under-states", (0.9, 0.8, -0.1)),
    "CW-SOLID": ("strokes: not two-dimensional", (0.25, 0.1, -0.15)),
    "CW-CUT": ("long dash, two short: section cut", (4.0, 2.6, -0.3, 0.25, -0.3, 0.25, -0.3)),
    "CW-DIG": ("dashes: dig level", (1.2, 0.9, -0.3)),
}
LAYERS: dict[str, tuple[int, str, int, str]] = {
    "perimeter": (7, "Continuous", 35, "GQPERIM-E-"),
    "holds": (7, "Continuous", 70, "GQVHOLDSE-"),
    "over_states": (5, "CW-OVER", 70, "GQVOVER-E-"),
    "undecided": (42, "CW-UNDECIDED", 70, "GQVUNDECE-"),
    "not_assessed": (8, "CW-BLANK", 50, "GQVBLANKE-"),
    "under_states": (30, "CW-UNDER", 100, "GQVUNDERE-"),
    "not_two_dimensional": (6, "CW-SOLID", 100, "GQVSOLIDE-"),
    "cut": (4, "CW-CUT", 50, "GQCUTS--E-"),
    "cut_text": (4, "Continuous", 25, "GQCUTS--T-"),
    "stands": (4, "Continuous", 35, "GQSTANDSE-"),
    "stands_text": (4, "Continuous", 25, "GQSTANDST-"),
    "zones": (8, "Continuous", 18, "GQZONES-E-"),
    "zones_text": (8, "Continuous", 18, "GQZONES-T-"),
    "corner_text": (7, "Continuous", 18, "GQCORNERT-"),
    "supports": (7, "Continuous", 25, "GQSUPPRTE-"),
    "supports_text": (7, "Continuous", 18, "GQSUPPRTT-"),
    "loads": (7, "Continuous", 25, "GQLOADS-E-"),
    "loads_text": (7, "Continuous", 18, "GQLOADS-T-"),
    "wall": (7, "Continuous", 50, "GQWALL--E-"),
    "wall_text": (7, "Continuous", 18, "GQWALL--T-"),
    "ground": (7, "Continuous", 25, "GQGROUNDE-"),
    "ground_hatch": (8, "Continuous", 13, "GQGROUNDH-"),
    "ground_text": (7, "Continuous", 18, "GQGROUNDT-"),
    "water": (5, "Continuous", 25, "GQWATER-E-"),
    "dig": (7, "CW-DIG", 25, "GQDIG---E-"),
    "dig_text": (7, "Continuous", 18, "GQDIG---T-"),
    "levels_text": (7, "Continuous", 18, "GQLEVELST-"),
    "dimensions": (7, "Continuous", 18, "GQDIMENSD-"),
    "frame": (8, "Continuous", 18, "GQFRAME-E-"),
    "notes": (7, "Continuous", 18, "GQNOTES-T-"),
}


def new_drawing() -> Any:
    """An empty drawing in metres with the layers, line types and a dimension style."""
    import ezdxf

    drawing = ezdxf.new("R2010", units=METRES)
    drawing.header["$MEASUREMENT"] = 1
    for name, (words, (total, *strokes)) in LINE_TYPES.items():
        drawing.linetypes.add(name, pattern=[total, *strokes], description=words)
    for colour, line_type, weight, name in LAYERS.values():
        drawing.layers.add(name, color=colour, linetype=line_type, lineweight=weight)
    style = drawing.dimstyles.duplicate_entry("Standard", "CW-100")
    settings = {
        "dimtxt": LETTERS,
        "dimasz": 0.2,
        "dimtsz": 0.12,
        "dimexe": 0.1,
        "dimexo": 0.1,
        "dimgap": 0.08,
        "dimdec": 2,
        "dimtad": 1,
        "dimtih": 0,
        "dimtoh": 0,
        "dimlfac": 1.0,
        "dimzin": 0,
        "dimdsep": ord("."),
    }
    for key, value in settings.items():
        style.set_dxf_attrib(key, value)
    return drawing


def layer(key: str) -> dict[str, str]:
    """The layer of a kind of thing as drawing attributes."""
    return {"layer": LAYERS[key][3]}


def words(
    space: Any, at: Point, text: str, key: str, height: float = LETTERS, align: str = "LEFT", turn: float = 0.0
) -> None:
    """Lettering; names from files stay text: control characters and the codes `%%` and `^` lose their meaning."""
    from ezdxf.enums import TextEntityAlignment

    plain = clean(text).replace("\n", " ").replace("%%", "% %").replace("^", "\u02c6")[:LONGEST_TEXT]
    entity = space.add_text(plain, height=height, rotation=turn, dxfattribs=layer(key))
    entity.set_placement(at, align=TextEntityAlignment[align])


def polyline(space: Any, points: Any, key: str, closed: bool = False) -> Any:
    """A polyline on the layer of a kind of thing."""
    return space.add_lwpolyline([(float(x), float(y)) for x, y in points], close=closed, dxfattribs=layer(key))
