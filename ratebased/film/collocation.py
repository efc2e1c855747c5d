"""The film equations integrated as they stand: [Gamma] and kappa may change with composition along the film.

Gamma(x) dx/deta + [M](x) N = 0 for n-1 components, x(0) = x0, x(1) = xd, nu . N = s. One polynomial across the film
through Chebyshev points, the equations met at Gauss points, Newton on all of it. The degree is raised until N stands
still; the difference to the degree before is the error estimate.
"""
from __future__ import annotations

import warnings
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import finite_array
from ..bootstrap import Bootstrap
from ..errors import ApproximationWarning, InputError, UnstableMixtureError
from ..maxwell_stefan import GAS_CONSTANT, face_entropy, film_matrix, reduced, resistances, solve
from .exact import STAGNATION, solve_exact, solve_singular
from .grid import Grid, grid, interpolation
from .methods import evaluated, evaluated_gamma, faces_and_mean, report, solve_problem, unstable_films
from .problem import (
    Array,
    Composition,
    Counts,
    FilmProblem,
    FilmStatus,
    Mask,
    Solved,
    film_names,
    pose,
)
from .result import FilmFlux, RateFactor
from .spectral import profile_shape

DEGREES = (6, 10, 16, 24, 36, 54, 80)
FALLBACK_DEGREE = 24
TOLERANCE = 1e-9
"""Change of N, relative to max|N|, from one degree to the next at which it is accepted; the error left is smaller."""

DOUBT = 1e-6
"""Error estimate above which a warning is given."""

NEWTON_TOLERANCE = 1e-11
MAX_STEPS = 15
NOISE = 1e-3
"""Newton step at which a film counts as solved that rounding keeps from standing still (a trace that sets the flux)."""

DIFFERENCE = 1e-6
CHUNK_ENTRIES = 2_000_000


def numerical(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike | Composition, c_t: ArrayLike, bootstrap: Bootstrap, *,
              gamma: ArrayLike | Composition | None = None, throw: bool = True) -> FilmFlux:
    """Fluxes with composition-dependent [Gamma] and kappa, by collocation; the yardstick of the other methods.

    kappa, gamma : constants as in `krishna_standart`, or functions of x. A function is called with mole fractions of
    shape (p, *batch, n) or (j, p, *batch, n), sums one, and gives (..., n, n) m/s, or (..., n-1, n-1). The remaining
    arguments, the result and the errors are those of `krishna_standart`; besides, `error` holds the estimated
    max|dN|/max|N|, and `UnstableMixtureError` is raised where an eigenvalue of [Gamma] is not positive anywhere in the
    film. Warns `ApproximationWarning` where the estimate stays above 1e-6 (boundary layers thinner than a thousandth of
    the film). Source: collocation, Villadsen and Michelsen (1978) (from memory).
    """
    x0, xd, mean = faces_and_mean(x0, xd)
    problem = pose(x0, xd, evaluated("kappa", kappa, mean), c_t, bootstrap, evaluated_gamma(gamma, mean))
    equations = Equations(problem, kappa, gamma)
    first = solve_problem(solve_exact, problem, throw)
    solved, inside, error, dissipated = solve_collocation(equations, first, throw)
    flux = report(problem, solved, RateFactor.NONE, throw, error)
    doubtful = error > DOUBT
    if doubtful.any():
        warnings.warn(f"numerical: estimated error up to {np.nanmax(error):.1e} of max|N|, "
                      f"{film_names(doubtful, problem.shape)}", ApproximationWarning, stacklevel=2)
    shape, n = problem.shape, problem.n
    return replace(flux, inside=inside.reshape(*shape, inside.shape[1], n), dissipated=dissipated.reshape(shape))


