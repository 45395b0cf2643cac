"""The ribbon: the perimeter unrolled, band of the ratio against chainage per output, with what lies along it above."""

from __future__ import annotations

from collections.abc import Sequence

from export.report.along import Stretch, stations_of, stretches
from export.report.markup import Html, tag
from export.report.plan_site import member_words, named
from export.report.scale import LETTERS, WIDTH, multiples, path_data, round_step
from export.report.sheet_marks import SMALL, drawing, letters
from export.report.verdict_marks import legend
from export.report.words import VERDICT_NAMES, band, fixed, level, output_name, stretch
from ingest.members import Point
from ingest.model import Limits
from sections.model import Member, Pit
from sections.proposal import Proposal, Represents, StationOutput, StationTable, Unrepresented

GUTTER, RIGHT = 176.0, WIDTH - 22.0
MOST = 2.0
"""Upper end of the ratio axis; a band beyond it is cut off with an arrow."""
BAND_HEIGHT, BLANK_HEIGHT, ROW = 112.0, 28.0, 22.0


class Unrolled:
    """Chainage to units, and a pen that moves down lane by lane."""

    def __init__(self, length: float) -> None:
        self.length = length
        self.k = (RIGHT - GUTTER) / length
        self.y = 14.0
        self.parts: list[Html] = []

    def x(self, chainage: float) -> float:
        """Units from the left."""
        return GUTTER + chainage * self.k

    def pieces(self, start: float, to: float) -> list[tuple[float, float]]:
        """A stretch as one or two pieces; `to < start` passes the start of the perimeter."""
        return [(start, to)] if to >= start else [(start, self.length), (0.0, to)]

    def lane(self, label: str, height: float, *drawn: Html) -> None:
        """Add what was drawn, its label in the gutter, and move down."""
        self.parts.append(letters((GUTTER - 12, self.y + height / 2 + 4), label, SMALL, "end"))
        self.parts.extend(drawn)
        self.y += height


def ribbon_drawing(pit: Pit, proposal: Proposal) -> Html:
    """The ribbon of one pit as an SVG.

    Args:
        pit: The pit.
        proposal: The proposal it belongs to; a pit without stations gives lanes without bands.
    """
    pen = Unrolled(pit.length)
    stations = stations_of(proposal, pit)
    _chainages(pen, pit)
    _zones(pen, pit)
    _stands(pen, pit, proposal)
    _levels(pen, stations)
    for row in pit.members:
        if row.along:
            _members(pen, pit, row)
    for name, output in stations.outputs.items():
        _output(pen, pit, stations, name, output, proposal.limits)
    foot = pen.y + 8
    lines = "".join(f"M{pen.x(corner.at):.2f} {44}V{foot:.2f}" for corner in pit.corners)
    pin = tag("path", d=f"M0 30V{foot:.2f}", class_="marker")
    body = [
        tag("path", d=lines, class_="hair") if lines else Html(""),
        *pen.parts,
        tag("g", pin, class_="ribbon-marker", data_pit=pit.id, hidden=True),
        legend((28, foot + 22), 160.0),
    ]
    title = f"Perimeter of {pit.id} unrolled: ratio of real to 2D demand along the wall"
    about = _description(pit, stations)
    return drawing("ribbon", f"ribbon-{pit.id}", title, about, foot + 40, body, left=GUTTER, k=pen.k)


def _description(pit: Pit, table: StationTable) -> str:
    said = []
    for name, output in table.outputs.items():
        parts = stretches(table.chainage, output.verdict, pit.length)
        listed = "; ".join(
            f"{fixed(p.start, 1)} to {fixed(p.to, 1)} m {VERDICT_NAMES[p.value or '']}" for p in parts[:8]
        )
        said.append(f"{output_name(name)}: {listed}{' and further stretches' if len(parts) > 8 else ''}.")
    return " ".join(said)


