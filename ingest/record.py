"""One way to make a domain record: frozen, slotted, keyword-only, and strict when it is read back from JSON."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TypeVar, dataclass_transform

from pydantic import ConfigDict

T = TypeVar("T")

STRICT = ConfigDict(extra="forbid", strict=True, allow_inf_nan=False)


@dataclass_transform(frozen_default=True, kw_only_default=True, field_specifiers=(field,))
def record(cls: type[T]) -> type[T]:
    """Turn a class into a frozen, slotted, keyword-only dataclass that refuses unknown keys and non-finite numbers.

    Without the strict configuration a misspelt key would pass silently when a file is read back.
    """
    make: Callable[[type[T]], type[T]] = dataclass(frozen=True, slots=True, kw_only=True)
    made = make(cls)
    made.__pydantic_config__ = STRICT  # type: ignore[attr-defined]
    return made
