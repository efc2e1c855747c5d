"""A mixture of constant relative volatility: for analysis, tests and teaching."""
from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import component_vector, finite_scalar, pair_matrix, positive_scalar, real_array, truth_values
from ..errors import InputError
from .protocol import GAS_CONSTANT, Array, KDerivatives, LiquidTransport, Mask, VaporTransport


class ConstantVolatility:
    """K_i = alpha_i exp(a - b/T)/P with constant latent heats, heat capacities and transport constants.

    Partial molar enthalpies, J/mol: cp_L,i (T - T_ref) in the liquid, latent_i + cp_V,i (T - T_ref) in the vapour, so
    `latent_heat` is the heat of vaporisation at `reference_temperature`. With equal latent heats and no heat
    capacities a column of it has constant molar overflow exactly. K and the enthalpies belong to one Gibbs energy only
    if latent_i = R b for every component and cp_V = cp_L.

    Parameters
    ----------
    names : component names, n of them.
    volatility : alpha_i, (n,), positive; the entry of a masked component is ignored.
    latent_heat : J/mol at `reference_temperature`, (n,) or one for all.
    a, b : of the vapour pressure exp(a - b/T), Pa and K.
    vapor_heat_capacity, liquid_heat_capacity : J/(mol K), (n,) or one for all.
    reference_temperature : K.
    condensable, volatile : masks, (n,), default all true.
    molar_mass : kg/mol, (n,) or one for all.
    vapor_diffusivity, liquid_diffusivity : pair diffusivities, m2/s, (n, n) or one for all pairs.
    vapor_molar_density : mol/m3; None takes the ideal gas P/(R T).
    The other transport constants are those of a light organic mixture near its boiling point.

    Raises
    ------
    InputError : a vector of the wrong length, a volatility or temperature that is not positive, a component that is
        neither condensable nor volatile.
    """

    def __init__(self, names: Sequence[str], volatility: ArrayLike, latent_heat: ArrayLike, *, a: float, b: float,
                 vapor_heat_capacity: ArrayLike = 0.0, liquid_heat_capacity: ArrayLike = 0.0,
                 reference_temperature: float = 298.15, condensable: ArrayLike | None = None,
                 volatile: ArrayLike | None = None, molar_mass: ArrayLike = 0.05,
                 vapor_diffusivity: ArrayLike = 1e-5, liquid_diffusivity: ArrayLike = 3e-9,
                 vapor_molar_density: float | None = None, liquid_molar_density: float = 1.2e4,
                 vapor_viscosity: float = 1e-5, liquid_viscosity: float = 3e-4, vapor_conductivity: float = 0.02,
                 liquid_conductivity: float = 0.13, surface_tension: float = 0.02) -> None:
        self.names = tuple(names)
        n = len(self.names)
        if n < 1 or len(set(self.names)) != n:
            raise InputError(f"names: expected distinct component names, got {list(self.names)}")
        self.condensable: Mask = np.ones(n, bool) if condensable is None else truth_values("condensable", condensable)
        self.volatile: Mask = np.ones(n, bool) if volatile is None else truth_values("volatile", volatile)
        for label, mask in (("condensable", self.condensable), ("volatile", self.volatile)):
            if mask.shape != (n,):
                raise InputError(f"{label}: expected shape ({n},), got {mask.shape}")
        for i in np.flatnonzero(~(self.condensable | self.volatile)):
            raise InputError(f"{self.names[i]} is neither condensable nor volatile")
        self.ordinary: Mask = self.condensable & self.volatile
        alpha = real_array("volatility", volatility)
        if alpha.shape not in ((), (n,)):
            raise InputError(f"volatility: expected {n} entries, one for each component, got shape {alpha.shape}")
        alpha = component_vector("volatility", np.where(self.ordinary, alpha, 1.0), n, positive=True)
        self.volatility: Array = np.where(self.ordinary, alpha, 0.0)
        self.latent_heat = component_vector("latent_heat", latent_heat, n)
        self.vapor_cp = component_vector("vapor_heat_capacity", vapor_heat_capacity, n)
        self.liquid_cp = component_vector("liquid_heat_capacity", liquid_heat_capacity, n)
        self.molar_mass = component_vector("molar_mass", molar_mass, n, positive=True)
        self.a, self.b = finite_scalar("a", a), finite_scalar("b", b)
        self.reference_temperature = positive_scalar("reference_temperature", reference_temperature)
        self.vapor_diffusivity = pair_matrix("vapor_diffusivity", vapor_diffusivity, n)
        self.liquid_diffusivity = pair_matrix("liquid_diffusivity", liquid_diffusivity, n)
        self.vapor_molar_density = None if vapor_molar_density is None else positive_scalar("vapor_molar_density",
                                                                                            vapor_molar_density)
        self.liquid_molar_density = positive_scalar("liquid_molar_density", liquid_molar_density)
        self.vapor_viscosity = positive_scalar("vapor_viscosity", vapor_viscosity)
        self.liquid_viscosity = positive_scalar("liquid_viscosity", liquid_viscosity)
        self.vapor_conductivity = positive_scalar("vapor_conductivity", vapor_conductivity)
        self.liquid_conductivity = positive_scalar("liquid_conductivity", liquid_conductivity)
        self.surface_tension = positive_scalar("surface_tension", surface_tension)

    def k_value(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> Array:
        """alpha_i exp(a - b/T)/P, (..., n); zero for masked components."""
        T, P, x = np.asarray(T, float), np.asarray(P, float), np.asarray(x, float)
        K = self.volatility * (np.exp(self.a - self.b / T) / P)[..., None]
        return np.broadcast_to(K, np.broadcast_shapes(K.shape, x.shape)).copy()

    def k_value_derivatives(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> KDerivatives:
        """dlnK_i/dT = b/T2 for the components in both phases; K does not depend on composition."""
        T, x = np.asarray(T, float), np.asarray(x, float)
        n = len(self.names)
        slope = np.where(self.ordinary, self.b / T[..., None] ** 2, 0.0)
        shape = np.broadcast_shapes(slope.shape, x.shape)
        zero = np.zeros((*shape, n))
        return KDerivatives(np.broadcast_to(slope, shape).copy(), zero, zero)

    def thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Identity: the liquid is ideal."""
        x = np.asarray(x, float)
        n = len(self.names)
        return np.broadcast_to(np.eye(n - 1), (*x.shape[:-1], n - 1, n - 1)).copy()

    def vapor_enthalpy(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """latent_i + cp_V,i (T - T_ref), J/mol, (..., n)."""
        return self.latent_heat + self.vapor_cp * (np.asarray(T, float)[..., None] - self.reference_temperature)

    def liquid_enthalpy(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """cp_L,i (T - T_ref), J/mol, (..., n)."""
        return self.liquid_cp * (np.asarray(T, float)[..., None] - self.reference_temperature)

    def vapor_heat_capacity(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """cp_V,i, J/(mol K), (..., n)."""
        return np.broadcast_to(self.vapor_cp, (*np.shape(T), len(self.names))).copy()

    def liquid_heat_capacity(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """cp_L,i, J/(mol K), (..., n)."""
        return np.broadcast_to(self.liquid_cp, (*np.shape(T), len(self.names))).copy()

    def vapor_transport(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> VaporTransport:
        """The constants given; molar density P/(R T) unless given."""
        T, P, y = np.asarray(T, float), np.asarray(P, float), np.asarray(y, float)
        shape = np.broadcast_shapes(T.shape, P.shape, y.shape[:-1])

        def constant(value: float) -> Array:
            return np.full(shape, value)

        given = self.vapor_molar_density
        density = np.broadcast_to(P / (GAS_CONSTANT * T), shape) if given is None else constant(given)
        return VaporTransport(density, density * (y @ self.molar_mass), constant(self.vapor_viscosity),
                              np.broadcast_to(y @ self.vapor_cp, shape), constant(self.vapor_conductivity),
                              np.broadcast_to(self.vapor_diffusivity, shape + self.vapor_diffusivity.shape))

    def liquid_transport(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> LiquidTransport:
        """The constants given."""
        T, x = np.asarray(T, float), np.asarray(x, float)
        shape = np.broadcast_shapes(T.shape, x.shape[:-1])

        def constant(value: float) -> Array:
            return np.full(shape, value)

        return LiquidTransport(constant(self.liquid_molar_density),
                               self.liquid_molar_density * np.broadcast_to(x @ self.molar_mass, shape),
                               constant(self.liquid_viscosity), np.broadcast_to(x @ self.liquid_cp, shape),
                               constant(self.liquid_conductivity),
                               np.broadcast_to(self.liquid_diffusivity, shape + self.liquid_diffusivity.shape),
                               constant(self.surface_tension))
