"""The sheet a criterion fills in: a band per station and output, gates, gaps, and the sentence that goes with them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from typing import TYPE_CHECKING, overload

import numpy as np

from ingest.model import OUTPUTS
from sections.found import CriterionResult, Stations
from sections.model import Bools, Floats, Ints, Mechanism

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

WALL_OUTPUTS = ("wall_deflection", "wall_moment_excavated_face", "wall_moment_retained_face", "support_force")
MOMENTS = WALL_OUTPUTS[1:3]
MOVEMENTS = ("wall_deflection", "settlement")


class Sentences(Sequence[str]):
    """One sentence per station, put into words only when it is read: few texts, their numbers in arrays."""

    __slots__ = ("pick", "texts", "values")

    def __init__(self, texts: tuple[str, ...], pick: Sequence[int], values: dict[str, Floats]) -> None:
        self.texts, self.pick, self.values = texts, pick, values

    def __len__(self) -> int:
        return len(self.pick)

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> tuple[str, ...]: ...
    def __getitem__(self, index: int | slice) -> str | tuple[str, ...]:
        if isinstance(index, slice):
            return tuple(self[i] for i in range(*index.indices(len(self))))
        text = self.texts[self.pick[index]]
        return text.format_map({name: value[index] for name, value in self.values.items()})

    def __iter__(self) -> Iterator[str]:
        return (self[i] for i in range(len(self)))


class Sheet:
    """Working arrays (n stations, o outputs) of one criterion; nothing is assessed until it is said.

    Args:
        stations: The pit's stations.
        silent: Sentence of the stations for which no other is given.
        outputs: Outputs of the table.
    """

    def __init__(self, stations: Stations, silent: str, outputs: tuple[str, ...] = OUTPUTS) -> None:
        n = len(stations.chainage)
        self.outputs = outputs
        self.low = np.full((n, len(outputs)), np.nan)
        self.high = np.full((n, len(outputs)), np.nan)
        self.gate = np.zeros((n, len(outputs)), dtype=bool)
        self.missing = np.zeros((n, len(outputs)), dtype=bool)
        self.texts = [silent]
        self.pick = np.zeros(n, dtype=np.int64)

    def say(self, where: Bools, outputs: Iterable[str], low: ArrayLike, high: ArrayLike) -> None:
        """Give the band at some stations; what was said there before is widened, never narrowed."""
        n = len(self.pick)
        low, high = np.broadcast_to(low, n), np.broadcast_to(high, n)
        for o in self._columns(outputs):
            self.low[where, o] = np.fmin(self.low[where, o], low[where])
            self.high[where, o] = np.fmax(self.high[where, o], high[where])

    def lack(self, where: Bools, outputs: Iterable[str]) -> None:
        """Mark what is there and bears on the outputs, but cannot be evaluated."""
        for o in self._columns(outputs):
            self.missing[where, o] = True

    def shut(self, where: Bools, outputs: Iterable[str]) -> None:
        """Say that no 2D section may be trusted for these outputs."""
        for o in self._columns(outputs):
            self.gate[where, o] = True

    def text(self, where: Bools, words: str) -> None:
        """Give the sentence of some stations; names in braces are filled from the inputs. The last one given stands."""
        if np.any(where):
            self.texts.append(words)
            self.pick[where] = len(self.texts) - 1

    def close(
        self,
        code: str,
        mechanism: Mechanism,
        *,
        basis: str,
        reference: str,
        inputs: dict[str, Floats] | None = None,
        own_margin: bool = False, by_class_only: bool = False, cross_check: bool = False, recalled: bool = False,
        settled_by: str = "",
        speaks_of: Iterable[str] = WALL_OUTPUTS,
        silence: dict[str, str] | None = None,
        carries: tuple[Mechanism, ...] = (),
        stages: tuple[tuple[str, ...], Ints] | None = None,
    ) -> CriterionResult:  # fmt: skip
        """Hand the sheet in."""
        values = inputs or {}
        return CriterionResult(
            code=code,
            mechanism=mechanism,
            basis=basis,
            reference=reference,
            low=self.low,
            high=self.high,
            assessed=~np.isnan(self.low),
            gate=self.gate,
            missing=self.missing,
            sentence=Sentences(tuple(self.texts), self.pick, values),  # type: ignore[arg-type]
            inputs=values,
            own_margin=own_margin,
            by_class_only=by_class_only,
            cross_check=cross_check,
            recalled=recalled,
            settled_by=settled_by,
            speaks_of=tuple(speaks_of),
            silence=silence or {},
            carries=carries,
            stages=stages,
        )

    def _columns(self, outputs: Iterable[str]) -> list[int]:
        return [self.outputs.index(name) for name in outputs if name in self.outputs]
