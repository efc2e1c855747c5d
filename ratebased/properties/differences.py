"""Derivatives of any property model: its own where it has them, batched central differences where it has not.

The whole batch is perturbed at once: one call of the model a variable, never a loop over the batch.
"""
from __future__ import annotations

from collections.abc import Callable

import numpy as np

from .protocol import Array, KDerivatives, Mask, PropertyModel

TEMPERATURE_STEP = 1e-4
"""K times T/300; K-values and enthalpies are smooth functions of T, so differences of this size lose eight digits
less than half of them to truncation and rounding together."""
MOLE_STEP = 1e-6


def k_value_derivatives(properties: PropertyModel, T: Array, P: Array, x: Array, y: Array) -> KDerivatives:
    """Logarithmic derivatives of K by temperature and by the mole numbers of both phases, any model.

    T (...) K, P (...) Pa, x and y (..., n). A model's own `k_value_derivatives` is called where it exists; else
    central differences stand in (relative error about 1e-8), one-sided for a component that is absent.
    """
    own = getattr(properties, "k_value_derivatives", None)
    if own is not None:
        derivatives: KDerivatives = own(T, P, x, y)
        return derivatives
    T, P, x, y = (np.asarray(value, float) for value in (T, P, x, y))
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    ordinary = condensable & volatile

    def ln_k(T: Array, x: Array, y: Array) -> Array:
        return np.log(np.where(ordinary, properties.k_value(T, P, x, y), 1.0))

    up, down = _around(properties, T)
    slope = (ln_k(up, x, y) - ln_k(down, x, y)) / (up - down)[..., None]
    liquid = _by_moles(lambda moles: ln_k(T, moles, y), x, condensable)
    vapor = _by_moles(lambda moles: ln_k(T, x, moles), y, volatile)
    return KDerivatives(slope, liquid, vapor)


def _around(properties: PropertyModel, T: Array) -> tuple[Array, Array]:
    """Temperatures above and below T to take a difference between, inside the range the model states."""
    T = np.asarray(T, float)
    step = TEMPERATURE_STEP * T / 300.0
    low, high = getattr(properties, "T_range", (0.0, np.inf))
    return np.minimum(T + step, high), np.maximum(T - step, low)


def _by_moles(function: Callable[[Array], Array], composition: Array, wanted: Mask) -> Array:
    n = composition.shape[-1]
    columns = []
    for j in range(n):
        unit = np.zeros(n)
        if not wanted[j]:
            columns.append(np.zeros(np.broadcast_shapes(composition.shape, function(composition).shape)))
            continue
        unit[j] = MOLE_STEP
        centred = composition[..., j:j + 1] > MOLE_STEP
        up = composition + unit
        down = np.where(centred, composition - unit, composition)
        span = np.where(centred, 2.0 * MOLE_STEP, MOLE_STEP)
        columns.append((function(up / up.sum(-1, keepdims=True))
                        - function(down / down.sum(-1, keepdims=True))) / span)
    return np.stack(columns, -1)


def vapor_heat_capacity(properties: PropertyModel, T: Array, P: Array, y: Array) -> Array:
    """Partial molar heat capacities of the vapour, dH_i/dT at constant composition, J/(mol K), (..., n)."""
    own = getattr(properties, "vapor_heat_capacity", None)
    if own is not None:
        return np.asarray(own(T, P, y))
    up, down = _around(properties, T)
    return (properties.vapor_enthalpy(up, P, y) - properties.vapor_enthalpy(down, P, y)) / (up - down)[..., None]


def liquid_heat_capacity(properties: PropertyModel, T: Array, P: Array, x: Array) -> Array:
    """Partial molar heat capacities of the liquid, dH_i/dT at constant composition, J/(mol K), (..., n)."""
    own = getattr(properties, "liquid_heat_capacity", None)
    if own is not None:
        return np.asarray(own(T, P, x))
    up, down = _around(properties, T)
    return (properties.liquid_enthalpy(up, P, x) - properties.liquid_enthalpy(down, P, x)) / (up - down)[..., None]


def vapor_thermodynamic_factor(properties: PropertyModel, T: Array, P: Array, y: Array) -> Array:
    """[Gamma] of the vapour, (..., n-1, n-1), last component eliminated; identity for a model that has none."""
    own = getattr(properties, "vapor_thermodynamic_factor", None)
    if own is not None:
        return np.asarray(own(T, P, y))
    y = np.asarray(y, float)
    n = y.shape[-1]
    return np.broadcast_to(np.eye(n - 1), (*y.shape[:-1], n - 1, n - 1)).copy()
