"""The same pit drawn elsewhere, turned, in another order, in more pieces or twice is the same pit."""

from __future__ import annotations

import math
import random
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pit_lines import lines, rows

from ingest.members import BarSection, WallPiece
from ingest.model import Frame, Site
from sections.perimeter.perimeter import find_shapes

ELL = [(0.0, 0.0), (33.0, 0.0), (33.0, 14.0), (15.0, 14.0), (15.0, 27.0), (2.0, 24.0)]
BOW = [(10 * math.cos(t), 10 * math.sin(t)) for t in np.linspace(-math.pi / 2, math.pi / 2, 60)]
POST = {"kind": "king_post", "diameter": None, "section": BarSection(designation="HP", depth=0.3)}
SITES = {
    "diaphragm": Site(walls=lines(ELL)),
    "secant": Site(piles=rows(ELL, 0.6, diameter=0.75, kind="secant", toe=-12.0)),
    "posts and sheets": Site(
        piles=rows(ELL[:4], 2.0, closed=False, **POST), walls=lines([*ELL[3:], ELL[0]], closed=False, kind="sheet")
    ),
    "straights and an arc": Site(
        walls=(*lines([BOW[-1], (-20.0, 10.0), (-20.0, -10.0), BOW[0]], closed=False),
               WallPiece(id="bow", axis=tuple(BOW), kind="diaphragm", thickness=0.8)),
    ),
}  # fmt: skip


def moved(site, turn):
    walls = tuple(replace(w, axis=tuple(turn(p) for p in w.axis)) for w in site.walls)
    return replace(site, walls=walls, piles=tuple(replace(p, centre=turn(p.centre)) for p in site.piles))


def turning(angle, dx, dy):
    c, s = math.cos(angle), math.sin(angle)
    return lambda p: (c * p[0] - s * p[1] + dx, s * p[0] + c * p[1] + dy)


def told(shape):
    """What must not change: chainages of corners, angles, arcs, runs with their walls."""
    return (
        [shape.length, *(v for c in shape.corners for v in (c.at, c.interior_angle))]
        + [v for a in shape.arcs for v in (a.start, a.to, a.radius)]
        + [v for r in shape.runs for v in (r.start, r.to, r.wall.centres or 0.0, float(r.wall.count or 0))]
    )


def words(shape):
    return [shape.closed, *(c.kind for c in shape.corners), *(r.wall.kind for r in shape.runs)]


def alike(site, other, near=1e-6):
    (one,), _, _ = find_shapes(site)
    (two,), _, _ = find_shapes(other)
    assert words(two) == words(one)
    assert told(two) == pytest.approx(told(one), abs=near)
    return one, two


@pytest.mark.parametrize("name", SITES)
@settings(max_examples=12, deadline=None)
@given(angle=st.floats(-180.0, 180.0), dx=st.floats(-600.0, 600.0), dy=st.floats(-600.0, 600.0), grid=st.booleans())
def test_a_pit_turned_and_moved_to_the_national_grid_is_the_same_pit(name, angle, dx, dy, grid):
    # The frame is turned against the site, so that world south, and with it the start, stays.
    dx, dy = (dx + 531_000.0, dy + 181_000.0) if grid else (dx, dy)
    turn = turning(math.radians(angle), dx, dy)
    other = replace(moved(SITES[name], turn), frame=Frame(rotation_deg=-angle))
    one, two = alike(SITES[name], other, near=1e-5)
    assert two.axis == pytest.approx(np.array([turn(p) for p in one.axis]), abs=1e-5)


@pytest.mark.parametrize("name", SITES)
@settings(max_examples=12, deadline=None)
@given(seed=st.integers(0, 10_000))
def test_the_order_and_the_direction_of_the_lines_do_not_matter(name, seed):
    r = random.Random(seed)
    site = SITES[name]
    walls = [replace(w, axis=w.axis[::-1]) if r.random() < 0.5 else w for w in site.walls]
    piles = list(site.piles)
    r.shuffle(walls)
    r.shuffle(piles)
    one, two = alike(site, replace(site, walls=tuple(walls), piles=tuple(piles)), near=1e-9)
    names = [[site.piles[i].id for i in run] for run in one.piles]
    assert [[piles[i].id for i in run] for run in two.piles] == names


@pytest.mark.parametrize("name", [name for name in SITES if SITES[name].walls])
@settings(max_examples=12, deadline=None)
@given(shares=st.lists(st.floats(0.1, 0.9), min_size=1, max_size=3), seed=st.integers(0, 1000))
def test_lines_cut_into_pieces_and_drawn_twice_are_the_same_wall(name, shares, seed):
    r = random.Random(seed)
    walls = []
    for w in SITES[name].walls:
        walls.append(w)
        if r.random() < 0.5:
            walls.append(replace(w, id=w.id + "again"))
        elif len(w.axis) == 2:
            a, b = np.array(w.axis)
            cuts = [a, *(a + s * (b - a) for s in sorted(shares)), b]
            pieces = [(p, q) for p, q in zip(cuts, cuts[1:], strict=False) if np.hypot(*(q - p)) > 0.2]
            if len(pieces) == len(cuts) - 1:
                walls[-1:] = [
                    replace(w, id=f"{w.id}-{k}", axis=(tuple(p), tuple(q))) for k, (p, q) in enumerate(pieces)
                ]
    alike(SITES[name], replace(SITES[name], walls=tuple(walls)))


@pytest.mark.parametrize("name", [name for name in SITES if SITES[name].piles])
@settings(max_examples=8, deadline=None)
@given(share=st.floats(0.05, 0.6), seed=st.integers(0, 1000))
def test_piles_drawn_twice_are_one_pile(name, share, seed):
    r = random.Random(seed)
    site = SITES[name]
    again = [replace(p, id=p.id + "again") for p in site.piles if r.random() < share]
    alike(site, replace(site, piles=(*again, *site.piles)))
