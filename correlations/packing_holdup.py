# mypy: disable-error-code="no-any-return"
"""Liquid holdup of packings: liquid volume per bed volume."""
from __future__ import annotations

import numpy as np

from .constants import GRAVITY
from .packing_coefficients import delft_film
from .record import Values, correlation
from .validity import UNKNOWN, Array, Confidence, Validity


@correlation("liquid holdup", "random and structured packings", "-", Validity(
    {}, 0.067, "billet_schultes_1999", Confidence.VERIFIED, range_note=f"{UNKNOWN}; up to the loading point"))
def billet_schultes(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values, specific_area: Values,
                    holdup_constant: Values) -> Array:
    """Liquid holdup up to the loading point by Billet and Schultes [-].

    h = (12 mu u a^2/(rho g))^(1/3) (a_h/a)^(2/3); a_h/a = C_h Re^0.15 Fr^0.1 below Re = 5, 0.85 C_h Re^0.25 Fr^0.1 from
    there; Re = u rho/(a mu), Fr = u^2 a/g.
    """
    wetted = billet_schultes_hydraulic_area.silent(liquid_velocity, liquid_density, liquid_viscosity, specific_area,
                                                   holdup_constant) / specific_area
    film = 12 * liquid_viscosity * liquid_velocity * specific_area ** 2 / (liquid_density * GRAVITY)
    return np.cbrt(film) * wetted ** (2 / 3)


@correlation("hydraulic area", "random and structured packings", "m-1", Validity(
    {}, None, "billet_schultes_1999", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def billet_schultes_hydraulic_area(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                                   specific_area: Values, holdup_constant: Values) -> Array:
    """Hydraulic area of the holdup of Billet and Schultes [1/m]; it is not the area for mass transfer."""
    Re = liquid_velocity * liquid_density / (specific_area * liquid_viscosity)
    Fr = liquid_velocity ** 2 * specific_area / GRAVITY
    return specific_area * holdup_constant * np.where(Re < 5, Re ** 0.15, 0.85 * Re ** 0.25) * Fr ** 0.1


@correlation("liquid holdup at flooding", "random and structured packings", "-", Validity(
    {}, None, "billet_schultes_1999", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def billet_schultes_flood_holdup(loading_holdup: Values, liquid_viscosity: Values, liquid_density: Values, *,
                                 water_viscosity: Values = 1.0e-3, water_density: Values = 998.2) -> Array:
    """Holdup at flooding for the holdup curve of Billet and Schultes [-]: 2.2 h_S (mu_L rho_w/(mu_w rho_L))^0.05."""
    return 2.2 * loading_holdup * (liquid_viscosity * water_density / (water_viscosity * liquid_density)) ** 0.05


@correlation("liquid holdup", "random and structured packings", "-", Validity(
    {}, 0.067, "billet_schultes_1999", Confidence.MEMORY, range_note=f"{UNKNOWN}; from loading to flooding"))
def billet_schultes_above_loading(loading_holdup: Values, flood_holdup: Values, flood_fraction: Values) -> Array:
    """Liquid holdup between loading and flooding by Billet and Schultes [-]: h_S + (h_Fl - h_S)(u_V/u_V,Fl)^13."""
    return loading_holdup + (flood_holdup - loading_holdup) * flood_fraction ** 13


@correlation("liquid holdup", "random and structured packings", "-", Validity(
    {}, None, "stichlmair_1989", Confidence.VERIFIED, range_note=f"{UNKNOWN}; below loading", error_note=UNKNOWN))
def stichlmair_preloading(liquid_velocity: Values, specific_area: Values, void_fraction: Values) -> Array:
    """Liquid holdup at negligible gas flow by Stichlmair, Bravo and Fair [-]: 0.555 (u^2 a/(g eps^4.65))^(1/3)."""
    return 0.555 * np.cbrt(liquid_velocity ** 2 * specific_area / (GRAVITY * void_fraction ** 4.65))


@correlation("liquid holdup", "random and structured packings", "-", Validity(
    {}, None, "stichlmair_1989", Confidence.VERIFIED, range_note=f"{UNKNOWN}; up to flooding", error_note=UNKNOWN))
def stichlmair_above_loading(preloading_holdup: Values, pressure_gradient: Values, liquid_density: Values, *,
                             loading_factor: Values = 20.0) -> Array:
    """Liquid holdup raised by the pressure drop [-]: h_0 (1 + 20 (dP/(rho_L g H))^2).

    20 by Stichlmair, Bravo and Fair; Engel, Stichlmair and Geipel later put 36 for the dynamic holdup.
    """
    return preloading_holdup * (1 + loading_factor * (pressure_gradient / (liquid_density * GRAVITY)) ** 2)


@correlation("static liquid holdup", "random packings", "-", Validity(
    {}, None, "engel_2001", Confidence.DOUBTFUL, range_note=UNKNOWN, error_note=UNKNOWN))
def engel_static(liquid_density: Values, surface_tension: Values, specific_area: Values) -> Array:
    """Static liquid holdup by Engel, Stichlmair and Geipel [-]: 0.033 exp(-0.22 g rho_L/(sigma a^2))."""
    return 0.033 * np.exp(-0.22 * GRAVITY * liquid_density / (surface_tension * specific_area ** 2))


@correlation("liquid holdup", "structured packings of sheet", "-", Validity(
    {}, None, "olujic_1999", Confidence.MEMORY, range_note=f"{UNKNOWN}; below loading", error_note=UNKNOWN))
def delft(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values, specific_area: Values,
          corrugation_base: Values, corrugation_height: Values, corrugation_angle: Values) -> Array:
    """Liquid holdup of a corrugated-sheet packing by Olujic, Kamerbeek and de Graauw [-]: area times film thickness.

    delta = (3 mu u/(rho g a sin alpha))^(1/3), alpha the slope of the liquid's path along the corrugation.
    """
    _, film = delft_film(liquid_velocity, liquid_density, liquid_viscosity, specific_area, corrugation_base,
                         corrugation_height, corrugation_angle)
    return specific_area * film
