"""The page in a browser: nothing is asked of a network, nothing overflows, keys reach everything."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest
from playwright.sync_api import Browser, sync_playwright
from tests.report import sample
from tests.report.test_page import hostile

from fourfold.report import build

ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--disable-background-networking"]
PAGES = ("cohort", "prediction", "case_control", "hostile")


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    path = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
    assert path is not None, "these tests need chromium (Debian: apt install chromium)"
    with sync_playwright() as playwright:
        opened = playwright.chromium.launch(executable_path=path, args=ARGUMENTS)
        yield opened
        opened.close()


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    made = tmp_path_factory.mktemp("pages")
    for name in PAGES:
        results = hostile() if name == "hostile" else getattr(sample, name)()
        (made / f"{name}.html").write_bytes(build.render(results, ["html"]).files["report.html"])
    return made


@pytest.mark.parametrize("name", PAGES)
@pytest.mark.parametrize("width", [1280, 390])
def test_page_stands_alone_and_fits(browser, folder, name, width):
    opened = browser.new_page(viewport={"width": width, "height": 900})
    said: list[str] = []
    asked: list[str] = []
    opened.on("console", lambda message: said.append(message.text))
    opened.on("pageerror", lambda error: said.append(str(error)))
    opened.on("dialog", lambda dialog: said.append(dialog.message))
    opened.on("request", lambda request: asked.append(request.url))
    opened.goto((folder / f"{name}.html").as_uri())
    opened.evaluate("document.fonts.ready")
    # A refusal by the page's own policy would appear here, as would any script.
    assert said == []
    assert [url for url in asked if not url.startswith("data:font/woff2")] == [
        (folder / f"{name}.html").as_uri()
    ]
    assert opened.evaluate("document.documentElement.scrollWidth") <= width
    assert opened.evaluate("getComputedStyle(document.querySelector('h1')).fontFamily").startswith(
        '"Source Serif 4"'
    )
    assert opened.evaluate("[...document.fonts].filter(one => one.status === 'loaded').length") >= 4
    opened.close()


def test_skip_link_is_the_first_stop_and_leads_to_the_report(browser, folder):
    opened = browser.new_page(viewport={"width": 1280, "height": 900})
    opened.goto((folder / "cohort.html").as_uri())
    opened.keyboard.press("Tab")
    assert opened.evaluate("document.activeElement.textContent") == "Skip to the report"
    assert opened.evaluate("document.activeElement.getBoundingClientRect().left") >= 0
    opened.keyboard.press("Enter")
    assert opened.evaluate("document.activeElement.id") == "report"
    opened.close()


def test_wide_tables_scroll_within_their_own_region_and_by_key(browser, folder):
    opened = browser.new_page(viewport={"width": 390, "height": 900})
    opened.goto((folder / "cohort.html").as_uri())
    wider = opened.evaluate(
        "[...document.querySelectorAll('.scroll, .drawing')].filter(one => one.scrollWidth > one.clientWidth)"
        ".map(one => one.tabIndex)"
    )
    assert len(wider) > 5
    assert set(wider) == {0}
    opened.close()


def contrast(first: str, second: str) -> float:
    """Contrast of two CSS colours, WCAG 2.2."""

    def luminance(colour: str) -> float:
        parts = [float(part) / 255 for part in colour[colour.index("(") + 1 : -1].split(",")[:3]]
        linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
        return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

    bright, dark = sorted((luminance(first), luminance(second)), reverse=True)
    return (bright + 0.05) / (dark + 0.05)


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_every_word_has_contrast_in_light_and_dark(browser, folder, scheme):
    opened = browser.new_page(viewport={"width": 1280, "height": 900}, color_scheme=scheme)
    opened.goto((folder / "cohort.html").as_uri())
    page = opened.evaluate("getComputedStyle(document.documentElement).backgroundColor")
    colours = opened.evaluate(
        "[...new Set([...document.querySelectorAll('body :not(svg):not(svg *)')]"
        ".map(one => getComputedStyle(one).color))]"
    )
    assert len(colours) >= 3
    # Success criterion 1.4.3: 4.5:1 for text.
    assert {colour: contrast(colour, page) >= 4.5 for colour in colours} == dict.fromkeys(colours, True)
    opened.close()


def test_print_is_light_whatever_the_screen(browser, folder):
    opened = browser.new_page(color_scheme="dark")
    opened.goto((folder / "cohort.html").as_uri())
    opened.emulate_media(media="print", color_scheme="dark")
    assert (
        opened.evaluate("getComputedStyle(document.documentElement).backgroundColor") == "rgb(255, 255, 255)"
    )
    opened.close()
