"""Mixing rules for the transport properties of both phases.

Vapour at low pressure: viscosity by Wilke, conductivity by Wassiljewa with the coefficients of Mason & Saxena.
Liquid: logarithmic viscosity, conductivity by the power rule on mass fractions, surface tension from volume fractions.
"""
from __future__ import annotations

import numpy as np

from .protocol import Array


def interaction_coefficients(viscosity: Array, molar_mass: Array) -> Array:
    """Wilke's phi_ij, (..., n, n), from viscosities (..., n) Pa s and molar masses (n,).

    Wilke, J. Chem. Phys. 18 (1950) 517. Low pressure; about 2 % for non-polar gases, worse where hydrogen is abundant.
    """
    ratio = molar_mass[:, None] / molar_mass[None, :]
    root = np.sqrt(viscosity[..., :, None] / viscosity[..., None, :]) * ratio ** -0.25
    phi: Array = (1.0 + root) ** 2 / np.sqrt(8.0 * (1.0 + ratio))
    return phi


def gas_mixture(y: Array, values: Array, phi: Array) -> Array:
    """sum_i y_i v_i / sum_j y_j phi_ij, (..., m): Wilke's viscosity, Wassiljewa's conductivity, of values (..., m, n).

    Conductivities take the same phi as the viscosity: Wassiljewa's form with the coefficients of Mason & Saxena, Phys.
    Fluids 1 (1958) 361, in the practice of Poling, Prausnitz & O'Connell (5th ed. 2001, ch. 10).
    """
    weights = y / (phi @ y[..., :, None])[..., 0]
    total: Array = (values @ weights[..., None])[..., 0]
    return total


def liquid_viscosity(x: Array, ln_viscosity: Array) -> Array:
    """exp(sum x ln mu), Pa s: the rule of Grunberg & Nissan, Nature 164 (1949) 799, with no interaction term.

    Misses the maximum of aqueous alcohols (a factor of two near 280 K); good to 10 to 15 % for similar liquids.
    """
    mixture: Array = np.exp((x * ln_viscosity).sum(-1))
    return mixture


def liquid_conductivity(x: Array, conductivity: Array, molar_mass: Array) -> Array:
    """(sum w / lambda2)^-1/2, W/(m K), w mass fractions: the power rule of Vredeveld as given in Poling, Prausnitz &
    O'Connell (5th ed. 2001, sec. 10-12); for non-aqueous systems with a conductivity ratio up to 2 within a few %."""
    mass = x * molar_mass
    w = mass / mass.sum(-1, keepdims=True)
    mixture: Array = (w / conductivity ** 2).sum(-1) ** -0.5
    return mixture


def surface_tension(x: Array, tension: Array, volume: Array) -> Array:
    """(sum phi_i sqrt sigma_i)^2, N/m, phi volume fractions.

    The rule of Winterfeld, Scriven & Davis, AIChE J. 24 (1978) 1010, for a liquid whose volumes add up. Aqueous
    solutions of organics come out far too high (ethanol at x = 0.3, 298 K: 0.04 against 0.028 measured): give
    `ThermoProperties` a function of your own for these.
    """
    share = x * volume
    phi = share / share.sum(-1, keepdims=True)
    mixture: Array = (phi * np.sqrt(tension)).sum(-1) ** 2
    return mixture
