# mypy: disable-error-code="no-any-return"
"""Diffusivities at infinite dilution in liquids, in one solvent and in a mixture of solvents.

The formulas hold in cm2/s, cP, cm3/mol, g/mol and dyn/cm; each function converts at its door.
"""
from __future__ import annotations

import numpy as np

from .record import Values, correlation, require
from .validity import NOT_PUBLISHED, UNKNOWN, Array, Confidence, Range, Validity

CM2 = 1e-4
CM3 = 1e-6
CENTIPOISE = 1e-3
DYNE_PER_CM = 1e-3
PARACHOR = CM3 * DYNE_PER_CM ** 0.25
"""(m3/mol)(N/m)^(1/4) in one (cm3/mol)(dyn/cm)^(1/4)."""

_THIN = {"solvent_viscosity": Range(None, 0.025)}


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, 0.15, "wilke_chang_1955", Confidence.VERIFIED,
    range_note=f"{UNKNOWN}; fails for water as the solute (up to a factor of 2)",
    error_note="10 to 15 % for organic solutes"), dimensional=True)
def wilke_chang(temperature: Values, solvent_viscosity: Values, solvent_molar_mass: Values, solute_volume: Values,
                association_factor: Values = 1.0) -> Array:
    """Diffusivity of a solute at infinite dilution by Wilke and Chang [m2/s].

    D = 7.4e-8 (phi M)^(1/2) T/(mu V_A^0.6). phi: water 2.6 (2.26 refitted by Hayduk and Laudie), methanol 1.9, ethanol
    1.5, non-associated solvents 1.
    """
    M = association_factor * solvent_molar_mass * 1e3
    mu = solvent_viscosity / CENTIPOISE
    return 7.4e-8 * CM2 * np.sqrt(M) * temperature / (mu * (solute_volume / CM3) ** 0.6)


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, None, "hayduk_laudie_1974", Confidence.DOUBTFUL, range_note=f"{UNKNOWN}; water as the solvent",
    error_note=UNKNOWN), dimensional=True)
def hayduk_laudie(solvent_viscosity: Values, solute_volume: Values) -> Array:
    """Diffusivity of a solute at infinite dilution in water by Hayduk and Laudie [m2/s].

    D = 13.26e-5 mu^-1.14 V_A^-0.589. An exponent of -1.4, seen as well: carbon dioxide (25 to 65 C, from memory) rules
    that out.
    """
    mu = solvent_viscosity / CENTIPOISE
    return 13.26e-5 * CM2 * mu ** -1.14 * (solute_volume / CM3) ** -0.589


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, 0.09, "hayduk_minhas_1982", Confidence.VERIFIED, range_note=f"{UNKNOWN}; water as the solvent",
    error_note="mean, from memory"), dimensional=True)
def hayduk_minhas_aqueous(temperature: Values, solvent_viscosity: Values, solute_volume: Values) -> Array:
    """Diffusivity of a solute at infinite dilution in water by Hayduk and Minhas [m2/s].

    D = 1.25e-8 (V_A^-0.19 - 0.292) T^1.52 mu^(9.58/V_A - 1.12). Above 650 cm3/mol D would turn negative: an error.
    """
    V = solute_volume / CM3
    require("solute_volume", solute_volume, V ** -0.19 > 0.292, "a volume below 6.5e-4 m3/mol")
    mu = solvent_viscosity / CENTIPOISE
    return 1.25e-8 * CM2 * (V ** -0.19 - 0.292) * temperature ** 1.52 * mu ** (9.58 / V - 1.12)


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, 0.034, "hayduk_minhas_1982", Confidence.VERIFIED, range_note=f"{UNKNOWN}; normal paraffins in each other",
    error_note="mean, from memory"), dimensional=True)
