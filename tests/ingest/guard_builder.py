"""One good file of each kind, made in the test."""

from __future__ import annotations

from pathlib import Path

import ezdxf
import ifcopenshell

from ingest.errors import InputError

AGS = (
    '"GROUP","PROJ"\n"HEADING","PROJ_ID"\n"UNIT",""\n"TYPE","ID"\n"DATA","P"\n\n'
    '"GROUP","LOCA"\n"HEADING","LOCA_ID","LOCA_NATE","LOCA_NATN","LOCA_GL"\n"UNIT","","m","m","m"\n"TYPE","ID","2DP","2DP","2DP"\n'
    + "".join(f'"DATA","BH{n}","{500 + 7.25 * n:.2f}","{300 + 3.5 * n:.2f}","4.50"\n' for n in range(40))
)


def good_ags(path: Path) -> None:
    path.write_bytes(AGS.replace("\n", "\r\n").encode())


def good_dxf(path: Path) -> None:
    drawing = ezdxf.new("R2010", units=6)
    space = drawing.modelspace()
    for n in range(60):
        space.add_circle((100.5 + n, 200.25), 0.375, dxfattribs={"layer": "PILES"})
        space.add_line((100.5 + n, 0.0), (100.75 + n, 9.125), dxfattribs={"layer": "STRUTS"})
    drawing.saveas(path)


def good_ifc(path: Path) -> None:
    model = ifcopenshell.file(schema="IFC4")
    make = model.create_entity
    unit = make("IfcUnitAssignment", [make("IfcSIUnit", None, "LENGTHUNIT", None, "METRE")])
    origin = make("IfcAxis2Placement3D", make("IfcCartesianPoint", (0.0, 0.0, 0.0)))
    context = make("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, origin)
    make("IfcProject", ifcopenshell.guid.new(), None, "P", None, None, None, None, [context], unit)
    for n in range(30):
        at = make("IfcAxis2Placement3D", make("IfcCartesianPoint", (1.25 * n, 2.5, -0.75)))
        disc = make("IfcCircleProfileDef", "AREA", None, None, 0.375)
        up = make("IfcDirection", (0.0, 0.0, 1.0))
        body = make("IfcExtrudedAreaSolid", disc, origin, up, 12.25)
        shape = make("IfcShapeRepresentation", context, "Body", "SweptSolid", [body])
        whole = make("IfcProductDefinitionShape", None, None, [shape])
        make(
            "IfcPile",
            ifcopenshell.guid.new(),
            None,
            f"pile {n}",
            None,
            None,
            make("IfcLocalPlacement", None, at),
            whole,
        )
    model.write(str(path))


def is_clear(error: InputError, name: str) -> bool:
    lines = str(error).split("\n")
    return error.file == name and len(lines) <= 3 and "Traceback" not in str(error) and bool(error.remedy)
