"""Film methods: limits known on paper, results, errors, warnings."""
from __future__ import annotations

import warnings
from collections.abc import Callable

import numpy as np
import pytest
from numpy.testing import assert_allclose

from ratebased.bootstrap import Bootstrap, Equimolar, FluxRatio, LatentHeat, LinearBootstrap, Stagnant, TotalFlux
from ratebased.errors import (
    ApproximationWarning,
    ConvergenceError,
    HighFluxWarning,
    InputError,
    NoSolutionError,
    OtherSolutionWarning,
    UnstableMixtureError,
)
from ratebased.film import (
    MESSAGES,
    FilmFlux,
    FilmStatus,
    effective,
    explicit_burghardt_krupiczka,
    explicit_krishna,
    explicit_taylor_smith,
    krishna_standart,
    linearized,
    numerical,
    solutions,
)
from ratebased.maxwell_stefan import dissipation, entropy_production

METHODS = (krishna_standart, linearized, effective, explicit_krishna, explicit_burghardt_krupiczka,
           explicit_taylor_smith, numerical)
WITH_HIGH_FLUX = tuple(f for f in METHODS if f is not explicit_krishna)
CLOSURES: tuple[Callable[[int], Bootstrap], ...] = (
    lambda n: Equimolar(), lambda n: Stagnant(n - 1), lambda n: FluxRatio(0, 1.6),
    lambda n: LatentHeat(np.linspace(2e4, 4e4, n)), lambda n: TotalFlux(1.5))
CLOSURE_NAMES = ("equimolar", "stagnant", "flux ratio", "latent heat", "total flux")


def film(n: int, seed: int = 0) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """x0, xd, kappa; c_t is taken as 2."""
    rng = np.random.default_rng(seed)
    kappa = np.exp(rng.uniform(0, 2, (n, n)))
    return rng.dirichlet(np.ones(n)), rng.dirichlet(np.ones(n)), kappa + kappa.T


@pytest.mark.parametrize("method", METHODS, ids=lambda f: f.__name__)
@pytest.mark.parametrize("closure", CLOSURES, ids=CLOSURE_NAMES)
@pytest.mark.parametrize("n", [2, 3, 5])
def test_every_method_takes_every_bootstrap(method: Callable[..., FilmFlux], closure: Callable[[int], Bootstrap],
                                            n: int) -> None:
    """nu . N = s holds; all but Wilke's rule tend to the exact film as the faces come close."""
    x0, xd, kappa = film(n, 1)
    bootstrap = closure(n)
    found = method(x0, xd, kappa, 2.0, bootstrap)
    nu, s = bootstrap.linear_form(n)
    assert_allclose((nu * found.N).sum(), s, atol=1e-12 * np.abs(nu).max() * np.abs(found.N).max())
    assert found.status == FilmStatus.CONVERGED and found.iterations >= 1 and np.isfinite(found.N).all()
    if method is effective or isinstance(bootstrap, TotalFlux):
        return
    near = x0 + 0.001 * (xd - x0)
    exact = krishna_standart(x0, near, kappa, 2.0, bootstrap).N
    assert_allclose(method(x0, near, kappa, 2.0, bootstrap).N, exact, atol=0.02 * np.abs(exact).max())


@pytest.mark.parametrize("closure", CLOSURES, ids=CLOSURE_NAMES)
@pytest.mark.parametrize("method", WITH_HIGH_FLUX, ids=lambda f: f.__name__)
def test_binary_closed_form(method: Callable[..., FilmFlux], closure: Callable[[int], Bootstrap]) -> None:
    """Any nu . N = 0: N_t = c_t kappa ln(nu.xd/nu.x0); with N_t given the drift solution. Exact in every method."""
    x0, xd, kappa = np.array([0.8, 0.2]), np.array([0.3, 0.7]), 0.7
    bootstrap = closure(2)
    nu, s = bootstrap.linear_form(2)
    if s == 0 and isinstance(bootstrap, Equimolar):
        N = 2.0 * kappa * (x0 - xd)
    else:
        N_t = 2.0 * kappa * np.log((nu @ xd) / (nu @ x0)) if s == 0 else s
        E = np.exp(N_t / (2.0 * kappa))
        N = N_t * (E * x0 - xd) / (E - 1.0)
    assert_allclose(method(x0, xd, kappa, 2.0, bootstrap).N, N, rtol=1e-10, atol=1e-12)


