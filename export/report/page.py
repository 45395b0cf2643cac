"""The report as one self-contained HTML file: sheets in the order an engineer reads them."""

from __future__ import annotations

import base64
import hashlib
from collections.abc import Sequence
from importlib import resources

from export import VERSION
from export.report.decision import decision
from export.report.hatches import ground_patterns
from export.report.markup import Html, join, tag
from export.report.plan import load_hatch, plan_drawing
from export.report.plan_controls import (
    layer_controls,
    output_controls,
    output_rules,
    station_data,
    station_slider,
    zoom_controls,
)
from export.report.register import inputs_table, ledger, limits_table, not_assessed, register
from export.report.ribbon import ribbon_drawing
from export.report.section_sheet import section_body, section_title
from export.report.verdict_marks import BEST_FIRST, area_patterns, named_swatch
from export.report.words import VERDICT_MEANS
from export.section_json import SECTION_NOTICE
from ingest.model import NOTICE, Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal


def report_page(proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site, proposal_sha256: str) -> str:
    """The whole report.

    Args:
        proposal: The proposal, world coordinates.
        definitions: Its sections, in order.
        site: The site as received.
        proposal_sha256: Hash of the `proposal.json` it belongs to.

    Returns:
        HTML text; it asks nothing of the network and works with scripts off.
    """
    sheets = _sheets(proposal, tuple(definitions), site, proposal_sha256)
    total = len(sheets)
    name = site.name or "Excavation"
    contents = tag("ol", *(tag("li", tag("a", title, href=f"#{key}")) for key, title, _ in sheets), class_="contents")
    drawn = []
    for n, (key, title, body) in enumerate(sheets, start=1):
        index = tag("nav", tag("h3", "Sheets"), contents, aria_label="Sheets") if n == 1 else None
        drawn.append(_sheet(key, title, join([body, index]), _strip(name, title, site.date, n, total)))
    script, css = (
        _asset("sheet.js") + _asset("spatial.js"),
        _asset("drawing.css") + _asset("sheet.css") + output_rules(proposal),
    )
    head = _head(name, script, css)
    body = tag(
        "body",
        tag("a", "Skip to the decision", href="#decision", class_="skip"),
        _patterns(),
        tag("header", tag("p", tag("b", "Screening aid. "), NOTICE.removeprefix("Screening aid. "), class_="notice")),
        tag("main", tag("h1", f"{name}: sections for two-dimensional analysis"), Html("\n"), *drawn),
        tag("footer", tag("p", SECTION_NOTICE), class_="page-foot"),
        station_data(proposal),
        Html(f"<script>{script}</script>"),
    )
    return f'<!DOCTYPE html>\n<html lang="en">\n{head}\n{body}\n</html>\n'


def _head(name: str, script: str, css: str) -> Html:
    return tag(
        "head",
        tag("meta", charset="utf-8"),
        tag("meta", name="viewport", content="width=device-width, initial-scale=1"),
        tag("meta", http_equiv="Content-Security-Policy", content=_policy(script)),
        tag("title", f"{name}: sections proposed"),
        Html(f"<style>\n{css}</style>"),
    )


def _sheets(
    proposal: Proposal, definitions: tuple[SectionDefinition, ...], site: Site, sha256: str
) -> list[tuple[str, str, Html]]:
    sheets = [
        ("decision", "The decision", decision(proposal, definitions)),
        ("plan", "Plan", _plan(proposal, site)),
        ("ribbon", "The perimeter unrolled", _ribbons(proposal)),
    ]
    sheets += [(f"section-{one.id}", section_title(one), section_body(one, proposal, site)) for one in definitions]
    sheets += [
        ("register", "Register to sign off", register(proposal, definitions)),
        ("not-assessed", "Not assessed", not_assessed(proposal, definitions)),
        ("inputs", "Inputs, ledger and limits", _inputs(proposal, site, sha256)),
    ]
    return sheets


