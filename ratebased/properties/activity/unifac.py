"""UNIFAC group contributions, original and modified."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ...arguments import finite_array, positive_array
from ...errors import InputError
from ..jet import Jet, common_batch, temperature
from ..protocol import Array
from .surface import combinatorial, combinatorial_mole_derivatives, residual_mole_derivatives, segment_activity


class Unifac:
    """ln gamma from groups of volume R_k and area Q_k, v_ik of them in component i.

    psi_mk = exp(-(a_mk/T + b_mk + c_mk T)). The original method has a alone and r_exponent 1 (Fredenslund, Jones &
    Prausnitz, AIChE J. 21 (1975) 1086); the modified one all three and 3/4 (Weidlich & Gmehling, Ind. Eng. Chem. Res.
    26 (1987) 1372).

    Parameters
    ----------
    counts : v_ik, (n, G); every component has at least one group.
    R, Q : group volumes and areas, (G,), Q zero for a group buried in others.
    a, b, c : group interactions, (G, G), K, -, 1/K; diagonal zero.
    label : for the summary.
    """

    def __init__(self, counts: ArrayLike, R: ArrayLike, Q: ArrayLike, a: ArrayLike, b: ArrayLike | None = None,
                 c: ArrayLike | None = None, *, r_exponent: float = 1.0, label: str = "UNIFAC") -> None:
        groups = finite_array("counts", counts)
        if groups.ndim != 2 or (groups < 0).any():
            raise InputError(f"counts: expected (n, groups) numbers, none negative, got shape {groups.shape}")
        for i in np.flatnonzero(groups.sum(1) <= 0):
            raise InputError(f"counts[{i}]: component {i} has no group")
        self.size, n_groups = groups.shape
        volume, area = finite_array("R", R), finite_array("Q", Q)
        for name, vector in (("R", volume), ("Q", area)):
            if vector.shape != (n_groups,):
                raise InputError(f"{name}: expected {n_groups} entries, one a group, got shape {vector.shape}")
            if (vector < 0).any():
                raise InputError(f"{name}: expected no negative entry, got {vector.tolist()}")
        coefficients: list[Array] = []
        for name, value in (("a", a), ("b", b), ("c", c)):
            matrix = np.zeros((n_groups, n_groups)) if value is None else finite_array(name, value)
            if matrix.shape != (n_groups, n_groups) or np.diagonal(matrix).any():
                raise InputError(f"{name}: expected a ({n_groups}, {n_groups}) matrix with a zero diagonal, got shape "
                                 f"{matrix.shape}")
            coefficients.append(-matrix)
        self._minus_a, self._minus_b, self._minus_c = coefficients
        self.r, self.q = positive_array("counts @ R", groups @ volume), positive_array("counts @ Q", groups @ area)
        self.r_exponent = r_exponent
        self.label = label
        self._areas = groups * area
        self._ones = np.ones(n_groups)
        self._pure_fractions = self._areas / self.q[:, None]

    def _psi(self, T: Array, order: int) -> Jet:
        jet = temperature(T[..., None, None], order)
        exponent = jet.reciprocal() * self._minus_a
        if self._minus_b.any() or self._minus_c.any():
            exponent = exponent + self._minus_b + jet * self._minus_c
        return exponent.exp()

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma with temperature derivatives, (..., n)."""
        T, x = common_batch(T, x)
        return self._ln_gamma(self._psi(T, order), x)

    def _ln_gamma(self, psi: Jet, x: Array) -> Jet:
        amount = x @ self._areas
        theta = (amount / amount.sum(-1, keepdims=True))[..., None, :]
        # The mixture and every pure component in one product: many small matrices cost by their number.
        pure = np.broadcast_to(self._pure_fractions, (*theta.shape[:-2], *self._pure_fractions.shape))
        every = segment_activity(np.concatenate([theta, pure], -2), psi)
        mixed = every[..., 0, :] @ self._areas.T
        alone = every[..., 1:, :].linear(self._molecule)
        return mixed - alone + combinatorial(x, self.r, self.q, self.r_exponent)

    def _molecule(self, segment: Array) -> Array:
        """Sum over the groups of each molecule, (..., n, G) -> (..., n)."""
        total: Array = (segment * self._areas) @ self._ones
        return total

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at one mole in all, (..., n, n)."""
        T, x = common_batch(T, x)
        return self._mole_numbers(self._psi(T, 0).value, x)

    def ln_gamma_and_derivatives(self, T: Array, x: Array, order: int) -> tuple[Jet, Array]:
        """What `ln_gamma` and `mole_number_derivatives` give."""
        T, x = common_batch(T, x)
        psi = self._psi(T, order)
        return self._ln_gamma(psi, x), self._mole_numbers(psi.value, x)

    def _mole_numbers(self, psi: Array, x: Array) -> Array:
        return (residual_mole_derivatives(x, self._areas, psi)
                + combinatorial_mole_derivatives(x, self.r, self.q, self.r_exponent))

    def describe(self) -> str:
        return self.label
