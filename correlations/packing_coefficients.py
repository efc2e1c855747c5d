# mypy: disable-error-code="no-any-return"
"""Mass-transfer coefficients of packings.

The diffusivity may be that of a pair: shape (..., n, n) against per-stage arrays of shape (..., 1, 1). Every
coefficient is in m/s on concentrations and belongs to the interfacial area.
"""
from __future__ import annotations

import numpy as np

from .constants import GRAVITY
from .record import Values, correlation, require
from .validity import UNKNOWN, Array, Confidence, Validity


@correlation("liquid coefficient", "random packings", "m s-1", Validity(
    {}, 0.20, "onda_1968", Confidence.VERIFIED, range_note=UNKNOWN,
    error_note="claimed band, organic liquids and aqueous ones above about 0.050 N/m"))
def onda_liquid(diffusivity: Values, liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                specific_area: Values, wetted_area: Values, nominal_size: Values) -> Array:
    """Liquid coefficient of a random packing by Onda, Takeuchi and Okumoto [m/s].

    k_L (rho/(mu g))^(1/3) = 0.0051 (L/(a_w mu))^(2/3) Sc^(-1/2) (a d_p)^0.4: the wetted area in the Reynolds number.
    """
    Re = liquid_velocity * liquid_density / (wetted_area * liquid_viscosity)
    Sc = liquid_viscosity / (liquid_density * diffusivity)
    return (0.0051 * Re ** (2 / 3) / np.sqrt(Sc) * (specific_area * nominal_size) ** 0.4
            * np.cbrt(liquid_viscosity * GRAVITY / liquid_density))


@correlation("vapour coefficient", "random packings", "m s-1", Validity(
    {}, 0.30, "onda_1968", Confidence.VERIFIED, range_note=UNKNOWN,
    error_note="claimed band, absorption and vaporisation"))
def onda_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
               specific_area: Values, nominal_size: Values) -> Array:
    """Vapour coefficient of a random packing by Onda, Takeuchi and Okumoto [m/s].

    k/(a D) = C (G/(a mu))^0.7 Sc^(1/3) (a d_p)^-2, the total area throughout; C = 5.23, but 2.00 below 15 mm.
    """
    C = np.where(nominal_size < 0.015, 2.00, 5.23)
    Re = vapor_velocity * vapor_density / (specific_area * vapor_viscosity)
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    return C * specific_area * diffusivity * Re ** 0.7 * np.cbrt(Sc) * (specific_area * nominal_size) ** -2.0


_BILLET = Validity({}, 0.124, "billet_schultes_1999", Confidence.VERIFIED, range_note=UNKNOWN,
                   error_note="volumetric coefficients in absorption and desorption; 14.1 % in rectification")


@correlation("liquid coefficient", "random and structured packings", "m s-1", _BILLET)
def billet_schultes_liquid(diffusivity: Values, liquid_velocity: Values, liquid_holdup: Values,
                           specific_area: Values, void_fraction: Values, liquid_constant: Values) -> Array:
    """Liquid coefficient by Billet and Schultes [m/s]: C_L 12^(1/6) (u_L/h)^(1/2) (D/d_h)^(1/2).

    The holdup h is the actual one. A later form without h is the same where h is that of a laminar film.
    """
    d_h = 4 * void_fraction / specific_area
    require("liquid_holdup", liquid_holdup, liquid_holdup > 0, "a number above zero")
    return liquid_constant * 12 ** (1 / 6) * np.sqrt(liquid_velocity / liquid_holdup * diffusivity / d_h)


