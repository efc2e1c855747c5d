"""Pair diffusivities of both phases from the correlations of the package `correlations`."""
from __future__ import annotations

import inspect
from typing import Protocol

import numpy as np

from correlations.gas_diffusivity import fuller
from correlations.liquid_diffusivity import hayduk_minhas, hayduk_minhas_aqueous, wilke_chang
from correlations.mixture_diffusivity import kooijman_taylor

from .protocol import Array, Mask

REFERENCE_TEMPERATURE = 300.0
REFERENCE_PRESSURE = 1e5


class GasDiffusivity(Protocol):
    """Pair diffusivities of a gas mixture, m2/s, (..., n, n), from T (...) K and P (...) Pa."""

    def __call__(self, T: Array, P: Array) -> Array: ...


class DiluteDiffusivity(Protocol):
    """Diffusivity of i at infinite dilution in j, m2/s, (..., n, n), from T (...) K and viscosities (..., n) Pa s."""

    def __call__(self, T: Array, viscosity: Array) -> Array: ...


class MixingClosure(Protocol):
    """Pair diffusivities of a liquid mixture from x (..., n) and the dilute diffusivities (..., n, n)."""

    def __call__(self, mole_fraction: Array, dilute_diffusivity: Array) -> Array: ...


class Fuller:
    """Fuller, Schettler & Giddings (1966, volumes of 1969) for every pair.

    molar_mass kg/mol, volume (diffusion volume) m3/mol, each (n,).
    """

    def __init__(self, molar_mass: Array, volume: Array) -> None:
        self._pairs = molar_mass[:, None], molar_mass[None, :], volume[:, None], volume[None, :]
        self._reference = fuller.silent(REFERENCE_TEMPERATURE, REFERENCE_PRESSURE, *self._pairs)
        self._limits = [(limit.low or 0.0, limit.high or np.inf) for limit in (
            fuller.record.validity.ranges["temperature"], fuller.record.validity.ranges["pressure"])
            if limit is not None]

    def __call__(self, T: Array, P: Array) -> Array:
        """Pair diffusivities, m2/s, (..., n, n); the correlation's own warning outside its range."""
        T, P = np.asarray(T, float), np.asarray(P, float)
        if any(value.size and not (low <= value.min() and value.max() <= high)
               for value, (low, high) in zip((T, P), self._limits)):
            return fuller(T[..., None, None], P[..., None, None], *self._pairs)
        # Inside it the pairs and the state separate, T^1.75/P.
        scale = (T / REFERENCE_TEMPERATURE) ** 1.75 * (REFERENCE_PRESSURE / P)
        result: Array = scale[..., None, None] * self._reference
        return result


class WilkeChang:
    """Wilke & Chang (1955) for every pair of solute i and solvent j.

    molar_mass kg/mol, volume m3/mol at the normal boiling point, association_factor (-), each (n,).
    """

    def __init__(self, molar_mass: Array, volume: Array, association_factor: Array) -> None:
        # The correlation is linear in T/viscosity.
        self._per_fluidity = wilke_chang.silent(1.0, 1.0, molar_mass[None, :], volume[:, None],
                                                association_factor[None, :])

    def __call__(self, T: Array, viscosity: Array) -> Array:
        """Dilute diffusivities, m2/s, (..., n, n)."""
        result: Array = self._per_fluidity * (np.asarray(T, float)[..., None] / viscosity)[..., None, :]
        return result


class HaydukMinhas:
    """Hayduk & Minhas (1982) for every pair: their aqueous form where the solvent is water, else the general one.

    solute_volume and solvent_volume m3/mol, surface_tension N/m, at the normal boiling point; water (mask); each (n,).
    An organic acid as a solute counts as a dimer, except in water: give twice its volume in `solute_volume`, its own in
    `solvent_volume`.
    """

    def __init__(self, solute_volume: Array, solvent_volume: Array, surface_tension: Array, water: Mask) -> None:
        self._volumes = solute_volume[:, None], solvent_volume[None, :]
        self._own_volume = solvent_volume[:, None]
        self._tensions = surface_tension[:, None], surface_tension[None, :]
        self._water = water

    def __call__(self, T: Array, viscosity: Array) -> Array:
        """Dilute diffusivities, m2/s, (..., n, n)."""
        T = np.asarray(T)[..., None, None]
        general = hayduk_minhas(T, viscosity[..., None, :], *self._volumes, *self._tensions)
        if not self._water.any():
            return general
        aqueous = hayduk_minhas_aqueous(T, viscosity[..., None, :], self._own_volume)
        return np.where(self._water, aqueous, general)


class LiquidDiffusivity:
    """Maxwell-Stefan pair diffusivities of a liquid: dilute diffusivities and a rule for their mixture.

    dilute : `DiluteDiffusivity`; closure : `MixingClosure`, by default the generalised Vignes equation closed after
    Kooijman & Taylor (1991). solvent : mask (n,) of the components that exist as liquids of their own. A dissolved gas
    is no solvent: what diffuses "in" it takes the diffusivity of the gas in that component, and two gases their mean
    over the solvents; both weigh only as much as the mole fraction of the gas.
    """

    def __init__(self, dilute: DiluteDiffusivity, solvent: Mask, closure: MixingClosure = kooijman_taylor) -> None:
        self.dilute = dilute
        # the formula behind its record: the arguments come from this room, checking them again costs as much as it
        self.closure = inspect.unwrap(closure)
        self._solvent = solvent
        self._all_solvents = bool(solvent.all())

    def __call__(self, T: Array, x: Array, viscosity: Array) -> Array:
        """Pair diffusivities, m2/s, (..., n, n); x (..., n), viscosity (..., n) of the pure liquids."""
        dilute = self.dilute(T, viscosity)
        if not self._all_solvents:
            logs = np.log(dilute)
            mean = logs[..., self._solvent].mean(-1, keepdims=True)
            borrowed = np.where(self._solvent[:, None], np.swapaxes(logs, -1, -2), mean)
            dilute = np.exp(np.where(self._solvent, logs, borrowed))
        return self.closure(x, dilute)
