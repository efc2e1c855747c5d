"""The interface read backwards: fluxes and the state at the interface are known, the bulks are sought."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import batch_shape, finite_array, mole_fractions, pair_matrix, positive_array
from ..errors import ConvergenceError, InputError, NoSolutionError
from ..film.blocks import coth_blocks, resistances, shoot
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Mask, PropertyModel
from ..properties.saturation import bubble_point, dew_point
from .energy import film_energy
from .equilibrium import normalized
from .records import Bulk
from .slopes import factor_and_slopes

Array = NDArray[np.float64]

MAX_STEPS = 60
TEMPERATURE_STEP = 20.0
"""K, largest change of a bulk temperature in one step."""


def bulks_from_interface(N: ArrayLike, properties: PropertyModel, P: ArrayLike, *, x_I: ArrayLike | None = None,
                         y_I: ArrayLike | None = None, T_I: ArrayLike | None = None, kappa_vapor: ArrayLike,
                         kappa_liquid: ArrayLike, heat_transfer_vapor: ArrayLike, heat_transfer_liquid: ArrayLike,
                         molar_density_vapor: ArrayLike, molar_density_liquid: ArrayLike,
                         vapor_temperature: ArrayLike | None = None,
                         energy_flux: ArrayLike | None = None) -> tuple[Bulk, Bulk]:
    """The bulk vapour and liquid that drive given fluxes through an interface of given composition.

    Both films are walked back from the interface: y = exp(-A_V(N)) y_I, x = exp(A_L(N)) x_I in ideal films, M(x_m) N =
    Gamma C(Z) (x_I - x) solved for x in a non-ideal one; then the bulk temperatures follow from the energy flux.

    Parameters
    ----------
    N : fluxes from vapour to liquid, mol/(m2 s), (..., n); zero for a component that cannot pass.
    properties : a `PropertyModel`. P : Pa, (...).
    x_I, y_I : interface mole fractions, (..., n). One of them is enough, the other follows from equilibrium. Of a
        non-condensing component y_I must be given, of a non-volatile one x_I; with both given, y_I counts only for
        the non-condensing components.
    T_I : K, (...). Equilibrium fixes it; a value given is checked to 1e-6.
    kappa_*, heat_transfer_*, molar_density_* : of the two films, as in `Bulk`.
    vapor_temperature : K, or energy_flux : W/m2, (...): one of them closes the energy balance.

    Returns
    -------
    The bulk vapour and the bulk liquid.

    Raises
    ------
    InputError : bad arguments. NoSolutionError : no bulk gives these fluxes (a fraction would be negative: more flux
    than the film can feed). ConvergenceError : a bulk composition or temperature was not found.
    """
    n = len(properties.names)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    flux, pressure = finite_array("N", N), positive_array("P", P)
    if flux.shape[-1:] != (n,):
        raise InputError(f"N: expected {n} components on the last axis, got shape {flux.shape}")
    wrong = (flux != 0) & ~(condensable & volatile)
    if wrong.any():
        where = tuple(int(i) for i in np.argwhere(wrong)[0])
        raise InputError(f"N{list(where)} = {flux[where]:.6g}: {properties.names[where[-1]]} cannot pass the interface")
    if (vapor_temperature is None) == (energy_flux is None):
        raise InputError("vapor_temperature, energy_flux: exactly one of them closes the energy balance")
    T, x_face, y_face = _interface_state(properties, pressure, x_I, y_I, T_I)
    c_V, c_L = positive_array("molar_density_vapor", molar_density_vapor), positive_array(
        "molar_density_liquid", molar_density_liquid)
    k_V, k_L = pair_matrix("kappa_vapor", kappa_vapor, n), pair_matrix("kappa_liquid", kappa_liquid, n)
    h_V = positive_array("heat_transfer_vapor", heat_transfer_vapor)
    h_L = positive_array("heat_transfer_liquid", heat_transfer_liquid)
    closing = np.asarray(0.0) if vapor_temperature is None else positive_array("vapor_temperature", vapor_temperature)
    given = None if energy_flux is None else finite_array("energy_flux", energy_flux)
    shape = batch_shape(N=flux.shape[:-1], P=pressure.shape, interface=T.shape, kappa_vapor=k_V.shape[:-2],
                        kappa_liquid=k_L.shape[:-2], molar_density_vapor=c_V.shape, molar_density_liquid=c_L.shape,
                        heat_transfer_vapor=h_V.shape, heat_transfer_liquid=h_L.shape,
                        vapor_temperature=closing.shape, energy_flux=() if given is None else given.shape)
    flux, T = np.broadcast_to(flux, (*shape, n)), np.broadcast_to(T, shape)
    x_face, y_face = np.broadcast_to(x_face, (*shape, n)), np.broadcast_to(y_face, (*shape, n))
    T_V, T_L = T, T
    if given is None:
        T_V = np.broadcast_to(closing, shape)
    else:
        given = np.broadcast_to(given, shape)
    # [Gamma] belongs to the mean temperature of a film, the bulk temperature to the composition: a few rounds
    for _ in range(MAX_STEPS):
        y = _walk(flux, resistances(k_V, c_V), y_face, -1, getattr(properties, "vapor_thermodynamic_factor", None),
                  0.5 * (T + T_V), pressure, volatile, properties, "vapor")
        x = _walk(flux, resistances(k_L, c_L), x_face, 1, properties.thermodynamic_factor, 0.5 * (T + T_L), pressure,
                  condensable, properties, "liquid")
        before_V, before_L = T_V, T_L
        if given is None:
            E = _energy(properties, flux, T, T_V, pressure, y, h_V, 1)[0]
        else:
            E, T_V = given, _bulk_temperature(properties, flux, T, pressure, y, h_V, given, 1)
        T_L = _bulk_temperature(properties, flux, T, pressure, x, h_L, E, -1)
        moved = np.maximum(np.abs(T_V - before_V), np.abs(T_L - before_L))
        if moved.max(initial=0.0) < 1e-10 * T.max(initial=1.0):
            break
    else:
        raise ConvergenceError("bulk states behind non-ideal films not found", best=(y, T_V, x, T_L), residual=moved)
    return Bulk(y, np.array(T_V), k_V, h_V, c_V), Bulk(x, T_L, k_L, h_L, c_L)


def _interface_state(properties: PropertyModel, P: Array, x_I: ArrayLike | None, y_I: ArrayLike | None,
                     T_I: ArrayLike | None) -> tuple[Array, Array, Array]:
    """T_I, x_I and y_I in equilibrium."""
    n = len(properties.names)
    condensable, volatile = np.asarray(properties.condensable, bool), np.asarray(properties.volatile, bool)
    guess = None if T_I is None else positive_array("T_I", T_I)
    if x_I is not None:
        x = mole_fractions("x_I", x_I, n)
        gases = None
        if y_I is not None:
            gases = np.where(condensable, 0.0, finite_array("y_I", y_I))
        T, y = bubble_point(properties, P, x, guess, y_noncondensing=gases)
    elif y_I is not None:
        if not volatile.all():
            raise InputError("x_I: needed, a component that is not volatile does not show in y_I")
        y = mole_fractions("y_I", y_I, n)
        T, x = dew_point(properties, P, y, guess)
    else:
        raise InputError("x_I, y_I: one of them is needed")
    if guess is not None:
        off = np.abs(T - guess) > 1e-6 * T
        if off.any():
            where = tuple(int(i) for i in np.argwhere(off)[0])
            given = np.broadcast_to(guess, T.shape)
            raise InputError(f"T_I{list(where) if where else ''} = {given[where]:.8g} K: the interface boils at "
                             f"{T[where]:.8g} K")
    return np.asarray(T), np.asarray(x), np.asarray(y)


def _walk(N: Array, K: Array, face: Array, sign: int, factor: object, T: Array, P: Array, mask: Mask,
          properties: PropertyModel, phase: str) -> Array:
    """Bulk composition behind a film, from its interface composition; sign = 1: liquid, -1: vapour."""
    with np.errstate(over="ignore", invalid="ignore"):
        bulk, _ = shoot(N, K, face, sign)
    if not np.isfinite(bulk).all():
        where = tuple(int(i) for i in np.argwhere(~np.isfinite(bulk).all(-1))[0])
        raise NoSolutionError(f"{phase}{list(where) if where else ''}: far more flux than the film can carry, no bulk "
                              "composition gives it", failed=np.asarray(~np.isfinite(bulk).all(-1)))
    if callable(factor) and not _ideal(factor, T, P, face, bulk):
        bulk = _walk_nonideal(N, K, face, bulk, sign, factor, T, P, mask, properties)
    bulk = np.where(mask, bulk, 0.0)
    negative = bulk < -1e-12
    if negative.any():
        where = tuple(int(i) for i in np.argwhere(negative)[0])
        raise NoSolutionError(f"{phase}{list(where)}: these fluxes need a bulk mole fraction of {bulk[where]:.4g} of "
                              f"{properties.names[where[-1]]}", failed=np.asarray(negative.any(-1)))
    return normalized(bulk)


def _ideal(factor: object, T: Array, P: Array, face: Array, bulk: Array) -> bool:
    if not callable(factor):
        return True
    gamma = np.asarray(factor(np.stack([T, T]), P, np.stack([normalized(face), normalized(bulk)])))
    return bool(np.array_equal(gamma, np.broadcast_to(np.eye(gamma.shape[-1]), gamma.shape)))


def _walk_nonideal(N: Array, K: Array, face: Array, bulk: Array, sign: int, factor: object, T: Array, P: Array,
                   mask: Mask, properties: PropertyModel) -> Array:
    """Newton on the bulk composition with [Gamma] at the mean of face and bulk."""
    if not callable(factor):
        return bulk
    limits = getattr(properties, "T_range", (1.0, 1e5))
    x = normalized(bulk)
    for _ in range(MAX_STEPS):
        mean = normalized(np.where(mask, 0.5 * (face + x), 0.0))
        gamma, slope, _ = factor_and_slopes(factor, T, P, mean, mask, limits)
        pair = (face, x) if sign > 0 else (x, face)
        film = coth_blocks(N, K, *pair, gamma, slope)
        step = -np.linalg.solve(film.dxd if sign > 0 else film.dx0, film.residual[..., None])[..., 0]
        step = np.concatenate((step, -step.sum(-1, keepdims=True)), axis=-1)
        step *= np.minimum(1.0, 0.3 / np.maximum(np.abs(step).max(-1, keepdims=True), 1e-300))
        x = x + step
        if np.abs(step).max(initial=0.0) < 1e-14:
            return x
    failed = np.asarray(~(np.abs(step).max(-1) <= 1e-10))     # not a number has failed
    if failed.any():
        raise ConvergenceError("bulk composition behind a non-ideal film not found", best=x, failed=failed)
    return x


def _energy(properties: PropertyModel, N: Array, T: Array, T_bulk: Array, P: Array, composition: Array, h: Array,
            side: int) -> tuple[Array, Array]:
    """Energy flux of one film and its derivative by the bulk temperature."""
    enthalpy, capacity = ((properties.vapor_enthalpy, vapor_heat_capacity) if side > 0 else
                          (properties.liquid_enthalpy, liquid_heat_capacity))
    energy = film_energy(N, T, T_bulk, h, np.asarray(enthalpy(T_bulk, P, composition)),
                         np.asarray(enthalpy(T, P, composition)), capacity(properties, T, P, composition), side,
                         slope_bulk=capacity(properties, T_bulk, P, composition))
    slope = np.zeros_like(energy.E) if energy.dbulk is None else energy.dbulk[..., -1]
    return energy.E, slope


def _bulk_temperature(properties: PropertyModel, N: Array, T: Array, P: Array, composition: Array, h: Array, E: Array,
                      side: int) -> Array:
    """The bulk temperature with which a film carries the energy flux E."""
    bulk = np.array(T)
    low, high = getattr(properties, "T_range", (1.0, 1e5))
    for _ in range(MAX_STEPS):
        value, slope = _energy(properties, N, T, bulk, P, composition, h, side)
        step = np.clip((E - value) / slope, -TEMPERATURE_STEP, TEMPERATURE_STEP)
        bulk = np.clip(bulk + step, low, high)
        if np.abs(step).max(initial=0.0) < 1e-11 * np.max(T, initial=1.0):
            return bulk
    failed = np.asarray(~(np.abs(step) <= 1e-8 * T))
    if failed.any():
        raise ConvergenceError(f"temperature of the bulk {'vapor' if side > 0 else 'liquid'} not found", best=bulk,
                               failed=failed)
    return bulk