def hayduk_minhas_paraffin(temperature: Values, solvent_viscosity: Values, solute_volume: Values) -> Array:
    """Diffusivity at infinite dilution among normal paraffins by Hayduk and Minhas [m2/s].

    D = 13.3e-8 T^1.47 mu^(10.2/V_A - 0.791) V_A^-0.71.
    """
    V = solute_volume / CM3
    mu = solvent_viscosity / CENTIPOISE
    return 13.3e-8 * CM2 * temperature ** 1.47 * mu ** (10.2 / V - 0.791) * V ** -0.71


_HAYDUK_MINHAS = Validity(
    {}, 0.14, "hayduk_minhas_1982", Confidence.VERIFIED,
    range_note=f"{UNKNOWN}; double volume and parachor of organic acid solutes except in water, methanol, butanol",
    error_note="mean, from memory")


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", _HAYDUK_MINHAS, dimensional=True)
def hayduk_minhas(temperature: Values, solvent_viscosity: Values, solute_volume: Values, solvent_volume: Values,
                  solute_surface_tension: Values, solvent_surface_tension: Values) -> Array:
    """Diffusivity at infinite dilution in a solvent that is neither water nor paraffin by Hayduk and Minhas [m2/s].

    D = 1.55e-8 V_B^0.27 T^1.29 sigma_B^0.125/(V_A^0.42 mu^0.92 sigma_A^0.105), A the solute.
    """
    mu = solvent_viscosity / CENTIPOISE
    return (1.55e-8 * CM2 * (solvent_volume / CM3) ** 0.27 * temperature ** 1.29
            * (solvent_surface_tension / DYNE_PER_CM) ** 0.125
            / ((solute_volume / CM3) ** 0.42 * mu ** 0.92 * (solute_surface_tension / DYNE_PER_CM) ** 0.105))


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", _HAYDUK_MINHAS, dimensional=True)
def hayduk_minhas_parachor(temperature: Values, solvent_viscosity: Values, solvent_volume: Values,
                           solute_parachor: Values, solvent_parachor: Values) -> Array:
    """`hayduk_minhas` in parachors [m2/s]: D = 1.55e-8 T^1.29 P_B^0.5/(P_A^0.42 mu^0.92 V_B^0.23)."""
    mu = solvent_viscosity / CENTIPOISE
    return (1.55e-8 * CM2 * temperature ** 1.29 * (solvent_parachor / PARACHOR) ** 0.5
            / ((solute_parachor / PARACHOR) ** 0.42 * mu ** 0.92 * (solvent_volume / CM3) ** 0.23))


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, 0.20, "siddiqi_lucas_1986", Confidence.CROSS_CHECKED, range_note=f"{UNKNOWN}; water as the solvent",
    error_note="mean, from memory"), dimensional=True)
def siddiqi_lucas_aqueous(temperature: Values, solvent_viscosity: Values, solute_volume: Values) -> Array:
    """Diffusivity at infinite dilution in water by Siddiqi and Lucas [m2/s]: 2.98e-7 V_A^-0.5473 mu^-1.026 T."""
    mu = solvent_viscosity / CENTIPOISE
    return 2.98e-7 * CM2 * (solute_volume / CM3) ** -0.5473 * mu ** -1.026 * temperature


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", Validity(
    {}, 0.13, "siddiqi_lucas_1986", Confidence.CROSS_CHECKED,
    range_note=f"{UNKNOWN}; organic solvents, no paraffin pairs", error_note="mean, from memory"), dimensional=True)
def siddiqi_lucas_organic(temperature: Values, solvent_viscosity: Values, solute_volume: Values,
                          solvent_volume: Values) -> Array:
    """Diffusivity at infinite dilution in organic solvents by Siddiqi and Lucas [m2/s].

    D = 9.89e-8 mu^-0.907 V_A^-0.45 V_B^0.265 T.
    """
    mu = solvent_viscosity / CENTIPOISE
    return (9.89e-8 * CM2 * mu ** -0.907 * (solute_volume / CM3) ** -0.45 * (solvent_volume / CM3) ** 0.265
            * temperature)


