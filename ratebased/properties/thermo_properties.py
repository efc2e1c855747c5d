"""The library's general property model: activity coefficients over vapour pressures, all stages at once."""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from ..errors import InputError
from .activity import ActivityModel, DissolvedGases
from .components import PropertyRecord, PureComponents, Role, records_frame
from .diffusion import GasDiffusivity, LiquidDiffusivity
from .henry import HenryLaw
from .jet import Jet
from .protocol import GAS_CONSTANT, Array, KDerivatives, LiquidTransport, Mask, VaporTransport
from .saturation import bubble_point, dew_point, smallest_gamma_eigenvalue
from .transport import (
    gas_mixture,
    interaction_coefficients,
    liquid_conductivity,
    liquid_viscosity,
    surface_tension,
)

if TYPE_CHECKING:
    import pandas as pd

    from .from_names import HenryArgument

SurfaceTension = Callable[[Array, Array, Array], Array]


class ThermoProperties:
    """Activity coefficients over vapour pressures, ideal-gas enthalpies, corresponding transport properties.

    K_i = gamma_i(T, x) Psat_i(T)/P; a dissolved gas has K_i = H_i(T, x)/P; a masked component 0.
    Enthalpies: the ideal gas at 298.15 K is the zero of every component in both phases; liquid h_i - Hvap_i - R T2
    dln(gamma_i)/dT, the last term the partial molar excess enthalpy of the same activity model (Gibbs-Helmholtz); a
    dissolved gas h_i - R T2 dln(H_i)/dT.

    K and the enthalpies belong to one Gibbs energy in composition and in the excess part. The latent heats are measured
    values; those the vapour-pressure curves imply (Clausius-Clapeyron with an ideal vapour) lie 1 to 6 % higher at the
    boiling point (water 1.6 %, ethanol 3.6 %, acetone 5.8 %), because a real vapour is no ideal gas.

    Build it with `from_names`; the constructor takes finished parts and imports nothing.

    Parameters
    ----------
    components : `PureComponents`.
    activity : `ActivityModel` of the components that are liquids of their own, in their order in `components`.
    henry : `HenryLaw` of the dissolved gases in the same liquids, or None.
    gas_diffusivity, liquid_diffusivity : callables, see `diffusion`.
    surface_tension : function (T, x, sigma) -> N/m (...) of the mixture, sigma (..., n) of the pure liquids; None takes
        the volume-fraction rule of `transport.surface_tension`.
    """

    def __init__(self, components: PureComponents, activity: ActivityModel, *, gas_diffusivity: GasDiffusivity,
                 liquid_diffusivity: LiquidDiffusivity, henry: HenryLaw | None = None,
                 surface_tension: SurfaceTension | None = None, records: Sequence[PropertyRecord] = ()) -> None:
        roles = components.roles
        n = len(roles)
        self.components = components
        self.names = components.names
        self.molar_mass = components.molar_mass
        self.condensable: Mask = np.array([role is not Role.NONCONDENSING for role in roles])
        self.volatile: Mask = np.array([role is not Role.NONVOLATILE for role in roles])
        self.T_range = components.T_range
        liquids = np.flatnonzero([role.has_liquid_data for role in roles])
        gases = np.flatnonzero([role is Role.DISSOLVED for role in roles])
        if activity.size != len(liquids):
            raise InputError(f"activity: a model of {activity.size} components for {len(liquids)} liquids "
                             f"({', '.join(self.names[i] for i in liquids)})")
        if (henry is None) != (gases.size == 0):
            raise InputError("henry: needed exactly when a component is a dissolved gas")
        whole = len(liquids) == n
        self.activity: ActivityModel = activity if whole else DissolvedGases(n, activity, liquids, henry, gases)
        self._ordinary = self.condensable & self.volatile
        self._all_ordinary = bool(self._ordinary.all())
        self._liquid = np.array([role.has_liquid_data for role in roles])
        self._all_liquid = whole
        self._gas_diffusivity = gas_diffusivity
        self._liquid_diffusivity = liquid_diffusivity
        self._surface_tension = surface_tension
        self._records = (*components.records, *records)
        bank = components.bank
        self._saturation = bank.view(("ln_vapor_pressure", 0))
        self._saturation_slope = bank.view(("ln_vapor_pressure", 1))
        self._gas_enthalpy = bank.view(("gas_enthalpy", 0))
        self._gas_heat_capacity = bank.view(("gas_enthalpy", 1))
        self._liquid_enthalpy = bank.view(("gas_enthalpy", 0), ("vaporization_enthalpy", 0))
        self._liquid_heat_capacity = bank.view(("gas_enthalpy", 1), ("vaporization_enthalpy", 1))
        self._vapor_values = bank.view(("gas_viscosity", 0), ("gas_conductivity", 0), ("gas_enthalpy", 1))
        self._liquid_values = bank.view(("liquid_volume", 0), ("ln_liquid_viscosity", 0), ("liquid_conductivity", 0),
                                        ("surface_tension", 0), ("gas_enthalpy", 1), ("vaporization_enthalpy", 1))

    @classmethod
    def from_names(cls, names: Sequence[str], activity: str | ActivityModel = "unifac", *,
                   T_range: tuple[float, float] | None = None, noncondensing: Sequence[str] = (),
                   nonvolatile: Sequence[str] = (), henry: HenryArgument = (),
                   parameters: Mapping[str, ArrayLike] | None = None,
                   surface_tension: SurfaceTension | None = None) -> ThermoProperties:
        """A model of components given by name or CAS number; see `from_names.build` for every argument."""
        from .from_names import build

        return build(cls, names, activity, T_range=T_range, noncondensing=noncondensing, nonvolatile=nonvolatile,
                     henry=henry, parameters=parameters, surface_tension=surface_tension)

    def _checked(self, name: str, value: ArrayLike) -> Array:
        composition = np.asarray(value, float)
        if composition.shape[-1:] != (len(self.names),):
            raise InputError(f"{name}: expected {len(self.names)} components on the last axis, got shape "
                             f"{composition.shape}")
        if not np.isfinite(composition).all():
            where = tuple(int(i) for i in np.argwhere(~np.isfinite(composition))[0])
            raise InputError(f"{name}{list(where)} = {composition[where]}: expected a finite number")
        return composition

    def _liquid_composition(self, x: ArrayLike) -> Array:
        composition = self._checked("x", x)
        if not self._all_liquid and not (composition[..., self._liquid].sum(-1) > 0).all():
            raise InputError("x: no component that is a liquid of its own is present")
        return composition

    # equilibrium ------------------------------------------------------------------------------------------------

    def k_value(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> Array:
        """K_i = y_i/x_i at equilibrium, (..., n); zero for masked components.

        T (...) K, P (...) Pa, x and y (..., n). Raises `PropertyRangeError` outside `T_range`.
        """
        T, P, x = np.asarray(T, float), np.asarray(P, float), self._liquid_composition(x)
        K = np.exp(self._saturation(T)[0] + self.activity.ln_gamma(T, x).value) / P[..., None]
        return K if self._all_ordinary else np.where(self._ordinary, K, 0.0)

    def k_value_derivatives(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> KDerivatives:
        """Analytic derivatives of ln K by temperature and mole numbers, see `KDerivatives`."""
        T, P, x = np.asarray(T, float), np.asarray(P, float), self._liquid_composition(x)
        slope = self._saturation_slope(T)[0] + self.activity.ln_gamma(T, x, 1).terms[1]
        by_liquid = self.activity.mole_number_derivatives(T, x)
        shape = np.broadcast_shapes(slope.shape[:-1], P.shape, np.shape(y)[:-1])
        n = len(self.names)
        if not self._all_ordinary:
            slope = np.where(self._ordinary, slope, 0.0)
            by_liquid = np.where(self._ordinary[:, None] & self.condensable, by_liquid, 0.0)
        return KDerivatives(np.broadcast_to(slope, (*shape, n)), np.broadcast_to(by_liquid, (*shape, n, n)),
                            np.zeros((*shape, n, n)))

    def thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """[Gamma] of the liquid, (..., n-1, n-1): delta_ij + x_i (J_ij - J_in), J the mole-number derivatives."""
        T, x = np.asarray(T, float), self._liquid_composition(x)
        J = self.activity.mole_number_derivatives(T, x)
        n = len(self.names) - 1
        return np.eye(n) + x[..., :n, None] * (J[..., :n, :n] - J[..., :n, n:])

    # enthalpies -------------------------------------------------------------------------------------------------

    def vapor_enthalpy(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """Partial molar enthalpies of the vapour above the ideal gas at 298.15 K, J/mol, (..., n)."""
        T, y = np.asarray(T, float), self._checked("y", y)
        h = self._gas_enthalpy(T)[0]
        return np.broadcast_to(h, np.broadcast_shapes(h.shape, y.shape)).copy()

    def liquid_enthalpy(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Partial molar enthalpies of the liquid above the ideal gas at 298.15 K, J/mol, (..., n)."""
        T, x = np.asarray(T, float), self._liquid_composition(x)
        ideal, latent = self._liquid_enthalpy(T)
        return ideal - latent + excess_enthalpy(T, self.activity.ln_gamma(T, x, 1))

    def vapor_heat_capacity(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """dH_i/dT of the vapour at constant pressure and composition, J/(mol K), (..., n)."""
        T, y = np.asarray(T, float), self._checked("y", y)
        cp = self._gas_heat_capacity(T)[0]
        return np.broadcast_to(cp, np.broadcast_shapes(cp.shape, y.shape)).copy()

    def liquid_heat_capacity(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """dH_i/dT of the liquid at constant pressure and composition, J/(mol K), (..., n)."""
        T, x = np.asarray(T, float), self._liquid_composition(x)
        ideal, latent = self._liquid_heat_capacity(T)
        return ideal - latent + excess_heat_capacity(T, self.activity.ln_gamma(T, x, 2))

    # transport --------------------------------------------------------------------------------------------------

    def vapor_transport(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> VaporTransport:
        """Ideal-gas density, Wilke's viscosity, the conductivity of Wassiljewa, Mason & Saxena, Fuller's diffusivities.

        Fields (...), diffusivity (..., n, n); see `VaporTransport`.
        """
        T, P, y = np.asarray(T, float), np.asarray(P, float), self._checked("y", y)
        viscosity, conductivity, cp = self._vapor_values(T)
        phi = interaction_coefficients(viscosity, self.molar_mass)
        shape = np.broadcast_shapes(T.shape, P.shape, y.shape[:-1])
        n = len(self.names)
        density = np.broadcast_to(P / (GAS_CONSTANT * T), shape)
        return VaporTransport(density, density * (y @ self.molar_mass),
                              np.broadcast_to(gas_mixture(y, viscosity, phi), shape),
                              np.broadcast_to((y * cp).sum(-1), shape),
                              np.broadcast_to(gas_mixture(y, conductivity, phi), shape),
                              np.broadcast_to(self._gas_diffusivity(T, P), (*shape, n, n)))

    def liquid_transport(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> LiquidTransport:
        """Volumes that add up, logarithmic viscosity, mixing rules of `transport`, generalised Vignes diffusivities.

        Dissolved gases count in the density only (with their volume at the boiling point), in the heat capacity and in
        the diffusivities; a component not in the liquid counts nowhere. Fields (...), diffusivity (..., n, n).
        """
        T, x = np.asarray(T, float), self._liquid_composition(x)
        volume, ln_viscosity, conductivity, tension, ideal_cp, latent_slope = self._liquid_values(T)
        own = x
        if not self._all_liquid:
            own = np.where(self._liquid, x, 0.0)
            own = own / own.sum(-1, keepdims=True)
        inside = x if self.condensable.all() else np.where(self.condensable, x, 0.0)
        shape = np.broadcast_shapes(T.shape, np.shape(P), x.shape[:-1])
        n = len(self.names)
        density = 1.0 / (inside * volume).sum(-1)
        cp = ideal_cp - latent_slope + excess_heat_capacity(T, self.activity.ln_gamma(T, x, 2))
        sigma = surface_tension(own, tension, volume) if self._surface_tension is None else np.asarray(
            self._surface_tension(T, x, tension), float)
        diffusivity = self._liquid_diffusivity(T, x, np.exp(ln_viscosity))
        return LiquidTransport(np.broadcast_to(density, shape),
                               np.broadcast_to(density * (inside @ self.molar_mass), shape),
                               np.broadcast_to(liquid_viscosity(own, ln_viscosity), shape),
                               np.broadcast_to((inside * cp).sum(-1), shape),
                               np.broadcast_to(liquid_conductivity(own, conductivity, self.molar_mass), shape),
                               np.broadcast_to(diffusivity, (*shape, n, n)),
                               np.broadcast_to(sigma, shape))

    # saturation and report ----------------------------------------------------------------------------------------

    def bubble_point(self, P: ArrayLike, x: ArrayLike, T_guess: ArrayLike | None = None, *,
                     y_noncondensing: ArrayLike | None = None) -> tuple[Array, Array]:
        """(T, y) at the bubble point; see `saturation.bubble_point`."""
        return bubble_point(self, P, x, T_guess, y_noncondensing=y_noncondensing)

    def dew_point(self, P: ArrayLike, y: ArrayLike, T_guess: ArrayLike | None = None, *,
                  x_nonvolatile: ArrayLike | None = None) -> tuple[Array, Array]:
        """(T, x) at the dew point; see `saturation.dew_point`."""
        return dew_point(self, P, y, T_guess, x_nonvolatile=x_nonvolatile)

    def smallest_gamma_eigenvalue(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Smallest real part among the eigenvalues of [Gamma], (...)."""
        return smallest_gamma_eigenvalue(self, T, P, x)

    def summary(self) -> pd.DataFrame:
        """Where every property comes from: component, property, method, T_low_K, T_high_K, source, fit_error, note."""
        return records_frame(self._records)


def excess_enthalpy(T: Array, ln_gamma: Jet) -> Array:
    """-R T2 dln(gamma_i)/dT, J/mol, (..., n), from a jet of order 1."""
    result: Array = -GAS_CONSTANT * (np.asarray(T) ** 2)[..., None] * ln_gamma.terms[1]
    return result


def excess_heat_capacity(T: Array, ln_gamma: Jet) -> Array:
    """Temperature derivative of `excess_enthalpy`, J/(mol K), (..., n), from a jet of order 2."""
    T = np.asarray(T)[..., None]
    result: Array = -GAS_CONSTANT * T * (2.0 * ln_gamma.terms[1] + T * ln_gamma.terms[2])
    return result
