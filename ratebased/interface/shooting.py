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

from collections.abc import Iterator
from dataclasses import dataclass, replace
from itertools import pairwise
from math import factorial

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
SLOPE_ACCURACY = 1e-3
"""Last term kept in the series of a derivative."""
CHUNK = 2000
"""Problems handled at a time: few enough for the cache, enough to hide the calls."""
FULL = 3
"""Jacobians taken at most; after that only updates of the last one."""
SIZES = (1.0, 2.0, 4.0)
"""|A|_1 at which a new chunk begins."""
SUPERLINEAR = 1e-2
"""e^2/e_before foretells the error after a step of Broyden's method: accepted below this share of the tolerance."""
SURE = 6
"""Iterations up to which the sign of det J carried along is believed, if it is the expected one."""
COMPACT = 0.4
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
    elsewhere = np.empty((len(p.y), 0))                       # the resistances go with the columns from here
    return _Columns(replace(p, K_V=elsewhere, K_L=elsewhere), np.ascontiguousarray(p.y.T),
                    np.ascontiguousarray(p.x.T), K_V, K_L, ordinary,
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
    """exp(sign A(N)) x, its derivative by N if wanted, |A|_1.

    The series in Horner's form with the factorials taken out, q <- A q + x/k!, and for the derivative G <- A G - M(q).
    That one is cut earlier: it steers the steps, the values alone decide what is accepted.
    """
    A = _film_matrix(N, K)
    size = np.abs(A).sum(0).max(0)
    if sign < 0:
        np.negative(A, out=A)
    top = min(float(size.max()), LARGEST)
    order, order_slope = _order(top, 1e-17), _order(top, SLOPE_ACCURACY) if jacobian else 0
    q, G = x * (1.0 / factorial(order)), None
    for k in range(order - 1, -1, -1):
        if k < order_slope:
            step = _film_matrix(-sign * q, K)
            G = step if G is None else np.add(np.einsum("ijm,jlm->ilm", A, G), step, out=step)
        q = np.einsum("ijm,jm->im", A, q)
        q += x * (1.0 / factorial(k))
    return q, G, size


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


def _inverse(J: Array) -> tuple[Array, Array]:
    """Inverse with the batch last, NaN for a singular matrix, and the sign of the determinant."""
    first = np.ascontiguousarray(np.moveaxis(J, -1, 0))
    try:
        inverse = np.linalg.inv(first)
    except np.linalg.LinAlgError:
        inverse = solve_linear(first, np.broadcast_to(np.eye(first.shape[-1]), first.shape))
    return np.ascontiguousarray(np.moveaxis(inverse, 0, -1)), _sign(first)


def _sign(J: Array) -> Array:
    """Sign of det J, batch first."""
    return np.sign(np.linalg.det(np.where(np.isfinite(J), J, 0.0)))


def solve(problem: InterfaceProblem, tolerance: float, earlier: Array | None = None) -> Shot:
    """Solve what converges, from z (B, 2n+1) of an earlier answer or from zero flux; the rest is marked."""
    n, B = problem.n, len(problem.y)
    shot = Shot(np.full((B, 2 * n + 1), np.nan), np.full((B, n), np.nan), np.full((B, n), np.nan), np.zeros(B, bool),
                np.zeros(B, bool), np.full(B, np.nan), np.full(B, np.nan), np.zeros(B, np.int64))
    if earlier is None:
        N, T = _first_step(problem)
    else:
        N, T = np.ascontiguousarray(earlier[:, :n].T), earlier[:, 2 * n].copy()
    # films of one size together: the largest of a chunk sets the length of the series
    size = 2.0 * np.abs(N).max(0) * np.maximum(problem.K_V.max((-1, -2)), problem.K_L.max((-1, -2)))
    order = np.argsort(np.where(np.isfinite(size), size, np.inf), kind="stable")
    for limit in (FIRST_ROUND, MAX_ITERATIONS):              # the slow ones of all chunks together
        order = order[~shot.solved[order]]
        for index in _chunks(order, size):
            c = _columns(problem.take(index))
            run = _iterate(c, N[:, index], T[index], tolerance, limit)
            N[:, index], T[index] = run.N, run.T
            shot.iterations[index] += run.iterations
            _accept(c, run, index, shot)
    return shot


def _chunks(order: NDArray[np.int64], size: Array) -> Iterator[NDArray[np.int64]]:
    """Pieces of `order`, sorted by size, none of them mixing films of very different size."""
    edges = [0, *np.searchsorted(size[order], SIZES), len(order)]
    for low, high in pairwise(edges):
        for first in range(low, high, CHUNK):
            yield order[first:min(first + CHUNK, high)]


def _first_step(problem: InterfaceProblem) -> tuple[Array, Array]:
    """N (n, B) and T (B,) after the Newton step from zero flux."""
    N, T = np.empty((problem.n, len(problem.y))), zero_flux_temperature(problem, 1e-2)
    for first in range(0, len(T), CHUNK):
        part = slice(first, first + CHUNK)
        c = _columns(problem.take(part))
        with np.errstate(all="ignore"):
            F, J = _rows(c, np.zeros_like(c.y), T[part], True, at_rest=True).system
            d = -solve_linear(np.ascontiguousarray(np.moveaxis(J, -1, 0)), F.T).T
            d, _ = _step(c, d, np.zeros(d.shape[1]))
        N[:, part] = d[:-1]
        T[part] += d[-1]
    return N, T


def _accept(c: _Columns, run: _Run, index: NDArray[np.int64], shot: Shot) -> None:
    """Residual and fractions at the end points of a run; the sign of det J anew where there is doubt."""
    n = len(run.N)
    expected = -1.0 if c.problem.ordinary.sum() % 2 == 0 else 1.0
    with np.errstate(all="ignore"):
        rows = _rows(c, run.N, run.T, False)
        worst = np.abs(rows.F).max(0)
        good = run.converged & (worst < RESIDUAL) & (rows.size < LARGEST)
        good &= (rows.y.min(0) >= PHYSICAL) & (rows.x.min(0) >= PHYSICAL)
        sign = run.sign
        slow = np.flatnonzero(good & ((shot.iterations[index] > SURE) | (sign != expected)))
        if len(slow):
            _, J = _rows(_kept(c, slow), run.N[:, slow], run.T[slow], True).system
            sign[slow] = _sign(np.ascontiguousarray(np.moveaxis(J, -1, 0)))
    kept = index[good]
    shot.solved[kept], shot.connected[kept] = True, sign[good] == expected
    shot.residual[kept], shot.size[kept] = worst[good], rows.size[good]
    shot.y_I[kept], shot.x_I[kept] = rows.y.T[good], rows.x.T[good]
    shot.z[kept, :n], shot.z[kept, 2 * n] = run.N.T[good], run.T[good]
    shot.z[kept, n:2 * n] = np.where(c.problem.condensable, shot.x_I[kept], shot.y_I[kept])


def _apply(H: Array, F: Array) -> Array:
    return np.asarray(np.einsum("ijm,jm->im", H, F))


@dataclass(frozen=True)
class _Run:
    """Last point (n, M) and (M), converged, iterations, and the sign of det J.

    The sign is that of the last Jacobian evaluated, turned by every update whose factor s.s/(s.H dF) is negative.
    """

    N: Array
    T: Array
    converged: NDArray[np.bool_]
    iterations: NDArray[np.int64]
    sign: Array


def _iterate(c: _Columns, N: Array, T: Array, tolerance: float, limit: int) -> _Run:
    """Newton, then Broyden's update, from (N, T); finished problems leave."""
    n, M = N.shape
    end = _Run(N.copy(), T.copy(), np.zeros(M, bool), np.full(M, limit), np.zeros(M))
    index, before = np.arange(M), np.full(M, np.inf)
    fresh = True
    F_before = s = H = sign = np.empty(0)
    with np.errstate(all="ignore"):
        for iteration in range(1, limit + 1):
            rows = _rows(c, N, T, fresh)
            if fresh and rows.J is not None:
                H, sign = _inverse(rows.J)
            else:
                Hy = _apply(H, rows.F - F_before)
                scale = np.einsum("im,im->m", s, Hy)
                w = (s - Hy) / np.where(scale == 0, 1.0, scale)
                H += w[:, None] * np.einsum("im,ijm->jm", s, H)[None]
                sign = np.where(scale < 0, -sign, sign)
            s, t = _step(c, -_apply(H, rows.F), rows.size)
            N, T = N + s[:n], T + s[n]
            e = np.maximum(np.abs(s[:n]).max(0) / (np.abs(N).max(0) + 1e-300), np.abs(s[n]) / T)
            ready = (t == 1.0) & ((e < 0.1 * tolerance) | ((e * e < SUPERLINEAR * tolerance * before) & (e < 1e-6)))
            lost = ~np.isfinite(e) | (rows.size > LARGEST) | (T < 0)
            leaving = ready | lost
            F_before, before = rows.F, e
            if leaving.any() and (leaving.mean() > COMPACT or iteration == limit):
                keep = np.flatnonzero(~leaving)
                gone = index[leaving]
                end.N[:, gone], end.T[gone] = N[:, leaving], T[leaving]
                end.converged[gone], end.iterations[gone], end.sign[gone] = ready[leaving], iteration, sign[leaving]
                index = index[keep]
                if not len(index):
                    return end
                N, T, s, H, sign, c = N[:, keep], T[keep], s[:, keep], H[:, :, keep], sign[keep], _kept(c, keep)
                F_before, before = F_before[:, keep], e[keep]
            fresh = iteration < FULL and bool(np.count_nonzero(before > 0.1) > 0.3 * len(before))
    fit = np.isfinite(N).all(0) & (T > 0)
    end.N[:, index[fit]], end.T[index[fit]] = N[:, fit], T[fit]
    return end


def _kept(c: _Columns, keep: NDArray[np.int64]) -> _Columns:
    return _Columns(c.problem.take(keep), c.y[:, keep], c.x[:, keep], c.K_V[:, :, keep], c.K_L[:, :, keep], c.ordinary,
                    c.inert[:, keep], c.largest_K[keep])
