"""The mark beside a status word: a bar filled as far as the capacity is used."""

from __future__ import annotations

from html import escape

from assess.report import svg, words

_WIDTH = 132.0
_HEIGHT = 26.0
_UNIT = 96.0  # px from 0 to 1.0
_END = 1.3  # utilisation at which the drawn bar stops
_TINTS = {"within": svg.ACCENT_TINT, "watch": svg.ACCENT, "over": svg.SECOND, "unknown": svg.NEUTRAL}


def mark(
    utilisation: float | None,
    low: float | None,
    high: float | None,
    *,
    key: str,
    name: str,
    status: str | None = None,
) -> str:
    """Draw one utilisation: fill for the value, whisker for its 95 % interval, tall rule at 1.0.

    Parameters
    ----------
    utilisation, low, high
        The value and its interval; None draws an empty dashed frame.
    key
        Unique on the page; ids begin with it.
    name
        The section in words, for the text read out.
    status
        The status word where it is not that of the value: "unknown" for a value that does not stand today is
        drawn grey in a dashed frame.
    """
    status = status or words.status(utilisation)
    told = words.interval(utilisation, low, high, reason="no capacity or no effect to compare")
    title = escape(words.plain(f"{name}: {status}, utilisation {told}"))
    body = [] if utilisation is None or not words.known(utilisation) else _bar(utilisation, status)
    body += _frame(dashed=not body or status == "unknown")
    if body and low is not None and high is not None and words.known(low) and words.known(high):
        body += _whisker(low, high)
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="mark" role="img" aria-labelledby="{key}-title" '
        f'viewBox="0 0 {_WIDTH:g} {_HEIGHT:g}" width="{_WIDTH:g}" height="{_HEIGHT:g}">'
        f'<title id="{key}-title">{title}</title>{"".join(body)}</svg>'
    )


def _x(utilisation: float) -> float:
    return 2.0 + _UNIT * min(max(utilisation, 0.0), _END)


def _bar(utilisation: float, status: str) -> list[str]:
    end = _x(utilisation)
    bar = [f'<rect x="2" y="5" width="{end - 2.0:.2f}" height="11" fill="{_TINTS[status]}"/>']
    if utilisation > _END:  # drawn no longer; the arrow head says that it goes on
        bar.append(f'<path d="M{end:.2f} 3l5 7.5l-5 7.5z" fill="{_TINTS[status]}"/>')
    return bar


def _frame(*, dashed: bool) -> list[str]:
    dash = ' stroke-dasharray="3 3"' if dashed else ""
    one, watch = _x(1.0), _x(words.WATCH_FROM)
    return [
        f'<rect x="2" y="5" width="{one - 2.0:.2f}" height="11" fill="none" stroke="{svg.INK}"{dash}/>',
        f'<path d="M{watch:.2f} 1v4" stroke="{svg.INK}"/>',
        f'<path d="M{one:.2f} 1v24" stroke="{svg.INK}" stroke-width="2"/>',
    ]


def _whisker(low: float, high: float) -> list[str]:
    a, b = _x(low), _x(high)
    line = f"M{a:.2f} 18.5v6M{a:.2f} 21.5H{b:.2f}M{b:.2f} 18.5v6"
    return [f'<path d="{line}" stroke="{svg.INK}" stroke-width="1.4" fill="none"/>']
