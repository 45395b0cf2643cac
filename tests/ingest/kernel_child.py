"""Solids of an IFC file by ifcopenshell's geometry kernel, one thread, as JSON on standard output.

A process of its own: the kernel may crash on files that the reader only refuses. For each GlobalId: volume in m3 and
the vertices in model metres, or null where the kernel gives nothing. Openings are cut out of slabs and footings only.
"""

from __future__ import annotations

import json
import sys

import ifcopenshell
import ifcopenshell.geom
import numpy as np

OPENED = ("IfcSlab", "IfcFooting")
UNOPENED = ("IfcWall", "IfcPile", "IfcColumn", "IfcBeam", "IfcMember", "IfcBuildingElementProxy")


def solids(path: str) -> dict[str, object]:
    model = ifcopenshell.open(path)
    settings = {True: ifcopenshell.geom.settings(), False: ifcopenshell.geom.settings()}
    for opened, one in settings.items():
        one.set("use-world-coords", True)
        one.set("disable-opening-subtractions", not opened)
    found: dict[str, object] = {}
    for product in (p for name in (*OPENED, *UNOPENED) for p in model.by_type(name)):
        if product.Representation is None:
            continue
        try:
            shape = ifcopenshell.geom.create_shape(settings[product.is_a() in OPENED], product)
        except RuntimeError:
            found[product.GlobalId] = None
            continue
        at = np.array(shape.geometry.verts).reshape(-1, 3)
        faces = np.array(shape.geometry.faces).reshape(-1, 3)
        if not len(faces):
            continue
        corners = (at - at.mean(axis=0))[faces]
        volume = np.einsum("ij,ij->i", corners[:, 0], np.cross(corners[:, 1], corners[:, 2])).sum() / 6
        found[product.GlobalId] = {"volume": abs(float(volume)), "points": np.unique(at.round(6), axis=0).tolist()}
    return found


if __name__ == "__main__":
    json.dump(solids(sys.argv[1]), sys.stdout)
