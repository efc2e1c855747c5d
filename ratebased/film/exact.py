"""The film solved the readable way: Newton on the coth form, restarted from zero flux, then by continuation.

General (ideal films, films with a constant [Gamma], any flux); `ternary` and `taylor` solve the bulk of a large ideal
batch and are tested against this path.
"""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..maxwell_stefan import film_matrix, reduced, solve
from .blocks import FilmBlocks, coth_blocks
from .problem import Array, Counts, FilmProblem, FilmStatus, Mask, Solved, order_with_last, reordered

STEP_TOLERANCE = 1e-12
"""Newton stops when the step is below this fraction of max|N|, or when rounding keeps it from getting there."""

QUADRATIC = 1e-14
"""What a last step may leave, estimated from its square and the step before."""

STAGNATION = 1e-8
"""The largest step at which a Newton iteration that no longer shrinks it may stop."""

COARSE_STAGNATION = 1e-4
"""The same for films with a constant [Gamma] and for linearised theory, which have no integrated equation for a
stagnant trace: rounding of its mole fractions moves the flux, by far less than the approximation made."""

MAX_STEPS = 60

UNPHYSICAL_ROTATION = np.pi
"""A root whose rate factor has an eigenvalue with a larger imaginary part has a profile that leaves the simplex.

Measured on random films: physical roots never above 1.5, unphysical ones never below 5.
"""

WIDE_RATIO = 50.0
"""Ratio of pair coefficients of an ideal film above which it is tested for other branches and unphysical profiles.

Below it, a million random films and 54,000 multi-started ones showed neither.
"""

HIGH_FLUX = 50.0
"""Largest |rate factor|, an eigenvalue of Gamma^-1 Phi, above which the film model itself is doubtful."""

BlockForm = Callable[[Array, Array, Array, Array, Array | None], FilmBlocks]
"""`coth_blocks` or `linearized_blocks`: the film equations of a method."""


def solve_singular(matrix: Array, right: Array) -> Array:
    """Batched solve of (M, n, n) and (M, n); an exactly singular matrix is perturbed, not fatal to the batch."""
    try:
        return solve(matrix, right[..., None])[..., 0]
    except np.linalg.LinAlgError:
        shift = 1e-13 * np.abs(matrix).max((-1, -2), keepdims=True) + 1e-300
        return solve(matrix + shift * np.eye(matrix.shape[-1]), right[..., None])[..., 0]


def low_flux_start(problem: FilmProblem) -> Array:
    """N from one linear solve, [M](x^) N = Gamma (x0 - xd), nu . N = s.

    Exact for binaries and for equal diffusivities. x^ lies between the faces where nu . x is its logarithmic mean
    (arithmetic for equimolar transfer); with a total flux given, where the flux factor of the mean resistance puts it.
    """
    x0, xd, nu, s = problem.x0, problem.xd, problem.nu, problem.s
    D = x0 - xd
    factor = None
    if s.any():
        with np.errstate(divide="ignore", invalid="ignore"):
            factor = mean_resistance(x0 + xd, problem.K) * s / nu.mean(-1)
    share = mean_weight((nu * x0).sum(-1), (nu * xd).sum(-1), s, factor)
    system = film_matrix(xd + share[:, None] * D, problem.K)
    right = D.copy()
    if problem.gamma is not None:
        right[:, :-1] = (problem.gamma @ D[:, :-1, None])[..., 0]
        right[:, -1] = -right[:, :-1].sum(-1)
    films = np.arange(len(problem))
    row = (x0 + xd).argmax(-1)
    system[films, row] = nu
    right[films, row] = s
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        return solve_singular(system, right)


def mean_resistance(total: Array, K: Array) -> Array:
    """Mean of K_ij weighted with S_i S_j, S = x0 + xd, (M): the resistance of the pseudo-binary, m2 s/mol."""
    weight = 4.0 - (total * total).sum(-1)
    mean: Array = ((K @ total[..., None])[..., 0] * total).sum(-1) / np.where(weight > 1e-12, weight, 1.0)
    return np.where(weight > 1e-12, mean, K.mean((-1, -2)))


def mean_weight(a: Array, b: Array, s: Array, factor: Array | None) -> Array:
    """Share t of face 0 in x^ = t x0 + (1-t) xd, with a = nu . x0, b = nu . xd (M).

    factor: s K/mean(nu), the flux factor of the mean resistance K, for the films with s != 0; None if there are none.
    """
    with np.errstate(all="ignore"):
        ratio = np.log(b / a)
        share = np.where(np.abs(ratio) < 1e-3, 0.5 + ratio / 12.0, b / (b - a) - 1.0 / ratio)
        if factor is not None:
            given = np.where(np.abs(factor) < 1e-3, 0.5 + factor / 12.0, 1.0 + 1.0 / np.expm1(factor) - 1.0 / factor)
            share = np.where(s == 0, share, given)
    return np.where(np.isfinite(share), np.clip(share, 0.0, 1.0), 0.5)


