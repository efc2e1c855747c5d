# mypy: disable-error-code="no-any-return"
"""Liquid on the tray, crest over the weir, pressure drop, downcomer.

Heads are metres of clear liquid.
"""
from __future__ import annotations

import numpy as np

from .constants import GRAVITY
from .errors import NoPhysicalRootError
from .record import Values, correlation, require
from .validity import EXACT, UNKNOWN, Array, Confidence, Range, Validity


def _plain(source: str, confidence: Confidence = Confidence.VERIFIED, remark: str = "") -> Validity:
    """Neither range nor scatter known."""
    return Validity({}, None, source, confidence, range_note=f"{UNKNOWN}; {remark}" if remark else UNKNOWN,
                    error_note=UNKNOWN)


def _exact(source: str) -> Validity:
    return Validity({}, None, source, Confidence.VERIFIED, range_note=EXACT, error_note=EXACT)


@correlation("clear liquid height", "sieve trays", "m", _plain("aiche_1958"), dimensional=True)
def aiche_sieve_clear_liquid(weir_height: Values, weir_load: Values, active_velocity: Values,
                             vapor_density: Values) -> Array:
    """Clear liquid height on a sieve tray by the AIChE manual [m].

    0.0061 + 0.725 h_w - 0.238 h_w F + 1.225 W, W per mean width of flow; `InputError` where it is not positive.
    """
    F = active_velocity * np.sqrt(vapor_density)
    height = 6.1e-3 + 0.725 * weir_height - 0.238 * weir_height * F + 1.225 * weir_load
    require("active_velocity", active_velocity, height > 0, "a velocity low enough for a positive liquid height")
    return height


@correlation("clear liquid height", "bubble-cap trays", "m", _plain("aiche_1958"), dimensional=True)
def aiche_bubble_cap_clear_liquid(weir_height: Values, weir_load: Values, active_velocity: Values,
                                  vapor_density: Values) -> Array:
    """Clear liquid height on a bubble-cap tray by the AIChE manual [m].

    0.0419 + 0.19 h_w - 0.0135 F + 2.46 W, W per mean width of flow; `InputError` where it is not positive.
    """
    F = active_velocity * np.sqrt(vapor_density)
    height = 0.0419 + 0.19 * weir_height - 0.0135 * F + 2.46 * weir_load
    require("active_velocity", active_velocity, height > 0, "a velocity low enough for a positive liquid height")
    return height


@correlation("relative froth density", "sieve trays", "-", _plain("bennett_1983", remark="froth regime"),
             dimensional=True)
def bennett_froth_density(active_velocity: Values, vapor_density: Values, liquid_density: Values) -> Array:
    """Clear liquid height over froth height of a sieve tray by Bennett, Agrawal and Cook [-].

    exp(-12.55 K_s^0.91), K_s = u_a (rho_V/(rho_L - rho_V))^(1/2) in m/s.
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    K_s = active_velocity * np.sqrt(vapor_density / (liquid_density - vapor_density))
    return np.exp(-12.55 * K_s ** 0.91)


@correlation("clear liquid height", "sieve trays", "m", _plain("bennett_1983", remark="froth regime"),
             dimensional=True)
def bennett_clear_liquid(weir_height: Values, weir_load: Values, active_velocity: Values, vapor_density: Values,
                         liquid_density: Values) -> Array:
    """Clear liquid height on a sieve tray by Bennett, Agrawal and Cook [m].

    phi_e (h_w + C (W/phi_e)^(2/3)), C = 0.501 + 0.439 exp(-137.8 h_w), phi_e the relative froth density.
    """
    phi = bennett_froth_density.silent(active_velocity, vapor_density, liquid_density)
    C = 0.501 + 0.439 * np.exp(-137.8 * weir_height)
    return phi * (weir_height + C * (weir_load / phi) ** (2 / 3))


@correlation("froth height", "trays", "m", _exact("bennett_1983"))
def froth_height(clear_liquid_height: Values, froth_density: Values) -> Array:
    """Froth height [m]: clear liquid height over relative froth density."""
    return clear_liquid_height / froth_density


@correlation("froth height", "sieve trays", "m", _plain("bennett_1997", remark="top of the two-phase layer with jets"))
def bennett_two_phase_height(clear_liquid_height: Values, froth_density: Values, hole_diameter: Values,
                             active_velocity: Values, vapor_density: Values, liquid_density: Values,
                             hole_area_fraction: Values) -> Array:
    """Height of the two-phase layer of a sieve tray by Bennett and co-workers [m].

    h_L/phi_e + 7.79 (1 + 6.9 (d_h/h_L)^1.85) K_s^2/(phi_e g phi).
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    K_s2 = active_velocity ** 2 * vapor_density / (liquid_density - vapor_density)
    jets = 7.79 * (1 + 6.9 * (hole_diameter / clear_liquid_height) ** 1.85)
    return (clear_liquid_height / froth_density
            + jets * K_s2 / (froth_density * GRAVITY * hole_area_fraction))


