"""Large batches of ideal films of four or more components: shooting to the middle by Taylor series, then Broyden.

F(N) = exp(A/2) x0 - exp(-A/2) xd = cosh(A/2) D + sinh(A/2) S, D = x0 - xd, S = x0 + xd, by Horner's rule with D and S
in turn: one matrix-vector product an order and no matrix function. The Jacobian is built once, at the linear start,
from the last orders of the same recursion, and its inverse kept up to date by Broyden's formula. Arrays hold the films
on the LAST axis, (n, n, films), in chunks that stay in cache; films are sorted by |A| because the largest of a chunk
sets the order. Films with |A|_1 > 12, or that do not settle, are left to the robust path.
"""
from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from .exact import WIDE_RATIO, mean_weight, other_branch, physical, stagnant_component
from .problem import Array, FilmProblem, FilmStatus, Mask, Solved

LARGEST_NORM = 12.0
"""|A|_1 up to which the series is used: the residual loses exp(|A|/2) in digits."""

NORMS = np.array([0.02, 0.1, 0.25, 0.5, 1.0, 2.0, 3.0, 4.0, 6.0, 8.0, 10.0, LARGEST_NORM, np.inf])
ORDERS = np.array([5, 7, 9, 11, 13, 17, 19, 22, 26, 30, 34, 38, 60])
"""Orders of the series that reach rounding, by the norm up to which they do."""

SLOPE_NORMS = np.array([0.25, 1.0, 2.0, 4.0, 6.0, 8.0, LARGEST_NORM, np.inf])
SLOPE_ORDERS = np.array([3, 4, 4, 6, 8, 10, 14, 24])
"""Orders kept in the Jacobian: a per cent or so is enough for Broyden."""

BINS = np.array([0.1, 0.3, 0.7, 1.2, 2.0, 3.0, 4.5, 6.5, 9.0, LARGEST_NORM])
STEP = 3e-11
"""Relative size of a last step: what then remains is smaller still, by the factor the steps shrink with."""

MAX_STEPS = 14

SCARCE = 1e-3
"""A stagnant component below this mole fraction at a face is left to the robust path."""


