# mypy: disable-error-code="no-any-return"
"""Limits of operation of packed beds: loading, flooding, minimum wetting."""
from __future__ import annotations

from typing import NamedTuple

import numpy as np

from .constants import FOOT, GRAVITY, INCH_WATER_PER_FOOT
from .errors import NoPhysicalRootError
from .packing_pressure_drop import stichlmair_friction
from .record import Values, correlation, require
from .rootfinding import bracketed_root
from .validity import EXACT, UNKNOWN, Array, Confidence, Range, Validity

KG_PER_POUND_FT2_S = 0.45359237 / FOOT ** 2
POUND_PER_FT3 = 0.45359237 / FOOT ** 3


class FloodPoint(NamedTuple):
    """Vapour velocity and liquid holdup at flooding."""

    vapor_velocity: Array
    """m/s, superficial."""
    liquid_holdup: Array
    """-"""


class FloodState(NamedTuple):
    """Vapour velocity and pressure drop at flooding."""

    vapor_velocity: Array
    """m/s, superficial."""
    pressure_gradient: Array
    """Pa/m."""


def _flow_parameter(flow_ratio: Array, vapor_density: Array, liquid_density: Array) -> Array:
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    return flow_ratio * np.sqrt(vapor_density / liquid_density)


_BILLET = Validity({}, 0.05, "billet_schultes_1999", Confidence.VERIFIED, range_note=UNKNOWN)


@correlation("loading velocity", "random and structured packings", "m s-1", _BILLET)
def billet_schultes_loading(flow_ratio: Values, vapor_density: Values, liquid_density: Values,
                            vapor_viscosity: Values, liquid_viscosity: Values, specific_area: Values,
                            void_fraction: Values, loading_constant: Values) -> Array:
    """Vapour velocity at the loading point for a fixed L/V by Billet and Schultes [m/s].

    u = (g/psi)^(1/2) (eps a^(-1/6) - a^(1/2) B^(1/3)) B^(1/6) (rho_L/rho_V)^(1/2), B = 12 mu_L u_L/(g rho_L),
    psi = (g/C^2) (X (mu_L/mu_V)^0.4)^(-2n); C = C_S, n = -0.326 up to X = 0.4, above C = 0.695 C_S
    (mu_L/mu_V)^0.1588, n = -0.723.
    """
    X = _flow_parameter(flow_ratio, vapor_density, liquid_density)
    viscosities = liquid_viscosity / vapor_viscosity
    n = np.where(X <= 0.4, -0.326, -0.723)
    C = loading_constant * np.where(X <= 0.4, 1.0, 0.695 * viscosities ** 0.1588)
    scale = C * (X * viscosities ** 0.4) ** n * np.sqrt(liquid_density / vapor_density)
    b = 12 * liquid_viscosity * vapor_density * flow_ratio / (GRAVITY * liquid_density ** 2)
    # With u = t^6 the equation is t^5 + p t^2 = q, increasing and convex: Newton falls from above.
    p = scale * np.sqrt(specific_area * b)
    q = scale * void_fraction * (b / specific_area) ** (1 / 6)
    t = np.minimum(q ** 0.2, np.sqrt(q / p))
    for _ in range(40):
        step = (t ** 5 + p * t ** 2 - q) / (5 * t ** 4 + 2 * p * t)
        t = t - step
        if (np.abs(step) <= 1e-15 * t).all():
            break
    return t ** 6


@correlation("flooding velocity and holdup", "random and structured packings", "m s-1; -", _BILLET)
def billet_schultes_flooding(flow_ratio: Values, vapor_density: Values, liquid_density: Values,
                             vapor_viscosity: Values, liquid_viscosity: Values, specific_area: Values,
                             void_fraction: Values, flooding_constant: Values) -> FloodPoint:
    """Vapour velocity and holdup at the flooding point for a fixed L/V by Billet and Schultes [m/s; -].

    u = (2 g/psi)^(1/2) (eps - h)^1.5 eps^-0.5 (h/a)^0.5 (rho_L/rho_V)^0.5, h^3 (3 h - eps) = (6/g) a^2 eps (mu_L/rho_L)
    (L/V)(rho_V/rho_L) u with eps/3 < h < eps; psi = (g/C^2) (X (mu_L/mu_V)^0.2)^(-2n); C = C_Fl, n = -0.194 up to
    X = 0.4, above C = 0.6244 C_Fl (mu_L/mu_V)^0.1028, n = -0.708.
    """
    X = _flow_parameter(flow_ratio, vapor_density, liquid_density)
    viscosities = liquid_viscosity / vapor_viscosity
    n = np.where(X <= 0.4, -0.194, -0.708)
    C = flooding_constant * np.where(X <= 0.4, 1.0, 0.6244 * viscosities ** 0.1028)
    scale = (np.sqrt(2) * C * (X * viscosities ** 0.2) ** n
             * np.sqrt(liquid_density / (vapor_density * void_fraction * specific_area)))
    load = (6 / GRAVITY * specific_area ** 2 * void_fraction * liquid_viscosity * flow_ratio * vapor_density
            / liquid_density ** 2)
    eps, k = np.broadcast_arrays(void_fraction, load * scale)
    h = bracketed_root(lambda h: h ** 2.5 * (3 * h - eps) - k * (eps - h) ** 1.5, eps / 3, eps)
    return FloodPoint(scale * (void_fraction - h) ** 1.5 * np.sqrt(h), h)


