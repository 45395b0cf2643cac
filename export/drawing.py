"""Drawings for the office's own drawing program: the plan overlay and each section as DXF.

Layer names follow the fields of ISO 13567: agent (2 characters, by which the reader knows its own drawings again),
element (6), presentation (2: `E-` element, `T-` text, `D-` dimension, `H-` hatch). The plan lies on the drawing it was
made from, in its coordinates and unit, else in world metres; a section, in metres, has x along the cut and its level as
y.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from export.drawing_place import DrawingPlace
from export.drawing_plan import draw_plan
from export.drawing_section import draw_section
from export.drawing_style import new_drawing
from ingest.model import Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal


def write_drawings(
    proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site | None, folder: Path
) -> list[str]:
    """Write `plan.dxf` and `sections/<id>.dxf`.

    Args:
        proposal: The proposal, world coordinates.
        definitions: Its sections.
        site: For the supports one by one and the drawing to lie on; None leaves them out.
        folder: Where to write.

    Returns:
        Names of the files written, relative to the folder.
    """
    (folder / "sections").mkdir(exist_ok=True)
    names = ["plan.dxf"]
    with _fixed_meta_data():
        plan, place = new_drawing(), DrawingPlace.of(site)
        draw_plan(plan, proposal, site, place.words)
        place.lay(plan)
        plan.saveas(folder / "plan.dxf")
        for definition in definitions:
            sheet: Any = new_drawing()
            draw_section(sheet, definition)
            names.append(f"sections/{definition.id}.dxf")
            sheet.saveas(folder / names[-1])
    return names


@contextmanager
def _fixed_meta_data() -> Iterator[None]:
    """Write no clock and no fresh GUID, so that equal content gives equal bytes."""
    import ezdxf

    before = ezdxf.options.write_fixed_meta_data_for_testing
    ezdxf.options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        ezdxf.options.write_fixed_meta_data_for_testing = before
