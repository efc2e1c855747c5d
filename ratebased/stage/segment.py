"""A packed segment: fluxes at the mean of the states at its ends (second order in its height)."""
from __future__ import annotations

from dataclasses import dataclass

from ..equipment.protocol import Array, TransferCoefficients
from ..errors import ConvergenceError
from ..interface import Bulk, InterfaceFlux, interface_flux
from ..properties.protocol import PropertyModel
from .tray import vapor_temperature


@dataclass(frozen=True)
class SegmentResult:
    """A packed segment with its ends given, batched over segments.

    V mol/s, y (..., n), T_V K: the vapour that would leave above, from the vapour below and the fluxes. transferred: to
    the liquid, mol/s, (..., n). energy W. interface: at the mean bulk states.
    """

    V: Array
    y: Array
    T_V: Array
    transferred: Array
    energy: Array
    interface: InterfaceFlux


def segment_between_ends(V_in: Array, y_in: Array, T_V_in: Array, vapor: tuple[Array, Array],
                         liquid: tuple[Array, Array], P: Array, coefficients: TransferCoefficients, c_vapor: Array,
                         c_liquid: Array, properties: PropertyModel) -> SegmentResult:
    """Transfer in a segment whose mean bulk states are known.

    V_in mol/s, y_in, T_V_in: the vapour that enters below. vapor, liquid: (mole fractions, temperature), the means of
    the two ends. Raises `ConvergenceError` where the fluxes would take more of a component than enters.
    """
    answer = interface_flux(
        Bulk(*vapor, coefficients.kappa_vapor, coefficients.h_vapor, c_vapor),
        Bulk(*liquid, coefficients.kappa_liquid, coefficients.h_liquid, c_liquid), properties, P)
    area = coefficients.area
    transferred, energy = area[..., None] * answer.N, area * answer.energy_flux
    g_in = V_in[..., None] * y_in
    g_out = g_in - transferred
    if (g_out < 0).any():
        raise ConvergenceError("a packed segment takes more of a component than its vapour brings: the ends of its "
                               "row are not those of this bed; use shorter segments", residual=g_out.min(-1),
                               failed=(g_out < 0).any(-1))
    H_in = (g_in * properties.vapor_enthalpy(T_V_in, P, y_in)).sum(-1)
    T_V = vapor_temperature(properties, P, g_out, H_in - energy, vapor[1])
    V = g_out.sum(-1)
    return SegmentResult(V, g_out / V[..., None], T_V, transferred, energy, answer)
