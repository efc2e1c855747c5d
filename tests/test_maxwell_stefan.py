"""Maxwell-Stefan relations: limits on paper, conversions there and back, invariants."""
from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from ratebased import maxwell_stefan as ms
from ratebased.errors import InputError

seeds = st.integers(0, 2**32 - 1)
sizes = st.integers(2, 6)


def mixture(n: int, seed: int, batch: tuple[int, ...] = ()) -> tuple[np.ndarray, np.ndarray]:
    """Mole fractions and pair diffusivities."""
    rng = np.random.default_rng(seed)
    D = 1e-5 * np.exp(rng.uniform(0, 3, (*batch, n, n)))
    return rng.dirichlet(np.ones(n), batch), D + np.swapaxes(D, -1, -2)


def off_diagonal(D: np.ndarray) -> np.ndarray:
    return D[..., ~np.eye(D.shape[-1], dtype=bool)]


def test_resistance_matrix_written_out() -> None:
    """Every entry of a ternary from the formula."""
    x, k = np.array([0.2, 0.3, 0.5]), np.array([[9.0, 2.0, 4.0], [2.0, 9.0, 5.0], [4.0, 5.0, 9.0]])
    expected = [[0.2 / 4 + 0.3 / 2 + 0.5 / 4, -0.2 * (1 / 2 - 1 / 4)],
                [-0.3 * (1 / 2 - 1 / 5), 0.3 / 5 + 0.2 / 2 + 0.5 / 5]]
    assert_allclose(ms.resistance_matrix(x, k), expected, rtol=1e-15)
    N = np.array([1.0, -2.0, 0.5])
    phi = [[1 / 4 - 2 / 2 + 0.5 / 4, -1.0 * (1 / 2 - 1 / 4)], [2.0 * (1 / 2 - 1 / 5), -2 / 5 + 1 / 2 + 0.5 / 5]]
    assert_allclose(ms.rate_factor_matrix(N, 10.0, k), np.array(phi) / 10.0, rtol=1e-15)


def test_binary_and_equal_diffusivities() -> None:
    """[D] is D12 for a binary, D times the identity for equal diffusivities; times [Gamma] where that is given."""
    assert_allclose(ms.fick_matrix([0.3, 0.7], 2e-5), [[2e-5]], rtol=1e-15)
    x, _ = mixture(4, 1)
    assert_allclose(ms.fick_matrix(x, 2e-5), 2e-5 * np.eye(3), rtol=1e-13, atol=1e-20)
    gamma = np.array([[1.2, 0.1, 0.0], [0.3, 0.8, -0.1], [0.0, 0.2, 1.1]])
    assert_allclose(ms.fick_matrix(x, 2e-5, gamma), 2e-5 * gamma, rtol=1e-13, atol=1e-20)


def test_thermodynamic_factor_of_a_margules_binary() -> None:
    """ln gamma_1 = A x2^2: Gamma = 1 - 2 A x1 x2, from free and from constrained derivatives."""
    x1, A = 0.3, 1.4
    constrained = np.array([[-2 * A * (1 - x1)]])
    free = np.array([[0.0, 2 * A * (1 - x1)], [2 * A * x1, 0.0]])
    for slope in (constrained, free):
        assert_allclose(ms.thermodynamic_factor([x1, 1 - x1], slope), [[1 - 2 * A * x1 * (1 - x1)]], rtol=1e-14)


def test_heavy_trace() -> None:
    """An infinitely dilute component diffuses by Blanc's law, 1/D_eff = sum x_j/D_ij, whatever the others do."""
    x, D = mixture(4, 3)
    x = np.array([1e-12, *(x[1:] / x[1:].sum() * (1 - 1e-12))])
    blanc = 1.0 / (x[1:] / D[0, 1:]).sum()
    fick = ms.fick_matrix(x, D)
    assert_allclose(fick[0, 0], blanc, rtol=1e-10)
    assert_allclose(fick[0, 1:], 0.0, atol=1e-10 * blanc)
    assert_allclose(ms.effective_diffusivity_wilke(x, D)[0], blanc, rtol=1e-10)


