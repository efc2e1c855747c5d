# mypy: disable-error-code="no-any-return"
"""Diffusivities of gas pairs at low pressure, and of a dilute species in a gas mixture."""
from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import NamedTuple

import numpy as np

from .errors import InputError
from .record import Values, correlation, require
from .validity import EXACT, UNKNOWN, Array, Confidence, Range, Validity

BAR = 1e5
ATMOSPHERE = 101325.0
ANGSTROM = 1e-10
DEBYE = 3.33564e-30
"""C m."""
CM2 = 1e-4
CM3 = 1e-6


class DiffusionVolumes(NamedTuple):
    """One set of diffusion volumes, cm3/mol: sets must not be mixed."""

    atoms: Mapping[str, float]
    aromatic_ring: float
    molecules: Mapping[str, float]


# Molecules are keyed by their atoms in alphabetical order; air, a mixture, has a key of its own.
VOLUMES_1969 = DiffusionVolumes(
    MappingProxyType({"C": 15.9, "H": 2.31, "O": 6.11, "N": 4.54, "F": 14.7, "Cl": 21.0, "Br": 21.9, "I": 29.8,
                      "S": 22.9}), -18.3,
    MappingProxyType({"He": 2.67, "Ne": 5.98, "Ar": 16.2, "Kr": 24.5, "Xe": 32.7, "H2": 6.12, "D2": 6.84, "N2": 18.5,
                      "O2": 16.3, "air": 19.7, "CO": 18.0, "CO2": 26.9, "N2O": 35.9, "H3N": 20.7, "H2O": 13.1,
                      "F6S": 71.3, "Cl2": 38.4, "Br2": 69.0, "O2S": 41.8}))
"""Set of the 1969 paper, for `fuller`; neon is from memory."""
VOLUMES_1966 = DiffusionVolumes(
    MappingProxyType({"C": 16.5, "H": 1.98, "O": 5.48, "N": 5.69, "Cl": 19.5, "S": 17.0}), -20.2,
    MappingProxyType({"H2": 7.07, "D2": 6.70, "He": 2.88, "N2": 17.9, "O2": 16.6, "air": 20.1, "Ar": 16.1, "Kr": 22.8,
                      "Xe": 37.9, "CO": 18.9, "CO2": 26.9, "N2O": 35.9, "H3N": 14.9, "H2O": 12.7, "CCl2F2": 114.8,
                      "F6S": 69.7, "Cl2": 37.7, "Br2": 67.2, "O2S": 41.1}))
"""Set of the 1966 paper, for `fuller_1966`; N, Cl, S, the ring, D2, Kr, Xe, N2O, CCl2F2, SF6, Cl2, Br2 from memory."""


def diffusion_volume(atoms: Mapping[str, int] | str, *, aromatic_rings: int = 0,
                     volumes: DiffusionVolumes = VOLUMES_1969) -> float:
    """Diffusion volume of a species [m3/mol], from `volumes`.

    atoms : count of each element, as {"C": 2, "H": 6, "O": 1}, or the word "air". A molecule the set lists as such
        (noble gases, H2, D2, N2, O2, CO, CO2, N2O, NH3, H2O, SF6, Cl2, Br2, SO2) takes its own value, the others the
        sum over their atoms.
    aromatic_rings : aromatic or heterocyclic rings, each with its (negative) increment.

    Raises `InputError` for an element the set does not hold or a count that is not a positive whole number.
    Source: Fuller, Ensley, Giddings (1969); Fuller, Schettler, Giddings (1966).
    """
    if isinstance(atoms, str):
        if atoms not in volumes.molecules:
            raise InputError(f"atoms: expected a mapping or one of {sorted(volumes.molecules)}, got {atoms!r}")
        return volumes.molecules[atoms] * CM3
    for element, count in atoms.items():
        if count != int(count) or count < 1:
            raise InputError(f"atoms[{element!r}] = {count}: expected a whole number of atoms above zero")
    if not atoms:
        raise InputError("atoms: expected at least one element, got none")
    if aromatic_rings != int(aromatic_rings) or aromatic_rings < 0:
        raise InputError(f"aromatic_rings = {aromatic_rings}: expected a whole number, not negative")
    key = "".join(f"{element}{count if count > 1 else ''}" for element, count in sorted(atoms.items()))
    if key in volumes.molecules:
        return volumes.molecules[key] * CM3
    missing = sorted(set(atoms) - set(volumes.atoms))
    if missing:
        raise InputError(f"atoms: no diffusion volume for {', '.join(missing)} in this set")
    total = sum(volumes.atoms[element] * count for element, count in atoms.items())
    return (total + volumes.aromatic_ring * aromatic_rings) * CM3


