"""Draw the README's pictures: parts of the demo's report, as a browser shows them.

Usage: python scripts/make_pictures.py bedstone-demo/hollin-water.html

plan.png is no part of the report: bedstone plan hollin-water --vehicle "works locomotive" --girder north -o plan.png
"""

from __future__ import annotations

import shutil
import sys
from pathlib import Path

from playwright.sync_api import sync_playwright

FOLDER = Path(__file__).resolve().parent.parent / "docs" / "pictures"
PARTS = {
    "elevation": "Girder north: test state T3",
    "section": "Section pier 2:",
    "moments": "Girder north: factored moments",
    "pads": "Pad at pier 2",
    "pad-and-seat": "Pad and seat at pier 2",
    "forecast": "sagging in span 3",
}
QUIET = [
    "--no-sandbox",
    "--disable-gpu",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-sync",
]


def main(page_file: Path) -> None:
    """Take the pictures from a report."""
    FOLDER.mkdir(parents=True, exist_ok=True)
    with sync_playwright() as play:
        browser = play.chromium.launch(executable_path=shutil.which("chromium"), args=QUIET)
        page = browser.new_page(viewport={"width": 1000, "height": 900}, device_scale_factor=1.5)
        page.goto(page_file.resolve().as_uri())
        for name, caption in PARTS.items():
            figure = page.locator("figure", has_text=caption).first
            figure.screenshot(path=str(FOLDER / f"{name}.png"))
        browser.close()


if __name__ == "__main__":
    main(Path(sys.argv[1]))
