"""What is known of a girder's supports on a day: pads from the latest calibration, seats from levels."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import draw_normal
from assess.workflow import cautions
from assess.workflow.building import GirderModel
from assess.workflow.fitting import key_of
from assess.workflow.interventions import since_of, with_new_pads
from assess.workflow.kept_fits import GirderFit, RivalFit, VisitFit, from_kept
from assess.workflow.study import Study
from db.records import KeptResult

Floats = NDArray[np.float64]


_TIED = 1e-9  # correlation past which a seat was told together with something else


@dataclass(frozen=True, kw_only=True)
class Settlement:
    """A seat drop: m, with its standard deviation and the visit it was last measured on."""

    value: float
    sd: float
    date: dt.date


@dataclass(frozen=True, kw_only=True)
class Supports:
    """What is known of one girder's supports for the calibrated case.

    Attributes
    ----------
    log_stiffness, covariance : (q,), (q, q) of ln k
    source : visit of the calibration, None for nominal pads
    settlements : by support id; none with nominal pads
    log_factor, log_sustained : ln of the factor on the girder's stiffness, and of the pads' sustained ratio; draws take
        that ratio as it is
    joined : supports whose settlement is the calibration's own, drawn together with its pads
    """

    log_stiffness: Floats
    covariance: Floats
    source: dt.date | None
    fit: GirderFit | None
    settlements: dict[str, Settlement]
    log_factor: float = 0.0
    log_sustained: float = 0.0
    joined: list[str] = field(default_factory=list)

    def seats(self, model: GirderModel) -> Floats:
        """Seat drops (n,), m."""
        drops = np.zeros(model.n)
        for support, one in self.settlements.items():
            drops[model.doc.support_index(support)] = one.value
        return drops

    def acting(self, model: GirderModel) -> tuple[Floats, Floats]:
        """Compliances and seat drops (n,) that the girder of the bridge file acts on; see `acting`."""
        return acting(model, self.log_stiffness, self.seats(model), self.log_factor)

    def on(self, model: GirderModel) -> GirderModel:
        """The girder with its pads' creep under lasting load."""
        return model.creeping(self.log_sustained)

    def draws(self, model: GirderModel, count: int, seed: int) -> tuple[Floats, Floats]:
        """Draw what `acting` gives, both (count, n)."""
        seats = self.seat_draws(model, count, seed)
        if self.fit is None or self._pads_alone:
            if self.fit is not None and self.fit.draws is not None:
                log_stiffness = _many(self.fit.draws, count, seed)[:, : self.log_stiffness.size]
            else:
                log_stiffness = draw_normal(self.log_stiffness, self.covariance, count, seed)
            return acting(model, log_stiffness, seats, self.log_factor)
        if self.fit.draws is not None:
            theta = _many(self.fit.draws, count, seed)
        else:
            theta = draw_normal(self.fit.theta, self.fit.joint, count, seed)
        for place, support in zip(self.fit.places("settlements"), self.fit.seats, strict=True):
            if support in self.joined:
                seats[:, model.doc.support_index(support)] = theta[:, place]
        factor = self.fit.places("girder")
        log_factor = theta[:, factor[0]] if factor else 0.0
        return acting(model, theta[:, : self.log_stiffness.size], seats, log_factor)

    @property
    def _pads_alone(self) -> bool:
        assert self.fit is not None
        return not (self.joined or self.log_factor)

    def seat_draws(self, model: GirderModel, count: int, seed: int) -> Floats:
        """Draw seat drops, (count, n), each for itself."""
        sd = np.zeros(model.n)
        for support, one in self.settlements.items():
            sd[model.doc.support_index(support)] = one.sd
        noise = np.random.default_rng([seed, 1]).standard_normal((count, model.n))
        return np.asarray(self.seats(model) + sd * noise)

    def as_rival(self, rival: RivalFit) -> Supports:
        """The same supports as a rival explanation has them.

        It explains the levels of its visit too: a seat that does not drop in it stands still. Other levels stand.
        """
        assert self.source is not None
        seats = {
            support: Settlement(value=value, sd=0.0, date=self.source)
            for support, value in rival.settlements.items()
        }
        apart = {
            s: one for s, one in self.settlements.items() if s not in self.joined and one.date != self.source
        }
        return replace(
            self,
            log_stiffness=rival.log_stiffness,
            settlements={**apart, **seats},
            log_factor=rival.log_factor,
            log_sustained=rival.log_sustained,
        )


