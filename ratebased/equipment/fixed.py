"""Coefficients given as numbers: for tests, for measured values, for a user's own correlation."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import pair_matrix, positive_array
from ..errors import InputError
from .protocol import Array, ContactState, Hydraulics, TransferCoefficients


class FixedCoefficients:
    """A contactor whose coefficients do not depend on the traffic.

    Parameters
    ----------
    kappa_vapor, kappa_liquid : pair mass-transfer coefficients, m/s, (..., n, n) or one number for all pairs; the
        leading shape must broadcast against the stages.
    area : area of a stage that they are based on, m2.
    h_vapor, h_liquid : heat-transfer coefficients, W/(m2 K).

    Raises
    ------
    InputError : an entry that is not finite and positive, a matrix that is not symmetric.
    """

    def __init__(self, kappa_vapor: ArrayLike, kappa_liquid: ArrayLike, area: ArrayLike, *, h_vapor: ArrayLike,
                 h_liquid: ArrayLike) -> None:
        self.kappa_vapor = _pairs("kappa_vapor", kappa_vapor)
        self.kappa_liquid = _pairs("kappa_liquid", kappa_liquid)
        self.area = positive_array("area", area)
        self.h_vapor = positive_array("h_vapor", h_vapor)
        self.h_liquid = positive_array("h_liquid", h_liquid)

    def transfer(self, state: ContactState) -> TransferCoefficients:
        """The numbers given, spread over the stages."""
        pairs = state.vapor.diffusivity.shape
        batch = np.broadcast_shapes(state.V.shape, pairs[:-2])

        def spread(value: Array) -> Array:
            return np.broadcast_to(value, batch)

        return TransferCoefficients(
            kappa_vapor=np.broadcast_to(self.kappa_vapor, batch + pairs[-2:]),
            kappa_liquid=np.broadcast_to(self.kappa_liquid, batch + pairs[-2:]),
            h_vapor=spread(self.h_vapor), h_liquid=spread(self.h_liquid), area=spread(self.area),
            basis="area given with the coefficients")

    def hydraulics(self, state: ContactState) -> Hydraulics:
        """Nothing is known of the hardware: no limits."""
        return Hydraulics(flooding=None)


def _pairs(name: str, value: ArrayLike) -> Array:
    array = np.asarray(value, float)
    if array.ndim == 0:
        return positive_array(name, array)
    if array.ndim < 2 or array.shape[-1] != array.shape[-2]:
        raise InputError(f"{name}: expected shape (..., n, n) or one number, got {array.shape}")
    return pair_matrix(name, array, array.shape[-1])