@settings(max_examples=40, deadline=None)
@given(sizes, seeds)
def test_conversions_there_and_back(n: int, seed: int) -> None:
    """Pairs to Onsager, to Fick and back; reciprocity, zero row sums, no negative eigenvalue."""
    x, D = mixture(n, seed, (2,))
    x = 0.9 * x + 0.1 / n
    rng = np.random.default_rng(seed)
    gamma = np.eye(n - 1) + 0.1 * rng.normal(size=(2, n - 1, n - 1)) / n
    c_t = np.array([40.0, 1e4])
    L = ms.onsager_matrix(x, D, c_t)
    assert_allclose(L, np.swapaxes(L, -1, -2), rtol=1e-14)
    assert_allclose(L.sum(-1), 0.0, atol=1e-13 * np.abs(L).max())
    eigenvalues = np.linalg.eigvalsh(L)
    assert (eigenvalues[..., 0] >= -1e-13 * eigenvalues[..., -1]).all() and (eigenvalues[..., 1] > 0).all()
    assert_allclose(off_diagonal(ms.diffusivities_from_onsager(x, L, c_t)), off_diagonal(D), rtol=1e-8)
    fick = ms.fick_matrix(x, D, gamma)
    assert_allclose(off_diagonal(ms.diffusivities_from_fick(x, fick, gamma)), off_diagonal(D), rtol=1e-8)
    assert_allclose(ms.onsager_from_fick(x, fick, c_t, gamma), L, rtol=1e-8, atol=1e-10 * np.abs(L).max())
    assert_allclose(ms.fick_from_onsager(x, L, c_t, gamma), fick, rtol=1e-8, atol=1e-10 * np.abs(fick).max())


def test_onsager_of_a_binary() -> None:
    """L_11 = c_t x1 x2 D12."""
    L = ms.onsager_matrix([0.3, 0.7], 2e-5, 40.0)
    assert_allclose(L, 40.0 * 0.21 * 2e-5 * np.array([[1.0, -1.0], [-1.0, 1.0]]), rtol=1e-14)


def test_matrices_that_belong_to_no_mixture() -> None:
    """Broken reciprocity, row sums, sign: an error that says which."""
    x, D = mixture(3, 5)
    L = ms.onsager_matrix(x, D, 1.0)
    bad = L.copy()
    bad[0, 1] *= 1.1
    with pytest.raises(InputError, match="reciprocal"):
        ms.diffusivities_from_onsager(x, bad, 1.0)
    with pytest.raises(InputError, match="sum to zero"):
        ms.diffusivities_from_onsager(x, L + 0.1 * np.eye(3) * L[0, 0], 1.0)
    with pytest.raises(InputError, match="semi-definite"):
        ms.diffusivities_from_onsager(x, -L, 1.0)
    fick = ms.fick_matrix(x, D)
    fick[0, 1] *= 1.5
    with pytest.raises(InputError, match="reciprocal"):
        ms.diffusivities_from_fick(x, fick)
    with pytest.raises(InputError, match="absent"):
        ms.diffusivities_from_fick([0.0, 0.5, 0.5], fick)
    with pytest.raises(InputError, match="does not diffuse"):
        ms.diffusivities_from_onsager(x, np.zeros((3, 3)), 1.0)
    with pytest.raises(InputError, match="does not diffuse"):
        ms.diffusivities_from_fick(x, np.ones((2, 2)))
    with pytest.raises(InputError, match="consume entropy"):
        ms.diffusivities_from_fick(x, -ms.fick_matrix(x, D))


@settings(max_examples=40, deadline=None)
@given(sizes, seeds)
def test_driving_force_parts_sum_to_zero(n: int, seed: int) -> None:
    """sum d_i = 0 for each part; gravity, the same force on every unit of mass, has none."""
    rng = np.random.default_rng(seed)
    x, _ = mixture(n, seed)
    grad = rng.normal(size=n)
    grad -= grad.mean()
    d = ms.driving_force(x, 300.0, 40.0, grad_x=grad, gamma=np.eye(n - 1) + 0.1 * rng.normal(size=(n - 1, n - 1)),
                         grad_P=1e4, partial_molar_volume=rng.uniform(1e-5, 1e-4, n),
                         molar_mass=rng.uniform(0.01, 0.1, n), body_force=rng.normal(size=n))
    for part in (d.chemical, d.pressure, d.body):
        assert abs(part.sum()) <= 1e-13 * np.abs(part).max()
    gravity = ms.driving_force(x, 300.0, 40.0, grad_x=grad, molar_mass=np.ones(n), body_force=np.full(n, -9.81))
    assert_allclose(gravity.body, 0.0, atol=1e-15)


def test_driving_force_of_an_ideal_mixture_from_potentials() -> None:
    """mu_i = RT ln x_i gives d_i = dx_i/dz."""
    x, grad = np.array([0.2, 0.3, 0.5]), np.array([1.0, -3.0, 2.0])
    d = ms.driving_force(x, 300.0, 40.0, grad_mu=ms.GAS_CONSTANT * 300.0 * grad / x)
    assert_allclose(d.total, grad, rtol=1e-14)


