"""Roles: what a layer, a class and a place say, in the order of their weight."""

from __future__ import annotations

import pytest

from ingest.brief import Brief
from ingest.members import BarSection, Point3
from ingest.parts import Part
from ingest.roles import RoleGiven, find_roles
from ingest.trail import Source
from ingest.words import find_meanings, split_words


def part(form: str, *points: Point3, item: str = "1", file: str = "a.dxf", **more: object) -> Part:
    return Part(source=Source(file=file, item=item), form=form, points=points, **more)  # type: ignore[arg-type]


def role_of(one: Part, brief: Brief | None = None) -> RoleGiven:
    return find_roles([one], brief or Brief())[0]


# Words of the trade in nine languages (common practice, no source).
@pytest.mark.parametrize(
    ("layer", "role", "kind"),
    [
        ("WALL-PILES-CONTIGUOUS", "wall", "contiguous"),
        ("Bohrpfahlwand überschnitten", "wall", "secant"),
        ("SCHLITZWAENDE", "wall", "diaphragm"),
        ("SPUNDWAND_NORD", "wall", "sheet"),
        ("Berliner Verbau", "wall", "king_post"),
        ("Paroi moulée", "wall", "diaphragm"),
        ("PALPLANCHES", "wall", "sheet"),
        ("pieux sécants", "wall", "secant"),
        ("MURO PANTALLA", "wall", "diaphragm"),
        ("TABLESTACAS", "wall", "sheet"),
        ("PARATIA DI PALI", "wall", None),
        ("DIAFRAMMI", "wall", "diaphragm"),
        ("Damwand", "wall", "sheet"),
        ("Diepwand", "wall", "diaphragm"),
        ("Parede moldada", "wall", "diaphragm"),
        ("ESTACAS-PRANCHA", "wall", "sheet"),
        ("ściana szczelinowa", "wall", "diaphragm"),
        ("Ścianka szczelna", "wall", "sheet"),
        ("Spontvägg", "wall", "sheet"),
        ("Slitsmur", "wall", "diaphragm"),
        ("STRUTS L1", "strut", None),
        ("Aussteifung", "strut", None),
        ("BUTONS", "strut", None),
        ("Puntales", "strut", None),
        ("PUNTONI", "strut", None),
        ("Stempels", "strut", None),
        ("Escoras", "strut", None),
        ("Rozpory", "strut", None),
        ("Stravor", "strut", None),
        ("Ecksteifen", "corner_strut", None),
        ("RAKERS", "raker", None),
        ("Verpressanker", "anchor", None),
        ("TIRANTS", "anchor", None),
        ("anclajes", "anchor", None),
        ("Groutankers", "anchor", None),
        ("Kotwy", "anchor", None),
        ("Gurtung", "waler", None),
        ("LIERNES", "waler", None),
        ("Hammarband", "waler", None),
        ("Capping Beam", "waler", None),
        ("RADIER", "slab", None),
        ("Bodenplatte", "slab", None),
        ("PLINTI", "footing", None),
        ("Sapatas", "footing", None),
        ("SŁUPY", "column", None),
        ("Sobrecargas", "load", None),
        ("Nachbargebäude", "receptor", None),
        ("ÉGOUT", "receptor", None),
        ("0", "context", None),
        ("WALL-TEXT", "context", None),
        ("GRID", "context", None),
    ],
)
def test_a_layer_name_tells_the_role(layer: str, role: str, kind: str | None) -> None:
    given = role_of(part("path", (0.0, 0.0, 0.0), (9.0, 0.0, 0.0), layer=layer))
    assert (given.role, given.wall_kind) == (role, kind), given.evidence.why


@pytest.mark.parametrize("name", ["Hijsanker", "Boutanker", "ANKER_M16", "ANCHOR BOLT", "Lifting anchor", "BALKONPAAL"])
def test_bolts_lifting_anchors_and_posts_are_no_ground_anchors_or_piles(name: str) -> None:
    assert find_meanings(name) == ()


def test_the_longer_phrase_wins() -> None:
    assert [m.role for m in find_meanings("PILE CAP")] == ["footing"]
    assert [m.role for m in find_meanings("corner strut")] == ["corner_strut"]


def test_names_break_at_signs_digits_and_capitals() -> None:
    assert split_words("xref$0$A-WALLBase_D750") == ("xref", "0", "a", "wallbase", "d", "750")
    assert split_words("KingPostÜber") == ("king", "postuber")


def test_a_close_row_of_piles_is_a_wall_and_a_grid_of_piles_is_not() -> None:
    row = [part("circle", (float(n), 0.0, 0.0), radius=0.375, layer="PILES", item=f"r{n}") for n in range(8)]
    grid = [
        part("circle", (3.0 * i, 50 + 3.0 * j, 0.0), radius=0.3, layer="PILES", item=f"g{i}-{j}")
        for i in range(4)
        for j in range(4)
    ]
    roles = [given.role for given in find_roles([*row, *grid], Brief())]
    assert roles == ["wall"] * 8 + ["bearing_pile"] * 16


