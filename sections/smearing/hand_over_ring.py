"""How a single load beside a round pit is handed over to an axisymmetric section, where it becomes a ring of load.

No ring load has the effect of a single one on the hoop: keep two runs, the full ring (upper) and the mean or nothing
(lower). Source: statics of the ring.
"""

from __future__ import annotations

from math import pi

from ingest.errors import require_positive
from sections.definition import Alternative, LoadValue
from sections.smearing.hand_over import HandedOver


def load_per_radian(Q: float) -> float:
    """A load spread over the whole ring, per radian, Q/(2 pi), kN/rad."""
    return Q / (2 * pi)


def ring_line_load(Q: float, r: float) -> float:
    """A load spread over the whole ring at radius r, per metre, Q/(2 pi r), kN/m."""
    return Q / (2 * pi * require_positive(r, "radius of the load", "m"))


def ring_over_footing(r: float, L: float) -> float:
    """Area of the ring over that of a footing of length L along it, 2 pi r/L: the excess when the pressure is kept."""
    return 2 * pi * require_positive(r, "radius of the load", "m") / require_positive(L, "footing length", "m")


def hand_over_ring_point(Q: float, *, r: float) -> HandedOver:
    """Hand over a point load Q (kN) at radius r (m): on every metre of the ring (upper run), the mean beside it."""
    return _ring(Q, ring_line_load(Q, r), "kN/m", Q)


def hand_over_ring_footing(q: float, *, r: float, L: float) -> HandedOver:
    """Hand over a footing or surcharge patch at radius r to its middle, L along the ring.

    Args:
        q: Pressure, kPa, kept over its width across the ring.
        r: m.
        L: m.

    Returns:
        The full ring at the local pressure (upper run); mean and nothing are the lower runs.
    """
    return _ring(q, q / ring_over_footing(r, L), "kPa", q)


def hand_over_ring_line(q: float, *, r: float, L: float) -> HandedOver:
    """Hand over a line load q (kN/m) that runs L (m) along the ring at radius r (m): the full ring (upper run)."""
    return _ring(q, q / ring_over_footing(r, L), "kN/m", q)


def _ring(kept: float, mean: float, unit: str, value: float) -> HandedOver:
    rows = (
        Alternative(name="pressure_kept", value=kept, unit=unit, keeps="the load where it is (upper run)",
                    loses="over-states the total; the even ring closes joints that the real load opens"),
        Alternative(name="total_kept", value=mean, unit=unit, keeps="the total load round the ring (lower run)",
                    loses="the load on the side where it stands"),
        Alternative(name="equal_effect", value=None, unit=unit, keeps="not worked out: no ring load has this effect",
                    loses="sway and ovalling: see horizontal bending of the ring"),
        Alternative(name="absent", value=0.0, unit=unit, keeps="the side away from the load (lower run)",
                    loses="the load"),
    )  # fmt: skip
    return HandedOver(
        section=LoadValue(value=value, unit=unit),
        alternatives=rows,
        share=value / kept if kept else 1.0,
        basis="full ring at the local load, upper of two runs",
    )
