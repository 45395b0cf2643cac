"""The command line as a user meets it: help, examples, exit codes, errors, completion."""

from __future__ import annotations

import json
import shlex
import subprocess
import sys
from glob import glob
from pathlib import Path

import pytest

from export.cli import COMMANDS, EXAMPLES, build_parser, main

ROOT = Path(__file__).parents[2]


def run(*words: str, cwd: Path = ROOT) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "export.cli", *words], cwd=cwd, capture_output=True, text=True, timeout=120, check=False
    )


@pytest.mark.parametrize("command", COMMANDS)
def test_every_command_has_two_examples_and_the_exit_codes_in_its_help(command: str) -> None:
    text = run(command, "--help").stdout
    assert len(EXAMPLES[command]) == 2
    assert all(line in text for line in EXAMPLES[command])
    assert "exit codes:" in text
    assert "licensed engineer" in text


@pytest.fixture(scope="module")
def clone(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the samples, as the examples expect to be run in."""
    folder = tmp_path_factory.mktemp("clone")
    (folder / "samples").symlink_to(ROOT / "samples")
    return folder


def test_every_example_of_the_help_runs(
    clone: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(clone)
    for command in ("schema", "inspect", "propose", "judge", "members"):
        for line in EXAMPLES[command]:
            words = [name for word in shlex.split(line)[1:] for name in sorted(glob(word)) or [word]]  # as a shell does
            assert main(words) == 0, line
            out = capsys.readouterr()
            assert out.err == "", line
            if "--json" in line:
                json.loads(out.out)


@pytest.mark.parametrize(
    ("words", "meant"),
    [
        (("propos", "x.dxf", "--out", "y"), "propose"),
        (("propose", "x.dxf", "--brif", "b.toml", "--out", "y"), "--brief"),
        (("schema", "--jsn"), "--json"),
    ],
)
def test_a_misspelt_word_gets_the_nearest_one(words: tuple[str, ...], meant: str) -> None:
    answer = run(*words)
    assert answer.returncode == 2
    assert f"did you mean {meant}?" in answer.stderr
    assert answer.stderr.count("\n") <= 3


def test_a_missing_file_is_named_in_at_most_three_lines_and_ends_with_2(tmp_path: Path) -> None:
    answer = run("propose", "nowhere.dxf", "--out", str(tmp_path / "out"))
    assert answer.returncode == 2
    assert "nowhere.dxf" in answer.stderr
    assert answer.stderr.count("\n") <= 3
    assert "Traceback" not in answer.stderr
    assert not (tmp_path / "out").exists()


def test_the_same_error_as_data(tmp_path: Path) -> None:
    answer = run("propose", "nowhere.dxf", "--out", str(tmp_path / "out"), "--json")
    (error,) = json.loads(answer.stderr)["errors"]
    assert error["file"] == "nowhere.dxf"
    assert set(error) == {"file", "place", "problem", "remedy"}


def test_a_line_that_is_no_line_is_refused() -> None:
    drawing = "samples/first_pit/first_pit.dxf"
    assert run("judge", drawing, "--line", "1,2,3").returncode == 2
    assert run("judge", drawing, "--line", "1,2,nan,4").returncode == 2


def test_a_folder_with_other_peoples_files_is_refused_before_anything_is_read(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("mine")
    answer = run("propose", "samples/first_pit/first_pit.dxf", "--out", str(tmp_path))
    assert answer.returncode == 2
    assert "notes.txt" in answer.stderr
    assert (tmp_path / "notes.txt").read_text() == "mine"


def test_a_file_without_an_excavation_says_so_and_ends_with_1(tmp_path: Path) -> None:
    import ezdxf

    drawing = ezdxf.new(units=6)
    drawing.modelspace().add_text("nothing here")
    drawing.saveas(tmp_path / "empty.dxf")
    answer = run("propose", str(tmp_path / "empty.dxf"), "--out", str(tmp_path / "out"))
    assert answer.returncode == 1
    assert "No section could be written" in answer.stdout
    assert (tmp_path / "out" / "report.html").exists()


def test_a_fault_of_the_tool_is_one_line_and_a_log(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    from export import commands

    def broken(options: object) -> tuple[int, str]:
        raise RuntimeError("planted")

    monkeypatch.setattr(commands, "run_schema", broken)
    assert main(["schema"]) == 4
    err = capsys.readouterr().err
    assert err.count("\n") == 1
    log = Path(err.strip().rsplit(" ", 1)[1])
    assert "planted" in log.read_text()
    log.unlink()


def test_an_interrupt_ends_with_130(monkeypatch: pytest.MonkeyPatch) -> None:
    from export import commands

    def interrupted(options: object) -> tuple[int, str]:
        raise KeyboardInterrupt

    monkeypatch.setattr(commands, "run_schema", interrupted)
    assert main(["schema"]) == 130


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_completion_knows_every_command_and_option(shell: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["--completion", shell]) == 0
    text = capsys.readouterr().out
    words = ["read-limit", "skip-unreadable", *COMMANDS]
    assert all(word in text for word in words)


def test_bash_takes_the_completion_script() -> None:
    script = run("--completion", "bash").stdout
    check = script + '\nCOMP_WORDS=(cutworthy propose --sk); COMP_CWORD=2; _cutworthy; echo "${COMPREPLY[@]}"'
    answer = subprocess.run(["bash", "-c", check], capture_output=True, text=True, check=True)
    assert answer.stdout.strip() == "--skip-unreadable"


def test_nothing_heavy_is_imported_for_help() -> None:
    heavy = ("numpy", "shapely", "pydantic", "ezdxf")
    code = f"import sys, export.cli; export.cli.build_parser(); print([m for m in {heavy} if m in sys.modules])"
    answer = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert answer.stdout.strip() == "[]"


def test_a_room_overwritten_by_another_package_is_said_plainly(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    import sections

    monkeypatch.setattr(sections, "ROOM", "somebody else's")
    assert main(["schema"]) == 2
    assert "overwritten" in capsys.readouterr().err


def test_the_parser_is_built_from_the_table_of_commands() -> None:
    assert build_parser().parse_args(["schema"]).command == "schema"