def test_barometric_equilibrium() -> None:
    """An ideal gas at rest in gravity: the chemical and the pressure part cancel, x_i P falls as exp(-M_i g z/RT)."""
    T, M, g, x = 290.0, np.array([0.002, 0.028, 0.044]), 9.81, np.array([0.3, 0.3, 0.4])
    RT = ms.GAS_CONSTANT * T
    c_t = 1e5 / RT
    mean_mass = (x * M).sum()
    grad_P = -c_t * mean_mass * g
    grad_x = x * (mean_mass - M) * g / RT                 # d(ln x_i P) = -M_i g/RT
    d = ms.driving_force(x, T, c_t, grad_x=grad_x, grad_P=grad_P, partial_molar_volume=np.full(3, 1 / c_t),
                         molar_mass=M, body_force=np.full(3, -g))
    assert_allclose(d.total, 0.0, atol=1e-13 * np.abs(d.pressure).max())


def test_centrifuge_needs_its_arguments() -> None:
    """A pressure gradient without volumes or masses, both gradients, or potentials that break Gibbs-Duhem: errors."""
    x = np.array([0.4, 0.6])
    with pytest.raises(InputError, match="molar_mass"):
        ms.driving_force(x, 300.0, 40.0, grad_x=[1.0, -1.0], grad_P=1.0)
    with pytest.raises(InputError, match="partial_molar_volume"):
        ms.driving_force(x, 300.0, 40.0, grad_x=[1.0, -1.0], grad_P=1.0, molar_mass=[0.1, 0.2])
    with pytest.raises(InputError, match="one of the two"):
        ms.driving_force(x, 300.0, 40.0)
    with pytest.raises(InputError, match="Gibbs"):
        ms.driving_force(x, 300.0, 40.0, grad_mu=[1.0, 1.0])
    with pytest.raises(InputError, match="sum to zero"):
        ms.driving_force(x, 300.0, 40.0, grad_x=[1.0, 1.0])


@settings(max_examples=40, deadline=None)
@given(sizes, seeds)
def test_friction_does_not_know_the_reference_velocity(n: int, seed: int) -> None:
    """Fluxes against the molar, mass, volume average or one component give the same driving forces and dissipation."""
    rng = np.random.default_rng(seed)
    x, D = mixture(n, seed)
    N = rng.normal(size=n)
    d = ms.friction(x, N, D, 40.0)
    assert abs(d.sum()) <= 1e-12 * np.abs(d).max()
    for weight in (np.ones(n), rng.uniform(0.01, 0.1, n), np.eye(n)[0]):
        J = ms.relative_fluxes(N, x, weight)
        assert abs((weight * J).sum()) <= 1e-12 * np.abs(weight * N).max()
        assert_allclose(ms.friction(x, J, D, 40.0), d, rtol=1e-9, atol=1e-10 * np.abs(d).max())
        assert_allclose(ms.dissipation(x, J, D, 40.0), ms.dissipation(x, N, D, 40.0), rtol=1e-9)


@settings(max_examples=40, deadline=None)
@given(sizes, seeds)
def test_friction_inverts_fick(n: int, seed: int) -> None:
    """J = -c [D] grad x put into the friction law gives grad x back; the local dissipation is -R sum J_i d_i/x_i."""
    rng = np.random.default_rng(seed)
    x, D = mixture(n, seed)
    x = 0.9 * x + 0.1 / n
    grad = rng.normal(size=n)
    grad -= grad.mean()
    J = -40.0 * ms.fick_matrix(x, D) @ grad[:-1]
    J = np.append(J, -J.sum())
    assert_allclose(ms.friction(x, J, D, 40.0), grad, rtol=1e-9, atol=1e-10)
    produced = ms.dissipation(x, J, D, 40.0)
    assert produced >= 0
    assert_allclose(produced, -ms.GAS_CONSTANT * (J * grad / x).sum(), rtol=1e-9)


