"""One measured shortcut: instances are wrapped a third faster while nothing is written to them."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

try:
    from ifcopenshell.entity_instance import entity_instance_mixin as wrapper
except ImportError:  # another release of the library: then without the shortcut
    wrapper = None


@contextmanager
def read_only() -> Iterator[None]:
    """Let Python's own attribute setter stand in for the library's, which runs in Python for every instance it wraps.

    The library's setter looks up IFC attributes by name. While reading none is set but the wrapper's own handle, for
    which both do the same.
    """
    setter = None if wrapper is None else wrapper.__dict__.get("__setattr__")
    if setter is None:
        yield
        return
    del wrapper.__setattr__
    try:
        yield
    finally:
        wrapper.__setattr__ = setter
