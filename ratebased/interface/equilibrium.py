"""Equilibrium at the interface: y_I,i = K_i(T_I, P, x_I, y_I) x_I,i, its derivatives, and the zero-flux temperature."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..properties.differences import k_value_derivatives
from .problem import InterfaceProblem

Array = NDArray[np.float64]

VAPOR_ROUNDS = 12
"""Rounds for K that depends on the vapour's own composition; the first one settles K that does not."""


def normalized(x: Array) -> Array:
    """Fractions for a property call: an iterate may be slightly off the simplex, the model never sees that."""
    x = np.maximum(x, 0.0)
    total = x.sum(-1, keepdims=True)
    return x / np.where(total > 0, total, 1.0)


@dataclass(frozen=True)
class Equilibrium:
    """Interface compositions as functions of u and T_I.

    x_I, y_I, K (..., n); dy_du (..., n, n), dy_dT (..., n): derivatives of y_I.
    """

    x_I: Array
    y_I: Array
    K: Array
    dy_du: Array
    dy_dT: Array


def equilibrium(problem: InterfaceProblem, T: Array, u: Array, y_guess: Array) -> Equilibrium:
    """Interface compositions from u (x_I,i, or y_I,i of a non-condensing component) and T_I.

    `y_guess` (..., n): the vapour composition K is first evaluated at; where K depends on it, Newton's method follows.
    """
    ordinary, condensable = problem.ordinary, problem.condensable
    n = problem.n
    x_I = np.where(condensable, u, 0.0)
    x_hat = normalized(x_I)
    x_sum = np.maximum(np.maximum(x_I, 0.0).sum(-1), 1e-12)
    gas = np.where(condensable, 0.0, u)
    y = np.array(np.where(problem.volatile, y_guess, 0.0))
    for _ in range(VAPOR_ROUNDS):
        y_sum = np.maximum(np.maximum(y, 0.0).sum(-1), 1e-12)
        y_hat = normalized(y)
        K = np.where(ordinary, problem.properties.k_value(T, problem.P, x_hat, y_hat), 0.0)
        slope = k_value_derivatives(problem.properties, T, problem.P, x_hat, y_hat)
        y_new = K * x_I + gas
        if not slope.vapor.any():
            return _assemble(problem, x_I, y_new, K, slope.temperature, slope.liquid, None, x_sum)
        inner = np.eye(n) - (np.where(ordinary, y_new, 0.0) / y_sum[..., None])[..., None] * slope.vapor
        step: Array = np.linalg.solve(inner, (y_new - y)[..., None])[..., 0]
        y += step
        if np.abs(step).max(initial=0.0) < 1e-9:          # quadratic: what is left is rounding
            break
    return _assemble(problem, x_I, y, K, slope.temperature, slope.liquid, inner, x_sum)


def _assemble(problem: InterfaceProblem, x_I: Array, y: Array, K: Array, by_T: Array, by_x: Array,
              inner: Array | None, x_sum: Array) -> Equilibrium:
    ordinary, condensable = problem.ordinary, problem.condensable
    n = problem.n
    passing = np.where(ordinary, y, 0.0)
    dy_dT: Array = passing * by_T
    dy_du: Array = (passing / x_sum[..., None])[..., None] * np.where(condensable, by_x, 0.0)
    diagonal = np.arange(n)
    dy_du[..., diagonal, diagonal] += np.where(condensable, K, 1.0)
    if inner is not None:
        solved = np.asarray(np.linalg.solve(inner, np.concatenate((dy_du, dy_dT[..., None]), axis=-1)), float)
        return Equilibrium(x_I, y, K, solved[..., :-1], solved[..., -1])
    return Equilibrium(x_I, y, K, dy_du, dy_dT)


def zero_flux_temperature(problem: InterfaceProblem, tolerance: float = 1e-9) -> Array:
    """Temperature at which the bulk liquid boils under the pressure that the non-condensing part of the vapour leaves.

    There a vapour y = K x exchanges nothing with the liquid. The temperature of the bulk liquid where no such
    temperature is found (a liquid without volatile components).
    """
    ordinary = problem.ordinary
    inert = np.where(problem.condensable, 0.0, problem.y).sum(-1)
    target = np.log(np.maximum(1.0 - inert, 1e-6))
    shape = np.broadcast_shapes(problem.x.shape[:-1], problem.T_L.shape, inert.shape, problem.P.shape)
    x, y = np.broadcast_to(problem.x, (*shape, problem.n)), np.broadcast_to(problem.y, (*shape, problem.n))
    T = np.array(np.broadcast_to(problem.T_L, shape))
    usable = (np.where(ordinary, x, 0.0).sum(-1) > 0) & np.ones(shape, bool)
    low, high = problem.limits
    for _ in range(60):
        K = problem.properties.k_value(T, problem.P, x, y)
        slope = k_value_derivatives(problem.properties, T, problem.P, x, y)
        parts = np.where(ordinary, K * x, 0.0)
        total = np.where(usable, parts.sum(-1), 1.0)
        rise = np.where(usable, (parts * slope.temperature).sum(-1) / total, 1.0)
        # Newton in 1/T, where the logarithm of a vapour pressure is nearly straight
        off = np.where(usable, np.log(total) - target, 0.0)
        reciprocal = 1.0 / T + off / (T * T * np.where(rise > 0, rise, 1.0))
        new = np.clip(1.0 / np.maximum(reciprocal, 1e-6), 0.7 * T, 1.4 * T)
        new = np.clip(np.where(usable & (rise > 0), new, T), low, high)
        moved = np.abs(new - T).max(initial=0.0)
        T = np.asarray(new)
        if moved < tolerance:
            break
    return T
