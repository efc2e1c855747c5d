"""Ternary films in closed form: the coth form with the two eigenvalues of the rate factor written out.

On composition differences A(N) has two eigenvalues l1 and l2, with sum tau = sum_i w_i, w = K N, and product
delta = N_t (K12 K13 N1 + K12 K23 N2 + K13 K23 N3); in some films they are a complex pair. So C(A) D = a D + b A D with
b = (c1 - c2)/(l1 - l2), a = c1 - b l1 and c = (l/2) coth(l/2), and Newton needs no matrix function at all. The
equations of the first two components are used, the most abundant being put last.

Written in plain arithmetic, so that it runs on arrays (a chunk of films) and on floats (one film) alike.
"""
from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from .exact import HIGH_FLUX, UNPHYSICAL_ROTATION, mean_weight
from .problem import Array, FilmProblem, FilmStatus, Mask, Solved

CHUNK = 4096
MAX_STEPS = 9
SMALLEST_GAP = 1e-5
"""Half the distance of the eigenvalues is kept above this, so that b stays free of rounding (error below 1e-11)."""

STEP_TOLERANCE = 1e-12
LOG_LAW_RATIO = 100.0
"""A stagnant component that changes more than this across the film is held by its own integrated equation."""

Real = Any  # a float or an array of them


class Functions(NamedTuple):
    """The functions beyond arithmetic, for floats or for arrays."""

    tanh: Callable[[Real], Real]
    sqrt: Callable[[Real], Real]
    larger: Callable[[Real, Real], Real]


ARRAYS = Functions(np.tanh, np.sqrt, np.maximum)
FLOATS = Functions(math.tanh, math.sqrt, max)


class Geometry(NamedTuple):
    """What stays the same while N changes: K, the mean composition x, D = x0 - xd and their products with K."""

    k12: Real
    k13: Real
    k23: Real
    x: tuple[Real, Real]
    d: tuple[Real, Real]
    h: tuple[Real, Real]
    k: tuple[Real, Real]
    nu: tuple[Real, Real, Real]


def geometry(k12: Real, k13: Real, k23: Real, x0: tuple[Real, Real, Real], xd: tuple[Real, Real, Real],
             nu: tuple[Real, Real, Real]) -> Geometry:
    """The constants of the films."""
    x1, x2, x3 = 0.5 * (x0[0] + xd[0]), 0.5 * (x0[1] + xd[1]), 0.5 * (x0[2] + xd[2])
    d1, d2, d3 = x0[0] - xd[0], x0[1] - xd[1], x0[2] - xd[2]
    return Geometry(k12, k13, k23, (x1, x2), (d1, d2), (k12 * x2 + k13 * x3, k12 * x1 + k23 * x3),
                    (k12 * d2 + k13 * d3, k12 * d1 + k23 * d3), nu)


def linear_start(g: Geometry, share: Real, s: Real, x0: tuple[Real, Real, Real], xd: tuple[Real, Real, Real]
                 ) -> tuple[Real, Real, Real]:
    """Fluxes of the linear equations at x^ = share x0 + (1 - share) xd, nu . N = s."""
    z1, z2, z3 = (b + share * (a - b) for a, b in zip(x0, xd))
    first = (g.k12 * z2 + g.k13 * z3, -g.k12 * z1, -g.k13 * z1)
    second = (-g.k12 * z2, g.k12 * z1 + g.k23 * z3, -g.k23 * z2)
    step, _ = solve_three(first, second, g.nu, g.d[0], g.d[1])
    # the part with nu . N = s: along the null vector of the two rows, which is x^ itself
    carried = g.nu[0] * z1 + g.nu[1] * z2 + g.nu[2] * z3
    total = s / carried
    return step[0] + total * z1, step[1] + total * z2, step[2] + total * z3


def solve_three(r1: tuple[Real, Real, Real], r2: tuple[Real, Real, Real], nu: tuple[Real, Real, Real], f1: Real,
                f2: Real) -> tuple[tuple[Real, Real, Real], Real]:
    """The vector v with r1 . v = f1, r2 . v = f2, nu . v = 0, and the determinant of (r1, r2, nu)."""
    a1, a2, a3 = r2[1] * nu[2] - r2[2] * nu[1], r2[2] * nu[0] - r2[0] * nu[2], r2[0] * nu[1] - r2[1] * nu[0]
    b1, b2, b3 = nu[1] * r1[2] - nu[2] * r1[1], nu[2] * r1[0] - nu[0] * r1[2], nu[0] * r1[1] - nu[1] * r1[0]
    det = r1[0] * a1 + r1[1] * a2 + r1[2] * a3
    f1, f2 = f1 / det, f2 / det
    return (f1 * a1 + f2 * b1, f1 * a2 + f2 * b2, f1 * a3 + f2 * b3), det