def acting(
    model: GirderModel, log_stiffness: Floats, seats: Floats, log_factor: Floats | float = 0.0
) -> tuple[Floats, Floats]:
    """Compliances and seat drops (..., n) on which the girder of the bridge file acts as the calibrated one does.

    A girder phi times as stiff on compliances f and seats s has the forces of the girder itself on phi f and phi s.

    Parameters
    ----------
    log_stiffness, seats : (..., q), (..., n)
    log_factor : (...)
    """
    compliance = model.compliance(log_stiffness)
    if not np.any(log_factor):
        return compliance, seats
    factor = np.exp(np.asarray(log_factor))[..., None]
    return np.asarray(compliance * factor), np.asarray(seats * factor)


def _many(draws: Floats, count: int, seed: int) -> Floats:
    """As many of the kept draws as wanted; all of them where that is their number."""
    if count == len(draws):
        return draws
    return np.asarray(draws[np.random.default_rng([seed, 2]).integers(0, len(draws), count)])


def kept_fits(study: Study, until: dt.date | None) -> dict[dt.date, tuple[VisitFit, KeptResult]]:
    """The newest kept calibration of every visit up to a day, by date."""
    newest: dict[dt.date, tuple[VisitFit, KeptResult]] = {}
    for kept in study.calibrations:
        if kept.visit is not None and (until is None or kept.visit <= until):
            newest[kept.visit] = (from_kept(kept), kept)
    return dict(sorted(newest.items()))


def supports_of(
    study: Study, model: GirderModel, fits: dict[dt.date, tuple[VisitFit, KeptResult]], until: dt.date | None
) -> tuple[Supports, list[str]]:
    """What is known of a girder's supports up to a day, and the cautions on it."""
    name = model.doc.id
    histories = seats_known(study, name, until, {date: one for date, (one, _) in fits.items()})
    measured = {support: history[-1] for support, history in histories.items()}
    own = {date: found for date, (one, _) in fits.items() if (found := one.of(model)) is not None}
    if not fits:
        left = cautions.settlements_left_out(name, [(s, 1e3 * one.value) for s, one in measured.items()])
        nominal = Supports(
            log_stiffness=model.nominal,
            covariance=model.prior.covariance,
            source=None,
            fit=None,
            settlements={},
        )
        return nominal, left
    said = _of_seats(study, model, histories, fits, until)
    if not own:
        said += _used(name, measured)
        if model.pads.size:
            said.append(cautions.girder_not_calibrated(name))
        return (
            Supports(
                log_stiffness=model.nominal,
                covariance=model.prior.covariance,
                source=None,
                fit=None,
                settlements=measured,
            ),
            said,
        )
    date = max(own)
    if date != max(fits):
        said.append(cautions.older_girder(name, date, max(fits)))
    visit_fit = fits[date][0]
    said += [one for one in visit_fit.result.cautions if one.startswith(f"{name}: ")]
    fit, renewed = with_new_pads(model, own[date], date, until)
    said += renewed or _forgotten(model, own, date)
    seats = {**measured, **(fitted := _fitted_seats(visit_fit, fit, measured))}
    said += _used(name, seats)
    return (
        Supports(
            log_stiffness=fit.log_stiffness,
            covariance=fit.covariance,
            source=date,
            fit=fit,
            settlements=seats,
            log_factor=fit.one("girder"),
            log_sustained=fit.one("sustained"),
            joined=list(fitted),
        ),
        said,
    )


def _used(girder: str, seats: dict[str, Settlement]) -> list[str]:
    return cautions.settlements_used(
        girder, [(s, 1e3 * one.value, 1e3 * one.sd, one.date) for s, one in seats.items()]
    )


def _fitted_seats(
    visit_fit: VisitFit, fit: GirderFit, measured: dict[str, Settlement]
) -> dict[str, Settlement]:
    """Seats whose drop is the calibration's own: told by its readings, and not measured again since.

    Where the drops as such are not told but their distances from the line through the end seats are, all of them are
    taken: what the datum leaves open bends nothing.
    """
    shown = next(girder for girder in visit_fit.result.girders if girder.girder == fit.girder)
    told = {s.support for s in shown.settlements_mm if s.data_share >= cautions.TOLD}
    if all(s.moment_relevant_data_share >= cautions.WELL_TOLD for s in shown.settlements_mm):
        told = {s.support for s in shown.settlements_mm}
    tied = np.abs(fit.joint) > _TIED * np.sqrt(np.outer(np.diag(fit.joint), np.diag(fit.joint)))
    found = {}
    for place, support in zip(fit.places("settlements"), fit.seats, strict=True):
        if tied[place].sum() < 2:
            continue  # nothing but its own level speaks of it: the reading stands
        later = support in measured and measured[support].date > visit_fit.visit
        if support in told and not later:
            sd = float(np.sqrt(fit.joint[place, place]))
            found[support] = Settlement(value=float(fit.theta[place]), sd=sd, date=visit_fit.visit)
    return found


