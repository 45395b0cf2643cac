"""Struts between two walls that are not parallel: the turned wall gets less support, the strut more force.

Struts square to one wall and turned by psi on the other support the other with cos^2(psi) N/s; equal pressure needs
1/cos^2(psi) of the 2D force. Source: statics of one strut, derived; valid for regular spacing.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.sheet import Sheet
from sections.found import CriterionResult, FoundPit, SupportRow
from sections.model import Bools, Floats
from sections.pit.along import cover_of

CODE = "opposite_wall"
BOTH_ENDS = ("strut",)


def opposite_wall(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Give support force and deflection [1, contrast] where struts tie a wall to one that is turned against it."""
    stations = found.stations
    sheet = Sheet(stations, "No strut ties this wall to another wall that is turned against it.")
    contrast, skew, loser = _along_wall(site, found)
    turned = contrast > 1.0 / np.cos(np.radians(limits.direction)) ** 2
    sheet.say(turned, ("support_force",), 1.0, contrast)
    sheet.say(turned & loser, ("wall_deflection",), 1.0, contrast)
    sheet.text(
        turned,
        "Struts here stand {skew:.1f} degrees off the normal of one of the two walls they tie: for equal pressure on "
        "both the real force is 1.00 to {contrast:.2f} times the 2D value.",
    )
    return sheet.close(
        CODE,
        "opposite_wall",
        basis="statics: a strut turned by psi supports the wall with cos^2(psi) of its force per metre",
        reference="derived; equal pressure on both walls assumed",
        inputs={"skew": skew, "contrast": contrast},
        own_margin=True,
        speaks_of=("wall_deflection", "support_force"),
        settled_by="a section or computation that holds both walls with the struts at their real angle",
        silence=dict.fromkeys(("wall_moment_excavated_face", "wall_moment_retained_face"), "statics give no moment"),
    )


def _along_wall(site: Site, found: FoundPit) -> tuple[Floats, Floats, Bools]:
    """Contrast 1/cos^2, larger skew in degrees, and whether this is the less supported wall, at the stations (n,)."""
    n = len(found.stations.chainage)
    contrast, skew, loser = np.ones(n), np.zeros(n), np.zeros(n, dtype=bool)
    cover = cover_of(found.stations, len(found.rows))
    for j, row in enumerate(found.rows):
        if row.member.role not in BOTH_ENDS:
            continue
        head, far, tied = row_skews(site, found, row)
        if not np.any(tied):
            continue
        cos2 = np.cos(np.radians(np.column_stack([head, far])[tied])) ** 2
        worst = float(np.max(cos2.max(axis=1) / cos2.min(axis=1)))
        here = cover[:, j]
        contrast[here] = np.maximum(contrast[here], worst)
        skew[here] = np.maximum(skew[here], float(np.max([head[tied], far[tied]])))
        squarest = float(np.nanmin(np.minimum(head, far)))
        loser |= here & (_own_skew(found, row, head, far) > squarest + 1e-6)
    return contrast, skew, loser


def _own_skew(found: FoundPit, row: SupportRow, head: Floats, far: Floats) -> Floats:
    """Skew of the nearest strut of the row at each station, seen from the station's own wall, degrees."""
    at = np.concatenate([row.head_at, row.far_at])
    skew = np.concatenate([head, far])
    known = ~np.isnan(at) & ~np.isnan(skew)
    apart = np.abs(found.stations.chainage[:, None] - at[known][None, :])
    if found.shape.closed:
        apart = np.minimum(apart, found.shape.length - apart)
    return np.asarray(skew[known][np.argmin(apart, axis=1)])


def row_skews(site: Site, found: FoundPit, row: SupportRow) -> tuple[Floats, Floats, Bools]:
    """Plan angles of the row's members to the normals of the walls at head and far end, degrees; nan where none.

    Returns:
        Angles at the head and at the far end (k,), and True where both ends stand on this pit's wall.
    """
    head = np.array([site.supports[index].head[:2] for index in row.supports], dtype=np.float64)
    far = np.array([site.supports[index].far[:2] for index in row.supports], dtype=np.float64)
    along = far - head
    along /= np.maximum(np.hypot(along[:, 0], along[:, 1]), 1e-12)[:, None]
    at_head = _angle(found, row.head_at, along)
    at_far = _angle(found, row.far_at, along)
    return at_head, at_far, ~np.isnan(at_head) & ~np.isnan(at_far)


def _angle(found: FoundPit, at: Floats, along: Floats) -> Floats:
    """Angle between members and the wall's normal at their chainage, 0 to 90 degrees."""
    apart = np.abs(found.stations.chainage[None, :] - np.nan_to_num(at)[:, None])
    if found.shape.closed:
        apart = np.minimum(apart, found.shape.length - apart)
    normal = found.stations.normal[np.argmin(apart, axis=1)]
    cosine = np.clip(np.abs(np.einsum("ij,ij->i", along, normal)), 0.0, 1.0)
    return np.where(np.isnan(at), np.nan, np.degrees(np.arccos(cosine)))
