# mypy: disable-error-code="no-any-return"
"""Numbers of transfer units, coefficients and interfacial area on trays.

The diffusivity may be that of a pair: shape (..., n, n) against per-stage arrays of shape (..., 1, 1).
"""
from __future__ import annotations

import numpy as np

from .record import Values, correlation, require
from .validity import UNKNOWN, Array, Confidence, Range, Validity


def _f_factor(velocity: Array, density: Array) -> Array:
    return velocity * np.sqrt(density)


@correlation("vapour transfer units", "bubble-cap and sieve trays", "-", Validity(
    {}, None, "aiche_1958", Confidence.VERIFIED, range_note=f"{UNKNOWN}; used for valve trays in the absence of data",
    error_note=UNKNOWN), dimensional=True)
def aiche_vapor_units(active_velocity: Values, vapor_density: Values, vapor_viscosity: Values, diffusivity: Values,
                      weir_height: Values, weir_load: Values) -> Array:
    """Vapour transfer units of a tray by the AIChE manual [-].

    N_G = (0.776 + 4.57 h_w - 0.238 F + 105 W)/Sc^(1/2), F = u_a rho_V^(1/2), W per mean width of flow. Where the
    bracket is not positive (F above about 4) the formula has left its field: an `InputError`.
    """
    bracket = 0.776 + 4.57 * weir_height - 0.238 * _f_factor(active_velocity, vapor_density) + 105 * weir_load
    require("active_velocity", active_velocity, bracket > 0, "a velocity low enough for positive transfer units")
    return bracket / np.sqrt(vapor_viscosity / (vapor_density * diffusivity))


