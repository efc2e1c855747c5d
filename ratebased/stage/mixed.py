"""A tray with both phases perfectly mixed, from its two entering streams: every bulk state is a leaving one."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..equipment.protocol import Array, TransferCoefficients
from ..errors import ConvergenceError
from ..interface import Bulk, InterfaceFlux, interface_flux
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import PropertyModel

MAX_ITERATIONS = 60
TOLERANCE = 1e-12
LARGEST_TEMPERATURE_STEP = 10.0


@dataclass(frozen=True)
class MixedTrayResult:
    """Leaving streams of mixed trays: g, l component flows, mol/s, (..., n); T_V, T_L K; the interface between them."""

    g: Array
    T_V: Array
    l: Array
    T_L: Array
    interface: InterfaceFlux

    @property
    def y(self) -> Array:
        """Mole fractions of the leaving vapour, (..., n)."""
        return np.asarray(self.g / self.g.sum(-1, keepdims=True))

    @property
    def x(self) -> Array:
        """Mole fractions of the leaving liquid, (..., n)."""
        return np.asarray(self.l / self.l.sum(-1, keepdims=True))


def mixed_tray_from_feeds(g_in: Array, T_V_in: Array, l_in: Array, T_L_in: Array, P: Array,
                          coefficients: TransferCoefficients, c_vapor: Array, c_liquid: Array,
                          properties: PropertyModel) -> MixedTrayResult:
    """Solve g_in - g = l - l_in = area N and both energy balances, interfaces at the leaving states, batched.

    g_in, l_in: component flows, mol/s, (..., n). Newton with the interface's own derivatives. Raises
    `ConvergenceError` with the mask of the trays that failed.
    """
    n = g_in.shape[-1]
    c = coefficients
    area = c.area[..., None]
    g, T_V, l, T_L = (np.array(value, float) for value in (g_in, T_V_in, l_in, T_L_in))
    HV_in = (g_in * properties.vapor_enthalpy(T_V_in, P, g_in / g_in.sum(-1, keepdims=True))).sum(-1)
    HL_in = (l_in * properties.liquid_enthalpy(T_L_in, P, l_in / l_in.sum(-1, keepdims=True))).sum(-1)
    answer: InterfaceFlux | None = None
    for _ in range(MAX_ITERATIONS):
        G, L = g.sum(-1, keepdims=True), l.sum(-1, keepdims=True)
        y, x = g / G, l / L
        answer = interface_flux(Bulk(y, T_V, c.kappa_vapor, c.h_vapor, c_vapor),
                                Bulk(x, T_L, c.kappa_liquid, c.h_liquid, c_liquid), properties, P, start=answer,
                                derivatives=True)
        d = answer.derivatives
        if d is None:
            raise ConvergenceError("the interface gave no derivatives")
        HV, HL = properties.vapor_enthalpy(T_V, P, y), properties.liquid_enthalpy(T_L, P, x)
        cV = (g * vapor_heat_capacity(properties, T_V, P, y)).sum(-1)
        cL = (l * liquid_heat_capacity(properties, T_L, P, x)).sum(-1)
        flow = area * answer.N
        energy = c.area * answer.energy_flux
        F = np.concatenate((g - g_in + flow, ((g * HV).sum(-1) - HV_in + energy)[..., None],
                            l - l_in - flow, ((l * HL).sum(-1) - HL_in - energy)[..., None]), -1)
        by = np.concatenate((d.dN, d.dE[..., None, :]), -2)
        by = np.concatenate((by[..., :n] / G[..., None], by[..., n:n + 1], by[..., n + 1:2 * n + 1] / L[..., None],
                             by[..., 2 * n + 1:]), -1) * area[..., None]
        J = np.concatenate((by, -by), -2)
        rows = np.arange(n)
        J[..., rows, rows] += 1.0
        J[..., n, :n] += HV
        J[..., n, n] += cV
        J[..., n + 1 + rows, n + 1 + rows] += 1.0
        J[..., 2 * n + 1, n + 1:2 * n + 1] += HL
        J[..., 2 * n + 1, 2 * n + 1] += cL
        step = -np.linalg.solve(J, F[..., None])[..., 0]
        down = np.maximum((-step[..., :n] / np.maximum(g, 1e-300)).max(-1),
                          (-step[..., n + 1:2 * n + 1] / np.maximum(l, 1e-300)).max(-1))
        warm = np.maximum(np.abs(step[..., n]), np.abs(step[..., -1]))
        t = np.minimum(1.0, np.minimum(0.7 / np.maximum(down, 1e-300),
                                       LARGEST_TEMPERATURE_STEP / np.maximum(warm, 1e-300)))
        step = t[..., None] * step
        g, T_V = g + step[..., :n], T_V + step[..., n]
        l, T_L = l + step[..., n + 1:2 * n + 1], T_L + step[..., -1]
        size = np.maximum(np.maximum(np.abs(step[..., :n]).max(-1) / G[..., 0],
                                     np.abs(step[..., n + 1:2 * n + 1]).max(-1) / L[..., 0]), warm / T_V)
        if (size < TOLERANCE).all():
            return MixedTrayResult(g, T_V, l, T_L, answer)
    raise ConvergenceError(f"mixed trays: no convergence in {MAX_ITERATIONS} steps", best=(g, T_V, l, T_L),
                           residual=size, failed=size >= TOLERANCE)
