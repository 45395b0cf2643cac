"""The child process that reads: what misbehaves in it is one clear error, and it is up at once."""

from __future__ import annotations

import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest
from guard_builder import good_ags, is_clear

from ingest import guard
from ingest.errors import InputError
from ingest.guard import read_guarded

HOSTILE = {
    "hang": "import time\ndef read(path):\n    time.sleep(60)\n",
    "crash": "import os, signal\ndef read(path):\n    os.kill(os.getpid(), signal.SIGSEGV)\n",
    "memory": "def read(path):\n    return [bytes(50_000_000) for _ in range(100)]\n",
    "exit": "import os\ndef read(path):\n    os._exit(3)\n",
    "chatter": "import os\nfrom ingest.ags import read_ags\n"
    "def read(path):\n    print('noise')\n    os.write(1, b'noise')\n    return read_ags(path)\n",
    "fault": "def read(path):\n    raise KeyError(str(path))\n",
}


@pytest.fixture
def hostile_reader(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Callable[[str], Path]:
    """A file whose reader does what the test wants, found by the child on its own path."""
    site = tmp_path / "site"
    site.mkdir()

    def make(what: str) -> Path:
        (site / "hostile_reader.py").write_text(HOSTILE[what])
        monkeypatch.setenv("PYTHONPATH", str(site))
        path = tmp_path / "site.ags"
        good_ags(path)
        return path

    return make


@pytest.mark.parametrize(
    ("what", "words"),
    [("hang", "not read within"), ("crash", "signal 11"), ("memory", "GB"), ("exit", "code 3"), ("fault", "KeyError")],
)
def test_a_reader_that_misbehaves_is_one_clear_error(
    what: str, words: str, hostile_reader: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    path = hostile_reader(what)
    monkeypatch.setattr(guard, "_command", hostile_command)
    start = time.monotonic()
    with pytest.raises(InputError) as caught:
        read_guarded(path, "ags", read_limit=3.0)
    assert words in caught.value.problem
    assert is_clear(caught.value, path.name)
    assert str(path.parent) not in str(caught.value)
    assert time.monotonic() - start < 8


def test_chatter_of_a_library_does_not_spoil_the_answer(
    hostile_reader: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    path = hostile_reader("chatter")
    monkeypatch.setattr(guard, "_command", hostile_command)
    assert len(read_guarded(path, "ags").boreholes) == 40


def hostile_command(kind: str, path: str, memory: int) -> list[str]:
    """The child with one reader replaced."""
    code = (
        "import sys; from ingest import guard; guard.READERS['ags'] = 'hostile_reader:read'; "
        f"sys.argv[1:] = [{kind!r}, {path!r}, '{memory}']; sys.exit(guard.main())"
    )
    return [sys.executable, "-P", "-c", code]


@pytest.mark.parametrize(
    ("kind", "heavy"),
    [
        ("ags", {"numpy", "scipy", "shapely", "ezdxf", "ifcopenshell"}),
        ("dxf", {"ifcopenshell", "scipy", "networkx"}),
        ("ifc", {"ezdxf", "networkx"}),
    ],
)
def test_a_child_loads_only_what_its_reader_needs(kind: str, heavy: set[str]) -> None:
    module = guard.READERS[kind].partition(":")[0]  # type: ignore[index]
    code = f"import sys, ingest.guard, ingest.model, {module}; print(*sys.modules)"
    home = str(Path(guard.__file__).parents[1])
    loaded = subprocess.run(
        [sys.executable, "-c", code], cwd=home, capture_output=True, text=True, check=True
    ).stdout.split()
    assert not heavy & set(loaded)