def pivoted(problem: FilmProblem) -> tuple[FilmProblem, NDArray[np.intp]]:
    """The films with their components reordered, and the order: the most abundant last, a trace eliminates badly.

    Not a stagnant component that changes tenfold across the film: its own relation is kept as a row.
    """
    x0, xd = problem.x0, problem.xd
    films = np.arange(len(problem))
    weight = x0 + xd
    k, alone = stagnant_component(problem)
    varies = alone & (np.minimum(x0[films, k], xd[films, k]) < 0.1 * np.maximum(x0[films, k], xd[films, k]))
    weight[films[varies], k[varies]] = -1.0
    order = order_with_last(weight.argmax(-1), problem.n)
    return reordered(problem, order), order


def stagnant_component(problem: FilmProblem) -> tuple[NDArray[np.intp], Mask]:
    """The component with the largest |nu|, and where it is the only one and does not move."""
    k = np.abs(problem.nu).argmax(-1)
    return k, (np.count_nonzero(problem.nu, axis=-1) == 1) & (problem.s == 0)


def newton_system(problem: FilmProblem, N: Array, form: BlockForm = coth_blocks) -> tuple[Array, Array]:
    """Jacobian (M, n, n) and minus the residual (M, n): the film equations with nu . N = s as their last row.

    In an ideal exact film with a stagnant component k that changes twofold or more the row of k is replaced by its
    integral, sum_j K_kj N_j = ln(xd_k/x0_k): linear, exact, and good to all digits for a trace.
    """
    n = problem.n
    blocks = form(N, problem.K, problem.x0, problem.xd, problem.gamma)
    J = np.empty((len(problem), n, n))
    right = np.empty((len(problem), n))
    J[:, :-1], J[:, -1] = blocks.dN, problem.nu
    right[:, :-1] = -blocks.residual
    right[:, -1] = problem.s - (problem.nu * N).sum(-1)
    if problem.gamma is None and form is coth_blocks:
        k, alone = stagnant_component(problem)
        films = np.flatnonzero(alone & (k < n - 1))
        changes = np.abs(np.log(problem.xd[films, k[films]] / problem.x0[films, k[films]])) > np.log(2.0)
        films = films[changes]
        if len(films):
            k = k[films]
            row = problem.K[films, k]
            J[films, k] = row
            right[films, k] = np.log(problem.xd[films, k] / problem.x0[films, k]) - (row * N[films]).sum(-1)
    return J, right


def newton(problem: FilmProblem, N: Array, form: BlockForm = coth_blocks) -> tuple[Array, Mask, Counts]:
    """Newton from N (M, n), components in the order given: fluxes, where it converged, steps."""
    N = np.where(np.isfinite(N), N, 0.0)
    done = np.zeros(len(problem), dtype=bool)
    steps = np.zeros(len(problem), dtype=np.int64)
    active = np.arange(len(problem))
    last = np.full(len(problem), 1e-150)                  # no estimate from the first step
    rest = problem
    coarse = problem.gamma is not None or form is not coth_blocks
    for count in range(1, MAX_STEPS + 1):
        if not len(active):
            break
        with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
            J, right = newton_system(rest, N[active], form)
            step = solve_singular(J, right)
            moved = N[active] + step
            size = np.abs(moved).max(-1)
            error = np.abs(step).max(-1) / np.where(size > 0, size, 1.0)
            previous = last[active]
            quadratic = (error <= 1e-5) & (error * error * np.maximum(1.0, error / (previous * previous)) <= QUADRATIC)
        sound = np.isfinite(error) & (size < 1e100)
        N[active] = np.where(sound[:, None], moved, 0.0)
        steps[active] += 1
        limit = COARSE_STAGNATION if coarse and count > 12 else STAGNATION
        stalled = (count > 3) & (error <= limit) & (error > 0.25 * previous)
        finished = sound & ((error <= STEP_TOLERANCE) | quadratic | stalled)
        last[active] = error
        done[active[finished]] = True
        keep = sound & ~finished
        if not keep.all():
            active = active[keep]
            rest = rest.take(keep)
    return N, done, steps


def rate_factors(problem: FilmProblem, N: Array) -> NDArray[Any]:
    """Eigenvalues of Gamma^-1 Phi, (M, n-1)."""
    Z = reduced(film_matrix(N, problem.K))
    if problem.gamma is not None:
        Z = solve(problem.gamma, Z)
    return np.asarray(np.linalg.eigvals(Z))


