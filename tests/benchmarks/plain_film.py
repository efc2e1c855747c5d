"""What one would write without this library: one film at a time, `fsolve` on `expm(A) x0 - xd`."""
from __future__ import annotations

import numpy as np
from scipy.linalg import expm
from scipy.optimize import fsolve

Array = np.ndarray


def film_matrix(N: Array, K: Array) -> Array:
    """A with dx/deta = A x."""
    A = -N[:, None] * K
    np.fill_diagonal(A, K @ N)
    return A


def plain_film(x0: Array, xd: Array, K: Array, nu: Array, s: float) -> tuple[Array, bool]:
    """Fluxes and whether `fsolve` says it is done, from the low-flux estimate at the mean composition."""
    mean = 0.5 * (x0 + xd)
    system, right = film_matrix(mean, K), x0 - xd
    system[-1], right[-1] = nu, s
    start = np.linalg.solve(system, right)

    def miss(N: Array) -> Array:
        r = expm(film_matrix(N, K)) @ x0 - xd
        r[-1] = nu @ N - s
        return r

    N, _, flag, _ = fsolve(miss, start, full_output=True, xtol=1e-10)
    return N, flag == 1
