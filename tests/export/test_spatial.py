"""The three-dimensional pair: bodies where they are, hidden parts hidden, and the same length of wall on both sides."""

from __future__ import annotations

import base64
import json
import re
import struct
import zlib
from dataclasses import replace
from math import pi

import numpy as np
import pytest
from builders_export import CORNERS, Job
from hypothesis import given
from hypothesis import strategies as st

from export.report.axonometry import spatial_figure
from export.report.scenes import scenes
from export.report.solids import Solid, bar, extruded, pile, prism, revolved, thick_line
from export.report.still import HEIGHT, INK_INDEX, PAPER_INDEX, WIDTH, common_scale, still_picture, turned
from sections.definition import RingAxis


def volume(solid: Solid) -> float:
    """Volume by the divergence theorem over faces turned outwards from the middle (convex bodies)."""
    middle, total = solid.points.mean(axis=0), 0.0
    for face in solid.faces:
        ring = solid.points[list(face)] - middle
        total += sum(abs(np.dot(ring[0], np.cross(ring[n - 1], ring[n]))) for n in range(2, len(ring))) / 6
    return total


def test_bodies_have_the_volume_of_what_they_stand_for() -> None:
    # width x depth x length; regular eight-sided outline 8/2 r^2 sin(45 deg); thickness x height x length (geometry)
    beam = bar("strut", (0.0, 0.0, 0.0), (3.0, 4.0, 0.0), 0.4, 0.6)
    assert beam is not None
    assert volume(beam) == pytest.approx(0.4 * 0.6 * 5.0)
    assert volume(pile("wall", (2.0, 3.0), 1.0, -10.0, 0.0)) == pytest.approx(10 * 4 * 0.25 * np.sin(pi / 4))
    assert volume(extruded("wall", thick_line((0.0, 0.0), (0.0, -12.0), 0.8), 7.5)) == pytest.approx(0.8 * 12 * 15)
    assert volume(prism("load", [(0, 0), (3, 0), (3, 2), (0, 2)], 0.0, 0.5)) == pytest.approx(3.0)


def test_a_ring_closes_on_itself() -> None:
    ring = revolved("wall", thick_line((10.0, 0.0), (10.0, -8.0), 0.8), turns=12)
    assert len(ring.faces) == 12 * 4
    assert np.hypot(ring.points[:, 0], ring.points[:, 1]) == pytest.approx(np.tile([9.6, 9.6, 10.4, 10.4], 12))
    used = [frozenset((face[n], face[(n + 1) % 4])) for face in ring.faces for n in range(4)]
    assert {used.count(edge) for edge in used} == {2}


def test_a_bar_without_length_is_left_out() -> None:
    assert bar("strut", (1.0, 1.0, 1.0), (1.0, 1.0, 1.0), 0.4, 0.4) is None


@given(st.floats(-180, 180), st.floats(-89, 89))
def test_turning_keeps_lengths(yaw: float, pitch: float) -> None:
    points = np.array([[0.0, 0.0, 0.0], [3.0, 4.0, 12.0]])
    assert np.linalg.norm(np.diff(turned(points, yaw, pitch), axis=0)) == pytest.approx(13.0)


def test_the_first_section_shows_the_real_piles_and_struts_beside_sheets(first_pit: Job) -> None:
    # 15 m of wall: 15 piles at 1.00 m on either side; struts at 2.5 and 7.5 m to either side of the cut run along
    # it (4), those of the other row cross it (4); one footing. Implied: two sheets, one plate, one strip (by hand)
    both = scenes(first_pit.definitions[0], first_pit.proposal, first_pit.site)
    assert both.half == 7.5
    assert {kind: (real, implied) for kind, real, implied in both.counts} == {
        "wall": (30, 2), "strut": (8, 1), "waler": (2, 0), "load": (1, 1),
    }  # fmt: skip
    walls = np.vstack([solid.points for solid in both.real if solid.kind == "wall"])
    assert (walls[:, 2].min(), walls[:, 2].max()) == (-12.0, 0.0)
    assert sorted({round(float(x)) for x in walls[:, 0]}) == [18, 38]


def test_what_differs_is_marked(first_pit: Job) -> None:
    both = scenes(first_pit.definitions[0], first_pit.proposal, first_pit.site)
    assert {solid.kind for solid in both.implied if solid.marked} == {"load"}


