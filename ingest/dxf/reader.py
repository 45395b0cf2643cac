"""A DXF drawing -> parts in metres, with every entity accounted for."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from pathlib import Path

import ezdxf

from ingest.dxf.account import list_raw, open_account
from ingest.dxf.consistency import find_contradictions
from ingest.dxf.damage import SEND_AGAIN, check_bytes, read_bytes
from ingest.dxf.draw import Drawer
from ingest.dxf.drawing_unit import Declared, find_unit
from ingest.dxf.georeference import describe_georeference
from ingest.dxf.layers import LayerTable
from ingest.dxf.leaders import tie_leaders
from ingest.dxf.loading import let_go, load_document, quiet
from ingest.dxf.measures import take_measures
from ingest.dxf.report import Report, report_losses
from ingest.dxf.tagscan import Tags
from ingest.errors import InputError
from ingest.parts import FileParts

RELEASES = {
    "AC1002": "R2.5", "AC1003": "R2.6", "AC1004": "R9", "AC1006": "R10", "AC1009": "R12", "AC1012": "R13",
    "AC1014": "R14", "AC1015": "R2000", "AC1018": "R2004", "AC1021": "R2007", "AC1024": "R2010", "AC1027": "R2013",
    "AC1032": "R2018",
}  # fmt: skip


DAMAGED = (KeyError, AttributeError, IndexError, TypeError, ezdxf.DXFError)
"""What the library raises late on a drawing that it has opened."""


def read_dxf(
    path: Path,
    *,
    length_unit: str | None = None,
    ignore_layers: tuple[str, ...] = (),
    progress: Callable[[int], None] | None = None,
) -> FileParts:
    """Read a DXF drawing, text or binary, R12 to R2018.

    Args:
        path: The file.
        length_unit: Unit of the drawing as the brief gives it; it overrides the drawing's own.
        ignore_layers: Layers the brief leaves out; capitals do not matter.
        progress: Called with the number of entities done.

    Returns:
        Parts in metres in the file's own frame. The entities with parts, `context` and `ignored` add up to `entities`.

    Raises:
        InputError: When the file cannot be read, is cut short or damaged, or holds more than memory can.
    """
    with quiet():
        try:
            return _read(path, length_unit, ignore_layers, progress)
        except DAMAGED as error:
            # The library loads some damaged drawings and trips over them later, a missing modelspace for one.
            problem = (
                f"is damaged: it was opened, but what it holds does not fit together ({type(error).__name__}: {error})"
            )
            raise InputError(path.name, "", problem, SEND_AGAIN) from error


def _read(
    path: Path, length_unit: str | None, ignore_layers: tuple[str, ...], progress: Callable[[int], None] | None
) -> FileParts:
    data = read_bytes(path)
    tags = check_bytes(data, path.name)
    raw, header = list_raw(tags), _Header(tags)
    contradictions = find_contradictions(tags)
    sha256 = hashlib.sha256(data).hexdigest()
    del data, tags
    loaded = load_document(path)
    account, repeated = open_account(loaded.document, raw), raw.repeated
    del raw
    measures = take_measures(loaded.document, account.space)
    unit = find_unit(path.name, header.declared, length_unit, measures)
    layers = LayerTable(loaded.document, ignore_layers)
    drawer = Drawer(path.name, unit.metres, loaded.document, layers)
    # from here on only the account holds the figures, so that memory shrinks while they are drawn
    loaded.document.modelspace().entity_space.clear()
    drawn = drawer.draw(account, progress)
    drawn.aside["ignored"].update(account.aside)
    place = describe_georeference(loaded.document)
    let_go(loaded.document)
    losses = report_losses(account, loaded, drawn, drawer.book, contradictions)
    report = Report(path.name)
    report.see_loading(account, repeated, loaded, contradictions)
    report.see_unread(drawn, drawer.book)
    report.see_layers(drawn, layers)
    if place:
        report.see("georeference", "note", place)
    return FileParts(
        file=path.name,
        sha256=sha256,
        kind="dxf",
        schema_or_version=header.version,
        length_unit=unit.name,
        unit_scale=unit.metres,
        entities=account.entities,
        parts=tie_leaders(tuple(drawn.parts), drawn.leaders, unit.metres),
        context=dict(sorted(drawn.aside["context"].items())),
        ignored=dict(sorted(drawn.aside["ignored"].items())),
        losses=losses,
        findings=(*unit.findings, *report.found),
        questions=unit.questions,
        assumptions=unit.assumptions,
    )


class _Header:
    """The header variables that matter, from the bytes: the library fills in defaults the file does not have."""

    def __init__(self, tags: Tags) -> None:
        self.declared = Declared(
            insunits=tags.header("$INSUNITS"),
            lunits=tags.header("$LUNITS"),
            measurement=tags.header("$MEASUREMENT"),
        )
        code = tags.header("$ACADVER") or ""
        self.version = f"{RELEASES.get(code, 'unknown release')} ({code})" if code else "no version given"
