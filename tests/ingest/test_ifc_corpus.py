"""Real IFC files: each is read or refused in one message, and the walls have sensible centre lines."""

from __future__ import annotations

import os
from collections import Counter
from math import dist
from pathlib import Path

import pytest

from ingest.errors import InputError
from ingest.ifc.reader import read_ifc
from ingest.parts import FileParts, Part

pytestmark = pytest.mark.corpus
approx = pytest.approx

FOLDER = Path(os.environ.get("CUTWORTHY_CORPUS", "")) / "ifc"
FILES = sorted(FOLDER.glob("*.ifc")) if "CUTWORTHY_CORPUS" in os.environ else []
DRAFTS = (
    "borehole-strata-rc3-01", "earthworks-cut-01", "earthworks-fill-layers-01", "footing-parametric-01",
    "georef-stratum-01", "ground-tin-hole-georef-01", "ship-lock-wall-02", "water-solid-strata-01",
)  # fmt: skip


def read(name: str) -> FileParts:
    return read_ifc(FOLDER / f"{name}.ifc")


def of_class(found: FileParts, *names: str) -> list[Part]:
    return [part for part in found.parts if part.cls in names]


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_each_file_is_read_or_refused(path: Path) -> None:
    if path.stem in DRAFTS:
        with pytest.raises(InputError, match="draft or withdrawn"):
            read_ifc(path)
        return
    found = read_ifc(path)
    items = {part.source.item for part in found.parts}
    assert len(items) + sum(found.context.values()) + sum(found.ignored.values()) == found.entities
    assert not found.losses
    assert "geometry cannot be read" not in found.ignored


@pytest.mark.parametrize("path", [path for path in FILES if path.stem not in DRAFTS], ids=lambda path: path.stem)
def test_walls_of_real_files_have_a_thickness_a_wall_can_have(path: Path) -> None:
    for part in of_class(read_ifc(path), "IfcWall", "IfcWallStandardCase"):
        assert part.form == "path", part.evidence
        assert len(part.points) >= 2
        if part.thickness is not None:
            assert 0.02 <= part.thickness <= 1.0, part.name


def test_layers_and_bodies_agree_in_a_large_structure() -> None:
    walls = of_class(read("housing-block-structure-01"), "IfcWallStandardCase")
    said = Counter("layers sum to its thickness" in part.evidence for part in walls)
    assert said == {True: 296}


def test_piles_stored_as_beams_are_round_and_upright() -> None:
    piles = [part for part in read("precast-hall-piles-as-beams-01").parts if part.name == "PAAL"]
    # measured from the file: 48 piles of 360 mm, heads at -1.10 and -1.38, toes at -9.00, pairs 1.4 m apart
    assert (len(piles), {part.form for part in piles}) == (48, {"circle"})
    assert {round(part.radius or 0, 6) for part in piles} == {0.18}
    assert {round(part.z_top or 0, 2) for part in piles} == {-1.10, -1.38}
    assert {round(part.z_bottom or 0, 2) for part in piles} == {-9.00}
    nearest = [min(dist(a.points[0][:2], b.points[0][:2]) for b in piles if b is not a) for a in piles]
    assert min(nearest) == approx(1.4, abs=0.01)


@pytest.mark.parametrize("name", ["pile-typed-feet-01", "pile-undefined-type-feet-01"])
def test_typed_piles_hang_down_forty_feet_from_their_head(name: str) -> None:
    found = read(name)
    piles = of_class(found, "IfcPile")
    assert len(piles) == 4
    for part in piles:
        assert (part.z_top or 0) - (part.z_bottom or 0) == approx(40 * 0.3048)
        assert part.radius == approx(9 * 0.0254)  # 18 in. x 0.375 in.
        assert part.thickness == approx(0.375 * 0.0254)


@pytest.mark.parametrize(
    ("name", "walls", "pieces"),
    [("housing-unit-walls-03-rev1", 39, 117), ("housing-unit-walls-03-rev2", 37, 111)],
)
def test_walls_whose_body_hangs_on_parts(name: str, walls: int, pieces: int) -> None:
    found = read(name)
    made = of_class(found, "IfcWallStandardCase")
    assert (len(made), found.context) == (walls, {"part of an element read whole": pieces})
    assert Counter("layers sum to its thickness" in part.evidence for part in made)[True] >= len(made) - 1


def test_slabs_take_their_body_from_proxies() -> None:
    found = read("floor-plates-revA")
    assert len({part.source.item for part in of_class(found, "IfcSlab")}) == 14


def test_a_wall_along_an_arc_and_one_fitted_to_a_mesh() -> None:
    (arc,) = read("wall-curved-axis-01").parts
    assert len(arc.points) > 5
    (mesh,) = read("wall-basement-mesh-01").parts
    assert "fitted to a mesh" in mesh.evidence


def test_metres_written_as_millimetres_are_asked_about() -> None:
    found = read("anchors-lod300-01")
    assert len(of_class(found, "IfcProxy")) == 25
    assert {part.form for part in found.parts} == {"bar"}
    assert [finding.code for finding in found.findings] == ["ifc-unit-size"]
    right = read_ifc(FOLDER / "anchors-lod300-01.ifc", length_unit="m")
    assert dist(*right.parts[0].points) == approx(float(right.parts[0].tags["Length"]), rel=0.01)


def test_missing_units_and_odd_units() -> None:
    assert read("wall-composite-profile-01").length_unit == "mm"
    assert read("us-survey-foot-pavement-01").unit_scale == approx(1200 / 3937, rel=1e-9)
    assert read("walls-inch-01").unit_scale == approx(0.0254)


def test_storeys_are_levels_that_walls_need_not_follow() -> None:
    found = read("housing-block-structure-01")
    levels = {part.z_top for part in found.setting}
    off = [
        w
        for w in of_class(found, "IfcWallStandardCase")
        if min(abs((w.z_bottom or 0) - z) for z in levels if z is not None) > 0.01
    ]
    assert len(off) > 20


def test_columns_stand_on_their_grid() -> None:
    columns = of_class(read("grid-placement-01"), "IfcColumn")
    assert len({(round(p.points[0][0], 3), round(p.points[0][1], 3)) for p in columns}) == 25


def test_an_action_is_placed_by_its_member_and_valued_in_newtons() -> None:
    (action,) = read("structural-frame-inch-01").parts
    assert (action.cls, action.form, action.tags["load_unit"]) == ("IfcStructuralCurveAction", "path", "kN/m")
    assert len(action.tags["force_z"].split()) == 2
