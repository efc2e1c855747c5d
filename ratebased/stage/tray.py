"""A tray with its leaving liquid given: the froth at the outlet, then the mixing of the liquid along its path."""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from ..equipment.protocol import Array
from ..errors import ConvergenceError
from ..interface.problem import entries
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Mask, PropertyModel
from ..properties.saturation import bubble_point
from .bubble_line import bubble_line
from .march import ROUNDING, march_upstream, taken
from .mixing import LiquidMixing, mixed_tray
from .point import FrothPoint, LocalCoefficients, PointMethod, PointResult, exponential_midpoint

Property = Callable[[Array, Array, Array], Array]

STRETCHES = 3
"""Parts of the liquid's path that are linearised one after the other: within about 1 % of the march pool by pool."""


@dataclass(frozen=True)
class TrayResult:
    """Vapour leaving a tray, mixed, batched over trays.

    V mol/s, y (..., n), T_V K: leaving. transferred: to the liquid, mol/s, (..., n). energy: to the liquid, W. area m2.
    flux: mean over the area, mol/(m2 s), (..., n). point: the froth over the leaving liquid. unmixed: where no tray has
    this leaving liquid (its liquid would hold less than nothing of a component upstream): the froth over the leaving
    liquid stands for all of it. interface_residual, energy_residual: worst of the interfaces solved.
    """

    V: Array
    y: Array
    T_V: Array
    transferred: Array
    energy: Array
    flux: Array
    point: PointResult
    unmixed: Mask
    interface_residual: Array
    energy_residual: Array


def tray_from_leaving_liquid(point: FrothPoint, liquid_flow: Array, properties: PropertyModel, mixing: LiquidMixing, *,
                             method: PointMethod = exponential_midpoint, local: LocalCoefficients | None = None,
                             stretches: int = STRETCHES) -> TrayResult:
    """What leaves a tray whose leaving liquid (point.x, point.T_L, `liquid_flow` mol/s before draws) is known.

    One batch axis. The froth over the leaving liquid by `method`; then upstream in at most `stretches` stretches, each
    by the linearised response of the froth at its outlet (`mixing.mixed_tray`), the liquid on its bubble line; the few
    trays this carries out of bounds are marched pool by pool (`march_upstream`). A well-mixed tray is its point.
    """
    froth = method(point, properties, local=local)
    transferred, energy = np.zeros_like(froth.transferred), np.zeros_like(froth.energy)
    lost = np.zeros(froth.energy.shape, bool)
    here, l, at = froth, liquid_flow[:, None] * point.x, point
    worst = np.zeros((2, *lost.shape))
    shares = _shares(mixing, lost.shape, stretches)
    for k, share in enumerate(shares):
        if k:
            at = replace(_upstream(point, at, l, properties), start=here.middle)
            here = exponential_midpoint(at, properties, local=local)
        way = mixing.stretch(share) or mixing
        given, heat = _stretch(here, at, l.sum(-1), properties, way, share)
        steep = ~(np.isfinite(given).all(-1) & np.isfinite(heat))
        lost |= steep
        given, heat = np.where(steep[:, None], 0.0, given), np.where(steep, 0.0, heat)
        transferred, energy = transferred + given, energy + heat
        worst = np.maximum(worst, np.stack((here.interface_residual, here.energy_residual)))
        upstream = l - given
        lost |= (upstream < -ROUNDING * liquid_flow[:, None]).any(-1)
        l = np.where(lost[:, None], liquid_flow[:, None] * point.x, np.maximum(upstream, 0.0))
    lost |= (point.V_in[:, None] * point.y_in - transferred < -ROUNDING * point.V_in[:, None]).any(-1)
    unmixed = np.zeros_like(lost)
    if lost.any():
        index = np.flatnonzero(lost)
        march = march_upstream(taken(point, index), froth, index, liquid_flow[index], entries(properties, index),
                               np.broadcast_to(mixing.pools, lost.shape)[index])
        unmixed[index] = ~march.feasible
        transferred[index] = np.where(march.feasible[:, None], march.transferred, froth.transferred[index])
        energy[index] = np.where(march.feasible, march.energy, froth.energy[index])
    g_out = np.maximum(point.V_in[:, None] * point.y_in - transferred, 0.0)  # below zero by rounding only
    V = g_out.sum(-1)
    H_in = (point.V_in[:, None] * point.y_in * properties.vapor_enthalpy(point.T_V_in, point.P, point.y_in)).sum(-1)
    T_V = vapor_temperature(properties, point.P, g_out, H_in - energy, froth.T_V)
    return TrayResult(V, g_out / V[:, None], T_V, transferred, energy, transferred / point.coefficients.area[:, None],
                      froth, unmixed, worst[0], worst[1])


