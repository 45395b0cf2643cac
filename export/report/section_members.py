"""Members of a section as drawn: walls with their thickness, struts, anchors by free and bond length, slabs."""

from __future__ import annotations

from math import hypot

from export.report.markup import Html, tag
from export.report.plan_site import named
from export.report.scale import View, path_data
from export.report.sheet_marks import SMALL, letters, readable_turn
from export.report.words import fixed, level, source_tail
from ingest.members import Point
from sections.member import PerMetre, SectionMember

THIN = 0.12
"""Least drawn depth of a slab or sheet whose thickness is not given, m."""


def member_mark(one: SectionMember, view: View) -> Html:
    """One member with its tooltip and, for supports, its name along it."""
    points = [view.at(point) for point in one.points]
    if not points:
        return Html("")
    if one.role == "wall":
        drawn = [_body(one, points, view, "wall-solid")]
    elif one.form in ("sheet", "block", "disc") or one.role in ("slab", "footing"):
        drawn = [_body(one, points, view, "slab-solid")]
    elif len(points) == 1:
        drawn = [tag("circle", cx=points[0][0], cy=points[0][1], r=6, class_="bar-open")]
    else:
        data = path_data(points)
        drawn = [tag("path", d=data, class_="support"), tag("path", d=data, class_="support-core")]
        if one.role == "anchor":
            drawn.append(_bond(one, points))
    return named(member_about(one), *drawn, _name(one, points, view), focus=True, class_=f"member role-{one.role}")


def member_about(one: SectionMember) -> str:
    """One member in words: role, spacing, inclination, level."""
    parts = [f"{one.id}: {one.role.replace('_', ' ')}"]
    if one.real.spacing is not None:
        parts.append(f"at {fixed(one.real.spacing, 2, 'm')}")
    if one.real.inclination:
        parts.append(f"{fixed(one.real.inclination, 1)}° below horizontal")
    if one.real.skew:
        parts.append(f"{fixed(one.real.skew, 1)}° off the section on plan")
    top, foot = max(z for _, z in one.points), min(z for _, z in one.points)
    parts.append(f"level {level(top)}" if top == foot else f"{level(top)} to {level(foot)}")
    return ", ".join(parts) + source_tail(one.sources)


def thickness(one: SectionMember) -> float | None:
    """Real thickness or diameter, else the section's; m."""
    for value in (one.real.thickness, one.real.diameter, one.section.thickness):
        if value is not None:
            return value
    return None


def _body(one: SectionMember, points: list[Point], view: View, class_: str) -> Html:
    if len(points) > 2:
        return tag("path", d=path_data(points, True), class_=class_)
    if len(points) == 1:
        return tag("circle", cx=points[0][0], cy=points[0][1], r=4, class_=class_)
    (ax, ay), (bx, by) = points
    size = hypot(bx - ax, by - ay) or 1.0
    half = max((thickness(one) or THIN) * view.k / 2, 1.2)
    nx, ny = -(by - ay) / size * half, (bx - ax) / size * half
    ring = [(ax + nx, ay + ny), (bx + nx, by + ny), (bx - nx, by - ny), (ax - nx, ay - ny)]
    return tag("path", d=path_data(ring, True), class_=class_)


def _bond(one: SectionMember, points: list[Point]) -> Html:
    """The bond length as a heavy stretch at the far end; drawn only where its share is known."""
    free, bond = one.real.free_length, one.real.bond_length
    if free is None or bond is None or free + bond <= 0:
        return Html("")
    (ax, ay), (bx, by) = points[0], points[-1]
    share = free / (free + bond)
    start = (ax + share * (bx - ax), ay + share * (by - ay))
    return tag("path", d=path_data([start, (bx, by)]), class_="bond")


def _name(one: SectionMember, points: list[Point], view: View) -> Html:
    if len(points) < 2:
        return letters((points[0][0] + 9, points[0][1] - 6), one.id, SMALL, class_="halo")
    (ax, ay), (bx, by) = points[0], points[-1]
    if one.role == "wall":
        side = -1 if one.side == "left" else 1
        half = (thickness(one) or THIN) / 2 * view.k
        at = (ax + side * (half + 10) + 4, ay + (by - ay) * 0.8)
        return letters(at, one.id, SMALL, "middle", "halo", -90.0)
    spaced = one.real.spacing is not None and isinstance(one.section, PerMetre)
    words = f"{one.id} at {fixed(one.real.spacing)} m" if spaced else one.id
    turn = readable_turn((ax, ay), (bx, by))
    share = 0.36 if one.role != "anchor" else 0.42
    x, y = ax + share * (bx - ax), ay + share * (by - ay)
    size = hypot(bx - ax, by - ay) or 1.0
    up = (-(by - ay) / size, (bx - ax) / size)
    sign = -1 if up[1] > 0 else 1
    return letters((x + sign * up[0] * 8, y + sign * up[1] * 8), words, SMALL, "middle", "halo", turn)
