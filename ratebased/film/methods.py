"""The exact film as a function: `krishna_standart`, and how every method of the package reports."""
from __future__ import annotations

import warnings
from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import batch_shape, finite_array
from ..bootstrap import Bootstrap
from ..errors import (
    ApproximationWarning,
    ConvergenceError,
    HighFluxWarning,
    NoSolutionError,
    OtherSolutionWarning,
    UnstableMixtureError,
)
from .exact import HIGH_FLUX, solve_exact
from .problem import (
    MESSAGES,
    Array,
    Composition,
    FilmProblem,
    FilmStatus,
    Mask,
    Solved,
    checked_fractions,
    existence,
    film_names,
    pose,
)
from .result import FilmFlux, RateFactor
from .taylor import solve_series
from .ternary import solve_ternary

FEW_FILMS = 8
"""Batches of four or more components below this size are not worth the fast path."""

Solver = Callable[[FilmProblem], Solved]

FROZEN_GAMMA_DOUBT = 0.02
"""Estimated max|dN|/max|N| of freezing [Gamma] and kappa at the mean composition above which a warning is given."""


def krishna_standart(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap,
                     *, gamma: ArrayLike | Composition | None = None, throw: bool = True) -> FilmFlux:
    """Fluxes through a film, exact for ideal mixtures with constant kappa.

    J = c_t [k][Xi](x0 - xd), [Xi] = [Phi](exp[Phi] - [I])^-1, solved for N with the bootstrap by Newton in the
    equivalent form that never inverts exp[Phi] - [I]. With `gamma` the film is that of a constant [Gamma]: taken at the
    mean composition, its error against `numerical` on strongly non-ideal ternaries is 0.2 % of max|N| in the median,
    3 % at the 90th percentile, 8 % at worst (compositions far apart); a few hundredths of a per cent for close faces.

    Parameters
    ----------
    x0, xd : mole fractions at face 0 and face delta, (..., n).
    kappa : pair mass-transfer coefficients, m/s, (..., n, n), or a function of x giving them (taken at the mean).
    c_t : molar density, mol/m3, (...).
    bootstrap : the closure, see `ratebased.bootstrap`.
    gamma : [Gamma], (..., n-1, n-1), or a function of x giving it (taken at the mean composition).
    throw : raise where no solution was found; False: NaN there, and the reason in `status`.

    Returns a `FilmFlux`; N is positive from face 0 to face delta.

    Raises
    ------
    InputError : bad arguments. UnstableMixtureError : an eigenvalue of [Gamma] is not positive (of
        a function: at the mean composition or at a face).
    NoSolutionError : the bootstrap leaves none, or no single, solution. ConvergenceError : none was found.

    Warns: `OtherSolutionWarning` (the root lies beyond a fold; seen only at diffusivity ratios above 50),
    `HighFluxWarning` (rate factors above 50), `ApproximationWarning` (gamma or kappa a function, and freezing it
    changes N by more than 2 %). Source: Krishna and Standart (1976).
    """
    return solve_frozen(solve_film, RateFactor.FLUXES, x0, xd, kappa, c_t, bootstrap, gamma, throw)


def solve_frozen(solver: Solver, rate: RateFactor, x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition,
                 c_t: ArrayLike, bootstrap: Bootstrap, gamma: ArrayLike | Composition | None, throw: bool) -> FilmFlux:
    """Check, freeze what is a function of x at the mean composition, solve, report."""
    if not (callable(kappa) or callable(gamma)):
        problem = pose(x0, xd, kappa, c_t, bootstrap, gamma)
        return report(problem, solve_problem(solver, problem, throw), rate, throw)
    x0, xd, mean = faces_and_mean(x0, xd)
    problem = pose(x0, xd, evaluated("kappa", kappa, mean), c_t, bootstrap, evaluated_gamma(gamma, mean))
    flux = report(problem, solve_problem(solver, problem, throw, unstable_faces(gamma, x0, xd, problem)), rate, throw)
    averaged = pose(x0, xd, _simpson("kappa", kappa, x0, xd), c_t, bootstrap,
                    None if gamma is None else _simpson("gamma", gamma, x0, xd))
    other = solve_problem(solver, averaged, False).N
    size = np.abs(flux.N).max(-1)
    change = np.abs(other.reshape(flux.N.shape) - flux.N).max(-1) / np.where(size > 0, size, 1.0)
    doubtful = change > FROZEN_GAMMA_DOUBT
    if np.any(doubtful):
        warnings.warn(f"gamma, kappa frozen at the mean composition: estimated error above {FROZEN_GAMMA_DOUBT:.0%} of "
                      f"max|N| in {film_names(np.ravel(doubtful), np.shape(doubtful))}; use `numerical`",
                      ApproximationWarning, stacklevel=4)
    return flux


def faces_and_mean(x0: ArrayLike, xd: ArrayLike) -> tuple[Array, Array, Array]:
    """x0, xd and the mean composition, of one shape. Raises InputError."""
    x0 = checked_fractions("x0", x0)
    xd = checked_fractions("xd", xd, x0.shape[-1])
    batch_shape(x0=x0.shape[:-1], xd=xd.shape[:-1])
    x0, xd = np.broadcast_arrays(x0, xd)
    return x0, xd, 0.5 * (x0 + xd)


def evaluated(name: str, value: ArrayLike | Composition, x: Array) -> Array:
    """A matrix argument that may be a function of x, at x."""
    return finite_array(name, value(x) if callable(value) else value)


