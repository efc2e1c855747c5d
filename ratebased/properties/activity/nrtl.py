"""The NRTL equation."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..jet import Jet, common_batch
from ..protocol import Array
from .parameters import PairFunction, pair_coefficients


class Nrtl:
    """Renon & Prausnitz, AIChE J. 14 (1968) 135, for `size` components.

    tau_ij = tau_a + tau_b/T + tau_c ln T + tau_d T + tau_e/T2 + tau_f T2 (T in K), G_ij = exp(-alpha_ij tau_ij),
    alpha_ij = alpha + alpha_slope T. Each parameter (n, n), or one number for all pairs; the diagonal of all is zero
    (that of alpha does not matter where it is given as one number).
    Parameters published as energies g_ij - g_jj in J/mol are tau_b = energy/R.
    Raises `InputError` for a wrong shape, an entry that is not finite or a diagonal that is not zero.
    """

    def __init__(self, size: int, *, tau_a: ArrayLike | None = None, tau_b: ArrayLike | None = None,
                 tau_c: ArrayLike | None = None, tau_d: ArrayLike | None = None, tau_e: ArrayLike | None = None,
                 tau_f: ArrayLike | None = None, alpha: ArrayLike = 0.3, alpha_slope: ArrayLike = 0.0) -> None:
        self.size = size
        self._tau = PairFunction(size, "tau", {"a": tau_a, "b": tau_b, "c": tau_c, "d": tau_d, "e": tau_e,
                                               "f": tau_f})
        constant = pair_coefficients("alpha", alpha, size)
        self._minus_alpha = -constant
        slope = pair_coefficients("alpha_slope", alpha_slope, size)
        self._alpha = PairFunction(size, "alpha", {"a": constant, "d": slope}) if slope.any() else None

    def _local(self, T: Array, x: Array, order: int) -> tuple[Jet, Jet, Jet]:
        """G_ij/S_j, q_j and F_ij = G_ij (tau_ij - q_j)/S_j; S_j = sum_k x_k G_kj, q_j = sum_k x_k tau_kj G_kj/S_j."""
        tau = self._tau(T, order)
        G = (tau * (self._minus_alpha if self._alpha is None else -self._alpha(T, order))).exp()
        row = x[..., None, :]
        per_mole = G / (row @ G)
        q = row @ (tau * per_mole)
        return per_mole, q, per_mole * (tau - q)

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma_i = q_i + sum_j x_j F_ij with temperature derivatives, (..., n)."""
        T, x = common_batch(T, x)
        _, q, F = self._local(T, x, order)
        return _ln_gamma(q, F, x)

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at one mole in all, (..., n, n)."""
        T, x = common_batch(T, x)
        per_mole, _, F = self._local(T, x, 0)
        return _mole_numbers(per_mole.value, F.value, x)

    def ln_gamma_and_derivatives(self, T: Array, x: Array, order: int) -> tuple[Jet, Array]:
        """What `ln_gamma` and `mole_number_derivatives` give."""
        T, x = common_batch(T, x)
        per_mole, q, F = self._local(T, x, order)
        return _ln_gamma(q, F, x), _mole_numbers(per_mole.value, F.value, x)

    def describe(self) -> str:
        return "NRTL, Renon & Prausnitz (1968), parameters given by the user"


def _ln_gamma(q: Jet, F: Jet, x: Array) -> Jet:
    return q[..., 0, :] + (F @ x[..., None])[..., 0]


def _mole_numbers(per_mole: Array, F: Array, x: Array) -> Array:
    """F_ij + F_ji - sum_k x_k (G_ik F_jk + G_jk F_ik)/S_k."""
    half = F - (per_mole * x[..., None, :]) @ np.swapaxes(F, -1, -2)
    symmetric: Array = half + np.swapaxes(half, -1, -2)
    return symmetric