_TYN_CALUS = Validity(
    _THIN, 0.10, "tyn_calus_1975_diffusivity", Confidence.VERIFIED, error_note="about",
    range_note="viscosity limit 20 to 30 cP; water as solute: double volume and parachor; organic acid solute: double, "
               "except in water, methanol, butanol; alcohol in a nonpolar solvent: multiply V_B and P_B by 8 mu_B (cP)")


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", _TYN_CALUS, dimensional=True)
def tyn_calus(temperature: Values, solvent_viscosity: Values, solute_volume: Values, solvent_volume: Values,
              solute_parachor: Values, solvent_parachor: Values) -> Array:
    """Diffusivity at infinite dilution by Tyn and Calus [m2/s].

    D = 8.93e-8 (V_A/V_B^2)^(1/6) (P_B/P_A)^0.6 T/mu, A the solute.
    """
    mu = solvent_viscosity / CENTIPOISE
    V = (solute_volume / CM3) / (solvent_volume / CM3) ** 2
    return 8.93e-8 * CM2 * V ** (1 / 6) * (solvent_parachor / solute_parachor) ** 0.6 * temperature / mu


@correlation("diffusivity at infinite dilution", "liquids", "m2 s-1", _TYN_CALUS, dimensional=True)
def tyn_calus_surface_tension(temperature: Values, solvent_viscosity: Values, solute_volume: Values,
                              solvent_volume: Values, solute_surface_tension: Values,
                              solvent_surface_tension: Values) -> Array:
    """`tyn_calus` in surface tensions [m2/s]: 8.93e-8 V_B^(4/15) V_A^(-13/30) (sigma_B/sigma_A)^0.15 T/mu.

    The exponents, printed rounded as 0.267 and 0.433, are those that make it equal to the parachor form.
    """
    mu = solvent_viscosity / CENTIPOISE
    return (8.93e-8 * CM2 * (solvent_volume / CM3) ** (4 / 15) * (solute_volume / CM3) ** (-13 / 30)
            * (solvent_surface_tension / solute_surface_tension) ** 0.15 * temperature / mu)


@correlation("diffusivity in a mixture", "liquids", "m2 s-1", Validity(
    {}, None, "perkins_geankoplis_1969", Confidence.VERIFIED, range_note=f"{UNKNOWN}; a dilute solute",
    error_note=UNKNOWN))
def perkins_geankoplis(mole_fraction: Values, component_diffusivity: Values, component_viscosity: Values,
                       mixture_viscosity: Values) -> Array:
    """Diffusivity of a dilute solute in a mixture of solvents by Perkins and Geankoplis [m2/s].

    D mu_m^0.8 = sum_j x_j D_j mu_j^0.8 over the solvents (last axis); the fractions are those of the solvents.
    """
    total = (mole_fraction * component_diffusivity * component_viscosity ** 0.8).sum(-1)
    return total / mixture_viscosity ** 0.8


@correlation("diffusivity in a mixture", "liquids", "m2 s-1", Validity(
    {}, None, "perkins_geankoplis_1969", Confidence.VERIFIED, range_note=f"{UNKNOWN}; a dilute solute",
    error_note=NOT_PUBLISHED), dimensional=True)
def wilke_chang_mixture(temperature: Values, mole_fraction: Values, mixture_viscosity: Values,
                        component_molar_mass: Values, component_association_factor: Values,
                        solute_volume: Values) -> Array:
    """Diffusivity of a dilute solute in a mixture of solvents by Wilke and Chang with a mean phi M [m2/s].

    phi M = sum_j x_j phi_j M_j over the solvents (last axis), viscosity that of the mixture.
    """
    M = (mole_fraction * component_association_factor * component_molar_mass).sum(-1)
    return wilke_chang.silent(temperature, mixture_viscosity, M, solute_volume)
