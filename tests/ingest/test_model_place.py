"""Where a model lies in the world, kept so that files for the BIM side can be written in its own coordinates."""

from __future__ import annotations

from dataclasses import replace
from math import cos, radians, sin
from pathlib import Path

import numpy as np
import pytest

from ingest.brief import Brief
from ingest.ifc.georeference import Georeference, map_matrix
from ingest.ifc.reader import read_ifc
from ingest.model import ModelPlace
from ingest.parts import FileParts
from ingest.register import lay_files, model_places

FIRST_PIT = Path(__file__).parents[2] / "samples" / "first_pit_ifc" / "first_pit.ifc"


def test_a_map_conversion_is_kept_as_shift_turn_and_scale_of_metres() -> None:
    # Model in mm, map in m, grid factor 0.9996, x axis 12 degrees off east (IFC4, IfcMapConversion).
    way = (cos(radians(12.0)), sin(radians(12.0)))
    place = Georeference(map_matrix((438250.0, 286120.0, 7.5), way, 1e-3, 1.0, 0.9996), given=True).place(1e-3)
    assert place is not None
    assert place.given
    assert place.origin == (438250.0, 286120.0, 7.5)
    assert (place.rotation_deg, place.scale) == pytest.approx((12.0, 0.9996))


def test_a_conversion_that_stretches_is_not_taken_for_a_shift() -> None:
    assert Georeference(np.diag([1.0, 1.001, 1.0, 1.0])).place(1.0) is None
    assert Georeference(np.diag([1.0, -1.0, 1.0, 1.0])).place(1.0) is None


def test_a_model_without_a_conversion_lies_where_its_coordinates_say() -> None:
    assert read_ifc(FIRST_PIT).place == ModelPlace()


def test_the_briefs_shift_and_turn_come_on_top() -> None:
    read = replace(read_ifc(FIRST_PIT), place=ModelPlace(origin=(10.0, 0.0, 3.0), rotation_deg=12.0, given=True))
    brief = Brief.model_validate({"files": {read.file: {"shift": (100.0, 200.0), "rotation_deg": 90.0}}})
    # A quarter turn takes (10, 0) to (0, 10).
    place = model_places(lay_files([read], brief))[read.file]
    assert place.origin == pytest.approx((100.0, 210.0, 3.0))
    assert place.rotation_deg == 102.0


def test_a_drawing_has_no_place_of_a_model() -> None:
    drawing = FileParts(
        file="a.dxf", sha256="", kind="dxf", schema_or_version="", length_unit="m", unit_scale=1.0, entities=0
    )
    assert model_places(lay_files([drawing], Brief())) == {}
