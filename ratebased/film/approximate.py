"""Approximate films: linearised theory, effective diffusivities, three explicit methods.

All five agree with the exact film for binaries and for equal diffusivities, but `explicit_krishna`, which leaves the
high-flux correction out. With x_m the mean composition and D = x0 - xd they read

    linearised   [M](x_m) N = Gamma C(Z) D, Z = N_t Gamma^-1 [M](x_m);
    effective    N_i = c_t k_i,eff c(N_t/(c_t k_i,eff)) D_i + x_m,i N_t for n-1 components;
    explicit     N = f J + x N_t, J = c_t [k](x_m) D, with a scalar f and x at the mean or at face 0.
"""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..bootstrap import Bootstrap
from ..maxwell_stefan import film_matrix, reduced, solve, wilke_resistance
from .blocks import linearized_blocks
from .exact import mean_resistance, solve_exact, stagnant_component
from .methods import solve_frozen
from .problem import Array, Composition, Counts, FilmProblem, FilmStatus, Solved, order_with_last, reordered
from .result import FilmFlux, RateFactor
from .spectral import coth_values

MAX_DOUBLINGS = 80
MAX_SCALAR_STEPS = 80


def linearized(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap, *,
               gamma: ArrayLike | Composition | None = None, throw: bool = True) -> FilmFlux:
    """Linearised theory: the Fick matrix frozen at the mean composition, its high-flux correction kept.

    Arguments, result and errors as in `krishna_standart`. Close to exact for gases of similar diffusivity and for small
    driving forces (a few per cent on published ternary films), worst at high total flux with unlike diffusivities.
    Source: Toor (1964), Stewart and Prober (1964).
    """
    def solver(problem: FilmProblem) -> Solved:
        return solve_exact(problem, form=linearized_blocks)

    return solve_frozen(solver, RateFactor.TOTAL, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def effective(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap, *,
              gamma: ArrayLike | Composition | None = None, throw: bool = True) -> FilmFlux:
    """Every component a pseudo-binary with Wilke's effective coefficient at the mean composition.

    n-1 film equations, each with its own high-flux factor, and the bootstrap. The equation left out is that of the
    bootstrap's component if it is about one, else of the most abundant component. With `gamma` the coefficient of i
    is multiplied by Gamma_ii, [Gamma] taken with the left-out component eliminated. No interaction of the fluxes: it
    misses osmotic and reverse diffusion entirely. Arguments, result and errors as in `krishna_standart`.
    Source: Wilke (1950); Taylor and Krishna (1993) ch. 6 (from memory).
    """
    def solver(problem: FilmProblem) -> Solved:
        return solve_effective(problem, bootstrap.component)

    return solve_frozen(solver, RateFactor.NONE, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def explicit_krishna(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap,
                     *, gamma: ArrayLike | Composition | None = None, throw: bool = True) -> FilmFlux:
    """Low-flux theory at the mean composition, N = [beta](x_m) c_t [k](x_m) (x0 - xd); no high-flux correction.

    Arguments, result and errors as in `krishna_standart`. Source: Krishna (1979), as in Taylor and Krishna (1993)
    sec. 8.5 (from memory).
    """
    def solver(problem: FilmProblem) -> Solved:
        return _closed(problem, mean_diffusion(problem), 0.5 * (problem.x0 + problem.xd))

    return solve_frozen(solver, RateFactor.NONE, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def explicit_burghardt_krupiczka(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike,
                                 bootstrap: Bootstrap, *, gamma: ArrayLike | Composition | None = None,
                                 throw: bool = True) -> FilmFlux:
    """[beta] and [k] at the mean composition with the scalar correction (F/2) coth(F/2), F = ln(nu . xd/nu . x0).

    Written for a stagnant component, where it makes the bootstrap factor the logarithmic mean across the film; extended
    here to any nu . N = 0, and to a given total flux with F = N_t/(c_t k) of the mean pair. Unchanged by exchanging the
    faces. Arguments, result and errors as in `krishna_standart`. Source: Burghardt and Krupiczka (1975), as in Taylor
    and Krishna (1993) sec. 8.5 (from memory).
    """
    def solver(problem: FilmProblem) -> Solved:
        factor = np.asarray(coth_values(_flux_exponent(problem))[0], dtype=np.float64)
        return _closed(problem, factor[:, None] * mean_diffusion(problem), 0.5 * (problem.x0 + problem.xd))

    return solve_frozen(solver, RateFactor.NONE, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def explicit_taylor_smith(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike,
                          bootstrap: Bootstrap, *, gamma: ArrayLike | Composition | None = None,
                          throw: bool = True) -> FilmFlux:
    """[k] at the mean composition, [beta] at face 0, scalar correction F/(exp F - 1), F = ln(nu . xd/nu . x0).

    For a given total flux F = N_t/(c_t k) of the mean pair. Arguments, result and errors as in `krishna_standart`.
    Source: Taylor and Smith (1982), as in Taylor and Krishna (1993) sec. 8.5 (from memory).
    """
    def solver(problem: FilmProblem) -> Solved:
        F = _flux_exponent(problem)
        factor = np.asarray(coth_values(F)[0], dtype=np.float64) - 0.5 * F
        return _closed(problem, factor[:, None] * mean_diffusion(problem), problem.x0)

    return solve_frozen(solver, RateFactor.NONE, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def mean_diffusion(problem: FilmProblem) -> Array:
    """c_t [k](x_m) (x0 - xd) for all n components, mol/(m2 s), (M, n)."""
    D = (problem.x0 - problem.xd)[:, :-1, None]
    if problem.gamma is not None:
        D = problem.gamma @ D
    J = solve(reduced(film_matrix(0.5 * (problem.x0 + problem.xd), problem.K)), D)[..., 0]
    return np.concatenate((J, -J.sum(-1, keepdims=True)), axis=-1)


def _flux_exponent(problem: FilmProblem) -> Array:
    """F of the scalar corrections, (M)."""
    nu, s = problem.nu, problem.s
    with np.errstate(divide="ignore", invalid="ignore"):
        closed: Array = np.log((nu * problem.xd).sum(-1) / (nu * problem.x0).sum(-1))
    if not s.any():
        return closed
    J = mean_diffusion(problem)
    mean = 0.5 * (problem.x0 + problem.xd)
    with np.errstate(divide="ignore", invalid="ignore"):
        N_t = (s - (nu * J).sum(-1)) / (nu * mean).sum(-1)
    return np.where(s == 0, closed, N_t * mean_resistance(2.0 * mean, problem.K))


def _closed(problem: FilmProblem, J: Array, x: Array) -> Solved:
    """N = J + x N_t with N_t from the bootstrap."""
    carried = (problem.nu * x).sum(-1)
    with np.errstate(divide="ignore", invalid="ignore"):
        N = J + x * ((problem.s - (problem.nu * J).sum(-1)) / carried)[:, None]
    found = np.isfinite(N).all(-1)
    N[~found] = np.nan
    status = np.where(found, FilmStatus.CONVERGED, FilmStatus.NOT_CONVERGED).astype(np.int8)
    return Solved(N, status, np.ones(len(problem), dtype=np.int64))


def solve_effective(problem: FilmProblem, component: int | None) -> Solved:
    """The effective-diffusivity film: one equation in the total flux, solved with a bracket."""
    n = problem.n
    mean = 0.5 * (problem.x0 + problem.xd)
    if component is None:
        k, alone = stagnant_component(problem)
        left_out = np.where(alone, k, mean.argmax(-1))
    else:
        left_out = np.full(len(problem), component % n)
    order = order_with_last(left_out, n)
    inner = reordered(problem, order)
    mean = 0.5 * (inner.x0 + inner.xd)
    resistance = wilke_resistance(mean, inner.K)[:, :-1]
    if inner.gamma is not None:
        resistance = resistance / np.einsum("...ii->...i", inner.gamma)
    D = (inner.x0 - inner.xd)[:, :-1] / resistance

    # nu . N = sum_i (nu_i - nu_r) N_i + nu_r N_t over the n-1 film equations
    relative = (inner.nu[:, :-1] - inner.nu[:, -1:]) * D
    N_t, ok, steps = _total_flux((inner.nu * mean).sum(-1), relative, resistance, inner.s)
    N = np.empty_like(inner.x0)
    N[:, :-1] = D * coth_values(N_t[:, None] * resistance)[0] + mean[:, :-1] * N_t[:, None]
    N[:, -1] = N_t - N[:, :-1].sum(-1)
    N[~ok] = np.nan
    fluxes = np.empty_like(N)
    np.put_along_axis(fluxes, order, N, axis=1)
    return Solved(fluxes, np.where(ok, FilmStatus.CONVERGED, FilmStatus.NOT_CONVERGED).astype(np.int8), steps)


def _total_flux(slope: Array, weight: Array, rate: Array, s: Array) -> tuple[Array, NDArray[np.bool_], Counts]:
    """N_t with slope N_t + sum_i weight_i c(rate_i N_t) = s, c(z) = (z/2) coth(z/2); whether it was found; steps."""
    def balance(N_t: Array) -> tuple[Array, Array]:
        c, dc = coth_values(N_t[:, None] * rate)
        return slope * N_t + (weight * c).sum(-1) - s, slope + (weight * rate * dc).sum(-1)

    with np.errstate(divide="ignore", invalid="ignore"):
        N_t = (s - weight.sum(-1)) / slope
    N_t = np.where(np.isfinite(N_t), N_t, 0.0)
    width = 0.1 / rate.mean(-1) + 0.1 * np.abs(N_t)
    low, high = N_t - width, N_t + width
    for _ in range(MAX_DOUBLINGS):
        side = balance(low)[0] * balance(high)[0] > 0
        if not side.any():
            break
        width = np.where(side, 2.0 * width, width)
        low, high = np.where(side, low - width, low), np.where(side, high + width, high)
    below = np.sign(balance(low)[0])
    bracketed = below * balance(high)[0] <= 0
    active = bracketed.copy()
    steps = np.zeros(len(s), dtype=np.int64)
    for _ in range(MAX_SCALAR_STEPS):
        value, derivative = balance(N_t)
        with np.errstate(divide="ignore", invalid="ignore"):
            trial = N_t - value / derivative
        lower = np.sign(value) == below
        low, high = np.where(lower, N_t, low), np.where(lower, high, N_t)
        trial = np.where((trial > low) & (trial < high), trial, 0.5 * (low + high))
        trial = np.where(value == 0, N_t, trial)
        moved = np.abs(trial - N_t)
        N_t = np.where(active, trial, N_t)
        steps += active
        active &= moved > 1e-15 * np.abs(N_t) + 1e-17 / rate.mean(-1)
        if not active.any():
            break
    return N_t, bracketed & ~active, steps
