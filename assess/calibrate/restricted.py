"""A model some of whose unknowns are held, to ask what the readings say without them."""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.prior import Prior

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


class Model(Protocol):
    """What a least-squares problem asks of a model; `ObservationModel` is one.

    Attributes
    ----------
    value, sd : (m,) readings
    pads : (q,) supports whose ln k come first among the unknowns
    size : number of unknowns
    """

    value: Floats
    sd: Floats
    pads: Ints
    size: int

    def predict(self, theta: Floats) -> Floats:
        """Predicted readings (..., m) for unknowns (..., size)."""
        ...

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        """Predicted readings (m,) and their derivatives (m, size)."""
        ...


class Restricted:
    """A model with some unknowns free and the others held.

    Parameters
    ----------
    whole : Model of `size` unknowns
    free : (k,) ascending places of the free ones, the pads among them
    held : (size,) values of the others
    """

    def __init__(self, whole: Model, free: Ints, held: Floats) -> None:
        self.value, self.sd, self.pads = whole.value, whole.sd, whole.pads
        self.size = free.size
        self.free = free
        self._whole, self._held = whole, held

    def full(self, theta: Floats) -> Floats:
        """All unknowns (..., whole size) from the free ones (..., k)."""
        result = np.broadcast_to(self._held, (*theta.shape[:-1], self._held.size)).copy()
        result[..., self.free] = theta
        return result

    def predict(self, theta: Floats) -> Floats:
        """Predicted readings (..., m) for the free unknowns (..., k)."""
        return self._whole.predict(self.full(theta))

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        """Predicted readings (m,) and their derivatives (m, k)."""
        value, jacobian = self._whole.linearise(self.full(theta))
        return value, jacobian[:, self.free]


def restricted_prior(prior: Prior, free: Ints, q: int) -> Prior:
    """What is believed of the free unknowns; the q pads are among them."""
    others = free[q:] - q
    return Prior(pads=prior.pads, mean=prior.mean[others], sd=prior.sd[others])