@pytest.mark.parametrize("closure", CLOSURES, ids=CLOSURE_NAMES)
@pytest.mark.parametrize("method", WITH_HIGH_FLUX, ids=lambda f: f.__name__)
def test_equal_diffusivities(method: Callable[..., FilmFlux], closure: Callable[[int], Bootstrap]) -> None:
    """Every component its own binary: N = N_t (E x0 - xd)/(E - 1), E = exp(N_t/(c_t kappa)), N_t from nu . x."""
    x0, xd, _ = film(5, 3)
    kappa, bootstrap = 1.3, closure(5)
    nu, s = bootstrap.linear_form(5)
    N_t = 2.0 * kappa * np.log((nu @ xd) / (nu @ x0)) if s == 0 else float(s)
    if abs(N_t) < 1e-10:
        N = 2.0 * kappa * (x0 - xd)
    else:
        E = np.exp(N_t / (2.0 * kappa))
        N = N_t * (E * x0 - xd) / (E - 1.0)
    assert_allclose(method(x0, xd, kappa, 2.0, bootstrap).N, N, atol=1e-11 * np.abs(N).max())


def test_pseudo_binary_of_a_dilute_mixture() -> None:
    """Traces in a stagnant solvent: N_i = c_t kappa_is (x0 - xd), whatever the other pairs are."""
    _, _, kappa = film(4, 4)
    x0, xd = np.array([1e-7, 3e-7, 0.0, 0.0]), np.array([2e-7, 1e-7, 5e-7, 0.0])
    x0[3], xd[3] = 1 - x0.sum(), 1 - xd.sum()
    for method in METHODS:
        N = method(x0, xd, kappa, 2.0, Stagnant(3)).N
        assert_allclose(N[:3], 2.0 * kappa[:3, 3] * (x0 - xd)[:3], rtol=3e-6)


def test_heavy_trace() -> None:
    """A trace that drags nothing is dragged by all: dx/deta = x sum K_ij N_j - N sum K_ij x_j, integrated here."""
    x0, xd = np.array([1e-9, 0.6, 0.4 - 1e-9]), np.array([2e-9, 0.2, 0.8 - 2e-9])
    kappa = np.array([[1.0, 0.3, 0.8], [0.3, 1.0, 1.5], [0.8, 1.5, 1.0]])
    N = krishna_standart(x0, xd, kappa, 1.0, Equimolar()).N
    assert_allclose(N[1], 1.5 * 0.4, rtol=1e-8)           # the binary of the other two
    K12, K13 = 1 / 0.3, 1 / 0.8
    drag = N[1] * (K12 - K13)                             # constant: N_3 = -N_2
    # x' = drag x - N (K12 y + K13 (1 - y)), y = 0.6 - 0.4 eta, by the integrating factor exp(-drag eta)
    eta, weight = np.polynomial.legendre.leggauss(20)
    eta, weight = 0.5 * (eta + 1), 0.5 * weight
    y = 0.6 - 0.4 * eta
    friction = weight @ (np.exp(-drag * eta) * (K12 * y + K13 * (1 - y)))
    assert_allclose(N[0], (x0[0] - xd[0] * np.exp(-drag)) / friction, rtol=1e-6)


def test_no_driving_force() -> None:
    """Equal faces: no flux, or the given total carries the composition; no entropy is produced."""
    x, _, kappa = film(4, 5)
    for bootstrap in (Equimolar(), Stagnant(2), LatentHeat([1.0, 2.0, 3.0, 4.0])):
        found = krishna_standart(x, x, kappa, 2.0, bootstrap)
        assert not found.N.any() and found.entropy_production == 0
    assert_allclose(krishna_standart(x, x, kappa, 2.0, TotalFlux(3.0)).N, 3.0 * x, rtol=1e-12)