@correlation("vapour coefficient", "random and structured packings", "m s-1", _BILLET)
def billet_schultes_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values,
                          vapor_viscosity: Values, liquid_holdup: Values, specific_area: Values,
                          void_fraction: Values, vapor_constant: Values) -> Array:
    """Vapour coefficient by Billet and Schultes [m/s].

    C_V (a/d_h)^(1/2) (eps - h)^(-1/2) D (u rho/(a mu))^(3/4) Sc^(1/3). Benitez (2009) prints Sc^(2/3).
    """
    require("liquid_holdup", liquid_holdup, liquid_holdup < void_fraction, "a holdup below the void fraction")
    d_h = 4 * void_fraction / specific_area
    Re = vapor_velocity * vapor_density / (specific_area * vapor_viscosity)
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    return (vapor_constant * np.sqrt(specific_area / (d_h * (void_fraction - liquid_holdup))) * diffusivity
            * Re ** 0.75 * np.cbrt(Sc))


_SHULMAN = Validity({}, None, "shulman_1955", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN)


@correlation("vapour coefficient", "random packings", "m s-1", _SHULMAN)
def shulman_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
                  sphere_diameter: Values, void_fraction: Values, liquid_holdup: Values) -> Array:
    """Vapour coefficient of a random packing by Shulman and co-workers [m/s].

    k Sc^(2/3)/u = 1.195 (d_s G/(mu (1 - eps_o)))^-0.36, eps_o the void fraction less the liquid holdup.
    """
    require("liquid_holdup", liquid_holdup, liquid_holdup < void_fraction, "a holdup below the void fraction")
    Re = sphere_diameter * vapor_velocity * vapor_density / (vapor_viscosity * (1 - void_fraction + liquid_holdup))
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    return 1.195 * vapor_velocity * Re ** -0.36 * Sc ** (-2 / 3)


@correlation("liquid coefficient", "random packings", "m s-1", _SHULMAN)
def shulman_liquid(diffusivity: Values, liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                   sphere_diameter: Values) -> Array:
    """Liquid coefficient of a random packing by Shulman and co-workers [m/s]: k d_s/D = 25.1 (d_s L/mu)^0.45 Sc^0.5."""
    Re = sphere_diameter * liquid_velocity * liquid_density / liquid_viscosity
    Sc = liquid_viscosity / (liquid_density * diffusivity)
    return 25.1 * Re ** 0.45 * np.sqrt(Sc) * diffusivity / sphere_diameter


def bravo_equivalent_diameter(corrugation_base: Array, corrugation_height: Array, corrugation_side: Array) -> Array:
    """Equivalent diameter of a triangular channel, open and closed halves averaged, m."""
    B, h, S = corrugation_base, corrugation_height, corrugation_side
    return B * h * (1 / (B + 2 * S) + 1 / (2 * S))


def bravo_film_velocity(liquid_velocity: Array, liquid_density: Array, liquid_viscosity: Array,
                        corrugation_base: Array, corrugation_height: Array, corrugation_side: Array) -> Array:
    """Surface velocity of the vertical laminar film on the walls of the channels, m/s."""
    perimeter = (4 * corrugation_side + corrugation_base) / (corrugation_base * corrugation_height)
    flow = liquid_density * liquid_velocity / perimeter
    return 1.5 * flow / liquid_density * np.cbrt(liquid_density ** 2 * GRAVITY / (3 * liquid_viscosity * flow))


_BRAVO = Validity({}, None, "bravo_1985", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN)


@correlation("vapour coefficient", "structured packings of gauze", "m s-1", _BRAVO)
def bravo_rocha_fair_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values,
                           vapor_viscosity: Values, liquid_velocity: Values, liquid_density: Values,
                           liquid_viscosity: Values, void_fraction: Values, corrugation_base: Values,
                           corrugation_height: Values, corrugation_side: Values, corrugation_angle: Values) -> Array:
    """Vapour coefficient of a structured packing by Bravo, Rocha and Fair 1985 [m/s].

    k d_eq/D = 0.0338 (d_eq rho_V (U_V + U_L)/mu_V)^0.8 Sc^0.333, U_V = u_V/(eps sin theta), U_L the film's surface.
    """
    d = bravo_equivalent_diameter(corrugation_base, corrugation_height, corrugation_side)
    film = bravo_film_velocity(liquid_velocity, liquid_density, liquid_viscosity, corrugation_base, corrugation_height,
                               corrugation_side)
    Re = d * vapor_density * (vapor_velocity / (void_fraction * np.sin(corrugation_angle)) + film) / vapor_viscosity
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    return 0.0338 * Re ** 0.8 * Sc ** 0.333 * diffusivity / d