def chunk_size(n: int) -> int:
    """Films treated together: their matrices should fit the second-level cache."""
    return max(64, 40000 // (n * n))


def solve_series(problem: FilmProblem) -> Solved:
    """Ideal films of n >= 4; status `NOT_CONVERGED` or `OTHER_BRANCH` where the robust path has to look again."""
    M, n = len(problem), problem.n
    N = np.empty((M, n))
    norm, ratio = np.empty(M), np.empty(M)
    status = np.full(M, FilmStatus.NOT_CONVERGED, dtype=np.int8)
    steps = np.ones(M, dtype=np.int64)
    row, far = pivots(problem)
    size = chunk_size(n)
    with np.errstate(all="ignore"):
        for first in range(0, M, size):
            chunk = slice(first, first + size)
            N[chunk], norm[chunk], ratio[chunk] = _start(problem, chunk, row[chunk])
        fit = np.flatnonzero((norm <= LARGEST_NORM) & ~far)
        label = np.searchsorted(BINS, norm[fit]).astype(np.int8)
        order = np.argsort(label, kind="stable")
        fit, counts = fit[order], np.bincount(label, minlength=len(BINS))
        if len(fit) <= size // 4:                         # too few to be worth sorting
            counts = np.array([len(fit)])
        for films in np.split(fit, np.cumsum(counts)[:-1]):
            for first in range(0, len(films), size):
                part = films[first:first + size]
                N[part], found, used = _broyden(problem, part, N[part], row[part])
                status[part[found]] = FilmStatus.CONVERGED
                steps[part] += used
    wide = np.flatnonzero((ratio > WIDE_RATIO) & (status == FilmStatus.CONVERGED))
    if len(wide):
        suspects = problem.take(wide)
        status[wide[other_branch(suspects, N[wide])]] = FilmStatus.OTHER_BRANCH
        status[wide[~physical(suspects, N[wide])]] = FilmStatus.NOT_CONVERGED
    return Solved(N, status, steps, np.zeros(M, dtype=bool))


def pivots(problem: FilmProblem) -> tuple[NDArray[np.intp], Mask]:
    """The equation that gives way to the bootstrap, that of the most abundant component; stagnant films to leave out.

    The equation of a scarce stagnant component has small terms and yet sets the total flux; its integrated form, which
    the robust path has, holds it best.
    """
    total = problem.x0 + problem.xd
    if np.count_nonzero(problem.nu == 0.0) == 0:
        return total.argmax(-1), np.zeros(len(problem), dtype=bool)
    k, alone = stagnant_component(problem)
    films = np.flatnonzero(alone)
    a, b = problem.x0[films, k[films]], problem.xd[films, k[films]]
    varies = films[np.minimum(a, b) < 0.1 * np.maximum(a, b)]
    total[varies, k[varies]] = -1.0
    far = np.zeros(len(problem), dtype=bool)
    far[films[np.minimum(a, b) < SCARCE]] = True
    return total.argmax(-1), far


def _resistances(problem: FilmProblem, part: NDArray[np.intp] | slice) -> Array:
    """K of a chunk, (n, n, films)."""
    kappa = problem.kappa[part].transpose(1, 2, 0)
    K: Array = np.multiply(kappa, problem.c_t[part], order="C")
    np.reciprocal(K, out=K)
    for i in range(len(K)):
        K[i, i] = 0.0
    return K


def _film_matrix(v: Array, K: Array, out: Array) -> None:
    """A(v), or M(v), (n, n, films)."""
    np.multiply(v[:, None, :], K, out=out)
    np.negative(out, out=out)
    diagonal = np.einsum("ijm,jm->im", K, v)
    for i in range(len(v)):
        out[i, i] = diagonal[i]


def _solved(matrix: Array, right: Array) -> Array:
    """Batched solve, (n, n, films) and (n, films)."""
    A = np.ascontiguousarray(matrix.transpose(2, 0, 1))
    b = np.ascontiguousarray(right.T)[:, :, None]
    try:
        x = np.linalg.solve(A, b)
    except np.linalg.LinAlgError:
        x = np.linalg.solve(A + 1e-14 * np.abs(A).max() * np.eye(len(right)), b)
    return np.asarray(x[:, :, 0].T, dtype=np.float64)


def _inverse(matrix: Array) -> Array:
    """Batched inverse of (n, n, films)."""
    A = np.ascontiguousarray(matrix.transpose(2, 0, 1))
    try:
        inverse = np.linalg.inv(A)
    except np.linalg.LinAlgError:
        inverse = np.linalg.inv(A + 1e-14 * np.abs(A).max() * np.eye(len(matrix)))
    return np.ascontiguousarray(inverse.transpose(1, 2, 0))


def _start(problem: FilmProblem, part: slice, row: NDArray[np.intp]) -> tuple[Array, Array, Array]:
    """The linear start of `low_flux_start` for one chunk, |A|_1 there, and the ratio of the pair coefficients."""
    K = _resistances(problem, part)
    x0, xd, nu = problem.x0[part].T.copy(), problem.xd[part].T.copy(), problem.nu[part].T.copy()
    s = problem.s[part]
    D, total = x0 - xd, x0 + xd
    factor = None
    if s.any():
        weight = 4.0 - np.einsum("im,im->m", total, total)
        mean = np.einsum("im,im->m", np.einsum("ijm,jm->im", K, total), total)
        factor = np.where(weight > 1e-12, mean / np.where(weight > 1e-12, weight, 1.0), 0.0) * s / nu.mean(0)
    share = mean_weight(np.einsum("im,im->m", nu, x0), np.einsum("im,im->m", nu, xd), s, factor)
    system = np.empty_like(K)
    _film_matrix(xd + share * D, K, system)
    replaced = np.arange(len(x0))[:, None] == row
    np.copyto(system, nu, where=replaced[:, None, :])
    N = _solved(system, np.where(replaced, s, D))
    _film_matrix(N, K, system)
    pairs = K[np.triu_indices(len(x0), 1)]
    return N.T, np.abs(system).sum(0).max(0), pairs.max(0) / pairs.min(0)


def _broyden(problem: FilmProblem, part: NDArray[np.intp], N: Array, row: NDArray[np.intp]
             ) -> tuple[Array, Mask, NDArray[np.int64]]:
    """Solve one chunk from N (films, n): fluxes, where they settled, residuals spent."""
    n, count = problem.n, len(part)
    K = _resistances(problem, part)
    x0, xd, nu, s = problem.x0[part].T, problem.xd[part].T, problem.nu[part].T.copy(), problem.s[part]
    S, D = np.add(x0, xd, order="C"), np.subtract(x0, xd, order="C")
    replaced = np.arange(n)[:, None] == row
    N = N.T.copy()
    fluxes, found = N.copy(), np.zeros(count, dtype=bool)
    steps = np.zeros(count, dtype=np.int64)
    films = np.arange(count)
    A = np.empty_like(K)
    scale = np.abs(S).max(0)
    inverse = step = residual = np.empty(0)
    last = np.empty(0)
    for attempt in range(MAX_STEPS):
        _film_matrix(N, K, A)
        norm = np.abs(A).sum(0).max(0)
        sane = norm <= 2.0 * LARGEST_NORM                 # false for a diverged (NaN) film
        largest = float(norm.max(initial=0.0, where=sane))
        A *= 0.5
        order = int(ORDERS[np.searchsorted(NORMS, largest)])
        if attempt == 0:
            order = max(order - 5, 4)                     # the start is not worth the last digits
            value, slope = _horner_with_slope(A, K, D, S, order, largest)
        else:
            value = _horner(A, D, S, order)
        previous, residual = residual, np.where(replaced, s - np.einsum("im,im->m", nu, N), -value)
        if attempt == 0:
            np.copyto(slope, nu, where=replaced[:, None, :])
            inverse = _inverse(slope)
        else:                                             # Broyden's update of the inverse
            change = np.einsum("ijm,jm->im", inverse, previous - residual)
            along = np.einsum("im,ijm->jm", step, inverse)
            size = np.einsum("im,im->m", step, change)
            gain = (step - change) / np.where(size == 0, 1.0, size)
            inverse += gain[:, None, :] * along
        step = np.einsum("ijm,jm->im", inverse, residual)
        N = N + step
        error = np.abs(step).max(0) / (np.abs(N).max(0) + 1e-300)
        if attempt == 0:
            done = error <= 1e-14
        else:
            done = (error <= 0.1 * STEP) | ((error <= STEP) & (error <= 0.1 * last))
            done |= (error <= 3.0 * STEP) & (error <= 1e-3 * last)
            done &= np.abs(residual).max(0) <= 1e-4 * scale
        done &= sane
        last = error
        hits = np.count_nonzero(done)
        if hits < len(films) and hits < 0.3 * len(films) and attempt < MAX_STEPS - 1:
            continue
        chosen = films[done]
        fluxes[:, chosen], found[chosen], steps[chosen] = N[:, done], True, attempt + 1
        keep = np.flatnonzero(~done)
        if not len(keep):
            break
        films, K, inverse, nu, s, S, D = (films[keep], K[:, :, keep], inverse[:, :, keep], nu[:, keep], s[keep],
                                          S[:, keep], D[:, keep])
        N, replaced, step, residual = N[:, keep], replaced[:, keep], step[:, keep], residual[:, keep]
        last, scale = last[keep], scale[keep]
        A = np.empty_like(K)
    steps[~found] = MAX_STEPS
    return fluxes.T, found, steps


def _horner(A: Array, D: Array, S: Array, order: int) -> Array:
    """cosh(A) D + sinh(A) S to the given order; A is half the film matrix."""
    p = (D if order % 2 == 0 else S).copy()
    q = np.empty_like(p)
    for k in range(order, 0, -1):
        np.einsum("ijm,jm->im", A, p, out=q)
        q *= 1.0 / k
        np.add(q, D if k % 2 else S, out=p)
    return p


def _horner_with_slope(A: Array, K: Array, D: Array, S: Array, order: int, norm: float) -> tuple[Array, Array]:
    """The same with the derivative by N, from the lowest orders: G <- (A G + dA p)/k, dA p = -M(p)/2."""
    slope_order = min(int(SLOPE_ORDERS[np.searchsorted(SLOPE_NORMS, norm)]), order)
    p = (D if order % 2 == 0 else S).copy()
    q = np.empty_like(p)
    G = product = np.empty(0)
    for k in range(order, 0, -1):
        if k <= slope_order:
            moved = p[:, None, :] * K
            diagonal = np.einsum("ijm,jm->im", K, p)
            for i in range(len(p)):
                moved[i, i] -= diagonal[i]
            moved *= 0.5 / k
            if k == slope_order:
                G = moved
            else:
                product = np.einsum("ijm,jlm->ilm", A, G)
                product *= 1.0 / k
                np.add(product, moved, out=G)
        np.einsum("ijm,jm->im", A, p, out=q)
        q *= 1.0 / k
        np.add(q, D if k % 2 else S, out=p)
    return p, G
