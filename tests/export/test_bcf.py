"""BCF topics: what is asked, where it looks from, what it selects; read back by the library's own reader."""

from __future__ import annotations

import zipfile
from dataclasses import replace
from math import cos, radians, sin
from pathlib import Path
from typing import Any

import pytest
from bcf.v3.bcfxml import BcfXml
from builders_bim import MODEL, PILE_ID, STRUT_ID, model_job
from builders_export import HOSTILE, Job, bare_job, empty_job, first_pit_job, showcase_job

from export.bcf import write_bcf
from ingest.model import ModelPlace
from ingest.trail import Question


def topics(job: Job, folder: Path) -> list[Any]:
    assert write_bcf(job.proposal, job.definitions, job.site, folder) == "issues.bcf"
    with BcfXml.load(folder / "issues.bcf") as book:  # type: ignore[union-attr]
        assert book.version.version_id == "3.0"
        found = sorted(book.topics.values(), key=lambda one: one.topic.index)
        for one in found:
            one.viewpoints  # noqa: B018  read before the archive is closed
        return found


def views(topic: Any) -> dict[str, Any]:
    return {name: one.visualization_info for name, one in topic.viewpoints.items()}


def test_questions_come_first_then_stops_then_checks_on_data(tmp_path: Path) -> None:
    asked = [(one.topic.topic_type, one.topic.priority, one.topic.title) for one in topics(model_job(), tmp_path)]
    assert asked == [
        ("Question", "question", "first_pit.ifc, STRUTS: strut or anchor?"),
        ("Finding", "stop", "No dig level is given"),
        ("Finding", "check", "No toe level"),
    ]


def test_an_open_assumption_is_asked_and_a_confirmed_one_is_not(tmp_path: Path) -> None:
    job = first_pit_job()
    (tmp_path / "b").mkdir()
    titles = [one.topic.title for one in topics(job, tmp_path) if one.topic.topic_type == "Assumption"]
    assert len(titles) == sum(one.status == "open" for one in job.proposal.assumptions) > 0
    confirmed = tuple(replace(one, status="confirmed") for one in job.proposal.assumptions)
    done = Job(
        site=job.site,
        proposal=replace(job.proposal, assumptions=confirmed),
        definitions=tuple(replace(one, assumptions=()) for one in job.definitions),
    )
    assert [one for one in topics(done, tmp_path / "b") if one.topic.topic_type == "Assumption"] == []


def test_elements_of_the_model_are_selected_and_lines_of_the_brief_are_not(tmp_path: Path) -> None:
    question, _, check = topics(model_job(), tmp_path)
    for topic, guid in ((question, STRUT_ID), (check, PILE_ID)):
        for view in views(topic).values():
            assert [one.ifc_guid for one in view.components.selection.component] == [guid]
    assert [one.filename for one in check.header.files.file] == [MODEL]


def test_the_view_looks_square_to_the_section_and_is_cut_open_at_it(tmp_path: Path) -> None:
    # S1 runs north from (115, 182) to (115, 238), levels 0 to -24: x along the cut to the right means looking west.
    # Camera 50 m east of the middle (115, 210, -12). A clipping plane's direction points into the half not shown
    # (BCF-XML 3.0, ClippingPlanes), so east. Height 1.1 x max(24, 56 / (16/9) = 31.5) = 34.65 m.
    view = views(topics(model_job(), tmp_path)[0])["viewpoint_S1.bcfv"]
    camera, (plane,) = view.orthogonal_camera, view.clipping_planes.clipping_plane
    assert view.perspective_camera is None
    assert xyz(camera.camera_view_point) == pytest.approx((165.0, 210.0, -12.0))
    assert xyz(camera.camera_direction) == pytest.approx((-1.0, 0.0, 0.0))
    assert xyz(camera.camera_up_vector) == (0.0, 0.0, 1.0)
    assert camera.view_to_world_scale == pytest.approx(34.65)
    assert xyz(plane.location) == pytest.approx((115.0, 210.0, -12.0))
    assert xyz(plane.direction) == pytest.approx((1.0, 0.0, 0.0))


