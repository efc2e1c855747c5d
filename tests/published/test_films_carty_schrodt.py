"""Carty and Schrodt (1975), Ind. Eng. Chem. Fundam. 14, 276: acetone(1) and methanol(2) evaporating into air(3).

Stefan tube, 328.5 K, 99.4 kPa, path 0.238 m; as in Taylor and Krishna (1993) Example 2.1.1 (from memory).
"""
from __future__ import annotations

import numpy as np
from numpy.testing import assert_allclose

from ratebased.bootstrap import Stagnant
from ratebased.film import (
    effective,
    explicit_burghardt_krupiczka,
    explicit_krishna,
    explicit_taylor_smith,
    krishna_standart,
    linearized,
    numerical,
)
from ratebased.maxwell_stefan import effective_diffusivity_wilke, rate_factor_matrix

D = 1e-6 * np.array([[0.0, 8.48, 13.72], [8.48, 0.0, 19.91], [13.72, 19.91, 0.0]])
C_T = 99.4e3 / (8.314462618 * 328.5)
FILM = ([0.319, 0.528, 0.153], [0.0, 0.0, 1.0], D / 0.238, C_T, Stagnant(2))


def test_fluxes() -> None:
    """Published: 1.783e-3 and 3.127e-3 mol/(m2 s)."""
    for method in (krishna_standart, numerical):
        N = method(*FILM).N
        assert_allclose(N[:2], [1.783e-3, 3.127e-3], rtol=5e-4)
        assert N[2] == 0 or abs(N[2]) < 1e-15


def test_gilliland() -> None:
    """Gilliland (1934), two vapours through a stagnant gas in closed form: log law of the gas, profile of the first."""
    found = krishna_standart(*FILM)
    N1, N2, _ = found.N
    k12, k13, k23 = (C_T * D[i, j] / 0.238 for i, j in ((0, 1), (0, 2), (1, 2)))
    assert_allclose(N1 / k13 + N2 / k23, np.log(1.0 / 0.153), rtol=1e-12)
    a, b = (N1 + N2) / k12, N1 / k13 + N2 / k23
    r, q = N1 / k12, N1 * (1 / k12 - 1 / k13)
    eta = np.linspace(0, 1, 11)
    x1 = (0.319 - r / a) * np.exp(a * eta) + r / a + q * 0.153 * (np.exp(b * eta) - np.exp(a * eta)) / (b - a)
    profile = found.profile(eta)
    assert_allclose(profile[:, 0], x1, atol=1e-13)
    assert_allclose(profile[:, 2], 0.153 * np.exp(b * eta), rtol=1e-12)


def test_intermediate_results() -> None:
    """[Phi], [Xi], [k] and the profile, computed for this project from the published data (regression values)."""
    found = krishna_standart(*FILM)
    assert_allclose(rate_factor_matrix(found.N, C_T, FILM[2]), [[3.262174, -0.52516303], [-1.38485664, 2.40248039]],
                    rtol=1e-6)
    assert_allclose(found.correction, [[0.15689514, 0.06910073], [0.18221886, 0.27001327]], rtol=1e-7)
    assert_allclose(found.k, [[4.69377e-5, 9.38939e-6], [2.33603e-5, 6.317441e-5]], rtol=2e-6)
    assert_allclose(found.J[:2], [2.164e-4, 5.3499e-4], rtol=1e-4)
    assert_allclose(found.profile([0.2, 0.5, 0.8]),
                    [[0.2975697326, 0.479713382, 0.2227168855], [0.2422534064, 0.3665944493, 0.3911521443],
                     [0.1328684877, 0.1801606987, 0.6869708136]], rtol=1e-9)


def test_approximate_methods() -> None:
    """Their fluxes on the same film, computed for this project from the stated formulas (regression values)."""
    for method, N in ((linearized, [1.78179e-3, 3.18769e-3]), (explicit_taylor_smith, [1.81896e-3, 3.13366e-3]),
                      (explicit_krishna, [1.3232e-3, 2.55277e-3]), (effective, [1.42768e-3, 2.5942e-3])):
        assert_allclose(method(*FILM).N[:2], N, rtol=4e-6)
    mean = 0.5 * (np.array(FILM[0]) + FILM[1])
    assert_allclose(effective_diffusivity_wilke(mean, np.where(D > 0, D, 1.0))[:2], [1.14899e-5, 1.54090e-5], rtol=1e-5)


def test_burghardt_krupiczka_closes_on_the_logarithmic_mean() -> None:
    """With a stagnant gas the method is [A](x_m)^-1 (x0 - xd) x_m,3/x_lm,3, the gas through its logarithmic mean."""
    x0, xd, kappa = np.array(FILM[0]), np.array(FILM[1]), FILM[2]
    mean = 0.5 * (x0 + xd)
    K = np.where(kappa > 0, 1.0 / np.where(kappa > 0, kappa, 1.0), 0.0) / C_T
    A = np.diag(K @ mean) - mean[:, None] * K
    log_mean = (xd[2] - x0[2]) / np.log(xd[2] / x0[2])
    expected = np.linalg.solve(A[:2, :2], (x0 - xd)[:2]) * mean[2] / log_mean
    assert_allclose(explicit_burghardt_krupiczka(*FILM).N[:2], expected, rtol=1e-12)
