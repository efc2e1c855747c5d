# mypy: disable-error-code="no-any-return"
"""Limits of operation of trays: flooding, entrainment, weeping."""
from __future__ import annotations

import numpy as np

from .constants import GRAVITY
from .record import Values, correlation, require
from .validity import UNKNOWN, Array, Confidence, Range, Validity


def _density_root(vapor_density: Array, liquid_density: Array) -> Array:
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    return np.sqrt((liquid_density - vapor_density) / vapor_density)


_FAIR_NOTE = "weir up to 15 % of the spacing, holes up to 12.7 mm"


def _fair_velocity(C: Array, surface_tension: Array, vapor_density: Array, liquid_density: Array,
                   hole_area_fraction: Array, foaming_factor: Array) -> Array:
    holes = np.where(hole_area_fraction >= 0.10, 1.0, 1 - 5 * (0.10 - hole_area_fraction))
    tension = (surface_tension / 0.020) ** 0.2
    return C * tension * foaming_factor * holes * _density_root(vapor_density, liquid_density)


@correlation("flooding velocity on the net area", "sieve trays", "m s-1", Validity(
    {"flow_parameter": Range(None, 1.0), "hole_area_fraction": Range(0.06, None)}, None, "fair_1961",
    Confidence.VERIFIED, range_note=f"fit of the chart; {_FAIR_NOTE}", error_note=UNKNOWN), dimensional=True)
def fair_flooding(flow_parameter: Values, tray_spacing: Values, surface_tension: Values, vapor_density: Values,
                  liquid_density: Values, hole_area_fraction: Values, foaming_factor: Values = 1.0) -> Array:
    """Entrainment-flooding velocity on the net area of a sieve tray by Fair [m/s].

    u = C (sigma/0.020)^0.2 F_F F_h ((rho_L - rho_V)/rho_V)^(1/2), C = alpha lg(1/X) + beta, alpha = 0.0744 t + 0.01173,
    beta = 0.0304 t + 0.015, X the flow parameter, 0.1 where it is less. F_h = 1 from a hole area fraction of 0.10 on,
    0.9 at 0.08, 0.8 at 0.06. F_F lowers it for foaming systems.
    """
    X = np.maximum(flow_parameter, 0.1)
    C = (0.0744 * tray_spacing + 0.01173) * np.log10(1 / X) + 0.0304 * tray_spacing + 0.015
    require("flow_parameter", flow_parameter, C > 0, "a flow parameter low enough for a positive capacity")
    return _fair_velocity(C, surface_tension, vapor_density, liquid_density, hole_area_fraction, foaming_factor)


@correlation("flooding velocity on the net area", "sieve trays", "m s-1", Validity(
    {"hole_area_fraction": Range(0.06, None)}, None, "lygeros_magoulas_1986", Confidence.CROSS_CHECKED,
    range_note=f"fit of Fair's chart; {_FAIR_NOTE}", error_note=f"{UNKNOWN}; 3 to 12 % above the other fit"),
    dimensional=True)
def lygeros_magoulas_flooding(flow_parameter: Values, tray_spacing: Values, surface_tension: Values,
                              vapor_density: Values, liquid_density: Values, hole_area_fraction: Values,
                              foaming_factor: Values = 1.0) -> Array:
    """`fair_flooding` with the chart as fitted by Lygeros and Magoulas [m/s].

    C = 0.0105 + 8.127e-4 t^0.755 exp(-1.463 X^0.842), t in mm.
    """
    C = 0.0105 + 8.127e-4 * (1e3 * tray_spacing) ** 0.755 * np.exp(-1.463 * flow_parameter ** 0.842)
    return _fair_velocity(C, surface_tension, vapor_density, liquid_density, hole_area_fraction, foaming_factor)


@correlation("flooding velocity on the net area", "sieve and valve trays", "m s-1", Validity(
    {}, 0.20, "kister_haas_1990", Confidence.CROSS_CHECKED, range_note=UNKNOWN,
    error_note="band of 15 to 20 %, from memory"), dimensional=True)
