"""A tray from its two entering streams: pools in series with the interface model at every height.

Each pool depends on the one upstream alone, so a tray of p pools is p small Newton problems in w = (l_1..l_n, T_L).
"""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..equipment.protocol import Array
from ..errors import ConvergenceError
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import PropertyModel
from .point import FrothPoint, PointMethod, PointResult, exponential_midpoint
from .tray import vapor_temperature

MAX_ITERATIONS = 40
TOLERANCE = 1e-11
ROUGH = 1e-7
"""Step at which the iteration with the fast Jacobian stops: a step leaves less than a thousandth of itself."""


@dataclass(frozen=True)
class PoolsResult:
    """A tray of pools in series.

    V, y, T_V: the mixed vapour that leaves. L, x, T_L: the liquid of each pool in the order of its path, the last one
    leaves, (p, ...) and (p, ..., n). transferred: to the liquid, mol/s, (..., n).
    """

    V: Array
    y: Array
    T_V: Array
    L: Array
    x: Array
    T_L: Array
    transferred: Array


def pools_in_series(entering: FrothPoint, L_in: Array, properties: PropertyModel, count: int, *,
                    method: PointMethod = exponential_midpoint) -> PoolsResult:
    """What leaves a tray of `count` equal pools, each mixed over its height, vapour in plug flow through each.

    entering: the vapour, coefficients and area of the whole tray; its x and T_L are the liquid that ENTERS, L_in mol/s.
    Raises `ConvergenceError` naming the pool.
    """
    l_in = L_in[..., None] * entering.x
    l, T = l_in, np.array(entering.T_L, float)
    liquids = []
    guess_T = entering.T_V_in
    for pool in range(count):
        l, T, froth = _one_pool(entering, l, T, properties, count, method, pool)
        liquids.append((l.sum(-1), l / l.sum(-1, keepdims=True), T))
        guess_T = froth.T_V
    # What the liquid gained is what it took, to the last Newton step.
    totals = l - l_in
    enthalpies = (properties.liquid_enthalpy(t, entering.P, z) for t, z in (
        (T, liquids[-1][1]), (entering.T_L, entering.x)))
    gained = (l * next(enthalpies)).sum(-1) - (l_in * next(enthalpies)).sum(-1)
    g = entering.V_in[..., None] * entering.y_in - totals
    H_in = (entering.V_in[..., None] * entering.y_in
            * properties.vapor_enthalpy(entering.T_V_in, entering.P, entering.y_in)).sum(-1)
    T_V = vapor_temperature(properties, entering.P, g, H_in - gained, guess_T)
    V = g.sum(-1)
    L, x, T_L = (np.stack(part) for part in zip(*liquids))
    return PoolsResult(V, g / V[..., None], T_V, L, x, T_L, totals)


def _one_pool(entering: FrothPoint, l_in: Array, T_in: Array, properties: PropertyModel, count: int,
              method: PointMethod, pool: int) -> tuple[Array, Array, PointResult]:
    """Newton by the fast step first; then, from its answer, by `method` where that is another one."""
    fast = method is exponential_midpoint
    l, T, froth = _newton(entering, l_in, T_in, l_in, T_in, properties, count, exponential_midpoint, pool,
                          TOLERANCE if fast else ROUGH)
    if fast:
        return l, T, froth
    return _newton(entering, l_in, T_in, l, T, properties, count, method, pool, ROUGH)


def _newton(entering: FrothPoint, l_in: Array, T_in: Array, l: Array, T: Array, properties: PropertyModel, count: int,
            method: PointMethod, pool: int, tolerance: float) -> tuple[Array, Array, PointResult]:
    n = l_in.shape[-1]
    P = entering.P
    x_in = l_in / l_in.sum(-1, keepdims=True)
    H_in = (l_in * properties.liquid_enthalpy(T_in, P, x_in)).sum(-1)
    inert = ~(properties.condensable & properties.volatile)
    for _ in range(MAX_ITERATIONS):
        L = l.sum(-1)
        x = l / L[..., None]
        froth = method(replace(entering, x=x, T_L=T), properties)
        HL = properties.liquid_enthalpy(T, P, x)
        heat = (l * liquid_heat_capacity(properties, T, P, x)).sum(-1)
        balance = l - l_in - froth.transferred / count
        gap = (l * HL).sum(-1) - H_in - froth.energy / count
        residual = np.concatenate((balance, gap[..., None]), -1)

        S = froth.sensitivity_liquid
        by_x, by_T = S[..., :n], S[..., n:]
        by_l = (by_x - np.einsum("...ij,...j->...i", by_x, x)[..., None]) / L[..., None, None]
        out = np.concatenate((by_l, by_T), -1)
        g = froth.V[..., None] * froth.y
        HV = properties.vapor_enthalpy(froth.T_V, P, froth.y)
        cp = (g * vapor_heat_capacity(properties, froth.T_V, P, froth.y)).sum(-1)
        given = -(HV[..., None, :] @ out[..., :n, :])[..., 0, :] - cp[..., None] * out[..., n, :]
        J = np.zeros((*L.shape, n + 1, n + 1))
        J[..., :n, :] = out[..., :n, :] / count
        J[..., :n, :][..., inert, :] = 0.0
        J[..., np.arange(n), np.arange(n)] += 1.0
        J[..., n, :n] = HL
        J[..., n, n] = heat
        J[..., n, :] -= given / count
        step = -np.linalg.solve(J, residual[..., None])[..., 0]
        shrink = np.minimum(1.0, 0.7 / np.maximum(1e-300, (-step[..., :n] / np.maximum(l, 1e-300)).max(-1)))
        shrink = np.minimum(shrink, 20.0 / np.maximum(np.abs(step[..., n]), 1e-300))
        l, T = l + shrink[..., None] * step[..., :n], T + shrink * step[..., n]
        size = np.maximum(np.abs(step[..., :n]).max(-1) / L, np.abs(step[..., n]) / T)
        if (size < tolerance).all():
            return l, T, froth
    raise ConvergenceError(f"pool {pool + 1} of {count}: no convergence in {MAX_ITERATIONS} steps", best=(l, T),
                           residual=size, failed=size >= tolerance)
