"""The one error an engineer sees: which file, where in it, what is wrong, what to do."""

from __future__ import annotations

from collections.abc import Sequence


class InputError(Exception):
    """An input that cannot be used. The command line ends with exit code 2.

    Args:
        file: File as the user named it, or "" when the fault is in the command.
        place: Line, byte, #id, handle or key path, in the words of that file.
        problem: What was found, with the offending value and its unit.
        remedy: What the user can do.
        others: Further problems of the same file, each as (place, problem, remedy).
    """

    def __init__(
        self, file: str, place: str, problem: str, remedy: str, others: Sequence[tuple[str, str, str]] = ()
    ) -> None:
        self.file, self.place, self.problem, self.remedy = file, place, problem, remedy
        self.others = tuple(others)
        super().__init__(str(self))

    @property
    def problems(self) -> tuple[tuple[str, str, str], ...]:
        """All problems as (place, problem, remedy), the first one included."""
        return ((self.place, self.problem, self.remedy), *self.others)

    def __str__(self) -> str:
        where = ", ".join(part for part in (self.file, self.place) if part)
        more = f" (and {len(self.others)} more)" if self.others else ""
        return f"{where}: {self.problem}{more}\n  To fix: {self.remedy}"
