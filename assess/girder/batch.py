"""Many small support systems at once.

LAPACK takes one matrix at a time, and most of the time goes into calling it. Here each step of the
elimination runs over a whole block of systems. No pivoting is needed: diag(w) + K diag(g) with w, g >= 0
and K symmetric positive semidefinite has the pivots of the symmetric matrix diag(w) + g^1/2 K g^1/2, which
are positive wherever the supports hold the girder.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

WORTHWHILE = 64  # systems; fewer are left to LAPACK
_BLOCK = 2048  # systems; what stays in the cache of a processor


def solve_many(stiffness: Floats, w: Floats, g: Floats, right: Floats) -> Floats:
    """Solve (diag(w) + K diag(g)) z = right for every set.

    Parameters
    ----------
    stiffness : K (n, n)
    w, g : (sets, n)
    right : (sets, n) or (n,)

    Returns
    -------
    z : (sets, n)

    Raises
    ------
    numpy.linalg.LinAlgError
        where the supports do not hold the girder.
    """
    sets, n = w.shape
    right = np.broadcast_to(right, (sets, n))
    z = np.empty((sets, n))
    diagonal = np.arange(n)
    for start in range(0, sets, _BLOCK):
        block = slice(start, start + _BLOCK)
        a = stiffness[:, :, None] * np.ascontiguousarray(g[block].T)
        a[diagonal, diagonal] += w[block].T
        b = right[block].T.copy()
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):  # told by the pivots below
            for i in range(n - 1):
                factor = a[i + 1 :, i] / a[i, i]
                a[i + 1 :, i + 1 :] -= factor[:, None] * a[i, i + 1 :]
                b[i + 1 :] -= factor * b[i]
        if not (a[diagonal, diagonal] > 0.0).all():
            raise np.linalg.LinAlgError("Singular matrix")
        for i in reversed(range(n)):
            b[i] /= a[i, i]
            b[:i] -= a[:i, i] * b[i]
        z[block] = b.T
    return z
