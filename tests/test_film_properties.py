"""What must hold for any film: order of components, reversal, scaling, closure, the second law."""
from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from film_cases import Films, random_films
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from ratebased.bootstrap import LinearBootstrap
from ratebased.errors import HighFluxWarning
from ratebased.film import (
    FilmFlux,
    FilmStatus,
    effective,
    explicit_burghardt_krupiczka,
    explicit_krishna,
    krishna_standart,
    linearized,
)

pytestmark = pytest.mark.filterwarnings(f"ignore::{HighFluxWarning.__module__}.{HighFluxWarning.__name__}")
seeds = st.integers(0, 2**31)
sizes = st.integers(2, 10)
COUNT = 40


def solve(films: Films, method=krishna_standart) -> FilmFlux:
    """The batch; films without a single solution are NaN."""
    return method(films.x0, films.xd, films.kappa, 1.0, LinearBootstrap(films.nu, films.s), throw=False)


def agree(found: FilmFlux, expected: np.ndarray, films: Films, rtol: float = 1e-9) -> None:
    """To rtol of max|N| and of the flux that a rounding of the compositions makes (1e-15 c kappa)."""
    size = np.abs(expected).max(-1, keepdims=True)
    floor = 1e-13 * films.kappa.max((-1, -2))[:, None] * np.abs(films.nu).max() / np.abs(films.nu).max(-1)[:, None]
    solved = np.isfinite(expected).all(-1)
    assert (np.isfinite(found.N).all(-1) == solved).all()
    wrong = np.abs(found.N - expected) > rtol * size + floor
    assert not wrong[solved].any(), np.argwhere(wrong)


def gentle(films: Films) -> Films:
    """Without the kinds whose answer a rounding of the input changes visibly (traces that set the total flux)."""
    keep = ~np.isin(films.kind, [1, 2, 3, 8]) & (np.abs(films.s) < 50)
    return Films(*(getattr(films, name)[keep] for name in films.__dataclass_fields__))


@settings(max_examples=20, deadline=None)
@given(sizes, seeds)
def test_order_of_components(n: int, seed: int) -> None:
    """Renaming the components renames the fluxes."""
    films = gentle(random_films(n, COUNT, seed))
    order = np.random.default_rng(seed).permutation(n)
    renamed = replace(films, x0=films.x0[:, order], xd=films.xd[:, order], nu=films.nu[:, order],
                      kappa=films.kappa[:, order][:, :, order])
    agree(solve(renamed), solve(films).N[:, order], films)


@settings(max_examples=20, deadline=None)
@given(sizes, seeds)
def test_reversal(n: int, seed: int) -> None:
    """Exchanging the faces (and the sign of a given total flux) turns the fluxes round."""
    films = gentle(random_films(n, COUNT, seed))
    turned = replace(films, x0=films.xd, xd=films.x0, s=-films.s)
    for method in (krishna_standart, linearized, effective, explicit_krishna, explicit_burghardt_krupiczka):
        agree(solve(turned, method), -solve(films, method).N, films)


@settings(max_examples=20, deadline=None)
@given(sizes, seeds, st.floats(1e-4, 1e4))
def test_scaling(n: int, seed: int, factor: float) -> None:
    """Fluxes go with kappa (and with c_t); the bootstrap may be multiplied by anything."""
    films = gentle(random_films(n, COUNT, seed))
    scaled = replace(films, kappa=films.kappa * factor, s=films.s * factor)
    agree(solve(scaled), solve(films).N * factor, scaled)
    other = replace(films, nu=-3.0 * films.nu, s=-3.0 * films.s)
    agree(solve(other), solve(films).N, films)


@settings(max_examples=20, deadline=None)
@given(sizes, seeds)
def test_closure_and_second_law(n: int, seed: int) -> None:
    """nu . N = s, sum J = 0, entropy production not below zero, profiles inside the simplex, for every kind of film."""
    films = random_films(n, COUNT, seed)
    found = solve(films)
    assert np.isin(found.status, [FilmStatus.CONVERGED, FilmStatus.OTHER_BRANCH, FilmStatus.NO_SOLUTION,
                                  FilmStatus.UNDETERMINED]).all()
    good = found.status <= FilmStatus.OTHER_BRANCH
    N = found.N[good]
    weighted = (films.nu[good] * N)
    size = np.abs(weighted).max(-1) + np.abs(films.nu[good]).max(-1) * np.abs(N).max(-1)
    assert (np.abs(weighted.sum(-1) - films.s[good]) <= 1e-12 * size + 1e-300).all()
    assert (np.abs(found.J[good].sum(-1)) <= 1e-12 * np.abs(N).max(-1)).all()
    assert (found.entropy_production[good] >= 0).all()
    x = found.profile(np.linspace(0, 1, 21))[good]
    assert x.min() >= -1e-9
    assert_allclose(x[:, 0], films.x0[good], atol=1e-15)
    assert_allclose(x[:, -1], films.xd[good], atol=1e-14)


@settings(max_examples=15, deadline=None)
@given(st.integers(3, 6), seeds)
def test_gamma_in_another_order(n: int, seed: int) -> None:
    """[Gamma] referred to another last component is the same film."""
    films = gentle(random_films(n, COUNT, seed))
    rng = np.random.default_rng(seed)
    gamma = np.eye(n - 1) + 0.15 * rng.normal(size=(len(films), n - 1, n - 1)) / n
    order = rng.permutation(n)
    every = np.concatenate((np.eye(n - 1), -np.ones((1, n - 1))))
    change = every[order[:-1]]
    renamed = replace(films, x0=films.x0[:, order], xd=films.xd[:, order], nu=films.nu[:, order],
                      kappa=films.kappa[:, order][:, :, order])

    def solve_with(batch: Films, factor: np.ndarray) -> FilmFlux:
        return krishna_standart(batch.x0, batch.xd, batch.kappa, 1.0, LinearBootstrap(batch.nu, batch.s), gamma=factor,
                                throw=False)

    agree(solve_with(renamed, change @ gamma @ np.linalg.inv(change)), solve_with(films, gamma).N[:, order], films)
