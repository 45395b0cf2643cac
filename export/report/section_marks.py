"""Marks on a section: levels in the margin, dimensions, loads as arrows, water lines."""

from __future__ import annotations

from collections.abc import Iterable

from export.report.markup import Html, tag
from export.report.plan_site import named
from export.report.scale import View
from export.report.sheet_marks import SMALL, dimension, letters
from export.report.words import figure, fixed, level
from sections.definition import SectionDefinition, SectionLoad
from sections.member import SectionMember

LEAST_GAP = 17.0


def levels_of(definition: SectionDefinition) -> list[tuple[float, str]]:
    """Levels worth a mark, highest first, with what lies there; equal levels share one mark."""
    noted = [(z, "ground") for _, z in (*definition.ground.surface[:1], *definition.ground.surface[-1:])]
    for one in definition.members:
        noted += _member_levels(one)
    noted += [(min(z for _, z in ring), "dig level") for stage in definition.stages for ring in stage.dig if ring]
    noted += [(water.line[0][1], "water") for water in definition.ground.water if water.line and not water.before_work]
    noted.append((definition.extent.z[0], "base of model"))
    found: dict[float, list[str]] = {}
    for z, what in noted:
        said = found.setdefault(round(z, 3), [])
        if what not in said:
            said.append(what)
    return sorted(((z, ", ".join(what)) for z, what in found.items()), reverse=True)


def _member_levels(one: SectionMember) -> list[tuple[float, str]]:
    if not one.points:
        return []
    if one.role == "wall":
        return [(max(z for _, z in one.points), "top of wall"), (min(z for _, z in one.points), "toe")]
    return [(one.points[0][1], one.role.replace("_", " "))]


def level_marks(definition: SectionDefinition, view: View, right: float) -> Html:
    """Level marks in the left margin, pushed apart where they would touch."""
    marks = []
    last = -1e9
    for z, what in levels_of(definition):
        y = view.y(z)
        at = max(y, last + LEAST_GAP)
        last = at
        sign = tag("path", d=f"M{right - 12:.2f} {at - 8:.2f}h10l-5 8Z", class_="thin")
        lead = tag("path", d=f"M{right - 7:.2f} {at:.2f}H{right:.2f}L{view.left:.2f} {y:.2f}", class_="thin")
        marks.append(named(f"{level(z)}: {what}", sign, lead, letters((right - 18, at), level(z), SMALL, "end")))
    return tag("g", *marks, class_="section-levels")


def dimensions(definition: SectionDefinition, view: View) -> Html:
    """Width between walls, model behind them, dug depth and wall below the last dig level."""
    walls = sorted((m for m in definition.members if m.role == "wall" and m.points), key=lambda m: m.points[0][0])
    if not walls:
        return Html("")
    xs = [wall.points[0][0] for wall in walls]
    (left, right), top = definition.extent.x, view.top - 78
    parts = []
    marks = sorted({left, *xs, right})
    for a, b in zip(marks, marks[1:], strict=False):
        if (b - a) * view.k > 26:
            parts.append(dimension((view.x(a), top), (view.x(b), top), fixed(b - a)))
    ticks = "".join(f"M{view.x(x):.2f} {top - 4:.2f}V{view.y(walls[0].points[0][1]):.2f}" for x in xs)
    parts.append(tag("path", d=ticks, class_="hair"))
    dig = _dig_level(definition)
    if dig is not None:
        wall = walls[0]
        x = view.x(wall.points[0][0]) + (-32.0 if wall.side == "right" else 32.0)
        highest, toe = max(z for _, z in wall.points), min(z for _, z in wall.points)
        for a, b in ((highest, dig), (dig, toe)):
            if (a - b) * view.k > 24:
                parts.append(dimension((x, view.y(a)), (x, view.y(b)), fixed(a - b)))
    return tag("g", *parts, class_="section-dimensions")


def _dig_level(definition: SectionDefinition) -> float | None:
    return min((z for stage in definition.stages for ring in stage.dig for _, z in ring), default=None)


def load_marks(definition: SectionDefinition, view: View) -> Html:
    """Loads as arrows on their line, with the real and the section's value."""
    return tag("g", *(_load(load, view) for load in definition.loads), class_="section-loads")


def _load(load: SectionLoad, view: View) -> Html:
    points = [view.at(point) for point in load.at]
    if not points:
        return Html("")
    (ax, ay), (bx, _) = points[0], points[-1]
    low, high = min(ax, bx), max(ax, bx)
    pieces = max(int((high - low) / 14), 1) if high > low else 0
    places = [low + n * (high - low) / pieces for n in range(pieces + 1)] if pieces else [low]
    top = ay - 34
    data = "".join(_arrow(x, top, ay) for x in places)
    if pieces:
        data += f"M{low:.2f} {top:.2f}H{high:.2f}"
    words = _value(load.section.value, load.section.unit)
    real = f"real {_value(load.real.value, load.real.unit)}"
    about = f"{load.id}: {load.kind}, {real}, in the section {words}"
    middle = (low + high) / 2
    return named(
        about,
        tag("path", d=data, class_="arrow"),
        letters((middle, top - 18), words, SMALL, "middle", "halo"),
        letters((middle, top - 5), real, SMALL - 1, "middle", "soft halo"),
        focus=True,
    )


def _arrow(x: float, top: float, foot: float) -> str:
    return f"M{x:.2f} {top:.2f}V{foot:.2f}M{x - 3:.2f} {foot - 7:.2f}L{x:.2f} {foot:.2f}L{x + 3:.2f} {foot - 7:.2f}"


def _value(value: float | None, unit: str) -> str:
    return figure(value, unit, 4) if value is not None else "value not given"


def water_marks(definition: SectionDefinition, view: View) -> Html:
    """Water lines with the sign of the trade: a triangle on three shortening strokes."""
    return tag("g", *_waters(definition, view), class_="section-water")


def _waters(definition: SectionDefinition, view: View) -> Iterable[Html]:
    for water in definition.ground.water:
        if not water.line or water.before_work:
            continue
        points = [view.at(point) for point in water.line]
        x, y = points[0][0] + 0.62 * (points[-1][0] - points[0][0]), points[0][1]
        sign = f"M{x - 7:.2f} {y - 11:.2f}h14l-7 11ZM{x - 6:.2f} {y + 4:.2f}h12M{x - 3.5:.2f} {y + 7:.2f}h7"
        yield named(
            f"Water on the {water.kind} side, {level(water.line[0][1])}",
            tag("path", d=view.path(water.line), class_="water"),
            tag("path", d=sign, class_="thin"),
        )
