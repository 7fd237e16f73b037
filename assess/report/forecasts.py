"""What the forecasts say beside their fans: losses of plates, and where the spread comes from."""

from __future__ import annotations

from assess.report import words
from assess.report.figures import fan
from assess.results import TrendResult

_NAMED = 4  # of what the spread comes from, at most


def loss_trend_rows(trend: TrendResult) -> list[list[str]]:
    """Return what the plates have lost, and how fast."""
    why = "the bridge file does not say when it was built"
    return [
        [
            x.section,
            x.plate,
            str(x.visits),
            words.entered(x.loss_mm, "mm"),
            words.interval(x.rate_mm_per_year, x.low95, x.high95, "mm a year", why),
        ]
        for x in trend.losses
    ]


def shares_sentence(trend: TrendResult, girder: str) -> str:
    """Say what the forecasts of the governing sections of a girder are uncertain by."""
    told = []
    for row in fan.governing([row for row in trend.spans if row.girder == girder]):
        if row.shares and row.shares_on is not None:
            each = ", ".join(
                f"{fan.in_words(one.what, one.support)} {one.share:.0%}" for one in row.shares[:_NAMED]
            )
            name = words.section(row.effect, row.span, row.support)
            told.append(f"{name}, by {words.date(row.shares_on)}: {each}")
    return "What the spread of the forecast comes from: " + "; ".join(told) + "." if told else ""
