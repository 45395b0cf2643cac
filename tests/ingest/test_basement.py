"""The pit inside a building model: what stands in the ground is told from what stands on it."""

from __future__ import annotations

import math
import os
from pathlib import Path
from typing import Any

import pytest

from ingest.brief import Brief
from ingest.errors import InputError
from ingest.members import Point3
from ingest.model import Site
from ingest.parts import FileParts, Part
from ingest.site import read_site, site_of
from ingest.trail import Source

RING = [(0.0, 0.0), (20.0, 0.0), (20.0, 12.0), (0.0, 12.0)]


def part(form: str, *points: Point3, item: str, cls: str, **more: Any) -> Part:
    return Part(source=Source(file="m.ifc", item=item), form=form, points=points, cls=cls, **more)  # type: ignore[arg-type]


def walls(bottom: float, top: float, word: str) -> list[Part]:
    ends = list(zip(RING, [*RING[1:], RING[0]], strict=True))
    return [
        part(
            "path",
            (*a, bottom),
            (*b, bottom),
            item=f"{word}{n}",
            cls="IfcWall",
            thickness=0.3,
            z_bottom=bottom,
            z_top=top,
        )
        for n, (a, b) in enumerate(ends)
    ]


def slab(underside: float, item: str) -> Part:
    points = tuple((x, y, underside) for x, y in RING)
    return part("prism", *points, item=item, cls="IfcSlab", closed=True, z_bottom=underside, z_top=underside + 0.3)


def storey(level: float, name: str) -> Part:
    return part("text", (0.0, 0.0, level), item=name, cls="IfcBuildingStorey", name=name, text=name, z_bottom=level)


def site_from(parts: list[Part], brief: Brief | None = None, setting: tuple[Part, ...] = ()) -> Site:
    file = FileParts(
        file="m.ifc", sha256="0" * 64, kind="ifc", schema_or_version="IFC4", length_unit="m", unit_scale=1.0,
        entities=len(parts), parts=tuple(parts), setting=setting,
    )  # fmt: skip
    return site_of([file], brief or Brief())


BUILDING = [
    *walls(-3.3, -0.3, "b"),
    *walls(0.0, 3.0, "g"),
    slab(-3.6, "raft"),
    slab(-0.3, "ground slab"),
    slab(2.7, "roof"),
]
STOREYS = (storey(-3.3, "UG"), storey(0.05, "EG"), storey(3.0, "OG"))


def test_walls_that_begin_below_the_ground_hold_it_and_the_others_are_superstructure() -> None:
    site = site_from(BUILDING, setting=STOREYS)
    assert len(site.walls) == 4
    assert {(wall.top, wall.toe, wall.thickness) for wall in site.walls} == {(-0.3, -3.3, 0.3)}
    assert site.ledger["m.ifc"].reasons == {"superstructure": 5}
    assert sorted(plate.underside or 0.0 for plate in site.plates) == [-3.6, -0.3]


def test_the_ground_level_is_worked_out_from_the_storeys_and_must_be_confirmed() -> None:
    site = site_from(BUILDING, setting=STOREYS)
    assert site.ground_level == 0.05
    (assumption,) = [a for a in site.assumptions if a.code == "ground-level"]
    assert '"EG"' in assumption.basis
    assert assumption.status == "open"
    assert any("ground_level = 0.05" in question.brief_line for question in site.questions)


def test_terrain_tells_the_ground_better_than_storeys() -> None:
    terrain = part("mesh", (0.0, 0.0, -0.8), (50.0, 0.0, -1.0), (0.0, 50.0, -1.2), item="t", cls="IfcSite")
    assert site_from(BUILDING, setting=(*STOREYS, terrain)).ground_level == -1.0


def test_the_brief_rules_the_ground() -> None:
    brief = Brief.model_validate({"site": {"ground_level": -4.0}})
    site = site_from(BUILDING, brief, STOREYS)
    assert site.ground_level == -4.0
    assert "no-basement" in {finding.code for finding in site.findings}
    assert not [a for a in site.assumptions if a.code == "ground-level"]


def test_a_building_without_basement_says_so_and_gives_its_lowest_storey() -> None:
    site = site_from([*walls(0.0, 3.0, "g"), *walls(3.0, 6.0, "o"), slab(-0.3, "s")], setting=STOREYS)
    assert {wall.toe for wall in site.walls} == {0.0}
    (finding,) = [f for f in site.findings if f.code == "no-basement"]
    assert "nothing says that ground is held" in finding.text


