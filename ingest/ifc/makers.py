"""From an element to its parts, by the group its class belongs to."""

from __future__ import annotations

from collections.abc import Callable

from ingest.ifc.bars import bar_parts, line_parts
from ingest.ifc.by_shape import any_parts
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.ground import ground_parts
from ingest.ifc.loads import load_part
from ingest.ifc.plates import plate_parts
from ingest.ifc.walls import wall_parts
from ingest.parts import Part

Maker = Callable[[Element, SectionTable], tuple[Part, ...]]


def _lines(element: Element, _sections: SectionTable) -> tuple[Part, ...]:
    return line_parts(element)


def _load(element: Element, _sections: SectionTable) -> tuple[Part, ...]:
    return (load_part(element),)


def _setting(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """A storey as a level, the site's own terrain as a mesh."""
    if element.cls == "IfcBuildingStorey":
        x, y, z = element.origin
        said = ("level of its placement",)
        return (element.part("text", ((x, y, z),), said, text=element.name, z_top=z, z_bottom=z),)
    if element.cls == "IfcSite" and element.bodies:
        return ground_parts(element, sections)
    raise NoPart("no geometry")


MAKERS: dict[str, Maker] = {
    "wall": wall_parts,
    "bar": bar_parts,
    "plate": plate_parts,
    "any": any_parts,
    "line": _lines,
    "load": _load,
    "terrain": ground_parts,
    "ground": ground_parts,
    "setting": _setting,
}


def make_parts(element: Element, sections: SectionTable) -> tuple[Part, ...]:
    """Parts of an element.

    Raises:
        NoPart: If it gives none; the message is the reason.
    """
    return MAKERS[element.group](element, sections)
