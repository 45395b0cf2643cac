"""The one error an engineer sees (file, place, problem, remedy), and the refusal of physical nonsense."""

from __future__ import annotations

from collections.abc import Sequence
from math import isfinite


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


def require(
    value: float | None,
    what: str,
    unit: str = "",
    *,
    above: float | None = None,
    least: float | None = None,
    most: float | None = None,
    below: float | None = None,
) -> float:
    """Return a value that lies in its physical range; refuse it otherwise.

    Args:
        value: The value; None stands for not given.
        what: Its name in the words of the trade.
        unit: Its unit, "" for a plain number.
        above: Open lower end of the allowed range.
        least: Closed lower end.
        most: Closed upper end.
        below: Open upper end.

    Raises:
        ValueError: Not given, not finite or out of range; names value, unit and allowed range.
    """
    ends = ((above, "above"), (least, "at least"), (most, "at most"), (below, "below"))
    allowed = " and ".join(f"{word} {end:g}" for end, word in ends if end is not None) or "any finite number"
    allowed = f"{allowed} {unit}".strip()
    if value is None:
        raise ValueError(f"{what} is not given; allowed is {allowed}")
    out = (
        not isfinite(value)
        or (above is not None and value <= above)
        or (least is not None and value < least)
        or (most is not None and value > most)
        or (below is not None and value >= below)
    )
    if out:
        raise ValueError(f"{what} = {value:g} {unit}".rstrip() + f": allowed is {allowed}")
    return value


def require_positive(value: float | None, what: str, unit: str = "") -> float:
    """Return a finite value above zero; refuse any other with `ValueError`."""
    return require(value, what, unit, above=0.0)
