"""The report in a real browser: from disk, offline, no word in the console; slider, layers, zoom and view turn."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest
from builders_export import Job, empty_job, first_pit_job, showcase_job

from export.report.page import report_page

pytestmark = pytest.mark.slow

CHROMIUM = "/usr/bin/chromium"
SWITCHES = [
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
A4_PIXELS = 703
"""186 mm between the margins of A4 at 96 pixels an inch."""


@pytest.fixture(scope="module")
def browser() -> Iterator[object]:
    from playwright.sync_api import sync_playwright

    with sync_playwright() as play:
        found = play.chromium.launch(executable_path=CHROMIUM, args=SWITCHES)
        yield found
        found.close()


@pytest.fixture(scope="module")
def files(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Path]:
    folder = tmp_path_factory.mktemp("reports")
    made: dict[str, Job] = {"first": first_pit_job(), "showcase": showcase_job(), "empty": empty_job()}
    for name, job in made.items():
        text = report_page(job.proposal, job.definitions, job.site, "ab" * 32)
        (folder / f"{name}.html").write_text(text, encoding="utf-8")
    return {name: folder / f"{name}.html" for name in made}


class Opened:
    """A page with everything it said and asked for."""

    def __init__(self, browser, path: Path, width: int = 1440, **options) -> None:
        self.context = browser.new_context(viewport={"width": width, "height": 900}, offline=True, **options)
        self.page = self.context.new_page()
        self.said: list[str] = []
        self.asked: list[str] = []
        self.page.on("console", lambda message: self.said.append(message.text))
        self.page.on("pageerror", lambda error: self.said.append(str(error)))
        self.page.on("dialog", lambda dialog: (self.said.append(dialog.message), dialog.dismiss()))
        self.page.on("request", lambda request: self.asked.append(request.url))
        self.page.goto(path.as_uri())

    def __enter__(self):
        return self

    def __exit__(self, *_: object) -> None:
        self.context.close()


@pytest.mark.parametrize("name", ["first", "showcase", "empty"])
@pytest.mark.parametrize("width", [1440, 390])
@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_it_opens_from_disk_offline_without_error_or_request(browser, files, name, width, scheme) -> None:
    with Opened(browser, files[name], width, color_scheme=scheme) as opened:
        for figure in opened.page.locator("figure.spatial").all():
            figure.scroll_into_view_if_needed()
        opened.page.wait_for_timeout(200)
        assert opened.said == []
        assert [url for url in opened.asked if not url.startswith(("file:", "data:"))] == []
        assert opened.page.evaluate("document.documentElement.scrollWidth") <= width
        assert opened.page.locator("h1").count() == 1


def test_it_can_be_used_within_two_seconds(browser, files) -> None:
    with Opened(browser, files["first"]) as opened:
        assert opened.page.evaluate("performance.getEntriesByType('navigation')[0].domComplete") < 2000
        assert opened.page.locator(".station").first.is_visible()


def test_the_slider_changes_the_words_and_moves_both_markers(browser, files) -> None:
    with Opened(browser, files["first"]) as opened:
        page = opened.page
        slider, says = page.locator("#station-P1"), page.locator("#station-P1-says")
        before = says.inner_text()
        where = page.locator("#plan-marker circle").get_attribute("cx")
        assert "Chainage" in before
        slider.focus()
        for _ in range(6):
            page.keyboard.press("ArrowRight")
        assert says.inner_text() != before
        assert page.locator("#plan-marker circle").get_attribute("cx") != where
        slider.fill("2")  # 1.0 m from the corner: band 0.587 to 0.919 (0.55 + 0.037, 0.90 + 0.019)
        assert "Real demand 0.59 to 0.92 times the 2D value: over-states" in says.inner_text()
        assert "translate" in (page.locator(".ribbon-marker").get_attribute("transform") or "")


def test_outputs_and_layers_are_chosen_without_scripts(browser, files) -> None:
    with Opened(browser, files["showcase"], java_script_enabled=False) as opened:
        page = opened.page
        assert page.locator(".for-governing").first.is_visible()
        page.locator("#show-support_force").check()
        assert page.locator(".for-support_force .v-under_states").first.is_visible()
        assert not page.locator(".for-governing").first.is_visible()
        assert page.locator(".layer-cuts").is_visible()
        page.locator("#layer-cuts").uncheck()
        assert not page.locator(".layer-cuts").is_visible()
        assert page.locator("img.still").count() == 4
        assert page.locator("img.still").first.is_visible()
        assert not page.locator(".station").first.is_visible()


def test_zoom_by_buttons_and_back(browser, files) -> None:
    with Opened(browser, files["first"]) as opened:
        plan = opened.page.locator("svg.plan")
        whole = plan.get_attribute("viewBox")
        opened.page.get_by_role("button", name="Zoom in").click()
        assert plan.get_attribute("viewBox") != whole
        opened.page.get_by_role("button", name="Whole plan").click()
        assert [float(v) for v in (plan.get_attribute("viewBox") or "").split()] == [
            float(v) for v in (whole or "").split()
        ]


def test_the_pair_turns_together_by_key_and_button(browser, files) -> None:
    from playwright.sync_api import expect

    with Opened(browser, files["first"]) as opened:
        page = opened.page
        figure = page.locator("figure.spatial").first
        figure.scroll_into_view_if_needed()
        expect(figure).to_have_attribute("data-yaw", "0.663")  # 38 degrees
        shots = [canvas.screenshot() for canvas in figure.locator("canvas").all()]
        figure.locator("canvas").first.focus()
        page.keyboard.press("ArrowLeft")
        expect(figure).to_have_attribute("data-yaw", "0.543")
        assert all(
            canvas.screenshot() != shot for canvas, shot in zip(figure.locator("canvas").all(), shots, strict=True)
        )
        figure.get_by_role("button", name="As drawn").click()
        expect(figure).to_have_attribute("data-yaw", "0.663")


@pytest.mark.parametrize("name", ["first", "showcase"])
def test_no_table_or_drawing_is_cut_off_in_print(browser, files, name) -> None:
    with Opened(browser, files[name], A4_PIXELS) as opened:
        opened.page.emulate_media(media="print")
        wide = opened.page.evaluate(
            "[...document.querySelectorAll('table, svg, img')].filter(item => item.getBoundingClientRect().right > "
            f"{A4_PIXELS} + 1).map(item => item.outerHTML.slice(0, 80))"
        )
        assert wide == []
        assert not opened.page.locator("canvas").first.is_visible()
        assert opened.page.locator("img.still").first.is_visible()
        assert opened.page.locator("header .notice").is_visible()


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_no_accessibility_rule_is_broken(browser, files, scheme) -> None:
    from axe_playwright_python.sync_playwright import Axe

    with Opened(browser, files["showcase"], color_scheme=scheme, bypass_csp=True) as opened:
        found = Axe().run(opened.page).response["violations"]
        assert [(one["id"], [node["target"] for node in one["nodes"]][:3]) for one in found] == []


@pytest.mark.parametrize("width", [1440, 390])
def test_every_sheet_can_be_pictured(browser, files, width, tmp_path) -> None:
    with Opened(browser, files["first"], width) as opened:
        for n, sheet in enumerate(opened.page.locator("section.sheet").all()):
            sheet.screenshot(path=tmp_path / f"{n}.png")
            assert (tmp_path / f"{n}.png").stat().st_size > 5_000
