"""The numerical film: closed forms, order of convergence, scipy's boundary-value solver, non-ideal entropy."""
from __future__ import annotations

import numpy as np
import pytest
from film_cases import KINDS, Films, random_films
from numpy.testing import assert_allclose
from scipy.integrate import solve_bvp

from ratebased.bootstrap import Equimolar, FluxRatio, LinearBootstrap, Stagnant, TotalFlux
from ratebased.errors import ApproximationWarning, HighFluxWarning, InputError
from ratebased.film import FilmStatus, krishna_standart, numerical
from ratebased.film.blocks import film_matrix, resistances
from ratebased.film.grid import double_exponential, grid, interpolation
from ratebased.maxwell_stefan import GAS_CONSTANT

pytestmark = pytest.mark.filterwarnings(f"ignore::{HighFluxWarning.__module__}.{HighFluxWarning.__name__}")


def test_binary_of_a_margules_liquid() -> None:
    """Equimolar: N = c kappa integral of Gamma dx, closed for ln gamma = A x^2; and its entropy from the activities."""
    A, x0, xd = 1.5, np.array([0.8, 0.2]), np.array([0.1, 0.9])

    def gamma(x: np.ndarray) -> np.ndarray:
        return (1 - 2 * A * x[..., 0] * x[..., 1])[..., None, None]

    def primitive(x: float) -> float:
        return x - A * x**2 + 2 / 3 * A * x**3

    found = numerical(x0, xd, 0.3, 5.0, Equimolar(), gamma=gamma)
    N = 5.0 * 0.3 * (primitive(0.8) - primitive(0.1))
    assert_allclose(found.N, [N, -N], rtol=1e-12)
    ln_a = [np.log(x) + A * (1 - x) ** 2 for x in (x0, xd)]
    assert_allclose(found.entropy_production, GAS_CONSTANT * (found.N * (ln_a[0] - ln_a[1])).sum(), rtol=1e-10)
    assert found.error <= 1e-9
    # the profile: primitive(x) is linear
    along = primitive(0.8) + 0.3 * (primitive(0.1) - primitive(0.8))
    assert_allclose(primitive(found.profile(0.3)[0]), along, rtol=1e-8)


def test_vignes_binary() -> None:
    """Equimolar, kappa = k1^x1 k2^x2: N = c integral of kappa dx, closed."""
    k1, k2, x0, xd = 2.0, 0.1, 0.9, 0.2

    def kappa(x: np.ndarray) -> np.ndarray:
        return (k1 ** x[..., 0] * k2 ** x[..., 1])[..., None, None] * np.ones((2, 2))

    ratio = k1 / k2
    N = k2 * (ratio**x0 - ratio**xd) / np.log(ratio)
    assert_allclose(numerical([x0, 1 - x0], [xd, 1 - xd], kappa, 1.0, Equimolar()).N, [N, -N], rtol=1e-12)


@pytest.mark.parametrize("n", [2, 3, 5])
def test_ideal_films(n: int) -> None:
    """The exact ideal film over the ordinary kinds, to the error estimate."""
    films = random_films(n, 300, n)
    keep = np.isin(films.kind, [KINDS.index(k) for k in ("plain", "zeros", "pure faces", "equal diffusivities")])
    films = Films(*(getattr(films, name)[keep] for name in films.__dataclass_fields__))
    closure = LinearBootstrap(films.nu, films.s)
    exact = krishna_standart(films.x0, films.xd, films.kappa, 1.0, closure, throw=False)
    found = numerical(films.x0, films.xd, films.kappa, 1.0, closure, throw=False)
    good = exact.status == FilmStatus.CONVERGED
    assert (found.status[good] == FilmStatus.CONVERGED).all()
    size = np.abs(exact.N).max(-1)
    assert (np.abs(found.N - exact.N).max(-1) <= 1e-7 * size)[good].all()
    finite = good & np.isfinite(exact.entropy_production) & (exact.entropy_production > 0)
    assert_allclose(found.entropy_production[finite], exact.entropy_production[finite], rtol=1e-6)


