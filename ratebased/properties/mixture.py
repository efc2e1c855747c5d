"""What the property models built from pure-component data share: names, checks, transport, saturation, summary."""
from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import finite_array, positive_array, real_array
from ..errors import InputError
from .bank import Basis
from .components import PropertyRecord, PureComponents, Role, records_frame
from .diffusion import GasDiffusivity, LiquidDiffusivity
from .jet import Jet
from .protocol import GAS_CONSTANT, Array, LiquidTransport, Mask, PropertyModel, VaporTransport
from .saturation import bubble_point, dew_point, smallest_gamma_eigenvalue
from .transport import gas_mixture, interaction_coefficients, liquid_conductivity, liquid_viscosity, surface_tension

if TYPE_CHECKING:
    import pandas as pd

SurfaceTension = Callable[[Array, Array, Array], Array]
"""(T, x, sigma) -> N/m of the mixture, sigma (..., n) of the pure liquids."""

FRACTION_TOLERANCE = 1e-6
"""What mole fractions may fall below zero, and their sum be off one, before a property refuses them."""


@dataclass(frozen=True)
class StageProperties:
    """Everything a stage needs at one state, each field as the method of that name gives it."""

    k_value: Array
    thermodynamic_factor: Array
    vapor_enthalpy: Array
    liquid_enthalpy: Array
    vapor_heat_capacity: Array
    liquid_heat_capacity: Array
    vapor: VaporTransport
    liquid: LiquidTransport


