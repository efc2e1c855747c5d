# mypy: disable-error-code="no-any-return"
"""Pressure drop of packings per bed height."""
from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from .constants import FOOT, GRAVITY, INCH_WATER_PER_FOOT
from .errors import NoPhysicalRootError
from .packing_coefficients import bravo_equivalent_diameter
from .packing_holdup import stichlmair_preloading
from .record import Values, correlation, require
from .rootfinding import climbed_root
from .validity import UNKNOWN, Array, Confidence, Mask, Range, Validity

POUND = 0.45359237
POUND_PER_FT3 = POUND / FOOT ** 3
POUND_PER_HOUR_FT2 = POUND / (3600 * FOOT ** 2)


class HoldupAndPressureDrop(NamedTuple):
    """Holdup and pressure drop that depend on each other."""

    liquid_holdup: Array
    """-"""
    pressure_gradient: Array
    """Pa/m."""


@correlation("dry pressure drop", "random and structured packings", "Pa m-1", Validity(
    {}, 0.091, "billet_schultes_1999", Confidence.VERIFIED, range_note=UNKNOWN,
    error_note="of the pressure drop, wet"))
def billet_schultes_dry(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
                        specific_area: Values, void_fraction: Values, friction_constant: Values,
                        column_diameter: Values = np.inf) -> Array:
    """Dry pressure drop by Billet and Schultes [Pa/m].

    psi_0 a/eps^3 F^2/(2 K), psi_0 = C_P (64/Re + 1.8/Re^0.08), Re = u d_P rho K/((1 - eps) mu), d_P = 6 (1 - eps)/a,
    1/K = 1 + (2/3) d_P/((1 - eps) D).
    """
    d_P = 6 * (1 - void_fraction) / specific_area
    K = 1 / (1 + (2 / 3) * d_P / ((1 - void_fraction) * column_diameter))
    Re = vapor_velocity * d_P * vapor_density * K / ((1 - void_fraction) * vapor_viscosity)
    psi = friction_constant * (64 / Re + 1.8 / Re ** 0.08)
    return psi * specific_area / void_fraction ** 3 * vapor_velocity ** 2 * vapor_density / (2 * K)


def _billet_ratio(void_fraction: Array, liquid_holdup: Array) -> Array:
    require("liquid_holdup", liquid_holdup, liquid_holdup < void_fraction, "a holdup below the void fraction")
    return (void_fraction / (void_fraction - liquid_holdup)) ** 1.5


@correlation("pressure drop", "random and structured packings", "Pa m-1", Validity(
    {}, 0.091, "billet_schultes_1993", Confidence.VERIFIED, range_note=f"{UNKNOWN}; up to flooding"))
def billet_schultes_wet_1993(dry_pressure_gradient: Values, liquid_holdup: Values, liquid_velocity: Values,
                             liquid_density: Values, liquid_viscosity: Values, specific_area: Values,
                             void_fraction: Values) -> Array:
    """Pressure drop of the irrigated bed by Billet and Schultes, form of 1993 [Pa/m].

    dry (eps/(eps - h))^1.5 exp(Re_L/200), Re_L = u rho/(a mu).
    """
    Re = liquid_velocity * liquid_density / (specific_area * liquid_viscosity)
    return dry_pressure_gradient * _billet_ratio(void_fraction, liquid_holdup) * np.exp(Re / 200)


@correlation("pressure drop", "random and structured packings", "Pa m-1", Validity(
    {}, 0.091, "billet_schultes_1999", Confidence.CROSS_CHECKED, range_note=f"{UNKNOWN}; up to flooding"),
    dimensional=True)