def evaluated_gamma(gamma: ArrayLike | Composition | None, x: Array) -> Array | None:
    """[Gamma] at x, None for an ideal mixture."""
    return None if gamma is None else evaluated("gamma", gamma, x)


def _simpson(name: str, value: ArrayLike | Composition, x0: Array, xd: Array) -> Array:
    """The 1-4-1 average over the film."""
    mean = evaluated(name, value, 0.5 * (x0 + xd))
    return (evaluated(name, value, x0) + 4.0 * mean + evaluated(name, value, xd)) / 6.0


def solve_problem(solver: Solver, problem: FilmProblem, throw: bool, unstable_at_face: Mask | None = None) -> Solved:
    """Solve the films for which a solution may exist; `UnstableMixtureError` if `throw`."""
    status = existence(problem)
    if problem.gamma is not None:
        unstable = unstable_films(problem.gamma)
        if unstable_at_face is not None:
            unstable = unstable | unstable_at_face
        if throw and unstable.any():
            raise UnstableMixtureError(f"gamma, {film_names(unstable, problem.shape)}: an eigenvalue is not positive, "
                                       "the liquid would split: no steady film exists")
        status[unstable] = FilmStatus.UNSTABLE
    if not status.any():
        return solver(problem)
    N = np.full((len(problem), problem.n), np.nan)
    steps = np.zeros(len(problem), dtype=np.int64)
    high = np.zeros(len(problem), dtype=bool)
    fit = np.flatnonzero(status == FilmStatus.CONVERGED)
    part = solver(problem.take(fit))
    N[fit], status[fit], steps[fit] = part.N, part.status, part.steps
    if part.high is not None:
        high[fit] = part.high
    return Solved(N, status, steps, high)


def solve_film(problem: FilmProblem) -> Solved:
    """The exact film: the fast path where there is one, what it leaves by the robust path."""
    if problem.gamma is not None or problem.n == 2 or (problem.n > 3 and len(problem) < FEW_FILMS):
        return solve_exact(problem)
    fast = solve_ternary(problem) if problem.n == 3 else solve_series(problem)
    left = np.flatnonzero(fast.status)
    if len(left):
        rest = solve_exact(problem.take(left), fast.N[left])
        fast.N[left], fast.status[left] = rest.N, rest.status
        fast.steps[left] += rest.steps
        if fast.high is not None and rest.high is not None:
            fast.high[left] = rest.high
    return fast


def unstable_films(gamma: Array) -> NDArray[np.bool_]:
    """Where [Gamma] has an eigenvalue whose real part is not positive, (M)."""
    return np.asarray(np.linalg.eigvals(gamma).real.min(-1) <= 0)


def unstable_faces(gamma: ArrayLike | Composition | None, x0: Array, xd: Array, problem: FilmProblem) -> Mask | None:
    """Where a [Gamma] that is a function of x has such an eigenvalue at one of the faces, (M); None: it is constant."""
    if not callable(gamma):
        return None
    at_face = [unstable_films(evaluated("gamma", gamma, x)) for x in (x0, xd)]
    return np.broadcast_to(at_face[0] | at_face[1], problem.shape).reshape(-1)


def report(problem: FilmProblem, solved: Solved, rate: RateFactor, throw: bool, error: Array | None = None) -> FilmFlux:
    """A `FilmFlux` in the caller's batch shape, with the errors and warnings that go with it."""
    shape, n = problem.shape, problem.n
    flux = FilmFlux(solved.N.reshape(*shape, n), problem.x0.reshape(*shape, n), problem.xd.reshape(*shape, n),
                    restored(problem.kappa, shape, 2), restored(problem.c_t, shape, 0), restored(problem.nu, shape, 1),
                    restored(problem.s, shape, 0),
                    None if problem.gamma is None else restored(problem.gamma, shape, 2),
                    solved.steps.reshape(shape), solved.status.reshape(shape),
                    None if error is None else error.reshape(shape), rate)
    if solved.status.any():
        _complain(flux, solved.status, shape, throw)
    if solved.high is not None and solved.high.any():
        warnings.warn(f"{film_names(solved.high, shape)}: rate factors above {HIGH_FLUX:g}, the film model itself is "
                      "doubtful", HighFluxWarning, stacklevel=4)
    return flux


def restored(array: Array, shape: tuple[int, ...], keep: int) -> Array:
    """One batch axis back to the batch shape, repeated entries staying views."""
    tail = array.shape[array.ndim - keep:]
    if array.strides[0] == 0 and len(array):
        return np.broadcast_to(array[0], (*shape, *tail))
    return array.reshape(*shape, *tail)


def _complain(flux: FilmFlux, status: NDArray[np.int8], shape: tuple[int, ...], throw: bool) -> None:
    for code in (FilmStatus.NO_SOLUTION, FilmStatus.UNDETERMINED, FilmStatus.NOT_CONVERGED):
        mask = status == code
        if throw and mask.any():
            failed = mask.reshape(shape) if shape else None
            kind = ConvergenceError if code is FilmStatus.NOT_CONVERGED else NoSolutionError
            raise kind(f"{film_names(mask, shape)}: {MESSAGES[code]}", best=flux, failed=failed)
    other = status == FilmStatus.OTHER_BRANCH
    if other.any():
        warnings.warn(f"{film_names(other, shape)}: {MESSAGES[FilmStatus.OTHER_BRANCH]}", OtherSolutionWarning,
                      stacklevel=5)

