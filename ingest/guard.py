"""Readers run in a child process, so that a hang, a crash or a flood of memory is one clear error.

Run as `python -m ingest.guard KIND PATH BYTES` it is that child: options as JSON on standard input, the answer as JSON
on standard output.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Mapping
from importlib import import_module
from inspect import signature
from pathlib import Path
from typing import TYPE_CHECKING, Any

from ingest.errors import InputError
from ingest.receive import Kind, check_readable, kind_of, shown

if TYPE_CHECKING:
    from ingest.parts import FileParts

__all__ = ["READERS", "kind_of", "read_guarded", "read_here"]

READERS: dict[Kind, str] = {
    "ifc": "ingest.ifc.reader:read_ifc",
    "dxf": "ingest.dxf.reader:read_dxf",
    "ags": "ingest.ags:read_ags",
}
"""Reader of each kind as module:function, called with the path and the options it knows."""

SECONDS, SECONDS_PER_MB = 60.0, 3.0
BYTES, BYTES_PER_BYTE = 1024**3, 20
OUT_OF_MEMORY = 77
"""Exit code of a child that ran into its memory limit."""


def read_guarded(
    path: Path, kind: Kind, options: Mapping[str, Any] | None = None, *, read_limit: float | None = None
) -> FileParts:
    """Read one file in a child process under limits of time and memory.

    Args:
        path: The file.
        kind: Its kind.
        options: Arguments of the reader, JSON values.
        read_limit: Seconds; None for 60 s and 3 s a MB. Memory: 1 GB and 20 times the file.

    Returns:
        What the reader took.

    Raises:
        InputError: For whatever goes wrong, one error.
    """
    size = check_readable(path)
    seconds = read_limit if read_limit is not None else SECONDS + SECONDS_PER_MB * size / 1e6
    memory = BYTES + BYTES_PER_BYTE * size
    child = subprocess.Popen(
        _command(kind, os.path.abspath(path), memory),
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        cwd=os.path.abspath(os.sep),
        env=_environment(),
    )
    try:
        answer, _ = child.communicate(json.dumps(dict(options or {})).encode(), timeout=seconds)
    except subprocess.TimeoutExpired:
        name = shown(path.name)
        raise InputError(
            name,
            "",
            f"was not read within {seconds:.0f} s",
            "give it longer with --read-limit, or send less of the model",
        ) from None
    finally:
        if child.poll() is None:
            child.kill()
            child.communicate()
    return _parts(answer, child.returncode, path, memory)


def read_here(path: Path, kind: Kind, options: Mapping[str, Any] | None = None) -> FileParts:
    """Read one file in this process, without limits; for tests of the readers."""
    module, _, name = READERS[kind].partition(":")
    read = getattr(import_module(module), name)
    known = signature(read).parameters
    chosen = {key: tuple(v) if isinstance(v, list) else v for key, v in (options or {}).items() if key in known}
    parts: FileParts = read(path, **chosen)
    return parts


def _command(kind: Kind, path: str, memory: int) -> list[str]:
    return [sys.executable, "-P", "-m", "ingest.guard", kind, path, str(memory)]


def _environment() -> dict[str, str]:
    """The child finds this very package, and native libraries start no threads."""
    home = str(Path(__file__).resolve().parents[1])
    paths = [home, *filter(None, os.environ.get("PYTHONPATH", "").split(os.pathsep))]
    threads = dict.fromkeys(("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"), "1")
    return {**os.environ, **threads, "PYTHONPATH": os.pathsep.join(paths), "PYTHONHASHSEED": "0"}


def _parts(answer: bytes, code: int, path: Path, memory: int) -> FileParts:
    from pydantic import TypeAdapter, ValidationError

    from ingest.parts import FileParts

    name = shown(path.name)
    again = "export the file again; with --skip-unreadable the run goes on without it"
    if code == OUT_OF_MEMORY:
        problem = f"needs more than the {memory / 1e9:.1f} GB a file of its size may take"
        raise InputError(name, "", problem, "send less of the model, or " + again)
    if code != 0 or not answer:
        how = f"signal {-code}" if code < 0 else f"code {code}"
        raise InputError(name, "", f"made its reader stop ({how}); the file is damaged or hostile", again)
    if answer.startswith(b'{"error"'):
        (place, problem, remedy), *others = json.loads(answer)["error"]
        raise InputError(name, place, problem, remedy, [(at, what, fix) for at, what, fix in others])
    try:
        return TypeAdapter(FileParts).validate_json(answer)
    except ValidationError as error:
        where = ".".join(str(part) for part in error.errors()[0]["loc"])
        raise InputError(name, where, "holds a value that is no finite number", again) from error


def _limit_memory(size: int) -> None:
    try:
        import resource
    except ImportError:  # not on this system
        return
    hard = resource.getrlimit(resource.RLIMIT_AS)[1]
    limit = size if hard == resource.RLIM_INFINITY else min(size, hard)
    resource.setrlimit(resource.RLIMIT_AS, (limit, hard))
    resource.setrlimit(resource.RLIMIT_CORE, (0, 0))


def _answer(kind: Kind, path: str, options: Mapping[str, Any]) -> bytes:
    from pydantic import TypeAdapter

    from ingest.parts import FileParts

    try:
        return TypeAdapter(FileParts).dump_json(read_here(Path(path), kind, options), by_alias=True)
    except InputError as error:
        problems = error.problems
    except MemoryError:
        raise
    except RecursionError:
        problems = (("", "refers to itself in a circle", "export the file again"),)
    except Exception as error:  # the file, not the run, is at fault until shown otherwise
        said = f"{type(error).__name__}: {error}".replace(path, Path(path).name).split("\n")[0][:160]
        problems = (("", f"holds something that cannot be read ({said})", "export the file again"),)
    return json.dumps({"error": problems}, separators=(",", ":")).encode()


def main() -> int:
    """Read one file as the child; the answer goes to the real standard output, chatter of libraries nowhere."""
    answer_to = os.dup(1)
    os.dup2(2, 1)
    kind, path, memory = sys.argv[1:4]
    options = json.load(sys.stdin)
    _limit_memory(int(memory))
    try:
        answer = _answer(kind, path, options)  # type: ignore[arg-type]
    except MemoryError:
        return OUT_OF_MEMORY
    with os.fdopen(answer_to, "wb") as stream:
        stream.write(answer)
    return 0


if __name__ == "__main__":
    sys.exit(main())