def billet_schultes_wet_1999(dry_pressure_gradient: Values, liquid_holdup: Values, loading_holdup: Values,
                             liquid_velocity: Values, specific_area: Values, void_fraction: Values) -> Array:
    """Pressure drop of the irrigated bed by Billet and Schultes, form of 1999 [Pa/m].

    dry (eps/(eps - h))^1.5 (h/h_S)^0.3 exp(13300 a^-1.5 Fr^0.5), Fr = u^2 a/g, a in 1/m.
    """
    require("loading_holdup", loading_holdup, loading_holdup > 0, "a number above zero")
    exponent = 13300 / specific_area ** 1.5 * np.sqrt(liquid_velocity ** 2 * specific_area / GRAVITY)
    return (dry_pressure_gradient * _billet_ratio(void_fraction, liquid_holdup)
            * (liquid_holdup / loading_holdup) ** 0.3 * np.exp(exponent))


def stichlmair_friction(vapor_velocity: Array, vapor_density: Array, vapor_viscosity: Array, specific_area: Array,
                        void_fraction: Array, laminar_friction: Array, transition_friction: Array,
                        turbulent_friction: Array) -> tuple[Array, Array]:
    """Friction factor f_0 of a single particle and its exponent c = dln f_0/dln Re."""
    d_p = 6 * (1 - void_fraction) / specific_area
    Re = vapor_velocity * d_p * vapor_density / vapor_viscosity
    laminar, transition = laminar_friction / Re, transition_friction / np.sqrt(Re)
    f_0 = laminar + transition + turbulent_friction
    return f_0, -(laminar + 0.5 * transition) / f_0


_STICHLMAIR = Validity({}, None, "stichlmair_1989", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN)


@correlation("dry pressure drop", "random and structured packings", "Pa m-1", _STICHLMAIR)
def stichlmair_dry(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values, specific_area: Values,
                   void_fraction: Values, laminar_friction: Values, transition_friction: Values,
                   turbulent_friction: Values) -> Array:
    """Dry pressure drop by Stichlmair, Bravo and Fair [Pa/m].

    0.75 f_0 (1 - eps)/eps^4.65 rho u^2/d_p, f_0 = C_1/Re + C_2/Re^0.5 + C_3, d_p = 6 (1 - eps)/a. `InputError` where
    all three constants are zero.
    """
    require("turbulent_friction", turbulent_friction, laminar_friction + transition_friction + turbulent_friction > 0,
            "at least one friction constant above zero")
    f_0, _ = stichlmair_friction(vapor_velocity, vapor_density, vapor_viscosity, specific_area, void_fraction,
                                 laminar_friction, transition_friction, turbulent_friction)
    d_p = 6 * (1 - void_fraction) / specific_area
    return (0.75 * f_0 * (1 - void_fraction) / void_fraction ** 4.65 * vapor_density * vapor_velocity ** 2 / d_p)


def _below_flooding(wet: Callable[[Array], tuple[Array, Array, Mask]], dry: Array) -> Array:
    """Dimensionless pressure drop of the irrigated bed, the lower root; `NoPhysicalRootError` where there is none."""
    y, failed = climbed_root(wet, dry)
    if failed.any():
        raise NoPhysicalRootError("vapor_velocity: the bed is beyond flooding", failed)
    return y