@correlation("liquid transfer units", "sieve trays", "-", Validity(
    {}, None, "aiche_1958", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def aiche_sieve_liquid_units(diffusivity: Values, active_velocity: Values, vapor_density: Values,
                             liquid_residence_time: Values) -> Array:
    """Liquid transfer units of a sieve tray by the AIChE manual [-]: 19700 D^(1/2) (0.40 F + 0.17) t_L."""
    F = _f_factor(active_velocity, vapor_density)
    return 1.97e4 * np.sqrt(diffusivity) * (0.40 * F + 0.17) * liquid_residence_time


@correlation("liquid transfer units", "bubble-cap trays", "-", Validity(
    {}, None, "aiche_1958", Confidence.CROSS_CHECKED,
    range_note=f"{UNKNOWN}; one textbook prints 40000 in place of 20300", error_note=UNKNOWN), dimensional=True)
def aiche_bubble_cap_liquid_units(diffusivity: Values, active_velocity: Values, vapor_density: Values,
                                  liquid_residence_time: Values, *, leading_constant: Values = 2.03e4) -> Array:
    """Liquid transfer units of a bubble-cap tray by the AIChE manual [-]: 20300 D^(1/2) (0.213 F + 0.15) t_L.

    Textbooks differ in the constant (20300 and 40000): the default is the lower, which is the cautious one.
    """
    F = _f_factor(active_velocity, vapor_density)
    return leading_constant * np.sqrt(diffusivity) * (0.213 * F + 0.15) * liquid_residence_time


@correlation("vapour coefficient times area per vapour volume", "sieve trays", "s-1", Validity(
    {"flood_fraction": Range(0.3, 0.9)}, 0.06, "chan_fair_1984", Confidence.CROSS_CHECKED,
    error_note="mean on 143 points, from memory", range_note="range advised, about; from memory",
    range_confidence=Confidence.MEMORY), dimensional=True)
def chan_fair_vapor(diffusivity: Values, flood_fraction: Values, clear_liquid_height: Values) -> Array:
    """Volumetric vapour coefficient of a sieve tray by Chan and Fair [1/s]: N_G = k_G a t_V.

    k_G a = 316 D^(1/2) (1030 f - 867 f^2)/h_L^(1/2), h_L in mm, f the fraction of flooding; it peaks at f = 0.594.
    """
    require("flood_fraction", flood_fraction, flood_fraction > 0, "a number above 0, at most 1")
    f = flood_fraction
    return 316 * np.sqrt(diffusivity) * (1030 * f - 867 * f ** 2) / np.sqrt(1e3 * clear_liquid_height)


@correlation("liquid coefficient times area per liquid volume", "sieve trays", "s-1", Validity(
    {}, None, "chan_fair_1984", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def chan_fair_liquid(diffusivity: Values, active_velocity: Values, vapor_density: Values) -> Array:
    """Volumetric liquid coefficient of a sieve tray as used by Chan and Fair [1/s]: N_L = k_L a t_L.

    k_L a = 19700 D^(1/2) (0.40 F + 0.17).
    """
    return 1.97e4 * np.sqrt(diffusivity) * (0.40 * _f_factor(active_velocity, vapor_density) + 0.17)


def _zuiderweg_group(active_velocity: Array, vapor_density: Array, clear_liquid_height: Array, flow_parameter: Array,
                     surface_tension: Array) -> Array:
    return active_velocity ** 2 * vapor_density * clear_liquid_height * flow_parameter / surface_tension


_ZUIDERWEG = Validity({}, None, "zuiderweg_1982", Confidence.DOUBTFUL,
                      range_note=f"{UNKNOWN}; which constants belong to which regime is recalled, not seen",
                      error_note=UNKNOWN)


@correlation("interfacial area per bubbling area", "sieve trays", "-", _ZUIDERWEG)
def zuiderweg_spray_area(active_velocity: Values, vapor_density: Values, clear_liquid_height: Values,
                         flow_parameter: Values, surface_tension: Values, hole_area_fraction: Values) -> Array:
    """Interfacial area per bubbling area in the spray and mixed regime by Zuiderweg [-].

    (40/F_h^0.3) (u^2 rho_V h_L FP/sigma)^0.37.
    """
    group = _zuiderweg_group(active_velocity, vapor_density, clear_liquid_height, flow_parameter, surface_tension)
    return 40 / hole_area_fraction ** 0.3 * group ** 0.37


@correlation("interfacial area per bubbling area", "sieve trays", "-", _ZUIDERWEG)
def zuiderweg_emulsion_area(active_velocity: Values, vapor_density: Values, clear_liquid_height: Values,
                            flow_parameter: Values, surface_tension: Values, hole_area_fraction: Values) -> Array:
    """Interfacial area per bubbling area in the emulsion regime by Zuiderweg [-].

    (43/F_h^0.3) (u^2 rho_V h_L FP/sigma)^0.53.
    """
    group = _zuiderweg_group(active_velocity, vapor_density, clear_liquid_height, flow_parameter, surface_tension)
    return 43 / hole_area_fraction ** 0.3 * group ** 0.53


@correlation("regime number", "sieve trays", "-", Validity(
    {}, None, "zuiderweg_1982", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def zuiderweg_emulsion_number(flow_parameter: Values, weir_per_area: Values, clear_liquid_height: Values) -> Array:
    """Regime number of Zuiderweg [-]: FP/(b h_L); above 3 emulsion flow, below it spray or mixed."""
    return flow_parameter / (weir_per_area * clear_liquid_height)


@correlation("vapour coefficient", "sieve trays", "m s-1", Validity(
    {"vapor_density": Range(1.0, 80.0)}, None, "zuiderweg_1982", Confidence.MEMORY, error_note=UNKNOWN),
    dimensional=True)
def zuiderweg_vapor(vapor_density: Values) -> Array:
    """Vapour coefficient of a sieve tray by Zuiderweg [m/s]: 0.13/rho_V - 0.065/rho_V^2, the same for every pair.

    At 0.5 kg/m3 and below it is not positive: an `InputError`.
    """
    require("vapor_density", vapor_density, vapor_density > 0.5, "a density above 0.5 kg/m3")
    return 0.13 / vapor_density - 0.065 / vapor_density ** 2


@correlation("liquid coefficient", "sieve trays", "m s-1", Validity(
    {}, None, "zuiderweg_1982", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def zuiderweg_liquid(diffusivity: Values) -> Array:
    """Liquid coefficient of a sieve tray by Zuiderweg [m/s]: 0.024 D^(1/4)."""
    return 0.024 * diffusivity ** 0.25


@correlation("liquid coefficient", "sieve trays", "m s-1", Validity(
    {}, None, "zuiderweg_1982", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def zuiderweg_liquid_by_viscosity(liquid_viscosity: Values) -> Array:
    """Liquid coefficient of a sieve tray by Zuiderweg, viscosity form [m/s]: 2.6e-5 mu^(-1/4)."""
    return 2.6e-5 * liquid_viscosity ** -0.25


def _chen_chuang_group(active_velocity: Array, vapor_density: Array, liquid_density: Array, liquid_viscosity: Array,
                       surface_tension: Array, hole_area_fraction: Array) -> Array:
    F = _f_factor(active_velocity, vapor_density)
    return (liquid_viscosity ** -0.1 * hole_area_fraction ** -0.14
            * np.cbrt(liquid_density * F ** 2 / surface_tension ** 2))


_CHEN_CHUANG = Validity({}, None, "chen_chuang_1993", Confidence.MEMORY, range_note=f"{UNKNOWN}; froth regime",
                        error_note=UNKNOWN)


@correlation("vapour transfer units", "sieve trays", "-", _CHEN_CHUANG, dimensional=True)
def chen_chuang_vapor_units(diffusivity: Values, active_velocity: Values, vapor_density: Values,
                            liquid_density: Values, liquid_viscosity: Values, surface_tension: Values,
                            hole_area_fraction: Values, clear_liquid_height: Values) -> Array:
    """Vapour transfer units of a sieve tray in the froth regime by Chen and Chuang [-].

    N_G = 11 Q (D t_V)^(1/2), Q = mu_L^-0.1 phi^-0.14 (rho_L F^2/sigma^2)^(1/3), t_V = h_L/u_a.
    """
    Q = _chen_chuang_group(active_velocity, vapor_density, liquid_density, liquid_viscosity, surface_tension,
                           hole_area_fraction)
    return 11 * Q * np.sqrt(diffusivity * clear_liquid_height / active_velocity)


@correlation("liquid transfer units", "sieve trays", "-", _CHEN_CHUANG, dimensional=True)
def chen_chuang_liquid_units(diffusivity: Values, active_velocity: Values, vapor_density: Values,
                             liquid_density: Values, liquid_viscosity: Values, surface_tension: Values,
                             hole_area_fraction: Values, clear_liquid_height: Values,
                             molar_flow_ratio: Values, vapor_molar_mass: Values, liquid_molar_mass: Values) -> Array:
    """Liquid transfer units of a sieve tray in the froth regime by Chen and Chuang [-].

    N_L = 14 Q (M_V V/(M_L L)) (D t_L)^(1/2), t_L = (h_L/u_a) rho_L/rho_V; Q as in `chen_chuang_vapor_units`.
    """
    Q = _chen_chuang_group(active_velocity, vapor_density, liquid_density, liquid_viscosity, surface_tension,
                           hole_area_fraction)
    time = clear_liquid_height / active_velocity * liquid_density / vapor_density
    mass_ratio = molar_flow_ratio * vapor_molar_mass / liquid_molar_mass
    return 14 * Q * mass_ratio * np.sqrt(diffusivity * time)


@correlation("overall transfer units", "sieve trays", "-", Validity(
    {}, 0.06, "bennett_1997", Confidence.VERIFIED, range_note=f"{UNKNOWN}; froth regime",
    error_note="about, from memory"))
def bennett_overall_units(vapor_density: Values, vapor_viscosity: Values, hole_velocity: Values,
                          clear_liquid_height: Values, froth_density: Values, hole_diameter: Values,
                          hole_area_fraction: Values, vapor_diffusivity: Values, liquid_diffusivity: Values,
                          equilibrium_slope: Values, vapor_molar_density: Values,
                          liquid_molar_density: Values) -> Array:
    """Overall vapour-side transfer units of a sieve tray by Bennett, Watson and Wiescinski [-].

    N_OG = 0.0029 Re^0.4136 (h_L/d_h)^0.6074 phi^-0.3195/(1 + m (c_V/c_L) (D_V (1 - phi_e)/(D_L phi))^(1/2)),
    Re = rho_V u_h h_L/(mu_V phi_e), phi the hole area over active area, phi_e the relative froth density.
    """
    Re = vapor_density * hole_velocity * clear_liquid_height / (vapor_viscosity * froth_density)
    top = 0.0029 * Re ** 0.4136 * (clear_liquid_height / hole_diameter) ** 0.6074 * hole_area_fraction ** -0.3195
    ratio = vapor_diffusivity * (1 - froth_density) / (liquid_diffusivity * hole_area_fraction)
    return top / (1 + equilibrium_slope * vapor_molar_density / liquid_molar_density * np.sqrt(ratio))