def _shares(mixing: LiquidMixing, batch: tuple[int, ...], stretches: int) -> list[Array]:
    """Shares of the path that are linearised one after the other, each at least a pool long; zero where a tray has
    fewer of them than the others."""
    whole = np.ones(batch)
    if mixing.stretch(whole) is None:
        return [whole]
    parts = np.clip(np.floor(np.broadcast_to(mixing.pools, batch)), 1, stretches)
    return [np.where(k < parts, 1.0 / parts, 0.0) for k in range(int(parts.max(initial=1)))]


def _stretch(froth: PointResult, point: FrothPoint, L: Array, properties: PropertyModel, mixing: LiquidMixing,
             share: Array) -> tuple[Array, Array]:
    """Component flows and enthalpy a stretch of the tray gives its liquid, from the froth at the stretch's outlet."""
    n = point.x.shape[-1]
    # Response to the liquid's flows l by way of (x, T_L), dx_i/dl_j = (delta_ij - x_i)/L.
    by_l = (froth.sensitivity_liquid[..., :n] + froth.sensitivity_liquid[..., n:]
            * _temperature_slope(point, properties)[..., None, :])
    out = (by_l - np.einsum("...ij,...j->...i", by_l, point.x)[..., None]) / L[:, None, None]
    g = froth.V[:, None] * froth.y
    HV = properties.vapor_enthalpy(froth.T_V, point.P, froth.y)
    cp = (g * vapor_heat_capacity(properties, froth.T_V, point.P, froth.y)).sum(-1)
    slope = -out[:, :n, :]
    by_energy = -(HV[:, None, :] @ out[:, :n, :])[:, 0, :] - cp[:, None] * out[:, n, :]
    # Masked components, and those a tray has in neither stream, stay out of it exactly.
    inert = ~(properties.condensable & properties.volatile) | ((point.y_in == 0) & (point.x == 0))
    slope = np.where(inert[:, :, None] | inert[:, None, :], 0.0, slope)
    part = share[:, None] * froth.transferred
    mean, departure = mixed_tray(mixing, part, share[:, None, None] * slope)
    given = np.where(inert, part, mean)
    return given, share * (froth.energy + np.einsum("...i,...i->...", by_energy, departure))


def _upstream(point: FrothPoint, at: FrothPoint, l: Array, properties: PropertyModel) -> FrothPoint:
    """The point at the inlet of a stretch: its liquid l, as far from its bubble line as the leaving liquid."""
    x = l / l.sum(-1, keepdims=True)
    if not _on_bubble_line(properties):
        return replace(at, x=x)
    leaving = bubble_point(properties, point.P, point.x, point.T_L)[0]
    T = bubble_point(properties, point.P, x, at.T_L)[0]
    return replace(at, x=x, T_L=T + (point.T_L - leaving))


def _on_bubble_line(properties: PropertyModel) -> bool:
    """True where the liquid's temperature follows its bubble line along the path.

    It does so at once (a departure condenses or evaporates away within a few per cent of the path). With a masked
    component a bubble line means nothing: the liquid then keeps its leaving temperature.
    """
    return bool((properties.condensable & properties.volatile).all())


def _temperature_slope(point: FrothPoint, properties: PropertyModel) -> Array:
    """dT_L/dn_j along the liquid's path, (B, n)."""
    if not _on_bubble_line(properties):
        return np.zeros_like(point.x)
    return bubble_line(properties, point.P, point.x, point.T_L).temperature_slope


def vapor_temperature(properties: PropertyModel, P: Array, g: Array, enthalpy: Array, T: Array) -> Array:
    """Temperature at which the vapour g (component flows, mol/s) carries `enthalpy`, W; T where it has no capacity."""
    return _temperature(properties.vapor_enthalpy, lambda T, P, y: vapor_heat_capacity(properties, T, P, y), P, g,
                        enthalpy, T, "vapour")


def liquid_temperature(properties: PropertyModel, P: Array, l: Array, enthalpy: Array, T: Array) -> Array:
    """The same for a liquid."""
    return _temperature(properties.liquid_enthalpy, lambda T, P, x: liquid_heat_capacity(properties, T, P, x), P, l,
                        enthalpy, T, "liquid")


def _temperature(enthalpy_of: Property, capacity_of: Property, P: Array, flows: Array, enthalpy: Array, T: Array,
                 phase: str) -> Array:
    T = np.array(T, float)
    z = flows / flows.sum(-1, keepdims=True)
    for _ in range(30):
        heat = (flows * capacity_of(T, P, z)).sum(-1)
        gap = enthalpy - (flows * enthalpy_of(T, P, z)).sum(-1)
        step = np.where(heat > 0, gap / np.where(heat > 0, heat, 1.0), 0.0)
        T = T + step
        if (np.abs(step) <= 1e-11 * np.abs(T)).all():
            return T
    raise ConvergenceError(f"temperature of a {phase} from its enthalpy: no convergence", best=T, residual=step)
