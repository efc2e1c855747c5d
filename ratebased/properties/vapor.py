"""Vapours that are not ideal gases, at low to moderate pressure, beside a liquid described by activity coefficients."""
from __future__ import annotations

import warnings
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike

from ..errors import PropertyRangeError, PropertyWarning
from .activity.parameters import pair_coefficients
from .components import PureComponents
from .jet import Jet, common_state, temperature
from .protocol import GAS_CONSTANT, Array


class VaporModel(Protocol):
    """Fugacity coefficients of a vapour mixture: T (...) K, P (...) Pa, y (..., n)."""

    def ln_phi(self, T: Array, P: Array, y: Array, order: int = 0) -> Jet:
        """ln phi with temperature derivatives at constant pressure and composition, (..., n)."""
        ...

    def mole_number_derivatives(self, T: Array, P: Array, y: Array) -> Array:
        """d ln phi_i / d n_j at constant T, P and one mole in all, (..., n, n)."""
        ...

    def compressibility(self, T: Array, P: Array, y: Array) -> Array:
        """Z = P V/(R T), (...)."""
        ...

    def describe(self) -> str:
        """The model and its source, one line."""
        ...


class VirialVapor:
    """Second virial coefficients after Pitzer & Curl with the constants of Abbott.

    B_ij = R Tc_ij/Pc_ij (B0 + omega_ij B1), B0 = 0.083 - 0.422/Tr^1.6, B1 = 0.139 - 0.172/Tr^4.2 (Smith & Van Ness,
    Introduction to Chemical Engineering Thermodynamics, 3rd ed. 1975, p. 87; mixing rules of Prausnitz, ibid.), Tc_ij =
    (Tc_i Tc_j)^1/2 (1 - k_ij), Pc_ij from mean compressibilities and volumes. Non-polar or weakly polar vapours with
    P/Pc below about half of T/Tc; no association (carboxylic acids).
    k_ij : (n, n) or one number for all pairs.
    """

    def __init__(self, components: PureComponents, k_ij: ArrayLike = 0.0) -> None:
        Tc, Pc, Vc = components.critical_temperature, components.critical_pressure, components.critical_volume
        omega = components.acentric_factor
        Zc = Pc * Vc / (GAS_CONSTANT * Tc)
        k = pair_coefficients("k_ij", k_ij, len(Tc))
        self._critical_temperature = np.sqrt(Tc[:, None] * Tc) * (1.0 - k)
        volume = ((np.cbrt(Vc)[:, None] + np.cbrt(Vc)) / 2.0) ** 3
        # R Tc_ij/Pc_ij with Pc_ij = Zc_ij R Tc_ij/Vc_ij
        self._pure_temperature, self._pure_pressure = Tc, Pc
        self._size = 2.0 * volume / (Zc[:, None] + Zc)
        self._acentric = (omega[:, None] + omega) / 2.0

    def _second_virial(self, T: Array, order: int) -> Jet:
        reduced = temperature(T[..., None, None], order) * (1.0 / self._critical_temperature)
        simple = reduced ** -1.6 * -0.422 + 0.083
        correction = reduced ** -4.2 * -0.172 + 0.139
        jet: Jet = (simple + correction * self._acentric) * self._size
        return jet

    def ln_phi(self, T: Array, P: Array, y: Array, order: int = 0) -> Jet:
        """P/(R T) (2 sum_j y_j B_ij - B), with temperature derivatives, (..., n)."""
        T, P, y = common_state(T, P, y)
        B = self._second_virial(T, order)
        sums = (B @ y[..., None])[..., 0]
        mixture = (sums * y).sum(-1)
        jet: Jet = (sums * 2.0 - mixture[..., None]) * (P[..., None] / GAS_CONSTANT) / temperature(T[..., None], order)
        return jet

    def mole_number_derivatives(self, T: Array, P: Array, y: Array) -> Array:
        """2 P/(R T) (B_ij - sum_k y_k (B_ik + B_jk) + B), (..., n, n)."""
        T, P, y = common_state(T, P, y)
        B = self._second_virial(T, 0).value
        sums = (B @ y[..., None])[..., 0]
        mixture = (sums * y).sum(-1)[..., None, None]
        derivative: Array = (2.0 * P / (GAS_CONSTANT * T))[..., None, None] * (
            B - sums[..., :, None] - sums[..., None, :] + mixture)
        return derivative

    def compressibility(self, T: Array, P: Array, y: Array) -> Array:
        """1 + B P/(R T), (...).

        Warns `PropertyWarning` where P/Pc exceeds half of T/Tc (both of the mixture, mole-fraction means); raises
        `PropertyRangeError` where no volume above zero is left.
        """
        T, P, y = common_state(T, P, y)
        B = self._second_virial(T, 0).value
        mixture = ((B @ y[..., None])[..., 0] * y).sum(-1)
        result: Array = 1.0 + mixture * P / (GAS_CONSTANT * T)
        limit = 0.5 * T * (y @ self._pure_pressure) / (y @ self._pure_temperature)
        for wrong, what in ((result <= 0.0, "leaves no volume"), (P > limit, "is beyond its range")):
            if wrong.any():
                where = tuple(int(i) for i in np.argwhere(wrong)[0])
                message = (f"P{list(where) if where else ''} = {P[where]:.6g} Pa at {T[where]:.6g} K: the second "
                           f"virial coefficient {what} (about {limit[where]:.3g} Pa); use an equation of state")
                if what == "leaves no volume":
                    raise PropertyRangeError(message)
                warnings.warn(message, PropertyWarning, stacklevel=3)
        return result

    def describe(self) -> str:
        return "second virial coefficients, Pitzer & Curl with Abbott's constants"
