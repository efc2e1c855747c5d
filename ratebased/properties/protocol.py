"""What the library asks of a property model: a structural type, several implementations, any user object.

Arrays: any leading batch shape, components last. T and P broadcast against the batch. SI units.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol, runtime_checkable

import numpy as np
from numpy.typing import NDArray

from correlations.constants import GAS_CONSTANT as GAS_CONSTANT

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


@dataclass(frozen=True)
class VaporTransport:
    """Bulk properties of a vapour.

    molar_density mol/m3, mass_density kg/m3, viscosity Pa s, heat_capacity J/(mol K) of the mixture, conductivity
    W/(m K): (...). diffusivity: Maxwell-Stefan pair diffusivities m2/s, (..., n, n), symmetric, diagonal ignored.
    """

    molar_density: Array
    mass_density: Array
    viscosity: Array
    heat_capacity: Array
    conductivity: Array
    diffusivity: Array


@dataclass(frozen=True)
class LiquidTransport(VaporTransport):
    """Bulk properties of a liquid: those of `VaporTransport` and surface_tension, N/m, (...)."""

    surface_tension: Array


@dataclass(frozen=True)
class KDerivatives:
    """Logarithmic derivatives of K at one state.

    temperature: dlnK_i/dT, 1/K, (..., n). liquid: dlnK_i/dn_j of the liquid at one mole in all (mole-number
    derivatives, so sum_j x_j liquid_ij = 0), (..., n, n). vapor: the same by the vapour's composition. Differences of
    columns are the derivatives at constant sum of fractions. Entries of masked components are zero.
    """

    temperature: Array
    liquid: Array
    vapor: Array


@runtime_checkable
class PropertyModel(Protocol):
    """Equilibrium, enthalpy and transport properties of one mixture.

    Masks: a component that is not `condensable` never enters the liquid (x = 0, N = 0), one that is not `volatile`
    never enters the vapour. `k_value` gives 0 for both (a placeholder: the masks decide).
    Optional methods, used where present: `k_value_derivatives(T, P, x, y) -> KDerivatives`;
    `vapor_heat_capacity(T, P, y)`, `liquid_heat_capacity(T, P, x)` (partial molar, dH_i/dT at constant composition,
    (..., n)); `vapor_thermodynamic_factor(T, P, y)` (identity without it); `vapor_enthalpy_derivatives(T, P, y)`,
    `liquid_enthalpy_derivatives(T, P, x)` (mole-number derivatives of the partial molar enthalpies, (..., n, n), None
    where they do not depend on composition; differences stand in for any that is missing).
    Optional attribute: `T_range` (low, high), K, outside which the model raises `PropertyRangeError`; solvers keep
    their iterates inside it.
    """

    @property
    def names(self) -> tuple[str, ...]: ...

    @property
    def molar_mass(self) -> Array:
        """kg/mol, (n,)."""
        ...

    @property
    def condensable(self) -> Mask: ...

    @property
    def volatile(self) -> Mask: ...

    def k_value(self, T: Array, P: Array, x: Array, y: Array) -> Array:
        """K_i = y_i/x_i at equilibrium, (..., n)."""
        ...

    def thermodynamic_factor(self, T: Array, P: Array, x: Array) -> Array:
        """[Gamma] of the liquid, (..., n-1, n-1), last component eliminated."""
        ...

    def vapor_enthalpy(self, T: Array, P: Array, y: Array) -> Array:
        """Partial molar enthalpies of the vapour, J/mol, (..., n)."""
        ...

    def liquid_enthalpy(self, T: Array, P: Array, x: Array) -> Array:
        """Partial molar enthalpies of the liquid, J/mol, (..., n), same reference state as the vapour's."""
        ...

    def vapor_transport(self, T: Array, P: Array, y: Array) -> VaporTransport: ...

    def liquid_transport(self, T: Array, P: Array, x: Array) -> LiquidTransport: ...