def test_walls_without_piles_are_panels_along_their_axis(first_pit: Job) -> None:
    bare = replace(first_pit.site, piles=())
    both = scenes(first_pit.definitions[0], first_pit.proposal, bare)
    panels = [solid for solid in both.real if solid.kind == "wall"]
    assert len(panels) == 2
    assert sum(volume(panel) for panel in panels) == pytest.approx(2 * 15.0 * 0.75 * 12.0)


def test_a_shaft_is_turned_about_its_axis(first_pit: Job) -> None:
    # the same objects read as a ring about the middle of the pit: every body stands within 1.25 r of it
    axis = RingAxis(point=(115.0, 210.0), r_of_wall=10.0)
    wall = first_pit.definitions[0].members[0]
    definition = replace(
        first_pit.definitions[0],
        kind="axisymmetric",
        axis=axis,
        members=(replace(wall, points=((10.0, 0.0), (10.0, -12.0))),),
    )
    both = scenes(definition, first_pit.proposal, first_pit.site)
    (ring,) = [solid for solid in both.implied if solid.kind == "wall"]
    assert np.hypot(ring.points[:, 0], ring.points[:, 1]) == pytest.approx(np.tile([9.625, 9.625, 10.375, 10.375], 36))
    assert CORNERS[0] == (100.0, 200.0)
    assert all(np.abs(solid.points[:, :2]).max() <= 12.5 + 0.5 for solid in both.real if solid.kind != "load")


def pixels(uri: str) -> np.ndarray:
    """Palette indices of a picture, read by the standard's own rules (ISO/IEC 15948: chunks, filter byte 0)."""
    data = base64.b64decode(uri.partition(",")[2])
    assert data[:8] == b"\x89PNG\r\n\x1a\n"
    at, parts = 8, {}
    while at < len(data):
        size, kind = struct.unpack(">I4s", data[at : at + 8])
        body = data[at + 8 : at + 8 + size]
        assert struct.unpack(">I", data[at + 8 + size : at + 12 + size])[0] == zlib.crc32(kind + body)
        parts[kind] = body
        at += 12 + size
    rows = np.frombuffer(zlib.decompress(parts[b"IDAT"]), dtype=np.uint8).reshape(HEIGHT, WIDTH + 1)
    assert not rows[:, 0].any()
    return rows[:, 1:]


def test_a_body_behind_another_is_hidden_whatever_the_order() -> None:
    # seen from the south-west above, the far wall stands wholly behind the near, larger one
    eye = np.array((np.sin(np.radians(38.0)), -np.cos(np.radians(38.0))))
    near = prism("wall", [(-6.0, -6.0), (6.0, -6.0), (6.0, 6.0), (-6.0, 6.0)], -9.0, 9.0)
    far_centre = tuple(-30.0 * eye)
    far = pile("wall", far_centre, 1.0, -24.0, -18.0)  # lowered, since the view looks down
    scale = common_scale((near, far))
    alone = pixels(still_picture((near,), scale))
    assert (pixels(still_picture((near, far), scale)) == alone).all()
    assert (pixels(still_picture((far, near), scale)) == alone).all()
    assert (pixels(still_picture((far,), scale)) != PAPER_INDEX).any()


def test_crossing_bars_hide_each_other_in_turn() -> None:
    # two bars that pierce each other: each one is seen nearest on one half, so the order of drawing does not matter
    a, b = (
        bar("strut", (-5.0, 0.0, -2.0), (5.0, 0.0, 2.0), 0.6, 0.6),
        bar("strut", (-5.0, 0.0, 2.0), (5.0, 0.0, -2.0), 0.6, 0.6),
    )
    assert a is not None
    assert b is not None
    scale = common_scale((a, b))
    one, other = pixels(still_picture((a, b), scale)), pixels(still_picture((b, a), scale))
    assert ((one == INK_INDEX) == (other == INK_INDEX)).mean() > 0.999


def test_the_pair_has_words_data_and_equal_bytes(first_pit: Job) -> None:
    figure = spatial_figure(first_pit.definitions[0], first_pit.proposal, first_pit.site)
    assert figure == spatial_figure(first_pit.definitions[0], first_pit.proposal, first_pit.site)
    assert "wall 30 and 2; strut 8 and 1" in figure
    tree = json.loads(re.search(r'class="scene">(.*?)</script>', figure)[1])  # type: ignore[index]
    assert len(tree["real"]) == 41
    assert {len(tree["builds"][body["b"]]["f"]) for body in tree["real"]} == {10, 6}


def test_a_section_without_a_wall_says_so(first_pit: Job) -> None:
    bare = replace(first_pit.definitions[0], members=())
    assert "no wall that could be drawn" in spatial_figure(bare, first_pit.proposal, first_pit.site)
