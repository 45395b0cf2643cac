"""Unplanned excavation: how much deeper than planned the dig must be taken, by two codes that differ.

Not included in any section unless the brief says so. The height is that of the dig for a cantilever, and the height
below the lowest prop or anchor for a supported wall.
"""

from __future__ import annotations

from ingest.errors import require

NOT_INCLUDED = "NOT INCLUDED: unplanned over-dig, minimum surcharge"
"""What every notice prints until the brief answers yes or no."""
MINIMUM_SURCHARGE = 10.0
"""kPa behind the wall, BS 8002."""


def overdig_bs8002(height: float) -> float:
    """Extra dig, m: not less than 0.5 m and not less than a tenth of the height. Source: BS 8002."""
    return max(0.5, 0.1 * require(height, "height", "m", least=0.0))


def overdig_en1997(height: float) -> float:
    """Extra dig, m: a tenth of the height, limited to 0.5 m; ultimate limit states only.

    Source: EN 1997-1 cl. 9.3.2.2 (figures recalled).
    """
    return min(0.5, 0.1 * require(height, "height", "m", least=0.0))
