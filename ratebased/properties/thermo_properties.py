"""The library's general property model: activity coefficients over vapour pressures, all stages at once."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from ..errors import InputError
from .activity import ActivityModel, DissolvedGases, ln_gamma_and_derivatives
from .bank import Basis
from .components import PropertyRecord, PureComponents, Role
from .diffusion import GasDiffusivity, LiquidDiffusivity
from .henry import HenryLaw
from .mixture import (
    MixtureModel,
    StageProperties,
    SurfaceTension,
    excess_enthalpy,
    excess_enthalpy_derivatives,
    excess_heat_capacity,
    spread,
    thermodynamic_factor,
)
from .protocol import GAS_CONSTANT, Array, KDerivatives, LiquidTransport, VaporTransport
from .standard_state import PureLiquids
from .vapor import VaporModel

if TYPE_CHECKING:
    from .from_names import HenryArgument


class ThermoProperties(MixtureModel):
    """Activity coefficients over vapour pressures, with enthalpies and transport properties of both phases.

    K_i = gamma_i(T, x) Psat_i(T)/P; a dissolved gas has K_i = H_i(T, x)/P; a masked component 0. With a model of the
    vapour, K_i = gamma_i Psat_i phi_sat_i/(phi_i P), and with `poynting` times exp(V_i (P - Psat_i)/(R T)).
    Enthalpies: the ideal gas at 298.15 K is the zero of every component in both phases; liquid h_i - Hvap_i - R T2
    dln(gamma_i)/dT, the last term the partial molar excess enthalpy of the same activity model (Gibbs-Helmholtz); a
    dissolved gas h_i - R T2 dln(H_i)/dT. A model of the vapour adds its departures to both.

    K and the enthalpies belong to one Gibbs energy in composition and in the excess part. The latent heats are measured
    values; those the vapour-pressure curves imply (Clausius-Clapeyron with an ideal vapour) lie 1 to 6 % higher at the
    boiling point (water 1.6 %, ethanol 3.6 %, acetone 5.8 %), because a real vapour is no ideal gas.

    Build it with `from_names`; the constructor takes finished parts and imports nothing.

    Parameters
    ----------
    components : `PureComponents`.
    activity : `ActivityModel` of the components that are liquids of their own, in their order in `components`.
    henry : `HenryLaw` of the dissolved gases in the same liquids, or None.
    vapor : `VaporModel`; None takes an ideal gas.
    poynting : whether the fugacity of the liquids depends on pressure.
    gas_diffusivity, liquid_diffusivity : callables, see `diffusion`.
    surface_tension : function (T, x, sigma) -> N/m (...) of the mixture, sigma (..., n) of the pure liquids; None takes
        the volume-fraction rule of `transport.surface_tension`.
    """

    def __init__(self, components: PureComponents, activity: ActivityModel, *, gas_diffusivity: GasDiffusivity,
                 liquid_diffusivity: LiquidDiffusivity, henry: HenryLaw | None = None,
                 vapor: VaporModel | None = None, poynting: bool = False,
                 surface_tension: SurfaceTension | None = None, records: Sequence[PropertyRecord] = ()) -> None:
        super().__init__(components, gas_diffusivity=gas_diffusivity, liquid_diffusivity=liquid_diffusivity,
                         surface_tension=surface_tension, records=records)
        n = len(components.roles)
        liquids = np.flatnonzero(self._liquid)
        gases = np.flatnonzero([role is Role.DISSOLVED for role in components.roles])
        if activity.size != len(liquids):
            raise InputError(f"activity: a model of {activity.size} components for {len(liquids)} liquids "
                             f"({', '.join(self.names[i] for i in liquids)})")
        if (henry is None) != (gases.size == 0):
            raise InputError("henry: needed exactly when a component is a dissolved gas")
        self.activity: ActivityModel = activity if self._all_liquid else DissolvedGases(n, activity, liquids, henry,
                                                                                        gases)
        self._vapor = vapor
        self._pure = PureLiquids(components, vapor, poynting)

    @classmethod
    def from_names(cls, names: Sequence[str], activity: str | ActivityModel = "unifac", *,
                   T_range: tuple[float, float] | None = None, noncondensing: Sequence[str] = (),
                   nonvolatile: Sequence[str] = (), henry: HenryArgument = (),
                   parameters: Mapping[str, ArrayLike] | None = None, vapor: str | VaporModel = "ideal",
                   poynting: bool = False, diffusivity: str = "wilke-chang", k_ij: ArrayLike | None = None,
                   surface_tension: SurfaceTension | None = None) -> ThermoProperties:
        """A model of components given by name or CAS number; see `from_names.build` for every argument."""
        from .from_names import build

        return build(cls, names, activity, T_range=T_range, noncondensing=noncondensing, nonvolatile=nonvolatile,
                     henry=henry, parameters=parameters, vapor=vapor, poynting=poynting, diffusivity=diffusivity,
                     k_ij=k_ij, surface_tension=surface_tension)

    # equilibrium ------------------------------------------------------------------------------------------------

    def k_value(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> Array:
        """K_i = y_i/x_i at equilibrium, (..., n); zero for masked components.

        T (...) K, P (...) Pa, x and y (..., n). Raises `PropertyRangeError` outside `T_range`.
        """
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        ln_fugacity = self._pure.ln_fugacity(self._bank.basis(T), T, P) + self.activity.ln_gamma(T, x).value
        if self._vapor is not None:
            ln_fugacity = ln_fugacity - self._vapor.ln_phi(T, P, self._checked("y", y)).value
        K: Array = np.exp(ln_fugacity) / P[..., None]
        return K if self._all_ordinary else np.where(self._ordinary, K, 0.0)

    def k_value_derivatives(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> KDerivatives:
        """Analytic derivatives of ln K by temperature and mole numbers, see `KDerivatives`."""
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        ln_gamma, by_liquid = ln_gamma_and_derivatives(self.activity, T, x, 1)
        slope = self._pure.ln_fugacity_slope(self._bank.basis(T), T, P) + ln_gamma.terms[1]
        shape = np.broadcast_shapes(slope.shape[:-1], P.shape, np.shape(y)[:-1])
        n = len(self.names)
        by_vapor = np.zeros((*shape, n, n))
        if self._vapor is not None:
            y = self._checked("y", y)
            slope = slope - self._vapor.ln_phi(T, P, y, 1).terms[1]
            by_vapor = np.broadcast_to(-self._vapor.mole_number_derivatives(T, P, y), by_vapor.shape)
        if not self._all_ordinary:
            slope = np.where(self._ordinary, slope, 0.0)
            by_liquid = np.where(self._ordinary[:, None] & self.condensable, by_liquid, 0.0)
            by_vapor = np.where(self._ordinary[:, None] & self.volatile, by_vapor, 0.0)
        return KDerivatives(spread(slope, (*shape, n)), spread(by_liquid, (*shape, n, n)), by_vapor)

    def thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """[Gamma] of the liquid, (..., n-1, n-1): delta_ij + x_i (J_ij - J_in), J the mole-number derivatives."""
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        self._bank.check(T)
        return thermodynamic_factor(x, self.activity.mole_number_derivatives(T, x))

    def vapor_thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """[Gamma] of the vapour, (..., n-1, n-1): identity for an ideal gas."""
        (T, P), y = self._conditions(T, P), self._checked("y", y)
        self._bank.check(T)
        if self._vapor is None:
            n = len(self.names) - 1
            return np.broadcast_to(np.eye(n), (*y.shape[:-1], n, n)).copy()
        return thermodynamic_factor(y, self._vapor.mole_number_derivatives(T, P, y))

    # enthalpies -------------------------------------------------------------------------------------------------

    def vapor_enthalpy(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """Partial molar enthalpies of the vapour above the ideal gas at 298.15 K, J/mol, (..., n)."""
        (T, P), y = self._conditions(T, P), self._checked("y", y)
        h = self._gas_enthalpy(self._bank.basis(T))[0]
        if self._vapor is not None:
            h = h + excess_enthalpy(T, self._vapor.ln_phi(T, P, y, 1))
        return spread(h, np.broadcast_shapes(h.shape, y.shape))

    def liquid_enthalpy(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Partial molar enthalpies of the liquid above the ideal gas at 298.15 K, J/mol, (..., n)."""
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        basis = self._bank.basis(T)
        pure = self._gas_enthalpy(basis)[0] - self._pure.enthalpy_below_gas(basis, T, P)
        return pure + excess_enthalpy(T, self.activity.ln_gamma(T, x, 1))

    def vapor_enthalpy_derivatives(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array | None:
        """Mole-number derivatives of the vapour's partial molar enthalpies, J/mol, (..., n, n); ideal gas: None."""
        if self._vapor is None:
            return None
        (T, P), y = self._conditions(T, P), self._checked("y", y)
        self._bank.check(T)
        vapor = self._vapor
        return excess_enthalpy_derivatives(T, lambda T: vapor.mole_number_derivatives(T, P, y))

    def liquid_enthalpy_derivatives(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Mole-number derivatives of the liquid's partial molar enthalpies, J/mol, (..., n, n)."""
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        self._bank.check(T)
        return excess_enthalpy_derivatives(T, lambda T: self.activity.mole_number_derivatives(T, x))

    def vapor_heat_capacity(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """dH_i/dT of the vapour at constant pressure and composition, J/(mol K), (..., n)."""
        (T, P), y = self._conditions(T, P), self._checked("y", y)
        cp = self._vapor_cp(self._bank.basis(T), T, P, y)
        return spread(cp, np.broadcast_shapes(cp.shape, y.shape))

    def _vapor_cp(self, basis: Basis, T: Array, P: Array, y: Array) -> Array:
        cp = self._gas_heat_capacity(basis)[0]
        return cp if self._vapor is None else cp + excess_heat_capacity(T, self._vapor.ln_phi(T, P, y, 2))

    def liquid_heat_capacity(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """dH_i/dT of the liquid at constant pressure and composition, J/(mol K), (..., n)."""
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        return self._liquid_cp(self._bank.basis(T), T, P, x)

    def _liquid_cp(self, basis: Basis, T: Array, P: Array, x: Array) -> Array:
        pure = self._gas_heat_capacity(basis)[0] - self._pure.heat_capacity_below_gas(basis, T, P)
        return pure + excess_heat_capacity(T, self.activity.ln_gamma(T, x, 2))

    # transport --------------------------------------------------------------------------------------------------

    def vapor_transport(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> VaporTransport:
        """Density of the vapour model, Wilke's viscosity, Wassiljewa's conductivity, Fuller's diffusivities.

        Viscosity and conductivity are those of a gas at low pressure. Fields (...), diffusivity (..., n, n); see
        `VaporTransport`.
        """
        (T, P), y = self._conditions(T, P), self._checked("y", y)
        density = P / (GAS_CONSTANT * T)
        if self._vapor is not None:
            density = density / self._vapor.compressibility(T, P, y)
        basis = self._bank.basis(T)
        return self._vapor_transport(basis, T, P, y, density, self._vapor_cp(basis, T, P, y))

    def liquid_transport(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> LiquidTransport:
        """Volumes that add up, logarithmic viscosity, mixing rules of `transport`, generalised Vignes diffusivities.

        Dissolved gases count in the density only (with their volume at the boiling point), in the heat capacity and in
        the diffusivities; a component not in the liquid counts nowhere. Fields (...), diffusivity (..., n, n).
        """
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        basis = self._bank.basis(T)
        return self._liquid_transport(basis, T, P, x, None, self._liquid_cp(basis, T, P, x))

    # all at once ------------------------------------------------------------------------------------------------

    def evaluate(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> StageProperties:
        """What the methods give at one temperature for both phases, with the shared work done once.

        T (...) K, P (...) Pa, x and y (..., n). About two thirds of the time of the separate calls.
        """
        (T, P), x = self._conditions(T, P), self._liquid_composition(x)
        y = self._checked("y", y)
        basis = self._bank.basis(T)
        ln_gamma, J = ln_gamma_and_derivatives(self.activity, T, x, 2)
        ln_fugacity = self._pure.ln_fugacity(basis, T, P) + ln_gamma.value
        gas_enthalpy, gas_cp = self._gas_enthalpy(basis)[0], self._gas_heat_capacity(basis)[0]
        liquid_enthalpy = gas_enthalpy - self._pure.enthalpy_below_gas(basis, T, P) + excess_enthalpy(T, ln_gamma)
        liquid_cp = gas_cp - self._pure.heat_capacity_below_gas(basis, T, P) + excess_heat_capacity(T, ln_gamma)
        density = P / (GAS_CONSTANT * T)
        if self._vapor is not None:
            ln_phi = self._vapor.ln_phi(T, P, y, 2)
            ln_fugacity = ln_fugacity - ln_phi.value
            gas_enthalpy = gas_enthalpy + excess_enthalpy(T, ln_phi)
            gas_cp = gas_cp + excess_heat_capacity(T, ln_phi)
            density = density / self._vapor.compressibility(T, P, y)
        K: Array = np.exp(ln_fugacity) / P[..., None]
        shape = np.broadcast_shapes(gas_enthalpy.shape, y.shape)
        return StageProperties(
            K if self._all_ordinary else np.where(self._ordinary, K, 0.0), thermodynamic_factor(x, J),
            spread(gas_enthalpy, shape), liquid_enthalpy, spread(gas_cp, shape), liquid_cp,
            self._vapor_transport(basis, T, P, y, density, gas_cp),
            self._liquid_transport(basis, T, P, x, None, liquid_cp))
