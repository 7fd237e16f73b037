"""Steady or drift: what is found, how often it is wrong, and that nothing is counted twice."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import least_squares

from assess.calibrate import fit
from assess.trend import VisitEstimate, fit_trend
from assess.trend.laws import RATE_PRIOR_SD, Z95
from tests.factories import NOMINAL, noisy, prior, well_read
from tests.trend.histories import MEAN, TAU, TIMES, covariance, history, visit

Floats = NDArray[np.float64]
NONE = np.zeros(3)
NO_PRIOR = np.full(3, np.inf)


def joint(visits: list[VisitEstimate], mean: Floats, tau: Floats) -> tuple[Floats, Floats]:
    """Level at the last visit and rate (2 q,) with covariance, by one plain least squares over everything told."""
    q = mean.size
    times = np.array([one.time for one in visits]) - visits[-1].time
    rows, told = [], []
    for one, t in zip(visits, times, strict=True):
        root = np.linalg.cholesky(one.information).T  # information = root' root
        x = np.linalg.solve(one.information, one.information_vector)
        rows.append(root @ np.hstack([np.eye(q), t * np.eye(q)]))
        told.append(root @ x)
    rows += [np.hstack([np.diag(1.0 / tau), np.diag(times.mean() / tau)])]
    rows += [np.hstack([np.zeros((q, q)), np.eye(q) / RATE_PRIOR_SD])]
    told += [mean / tau, np.zeros(q)]
    a, b = np.vstack(rows), np.concatenate(told)
    answer = np.linalg.lstsq(a, b, rcond=None)[0]
    return answer, np.linalg.inv(a.T @ a)


# what is there is found ---------------------------------------------------------------------------


def test_a_drift_without_noise_is_recovered_exactly() -> None:
    rate = np.array([-0.08, 0.02, 0.0])
    found = fit_trend(history(MEAN - 0.3, rate, None, sd=1e-4), MEAN, NO_PRIOR)
    assert found.rate == pytest.approx(rate, abs=1e-7)
    assert found.level == pytest.approx(MEAN - 0.3, abs=1e-6)
    assert [law.law for law in found.laws] == ["drift", "drift", "steady"]
    assert all(law.determined and law.scatter == 1.0 for law in found.laws)


def test_a_steady_pad_without_noise_stays_steady() -> None:
    found = fit_trend(history(MEAN + 0.1, NONE, None), MEAN, TAU)
    assert [law.law for law in found.laws] == ["steady"] * 3
    assert found.rate == pytest.approx(NONE, abs=1e-12)


def test_the_law_of_a_steady_pad_is_a_level_line() -> None:
    rate = np.array([-0.08, 0.0, 0.0])
    found = fit_trend(history(MEAN, rate, np.random.default_rng(5)), MEAN, TAU)
    assert [law.law for law in found.laws] == ["drift", "steady", "steady"]
    assert found.law_change[1:] == pytest.approx([0.0, 0.0], abs=1e-9)
    assert found.law_change[0] == pytest.approx(rate[0], abs=0.02)
    assert np.all(np.diag(found.law_covariance)[1:3] < np.diag(found.covariance)[1:3])


# how often it is wrong ----------------------------------------------------------------------------


def laws(count: int, seed: int, rate: Floats, sd: float = 0.05):  # type: ignore[no-untyped-def]
    rng = np.random.default_rng(seed)
    return [
        fit_trend(history(MEAN + TAU * rng.standard_normal(3), rate, rng, sd=sd), MEAN, TAU)
        for _ in range(count)
    ]


@pytest.mark.parametrize("sd", [0.02, 0.15])
def test_steady_pads_are_called_changed_in_about_5_of_100_histories(sd: float) -> None:
    false = np.array([[law.law != "steady" for law in one.laws] for one in laws(160, 51, NONE, sd)])
    assert 0.015 <= false.mean() <= 0.08  # a test at 5 %, not one that never speaks


@pytest.mark.campaign
@pytest.mark.parametrize("sd", [0.02, 0.05, 0.1, 0.15])
def test_steady_pads_stay_steady_at_length(sd: float) -> None:
    false = np.array([[law.law != "steady" for law in one.laws] for one in laws(3000, 52, NONE, sd)])
    assert 0.03 <= false.mean() <= 0.055


def test_a_change_of_three_point_three_deviations_is_found_in_82_of_100_histories() -> None:
    rate_sd = np.array([law.rate_sd for law in fit_trend(history(MEAN, NONE, None), MEAN, TAU).laws])
    rate = np.array([-3.3, 3.3, -3.3]) * rate_sd
    found = laws(150, 53, rate)
    changed = np.array([[law.law != "steady" for law in one.laws] for one in found])
    assert np.all(changed.mean(axis=0) >= 0.82), changed.mean(axis=0)
    right = np.array([[law.alarm == ("stiffer" if r > 0 else "softer") for law, r in zip(one.laws, rate, strict=True)]
                      for one in found])  # fmt: skip
    assert right[changed].mean() > 0.98


@pytest.mark.parametrize("slope", [0.0, -0.1])
def test_intervals_of_the_rate_hold_the_truth_90_to_99_times_in_100(slope: float) -> None:
    rate = np.array([slope, 0.0, 0.03])
    found = laws(200, 54, rate)
    low, high = np.array([[law.interval for law in one.laws] for one in found]).transpose(2, 0, 1)
    inside = ((low <= rate) & (rate <= high)).mean(axis=0)
    assert np.all((inside >= 0.90) & (inside <= 0.99)), inside


def test_levels_today_hold_the_truth_90_to_99_times_in_100() -> None:
    rng, inside = np.random.default_rng(55), []
    for _ in range(200):
        level = MEAN + TAU * rng.standard_normal(3)
        found = fit_trend(history(level, np.array([-0.1, 0.0, 0.0]), rng), MEAN, TAU)
        inside.append(np.abs(found.now - level) <= Z95 * np.sqrt(np.diag(found.now_covariance)))
    share = np.mean(inside, axis=0)
    assert np.all((share >= 0.90) & (share <= 0.99)), share


def test_visits_that_scatter_widen_the_interval_by_the_birge_ratio() -> None:
    few, kink = [0.0, 2.0, 4.0], np.array([0.1, -0.2, 0.1])  # no slope; too few visits for a step
    information = np.linalg.inv(covariance(0.05))
    shaken = [visit(t, MEAN + np.array([d, 0.0, 0.0]), information) for t, d in zip(few, kink, strict=True)]
    plain, found = (
        fit_trend(history(MEAN, NONE, None, times=few), MEAN, NO_PRIOR),
        fit_trend(shaken, MEAN, NO_PRIOR),
    )
    birge = np.sqrt(((kink / 0.05) ** 2).sum() / 2)
    assert found.laws[0].law == "steady"
    assert found.laws[0].scatter == pytest.approx(birge, rel=1e-6)
    assert found.laws[0].rate_sd == pytest.approx(birge * plain.laws[0].rate_sd)
    assert found.laws[2].scatter == 1.0


# few visits ---------------------------------------------------------------------------------------


def test_one_visit_gives_no_rate() -> None:
    visits = history(MEAN - 0.2, NONE, None, times=[0.0])
    found = fit_trend(visits, MEAN, TAU)
    assert all(not law.determined and np.isnan(law.rate) and law.law == "steady" for law in found.laws)
    assert all(law.moving == 0.0 for law in found.laws)
    assert found.now == pytest.approx(visits[0].log_stiffness)
    assert found.now_covariance == pytest.approx(visits[0].covariance)


def test_two_visits_give_a_rate_with_a_wide_interval() -> None:
    # rate = difference over 2 years: sd sqrt 2 x 0.05 / 2 = 0.035 against 0.0074 from six visits over eight years
    rate = np.array([-0.08, 0.0, 0.0])
    two = fit_trend(history(MEAN, rate, None, times=[0.0, 2.0]), MEAN, NO_PRIOR)
    six = fit_trend(history(MEAN, rate, None), MEAN, NO_PRIOR)
    assert two.laws[0].determined
    assert two.laws[0].rate == pytest.approx(-0.08, rel=0.01)
    assert two.laws[0].rate_sd == pytest.approx(np.sqrt(2.0) * 0.05 / 2.0, rel=0.01)
    assert two.laws[0].rate_sd > 4.0 * six.laws[0].rate_sd
    low, high = two.laws[0].interval
    assert high - low == pytest.approx(2.0 * Z95 * two.laws[0].rate_sd)


def test_two_visits_a_month_apart_give_no_rate_for_coarse_readings() -> None:
    found = fit_trend(history(MEAN, NONE, None, sd=0.1, times=[0.0, 0.08]), MEAN, TAU)
    assert not any(law.determined for law in found.laws)
    assert all(law.law == "steady" and law.moving == 0.0 for law in found.laws)


def test_a_pad_told_by_one_visit_only_has_no_rate() -> None:
    visits = history(MEAN, NONE, None)
    blind = np.linalg.inv(covariance(0.05))
    blind[1, :] = blind[:, 1] = 0.0
    unread = [visit(v.time, MEAN, blind) for v in visits[:-1]]
    found = fit_trend([*unread, visits[-1]], MEAN, TAU)
    assert [law.determined for law in found.laws] == [True, False, True]


def test_no_visit_is_refused() -> None:
    with pytest.raises(ValueError, match="at least one"):
        fit_trend([], MEAN, TAU)


# nothing twice ------------------------------------------------------------------------------------


@pytest.mark.parametrize("sd", [0.02, 0.15, 0.4])
@pytest.mark.parametrize("seed", [1, 2])
def test_the_shared_prior_enters_once_as_in_one_least_squares_over_all_visits(sd: float, seed: int) -> None:
    rng = np.random.default_rng(seed)
    visits = history(MEAN - 2.0 * TAU, np.array([-0.05, 0.0, 0.02]), rng, sd=sd)
    found = fit_trend(visits, MEAN, TAU)
    answer, spread = joint(visits, MEAN, TAU)
    assert np.concatenate([found.level, found.rate]) == pytest.approx(answer, abs=1e-9)
    widen = np.concatenate([np.ones(3), [law.scatter for law in found.laws]])
    assert found.covariance == pytest.approx(spread * np.outer(widen, widen), rel=1e-7, abs=1e-14)


def test_a_prior_far_off_pulls_six_visits_less_than_each_of_them() -> None:
    truth = MEAN - 0.9
    visits = history(truth, NONE, None, sd=0.15)
    found = fit_trend(visits, MEAN, TAU)
    pulled = visits[0].log_stiffness - truth
    assert np.all(pulled > 0.05)
    assert np.all(np.abs(found.level - truth) < 0.6 * pulled)


def test_the_trend_of_real_readings_is_that_of_one_fit_to_all_of_them() -> None:
    """Six visits of a viaduct, each fitted with the prior, against a fit of level and rate to all readings at once."""
    model, rng, believed = well_read(), np.random.default_rng(8), prior()
    times, rate = TIMES - TIMES[-1], np.array([0.0, -0.07, 0.0, 0.02])
    model.sd = 2.0 * model.sd
    read = [noisy(model, NOMINAL - 0.7 + rate * t, rng) for t in times]
    fits = [fit(one, start=NOMINAL, prior=believed) for one in read]
    visits = [
        VisitEstimate(
            time=float(t),
            log_stiffness=one.log_stiffness,
            covariance=one.covariance,
            information=one.information,
            information_vector=one.information_vector,
            data_share=one.data_share,
        )
        for t, one in zip(TIMES, fits, strict=True)
    ]
    found = fit_trend(visits, believed.mean, believed.sd)

    def residuals(both: Floats) -> Floats:
        data = [
            (one.predict(both[:4] + t * both[4:]) - one.value) / one.sd
            for one, t in zip(read, times, strict=True)
        ]
        held = (both[:4] + times.mean() * both[4:] - believed.mean) / believed.sd
        return np.concatenate([*data, held, both[4:] / RATE_PRIOR_SD])

    direct = least_squares(
        residuals, np.concatenate([NOMINAL, np.zeros(4)]), x_scale="jac", xtol=1e-12, ftol=1e-12
    )
    sd = np.sqrt(np.diag(np.linalg.inv(direct.jac.T @ direct.jac)))
    off = np.abs(np.concatenate([found.level, found.rate]) - direct.x) / sd
    assert np.all(off < 0.3)  # visits enter by their normal approximation
    widen = np.concatenate([np.ones(4), [law.scatter for law in found.laws]])
    assert np.sqrt(np.diag(found.covariance)) == pytest.approx(sd * widen, rel=0.05)


def test_pads_told_together_are_followed_together() -> None:
    """Two pads of which each visit tells the sum well and the difference badly: so do the rates."""
    sd, r = 0.2, -0.98
    spread = sd**2 * np.array([[1.0, r, 0.0], [r, 1.0, 0.0], [0.0, 0.0, 1.0]])
    visits = [visit(float(t), MEAN, np.linalg.inv(spread)) for t in TIMES]
    found = fit_trend(visits, MEAN, NO_PRIOR)
    block = found.covariance[3:5, 3:5]
    assert block[0, 1] / np.sqrt(block[0, 0] * block[1, 1]) == pytest.approx(r, abs=0.01)
    alone = sd / np.sqrt(((TIMES - TIMES.mean()) ** 2).sum())
    assert np.sqrt(block.sum()) == pytest.approx(alone * np.sqrt(2.0 + 2.0 * r), rel=0.02)
    assert found.laws[2].rate_sd == pytest.approx(alone, rel=0.02)


# today --------------------------------------------------------------------------------------------


def test_today_is_the_last_visit_where_it_tells_every_pad() -> None:
    visits = history(MEAN, np.array([-0.1, 0.0, 0.0]), np.random.default_rng(3))
    found = fit_trend(visits, MEAN, TAU)
    assert found.now == pytest.approx(visits[-1].log_stiffness)
    assert found.now_covariance == pytest.approx(visits[-1].covariance)


def test_a_pad_not_read_at_the_last_visit_keeps_what_earlier_visits_told() -> None:
    sd, low = 0.03, MEAN + np.array([0.0, np.log(0.4), 0.0])
    diagonal = np.eye(3) / sd**2
    visits = [visit(float(t), low, diagonal) for t in TIMES[:-1]]
    unread = diagonal.copy()
    unread[1, 1] = 0.0
    found = fit_trend([*visits, visit(float(TIMES[-1]), low, unread)], MEAN, TAU)
    assert found.now[1] == pytest.approx(low[1], abs=0.02)
    assert found.now[[0, 2]] == pytest.approx(MEAN[[0, 2]], abs=0.01)
    gap = TIMES[-1] - TIMES[-2]
    assert 0.1 * np.sqrt(gap) < np.sqrt(found.now_covariance[1, 1]) < np.hypot(0.1 * np.sqrt(gap), sd)


def test_a_longer_silence_leaves_a_pad_less_certain() -> None:
    sds = []
    for gap in (1.0, 4.0, 9.0):
        told = np.eye(3) / 0.03**2
        unread = told.copy()
        unread[1, 1] = 0.0
        found = fit_trend([visit(0.0, MEAN, told), visit(gap, MEAN, unread)], MEAN, TAU)
        sds.append(np.sqrt(found.now_covariance[1, 1]))
    assert sds == sorted(sds)
    assert sds[-1] < np.hypot(TAU[1], 0.3)
