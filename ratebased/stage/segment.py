"""A packed segment: fluxes at the mean of the states at its ends (second order in its height)."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..equipment.protocol import Array, TransferCoefficients
from ..interface import Bulk, InterfaceFlux, interface_flux
from ..properties.protocol import Mask, PropertyModel
from .tray import vapor_temperature

LARGEST_SHARE = 0.9


@dataclass(frozen=True)
class SegmentResult:
    """A packed segment with its ends given, batched over segments.

    V mol/s, y (..., n), T_V K: the vapour that would leave above, from the vapour below and the fluxes. transferred: to
    the liquid, mol/s, (..., n). energy W. composition_slope: V dy_i over the segment by the fluxes at the mean states,
    mol/s, (..., n). interface: at the mean bulk states. long: a component loses more than nine tenths of itself, more
    than one mean state can tell.
    """

    V: Array
    y: Array
    T_V: Array
    transferred: Array
    energy: Array
    composition_slope: Array
    interface: InterfaceFlux
    long: Mask


def segment_between_ends(V_in: Array, y_in: Array, T_V_in: Array, vapor: tuple[Array, Array],
                         liquid: tuple[Array, Array], P: Array, coefficients: TransferCoefficients, c_vapor: Array,
                         c_liquid: Array, properties: PropertyModel) -> SegmentResult:
    """Transfer in a segment whose mean bulk states are known.

    V_in mol/s, y_in, T_V_in: the vapour that enters below. vapor, liquid: (mole fractions, temperature), the means of
    the two ends. The transfer units of a segment follow from the fluxes alone; the leaving vapour is meant for short
    segments, `long` says where one is not.
    """
    answer = interface_flux(
        Bulk(*vapor, coefficients.kappa_vapor, coefficients.h_vapor, c_vapor),
        Bulk(*liquid, coefficients.kappa_liquid, coefficients.h_liquid, c_liquid), properties, P)
    area = coefficients.area
    transferred, energy = area[..., None] * answer.N, area * answer.energy_flux
    g_in = V_in[..., None] * y_in
    g_out = g_in - transferred
    long = (transferred > LARGEST_SHARE * g_in) & (transferred > 0)
    if long.any():
        # Beyond the reach of one mean state: the exponential decay that starts with the same slope instead.
        share = transferred / np.where(g_in > 0, g_in, 1.0)
        g_out = np.where(long, g_in * np.exp(-share), g_out)
        kept = np.where(long, transferred - (g_in - g_out), 0.0)
        transferred = g_in - g_out
        energy = energy - (kept * properties.vapor_enthalpy(vapor[1], P, vapor[0])).sum(-1)
    H_in = (g_in * properties.vapor_enthalpy(T_V_in, P, y_in)).sum(-1)
    T_V = vapor_temperature(properties, P, g_out, H_in - energy, vapor[1])
    V = g_out.sum(-1)
    slope = -area[..., None] * (answer.N - vapor[0] * answer.N.sum(-1, keepdims=True))
    return SegmentResult(V, g_out / V[..., None], T_V, transferred, energy, slope, answer,
                         np.asarray(long.any(-1)))