@correlation("clear liquid height", "sieve trays", "m", _plain("colwell_1981", Confidence.MEMORY, "froth regime"))
def colwell_clear_liquid(weir_height: Values, weir_load: Values, active_velocity: Values, vapor_density: Values,
                         liquid_density: Values, hole_area_fraction: Values, *, weeping_fraction: Values = 0.0,
                         weir_constant: Values = 0.485897) -> Array:
    """Clear liquid height on a sieve tray by Colwell [m].

    h_c = alpha (h_w + h_ow), alpha = 1/(1 + 12.6 Fr^0.4 phi^-0.25), Fr = rho_V u_a^2/(g h_c (rho_L - rho_V)),
    h_ow = K (W (1 - f)/(C_d alpha))^(2/3); C_d = 0.61 + 0.08 x for x = h_ow/h_w below 8.135, else 1.06 (1 + 1/x)^1.5.
    The default K follows from weir theory; a recalled constant in US units does not agree with it and is not used.
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    froude = vapor_density * active_velocity ** 2 / (GRAVITY * (liquid_density - vapor_density))
    load = weir_constant * (weir_load * (1 - weeping_fraction)) ** (2 / 3)
    height = np.asarray(weir_height + load)
    # The map has a logarithmic slope below 0.4 everywhere: 50 passes would end far below rounding.
    for _ in range(50):
        alpha = 1 / (1 + 12.6 * (froude / height) ** 0.4 * hole_area_fraction ** -0.25)
        before = height
        height = alpha * (weir_height + _colwell_crest(load / alpha ** (2 / 3), weir_height))
        if (np.abs(height - before) <= 1e-15 * height).all():
            break
    return height


def _colwell_crest(base: Array, weir_height: Array) -> Array:
    """h_ow from h_ow C_d^(2/3) = base."""
    high = base / 1.06 ** (2 / 3) - weir_height
    weir = np.where(weir_height > 0, weir_height, 1.0)
    A = np.where(high < 8.135 * weir, base / weir, 1.0)
    x = A / 0.61 ** (2 / 3)
    for _ in range(30):  # Newton on a convex increasing function from above: monotone
        C = 0.61 + 0.08 * x
        root = np.cbrt(C)
        step = (x * root ** 2 - A) / (root ** 2 + (2 / 3) * 0.08 * x / root)
        x = x - step
        if (np.abs(step) <= 1e-15 * x).all():
            break
    return np.where(high < 8.135 * weir_height, weir_height * x, high)


@correlation("clear liquid height", "sieve trays", "m", Validity(
    {"weir_height": Range(0.025, 0.100)}, None, "hofhuis_zuiderweg_1979", Confidence.VERIFIED, error_note=UNKNOWN))
def hofhuis_zuiderweg_clear_liquid(weir_height: Values, pitch: Values, flow_parameter: Values,
                                   weir_per_area: Values) -> Array:
    """Clear liquid height on a sieve tray by Hofhuis and Zuiderweg [m]: 0.6 h_w^0.5 p^0.25 (FP/b)^0.25."""
    return 0.6 * np.sqrt(weir_height) * (pitch * flow_parameter / weir_per_area) ** 0.25


@correlation("residence time", "trays", "s", _exact("aiche_1958"))
def liquid_residence_time(clear_liquid_height: Values, path_length: Values, weir_load: Values) -> Array:
    """Mean residence time of the liquid on the active area [s]: h_L Z/W, W per mean width of flow."""
    return clear_liquid_height * path_length / weir_load


@correlation("residence time", "trays", "s", _exact("chan_fair_1984"))
def vapor_residence_time(clear_liquid_height: Values, froth_density: Values, active_velocity: Values) -> Array:
    """Mean residence time of the vapour in the froth [s]: (1 - phi_e) h_L/(phi_e u_a)."""
    return (1 - froth_density) * clear_liquid_height / (froth_density * active_velocity)


@correlation("weir crest", "trays", "m", _plain("treybal", remark="segmental weir of straight edge"), dimensional=True)
def francis_weir_crest(weir_load: Values, *, weir_factor: Values = 1.0) -> Array:
    """Height of the liquid over a straight weir by the Francis formula [m]: 0.664 F_w W^(2/3)."""
    return 0.664 * weir_factor * weir_load ** (2 / 3)


@correlation("weir constriction", "trays", "-", _exact("treybal"), dimensional=True)
def treybal_effective_weir(liquid_flow: Values, weir_length: Values, column_diameter: Values) -> Array:
    """Effective over actual length of a segmental weir, narrowed by the tower wall, by Treybal [-].

    (W_e/W)^2 = (D/W)^2 - {((D/W)^2 - 1)^(1/2) + 2 h/W}^2 with the crest h = 0.666 (q/W)^(2/3) (W/W_e)^(2/3). The weir
    factor of the crest is (W/W_e)^(2/3). Raises `NoPhysicalRootError` where the crest fills the segment.
    """
    require("weir_length", weir_length, weir_length < column_diameter, "a chord shorter than the column diameter")
    ratio = column_diameter / weir_length
    side = np.sqrt(ratio ** 2 - 1)
    crest = 2 * 0.666 * (liquid_flow / weir_length) ** (2 / 3) / weir_length
    r = np.ones(np.broadcast_shapes(np.shape(ratio), np.shape(crest)))
    failed = np.zeros(r.shape, bool)
    for _ in range(60):  # the residual is convex in r: Newton falls monotonically from 1 to the largest root
        inner = side + crest * r ** (-2 / 3)
        slope = 2 * r - (4 / 3) * inner * crest * r ** (-5 / 3)
        step = (r ** 2 - ratio ** 2 + inner ** 2) / np.where(slope > 0, slope, 1.0)
        failed |= (slope <= 0) | (r - step <= 0)
        step = np.where(failed, 0.0, step)
        r = r - step
        if (np.abs(step) < 1e-14).all():
            break
    failed |= np.abs(step) >= 1e-14
    if failed.any():
        raise NoPhysicalRootError("liquid_flow: the crest fills the segment of the weir", failed)
    return r


@correlation("orifice coefficient", "sieve trays", "-", Validity(
    {"diameter_over_thickness": Range(1.0, None)}, None, "leibson_1957", Confidence.VERIFIED,
    range_note="fit of a chart", error_note=UNKNOWN),
    variables={"diameter_over_thickness": lambda hole_diameter, deck_thickness: hole_diameter / deck_thickness})
def leibson_orifice_coefficient(hole_diameter: Values, deck_thickness: Values) -> Array:
    """Orifice coefficient of sieve holes, a fit of the chart of Leibson and co-workers [-].

    0.85032 - 0.04231 d/l + 0.0017954 (d/l)^2, d the hole diameter, l the deck thickness.
    """
    ratio = hole_diameter / deck_thickness
    return 0.85032 - 0.04231 * ratio + 0.0017954 * ratio ** 2


@correlation("orifice coefficient", "sieve trays", "-", _plain("lockett_1986", Confidence.MEMORY))
def thickness_orifice_coefficient(hole_diameter: Values, deck_thickness: Values,
                                  hole_area_fraction: Values) -> Array:
    """Orifice coefficient of sieve holes with the effect of the hole area [-]: 0.74 phi + exp(0.29 l/d - 0.56)."""
    return 0.74 * hole_area_fraction + np.exp(0.29 * deck_thickness / hole_diameter - 0.56)


@correlation("dry pressure drop", "sieve trays", "m", _plain("leibson_1957"), dimensional=True)
def sieve_dry_head(hole_velocity: Values, orifice_coefficient: Values, vapor_density: Values,
                   liquid_density: Values) -> Array:
    """Dry pressure drop of a sieve tray as an orifice [m of liquid]: 0.0508 (u_h/C_o)^2 rho_V/rho_L."""
    return 0.0508 * (hole_velocity / orifice_coefficient) ** 2 * vapor_density / liquid_density


@correlation("dry pressure drop", "sieve trays", "m", _plain("treybal"))
def treybal_dry_head(hole_velocity: Values, vapor_density: Values, liquid_density: Values, hole_diameter: Values,
                     deck_thickness: Values, hole_to_net_area: Values, friction_factor: Values) -> Array:
    """Dry pressure drop of a sieve tray as entry, friction and exit loss by Treybal [m of liquid].

    C_o (0.40 (1.25 - A_h/A_n) + 4 l f/d + (1 - A_h/A_n)^2) u_h^2 rho_V/(2 g rho_L), C_o = 1.09 (d/l)^0.25.
    """
    C_o = 1.09 * (hole_diameter / deck_thickness) ** 0.25
    loss = (0.40 * (1.25 - hole_to_net_area) + 4 * deck_thickness * friction_factor / hole_diameter
            + (1 - hole_to_net_area) ** 2)
    return C_o * loss * hole_velocity ** 2 * vapor_density / (2 * GRAVITY * liquid_density)


@correlation("dry pressure drop", "valve trays", "m", _plain(
    "klein_1982", Confidence.DOUBTFUL, "the loss constants belong to the valve and are the user's data"))
def valve_dry_head(hole_velocity: Values, vapor_density: Values, liquid_density: Values, closed_loss: Values,
                   open_loss: Values, valve_thickness: Values, valve_density: Values) -> Array:
    """Dry pressure drop of a valve tray [m of liquid]: the larger of valves partly open and fully open.

    Partly open 1.35 t rho_M/rho_L + K_1 u_h^2 rho_V/rho_L, fully open K_2 u_h^2 rho_V/rho_L.
    """
    head = hole_velocity ** 2 * vapor_density / liquid_density
    lifting = 1.35 * valve_thickness * valve_density / liquid_density + closed_loss * head
    return np.maximum(lifting, open_loss * head)


@correlation("residual pressure drop", "sieve trays", "m", _plain("bennett_1983", Confidence.MEMORY, "small holes"))
def bennett_residual_head(liquid_density: Values, vapor_density: Values, surface_tension: Values,
                          hole_diameter: Values) -> Array:
    """Residual pressure drop of a sieve tray by Bennett, Agrawal and Cook [m of liquid].

    (6/(1.27 rho_L)) (sigma/g)^(2/3) ((rho_L - rho_V)/d_h)^(1/3).
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    return (6 / (1.27 * liquid_density) * (surface_tension / GRAVITY) ** (2 / 3)
            * np.cbrt((liquid_density - vapor_density) / hole_diameter))


