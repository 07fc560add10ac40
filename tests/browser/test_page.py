"""The page as a reader meets it: on a phone, a screen and paper, light and dark, without scripts.

Needs Chromium and Playwright (``pip install 'knought[browser]'``); skips, saying so, where they are
missing. axe-core comes with axe-playwright-python, so that nothing is fetched.
"""

from __future__ import annotations

from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

import pytest

from knought.reporting.page import page
from tests.reporting.test_golden import STATES

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

    from playwright.sync_api import Browser, Page

    import knought as kn

pytestmark = pytest.mark.browser

WIDTHS = (360, 1024, 1600)

#: Findings of axe-core that no page may have.
SERIOUS = {"serious", "critical"}


@contextmanager
def opened(browser: Browser, path: Path, width: int = 1024, **options: Any) -> Iterator[Page]:
    """Open a page, and see to it that it says nothing in the console and asks for nothing."""
    context = browser.new_context(viewport={"width": width, "height": 900}, **options)
    found = context.new_page()
    said: list[str] = []
    asked: list[str] = []
    found.on("console", lambda message: said.append(message.text))
    found.on("pageerror", lambda error: said.append(str(error)))
    found.on("request", lambda request: asked.append(request.url))
    try:
        found.goto(path.as_uri())
        yield found
        assert said == []
        assert [url for url in asked if not url.startswith("data:")] == [path.as_uri()]
    finally:
        context.close()


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_the_page_fits_its_window(
    browser: Browser, page_file: Path, report: kn.Report, width: int, scheme: Any
) -> None:
    with opened(browser, page_file, width, color_scheme=scheme) as found:
        assert found.evaluate("document.documentElement.scrollWidth") == width
        shown = found.locator("figure.picture svg:visible")
        assert shown.count() == len(report.pictures)
        for i in range(shown.count()):
            box = shown.nth(i).bounding_box()
            assert box is not None
            assert box["x"] >= 0
            assert box["x"] + box["width"] <= width
            assert box["height"] > 40
        # Letters in a figure are never smaller than two thirds of those of a footnote.
        scale = found.evaluate(
            "[...document.querySelectorAll('figure.picture svg')]"
            ".filter(svg => svg.getBoundingClientRect().width)"
            ".map(svg => svg.getBoundingClientRect().width / svg.viewBox.baseVal.width)"
        )
        assert min(scale) > 0.9


def test_the_answer_comes_first(browser: Browser, page_file: Path) -> None:
    with opened(browser, page_file, 1024) as found:
        box = found.locator("dl.answer").bounding_box()
        assert box is not None
        assert box["y"] + box["height"] < 900


def test_runs_answer_to_the_pointer(browser: Browser, page_file: Path) -> None:
    with opened(browser, page_file) as found:
        label = found.locator("#label")
        for figure in ("temperature", "salt", "residuals"):
            point = found.locator(f"#figure-{figure} svg.wide .point").first
            point.scroll_into_view_if_needed()
            point.locator(".reach").hover(force=True)
            text = label.text_content() or ""
            for part in ("run ", "T = ", "I = ", "k = ", "residual = "):
                assert part in text
            assert label.is_visible()
            box = label.bounding_box()
            assert box is not None
            assert 0 <= box["x"] <= 1024 - box["width"]
        found.mouse.move(2, 2)
        assert label.is_hidden()


def test_runs_answer_to_the_keyboard(browser: Browser, page_file: Path) -> None:
    with opened(browser, page_file) as found:
        points = found.locator("#figure-salt svg.wide .point")
        first = found.locator('#figure-salt svg.wide .point[tabindex="0"]')
        assert first.count() == 1  # one stop of the tab key for a figure
        first.focus()
        label = found.locator("#label")
        found.keyboard.press("Home")
        said = {label.text_content()}
        for _ in range(points.count() - 1):
            found.keyboard.press("ArrowRight")
            assert label.is_visible()
            said.add(label.text_content())
        assert len(said) == points.count()
        found.keyboard.press("Escape")
        assert label.is_hidden()


