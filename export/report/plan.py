"""The plan: perimeter by verdict, cuts, what stands for what, corners, zones, supports, loads, grid, scale, north."""

from __future__ import annotations

from collections.abc import Sequence
from importlib import resources
from math import cos, radians, sin

from export.report import plan_site as on_site
from export.report.along import Perimeter, stations_of, stretches, worst_words
from export.report.markup import Html, tag
from export.report.plan_cuts import cuts, legend_of_cuts
from export.report.plan_site import ToWorld, named
from export.report.scale import WIDTH, View, clip, fit, multiples, round_step
from export.report.sheet_marks import SMALL, drawing, grid, letters, north, scale_bar
from export.report.verdict_marks import area_patterns, legend, verdict_line
from export.report.words import VERDICT_NAMES, band, fixed, output_name, stretch
from ingest.members import Point
from ingest.model import NOTICE, Site
from sections.model import Pit
from sections.proposal import Proposal, Represents, StationTable, Unrepresented

HEIGHT = 860.0
FOOT = 122.0
VERDICT_OFF = 15.0
STANDS_OFF = 27.0
GOVERNING_KEY = "governing"


def plan_drawing(proposal: Proposal, site: Site | None) -> Html:
    """The plan as it stands in the report; outputs other than the governing ones are hidden until chosen.

    Args:
        proposal: World coordinates.
        site: The site as received, for members one by one; None leaves them out.
    """
    view = fit(_points(proposal, site), WIDTH - 34, HEIGHT, left=26.0, top=6.0, margin=66.0)
    world = on_site.to_world(proposal.frame)
    body = [
        grid(view),
        tag("g", *(mark for pit in proposal.pits for mark in _symmetry(pit, view)), class_="layer-symmetry"),
        cuts(proposal.sections, view),
        *(_pit(pit, site, view, world) for pit in proposal.pits),
        tag("g", on_site.corners(proposal.pits, view), class_="layer-corners"),
        on_site.boreholes(site, view, world),
        *(_verdicts(pit, proposal, view) for pit in proposal.pits),
        *(_stands_for(pit, proposal, view) for pit in proposal.pits),
        tag("g", id="plan-marker", hidden=True),
        north((WIDTH - 40, 30)),
        letters((28, view.height + 110), NOTICE, SMALL, class_="soft"),
        scale_bar((28, view.height + 50), view),
        legend((28, view.height + 80), 158.0),
        legend_of_cuts((430, view.height + 50)),
    ]
    place: dict[str, str | float] = {
        "x0": f"{view.x0:.4f}",
        "y1": f"{view.y1:.4f}",
        "k": view.k,
        "left": view.left,
        "top": view.top,
    }
    title = "Plan of the excavation with verdicts and chosen cuts"
    return drawing("plan", "plan", title, _description(proposal), view.height + FOOT, body, **place)


def plan_file(proposal: Proposal, site: Site | None) -> str:
    """The plan alone as an SVG file, with its styles, patterns and the notice inside."""
    css = resources.files("export.report").joinpath("drawing.css").read_text(encoding="utf-8")
    style = Html(f"<style>\n{css}.output-band:not(.for-{GOVERNING_KEY}) {{ display: none; }}\n</style>\n")
    head, _, rest = plan_drawing(proposal, site).partition(">")
    inner = rest[: rest.rindex("</svg>")]
    defs = tag("defs", area_patterns(), load_hatch())
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{head}>\n{style}{defs}\n{inner}\n</svg>\n'


def load_hatch() -> Html:
    """Fill of loaded areas."""
    return tag(
        "pattern",
        tag("path", d="M0 6L6 0", class_="load-stroke"),
        id="load-hatch",
        width=6,
        height=6,
        patternUnits="userSpaceOnUse",
    )


def _points(proposal: Proposal, site: Site | None) -> list[Point]:
    points = [point for pit in proposal.pits for point in pit.perimeter] or [(0.0, 0.0)]
    west, east = min(p[0] for p in points), max(p[0] for p in points)
    south, north_ = min(p[1] for p in points), max(p[1] for p in points)
    reach = max(east - west, north_ - south, 1.0) * 0.75
    world = on_site.to_world(proposal.frame)
    others = [point for pit in proposal.pits for load in pit.loads for point in load.points]
    others += [point for pit in proposal.pits for one in pit.receptors for point in one.points]
    others += [world(end) for one in (site.supports if site else ()) for end in (one.head, one.far)]
    others += [world(hole.location) for hole in (site.boreholes if site else ())]
    return points + [p for p in others if west - reach < p[0] < east + reach and south - reach < p[1] < north_ + reach]


def _description(proposal: Proposal) -> str:
    parts = [
        f"Pit {pit.id}: {fixed(pit.length, 1)} m of perimeter, {len(pit.corners)} corners." for pit in proposal.pits
    ]
    for one in proposal.sections:
        (x1, y1), (x2, y2) = one.line
        parts.append(f"Section {one.id} from {x1:.1f}, {y1:.1f} to {x2:.1f}, {y2:.1f}.")
    return " ".join(parts)