def test_high_flux() -> None:
    """A flux factor of 30: a boundary layer of a thirtieth of the film."""
    x0, xd = [0.5, 0.3, 0.2], [0.2, 0.2, 0.6]
    kappa = np.array([[1.0, 1.0, 1.7], [1.0, 1.0, 1.3], [1.7, 1.3, 1.0]])
    for N_t in (30.0, -30.0):
        exact = krishna_standart(x0, xd, kappa, 1.0, TotalFlux(N_t)).N
        assert_allclose(numerical(x0, xd, kappa, 1.0, TotalFlux(N_t)).N, exact, rtol=1e-8)


def test_scipy_boundary_value_solver() -> None:
    """Fifty random ideal films by scipy.integrate.solve_bvp at 1e-10, N as its free parameters."""
    found_any = 0
    for n in (2, 3, 4, 6, 9):
        films = random_films(n, 400, 50 + n)
        answer = krishna_standart(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s), throw=False)
        plain = np.isin(films.kind, [KINDS.index("plain"), KINDS.index("wide diffusivities")])
        for i in np.flatnonzero(plain & (answer.status == FilmStatus.CONVERGED))[:10]:
            K, x0, xd = resistances(films.kappa[i], 1.0), films.x0[i], films.xd[i]
            nu, s = films.nu[i], films.s[i]
            nu, s = nu / np.abs(nu).max(), s / np.abs(nu).max()

            def slope(eta: np.ndarray, x: np.ndarray, N: np.ndarray, K: np.ndarray = K) -> np.ndarray:
                return (film_matrix(N, K) @ np.vstack((x, 1 - x.sum(0))))[:-1]

            def ends(a: np.ndarray, b: np.ndarray, N: np.ndarray, x0: np.ndarray = x0, xd: np.ndarray = xd,
                     nu: np.ndarray = nu, s: float = s) -> np.ndarray:
                return np.concatenate((a - x0[:-1], b - xd[:-1], [nu @ N - s]))

            eta = np.linspace(0, 1, 20)
            guess = x0[:-1, None] + (xd - x0)[:-1, None] * eta
            solved = solve_bvp(slope, ends, eta, guess, p=0.9 * answer.N[i], tol=1e-10, max_nodes=20000)
            assert solved.success
            assert_allclose(answer.N[i], solved.p, atol=1e-7 * np.abs(solved.p).max())
            found_any += 1
    assert found_any == 50


def nonideal(x: np.ndarray) -> np.ndarray:
    """[Gamma] of a two-suffix Margules ternary, ln gamma from gE = sum A_ij x_i x_j."""
    A = np.array([[0.0, 1.1, -0.6], [1.1, 0.0, 0.7], [-0.6, 0.7, 0.0]])
    # ln gamma_i = (A x)_i - x.A x/2, so dln gamma_i/dx_j = A_ij - (A x)_j
    free = A - (x @ A)[..., None, :]
    return np.eye(2) + x[..., :-1, None] * (free[..., :-1, :-1] - free[..., :-1, -1:])


def test_frozen_gamma_error_is_second_order() -> None:
    """Halving the driving force divides the error of the mean [Gamma] by eight (third order in N, which is first)."""
    x0, direction = np.array([0.4, 0.35, 0.25]), np.array([0.2, -0.28, 0.08])
    kappa = np.array([[1.0, 2.0, 0.7], [2.0, 1.0, 1.2], [0.7, 1.2, 1.0]])
    errors = []
    for size in (1.0, 0.5, 0.25, 0.125):
        faces = x0 + 0.5 * size * direction, x0 - 0.5 * size * direction
        frozen = krishna_standart(*faces, kappa, 1.0, Equimolar(), gamma=nonideal(x0)).N
        errors.append(np.abs(frozen - numerical(*faces, kappa, 1.0, Equimolar(), gamma=nonideal).N).max())
    orders = np.log2(np.array(errors[:-1]) / np.array(errors[1:]))
    assert (orders > 2.8).all() and (orders < 3.3).all()


