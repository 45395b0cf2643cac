"""Ground anchors: free length as a bar, bond length as a sheet with two faces, and the way back.

Terms after EN 1537: free anchor length, fixed (bond) length, lock-off load. Formulas: statics and geometry.
"""

from __future__ import annotations

from math import pi

import numpy as np

from ingest.errors import require, require_positive
from ingest.record import record
from ingest.trail import Finding
from sections.member import PerMetre, RealMember, SmearParts
from sections.model import Floats
from sections.smearing.member import member_parts
from sections.smearing.support_rows import Smeared, apply_rows, axial_back, direction_of, smear_support

LOCK_OFF_SHARE = 0.60
"""Lock-off load over characteristic tendon capacity, EN 1537:1999, 9.8."""
BOND_CLEARANCE = 1.5
"""Least distance between neighbouring bond lengths, m, EN 1997-1, 8.4(7)."""


@record
class BondSheet:
    """A bond length drawn as a sheet 1 m wide with two faces.

    `pull_out` in kN per anchor, `pull_out_per_metre` in kN/m, `face_limit` in kPa on each face, `area_ratio` = sheet
    area over grout surface.
    """

    pull_out: float
    pull_out_per_metre: float
    face_limit: float
    area_ratio: float


def tendon_rigidity(strands: int, strand_area: float, E: float) -> float:
    """EA of a tendon, kN; number of strands or bars, area of one in m2, modulus in kPa."""
    require_positive(float(strands), "number of strands")
    return (
        strands * require_positive(strand_area, "strand area", "m2") * require_positive(E, "modulus of tendon", "kPa")
    )


def largest_lock_off(capacity: float) -> float:
    """Largest lock-off load for a characteristic tendon capacity, 0.60 P_tk, kN. Source: EN 1537:1999, 9.8."""
    return LOCK_OFF_SHARE * require_positive(capacity, "tendon capacity", "kN")


def bond_sheet(diameter: float, length: float, tau: float, spacing: float) -> BondSheet:
    """Limit of a bond length as one anchor and as a sheet.

    Args:
        diameter: Of the grout body, m.
        length: Bond length, m.
        tau: Friction limit between grout and ground, kPa.
        spacing: Along the wall, m.
    """
    surface = face_factor(diameter, spacing)
    require_positive(tau, "friction limit", "kPa")
    pull_out = pi * diameter * require_positive(length, "bond length", "m") * tau
    return BondSheet(
        pull_out=pull_out, pull_out_per_metre=pull_out / spacing, face_limit=tau * surface, area_ratio=1 / surface
    )


def face_factor(diameter: float, spacing: float) -> float:
    """Friction limit on each face of the sheet over that of the grout body, pi D/(2 s)."""
    return pi * require_positive(diameter, "bond diameter", "m") / (2 * require_positive(spacing, "spacing", "m"))


def smear_free_length(real: RealMember) -> Smeared:
    """Smear anchor free lengths: a bar with lock-off load, no bending, no contact with the ground.

    Args:
        real: One anchor: spacing at the head, skew, inclination; EA of the tendon, preload (lock-off, not the test
            load), limit.
    """
    return smear_support(real, "anchor")


def smear_bond_length(real: RealMember) -> Smeared:
    """Smear bond lengths as a sheet: EA, pull-out limit and friction limit of each face.

    Args:
        real: One bond length: EA_kN of grout and tendon together, bond_diameter, limit_kN (pull-out), contact_kPa.

    Assumes:
        The sheet does not block the ground; it is given contact on both faces and nothing else.
    """
    direction, spacing = direction_of(real), require_positive(real.spacing, "spacing", "m")
    contact = SmearParts(per_spacing=face_factor(require_positive(real.bond_diameter, "bond diameter", "m"), spacing))
    specs = (
        ("EA", "EA_kN", "EA_kN_per_m", member_parts("EA", spacing, direction)),
        ("limit", "limit_kN", "limit_kN_per_m", member_parts("limit", spacing, direction)),
        ("contact", "contact_kPa", "contact_kPa", contact),
    )
    rows, values = apply_rows(real, specs)
    back = tuple(row for row in axial_back("anchor", spacing, direction) if row.quantity == "N")
    section = PerMetre(**values, resists="tension")  # type: ignore[arg-type]
    return Smeared(real=real, section=section, smear=rows, back=back)