def test_overlapping_piles_are_secant() -> None:
    row = [part("circle", (0.6 * n, 0.0, 0.0), radius=0.375, layer="PILES", item=f"{n}") for n in range(8)]
    assert {given.wall_kind for given in find_roles(row, Brief())} == {"secant"}


def test_a_dense_field_of_circles_is_no_row() -> None:
    field = [part("circle", (0.8 * i, 0.8 * j, 0.0), radius=0.3, item=f"{i}-{j}") for i in range(6) for j in range(6)]
    assert {given.role for given in find_roles(field, Brief())} == {"context"}


def test_a_beam_that_stands_round_below_the_lowest_slab_is_a_pile() -> None:
    # The pattern of the precast hall of the corpus: IfcBeam named PAAL, radius 180 mm, head -1.10, toe -9.00.
    slab = part(
        "prism", (0.0, 0.0, -1.0), (20.0, 0.0, -1.0), (20.0, 20.0, -1.0), (0.0, 20.0, -1.0),
        cls="IfcSlab", z_bottom=-1.0, z_top=-0.8, item="s",
    )  # fmt: skip
    pile = part(
        "bar", (5.0, 5.0, -1.1), (5.0, 5.0, -9.0),
        cls="IfcBeam", name="PAAL", radius=0.18, section=BarSection(designation="R360"), item="p",
    )  # fmt: skip
    post = part("bar", (5.0, 9.0, 6.0), (5.0, 9.0, 3.0), cls="IfcBeam", name="R48", radius=0.024, item="q")
    given = find_roles([slab, pile, post], Brief())
    assert [g.role for g in given] == ["slab", "bearing_pile", "context"]
    assert "lowest slab" in given[1].evidence.why
    assert "paal" in given[1].evidence.why


def test_an_inclined_bar_behind_the_walls_is_an_anchor_and_one_between_them_a_raker() -> None:
    ring = ((0.0, 0.0, 0.0), (20.0, 0.0, 0.0), (20.0, 20.0, 0.0), (0.0, 20.0, 0.0))
    wall = part("path", *ring, closed=True, layer="SHEET PILES", item="w")
    out = part("bar", (0.0, 10.0, -2.0), (-10.0, 10.0, -6.0), cls="IfcProxy", item="a")
    inside = part("bar", (0.0, 5.0, -2.0), (5.0, 5.0, -6.0), cls="IfcMember", item="b")
    assert [given.role for given in find_roles([wall, out, inside], Brief())] == ["wall", "anchor", "raker"]


def test_the_brief_overrides_everything() -> None:
    brief = Brief.model_validate(
        {"roles": ({"match": {"layer": "struts*"}, "role": "anchor"}, {"match": {"id": "7"}, "role": "ignore"})}
    )
    line = ((0.0, 0.0, 0.0), (9.0, 0.0, 0.0))
    given = find_roles([part("path", *line, layer="STRUTS", item="1"), part("path", *line, item="7")], brief)
    assert [g.role for g in given] == ["anchor", "ignore"]
    assert given[0].evidence.confidence == 1.0


def test_two_close_readings_become_a_question_with_the_line_that_settles_it() -> None:
    ring = ((0.0, 0.0, 0.0), (3.0, 0.0, 0.0), (3.0, 2.0, 0.0), (0.0, 2.0, 0.0))
    given = role_of(part("path", *ring, closed=True, layer="FOOTING-NEIGHBOUR"))
    assert given.question is not None
    assert [reading.reading for reading in given.question.readings] == ["footing", "receptor"]
    assert given.question.brief_line == '[[roles]]\nmatch = { layer = "FOOTING-NEIGHBOUR" }\nrole = "footing"'


def test_a_text_on_a_strut_layer_is_no_strut() -> None:
    assert role_of(part("text", (0.0, 0.0, 0.0), layer="STRUTS", text="-1.50")).role == "level"


@pytest.mark.parametrize(
    ("cls", "role"),
    [
        ("IfcWallStandardCase", "wall"),
        ("IfcFooting", "footing"),
        ("IfcSlab.BASESLAB", "slab"),
        ("IfcColumn", "column"),
        ("IfcDoor", "context"),
        ("IfcReinforcingBar", "context"),
        ("IfcBeam", "context"),
        ("IfcPile", "bearing_pile"),
        ("IfcStructuralPlanarAction", "load"),
        ("IfcGeotechnicalStratum", "stratum"),
    ],
)
def test_a_class_tells_the_role(cls: str, role: str) -> None:
    ring = ((0.0, 0.0, 0.0), (3.0, 0.0, 0.0), (3.0, 2.0, 0.0), (0.0, 2.0, 0.0))
    assert role_of(part("prism", *ring, cls=cls)).role == role


def test_a_retaining_wall_by_type_is_told_from_a_wall_of_the_building() -> None:
    line = ((0.0, 0.0, 0.0), (9.0, 0.0, 0.0))
    assert role_of(part("path", *line, cls="IfcWall.RETAININGWALL")).retaining
    assert not role_of(part("path", *line, cls="IfcWall.SOLIDWALL")).retaining
