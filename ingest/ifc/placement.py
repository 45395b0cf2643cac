"""Where products stand: chains of object placements, multiplied all at once."""

from __future__ import annotations

from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.attributes import RELATIVE_PLACEMENT, RELATIVE_TO
from ingest.ifc.frames import NO_FRAME, FrameTable
from ingest.ifc.grids import grid_frame
from ingest.ifc.unreadable import UNREADABLE

Entity: TypeAlias = Any
Floats: TypeAlias = NDArray[np.float64]


class PlacementTable:
    """Object placements with their parents; `solve` multiplies the chains by pointer doubling."""

    def __init__(self, frames: FrameTable) -> None:
        self._frames = frames
        self._rows: dict[int, int] = {}
        self._parents: list[int] = [0]
        self._frame_rows: list[int] = [NO_FRAME]
        self.unread: dict[int, str] = {}
        """Rows whose own placement could not be read, and why."""
        self.fallbacks = 0
        """Placements along an alignment that were taken from their Cartesian fallback."""

    def row(self, placement: Entity | None) -> int:
        """Row of an IfcObjectPlacement; row 0, the world, for None. Walks up the chain once per placement."""
        if placement is None:
            return 0
        key: int = placement.id()
        known = self._rows.get(key)
        if known is not None:
            return known
        first = below = len(self._parents)
        above = self._append(key, placement)
        while above is not None:
            key = above.id()
            known = self._rows.get(key)
            self._parents[below] = len(self._parents) if known is None else known
            if known is not None:
                break
            below = len(self._parents)
            above = self._append(key, above)
        return first

    def _append(self, key: int, placement: Entity) -> Entity | None:
        """Add one placement; returns the one it is relative to."""
        row = len(self._parents)
        self._rows[key] = row
        self._parents.append(0)
        self._frame_rows.append(NO_FRAME)
        try:
            if placement.is_a() == "IfcLocalPlacement":
                self._frame_rows[row] = self._frames.append(placement.get_argument(RELATIVE_PLACEMENT))
                parent = placement.get_argument(RELATIVE_TO)
            else:
                self._frame_rows[row], parent = self._other(placement)
            if parent is not None:
                parent.id()
            return parent
        except UNREADABLE as error:
            self.unread[row] = str(error)[:80] or type(error).__name__
        return None

    def _other(self, placement: Entity) -> tuple[int, Entity | None]:
        kind = placement.is_a()
        parent = getattr(placement, "PlacementRelTo", None)
        if kind == "IfcGridPlacement":
            return self._frames.add(*grid_frame(placement)), parent or _placement_of_grid(placement)
        spare = getattr(placement, "CartesianPosition", None)
        if spare is None:
            raise ValueError(f"{kind} without a Cartesian position")
        self.fallbacks += 1
        return self._frames.append(spare), parent

    def clear(self) -> None:
        """Let go of the chains once they are solved."""
        for kept in (self._rows, self._parents, self._frame_rows):
            kept.clear()

    def solve(self) -> tuple[Floats, NDArray[np.bool_]]:
        """World matrices (n, 4, 4) in file units, and which rows cannot be placed (a cycle, or an unread link).

        Each round halves the length of every chain, so a chain that has not reached the world after log2(n) rounds
        goes in a circle.
        """
        world = self._frames.matrices()[np.array(self._frame_rows)]
        up = np.array(self._parents)
        bad = np.zeros(len(up), bool)
        bad[list(self.unread)] = True
        with np.errstate(all="ignore"):  # chains that go in a circle run over; they are reported
            for _ in range(len(up).bit_length() + 1):
                live = np.flatnonzero(up)
                if not len(live):
                    break
                ahead = up[live]
                world[live] = world[ahead] @ world[live]
                bad[live] |= bad[ahead]
                up[live] = up[ahead]
        return world, bad | (up != 0)


def _placement_of_grid(placement: Entity) -> Entity | None:
    axis = placement.PlacementLocation.IntersectingAxes[0]
    grids = [*axis.PartOfU, *axis.PartOfV, *axis.PartOfW]
    return grids[0].ObjectPlacement if grids else None
