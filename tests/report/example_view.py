"""A report view made by hand: an invented railway viaduct with two girders, three spans and six visits."""

from __future__ import annotations

import datetime as dt
import itertools
from dataclasses import replace
from typing import Any

import numpy as np

from assess.results import (
    AssessmentResult,
    CalibratedCase,
    CalibrationResult,
    CaseResult,
    CauseResult,
    CorrelationResult,
    ElevationState,
    GirderAssessment,
    GirderCalibration,
    GirderView,
    LeftOut,
    MeasuredPoint,
    MomentLines,
    PadHistory,
    PadResult,
    PadTrend,
    ProposedRemoval,
    ReactionResult,
    ReadingResult,
    ReportView,
    RivalResult,
    RobustPad,
    SeatTrend,
    SectionResult,
    SettlementResult,
    SpanTrend,
    SupportView,
    TrendResult,
    UnknownResult,
)
from assess.results.view import Floats

SPANS = [12.0, 15.0, 12.0]
SUPPORTS = ["west abutment", "pier 1", "pier 2", "east abutment"]
VISITS = [
    dt.date(2016, 5, 10),
    dt.date(2018, 5, 22),
    dt.date(2019, 1, 24),
    dt.date(2020, 6, 3),
    dt.date(2022, 5, 17),
    dt.date(2024, 5, 14),
]
TEMPERATURES = [14.0, 15.5, -3.0, 17.0, None, 13.0]


def ends(spans: list[float]) -> Floats:
    return np.concatenate([[0.0], np.cumsum(spans)])


def stations(spans: list[float]) -> Floats:
    return np.unique(
        np.concatenate([np.linspace(a, b, 41) for a, b in zip(ends(spans), ends(spans)[1:], strict=False)])
    )


def bends(spans: list[float], hogging: float, sagging: float) -> Floats:
    """Moments of a made-up shape: `hogging` at interior supports, about `sagging` within the spans."""
    x, at = stations(spans), ends(spans)
    levels = np.array([0.0, *[hogging] * (len(spans) - 1), 0.0])
    inside = np.interp(x, at, levels)
    for a, b, left, right in zip(at, at[1:], levels, levels[1:], strict=False):
        here = (x >= a) & (x <= b)
        share = (x[here] - a) / (b - a)
        inside[here] += (
            4.0 * share * (1.0 - share) * (sagging - (left + right) / 2.0) * ((b - a) / max(spans)) ** 2
        )
    return inside


def moment_lines(spans: list[float]) -> MomentLines:
    x, at = stations(spans), ends(spans)
    near = np.min(np.abs(x[:, None] - at[None, 1:-1]), axis=1) if len(spans) > 1 else np.full(x.shape, 99.0)
    rich = near <= 2.5

    def case(hog: float, sag: float) -> tuple[Floats, Floats]:
        return np.maximum(bends(spans, 0.35 * hog, sag), 0.0), np.minimum(bends(spans, hog, 0.2 * sag), 0.0)

    stiff, nominal, found = case(-5300.0, 3300.0), case(-4900.0, 3700.0), case(-4100.0, 4650.0)
    return MomentLines(
        x_m=x,
        capacity_sagging=np.where(rich, 6200.0, 5100.0),
        capacity_hogging=np.where(rich, -6000.0, -4700.0),
        unyielding_sagging=stiff[0],
        unyielding_hogging=stiff[1],
        nominal_sagging=nominal[0],
        nominal_hogging=nominal[1],
        calibrated_sagging=found[0],
        calibrated_hogging=found[1],
        sagging_low=0.95 * found[0],
        sagging_high=1.06 * found[0],
        hogging_low=1.08 * found[1],
        hogging_high=0.93 * found[1],
        unyielding_permanent=bends(spans, -760.0, 420.0),
        nominal_permanent=bends(spans, -700.0, 470.0),
        calibrated_permanent=bends(spans, -560.0, 560.0),
    )