@dataclass(frozen=True)
class Equations:
    """Resistances and [Gamma] of M films at any compositions (..., M, n)."""

    problem: FilmProblem
    kappa: ArrayLike | Composition
    gamma: ArrayLike | Composition | None

    def resistance(self, x: Array) -> Array:
        """K(x), (..., M, n, n)."""
        if not callable(self.kappa):
            return np.broadcast_to(self.problem.K, (*x.shape, self.problem.n))
        values = self._called("kappa", self.kappa, x, self.problem.n)
        off = ~np.eye(self.problem.n, dtype=bool)
        if not (values[..., off] > 0).all():
            raise InputError("kappa: the function gave a coefficient that is not above zero")
        return resistances(values, self.problem.c_t)

    def thermodynamic(self, x: Array) -> Array:
        """Gamma(x), (..., M, n-1, n-1)."""
        m = self.problem.n - 1
        if self.gamma is None:
            return np.broadcast_to(np.eye(m), (*x.shape[:-1], m, m))
        if not callable(self.gamma):
            gamma = np.asarray(self.problem.gamma)
            return np.broadcast_to(gamma, (*x.shape[:-1], m, m))
        return self._called("gamma", self.gamma, x, m)

    @property
    def varies(self) -> bool:
        """Whether anything depends on composition."""
        return callable(self.kappa) or callable(self.gamma)

    def _called(self, name: str, function: Composition, x: Array, size: int) -> Array:
        inside = np.clip(x, 0.0, 1.0)                     # an iterate may stick out by a little
        inside = inside / inside.sum(-1, keepdims=True)
        lead = x.shape[:-2]
        values = finite_array(name, function(inside.reshape(*lead, *self.problem.shape, x.shape[-1])))
        return np.broadcast_to(values, (*lead, *self.problem.shape, size, size)).reshape(*x.shape[:-1], size, size)


def solve_collocation(equations: Equations, first: Solved, throw: bool) -> tuple[Solved, Array, Array, Array]:
    """Fluxes and status, mole fractions at the points of the last grid (M, p+1, n), error, entropy production.

    The profile is held as its rise y = x - x0 of the first n-1 components, (p+1, M, n-1): small driving forces keep
    their digits.
    """
    problem = equations.problem
    M, n = len(problem), problem.n
    status = first.status.copy()
    status[status == FilmStatus.OTHER_BRANCH] = FilmStatus.CONVERGED
    usable = status == FilmStatus.CONVERGED
    N_start = np.where(usable[:, None], first.N, 0.0)
    D = (problem.xd - problem.x0)[:, :-1]
    Z = reduced(film_matrix(N_start, problem.K))
    if problem.gamma is not None:
        Z = solve(np.where(usable[:, None, None], problem.gamma, np.eye(n - 1)), Z)

    def frozen(points: Array) -> Array:
        """The profile of the film with constant coefficients."""
        return np.moveaxis(profile_shape(Z, points, D), 1, 0)

    N, steps, error = N_start.copy(), first.steps.copy(), np.full(M, np.inf)
    solved = np.zeros(M, dtype=bool)                      # on the grid before
    points = grid(DEGREES[0]).points
    y = frozen(points)
    for degree in DEGREES:
        active = usable & ~(error <= TOLERANCE)
        if not active.any():
            break
        target = grid(degree).points
        y = np.tensordot(interpolation(points, target), y, axes=1)
        points = target
        fresh = active & ~solved
        y[:, fresh], N[fresh] = frozen(target)[:, fresh], N_start[fresh]
        y[0], y[-1] = 0.0, D
        before = N
        y, N, ok, used = newton(equations, y, N, active, 1.0)
        steps += used
        if equations.varies and degree == FALLBACK_DEGREE and (active & ~ok).any():
            y, N, ok = _homotopy(equations, frozen(target), N_start, active, y, N, ok)
        size = np.abs(N).max(-1)
        change = np.abs(N - before).max(-1) / np.where(size > 0, size, 1.0)
        error = np.where(active, np.where(ok & solved, change, np.inf), error)
        solved = np.where(active, ok, solved)
    good = usable & solved
    whole = _filled(problem.x0[:, :-1] + y)
    unstable = np.zeros(M, dtype=bool)
    if equations.gamma is not None:
        Gamma = equations.thermodynamic(whole)
        unstable = good & unstable_films(np.where(good[:, None, None], Gamma, np.eye(n - 1))).any(0)
    if throw and unstable.any():
        raise UnstableMixtureError(f"gamma, {film_names(unstable, problem.shape)}: an eigenvalue is not positive in "
                                   "the film, the liquid would split: no steady film exists")
    status[usable & ~good] = FilmStatus.NOT_CONVERGED
    status[unstable] = FilmStatus.UNSTABLE
    good &= ~unstable
    dissipated = _entropy(equations, np.where(good[:, None], N, 0.0), y)
    inside = np.where(good[:, None, None], np.moveaxis(whole, 0, 1), np.nan)
    return (Solved(np.where(good[:, None], N, np.nan), status, steps), inside, np.where(good, error, np.nan),
            np.where(good, dissipated, np.nan))