def test_views_stand_in_the_coordinates_of_the_model_not_of_the_map(tmp_path: Path) -> None:
    # World = (E, N, H) + k Rz(12 deg) model (IFC4, IfcMapConversion); worked backwards by hand for the plane's point.
    place = ModelPlace(origin=(438000.0, 286000.0, 5.0), rotation_deg=12.0, scale=0.9996, given=True)
    view = views(topics(model_job(place, "grid"), tmp_path)[0])["viewpoint_S1.bcfv"]
    (plane,) = view.clipping_planes.clipping_plane
    c, s = cos(radians(12.0)), sin(radians(12.0))
    x, y, z = xyz(plane.location)
    world = (
        438000.0 + 0.9996 * (c * x - s * y), 286000.0 + 0.9996 * (s * x + c * y), 5.0 + 0.9996 * z,
    )  # fmt: skip
    assert world == pytest.approx((115.0, 210.0, -12.0), abs=1e-3)
    assert xyz(plane.direction) == pytest.approx((c, -s, 0.0))


def test_a_topic_that_one_section_lists_looks_at_that_section_only(tmp_path: Path) -> None:
    job = model_job()
    first = replace(job.definitions[0], findings=job.proposal.findings[:1])
    there = replace(job, definitions=(first, job.definitions[1]))
    question, _, check = topics(there, tmp_path)
    assert list(views(check)) == ["viewpoint_S1.bcfv"]
    assert sorted(views(question)) == ["viewpoint_S1.bcfv", "viewpoint_S2.bcfv"]


def test_a_question_about_one_element_selects_it(tmp_path: Path) -> None:
    job = model_job()
    line = f'[[roles]]\nmatch = {{ id = "{PILE_ID}" }}\nrole = "wall"'
    question = Question(id="Q2", about=f"{MODEL}, {PILE_ID}: wall or bearing_pile?", readings=(), brief_line=line)
    asked = Job(
        site=job.site, proposal=replace(job.proposal, questions=(question,)), definitions=job.definitions
    )  # fmt: skip
    view = views(topics(asked, tmp_path)[0])["viewpoint_S2.bcfv"]
    assert [one.ifc_guid for one in view.components.selection.component] == [PILE_ID]


@pytest.mark.parametrize("make", [model_job, first_pit_job, empty_job, bare_job])
def test_the_same_job_gives_the_same_archive_with_sorted_members_of_one_time(make: Any, tmp_path: Path) -> None:
    for name in ("a", "b"):
        (tmp_path / name).mkdir()
        job = make()
        write_bcf(job.proposal, job.definitions, job.site, tmp_path / name)
    data = (tmp_path / "a" / "issues.bcf").read_bytes()
    assert data == (tmp_path / "b" / "issues.bcf").read_bytes()
    with zipfile.ZipFile(tmp_path / "a" / "issues.bcf") as archive:
        assert archive.namelist() == sorted(archive.namelist())
        assert {one.date_time for one in archive.infolist()} == {(1980, 1, 1, 0, 0, 0)}


def test_the_date_is_the_briefs_then_that_of_the_build_then_the_first_of_1980(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    job = model_job()

    def day(date: str | None) -> str:
        there = Job(site=replace(job.site, date=date), proposal=job.proposal, definitions=job.definitions)
        return str(topics(there, tmp_path)[0].topic.creation_date)

    monkeypatch.delenv("SOURCE_DATE_EPOCH", raising=False)
    assert day("2026-03-02") == "2026-03-02T00:00:00Z"
    assert day(None) == "1980-01-01T00:00:00Z"
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1700000000")  # 2023-11-14 22:13:20 UTC
    assert day("next week") == "2023-11-14T00:00:00Z"


def test_names_from_files_stay_text(tmp_path: Path) -> None:
    job = showcase_job()
    said = [one.topic.title for one in topics(job, tmp_path)]
    (title,) = [words for words in said if "onload" in words]
    assert "<script>" in title
    assert "\u202e" not in title
    assert "\u202e" in HOSTILE


def xyz(point: Any) -> tuple[float, float, float]:
    return point.x, point.y, point.z
