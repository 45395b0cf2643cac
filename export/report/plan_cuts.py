"""Section cuts on the plan: line, marks of the trade at both ends, names that keep clear of each other."""

from __future__ import annotations

from collections.abc import Sequence
from math import hypot

from export.report.markup import Html, tag
from export.report.plan_site import named
from export.report.scale import LETTERS, View, clip
from export.report.sheet_marks import SMALL, letters
from export.report.words import KIND_NAMES, fixed
from ingest.members import Point
from sections.proposal import ChosenSection

NAME_ROOM = (34.0, 19.0)
MOST_STEPS = 6


def cuts(sections: Sequence[ChosenSection], view: View) -> Html:
    """All cuts, each a link to its sheet."""
    taken: list[Point] = []
    marks = [mark for section in sections for mark in (_cut(section, view, taken),) if mark is not None]
    return tag("g", *marks, class_="layer-cuts")


def _cut(section: ChosenSection, view: View, taken: list[Point]) -> Html | None:
    inside = clip(*section.line, view)
    if inside is None:
        return None
    a, b = view.at(inside[0]), view.at(inside[1])
    size = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    ux, uy = (b[0] - a[0]) / size, (b[1] - a[1]) / size
    ends = (
        _end((a[0] + 6 * ux, a[1] + 6 * uy), (ux, uy), section.id, 1, taken),
        _end((b[0] - 6 * ux, b[1] - 6 * uy), (-ux, -uy), section.id, -1, taken),
    )
    line = tag("path", d=f"M{a[0]:.2f} {a[1]:.2f}L{b[0]:.2f} {b[1]:.2f}", class_="cut")
    walls = ", ".join(f"{wall.pit} ch {fixed(wall.at, 1)}" for wall in section.walls)
    about = f"Section {section.id}, {KIND_NAMES[section.kind]}, cuts the wall at {walls}"
    return tag("a", named(about, line, *ends), href=f"#section-{section.id}", class_="cut-link", aria_label=about)


def _end(at: Point, inward: Point, name: str, turn: int, taken: list[Point]) -> Html:
    """Section mark of the trade: a heavy end, and an arrow towards what is seen."""
    (x, y), (ux, uy) = at, inward
    sx, sy = uy * turn, -ux * turn
    tip = (x + 17 * sx, y + 17 * sy)
    base = (x + 7 * sx, y + 7 * sy)
    corners = (tip, (base[0] + 5 * ux, base[1] + 5 * uy), (base[0] - 5 * ux, base[1] - 5 * uy))
    head = " ".join(f"{px:.2f},{py:.2f}" for px, py in corners)
    label = _free((x + 26 * sx + 14 * ux, y + 26 * sy + 14 * uy + 5), inward, taken)
    return tag(
        "g",
        tag("path", d=f"M{x:.2f} {y:.2f}l{26 * ux:.2f} {26 * uy:.2f}", class_="cut-end"),
        tag("path", d=f"M{x:.2f} {y:.2f}L{base[0]:.2f} {base[1]:.2f}", class_="cut-end"),
        tag("polygon", points=head, class_="accent-fill"),
        letters(label, name, LETTERS + 2, "middle", "accent halo"),
    )


def _free(at: Point, inward: Point, taken: list[Point]) -> Point:
    """The first place along the cut where a name does not touch another one."""
    for step in range(MOST_STEPS):
        place = (at[0] + step * NAME_ROOM[1] * inward[0], at[1] + step * NAME_ROOM[1] * inward[1])
        if all(abs(place[0] - x) >= NAME_ROOM[0] or abs(place[1] - y) >= NAME_ROOM[1] for x, y in taken):
            break
    taken.append(place)
    return place


def legend_of_cuts(at: Point) -> Html:
    """What the lines of cuts and of represented stretches mean."""
    x, y = at
    rows = (
        ("cut", "section cut", 0),
        ("stands-shown", "stands for: shown", 125),
        ("stands-provisional", "provisional", 285),
        ("stands-none", "own analysis", 405),
    )
    return tag(
        "g",
        *(tag("path", d=f"M{x + off} {y + 3}h36", class_=class_) for class_, _, off in rows),
        *(letters((x + off + 42, y + 7), words, SMALL) for _, words, off in rows),
    )