def test_effective_diffusivities() -> None:
    """Wilke, Stefan and the dilute limit agree where they should."""
    x, D = mixture(4, 9)
    alone = np.eye(4)[0]                                  # only component 0 moves: Stefan is Wilke
    with_flux = ms.effective_diffusivity_stefan(x, alone, D)
    assert_allclose(with_flux[0], ms.effective_diffusivity_wilke(x, D)[0], rtol=1e-13)
    dilute = np.array([1e-9, 1e-9, 1e-9, 1 - 3e-9])
    assert_allclose(ms.effective_diffusivity_wilke(dilute, D)[:3], ms.effective_diffusivity_dilute(D, 3)[:3], rtol=1e-7)
    assert_allclose(ms.effective_diffusivity_wilke([0.4, 0.6], 2e-5), 2e-5, rtol=1e-14)
    assert np.isfinite(ms.effective_diffusivity_wilke([1.0, 0.0, 0.0, 0.0], D)).all()
    with pytest.raises(InputError, match="solvent"):
        ms.effective_diffusivity_dilute(D, 4)
    with pytest.raises(InputError, match="infinite"):
        ms.effective_diffusivity_stefan(x, x, D)          # everything moves together


def test_dissipation_of_an_absent_component() -> None:
    """Zero where it rests, infinite where it moves."""
    x, D = np.array([0.0, 0.4, 0.6]), mixture(3, 2)[1]
    assert np.isfinite(ms.dissipation(x, [0.0, 1.0, -1.0], D, 1.0))
    assert np.isinf(ms.dissipation(x, [1.0, 0.0, -1.0], D, 1.0))


@pytest.mark.parametrize("call, words", [
    (lambda: ms.resistance_matrix([0.5, 0.6], 1.0), "sum to 1.1"),
    (lambda: ms.resistance_matrix([-0.1, 1.1], 1.0), r"x\[0\] = -0.1"),
    (lambda: ms.resistance_matrix([0.5, 0.5], [[1.0, 2.0], [3.0, 1.0]]), "symmetric"),
    (lambda: ms.resistance_matrix([0.5, 0.5], 0.0), "above zero"),
    (lambda: ms.rate_factor_matrix([1.0, np.nan], 1.0, 1.0), r"N\[1\]"),
    (lambda: ms.fick_matrix([0.2, 0.3, 0.5], 1.0, np.eye(3)), "gamma"),
    (lambda: ms.thermodynamic_factor([0.2, 0.3, 0.5], np.eye(4)), "dlngamma_dx"),
    (lambda: ms.onsager_matrix([0.5, 0.5], 1.0, -1.0), "c_t"),
    (lambda: ms.resistance_matrix([0.5, 0.5], "fast"), "kappa: expected numbers, got 'fast'"),
    (lambda: ms.resistance_matrix([0.5, 0.5], [[1, 2], [3]]), "kappa: expected numbers"),
    (lambda: ms.resistance_matrix([0.5, 0.5], np.ones((2, 2)) * (1 + 1j)), "kappa: expected numbers"),
    (lambda: ms.resistance_matrix(np.full((2, 2), 0.5), np.ones((3, 2, 2))), r"broadcast: x \(2,\), kappa \(3,\)"),
    (lambda: ms.rate_factor_matrix(1.0, 1.0, 1.0), "N = 1.0"),
    (lambda: ms.friction([0.5, 0.5], [1.0, 2.0, 3.0], 1.0, 1.0), "N: expected 2 components"),
    (lambda: ms.friction([0.5, 0.5], 1.0, 1.0, 1.0), "N: expected 2 components"),
    (lambda: ms.relative_fluxes([1.0, 2.0], [0.5, 0.5], [1.0, 1.0, 1.0]), "weight: expected 2 components"),
    (lambda: ms.dissipation([0.5, 0.5], [1.0], 1.0, 1.0), "N: expected 2 components"),
    (lambda: ms.entropy_production([1.0, 1.0], [0.5, 0.5], [0.2, 0.3, 0.5]), "xd: expected 2 components"),
    (lambda: ms.driving_force([0.5, 0.5], 300.0, 1.0, grad_x=[0.0, 0.0, 0.0]), "grad_x: expected 2 components"),
    (lambda: ms.driving_force([0.5, 0.5], [300.0, 310.0], np.ones(3), grad_x=[1.0, -1.0]), r"T \(2,\), c_t \(3,\)"),
    (lambda: ms.driving_force([0.5, 0.5], 300.0, 1.0, grad_x=[1.0, -1.0], grad_P=1.0, molar_mass=[0.01, 0.02],
                              partial_molar_volume=0.0), "partial_molar_volume: the volume"),
    (lambda: ms.effective_diffusivity_dilute(1.0, 0), "D: expected shape"),
    (lambda: ms.effective_diffusivity_dilute(np.ones((2, 2)), 0.5), "solvent = 0.5"),
    (lambda: ms.effective_diffusivity_dilute(np.ones((2, 2)), 2), "solvent = 2"),
])
def test_bad_input(call, words: str) -> None:
    """The message names the argument, the entry and the value."""
    with pytest.raises(InputError, match=words):
        call()