def state(name: str, spans: list[float], loaded: int, size: float) -> ElevationState:
    x, at = stations(spans), ends(spans)
    fitted = np.interp(x, at, [size * 0.16 * np.exp(-abs(i - loaded - 0.5)) for i in range(len(at))])
    for i, (a, b) in enumerate(itertools.pairwise(at)):
        here = (x > a) & (x < b)
        share = (x[here] - a) / (b - a)
        wave = size * (1.0 if i == loaded else -0.3 / max(1, abs(i - loaded)) ** 2)
        fitted[here] += wave * np.sin(np.pi * share)
    centre = (at[loaded] + at[loaded + 1]) / 2.0
    points = []
    for i, b in enumerate(at):
        value = float(np.interp(b, x, fitted))
        points.append(
            MeasuredPoint(
                x_m=float(b),
                value_mm=value + 0.02,
                sd_mm=0.05,
                fitted_mm=value,
                kind="compression",
                suspect=False,
            )
        )
        if i:
            middle = float((at[i - 1] + b) / 2.0)
            value = float(np.interp(middle, x, fitted))
            points.append(
                MeasuredPoint(
                    x_m=middle,
                    value_mm=value + (0.32 * size if i == len(at) - 1 and loaded == 0 else 0.03),
                    sd_mm=0.12,
                    fitted_mm=value,
                    kind="deflection",
                    suspect=i == len(at) - 1 and loaded == 0,
                )
            )
    axles = [(centre + d, 100.0) for d in (-5.5, -3.7, 3.7, 5.5)]
    return ElevationState(state=name, x_m=x, fitted_mm=fitted, axles=axles, points=points)


def supports(names: list[str], spans: list[float]) -> list[SupportView]:
    ratios = [0.97, 0.41, 0.93, 2.6, 1.12, 0.88, 1.05, 0.7, 1.0]
    found = []
    for i, (name, x) in enumerate(zip(names, ends(spans), strict=True)):
        pin = i == len(names) - 1
        found.append(
            SupportView(
                support=name,
                kind="pin" if pin else "pad",
                x_m=float(x),
                ratio=None if pin else ratios[i],
                ratio_low=None if pin else 0.86 * ratios[i],
                ratio_high=None if pin else 1.17 * ratios[i],
                data_share=None if pin else (0.31 if i == 0 else 0.96),
                seat_drop_mm=3.2 if i == 2 else None,
                seat_drop_sd_mm=0.4 if i == 2 else None,
            )
        )
    return found


def pad_history(name: str, start: float, rate: float) -> PadHistory:
    years = np.array([(d - VISITS[0]).days / 365.25 for d in VISITS])
    ratio = start * np.exp(rate * years) * np.array([1.0, 1.02, 1.16, 0.98, 1.01, 1.0])
    wide = np.array([0.35, 0.14, 0.1, 0.1, 0.09, 0.09])
    line_dates = [dt.date(2016 + i, 5, 10) for i in range(17)]
    ahead = np.arange(17.0)
    line = start * np.exp(rate * ahead)
    spread = 0.06 + 0.03 * np.maximum(ahead - 8.0, 0.0) ** 1.2
    return PadHistory(
        support=name,
        dates=VISITS,
        ratio=ratio,
        low95=ratio * np.exp(-wide),
        high95=ratio * np.exp(wide),
        data_share=np.array([0.3, 0.8, 0.9, 0.93, 0.95, 0.95]),
        temperature_degC=list(TEMPERATURES),
        line_dates=line_dates,
        line=line,
        fan_low=line * np.exp(-spread),
        fan_high=line * np.exp(spread),
        last_visit=VISITS[-1],
        law="drift" if rate < -0.02 else "steady",
    )


