"""The equations of the two-film interface: residual and Jacobian blocks, batched.

Unknowns z = (N_1..N_n, u_1..u_n, T_I), u_i = x_I,i (y_I,i for a component that does not condense). With y_I,i = K_i
x_I,i the 2n + 1 rows are: the vapour film (n - 1: all components but an abundant one), the liquid film (n - 1), sum
y_I = 1, sum x_I = 1, and E_V = E_L. Both films are in the form M(x_m) N = Gamma C(Z) D of `film.blocks` with one
[Gamma] at the mean of interface and bulk (composition and temperature): exact for ideal films, the Krishna-Standart
solution with constant [Gamma] otherwise.

Components that cannot pass the interface need no rows of their own: with x_k = x_I,k = 0 the liquid film gives N_k = 0
for a non-condensing component, with y_k = y_I,k = 0 the vapour film does so for one that is not volatile.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..film import krishna_standart
from ..film.blocks import film_matrix
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Mask, PropertyModel
from .energy import FilmEnergy, film_energy
from .equilibrium import equilibrium, normalized, zero_flux_temperature
from .film_rows import FilmMethod, FilmRows
from .problem import InterfaceProblem, prepare
from .records import Bulk
from .slopes import enthalpy_by_composition, factor_and_slopes

Array = NDArray[np.float64]


@dataclass(frozen=True)
class InterfaceBlocks:
    """Residual of an interface at z = (N, u, T_I) and its derivatives by z and by w = (y, T_V, x, T_L).

    residual (..., 2n+1) : rows vapour film, liquid film, sum y_I - 1, sum x_I - 1 (all in mole fractions), and (E_V -
        E_L)/energy_scale, the scale held constant in the derivatives. dz (..., 2n+1, 2n+1). dw (..., 2n+1, 2n+2) or
        None: the columns of the fractions of a phase are fixed, in each row, up to a common constant (one of them is
        zero), so that a chain rule whose dy sum to zero is right.
    E_V, E_L : energy fluxes of the two films from vapour to liquid, W/m2, (...), with dE_*_dz (..., 2n+1) and dE_*_dw
        (..., 2n+2) or None. q_* : conduction at the four faces, W/m2, (...), with that of the first as dq_vapor_bulk_*.
    size : largest |A|_1 of the two films, (...). terms : size of the terms of the film rows, at least 1: what their
        residual is small against. y_I, x_I, K : the interface state, (..., n).
    """

    residual: Array
    dz: Array
    dw: Array | None
    E_V: Array
    E_L: Array
    dE_V_dz: Array
    dE_V_dw: Array | None
    dE_L_dz: Array
    dE_L_dw: Array | None
    dq_vapor_bulk_dz: Array
    dq_vapor_bulk_dw: Array | None
    q_vapor_bulk: Array
    q_vapor_interface: Array
    q_liquid_interface: Array
    q_liquid_bulk: Array
    size: Array
    terms: Array
    rate_factor: Array
    y_I: Array
    x_I: Array
    K: Array
    gamma_vapor: Array | None
    gamma_liquid: Array | None


def interface_blocks(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike, z: Array, *,
                     film: FilmMethod = krishna_standart, y_guess: Array | None = None,
                     bulk_derivatives: bool = True) -> InterfaceBlocks:
    """Residual and Jacobian blocks of the interface at z, for a Newton method that carries N, u and T_I itself.

    Parameters
    ----------
    vapor, liquid : `Bulk` records; nothing is checked here.
    properties : a `PropertyModel`. P : Pa, (...).
    z : unknowns (N, u, T_I), (..., 2n+1): fluxes from vapour to liquid, mol/(m2 s); x_I,i or, for a non-condensing
        component, y_I,i; K.
    film : film method; `krishna_standart` and `linearized` have rows of their own, others go through differences.
    y_guess : interface vapour at which K is first evaluated, (..., n), default the bulk vapour; it matters only where K
        depends on the vapour's composition.
    bulk_derivatives : False leaves out dw and dE_*_dw (saves the composition slopes of the enthalpies).

    Source: Krishna & Standart (1976) films; energy balance with the Ackermann (1937) factor, see `energy`.
    """
    problem = prepare(vapor, liquid, properties, np.asarray(P, float), film)
    return evaluate(problem, z, problem.y if y_guess is None else y_guess, bulk_derivatives)


def interface_start(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike) -> Array:
    """Start for z, (..., 2n+1): no flux, the interface liquid that of the bulk, at its zero-flux temperature."""
    problem = prepare(vapor, liquid, properties, np.asarray(P, float), krishna_standart)
    return at_rest(problem, zero_flux_temperature(problem, 1e-2))


def at_rest(problem: InterfaceProblem, T: Array) -> Array:
    """z of zero flux at interface temperature T."""
    n = problem.n
    u = np.where(problem.condensable, problem.x, problem.y)
    shape = np.broadcast_shapes(u.shape[:-1], np.shape(T), problem.T_V.shape, problem.flux_scale.shape)
    z = np.zeros((*shape, 2 * n + 1))
    z[..., n:2 * n], z[..., 2 * n] = u, T
    return z


def closed(x: Array, pivot: int) -> Array:
    """The fraction of the pivot as what the others leave of one: the film rows know n - 1 of them."""
    x = np.array(x)
    x[..., pivot] = 0.0
    x[..., pivot] = 1.0 - x.sum(-1)
    return x


def rate_size(N: Array, K: Array) -> Array:
    """|A(N)|_1, (...)."""
    norm: Array = np.abs(film_matrix(N, K)).sum(-2).max(-1)
    return norm


@dataclass(frozen=True)
class _Film:
    """Rows of one film, those of all components but the pivot.

    residual (..., n-1); dN, dx0, dxd (..., n-1, n): columns in the order of the components, the composition ones along
    e_j - e_pivot. by_temperature (..., n-1) or None: by the mean temperature. gamma : [Gamma] as the model gives it.
    """

    residual: Array
    dN: Array
    dx0: Array
    dxd: Array
    size: Array
    gamma: Array | None
    by_temperature: Array | None


def _film(rows: FilmRows, pivot: int, N: Array, K: Array, x0: Array, xd: Array, factor: Any, T: Array, P: Array,
          mask: Mask, limits: tuple[float, float]) -> _Film:
    """Film from x0 to xd with [Gamma] at the mean composition and the temperature T; `factor` None: ideal."""
    n = N.shape[-1]
    order = np.array([*(j for j in range(n) if j != pivot), pivot])
    arguments = (N[..., order], K[..., order[:, None], order], x0[..., order], xd[..., order])
    gamma = by_temperature = None
    if factor is None:
        film = rows(*arguments, None, None)
    else:
        mean = normalized(np.where(mask, 0.5 * (x0 + xd), 0.0))
        gamma, slope, by_T = factor_and_slopes(factor, T, P, mean, mask, limits)
        turned, slope, by_T = _turned(gamma, slope, by_T, order)
        film = rows(*arguments, turned, slope)
        if np.abs(by_T).max(initial=0.0) > 0.0:
            # the residual is linear in dGamma: send twice the temperature slope along with the first composition
            # slope (which counts half) and take the difference
            slope = np.array(slope)
            slope[..., 0, :, :] += 2.0 * by_T
            by_temperature = (rows(*arguments, turned, slope).dx0 - film.dx0)[..., 0]
    batch = film.residual.shape[:-1]
    dN, dx0, dxd = (np.zeros((*batch, n - 1, n)) for _ in range(3))
    dN[..., order], dx0[..., order[:-1]], dxd[..., order[:-1]] = film.dN, film.dx0, film.dxd
    return _Film(film.residual, dN, dx0, dxd, film.size, gamma, by_temperature)


def _turned(gamma: Array, slope: Array, by_T: Array, order: NDArray[np.int64]) -> tuple[Array, Array, Array]:
    """[Gamma] and its slopes with the last of `order` eliminated in place of the last component."""
    n = len(order)
    if order[-1] == n - 1:
        return gamma, slope, by_T
    every = np.concatenate((np.eye(n - 1), -np.ones((1, n - 1))))       # deviations of all from those of the first n-1
    change = every[order[:-1]]
    back = np.linalg.inv(change)
    slopes = np.concatenate((slope, np.zeros_like(slope[..., :1, :, :])), axis=-3)
    slopes = slopes[..., order[:-1], :, :] - slopes[..., order[-1:], :, :]
    return change @ gamma @ back, change @ slopes @ back, change @ by_T @ back


def evaluate(problem: InterfaceProblem, z: Array, y_guess: Array, bulk_derivatives: bool) -> InterfaceBlocks:
    """`interface_blocks` of a prepared problem."""
    p, n = problem, problem.n
    m = n - 1
    N, u, T = z[..., :n], z[..., n:2 * n], z[..., 2 * n]
    eq = equilibrium(p, T, u, y_guess)
    vapor = _film(p.rows, p.pivot_vapor, N, p.K_V, p.y, closed(eq.y_I, p.pivot_vapor),
                  None if p.ideal_vapor else p.properties.vapor_thermodynamic_factor,  # type: ignore[attr-defined]
                  0.5 * (p.T_V + T), p.P, p.volatile, p.limits)
    liquid = _film(p.rows, p.pivot_liquid, N, p.K_L, closed(eq.x_I, p.pivot_liquid), p.x,
                   None if p.ideal_liquid else p.properties.thermodynamic_factor,
                   0.5 * (p.T_L + T), p.P, p.condensable, p.limits)
    energy_V, energy_L = energies(p, N, T, bulk_derivatives)

    batch = np.broadcast_shapes(z.shape[:-1], vapor.residual.shape[:-1], liquid.residual.shape[:-1],
                                energy_V.E.shape, energy_L.E.shape)
    residual = np.empty((*batch, 2 * n + 1))
    residual[..., :m], residual[..., m:2 * m] = vapor.residual, liquid.residual
    residual[..., 2 * m], residual[..., 2 * m + 1] = eq.y_I.sum(-1) - 1.0, eq.x_I.sum(-1) - 1.0
    residual[..., 2 * n] = (energy_V.E - energy_L.E) / p.energy_scale

    dE_V_dz, dE_L_dz = (_energy_by_unknowns(e, n, batch) for e in (energy_V, energy_L))
    dz = np.zeros((*batch, 2 * n + 1, 2 * n + 1))
    dz[..., :m, :n] = vapor.dN
    dz[..., :m, n:2 * n] = vapor.dxd @ eq.dy_du
    dz[..., :m, 2 * n] = (vapor.dxd @ eq.dy_dT[..., None])[..., 0]
    dz[..., m:2 * m, :n] = liquid.dN
    dz[..., m:2 * m, n:2 * n] = np.where(p.condensable, liquid.dx0, 0.0)
    for film, rows in ((vapor, slice(0, m)), (liquid, slice(m, 2 * m))):
        if film.by_temperature is not None:
            dz[..., rows, 2 * n] += 0.5 * film.by_temperature
    dz[..., 2 * m, n:2 * n], dz[..., 2 * m, 2 * n] = eq.dy_du.sum(-2), eq.dy_dT.sum(-1)
    dz[..., 2 * m + 1, n:2 * n] = p.condensable
    dz[..., 2 * n, :] = (dE_V_dz - dE_L_dz) / p.energy_scale[..., None]

    dq_dz, dq_dw = dE_V_dz.copy(), None
    dq_dz[..., :n] -= p.H_V
    dw = dE_V_dw = dE_L_dw = None
    if energy_V.dbulk is not None and energy_L.dbulk is not None:
        dE_V_dw, dE_L_dw = np.zeros((*batch, 2 * n + 2)), np.zeros((*batch, 2 * n + 2))
        dE_V_dw[..., :n + 1], dE_L_dw[..., n + 1:] = energy_V.dbulk, energy_L.dbulk
        dq_dw = dE_V_dw.copy()
        dq_dw[..., :n + 1] -= energy_V.dbulk_enthalpy
        dw = np.zeros((*batch, 2 * n + 1, 2 * n + 2))
        dw[..., :m, :n] = vapor.dx0
        dw[..., m:2 * m, n + 1:2 * n + 1] = liquid.dxd
        if vapor.by_temperature is not None:
            dw[..., :m, n] = 0.5 * vapor.by_temperature
        if liquid.by_temperature is not None:
            dw[..., m:2 * m, 2 * n + 1] = 0.5 * liquid.by_temperature
        dw[..., 2 * n, :] = (dE_V_dw - dE_L_dw) / p.energy_scale[..., None]

    size = np.broadcast_to(np.maximum(rate_size(N, p.K_V), rate_size(N, p.K_L)), batch)
    rate_factor = np.maximum(np.abs(energy_V.rate_factor), np.abs(energy_L.rate_factor))
    terms = np.maximum(1.0, np.maximum(vapor.size, liquid.size)) if m else np.ones(batch)
    return InterfaceBlocks(residual, dz, dw, energy_V.E, energy_L.E, dE_V_dz, dE_V_dw, dE_L_dz, dE_L_dw, dq_dz, dq_dw,
                           energy_V.q_bulk, energy_V.q_interface, energy_L.q_interface, energy_L.q_bulk, size, terms,
                           rate_factor, eq.y_I, eq.x_I, eq.K, vapor.gamma, liquid.gamma)


def energies(p: InterfaceProblem, N: Array, T: Array, bulk_derivatives: bool) -> tuple[FilmEnergy, FilmEnergy]:
    """Energy fluxes of the vapour and of the liquid film."""
    model = p.properties
    H_V, H_L = np.asarray(model.vapor_enthalpy(T, p.P, p.y)), np.asarray(model.liquid_enthalpy(T, p.P, p.x))
    slope_V, slope_L = vapor_heat_capacity(model, T, p.P, p.y), liquid_heat_capacity(model, T, p.P, p.x)
    bulk_V = bulk_L = by_V = by_L = None
    if bulk_derivatives:
        bulk_V, bulk_L = vapor_heat_capacity(model, p.T_V, p.P, p.y), liquid_heat_capacity(model, p.T_L, p.P, p.x)
        by_V = enthalpy_by_composition(model.vapor_enthalpy, getattr(model, "vapor_enthalpy_derivatives", None),
                                       np.stack(np.broadcast_arrays(p.T_V, T)), p.P, p.y, p.volatile)
        by_L = enthalpy_by_composition(model.liquid_enthalpy, getattr(model, "liquid_enthalpy_derivatives", None),
                                       np.stack(np.broadcast_arrays(p.T_L, T)), p.P, p.x, p.condensable)
    return (film_energy(N, T, p.T_V, p.h_V, p.H_V, H_V, slope_V, 1, slope_bulk=bulk_V,
                        H_bulk_composition=None if by_V is None else by_V[0],
                        H_interface_composition=None if by_V is None else by_V[1]),
            film_energy(N, T, p.T_L, p.h_L, p.H_L, H_L, slope_L, -1, slope_bulk=bulk_L,
                        H_bulk_composition=None if by_L is None else by_L[0],
                        H_interface_composition=None if by_L is None else by_L[1]))


def _energy_by_unknowns(energy: FilmEnergy, n: int, batch: tuple[int, ...]) -> Array:
    by_z = np.zeros((*batch, 2 * n + 1))
    by_z[..., :n], by_z[..., 2 * n] = energy.dN, energy.dT_interface
    return by_z
