"""How a load of the real site is handed over to a plane-strain section: one value, and the alternatives beside it.

The value handed over has the effect of the real load on the wall in the section through it (by resultant or moment,
the larger), unless the load repeats closely enough for its mean. Elastic basis as in `sections.smearing.loads`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import hypot

from ingest.errors import require, require_positive
from ingest.record import record
from sections.definition import Alternative, LoadValue
from sections.smearing.load_repeats import peak_by_moment, peak_by_resultant, perpendicular_peak
from sections.smearing.loads import (
    area_ratios,
    finite_length_factor,
    finite_line_moment,
    finite_line_resultant,
    line_moment,
    line_resultant,
    perpendicular_widths,
    point_width,
)

LONG_ENOUGH = 0.95
"""Least F over the height from which a line load is handed over whole."""
WALL = "the load on the wall in the section through it, elastic half-space, larger of resultant and moment"
ONE_SECTION = "valid in the section through the load only; settlement and heave under it"


@record
class HandedOver:
    """Value for the section, its alternatives, and `share` = value over the load simply extruded."""

    section: LoadValue
    alternatives: tuple[Alternative, ...]
    share: float
    basis: str


def hand_over_point(
    Q: float, *, x: float, depths: Sequence[float], y: float = 0.0, stands_for: float | None = None
) -> HandedOver:
    """Hand over one point load.

    Args:
        Q: kN.
        x: Distance from the wall, m.
        y: Distance of the load from the plane of the section, along the wall, m.
        depths: Of formation and of the toe below the load, m; the larger load of them is handed over.
        stands_for: Length of wall the section stands for, m; None leaves the total-kept value open.
    """
    W = min(point_width(x, H, y) for H in _heights(depths))
    return _single(Q, Q / W, "kN/m", stands_for, 1.0, f"q = Q/W, W = {W:.3f} m, smaller of W_H and W_M")


def hand_over_point_row(Q: float, *, x: float, spacing: float, depths: Sequence[float]) -> HandedOver:
    """Hand over a row of equal point loads: the mean Q/s while s <= x, else the peak behind a load.

    Args:
        Q: One load, kN.
        x: Distance from the wall, m.
        spacing: Along the wall, m.
        depths: Of formation and of the toe below the loads, m.
    """
    peaks = [f(x, H, spacing) for H in _heights(depths) for f in (peak_by_resultant, peak_by_moment)]
    return _repeated(Q, "kN/m", spacing, x, max(peaks))


def hand_over_line(
    q: float, *, x: float, b1: float, b2: float, depths: Sequence[float], stands_for: float | None = None
) -> HandedOver:
    """Hand over a line load along the wall that ends b1 and b2 from the section.

    Args:
        q: kN/m.
        x: Distance from the wall, m.
        b1: To one end, m.
        b2: To the other end, m.
        depths: Of formation and of the toe below the load, m.
        stands_for: Length of wall the section stands for, m.

    Returns:
        The line whole where it is long enough for F > 0.95 over the height, else its equal-effect value.
    """
    heights = _heights(depths)
    ratios = [finite_line_resultant(x, H, b1, b2) / line_resultant(x, H) for H in heights]
    ratios += [finite_line_moment(x, H, b1, b2) / line_moment(x, H) for H in heights]
    share = max(ratios)
    basis = f"{share:.4f} of the line load, ends {b1:g} and {b2:g} m away"
    made = _single(q, q * share, "kN/m", stands_for, b1 + b2, basis)
    if float(finite_length_factor(hypot(x, max(heights)), b1, b2)) <= LONG_ENOUGH:
        return made
    whole = LoadValue(value=q, unit="kN/m")
    return replace(made, section=whole, share=1.0, basis=f"whole: F > {LONG_ENOUGH:g} over the height")


def hand_over_perpendicular_line(
    q: float,
    *,
    x1: float,
    x2: float,
    depths: Sequence[float],
    spacing: float | None = None,
    stands_for: float | None = None,
) -> HandedOver:
    """Hand over a line load that lies in the cut, from x1 to x2, as an area load on that stretch.

    Args:
        q: kN/m.
        x1: Near end from the wall, m.
        x2: Far end, m.
        depths: Of formation and of the toe below the load, m.
        spacing: Of a row of such lines along the wall, m; None for a single one.
        stands_for: Length of wall the section stands for, m.
    """
    heights = _heights(depths)
    if spacing is not None:
        peak = max(perpendicular_peak(x1, x2, H, spacing) for H in heights)
        return _repeated(q, "kPa", spacing, x1, peak)
    W = min(min(perpendicular_widths(x1, x2, H)) for H in heights)
    return _single(q, q / W, "kPa", stands_for, 1.0, f"p = q/W, W = {W:.3f} m, smaller of resultant and moment")


def hand_over_area(
    p: float, *, x1: float, x2: float, b1: float, b2: float, depths: Sequence[float], stands_for: float | None = None
) -> HandedOver:
    """Hand over a loaded rectangle (surcharge patch or footing) by its effect on the wall.

    Args:
        p: kPa, kept over the same width in the section.
        x1: Near edge from the wall, m.
        x2: Far edge, m.
        b1: From the section to one end along the wall, m.
        b2: To the other end, m.
        depths: Of formation and of the toe below the load, m.
        stands_for: Length of wall the section stands for, m.
    """
    share = max(max(area_ratios(x1, x2, H, b1, b2)) for H in _heights(depths))
    return _single(
        p, p * share, "kPa", stands_for, b1 + b2, f"{share:.4f} of the pressure, {b1 + b2:g} m along the wall"
    )


def _repeated(load: float, unit: str, spacing: float, x: float, peak: float) -> HandedOver:
    """A row of like loads at one spacing, `peak` times its mean behind each load; x is the nearest distance."""
    require(load, "load", unit)
    mean, effect = load / require_positive(spacing, "load spacing", "m"), load / spacing * peak
    close = spacing <= x * (1 + 1e-9)
    rows = (
        _alternative("pressure_kept", load, unit, "the load as drawn, on every metre", "over-states the total"),
        _alternative("total_kept", mean, unit, "the total of the row", f"the peak, {peak:.3f} of the mean"),
        _alternative("equal_effect", effect, unit, WALL, "over-states the load between the loads"),
        _absent(unit),
    )
    value = mean if close else effect
    basis = f"load/s, s = {spacing:g} m" + ("" if close else f", times {peak:.3f}: the peak behind a load")
    share = value / load if load else 1.0 / spacing
    return HandedOver(section=LoadValue(value=value, unit=unit), alternatives=rows, share=share, basis=basis)


def _single(load: float, effect: float, unit: str, stands_for: float | None, length: float, basis: str) -> HandedOver:
    """One load of a length along the wall (1 m for a point), its equal-effect value, and the alternatives."""
    require(load, "load", unit)
    total = None
    lost = "not worked out: the length of wall that the section stands for is not given"
    if stands_for is not None:
        total = load * length / require_positive(stands_for, "length of wall the section stands for", "m")
        lost = "the peak behind the load; under-states the section through it"
    rows = (
        _alternative(
            "pressure_kept", load, unit, "the load as drawn, right under it", "over-states the load on the wall"
        ),
        _alternative("total_kept", total, unit, "the total over the length of wall that the section stands for", lost),
        _alternative("equal_effect", effect, unit, WALL, ONE_SECTION),
        _absent(unit),
    )
    share = effect / load if load else 1.0
    return HandedOver(section=LoadValue(value=effect, unit=unit), alternatives=rows, share=share, basis=basis)


def _alternative(name: str, value: float | None, unit: str, keeps: str, loses: str) -> Alternative:
    return Alternative(name=name, value=value, unit=unit, keeps=keeps, loses=loses)  # type: ignore[arg-type]


def _absent(unit: str) -> Alternative:
    return _alternative("absent", 0.0, unit, "sections away from the load, beyond about 2 x along the wall", "the load")


def _heights(depths: Sequence[float]) -> tuple[float, ...]:
    """Depths below the load; none is left out."""
    require_positive(float(len(depths)), "number of depths")
    return tuple(require_positive(H, "depth below the load", "m") for H in depths)