class Function(NamedTuple):
    """C on the plane spanned by D and A D: C(A) D = a D + b A D, and the slopes of a and b by tau and delta.

    radius: largest |eigenvalue|. sound: where the eigenvalues are of the kind assumed and belong to a physical film.
    """

    a: Real
    b: Real
    a_tau: Real
    a_delta: Real
    b_tau: Real
    b_delta: Real
    radius: Real
    sound: Any


def real_pair(half: Real, discriminant: Real, use: Functions) -> Function:
    """Eigenvalues l = half +- r, r^2 = discriminant; the slopes follow from l^2 - tau l + delta = 0."""
    r = use.sqrt(use.larger(discriminant, SMALLEST_GAP * SMALLEST_GAP))
    l1, l2, gap = half + r, half - r, 2.0 * r
    c1, s1 = _coth(l1, use)
    c2, s2 = _coth(l2, use)
    b = (c1 - c2) / gap
    e1, e2 = (s1 - b) / gap, (b - s2) / gap
    b_delta, b_tau = (e2 - e1) / gap, (e1 * l1 - e2 * l2) / gap
    return Function(c1 - b * l1, b, e1 * l1 - l1 * b_tau, -e1 - l1 * b_delta, b_tau, b_delta,
                    use.larger(abs(l1), abs(l2)), discriminant > -SMALLEST_GAP * SMALLEST_GAP)


def complex_pair(half: Array, discriminant: Array, use: Functions) -> Function:
    """The same for l = half +- i omega, arrays only."""
    omega = np.sqrt(np.maximum(-discriminant, SMALLEST_GAP * SMALLEST_GAP))
    z = 0.5 * (half + 1j * omega)
    k = 1.0 / np.tanh(z)
    c, slope = z * k, 0.5 * (k - z * (k * k - 1.0))
    b = c.imag / omega
    b_delta = 0.5 * (slope.real - b) / (omega * omega)
    e = 0.5 * (slope.imag - 1j * (slope.real - b)) / omega
    turned = e * (2.0 * z)
    b_tau = turned.imag / omega
    return Function(c.real - b * half, b, turned.real - half * b_tau, -e.real - half * b_delta, b_tau, b_delta,
                    2.0 * np.abs(z), (discriminant < 0) & (omega < UNPHYSICAL_ROTATION))


def newton_step(g: Geometry, N: tuple[Real, Real, Real], pair: Callable[[Real, Real, Functions], Function],
                use: Functions, log_law: Real | None) -> tuple[tuple[Real, Real, Real], Real, Function]:
    """Newton step of the coth form, determinant of its Jacobian, and C.

    log_law: ln(xd/x0) of the first component where that is the stagnant one and its integrated equation is used.
    """
    k12, k13, k23 = g.k12, g.k13, g.k23
    N1, N2, N3 = N
    w1, w2 = k12 * N2 + k13 * N3, k12 * N1 + k23 * N3
    half = 0.5 * (w1 + w2 + k13 * N1 + k23 * N2)
    g1, g2, g3 = k12 * k13, k12 * k23, k13 * k23
    total, carried = N1 + N2 + N3, g1 * N1 + g2 * N2 + g3 * N3
    C = pair(half, half * half - total * carried, use)
    a, b = C.a, C.b
    d1, d2 = g.d
    p1, p2 = w1 * d1 - N1 * g.k[0], w2 * d2 - N2 * g.k[1]       # A D
    f1 = a * d1 + b * p1 - N1 * g.h[0] + g.x[0] * w1
    f2 = a * d2 + b * p2 - N2 * g.h[1] + g.x[1] * w2
    u1, u2 = C.a_tau * d1 + C.b_tau * p1, C.a_tau * d2 + C.b_tau * p2
    v1, v2 = C.a_delta * d1 + C.b_delta * p1, C.a_delta * d2 + C.b_delta * p2
    y1, y2 = g.x[0] + b * d1, g.x[1] + b * d2
    t1, t2, t3 = k12 + k13, k12 + k23, k13 + k23                # slopes of tau
    q1, q2, q3 = carried + total * g1, carried + total * g2, carried + total * g3       # and of delta
    first = (g.h[0] + b * g.k[0] - u1 * t1 - v1 * q1, -y1 * k12 - u1 * t2 - v1 * q2, -y1 * k13 - u1 * t3 - v1 * q3)
    second = (-y2 * k12 - u2 * t1 - v2 * q1, g.h[1] + b * g.k[1] - u2 * t2 - v2 * q2, -y2 * k23 - u2 * t3 - v2 * q3)
    if log_law is not None:
        first, f1 = (0.0 * k12, -k12, -k13), k12 * N2 + k13 * N3 - log_law
    step, det = solve_three(first, second, g.nu, f1, f2)
    return step, det, C