def girder_view(name: str, spans: list[float] = SPANS, names: list[str] = SUPPORTS) -> GirderView:
    rates = [-0.004, -0.1, 0.003, 0.01, -0.002, 0.0, 0.004, -0.01]
    return GirderView(
        girder=name,
        span_lengths_m=spans,
        supports=supports(names, spans),
        states=[state(f"T{i + 1}", spans, i, 2.3 + 0.7 * (i == 1)) for i in range(min(3, len(spans)))],
        moments=moment_lines(spans),
        histories=[pad_history(n, 1.0, rates[i]) for i, n in enumerate(names[:-1])],
    )


def case(x: float, capacity: float | None, permanent: float, live: float) -> CaseResult:
    factored = 1.2 * permanent + 1.5 * live
    utilisation = None if capacity is None else abs(factored) / capacity
    return CaseResult(
        x_m=x,
        capacity=capacity,
        permanent=permanent,
        live=live,
        factored=factored,
        utilisation=utilisation,
        rating_factor=None if capacity is None else (capacity - abs(1.2 * permanent)) / abs(1.5 * live),
    )


def section(
    effect: str, span: int | None, support: str | None, x: float, capacity: float | None, size: float
) -> SectionResult:
    sign = -1.0 if effect == "hogging" else 1.0
    ways = [
        case(x + d, capacity, sign * p * size, sign * q * size)
        for d, p, q in ((0, 480, 2000), (0.1, 520, 2150), (0.2, 560, 2400))
    ]
    best = ways[2]
    use = best.utilisation
    return SectionResult(
        effect=effect,
        span=span,
        support=support,
        unyielding=ways[0],
        nominal=ways[1],
        calibrated=CalibratedCase(
            **vars(best),
            utilisation_low95=None if use is None else 0.95 * use,
            utilisation_high95=None if use is None else 1.06 * use,
            probability_over_1=None if use is None else float(min(1.0, max(0.0, (use - 0.85) / 0.3))),
            worst_rival=None if effect == "shear" else f'pads and settlement at "{support or "pier 1"}"',
            worst_rival_utilisation=None
            if use is None or effect == "shear"
            else use + 0.02 * (effect == "hogging"),
        ),
    )


def assessment_of(name: str, spans: list[float] = SPANS, names: list[str] = SUPPORTS) -> GirderAssessment:
    at = ends(spans)
    rows = [
        section("sagging", i + 1, None, float(a + b) / 2, 5100.0, 1.02 if i == 0 else 0.8)
        for i, (a, b) in enumerate(itertools.pairwise(at))
    ]
    rows += [
        section("hogging", None, names[i], float(at[i]), 6000.0, 1.3 if i == 1 else 0.75)
        for i in range(1, len(spans))
    ]
    for i in range(len(spans)):
        rows.append(section("shear", i + 1, names[i], float(at[i]), 1900.0 if i else None, 0.33))
        rows.append(section("shear", i + 1, names[i + 1], float(at[i + 1]), 2100.0, 0.36))
    reactions = [
        ReactionResult(
            support=n,
            unyielding_permanent_kN=180.0 + 320.0 * (0 < i < len(spans)),
            calibrated_permanent_kN=(9.0 if i == 0 else 172.0) + 290.0 * (0 < i < len(spans)),
            calibrated_live_max_kN=610.0,
            calibrated_live_min_kN=-41.5,
            calibrated_factored_max_kN=1500.0,
            calibrated_factored_min_kN=-53.0 if i == 0 else 110.0,
        )
        for i, n in enumerate(names)
    ]
    return GirderAssessment(girder=name, sections=rows, reactions=reactions)


def readings(view: GirderView) -> list[ReadingResult]:
    found = []
    for s in view.states:
        for i, p in enumerate(s.points):
            at_support = p.kind == "compression"
            name = next((v.support for v in view.supports if v.x_m == p.x_m), None) if at_support else None
            residual = 4.6 if p.suspect else 2.1 * float(np.sin(7.0 * i + len(s.state)))
            found.append(
                ReadingResult(
                    state=s.state,
                    quantity=p.kind,
                    support=name,
                    at_m=None if at_support else p.x_m,
                    observed=round(p.value_mm, 2),
                    predicted=p.fitted_mm,
                    unit="mm",
                    sd=p.sd_mm,
                    standardised_residual=None if i == 0 else residual,
                    suspect=p.suspect,
                )
            )
    return found


