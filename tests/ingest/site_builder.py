"""Small sites for the tests of roles, records and registration: a drawn pit, and files made of parts."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import ezdxf

from ingest.brief import Brief, read_brief
from ingest.members import Point3
from ingest.model import Site
from ingest.parts import FileParts, Part
from ingest.site import read_site, site_of
from ingest.trail import Source

BRIEF = """
[site]
name = "Pit"
ground_level = 0.0
[levels]
formation = -6.0
top = 0.0
[[materials]]
id = "concrete"
kind = "concrete"
concrete_class = "C30/37"
[[materials]]
id = "steel"
kind = "steel"
E = 210e6
unit_weight = 78.5
[[walls]]
match = { layer = "WALL-PILES-CONTIGUOUS" }
material = "concrete"
continuity = "jointed"
toe = -12.0
[[supports]]
match = { layer = "STRUTS" }
level = -1.5
section = "CHS 508x16"
material = "steel"
preload = -200.0
waler = true
[[loads]]
match = { layer = "FOOTING-NEIGHBOUR" }
kind = "footing"
value = 150.0
level = -1.0
[[strata]]
name = "clay"
top_level = -3.0
E = 40e3
"""


def draw_pit(path: Path, shift: tuple[float, float] = (0.0, 0.0)) -> None:
    """30 x 20 m, piles D 0.75 at 1.00, six struts across and four along, waler, footing; metres."""
    dx, dy = shift
    drawing = ezdxf.new("R2010", units=6)
    space = drawing.modelspace()
    ring = [(100.0 + n, 200.0) for n in range(30)] + [(130.0, 200.0 + n) for n in range(20)]
    ring += [(230.0 - x, 420.0 - y) for x, y in ring]
    for x, y in ring:
        space.add_circle((x + dx, y + dy), 0.375, dxfattribs={"layer": "WALL-PILES-CONTIGUOUS"})
    lines = [((102.5 + 5 * n, 200.0), (102.5 + 5 * n, 220.0)) for n in range(6)]
    lines += [((100.0, 202.5 + 5 * n), (130.0, 202.5 + 5 * n)) for n in range(4)]
    for (x1, y1), (x2, y2) in lines:
        space.add_line((x1 + dx, y1 + dy), (x2 + dx, y2 + dy), dxfattribs={"layer": "STRUTS"})
    for layer, points in (
        ("WALER", [(100.5, 200.5), (129.5, 200.5), (129.5, 219.5), (100.5, 219.5)]),
        ("FOOTING-NEIGHBOUR", [(113.5, 222.0), (116.5, 222.0), (116.5, 224.0), (113.5, 224.0)]),
    ):
        space.add_lwpolyline([(x + dx, y + dy) for x, y in points], close=True, dxfattribs={"layer": layer})
    drawing.saveas(path)


def read_pit(folder: Path, brief: str = BRIEF, shift: tuple[float, float] = (0.0, 0.0)) -> Site:
    draw_pit(folder / "pit.dxf", shift)
    (folder / "brief.toml").write_text(brief)
    return read_site([folder / "pit.dxf"], folder / "brief.toml")


def part(form: str, *points: Point3, item: str = "1", file: str = "a.dxf", **more: Any) -> Part:
    return Part(source=Source(file=file, item=item), form=form, points=points, **more)  # type: ignore[arg-type]


def parts_of(*parts: Part, file: str = "a.dxf", **more: Any) -> FileParts:
    count = len({part.source.item for part in parts}) + sum(more.get("context", {}).values())
    return FileParts(
        file=file, sha256="0" * 64, kind=file.rpartition(".")[2], schema_or_version="x", length_unit="m",
        unit_scale=1.0, entities=count + sum(more.get("ignored", {}).values()), parts=parts, **more,
    )  # fmt: skip


def brief_of(folder: Path, text: str) -> Brief:
    path = folder / "brief.toml"
    path.write_text(text)
    return read_brief(path)


WALL = part("path", (0.0, 0.0, 0.0), (20.0, 0.0, 0.0), layer="SHEET PILES", item="w")


def drawn_as(*parts: Part) -> list[tuple[str, bool, float | None]]:
    walls = site_of([parts_of(*parts)], Brief()).walls
    return [(wall.drawn, wall.closed, wall.thickness) for wall in walls]


def wall_line(*points: tuple[float, float], item: str, layer: str = "DIAPHRAGM WALL", closed: bool = False) -> Part:
    return part("path", *((x, y, 0.0) for x, y in points), item=item, layer=layer, closed=closed)