def _coth(l: Real, use: Functions) -> tuple[Real, Real]:
    """c(l) = (l/2) coth(l/2) and its slope (the slope to rounding/l, enough for a Jacobian)."""
    z = use.larger(abs(0.5 * l), 1e-8)
    k = 1.0 / use.tanh(z)
    c = z * k
    slope = 0.5 * (k - z * (k * k - 1.0))
    return c, slope * (0.5 * l / z)


def solve_ternary(problem: FilmProblem) -> Solved:
    """Ideal ternary films; status `NOT_CONVERGED` or `OTHER_BRANCH` where the robust path has to look again."""
    if len(problem) == 1:
        return _one_film(problem)
    M = len(problem)
    solved = Solved(np.empty((M, 3)), np.empty(M, dtype=np.int8), np.empty(M, dtype=np.int64), np.empty(M, dtype=bool))
    k, far = log_law_films(problem)
    with np.errstate(all="ignore"):
        plain = [slice(i, i + CHUNK) for i in range(0, M, CHUNK)] if not far.any() else _pieces(np.flatnonzero(~far))
        for part in plain:
            _chunk(problem, part, None, solved)
        for component in range(3):
            for part in _pieces(np.flatnonzero(far & (k == component))):
                _chunk(problem, part, component, solved)
    return solved


def _pieces(films: NDArray[np.intp]) -> list[Any]:
    return [films[i:i + CHUNK] for i in range(0, len(films), CHUNK)]


def log_law_films(problem: FilmProblem) -> tuple[NDArray[np.intp], Mask]:
    """The component with the largest |nu|, and where it is stagnant and nearly vanishes at one face."""
    nu = problem.nu
    zeros = np.count_nonzero(nu == 0.0)
    if zeros < 2:
        return np.zeros(len(problem), dtype=np.intp), np.zeros(len(problem), dtype=bool)
    k = np.abs(nu).argmax(-1)
    alone = ((nu != 0) @ np.ones(3) == 1.0) & (problem.s == 0)
    films = np.flatnonzero(alone)
    a, b = problem.x0[films, k[films]], problem.xd[films, k[films]]
    far = np.zeros(len(problem), dtype=bool)
    far[films] = np.minimum(a, b) * LOG_LAW_RATIO < np.maximum(a, b)
    return k, far