def explained_of(view: GirderView) -> dict[str, Any]:
    """What stands beside the stiffnesses: seats, other unknowns, rivals, causes, readings in doubt."""
    pads = [s for s in view.supports if s.ratio is not None]
    names = [s.support for s in view.supports]
    last = len(names) - 1
    return {
        "settlements_mm": [
            SettlementResult(
                support=name,
                value=1.5 * i - 1.0,
                low95=1.5 * i - 1.6,
                high95=1.5 * i - 0.4,
                data_share=0.97 if i else 0.31,
                moment_relevant=0.0 if i in (0, last) else 0.8,
                moment_relevant_low95=0.0 if i in (0, last) else -0.1,
                moment_relevant_high95=0.0 if i in (0, last) else 1.7,
                moment_relevant_data_share=0.9,
            )
            for i, name in enumerate(names)
        ],
        "unknowns": ["pads", "sustained", "settlements"],
        "unknowns_from": "the visit file",
        "calibrated_as": "as calibrated (pads, sustained, settlements)",
        "others": [
            UnknownResult(
                name="sustained ratio", value=0.74, low95=0.61, high95=0.9, data_share=0.12, unit=""
            ),
            UnknownResult(name="datum shift", value=1.2, low95=0.3, high95=2.1, data_share=0.8, unit="mm"),
        ],
        "correlations": [
            CorrelationResult(a=f"{s.support} stiffness", b=f"{s.support} settlement", r=(-1.0) ** i * 0.95)
            for i, s in enumerate(pads)
        ],
        "rivals": [
            _rival(f'pads and settlement at "{names[-1]}"', 41.0, simpler=True),
            _rival("as calibrated (pads, sustained, settlements)", 41.9),
            _rival(
                "pads and girder stiffness",
                42.2,
                apart=f'compression at "{names[0]}" in T1: 1.2 mm against 1.5 mm',
            ),
            _rival("pads and datum", 940.0, told=False),
            _rival("pads only", None),
        ],
        "causes": [
            CauseResult(
                support=s.support,
                cause="cannot be told" if i else "pad and seat",
                off_if_seat_still_sd=None if i else 5.1,
                off_if_pad_nominal_sd=4.4,
            )
            for i, s in enumerate(pads)
        ],
        "robust": [
            RobustPad(support=s.support, stiffness_kN_per_m=198000.0, off_by_sd=-2.1 if i == 0 else 0.3)
            for i, s in enumerate(pads)
        ],
        "proposed_removals": [
            ProposedRemoval(
                reading=f"{view.girder}/T1/deflection/33 m",
                standardised_residual=4.6,
                p_value=0.41,
                alike=[f"{view.girder}/T1/deflection/30 m"],
            )
        ],
        "effective_sample_size": 2310.0,
        "draws_from": "weighted",
        "left_out": [LeftOut(reading=f"{view.girder}/T2/deflection/6 m", reason="gauge knocked")],
    }


def _rival(
    name: str, aicc: float | None, *, simpler: bool = False, told: bool = True, apart: str | None = None
) -> RivalResult:
    return RivalResult(
        name=name,
        aicc=aicc,
        chi_square=31.4,
        within_2=aicc is not None and aicc < 43.0,
        log_likelihood=-15.7,
        effective_unknowns=5.3,
        told=told,
        simpler=simpler,
        carried=told and aicc is not None and aicc < 43.0,
        told_apart_by=apart,
    )