def _chainages(pen: Unrolled, pit: Pit) -> None:
    step = round_step(48 / pen.k)
    marks = [letters((pen.x(c), pen.y + 4), f"{c:g}", SMALL, "middle", "soft") for c in multiples(step, 0, pit.length)]
    pen.lane("chainage, m", 16.0, *marks)
    y = pen.y + 12
    signs = [
        named(
            f"Corner at ch {fixed(corner.at, 2)}: {corner.kind}, {fixed(corner.interior_angle, 1)}°",
            tag(
                "path",
                d=f"M{pen.x(corner.at) - 6:.2f} {y + 7}h12l-6 -9Z",
                class_="ink-fill" if corner.kind == "inside" else "line",
            ),
            letters((pen.x(corner.at) + 9, y + 6), f"{fixed(corner.interior_angle, 0)}°", SMALL),
        )
        for corner in pit.corners
    ]
    if signs:
        pen.lane("corners", 26.0, *signs)


def _zones(pen: Unrolled, pit: Pit) -> None:
    y = pen.y + 12
    marks = []
    for zone in pit.zones:
        for start, to in pen.pieces(zone.start, zone.to):
            a, b = pen.x(start), pen.x(to)
            name = zone.id.rpartition("-")[2]
            label = letters(((a + b) / 2, y - 3), name, SMALL, "middle") if b - a > 9 * len(name) else None
            data = f"M{a:.2f} {y - 6}V{y + 6}M{b:.2f} {y - 6}V{y + 6}M{a:.2f} {y}H{b:.2f}"
            words = f"Zone {zone.id}, {stretch(pit.id, zone.start, zone.to)}, ended by {zone.ended_by}"
            marks.append(named(words, tag("path", d=data, class_="thin"), label))
    if marks:
        pen.lane("zones", ROW + 2, *marks)


def _stands(pen: Unrolled, pit: Pit, proposal: Proposal) -> None:
    y = pen.y + 14
    rows: list[tuple[str, str, Represents | Unrepresented]] = []
    for section in proposal.sections:
        rows += [(section.id, "provisional" if one.provisional else "shown", one) for one in section.represents]
    rows += [("", "none", one) for one in proposal.unrepresented]
    marks = []
    for name, kind, one in rows:
        if one.pit != pit.id:
            continue
        for start, to in pen.pieces(one.start, one.to):
            a, b = pen.x(start), pen.x(to)
            label = (
                letters(((a + b) / 2, y - 5), name or "own analysis", SMALL, "middle", "accent") if b - a > 40 else None
            )
            words = f"{stretch(pit.id, one.start, one.to)}: " + (
                f"needs its own analysis, {one.reason}" if isinstance(one, Unrepresented) else f"{name}, {kind}"
            )
            line = tag("path", d=f"M{a:.2f} {y}H{b:.2f}", class_=f"stands-{kind}")
            marks.append(named(words, line, label))
    pen.lane("represented by", ROW + 2, *marks)


def _levels(pen: Unrolled, table: StationTable) -> None:
    known = [v for v in (*table.retained, *table.floor) if v is not None]
    if not known:
        return
    high, low = max(known), min(known)
    scale = 40.0 / max(high - low, 0.5)
    top = pen.y + 12
    lines = []
    for values, class_ in ((table.retained, "line"), (table.floor, "formation")):
        points = [
            (pen.x(c), top + (high - v) * scale) for c, v in zip(table.chainage, values, strict=True) if v is not None
        ]
        if len(points) > 1:
            points.append((RIGHT, points[-1][1]))
            lines.append(tag("path", d=path_data(points), class_=class_))
    lines.append(letters((RIGHT, top - 4), f"ground {level(high)}", SMALL - 1, "end", "soft halo"))
    lines.append(
        letters((RIGHT, top + (high - low) * scale - 4), f"dig level {level(low)}", SMALL - 1, "end", "soft halo")
    )
    pen.lane("levels", 62.0, *lines)


def _members(pen: Unrolled, pit: Pit, row: Member) -> None:
    y = pen.y + ROW / 2
    data = ""
    for one in row.along:
        if one.pit != pit.id:
            continue
        for start, to in pen.pieces(one.start, one.to):
            data += f"M{pen.x(start):.2f} {y}H{pen.x(to):.2f}"
            if row.spacing and (to - start) / row.spacing < 400:
                places = multiples(row.spacing, 0.0, to - start)
                data += "".join(f"M{pen.x(start + at):.2f} {y - 5}v10" for at in places)
    if data:
        pen.lane(row.id, ROW, named(member_words(row), tag("path", d=data, class_="line")))