_GAS_RANGE = {"temperature": Range(200.0, 1500.0), "pressure": Range(None, 10 * BAR)}


@correlation("pair diffusivity", "gases", "m2 s-1", Validity(
    _GAS_RANGE, 0.05, "fuller_1969", Confidence.VERIFIED, error_note="mean, from memory; a second note says 5 to 10 %",
    range_note="low pressure, below about 10 bar"), dimensional=True)
def fuller(temperature: Values, pressure: Values, molar_mass_a: Values, molar_mass_b: Values,
           diffusion_volume_a: Values, diffusion_volume_b: Values) -> Array:
    """Diffusivity of a gas pair by Fuller, Schettler and Giddings with the volumes of 1969 [m2/s].

    D = 0.00143 T^1.75 / (P M_AB^(1/2) (v_A^(1/3) + v_B^(1/3))^2), M_AB = 2/(1/M_A + 1/M_B); cm2/s, bar, g/mol, cm3/mol.
    Does not depend on composition.
    """
    M = 2e3 / (1 / molar_mass_a + 1 / molar_mass_b)
    v = np.cbrt(diffusion_volume_a / CM3) + np.cbrt(diffusion_volume_b / CM3)
    return 0.00143 * CM2 * temperature ** 1.75 / (pressure / BAR * np.sqrt(M) * v ** 2)


@correlation("pair diffusivity", "gases", "m2 s-1", Validity(
    _GAS_RANGE, 0.05, "fuller_1966", Confidence.VERIFIED, error_note="mean, from memory",
    range_note="low pressure, below about 10 bar"), dimensional=True)
def fuller_1966(temperature: Values, pressure: Values, molar_mass_a: Values, molar_mass_b: Values,
                diffusion_volume_a: Values, diffusion_volume_b: Values) -> Array:
    """Diffusivity of a gas pair by Fuller, Schettler and Giddings as first published [m2/s]: only with `VOLUMES_1966`.

    D = 0.001 T^1.75 (1/M_A + 1/M_B)^(1/2) / (P (v_A^(1/3) + v_B^(1/3))^2); cm2/s, atm, g/mol, cm3/mol.
    """
    M = np.sqrt(1e-3 / molar_mass_a + 1e-3 / molar_mass_b)
    v = np.cbrt(diffusion_volume_a / CM3) + np.cbrt(diffusion_volume_b / CM3)
    return 1e-3 * CM2 * temperature ** 1.75 * M / (pressure / ATMOSPHERE * v ** 2)


@correlation("collision integral", "gases", "-", Validity(
    {"reduced_temperature": Range(0.3, 100.0)}, None, "neufeld_1972", Confidence.VERIFIED,
    error_note=f"{UNKNOWN} (a fit of the exact integral, far closer than the theory is to data)"))
def neufeld_collision_integral(reduced_temperature: Values) -> Array:
    """Collision integral for diffusion of the Lennard-Jones potential by Neufeld, Janzen and Aziz [-]."""
    t = reduced_temperature
    return (1.06036 / t ** 0.15610 + 0.19300 * np.exp(-0.47635 * t) + 1.03587 * np.exp(-1.52996 * t)
            + 1.76474 * np.exp(-3.89411 * t))


