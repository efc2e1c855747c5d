"""Every solution of one film: Newton on the film equations from many starting points."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..arguments import whole_number
from ..bootstrap import Bootstrap
from ..errors import InputError, UnstableMixtureError
from ..maxwell_stefan import film_matrix, reduced, solve
from .approximate import mean_diffusion
from .exact import (
    UNPHYSICAL_ROTATION,
    mean_resistance,
    newton,
    other_branch,
    pivoted,
    rate_factors,
)
from .methods import evaluated, evaluated_gamma, faces_and_mean, report, unstable_faces, unstable_films
from .problem import Array, Composition, FilmProblem, FilmStatus, Mask, Solved, pose
from .result import FilmFlux, RateFactor
from .spectral import profile_shape

LARGEST_FACTOR = 60.0
"""Flux factors N_t/(c_t kappa) of the starting points reach this far either way."""

SAME_ROOT = 1e-6
OUTSIDE = 1e-9


def solutions(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap, *,
              gamma: ArrayLike | Composition | None = None, starts: int = 600, seed: int = 0) -> FilmFlux:
    """Every distinct physical solution of one film that a seeded multi-start search finds.

    The films of `krishna_standart`, one at a time, and also those it refuses because the bootstrap sum has opposite
    signs at the two faces. Physical: no mole fraction below zero inside the film. A search proves nothing: a solution
    of very high flux, or with a small basin, may be missed.

    Returns a `FilmFlux` whose leading axis runs over the solutions, ordered by total flux, possibly none;
    `status` is `OTHER_BRANCH` for those separated by a fold from the zero-flux film. Raises InputError,
    UnstableMixtureError.
    """
    starts = whole_number("starts", starts)
    if starts < 1:
        raise InputError(f"starts = {starts}: expected one or more")
    x0, xd, mean = faces_and_mean(x0, xd)
    one = pose(x0, xd, evaluated("kappa", kappa, mean), c_t, bootstrap, evaluated_gamma(gamma, mean))
    if one.shape:
        raise InputError(f"solutions: one film at a time, got a batch of shape {one.shape}")
    faces = unstable_faces(gamma, x0, xd, one)
    if one.gamma is not None and (unstable_films(one.gamma).any() or (faces is not None and faces.any())):
        raise UnstableMixtureError("gamma: an eigenvalue is not positive, the liquid would split: no steady film")
    films = one.take(np.zeros(starts, dtype=np.intp))
    inner, order = pivoted(films)
    N, found, steps = newton(inner, np.take_along_axis(starting_points(one, starts, seed), order, axis=1))
    found &= inside_simplex(inner, N)
    roots = distinct(N[found])
    chosen = np.flatnonzero(found)[roots]
    N, inner, back = N[chosen], inner.take(chosen), np.argsort(order[chosen], axis=1)
    status = np.where(other_branch(inner, N), FilmStatus.OTHER_BRANCH, FilmStatus.CONVERGED).astype(np.int8)
    with_roots = one.take(np.zeros(len(chosen), dtype=np.intp))
    flux = report(with_roots, Solved(np.take_along_axis(N, back, axis=1), np.zeros_like(status), steps[chosen]),
                  RateFactor.FLUXES, False)
    flux.status[...] = status
    return flux


def starting_points(one: FilmProblem, count: int, seed: int) -> Array:
    """Total fluxes of every size and sign, carried by compositions near and between the faces, and random diffusion."""
    generator = np.random.default_rng(seed)
    n = one.n
    scale = 1.0 / mean_resistance(one.x0 + one.xd, one.K)[0]
    factor = np.exp(generator.uniform(np.log(0.01), np.log(LARGEST_FACTOR), count))
    N_t = scale * factor * np.where(np.arange(count) % 2, 1.0, -1.0)
    share = generator.uniform(-0.2, 1.2, (count, 1))
    carried = share * one.x0 + (1.0 - share) * one.xd
    J = mean_diffusion(one) * np.exp(generator.normal(0.0, 1.0, (count, n)))
    J += 0.3 * np.abs(N_t)[:, None] * generator.normal(0.0, 1.0, (count, n)) * generator.integers(0, 2, (count, 1))
    return N_t[:, None] * carried + J


def inside_simplex(problem: FilmProblem, N: Array) -> Mask:
    """Where no mole fraction falls below zero inside the film."""
    Z = reduced(film_matrix(N, problem.K))
    if problem.gamma is not None:
        Z = solve(problem.gamma, Z)
    D = (problem.xd - problem.x0)[:, :-1]
    eta = 0.5 - 0.5 * np.cos(np.pi * np.linspace(0.0, 1.0, 65))
    x = problem.x0[:, None, :-1] + profile_shape(Z, eta, D)
    smallest = np.minimum(x.min((1, 2)), (1.0 - x.sum(-1)).min(-1))
    turns = np.abs(rate_factors(problem, N).imag).max(-1)
    return np.asarray((smallest >= -OUTSIDE) & (turns <= UNPHYSICAL_ROTATION))


def distinct(N: Array) -> list[int]:
    """One index for each group of fluxes that agree, ordered by total flux."""
    chosen: list[int] = []
    for i in np.argsort(N.sum(-1), kind="stable"):
        size = np.abs(N[i]).max()
        if all(np.abs(N[i] - N[j]).max() > SAME_ROOT * max(size, np.abs(N[j]).max()) for j in chosen):
            chosen.append(int(i))
    return chosen
