"""The whole folder: complete, listed, hashed, repeatable, and refused rather than half written."""

from __future__ import annotations

import hashlib
import json
from dataclasses import replace
from pathlib import Path

import pytest
from builders_export import CORNERS, Job, bare_job, empty_job, first_pit_job, showcase_job

from export.section_json import read_proposal, read_section
from export.writer import write_all
from ingest.members import Point
from ingest.model import Frame
from sections.proposal import Proposal, ProposalFrame

EXPECTED = {
    "assumptions.csv",
    "criteria.csv",
    "implied.ifc",
    "issues.bcf",
    "loads.csv",
    "members.csv",
    "plan.dxf",
    "plan.svg",
    "proposal.json",
    "report.html",
    "requirements.ids",
    "sections/S1.dxf",
    "sections/S1.json",
    "sections/S2.dxf",
    "sections/S2.json",
    "tables.xlsx",
}


def files(folder: Path) -> dict[str, bytes]:
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def test_every_file_of_the_contract_is_written_and_listed(first_pit: Job, tmp_path: Path) -> None:
    written = write_all(first_pit.proposal, first_pit.definitions, first_pit.site, tmp_path / "out")
    assert written == sorted(EXPECTED)
    assert set(files(tmp_path / "out")) == EXPECTED
    assert set(read_proposal(tmp_path / "out" / "proposal.json").written) == EXPECTED


def test_sections_and_report_name_the_hash_of_the_proposal(first_pit: Job, tmp_path: Path) -> None:
    write_all(first_pit.proposal, first_pit.definitions, first_pit.site, tmp_path / "out")
    digest = hashlib.sha256((tmp_path / "out" / "proposal.json").read_bytes()).hexdigest()
    assert read_section(tmp_path / "out" / "sections" / "S2.json").proposal_sha256 == digest
    assert digest in (tmp_path / "out" / "report.html").read_text(encoding="utf-8")


@pytest.mark.parametrize("make", [first_pit_job, showcase_job, empty_job, bare_job])
def test_two_runs_give_the_same_bytes_in_every_file(make, tmp_path: Path) -> None:
    for name in ("a", "b"):
        job = make()
        write_all(job.proposal, job.definitions, job.site, tmp_path / name)
    assert files(tmp_path / "a") == files(tmp_path / "b")


def test_a_second_run_leaves_nothing_of_the_first(first_pit: Job, tmp_path: Path) -> None:
    write_all(first_pit.proposal, first_pit.definitions, first_pit.site, tmp_path / "out")
    write_all(first_pit.proposal, first_pit.definitions[:1], first_pit.site, tmp_path / "out")
    assert set(files(tmp_path / "out")) == EXPECTED - {"sections/S2.dxf", "sections/S2.json"}


def test_a_number_that_is_not_finite_stops_the_run_before_anything_is_swapped(first_pit: Job, tmp_path: Path) -> None:
    write_all(first_pit.proposal, first_pit.definitions, first_pit.site, tmp_path / "out")
    before = files(tmp_path / "out")
    broken = replace(first_pit.definitions[0], score=float("nan"))
    with pytest.raises(ValueError, match="score"):
        write_all(first_pit.proposal, (broken,), first_pit.site, tmp_path / "out")
    assert files(tmp_path / "out") == before


def test_a_section_with_nothing_in_it_says_so_instead_of_failing(tmp_path: Path) -> None:
    job = bare_job()
    write_all(job.proposal, job.definitions, job.site, tmp_path / "out")
    text = (tmp_path / "out" / "report.html").read_text(encoding="utf-8")
    assert "S1: loads: none." in text
    assert "no wall that could be drawn" in text
    assert "no stretch is represented" in text


def moved(job: Job, by: Point) -> Job:
    """The same pit far out on a national grid: world coordinates move, the local site does not."""

    def move(point: Point) -> Point:
        return point[0] + by[0], point[1] + by[1]

    pit = job.proposal.pits[0]
    there = replace(
        pit, perimeter=tuple(map(move, pit.perimeter)), symmetry=(), floors=(), receptors=(),
        corners=tuple(replace(corner, point=move(corner.point)) for corner in pit.corners),
        loads=tuple(replace(load, points=tuple(map(move, load.points))) for load in pit.loads),
    )  # fmt: skip
    definitions = tuple(replace(one, line=(move(one.line[0]), move(one.line[1]))) for one in job.definitions)
    sections = tuple(replace(one, line=(move(one.line[0]), move(one.line[1]))) for one in job.proposal.sections)
    frame = ProposalFrame(offset=(*by, 0.0), rotation_deg=0.0, crs=None)
    proposal: Proposal = replace(job.proposal, pits=(there,), sections=sections, frame=frame)
    return Job(site=replace(job.site, frame=Frame(offset=(*by, 0.0))), proposal=proposal, definitions=definitions)


def test_the_drawing_does_not_change_when_the_site_lies_on_a_national_grid(first_pit: Job, tmp_path: Path) -> None:
    near = moved(first_pit, (0.0, 0.0))
    far = moved(first_pit, (500000.0, 180000.0))
    pages = []
    for name, job in (("near", near), ("far", far)):
        write_all(job.proposal, job.definitions, job.site, tmp_path / name)
        text = (tmp_path / name / "plan.svg").read_text(encoding="utf-8")
        pages.append([line for line in text.splitlines() if "run" in line or "layer-supports" in line])
    assert pages[0]
    assert pages[0] == pages[1]
    tree = json.loads((tmp_path / "far" / "proposal.json").read_text())
    assert tree["pits"][0]["perimeter"][2] == [500000.0 + CORNERS[2][0], 180000.0 + CORNERS[2][1]]