def test_the_tab_key_shows_where_it_is(browser: Browser, page_file: Path) -> None:
    with opened(browser, page_file) as found:
        found.keyboard.press("Tab")
        assert found.evaluate("document.activeElement.className") == "skip"
        found.keyboard.press("Enter")
        assert found.url.endswith("#answer")
        found.locator("nav a").first.focus()
        found.keyboard.press("Tab")
        outline = found.evaluate("getComputedStyle(document.activeElement).outlineStyle")
        assert outline == "solid"


def test_tables_are_copied_as_a_spreadsheet_reads_them(
    browser: Browser, page_file: Path, report: kn.Report
) -> None:
    options: Any = {"permissions": ["clipboard-read", "clipboard-write"]}
    with opened(browser, page_file, **options) as found:
        buttons = found.locator("button.copy")
        assert buttons.count() == len(report.tables)
        found.locator("#table-working button.copy").click()
        found.wait_for_function("document.getElementById('said').textContent !== ''")
        lines = found.evaluate("navigator.clipboard.readText()").strip().split("\n")
        heads, first = (line.split("\t") for line in lines[:2])
        assert len(heads) == len(first)
        where = next(i for i, head in enumerate(heads) if head.startswith("ΔS"))
        entropy = report.assessment.parameters["activation_entropy"]
        assert float(first[where]) == pytest.approx(float(entropy.value), rel=1e-9)
        u = float(entropy.standard_uncertainty)
        assert float(first[where + 1]) == pytest.approx(u, rel=1e-9)
        assert heads[where + 1].startswith("u(ΔS")


def test_the_page_is_read_without_scripts(browser: Browser, page_file: Path) -> None:
    with opened(browser, page_file, java_script_enabled=False) as found:
        assert found.locator("dl.answer").is_visible()
        point = found.locator("#figure-salt svg.wide .point").first
        title = point.locator("title").text_content() or ""
        assert title.startswith("run ")
        assert "residual = " in title
        assert found.locator("button").count() == 0


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_axe_finds_nothing_serious(browser: Browser, page_file: Path, scheme: Any) -> None:
    axe = pytest.importorskip("axe_playwright_python.sync_playwright").Axe()
    # The page's own policy forbids what axe-core injects; that policy is tested elsewhere.
    with opened(browser, page_file, color_scheme=scheme, bypass_csp=True) as found:
        results = axe.run(found).response
        assert results["passes"]
        grave = [
            (each["id"], [node["html"][:120] for node in each["nodes"]][:3])
            for each in results["violations"]
            if each["impact"] in SERIOUS
        ]
        assert grave == []


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_page_prints(browser: Browser, page_file: Path, tmp_path: Path, paper: str) -> None:
    with opened(browser, page_file) as found:
        found.emulate_media(media="print")
        # A4 without its margins is 180 mm wide, Letter 186 mm.
        found.set_viewport_size({"width": 680, "height": 960})
        wide = found.evaluate(
            "[...document.querySelectorAll('table, svg')]"
            ".map(each => each.getBoundingClientRect())"
            ".filter(box => box.width && box.right > innerWidth + 1).length"
        )
        assert wide == 0
        assert found.locator("nav").is_hidden()
        assert found.locator("button.copy:visible").count() == 0
        target = tmp_path / "report.pdf"
        found.pdf(path=str(target), format=paper)
        assert target.read_bytes().startswith(b"%PDF")


@pytest.mark.parametrize("state", STATES)
def test_every_state_opens_without_a_word(browser: Browser, state: str, tmp_path: Path) -> None:
    path = tmp_path / "report.html"
    path.write_text(page(STATES[state]()), encoding="utf-8")
    with opened(browser, path, 360) as found:
        assert found.evaluate("document.documentElement.scrollWidth") == 360
        assert found.evaluate("document.scripts.length") == 1


def test_a_single_figure_file_opens(browser: Browser, report: kn.Report, tmp_path: Path) -> None:
    name, content = next(iter(report.figure_files(["svg"])))
    path = tmp_path / name.replace("/", "-")
    path.write_bytes(content)
    with opened(browser, path) as found:
        assert found.evaluate("document.documentElement.tagName") == "svg"
