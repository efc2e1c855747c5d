# mypy: disable-error-code="no-any-return"
"""Interfacial area of packings per bed volume."""
from __future__ import annotations

import numpy as np

from .constants import FOOT, GRAVITY
from .record import Values, correlation, require
from .validity import UNKNOWN, Array, Confidence, Range, Validity


def _reynolds(liquid_velocity: Array, liquid_density: Array, liquid_viscosity: Array, specific_area: Array) -> Array:
    return liquid_velocity * liquid_density / (specific_area * liquid_viscosity)


def _weber(liquid_velocity: Array, liquid_density: Array, surface_tension: Array, specific_area: Array) -> Array:
    return liquid_velocity ** 2 * liquid_density / (surface_tension * specific_area)


def _froude(liquid_velocity: Array, specific_area: Array) -> Array:
    return liquid_velocity ** 2 * specific_area / GRAVITY


@correlation("interfacial area", "random packings", "m-1", Validity(
    {"liquid_reynolds": Range(0.04, 500.0), "liquid_weber": Range(1.2e-8, 0.27), "liquid_froude": Range(2.5e-9, 1.8e-2),
     "tension_ratio": Range(0.3, 2.0)}, 0.30, "onda_1968", Confidence.VERIFIED,
    error_note="claimed band of the packed height, beds up to 1 m", range_note="ranges from memory",
    range_confidence=Confidence.MEMORY),
    variables={"liquid_reynolds": _reynolds, "liquid_weber": _weber, "liquid_froude": _froude,
               "tension_ratio": lambda critical_surface_tension, surface_tension:
               critical_surface_tension / surface_tension})
def onda(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values, surface_tension: Values,
         specific_area: Values, critical_surface_tension: Values) -> Array:
    """Wetted area of a random packing by Onda, Takeuchi and Okumoto, taken as the interfacial area [1/m].

    a_w/a = 1 - exp(-1.45 (sigma_c/sigma)^0.75 Re^0.1 Fr^-0.05 We^0.2) on the mass velocity of the liquid and 1/a as the
    length. Never above the geometric area.
    """
    Re = _reynolds(liquid_velocity, liquid_density, liquid_viscosity, specific_area)
    We = _weber(liquid_velocity, liquid_density, surface_tension, specific_area)
    Fr = _froude(liquid_velocity, specific_area)
    exponent = 1.45 * (critical_surface_tension / surface_tension) ** 0.75 * Re ** 0.1 * Fr ** -0.05 * We ** 0.2
    return -specific_area * np.expm1(-exponent)


@correlation("interfacial area", "random packings", "m-1", Validity(
    {}, None, "bravo_fair_1982", Confidence.CROSS_CHECKED, range_note=UNKNOWN,
    error_note=f"{UNKNOWN}; 95 % confidence needs a heights factor of 1.6, by a later analysis 1.3"), dimensional=True)
def bravo_fair(liquid_velocity: Values, liquid_viscosity: Values, surface_tension: Values, vapor_velocity: Values,
               vapor_density: Values, vapor_viscosity: Values, specific_area: Values, bed_height: Values) -> Array:
    """Effective area of a random packing by Bravo and Fair, to go with the coefficients of Onda and co-workers [1/m].

    a_e/a = 0.498 sigma^0.5/Z^0.4 (Ca_L Re_V)^0.392, sigma dyn/cm, Z ft (one bed), Ca_L = mu_L u_L/sigma,
    Re_V = 6 rho_V u_V/(a mu_V). May exceed the geometric area.
    """
    capillary = liquid_viscosity * liquid_velocity / surface_tension
    Re = 6 * vapor_density * vapor_velocity / (specific_area * vapor_viscosity)
    size = np.sqrt(1e3 * surface_tension) / (bed_height / FOOT) ** 0.4
    return specific_area * 0.498 * size * (capillary * Re) ** 0.392


@correlation("interfacial area", "random and structured packings", "m-1", Validity(
    {}, 0.124, "billet_schultes_1993", Confidence.CROSS_CHECKED, range_note=f"{UNKNOWN}; positive systems",
    error_note="of the volumetric coefficients in absorption and desorption; 14.1 % in rectification"))