def calibration_of(view: GirderView) -> GirderCalibration:
    return GirderCalibration(
        **explained_of(view),
        girder=view.girder,
        pads=[
            PadResult(
                support=s.support,
                stiffness_kN_per_m=220000.0 * s.ratio,
                low95_kN_per_m=220000.0 * (s.ratio_low or 0.0),
                high95_kN_per_m=220000.0 * (s.ratio_high or 0.0),
                nominal_kN_per_m=220000.0,
                ratio_to_nominal=s.ratio,
                data_share=s.data_share or 0.0,
                interval_from="profile" if s.support == view.supports[1].support else "normal",
                stiffness_20degC_kN_per_m=215000.0 * s.ratio,
            )
            for s in view.supports
            if s.ratio is not None
        ],
        chi_square=31.4,
        degrees_of_freedom=18,
        p_value=0.026,
        readings=readings(view),
    )


def trend_of(names: list[str]) -> TrendResult:
    pads = [
        PadTrend(
            girder=girder,
            support=support,
            visits=6,
            law="drift" if support == SUPPORTS[1] else "steady",
            change_per_year_percent=-9.6 if support == SUPPORTS[1] else 0.3,
            low95=-12.1 if support == SUPPORTS[1] else -0.9,
            high95=-7.2 if support == SUPPORTS[1] else 1.5,
            step_between=(VISITS[3], VISITS[4]) if support == SUPPORTS[2] else None,
        )
        for girder in names
        for support in SUPPORTS[:-1]
    ]
    spans = [
        SpanTrend(
            girder=girder,
            effect="sagging",
            span=i,
            support=None,
            utilisation_now=0.86 + 0.04 * i if i < 3 else None,
            status=("within", "watch", "unknown")[i - 1] if i < 4 else "unknown",
            probability_over_1_now=0.02 * i if i < 3 else None,
            median_crossing=dt.date(2029, 3, 1) if i == 2 else None,
            earliest_5_percent=dt.date(2026, 9, 1) if i == 2 else None,
        )
        for girder in names
        for i in (1, 2, 3)
    ]
    return TrendResult(
        bridge="quillmere",
        as_of=VISITS[-1],
        pads=pads,
        spans=spans,
        seats=[
            SeatTrend(
                girder="north",
                support="pier 1",
                visits=6,
                settlement_mm=3.2,
                sd_mm=0.3,
                moving=True,
                rate_mm_per_year=0.41,
                low95=0.28,
                high95=0.54,
            )
        ],
        next_visit_by=dt.date(2026, 5, 14),
        next_visit_reason="at pier 1 of girder north the probability of exceeding 1 reaches 5 % on 1 September 2026",
        cautions=["The forecast past 2030 rests on the law alone."],
    )


def example() -> ReportView:
    """Two girders, three spans, six visits."""
    girders = [girder_view("north"), girder_view("south")]
    return ReportView(
        bridge="quillmere",
        name="Quillmere viaduct",
        carries="single track railway",
        zero="west abutment",
        built=dt.date(1989, 6, 1),
        revision=2,
        bridge_digest="3f6c1d7be5a2" * 5,
        visits=[(d, "bearing party B", t, 21) for d, t in zip(VISITS, TEMPERATURES, strict=True)],
        factors="owner's assessment standard: permanent 1.2, live 1.5, resistance 1.0",
        live=["line traffic: 3 ballast wagons 13.4 m apart, dynamic allowance 0.21"],
        verdicts={
            "north": "Restrict line traffic until a licensed engineer has reviewed hogging at pier 1, and read "
            "that pad again by 14 May 2026.",
            "south": "Plan packing at pier 1 before 1 September 2026.",
        },
        verdict_cautions={"north": ["The west abutment pad is told by the assumption, not by the readings."]},
        calibration=CalibrationResult(
            bridge="quillmere",
            visit=VISITS[-1],
            version="0.1.0",
            input_digest="aa51" * 16,
            girders=[calibration_of(g) for g in girders],
            cautions=["Girder north, T1, deflection at 33 m: suspect reading, standardised residual 4.6."],
        ),
        assessment=AssessmentResult(
            bridge="quillmere",
            calibration_visit=VISITS[-1],
            version="0.1.0",
            input_digest="bb07" * 16,
            seed=20240514,
            draws=4000,
            girders=[assessment_of(g.girder) for g in girders],
            cautions=["Uplift at the west abutment of girder north when live load lifts."],
        ),
        trend=trend_of(["north", "south"]),
        girders=girders,
        options={"Prior": "nominal stiffness with cv 0.3", "Utilisation thresholds": "0.9 and 1.0"},
        cautions=["The permanent state is not fitted yet; seat levels enter as settlements."],
    )