@correlation("liquid coefficient", "structured packings of gauze", "m s-1", Validity(
    {}, None, "bravo_1985", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN))
def bravo_rocha_fair_liquid(diffusivity: Values, liquid_velocity: Values, liquid_density: Values,
                            liquid_viscosity: Values, corrugation_base: Values, corrugation_height: Values,
                            corrugation_side: Values) -> Array:
    """Liquid coefficient of a structured packing by Bravo, Rocha and Fair 1985 [m/s]: 2 (D U_L/(pi S))^(1/2)."""
    film = bravo_film_velocity(liquid_velocity, liquid_density, liquid_viscosity, corrugation_base, corrugation_height,
                               corrugation_side)
    return 2 * np.sqrt(diffusivity * film / (np.pi * corrugation_side))


_ROCHA = Validity({}, None, "rocha_1996", Confidence.CROSS_CHECKED, range_note=UNKNOWN,
                  error_note=f"{UNKNOWN}; 20 to 25 % of the HETP, from memory")


@correlation("vapour coefficient", "structured packings", "m s-1", _ROCHA)
def rocha_bravo_fair_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values,
                           vapor_viscosity: Values, liquid_velocity: Values, liquid_holdup: Values,
                           void_fraction: Values, corrugation_side: Values, corrugation_angle: Values) -> Array:
    """Vapour coefficient of a structured packing by Rocha, Bravo and Fair [m/s].

    k S/D = 0.054 ((U_V + U_L) rho_V S/mu_V)^0.8 Sc^0.33, U_V = u_V/(eps (1 - h) sin theta),
    U_L = u_L/(eps h sin theta).
    """
    require("liquid_holdup", liquid_holdup, liquid_holdup > 0, "a number above zero")
    slope = void_fraction * np.sin(corrugation_angle)
    velocity = vapor_velocity / (slope * (1 - liquid_holdup)) + liquid_velocity / (slope * liquid_holdup)
    Re = velocity * vapor_density * corrugation_side / vapor_viscosity
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    return 0.054 * Re ** 0.8 * Sc ** 0.33 * diffusivity / corrugation_side


@correlation("liquid coefficient", "structured packings", "m s-1", _ROCHA)
def rocha_bravo_fair_liquid(diffusivity: Values, liquid_velocity: Values, liquid_holdup: Values,
                            void_fraction: Values, corrugation_side: Values, corrugation_angle: Values, *,
                            renewal_factor: Values = 0.9) -> Array:
    """Liquid coefficient of a structured packing by Rocha, Bravo and Fair [m/s]: 2 (D C_E U_L/(pi S))^(1/2)."""
    require("liquid_holdup", liquid_holdup, liquid_holdup > 0, "a number above zero")
    film = liquid_velocity / (void_fraction * liquid_holdup * np.sin(corrugation_angle))
    return 2 * np.sqrt(diffusivity * renewal_factor * film / (np.pi * corrugation_side))


_DELFT = Validity({}, None, "olujic_1999", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN)


def delft_film(liquid_velocity: Array, liquid_density: Array, liquid_viscosity: Array, specific_area: Array,
               corrugation_base: Array, corrugation_height: Array, corrugation_angle: Array) -> tuple[Array, Array]:
    """Sine of the slope of the liquid's path and thickness of the film, m."""
    rest = np.pi / 2 - corrugation_angle
    tangent = 1 / (np.tan(rest) * np.cos(np.arctan(corrugation_base / (2 * corrugation_height))))
    slope = tangent / np.sqrt(1 + tangent ** 2)
    return slope, np.cbrt(3 * liquid_viscosity * liquid_velocity / (liquid_density * GRAVITY * specific_area * slope))


