"""The UNIQUAC equation."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ...arguments import component_vector
from ..jet import Jet, common_batch
from ..protocol import Array
from .parameters import PairFunction
from .surface import combinatorial, combinatorial_mole_derivatives, residual_mole_derivatives, segment_activity


class Uniquac:
    """Abrams & Prausnitz, AIChE J. 21 (1975) 116.

    r, q : molecular volumes and areas, (n,). ln tau_ij = tau_a + tau_b/T + tau_c ln T + tau_d T + tau_e/T2 + tau_f T2,
    T in K; each (n, n), zero on the diagonal. Energies u_ij - u_jj in J/mol are tau_b = -energy/R.
    Raises `InputError` for a wrong shape, an entry that is not finite, r or q not above zero.
    """

    def __init__(self, r: ArrayLike, q: ArrayLike, *, tau_a: ArrayLike | None = None, tau_b: ArrayLike | None = None,
                 tau_c: ArrayLike | None = None, tau_d: ArrayLike | None = None, tau_e: ArrayLike | None = None,
                 tau_f: ArrayLike | None = None) -> None:
        self.size = len(np.atleast_1d(np.asarray(r, float)))
        self.r = component_vector("r", r, self.size, positive=True)
        self.q = component_vector("q", q, self.size, positive=True)
        self._ln_tau = PairFunction(self.size, "tau", {"a": tau_a, "b": tau_b, "c": tau_c, "d": tau_d, "e": tau_e,
                                                       "f": tau_f})

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma with temperature derivatives, (..., n)."""
        T, x = common_batch(T, x)
        tau = self._ln_tau(T, order).exp()
        area = x * self.q
        theta = (area / area.sum(-1, keepdims=True))[..., None, :]
        return segment_activity(theta, tau)[..., 0, :] * self.q + combinatorial(x, self.r, self.q, 1.0)

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at one mole in all, (..., n, n)."""
        T, x = common_batch(T, x)
        tau = self._ln_tau(T, 0).exp().value
        return (residual_mole_derivatives(x, np.diag(self.q), tau)
                + combinatorial_mole_derivatives(x, self.r, self.q, 1.0))

    def describe(self) -> str:
        return "UNIQUAC, Abrams & Prausnitz (1975), parameters given by the user"
