"""Does the thrust stay in the wall of a ring, for axisymmetric sections.

For a regular polygon the eccentricity at its corners needs no pressure: a^2/12 over the apothem (a = side). Everything
else, out-of-roundness, uneven load, struts across, needs the pressure level by level and is not assessed yet.
"""

from __future__ import annotations

import numpy as np

from ingest.model import RING_OUTPUTS, Limits, Site
from sections.criteria.shape import HOOPLESS
from sections.criteria.sheet import Sheet
from sections.found import CriterionResult, FoundPit
from sections.model import Floats
from sections.pit.wall_changes import kinds_at

CODE = "ring_thrust"


def ring_thrust(site: Site, found: FoundPit, limits: Limits) -> CriterionResult:
    """Shut the hoop force of polygons whose corners throw the thrust out of the middle third; leave the rest open."""
    stations = found.stations
    sheet = Sheet(stations, "The perimeter is no ring.", RING_OUTPUTS)
    ring = np.full(len(stations.chainage), stations.ring)
    sheet.lack(np.ones_like(ring), RING_OUTPUTS)
    sheet.text(ring, "Whether the thrust stays in the wall needs the pressure level by level: not assessed.")
    loose = ring & np.isin(kinds_at(found), HOOPLESS)
    sheet.text(loose, "This wall carries no thrust along itself; only its ring beams do. Not assessed.")
    eccentricity, limit = _at_corners(found)
    broken = ring & ~loose & (eccentricity > limit + 1e-9)
    sheet.shut(broken, ("hoop_force",))
    sheet.text(
        broken,
        "At the corners of the polygon the thrust lies {eccentricity:.2f} m off the axis, more than a sixth of the "
        "wall ({limit:.2f} m), ground springs left out: the hoop force is not that of a ring.",
    )
    return sheet.close(
        CODE,
        "shape",
        basis="statics of a regular polygon under even pressure: corner moment p a^2/12, thrust p times apothem",
        reference="derived; limit t/6 keeps the joints closed",
        inputs={"eccentricity": eccentricity, "limit": limit},
        speaks_of=sheet.outputs,
        settled_by="the pressure, the stiffness of the ground and the deviation of the panels, level by level",
    )


def _at_corners(found: FoundPit) -> tuple[Floats, Floats]:
    """Eccentricity at the corners and a sixth of the wall at the stations (n,), m; nan where not known."""
    n = len(found.stations.chainage)
    circle = found.shape.circle
    thickness = np.array(
        [*(np.nan if run.wall.thickness is None else run.wall.thickness for run in found.shape.runs), np.nan]
    )[found.stations.run]
    if circle is None or circle.sides is None:
        return np.full(n, np.nan), thickness / 6
    side = 2 * circle.radius * np.sin(np.pi / circle.sides)
    apothem = circle.radius * np.cos(np.pi / circle.sides)
    return np.full(n, side**2 / 12 / apothem), thickness / 6