@correlation("residual pressure drop", "sieve trays", "m", _plain("treybal"))
def bubble_residual_head(liquid_density: Values, surface_tension: Values, hole_diameter: Values) -> Array:
    """Residual pressure drop as the excess pressure in a small bubble [m of liquid]: 6 sigma/(g rho d)."""
    return 6 * surface_tension / (GRAVITY * liquid_density * hole_diameter)


@correlation("pressure drop", "trays", "Pa", _exact("common_practice"))
def tray_pressure_drop(dry_head: Values, clear_liquid_height: Values, residual_head: Values,
                       liquid_density: Values) -> Array:
    """Pressure drop of a tray [Pa]: dry, liquid and residual heads added, times g rho_L."""
    return (dry_head + clear_liquid_height + residual_head) * GRAVITY * liquid_density


@correlation("underflow head", "trays", "m", _plain("sinnott"), dimensional=True)
def downcomer_underflow_head(liquid_flow: Values, apron_area: Values) -> Array:
    """Head loss of the liquid under the downcomer apron [m of liquid]: 0.166 (q/A)^2."""
    return 0.166 * (liquid_flow / apron_area) ** 2


@correlation("downcomer backup", "trays", "m", _exact("common_practice"))
def downcomer_backup(total_head: Values, weir_height: Values, weir_crest: Values, underflow_head: Values,
                     gradient_head: Values = 0.0) -> Array:
    """Clear liquid in the downcomer [m]: tray pressure drop, weir, crest, gradient and underflow heads added."""
    return total_head + weir_height + weir_crest + underflow_head + gradient_head


@correlation("downcomer backup", "trays", "m", _plain(
    "common_practice", Confidence.MEMORY, "froth density 0.6 easy, 0.5 usual, 0.3 to 0.4 foaming; the level must stay "
                                          "below spacing and weir height together"))
def downcomer_froth_height(backup: Values, downcomer_froth_density: Values) -> Array:
    """Level of the froth in the downcomer [m]: backup over its relative froth density."""
    return backup / downcomer_froth_density


@correlation("residence time", "trays", "s", _plain(
    "common_practice", Confidence.MEMORY, "at least 3 s for clean, 5 to 7 s for foaming liquids"))
def downcomer_residence_time(downcomer_area: Values, backup: Values, liquid_flow: Values) -> Array:
    """Residence time of the liquid in the downcomer [s]: A h/q."""
    return downcomer_area * backup / liquid_flow
