"""Rival explanations of the same readings, ranked by what the readings themselves prefer.

Every rival is fitted to all readings, with what is believed of its unknowns held ten times more loosely, so that the
ranking is by likelihood and an assumption only steadies what no reading tells. AICc = chi-square + 2 p + 2 p (p + 1) /
(m - p - 1) (Hurvich and Tsai 1989), p counted as far as the readings tell the unknowns: the trace of the hat matrix.
A rival whose extra unknown nothing tells then ties with the plain one, which is the honest answer.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.fit import Fit, fit
from assess.calibrate.observations import ObservationModel
from assess.calibrate.prior import PadPrior, Prior
from assess.calibrate.restricted import Restricted, restricted_prior
from assess.calibrate.unknowns import NUISANCE

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

CLOSE = 2.0  # of AICc: rivals this close to the best cannot be told from it
_LOOSER = 10.0
_FIRM = (*NUISANCE, "sustained")  # what is believed of these is measured or published, not a habit


@dataclass(frozen=True, kw_only=True)
class Rival:
    """One explanation.

    Attributes
    ----------
    name : as given
    free : (k,) its unknowns, places in the whole model
    theta : (whole size,) its estimate with what is believed as it is, what it does not know held
    chi_square, log_likelihood, told : of the readings alone, beliefs held loosely; `told` counts its unknowns
    aicc : None where there are too few readings to rank it
    share : of its extra unknowns' loosened prior variance, the greatest that the readings take away; 1 without any
    within_2 : its AICc is within 2 of the best
    close : it is, or its AIC is: the readings' standard deviations are known, so that where there are few of them AICc
        holds too much against a second explanation
    """

    name: str
    free: Ints
    theta: Floats
    chi_square: float
    log_likelihood: float
    told: float
    aicc: float | None
    share: float
    within_2: bool
    close: bool

    @property
    def aic(self) -> float:
        """AIC (Akaike 1974), chi-square + 2 p."""
        return self.chi_square + 2.0 * self.told


def loosened(prior: Prior, model: ObservationModel) -> Prior:
    """The same beliefs held ten times more loosely, each pad for itself."""
    q = model.pads.size
    firm = np.array([entry.block in _FIRM for entry in model.layout.entries[q:]], dtype=bool)
    pads = prior.pads
    loose = None if pads is None else PadPrior(mean=pads.mean, sd=_LOOSER * pads.sd)
    return Prior(pads=loose, mean=prior.mean, sd=np.where(firm, 1.0, _LOOSER) * prior.sd)


def aicc(chi_square: float, told: float, readings: int) -> float | None:
    """AICc; None where the readings are too few for it."""
    left = readings - told - 1.0
    return chi_square + 2.0 * told + 2.0 * told * (told + 1.0) / left if left > 0.5 else None


def rivals(
    model: ObservationModel, prior: Prior, start: Floats, sets: Mapping[str, Sequence[int]]
) -> list[Rival]:
    """Fit and rank rivals.

    Parameters
    ----------
    model : with every unknown that any of them has
    prior : of all unknowns; the pads have one
    start : (size,) where what is held stands, and where fits start
    sets : by name the places of the unknowns that a rival has beside the pads; nuisances are always among them

    Raises
    ------
    RuntimeError
        where a fit does not converge.
    """
    q, m = model.pads.size, model.value.size
    always = [j for j, entry in enumerate(model.layout.entries) if entry.block in NUISANCE]
    loose = loosened(prior, model)
    found = []
    constant = -float(np.log(model.sd).sum()) - 0.5 * m * np.log(2.0 * np.pi)
    for name, places in sets.items():
        free = np.array(sorted({*range(q), *places, *always}), dtype=np.intp)
        part = Restricted(model, free, start)
        one = fit(part, start=start[free], prior=restricted_prior(loose, free, q))
        tied = fit(part, start=start[free], prior=restricted_prior(prior, free, q))
        found.append(
            Rival(
                name=name,
                free=free,
                theta=part.full(tied.theta),
                chi_square=one.chi_square,
                log_likelihood=constant - 0.5 * one.chi_square,
                told=one.effective_unknowns,
                aicc=aicc(one.chi_square, one.effective_unknowns, m),
                share=_share(one, free, places),
                within_2=False,
                close=False,
            )
        )
    return _ranked(found)


def _share(one: Fit, free: Ints, places: Sequence[int]) -> float:
    own = np.isin(free, list(places))
    return float(one.shares[own].max()) if own.any() else 1.0


def _ranked(found: list[Rival]) -> list[Rival]:
    least = min((one.aicc for one in found if one.aicc is not None), default=0.0)
    least_aic = min(one.aic for one in found)
    ranked = []
    for one in found:
        within = one.aicc is not None and one.aicc - least <= CLOSE
        ranked.append(replace(one, within_2=within, close=within or one.aic - least_aic <= CLOSE))
    return ranked
