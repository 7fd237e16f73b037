"""The report as one HTML file that needs nothing else: no script, no network, no font of its own."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path

from jinja2 import Environment, PackageLoader, StrictUndefined

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
    write_whole(render(view).encode("utf-8"), path)


def write_whole(content: bytes, path: Path) -> None:
    """Write a file whole or not at all.

    Raises
    ------
    OSError
        If the folder is missing or cannot be written; nothing is left behind.
    """
    handle, name = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.", suffix=".part")
    part = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        part.chmod(0o666 & ~_umask())
        part.replace(path)
    except BaseException:
        part.unlink(missing_ok=True)
        raise


def _umask() -> int:
    mask = os.umask(0o077)
    os.umask(mask)
    return mask
