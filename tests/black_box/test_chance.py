"""The band and the chance over 1 against plain Monte Carlo: one factorisation and one rolled train a draw."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import least_squares

from tests.black_box.cases import Case, key_of, recorded, thinned
from tests.black_box.describe import Reading
from tests.black_box.rating import Check, Rating
from tests.black_box.test_random_bridges import random_case

DRAWS_SAID = 4000


@pytest.mark.parametrize(
    ("seed", "draws"), [(3, 80), *(pytest.param(s, 500, marks=pytest.mark.campaign) for s in range(10, 16))]
)
def test_chance_and_band_agree_with_plain_draws(seed: int, draws: int, tmp_path: Path) -> None:
    rng = np.random.default_rng(seed)
    full = random_case(rng, spans=2)
    for r in full.readings:
        r.sd *= float(rng.choice([3.0, 10.0]))
    case = thinned(full, 10, rng)
    case.read(case.mean + rng.normal(0, 0.3, case.mean.size), case.sd * rng.normal(size=10))
    value = np.array([r.value for r in case.readings])
    n = len(case.girder.supports)
    drop, drop_sd = rng.normal(0, 0.003, n), rng.uniform(0.0002, 0.001, n)
    levels = [
        Reading(case.girder.id, "permanent", "settlement", i, None, float(drop[i]), float(drop_sd[i]))
        for i in range(n)
    ]

    def residual(theta: np.ndarray) -> np.ndarray:
        return np.concatenate(((value - case.reader(theta)) / case.sd, (theta - case.mean) / case.tau))

    fit = least_squares(residual, case.mean, jac="3-point")
    root = np.linalg.cholesky(np.linalg.inv(fit.jac.T @ fit.jac))
    _capacities_at_the_middle(case, fit.x, drop)
    record = recorded(tmp_path, case, rng, also=levels)
    record.done("calibrate", case.bridge.id)
    said = record.json("assess", case.bridge.id)["girders"][0]["sections"]

    drawn = [
        (fit.x + root @ rng.normal(size=fit.x.size), drop + drop_sd * rng.normal(size=n))
        for _ in range(draws)
    ]
    ratings = [Rating(case.bridge, case.girder, case.supports(ln_k), seats) for ln_k, seats in drawn]
    for section in said:
        row, effect = section["calibrated"], section["effect"]
        at = [max(_own_span(case, section, r.at(effect, row["x_m"], step=0.2)), key=_used) for r in ratings]
        own = np.array([max(c.utilisation, 0.0) for c in at])
        p = row["probability_over_1"]
        spread = 4 * np.sqrt(max(p * (1 - p), 0.25 / draws) * (1 / draws + 1 / DRAWS_SAID))
        # the place that governs moves a little with the draws, so a draw can be used this much more than at x_m
        more = 1.003
        assert (own > 1).mean() - spread < p < (own * more > 1).mean() + spread, (
            key_of(section),
            p,
            (own > 1).mean(),
        )
        # a quantile of `draws` values lies between the quantiles 4 standard errors of its rank away
        for q, name in ((0.025, "utilisation_low95"), (0.975, "utilisation_high95")):
            away = 4 * np.sqrt(q * (1 - q) / draws)
            low, high = np.quantile(own, [max(0.0, q - away), min(1.0, q + away)])
            slack = own.std()  # for the quantiles that lie past the last of few draws
            assert low - slack < row[name] < high * more + slack, (
                key_of(section),
                name,
                row[name],
                low,
                high,
            )


def _used(check: Check) -> float:
    return check.utilisation or 0.0


def _own_span(case: Case, section: dict, faces: list[Check]) -> list[Check]:
    """The face of a place that lies in the row's own span; both where the row has no span."""
    if section["span"] is None or len(faces) == 1:
        return faces
    first, last = case.girder.at[section["span"] - 1 : section["span"] + 1]
    x = section["calibrated"]["x_m"]
    return faces[1:] if abs(x - first) < 1e-6 else faces[:1] if abs(x - last) < 1e-6 else faces


def _capacities_at_the_middle(case: Case, ln_k: np.ndarray, drop: np.ndarray) -> None:
    """Scale the capacities so that a row of each effect is used to 1."""
    worst = Rating(case.bridge, case.girder, case.supports(ln_k), drop).search()
    for effect in ("sagging", "hogging", "shear"):
        rows = sorted(c.utilisation for key, c in worst.items() if key[0] == effect and c.utilisation > 0)
        if rows:
            for s in case.bridge.sections.values():
                setattr(s, effect, getattr(s, effect) * rows[len(rows) // 2])