def test_low_flux_matrices() -> None:
    """J = c_t [k][Xi](x0 - xd); [Xi] tends to the identity; N = J + x0 N_t."""
    x0, xd, kappa = film(4, 6)
    found = krishna_standart(x0, xd, kappa, 2.0, Stagnant(0))
    D = (x0 - xd)[:-1]
    assert_allclose(2.0 * found.k @ found.correction @ D, found.J[:-1], rtol=1e-10)
    assert_allclose(found.J + x0 * found.N_t, found.N, rtol=1e-12, atol=1e-15)
    assert_allclose(found.J.sum(), 0.0, atol=1e-14)
    slow = krishna_standart(x0, x0 + 1e-8 * (xd - x0), kappa, 2.0, Stagnant(0))
    assert_allclose(slow.correction, np.eye(3), atol=1e-6)


def test_profile_and_entropy() -> None:
    """Profiles meet both faces and the film equations; three forms of the entropy production agree."""
    x0, xd, kappa = film(4, 7)
    found = krishna_standart(x0, xd, kappa, 2.0, FluxRatio(1, 2.0))
    assert_allclose(found.profile([0.0, 1.0]), [x0, xd], atol=1e-15)
    assert found.profile(0.5).shape == (4,)
    eta, weight = np.polynomial.legendre.leggauss(60)
    x = found.profile(0.5 * (eta + 1))
    assert_allclose(x.sum(-1), 1.0, rtol=1e-14)
    # film-mean identity, exact for any film: [M](mean x) N = x0 - xd
    K = (1 - np.eye(4)) / (2.0 * kappa)
    mean = 0.5 * weight @ x
    assert_allclose(found.N * (K @ mean) - mean * (K @ found.N), x0 - xd, atol=1e-12)
    integral = 0.5 * weight @ dissipation(x, found.N, kappa, 2.0)
    assert_allclose(found.entropy_production, integral, rtol=1e-10)
    assert_allclose(entropy_production(found.N, x0, xd), integral, rtol=1e-10)


def test_entropy_of_a_frozen_film_is_the_pair_form() -> None:
    """With a constant [Gamma] too, and never negative; infinite where a moving component vanishes at one face."""
    x0, xd, kappa = film(3, 8)
    gamma = np.array([[1.3, 0.2], [-0.1, 0.8]])
    found = krishna_standart(x0, xd, kappa, 2.0, Equimolar(), gamma=gamma)
    eta, weight = np.polynomial.legendre.leggauss(40)
    integral = 0.5 * weight @ dissipation(found.profile(0.5 * (eta + 1)), found.N, kappa, 2.0)
    assert_allclose(found.entropy_production, integral, rtol=1e-8)
    assert np.isinf(krishna_standart([0, 0.5, 0.5], [0.2, 0.3, 0.5], kappa, 2.0, Equimolar()).entropy_production)


def test_frozen_nonideal_film_by_shooting() -> None:
    """krishna_standart with [Gamma] against the matrix exponential of Gamma x' = A x."""
    from scipy.linalg import expm

    x0, xd, kappa = film(3, 9)
    gamma = np.array([[1.3, 0.4], [-0.2, 0.7]])
    for bootstrap in (Equimolar(), Stagnant(1), TotalFlux(4.0)):
        N = krishna_standart(x0, xd, kappa, 2.0, bootstrap, gamma=gamma).N
        K = (1 - np.eye(3)) / (2.0 * kappa)
        A = np.diag(K @ N) - N[:, None] * K
        extended = np.zeros((3, 3))
        extended[:2, :2] = np.linalg.inv(gamma)
        extended[2] = -extended[:2].sum(0)
        assert_allclose(expm(extended @ A) @ x0, xd, atol=1e-12)


