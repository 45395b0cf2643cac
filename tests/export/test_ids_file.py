"""The IDS file: valid by the schema of IDS 1.0, fitted to the job, and checked against the sample's own model."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest
from builders_bim import model_job, ring_job
from builders_export import Job, empty_job, first_pit_job
from ifctester import ids

from export.ids_file import write_ids
from sections import model as m

MODEL = Path(__file__).parents[2] / "samples" / "first_pit_ifc" / "first_pit.ifc"


def opened(job: Job, folder: Path) -> Any:
    assert write_ids(job.proposal, job.site, folder) == "requirements.ids"
    return ids.open(str(folder / "requirements.ids"), validate=True)


def outcome(job: Job, folder: Path, model: Any) -> dict[str, dict[str, bool]]:
    """By specification: met or not, by what is asked."""
    asked = opened(job, folder)
    asked.validate(model)
    return {one.name: {_what(facet): facet.status for facet in one.requirements} for one in asked.specifications}


def _what(facet: Any) -> str:
    return str(getattr(facet, "baseName", getattr(facet, "name", "Material")))


def with_anchors() -> Job:
    job = first_pit_job()
    pit = job.proposal.pits[0]
    anchors = replace(pit.members[0], id="P1-anchor-1", role="anchor")
    slab = replace(pit.members[0], id="P1-slab-1", role="slab")
    panels = replace(pit.runs[0], wall=m.Wall(kind="diaphragm", thickness=0.8))
    there = replace(pit, members=(anchors, slab), runs=(panels,))
    return Job(site=job.site, proposal=replace(job.proposal, pits=(there,)), definitions=())


@pytest.mark.parametrize("make", [first_pit_job, model_job, ring_job, empty_job, with_anchors])
def test_the_file_is_valid_by_the_schema_of_ids_1_0(make: Any, tmp_path: Path) -> None:
    asked = opened(make(), tmp_path)
    assert asked.specifications
    assert all(one.minOccurs == 1 for one in asked.specifications)


def test_what_is_asked_follows_what_was_found(tmp_path: Path) -> None:
    def names(job: Job) -> list[str]:
        return [one.name for one in opened(job, tmp_path).specifications]

    assert names(first_pit_job()) == ["Retaining wall of piles", "Struts and rakers", "Walers"]
    assert names(with_anchors()) == ["Retaining wall", "Ground anchors", "Slabs"]
    assert names(empty_job()) == ["Retaining wall"]


def test_the_samples_model_lacks_materials_and_sizes_as_data(tmp_path: Path) -> None:
    # samples/make_first_pit_ifc.py writes names, predefined types and shapes, no materials and no quantity sets.
    assert outcome(first_pit_job(), tmp_path, ifcopenshell.open(str(MODEL))) == {
        "Retaining wall of piles": {
            "Name": True, "PredefinedType": True, "Length": False, "CrossSectionArea": False, "Material": False,
        },
        "Struts and rakers": {"Name": True, "Length": False, "CrossSectionArea": False, "Material": False},
        "Walers": {"Name": True, "CrossSectionArea": False, "Material": False},
    }  # fmt: skip


def complete(model: Any) -> None:
    """Give the sample's elements a material and the standard's quantity sets."""
    for kind, sizes in (("Pile", 2), ("Member", 2), ("Beam", 1)):
        elements = model.by_type(f"Ifc{kind}")
        material = model.create_entity("IfcMaterial", "C30/37")
        relate(model, "IfcRelAssociatesMaterial", elements, material)
        rows = [model.create_entity("IfcQuantityArea", "CrossSectionArea", None, None, 0.4418, None)]
        rows += [model.create_entity("IfcQuantityLength", "Length", None, None, 12.0, None)] if sizes == 2 else []
        name = f"Qto_{kind}BaseQuantities"
        quantities = model.create_entity("IfcElementQuantity", ifcopenshell.guid.new(), None, name, None, None, rows)
        relate(model, "IfcRelDefinesByProperties", elements, quantities)


def relate(model: Any, kind: str, elements: Any, what: Any) -> None:
    model.create_entity(kind, ifcopenshell.guid.new(), None, None, None, elements, what)


def test_the_samples_model_passes_once_it_carries_them(tmp_path: Path) -> None:
    model = ifcopenshell.open(str(MODEL))
    complete(model)
    met = outcome(first_pit_job(), tmp_path, model)
    assert all(all(facets.values()) for facets in met.values())
    model.by_type("IfcPile")[7].Name = None
    assert not outcome(first_pit_job(), tmp_path, model)["Retaining wall of piles"]["Name"]


def test_the_same_job_gives_the_same_bytes_and_needs_no_library_of_ids(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    opened(first_pit_job(), tmp_path)
    before = (tmp_path / "requirements.ids").read_bytes()
    monkeypatch.setitem(sys.modules, "ifctester", None)
    write_ids(first_pit_job().proposal, first_pit_job().site, tmp_path)
    assert (tmp_path / "requirements.ids").read_bytes() == before
    assert b"2026-01-15" in before