def _sheet(key: str, title: str, body: Html, strip: Html) -> Html:
    return tag("section", tag("div", tag("h2", title), body, strip, class_="inner"), class_="sheet", id=key) + "\n"


def _strip(name: str, title: str, date: str | None, n: int, total: int) -> Html:
    """The title block along the foot of a sheet."""
    cells = (
        ("Site", name),
        ("Sheet", title),
        ("Date", date or "not given"),
        ("No.", f"{n} of {total}"),
        ("Made by", f"cutworthy {VERSION}"),
        ("Caution", NOTICE),
    )
    return tag("dl", *(tag("div", tag("dt", head), tag("dd", words)) for head, words in cells), class_="title-block")


def _plan(proposal: Proposal, site: Site) -> Html:
    meanings = tag(
        "dl",
        *(tag("div", tag("dt", named_swatch(word)), tag("dd", VERDICT_MEANS[word])) for word in BEST_FIRST),
        class_="meanings",
    )
    box = tag(
        "div",
        plan_drawing(proposal, site),
        class_="scroll",
        id="plan-box",
        tabindex="0",
        role="region",
        aria_label="Plan",
    )
    caption = (
        "Outside the wall: first the verdict, then the section that stands for the stretch. "
        "Figures along it are chainages, m. Coordinates are world metres."
    )
    return join(
        [
            output_controls(proposal),
            layer_controls(),
            zoom_controls(),
            tag("figure", box, tag("figcaption", caption)),
            tag("h3", "What the verdicts tell"),
            meanings,
        ]
    )


def _ribbons(proposal: Proposal) -> Html:
    parts: list[Html] = [
        tag(
            "p",
            "Band of the ratio, real three-dimensional demand over the demand of a 2D section, along the wall. "
            "The heavy line is 1; the dashed ones are the limits of this run.",
        )
    ]
    for pit in proposal.pits:
        label = f"Ribbon of {pit.id}"
        box = tag("div", ribbon_drawing(pit, proposal), class_="scroll", tabindex="0", role="region", aria_label=label)
        parts += [
            station_slider(pit),
            tag("figure", box, tag("figcaption", f"{label}: chainage runs anticlockwise, excavated side on the left.")),
        ]
    return join(parts)


def _inputs(proposal: Proposal, site: Site, sha256: str) -> Html:
    frame = proposal.frame
    made = tag(
        "p",
        f"Made by cutworthy {VERSION} from the files below; the same files give the same bytes. ",
        "SHA-256 of proposal.json: ",
        tag("code", sha256, class_="hash"),
    )
    offset = ", ".join(f"{value:.10g}" for value in frame.offset)
    where = f"Inner frame: offset {offset} m, rotation {frame.rotation_deg:.9g}°, "
    where += f"reference system {frame.crs or 'not given'}. All coordinates shown are world."
    return join(
        [made, tag("p", where), inputs_table(site.inputs), ledger(proposal.ledger), limits_table(proposal.limits)]
    )


def _patterns() -> Html:
    return tag(
        "svg",
        tag("defs", area_patterns(), ground_patterns(), load_hatch(), _share_hatch()),
        class_="drawing patterns",
        width=0,
        height=0,
        aria_hidden="true",
        focusable="false",
    )


def _share_hatch() -> Html:
    line = tag("path", d="M0 8L8 0M-2 2L2 -2M6 10L10 6", class_="share-line")
    return tag("pattern", line, id="share-hatch", width=8, height=8, patternUnits="userSpaceOnUse")


def _policy(script: str) -> str:
    digest = base64.b64encode(hashlib.sha256(script.encode()).digest()).decode()
    rules = ("default-src 'none'", "style-src 'unsafe-inline'", "img-src data:", f"script-src 'sha256-{digest}'")
    return "; ".join((*rules, "base-uri 'none'", "form-action 'none'"))


def _asset(name: str) -> str:
    return resources.files("export.report").joinpath(name).read_text(encoding="utf-8")