def _chunk(problem: FilmProblem, part: Any, stagnant: int | None, solved: Solved) -> None:
    """One chunk. The component put last is the most abundant of those that are not the stagnant one kept first."""
    x0, xd = problem.x0[part].T.copy(), problem.xd[part].T.copy()
    nu, s = problem.nu[part].T.copy(), problem.s[part]
    kappa, c_t = problem.kappa[part], problem.c_t[part]
    k12, k13, k23 = (1.0 / (c_t * kappa[:, i, j]) for i, j in ((0, 1), (0, 2), (1, 2)))
    if stagnant is not None and stagnant > 0:             # rename: the stagnant component first
        for array in (x0, xd, nu):
            array[[0, stagnant]] = array[[stagnant, 0]]
        k13, k23, k12 = (k23, k13, k12) if stagnant == 1 else (k13, k12, k23)
    total = x0 + xd
    swap1 = total[1] > total[2]
    swap0 = (total[0] > np.maximum(total[1], total[2])) if stagnant is None else np.zeros_like(swap1)
    swap1 &= ~swap0
    for array in (x0, xd, nu):
        _swap(array, swap0, swap1)
    k12, k13, k23 = (np.where(swap0, k23, np.where(swap1, k13, k12)), np.where(swap1, k12, k13),
                     np.where(swap0, k12, k23))
    a0, ad, weights = (x0[0], x0[1], x0[2]), (xd[0], xd[1], xd[2]), (nu[0], nu[1], nu[2])
    g = geometry(k12, k13, k23, a0, ad, weights)
    N = linear_start(g, _share(g, a0, ad, s), s, a0, ad)
    log_law = None if stagnant is None else np.log(xd[0] / x0[0])
    count = len(s)
    fluxes = np.empty((3, count))
    state = Solved(fluxes, np.empty(count, dtype=np.int8), np.empty(count, dtype=np.int64), np.empty(count, dtype=bool))
    _iterate(g, N, log_law, real_pair, slice(None), state)
    twisted = np.flatnonzero(state.status == FilmStatus.NOT_CONVERGED)
    if len(twisted):
        rest = _taken(g, twisted)
        _iterate(rest, (fluxes[0][twisted], fluxes[1][twisted], fluxes[2][twisted]),
                 None if log_law is None else log_law[twisted], complex_pair, twisted, state)
    _swap(fluxes, swap0, swap1)
    if stagnant is not None and stagnant > 0:
        fluxes[[0, stagnant]] = fluxes[[stagnant, 0]]
    solved.N[part], solved.status[part], solved.steps[part] = fluxes.T, state.status, state.steps
    if solved.high is not None:
        solved.high[part] = state.high


def _iterate(g: Geometry, N: tuple[Array, Array, Array], log_law: Array | None,
             pair: Callable[[Real, Real, Functions], Function], films: Any, state: Solved) -> None:
    """Newton on the films of a chunk, its results put into `state` (fluxes (3, chunk))."""
    previous = None
    for step in range(1, MAX_STEPS + 1):
        v, det, C = newton_step(g, N, pair, ARRAYS, log_law)
        N = (N[0] + v[0], N[1] + v[1], N[2] + v[2])
        done, previous = converged(v, N, previous, ARRAYS)
        settled = done | ~C.sound if step > 2 else done
        if step == 1 or not (step > 4 or np.count_nonzero(settled) > 0.7 * len(done)):
            continue
        done &= C.sound
        for row, flux in zip(state.N, N):
            row[films] = flux
        state.status[films] = np.where(done, np.where(det * mean_carried(g) < 0, FilmStatus.OTHER_BRANCH, 0),
                                       FilmStatus.NOT_CONVERGED)
        state.steps[films] = step + 1
        if state.high is not None:
            state.high[films] = C.radius > HIGH_FLUX
        left = np.flatnonzero(~settled)
        if not len(left):
            break
        films = left if isinstance(films, slice) else films[left]
        g = _taken(g, left)
        N, previous = (N[0][left], N[1][left], N[2][left]), previous[left]
        log_law = None if log_law is None else log_law[left]


def _taken(g: Geometry, films: NDArray[np.intp]) -> Geometry:
    """The films of `films`."""
    def take(values: tuple[Array, ...]) -> Any:
        return tuple(value[films] for value in values)

    return Geometry(g.k12[films], g.k13[films], g.k23[films], take(g.x), take(g.d), take(g.h), take(g.k), take(g.nu))


def mean_carried(g: Geometry) -> Real:
    """nu . x_m: the determinant of the linear film has its sign, and so has every film on the same branch."""
    carried: Real = g.nu[0] * g.x[0] + g.nu[1] * g.x[1] + g.nu[2] * (1.0 - g.x[0] - g.x[1])
    return carried


def _swap(array: Array, swap0: Mask, swap1: Mask) -> None:
    """Exchange the first (the second) row with the last where the mask says so."""
    last = array[2].copy()
    array[2] = np.where(swap0, array[0], np.where(swap1, array[1], last))
    array[0] = np.where(swap0, last, array[0])
    array[1] = np.where(swap1, last, array[1])


def _share(g: Geometry, x0: tuple[Real, Real, Real], xd: tuple[Real, Real, Real], s: Array) -> Array:
    """Where between the faces the linear start is taken, see `mean_weight`."""
    nu = g.nu
    a = nu[0] * x0[0] + nu[1] * x0[1] + nu[2] * x0[2]
    b = nu[0] * xd[0] + nu[1] * xd[1] + nu[2] * xd[2]
    factor = 3.0 * pair_resistance(g) * s / (nu[0] + nu[1] + nu[2]) if s.any() else None
    return mean_weight(a, b, s, factor)