def single_span() -> ReportView:
    """One girder of one span."""
    names, spans = ["left bank", "right bank"], [21.5]
    girder = girder_view("only", spans, names)
    view = example()
    assert view.calibration is not None
    return replace(
        view,
        girders=[girder],
        calibration=replace(view.calibration, girders=[calibration_of(girder)]),
        assessment=replace(view.assessment, girders=[assessment_of("only", spans, names)]),
        trend=None,
        verdicts={"only": "Watch sagging in the span."},
    )


def bare() -> ReportView:
    """A bridge without visits: nothing measured, nothing calibrated, no capacities, no date."""
    view = single_span()
    girder = view.girders[0]
    lines = girder.moments
    unknown = np.full(lines.x_m.shape, np.nan)
    assessed = view.assessment.girders[0]
    sections = [section(s.effect, s.span, s.support, s.unyielding.x_m, None, 1.0) for s in assessed.sections]
    unsure = [
        replace(s, ratio=None, ratio_low=None, ratio_high=None, data_share=None) for s in girder.supports
    ]
    girder = replace(
        girder,
        states=[],
        histories=[],
        supports=unsure,
        moments=replace(lines, capacity_sagging=unknown, capacity_hogging=unknown),
    )
    return replace(
        view,
        built=None,
        visits=[],
        calibration=None,
        trend=None,
        girders=[girder],
        verdicts={},
        verdict_cautions={},
        assessment=replace(
            view.assessment, calibration_visit=None, girders=[replace(assessed, sections=sections)]
        ),
    )


def long_names() -> ReportView:
    """Eight spans of unlike length with long names of supports."""
    spans = [9.0, 14.0, 22.0, 31.0, 31.0, 22.0, 14.0, 9.0]
    names = [f"bearing shelf no {i} beside the old towpath (upstream)" for i in range(9)]
    girder = girder_view("upstream fascia girder with the walkway brackets", spans, names)
    view = example()
    assert view.calibration is not None
    return replace(
        view,
        girders=[girder],
        calibration=replace(view.calibration, girders=[calibration_of(girder)]),
        assessment=replace(view.assessment, girders=[assessment_of(girder.girder, spans, names)]),
        trend=None,
        verdicts={girder.girder: "Watch hogging at bearing shelf no 1."},
    )


def nasty() -> ReportView:
    """Names and remarks that are markup or mathematics to a careless page."""
    bad = '<script>alert(1)</script> $x$ & "q" \''
    names = [f"{bad} {i}" for i in range(4)]
    girder = girder_view(bad, SPANS, names)
    girder = replace(girder, states=[replace(s, state=f"{bad} {s.state}") for s in girder.states])
    view = example()
    assert view.calibration is not None
    assert view.trend is not None
    return replace(
        view,
        bridge=bad,
        name=bad,
        carries=bad,
        zero=bad,
        visits=[(VISITS[0], bad, 4.0, 3)],
        factors=bad,
        live=[bad],
        verdicts={bad: bad},
        verdict_cautions={bad: [bad]},
        calibration=replace(view.calibration, girders=[calibration_of(girder)], cautions=[bad]),
        assessment=replace(view.assessment, girders=[assessment_of(bad, SPANS, names)], cautions=[bad]),
        trend=replace(view.trend, next_visit_reason=bad, cautions=[bad]),
        girders=[girder],
        options={bad: bad},
        cautions=[bad],
    )
