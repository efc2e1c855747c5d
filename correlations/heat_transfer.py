# mypy: disable-error-code="no-any-return"
"""Heat-transfer coefficients from mass-transfer coefficients by analogy.

For a multicomponent film take the mean of the pair coefficients and the matching mean diffusivity. Times an area per
volume the same formulas turn k a into h a (trays).
"""
from __future__ import annotations

from .record import Values, correlation
from .validity import UNKNOWN, Array, Confidence, Validity


@correlation("heat-transfer coefficient", "trays and packings", "W m-2 K-1", Validity(
    {}, None, "chilton_colburn_1934", Confidence.VERIFIED,
    range_note=f"{UNKNOWN}; coefficients that grow with D^(2/3)", error_note=UNKNOWN))
def chilton_colburn(coefficient: Values, density: Values, heat_capacity: Values, conductivity: Values,
                    diffusivity: Values) -> Array:
    """Heat-transfer coefficient by the analogy of Chilton and Colburn [W/(m2 K)].

    h = k rho c_p Le^(2/3), Le = lambda/(rho c_p D).
    """
    volumetric = density * heat_capacity
    return coefficient * volumetric * (conductivity / (volumetric * diffusivity)) ** (2 / 3)


@correlation("heat-transfer coefficient", "trays and packings", "W m-2 K-1", Validity(
    {}, None, "higbie_1935", Confidence.CROSS_CHECKED,
    range_note=f"{UNKNOWN}; coefficients that grow with D^(1/2)", error_note=UNKNOWN))
def penetration(coefficient: Values, density: Values, heat_capacity: Values, conductivity: Values,
                diffusivity: Values) -> Array:
    """Heat-transfer coefficient by penetration theory [W/(m2 K)]: h = k rho c_p Le^(1/2)."""
    volumetric = density * heat_capacity
    return coefficient * volumetric * (conductivity / (volumetric * diffusivity)) ** 0.5
