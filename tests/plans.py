"""A planned visit of an invented viaduct, for what shows one."""

from __future__ import annotations

from assess.results import (
    GirderPlan,
    GoverningSection,
    HalfPlan,
    PlannedPad,
    PlannedPosition,
    PlannedReading,
    PlannedSeat,
    PlanResult,
    PlanSupport,
)

PLAN_CAUTION = "The standard deviations promised hold if every reading is as good as it is given."


def planned_reading(
    state: str, quantity: str, support: str | None = None, **changes: object
) -> PlannedReading:
    values: dict[str, object] = {
        "at_m": None,
        "sd_mm": 0.05,
        "sd_utilisation_after": 0.0123,
        "sd": 0.05,
        "unit": "mm",
        "height_m": None,
        "cost": 1.0,
    }
    return PlannedReading(state=state, quantity=quantity, support=support, **(values | changes))  # type: ignore[arg-type]


def girder_plan(**changes: object) -> GirderPlan:
    values: dict[str, object] = {
        "girder": "north",
        "positions": [
            PlannedPosition(state="T1", leading_axle_at_m=13.1),
            PlannedPosition(state="T2", leading_axle_at_m=43.5),
        ],
        "readings": [
            planned_reading(
                "permanent", "settlement", "pier 1", sd_mm=0.3, sd=0.3, sd_utilisation_after=0.05
            ),
            planned_reading("T1", "compression", "pier 1", sd_utilisation_after=0.02),
            planned_reading("T2", "deflection", at_m=33.0, sd_mm=0.1, sd=0.1),
            planned_reading("T1", "rotation", "west abutment", sd_mm=None, sd=0.02, unit="mrad"),
            planned_reading(
                "T1",
                "strain",
                at_m=0.2,
                height_m=-0.6,
                sd_mm=None,
                sd=2.0,
                unit="microstrain",
                sd_utilisation_after=0.011,
            ),
        ],
        "pads": [PlannedPad(support="pier 1", sd_ln_before=0.294, sd_ln_after=0.0456)],
        "seats": [PlannedSeat(support="pier 1", sd_mm_before=20.0, sd_mm_after=0.3)],
        "governs": GoverningSection(effect="hogging", span=None, support="pier 1"),
        "utilisation": 0.93,
        "sd_utilisation_before": 0.21,
        "cost": 5.0,
        "half_cost": HalfPlan(
            positions=[PlannedPosition(state="T3", leading_axle_at_m=15.0)],
            readings=[planned_reading("T3", "compression", "pier 1", sd_utilisation_after=0.18)],
            sd_utilisation_after=0.18,
            cost=1.0,
        ),
        "supports": [
            PlanSupport(support="west abutment", at_m=0.0),
            PlanSupport(support="pier 1", at_m=12.0),
            PlanSupport(support="pier 2", at_m=27.0),
            PlanSupport(support="east abutment", at_m=39.0),
        ],
    }
    return GirderPlan(**(values | changes))  # type: ignore[arg-type]


def plan_result(*girders: GirderPlan) -> PlanResult:
    return PlanResult(
        bridge="quillmere",
        girders=list(girders) or [girder_plan()],
        vehicle="ballast wagon",
        axles_behind_m=[0.0, 1.8, 9.2, 11.0],
        defaults=["north: the bridge file has no [[girder.gauge]]."],
        cautions=[PLAN_CAUTION],
    )