def _filled(x: Array) -> Array:
    """All n mole fractions from the first n-1."""
    return np.concatenate((x, 1.0 - x.sum(-1, keepdims=True)), axis=-1)


def _entropy(equations: Equations, N: Array, y: Array) -> Array:
    """Entropy production, W/(m2 K), (M): R sum N_i ln(x0_i/xd_i) and the integral of the activity coefficients' part.

    -R sum_i N_i dln(gamma_i), x_i dln(gamma_i) = ((Gamma - I) dx)_i: smooth where a mole fraction vanishes.
    """
    problem = equations.problem
    ideal = face_entropy(N, problem.x0, problem.xd)
    if equations.gamma is None:
        return np.maximum(ideal, 0.0)                     # below zero by rounding only
    rule = grid(len(y) - 1)
    x = _filled(problem.x0[:, :-1] + np.tensordot(rule.value, y, axes=1))
    slope = np.tensordot(rule.slope, y, axes=1)
    excess = ((equations.thermodynamic(x) - np.eye(problem.n - 1)) @ slope[..., None])[..., 0]
    excess = np.concatenate((excess, -excess.sum(-1, keepdims=True)), axis=-1)
    terms = np.where((N == 0) | (x <= 0), 0.0, N * excess / np.where(x > 0, x, 1.0)).sum(-1)
    total: Array = ideal - GAS_CONSTANT * (rule.weights @ terms)
    return total


def newton(equations: Equations, y: Array, N: Array, active: Mask, blend: float) -> tuple[Array, Array, Mask, Counts]:
    """Newton on one grid from y (p+1, M, n-1) and N (M, n), with Gamma and K blended from their mean values."""
    problem = equations.problem
    M = len(problem)
    rule = grid(len(y) - 1)
    y, N = y.copy(), N.copy()
    found = np.zeros(M, dtype=bool)
    steps = np.zeros(M, dtype=np.int64)
    last = np.full(M, np.inf)
    films = np.flatnonzero(active)
    for count in range(1, MAX_STEPS + 1):
        if not len(films):
            break
        value, slope = np.tensordot(rule.value, y, axes=1), np.tensordot(rule.slope, y, axes=1)
        linear = _linearised(equations, problem.x0[:, :-1] + value, slope, N, blend)
        residual, d_slope, d_value, d_N = (part[:, films] for part in linear)
        dy, dN = _solve_system(problem, rule, residual, d_slope, d_value, d_N, films, N)
        reach = np.abs(dy).max((0, 2))
        sound = np.isfinite(dN).all(-1) & np.isfinite(reach)
        # profiles that would leave the simplex by far are pulled back
        pull = np.minimum(1.0, 0.5 / np.maximum(np.where(sound, reach, 1.0), 1e-300))[:, None]
        y[:, films] += np.where(sound[:, None], pull * dy, 0.0)
        N[films] += np.where(sound[:, None], pull * dN, 0.0)
        steps[films] += 1
        size = np.abs(N[films]).max(-1)
        error = np.abs(dN).max(-1) / np.where(size > 0, size, 1.0)
        stalled = (count > 2) & (error <= (STAGNATION if count < 8 else NOISE)) & (error > 0.25 * last[films])
        done = sound & (reach < 0.5) & ((error <= NEWTON_TOLERANCE) | stalled)
        last[films] = error
        found[films[done]] = True
        films = films[sound & ~done]
    return y, N, found, steps


