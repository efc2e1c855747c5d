"""Slopes of [Gamma] and of the enthalpies by composition: differences of the whole batch, each kind in one call.

Composition derivatives are by mole numbers at one mole in all: d f/d n_j = f((x + h e_j)/(1 + h)) differenced at h = 0
by the forward formula of second order. They never leave the simplex, and the difference of two columns is the
derivative along e_j - e_k.
"""
from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from ..properties.protocol import Mask

Array = NDArray[np.float64]
Property = Callable[[Array, Array, Array], Array]
OwnDerivatives = Callable[[Array, Array, Array], Array | None]

MOLE_STEP = 2e-5
TEMPERATURE_STEP = 0.02
"""K, step of central differences by temperature."""


def _stack(composition: Array, mask: Mask) -> tuple[list[int], list[Array]]:
    """The components moved, and the compositions after one and two steps of moles of each joined one mole."""
    components = [int(j) for j in np.flatnonzero(mask)]
    moved = []
    for j in components:
        for step in (MOLE_STEP, 2.0 * MOLE_STEP):
            new = composition / (1.0 + step)
            new[..., j] += step / (1.0 + step)
            moved.append(new)
    return components, moved


def _by_moles(base: Array, values: Array, components: list[int], n: int) -> Array:
    """Derivatives by mole numbers, component moved on the leading axis; zero for components not moved."""
    slopes = np.zeros((n, *base.shape))
    for k, j in enumerate(components):
        slopes[j] = (-3.0 * base + 4.0 * values[2 * k] - values[2 * k + 1]) / (2.0 * MOLE_STEP)
    return slopes


def factor_and_slopes(factor: Property, T: Array, P: Array, composition: Array, mask: Mask,
                      limits: tuple[float, float]) -> tuple[Array, Array, Array]:
    """[Gamma] (..., n-1, n-1), its derivatives along e_j - e_n (..., n-1, n-1, n-1) (j first), and by temperature."""
    T, composition = _same_batch(T, composition)
    n = composition.shape[-1]
    up, down = np.minimum(T + TEMPERATURE_STEP, limits[1]), np.maximum(T - TEMPERATURE_STEP, limits[0])
    components, moved = _stack(composition, mask)
    temperatures = np.stack([T, up, down] + [T] * len(moved))
    values = np.asarray(factor(temperatures, P, np.stack([composition] * 3 + moved)))
    by_mole = _by_moles(values[0], values[3:], components, n)
    by_temperature = (values[1] - values[2]) / (up - down)[..., None, None]
    return values[0], np.moveaxis(by_mole[:-1] - by_mole[-1], 0, -3), by_temperature


def enthalpy_by_composition(enthalpy: Property, own: OwnDerivatives | None, T: Array, P: Array, composition: Array,
                            mask: Mask) -> Array | None:
    """dH_i/dc_j along e_j - e_n, J/mol, (..., n, n), last column zero; T may be a stack (k, ...).

    own: the model's method for the mole-number derivatives, where it has one; else differences. None where no entry
    depends on composition.
    """
    T, composition = _same_batch(T, composition)
    n = composition.shape[-1]
    if own is not None:
        given = own(T, P, composition)
        if given is None or not given.any():
            return None
        by_mole = np.where(mask, given, 0.0)
        return np.asarray(by_mole - by_mole[..., -1:])
    components, moved = _stack(composition, mask)
    H = np.asarray(enthalpy(np.stack([T] * (1 + len(moved))), P, np.stack([composition, *moved])))
    if not (H[1:] != H[0]).any():
        return None
    by_mole = np.moveaxis(_by_moles(H[0], H[1:], components, n), 0, -1)
    return np.asarray(by_mole - by_mole[..., -1:])


def _same_batch(T: Array, composition: Array) -> tuple[Array, Array]:
    shape = np.broadcast_shapes(np.shape(T), composition.shape[:-1])
    return np.broadcast_to(T, shape), np.broadcast_to(composition, (*shape, composition.shape[-1]))
