"""Amounts that a section implies and those that are there, against solids measured by the geometry kernel."""

from __future__ import annotations

import json
import subprocess
import sys
from math import cos, radians, sqrt
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid
import pytest
from builders_cut import make_cut
from pit_sites import CHS, found, rectangle, shape_of, site_of, strut

from export.cli import main
from sections.definition import Implied
from sections.section.implied import imply
from sections.section.supports import support_members

KERNEL = Path(__file__).parents[1] / "ingest" / "kernel_child.py"
PIT = Path(__file__).parents[2] / "samples" / "first_pit"
EA = 210e6 * 0.02473061737
FACETS = 2e-2
"""The kernel measures round bodies by facets."""


def volumes(path: Path) -> dict[str, float]:
    """Volume of every solid of a file by name, measured in a process of its own."""
    run = subprocess.run([sys.executable, str(KERNEL), str(path)], capture_output=True, check=True, timeout=240)
    measured = json.loads(run.stdout)
    names = {one.GlobalId: one.Name for one in ifcopenshell.open(str(path)).by_type("IfcProduct")}
    return {names[key]: value["volume"] for key, value in measured.items() if value}


def write_bars(path: Path, bars: dict[str, tuple[str, float, float | None, float]]) -> None:
    """Upright solids by class, diameter, wall thickness (None: full) and length, m."""
    model = ifcopenshell.file(schema="IFC4")
    add = model.create_entity
    origin = add("IfcAxis2Placement3D", add("IfcCartesianPoint", (0.0, 0.0, 0.0)))
    context = add("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, origin)
    units = add("IfcUnitAssignment", [add("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")])
    add("IfcProject", ifcopenshell.guid.new(), Name="bars", RepresentationContexts=[context], UnitsInContext=units)
    for name, (kind, diameter, wall, length) in bars.items():
        if wall is None:
            profile = add("IfcCircleProfileDef", "AREA", Radius=diameter / 2)
        else:
            profile = add("IfcCircleHollowProfileDef", "AREA", Radius=diameter / 2, WallThickness=wall)
        solid = add("IfcExtrudedAreaSolid", profile, origin, add("IfcDirection", (0.0, 0.0, 1.0)), length)
        shape = add("IfcShapeRepresentation", context, "Body", "SweptSolid", [solid])
        product = add(kind, ifcopenshell.guid.new(), Name=name)
        product.ObjectPlacement = add("IfcLocalPlacement", None, origin)
        product.Representation = add("IfcProductDefinitionShape", None, None, [shape])
    model.write(str(path))


def row(rows: list[dict[str, Any]], about: str, quantity: str) -> dict[str, Any]:
    return next(r for r in rows if (r["about"], r["quantity"]) == (about, quantity))


@pytest.mark.slow
def test_what_is_implied_and_what_is_there_are_the_volumes_the_kernel_measures(tmp_path: Path) -> None:
    """First pit: piles 0.75 m at 1 m, 12 m long; struts CHS 508 x 16, 20 m, at 5 m; bodies over a bay of 5 m."""
    out = tmp_path / "out"
    arguments = [str(PIT / "first_pit.dxf"), "--brief", str(PIT / "brief.toml"), "--out", str(out), "--quiet"]
    assert main(["propose", *arguments]) == 0
    section = json.loads((out / "sections" / "S1.json").read_text())
    real = tmp_path / "real.ifc"
    write_bars(real, {"pile": ("IfcPile", 0.75, None, 12.0), "strut": ("IfcMember", 0.508, 0.016, 20.0)})
    there, implied = volumes(real), volumes(out / "implied.ifc")
    pile, bar = row(section["implied"], "P1-wall-1", "volume"), row(section["implied"], "P1-strut-1", "volume")
    # m3 per m2 of elevation times 12 m of height and 1 m of spacing; m3 per m of wall times 5 m of spacing.
    assert pile["real"] * 12.0 * 1.0 == pytest.approx(there["pile"], rel=FACETS)
    assert bar["real"] * 5.0 == pytest.approx(there["strut"], rel=FACETS)
    assert pile["implied"] * 12.0 * 5.0 == pytest.approx(implied["S1 P1-wall-1"], rel=1e-4)
    assert bar["implied"] * 5.0 == pytest.approx(implied["S1 P1-strut-1"], rel=1e-4)


def rows_of(*supports: object, at: list[float], end: float = 238.0) -> list[Implied]:
    site = site_of(supports=supports)
    cut = make_cut(found(shape_of(rectangle()), supports=supports), (at[0] + 100, 182), (at[0] + 100, end), at)
    members, _, _ = support_members(site, cut, {"left": "P1-wall-1", "right": "P1-wall-2"})
    return list(imply(members, ()))


def test_a_skewed_row_is_as_stiff_in_the_section_as_in_the_plane_and_its_sheet_holds_less_steel() -> None:
    """20 degrees: k' = EA cos^2/(s L) either way; the sheet is EA cos^3/(s E) thick, L cos long: cos^4 of A L/s."""
    shift = 20.0 * 0.363970234
    struts = [strut((x, 200.0), (x + shift, 220.0), EA=EA) for x in (102.5, 107.5, 112.5, 117.5, 122.0)]
    made = {row.quantity: row for row in rows_of(*struts, at=[13.0, 67.0])}
    assert made["stiffness"].ratio == pytest.approx(1.0, rel=1e-6)
    assert made["volume"].ratio == pytest.approx(cos(radians(20.0)) ** 4, rel=1e-6)
    assert made["volume"].real == pytest.approx((CHS.A or 0.0) * 20.0 / cos(radians(20.0)) / 5.0)


def test_a_corner_strut_is_as_stiff_in_the_section_as_it_really_is() -> None:
    made = {row.quantity: row for row in rows_of(
        strut((104.0, 200.0), (100.0, 204.0), role="corner_strut", EA=EA), at=[3.0], end=221.0
    )}  # fmt: skip
    s = 1.0 / (made["count"].real or 0.0)
    c = sqrt(0.5)
    assert made["stiffness"].real == pytest.approx(EA * c * (c + c) / (s * 4.0 * sqrt(2.0)))
    assert made["stiffness"].ratio == pytest.approx(1.0)
