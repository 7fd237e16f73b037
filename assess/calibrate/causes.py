"""What moved at a support: the pad or its seat, by how much worse the readings fit without either.

For each support three fits say how far the sum of squares rises above the best one: with its seat held still, with its
pad held to its nominal scatter, with both. A rise is a squared normal deviate where nothing moved. A seat is held to
alpha 0.001, because all that scatters there is readings. Sound pads scatter as believed, and 60 per cent are only 3.1
standard deviations of pads with a coefficient of variation of 0.3: a loss is held to alpha 0.01, a pad too stiff
to 0.001. What is believed of all else is held loosely, so that no assumption decides. Where nothing moved that the
readings could see, they must have been able to see a drop of 5 mm and a loss of 60 per cent. With an unknown datum a
seat that fell is not told from the others risen.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import stats

from assess.calibrate.fit import Problem, fit
from assess.calibrate.minimise import minimise
from assess.calibrate.observations import ObservationModel
from assess.calibrate.prior import PadPrior, Prior
from assess.calibrate.restricted import Restricted, restricted_prior
from assess.calibrate.rivals import loosened

Floats = NDArray[np.float64]

_ALPHA = 0.001
SEAT_MOVED = float(stats.chi2.isf(_ALPHA, 1))
PAD_SOFTER = float(stats.norm.isf(0.01)) ** 2
PAD_STIFFER = float(stats.norm.isf(_ALPHA)) ** 2
BOTH = float(stats.chi2.isf(_ALPHA, 2))

DROP, LOSS = 0.005, 0.6  # m of a seat, and of a stiffness: what readings must be able to show

PAD, SEAT, PAD_AND_SEAT, NEITHER, UNTOLD = "pad", "seat", "pad and seat", "neither", "cannot be told"
PAD_AT_LEAST = "pad; seat cannot be told"


@dataclass(frozen=True, kw_only=True)
class Cause:
    """What the readings say of one support.

    Attributes
    ----------
    support : index
    cause : "pad" | "seat" | "pad and seat" | "pad; seat cannot be told" | "neither" | "cannot be told"
    without_seat, without_pad, without_both : rise of the sum of squares with the seat still, the pad as nominal, both
    seat_sd : m, of the drop by the readings alone; infinite where nothing was read since the datum
    pad_sd : of ln k by the readings alone
    """

    support: int
    cause: str
    without_seat: float
    without_pad: float
    without_both: float
    seat_sd: float
    pad_sd: float


def causes(model: ObservationModel, prior: Prior, start: Floats) -> list[Cause]:
    """Tell pad from seat at every pad.

    Parameters
    ----------
    model : whose unknowns include the settlements of the seats to tell, if anything was read since the datum
    prior : of all unknowns; the pads have one
    start : (size,)

    Raises
    ------
    RuntimeError
        where a fit does not converge.
    """
    loose = loosened(prior, model)
    if loose.pads is None or prior.pads is None:
        return []
    best = fit(model, start=start, prior=loose)
    least = float(Problem(model, loose).cost(best.theta))
    seats = {model.layout.entries[j].index: j for j in model.layout.places("settlements")}
    sd = np.sqrt(np.diag(best.joint))
    found = []
    for i, support in enumerate(model.pads):
        change = float(best.theta[i] - prior.pads.mean[i])
        held = _pad_held(loose, prior.pads, i)
        pad = _cost(model, held, None, best.theta) - least
        seat, both, seat_sd = 0.0, pad, np.inf
        if int(support) in seats:
            place = seats[int(support)]
            still = np.delete(np.arange(model.size), place)
            seat = _cost(model, loose, still, best.theta) - least
            both = _cost(model, held, still, best.theta) - least
            seat_sd = float(sd[place])
        found.append(
            Cause(
                support=int(support),
                cause=_judged(
                    seat > SEAT_MOVED,
                    pad > (PAD_SOFTER if change < 0.0 else PAD_STIFFER),
                    blind=np.isfinite(seat_sd) and np.sqrt(SEAT_MOVED) * seat_sd > DROP,
                    hidden=both > BOTH or _hidden(seat_sd, float(sd[i]), change),
                ),
                without_seat=seat,
                without_pad=pad,
                without_both=both,
                seat_sd=seat_sd,
                pad_sd=float(sd[i]),
            )
        )
    return found


def _hidden(seat_sd: float, pad_sd: float, change: float) -> bool:
    """Whether a drop or a loss that matters could be there unseen; `change` of ln k by the readings."""
    lost = float(np.log1p(-LOSS))
    unseen = np.sqrt(SEAT_MOVED) * seat_sd > DROP or np.sqrt(SEAT_MOVED) * pad_sd > -lost
    return bool(unseen or change - np.sqrt(PAD_SOFTER) * pad_sd < lost)


def _pad_held(loose: Prior, own: PadPrior, i: int) -> Prior:
    assert loose.pads is not None
    sd = loose.pads.sd.copy()
    sd[i] = own.sd[i]
    return Prior(pads=PadPrior(mean=loose.pads.mean, sd=sd), mean=loose.mean, sd=loose.sd)


def _cost(model: ObservationModel, prior: Prior, free: NDArray[np.intp] | None, start: Floats) -> float:
    if free is None:
        problem = Problem(model, prior)
        return float(problem.cost(minimise(problem.linearise, start).theta))
    part = Restricted(model, free, np.zeros(model.size))
    problem = Problem(part, restricted_prior(prior, free, model.pads.size))
    return float(problem.cost(minimise(problem.linearise, start[free]).theta))


def _judged(seat: bool, pad: bool, *, blind: bool, hidden: bool) -> str:
    """The cause in a word; `blind` where the seat was read, but could have dropped unseen."""
    if seat and pad:
        return PAD_AND_SEAT
    if seat:
        return SEAT
    if pad:
        return PAD_AT_LEAST if blind else PAD
    return UNTOLD if hidden else NEITHER
