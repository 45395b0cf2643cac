"""The output folder: swapped in whole, never over somebody else's files."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from export.folder import check_folder, fresh_folder
from ingest.errors import InputError


def write_run(folder: Path, **files: str) -> None:
    with fresh_folder(folder) as aside:
        for name, words in files.items():
            (aside / name).write_text(words)
        names = [*files, "proposal.json"]
        (aside / "proposal.json").write_text(json.dumps({"schema": "cutworthy/proposal/1", "written": names}))


def names(folder: Path) -> set[str]:
    return {path.name for path in folder.iterdir()}


def test_a_new_folder_is_made_with_its_parents(tmp_path: Path) -> None:
    write_run(tmp_path / "a" / "b", report="one")
    assert names(tmp_path / "a" / "b") == {"report", "proposal.json"}
    assert names(tmp_path / "a") == {"b"}


def test_files_of_an_earlier_run_never_remain(tmp_path: Path) -> None:
    write_run(tmp_path / "out", S1="old", S2="old")
    write_run(tmp_path / "out", S1="new")
    assert names(tmp_path / "out") == {"S1", "proposal.json"}
    assert (tmp_path / "out" / "S1").read_text() == "new"
    assert names(tmp_path) == {"out"}


def test_a_folder_with_a_file_of_the_user_is_refused_and_kept(tmp_path: Path) -> None:
    write_run(tmp_path / "out", S1="old")
    (tmp_path / "out" / "sums.xlsx").write_text("mine")
    with pytest.raises(InputError, match=r"sums\.xlsx"):
        write_run(tmp_path / "out", S1="new")
    assert (tmp_path / "out" / "S1").read_text() == "old"
    assert (tmp_path / "out" / "sums.xlsx").read_text() == "mine"
    assert names(tmp_path) == {"out"}


def test_a_folder_without_a_proposal_of_ours_is_refused(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "proposal.json").write_text('{"schema": "other", "written": ["proposal.json"]}')
    with pytest.raises(InputError, match=r"proposal\.json"):
        check_folder(tmp_path / "out")


def test_an_empty_folder_is_taken(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    write_run(tmp_path / "out", S1="new")
    assert names(tmp_path / "out") == {"S1", "proposal.json"}


def test_a_file_added_while_writing_stops_the_swap(tmp_path: Path) -> None:
    write_run(tmp_path / "out", S1="old")

    def write_while_a_file_is_added() -> None:
        with fresh_folder(tmp_path / "out") as aside:
            (aside / "S1").write_text("new")
            (tmp_path / "out" / "late.txt").write_text("mine")

    with pytest.raises(InputError, match=r"late\.txt"):
        write_while_a_file_is_added()
    assert (tmp_path / "out" / "S1").read_text() == "old"
    assert names(tmp_path) == {"out"}


@pytest.mark.parametrize("fault", [KeyboardInterrupt, ValueError])
def test_an_interrupt_leaves_the_earlier_run_and_nothing_partial(tmp_path: Path, fault: type[BaseException]) -> None:
    write_run(tmp_path / "out", S1="old")

    def write_until_stopped() -> None:
        with fresh_folder(tmp_path / "out") as aside:
            (aside / "S1").write_text("half")
            raise fault

    with pytest.raises(fault):
        write_until_stopped()
    assert names(tmp_path) == {"out"}
    assert (tmp_path / "out" / "S1").read_text() == "old"


def test_a_file_in_the_place_of_the_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("a file")
    with pytest.raises(InputError, match="is a file"):
        check_folder(tmp_path / "out")


def test_the_folder_one_stands_in_is_refused(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "out" / "below").mkdir(parents=True)
    monkeypatch.chdir(tmp_path / "out" / "below")
    for place in (Path(), Path("..")):
        with pytest.raises(InputError, match="stand in"):
            check_folder(place)


def test_a_symbolic_link_inside_is_a_file_of_the_user(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "elsewhere").mkdir()
    (tmp_path / "out" / "link").symlink_to(tmp_path / "elsewhere")
    with pytest.raises(InputError, match="link"):
        check_folder(tmp_path / "out")
