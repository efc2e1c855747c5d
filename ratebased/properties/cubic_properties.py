"""A property model from one cubic equation of state for both phases."""
from __future__ import annotations

import warnings
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from ..errors import NoSolutionError, PropertyWarning
from .components import PropertyRecord, PureComponents
from .cubic import CubicEquation, CubicForm, Phase
from .diffusion import GasDiffusivity, LiquidDiffusivity
from .mixture import MixtureModel, SurfaceTension, excess_enthalpy, excess_heat_capacity, thermodynamic_factor
from .protocol import GAS_CONSTANT, Array, KDerivatives, LiquidTransport, Mask, VaporTransport
from .saturation import bubble_point, dew_point


class CubicProperties(MixtureModel):
    """K = phi_liquid/phi_vapor, both from one cubic equation; light gases need no other treatment.

    Enthalpies: ideal gas above 298.15 K plus the departure of the phase, so K and the latent heats belong to one Gibbs
    energy. Molar volume of the liquid with the volume shift of the equation (within a few per cent for hydrocarbons).
    For non-polar and weakly polar mixtures at any pressure; interaction parameters matter wherever hydrogen, nitrogen,
    carbon dioxide or polar components are present.
    Where a phase has no root of its own (see `cubic`), its properties are a continuation for iterations;
    `phase_exists` tells, and saturation points there raise `NoSolutionError`.

    Build it with `from_names`.
    """

    def __init__(self, components: PureComponents, equation: CubicEquation, *, gas_diffusivity: GasDiffusivity,
                 liquid_diffusivity: LiquidDiffusivity, surface_tension: SurfaceTension | None = None,
                 records: Sequence[PropertyRecord] = ()) -> None:
        super().__init__(components, gas_diffusivity=gas_diffusivity, liquid_diffusivity=liquid_diffusivity,
                         surface_tension=surface_tension, records=records)
        self.equation = equation

    @classmethod
    def from_names(cls, names: Sequence[str], equation: str | CubicForm = "peng-robinson", *,
                   T_range: tuple[float, float], k_ij: ArrayLike = 0.0, diffusivity: str = "wilke-chang",
                   surface_tension: SurfaceTension | None = None) -> CubicProperties:
        """A model of components given by name or CAS number.

        equation : "peng-robinson", "soave" or a `CubicForm`. T_range : (low, high), K. k_ij : (n, n), symmetric, zero
        diagonal. Liquid transport properties of a component above 0.98 Tc are held at their value there.
        Errors and warnings as for `ThermoProperties.from_names`.
        """
        from .from_names import build_cubic

        return build_cubic(cls, names, equation, T_range=T_range, k_ij=k_ij, diffusivity=diffusivity,
                           surface_tension=surface_tension)

    # equilibrium ------------------------------------------------------------------------------------------------

    def _state(self, T: ArrayLike, P: ArrayLike, name: str, z: ArrayLike) -> tuple[Array, Array, Array]:
        T, P = self._conditions(T, P)
        self._bank.check(T)
        return T, P, self._checked(name, z)

    def k_value(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> Array:
        """K_i = phi_i(liquid)/phi_i(vapour), (..., n)."""
        T, P, x = self._state(T, P, "x", x)
        liquid = self.equation.ln_phi(T, P, x, Phase.LIQUID).value
        vapor = self.equation.ln_phi(T, P, self._checked("y", y), Phase.VAPOR).value
        K: Array = np.exp(liquid - vapor)
        return K

    def k_value_derivatives(self, T: ArrayLike, P: ArrayLike, x: ArrayLike, y: ArrayLike) -> KDerivatives:
        """Analytic derivatives of ln K by temperature and the mole numbers of both phases."""
        T, P, x = self._state(T, P, "x", x)
        y = self._checked("y", y)
        slope = (self.equation.ln_phi(T, P, x, Phase.LIQUID, 1).terms[1]
                 - self.equation.ln_phi(T, P, y, Phase.VAPOR, 1).terms[1])
        by_liquid = self.equation.mole_number_derivatives(T, P, x, Phase.LIQUID)
        by_vapor = -self.equation.mole_number_derivatives(T, P, y, Phase.VAPOR)
        shape = (*slope.shape, slope.shape[-1])
        return KDerivatives(slope, np.broadcast_to(by_liquid, shape), np.broadcast_to(by_vapor, shape))

    def thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """[Gamma] of the liquid, from ln phi at constant T and P, (..., n-1, n-1)."""
        T, P, x = self._state(T, P, "x", x)
        return thermodynamic_factor(x, self.equation.mole_number_derivatives(T, P, x, Phase.LIQUID))

    def vapor_thermodynamic_factor(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """[Gamma] of the vapour, (..., n-1, n-1)."""
        T, P, y = self._state(T, P, "y", y)
        return thermodynamic_factor(y, self.equation.mole_number_derivatives(T, P, y, Phase.VAPOR))

    def phase_exists(self, T: ArrayLike, P: ArrayLike, z: ArrayLike, phase: Phase) -> Mask:
        """Whether a phase of composition z has a root of its own at T and P, (...)."""
        T, P, z = self._state(T, P, "z", z)
        return self.equation.exists(T, P, z, phase)

    # enthalpies -------------------------------------------------------------------------------------------------

    def _enthalpy(self, T: Array, P: Array, z: Array, phase: Phase) -> Array:
        return self._gas_enthalpy(self._bank.basis(T))[0] + excess_enthalpy(T, self.equation.ln_phi(T, P, z, phase, 1))

    def _heat_capacity(self, T: Array, P: Array, z: Array, phase: Phase) -> Array:
        departure = excess_heat_capacity(T, self.equation.ln_phi(T, P, z, phase, 2))
        return self._gas_heat_capacity(self._bank.basis(T))[0] + departure

    def vapor_enthalpy(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """Partial molar enthalpies of the vapour above the ideal gas at 298.15 K, J/mol, (..., n)."""
        return self._enthalpy(*self._state(T, P, "y", y), Phase.VAPOR)

    def liquid_enthalpy(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """Partial molar enthalpies of the liquid above the ideal gas at 298.15 K, J/mol, (..., n)."""
        return self._enthalpy(*self._state(T, P, "x", x), Phase.LIQUID)

    def vapor_heat_capacity(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> Array:
        """dH_i/dT of the vapour at constant pressure and composition, J/(mol K), (..., n)."""
        return self._heat_capacity(*self._state(T, P, "y", y), Phase.VAPOR)

    def liquid_heat_capacity(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> Array:
        """dH_i/dT of the liquid at constant pressure and composition, J/(mol K), (..., n)."""
        return self._heat_capacity(*self._state(T, P, "x", x), Phase.LIQUID)

    # transport --------------------------------------------------------------------------------------------------

    def vapor_transport(self, T: ArrayLike, P: ArrayLike, y: ArrayLike) -> VaporTransport:
        """Density and heat capacity of the equation of state, the other properties those of a gas at low pressure.

        Warns `PropertyWarning` where the vapour has no root of its own.
        """
        T, P, y = self._state(T, P, "y", y)
        self._warn_where_missing(T, P, y, Phase.VAPOR)
        density = P / (GAS_CONSTANT * T * self.equation.compressibility(T, P, y, Phase.VAPOR))
        return self._vapor_transport(self._bank.basis(T), T, P, y, density, self._heat_capacity(T, P, y, Phase.VAPOR))

    def liquid_transport(self, T: ArrayLike, P: ArrayLike, x: ArrayLike) -> LiquidTransport:
        """Density (volume-shifted) and heat capacity of the equation of state, mixing rules of `transport`.

        Warns `PropertyWarning` where the liquid has no root of its own.
        """
        T, P, x = self._state(T, P, "x", x)
        self._warn_where_missing(T, P, x, Phase.LIQUID)
        volume = GAS_CONSTANT * T / P * self.equation.compressibility(T, P, x, Phase.LIQUID)
        density = 1.0 / (volume - x @ self.equation.volume_shift)
        return self._liquid_transport(self._bank.basis(T), T, P, x, density, self._heat_capacity(T, P, x, Phase.LIQUID))

    def _warn_where_missing(self, T: Array, P: Array, z: Array, phase: Phase) -> None:
        missing = np.atleast_1d(~self.equation.exists(T, P, z, phase))
        if missing.any():
            where = [int(i) for i in np.argwhere(missing)[0]]
            warnings.warn(f"state {where}: no {phase.value} root at this temperature and pressure ({missing.sum()} of "
                          f"{missing.size} states), the properties are a continuation", PropertyWarning, stacklevel=3)

    # saturation -------------------------------------------------------------------------------------------------

    def bubble_point(self, P: ArrayLike, x: ArrayLike, T_guess: ArrayLike | None = None, *,
                     y_noncondensing: ArrayLike | None = None, y_guess: ArrayLike | None = None
                     ) -> tuple[Array, Array]:
        """(T, y) at the bubble point; starts from Wilson's estimate of K; see `saturation.bubble_point`."""
        if T_guess is None and y_guess is None:
            T_guess, y_guess = self._start(P, x, "x")
        T, y = bubble_point(self, P, x, T_guess, y_noncondensing=y_noncondensing, y_guess=y_guess)
        self._require_phases("bubble", T, P, np.asarray(x, float), y)
        return T, y

    def dew_point(self, P: ArrayLike, y: ArrayLike, T_guess: ArrayLike | None = None, *,
                  x_nonvolatile: ArrayLike | None = None, x_guess: ArrayLike | None = None) -> tuple[Array, Array]:
        """(T, x) at the dew point; starts from Wilson's estimate of K; see `saturation.dew_point`."""
        if T_guess is None and x_guess is None:
            T_guess, x_guess = self._start(P, y, "y")
        T, x = dew_point(self, P, y, T_guess, x_nonvolatile=x_nonvolatile, x_guess=x_guess)
        self._require_phases("dew", T, P, x, np.asarray(y, float))
        return T, x

    def _start(self, P: ArrayLike, z: ArrayLike, name: str) -> tuple[Array, Array]:
        """T where sum K z (or sum z/K) is one with Wilson's K (1968), by bisection, and the other phase there."""
        c = self.components
        P, z = np.asarray(P, float), self._checked(name, z)
        shape = np.broadcast_shapes(P.shape, z.shape[:-1])
        low, high = (np.full(shape, edge) for edge in self.T_range)
        for _ in range(30):
            T = 0.5 * (low + high)
            K = (c.critical_pressure / P[..., None]
                 * np.exp(5.37 * (1.0 + c.acentric_factor) * (1.0 - c.critical_temperature / T[..., None])))
            other = K * z if name == "x" else z / K
            boils = other.sum(-1) > 1.0 if name == "x" else other.sum(-1) < 1.0
            low, high = np.where(boils, low, T), np.where(boils, T, high)
        return T, other / other.sum(-1, keepdims=True)

    def _require_phases(self, label: str, T: Array, P: ArrayLike, x: Array, y: Array) -> None:
        """A solution needs two phases: both roots real, and not the same state twice."""
        P = np.asarray(P, float)
        same = np.abs(self.k_value(T, P, x, y) - 1.0).max(-1) < 1e-4
        volume = self.equation.compressibility(T, P, x, Phase.LIQUID) / self.equation.compressibility(
            T, P, y, Phase.VAPOR)
        bad = (~self.equation.exists(T, P, x, Phase.LIQUID) | ~self.equation.exists(T, P, y, Phase.VAPOR)
               | (same & (volume > 0.999)))
        if bad.any():
            where = tuple(int(i) for i in np.argwhere(bad)[0])
            raise NoSolutionError(f"{label} point{list(where) if where else ''}: the two phases are one at T = "
                                  f"{T[where]:.6g} K, beyond the critical point", best=(T, x, y), failed=bad)
