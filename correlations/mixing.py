# mypy: disable-error-code="no-any-return"
"""From the point to the tray: resistances in series, liquid mixing along the path, entrainment."""
from __future__ import annotations

import numpy as np

from .constants import GRAVITY
from .record import Values, correlation, require
from .validity import EXACT, UNKNOWN, Array, Confidence, Validity

_EXACT = Validity({}, None, "aiche_1958", Confidence.VERIFIED, range_note=EXACT, error_note=EXACT)


@correlation("overall transfer units", "trays", "-", _EXACT)
def overall_vapor_units(vapor_units: Values, liquid_units: Values, stripping_factor: Values) -> Array:
    """Overall vapour-side transfer units from both films in series [-]: 1/N_OG = 1/N_G + lambda/N_L."""
    return 1 / (1 / vapor_units + stripping_factor / liquid_units)


@correlation("point efficiency", "trays", "-", _EXACT)
def point_efficiency(overall_units: Values) -> Array:
    """Point efficiency of vapour in plug flow through mixed liquid [-]: E = 1 - exp(-N_OG)."""
    return -np.expm1(-overall_units)


@correlation("eddy diffusivity", "sieve and bubble-cap trays", "m2 s-1", Validity(
    {}, None, "aiche_1958", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def aiche_eddy_diffusivity(active_velocity: Values, weir_load: Values, weir_height: Values) -> Array:
    """Eddy diffusivity of the liquid along its path by the AIChE manual [m2/s].

    D_E = (0.00393 + 0.0171 u_a + 3.67 W + 0.18 h_w)^2, W per mean width of flow.
    """
    return (3.93e-3 + 0.0171 * active_velocity + 3.67 * weir_load + 0.18 * weir_height) ** 2


@correlation("eddy diffusivity", "sieve trays", "m2 s-1", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def bennett_eddy_diffusivity(froth_height: Values) -> Array:
    """Eddy diffusivity of the liquid by Bennett, Watson and Wiescinski [m2/s]: 0.1 (g h_f^3)^(1/2)."""
    return 0.1 * np.sqrt(GRAVITY * froth_height ** 3)


@correlation("Peclet number", "trays", "-", _EXACT)
def peclet_number(path_length: Values, eddy_diffusivity: Values, liquid_residence_time: Values) -> Array:
    """Peclet number of the liquid along its path [-]: Z^2/(D_E t_L); 0 is mixed, infinite is plug flow."""
    return path_length ** 2 / (eddy_diffusivity * liquid_residence_time)


@correlation("pools in series", "trays", "-", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def pools_from_peclet(peclet_number: Values) -> Array:
    """Number of pools in series that mixes like a Peclet number [-]: (Pe + 2)/2, a real number from 1."""
    return (peclet_number + 2) / 2


@correlation("tray efficiency", "trays", "-", Validity(
    {}, None, "gerster_1958", Confidence.VERIFIED, range_note=EXACT, error_note=EXACT))
def gerster(point_efficiency: Values, stripping_factor: Values, peclet_number: Values) -> Array:
    """Murphree vapour efficiency of a tray with axial dispersion of the liquid by Gerster and co-workers [-].

    eta = (Pe/2)((1 + 4 lambda E/Pe)^(1/2) - 1); E_MV/E = (1 - e^-(eta+Pe))/((eta+Pe)(1 + (eta+Pe)/eta))
    + (e^eta - 1)/(eta (1 + eta/(eta+Pe))). Pe = 0 gives the point efficiency, infinite Pe the plug-flow value.
    """
    E, lam = point_efficiency, stripping_factor
    mixed = peclet_number == 0
    Pe = np.where(mixed, 1.0, peclet_number)
    eta = 2 * lam * E / (1 + np.sqrt(1 + 4 * lam * E / Pe))
    s = eta + Pe
    ratio = -np.expm1(-s) / (s * (1 + s / eta)) + np.expm1(eta) / (eta * (1 + eta / s))
    return E * np.where(mixed, 1.0, ratio)


@correlation("tray efficiency", "trays", "-", Validity(
    {}, None, "gerster_1958", Confidence.VERIFIED, range_note=EXACT, error_note=EXACT))
def pools_in_series(point_efficiency: Values, stripping_factor: Values, pools: Values) -> Array:
    """Murphree vapour efficiency of a tray of n mixed pools [-]: ((1 + lambda E/n)^n - 1)/lambda, n any real from 1."""
    return np.expm1(pools * np.log1p(stripping_factor * point_efficiency / pools)) / stripping_factor


@correlation("tray efficiency", "trays", "-", Validity(
    {}, None, "lewis_1936", Confidence.VERIFIED, range_note=EXACT, error_note=EXACT))
def lewis_plug_flow(point_efficiency: Values, stripping_factor: Values) -> Array:
    """Murphree vapour efficiency of a tray with liquid in plug flow and mixed vapour [-]: (e^(lambda E) - 1)/lambda."""
    return np.expm1(stripping_factor * point_efficiency) / stripping_factor


@correlation("tray efficiency", "sieve trays", "-", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def bennett_tray_efficiency(point_efficiency: Values, stripping_factor: Values, peclet_number: Values) -> Array:
    """Murphree vapour efficiency by Bennett, Watson and Wiescinski [-].

    The pools formula with n = (Pe + 2)/2 times 1 - 0.0335 lambda^1.073 E^2.518 Pe^0.175 (the vapour's own gradient).
    """
    E, lam, Pe = point_efficiency, stripping_factor, peclet_number
    loss = 0.0335 * lam ** 1.073 * E ** 2.518 * Pe ** 0.175
    require("stripping_factor", stripping_factor, loss < 1, "a value that leaves an efficiency above zero")
    return pools_in_series.silent(E, lam, (Pe + 2) / 2) * (1 - loss)


@correlation("tray efficiency with entrainment", "trays", "-", Validity(
    {}, None, "colburn_1936", Confidence.VERIFIED, range_note=f"{UNKNOWN}; liquid fully mixed", error_note=UNKNOWN))
def colburn_entrainment(dry_efficiency: Values, entrainment: Values) -> Array:
    """Murphree efficiency lowered by entrainment, Colburn [-]: E/(1 + E psi/(1 - psi)).

    psi: entrained liquid over entrained plus downflowing liquid.
    """
    return dry_efficiency / (1 + dry_efficiency * entrainment / (1 - entrainment))


@correlation("tray efficiency with entrainment", "sieve trays", "-", Validity(
    {}, None, "bennett_1997", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def bennett_entrainment_correction(tray_efficiency: Values, point_efficiency: Values, stripping_factor: Values,
                                   equilibrium_slope: Values, entrainment_ratio: Values) -> Array:
    """Murphree efficiency lowered by entrainment, Bennett and co-workers [-]: E_MV (1 - 0.8 E lambda^1.543 e/m).

    e: entrained liquid over vapour, kg/kg.
    """
    loss = 0.8 * point_efficiency * stripping_factor ** 1.543 * entrainment_ratio / equilibrium_slope
    require("entrainment_ratio", entrainment_ratio, loss < 1, "an entrainment that leaves an efficiency above zero")
    return tray_efficiency * (1 - loss)
