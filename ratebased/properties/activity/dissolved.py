"""Solvents, gases dissolved in them, and components that are not in the liquid, as one activity model of all.

n_s moles of solvents mix by an activity model of their own; every dissolved gas i follows Henry's law with a constant
that mixes over the gas-free solvents, ln H_i = sum_j x'_j ln H_ij (x' the gas-free fractions). One Gibbs energy,

    G/RT = sum_solvents n_j (ln x_j + ln gamma_j(x')) + sum_gases n_i (ln x_i + ln H_i(x')),

gives both, so Gibbs-Duhem holds: a solvent carries the term sum_i (x_i/x_s)(ln H_ij - ln H_i), nil in a single
solvent. For a gas, ln gamma + ln f0 is ln H: its standard fugacity is 1 Pa.
"""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..henry import HenryLaw
from ..jet import Jet, common_batch
from ..protocol import Array
from .protocol import ActivityModel


class DissolvedGases:
    """An activity model of `size` components made of a model of the solvents and Henry's law for some of the others.

    solvents : positions of the components of `model`, in its order. gases : positions of the gases of `henry`, in its
    order. All others are not in the liquid: ln gamma = 0, no influence on anything.
    """

    def __init__(self, size: int, model: ActivityModel, solvents: ArrayLike, henry: HenryLaw | None,
                 gases: ArrayLike) -> None:
        self.size = size
        self.model = model
        self.henry = henry
        self._solvents = np.asarray(solvents, int)
        self._gases = np.asarray(gases, int)

    def _split(self, x: Array) -> tuple[Array, Array, Array]:
        solvents = x[..., self._solvents]
        total = solvents.sum(-1, keepdims=True)
        return solvents / total, x[..., self._gases] / total, total

    def ln_gamma(self, T: Array, x: Array, order: int = 0) -> Jet:
        """ln gamma of solvents, ln H (Pa) of gases, zero for the rest, with temperature derivatives, (..., n)."""
        T, x = common_batch(T, x)
        fractions, loading, _ = self._split(x)
        own = self.model.ln_gamma(T, fractions, order)
        constants = mixed = None
        if self.henry is not None:
            constants = self.henry.ln_constants(T, order)
            mixed = (constants @ fractions[..., None])[..., 0]
            difference = constants - mixed[..., None]
            own = own + (loading[..., None, :] @ difference)[..., 0, :]
        terms = np.zeros((order + 1, *x.shape))
        terms[..., self._solvents] = own.terms
        if mixed is not None:
            terms[..., self._gases] = mixed.terms
        return Jet(terms)

    def mole_number_derivatives(self, T: Array, x: Array) -> Array:
        """d ln gamma_i / d n_j at one mole in all, (..., n, n); zero rows and columns for what is not in the liquid."""
        T, x = common_batch(T, x)
        fractions, loading, total = self._split(x)
        total = total[..., None]
        J = np.zeros((*x.shape, self.size))
        own = self.model.mole_number_derivatives(T, fractions) / total
        if self.henry is not None:
            constants = self.henry.ln_constants(T, 0).value
            difference = constants - (constants @ fractions[..., None])
            pull = (loading[..., None, :] @ difference)[..., 0, :]
            own = own - (pull[..., :, None] + pull[..., None, :]) / total
            block = difference / total
            J[..., self._gases[:, None], self._solvents] = block
            J[..., self._solvents[:, None], self._gases] = np.swapaxes(block, -1, -2)
        J[..., self._solvents[:, None], self._solvents] = own
        return J

    def describe(self) -> str:
        return self.model.describe()