class LennardJones(NamedTuple):
    """Parameters of the Lennard-Jones potential."""

    collision_diameter: Array
    """m."""
    energy_parameter: Array
    """Energy over Boltzmann's constant, K."""


@correlation("Lennard-Jones parameters", "gases", "m; K", Validity(
    {}, None, "wilke_lee_1955", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN), dimensional=True)
def wilke_lee_parameters(boiling_volume: Values, boiling_temperature: Values) -> LennardJones:
    """Lennard-Jones parameters from the normal boiling point: sigma = 1.18 V_b^(1/3) (angstrom, cm3/mol), 1.15 T_b.

    For the pair diffusivities of this module when no fitted set is at hand; both species then from one table.
    """
    return LennardJones(1.18 * ANGSTROM * np.cbrt(boiling_volume / CM3), 1.15 * boiling_temperature)


def _pair(temperature: Array, diameter_a: Array, diameter_b: Array, energy_a: Array, energy_b: Array
          ) -> tuple[Array, Array]:
    """Reduced temperature and mean collision diameter in angstrom."""
    return temperature / np.sqrt(energy_a * energy_b), 0.5 * (diameter_a + diameter_b) / ANGSTROM


def _reduced_temperature(temperature: Array, energy_parameter_a: Array, energy_parameter_b: Array) -> Array:
    return temperature / np.sqrt(energy_parameter_a * energy_parameter_b)


_KINETIC_RANGE = {"reduced_temperature": Range(0.3, 100.0), "pressure": Range(None, 10 * BAR)}


@correlation("pair diffusivity", "gases", "m2 s-1", Validity(
    _KINETIC_RANGE, 0.08, "chapman_cowling", Confidence.VERIFIED, error_note="mean, from memory",
    range_note="low pressure; non-polar species"), dimensional=True,
    variables={"reduced_temperature": _reduced_temperature})
def chapman_enskog(temperature: Values, pressure: Values, molar_mass_a: Values, molar_mass_b: Values,
                   collision_diameter_a: Values, collision_diameter_b: Values, energy_parameter_a: Values,
                   energy_parameter_b: Values) -> Array:
    """Diffusivity of a gas pair by the Chapman-Enskog theory, Lennard-Jones potential [m2/s].

    D = 0.0026635 T^(3/2) / (P M_AB^(1/2) sigma^2 Omega); cm2/s, bar, g/mol, angstrom. The prefactor follows from
    kinetic theory (often printed rounded, 0.00266). Parameters of both species must come from one table.
    """
    t, sigma = _pair(temperature, collision_diameter_a, collision_diameter_b, energy_parameter_a, energy_parameter_b)
    M = 2e3 / (1 / molar_mass_a + 1 / molar_mass_b)
    omega = neufeld_collision_integral.silent(t)
    return 0.0026635 * CM2 * temperature ** 1.5 / (pressure / BAR * np.sqrt(M) * sigma ** 2 * omega)


@correlation("pair diffusivity", "gases", "m2 s-1", Validity(
    _KINETIC_RANGE, 0.09, "wilke_lee_1955", Confidence.VERIFIED, error_note="mean 8 to 9 %, from memory",
    range_note="low pressure"), dimensional=True, variables={"reduced_temperature": _reduced_temperature})
