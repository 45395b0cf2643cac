"""Struts, rakers and anchors that leave the plane of the cut: beyond 40 degrees they cannot be smeared.

Source: project rule (judgement) on the statics of a smeared member, whose stiffness falls with cos^3 of that angle.
Corner struts are smeared by their own rule and not shut here; a section with them is not assessed either.
"""

from __future__ import annotations

import numpy as np

from ingest.model import Limits, Site
from sections.criteria.opposite_wall import row_skews
from sections.criteria.sheet import WALL_OUTPUTS, Sheet
from sections.found import CriterionResult, FoundPit, SupportRow
from sections.model import Floats
from sections.pit.along import cover_of

CODE = "supports_skew"
STEEPEST = 40.0
"""Angle out of the plane from which a member is not smeared, degrees."""


def supports_skew(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Shut the wall's outputs where a support stands 40 degrees or more out of the plane of the cut."""
    stations = found.stations
    sheet = Sheet(stations, "No support here leaves the plane of the cut by 40 degrees or more.")
    n = len(stations.chainage)
    angle, corner = np.zeros(n), np.zeros(n, dtype=bool)
    cover = cover_of(stations, len(found.rows))
    for j, row in enumerate(found.rows):
        if row.member.role == "corner_strut":
            corner |= cover[:, j]
        else:
            angle = np.where(cover[:, j], np.maximum(angle, out_of_plane(site, found, row)), angle)
    sheet.lack(corner, WALL_OUTPUTS)
    sheet.text(corner, "Corner struts hold this wall from the wall round the corner, which itself moves: not assessed.")
    steep = angle >= STEEPEST - 1e-6
    sheet.shut(steep, (*WALL_OUTPUTS, "settlement"))
    sheet.text(steep, "A support stands {angle:.1f} degrees out of the plane of the cut; from 40 on it is not smeared.")
    return sheet.close(
        CODE,
        "supports",
        basis="smeared stiffness falls with cos^3 of the angle out of the plane",
        reference="project rule (judgement)",
        inputs={"angle": angle},
        speaks_of=(*WALL_OUTPUTS, "settlement"),
        settled_by="a computation with every support in its real direction",
    )


def out_of_plane(site: Site, found: FoundPit, row: SupportRow) -> float:
    """Largest angle between the members of a row and the plane square to the wall at their head, degrees."""
    members = [site.supports[index] for index in row.supports]
    direction = np.array([np.subtract(member.far, member.head) for member in members], dtype=np.float64)
    length = np.maximum(np.linalg.norm(direction, axis=1), 1e-12)
    level = np.hypot(direction[:, 0], direction[:, 1]) / length
    at_head, at_far, _ = row_skews(site, found, row)
    return float(np.max(_out_of_plane(at_head, at_far, level), initial=0.0))


def _out_of_plane(at_head: Floats, at_far: Floats, level: Floats) -> Floats:
    """Angle out of the plane: its sine is the level part times the sine of the skew on plan."""
    skew = np.where(np.isnan(at_head), np.nan_to_num(at_far), at_head)
    return np.asarray(np.degrees(np.arcsin(np.clip(level * np.sin(np.radians(skew)), 0.0, 1.0))))