def physical(problem: FilmProblem, N: Array, form: BlockForm = coth_blocks) -> Mask:
    """Where the profile does not rotate out of the simplex (linearised theory knows no such roots)."""
    if form is not coth_blocks:
        return np.ones(len(problem), dtype=bool)
    return np.asarray(np.abs(rate_factors(problem, N).imag).max(-1, initial=0.0) <= UNPHYSICAL_ROTATION)


def other_branch(problem: FilmProblem, N: Array, form: BlockForm = coth_blocks) -> Mask:
    """Where the determinant of the film equations has another sign at N than at zero flux: a fold lies between.

    At zero flux the rows are those of [M](x_m), a singular M-matrix with null vector x_m, so that bordered with nu its
    determinant has the sign of nu . x_m.
    """
    blocks = form(N, problem.K, problem.x0, problem.xd, problem.gamma)
    J = np.concatenate((blocks.dN, problem.nu[:, None, :]), axis=1)
    at_zero = (problem.nu * (problem.x0 + problem.xd)).sum(-1)
    return np.asarray(np.linalg.slogdet(J)[0] * at_zero < 0)


def continuation(problem: FilmProblem, form: BlockForm = coth_blocks) -> tuple[Array, Mask, Counts]:
    """Widen the film from equal faces, x = x_m + t (x - x_m), t = 0..1, with Newton at every step."""
    M = len(problem)
    mean = 0.5 * (problem.x0 + problem.xd)
    half = 0.5 * (problem.x0 - problem.xd)
    with np.errstate(divide="ignore", invalid="ignore"):
        N = mean * (problem.s / (problem.nu * mean).sum(-1))[:, None]
    N = np.where(np.isfinite(N), N, 0.0)
    t, step = np.zeros(M), np.full(M, 0.25)
    steps = np.zeros(M, dtype=np.int64)
    for _ in range(200):
        active = np.flatnonzero((t < 1.0) & (step > 1e-4))
        if not len(active):
            break
        ahead = np.minimum(t[active] + step[active], 1.0)
        part = problem.take(active)
        part = FilmProblem(mean[active] + ahead[:, None] * half[active], mean[active] - ahead[:, None] * half[active],
                           part.kappa, part.c_t, part.nu, part.s, part.gamma, part.shape)
        found, ok, used = newton(part, N[active], form)
        steps[active] += used
        ok &= physical(part, found, form)
        ok &= ~other_branch(part, found, form)
        N[active[ok]] = found[ok]
        t[active[ok]] = ahead[ok]
        step[active] *= np.where(ok, 2.0, 0.25)
    return N, t >= 1.0, steps


def wide_films(problem: FilmProblem) -> Mask:
    """The films that are tested for other branches and for profiles outside the simplex."""
    if problem.gamma is not None:
        return np.ones(len(problem), dtype=bool)
    K = problem.K
    off = np.where(K > 0, K, np.inf)
    return np.asarray(K.max((-1, -2)) > WIDE_RATIO * off.min((-1, -2)))


def solve_exact(problem: FilmProblem, start: Array | None = None, form: BlockForm = coth_blocks
                ) -> Solved:
    """The films that passed `existence`, from `start` (M, n) or from `low_flux_start`. NaN where none was found."""
    inner, order = pivoted(problem)
    first = low_flux_start(problem) if start is None else start
    N, ok, steps = newton(inner, np.take_along_axis(first, order, axis=1), form)
    steps += 1
    wide = np.flatnonzero(wide_films(inner))
    ok[wide] &= physical(inner.take(wide), N[wide], form)
    for widen in (False, True):
        left = np.flatnonzero(~ok)
        if not len(left):
            break
        part = inner.take(left)
        N[left], found, used = continuation(part, form) if widen else newton(part, np.zeros_like(part.x0), form)
        ok[left] = found & physical(part, N[left], form)
        steps[left] += used
    status = np.where(ok, FilmStatus.CONVERGED, FilmStatus.NOT_CONVERGED).astype(np.int8)
    suspect = wide[ok[wide]]
    status[suspect[other_branch(inner.take(suspect), N[suspect], form)]] = FilmStatus.OTHER_BRANCH
    N[~ok] = 0.0
    high = np.abs(rate_factors(inner, N)).max(-1) > HIGH_FLUX
    N[~ok] = np.nan
    fluxes = np.empty_like(N)
    np.put_along_axis(fluxes, order, N, axis=1)
    return Solved(fluxes, status, steps, high)
