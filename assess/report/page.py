"""The report as one HTML file that needs nothing else: no script, no network, no font of its own."""

from __future__ import annotations

from pathlib import Path

from jinja2 import Environment, PackageLoader, StrictUndefined

from assess.report.files import write_whole
from assess.results import ReportView


def render(view: ReportView) -> str:
    """Return the report as a self-contained HTML document; the same view gives the same text.

    Parameters
    ----------
    view
        All that the report shows; see `assess.results.ReportView`.
    """
    from assess.report.content import build  # draws with matplotlib: loaded only when a report is made

    return pages().get_template("report.html.j2").render(build(view))


def pages() -> Environment:
    """Return the templates."""
    return Environment(
        loader=PackageLoader("assess.report", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )


def write_report(view: ReportView, path: Path) -> None:
    """Write the report to `path`, whole or not at all; an old file stays until the new one is complete.

    Raises
    ------
    OSError
        If the folder is missing or cannot be written; nothing is left behind.
    """
    write_whole(path, render(view).encode("utf-8"))
