"""Lines, polylines, arcs and areas of a drawing as parts in metres; expected numbers by hand unless said."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ezdxf
import numpy as np
import pytest
from dxf_builder import flat, only_part, parts_of, read
from ezdxf.math import Vec3

MIRROR = {"extrusion": (0, 0, -1)}


def test_a_line_in_millimetres_comes_in_metres_with_its_level_and_handle(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_line((1000, 2000, -1500), (4000, 6000, -1500), dxfattribs={"layer": "STRUTS", "handle": "ABC"})

    part = only_part(tmp_path, draw, units=4)
    assert (part.form, part.cls, part.layer, part.source.item) == ("path", "LINE", "STRUTS", "ABC")
    assert np.array(part.points) == pytest.approx(np.array([(1.0, 2.0, -1.5), (4.0, 6.0, -1.5)]))
    assert not part.closed


@pytest.mark.parametrize(
    ("code", "metre"), [(6, 1.0), (4, 0.001), (5, 0.01), (1, 0.0254), (2, 0.3048), (21, 1200 / 3937)]
)
def test_the_declared_unit_scales_every_length(tmp_path: Path, code: int, metre: float) -> None:
    width = 30 / metre

    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline([(0, 0), (width, 0), (width, 20 / metre)])
        space.add_circle((0, 0), 0.375 / metre)

    line, circle = parts_of(tmp_path, draw, units=code)
    assert np.array(line.points) == pytest.approx(np.array([(0, 0, 0), (30, 0, 0), (30, 20, 0)]))
    assert circle.radius == pytest.approx(0.375)


def test_a_closed_polyline_does_not_repeat_its_first_vertex(tmp_path: Path) -> None:
    square = [(0, 0), (4, 0), (4, 3), (0, 3)]

    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline(square, close=True)
        space.add_lwpolyline([*square, square[0]])
        space.add_polyline2d(square, close=True)

    for part in parts_of(tmp_path, draw):
        assert part.closed
        assert flat(part) == [(0, 0), (4, 0), (4, 3), (0, 3)]


def test_an_open_polyline_does_not_curve_back_to_its_start(tmp_path: Path) -> None:
    # the last vertex keeps a bulge that belongs to no segment
    part = only_part(tmp_path, lambda doc, space: space.add_lwpolyline([(0, 0, 0), (4, 0, 1)], format="xyb"))
    assert flat(part) == [(0, 0), (4, 0)]


def test_a_bulged_polyline_runs_along_its_arc(tmp_path: Path) -> None:
    # M17 BG1: b = 1, c = 10 -> R 5, half a turn; recalled, arithmetic by hand
    part = only_part(
        tmp_path, lambda doc, space: space.add_lwpolyline([(0, 0, 1), (10, 0, 0), (10, 8, 0)], format="xyb")
    )
    arc = np.array(part.points)[:-1, :2]
    assert np.hypot(arc[:, 0] - 5, arc[:, 1]) == pytest.approx(5.0)
    assert arc[:, 1].min() == pytest.approx(-5.0, abs=0.005)
    assert part.points[-1] == (10, 8, 0)


def test_a_bulge_in_a_drawing_in_millimetres_keeps_five_millimetres_too(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline([(0, 0, 1), (10_000, 0, 0)], format="xyb")

    part = only_part(tmp_path, draw, units=4)
    points = np.array(part.points)[:, :2]
    middles = (points[1:] + points[:-1]) / 2
    assert 5 - np.hypot(middles[:, 0] - 5, middles[:, 1]).min() <= 0.005
    assert len(points) < 40


def test_width_of_a_polyline_is_its_thickness_and_elevation_its_level(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline([(0, 0), (9, 0)], dxfattribs={"const_width": 0.8, "elevation": -3.5})
        space.add_lwpolyline([(0, 0, 0.6, 0.6), (9, 0, 0.6, 0.6)])
        space.add_lwpolyline([(0, 0, 0.6, 0.2), (9, 0, 0.6, 0.6)])
        space.add_polyline2d([(0, 0, 0.5, 0.5), (9, 0, 0.5, 0.5)], format="xyse")

    constant, even, tapered, old = parts_of(tmp_path, draw)
    assert constant.thickness == 0.8
    assert constant.points == ((0, 0, -3.5), (9, 0, -3.5))
    assert (even.thickness, tapered.thickness, old.thickness) == (0.6, None, 0.5)


def test_extruded_height_bounds_a_part_in_level(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_circle((0, 0, -12), 0.4, dxfattribs={"thickness": 12}))
    assert (part.z_bottom, part.z_top) == (-12, 0)


def test_a_circle_stays_a_circle(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_circle((7, 8, -1), 0.375))
    assert (part.form, part.points, part.radius, part.closed) == ("circle", ((7, 8, -1),), 0.375, True)


def test_a_ring_of_two_half_circles_is_a_circle_out_to_its_edge(tmp_path: Path) -> None:
    # drawn as a filled dot: middle line 0.2 m, width 0.4 m, so a disc of 0.4 m radius
    def draw(doc: Any, space: Any) -> None:
        dot = [(0.8, 2, 1), (1.2, 2, 1)]
        space.add_lwpolyline(dot, format="xyb", close=True, dxfattribs={"const_width": 0.4})

    part = only_part(tmp_path, draw)
    assert (part.form, part.radius, flat(part)) == ("circle", pytest.approx(0.4), [(1, 2)])


def test_mirrored_extrusion_puts_plane_entities_on_the_other_side(tmp_path: Path) -> None:
    # the arbitrary axis rule of the DXF reference turns x round for a normal of (0, 0, -1)
    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline([(1, 2), (3, 2)], dxfattribs=MIRROR)
        space.add_circle((5, 6), 1, dxfattribs=MIRROR)
        space.add_arc((0, 0), 2, 0, 90, dxfattribs=MIRROR)
        space.add_line((1, 2), (3, 2), dxfattribs=MIRROR)
        space.add_solid([(1, 0), (2, 0), (1, 1), (2, 1)], dxfattribs=MIRROR)
        space.add_text("A", dxfattribs=MIRROR).set_placement((4, 4))

    line, circle, arc, world, solid, text = parts_of(tmp_path, draw)
    assert flat(line) == [(-1, 2), (-3, 2)]
    assert flat(circle) == [(-5, 6)]
    assert (flat(arc)[0], flat(arc)[-1]) == ((-2, 0), (0, 2))
    assert flat(world) == [(1, 2), (3, 2)]
    assert sorted(flat(solid)) == [(-2, 0), (-2, 1), (-1, 0), (-1, 1)]
    assert flat(text) == [(-4, 4)]


def test_a_circle_standing_upright_is_a_ring_in_space(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_circle((0, 0, 0), 1, dxfattribs={"extrusion": (1, 0, 0)}))
    points = np.array(part.points)
    assert (part.form, part.closed) == ("path", True)
    assert points[:, 0] == pytest.approx(0.0)
    assert points[:, 2].max() == pytest.approx(1.0, abs=0.005)


def test_an_arc_runs_counter_clockwise_and_keeps_its_centre(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_arc((10, 0), 2, 270, 90))
    assert flat(part)[0] == (10, -2)
    assert flat(part)[-1] == (10, 2)
    assert max(x for x, _ in flat(part)) == pytest.approx(12, abs=0.005)
    assert [float(c) for c in part.tags["arc_centre"].split()] == [10, 0]
    assert float(part.tags["arc_radius"]) == 2


def test_a_full_ellipse_closes_and_half_an_ellipse_does_not(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_ellipse((0, 0), major_axis=(4, 0), ratio=0.5)
        space.add_ellipse((0, 0), major_axis=(0, 4), ratio=0.5, start_param=0, end_param=math.pi)
        space.add_ellipse((0, 0), major_axis=(3, 0), ratio=1.0)

    whole, half, circle = parts_of(tmp_path, draw)
    assert whole.closed
    assert max(y for _, y in flat(whole)) == pytest.approx(2, abs=0.005)
    assert (half.closed, flat(half)[0], flat(half)[-1]) == (False, (0, 4), (0, -4))
    assert min(x for x, _ in flat(half)) == pytest.approx(-2, abs=0.005)
    assert (circle.form, circle.radius) == ("circle", pytest.approx(3))


def test_a_spline_follows_its_curve_within_five_millimetres(tmp_path: Path) -> None:
    # degree 2 with one span: the parabola y = x (4 - x) / 4 through (0,0), (2,1), (4,0); Bezier form by hand
    def draw(doc: Any, space: Any) -> None:
        spline = space.add_spline(degree=2)
        spline.control_points = [(0, 0), (2, 2), (4, 0)]
        spline.knots = [0, 0, 0, 1, 1, 1]

    points = np.array(only_part(tmp_path, draw).points)
    assert points[:, 1] == pytest.approx(points[:, 0] * (4 - points[:, 0]) / 4, abs=1e-9)
    middle = (points[1:] + points[:-1]) / 2
    assert np.abs(middle[:, 0] * (4 - middle[:, 0]) / 4 - middle[:, 1]).max() <= 0.005


def test_a_spline_without_enough_knots_is_left_aside_with_the_reason(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        spline = space.add_spline(degree=3)
        spline.control_points = [(0, 0), (1, 1), (2, 0), (3, 1)]
        spline.knots = [0, 0, 0, 1, 1]

    found = read(tmp_path, draw)
    (reason,) = found.ignored
    assert reason.startswith("spline cannot be drawn")
    assert any(finding.code == "spline-not-drawn" for finding in found.findings)


def test_solids_and_faces_are_outlines_in_the_right_order(tmp_path: Path) -> None:
    # a SOLID lists its third and fourth corners crosswise (DXF reference), a 3DFACE does not
    def draw(doc: Any, space: Any) -> None:
        space.add_solid([(0, 0), (3, 0), (0, 2), (3, 2)])
        space.add_3dface([(0, 0, 1), (3, 0, 1), (3, 2, 2), (0, 2, 2)])
        space.add_trace([(0, 0), (3, 0), (0, 2), (0, 2)])

    solid, face, trace = parts_of(tmp_path, draw)
    assert flat(solid) == [(0, 0), (3, 0), (3, 2), (0, 2)]
    assert face.points == ((0, 0, 1), (3, 0, 1), (3, 2, 2), (0, 2, 2))
    assert sorted(flat(trace)) == [(0, 0), (0, 2), (3, 0)]
    assert {part.form for part in (solid, face, trace)} == {"outline"}


def test_a_hatch_has_its_outer_ring_its_hole_and_its_island(tmp_path: Path) -> None:
    def ring(size: float) -> list[tuple[float, float]]:
        return [(-size, -size), (size, -size), (size, size), (-size, size)]

    def draw(doc: Any, space: Any) -> None:
        hatch = space.add_hatch()
        for size in (2, 5, 1, 4):
            hatch.paths.add_polyline_path(ring(size))

    outer, island = sorted(parts_of(tmp_path, draw), key=lambda p: -max(x for x, _ in flat(p)))
    assert (outer.form, outer.cls) == ("outline", "HATCH")
    assert sorted(flat(outer)) == sorted(ring(5))
    assert [sorted((x, y) for x, y, _ in hole) for hole in outer.holes] == [sorted(ring(4))]
    assert sorted(flat(island)) == sorted(ring(2))
    assert len(island.holes) == 1
    assert outer.source == island.source


def test_hatch_edges_are_chained_whichever_way_they_run(tmp_path: Path) -> None:
    # half disc of radius 3 on a square of side 6: area 36 + 9 pi / 2
    def draw(doc: Any, space: Any) -> None:
        hatch = space.add_hatch(dxfattribs={"elevation": (0, 0, -2)})
        path = hatch.paths.add_edge_path()
        path.add_line((0, 0), (6, 0))
        path.add_line((6, 6), (6, 0))
        path.add_arc((3, 6), 3, 0, 180, ccw=True)
        path.add_line((0, 6), (0, 0))

    part = only_part(tmp_path, draw)
    x, y = np.array(part.points)[:, :2].T
    area = abs(np.dot(x, np.roll(y, -1)) - np.dot(y, np.roll(x, -1))) / 2
    assert area == pytest.approx(36 + 4.5 * math.pi, rel=2e-3)
    assert {z for _, _, z in part.points} == {-2}


@pytest.mark.parametrize("ccw", [True, False])
def test_hatch_arcs_and_ellipses_run_both_ways(tmp_path: Path, ccw: bool) -> None:
    # square of side 10, half disc of radius 5 on its right, half ellipse 5 x 2 on its top
    def draw(doc: Any, space: Any) -> None:
        path = space.add_hatch().paths.add_edge_path()
        edges = [
            lambda: path.add_line(*(((0, 0), (10, 0)) if ccw else ((10, 0), (0, 0)))),
            lambda: path.add_arc((10, 5), 5, -90, 90, ccw=ccw),
            lambda: path.add_ellipse((5, 10), (5, 0), 0.4, 0, 180, ccw=ccw),
            lambda: path.add_line(*(((0, 10), (0, 0)) if ccw else ((0, 0), (0, 10)))),
        ]
        for edge in edges if ccw else reversed(edges):
            edge()

    part = only_part(tmp_path, draw)
    x, y = np.array(part.points)[:, :2].T
    area = abs(np.dot(x, np.roll(y, -1)) - np.dot(y, np.roll(x, -1))) / 2
    assert area == pytest.approx(100 + 12.5 * math.pi + 5 * math.pi, rel=2e-3)
    assert (x.max(), y.max()) == (pytest.approx(15, abs=0.005), pytest.approx(12, abs=0.005))


def test_a_round_hatch_is_a_circle(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        hatch = space.add_hatch()
        hatch.paths.add_edge_path().add_arc((3, 4), 0.45, 0, 360)

    part = only_part(tmp_path, draw)
    assert (part.form, part.cls, part.radius, flat(part)) == ("circle", "HATCH", pytest.approx(0.45), [(3, 4)])


@pytest.mark.parametrize(("justification", "shift"), [(0, -0.3), (1, 0.0), (2, 0.3)])
def test_a_multiple_line_is_its_middle_with_its_width(tmp_path: Path, justification: int, shift: float) -> None:
    # the standard style has lines at +0.5 and -0.5; scale 0.6 makes a wall of 0.6 m
    def draw(doc: Any, space: Any) -> None:
        space.add_mline([(0, 0), (10, 0), (10, 8)], dxfattribs={"scale_factor": 0.6, "justification": justification})

    part = only_part(tmp_path, draw, version="R2000")
    assert part.thickness == pytest.approx(0.6)
    assert np.array(part.points)[:, :2] == pytest.approx(
        np.array([(0, shift), (10 - shift, shift), (10 - shift, 8)]), abs=1e-9
    )


def test_meshes_come_face_by_face(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        grid = space.add_polymesh((2, 3))
        for i in range(2):
            for j in range(3):
                grid.set_mesh_vertex((i, j), (i, j, i + j))
        face = space.add_polyface()
        face.append_faces([[(0, 0, 0), (1, 0, 0), (1, 1, 0)], [(0, 0, 0), (1, 1, 0), (0, 1, 0)]])
        mesh = space.add_mesh()
        with mesh.edit_data() as data:
            data.vertices = [(0, 0, 0), (2, 0, 0), (2, 2, 1)]
            data.faces = [[0, 1, 2]]

    parts = parts_of(tmp_path, draw)
    assert [part.cls for part in parts] == ["POLYLINE"] * 4 + ["MESH"]
    assert sorted(parts[0].points) == [(0, 0, 0), (0, 1, 1), (1, 0, 1), (1, 1, 2)]
    assert sorted(parts[4].points) == [(0, 0, 0), (2, 0, 0), (2, 2, 1)]


def test_a_polyline_in_space_keeps_the_level_of_each_vertex(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_polyline3d([(0, 0, -1), (5, 0, -4), (9, 3, -6)]))
    assert part.points == ((0, 0, -1), (5, 0, -4), (9, 3, -6))


def test_a_point_is_a_point(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_point((1, 2, 3)))
    assert (part.form, part.points) == ("point", ((1, 2, 3),))


def test_lines_without_length_are_ignored_and_counted(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_line((1, 1), (1, 1))
        space.add_circle((0, 0), 0)
        space.add_line((0, 0), (5, 0))

    found = read(tmp_path, draw)
    assert len(found.parts) == 1
    assert found.ignored == {"zero length": 1, "zero radius": 1}


def test_what_is_no_figure_of_the_site_is_named_and_counted(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_xline((0, 0), (1, 0))
        space.add_wipeout([(0, 0), (1, 1)])
        for solid in (space.add_region(), space.add_3dsolid()):
            solid.sat = ["400 0 1 0"]
        space.add_line((0, 0), (5, 0), dxfattribs={"invisible": 1})

    found = read(tmp_path, draw)
    assert found.context == {"endless construction line": 1, "hidden entity": 1, "mask": 1}
    assert found.ignored == {"3D solid: not read": 2}
    assert [finding.code for finding in found.findings if finding.severity == "check"] == ["solid-not-read"]


def test_national_grid_coordinates_keep_their_millimetres(tmp_path: Path) -> None:
    part = only_part(tmp_path, lambda doc, space: space.add_line((530207.123, 179366.456), (530237.123, 179366.456)))
    assert part.points[0] == (530207.123, 179366.456, 0.0)


def test_a_coordinate_off_the_earth_leaves_its_entity_out_and_says_so(tmp_path: Path) -> None:
    def draw(doc: Any, space: Any) -> None:
        space.add_line((0, 0), (30, 0))
        space.add_line((0, 0), (1e12, 0))
        space.add_lwpolyline([(0, 0), (1e200, 1e200, 0, 0, 1), (4, 4)])
        space.add_spline([(0, 0), (1e300, 0), (3, 3)])

    found = read(tmp_path, draw)
    assert len(found.parts) == 1
    assert found.ignored == {"coordinate not finite or beyond any site": 3}
    assert "coordinate-out-of-reach" in {finding.code for finding in found.findings}
    assert found.losses


def test_the_drawing_plane_of_a_tilted_polyline_agrees_with_a_cad_library(tmp_path: Path) -> None:
    normal = Vec3(0.3, -0.4, 0.8)

    def draw(doc: Any, space: Any) -> None:
        space.add_lwpolyline([(1, 2), (5, 2), (5, 7)], dxfattribs={"extrusion": normal, "elevation": 3})

    part = only_part(tmp_path, draw)
    (line,) = ezdxf.readfile(tmp_path / "drawing.dxf").modelspace()
    assert np.array(part.points) == pytest.approx(np.array([(p.x, p.y, p.z) for p in line.vertices_in_wcs()]))