@correlation("flooding velocity", "random and structured packings", "m s-1", Validity(
    {}, None, "benitez", Confidence.VERIFIED, range_note=f"{UNKNOWN}; fit of the generalised chart",
    error_note=UNKNOWN), dimensional=True)
def generalized_flooding(flow_ratio: Values, vapor_density: Values, liquid_density: Values,
                         liquid_viscosity: Values, packing_factor: Values) -> Array:
    """Vapour velocity at flooding for a fixed L/V from the generalised chart [m/s].

    u (rho_V/(rho_L - rho_V))^(1/2) = (Y/(F_p mu^0.1))^(1/2) m/s, Y = exp(-(3.5021 + 1.028 ln X + 0.11093 ln^2 X)),
    F_p 1/ft, mu Pa s.
    """
    X = np.log(_flow_parameter(flow_ratio, vapor_density, liquid_density))
    Y = np.exp(-(3.5021 + 1.028 * X + 0.11093 * X ** 2))
    capacity = np.sqrt(Y / (packing_factor * FOOT * liquid_viscosity ** 0.1))
    return capacity * np.sqrt((liquid_density - vapor_density) / vapor_density)


@correlation("flooding velocity", "random packings", "m s-1", Validity(
    {}, None, "kessler_wankat_1988", Confidence.DOUBTFUL,
    range_note=f"{UNKNOWN}; fit of the generalised chart, checked for water only, the power of mu unsure",
    error_note=UNKNOWN), dimensional=True)
def kessler_wankat_flooding(flow_ratio: Values, vapor_density: Values, liquid_density: Values,
                            liquid_viscosity: Values, packing_factor: Values) -> Array:
    """Vapour velocity at flooding for a fixed L/V by the fit of Kessler and Wankat [m/s].

    lg(G^2 F_p mu^0.1 (rho_w/rho_L)/(rho_V rho_L g_c)) = -1.6678 - 1.085 lg X - 0.29655 (lg X)^2 (lb, s, ft, cP).
    """
    X = np.log10(_flow_parameter(flow_ratio, vapor_density, liquid_density))
    ordinate = 10 ** (-1.6678 - 1.085 * X - 0.29655 * X ** 2)
    heavy, light = liquid_density / POUND_PER_FT3, vapor_density / POUND_PER_FT3
    water, g_c = 62.4, 32.174
    G2 = ordinate * light * heavy * g_c / (packing_factor * FOOT * (liquid_viscosity * 1e3) ** 0.1 * water / heavy)
    return np.sqrt(G2) * KG_PER_POUND_FT2_S / vapor_density


@correlation("capacity parameter", "random and structured packings", "m0.5 s-1", Validity(
    {}, None, "kister_gill_1991", Confidence.VERIFIED, range_note=EXACT, error_note=EXACT), dimensional=True)
def capacity_parameter(vapor_velocity: Values, vapor_density: Values, liquid_density: Values,
                       liquid_viscosity: Values, packing_factor: Values) -> Array:
    """Ordinate of the semi-logarithmic pressure-drop chart in its own units [ft/s ft^-0.5 cSt^0.05].

    C_S F_p^0.5 nu^0.05, C_S = u (rho_V/(rho_L - rho_V))^(1/2) ft/s, F_p 1/ft, nu cSt. The curves of the chart have no
    accepted closed form: interpolate in them.
    """
    require("vapor_density", vapor_density, vapor_density < liquid_density, "a density below the liquid's")
    C_S = vapor_velocity * np.sqrt(vapor_density / (liquid_density - vapor_density)) / FOOT
    return C_S * np.sqrt(packing_factor * FOOT) * (liquid_viscosity / liquid_density * 1e6) ** 0.05


