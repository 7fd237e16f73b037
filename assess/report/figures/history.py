"""A pad over the years: its stiffness against nominal at every visit, the law, and the forecast."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from assess.report import svg, words
from assess.results import PadHistory

_HEIGHT = 190.0
_LEFT, _RIGHT, _FOOT, _HEAD = 40.0, 15.0, 58.0, 16.0  # right: half a year's label
_TICKS = (
    0.01,
    0.02,
    0.05,
    0.1,
    0.2,
    0.3,
    0.4,
    0.5,
    0.6,
    0.7,
    0.8,
    0.9,
    1.0,
    1.2,
    1.5,
    2.0,
    3.0,
    5.0,
    10.0,
    20.0,
)
_WINTER_DEGC = 5.0  # at and below, the temperature is written: common practice, no source
_FAN_WIDEST = 10.0  # a fan wider than tenfold says nothing more and is drawn no further


def common_axes(histories: Sequence[PadHistory]) -> tuple[tuple[float, float], tuple[float, float]]:
    """Return the limits shared by all pads of a girder: days (ordinals) and log10 of the ratio."""
    days = [d.toordinal() for h in histories for d in (*h.dates, *h.line_dates[: _fan_length(h)])]
    start, end = (min(days), max(days)) if days else (dt.date(2000, 1, 1).toordinal(),) * 2
    pad = max(0.04 * (end - start), 120.0)
    values = [
        v
        for h in histories
        for series in (
            h.ratio,
            h.low95,
            h.high95,
            h.line,
            h.fan_low[: _fan_length(h)],
            h.fan_high[: _fan_length(h)],
        )
        for v in series.tolist()
        if math.isfinite(v) and v > 0.0
    ]
    low, high = (math.log10(min([*values, 0.8])), math.log10(max([*values, 1.25])))
    room = 0.06 * (high - low)
    return (start - pad, end + pad), (max(low - 3.0 * room, -2.5), min(high + room, 2.5))


def plot(
    history: PadHistory,
    limits: tuple[tuple[float, float], tuple[float, float]],
    *,
    key: str,
    step: tuple[dt.date, dt.date] | None = None,
) -> str:
    """Draw one pad.

    Parameters
    ----------
    history
        The pad's visits, law and forecast.
    limits
        Of `common_axes`, the same for all pads of the girder.
    key
        Unique on the page.
    step
        The visits between which the stiffness stepped, if the law says so.
    """
    with svg.drawing(svg.SMALL_WIDTH, _HEIGHT) as figure:
        axes = _axes(figure, limits)
        axes.axhline(0.0, color=svg.NEUTRAL, lw=0.9, zorder=1)
        if step is not None:
            _step(axes, step)
        _fan(axes, history)
        assumed = _points(axes, history)
        _winter(axes, history)
        sheet = svg.paper(figure)
        _foot(sheet, history, assumed)
        return svg.to_svg(
            figure,
            key=key,
            title=f"Stiffness of the pad at {history.support} over the years",
            desc=_in_words(history),
        )


def _axes(figure: Figure, limits: tuple[tuple[float, float], tuple[float, float]]) -> Axes:
    (start, end), (low, high) = limits
    width = svg.SMALL_WIDTH
    axes = figure.add_axes(
        (
            _LEFT / width,
            _FOOT / _HEIGHT,
            (width - _LEFT - _RIGHT) / width,
            (_HEIGHT - _FOOT - _HEAD) / _HEIGHT,
        )
    )
    axes.patch.set_visible(False)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)
    axes.set_xlim(start, end)
    axes.set_ylim(low, high)
    years = _years(start, end)
    axes.set_xticks([dt.date(y, 1, 1).toordinal() for y in years], [str(y) for y in years])
    ticks = _ratio_ticks(low, high)
    axes.set_yticks([math.log10(t) for t in ticks], [f"{t:g}" for t in ticks])
    axes.tick_params(length=3.0)
    axes.annotate(
        "stiffness over nominal (log scale)",
        (0, 1),
        (2 - _LEFT, 5),
        xycoords="axes fraction",
        textcoords="offset points",
        ha="left",
        va="bottom",
    )
    return axes


def _years(start: float, end: float) -> list[int]:
    first, last = dt.date.fromordinal(int(start)).year + 1, dt.date.fromordinal(int(end)).year
    count = last - first + 1
    step = next((s for s in (1, 2, 3, 4, 5, 10, 20, 25, 50) if count / s <= 5.5), 100)
    return [y for y in range(first, last + 1) if y % step == 0] or [last]


def _ratio_ticks(low: float, high: float) -> list[float]:
    """Choose ticks no closer than 13 pt, 1 always among them."""
    per_pt = (high - low) / (_HEIGHT - _FOOT - _HEAD)
    chosen = [1.0]
    for tick in sorted(_TICKS, key=lambda t: (t not in (0.1, 0.5, 2.0, 10.0, 0.2, 5.0), abs(math.log10(t)))):
        at = math.log10(tick)
        if low <= at <= high and all(abs(at - math.log10(c)) > 13.0 * per_pt for c in chosen):
            chosen.append(tick)
    return sorted(chosen)


def _fan_length(history: PadHistory) -> int:
    """Return how many times of the line are drawn: the fan ends where it stops being meaningful.

    One visit gives no law, so no line.
    """
    if len(history.dates) < 2:
        return 0
    last = history.last_visit
    for i, (day, low, high) in enumerate(
        zip(history.line_dates, history.fan_low.tolist(), history.fan_high.tolist(), strict=True)
    ):
        if day > last and not (low > 0.0 and high / low <= _FAN_WIDEST):
            return i
    return len(history.line_dates)


def has_forecast(history: PadHistory) -> bool:
    """Say whether a fan is drawn: a law of at least two visits, carried past the last of them."""
    count = _fan_length(history)
    return count > 0 and history.line_dates[count - 1] > history.last_visit


def _fan(axes: Axes, history: PadHistory) -> None:
    """Draw the law as a line, and after the last visit the forecast as a fan with an end."""
    count = _fan_length(history)
    if count < 2:
        return
    last = history.last_visit.toordinal()
    days = np.array([d.toordinal() for d in history.line_dates[:count]], dtype=float)
    line = np.log10(history.line[:count])
    low, high = np.log10(history.fan_low[:count]), np.log10(history.fan_high[:count])
    ahead = np.unique(np.concatenate([[float(last)], days[days > last]]))
    if ahead.size > 1 and last >= days[0]:
        edges = [np.interp(ahead, days, edge) for edge in (low, high)]
        axes.fill_between(ahead, *edges, fc=svg.ACCENT_TINT, ec="none", zorder=1.5)
        for edge in edges:
            axes.plot(ahead, edge, color=svg.ACCENT, lw=0.7, zorder=2)
        axes.plot([ahead[-1]] * 2, [edges[0][-1], edges[1][-1]], color=svg.ACCENT, lw=1.4, zorder=2)
        axes.plot(ahead, np.interp(ahead, days, line), color=svg.ACCENT, lw=1.2, ls=(0, (4, 2)), zorder=3)
    past = days <= last
    behind = np.concatenate([days[past], [float(last)]]) if past.any() else np.array([])
    if behind.size:
        axes.plot(behind, np.interp(behind, days, line), color=svg.ACCENT, lw=1.6, zorder=3)


def _points(axes: Axes, history: PadHistory) -> bool:
    """Draw the visits; return whether any of them was told by the assumption (open marker)."""
    any_assumed = False
    for i, day in enumerate(history.dates):
        value = float(history.ratio[i])
        if not (math.isfinite(value) and value > 0.0):
            continue
        assumed = not float(history.data_share[i]) >= 0.5
        any_assumed = any_assumed or assumed
        x = day.toordinal()
        ends = [float(history.low95[i]), float(history.high95[i])]
        if all(math.isfinite(e) and e > 0.0 for e in ends):
            axes.plot([x, x], np.log10(ends), color=svg.INK, lw=1.0, zorder=4)
            axes.plot([x, x], np.log10(ends), color=svg.INK, lw=0, marker="_", ms=5, zorder=4)
        face = "white" if assumed else svg.INK
        axes.plot([x], [math.log10(value)], marker="o", ms=5, mfc=face, mec=svg.INK, mew=1.1, zorder=5)
    return any_assumed


def _winter(axes: Axes, history: PadHistory) -> None:
    """Write the pad temperature of cold visits: cold rubber is stiffer rubber."""
    low, high = axes.get_ylim()
    for i, (day, warmth) in enumerate(zip(history.dates, history.temperature_degC, strict=True)):
        if warmth is None or warmth > _WINTER_DEGC:
            continue
        x = day.toordinal()
        top = [v for v in (float(history.low95[i]), float(history.ratio[i])) if math.isfinite(v) and v > 0]
        axes.plot(
            [x, x],
            [low + 0.11 * (high - low), math.log10(min(top)) if top else high],
            color=svg.NEUTRAL,
            lw=0.6,
            ls=(0, (1, 2)),
            zorder=1,
        )
        axes.text(
            x, low + 0.02 * (high - low), words.entered(warmth, "°C"), ha="center", va="bottom", zorder=6
        )


def _step(axes: Axes, step: tuple[dt.date, dt.date]) -> None:
    _, high = axes.get_ylim()
    for day in step:
        axes.axvline(day.toordinal(), color=svg.SECOND, lw=0.8, ls=(0, (5, 2)), zorder=1)
    axes.text(step[1].toordinal() + 40, high, "step", ha="left", va="top", color=svg.SECOND)


def _foot(sheet: Axes, history: PadHistory, assumed: bool) -> None:
    """Write below the axis what law the line is and where the fan ends."""
    count = _fan_length(history)
    told = f"law: {words.plain(history.law)}" if count else "no law: too few visits"
    if has_forecast(history):
        told += f"; forecast ends {history.line_dates[count - 1].year}"
    sheet.text(2.0, _HEIGHT - 27.0, told, ha="left", va="baseline")
    keys = [("told by the readings, bar 95 %", svg.INK)]
    if assumed:
        keys.append(("told by the assumption", "white"))
    for i, (meaning, face) in enumerate(keys):
        y = _HEIGHT - 18.0 + 12.0 * i
        sheet.plot([5], [y], marker="o", ms=5, mfc=face, mec=svg.INK, mew=1.1)
        sheet.text(11.0, y + 3.0, meaning, ha="left", va="baseline")


def _in_words(history: PadHistory) -> str:
    parts = [f"Law: {history.law}." if _fan_length(history) else "No law: too few visits."]
    for i, day in enumerate(history.dates):
        ratio = words.interval(float(history.ratio[i]), float(history.low95[i]), float(history.high95[i]))
        share = "" if float(history.data_share[i]) >= 0.5 else ", told by the assumption"
        warmth = history.temperature_degC[i]
        cold = f", pad at {words.entered(warmth)} °C" if warmth is not None else ""
        parts.append(f"{words.date(day)}: {ratio} of nominal{share}{cold}.")
    if has_forecast(history):
        i = _fan_length(history) - 1
        told = words.interval(float(history.line[i]), float(history.fan_low[i]), float(history.fan_high[i]))
        parts.append(f"Forecast for {words.date(history.line_dates[i])}: {told} of nominal.")
    return " ".join(parts)
