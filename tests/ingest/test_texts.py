"""Notes on drawings: the numbers they hold, and the members they speak of."""

from __future__ import annotations

from typing import Any

import pytest

from ingest.brief import Brief
from ingest.members import Point3
from ingest.model import Site
from ingest.parts import FileParts, Part
from ingest.site import site_of
from ingest.texts import Note, read_note
from ingest.trail import Source


# Ways of writing of the trade in several languages (common practice, no source).
@pytest.mark.parametrize(
    ("text", "note"),
    [
        ("10no. 600 dia @ 750 c/c", Note(count=10, diameter=0.6, spacing=0.75)),
        ("CONTIGUOUS BORED PILES 750 DIA @ 1000 C/C", Note(diameter=0.75, spacing=1.0)),
        ("pieux D 600 entraxe 750", Note(diameter=0.6, spacing=0.75)),
        ("8 Stk. Anker a = 2,40 m", Note(count=8, spacing=2.4)),
        ("10x Ø600", Note(count=10, diameter=0.6)),
        ("⌀880", Note(diameter=0.88)),
        ("D=0.75 s=1.20", Note(diameter=0.75, spacing=1.2)),
        ("-1,50", Note(level=-1.5)),
        ("±0.00", Note(level=0.0)),
        ("+4.250 m", Note(level=4.25)),
        ("−3.20", Note(level=-3.2)),
        ("FFL 12.345", Note(level=12.345)),
        ("Kote 45,20", Note(level=45.2)),
        ("Level +125", Note(level=125.0)),
        ("LEVEL -6000", Note(level=-6.0)),
        ("-6000", Note(level=-6.0)),
        ("TOE LEVEL -12.00", Note(toe=-12.0)),
        ("UK -12,50 / OK +0.35", Note(toe=-12.5, top=0.35)),
        ("12 Stk. Bohrpfähle Ø 88 cm, a = 1,00 m", Note(count=12, diameter=0.88, spacing=1.0)),
        ("pilotes Ø800 cada 1,50 m", Note(diameter=0.8, spacing=1.5)),
        ("15 palen rond 600 h.o.h. 1200", Note(count=15, diameter=0.6, spacing=1.2)),
        ("10 pale fi 600 co 75 cm", Note(count=10, diameter=0.6, spacing=0.75)),
        ("12 pali Ø800 int. 1.00", Note(count=12, diameter=0.8, spacing=1.0)),
        ("12 estacas Ø600 afast. 0.75 m", Note(count=12, diameter=0.6, spacing=0.75)),
        ("900Ø @ 1,050 c/c", Note(diameter=0.9, spacing=1.05)),
        ("34.20 mOD", Note(level=34.2)),
        ("45,20 m ü. NN", Note(level=45.2)),
        ("Ø88", Note()),
        ("Ø12/15", Note()),
        ("T16@200", Note()),
        ("150 kPa", Note(load=150.0, load_unit="kPa")),
        ("q = 20 kN/m²", Note(load=20.0, load_unit="kPa")),
        ("50 kN/m", Note(load=50.0, load_unit="kN/m")),
        ("P=400kN", Note(load=400.0, load_unit="kN")),
        ("2,5 MN", Note(load=2500.0, load_unit="kN")),
        ("γ = 18 kN/m³", Note()),
        ("M = 40 kNm", Note()),
        ("su = 75 kPa", Note()),
        ("1,200 kN", Note()),
        ("1 200 kN", Note()),
        ("TOP OF WALL +2.00\nTOE -14.00", Note(top=2.0, toe=-14.0)),
    ],
)
def test_a_note_tells_its_numbers(text: str, note: Note) -> None:
    assert read_note(text) == note


@pytest.mark.parametrize(
    "text",
    [
        "12",
        "2F",
        "BH01",
        "A-12",
        "1:100",
        "12-05-2020",
        "SECTION A-A",
        "LEVEL 2 PLAN",
        "Rev -1",
        "CHS 508x16",
        "-3.2.1",
    ],
)
def test_what_is_no_level_is_none(text: str) -> None:
    assert read_note(text) == Note()


def part(form: str, *points: Point3, item: str, **more: Any) -> Part:
    return Part(source=Source(file="a.dxf", item=item), form=form, points=points, **more)  # type: ignore[arg-type]