def _delft_channel(film: Array, base: Array, height: Array, side: Array) -> Array:
    """Hydraulic diameter of the channel narrowed by the film, m."""
    free = base * height - 2 * film * side
    require("liquid_velocity", film, free > 0, "a film thinner than the channel")
    slant = np.sqrt((free / (2 * height)) ** 2 + (free / base) ** 2)
    return free ** 2 / (base * height) / (slant + free / (2 * height))


@correlation("vapour coefficient", "structured packings of sheet", "m s-1", _DELFT)
def delft_vapor(diffusivity: Values, vapor_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
                liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values, specific_area: Values,
                void_fraction: Values, corrugation_base: Values, corrugation_height: Values,
                corrugation_side: Values, corrugation_angle: Values, element_height: Values) -> Array:
    """Vapour coefficient of a corrugated-sheet packing by Olujic, Kamerbeek and de Graauw [m/s].

    Root of the squares of a laminar (0.664 Sc^(1/3) (Re d/l)^(1/2)) and a turbulent term (Re Sc xi phi/8 over
    1 + 12.7 (xi phi/8)^(1/2) (Sc^(2/3) - 1), times 1 + (d/l)^(2/3)); d the channel narrowed by the film, l its length,
    xi the friction factor of a rough tube, phi the gas-liquid part of the channel's perimeter.
    """
    slope, film = delft_film(liquid_velocity, liquid_density, liquid_viscosity, specific_area, corrugation_base,
                             corrugation_height, corrugation_angle)
    holdup = film * specific_area
    require("liquid_velocity", liquid_velocity, holdup < void_fraction, "a holdup below the void fraction")
    d = _delft_channel(film, corrugation_base, corrugation_height, corrugation_side)
    gas = vapor_velocity / ((void_fraction - holdup) * np.sin(corrugation_angle))
    liquid = liquid_velocity / (void_fraction * holdup * slope)
    Re = vapor_density * (gas + liquid) * d / vapor_viscosity
    Sc = vapor_viscosity / (vapor_density * diffusivity)
    rough = film / d / 3.7
    inner = rough - 5.02 / Re * np.log10(rough + 14.5 / Re)
    require("vapor_velocity", vapor_velocity, (inner > 0) & (inner < 1),
            "a turbulent flow: the friction factor of a rough tube has no value at this Reynolds number")
    xi = (-2 * np.log10(inner)) ** -2
    phi = 2 * corrugation_side / (corrugation_base + 2 * corrugation_side)
    slender = d * np.sin(corrugation_angle) / element_height
    laminar = 0.664 * np.cbrt(Sc) * np.sqrt(Re * slender)
    friction = xi * phi / 8
    turbulent = (Re * Sc * friction / (1 + 12.7 * np.sqrt(friction) * (Sc ** (2 / 3) - 1))
                 * (1 + slender ** (2 / 3)))
    return np.hypot(laminar, turbulent) * diffusivity / d


@correlation("liquid coefficient", "structured packings of sheet", "m s-1", _DELFT)
def delft_liquid(diffusivity: Values, liquid_velocity: Values, liquid_density: Values, liquid_viscosity: Values,
                 specific_area: Values, void_fraction: Values, corrugation_base: Values,
                 corrugation_height: Values, corrugation_side: Values, corrugation_angle: Values) -> Array:
    """Liquid coefficient of a corrugated-sheet packing by Olujic, Kamerbeek and de Graauw [m/s].

    2 (D U_L/(0.9 pi d))^(1/2), U_L the mean velocity of the film, d the channel narrowed by it.
    """
    slope, film = delft_film(liquid_velocity, liquid_density, liquid_viscosity, specific_area, corrugation_base,
                             corrugation_height, corrugation_angle)
    d = _delft_channel(film, corrugation_base, corrugation_height, corrugation_side)
    velocity = liquid_velocity / (void_fraction * film * specific_area * slope)
    return 2 * np.sqrt(diffusivity * velocity / (0.9 * np.pi * d))