@correlation("pressure drop and holdup", "random and structured packings", "-; Pa m-1", _STICHLMAIR)
def stichlmair(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values, liquid_velocity: Values,
               liquid_density: Values, specific_area: Values, void_fraction: Values, laminar_friction: Values,
               transition_friction: Values, turbulent_friction: Values, *,
               loading_factor: Values = 20.0) -> HoldupAndPressureDrop:
    """Pressure drop and holdup of the irrigated bed by Stichlmair, Bravo and Fair [-; Pa/m].

    dP = dP_d ((1 - eps + h)/(1 - eps))^((2+c)/3) (eps/(eps - h))^4.65 with h = h_0 (1 + 20 (dP/(rho_L g H))^2),
    h_0 = 0.555 (u_L^2 a/(g eps^4.65))^(1/3), c = dln f_0/dln Re; the lower root. Raises `NoPhysicalRootError` beyond
    flooding, where none exists.
    """
    weight = liquid_density * GRAVITY
    dry = stichlmair_dry.silent(vapor_velocity, vapor_density, vapor_viscosity, specific_area, void_fraction,
                                laminar_friction, transition_friction, turbulent_friction) / weight
    _, c = stichlmair_friction(vapor_velocity, vapor_density, vapor_viscosity, specific_area, void_fraction,
                               laminar_friction, transition_friction, turbulent_friction)
    h_0 = stichlmair_preloading.silent(liquid_velocity, specific_area, void_fraction)
    power = (2 + c) / 3
    dry, h_0, eps, power, factor = np.broadcast_arrays(dry, h_0, void_fraction, power, loading_factor)

    def holdup(y: Array) -> Array:
        return np.asarray(h_0 * (1 + factor * y ** 2))

    def wet(y: Array) -> tuple[Array, Array, Mask]:
        h = holdup(y)
        full = h >= eps
        free = np.where(full, 1.0, eps - h)
        value = dry * ((1 - eps + h) / (1 - eps)) ** power * (eps / free) ** 4.65
        return value, value * (power / (1 - eps + h) + 4.65 / free) * 2 * factor * h_0 * y, full

    y = _below_flooding(wet, dry)
    return HoldupAndPressureDrop(holdup(y), y * weight)


@correlation("pressure drop", "random and structured packings", "Pa m-1", Validity(
    {"pressure": Range(None, 3e5)}, None, "robbins_1991", Confidence.VERIFIED,
    range_note="flow parameter above 0.3 tested with air and water only", error_note=UNKNOWN), dimensional=True)
def robbins(vapor_velocity: Values, vapor_density: Values, liquid_velocity: Values, liquid_density: Values,
            liquid_viscosity: Values, dry_packing_factor: Values, *, pressure: Values = 101325.0) -> Array:
    """Pressure drop by Robbins [Pa/m].

    t + 0.4 (L_f/20000)^0.1 t^4 inches of water per foot, t = 7.4e-8 G_f^2 10^(2.7e-5 L_f);
    G_f = G (0.075/rho_V)^0.5 (F_pd/20)^0.5, L_f = L (62.4/rho_L)(F_pd/20)^0.5 mu^0.1 (lb, h, ft, cP), the ratio turned
    over in L_f above F_pd = 200 1/ft and G_f times 10^(0.0187 rho_V) above one atmosphere (both from memory).
    """
    F = dry_packing_factor * FOOT / 20
    G = vapor_velocity * vapor_density / POUND_PER_HOUR_FT2
    L = liquid_velocity * liquid_density / POUND_PER_HOUR_FT2
    rho_V = vapor_density / POUND_PER_FT3
    G_f = G * np.sqrt(0.075 / rho_V * F) * np.where(pressure > 101325.0, 10 ** (0.0187 * rho_V), 1.0)
    L_f = (L * 62.4 / (liquid_density / POUND_PER_FT3) * np.where(F > 10, 1 / np.sqrt(F), np.sqrt(F))
           * (liquid_viscosity * 1e3) ** 0.1)
    t = 7.4e-8 * G_f ** 2 * 10 ** (2.7e-5 * L_f)
    return INCH_WATER_PER_FOOT * (t + 0.4 * (L_f / 20000) ** 0.1 * t ** 4)