def text_at(x: float, y: float, words: str, item: str, layer: str = "TEXT", **tags: str) -> Part:
    return part("text", (x, y, 0.0), item=item, layer=layer, text=words, tags={"height": "0.25", **tags})


def site_from(*parts: Part) -> Site:
    file = FileParts(
        file="a.dxf", sha256="0" * 64, kind="dxf", schema_or_version="x", length_unit="m", unit_scale=1.0,
        entities=len(parts), parts=parts,
    )  # fmt: skip
    return site_of([file], Brief())


STRUTS = tuple(part("path", (5.0 * n, 0.0, 0.0), (5.0 * n, 20.0, 0.0), item=f"s{n}", layer="STRUTS") for n in range(4))
PILES = tuple(part("circle", (float(n), 0.0, 0.0), item=f"p{n}", layer="WALL PILES", radius=0.375) for n in range(12))


def test_a_level_on_the_layer_of_the_struts_is_theirs() -> None:
    site = site_from(*STRUTS, text_at(5.3, 10.0, "-1.50", "t", layer="STRUTS"))
    assert [(s.head[2], s.level_given) for s in site.supports] == [(-1.5, True)] * 4
    assert [a.code for a in site.assumptions] == ["text-level"]
    assert site.ledger["a.dxf"].used == 5


def test_a_level_beside_a_strut_on_another_layer_may_be_the_ground_and_is_left_alone() -> None:
    site = site_from(*STRUTS, text_at(5.3, 10.0, "+4.20", "t", layer="SPOT LEVELS"))
    assert not any(s.level_given for s in site.supports)
    assert site.ledger["a.dxf"].reasons == {"text that names no member": 1}


def test_a_leader_names_its_member_wherever_the_text_stands() -> None:
    site = site_from(*STRUTS, text_at(100.0, 100.0, "-2.50", "t", leader="10.0 3.0"))
    assert {s.head[2] for s in site.supports} == {-2.5}


def test_levels_that_differ_hold_for_their_own_member_only() -> None:
    notes = [text_at(0.3, 10.0, "STRUT -1.50", "a"), text_at(5.3, 10.0, "STRUT -4.00", "b")]
    site = site_from(*STRUTS, *notes)
    by_x = {s.head[0]: (s.head[2] if s.level_given else None) for s in site.supports}
    assert by_x == {0.0: -1.5, 5.0: -4.0, 10.0: None, 15.0: None}
    assert "text-levels-differ" in {finding.code for finding in site.findings}


def test_toe_and_top_are_read_from_a_note_beside_the_wall() -> None:
    site = site_from(*PILES, text_at(3.0, 0.8, "TOP +1.00 TOE -12.00", "t"))
    assert {(pile.top, pile.toe) for pile in site.piles} == {(1.0, -12.0)}


CRANE = part(
    "path",
    (20.0, 5.0, 0.0),
    (24.0, 5.0, 0.0),
    (24.0, 8.0, 0.0),
    (20.0, 8.0, 0.0),
    item="l",
    layer="SURCHARGE",
    closed=True,
)


def test_a_load_written_on_it_is_its_value_and_assumed() -> None:
    site = site_from(*PILES, CRANE, text_at(22.0, 6.0, "q = 20 kN/m²", "t"))
    assert [(load.kind, load.value) for load in site.loads] == [("area", 20.0)]
    assert "load-note" in {assumption.code for assumption in site.assumptions}


@pytest.mark.parametrize("words", ["50 kN/m", "su = 75 kPa", "-2.50"])
def test_what_is_no_load_of_its_kind_gives_it_no_value(words: str) -> None:
    site = site_from(*PILES, CRANE, text_at(22.0, 6.0, words, "t"))
    assert [load.value for load in site.loads] == [None]


@pytest.mark.parametrize(("words", "code"), [("600 DIA", "diameter-differs"), ("750 DIA @ 900 C/C", "spacing-differs")])
def test_a_note_that_the_drawing_contradicts_is_a_finding(words: str, code: str) -> None:
    site = site_from(*PILES, text_at(3.0, 0.8, words, "t"))
    assert code in {finding.code for finding in site.findings}


def test_a_note_that_the_drawing_bears_out_is_none() -> None:
    assert not site_from(*PILES, text_at(3.0, 0.8, "750 DIA @ 1000 C/C", "t")).findings
