"""Building blocks of the film equations against matrix exponentials, differences and each other."""
from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.linalg import expm

from ratebased.film import spectral
from ratebased.film.blocks import (
    FilmBlocks,
    composition_matrix,
    coth_blocks,
    film_matrix,
    linearized_blocks,
    reduced,
    resistances,
    shoot,
)


def film(n: int, scale: float, seed: int, batch: tuple[int, ...] = (3,)) -> tuple[np.ndarray, ...]:
    """N, K, x0, xd of random films with fluxes of a given size."""
    rng = np.random.default_rng(seed)
    kappa = np.exp(rng.uniform(0, 2, (*batch, n, n)))
    K = resistances(kappa + np.swapaxes(kappa, -1, -2), np.full(batch, 0.5))
    return scale * rng.normal(size=(*batch, n)), K, rng.dirichlet(np.ones(n), batch), rng.dirichlet(np.ones(n), batch)


def test_identities() -> None:
    """Columns sum to zero, M(x) x = 0, A(N) N = 0, A(N) x = -M(x) N."""
    N, K, x, _ = film(5, 1.0, 0)
    A, M = film_matrix(N, K), composition_matrix(x, K)
    for product in (A.sum(-2), M.sum(-2), (M @ x[..., None])[..., 0], (A @ N[..., None])[..., 0]):
        assert_allclose(product, 0.0, atol=1e-14)
    assert_allclose((A @ x[..., None])[..., 0], -(M @ N[..., None])[..., 0], rtol=1e-12, atol=1e-14)


def test_resistances_ignore_the_diagonal() -> None:
    """Zero, NaN or anything on the diagonal of kappa."""
    kappa = np.array([[np.nan, 2.0], [2.0, 0.0]])
    assert_allclose(resistances(kappa, 4.0), [[0.0, 0.125], [0.125, 0.0]])


@pytest.mark.parametrize("n, scale", [(2, 0.0), (2, 5.0), (3, 1e-9), (3, 10.0), (6, 1.0), (6, 9.0)])
@pytest.mark.parametrize("sign", [1, -1])
def test_shoot(n: int, scale: float, sign: int) -> None:
    """The matrix exponential and its derivative by central differences, up to |A| = 45 and beyond."""
    N, K, x, _ = film(n, scale, n)
    end, slope = shoot(N, K, x, sign)
    exact = np.array([expm(sign * A) @ z for A, z in zip(film_matrix(N, K), x)])
    size = np.abs(exact).max()
    assert_allclose(end, exact, atol=1e-12 * size)
    assert_allclose(end.sum(-1), 1.0, rtol=1e-10 * size)
    h = 1e-6 * max(scale, 1.0)
    for j in range(n):
        step = h * np.eye(n)[j]
        difference = (shoot(N + step, K, x, sign)[0] - shoot(N - step, K, x, sign)[0]) / (2 * h)
        assert_allclose(slope[..., j], difference, atol=1e-7 * np.abs(slope).max())


def exact_coth_form(N: np.ndarray, K: np.ndarray, x0: np.ndarray, xd: np.ndarray, gamma: np.ndarray) -> np.ndarray:
    """M(x_m) N - Gamma C(Z) D by scipy's exponential, one film."""
    Z = np.linalg.solve(gamma, reduced(film_matrix(N, K)))
    e = expm(Z)
    C = 0.5 * Z @ (e + np.eye(len(Z))) @ np.linalg.inv(e - np.eye(len(Z)))
    return composition_matrix(0.5 * (x0 + xd), K)[:-1] @ N - gamma @ C @ (x0 - xd)[:-1]


def test_coth_form_is_that_of_the_exponential() -> None:
    """Where exp[Z] - [I] can be inverted."""
    N, K, x0, xd = film(4, 1.0, 4)
    gamma = np.eye(3) + 0.2 * np.random.default_rng(1).normal(size=(3, 3, 3)) / 4
    blocks = coth_blocks(N, K, x0, xd, gamma)
    for i in range(3):
        assert_allclose(blocks.residual[i], exact_coth_form(N[i], K[i], x0[i], xd[i], gamma[i]), atol=1e-13)


def test_coth_form_vanishes_on_the_film() -> None:
    """Shoot through the film, then ask the coth form: the two are one equation."""
    for scale in (1e-6, 0.3, 3.0):
        N, K, x0, _ = film(5, scale, 5)
        N[..., -1] = -N[..., :-1].sum(-1)                 # equimolar: [Phi] singular
        xd, _ = shoot(N, K, x0)
        blocks = coth_blocks(N, K, x0, xd)
        assert_allclose(blocks.residual, 0.0, atol=1e-12 * blocks.size.max() + 1e-16)  # x0 - xd is rounded to 1e-16


