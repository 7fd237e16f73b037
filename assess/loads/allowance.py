"""Dynamic allowances of published live loads: what is added to the static effect of 1.

Every formula is from memory and to be confirmed against its document, which is named beside it.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

RULES = ("given", "constant", "en-rail", "loaded-length")
TRACKS = ("careful", "standard")
FOOT = 0.3048
_MEAN_SPANS = {1: 1.0, 2: 1.2, 3: 1.3, 4: 1.4}  # from five spans on 1.5


@dataclass(frozen=True, kw_only=True)
class Allowance:
    """What is added to the static effect of a live load.

    Attributes
    ----------
    value : the same everywhere; or None where it follows from the loaded length of the effect looked at
    """

    value: float | None = 0.0

    def at(
        self, spans: Floats, quantity: str, span: NDArray[np.intp], local: Floats
    ) -> tuple[Floats, Floats]:
        """Allowance on the greatest and on the least effect at places, both (p,).

        Parameters
        ----------
        spans : (s,) lengths of the girder's spans, m
        quantity : "moment", "shear", "reaction", "deflection" or "slope"
        span, local : (p,) span of each place and its distance from that span's left end, m
        """
        if self.value is not None:
            same = np.full(local.shape, self.value)
            return same, same
        high, low = loaded_lengths(spans, quantity, span, local)
        return impact(high), impact(low)


def determinant_length(spans: Floats) -> float:
    """Determinant length L_Phi (m) of a continuous main girder with spans (s,), m.

    k times the mean span, k = 1.2, 1.3, 1.4 for two, three, four spans and 1.5 for more; at least the longest span.

    Source: EN 1991-2:2003, table 6.2, case 5.2, from memory, to be confirmed against the standard.
    """
    spans = np.asarray(spans, dtype=np.float64)
    return float(max(_MEAN_SPANS.get(spans.size, 1.5) * spans.mean(), spans.max()))


def phi_2(length: float) -> float:
    """Dynamic factor Phi_2 for carefully maintained track, 1 to 1.67, for a determinant length in m.

    Source: EN 1991-2:2003, equation 6.4, from memory, to be confirmed against the standard.
    """
    return _phi(length, 1.44, 0.82, 1.67)


def phi_3(length: float) -> float:
    """Dynamic factor Phi_3 for track with standard maintenance, 1 to 2, for a determinant length in m.

    Source: EN 1991-2:2003, equation 6.5, from memory, to be confirmed against the standard.
    """
    return _phi(length, 2.16, 0.73, 2.0)


def _phi(length: float, over: float, plus: float, most: float) -> float:
    if not length > 0.0:
        raise ValueError(f"a determinant length is positive, not {length} m")
    root = np.sqrt(length) - 0.2
    return most if root <= 0.0 else float(np.clip(over / root + plus, 1.0, most))


def en_rail(spans: Floats, track: str) -> float:
    """Allowance of Load Model 71 and SW/0 on a girder with spans (s,), m: Phi - 1.

    Raises
    ------
    ValueError
        for a track that is not one of TRACKS.
    """
    if track not in TRACKS:
        raise ValueError(f"unknown track maintenance {track!r}; one of {', '.join(TRACKS)}")
    factor = phi_2 if track == "careful" else phi_3
    return factor(determinant_length(spans)) - 1.0


def real_train(speed: float, length: float, frequency: float, *, careful: bool = False) -> float:
    """Allowance of a real train: phi' + phi'' or, on carefully maintained track, phi' + 0.5 phi''.

    Parameters
    ----------
    speed : m/s
    length : determinant length L_Phi, m
    frequency : first natural bending frequency n_0 of the bridge under permanent load, Hz

    Source: EN 1991-2:2003, annex C, from memory, to be confirmed against the standard.
    Valid for: the limits of frequency and speed that the annex sets; they are not checked here.
    """
    return running_part(speed, length, frequency) + (0.5 if careful else 1.0) * track_part(
        speed, length, frequency
    )


def running_part(speed: float, length: float, frequency: float) -> float:
    """phi' of annex C, a perfect track: K / (1 - K + K^4) with K = v / (2 L_Phi n_0); 1.325 from K = 0.76 on."""
    _positive(speed=speed, length=length, frequency=frequency)
    k = speed / (2.0 * length * frequency)
    return 1.325 if k >= 0.76 else k / (1.0 - k + k**4)


def track_part(speed: float, length: float, frequency: float) -> float:
    """phi'' of annex C: what the roughness of the track adds, not below 0."""
    _positive(speed=speed, length=length, frequency=frequency)
    alpha = min(speed / 22.0, 1.0)
    rough = 56.0 * np.exp(-((length / 10.0) ** 2))
    rough += 50.0 * (frequency * length / 80.0 - 1.0) * np.exp(-((length / 20.0) ** 2))
    return max(0.0, alpha / 100.0 * float(rough))


def _positive(**values: float) -> None:
    for name, value in values.items():
        if not value > 0.0:
            raise ValueError(f"{name} must be positive, not {value}")


def impact(length: Floats) -> Floats:
    """Impact fraction I = 50 / (L + 125 ft), at most 0.30, for loaded lengths in m.

    Source: AASHTO Standard Specifications for Highway Bridges, 17th edition (2002), 3.8.2.1, from memory, to be
    confirmed against the specifications.
    """
    return np.asarray(np.minimum(50.0 / (np.asarray(length, dtype=np.float64) / FOOT + 125.0), 0.30))


def loaded_lengths(
    spans: Floats, quantity: str, span: NDArray[np.intp], local: Floats
) -> tuple[Floats, Floats]:
    """Loaded length (m) for the greatest and the least effect at places, both (p,).

    Sagging moment: the span itself. Hogging moment and reaction: the mean of the two spans at the support (the
    nearer one of the place), at an end the one span. Shear: from the place to the far support on the side that is
    loaded. Anything else: the span itself.

    Source: AASHTO Standard Specifications for Highway Bridges, 17th edition (2002), 3.8.2.2, from memory, to be
    confirmed; the reaction is taken like the hogging moment (common practice, no source).
    """
    spans = np.asarray(spans, dtype=np.float64)
    own = spans[span]
    near = span + (local > own / 2.0)
    beside = np.concatenate([spans[:1], (spans[1:] + spans[:-1]) / 2.0, spans[-1:]])[near]
    if quantity == "moment":
        return own, beside
    if quantity == "shear":
        return own - local, np.asarray(local)
    if quantity == "reaction":
        return beside, beside
    return own, own