def billet_schultes(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                    surface_tension: Values, specific_area: Values, void_fraction: Values,
                    flood_fraction: Values = 0.0, *, water_surface_tension: Values = 0.0728) -> Array:
    """Interfacial area by Billet and Schultes, up to loading and from there to flooding [1/m].

    a_e/a = 1.5 (a d_h)^-0.5 (u d_h rho/mu)^-0.2 (u^2 rho d_h/sigma)^0.75 (u^2/(g d_h))^-0.45 up to loading, 10.5
    (sigma/sigma_water)^0.56 in place of 1.5 at flooding, between them with the 13th power of the flood fraction.
    """
    d_h = 4 * void_fraction / specific_area
    group = ((specific_area * d_h) ** -0.5 * (liquid_velocity * d_h * liquid_density / liquid_viscosity) ** -0.2
             * (liquid_velocity ** 2 * liquid_density * d_h / surface_tension) ** 0.75
             * (liquid_velocity ** 2 / (GRAVITY * d_h)) ** -0.45)
    flooded = 10.5 * (surface_tension / water_surface_tension) ** 0.56
    return specific_area * group * (1.5 + (flooded - 1.5) * flood_fraction ** 13)


@correlation("factor on the interfacial area", "random and structured packings", "-", Validity(
    {}, None, "billet_schultes_1999", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def billet_schultes_marangoni_factor(marangoni_number: Values) -> Array:
    """Reduction of the area in mixtures whose surface tension falls down the film [-]: 1 - 2.4e-4 |Ma|^0.5.

    `InputError` where it is not positive.
    """
    factor = 1 - 2.4e-4 * np.sqrt(np.abs(marangoni_number))
    require("marangoni_number", marangoni_number, factor > 0, "a magnitude below 1.736e7")
    return factor


@correlation("interfacial area", "structured packings of gauze", "m-1", Validity(
    {}, None, "bravo_1985", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN))
def bravo_rocha_fair_gauze(specific_area: Values) -> Array:
    """Effective area of a gauze packing by Bravo, Rocha and Fair [1/m]: the geometric area, all wetted."""
    return 1.0 * specific_area


@correlation("interfacial area", "structured packings of sheet", "m-1", Validity(
    {"flood_fraction": Range(None, 1.0)}, None, "bravo_1986", Confidence.MEMORY, error_note=UNKNOWN))
def fair_bravo_sheet(specific_area: Values, flood_fraction: Values) -> Array:
    """Effective area of a sheet packing by Fair and Bravo [1/m]: a (0.50 + 0.58 f) up to f = 0.85, a above."""
    return specific_area * np.where(flood_fraction <= 0.85, 0.50 + 0.58 * flood_fraction, 1.0)


@correlation("interfacial area", "structured packings of sheet", "m-1", Validity(
    {}, None, "rocha_1996", Confidence.MEMORY, range_note=UNKNOWN,
    error_note=f"{UNKNOWN}; 20 to 25 % of the HETP, from memory"), dimensional=True)
def rocha_bravo_fair_sheet(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                           surface_tension: Values, specific_area: Values, void_fraction: Values,
                           corrugation_side: Values, corrugation_angle: Values, surface_factor: Values) -> Array:
    """Effective area of a corrugated-sheet packing by Rocha, Bravo and Fair [1/m]: a F_SE F_t.

    F_t is `rocha_bravo_fair_holdup_factor`; F_SE depends on the texture of the sheet.
    """
    F_t = rocha_bravo_fair_holdup_factor.silent(liquid_velocity, liquid_density, liquid_viscosity, surface_tension,
                                                void_fraction, corrugation_side, corrugation_angle)
    return specific_area * surface_factor * F_t


@correlation("holdup correction factor", "structured packings", "-", Validity(
    {}, None, "rocha_1993", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def rocha_bravo_fair_holdup_factor(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                                   surface_tension: Values, void_fraction: Values, corrugation_side: Values,
                                   corrugation_angle: Values) -> Array:
    """Correction of holdup and area for partial wetting by Rocha, Bravo and Fair [-].

    F_t = 29.12 (We Fr)^0.15 S^0.359/(Re^0.2 eps^0.6 (1 - 0.93 cos gamma) (sin theta)^0.3) on the side S of the
    corrugation (m), cos gamma = 0.9 up to 0.045 N/m and 5.211 x 10^(-16.835 sigma) above: as printed,
    the factor steps up by 6.5 % there.
    """
    S = corrugation_side
    We = liquid_velocity ** 2 * liquid_density * S / surface_tension
    Fr = liquid_velocity ** 2 / (S * GRAVITY)
    Re = liquid_velocity * S * liquid_density / liquid_viscosity
    contact = np.where(surface_tension <= 0.045, 0.9, 5.211 * 10 ** (-16.835 * surface_tension))
    return (29.12 * (We * Fr) ** 0.15 * S ** 0.359
            / (Re ** 0.2 * void_fraction ** 0.6 * (1 - 0.93 * contact) * np.sin(corrugation_angle) ** 0.3))


@correlation("interfacial area", "structured packings of gauze", "m-1", Validity(
    {}, None, "rocha_1996", Confidence.MEMORY, range_note=UNKNOWN,
    error_note=f"{UNKNOWN}; 20 to 25 % of the HETP, from memory"))
def rocha_bravo_fair_gauze(liquid_velocity: Values, specific_area: Values, corrugation_side: Values) -> Array:
    """Effective area of a gauze packing by Rocha, Bravo and Fair [1/m]: a (1 - 1.203 (u_L^2/(S g))^0.111).

    `InputError` where it is not positive.
    """
    ratio = 1 - 1.203 * (liquid_velocity ** 2 / (corrugation_side * GRAVITY)) ** 0.111
    require("liquid_velocity", liquid_velocity, ratio > 0, "a velocity low enough for a positive area")
    return specific_area * ratio


def _hourly_load(liquid_velocity: Array) -> Array:
    return 3600 * liquid_velocity


_TSAI_RANGE = {"specific_area": Range(125.0, 500.0), "liquid_load_m_h": Range(2.5, 75.0),
               "surface_tension": Range(0.030, 0.072)}


@correlation("interfacial area", "structured packings of sheet", "m-1", Validity(
    _TSAI_RANGE, 0.13, "tsai_2011", Confidence.VERIFIED, error_note="band",
    range_note="viscosity 1 to 15 mPa s and gas 0.6 to 2.3 m/s without effect; no gauze"),
    variables={"liquid_load_m_h": _hourly_load})
def tsai(liquid_velocity: Values, liquid_density: Values, surface_tension: Values, specific_area: Values,
         corrugation_base: Values, corrugation_height: Values, corrugation_side: Values) -> Array:
    """Effective area of a corrugated-sheet packing by Tsai, Seibert, Eldridge and Rochelle [1/m].

    a_e/a = 1.34 ((rho_L/sigma) g^(1/3) (Q/L_p)^(4/3))^0.116, L_p = 4 S A/(B h) the wetted perimeter of the section.
    """
    perimeter = 4 * corrugation_side / (corrugation_base * corrugation_height)
    return specific_area * 1.34 * _film_group(liquid_velocity / perimeter, liquid_density, surface_tension) ** 0.116


def _film_group(flow_per_perimeter: Array, liquid_density: Array, surface_tension: Array) -> Array:
    return liquid_density / surface_tension * np.cbrt(GRAVITY) * flow_per_perimeter ** (4 / 3)


@correlation("interfacial area", "random and structured packings", "m-1", Validity(
    {}, None, "wang_2016", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def wang(liquid_velocity: Values, liquid_density: Values, surface_tension: Values, specific_area: Values) -> Array:
    """Effective area by Wang and co-workers [1/m]: 1.41 a ((rho_L/sigma) g^(1/3) (u_L/a)^(4/3))^0.116."""
    group = _film_group(liquid_velocity / specific_area, liquid_density, surface_tension)
    return specific_area * 1.41 * group ** 0.116


@correlation("interfacial area", "structured packings of sheet", "m-1", Validity(
    {}, None, "henriques_de_brito_1994", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def henriques_de_brito(liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                       specific_area: Values) -> Array:
    """Effective area of a sheet packing by Henriques de Brito and co-workers [1/m]: 0.465 a (rho u/(mu a))^0.3."""
    return specific_area * 0.465 * _reynolds(liquid_velocity, liquid_density, liquid_viscosity, specific_area) ** 0.3