def least_bond_gap(ends: Floats) -> float:
    """Least distance between the axes of any two bond lengths in space, m; inf for a single one.

    Args:
        ends: (n, 2, 3) start and end of each bond length, m.

    Source: closest points of two segments, by projection with the parameters held to 0..1.
    """
    ends = np.asarray(ends, dtype=float)
    if ends.ndim != 3 or ends.shape[1:] != (2, 3) or not np.all(np.isfinite(ends)):
        raise ValueError(f"bond lengths have shape {ends.shape}: allowed is (n, 2, 3), all finite")
    i, j = np.triu_indices(len(ends), k=1)
    if i.size == 0:
        return float("inf")
    return float(np.min(_segment_distance(ends[i, 0], ends[i, 1], ends[j, 0], ends[j, 1])))


def check_lock_off(preload: float, capacity: float, where: str) -> tuple[Finding, ...]:
    """Flag a lock-off load above 0.60 of the tendon's characteristic capacity (EN 1537:1999, 9.8)."""
    limit = largest_lock_off(capacity)
    if require(preload, "lock-off load", "kN", least=0.0) <= limit * (1 + 1e-9):
        return ()
    text = f"lock-off load {preload:.1f} kN, limit {limit:.1f} kN = 0.60 of {capacity:.1f} kN (EN 1537:1999, 9.8)"
    return (Finding(id=f"lock-off:{where}", code="lock-off", severity="check", where=where, text=text),)


def check_bond_gap(ends: Floats, where: str) -> tuple[Finding, ...]:
    """Flag bond lengths closer than 1.5 m to each other (EN 1997-1, 8.4(7)); `ends` as in `least_bond_gap`."""
    gap = least_bond_gap(ends)
    if gap >= BOND_CLEARANCE - 1e-6:
        return ()
    text = f"bond lengths {gap:.2f} m apart, least {BOND_CLEARANCE:g} m (EN 1997-1, 8.4(7)): group effect not assessed"
    return (Finding(id=f"bond-gap:{where}", code="bond-gap", severity="check", where=where, text=text),)


def _segment_distance(a0: Floats, a1: Floats, b0: Floats, b1: Floats) -> Floats:
    """Distances of paired segments, arrays (k, 3): the least of the interior approach and the four end approaches."""
    u, v, w = a1 - a0, b1 - b0, a0 - b0
    uu, uv, vv = _dot(u, u), _dot(u, v), _dot(v, v)
    uw, vw = _dot(u, w), _dot(v, w)
    det = uu * vv - uv**2
    parallel = det <= 1e-12 * uu * vv
    safe = np.where(parallel, 1.0, det)
    s, t = (uv * vw - vv * uw) / safe, (uu * vw - uv * uw) / safe
    inside = ~parallel & (s >= 0) & (s <= 1) & (t >= 0) & (t <= 1)
    between = np.linalg.norm(w + s[:, None] * u - t[:, None] * v, axis=1)
    ends = np.min([_to(a0, b0, b1), _to(a1, b0, b1), _to(b0, a0, a1), _to(b1, a0, a1)], axis=0)
    return np.asarray(np.where(inside, np.minimum(between, ends), ends))


def _to(point: Floats, start: Floats, end: Floats) -> Floats:
    """Distance of points from segments."""
    along = end - start
    length = _dot(along, along)
    t = np.clip(_dot(point - start, along) / np.where(length > 0, length, 1.0), 0.0, 1.0)
    return np.asarray(np.linalg.norm(point - start - t[:, None] * along, axis=1))


def _dot(a: Floats, b: Floats) -> Floats:
    return np.asarray(np.sum(a * b, axis=1))
