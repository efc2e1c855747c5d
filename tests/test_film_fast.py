"""The fast paths against the robust one, the whole range of films, and high-precision answers."""
from __future__ import annotations

import warnings

import numpy as np
import pytest
from film_cases import KINDS, Films, newton_change, precise_fluxes, random_films
from numpy.testing import assert_allclose

from ratebased.bootstrap import LinearBootstrap
from ratebased.errors import HighFluxWarning
from ratebased.film import FilmStatus, krishna_standart
from ratebased.film.blocks import shoot
from ratebased.film.exact import rate_factors, solve_exact
from ratebased.film.problem import FilmProblem, pose
from ratebased.film.taylor import solve_series
from ratebased.film.ternary import solve_ternary

pytestmark = pytest.mark.filterwarnings(f"ignore::{HighFluxWarning.__module__}.{HighFluxWarning.__name__}")


def ordinary(n: int, count: int, seed: int) -> tuple[Films, FilmProblem]:
    """Films of the plain kind that have a solution."""
    films = random_films(n, 20 * count, seed)
    found = krishna_standart(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s), throw=False)
    keep = np.flatnonzero((films.kind == KINDS.index("plain")) & (found.status == FilmStatus.CONVERGED))[:count]
    films = Films(*(getattr(films, name)[keep] for name in films.__dataclass_fields__))
    return films, pose(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s))


@pytest.mark.parametrize("n", [3, 4, 7])
def test_fast_path_against_the_robust_one(n: int) -> None:
    """The fast path solves nearly all by itself, to the same fluxes."""
    _, problem = ordinary(n, 400, n)
    fast = solve_ternary(problem) if n == 3 else solve_series(problem)
    good = fast.status == FilmStatus.CONVERGED
    assert good.mean() > (0.99 if n == 3 else 0.8)
    exact = solve_exact(problem)
    size = np.abs(exact.N).max(-1, keepdims=True)
    assert (np.abs(fast.N - exact.N)[good] <= 1e-9 * size[good]).all()


def test_one_ternary_film_is_the_batch() -> None:
    """Floats and arrays run the same equations."""
    films, problem = ordinary(3, 60, 1)
    batch = solve_ternary(problem)
    for i in range(60):
        one = solve_ternary(problem.take(np.array([i])))
        if one.status[0] == FilmStatus.CONVERGED:
            assert_allclose(one.N[0], batch.N[i], rtol=1e-9, atol=1e-11 * np.abs(batch.N[i]).max())


def test_complex_rate_factors() -> None:
    """A ternary whose rate factors are a complex pair, by the fast path and by shooting."""
    _, problem = ordinary(3, 1500, 8)
    found = solve_ternary(problem)
    good = found.status == FilmStatus.CONVERGED
    twisted = good & (np.abs(rate_factors(problem, np.where(good[:, None], found.N, 0.0)).imag).max(-1) > 0.05)
    assert twisted.sum() >= 20
    end, _ = shoot(found.N[twisted], problem.K[twisted], problem.x0[twisted])
    assert_allclose(end, problem.xd[twisted], atol=1e-8)


def test_one_bad_film_does_not_spoil_the_batch() -> None:
    """Films without solution among ordinary ones, fast path included."""
    for n in (3, 5):
        films, _ = ordinary(n, 50, 5)
        x0, nu, s = films.x0.copy(), films.nu.copy(), films.s.copy()
        x0[7] = np.eye(n)[0]
        nu[7], s[7] = np.eye(n)[1], 0.0
        found = krishna_standart(x0, films.xd, films.kappa, 1.0, LinearBootstrap(nu, s), throw=False)
        clean = krishna_standart(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s))
        rest = np.arange(50) != 7
        assert found.status[7] == FilmStatus.NO_SOLUTION and np.isnan(found.N[7]).all()
        assert_allclose(found.N[rest], clean.N[rest], rtol=1e-7, atol=1e-9)


@pytest.mark.parametrize("n", range(2, 11))
def test_whole_range(n: int) -> None:
    """One more Newton step of the coth form moves no flux by more than 1e-10 max|N|, or there is no single solution."""
    films = random_films(n, 1500, 20 + n)
    found = krishna_standart(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s), throw=False)
    assert not np.isin(found.status, [FilmStatus.NOT_CONVERGED, FilmStatus.UNSTABLE]).any()
    none = found.status > FilmStatus.OTHER_BRANCH
    a, b = (films.nu * films.x0).sum(-1), (films.nu * films.xd).sum(-1)
    assert (a * b <= 1e-12 * np.abs(films.nu).max(-1) ** 2)[none].all()          # the documented reason
    solved = np.flatnonzero(~none)
    part = Films(*(getattr(films, name)[solved] for name in films.__dataclass_fields__))
    assert newton_change(part, found.N[solved]).max() <= 1e-10


@pytest.mark.slow
@pytest.mark.parametrize("n", [2, 3, 4, 7, 10])
def test_high_precision(n: int) -> None:
    """Films of the whole range solved again with 60 digits from the film equations as they stand."""
    films = random_films(n, 60, 300 + n)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", HighFluxWarning)
        found = krishna_standart(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s), throw=False)
    problem = pose(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s))
    radius = np.abs(rate_factors(problem, np.nan_to_num(found.N))).max(-1)
    chosen = np.flatnonzero((found.status == FilmStatus.CONVERGED) & (np.abs(found.N).max(-1) > 1e-8) & (radius < 40))
    for i in chosen[: 24 // n]:
        exact, sensitivity = precise_fluxes(films, int(i), found.N[i])
        assert (np.abs(found.N[i] - exact) <= 1e-10 * np.abs(exact).max() + 20 * sensitivity).all(), (i, films.kind[i])