def _pit(pit: Pit, site: Site | None, view: View, world: ToWorld) -> Html:
    floors = [tag("path", d=view.path(floor.outline, True), class_="dig thin") for floor in pit.floors]
    steps = [
        named(
            f"Step of {fixed(step.drop, 2, 'm')} in the dig level", tag("path", d=view.path(step.line), class_="line")
        )
        for step in pit.steps
        if len(step.line) > 1
    ]
    return tag(
        "g",
        *floors,
        *steps,
        on_site.loads(pit, view),
        on_site.walls(pit, site, view, world),
        on_site.supports(pit, site, view, world),
        _zones(pit, view),
        class_="pit",
    )


def _symmetry(pit: Pit, view: View) -> list[Html]:
    marks = []
    for axis in pit.symmetry:
        dx, dy = cos(radians(axis.direction)), sin(radians(axis.direction))
        far = 10 * pit.length
        a, b = ((axis.point[0] + s * far * dx, axis.point[1] + s * far * dy) for s in (-1, 1))
        inside = clip(a, b, view)
        if inside:
            broken = "complete" if axis.complete else f"broken by {', '.join(axis.broken_by) or 'what it carries'}"
            about = f"Mirror axis of the outline, {broken}"
            marks.append(named(about, tag("path", d=view.path(inside), class_="symmetry")))
    return marks


def _zones(pit: Pit, view: View) -> Html:
    line = Perimeter.of(pit)
    marks: list[Html] = []
    reach = 34.0 / view.k
    for zone in pit.zones:
        tick = (line.square_off(zone.start, -8 / view.k), line.square_off(zone.start, reach))
        middle = line.straight_middle(zone.start, zone.to)
        words = zone.id.rpartition("-")[2]
        signature = ", ".join(f"{key} {value}" for key, value in zone.signature.items() if value is not None)
        about = f"Zone {zone.id}, {stretch(pit.id, zone.start, zone.to)}, ended by {zone.ended_by}; {signature}"
        at = view.at(line.square_off(middle, -15 / view.k))
        marks.append(
            named(
                about,
                tag("path", d=view.path(tick), class_="thin"),
                letters((at[0], at[1] + 5), words, SMALL, "middle", "soft halo"),
                focus=True,
            )
        )
    step = round_step(60 / view.k)
    for at_chainage in multiples(step, 0.0, line.length - step / 4):
        a, b = line.square_off(at_chainage, reach - 3 / view.k), line.square_off(at_chainage, reach + 4 / view.k)
        x, y = view.at(line.square_off(at_chainage, reach + 14 / view.k))
        marks.append(tag("path", d=view.path((a, b)), class_="hair"))
        marks.append(letters((x, y + 4), f"{at_chainage:g}", SMALL - 1, "middle", "soft halo"))
    return tag("g", *marks, class_="layer-zones")


def _verdicts(pit: Pit, proposal: Proposal, view: View) -> Html:
    table = stations_of(proposal, pit)
    governing = proposal.limits.governing
    bands = [_verdict_band(pit, table, GOVERNING_KEY, worst_words(table, governing), view)]
    bands += [_verdict_band(pit, table, name, one.verdict, view) for name, one in table.outputs.items()]
    return tag("g", *bands, class_="layer-verdicts")


def _verdict_band(pit: Pit, table: StationTable, key: str, words: Sequence[str], view: View) -> Html:
    line, off = Perimeter.of(pit), VERDICT_OFF / view.k
    output = table.outputs.get(key)
    parts = []
    for part in stretches(table.chainage, words, pit.length):
        word = part.value or "not_assessed"
        about = f"{stretch(pit.id, part.start, part.to)}: {VERDICT_NAMES[word]}"
        if output is not None:
            lows = [v for v in output.low[part.first : part.last + 1] if v is not None]
            highs = [v for v in output.high[part.first : part.last + 1] if v is not None]
            about += f", {output_name(key)} {band(min(lows, default=None), max(highs, default=None))} times 2D"
        points = [view.at(point) for point in line.part(part.start, part.to, off)]
        parts.append(named(about, verdict_line(points, word)))
    return tag("g", *parts, class_=f"output-band for-{key}")


def _stands_for(pit: Pit, proposal: Proposal, view: View) -> Html:
    line = Perimeter.of(pit)
    marks = []
    rows: list[tuple[str, Represents | Unrepresented]] = [
        (section.id, one) for section in proposal.sections for one in section.represents
    ]
    rows += [("", one) for one in proposal.unrepresented]
    for section, one in rows:
        if one.pit != pit.id:
            continue
        kind = "none" if not section else "provisional" if isinstance(one, Represents) and one.provisional else "shown"
        marks.append(_stand(section, one, kind, line, view))
    return tag("g", *marks, class_="layer-stands")


def _stand(section: str, one: Represents | Unrepresented, kind: str, line: Perimeter, view: View) -> Html:
    where = stretch(one.pit, one.start, one.to)
    if isinstance(one, Unrepresented):
        about = f"{where}: needs its own analysis, {one.reason}"
    else:
        about = f"{where}: {section} stands for it, {'provisionally' if one.provisional else 'shown'}"
    data = view.path(line.part(one.start, one.to, STANDS_OFF / view.k))
    return named(about, tag("path", d=data, class_=f"stands-{kind}"), class_=f"stands for-{section or 'none'}")