def _output(pen: Unrolled, pit: Pit, table: StationTable, name: str, output: StationOutput, limits: Limits) -> None:
    parts = stretches(table.chainage, output.verdict, pit.length)
    blank = all(value is None for value in (*output.low, *output.high))
    height = BLANK_HEIGHT if blank else BAND_HEIGHT
    top, foot = pen.y + 8, pen.y + height - 6
    drawn = [_area(pen, pit, table, name, output, part, top, foot) for part in parts]
    frame = tag("rect", x=GUTTER, y=top, width=RIGHT - GUTTER, height=foot - top, class_="thin")
    if blank:
        words = "no criterion could be evaluated for this output"
        note = letters(((GUTTER + RIGHT) / 2, (top + foot) / 2 + 4), words, SMALL, "middle", "halo")
        if any(word != "not_assessed" for word in output.verdict):
            note = Html("")
        pen.lane(output_name(name), height, *drawn, frame, note)
        return
    pen.lane(output_name(name), height, *_ratio_axis(top, foot, limits), *drawn, frame)


def ratio_y(ratio: float, top: float, foot: float) -> float:
    """Height of a ratio in its lane, cut off at the upper end and at zero."""
    return foot - min(max(ratio, 0.0), MOST) / MOST * (foot - top)


def _ratio_axis(top: float, foot: float, limits: Limits) -> list[Html]:
    lines = [
        tag("path", d=f"M{GUTTER} {ratio_y(value, top, foot):.2f}H{RIGHT}", class_=class_)
        for value, class_ in ((limits.ratio_low, "limit"), (1.0, "unity"), (limits.ratio_high, "limit"))
    ]
    marks = [
        letters((RIGHT + 4, ratio_y(value, top, foot) + 4), f"{value:g}", SMALL - 1, class_="soft")
        for value in (0.0, 1.0, MOST)
    ]
    return [*lines, *marks]


def _area(
    pen: Unrolled,
    pit: Pit,
    table: StationTable,
    name: str,
    output: StationOutput,
    part: Stretch,
    top: float,
    foot: float,
) -> Html:
    """One stretch of equal verdict: its band filled by the verdict's pattern."""
    word = part.value or "not_assessed"
    rows = range(part.first, part.last + 1)
    lows, highs = [output.low[n] for n in rows], [output.high[n] for n in rows]
    ends = (
        min((v for v in lows if v is not None), default=None),
        max((v for v in highs if v is not None), default=None),
    )
    about = (
        f"{output_name(name)}, {stretch(pit.id, part.start, part.to)}: {VERDICT_NAMES[word]}, {band(*ends)} times 2D"
    )
    if any(v is None for v in (*lows, *highs)):
        upper = [(pen.x(part.start), top), (pen.x(part.to), top)]
        lower = [(pen.x(part.start), foot), (pen.x(part.to), foot)]
    else:
        places = [part.start, *(table.chainage[n] for n in rows), part.to]
        upper = _edge(pen, places, [highs[0], *highs, highs[-1]], top, foot)
        lower = _edge(pen, places, [lows[0], *lows, lows[-1]], top, foot)
    shape = tag("path", d=path_data([*upper, *reversed(lower)], True), class_=f"area-{word}")
    arrow = None
    if ends[1] is not None and ends[1] > MOST:
        x = pen.x((part.start + part.to) / 2)
        arrow = letters((x, top + LETTERS), f"↑ {fixed(ends[1], 1)}", SMALL, "middle", "halo")
    return named(about, shape, arrow)


def _edge(
    pen: Unrolled, places: Sequence[float], values: Sequence[float | None], top: float, foot: float
) -> list[Point]:
    return [(pen.x(c), ratio_y(v if v is not None else 0.0, top, foot)) for c, v in zip(places, values, strict=True)]
