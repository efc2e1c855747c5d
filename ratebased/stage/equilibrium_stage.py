"""An adiabatic equilibrium stage of two entering streams: what Hausen's efficiency measures against."""
from __future__ import annotations

import numpy as np

from ..equipment.protocol import Array
from ..errors import ConvergenceError
from ..properties.differences import k_value_derivatives, liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import PropertyModel

MAX_ITERATIONS = 100
TOLERANCE = 1e-11
LARGEST_STEP = 10.0


def equilibrium_stage(g_in: Array, T_V_in: Array, l_in: Array, T_L_in: Array, P: Array,
                      properties: PropertyModel) -> tuple[Array, Array, Array]:
    """(g, l, T) of streams that leave in equilibrium, component flows mol/s (..., n) and K.

    g_in, l_in: component flows that enter as vapour and as liquid. Newton on (g, l, T) with the derivatives of K; both
    phases must remain. Raises `ConvergenceError` with the mask of the stages that failed.
    """
    n = g_in.shape[-1]
    ordinary = properties.condensable & properties.volatile
    z = g_in + l_in
    g = np.where(ordinary, 0.5 * z, np.where(properties.volatile, z, 0.0))
    l = z - g
    T = 0.5 * (T_V_in + T_L_in)
    H_in = ((g_in * properties.vapor_enthalpy(T_V_in, P, g_in / g_in.sum(-1, keepdims=True))).sum(-1)
            + (l_in * properties.liquid_enthalpy(T_L_in, P, l_in / l_in.sum(-1, keepdims=True))).sum(-1))
    unit = np.eye(n)
    for _ in range(MAX_ITERATIONS):
        V, L = g.sum(-1, keepdims=True), l.sum(-1, keepdims=True)
        y, x = g / V, l / L
        K = properties.k_value(T, P, x, y)
        d = k_value_derivatives(properties, T, P, x, y)
        HV, HL = properties.vapor_enthalpy(T, P, y), properties.liquid_enthalpy(T, P, x)
        heat = ((g * vapor_heat_capacity(properties, T, P, y)).sum(-1)
                + (l * liquid_heat_capacity(properties, T, P, x)).sum(-1))
        scale = 1.0 / np.maximum(1.0, K)
        F = np.concatenate((np.where(ordinary, scale * (y - K * x), np.where(properties.volatile, l, g) / (V + L)),
                            ((g * HV + l * HL).sum(-1) - H_in)[..., None]), -1)
        # dy_i/dg_j = (delta_ij - y_i)/V and l = z - g, so dx_i/dg_j = -(delta_ij - x_i)/L.
        by_y = unit - y[..., None] - (K * x)[..., None] * d.vapor
        by_x = K[..., None] * (unit - x[..., None] + x[..., None] * d.liquid)
        J = np.zeros((*T.shape, n + 1, n + 1))
        J[..., :n, :n] = scale[..., None] * (by_y / V[..., None] + by_x / L[..., None])
        J[..., :n, n] = -scale * K * x * d.temperature
        masked = ~ordinary
        J[..., :n, :][..., masked, :] = 0.0
        rows = np.flatnonzero(masked)
        J[..., rows, rows] = np.where(properties.volatile, -1.0, 1.0)[rows] / (V + L)
        J[..., n, :n] = HV - HL
        J[..., n, n] = heat
        step = -np.linalg.solve(J, F[..., None])[..., 0]
        down, up = -step[..., :n] / np.maximum(g, 1e-300), step[..., :n] / np.maximum(l, 1e-300)
        most = np.maximum(np.where(ordinary, np.maximum(down, up), 0.0).max(-1), 1e-300)
        t = np.minimum(1.0, np.minimum(0.8 / most, LARGEST_STEP / np.maximum(np.abs(step[..., n]), 1e-300)))
        g = g + t[..., None] * step[..., :n]
        l = z - g
        T = T + t * step[..., n]
        size = np.maximum(np.abs(step[..., :n]).max(-1) / (V + L)[..., 0], np.abs(step[..., n]) / T)
        if (size < TOLERANCE).all():
            return g, l, T
    raise ConvergenceError(f"equilibrium stage: no convergence in {MAX_ITERATIONS} steps (one phase only?)",
                           best=(g, l, T), residual=size, failed=size >= TOLERANCE)