@pytest.mark.parametrize("method", [krishna_standart, linearized])
@pytest.mark.parametrize("closure", CLOSURES, ids=CLOSURE_NAMES)
def test_derivatives(method: Callable[..., FilmFlux], closure: Callable[[int], Bootstrap]) -> None:
    """dN by x0, xd and every pair coefficient against differences, Richardson-extrapolated to about 1e-9."""
    x0, xd, kappa = film(4, 10)
    bootstrap = closure(4)
    found = method(x0, xd, kappa, 2.0, bootstrap).derivatives()

    def slope(at: Callable[[float], FilmFlux], h: float) -> np.ndarray:
        coarse, fine = ((at(s).N - at(-s).N) / (2 * s) for s in (h, h / 2))
        return (4 * fine - coarse) / 3

    h = 2e-4 * min(x0.min(), xd.min()) / 0.05
    for j in range(3):
        e = np.eye(4)[j] - np.eye(4)[-1]
        for given, at in ((found.dx0, lambda t, e=e: method(x0 + t * e, xd, kappa, 2.0, bootstrap)),
                          (found.dxd, lambda t, e=e: method(x0, xd + t * e, kappa, 2.0, bootstrap))):
            assert_allclose(given[:, j], slope(at, h), atol=1e-8 * np.abs(given).max())
    for k in range(4):
        for j in range(k):
            pair = np.zeros((4, 4))
            pair[k, j] = pair[j, k] = 1.0
            at = slope(lambda t, pair=pair: method(x0, xd, kappa + t * pair, 2.0, bootstrap), 1e-3)
            assert_allclose(found.dkappa[:, k, j], at, atol=1e-8 * np.abs(found.dkappa).max())
            assert_allclose(found.dkappa[:, j, k], found.dkappa[:, k, j])
    assert not found.dkappa[:, range(4), range(4)].any()


def test_derivatives_in_high_precision() -> None:
    """dN/dx0 of a stagnant ternary against 40-digit differences of the shooting equations."""
    mpmath = pytest.importorskip("mpmath")
    x0, xd, kappa = film(3, 11)
    found = krishna_standart(x0, xd, kappa, 1.0, Stagnant(2))
    with mpmath.workdps(40):
        K = [[mpmath.mpf(0) if i == j else 1 / mpmath.mpf(kappa[i, j]) for j in range(3)] for i in range(3)]

        def fluxes(shift: mpmath.mpf) -> list:
            start = [mpmath.mpf(x0[0]) + shift, mpmath.mpf(x0[1])]
            start.append(1 - sum(start))

            def miss(N0: mpmath.mpf, N1: mpmath.mpf) -> list:
                N = [N0, N1, mpmath.mpf(0)]
                A = mpmath.matrix(3, 3)
                for i in range(3):
                    for j in range(3):
                        A[i, j] = -N[i] * K[i][j]
                    A[i, i] = sum(K[i][j] * N[j] for j in range(3))
                end = mpmath.expm(A) * mpmath.matrix(start)
                return [end[0] - mpmath.mpf(xd[0]), end[1] - mpmath.mpf(xd[1])]

            return list(mpmath.findroot(miss, (found.N[0], found.N[1])))

        h = mpmath.mpf(10) ** -12
        up, down = fluxes(h), fluxes(-h)
        slope = [float((a - b) / (2 * h)) for a, b in zip(up, down)]
    assert_allclose(found.derivatives().dx0[:2, 0], slope, rtol=1e-11)


def test_methods_without_equations_have_no_derivatives() -> None:
    """An error that names the way out."""
    x0, xd, kappa = film(3)
    with pytest.raises(InputError, match="differences of N"):
        effective(x0, xd, kappa, 2.0, Equimolar()).derivatives()


