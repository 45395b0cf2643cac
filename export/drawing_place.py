"""Where the plan overlay is drawn: in the source drawing's own coordinates and unit, else in world metres."""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, radians, sin
from typing import Any

from ingest.dxf.drawing_unit import INSUNITS
from ingest.model import Registered, Site
from ingest.units import METRES

IMPERIAL = ("inch", "foot", "yard", "mile")


@dataclass(frozen=True)
class DrawingPlace:
    """Coordinates of a drawing: world = shift + scale Rz(rotation) unit drawing.

    `source` is the drawing laid on, "" where the plan stands in world metres.
    """

    source: str = ""
    unit: str = "m"
    registered: Registered = Registered()

    @classmethod
    def of(cls, site: Site | None) -> DrawingPlace:
        """That of the only drawing received; world metres where an IFC model or several drawings came."""
        plans = [one for one in (site.inputs if site else ()) if one.kind in ("dxf", "ifc")]
        only = plans[0] if len(plans) == 1 else None
        if only is None or only.kind != "dxf" or only.length_unit not in METRES:
            return cls()
        return cls(only.file, only.length_unit, only.registered or Registered())

    @property
    def insunits(self) -> int:
        """Value of $INSUNITS for the unit; 0 where the format has none for it."""
        return next((code for code, name in INSUNITS.items() if name == self.unit), 0)

    @property
    def units_per_metre(self) -> float:
        """Drawing units in one metre of the world."""
        return 1.0 / (METRES[self.unit] * self.registered.scale)

    @property
    def words(self) -> str:
        """Said on the drawing."""
        if not self.source:
            return "Drawn in world coordinates, metres"
        return f"Drawn in the coordinates of {self.source}, unit {self.unit}"

    def lay(self, drawing: Any) -> None:
        """Move a plan drawn in world metres into these coordinates, and say their unit."""
        from ezdxf import transform
        from ezdxf.math import Matrix44

        drawing.header["$INSUNITS"] = self.insunits
        drawing.header["$MEASUREMENT"] = 0 if self.unit.removeprefix("us_survey_") in IMPERIAL else 1
        k, (x, y), angle = self.units_per_metre, self.registered.shift, radians(-self.registered.rotation_deg)
        if (k, x, y, angle) == (1.0, 0.0, 0.0, 0.0):
            return
        c, s = k * cos(angle), k * sin(angle)
        rows = (c, s, 0, 0, -s, c, 0, 0, 0, 0, k, 0, s * y - c * x, -s * x - c * y, 0, 1)
        transform.inplace(drawing.modelspace(), Matrix44(rows))
        drawing.header["$LTSCALE"] = k
