"""Structural actions: where they act, and their value in kN, kN/m or kPa, positive downwards."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from ingest.ifc.elements import Element, NoPart
from ingest.ifc.properties import number_text
from ingest.ifc.relations import of_type
from ingest.ifc.shapes import Line
from ingest.ifc.units import ProjectUnits
from ingest.parts import Form, Part

Entity = Any
Floats = NDArray[np.float64]

_APPLIED_LOAD = 7
_GLOBAL_OR_LOCAL = 8
_KINDS: dict[str, tuple[str, str, str]] = {
    "IfcStructuralLoadSingleForce": ("point", "IfcForceMeasure", "kN"),
    "IfcStructuralLoadLinearForce": ("line", "IfcLinearForceMeasure", "kN/m"),
    "IfcStructuralLoadPlanarForce": ("area", "IfcPlanarForceMeasure", "kPa"),
}
_FORMS: dict[str, Form] = {"point": "point", "line": "path", "area": "outline"}


def items_of_actions(model: Any) -> dict[int, Entity]:
    """The structural item each action acts on, by the action's id."""
    return {
        relation.RelatedStructuralActivity.id(): relation.RelatingElement
        for relation in of_type(model, "IfcRelConnectsStructuralActivity")
        if relation.RelatedStructuralActivity is not None and relation.RelatingElement is not None
    }


def load_tags(action: Entity, units: ProjectUnits) -> dict[str, str]:
    """Forces of an action as tags.

    `load_kind` is point, line or area; `load_unit` kN, kN/m or kPa; `force_x`, `force_y`, `force_z` as given;
    `load_value` is the downward part, written only for forces in global axes.
    """
    load = action.get_argument(_APPLIED_LOAD)
    if load is None:
        raise NoPart("action without a load")
    values = [load]
    if load.is_a("IfcStructuralLoadConfiguration"):
        values = list(load.Values)
    found = next((kind for name, kind in _KINDS.items() if values and values[0].is_a(name)), None)
    if found is None:
        raise NoPart(f"load of kind {values[0].is_a() if values else 'none'}")
    kind, measure, unit = found
    factor = units.factor(measure) or 1.0
    forces = np.array([[float(v.get_argument(i) or 0.0) * factor for i in (1, 2, 3)] for v in values])
    tags = {"load_kind": kind, "load_unit": unit, "load_axes": str(action.get_argument(_GLOBAL_OR_LOCAL) or "")}
    for axis, column in zip("xyz", forces.T.tolist(), strict=True):
        tags[f"force_{axis}"] = " ".join(number_text(value) for value in column)
    if load.get_argument(0):
        tags["load_name"] = str(load.get_argument(0))
    if len(forces) > 1:
        tags["load_locations"] = "; ".join(" ".join(map(number_text, at)) for at in load.Locations)
    elif tags["load_axes"] == "GLOBAL_COORDS":
        tags["load_value"] = number_text(-forces[0, 2] + 0.0)
    return tags


def load_part(element: Element) -> Part:
    """The part of one action: a point, a path or an outline.

    Raises:
        NoPart: If nothing says where it acts.
    """
    lines = [body.points() for body in (*element.bodies, *element.axes) if isinstance(body.shape, Line)]
    if not lines:
        raise NoPart("action without a place")
    at = max(lines, key=len)
    kind = element.tags.get("load_kind", "point")
    if len(at) == 1:
        form: Form = "point"
    else:
        form = "outline" if kind == "area" and len(at) > 3 else "path"
    if form == "outline" and np.allclose(at[0], at[-1]):
        at = at[:-1]
    said = [
        "structural action in global axes" if "load_value" in element.tags else "structural action; value not resolved"
    ]
    return element.part(
        form,
        [(x, y, z) for x, y, z in at.tolist()],
        said,
        closed=form == "outline",
        z_top=float(at[:, 2].max()),
        z_bottom=float(at[:, 2].min()),
    )