class MixtureModel:
    """Base of the models: components, masks, mixing rules for transport, saturation points and the summary."""

    def __init__(self, components: PureComponents, *, gas_diffusivity: GasDiffusivity,
                 liquid_diffusivity: LiquidDiffusivity, surface_tension: SurfaceTension | None,
                 records: Sequence[PropertyRecord]) -> None:
        roles = components.roles
        self.components = components
        self.names = components.names
        self._ones = np.ones(len(components.names))
        self.molar_mass = components.molar_mass
        self.condensable: Mask = np.array([role is not Role.NONCONDENSING for role in roles])
        self.volatile: Mask = np.array([role is not Role.NONVOLATILE for role in roles])
        self.T_range = components.T_range
        self._ordinary = self.condensable & self.volatile
        self._all_ordinary = bool(self._ordinary.all())
        self._liquid = np.array([role.has_liquid_data for role in roles])
        self._all_liquid = bool(self._liquid.all())
        self._gas_diffusivity = gas_diffusivity
        self._liquid_diffusivity = liquid_diffusivity
        self._surface_tension = surface_tension
        self._records = (*components.records, *records)
        bank = self._bank = components.bank
        self._gas_enthalpy = bank.view(("gas_enthalpy", 0))
        self._gas_heat_capacity = bank.view(("gas_enthalpy", 1))
        self._vapor_values = bank.view(("gas_viscosity", 0), ("gas_conductivity", 0))
        self._liquid_values = bank.view(("liquid_volume", 0), ("ln_liquid_viscosity", 0), ("liquid_conductivity", 0),
                                        ("surface_tension", 0))

    def _conditions(self, T: ArrayLike, P: ArrayLike) -> tuple[Array, Array]:
        """T and P as arrays, P above zero; the bank checks T."""
        T, P = real_array("T", T), real_array("P", P)
        if not (np.minimum.reduce(P, axis=None, initial=1.0) > 0.0 and math.isfinite(np.add.reduce(P, axis=None))):
            positive_array("P", P)
        return T, P

    def _checked(self, name: str, value: ArrayLike) -> Array:
        composition = real_array(name, value)
        if composition.shape[-1:] != (len(self.names),):
            raise InputError(f"{name}: expected {len(self.names)} components on the last axis, got shape "
                             f"{composition.shape}")
        total = composition @ self._ones
        off = np.maximum.reduce(np.abs(total - 1.0), axis=None, initial=0.0)
        # loose: iterates of a solver and differences come here too
        if not (off <= FRACTION_TOLERANCE
                and np.minimum.reduce(composition, axis=None, initial=0.0) >= -FRACTION_TOLERANCE):
            finite_array(name, composition)
            if composition.min() < -FRACTION_TOLERANCE:
                where = tuple(int(i) for i in np.argwhere(composition < -FRACTION_TOLERANCE)[0])
                raise InputError(f"{name}{list(where)} = {composition[where]:.6g}: a mole fraction cannot be negative")
            where = tuple(int(i) for i in np.argwhere(np.abs(total - 1.0) > FRACTION_TOLERANCE)[0])
            raise InputError(f"{name}{list(where) if where else ''}: mole fractions sum to {total[where]:.8g}, "
                             "expected 1")
        return composition

    def _liquid_composition(self, x: ArrayLike) -> Array:
        composition = self._checked("x", x)
        if not self._all_liquid and not (composition[..., self._liquid].sum(-1) > 0).all():
            raise InputError("x: no component that is a liquid of its own is present")
        return composition

    # transport --------------------------------------------------------------------------------------------------

    def _vapor_transport(self, basis: Basis, T: Array, P: Array, y: Array, density: Array, heat_capacity: Array
                         ) -> VaporTransport:
        """Mixing rules at low pressure with a molar density (...) and partial molar heat capacities (..., n)."""
        viscosity, conductivity = self._vapor_values(basis)
        phi = interaction_coefficients(viscosity, self.molar_mass)
        shape = np.broadcast_shapes(T.shape, P.shape, y.shape[:-1])
        n = len(self.names)
        density = spread(density, shape)
        mixed = gas_mixture(y, np.stack([viscosity, conductivity], -2), phi)
        return VaporTransport(density, density * (y @ self.molar_mass), spread(mixed[..., 0], shape),
                              spread((y * heat_capacity).sum(-1), shape), spread(mixed[..., 1], shape),
                              spread(self._gas_diffusivity(T, P), (*shape, n, n)))

    def _liquid_transport(self, basis: Basis, T: Array, P: Array, x: Array, density: Array | None,
                          heat_capacity: Array) -> LiquidTransport:
        """Mixing rules with a molar density (...), None where volumes add up, and partial heat capacities (..., n)."""
        volume, ln_viscosity, conductivity, tension = self._liquid_values(basis)
        own = x
        if not self._all_liquid:
            own = np.where(self._liquid, x, 0.0)
            own = own / own.sum(-1, keepdims=True)
        inside = x if self.condensable.all() else np.where(self.condensable, x, 0.0)
        shape = np.broadcast_shapes(T.shape, P.shape, x.shape[:-1])
        n = len(self.names)
        density = spread(1.0 / (inside * volume).sum(-1) if density is None else density, shape)
        sigma = surface_tension(own, tension, volume) if self._surface_tension is None else np.asarray(
            self._surface_tension(T, x, tension), float)
        diffusivity = self._liquid_diffusivity(T, x, np.exp(ln_viscosity))
        return LiquidTransport(density, density * (inside @ self.molar_mass),
                               spread(liquid_viscosity(own, ln_viscosity), shape),
                               spread((inside * heat_capacity).sum(-1), shape),
                               spread(liquid_conductivity(own, conductivity, self.molar_mass), shape),
                               spread(diffusivity, (*shape, n, n)), spread(sigma, shape))

    # saturation and report --------------------------------------------------------------------------------------

    def bubble_point(self: PropertyModel, P: ArrayLike, x: ArrayLike, T_guess: ArrayLike | None = None, *,
                     y_noncondensing: ArrayLike | None = None, y_guess: ArrayLike | None = None
                     ) -> tuple[Array, Array]:
        """(T, y) at the bubble point; see `saturation.bubble_point`."""
        return bubble_point(self, P, x, T_guess, y_noncondensing=y_noncondensing, y_guess=y_guess)

    def dew_point(self: PropertyModel, P: ArrayLike, y: ArrayLike, T_guess: ArrayLike | None = None, *,
                  x_nonvolatile: ArrayLike | None = None, x_guess: ArrayLike | None = None
                  ) -> tuple[Array, Array]:
        """(T, x) at the dew point; see `saturation.dew_point`."""
        return dew_point(self, P, y, T_guess, x_nonvolatile=x_nonvolatile, x_guess=x_guess)

    def smallest_gamma_eigenvalue(self: PropertyModel, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Smallest real part among the eigenvalues of [Gamma], (...)."""
        return smallest_gamma_eigenvalue(self, T, P, x)

    def summary(self) -> pd.DataFrame:
        """Where every property comes from: component, property, method, T_low_K, T_high_K, source, fit_error, note."""
        return records_frame(self._records)


def spread(array: Array, shape: tuple[int, ...]) -> Array:
    """`array` broadcast to a shape, itself where it has that shape already (which is the usual case, and quicker)."""
    return array if array.shape == shape else np.broadcast_to(array, shape)


def thermodynamic_factor(x: Array, J: Array) -> Array:
    """[Gamma], (..., n-1, n-1), from mole fractions and the mole-number derivatives of ln gamma or ln phi."""
    n = x.shape[-1] - 1
    gamma: Array = np.eye(n) + x[..., :n, None] * (J[..., :n, :n] - J[..., :n, n:])
    return gamma


def excess_enthalpy(T: Array, ln_gamma: Jet) -> Array:
    """-R T2 dln(gamma_i)/dT, J/mol, (..., n), from a jet of order 1; the same of ln phi is the departure."""
    result: Array = -GAS_CONSTANT * (np.asarray(T) ** 2)[..., None] * ln_gamma.terms[1]
    return result


SLOPE_STEP = 0.05
"""K, of the central difference by temperature of mole-number derivatives: they bend over a hundred kelvin or more."""


def excess_enthalpy_derivatives(T: Array, mole_derivatives: Callable[[Array], Array]) -> Array:
    """Mole-number derivatives of `excess_enthalpy`, -R T2 dJ/dT, J/mol, (..., n, n); J(T) those of ln gamma or ln phi.

    Central difference, relative error below 1e-6.
    """
    T = np.asarray(T)
    slope = (mole_derivatives(T + SLOPE_STEP) - mole_derivatives(T - SLOPE_STEP)) / (2.0 * SLOPE_STEP)
    result: Array = -GAS_CONSTANT * (T ** 2)[..., None, None] * slope
    return result


def excess_heat_capacity(T: Array, ln_gamma: Jet) -> Array:
    """Temperature derivative of `excess_enthalpy`, J/(mol K), (..., n), from a jet of order 2."""
    T = np.asarray(T)[..., None]
    result: Array = -GAS_CONSTANT * T * (2.0 * ln_gamma.terms[1] + T * ln_gamma.terms[2])
    return result
