"""Progress of long work on a terminal: stage, done of total. Silent when piped or told to be quiet."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

Tell = Callable[[str, int, int], None]


@contextmanager
def show_progress(*, quiet: bool) -> Iterator[Tell]:
    """Yield a function `tell(stage, done, total)`; a live line on a terminal, nothing elsewhere."""
    if quiet or not sys.stderr.isatty():
        yield lambda stage, done, total: None
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, SpinnerColumn, TextColumn, TimeElapsedColumn

    columns = (
        SpinnerColumn(),
        TextColumn("{task.description}"),
        BarColumn(),
        MofNCompleteColumn(),
        TimeElapsedColumn(),
    )
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task("starting", total=None)

        def tell(stage: str, done: int, total: int) -> None:
            bar.update(task, description=stage, completed=done, total=total or None)

        yield tell
