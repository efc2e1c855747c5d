"""A tray with its leaving liquid given: the froth at the outlet, then the mixing of the liquid along its path."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..equipment.protocol import Array
from ..errors import ConvergenceError
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import PropertyModel
from .mixing import LiquidMixing, mixed_tray
from .point import FrothPoint, LocalCoefficients, PointMethod, PointResult, exponential_midpoint


@dataclass(frozen=True)
class TrayResult:
    """Vapour leaving a tray, mixed, batched over trays.

    V mol/s, y (..., n), T_V K: leaving. transferred: to the liquid, mol/s, (..., n). energy: to the liquid, W. area m2.
    flux: mean over the area, mol/(m2 s), (..., n). point: the froth over the leaving liquid.
    """

    V: Array
    y: Array
    T_V: Array
    transferred: Array
    energy: Array
    flux: Array
    point: PointResult


def tray_from_leaving_liquid(point: FrothPoint, liquid_flow: Array, properties: PropertyModel, mixing: LiquidMixing, *,
                             method: PointMethod = exponential_midpoint,
                             local: LocalCoefficients | None = None) -> TrayResult:
    """What leaves a tray whose leaving liquid (point.x, point.T_L, `liquid_flow` mol/s before draws) is known.

    The point over the leaving liquid by `method`; upstream pools by the linearised response of that point to the
    liquid's flows and temperature (`mixing.mixed_tray`). With a well-mixed liquid the point is the answer.
    """
    n = point.x.shape[-1]
    froth = method(point, properties, local=local)
    L = liquid_flow[..., None]
    l = L * point.x
    HL = properties.liquid_enthalpy(point.T_L, point.P, point.x)
    cp_L = liquid_heat_capacity(properties, point.T_L, point.P, point.x)
    heat = (l * cp_L).sum(-1)
    warm = heat > 0
    safe = np.where(warm, heat, 1.0)
    sensible = froth.energy - (froth.transferred * HL).sum(-1)
    transfer = np.concatenate((froth.transferred, np.where(warm, sensible / safe, 0.0)[..., None]), -1)

    # Response of the outputs to w = (l, T_L): by way of (x, T_L), dx_i/dl_j = (delta_ij - x_i)/L.
    S = froth.sensitivity_liquid
    by_x, by_T = S[..., :n], S[..., n:]
    by_l = (by_x - np.einsum("...ij,...j->...i", by_x, point.x)[..., None]) / L[..., None]
    out = np.concatenate((by_l, by_T), -1)
    g = froth.V[..., None] * froth.y
    HV = properties.vapor_enthalpy(froth.T_V, point.P, froth.y)
    cp_V = vapor_heat_capacity(properties, froth.T_V, point.P, froth.y)
    d_transferred = -out[..., :n, :]
    d_energy = -(HV[..., None, :] @ out[..., :n, :])[..., 0, :] - ((g * cp_V).sum(-1)[..., None] * out[..., n, :])
    d_sensible = d_energy - (HL[..., None, :] @ d_transferred)[..., 0, :]
    d_sensible[..., n] -= (froth.transferred * cp_L).sum(-1)
    slope = np.concatenate((d_transferred, np.where(warm[..., None], d_sensible / safe[..., None], 0.0)[..., None, :]),
                           -2)
    inert = ~(properties.condensable & properties.volatile)
    slope[..., :n, :][..., inert, :] = 0.0
    slope[..., :, :n][..., :, inert] = 0.0

    mean, departure = mixed_tray(mixing, transfer, slope)
    transferred = np.where(inert, froth.transferred, mean[..., :n])
    energy = froth.energy + np.einsum("...i,...i->...", d_energy, departure)
    g_out = point.V_in[..., None] * point.y_in - transferred
    if (g_out < 0).any():
        where = tuple(int(i) for i in np.argwhere(g_out < 0)[0])
        raise ConvergenceError(f"tray {where[:-1]}: the mixing correction would take more of "
                               f"{properties.names[where[-1]]} than enters with the vapour")
    V = g_out.sum(-1)
    H_in = (point.V_in[..., None] * point.y_in * properties.vapor_enthalpy(point.T_V_in, point.P, point.y_in)).sum(-1)
    y = g_out / V[..., None]
    T_V = vapor_temperature(properties, point.P, g_out, H_in - energy, froth.T_V)
    area = point.coefficients.area
    return TrayResult(V, y, T_V, transferred, energy, transferred / area[..., None], froth)


def vapor_temperature(properties: PropertyModel, P: Array, g: Array, enthalpy: Array, T: Array) -> Array:
    """Temperature at which the vapour g (component flows, mol/s) carries `enthalpy`, W; T where it has no capacity."""
    T = np.array(T, float)
    y = g / g.sum(-1, keepdims=True)
    for _ in range(30):
        heat = (g * vapor_heat_capacity(properties, T, P, y)).sum(-1)
        gap = enthalpy - (g * properties.vapor_enthalpy(T, P, y)).sum(-1)
        step = np.where(heat > 0, gap / np.where(heat > 0, heat, 1.0), 0.0)
        T = T + step
        if (np.abs(step) <= 1e-11 * T).all():
            return T
    raise ConvergenceError("temperature of a vapour from its enthalpy: no convergence", best=T, residual=step)