_FACTOR = {"packing_factor_per_foot": Range(9.0, 60.0)}


def _per_foot(packing_factor: Array) -> Array:
    return packing_factor * FOOT


@correlation("pressure drop at flooding", "random and structured packings", "Pa m-1", Validity(
    _FACTOR, None, "kister_gill_1991", Confidence.VERIFIED, error_note=UNKNOWN), dimensional=True,
    variables={"packing_factor_per_foot": _per_foot})
def kister_gill(packing_factor: Values) -> Array:
    """Pressure drop at flooding by Kister and Gill [Pa/m]: 0.115 F_p^0.7 inches of water per foot, F_p 1/ft."""
    return 0.115 * INCH_WATER_PER_FOOT * _per_foot(packing_factor) ** 0.7


@correlation("pressure drop at flooding", "random and structured packings", "Pa m-1", Validity(
    {"packing_factor_per_foot": Range(9.0, None)}, None, "kister_gill_1991", Confidence.MEMORY,
    error_note=UNKNOWN, range_note="revision of 2007"), dimensional=True,
    variables={"packing_factor_per_foot": _per_foot})
def kister_gill_revised(packing_factor: Values) -> Array:
    """Pressure drop at flooding, revised [Pa/m]: 0.12 F_p^0.7 inches of water per foot, 2 from F_p = 60 1/ft on."""
    F = _per_foot(packing_factor)
    return INCH_WATER_PER_FOOT * np.where(F > 60, 2.0, 0.12 * F ** 0.7)


class _StichlmairBed(NamedTuple):
    """Arguments of the two flooding functions, broadcast."""

    vapor_density: Array
    vapor_viscosity: Array
    liquid_density: Array
    specific_area: Array
    void_fraction: Array
    laminar_friction: Array
    transition_friction: Array
    turbulent_friction: Array
    loading_factor: Array

    def flood(self, u: Array, liquid_velocity: Array) -> tuple[Array, Array]:
        """y = dP/(rho_L g H) at the fold, and the log of the pressure drop at `u` over it."""
        eps, a = self.void_fraction, self.specific_area
        h_0 = 0.555 * np.cbrt(liquid_velocity ** 2 * a / (GRAVITY * eps ** 4.65))
        f_0, c = stichlmair_friction(u, self.vapor_density, self.vapor_viscosity, a, eps, self.laminar_friction,
                                     self.transition_friction, self.turbulent_friction)
        power = (2 + c) / 3
        # With z = h - h_0 the condition of the fold is a quadratic in z.
        solid, free = 1 - eps + h_0, eps - h_0
        square, linear = 9.3 - 2 * power + 1, (2 * power - 1) * free + 10.3 * solid
        z = 2 * solid * free / (linear + np.sqrt(linear ** 2 + 4 * square * solid * free))
        y = np.sqrt(z / (self.loading_factor * h_0))
        wet = ((solid + z) / (1 - eps)) ** power * (eps / (free - z)) ** 4.65
        dry = 0.75 * f_0 * a / 6 / eps ** 4.65 * self.vapor_density * u ** 2 / (self.liquid_density * GRAVITY)
        return y, np.log(dry * wet / y)

    def full(self) -> Array:
        """Liquid velocity at which the holdup without vapour fills the bed."""
        eps = self.void_fraction
        return np.sqrt((eps / 0.555) ** 3 * GRAVITY * eps ** 4.65 / self.specific_area)


def _stichlmair_bed(liquid: Array, *arguments: Array) -> tuple[_StichlmairBed, Array]:
    """The bed and the argument that fixes the liquid, all of one shape."""
    liquid, *rest = np.broadcast_arrays(liquid, *arguments)
    bed = _StichlmairBed(*rest)
    total = bed.laminar_friction + bed.transition_friction + bed.turbulent_friction
    require("turbulent_friction", bed.turbulent_friction, total > 0, "at least one friction constant above zero")
    return bed, liquid


_FLOOD_SBF = Validity({}, None, "stichlmair_1989", Confidence.CROSS_CHECKED,
                      range_note=f"{UNKNOWN}; flooding is where the pressure drop of the method turns vertical",
                      error_note=UNKNOWN)


