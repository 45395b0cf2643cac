"""Small drawings for the tests of the DXF reader."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import ezdxf

from ingest.dxf.reader import read_dxf
from ingest.parts import FileParts, Part

Draw = Callable[[Any, Any], None]


def save(folder: Path, draw: Draw, *, units: int | None = 6, version: str = "R2010", binary: bool = False) -> Path:
    """Write a drawing; `draw` gets the document and its modelspace, `units` is $INSUNITS."""
    ezdxf.options.write_fixed_meta_data_for_testing = True
    document = ezdxf.new(version)
    if units is None:
        document.header.reset_version = None
        del document.header.hdrvars["$INSUNITS"]
    elif version != "R12":
        document.header["$INSUNITS"] = units
    draw(document, document.modelspace())
    path = folder / "drawing.dxf"
    document.saveas(path, fmt="bin" if binary else "asc")
    return path


def read(folder: Path, draw: Draw, **how: Any) -> FileParts:
    """Write a drawing and read it back."""
    saved = {key: how.pop(key) for key in ("units", "version", "binary") if key in how}
    return read_dxf(save(folder, draw, **saved), **how)


def parts_of(folder: Path, draw: Draw, **how: Any) -> list[Part]:
    """The parts of a small drawing, its ledger checked."""
    found = read(folder, draw, **how)
    assert_account_closes(found)
    return list(found.parts)


def only_part(folder: Path, draw: Draw, **how: Any) -> Part:
    """The one part of a small drawing."""
    (part,) = parts_of(folder, draw, **how)
    return part


def assert_account_closes(found: FileParts) -> None:
    """Entities with parts, context and ignored are all the entities there are."""
    used = {part.source.item for part in found.parts}
    assert len(used) + sum(found.context.values()) + sum(found.ignored.values()) == found.entities


def flat(part: Part) -> list[tuple[float, float]]:
    """Plan points of a part, rounded to a hundredth of a millimetre."""
    return [(round(x, 5) + 0.0, round(y, 5) + 0.0) for x, y, _ in part.points]
