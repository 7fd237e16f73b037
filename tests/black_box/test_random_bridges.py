"""Random bridges in units of every spelling: exact readings give the pads back, and every row agrees."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import least_squares
from scipy.stats import chi2

from tests.black_box.cases import (
    Case,
    compare,
    compare_reactions,
    log_stiffness,
    make,
    recorded,
    thinned,
    three,
)
from tests.black_box.describe import Reading
from tests.black_box.invent import plan, random_bridge, test_places

FEW, MANY = range(6), range(100, 160)


def seeds(few: range, many: range) -> list[object]:
    return [*few, *(pytest.param(s, marks=pytest.mark.campaign) for s in many)]


def random_case(rng: np.random.Generator, spans: int | None = None) -> Case:
    bridge = random_bridge(rng, spans)
    states = test_places(bridge, bridge.girders[0], rng)
    return make(bridge, states, plan(bridge.girders[0], states, rng))


@pytest.mark.parametrize("seed", seeds(FEW, MANY))
def test_exact_readings_give_the_pads_back(seed: int, tmp_path: Path) -> None:
    rng = np.random.default_rng(seed)
    case = random_case(rng)
    true = case.mean + rng.normal(0, 0.4, case.mean.size)
    case.read(true)
    record = recorded(tmp_path, case, rng, table=bool(seed % 2))
    said = record.json("calibrate", case.bridge.id, "--no-prior")
    assert abs(log_stiffness(said) - true).max() < 1e-5
    assert said["girders"][0]["chi_square"] < 1e-6


@pytest.mark.parametrize("seed", seeds(range(4), MANY))
def test_assessment_agrees_with_assembled_elements_and_a_rolled_train(seed: int, tmp_path: Path) -> None:
    rng = np.random.default_rng(1000 + seed)
    case = random_case(rng, spans=(1, 2, 3, 2)[seed] if seed < 4 else None)
    case.read(case.mean + rng.normal(0, 0.4, case.mean.size))
    drop = np.where(
        rng.random(len(case.girder.supports)) < 0.5, rng.normal(0, 0.004, len(case.girder.supports)), 0.0
    )
    levels = [
        Reading(case.girder.id, "permanent", "settlement", i, None, float(d), 1e-7)
        for i, d in enumerate(drop)
        if d != 0.0
    ]
    record = recorded(tmp_path, case, rng, also=levels)
    ln_k = log_stiffness(record.json("calibrate", case.bridge.id, "--no-prior"))
    said = record.json("assess", case.bridge.id)
    own = three(case, ln_k, drop)
    assert compare(said, own) == 3 * len(said["girders"][0]["sections"])
    compare_reactions(said, own)


@pytest.mark.parametrize("seed", seeds(FEW, MANY))
def test_noisy_readings_give_the_fit_of_plain_least_squares(seed: int, tmp_path: Path) -> None:
    rng = np.random.default_rng(2000 + seed)
    full = random_case(rng, spans=int(rng.integers(1, 5)))
    for r in full.readings:
        r.sd *= float(rng.choice([1.0, 3.0, 10.0]))
    prior = bool(seed % 3)
    case = thinned(full, int(rng.integers(6, 30)), rng) if prior else full
    case.read(case.mean + rng.normal(0, 0.3, case.mean.size), case.sd * rng.normal(size=len(case.readings)))
    value = np.array([r.value for r in case.readings])

    def residual(theta: np.ndarray) -> np.ndarray:
        own = (theta - case.mean) / case.tau if prior else []
        return np.concatenate(((value - case.reader(theta)) / case.sd, own))

    # steps of 1e-3: smaller ones drown in the rounding of the assembled elements
    fit = least_squares(
        residual, case.mean, jac="3-point", diff_step=1e-3, xtol=1e-13, ftol=1e-13, gtol=1e-13
    )
    covariance = np.linalg.inv(fit.jac.T @ fit.jac)
    se = np.sqrt(np.diag(covariance))
    record = recorded(tmp_path, case, rng, table=bool(seed % 2))
    said = record.json("calibrate", case.bridge.id, *([] if prior else ["--no-prior"]))["girders"][0]
    pads = said["pads"]
    found = np.log([p["stiffness_kN_per_m"] for p in pads])
    assert (found - fit.x) / se == pytest.approx(0.0, abs=5e-3)
    cost = [float(np.sum(residual(theta) ** 2)) for theta in (found, fit.x)]
    assert cost[0] <= cost[1] * (1 + 1e-5) + 1e-3, "the program's answer explains the readings no worse"
    for sign, name in ((-1, "low95_kN_per_m"), (1, "high95_kN_per_m")):
        for i, pad in enumerate(pads):
            end = np.log(pad[name]) if pad[name] is not None else np.inf
            if pad["interval_from"] == "normal":
                assert (end - fit.x[i]) / se[i] == pytest.approx(sign * 1.96, abs=0.01)
            elif np.isfinite(end):  # the others fitted anew, the sum of squares rises by that of 95 per cent
                assert _held(residual, fit.x, i, end) - cost[1] == pytest.approx(3.841, rel=0.02)
    share = 1 - np.diag(covariance) / case.tau**2 if prior else np.ones(len(pads))
    assert [p["data_share"] for p in pads] == pytest.approx(share, abs=1e-3)
    n = len(value)
    misfit = fit.fun[:n]
    left = 1 - np.diag(fit.jac @ covariance @ fit.jac.T)[:n]
    assert said["chi_square"] == pytest.approx(misfit @ misfit, rel=1e-4)
    assert said["degrees_of_freedom"] == (round(left.sum()) if prior else n - len(pads))
    if not prior:
        assert said["p_value"] == pytest.approx(chi2.sf(misfit @ misfit, n - len(pads)), abs=1e-4)
    w = {_place(r): v for r, v in zip(case.readings, misfit / np.sqrt(left), strict=True)}
    for r in said["readings"]:
        own = w[r["state"], r["quantity"], r["support"], None if r["at_m"] is None else round(r["at_m"], 4)]
        if r["standardised_residual"] is not None:
            assert r["standardised_residual"] == pytest.approx(own, abs=1e-2)
            assert r["suspect"] == (abs(r["standardised_residual"]) > 3.29)


def _place(r: Reading) -> tuple[str, str, str | None, float | None]:
    return (
        r.state,
        r.quantity,
        None if r.support is None else f"s{r.support}",
        None if r.x is None else round(r.x, 4),
    )


def _held(residual, at, i, end):  # type: ignore[no-untyped-def]
    """The least sum of squares with one unknown held."""
    others = [j for j in range(at.size) if j != i]

    def rest(free):  # type: ignore[no-untyped-def]
        theta = at.copy()
        theta[i], theta[others] = end, free
        return residual(theta)

    if not others:
        return float(np.sum(rest(np.zeros(0)) ** 2))
    found = least_squares(rest, at[others], jac="3-point", diff_step=1e-3, xtol=1e-13, ftol=1e-13, gtol=1e-13)
    return float(2.0 * found.cost)