@pytest.mark.parametrize("form", [coth_blocks, linearized_blocks])
@pytest.mark.parametrize("n, scale", [(2, 0.0), (2, 3.0), (3, 0.0), (3, 2.0), (5, 1e-6), (5, 1.0), (8, 30.0)])
@pytest.mark.parametrize("ideal", [True, False])
def test_jacobians(form: Callable[..., FilmBlocks], n: int, scale: float, ideal: bool) -> None:
    """By N, x0 and xd against central differences, [Gamma] and its slope included."""
    N, K, x0, xd = film(n, scale, 7)
    rng = np.random.default_rng(8)
    gamma = np.eye(n - 1) + 0.2 * rng.normal(size=(3, n - 1, n - 1)) / n
    slope = 0.3 * rng.normal(size=(3, n - 1, n - 1, n - 1)) / n

    def at(N: np.ndarray, x0: np.ndarray, xd: np.ndarray, shift: np.ndarray) -> FilmBlocks:
        if ideal:
            return form(N, K, x0, xd)
        return form(N, K, x0, xd, gamma + np.einsum("j,bjkl->bkl", shift, slope), slope)

    still = np.zeros(n - 1)
    blocks = at(N, x0, xd, still)
    h = 1e-6 * max(scale, 1.0)
    for j in range(n):
        e = h * np.eye(n)[j]
        difference = (at(N + e, x0, xd, still).residual - at(N - e, x0, xd, still).residual) / (2 * h)
        assert_allclose(blocks.dN[..., j], difference, atol=2e-8 * np.abs(blocks.dN).max())
    for j in range(n - 1):
        e = 1e-6 * (np.eye(n)[j] - np.eye(n)[-1])
        half = 0.5e-6 * np.eye(n - 1)[j]
        for found, low, high in ((blocks.dx0, (x0 - e, xd), (x0 + e, xd)), (blocks.dxd, (x0, xd - e), (x0, xd + e))):
            difference = (at(N, *high, half).residual - at(N, *low, -half).residual) / 2e-6
            assert_allclose(found[..., j], difference, atol=2e-8 * np.abs(found).max())


def test_doubling_agrees_with_eigenvalues(monkeypatch: pytest.MonkeyPatch) -> None:
    """The path for defective matrices, on matrices where both work."""
    for n, scale in ((2, 2.0), (3, 0.0), (4, 1.0), (6, 10.0)):
        N, K, x0, xd = film(n, scale, 9)
        gamma = np.eye(n - 1) + 0.1 * np.random.default_rng(2).normal(size=(3, n - 1, n - 1))
        slope = 0.1 * np.random.default_rng(3).normal(size=(3, n - 1, n - 1, n - 1))
        eigen = coth_blocks(N, K, x0, xd, gamma, slope)
        with monkeypatch.context() as patch:
            patch.setattr(spectral, "ILL_CONDITIONED", 0.0)
            doubled = coth_blocks(N, K, x0, xd, gamma, slope)
        for name in ("residual", "dN", "dx0", "dxd"):
            one, other = getattr(eigen, name), getattr(doubled, name)
            assert_allclose(one, other, atol=1e-11 * np.abs(one).max() + 1e-15)


def test_defective_matrix() -> None:
    """C of a Jordan block: c(z) on the diagonal, its slope above it."""
    z = 1.3
    C = spectral.coth_function(np.array([[z, 1.0], [0.0, z]]))
    value, slope = spectral.coth_values(np.array([z]))
    assert_allclose(C, [[value[0], slope[0]], [0.0, value[0]]], rtol=1e-12)


def test_scalar_function() -> None:
    """c(z) = (z/2) coth(z/2): even, 1 at zero, |z|/2 far out, no overflow."""
    z = np.array([0.0, 1e-9, 0.0499, 0.0501, 1.0, -1.0, 50.0, 1e4, -1e4])
    c, slope = spectral.coth_values(z)
    far = np.abs(z) > 1e-3
    assert_allclose(c[far], 0.5 * z[far] / np.tanh(0.5 * z[far]), rtol=1e-14)
    assert_allclose(c[:2], 1.0, rtol=1e-15)
    assert_allclose(c[-2:], 5e3)
    assert_allclose(slope[-2:], [0.5, -0.5])
    h = 1e-5
    difference = (spectral.coth_values(z + h)[0] - spectral.coth_values(z - h)[0]) / (2 * h)
    assert_allclose(slope[:7], difference[:7], atol=1e-10)


def test_profile_shape_of_a_defective_matrix() -> None:
    """The exponential path against the eigenvalue path next to it."""
    D, eta = np.array([0.3, -0.2]), np.linspace(0, 1, 7)
    block = spectral.profile_shape(np.array([[0.7, 1.0], [0.0, 0.7]]), eta, D)
    near = spectral.profile_shape(np.array([[0.7, 1.0], [0.0, 0.7 + 1e-3]]), eta, D)
    assert_allclose(block, near, atol=1e-3)
    assert_allclose(block[[0, -1]], [[0.0, 0.0], D], atol=1e-14)


def test_batches() -> None:
    """No batch, one batch axis, two; arguments that broadcast."""
    N, K, x0, xd = film(4, 1.0, 11, (2, 3))
    whole = coth_blocks(N, K, x0, xd)
    assert whole.dN.shape == (2, 3, 3, 4) and whole.size.shape == (2, 3)
    one = coth_blocks(N[1, 2], K[1, 2], x0[1, 2], xd[1, 2])
    assert_allclose(one.dN, whole.dN[1, 2], rtol=1e-12)
    spread = coth_blocks(N, K[0, 0], x0[0, 0], xd)
    assert_allclose(spread.residual[1, 1], coth_blocks(N[1, 1], K[0, 0], x0[0, 0], xd[1, 1]).residual, rtol=1e-10)
    end, slope = shoot(N[0, 0], K[0, 0], x0[0, 0])
    assert end.shape == (4,) and slope.shape == (4, 4)