def kister_haas_flooding(weir_load: Values, tray_spacing: Values, hole_diameter: Values, hole_area_fraction: Values,
                         surface_tension: Values, vapor_density: Values, liquid_density: Values) -> Array:
    """Entrainment-flooding velocity on the net area by Kister and Haas [m/s].

    C = 0.0277 (d^2 sigma/rho_L)^0.125 (rho_V/rho_L)^0.1 (t/h_ct)^0.5 (mm, mN/m), h_ct = h_w (996/rho_L)^((1-n)/2),
    h_w = 0.497 A_f^-0.791 d^0.833/(1 + 0.013 Q^-0.59 A_f^-1.79), n = 0.00091 d/A_f, Q in m3/(h m).
    """
    d, A_f = 1e3 * hole_diameter, hole_area_fraction
    water = 0.497 * A_f ** -0.791 * d ** 0.833 / (1 + 0.013 * (3600 * weir_load) ** -0.59 * A_f ** -1.79)
    n = 0.00091 * d / A_f
    clear = water * (996 / liquid_density) ** (0.5 * (1 - n))
    root = _density_root(vapor_density, liquid_density)
    C = (0.0277 * (d ** 2 * 1e3 * surface_tension / liquid_density) ** 0.125
         * (vapor_density / liquid_density) ** 0.1 * np.sqrt(1e3 * tray_spacing / clear))
    return C * root


