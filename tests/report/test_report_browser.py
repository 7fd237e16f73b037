"""The page in a real browser: quiet, alone, within its window, printable."""

from __future__ import annotations

import os
import shutil

import pytest

pytestmark = pytest.mark.browser

SWITCHES = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]


@pytest.fixture(scope="module")
def browser():
    path = shutil.which("chromium")
    if path is None:
        reason = "no chromium on this machine: the page was not opened in a browser"
        if os.environ.get("BEDSTONE_REQUIRE_BROWSER") == "1":
            pytest.fail(reason)
        pytest.skip(reason)
    from playwright.sync_api import sync_playwright

    with sync_playwright() as runner:
        opened = runner.chromium.launch(executable_path=path, args=SWITCHES)
        yield opened
        opened.close()


@pytest.fixture(params=["example", "bare", "long_names", "nasty"])
def file(request, tmp_path, page_of):
    path = tmp_path / "report.html"
    path.write_text(page_of(request.param), encoding="utf-8")
    return path


def test_the_page_says_nothing_asks_for_nothing_and_prints(browser, file):
    page = browser.new_page(viewport={"width": 1000, "height": 900})
    heard: list[str] = []
    asked: list[str] = []
    page.on("console", lambda message: heard.append(message.text))
    page.on("pageerror", lambda error: heard.append(str(error)))
    page.on("dialog", lambda dialog: heard.append(dialog.message))
    page.on("request", lambda request: asked.append(request.url))
    page.goto(file.as_uri())
    page.wait_for_load_state("networkidle")
    printed = page.pdf(prefer_css_page_size=True)
    page.close()
    assert heard == []
    assert asked == [file.as_uri()]
    assert printed.startswith(b"%PDF")
    assert b"/MediaBox [0 0 595" in printed or b"/MediaBox [0 0 594" in printed


@pytest.mark.parametrize("width", [360, 1000])
def test_the_page_never_scrolls_sideways_and_its_text_stays_large_enough(browser, file, width):
    page = browser.new_page(viewport={"width": width, "height": 800})
    page.goto(file.as_uri())
    assert page.evaluate("document.documentElement.scrollWidth") <= width
    smallest = page.evaluate(
        """() => {
        const sizes = [...document.querySelectorAll('p, td, th, li, dd, dt, figcaption, caption')]
            .map(e => parseFloat(getComputedStyle(e).fontSize));
        for (const text of document.querySelectorAll('svg text')) {
            const scale = text.ownerSVGElement.getScreenCTM().a;
            sizes.push(parseFloat(getComputedStyle(text).fontSize) * scale);
        }
        return Math.min(...sizes);
    }"""
    )
    page.close()
    assert smallest >= 11.9


def test_no_text_of_a_drawing_is_cut_off(browser, file):
    page = browser.new_page(viewport={"width": 1000, "height": 800})
    page.goto(file.as_uri())
    cut = page.evaluate(
        """() => [...document.querySelectorAll('svg text')].filter(text => {
        const box = text.getBoundingClientRect(), sheet = text.ownerSVGElement.getBoundingClientRect();
        return box.left < sheet.left - 1 || box.right > sheet.right + 1
            || box.top < sheet.top - 3 || box.bottom > sheet.bottom + 3;
    }).map(text => text.textContent)"""
    )
    page.close()
    assert cut == []


def test_no_text_of_a_drawing_lies_over_another(browser, file):
    page = browser.new_page(viewport={"width": 1000, "height": 800})
    page.goto(file.as_uri())
    met = page.evaluate(
        """() => [...document.querySelectorAll('svg.drawing')].flatMap(drawing => {
        const texts = [...drawing.querySelectorAll('text')].map(t => [t.textContent, t.getBoundingClientRect()]);
        const found = [];
        texts.forEach(([a, p], i) => texts.slice(i + 1).forEach(([b, q]) => {
            const wide = Math.min(p.right, q.right) - Math.max(p.left, q.left);
            const tall = Math.min(p.bottom, q.bottom) - Math.max(p.top, q.top);
            if (wide > 1 && tall > 5) found.push(a + ' / ' + b);
        }));
        return found;
    })"""
    )
    page.close()
    assert met == []