def _linearised(equations: Equations, value: Array, slope: Array, N: Array, blend: float
                ) -> tuple[Array, Array, Array, Array]:
    """Residual Gamma x' + M N at the nodes (p, M, n-1) and its derivatives by x', by x and by N."""
    n = equations.problem.n
    tangents = np.eye(n)[:-1] - np.eye(n)[-1]
    x = _filled(value)
    K, Gamma = equations.resistance(x), equations.thermodynamic(x)
    if blend < 1.0:
        frozen = np.eye(n - 1) if equations.problem.gamma is None else equations.problem.gamma
        K, Gamma = blend * K + (1.0 - blend) * equations.problem.K, blend * Gamma + (1.0 - blend) * frozen
    M_x = film_matrix(x, K)
    residual = (Gamma @ slope[..., None])[..., 0] + (M_x @ N[..., None])[..., :-1, 0]
    d_value = -reduced(film_matrix(np.broadcast_to(N, x.shape), K))
    if equations.varies:
        # one-sided, away from the nearer edge of the simplex
        side = np.where(x[..., :-1] > x[..., -1:], -DIFFERENCE, DIFFERENCE)
        moved = x + np.moveaxis(side, -1, 0)[..., None] * tangents.reshape(n - 1, *([1] * (x.ndim - 1)), n)
        gain = blend / np.moveaxis(side, -1, 0)
        if callable(equations.gamma):
            change = gain[..., None, None] * (equations.thermodynamic(moved) - equations.thermodynamic(x))
            d_value = d_value + np.moveaxis((change @ slope[..., None])[..., 0], 0, -1)
        if callable(equations.kappa):
            change = gain[..., None, None] * (equations.resistance(moved) - equations.resistance(x))
            bent = film_matrix(np.broadcast_to(x, moved.shape), change) @ N[..., None]
            d_value = d_value + np.moveaxis(bent[..., :-1, 0], 0, -1)
    return residual, Gamma, d_value, M_x[..., :-1, :]


def _solve_system(problem: FilmProblem, rule: Grid, residual: Array, d_slope: Array, d_value: Array, d_N: Array,
                  films: NDArray[np.intp], N: Array) -> tuple[Array, Array]:
    """One Newton step of the chosen films: dy at all points (p+1, films, n-1), zero at the faces, and dN (films, n)."""
    p, M, m = residual.shape
    unknowns = (p - 1) * m + m + 1
    dy, dN = np.zeros((p + 1, M, m)), np.empty((M, m + 1))
    inner_value, inner_slope = rule.value[:, 1:-1], rule.slope[:, 1:-1]
    nu, s = problem.nu[films], problem.s[films] - (problem.nu[films] * N[films]).sum(-1)
    chunk = max(1, CHUNK_ENTRIES // unknowns**2)
    for first in range(0, M, chunk):
        part = slice(first, first + chunk)
        count = min(chunk, M - first)
        # rows: node, equation; columns: point, component
        block = (np.einsum("kMij,kl->Mkilj", d_slope[:, part], inner_slope)
                 + np.einsum("kMij,kl->Mkilj", d_value[:, part], inner_value))
        J = np.zeros((count, unknowns, unknowns))
        J[:, :p * m, :(p - 1) * m] = block.reshape(count, p * m, (p - 1) * m)
        J[:, :p * m, (p - 1) * m:] = np.moveaxis(d_N[:, part], 0, 1).reshape(count, p * m, m + 1)
        J[:, -1, (p - 1) * m:] = nu[part]
        right = np.empty((count, unknowns))
        right[:, :-1] = -np.moveaxis(residual[:, part], 0, 1).reshape(count, p * m)
        right[:, -1] = s[part]
        with np.errstate(over="ignore", invalid="ignore"):
            step = solve_singular(J, right)
        dy[1:-1, part] = np.moveaxis(step[:, :(p - 1) * m].reshape(count, p - 1, m), 0, 1)
        dN[part] = step[:, (p - 1) * m:]
    return dy, dN


def _homotopy(equations: Equations, y: Array, N: Array, active: Mask, y_found: Array, N_found: Array, ok: Mask
              ) -> tuple[Array, Array, Mask]:
    """Films that failed: from constant coefficients to the true ones in eight steps."""
    good = active & ~ok
    y[0], y[-1] = y_found[0], y_found[-1]
    for blend in np.linspace(0.125, 1.0, 8):
        y, N, found, _ = newton(equations, y, N, good, float(blend))
        good &= found
    y = np.where(good[:, None], y, y_found)
    return y, np.where(good[:, None], N, N_found), ok | good