@correlation("entrainment, liquid over vapour by mass", "sieve trays", "-", Validity(
    {}, None, "hunt_1955", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def hunt_entrainment(net_velocity: Values, surface_tension: Values, tray_spacing: Values,
                     clear_liquid_height: Values) -> Array:
    """Entrained liquid over vapour, by mass, by Hunt, Hanson and Wilke [-].

    7.75e-5 (0.073/sigma)(u_n/(t - 2.5 h_L))^3.2. `InputError` where the froth, 2.5 h_L, reaches the tray above.
    """
    room = tray_spacing - 2.5 * clear_liquid_height
    require("clear_liquid_height", clear_liquid_height, room > 0, "a height below the spacing over 2.5")
    return 7.75e-5 * 0.073 / surface_tension * (net_velocity / room) ** 3.2


@correlation("entrainment, liquid over vapour by mass", "sieve trays", "-", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def bennett_entrainment(froth_height: Values, tray_spacing: Values, clear_liquid_height: Values,
                        hole_diameter: Values, vapor_density: Values, liquid_density: Values) -> Array:
    """Entrained liquid over vapour, by mass, by Bennett and co-workers [-].

    0.00335 (h_2/t)^1.1 (rho_L/rho_V)^0.5 (h_L/h_2)^k, k = 0.5 (1 - tanh(1.3 ln(h_L/d) - 0.15)), h_2 the two-phase
    height, `tray_hydraulics.bennett_two_phase_height`.
    """
    k = 0.5 * (1 - np.tanh(1.3 * np.log(clear_liquid_height / hole_diameter) - 0.15))
    return (0.00335 * (froth_height / tray_spacing) ** 1.1 * np.sqrt(liquid_density / vapor_density)
            * (clear_liquid_height / froth_height) ** k)


def _hole_froude(hole_velocity: Array, clear_liquid_height: Array, vapor_density: Array,
                 liquid_density: Array) -> Array:
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    return vapor_density * hole_velocity ** 2 / (GRAVITY * clear_liquid_height * (liquid_density - vapor_density))


_WEEP_NOTE = f"{UNKNOWN}; holes from 3 mm, below about 11 bar, not for large trays at low load"


@correlation("weeping velocity on the hole area", "sieve trays", "m s-1", Validity(
    {}, 0.30, "lockett_banik_1986", Confidence.CROSS_CHECKED, range_note=_WEEP_NOTE,
    error_note="band of 15 to 30 %"), dimensional=True)
def lockett_banik_weeping(hole_velocity: Values, clear_liquid_height: Values, vapor_density: Values,
                          liquid_density: Values) -> Array:
    """Liquid that weeps, as a velocity on the hole area, by Lockett and Banik [m/s].

    0.0200 Fr^-0.5 - 0.0300, Fr = rho_V u_h^2/(g h_c (rho_L - rho_V)); none from Fr = 0.444 on.
    """
    Fr = _hole_froude(hole_velocity, clear_liquid_height, vapor_density, liquid_density)
    return np.maximum(0.0200 / np.sqrt(Fr) - 0.0300, 0.0)


@correlation("weeping velocity on the hole area", "sieve trays", "m s-1", Validity(
    {}, 0.30, "colwell_obara", Confidence.CROSS_CHECKED, range_note=_WEEP_NOTE, error_note="band of 15 to 30 %"),
    dimensional=True)
def colwell_obara_weeping(hole_velocity: Values, clear_liquid_height: Values, vapor_density: Values,
                          liquid_density: Values) -> Array:
    """Liquid that weeps, as a velocity on the hole area, by Colwell and O'Bara [m/s].

    1.25022e-3 Fr^-1.533 from Fr = 0.2 on, the line of Lockett and Banik below; the two meet there.
    """
    Fr = _hole_froude(hole_velocity, clear_liquid_height, vapor_density, liquid_density)
    return np.where(Fr > 0.2, 1.25022e-3 * Fr ** -1.533, 0.0200 / np.sqrt(Fr) - 0.0300)


@correlation("hole velocity at the weep point", "sieve trays", "m s-1", Validity(
    {}, None, "treybal", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def treybal_weep_point(vapor_density: Values, vapor_viscosity: Values, liquid_density: Values,
                       surface_tension: Values, hole_diameter: Values, pitch: Values, deck_thickness: Values,
                       path_length: Values, active_area: Values) -> Array:
    """Hole velocity below which a sieve tray weeps, by Treybal [m/s].

    u mu_V/sigma = 0.0229 ((mu_V^2/(sigma rho_V d))(rho_L/rho_V))^0.379 (l/d)^0.293 (2 A_a d/(3^0.5 p^3))^q,
    q = 2.8/(Z/d)^0.724, l the deck thickness, p the pitch, Z the path length.
    """
    d = hole_diameter
    inertia = vapor_viscosity ** 2 * liquid_density / (surface_tension * vapor_density ** 2 * d)
    layout = 2 * active_area * d / (np.sqrt(3) * pitch ** 3)
    return (0.0229 * surface_tension / vapor_viscosity * inertia ** 0.379 * (deck_thickness / d) ** 0.293
            * layout ** (2.8 / (path_length / d) ** 0.724))


@correlation("hole velocity at the weep point", "sieve trays", "m s-1", Validity(
    {}, None, "sinnott", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def sinnott_weep_point(vapor_density: Values, hole_diameter: Values, sinnott_constant: Values) -> Array:
    """Hole velocity below which a sieve tray weeps, by Sinnott's form of Eduljee's chart [m/s].

    (K_2 - 0.9 (25.4 - d))/rho_V^0.5, d in mm; K_2 is read from the chart against weir height and crest.
    """
    u = (sinnott_constant - 0.9 * (25.4 - 1e3 * hole_diameter)) / np.sqrt(vapor_density)
    require("sinnott_constant", sinnott_constant, u > 0, "a constant that gives a velocity above zero")
    return u


@correlation("hole velocity at the weep point", "sieve trays", "m s-1", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def froude_weep_point(clear_liquid_height: Values, vapor_density: Values, liquid_density: Values) -> Array:
    """Hole velocity at the Froude number 0.5, above which a sieve tray does not weep [m/s].

    Fr = (rho_V u_h^2/(rho_L g h_L))^(1/2).
    """
    return 0.5 * np.sqrt(liquid_density * GRAVITY * clear_liquid_height / vapor_density)


@correlation("active-area velocity at the weep point", "sieve trays", "m s-1", Validity(
    {}, None, "zuiderweg_1982", Confidence.DOUBTFUL, range_note=f"{UNKNOWN}; emulsion regime", error_note=UNKNOWN))
def zuiderweg_weep_point(clear_liquid_height: Values, hole_area_fraction: Values, vapor_density: Values,
                         liquid_density: Values) -> Array:
    """Vapour velocity on the bubbling area at the weep point in the emulsion regime, by Zuiderweg [m/s].

    u (rho_V/(rho_L - rho_V))^(1/2) = 0.45 F_h (g h_L)^(1/2); the powers were read from a poor print.
    """
    capacity = 0.45 * hole_area_fraction * np.sqrt(GRAVITY * clear_liquid_height)
    return capacity * _density_root(vapor_density, liquid_density)
