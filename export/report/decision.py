"""The first sheet: how many sections, what they stand for, what needs its own analysis, what must be confirmed."""

from __future__ import annotations

from export.report.markup import Html, join, tag
from export.report.tables import listing, table
from export.report.verdict_marks import named_swatch
from export.report.words import (
    KIND_NAMES,
    NOT_GIVEN,
    band,
    count,
    fixed,
    metres,
    output_name,
    provisional_mark,
    run_length,
    stretch,
)
from sections.definition import SectionDefinition
from sections.proposal import ChosenSection, Proposal

MOST_LISTED = 8


def decision(proposal: Proposal, definitions: tuple[SectionDefinition, ...]) -> Html:
    """The decision on one page."""
    lengths = {pit.id: pit.length for pit in proposal.pits}
    return join(
        [
            _headline(proposal, lengths),
            _share_bar(proposal, lengths),
            _sections(proposal, lengths),
            _own_analysis(proposal, lengths),
            _to_confirm(proposal, definitions),
        ]
    )


def shares(proposal: Proposal, lengths: dict[str, float]) -> tuple[float, float, float]:
    """Metres shown, metres provisional, metres that need their own analysis."""
    stands = [one for section in proposal.sections for one in section.represents]
    shown = metres((one for one in stands if not one.provisional), lengths)
    return shown, metres((one for one in stands if one.provisional), lengths), metres(proposal.unrepresented, lengths)


def _headline(proposal: Proposal, lengths: dict[str, float]) -> Html:
    shown, provisional, own = shares(proposal, lengths)
    total = sum(lengths.values())
    sections = count(len(proposal.sections), "section")
    if not proposal.sections:
        return tag("p", "No section could be written. The lists below say why.", class_="headline")
    return tag(
        "p",
        tag("strong", sections.capitalize()),
        f" for {fixed(total, 1)} m of wall in {count(len(proposal.pits), 'pit')}: ",
        tag("strong", f"{fixed(shown, 1)} m shown"),
        " to be represented, ",
        tag("strong", f"{fixed(provisional, 1)} m provisionally"),
        ", ",
        tag("strong", f"{fixed(own, 1)} m"),
        " need an analysis of their own.",
        class_="headline",
    )


def _share_bar(proposal: Proposal, lengths: dict[str, float]) -> Html:
    total = sum(lengths.values())
    if total <= 0:
        return Html("")
    x, bars = 0.0, []
    for name, value in zip(("shown", "provisional", "own"), shares(proposal, lengths), strict=True):
        width = value / total * 1000
        if width > 0:
            bars.append(
                tag(
                    "rect",
                    tag("title", f"{name}: {fixed(value, 1)} m"),
                    x=x,
                    y=2,
                    width=width,
                    height=22,
                    class_=f"share-{name}",
                )
            )
        x += width
    drawing = tag(
        "svg",
        tag("title", "Metres shown, provisional, and needing their own analysis"),
        *bars,
        class_="drawing shares",
        viewBox="0 0 1000 26",
        role="img",
        preserveAspectRatio="none",
        aria_label="Metres shown, provisional, and needing their own analysis",
    )
    keys = (("shown", "shown"), ("provisional", "provisional: some governing outputs open"), ("own", "own analysis"))
    legend = tag("p", *(tag("span", _key(name), words, class_="key") for name, words in keys), class_="keys")
    return tag("div", drawing, legend, class_="share-figure")


def _key(name: str) -> Html:
    box = tag("rect", x=1, y=1, width=26, height=12, class_=f"share-{name}")
    return tag("svg", box, class_="drawing swatch", viewBox="0 0 28 14", width=28, height=14, aria_hidden="true")


def _sections(proposal: Proposal, lengths: dict[str, float]) -> Html:
    rows = [_section_row(section, proposal, lengths) for section in proposal.sections]
    governing = [output_name(o) for o in proposal.limits.governing]
    heads = ["Section", "Cut", "#Shown m", "#Provisional m", "#Score", *governing]
    return table("Sections to analyse, and what each is worth", heads, rows, "decision")


def _section_row(section: ChosenSection, proposal: Proposal, lengths: dict[str, float]) -> list[Html | str]:
    shown = metres((one for one in section.represents if not one.provisional), lengths)
    provisional = metres((one for one in section.represents if one.provisional), lengths)
    at = ", ".join(f"{wall.pit} ch {fixed(wall.at, 1)}" for wall in section.walls)
    cells = []
    for output in proposal.limits.governing:
        verdict = section.verdicts.get(output)
        if verdict is None:
            cells.append(named_swatch("not_assessed"))
        else:
            ends = "" if verdict.low is None and verdict.high is None else f", {band(verdict.low, verdict.high)}"
            cells.append(named_swatch(verdict.verdict, ends + provisional_mark(verdict)))
    score = (
        tag("span", "none", title="a governing output is not assessed")
        if section.score is None
        else fixed(section.score, 0)
    )
    link = tag("a", section.id, href=f"#section-{section.id}")
    return [link, f"{KIND_NAMES[section.kind]}, {at}", fixed(shown, 1), fixed(provisional, 1), score, *cells]


def _own_analysis(proposal: Proposal, lengths: dict[str, float]) -> Html:
    rows = [
        [
            stretch(one.pit, one.start, one.to),
            fixed(run_length(one.start, one.to, lengths.get(one.pit, 0.0)), 1),
            one.reason,
            one.what_to_do,
        ]
        for one in proposal.unrepresented
    ]
    return table("Wall that needs its own analysis", ["Stretch", "#m", "Why", "What to do"], rows)


def _to_confirm(proposal: Proposal, definitions: tuple[SectionDefinition, ...]) -> Html:
    asked = list(
        {one.id: one for one in (*proposal.questions, *(q for d in definitions for q in d.questions))}.values()
    )
    open_ = [
        one
        for one in {a.id: a for a in (*proposal.assumptions, *(a for d in definitions for a in d.assumptions))}.values()
        if one.status == "open"
    ]
    serious = [one for one in proposal.findings if one.severity != "note"]
    items: list[Html] = [
        tag("span", tag("b", f"{one.id} "), f"question: {one.about}. Settle it with ", tag("code", one.brief_line))
        for one in asked[:MOST_LISTED]
    ]
    items += [
        tag("span", tag("b", f"{one.id} "), f"{one.severity}: {one.text} ({one.where or NOT_GIVEN})")
        for one in serious[:MOST_LISTED]
    ]
    items += [tag("span", tag("b", f"{one.id} "), f"assumed: {one.text}") for one in open_[:MOST_LISTED]]
    rest = len(asked) + len(serious) + len(open_) - len(items)
    more = tag("p", f"{rest} more in the ", tag("a", "register", href="#register"), ".") if rest > 0 else None
    counts = (count(len(asked), "question"), count(len(serious), "finding"), count(len(open_), "open assumption"))
    head = f"To confirm before this is relied on: {', '.join(counts)}"
    return tag("div", tag("h3", head), listing(items, "confirm"), more)
