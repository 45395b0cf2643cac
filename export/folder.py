"""The output folder: written aside, then swapped in whole; never a mix of two runs, never a foreign file lost."""

from __future__ import annotations

import json
import os
import shutil
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from ingest.errors import InputError

MOST_NAMED = 5


@contextmanager
def fresh_folder(target: Path) -> Iterator[Path]:
    """Give an empty folder to write into, and swap it into the place of `target` when the block ends well.

    On an error or an interrupt what was written is removed and `target` stays as it was.

    Args:
        target: The folder the user named; it need not exist.

    Yields:
        The folder to write into.

    Raises:
        InputError: When `target` cannot be replaced: it is a file, the current folder, a mount point, or holds files
            that no earlier run wrote.
    """
    check_folder(target)
    place = target.resolve()
    try:
        place.parent.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(prefix=f".{place.name}.", suffix=".part", dir=place.parent))
    except OSError as error:
        raise _refused(place, f"cannot be made: {error.strerror}", "name a folder you may write to") from None
    try:
        aside.chmod(0o777 & ~_umask())
        yield aside
        check_folder(place)
        _swap(aside, place)
    finally:
        shutil.rmtree(aside, ignore_errors=True)


def check_folder(target: Path) -> None:
    """Refuse an output folder that cannot be replaced without loss.

    Raises:
        InputError: Naming the first files that the tool did not write.
    """
    try:
        place = target.resolve()
        if not place.exists():
            return
    except (OSError, RuntimeError) as error:  # a loop of links is one or the other, by the version of Python
        reason = getattr(error, "strerror", None) or "the link leads back to itself"
        raise _refused(target, f"cannot be used: {reason}", "name another folder") from None
    if not place.is_dir():
        raise _refused(place, "is a file, not a folder", "name a folder")
    if place == Path.cwd().resolve() or place in Path.cwd().resolve().parents or os.path.ismount(place):
        raise _refused(place, "is the folder you stand in, or holds it", "name a folder below it, such as out")
    foreign = sorted(_files(place) - _written(place))
    if foreign:
        more = f" and {len(foreign) - MOST_NAMED} more" if len(foreign) > MOST_NAMED else ""
        raise _refused(
            place,
            f"holds files that this tool did not write: {', '.join(foreign[:MOST_NAMED])}{more}",
            "name an empty or new folder, or move those files away",
        )


def _written(place: Path) -> set[str]:
    """The list `written` of an earlier run; empty when there is none to be trusted."""
    try:
        tree = json.loads((place / "proposal.json").read_text(encoding="utf-8"))
    except (OSError, ValueError, RecursionError):
        return set()
    if not isinstance(tree, dict) or not str(tree.get("schema", "")).startswith("cutworthy/proposal/"):
        return set()
    names = tree.get("written")
    return {name for name in names if isinstance(name, str)} if isinstance(names, list) else set()


def _files(place: Path) -> set[str]:
    found: set[str] = set()
    for folder, folders, files in os.walk(place):
        links = [name for name in folders if (Path(folder) / name).is_symlink()]
        found.update((Path(folder) / name).relative_to(place).as_posix() for name in (*files, *links))
    return found


def _swap(aside: Path, place: Path) -> None:
    if not place.exists():
        aside.rename(place)
        return
    old = Path(tempfile.mkdtemp(prefix=f".{place.name}.", suffix=".old", dir=place.parent))
    place.rename(old / place.name)
    try:
        aside.rename(place)
    except BaseException:
        (old / place.name).rename(place)
        old.rmdir()
        raise
    shutil.rmtree(old, ignore_errors=True)


def _umask() -> int:
    mask = os.umask(0o022)
    os.umask(mask)
    return mask


def _refused(place: Path, problem: str, remedy: str) -> InputError:
    return InputError(str(place), "", problem, remedy)