@correlation("flooding velocity and pressure drop", "random and structured packings", "m s-1; Pa m-1", _FLOOD_SBF)
def stichlmair_flooding_at_liquid_velocity(liquid_velocity: Values, vapor_density: Values, vapor_viscosity: Values,
                                           liquid_density: Values, specific_area: Values, void_fraction: Values,
                                           laminar_friction: Values, transition_friction: Values,
                                           turbulent_friction: Values, *,
                                           loading_factor: Values = 20.0) -> FloodState:
    """Flooding of the method of Stichlmair, Bravo and Fair for a fixed liquid velocity [m/s; Pa/m].

    Where d(dP)/du is infinite: 1/y^2 = 40 ((2 + c)/3 h_0/(1 - eps + h) + 4.65 h_0/(eps - h)), y = dP/(rho_L g H).
    `NoPhysicalRootError` where the liquid alone fills the bed.
    """
    bed, liquid = _stichlmair_bed(liquid_velocity, vapor_density, vapor_viscosity, liquid_density, specific_area,
                                  void_fraction, laminar_friction, transition_friction, turbulent_friction,
                                  loading_factor)
    if (liquid >= bed.full()).any():
        raise NoPhysicalRootError("liquid_velocity: the liquid alone fills the bed", liquid >= bed.full())
    high = np.ones(liquid.shape)
    while (short := bed.flood(high, liquid)[1] < 0).any():
        high = np.where(short, 2 * high, high)
    u = bracketed_root(lambda u: bed.flood(u, liquid)[1], 1e-9 * high, high)
    return FloodState(u, bed.flood(u, liquid)[0] * bed.liquid_density * GRAVITY)


@correlation("flooding velocity and pressure drop", "random and structured packings", "m s-1; Pa m-1", _FLOOD_SBF)
def stichlmair_flooding(flow_ratio: Values, vapor_density: Values, vapor_viscosity: Values, liquid_density: Values,
                        specific_area: Values, void_fraction: Values, laminar_friction: Values,
                        transition_friction: Values, turbulent_friction: Values, *,
                        loading_factor: Values = 20.0) -> FloodState:
    """Flooding of the method of Stichlmair, Bravo and Fair for a fixed L/V [m/s; Pa/m]: see the form at fixed u_L."""
    bed, ratio = _stichlmair_bed(flow_ratio, vapor_density, vapor_viscosity, liquid_density, specific_area,
                                 void_fraction, laminar_friction, transition_friction, turbulent_friction,
                                 loading_factor)
    slip = ratio * bed.vapor_density / bed.liquid_density
    high = bed.full() / slip  # there the holdup without vapour fills the bed: flooding lies below
    u = bracketed_root(lambda u: bed.flood(u, slip * u)[1], 1e-9 * high, (1 - 1e-12) * high)
    return FloodState(u, bed.flood(u, slip * u)[0] * bed.liquid_density * GRAVITY)


@correlation("minimum liquid velocity", "random packings", "m s-1", Validity(
    {}, None, "morris_jackson_1953", Confidence.MEMORY,
    range_note=f"{UNKNOWN}; 0.12 m3/(m h) above 75 mm and for grids", error_note=UNKNOWN))
def morris_jackson(specific_area: Values, *, wetting_rate: Values = 0.08 / 3600) -> Array:
    """Least liquid velocity that wets the packing, by Morris and Jackson [m/s]: wetting rate times area.

    The default rate, 0.08 m3/(m h), is that of rings up to 75 mm.
    """
    return wetting_rate * specific_area


@correlation("minimum liquid velocity", "random packings", "m s-1", Validity(
    {}, None, "schmidt_1979", Confidence.MEMORY, range_note=UNKNOWN, error_note=UNKNOWN))
def schmidt(liquid_density: Values, liquid_viscosity: Values, surface_tension: Values, specific_area: Values,
            flood_fraction: Values = 0.0) -> Array:
    """Least liquid velocity that wets the packing, by Schmidt [m/s].

    7.7e-6 C^(2/9) (1 - T)^-0.5 (g/a)^0.5, C = rho sigma^3/(mu^4 g), T = 0.9 (F/F_flood)^2.8.
    """
    C = liquid_density * surface_tension ** 3 / (liquid_viscosity ** 4 * GRAVITY)
    T = 0.9 * flood_fraction ** 2.8
    return 7.7e-6 * C ** (2 / 9) * np.sqrt(GRAVITY / (specific_area * (1 - T)))
