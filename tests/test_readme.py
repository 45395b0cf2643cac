"""What the README shows is what happens."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from export.cli import COMMANDS, main

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def block(mark: str) -> str:
    found = re.search(rf"<!-- {mark} -->\n```\w+\n(.*?)```", README, flags=re.DOTALL)
    assert found, mark
    return found.group(1)


def test_the_main_job_prints_what_the_readme_shows(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    command = block("main job").split("cutworthy ", 1)[1].split()
    (tmp_path / "samples").symlink_to(ROOT / "samples")
    monkeypatch.chdir(tmp_path)
    assert main(command) == 0
    assert capsys.readouterr().out == block("prints")


def test_the_python_example_runs(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "samples").symlink_to(ROOT / "samples")
    monkeypatch.chdir(tmp_path)
    code = re.search(r"```python\n(.*?)```", README, flags=re.DOTALL)
    assert code
    exec(compile(code.group(1), "README.md", "exec"), {})
    assert (tmp_path / "out" / "first_pit" / "report.html").exists()


def test_every_command_stands_in_the_readme_and_no_other() -> None:
    assert set(re.findall(r"`cutworthy (\w+)", README)) == set(COMMANDS)


def test_the_picture_is_the_plan_the_tool_draws(tmp_path: Path) -> None:
    pit = ROOT / "samples" / "first_pit"
    out = tmp_path / "out"
    assert (
        main(["propose", str(pit / "first_pit.dxf"), "--brief", str(pit / "brief.toml"), "--out", str(out), "-q"]) == 0
    )
    assert (pit / "plan.svg").read_bytes() == (out / "plan.svg").read_bytes()