def pair_resistance(g: Geometry) -> Real:
    """Mean of K_ij weighted with x_i x_j."""
    x1, x2 = g.x
    x3 = 1.0 - x1 - x2
    p12, p13, p23 = x1 * x2, x1 * x3, x2 * x3
    mean: Real = (p12 * g.k12 + p13 * g.k13 + p23 * g.k23) / (p12 + p13 + p23 + 1e-30)
    return mean


def converged(v: tuple[Real, Real, Real], N: tuple[Real, Real, Real], previous: Real | None, use: Functions
              ) -> tuple[Any, Real]:
    """Whether a quadratically converging iteration is done after the step v, and the relative size of that step."""
    size = use.larger(use.larger(abs(N[0]), abs(N[1])), abs(N[2])) + 1e-300
    error = use.larger(use.larger(abs(v[0]), abs(v[1])), abs(v[2])) / size
    done = error <= STEP_TOLERANCE
    if previous is not None:
        # e^2 is what remains, e^2 (e/e_last^2) where the constant of convergence is above one
        done = done | ((error < 1e-5) & (error * error * use.larger(1.0, error / (previous * previous)) <= 1e-12))
    return done, error


def _one_film(problem: FilmProblem) -> Solved:
    """The same in floats, without the cost of array calls."""
    x0, xd, nu = problem.x0[0].tolist(), problem.xd[0].tolist(), problem.nu[0].tolist()
    s, c_t, kappa = float(problem.s[0]), float(problem.c_t[0]), problem.kappa[0].tolist()
    k = max(range(3), key=lambda i: abs(nu[i]))
    alone = s == 0 and sum(value != 0 for value in nu) == 1
    far = alone and min(x0[k], xd[k]) * LOG_LAW_RATIO < max(x0[k], xd[k])
    order = sorted(range(3), key=lambda i: -1.0 if far and i == k else x0[i] + xd[i])
    k12, k13, k23 = (1.0 / (c_t * kappa[order[i]][order[j]]) for i, j in ((0, 1), (0, 2), (1, 2)))
    a0, ad = (x0[order[0]], x0[order[1]], x0[order[2]]), (xd[order[0]], xd[order[1]], xd[order[2]])
    g = geometry(k12, k13, k23, a0, ad, (nu[order[0]], nu[order[1]], nu[order[2]]))
    fluxes = np.zeros((1, 3))
    status, step, radius = FilmStatus.NOT_CONVERGED, 0, 0.0
    try:
        log_law = math.log(ad[0] / a0[0]) if far else None
        N = linear_start(g, _one_share(g, a0, ad, s), s, a0, ad)
        previous = None
        for step in range(1, MAX_STEPS + 1):
            v, det, C = newton_step(g, N, real_pair, FLOATS, log_law)
            N = (N[0] + v[0], N[1] + v[1], N[2] + v[2])
            done, previous = converged(v, N, previous, FLOATS)
            radius = C.radius
            if done and step > 1:
                if C.sound:
                    status = FilmStatus.OTHER_BRANCH if det * mean_carried(g) < 0 else FilmStatus.CONVERGED
                break
        fluxes[0, order] = N
    except (ZeroDivisionError, OverflowError):            # a singular step: the robust path takes over
        pass
    return Solved(fluxes, np.full(1, status, dtype=np.int8), np.full(1, step + 1, dtype=np.int64),
                  np.full(1, radius > HIGH_FLUX))


def _one_share(g: Geometry, x0: tuple[float, float, float], xd: tuple[float, float, float], s: float) -> float:
    """`mean_weight` for one film."""
    nu = g.nu
    if s == 0:
        a = nu[0] * x0[0] + nu[1] * x0[1] + nu[2] * x0[2]
        b = nu[0] * xd[0] + nu[1] * xd[1] + nu[2] * xd[2]
        ratio = math.log(b / a) if a * b > 0 else 0.0
        return 0.5 + ratio / 12.0 if abs(ratio) < 1e-3 else b / (b - a) - 1.0 / ratio
    factor = 3.0 * pair_resistance(g) * s / (nu[0] + nu[1] + nu[2])
    if abs(factor) > 700.0:
        return float(factor > 0)
    share: float = 0.5 + factor / 12.0 if abs(factor) < 1e-3 else 1.0 + 1.0 / math.expm1(factor) - 1.0 / factor
    return share