@correlation("pressure drop", "structured packings", "Pa m-1", Validity(
    {}, None, "bravo_1986", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def bravo_rocha_fair(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values, liquid_velocity: Values,
                     void_fraction: Values, corrugation_base: Values, corrugation_height: Values,
                     corrugation_side: Values, corrugation_angle: Values, *, wet_constant: Values = 3.0) -> Array:
    """Pressure drop of a structured packing by Bravo, Rocha and Fair 1986 [Pa/m].

    (0.171 + 92.7/Re)(rho_V U^2/d_eq)(1 - C_0 Fr^0.5)^-5, U = u_V/(eps sin theta), Re = d_eq U rho_V/mu_V,
    Fr = u_L^2/(d_eq g). `NoPhysicalRootError` where C_0 Fr^0.5 reaches one.
    """
    d = bravo_equivalent_diameter(corrugation_base, corrugation_height, corrugation_side)
    U = vapor_velocity / (void_fraction * np.sin(corrugation_angle))
    Re = d * U * vapor_density / vapor_viscosity
    room = 1 - wet_constant * liquid_velocity / np.sqrt(d * GRAVITY)
    if (room <= 0).any():
        raise NoPhysicalRootError("liquid_velocity: the channels are full", room <= 0)
    return (0.171 + 92.7 / Re) * vapor_density * U ** 2 / d * room ** -5.0


@correlation("dry pressure drop", "structured packings", "Pa m-1", Validity(
    {}, None, "rocha_1993", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN))
def rocha_bravo_fair_dry(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
                         void_fraction: Values, corrugation_side: Values, corrugation_angle: Values) -> Array:
    """Dry pressure drop of a structured packing by Rocha, Bravo and Fair [Pa/m].

    0.177 rho u^2/(S eps^2 sin^2 theta) + 88.774 mu u/(S^2 eps sin theta).
    """
    slope = void_fraction * np.sin(corrugation_angle)
    return (0.177 * vapor_density * vapor_velocity ** 2 / (corrugation_side * slope ** 2)
            + 88.774 * vapor_viscosity * vapor_velocity / (corrugation_side ** 2 * slope))


@correlation("pressure drop and holdup", "structured packings", "-; Pa m-1", Validity(
    {}, None, "rocha_1993", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def rocha_bravo_fair(vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values, liquid_velocity: Values,
                     liquid_density: Values, liquid_viscosity: Values, holdup_factor: Values, void_fraction: Values,
                     corrugation_side: Values, corrugation_angle: Values, *,
                     flood_pressure_gradient: Values = 1025.0) -> HoldupAndPressureDrop:
    """Pressure drop and holdup of a structured packing by Rocha, Bravo and Fair, solved together [-; Pa/m].

    dP = dP_d (1 - K_2 h)^-5, K_2 = 0.614 + 71.35 S; h = (4 F_t/S)^(2/3) (3 mu_L u_L/(rho_L sin theta eps g_eff))^(1/3),
    g_eff = g (rho_L - rho_V)/rho_L (1 - dP/dP_flood); F_t from `packing_area.rocha_bravo_fair_holdup_factor`. The
    lowest root; a second one, near the flooding value, has no meaning. `NoPhysicalRootError` where there is none.
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    S = corrugation_side
    K_2 = 0.614 + 71.35 * S
    dry = rocha_bravo_fair_dry.silent(vapor_velocity, vapor_density, vapor_viscosity, void_fraction, S,
                                      corrugation_angle)
    gravity = GRAVITY * (liquid_density - vapor_density) / liquid_density
    still = (4 * holdup_factor / S) ** (2 / 3) * np.cbrt(
        3 * liquid_viscosity * liquid_velocity
        / (liquid_density * np.sin(corrugation_angle) * void_fraction * gravity))
    dry, still, K_2 = np.broadcast_arrays(dry / flood_pressure_gradient, still, K_2)

    def holdup(y: Array) -> Array:
        return np.asarray(still * np.where(y < 1, 1 - y, 1.0) ** (-1 / 3))

    def wet(y: Array) -> tuple[Array, Array, Mask]:
        h = holdup(y)
        full = (y >= 1) | (K_2 * h >= 1)
        room = np.where(full, 1.0, 1 - K_2 * h)
        value = dry * room ** -5.0
        return value, value * 5 * K_2 / room * h / (3 * np.where(full, 1.0, 1 - y)), full

    y = _below_flooding(wet, dry)
    return HoldupAndPressureDrop(holdup(y), y * flood_pressure_gradient)
