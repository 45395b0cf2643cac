"""The report as text: complete, self-contained, named for a screen reader, and deaf to hostile names."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ET
from dataclasses import replace
from html.parser import HTMLParser
from importlib import resources

import pytest
from builders_export import HOSTILE, Job, first_pit_job

from export.report.page import report_page
from export.report.plan import plan_file
from export.report.severity_table import INDICES, severity_table
from export.report.verdict_marks import BEST_FIRST
from ingest.model import NOTICE
from sections.proposal import WORST_FIRST
from sections.verdicts.severity import ORDER

SHA = "ab" * 32


class Outline(HTMLParser):
    """Elements of a page in order, with their attributes, and its text."""

    def __init__(self, page: str) -> None:
        super().__init__()
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.words: list[str] = []
        self.feed(page)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))

    def handle_data(self, data: str) -> None:
        self.words.append(data)

    def of(self, *tags: str) -> list[dict[str, str | None]]:
        return [attributes for tag, attributes in self.elements if tag in tags]


@pytest.fixture(scope="module")
def page(first_pit: Job) -> str:
    return report_page(first_pit.proposal, first_pit.definitions, first_pit.site, SHA)


@pytest.fixture(scope="module")
def hostile_page(showcase: Job) -> str:
    return report_page(showcase.proposal, showcase.definitions, showcase.site, SHA)


def test_the_notice_stands_on_top_and_on_every_sheet(page: str) -> None:
    words = " ".join(Outline(page).words)
    assert words.index("Local codes and a licensed engineer decide") < words.index("The decision")
    assert page.count(NOTICE) >= page.count('class="sheet"')
    assert "@bottom-left" in page


def test_headings_run_in_order_below_one_title(page: str) -> None:
    levels = [int(tag[1]) for tag, _ in Outline(page).elements if re.fullmatch(r"h[1-6]", tag)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(after - before <= 1 for before, after in zip(levels, levels[1:], strict=False))


def test_language_main_landmark_and_column_scopes_are_named(page: str) -> None:
    outline = Outline(page)
    assert outline.of("html")[0]["lang"] == "en"
    assert len(outline.of("main")) == 1
    assert {attributes.get("scope") for attributes in outline.of("th")} == {"col", "row"}


def test_every_id_is_used_once_and_every_reference_resolves(page: str, hostile_page: str) -> None:
    for text in (page, hostile_page):
        outline = Outline(text)
        ids = [attributes["id"] for _, attributes in outline.elements if "id" in attributes]
        assert len(ids) == len(set(ids))
        named = [
            attributes["aria-labelledby"] or "" for _, attributes in outline.elements if "aria-labelledby" in attributes
        ]
        links = [attributes["href"] or "" for attributes in outline.of("a")]
        wanted = {name for value in named for name in value.split()} | {link.removeprefix("#") for link in links}
        assert wanted <= set(ids)
        assert set(re.findall(r"url\(#([\w-]+)\)", text)) <= set(ids)


def test_every_drawing_has_a_name_and_a_description(page: str) -> None:
    for svg in re.findall(r'<svg class="drawing (?:plan|ribbon|section)".*?</svg>', page, re.DOTALL):
        assert re.search(r"<title id=[^>]*>[^<]+</title>", svg)
        assert re.search(r"<desc id=[^>]*>[^<]+</desc>", svg)


def test_nothing_is_asked_of_the_network(page: str) -> None:
    outline = Outline(page)
    (policy,) = [
        one["content"] or "" for one in outline.of("meta") if one.get("http-equiv") == "Content-Security-Policy"
    ]
    assert policy.startswith("default-src 'none'; ")
    for _, attributes in outline.elements:
        for key in ("srcset", "action", "data", "poster"):
            assert key not in attributes
        assert (attributes.get("src") or "data:image/png;base64,").startswith("data:image/png;base64,")
        assert (attributes.get("href") or "#").startswith("#")
    assert not re.search(r"@import|url\((?!#)", page)


def test_hostile_names_stay_text(hostile_page: str) -> None:
    outline = Outline(hostile_page)
    assert [one for one in outline.of("script") if one.get("type") != "application/json"] == [{}]
    assert {one["class"] for one in outline.of("img")} == {"still"}
    assert not [attributes for _, attributes in outline.elements if "onload" in attributes]
    words = "".join(outline.words)
    assert HOSTILE.replace("\u202e", "\ufffd") in words
    assert "\u202e" not in hostile_page
    assert "../../etc/passwd<img src=x>.dxf" in words


def test_hostile_names_stay_text_in_the_plan_file(showcase: Job) -> None:
    pit = showcase.proposal.pits[0]
    proposal = replace(showcase.proposal, pits=(replace(pit, zones=(replace(pit.zones[0], id=HOSTILE + "\x00"),)),))
    tree = ET.fromstring(plan_file(proposal, showcase.site))
    names = {element.tag.rpartition("}")[2] for element in tree.iter()}
    assert names <= {
        "svg", "style", "defs", "pattern", "path", "g", "title", "desc", "rect", "text", "circle", "polygon", "a",
    }  # fmt: skip
    assert any("<script>" in (element.text or "") for element in tree.iter())


def test_the_plan_file_carries_the_notice_and_its_own_styles(first_pit: Job) -> None:
    text = plan_file(first_pit.proposal, first_pit.site)
    assert NOTICE in text
    assert "--paper" in text
    assert 'class="cut-end"' in text


def test_the_same_objects_give_the_same_page(page: str) -> None:
    again = first_pit_job()
    assert report_page(again.proposal, again.definitions, again.site, SHA) == page


def test_the_decision_counts_shown_provisional_and_own_metres_apart(page: str) -> None:
    # S1 27 + 27 m and S2 17 + 17 m provisional, four corners of 3 m each: 88 + 12 = 100 m (by hand)
    words = " ".join(" ".join(Outline(page).words).split())
    assert "2 sections for 100.0 m of wall" in words
    assert "0.0 m shown to be represented, 88.0 m provisionally , 12.0 m need an analysis of their own" in words


def test_a_run_without_sections_says_so(first_pit: Job) -> None:
    proposal = replace(first_pit.proposal, sections=(), unrepresented=(), stations={}, pits=())
    page = report_page(proposal, (), first_pit.site, SHA)
    assert "No section could be written" in page


def test_what_was_not_assessed_is_printed(page: str) -> None:
    words = " ".join(Outline(page).words)
    assert "overall and deep stability" in words
    assert "movements from pile installation and dewatering" in words
    assert "no criterion could be evaluated for this output" in words


def test_losses_of_a_support_stand_apart_from_the_bands(page: str) -> None:
    words = " ".join(" ".join(Outline(page).words).split())
    assert "Loss of one support (accidental, not in the bands above)" in words
    assert "P1-strut-1 at ch 15.00 1.90 1.37 1.22 1.40" in words


def test_every_verdict_has_its_own_line_and_area_pattern() -> None:
    assert set(BEST_FIRST) == set(WORST_FIRST)
    css = resources.files("export.report").joinpath("drawing.css").read_text()
    lines = {word: re.findall(rf"\.v-{word} > \.v-line {{([^}}]*)}}", css)[0] for word in BEST_FIRST}
    without_colour = {word: re.sub(r"stroke: var\([^)]*\);", "", rules).strip() for word, rules in lines.items()}
    assert len(set(without_colour.values())) == len(BEST_FIRST)
    assert all(f"url(#area-{word})" in css for word in BEST_FIRST)


def luminance(colour: str) -> float:
    # WCAG 2.2, relative luminance
    parts = [int(colour[n : n + 2], 16) / 255 for n in (1, 3, 5)]
    r, g, b = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def contrast(a: str, b: str) -> float:
    high, low = sorted((luminance(a), luminance(b)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def test_the_contrast_measure_meets_its_known_ends() -> None:
    assert contrast("#ffffff", "#000000") == pytest.approx(21.0)
    assert contrast("#777777", "#ffffff") == pytest.approx(4.48, abs=0.01)  # the well-known grey that just fails AA


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_words_and_verdicts_stand_out_from_the_paper(scheme: str) -> None:
    """WCAG 2.2 AA: 4.5 to 1 for text (criterion 1.4.3), 3 to 1 for marks (1.4.11)."""
    folder = resources.files("export.report")
    drawing, sheet = (folder.joinpath(name).read_text() for name in ("drawing.css", "sheet.css"))
    colours = dict(re.findall(r"--([a-z]+): (#[0-9a-f]{6})", drawing + sheet.split("@media")[0]))
    if scheme == "dark":
        dark = re.search(r"prefers-color-scheme: dark\) \{(.*?)\n\}", sheet, re.DOTALL)
        assert dark
        colours.update(re.findall(r"--([a-z]+): (#[0-9a-f]{6})", dark[1]))
    for ground in ("paper", "tint"):
        for name in ("ink", "soft", "accent"):
            assert contrast(colours[name], colours[ground]) >= 4.5, (name, ground)
    assert contrast(colours["ink"], colours["desk"]) >= 4.5
    assert contrast(colours["soft"], colours["desk"]) >= 4.5
    for name in ("holds", "over", "undecided", "blank", "under", "solid", "ground"):
        assert contrast(colours[name], colours["paper"]) >= 3.0, name


def test_the_severity_of_a_place_is_listed_index_by_index(first_pit: Job) -> None:
    section = first_pit.proposal.sections[0]
    rows = str(severity_table(replace(section, severity={"excavated_depth": 6.0, "basal_safety": None})))
    assert re.search(r"Excavated depth.*?6.*?m.*?larger", rows, re.S)
    assert re.search(r"basal heave.*?not given.*?smaller", rows, re.S)
    page = report_page(first_pit.proposal, first_pit.definitions, first_pit.site, SHA)
    assert all(f"Severity of the place of section {name}" in page for name in ("S1", "S2"))


def test_indices_of_severity_are_worse_the_way_they_are_ranked() -> None:
    for name, larger in ORDER:
        assert INDICES[name][2] is larger