def test_regimes_of_toor() -> None:
    """Osmotic, barrier and reverse diffusion made on purpose in an equimolar hydrogen-nitrogen-carbon dioxide film."""
    kappa = np.array([[1.0, 83.3, 68.0], [83.3, 1.0, 16.8], [68.0, 16.8, 1.0]])
    for d2, regime in ((0.0, "osmotic"), (-0.02, "reverse"), (0.05, "ordinary")):
        x0, xd = np.array([0.0, 0.5 + d2, 0.5 - d2]), np.array([0.5, 0.5, 0.0])
        found = krishna_standart(x0, xd, kappa, 1.0, Equimolar())
        assert list(found.regime) == ["ordinary", regime, "ordinary"]
    # between reverse and ordinary the flux of nitrogen vanishes: a diffusion barrier
    low, high = -0.5, -0.02
    for _ in range(60):
        d2 = 0.5 * (low + high)
        found = krishna_standart([0.0, 0.5 + d2, 0.5 - d2], [0.5, 0.5, 0.0], kappa, 1.0, Equimolar())
        low, high = (d2, high) if found.N[1] < 0 else (low, d2)
    assert list(found.regime) == ["ordinary", "barrier", "ordinary"] and abs(found.N[1]) < 1e-8


def test_batch_shapes() -> None:
    """Any leading shape; kappa, c_t and the bootstrap broadcast; one film gives what the batch gives."""
    rng = np.random.default_rng(12)
    for n in (2, 3, 4):
        x0, xd = rng.dirichlet(np.ones(n), (2, 5)), rng.dirichlet(np.ones(n), 5)
        _, _, kappa = film(n)
        c_t = np.array([[1.0], [2.0]])
        found = krishna_standart(x0, xd, kappa, c_t, TotalFlux(np.linspace(-1, 1, 5)))
        assert found.N.shape == (2, 5, n) and found.status.shape == (2, 5) and found.k.shape == (2, 5, n - 1, n - 1)
        assert found.profile([0.1, 0.9]).shape == (2, 5, 2, n) and found.regime.shape == (2, 5, n)
        assert found.derivatives().dkappa.shape == (2, 5, n, n, n)
        one = krishna_standart(x0[1, 3], xd[3], kappa, 2.0, TotalFlux(0.5))
        assert_allclose(found.N[1, 3], one.N, rtol=1e-11)
        for method in METHODS:
            assert method(np.empty((2, 0, n)), np.full(n, 1 / n), kappa, 1.0, Equimolar()).N.shape == (2, 0, n)
    frame = found.to_frame()
    assert len(frame) == 40 and list(frame.index.names) == ["batch_0", "batch_1", "component"]


def test_fractions_off_by_rounding() -> None:
    """Sums off by 1e-10 are renormalised, by 1e-8 refused."""
    x0, xd, kappa = film(3)
    exact = krishna_standart(x0, xd, kappa, 2.0, Equimolar()).N
    assert_allclose(krishna_standart(x0 * (1 + 1e-10), xd, kappa, 2.0, Equimolar()).N, exact, rtol=1e-12)
    with pytest.raises(InputError, match="x0"):
        krishna_standart(x0 * (1 + 1e-8), xd, kappa, 2.0, Equimolar())


@pytest.mark.parametrize("change, words", [
    (dict(x0=[0.5, 0.6, -0.1]), r"x0\[2\] = -0.1"),
    (dict(xd=[0.5, 0.5]), "xd: expected 3 components"),
    (dict(x0=[0.2, np.nan, 0.8]), r"x0\[1\]"),
    (dict(x0=[1.0], xd=[1.0]), "two components"),
    (dict(kappa=np.full((3, 3), -1.0)), "kappa"),
    (dict(kappa=np.array([[1.0, 2, 3], [4, 1, 5], [3, 5, 1]])), "symmetric"),
    (dict(c_t=0.0), "c_t"),
    (dict(gamma=np.eye(3)), "gamma: expected shape"),
    (dict(xd=np.full((4, 3), 1 / 3), c_t=np.ones(3)), r"do not broadcast: .*xd \(4,\), c_t \(3,\)"),
    (dict(x0=np.full((2, 3), 1 / 3), xd=np.full((4, 3), 1 / 3), gamma=lambda x: np.eye(2)), r"x0 \(2,\), xd \(4,\)"),
    (dict(c_t="1"), "c_t: expected numbers, got '1'"),
    (dict(kappa="fast"), "kappa: expected numbers, got 'fast'"),
    (dict(bootstrap=Equimolar), r"bootstrap: expected an object of `ratebased.bootstrap`, Equimolar\(\) say"),
    (dict(bootstrap="equimolar"), "bootstrap: expected an object"),
    (dict(bootstrap=None), "bootstrap: expected an object"),
])
@pytest.mark.parametrize("method", METHODS, ids=lambda f: f.__name__)
def test_bad_input(method: Callable[..., FilmFlux], change: dict, words: str) -> None:
    """Every method checks its arguments and names the bad one."""
    arguments = dict(x0=[0.2, 0.3, 0.5], xd=[0.3, 0.3, 0.4], kappa=np.ones((3, 3)), c_t=1.0, bootstrap=Equimolar())
    with pytest.raises(InputError, match=words):
        method(**(arguments | change))


