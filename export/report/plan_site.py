"""What stands on the plan: walls, supports, loads, receptors, boreholes, in world metres."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from math import cos, radians, sin

from export.report.along import Perimeter
from export.report.markup import Html, join, tag
from export.report.scale import LETTERS, View
from export.report.sheet_marks import SMALL, letters, readable_turn
from export.report.words import KIND_OF_WALL, ROLE_NAMES, count, figure, fixed, level, source_tail
from ingest.members import Point, Support
from ingest.model import Site
from sections.model import Member, Pit, PitLoad, Run
from sections.proposal import ProposalFrame

ToWorld = Callable[[tuple[float, ...]], Point]
LOAD_UNITS = {"point": "kN", "line": "kN/m", "area": "kPa", "footing": "kPa"}


def to_world(frame: ProposalFrame) -> ToWorld:
    """The map from local to world plan coordinates: offset + Rz(rotation, counter-clockwise) local."""
    turn = radians(frame.rotation_deg)
    c, s = cos(turn), sin(turn)
    east, north_, _ = frame.offset

    def world(point: tuple[float, ...]) -> Point:
        """Local to world, m."""
        return east + c * point[0] - s * point[1], north_ + s * point[0] + c * point[1]

    return world


def named(about: str, *children: Html | None, focus: bool = False, **marks: str) -> Html:
    """A group with a tooltip; with `focus` the keyboard reaches it and a screen reader names it."""
    spoken = {"tabindex": "0", "role": "img", "aria_label": about} if focus else {}
    return tag("g", tag("title", about), *children, **spoken, **marks)


def walls(pit: Pit, site: Site | None, view: View, world: ToWorld) -> Html:
    """Piles as circles where the site has them, and each run of wall by its thickness along the axis."""
    line = Perimeter.of(pit)
    runs = [named(wall_words(run), _run_body(run, line, view), focus=True, class_="run") for run in pit.runs]
    piles = site.piles if site else ()
    dots = [
        tag("circle", cx=x, cy=y, r=max((pile.diameter or 0.3) / 2 * view.k, 1.2), class_="thin")
        for pile in piles
        if not pile.bearing
        for x, y in (view.at(world(pile.centre)),)
    ]
    axis = tag("path", d=view.path(pit.perimeter, pit.closed), class_="axis thin")
    return tag("g", *runs, *dots, axis, class_="layer-walls")


def wall_words(run: Run) -> str:
    """One run of wall in words."""
    wall = run.wall
    size = wall.diameter if wall.diameter is not None else wall.thickness
    sign = "D" if wall.diameter is not None else "t"
    parts = [f"Wall ch {fixed(run.start, 1)} to {fixed(run.to, 1)}: {KIND_OF_WALL.get(wall.kind, wall.kind)}"]
    if size is not None:
        parts.append(f"{sign} {fixed(size, 2, 'm')}")
    if wall.centres is not None:
        parts.append(f"at {fixed(wall.centres, 2, 'm')} centres")
    parts.append(f"top {level(wall.top)}, toe {level(wall.toe)}, {wall.continuity} along its length")
    return ", ".join(parts) + source_tail(wall.sources)


def _run_body(run: Run, line: Perimeter, view: View) -> Html:
    half = (run.wall.diameter or run.wall.thickness or 0.3) / 2
    whole = line.closed and run.to - run.start >= line.length - 1e-6
    if whole:
        rings = [[(float(x), float(y)) for x, y in line.beside(off)[:-1]] for off in (half, -half)]
        return tag("path", d="".join(view.path(ring, True) for ring in rings), fill_rule="evenodd", class_="wall-body")
    outer, inner = line.part(run.start, run.to, half), line.part(run.start, run.to, -half)
    return tag("path", d=view.path([*outer, *reversed(inner)], True), class_="wall-body")


def supports(pit: Pit, site: Site | None, view: View, world: ToWorld) -> Html:
    """Every support as it really lies, and one label a row."""
    lines = [_support_line(one, view, world) for one in (site.supports if site else ())]
    walers = [
        tag("path", d=view.path(map(world, waler.points)), class_="line") for waler in (site.walers if site else ())
    ]
    line = Perimeter.of(pit)
    labels = [_row_label(row, line, view) for row in pit.members if row.along and row.role in ROLE_NAMES]
    return tag("g", *walers, *lines, *labels, class_="layer-supports")


def _support_line(one: Support, view: View, world: ToWorld) -> Html:
    head, far = view.at(world(one.head)), view.at(world(one.far))
    size = one.section.designation if one.section else "section not given"
    at = level(one.head[2] if one.level_given else None)
    about = f"{one.id}: {one.role.replace('_', ' ')}, {size}, level {at}" + source_tail(one.sources)
    data = f"M{head[0]:.2f} {head[1]:.2f}L{far[0]:.2f} {far[1]:.2f}"
    parts = [tag("path", d=data, class_="support"), tag("path", d=data, class_="support-core")]
    if one.role == "anchor" and one.free_length:
        parts.append(_bond(one, head, far))
    return named(about, *parts)


def _bond(one: Support, head: Point, far: Point) -> Html:
    total = sum((a - b) ** 2 for a, b in zip(one.head, one.far, strict=True)) ** 0.5
    share = min((one.free_length or 0.0) / total, 1.0) if total else 1.0
    start = (head[0] + share * (far[0] - head[0]), head[1] + share * (far[1] - head[1]))
    return tag("path", d=f"M{start[0]:.2f} {start[1]:.2f}L{far[0]:.2f} {far[1]:.2f}", class_="bond")


def member_words(row: Member) -> str:
    """One row of members in words."""
    parts = [f"{row.id}: {row.count} {ROLE_NAMES.get(row.role, row.role)}"]
    if row.spacing is not None:
        parts.append(f"at {fixed(row.spacing, 2, 'm')}")
    if row.level is not None:
        parts.append(f"level {level(row.level)}")
    if row.inclination:
        parts.append(f"{fixed(row.inclination, 1)}° below horizontal")
    if row.skew:
        parts.append(f"{fixed(row.skew, 1)}° off the wall normal")
    return ", ".join(parts) + source_tail(row.sources)


def _row_label(row: Member, line: Perimeter, view: View) -> Html:
    stand = next((one for one in row.along if one.end == "head"), row.along[0])
    middle = line.straight_middle(stand.start, stand.to)
    inward = (32.0 if row.role == "waler" else 46.0) / view.k
    at = view.at(line.square_off(middle, -inward))
    nx, ny = line.normal(middle)
    turn = readable_turn((0, 0), (-ny, -nx)) if abs(nx) < 0.999 else -90.0
    words = (
        row.id
        if row.role == "waler"
        else f"{row.id}: {row.count}" + (f" at {fixed(row.spacing)}" if row.spacing else "")
    )
    return named(member_words(row), letters(at, words, SMALL, "middle", "halo", turn), focus=True)


def loads(pit: Pit, view: View) -> Html:
    """Loads by their outline, with value; receptors dashed."""
    drawn = [_load(load, view) for load in pit.loads]
    near = [
        named(
            f"{one.id}: {one.kind}, {fixed(one.distance, 1, 'm')} from the wall axis",
            tag("path", d=view.path(one.points, len(one.points) > 2), class_="receptor"),
        )
        for one in pit.receptors
        if len(one.points) > 1
    ]
    return tag("g", *near, *drawn, class_="layer-loads")


def load_words(load: PitLoad) -> str:
    """One load in words."""
    value = figure(load.value, LOAD_UNITS[load.kind]) if load.value is not None else "value not given"
    return (
        f"{load.id}: {load.kind}, {value}" + (", inside the pit" if load.within_pit else "") + source_tail(load.sources)
    )


def _load(load: PitLoad, view: View) -> Html:
    points = [view.at(point) for point in load.points]
    x = sum(p[0] for p in points) / len(points)
    y = min(p[1] for p in points) - 6
    if len(points) > 2:
        shape = tag("path", d=view.path(load.points, True), class_="load-area")
    elif len(points) == 2:
        shape = tag("path", d=view.path(load.points), class_="bond")
    else:
        shape = tag("circle", cx=points[0][0], cy=points[0][1], r=5, class_="ink-fill")
    value = figure(load.value, LOAD_UNITS[load.kind]) if load.value is not None else "value not given"
    return named(load_words(load), shape, letters((x, y), value, SMALL, "middle", "halo"), focus=True)


def boreholes(site: Site | None, view: View, world: ToWorld) -> Html:
    """Boreholes inside the window; those beyond it are told in words."""
    holes = [(hole, world(hole.location)) for hole in (site.boreholes if site else ())]
    inside = [(hole, view.at(at)) for hole, at in holes if view.holds(at)]
    marks = [
        named(
            f"Borehole {hole.id}: {count(len(hole.layers), 'layer')}, water {level(hole.water)}",
            tag("circle", cx=x, cy=y, r=7, class_="bar-open"),
            tag("path", d=f"M{x:.2f} {y - 7:.2f}A7 7 0 0 1 {x:.2f} {y + 7:.2f}Z", class_="ink-fill"),
            letters((x + 11, y + 5), hole.id, SMALL, class_="halo"),
        )
        for hole, (x, y) in inside
    ]
    beyond = len(holes) - len(inside)
    note = letters(
        (view.left + view.width - 8, view.top + 18), f"{count(beyond, 'borehole')} beyond the sheet", SMALL, "end"
    )
    return tag("g", *marks, note if beyond else None, class_="layer-boreholes")


def corners(pits: Iterable[Pit], view: View) -> Html:
    """Corners with their angle measured inside the pit."""
    marks = []
    for pit in pits:
        line = Perimeter.of(pit)
        for corner in pit.corners:
            ax, ay = _inward(line, corner.at)
            x, y = view.at(corner.point)
            words = f"{fixed(corner.interior_angle, 0)}°"
            about = (
                f"Corner at ch {fixed(corner.at, 2)}: {corner.kind}, {fixed(corner.interior_angle, 1)}° inside the pit"
            )
            marks.append(
                named(
                    about,
                    tag("circle", cx=x, cy=y, r=5, class_="bar-open"),
                    letters((x + 26 * ax, y - 26 * ay + 5), words, LETTERS, "middle", "halo"),
                    focus=True,
                )
            )
    return join(marks)


def _inward(line: Perimeter, at: float) -> Point:
    """Unit vector into the pit at a corner, the mean of its two walls."""
    a, b = line.normal(at + 1e-6), line.normal((at - 1e-6) % line.length)
    x, y = -(a[0] + b[0]), -(a[1] + b[1])
    size = (x * x + y * y) ** 0.5 or 1.0
    return x / size, y / size
