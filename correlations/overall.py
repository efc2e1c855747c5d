# mypy: disable-error-code="no-any-return"
"""Overall efficiency of a tray column: the rule of thumb to compare a computed efficiency with.

All of them rest on bubble-cap data and are slightly low for sieve and valve trays.
"""
from __future__ import annotations

import numpy as np

from .record import Values, correlation, require
from .validity import UNKNOWN, Array, Confidence, Validity

_NOTE = "bubble-cap base; slightly low for sieve and valve trays"


def _distillation(confidence: Confidence) -> Validity:
    return Validity({}, 0.10, "oconnell_1946", confidence, range_note=f"{UNKNOWN}; {_NOTE}",
                    error_note="band that holds 90 % of the data")


@correlation("overall column efficiency", "trays, distillation", "-", _distillation(Confidence.VERIFIED),
             dimensional=True)
def oconnell(relative_volatility: Values, liquid_viscosity: Values) -> Array:
    """Overall efficiency of a distillation column by O'Connell [-]: 0.503 (alpha mu)^-0.226, mu in mPa s.

    Both at the mean temperature of the column, for the key components and the feed.
    """
    return 0.503 * (relative_volatility * liquid_viscosity * 1e3) ** -0.226


@correlation("overall column efficiency", "trays, distillation", "-", _distillation(Confidence.CROSS_CHECKED),
             dimensional=True)
def oconnell_lockett(relative_volatility: Values, liquid_viscosity: Values) -> Array:
    """Overall efficiency of a distillation column, Lockett's fit [-]: 0.492 (alpha mu)^-0.245."""
    return 0.492 * (relative_volatility * liquid_viscosity * 1e3) ** -0.245


@correlation("overall column efficiency", "trays, distillation", "-", _distillation(Confidence.VERIFIED),
             dimensional=True)
def oconnell_polynomial(relative_volatility: Values, liquid_viscosity: Values) -> Array:
    """Overall efficiency of a distillation column, O'Connell's curve as a polynomial [-].

    0.52782 - 0.27511 lg K + 0.044923 (lg K)^2, K = alpha mu, mu in mPa s. The parabola turns up again at K = 1150: an
    `InputError` from there on.
    """
    K = np.log10(relative_volatility * liquid_viscosity * 1e3)
    require("liquid_viscosity", liquid_viscosity, 0.27511 > 2 * 0.044923 * K, "a product alpha mu below 1.15 Pa s")
    return 0.52782 - 0.27511 * K + 0.044923 * K ** 2


@correlation("overall column efficiency", "trays, absorption", "-", Validity(
    {}, None, "oconnell_1946", Confidence.MEMORY, range_note=f"{UNKNOWN}; {_NOTE}",
    error_note=f"{UNKNOWN}; some predictions are too high"), dimensional=True)
def oconnell_absorber(equilibrium_ratio: Values, liquid_molar_mass: Values, liquid_viscosity: Values,
                      liquid_density: Values) -> Array:
    """Overall efficiency of an absorber by O'Connell [-].

    lg(100 E) = 1.597 - 0.199 lg X - 0.0896 (lg X)^2, X = K M_L mu_L/rho_L (g/mol, cP, lb/ft3).
    """
    group = (equilibrium_ratio * liquid_molar_mass * 1e3 * liquid_viscosity * 1e3
             / (liquid_density / (0.45359237 / 0.3048 ** 3)))
    X = np.log10(group)
    return 10 ** (1.597 - 0.199 * X - 0.0896 * X ** 2 - 2)