def test_beside_a_retaining_wall_the_walls_of_the_building_are_context() -> None:
    sheet = part(
        "path", (-3.0, -3.0, 0.0), (23.0, -3.0, 0.0), item="r", cls="IfcWall", name="Sheet piles", z_bottom=-9.0
    )
    site = site_from([*BUILDING, sheet], setting=STOREYS)
    assert [wall.kind for wall in site.walls] == ["sheet"]
    assert site.ledger["m.ifc"].reasons["wall of the building, others retain"] == 8


def test_an_anchor_known_by_its_properties_has_their_values() -> None:
    # Names and bare numbers as the published research set of anchors has them; its walls are in no file.
    tags = {"Bond length": "4", "Free length": "6", "Pre-stressing force": "30", "Inclination": "15", "Spacing": "2"}
    bar = part("bar", (0.0, 0.0, -2.0), (9.0, 0.0, -4.5), item="a", cls="IfcProxy", tags=tags)
    site = site_from([bar])
    (anchor,) = site.supports
    assert (anchor.role, anchor.free_length, anchor.bond_length, anchor.preload) == ("anchor", 6.0, 4.0, 30.0)
    assert math.dist(anchor.head, anchor.far) == pytest.approx(math.dist((0, -2.0), (9.0, -4.5)))
    assert {a.code for a in site.assumptions} == {"property-unit"}


def test_a_property_that_cannot_be_in_its_unit_is_not_taken() -> None:
    tags = {"Bond length": "4000", "Free length": "6000"}
    bar = part("bar", (0.0, 0.0, -2.0), (9.0, 0.0, -4.5), item="a", cls="IfcProxy", tags=tags)
    site = site_from([bar])
    assert (site.supports[0].free_length, site.supports[0].bond_length) == (None, None)
    assert {finding.code for finding in site.findings} == {"property-value"}


def test_an_action_of_the_model_is_a_load_with_its_value() -> None:
    tags = {"load_kind": "area", "load_value": "25", "load_unit": "kPa"}
    points = tuple((x, y + 20, 0.0) for x, y in RING)
    load = part("outline", *points, item="q", cls="IfcStructuralPlanarAction", closed=True, tags=tags)
    (found,) = site_from([load]).loads
    assert (found.kind, found.value) == ("area", 25.0)


def corpus() -> list[Path]:
    folder = os.environ.get("CUTWORTHY_CORPUS")
    return (
        sorted(path for path in Path(folder).glob("*/*") if path.suffix in (".ifc", ".dxf", ".ags")) if folder else []
    )


def read_or_error(path: Path) -> Site | InputError:
    try:
        return read_site([path])
    except InputError as error:
        return error


@pytest.mark.corpus
@pytest.mark.parametrize("path", corpus(), ids=lambda path: path.name)
def test_every_file_of_the_corpus_is_read_and_its_ledger_adds_up_or_it_is_refused_clearly(path: Path) -> None:
    site = read_or_error(path)
    if isinstance(site, InputError):
        assert site.file == path.name
        assert site.remedy
        return
    book = site.ledger[path.name]
    assert book.entities == book.used + book.context + book.ignored
    assert book.used == sum(book.roles.values())
    assert book.context + book.ignored == sum(book.reasons.values())
    for record in (*site.walls, *site.piles, *site.supports, *site.plates, *site.loads):
        assert record.evidence is not None
        assert record.evidence.why
        assert record.sources[0].file == path.name


@pytest.mark.corpus
def test_piles_stored_as_beams_are_found_in_the_precast_hall() -> None:
    # files.md of the corpus: 48 piles of 360 mm, heads -1.10 and -1.38, toes -9.00, measured from geometry
    (path,) = [path for path in corpus() if path.name.startswith("precast-hall")]
    piles = [pile for pile in read_site([path]).piles if pile.name == "PAAL"]
    assert len(piles) == 48
    assert {round(pile.diameter or 0, 3) for pile in piles} == {0.36}
    assert {round(pile.top or 0, 2) for pile in piles} == {-1.1, -1.38}
    assert {round(pile.toe or 0, 2) for pile in piles} == {-9.0}