def _of_seats(
    study: Study,
    model: GirderModel,
    histories: dict[str, list[Settlement]],
    fits: dict[dt.date, tuple[VisitFit, KeptResult]],
    until: dt.date | None,
) -> list[str]:
    """Cautions on seats: never read, read long ago, risen since."""
    name = model.doc.id
    newest = max([*fits, *(visit.date for visit in study.until(until))])
    said = cautions.seats_not_read(name, [s.id for s in model.doc.supports if s.id not in histories], newest)
    old: dict[dt.date, list[str]] = {}
    for support, history in histories.items():
        if history[-1].date < newest:
            old.setdefault(history[-1].date, []).append(support)
        for first, second in pairwise(history):
            fall = second.value - first.value
            if fall < -cautions.SUSPECT * float(np.hypot(first.sd, second.sd)):
                args = (1e3 * first.value, 1e3 * second.value, first.date, second.date)
                said.append(cautions.seat_turned(name, support, *args))
    for date, supports in sorted(old.items()):
        said += cautions.seats_old(name, supports, date, newest)
    return said


def _forgotten(model: GirderModel, own: dict[dt.date, GirderFit], date: dt.date) -> list[str]:
    said = []
    for i, support in enumerate(model.pad_ids):
        if own[date].data_share[i] >= cautions.TOLD:
            continue
        telling = [d for d, fit in own.items() if d < date and fit.data_share[i] >= cautions.TOLD]
        if not telling:
            continue
        ratio = float(np.exp(own[max(telling)].log_stiffness[i] - model.nominal[i]))
        said.append(cautions.forgotten_pad(model.doc.id, support, date, max(telling), ratio))
    return said


def seat_histories(study: Study, girder: str, until: dt.date | None) -> dict[str, list[Settlement]]:
    """Measured settlements of each support of a girder, by date; repeats of one visit are pooled by weight.

    Only those since it was last jacked or shimmed.
    What the newest calibration of a visit left out by hand is no measurement here either.
    """
    found: dict[str, list[Settlement]] = {}
    for visit in study.until(until):
        left_out = _left_out(study, visit.date)
        values: dict[str, list[tuple[float, float]]] = {}
        for reading in visit.readings:
            permanent = visit.state(reading.state).vehicle is None
            if (
                reading.girder == girder
                and reading.quantity == "settlement"
                and permanent
                and reading.support
                and key_of(reading) not in left_out
            ):
                values.setdefault(reading.support, []).append((reading.value, reading.sd))
        for support, pairs in values.items():
            value, sd = np.array(pairs).T
            weight = sd**-2.0
            pooled = Settlement(
                value=float((weight @ value) / weight.sum()), sd=float(weight.sum() ** -0.5), date=visit.date
            )
            found.setdefault(support, []).append(pooled)
    return {
        support: kept
        for support, history in found.items()
        if (kept := _uncut(study, girder, support, history, until))
    }


def _uncut(
    study: Study, girder: str, support: str, history: list[Settlement], until: dt.date | None
) -> list[Settlement]:
    """What was measured of a seat since it was last jacked or shimmed."""
    since = since_of(study.bridge, girder, support, ("jacked", "shimmed"), until)
    return [one for one in history if since is None or one.date >= since]


def _left_out(study: Study, date: dt.date) -> set[str]:
    options = next((kept.options for kept in reversed(study.calibrations) if kept.visit == date), {})
    return {one["reading"] for one in options.get("without", [])}


def seats_known(
    study: Study, girder: str, until: dt.date | None, fits: Mapping[dt.date, VisitFit]
) -> dict[str, list[Settlement]]:
    """Seat drops of a girder by support and date: as levelled, or as calibrated where more than the level speaks."""
    histories = seat_histories(study, girder, until)
    for date, one in fits.items():
        if girder not in one.fits:
            continue
        for support, fitted in _fitted_seats(one, one.fits[girder], {}).items():
            others = [known for known in histories.get(support, []) if known.date != date]
            histories[support] = sorted([*others, fitted], key=lambda known: known.date)
    return histories
