"""The rules of the house: who may import whom, how long things may grow, what stands at the top."""

from __future__ import annotations

import ast
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
ROOMS = ("ingest", "sections", "export")
FILES = sorted(path for room in ROOMS for path in (ROOT / room).rglob("*.py"))
ABOVE = {"ingest": ("sections", "export"), "sections": ("export",), "export": ()}
NARROW_DOOR = ("ingest.model", "ingest.members", "ingest.trail", "ingest.errors", "ingest.record")
ONLY_IN = {"ezdxf": ("ingest/dxf", "export/drawing"), "ifcopenshell": ("ingest/ifc", "export/implied_ifc")}
NO_FILES = ("json", "csv", "pathlib", "ezdxf", "ifcopenshell", "os", "io")
TOP = {"README.md", "DEVELOPERS.md", "pyproject.toml", *ROOMS, "tests", "samples"}
LONGEST_FILE, LONGEST_FUNCTION = 300, 50


def imports(path: Path) -> list[tuple[str, int]]:
    found: list[tuple[str, int]] = []
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            found += [(alias.name, node.lineno) for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.module:
            found.append((node.module, node.lineno))
    return found


def faults_of_imports(path: Path) -> list[str]:
    here = path.relative_to(ROOT).as_posix()
    room = here.split("/")[0]
    faults = []
    for name, line in imports(path):
        top = name.split(".")[0]
        if top in ABOVE[room]:
            faults.append(f"{here}:{line} {room} may not import {name}")
        if room == "sections" and top == "ingest" and name not in NARROW_DOOR:
            faults.append(f"{here}:{line} sections sees only {NARROW_DOOR}, not {name}")
        if room == "sections" and top in NO_FILES:
            faults.append(f"{here}:{line} sections touches no files, so not {name}")
        if top in ONLY_IN and not here.startswith(ONLY_IN[top]):
            faults.append(f"{here}:{line} {top} belongs in {ONLY_IN[top]}")
        if top in ("pickle", "multiprocessing", "tests"):
            faults.append(f"{here}:{line} {top} is not used here")
    return faults


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.relative_to(ROOT).as_posix())
def test_a_file_keeps_the_rules_of_the_house(path: Path) -> None:
    text = path.read_text()
    tree = ast.parse(text)
    faults = faults_of_imports(path)
    if text.count("\n") > LONGEST_FILE:
        faults.append(f"{path.name}: {text.count(chr(10))} lines, at most {LONGEST_FILE}")
    inner = {id(n) for f in ast.walk(tree) if isinstance(f, ast.FunctionDef) for n in ast.walk(f) if n is not f}
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef) and node.end_lineno and node.end_lineno - node.lineno >= LONGEST_FUNCTION:
            faults.append(f"{path.name}:{node.lineno} {node.name} is longer than {LONGEST_FUNCTION} lines")
        public = (
            isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_") and id(node) not in inner
        )
        if public and not ast.get_docstring(node):  # type: ignore[arg-type]
            faults.append(f"{path.name}:{node.lineno} {node.name} has no docstring")  # type: ignore[attr-defined]
    assert not faults, "\n".join(faults)


def test_planted_faults_are_seen(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("sys.dont_write_bytecode", True)
    for room, line in (("ingest", "import sections.model"), ("sections", "import json"), ("sections", "import ezdxf")):
        bad = ROOT / room / "planted_fault.py"
        try:
            bad.write_text(line + "\n")
            assert faults_of_imports(bad), line
        finally:
            bad.unlink()


def test_rooms_import_without_cycles() -> None:
    modules = {path.relative_to(ROOT).with_suffix("").as_posix().replace("/", "."): path for path in FILES}
    graph = {name: {n for n, _ in top_level_imports(path) if n in modules} for name, path in modules.items()}
    done: set[str] = set()

    def walk(name: str, trail: tuple[str, ...]) -> None:
        assert name not in trail, " -> ".join((*trail, name))
        if name not in done:
            for other in graph[name]:
                walk(other, (*trail, name))
            done.add(name)

    for name in graph:
        walk(name, ())


def top_level_imports(path: Path) -> list[tuple[str, int]]:
    nodes = [node for node in ast.parse(path.read_text()).body if isinstance(node, ast.ImportFrom)]
    return [(node.module, node.lineno) for node in nodes if node.module]


def test_nothing_else_stands_at_the_top() -> None:
    tracked = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout.split(
        "\n"
    )
    names = {line.split("/")[0] for line in tracked if line}
    assert {name for name in names if not name.startswith(".")} <= TOP