def test_functions_see_the_batch() -> None:
    """A function of x may hold parameters of the batch; each film as if alone."""
    strength = np.array([0.2, 0.8, 1.4])

    def gamma(x: np.ndarray) -> np.ndarray:
        return (1 - 2 * strength * x[..., 0] * x[..., 1])[..., None, None]

    found = numerical([0.7, 0.3], [0.2, 0.8], 1.0, 1.0, Stagnant(1), gamma=gamma)
    for i, A in enumerate(strength):
        one = numerical([0.7, 0.3], [0.2, 0.8], 1.0, 1.0, Stagnant(1),
                        gamma=lambda x, A=A: (1 - 2 * A * x[..., 0] * x[..., 1])[..., None, None])
        assert_allclose(found.N[i], one.N, rtol=1e-9)


def test_estimate_and_bad_functions() -> None:
    """A layer too thin for the grids warns; functions that give rubbish are refused."""
    with pytest.warns(ApproximationWarning, match="estimated error"):
        numerical([0.5, 0.3, 0.2], [0.2, 0.2, 0.6], np.array([[1, 1, 1.7], [1, 1, 1.3], [1.7, 1.3, 1]]), 1.0,
                  TotalFlux(3000.0), throw=False)
    with pytest.raises(InputError, match="above zero"):
        numerical([0.5, 0.5], [0.4, 0.6], lambda x: np.where(x[..., :1, None] > 0.42, 1.0, -1.0) * np.ones((2, 2)), 1.0,
                  Equimolar())
    with pytest.raises(InputError, match="gamma"):
        numerical([0.5, 0.5], [0.4, 0.6], 1.0, 1.0, Equimolar(), gamma=lambda x: np.full((*x.shape[:-1], 1, 1), np.nan))


def test_grids() -> None:
    """Polynomials are interpolated, differentiated and integrated exactly; singular ends integrated all the same."""
    rule = grid(8)
    polynomial = np.polynomial.Polynomial([1.0, -2.0, 0.5, 3.0, 0.0, -1.0, 0.2, 0.1, -0.7])
    values = polynomial(rule.points)
    assert_allclose(rule.value @ values, polynomial(rule.nodes), rtol=1e-13)
    assert_allclose(rule.slope @ values, polynomial.deriv()(rule.nodes), rtol=1e-11)
    assert_allclose(rule.weights @ polynomial(rule.nodes), polynomial.integ()(1.0), rtol=1e-13)
    assert_allclose(interpolation(rule.points, rule.points), np.eye(9))
    points, weights = double_exponential()
    assert_allclose(weights @ np.log(points), -1.0, rtol=1e-10)
    assert_allclose(weights @ points**-0.5, 2.0, rtol=1e-6)


def test_closures_of_a_nonideal_film() -> None:
    """nu . N = s and the film equations by integrating from one face to the other."""
    from scipy.integrate import solve_ivp

    x0, xd = np.array([0.5, 0.2, 0.3]), np.array([0.2, 0.45, 0.35])
    kappa = np.array([[1.0, 2.0, 0.7], [2.0, 1.0, 1.2], [0.7, 1.2, 1.0]])
    for closure in (Equimolar(), Stagnant(0), FluxRatio(2, 1.4), TotalFlux(-1.0)):
        found = numerical(x0, xd, kappa, 1.0, closure, gamma=nonideal)
        A = film_matrix(found.N, resistances(kappa, 1.0))

        def slope(eta: float, x: np.ndarray, A: np.ndarray = A) -> np.ndarray:
            whole = np.append(x, 1 - x.sum())
            return np.linalg.solve(nonideal(whole), (A @ whole)[:-1])

        end = solve_ivp(slope, (0, 1), x0[:-1], rtol=1e-12, atol=1e-14, method="DOP853").y[:, -1]
        assert_allclose(end, xd[:-1], atol=1e-10)
