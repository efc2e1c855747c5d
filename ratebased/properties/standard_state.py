"""The pure liquid: its fugacity and its enthalpy below the ideal gas, with or without a real vapour and pressure.

ln f0 = ln(Psat phi_sat) + V (P - Psat)/(R T); the last term, after Poynting, and phi_sat are options. The enthalpy of
the liquid below the ideal gas is Hvap - h_dep(saturated vapour) - (V - T dV/dT)(P - Psat), each term where its option
is on.
"""
from __future__ import annotations

import numpy as np

from .bank import BankView, Basis, TemperatureBank
from .components import PureComponents, Role
from .jet import Jet
from .protocol import GAS_CONSTANT, Array
from .vapor import VaporModel


class PureLiquids:
    """Fugacities and enthalpies of the pure liquids of a mixture, by temperature and pressure.

    vapor : model of the vapour, whose fugacity coefficients at saturation correct the vapour pressure; None takes an
    ideal gas. poynting : whether the fugacity of a liquid depends on pressure.
    Every method takes `basis`, the temperatures T made ready for the bank of the components, beside T and P.
    A component that is no liquid with a vapour pressure of its own has ln f0 = 0 and no latent heat.
    """

    def __init__(self, components: PureComponents, vapor: VaporModel | None, poynting: bool) -> None:
        self._bank = components.bank
        self._has = np.array([role is Role.ORDINARY for role in components.roles])
        self._poynting = poynting
        bank = components.bank
        self._pressure = bank.view(("ln_vapor_pressure", 0))
        self._pressure_slope = bank.view(("ln_vapor_pressure", 1))
        self._latent = bank.view(("vaporization_enthalpy", 0))
        self._latent_slope = bank.view(("vaporization_enthalpy", 1))
        self._volume = bank.view(("ln_vapor_pressure", 0), ("ln_vapor_pressure", 1), ("liquid_volume", 0),
                                 ("liquid_volume", 1), ("liquid_volume", 2))
        self._phi: BankView | None = None
        if vapor is not None:
            saturated = self._saturated = _saturated_vapor(components, vapor, self._has)
            self._phi = saturated.view(("ln_phi", 0))
            self._phi_slope = saturated.view(("ln_phi", 1))
            self._departure = saturated.view(("departure", 0))
            self._departure_slope = saturated.view(("departure", 1))

    def ln_fugacity(self, basis: Basis, T: Array, P: Array) -> Array:
        """ln f0, f0 in Pa, (..., n)."""
        result = self._pressure(basis)[0]
        if self._phi is not None:
            result = result + self._phi(self._saturated.basis(T))[0]
        if self._poynting:
            result = result + self._pressure_correction(basis, T, P)[0]
        return result

    def ln_fugacity_slope(self, basis: Basis, T: Array, P: Array) -> Array:
        """d ln f0/dT at constant pressure, 1/K, (..., n)."""
        result = self._pressure_slope(basis)[0]
        if self._phi is not None:
            result = result + self._phi_slope(self._saturated.basis(T))[0]
        if self._poynting:
            result = result + self._pressure_correction(basis, T, P)[1]
        return result

    def enthalpy_below_gas(self, basis: Basis, T: Array, P: Array) -> Array:
        """Enthalpy of the ideal gas less that of the liquid at T and P, J/mol, (..., n)."""
        result = self._latent(basis)[0]
        if self._phi is not None:
            result = result - self._departure(self._saturated.basis(T))[0]
        if self._poynting:
            result = result - self._pressure_correction(basis, T, P)[2]
        return result

    def heat_capacity_below_gas(self, basis: Basis, T: Array, P: Array) -> Array:
        """Temperature derivative of `enthalpy_below_gas`, J/(mol K), (..., n)."""
        result = self._latent_slope(basis)[0]
        if self._phi is not None:
            result = result - self._departure_slope(self._saturated.basis(T))[0]
        if self._poynting:
            result = result - self._pressure_correction(basis, T, P)[3]
        return result

    def _pressure_correction(self, basis: Basis, T: Array, P: Array) -> tuple[Array, Array, Array, Array]:
        """Poynting's term and its slope, the enthalpy by pressure and its slope; volumes taken as incompressible."""
        ln_pressure, slope, V, dV, ddV = self._volume(basis)
        T, P = np.asarray(T, float)[..., None], np.asarray(P, float)[..., None]
        saturation = np.exp(ln_pressure)
        excess = P - saturation
        d_excess = -saturation * slope
        RT = GAS_CONSTANT * T
        term = V * excess / RT
        d_term = (dV * excess + V * d_excess) / RT - term / T
        enthalpy = (V - T * dV) * excess
        d_enthalpy = -T * ddV * excess + (V - T * dV) * d_excess
        zero = np.zeros(())
        return (np.where(self._has, term, zero), np.where(self._has, d_term, zero),
                np.where(self._has, enthalpy, zero), np.where(self._has, d_enthalpy, zero))


def _saturated_vapor(components: PureComponents, vapor: VaporModel, has: Array) -> TemperatureBank:
    """ln phi and the enthalpy departure of every pure saturated vapour, as a bank over the same range."""
    pressure = components.bank.view(("ln_vapor_pressure", 0))
    n = len(components.names)

    def at(T: float, i: int) -> Jet:
        return vapor.ln_phi(np.array(T), np.exp(pressure(components.bank.basis(np.array(T)))[0][i]), np.eye(n)[i], 1)

    def ln_phi(i: int, T: float) -> float:
        return float(at(T, i).value[i])

    def departure(i: int, T: float) -> float:
        return float(-GAS_CONSTANT * T ** 2 * at(T, i).terms[1][i])

    def nothing(T: float) -> float:
        return 0.0

    groups = {name: [(lambda T, i=i, function=function: function(i, T)) if has[i] else nothing for i in range(n)]
              for name, function in (("ln_phi", ln_phi), ("departure", departure))}
    return TemperatureBank(components.T_range, groups, list(components.bank.edges[1:-1]))