def wilke_lee(temperature: Values, pressure: Values, molar_mass_a: Values, molar_mass_b: Values,
              collision_diameter_a: Values, collision_diameter_b: Values, energy_parameter_a: Values,
              energy_parameter_b: Values) -> Array:
    """Diffusivity of a gas pair by Wilke and Lee [m2/s].

    D = 0.001 (3.03 - 0.98 M_AB^(-1/2)) T^(3/2) / (P M_AB^(1/2) sigma^2 Omega); cm2/s, bar, g/mol, angstrom. Also in
    print: a form in pascals whose constants are 1.2 to 1.6 % higher, the step from bar to atmosphere.
    """
    t, sigma = _pair(temperature, collision_diameter_a, collision_diameter_b, energy_parameter_a, energy_parameter_b)
    M = np.sqrt(2e3 / (1 / molar_mass_a + 1 / molar_mass_b))
    require("molar_mass_a", molar_mass_a, 3.03 * M > 0.98, "a molar mass in kg/mol with which the constant is positive")
    omega = neufeld_collision_integral.silent(t)
    return 1e-3 * CM2 * (3.03 - 0.98 / M) * temperature ** 1.5 / (pressure / BAR * M * sigma ** 2 * omega)


@correlation("pair diffusivity", "gases", "m2 s-1", Validity(
    {"pressure": Range(None, 10 * BAR)}, None, "brokaw_1969", Confidence.VERIFIED,
    error_note=UNKNOWN, range_note="low pressure; polar species"), dimensional=True)
def brokaw(temperature: Values, pressure: Values, molar_mass_a: Values, molar_mass_b: Values,
           boiling_volume_a: Values, boiling_volume_b: Values, boiling_temperature_a: Values,
           boiling_temperature_b: Values, dipole_moment_a: Values, dipole_moment_b: Values) -> Array:
    """Diffusivity of a polar gas pair: Chapman-Enskog with Brokaw's parameters and polar term [m2/s].

    delta = 1940 mu^2/(V_b T_b) (debye, cm3/mol, K), eps/k = 1.18 (1 + 1.3 delta^2) T_b, sigma = (1.585 V_b/(1 + 1.3
    delta^2))^(1/3) angstrom, all pair values geometric means, Omega + 0.19 delta_AB^2/T*.
    """
    def parameters(dipole: Array, volume: Array, boiling: Array) -> tuple[Array, Array, Array]:
        delta = 1940.0 * (dipole / DEBYE) ** 2 / (volume / CM3 * boiling)
        polar = 1 + 1.3 * delta ** 2
        return delta, 1.18 * polar * boiling, np.cbrt(1.585 * volume / CM3 / polar)

    delta_a, energy_a, sigma_a = parameters(dipole_moment_a, boiling_volume_a, boiling_temperature_a)
    delta_b, energy_b, sigma_b = parameters(dipole_moment_b, boiling_volume_b, boiling_temperature_b)
    t = temperature / np.sqrt(energy_a * energy_b)
    omega = neufeld_collision_integral.silent(t) + 0.19 * delta_a * delta_b / t
    M = 2e3 / (1 / molar_mass_a + 1 / molar_mass_b)
    return 0.0026635 * CM2 * temperature ** 1.5 / (pressure / BAR * np.sqrt(M) * sigma_a * sigma_b * omega)


@correlation("diffusivity in a mixture", "gases", "m2 s-1", Validity(
    {}, None, "wilke_1950", Confidence.VERIFIED,
    range_note=f"{EXACT} for a species diffusing through stagnant others; else an approximation",
    error_note=f"{EXACT} for a species diffusing through stagnant others"))
def wilke_blanc(mole_fraction: Values, pair_diffusivity: Values) -> Array:
    """Effective diffusivity of each species through the others at rest [m2/s], shape (..., n).

    D_i = (1 - y_i) / sum_{j != i} y_j/D_ij. A pure species (y_i = 1) has no others: its entry is an `InputError`.
    """
    y = mole_fraction
    n = y.shape[-1]
    others = np.where(np.eye(n, dtype=bool), 0.0, y[..., None, :] / pair_diffusivity).sum(-1)
    if not (others > 0).all():
        where = tuple(int(i) for i in np.argwhere(~(others > 0))[0])
        raise InputError(f"mole_fraction: component {where[-1]} has no other species to diffuse through")
    return (y.sum(-1, keepdims=True) - y) / others