def test_no_solution() -> None:
    """Opposite signs of nu . x, a stagnant component absent at one face: the error says why; throw=False says where."""
    _, _, kappa = film(3)
    x0, xd = np.array([[0.0, 0.4, 0.6], [0.3, 0.3, 0.4]]), np.array([0.2, 0.3, 0.5])
    with pytest.raises(NoSolutionError, match=r"1 of 2 films, first \[0\].*absent at one face") as caught:
        krishna_standart(x0, xd, kappa, 1.0, Stagnant(0))
    assert list(caught.value.failed) == [True, False] and np.isfinite(caught.value.best.N[1]).all()
    found = krishna_standart(x0, xd, kappa, 1.0, Stagnant(0), throw=False)
    assert list(found.status) == [FilmStatus.NO_SOLUTION, FilmStatus.CONVERGED]
    assert np.isnan(found.N[0]).all() and np.isfinite(found.N[1]).all()
    with pytest.raises(NoSolutionError):                  # a ratio inside the range of the mole fraction
        krishna_standart(x0[1], xd, kappa, 1.0, FluxRatio(0, 0.25))
    with pytest.raises(NoSolutionError):
        krishna_standart(x0[1], xd, kappa, 1.0, LatentHeat([1.0, 1.0, -1.1]))
    with pytest.raises(NoSolutionError, match="undetermined"):
        krishna_standart([0.0, 0.4, 0.6], [0.0, 0.5, 0.5], kappa, 1.0, Stagnant(0))


def test_every_method_reports_no_solution() -> None:
    """The same named error from all."""
    for method in METHODS:
        with pytest.raises(NoSolutionError):
            method([0.0, 0.4, 0.6], [0.2, 0.3, 0.5], film(3)[2], 1.0, Stagnant(0))


def test_unstable_mixture() -> None:
    """An eigenvalue of [Gamma] below zero, at the mean or only inside the film."""
    x0, xd, kappa = film(3)
    for method in METHODS:
        with pytest.raises(UnstableMixtureError, match="not positive"):
            method(x0, xd, kappa, 1.0, Equimolar(), gamma=np.diag([1.0, -0.2]))
    found = krishna_standart(x0, xd, kappa, 1.0, Equimolar(), gamma=np.diag([1.0, -0.2]), throw=False)
    assert found.status == FilmStatus.UNSTABLE and np.isnan(found.N).all()

    def spinodal(x: np.ndarray) -> np.ndarray:            # two-suffix Margules binary with A = 2.2
        return (1 - 2 * 2.2 * x[..., 0] * x[..., 1])[..., None, None]

    with pytest.raises(UnstableMixtureError):
        numerical([0.05, 0.95], [0.95, 0.05], 1.0, 1.0, Equimolar(), gamma=spinodal)


def test_unstable_face() -> None:
    """[Gamma] as a function: a face inside the spinodal counts too, though the mean composition is stable."""
    def gamma(x: np.ndarray) -> np.ndarray:
        return (1.0 - 6.0 * x[..., 0] * x[..., 1])[..., None, None]

    stable, unstable = [0.98, 0.02], [0.7, 0.3]
    assert gamma(np.array([0.84, 0.16])) > 0
    for faces in ((stable, unstable), (unstable, stable)):
        for method in (*METHODS, solutions):
            with pytest.raises(UnstableMixtureError):
                method(*faces, 0.01, 40.0, Equimolar(), gamma=gamma)
    found = krishna_standart([stable] * 2, [unstable, [0.9, 0.1]], 0.01, 40.0, Equimolar(), gamma=gamma, throw=False)
    assert list(found.status) == [FilmStatus.UNSTABLE, FilmStatus.CONVERGED]
    assert np.isnan(found.N[0]).all() and np.isfinite(found.N[1]).all()


