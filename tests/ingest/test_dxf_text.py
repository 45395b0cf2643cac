"""Words on a drawing: decoded, placed, with their leaders."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest
from dxf_builder import flat, only_part, parts_of, read, save
from ezdxf.enums import TextEntityAlignment
from ezdxf.tools.text import plain_mtext as library_plain_mtext

from ingest.dxf.reader import read_dxf
from ingest.dxf.text import decode, plain_mtext

# control codes of one-line texts: DXF reference, "TEXT": %%c diameter, %%d degree, %%p plus-minus, %%nnn character
CODES = [
    ("%%c750", "\u00d8750"),
    ("%%p0.00", "\u00b10.00"),
    ("15%%d", "15\u00b0"),
    ("%%uTOE%%u -12.00", "TOE -12.00"),
    ("100%%%", "100%"),
    ("%%065B", "AB"),
    (r"\U+039B\U+0391", "\u039b\u0391"),
    (r"Sohle \U+2205600", "Sohle \u2205600"),
    ("plain", "plain"),
]


@pytest.mark.parametrize(("raw", "plain"), CODES)
def test_control_codes_are_read(raw: str, plain: str) -> None:
    assert decode(raw) == plain


MTEXTS = [
    r"{\fArial|b1;\H1.5x;10no. 600 dia}\P@ 750 c/c\~mm \S1/2; %%c600",
    r"\A1;\C1;+12.50{\L under \l}\Q15;\W0.8;\T1.2; end",
    r"\pi2,l4;indent\Pnext \\ and \{braces\}",
    "tab^Ior not",
    "plain",
]


@pytest.mark.parametrize("raw", MTEXTS)
def test_inline_codes_are_read_as_a_cad_library_reads_them(raw: str) -> None:
    wanted = library_plain_mtext(raw).split()
    assert decode(plain_mtext(raw)).split() == wanted


def test_stacked_text_is_kept_in_one_line() -> None:
    # a tolerance written as one number over the other (DXF reference, "MTEXT": \S with ^ or / or #)
    assert plain_mtext(r"12.50\S+0.02^-0.01;") == "12.50+0.02/-0.01"


def test_bytes_the_code_page_does_not_know_can_still_be_written() -> None:
    assert decode("Stra\udcdfe").encode("utf-8")
    assert decode("a\ud800b").encode("utf-8")


def test_a_text_has_its_place_height_and_turn(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_text("+12.50", height=250, rotation=30, dxfattribs={"layer": "LEVELS"}).set_placement(
            (3000, 4000, 10)
        )

    part = only_part(tmp_path, draw, units=4)
    assert (part.form, part.text, part.layer) == ("text", "+12.50", "LEVELS")
    assert part.points[0] == pytest.approx((3.0, 4.0, 0.01))
    assert float(part.tags["height"]) == pytest.approx(0.25)
    assert float(part.tags["rotation"]) == pytest.approx(30)


def test_an_aligned_text_stands_at_its_alignment_point(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_text("P1", height=0.5).set_placement((3, 4), align=TextEntityAlignment.MIDDLE_CENTER)

    assert flat(only_part(tmp_path, draw)) == [(3, 4)]


def test_formatting_of_a_multi_line_text_is_taken_off(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_mtext(
            r"{\fArial|b1;\H1.5x;10no. 600 dia}\P@ 750 c/c\~mm \S1/2; %%c600", dxfattribs={"insert": (1, 2)}
        )
        space.add_mtext("turned", dxfattribs={"text_direction": (0, 1), "char_height": 0.3})

    first, second = parts_of(tmp_path, draw)
    assert first.text.split("\n")[0] == "10no. 600 dia"
    assert first.text == "10no. 600 dia\n@ 750 c/c mm 1/2 \u00d8600"
    assert float(second.tags["rotation"]) == pytest.approx(90)
    assert float(second.tags["height"]) == pytest.approx(0.3)


def test_empty_texts_are_context(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_text("  ")
        space.add_mtext("{}")

    found = read(tmp_path, draw)
    assert (found.context, found.parts) == ({"empty text": 2}, ())


def test_a_dimension_is_the_text_it_shows_with_the_length_it_measures(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_linear_dim((5, 3), (0, 0), (7.5, 0)).render()
        space.add_linear_dim((5, 3), (0, 0), (7.5, 0), text="5 x 1.50 = <>").render()
        space.add_linear_dim((5, 3), (0, 0), (7.5, 0), text="see plan").render()
        space.add_linear_dim((5, 3), (0, 0), (7.5, 0), override={"dimlfac": 1000}).render()
        space.add_diameter_dim((0, 0), radius=0.45, angle=45).render()
        space.add_radius_dim((0, 0), radius=6, angle=45).render()
        space.add_angular_dim_cra((0, 0), 5, 0, 90, 1).render()
        space.add_linear_dim((5, 3), (0, 0), (7.5, 0), text=" ").render()

    found = read(tmp_path, draw)
    texts = [(part.text, float(part.tags["measured"])) for part in found.parts]
    assert texts == [
        ("7.5", 7.5), ("5 x 1.50 = 7.5", 7.5), ("see plan", 7.5), ("7500", 7.5), ("\u00d80.9", pytest.approx(0.9)),
        ("R6", pytest.approx(6)),
    ]  # fmt: skip
    assert found.context == {"dimension of an angle or an ordinate": 1, "dimension without text": 1}


def test_the_measured_length_of_a_dimension_is_in_metres(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, s: s.add_linear_dim((0, 99), (0, 0), (6500, 0)).render(), units=4)
    assert (part.text, float(part.tags["measured"])) == ("6500", pytest.approx(6.5))


def test_a_leader_gives_its_point_to_the_note_it_names_or_ends_at(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        named = space.add_mtext("named", dxfattribs={"insert": (9, 9), "char_height": 0.25})
        space.add_leader([(1, 1), (8, 8)]).dxf.annotation_handle = named.dxf.handle
        space.add_mtext("near", dxfattribs={"insert": (20, 5), "char_height": 0.25})
        space.add_leader([(15, 0), (17, 5), (19.8, 5)])
        space.add_leader([(100, 0), (200, 5)])

    found = read(tmp_path, draw)
    leaders = {part.text: part.tags.get("leader") for part in found.parts}
    assert leaders == {"named": "1.0 1.0", "near": "15.0 0.0"}
    assert found.context == {"leader line": 3}


def test_a_note_with_leaders_knows_all_its_points(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        from ezdxf.math import Vec2
        from ezdxf.render import mleader

        builder = space.add_multileader_mtext("Standard")
        builder.set_content("150 kPa", char_height=300)
        for tip in ((1000, 1000), (2000, 1000)):
            builder.add_leader_line(mleader.ConnectionSide.left, [Vec2(tip)])
        builder.build(insert=Vec2(5000, 3000))

    part = only_part(tmp_path, draw, units=4)
    tips = [[float(c) for c in tip.split()] for tip in part.tags["leader"].split("; ")]
    assert part.text == "150 kPa"
    assert tips == [pytest.approx([1, 1]), pytest.approx([2, 1])]
    assert math.isclose(float(part.tags["height"]), 0.3)


def test_names_from_hostile_files_stay_plain_data(tmp_path: Path) -> None:
    # what is dangerous in HTML or a table is the writer's business; here nothing may be lost or fail
    nasty = ["<script>alert(1)</script>", "=cmd|'/c calc'!A1", "../../etc/passwd", "\u202eevil"]

    def draw(doc: Any, space: Any) -> None:
        for k, text in enumerate(nasty):
            space.add_text(text).set_placement((k, 0))

    assert [part.text for part in parts_of(tmp_path, draw)] == nasty


def test_undecodable_bytes_in_a_text_are_replaced_not_lost(tmp_path: Path) -> None:
    path = save(tmp_path, lambda doc, space: space.add_text("Gel\u00e4nde"), version="R2010")
    path.write_bytes(path.read_bytes().replace("Gel\u00e4nde".encode(), b"Gel\xe4nde"))
    (part,) = read_dxf(path).parts
    assert part.text.startswith("Gel")
    assert part.text.endswith("nde")
    assert part.text.encode("utf-8")
