"""Two faces, panel outlines and hatches to a centre line with its thickness."""

from __future__ import annotations

import numpy as np
import pytest
from pit_lines import BOX, lines, only

from ingest.members import WallPiece
from ingest.model import Site
from ingest.trail import Source
from sections.perimeter.double_lines import centre_lines
from sections.perimeter.perimeter import find_shapes


def faces(*ends, drawn="face", **more):
    return [(k, WallPiece(id=f"f{k}", axis=e, drawn=drawn, kind="concrete", **more)) for k, e in enumerate(ends)]


def middles(pieces):
    centred, questions = centre_lines(pieces, (0.0, 0.0))
    found = sorted((round(float(line[:, 1].mean()), 4), round(thick, 4)) for _, line, thick in centred.middles)
    return found, questions


def grown(by):
    return ((-by, -by), (30.0 + by, -by), (30.0 + by, 20.0 + by), (-by, 20.0 + by))


@pytest.mark.parametrize("drawn", ["face", "outline", "hatch"])
def test_the_two_rings_of_a_wall_give_its_middle_and_thickness(drawn):
    source = {by: Source(file="plan.dxf", item=f"{by}") for by in (0.4, -0.4)}
    walls = tuple(
        WallPiece(id=f"r{by}", axis=grown(by), closed=True, drawn=drawn, kind="diaphragm", sources=(mine,))
        for by, mine in source.items()
    )
    shape = only(Site(walls=walls))
    assert shape.axis == pytest.approx(np.array(BOX))
    assert shape.runs[0].wall.thickness == pytest.approx(0.8)
    assert set(shape.runs[0].wall.sources) == set(source.values())


def test_panels_drawn_by_their_outlines_make_one_wall():
    walls = []
    for a, b in zip(BOX, (*BOX[1:], BOX[0]), strict=True):
        a, b = np.array(a), np.array(b)
        u = (b - a) / np.hypot(*(b - a))
        n = 0.4 * np.array([-u[1], u[0]])
        for k in range(5):
            p, q = a + (b - a) * k / 5 + 0.01 * u, a + (b - a) * (k + 1) / 5 - 0.01 * u
            walls.append(WallPiece(id=f"p{len(walls)}", axis=tuple(map(tuple, (p - n, q - n, q + n, p + n))),
                                   closed=True, drawn="outline", kind="diaphragm"))  # fmt: skip
    shape = only(Site(walls=tuple(walls)))
    assert shape.axis == pytest.approx(np.array(BOX), abs=1e-6)
    assert [(r.wall.kind, round(r.wall.thickness, 6)) for r in shape.runs] == [("diaphragm", 0.8)]


def test_a_bent_body_gives_two_centre_lines_that_meet_in_the_corner():
    # An L of 0.6 m walls, outside 10 x 8 m: centre lines along y = 0.3 and x = 0.3.
    body = ((0.0, 0.0), (10.0, 0.0), (10.0, 0.6), (0.6, 0.6), (0.6, 8.0), (0.0, 8.0))
    centred, _ = centre_lines(faces(body, drawn="outline", closed=True), (0.0, 0.0))
    assert sorted(tuple(np.round(line.mean(axis=0), 3)) for _, line, _ in centred.middles) == [(0.3, 4.3), (5.3, 0.3)]
    assert [round(t, 6) for *_, t in centred.middles] == [0.6, 0.6]


def test_one_long_face_answers_to_two_short_ones():
    found, _ = middles(faces(((0.0, 0.0), (20.0, 0.0)), ((0.0, 0.3), (8.0, 0.3)), ((8.2, 0.3), (20.0, 0.3))))
    assert found == [(0.15, 0.3), (0.15, 0.3)]


@pytest.mark.parametrize("gap", [0.2, 0.4, 0.6])
def test_the_leaves_of_a_cavity_wall_are_not_paired_across_the_cavity(gap):
    # Two leaves of 0.30 m with a clear gap: nearest first would take a narrow cavity for a wall.
    levels = (0.0, 0.3, 0.3 + gap, 0.6 + gap)
    found, questions = middles(faces(*(((0.0, y), (12.0, y)) for y in levels)))
    assert found == [(0.15, 0.3), (round(0.45 + gap, 4), 0.3)]
    assert questions == ()


def test_three_lines_at_equal_distances_are_asked_about():
    _, questions = middles(faces(*(((0.0, y), (12.0, y)) for y in (0.0, 0.3, 0.6))))
    assert len(questions) >= 1
    assert "faces" in questions[0].about


def test_an_end_cap_settles_which_faces_belong_together():
    drawn = [((0.0, y), (12.0, y)) for y in (0.0, 0.3, 0.6)]
    caps = [((0.0, 0.3), (0.0, 0.6)), ((12.0, 0.3), (12.0, 0.6))]
    found, questions = middles(faces(*drawn, *caps))
    assert (0.45, 0.3) in found
    assert questions == ()


def test_a_face_without_a_second_face_is_taken_as_the_line_and_reported():
    walls = tuple(WallPiece(id=w.id, axis=w.axis, drawn="face", kind="diaphragm") for w in lines(BOX))
    shapes, findings, _ = find_shapes(Site(walls=walls))
    assert shapes[0].axis == pytest.approx(np.array(BOX))
    assert shapes[0].runs[0].wall.thickness is None
    assert [f.code for f in findings] == ["single-face"]


def test_lines_called_axes_that_run_in_pairs_are_read_as_faces_and_asked_about():
    walls = tuple(WallPiece(id=f"r{by}", axis=grown(by), closed=True, kind="diaphragm", layer="DW")
                  for by in (0.4, -0.4))  # fmt: skip
    shapes, _, questions = find_shapes(Site(walls=walls))
    assert [s.length for s in shapes] == pytest.approx([100.0])
    assert [q.id for q in questions] == ["faces-or-axes-1"]


def test_sheet_piling_drawn_by_its_profile_has_its_axis_through_the_webs():
    walls = []
    for a, b in zip(((0, 0), (21, 0), (21, 14), (0, 14)), ((21, 0), (21, 14), (0, 14), (0, 0)), strict=True):
        a, b = np.array(a, dtype=float), np.array(b, dtype=float)
        u = (b - a) / np.hypot(*(b - a))
        n = np.array([-u[1], u[0]])
        sides = [(0.2 if k % 2 else -0.2) for k in range(round(np.hypot(*(b - a)) / 0.7))]
        points = [a + (0.7 * k + s) * u + y * n for k, y in enumerate(sides) for s in (0.1, 0.6)]
        walls.append(WallPiece(id=f"s{len(walls)}", axis=tuple(map(tuple, points)), kind="sheet"))
    shape = only(Site(walls=tuple(walls)))
    assert shape.axis == pytest.approx(np.array([(0, 0), (21, 0), (21, 14), (0, 14)]), abs=1e-6)
