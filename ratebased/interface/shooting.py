"""Fast path for large ideal batches: both films shot from their bulks, n + 1 unknowns, arrays with the batch last.

With constant coefficients and ideal phases the films give y_I = exp(A_V(N)) y and x_I = exp(-A_L(N)) x, so the fluxes
and T_I are the only unknowns: n rows y_I - K x_I (N_k = 0 for a component that cannot pass) and the energy balance. One
Newton step from zero flux, where the films are straight lines, one or two more with the full Jacobian, then Broyden's
update of its inverse. What does not converge, or has films above `LARGEST`, is left to the general path.

At the zero-flux solution of an ideal interface the Jacobian has a sign known beforehand: with y_0 = K x its film part
is -diag(y_0) S, S symmetric, positive definite and with no positive entry off the diagonal, so S^-1 has no negative
entry, and with latent heats and dlnK/dT above zero the determinant has the sign (-1)^(m+1), m components that pass.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..properties.differences import k_value_derivatives, liquid_heat_capacity, vapor_heat_capacity
from .energy import EQUAL_TEMPERATURES, conduction, film_energy
from .equilibrium import zero_flux_temperature
from .newton import RATE_CAP, TEMPERATURE_CAP, solve_linear
from .problem import InterfaceProblem

Array = NDArray[np.float64]

LARGEST = 8.0
"""|A|_1 up to which a film is shot: rounding grows with its exponential."""
WORTHWHILE = 256
"""Batch below which the call overhead of the two paths is the same."""
FIRST_ROUND, MAX_ITERATIONS = 6, 10
"""Iterations before the unfinished problems of all chunks are brought together, and after that."""
COMPACT = 0.2
"""Share of a chunk that must be finished before it is taken out."""
RESIDUAL = 1e-9
PHYSICAL = -1e-10


@dataclass(frozen=True)
class Shot:
    """z (B, 2n+1), y_I and x_I (B, n); solved, on the branch of zero flux as far as the sign tells, residual, |A|_1 and
    iterations (B,).
    """

    z: Array
    y_I: Array
    x_I: Array
    solved: NDArray[np.bool_]
    connected: NDArray[np.bool_]
    residual: Array
    size: Array
    iterations: NDArray[np.int64]


@dataclass(frozen=True)
class _Columns:
    """A problem with the batch last, (n, M) and (n, n, M)."""

    problem: InterfaceProblem
    y: Array
    x: Array
    K_V: Array
    K_L: Array
    ordinary: Array
    inert: Array
    largest_K: Array


def _columns(p: InterfaceProblem) -> _Columns:
    K_V = np.ascontiguousarray(np.moveaxis(p.K_V, 0, -1))
    K_L = np.ascontiguousarray(np.moveaxis(p.K_L, 0, -1))
    ordinary = p.ordinary[:, None].astype(float)
    return _Columns(p, np.ascontiguousarray(p.y.T), np.ascontiguousarray(p.x.T), K_V, K_L, ordinary,
                    (1.0 - ordinary) / p.flux_scale, 2.0 * np.maximum(K_V.max((0, 1)), K_L.max((0, 1))))


def applicable(p: InterfaceProblem) -> bool:
    """Both phases ideal by every sign at the bulks, films of constant coefficients in their exact form."""
    if not (p.exact_films and p.ideal_vapor and p.ideal_liquid) or p.n < 2:
        return False
    slope = k_value_derivatives(p.properties, p.T_L, p.P, p.x, p.y)
    positive = np.where(p.ordinary, slope.temperature, 1.0) > 0
    latent = np.where(p.ordinary, p.H_V - p.H_L, 1.0) > 0
    return bool(positive.all() and latent.all() and not slope.liquid.any() and not slope.vapor.any())


def _film_matrix(v: Array, K: Array) -> Array:
    """A(v) with the batch last; also M(v)."""
    A = -v[:, None] * K
    np.einsum("iim->im", A)[...] = np.einsum("ijm,jm->im", K, v)
    return A


def _order(norm: float, smallest: float) -> int:
    order, term = 1, norm
    while term > smallest:
        order += 1
        term *= norm / order
    return order


def _shoot(N: Array, K: Array, x: Array, sign: int, jacobian: bool) -> tuple[Array, Array | None, Array]:
    """exp(sign A(N)) x, its derivative by N if wanted, |A|_1: the series in Horner's form.

    The derivative is cut at 1e-6: it steers the steps, the values alone decide what is accepted.
    """
    A = _film_matrix(N, K)
    size = np.abs(A).sum(0).max(0)
    top = min(float(size.max()), LARGEST)
    if sign < 0:
        np.negative(A, out=A)
    order, order_slope = _order(top, 1e-17), _order(top, 1e-6)
    p, G = x, None
    for k in range(order, 0, -1):
        if jacobian and k <= order_slope:
            M = _film_matrix(p, K)
            if G is None:
                G = M * (-sign / k)
            else:
                G = np.einsum("ijm,jlm->ilm", A, G)
                if sign > 0:
                    G -= M
                else:
                    G += M
                G *= 1.0 / k
        p = np.einsum("ijm,jm->im", A, p)
        p *= 1.0 / k
        p += x
    return p, G, size


@dataclass(frozen=True)
class _Rows:
    """F (n+1, M), J (n+1, n+1, M) or None, y_I, x_I (n, M), |A|_1 (M)."""

    F: Array
    J: Array | None
    y: Array
    x: Array
    size: Array

    @property
    def system(self) -> tuple[Array, Array]:
        """F and J."""
        if self.J is None:
            raise ValueError("rows without Jacobian")
        return self.F, self.J


def _rows(c: _Columns, N: Array, T: Array, jacobian: bool, at_rest: bool = False) -> _Rows:
    """The scaled equations; `at_rest`: N = 0, where the films are straight lines."""
    p, n = c.problem, len(N)
    if at_rest:
        y, x, size = c.y, c.x, np.zeros(N.shape[1])
        G_V: Array | None = -_film_matrix(c.y, c.K_V)
        G_L: Array | None = _film_matrix(c.x, c.K_L)
    else:
        y, G_V, size_V = _shoot(N, c.K_V, c.y, 1, jacobian)
        x, G_L, size_L = _shoot(N, c.K_L, c.x, -1, jacobian)
        size = np.maximum(size_V, size_L)
    K = np.asarray(p.properties.k_value(T, p.P, p.x, p.y)).T
    w = c.ordinary / np.maximum(1.0, K)
    wK = w * K
    F = np.empty((n + 1, N.shape[1]))
    np.multiply(w, y, out=F[:n])
    F[:n] -= wK * x
    F[:n] += c.inert * N
    bulks = _energy_arguments(p, N, T, jacobian)
    if not jacobian or G_V is None or G_L is None:
        F[n] = (conduction(*bulks[0]).E - conduction(*bulks[1]).E) / p.energy_scale
        return _Rows(F, None, y, x, size)
    vapor, liquid = film_energy(*bulks[0]), film_energy(*bulks[1])
    F[n] = (vapor.E - liquid.E) / p.energy_scale
    J = np.empty((n + 1, n + 1, N.shape[1]))
    np.multiply(w[:, None], G_V, out=J[:n, :n])
    J[:n, :n] -= wK[:, None] * G_L
    np.einsum("iim->im", J)[:n] += c.inert
    slope = np.asarray(k_value_derivatives(p.properties, T, p.P, p.x, p.y).temperature).T
    np.multiply(wK * x, -slope, out=J[:n, n])
    J[n, :n] = ((vapor.dN - liquid.dN) / p.energy_scale[:, None]).T
    J[n, n] = (vapor.dT_interface - liquid.dT_interface) / p.energy_scale
    return _Rows(F, J, y, x, size)


_EnergyArguments = tuple[Array, Array, Array, Array, Array, Array, Array, int]


def _energy_arguments(p: InterfaceProblem, N: Array, T: Array, jacobian: bool) -> tuple[_EnergyArguments,
                                                                                     _EnergyArguments]:
    """Arguments of `film_energy` for both films; heat capacities are asked for only where they enter."""
    model, N = p.properties, N.T
    H_V, H_L = np.asarray(model.vapor_enthalpy(T, p.P, p.y)), np.asarray(model.liquid_enthalpy(T, p.P, p.x))
    slopes = []
    for T_bulk, composition, capacity in ((p.T_V, p.y, vapor_heat_capacity), (p.T_L, p.x, liquid_heat_capacity)):
        needed = jacobian or bool((np.abs(T_bulk - T) < EQUAL_TEMPERATURES).any())
        slopes.append(capacity(model, T, p.P, composition) if needed else np.zeros(()))
    return ((N, T, p.T_V, p.h_V, p.H_V, H_V, slopes[0], 1), (N, T, p.T_L, p.h_L, p.H_L, H_L, slopes[1], -1))


def _step(c: _Columns, d: Array, size: Array) -> tuple[Array, Array]:
    """The step d (n+1, M) shortened by the caps of the general path, and the factor t."""
    n = len(d) - 1
    t = np.minimum(1.0, RATE_CAP * np.maximum(1.0, size) / (np.abs(d[:n]).max(0) * c.largest_K + 1e-300))
    t = np.minimum(t, TEMPERATURE_CAP / (np.abs(d[n]) + 1e-300))
    return d * t, t


def _inverse(J: Array) -> Array:
    """Inverse with the batch last; NaN for a singular matrix."""
    first = np.ascontiguousarray(np.moveaxis(J, -1, 0))
    try:
        inverse = np.linalg.inv(first)
    except np.linalg.LinAlgError:
        inverse = solve_linear(first, np.broadcast_to(np.eye(first.shape[-1]), first.shape))
    return np.ascontiguousarray(np.moveaxis(inverse, 0, -1))


def solve(problem: InterfaceProblem, tolerance: float) -> Shot:
    """Solve what converges; the rest is marked."""
    n, B = problem.n, len(problem.y)
    chunk = max(128, 20000 // n ** 2)
    N, T, size = np.empty((n, B)), zero_flux_temperature(problem, 1e-2), np.empty(B)
    for first in range(0, B, chunk):
        part = slice(first, first + chunk)
        c = _columns(problem.take(part))
        with np.errstate(all="ignore"):
            F, J = _rows(c, np.zeros_like(c.y), T[part], True, at_rest=True).system
            d, _ = _step(c, -_apply(_inverse(J), F), np.zeros(len(T[part])))
        N[:, part] = d[:n]
        T[part] += d[n]
        size[part] = np.abs(d[:n]).max(0) * c.largest_K
    # films of one size together: the largest of a chunk sets the length of the series
    order = np.argsort(np.where(np.isfinite(size), size, np.inf), kind="stable")
    done, count = np.zeros(B, bool), np.zeros(B, np.int64)
    for limit in (FIRST_ROUND, MAX_ITERATIONS):              # the slow ones of all chunks together
        order = order[~done[order]]
        for first in range(0, len(order), chunk):
            index = order[first:first + chunk]
            N[:, index], T[index], done[index], used = _iterate(_columns(problem.take(index)), N[:, index], T[index],
                                                                tolerance, limit)
            count[index] += used
    return _accepted(problem, N, T, done, count + 1, np.argsort(size), chunk)


def _accepted(problem: InterfaceProblem, N: Array, T: Array, done: NDArray[np.bool_], iterations: NDArray[np.int64],
              order: NDArray[np.int64], chunk: int) -> Shot:
    """Residual, signs of the fractions and of the determinant at the end points."""
    n, B = N.shape
    y, x, residual, size = np.full((B, n), np.nan), np.full((B, n), np.nan), np.full(B, np.nan), np.full(B, np.nan)
    solved, connected = np.zeros(B, bool), np.zeros(B, bool)
    sign = -1.0 if problem.ordinary.sum() % 2 == 0 else 1.0
    order = order[done[order]]
    for first in range(0, len(order), chunk):
        index = order[first:first + chunk]
        with np.errstate(all="ignore"):
            rows = _rows(_columns(problem.take(index)), N[:, index], T[index], True)
            F, J = rows.system
            worst = np.abs(F).max(0)
            fine = (worst < RESIDUAL) & (rows.y.min(0) >= PHYSICAL) & (rows.x.min(0) >= PHYSICAL)
            fine &= rows.size < LARGEST
            determinant = np.linalg.det(np.ascontiguousarray(np.moveaxis(np.where(fine, J, 0.0), -1, 0)))
        solved[index], connected[index] = fine, determinant * sign > 0
        y[index], x[index], residual[index], size[index] = rows.y.T, rows.x.T, worst, rows.size
    z = np.concatenate((N.T, np.where(problem.condensable, x, y), T[:, None]), axis=1)
    return Shot(z, y, x, solved, connected, residual, size, iterations)


def _apply(H: Array, F: Array) -> Array:
    return np.asarray(np.einsum("ijm,jm->im", H, F))


def _iterate(c: _Columns, N: Array, T: Array, tolerance: float, limit: int
             ) -> tuple[Array, Array, NDArray[np.bool_], NDArray[np.int64]]:
    """Newton, then Broyden's update, from (N, T): last point, converged, iterations; finished problems leave."""
    M = N.shape[1]
    n = len(N)
    N_end, T_end = N.copy(), T.copy()
    done, count = np.zeros(M, bool), np.full(M, limit)
    index, fresh = np.arange(M), True
    before = np.full(M, np.inf)
    F_before = s = H = np.empty(0)
    with np.errstate(all="ignore"):
        for iteration in range(1, limit + 1):
            rows = _rows(c, N, T, fresh)
            if fresh and rows.J is not None:
                H = _inverse(rows.J)
            else:
                Hy = _apply(H, rows.F - F_before)
                scale = np.einsum("im,im->m", s, Hy)
                w = (s - Hy) / np.where(scale == 0, 1.0, scale)
                H += w[:, None] * np.einsum("im,ijm->jm", s, H)[None]
            s, t = _step(c, -_apply(H, rows.F), rows.size)
            N, T = N + s[:n], T + s[n]
            e = np.maximum(np.abs(s[:n]).max(0) / (np.abs(N).max(0) + 1e-300), np.abs(s[n]) / T)
            ready = (t == 1.0) & ((e < 0.1 * tolerance) | ((e * e < 1e-3 * tolerance * before) & (e < 1e-6)))
            lost = ~np.isfinite(e) | (rows.size > LARGEST) | (T < 0)
            leaving = ready | lost
            if iteration == 1:
                leaving[:] = False
            F_before, before = rows.F, e
            if leaving.any() and (leaving.mean() > COMPACT or iteration == limit):
                keep = ~leaving
                gone = index[leaving]
                N_end[:, gone], T_end[gone] = N[:, leaving], T[leaving]
                done[gone], count[gone] = ready[leaving], iteration
                index = index[keep]
                if not len(index):
                    return N_end, T_end, done, count
                N, T, s, H, c = N[:, keep], T[keep], s[:, keep], H[:, :, keep], _kept(c, keep)
                F_before, before = F_before[:, keep], e[keep]
            fresh = iteration < 3 and bool(np.count_nonzero(before > 0.1) > 0.3 * len(before))
    fit = np.isfinite(N).all(0) & (T > 0)
    N_end[:, index[fit]], T_end[index[fit]] = N[:, fit], T[fit]
    return N_end, T_end, done, count


def _kept(c: _Columns, keep: NDArray[np.bool_]) -> _Columns:
    return _Columns(c.problem.take(keep), c.y[:, keep], c.x[:, keep], c.K_V[:, :, keep], c.K_L[:, :, keep], c.ordinary,
                    c.inert[:, keep], c.largest_K[keep])
