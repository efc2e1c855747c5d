"""The Wilson equation."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ...arguments import component_vector
from ..jet import Jet, common_batch
from ..protocol import GAS_CONSTANT, Array
from .parameters import PairFunction, pair_coefficients


class Wilson:
    """Wilson, J. Am. Chem. Soc. 86 (1964) 127, for `size` components.

    ln Lambda_ij = lambda_a + lambda_b/T + lambda_c ln T + lambda_d T + lambda_e/T2 + lambda_f T2, T in K; each (n, n),
    zero on the diagonal. Cannot describe a liquid that splits in two.
    Raises `InputError` for a wrong shape, an entry that is not finite or a diagonal that is not zero.
    """

    def __init__(self, size: int, *, lambda_a: ArrayLike | None = None, lambda_b: ArrayLike | None = None,
                 lambda_c: ArrayLike | None = None, lambda_d: ArrayLike | None = None,
                 lambda_e: ArrayLike | None = None, lambda_f: ArrayLike | None = None) -> None:
        self.size = size
        self._ln_lambda = PairFunction(size, "lambda", {"a": lambda_a, "b": lambda_b, "c": lambda_c, "d": lambda_d,
                                                        "e": lambda_e, "f": lambda_f})

    @classmethod
    def from_energies(cls, volume: ArrayLike, energy: ArrayLike) -> Wilson:
        """Lambda_ij = (V_j/V_i) exp(-energy_ij/(R T)): molar volumes (n,) in any one unit, energies (n, n) in J/mol."""
        size = len(np.asarray(volume, float))
        V = component_vector("volume", volume, size, positive=True)
        return cls(size, lambda_a=np.log(V[None, :] / V[:, None]),
                   lambda_b=-pair_coefficients("energy", energy, size) / GAS_CONSTANT)

    def _lambda(self, T: Array, x: Array, order: int) -> tuple[Jet, Jet]:
        """Lambda_ij (..., n, n) and s_i = sum_j Lambda_ij x_j (..., n)."""
        jet = self._ln_lambda(T, order).exp()
        return jet, (jet @ x[..., None])[..., 0]

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma_i = 1 - ln s_i - sum_k x_k Lambda_ki/s_k with temperature derivatives, (..., n)."""
        T, x = common_batch(T, x)
        jet, s = self._lambda(T, x, order)
        return 1.0 - s.log() - ((x / s)[..., None, :] @ jet)[..., 0, :]

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at one mole in all, (..., n, n).

        1 - Lambda_ij/s_i - Lambda_ji/s_j + sum_k x_k Lambda_ki Lambda_kj/s_k2.
        """
        T, x = common_batch(T, x)
        jet, s = self._lambda(T, x, 0)
        ratio = jet.value / s.value[..., None]
        mirrored = np.swapaxes(ratio, -1, -2)
        derivative: Array = 1.0 - ratio - mirrored + mirrored @ (x[..., None] * ratio)
        return derivative

    def describe(self) -> str:
        return "Wilson (1964), parameters given by the user"
