"""Two files of one site that do not lie on each other: the placement is found and asked about, never applied."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ingest.brief import Brief, read_brief
from ingest.outlines import distance_between, find_placements
from ingest.parts import FileParts, Part
from ingest.site import site_of
from ingest.trail import Source

L_SHAPE = [(0.0, 0.0), (40.0, 0.0), (40.0, 15.0), (22.0, 15.0), (22.0, 30.0), (0.0, 30.0)]
RECTANGLE = [(0.0, 0.0), (30.0, 0.0), (30.0, 20.0), (0.0, 20.0)]


def file_of(name: str, ring: list[tuple[float, float]]) -> FileParts:
    points = tuple((x, y, 0.0) for x, y in ring)
    part = Part(source=Source(file=name, item="w"), form="path", points=points, closed=True, layer="SECANT WALL")
    return FileParts(
        file=name, sha256="0" * 64, kind="dxf", schema_or_version="x", length_unit="m", unit_scale=1.0, entities=1,
        parts=(part,),
    )  # fmt: skip


def moved(ring: list[tuple[float, float]], turn: float, shift: tuple[float, float], scale: float = 1.0, flip: int = 1):
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    return [(scale * (c * flip * x - s * y) + shift[0], scale * (s * flip * x + c * y) + shift[1]) for x, y in ring]


def dense(ring: list[tuple[float, float]]) -> np.ndarray:
    corners = np.array([*ring, ring[0]])
    return np.vstack([a + (b - a) * np.linspace(0, 1, 60)[:, None] for a, b in zip(corners, corners[1:], strict=False)])


@settings(deadline=None, max_examples=20)
@given(st.floats(-180, 180), st.floats(-500, 500), st.floats(-500, 500))
def test_a_turned_and_shifted_outline_is_laid_back(turn: float, x: float, y: float) -> None:
    (best, *others) = find_placements(dense(L_SHAPE), dense(moved(L_SHAPE, turn, (x, y))))
    assert not others
    assert not best.mirrored
    assert best.scale == 1.0
    assert abs((best.turn + turn + 180) % 360 - 180) < 0.05
    assert best.residual < 0.02


@pytest.mark.parametrize(("scale", "unit"), [(1000.0, "mm"), (1 / 0.3048, "foot"), (0.001, "m")])
def test_a_unit_slip_is_told_by_size_and_the_line_of_the_brief_names_the_unit(scale: float, unit: str) -> None:
    files = [file_of("a.dxf", L_SHAPE), file_of("b.dxf", moved(L_SHAPE, 0.0, (3e5, 0.0), scale))]
    site = site_of(files, Brief())
    (question,) = [q for q in site.questions if "where does" in q.about]
    assert f'length_unit = "{unit}"' in question.brief_line
    assert f"drawn in {unit}" in next(f.text for f in site.findings if f.code == "files-apart")


def test_a_mirrored_outline_is_told() -> None:
    (best, *_) = find_placements(dense(L_SHAPE), dense(moved(L_SHAPE, 20.0, (90.0, 0.0), flip=-1)))
    assert best.mirrored
    site = site_of([file_of("a.dxf", L_SHAPE), file_of("b.dxf", moved(L_SHAPE, 0.0, (900.0, 0.0), flip=-1))], Brief())
    assert any("mirrored" in finding.text for finding in site.findings)


def test_a_rectangle_fits_twice_and_both_are_asked_about() -> None:
    placements = find_placements(dense(RECTANGLE), dense(moved(RECTANGLE, 30.0, (200.0, 50.0))))
    assert len(placements) == 2
    assert abs(abs(placements[0].turn - placements[1].turn) - 180) < 0.1


def test_other_shapes_are_not_laid_on_each_other() -> None:
    assert find_placements(dense(L_SHAPE), dense([(0.0, 0.0), (60.0, 0.0), (60.0, 12.0), (0.0, 12.0)])) == ()


def test_the_line_of_the_brief_lays_the_files_on_each_other(tmp_path: Path) -> None:
    files = [file_of("a.dxf", [(x + 500_000, y + 180_000) for x, y in L_SHAPE])]
    files.append(file_of("b.dxf", moved(L_SHAPE, 25.0, (12.0, -7.0))))
    site = site_of(files, Brief())
    (question,) = [q for q in site.questions if "where does" in q.about]
    assert "within 0.0" in question.readings[0].evidence
    path = tmp_path / "b.toml"
    path.write_text(question.brief_line)
    laid = site_of(files, read_brief(path))
    assert "files-apart" not in {finding.code for finding in laid.findings}
    first, second = (np.array(wall.axis) for wall in laid.walls)
    assert distance_between(dense(first.tolist()), dense(second.tolist())) < 0.02


def test_files_that_lie_on_each_other_are_not_asked_about() -> None:
    shifted = moved(L_SHAPE, 0.0, (0.01, 0.02))
    site = site_of([file_of("a.dxf", L_SHAPE), file_of("b.dxf", shifted)], Brief())
    assert not site.findings
    assert {entry.file: replace(entry.registered, residual=None) for entry in site.inputs if entry.registered}


def piles_of(name: str, count: int) -> FileParts:
    parts = tuple(
        Part(
            source=Source(file=name, item=str(n)),
            form="circle",
            points=((0.9 * n, 0.0, 0.0),),
            radius=0.375,
            layer="WALL PILES",
        )
        for n in range(count)
    )
    return replace(file_of(name, L_SHAPE), parts=parts, entities=count)


def test_files_that_show_the_same_wall_with_another_count_of_piles_are_told() -> None:
    site = site_of([piles_of("a.dxf", 40), piles_of("b.dxf", 39)], Brief())
    (finding,) = site.findings
    assert (finding.code, finding.text) == ("counts-differ", "a.dxf shows 40 wall piles, b.dxf 39")
    assert not site_of([piles_of("a.dxf", 40), piles_of("b.dxf", 40)], Brief()).findings