def test_failed_films_have_no_derivatives_and_spoil_none() -> None:
    """NaN for the film that has no solution, the others as if alone."""
    x0, xd, kappa = film(3)
    found = krishna_standart([[1.0, 0.0, 0.0], x0], [[0.0, 0.5, 0.5], xd], kappa, 40.0, Stagnant(0), throw=False)
    alone = krishna_standart(x0, xd, kappa, 40.0, Stagnant(0))
    for many, one in ((found.derivatives(), alone.derivatives()), (found.blocks(), alone.blocks())):
        for name in vars(one):
            assert np.isnan(getattr(many, name)[0]).all()
            assert_allclose(getattr(many, name)[1], getattr(one, name), rtol=1e-9, atol=1e-12)


def test_not_converged_is_a_named_error(monkeypatch: pytest.MonkeyPatch) -> None:
    """Without steps to take every film fails: the error carries the batch, throw=False the status."""
    from ratebased.film import exact

    monkeypatch.setattr(exact, "MAX_STEPS", 0)
    x0, xd, kappa = film(4)
    with pytest.raises(ConvergenceError, match="no solution found"):
        krishna_standart(x0, xd, kappa, 1.0, Equimolar())
    found = krishna_standart(x0, xd, kappa, 1.0, Equimolar(), throw=False)
    assert found.status == FilmStatus.NOT_CONVERGED and np.isnan(found.N).all()
    assert set(MESSAGES) == set(FilmStatus)


def test_warnings() -> None:
    """Another branch, a film beyond the model's reach, a [Gamma] frozen over too wide a film."""
    wide = np.array([[1.0, 8.69, 1.09], [8.69, 1.0, 0.107], [1.09, 0.107, 1.0]])
    with pytest.warns(OtherSolutionWarning, match="fold"):
        # a start on the middle branch of a film with three solutions (the general closure, tilted to N_1 given)
        from ratebased.film.exact import solve_exact
        from ratebased.film.methods import report
        from ratebased.film.problem import pose
        from ratebased.film.result import RateFactor

        problem = pose([0.073, 0.892, 0.035], [0.548, 0.156, 0.296], wide, 1.0, TotalFlux(-2.0))
        middle = np.array([[-2.3747518954222014, 0.38541385349340866, -0.010661958071207216]])
        report(problem, solve_exact(problem, middle), RateFactor.FLUXES, True)
    with pytest.warns(HighFluxWarning):
        krishna_standart([0.5, 0.2, 0.3], [0.2, 0.4, 0.4], 1.0, 1.0, TotalFlux(80.0))

    def margules(x: np.ndarray) -> np.ndarray:
        return (1 - 2 * 1.8 * x[..., 0] * x[..., 1])[..., None, None]

    with pytest.warns(ApproximationWarning, match="frozen"):
        krishna_standart([0.05, 0.95], [0.8, 0.2], 1.0, 1.0, Equimolar(), gamma=margules)
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        krishna_standart([0.05, 0.95], [0.08, 0.92], 1.0, 1.0, Equimolar(), gamma=margules)


def test_linear_bootstrap_mixes_closures() -> None:
    """One batch with five different closures equals five calls."""
    x0, xd, kappa = film(3, 13)
    pairs = [closure(3).linear_form(3) for closure in CLOSURES]
    mixed = LinearBootstrap(np.array([nu for nu, _ in pairs]), np.array([float(s) for _, s in pairs]))
    found = krishna_standart(np.tile(x0, (5, 1)), xd, kappa, 2.0, mixed)
    for i, closure in enumerate(CLOSURES):
        assert_allclose(found.N[i], krishna_standart(x0, xd, kappa, 2.0, closure(3)).N, rtol=1e-10, atol=1e-13)
