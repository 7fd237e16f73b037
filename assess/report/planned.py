"""The picture of a planned visit as a file of its own."""

from __future__ import annotations

import io
from pathlib import Path
from xml.etree import ElementTree

from assess.report.files import write_whole
from assess.results import PlanResult

_SVG = "http://www.w3.org/2000/svg"
_DOTS_PER_INCH = 200


def write_plan(result: PlanResult, path: Path) -> None:
    """Draw a planned visit into an .svg or a .png file.

    Raises
    ------
    OSError
        If the folder is missing or cannot be written; nothing is left behind.
    """
    write_whole(path, _png(result) if path.suffix.lower() == ".png" else _svg(result))


def _png(result: PlanResult) -> bytes:
    from assess.report.figures import planned  # draws with matplotlib: loaded only when a picture is made

    raw = io.BytesIO()
    with planned.drawn(result) as figure:
        figure.savefig(
            raw,
            format="png",
            dpi=_DOTS_PER_INCH,
            facecolor="white",
            transparent=False,
            metadata={"Software": None},
        )
    return raw.getvalue()


def _svg(result: PlanResult) -> bytes:
    """The drawing with a size, a ground and a font of its own, which inside a page are the page's."""
    from assess.report import svg
    from assess.report.figures import planned

    with planned.drawn(result) as figure:
        text = svg.to_svg(
            figure,
            key="plan",
            title=f"Next visit of {result.bridge} with the vehicle {result.vehicle}",
            desc=planned.in_words(result),
        )
        width, height = (72.0 * inches for inches in figure.get_size_inches())
    root = ElementTree.fromstring(text)
    root.set("width", f"{width:g}pt")
    root.set("height", f"{height:g}pt")
    root.set("style", "background:#ffffff;font-family:'DejaVu Sans',sans-serif")
    del root.attrib["class"]
    ElementTree.register_namespace("", _SVG)
    return ElementTree.tostring(root, encoding="unicode").encode("utf-8")
