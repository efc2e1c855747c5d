"""The multi-start search for every solution of a film."""
from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose
from reference_film import bootstrap, numbers

from ratebased.bootstrap import Equimolar, LatentHeat, Stagnant, TotalFlux
from ratebased.errors import InputError, UnstableMixtureError
from ratebased.film import FilmStatus, krishna_standart, solutions
from ratebased.film.blocks import coth_blocks, resistances

CASES = json.loads((Path(__file__).parent / "data" / "film_multiplicity.json").read_text())["cases"]


@pytest.mark.parametrize("case", CASES, ids=range(len(CASES)))
def test_every_listed_root(case: dict) -> None:
    """All roots of the reference file; an odd number of them when nu . x keeps its sign, else an even one."""
    found = solutions(case["x0"], case["xd"], case["kappa"], case["ct"], bootstrap(case))
    for root in case["solutions"]:
        N = numbers(root["N"])
        assert min(np.abs(N - other).max() for other in found.N) <= 1e-9 * np.abs(N).max()
    assert len(found.N) % 2 == (case["nu_dot_signs"] == "same")
    K = resistances(found.kappa, found.c_t)
    assert_allclose(coth_blocks(found.N, K, found.x0, found.xd).residual, 0.0, atol=1e-9)
    assert found.profile(np.linspace(0, 1, 50)).min() >= -1e-9
    # the sign test: branches next to each other differ in sign
    assert (found.status == FilmStatus.OTHER_BRANCH).any()


def test_ordinary_film_has_one() -> None:
    """The same as the ordinary call, in the same order of components, whatever the seed."""
    x0, xd, kappa = [0.2, 0.3, 0.5], [0.5, 0.3, 0.2], np.array([[1, 2, 3], [2, 1, 4], [3, 4, 1.0]])
    for closure in (Equimolar(), Stagnant(1), TotalFlux(2.0), LatentHeat([1.0, 2.0, 3.0])):
        one = krishna_standart(x0, xd, kappa, 1.0, closure).N
        for seed in (0, 1):
            assert_allclose(solutions(x0, xd, kappa, 1.0, closure, seed=seed).N, one[None], rtol=1e-9, atol=1e-12)
    gamma = np.array([[1.2, 0.1], [0.0, 0.8]])
    one = krishna_standart(x0, xd, kappa, 1.0, Stagnant(2), gamma=gamma).N
    assert_allclose(solutions(x0, xd, kappa, 1.0, Stagnant(2), gamma=gamma).N, one[None], rtol=1e-9, atol=1e-12)


def test_none() -> None:
    """A stagnant component absent at one face: an empty answer, not an invented one."""
    assert solutions([0.0, 0.5, 0.5], [0.2, 0.3, 0.5], 1.0, 1.0, Stagnant(0)).N.shape == (0, 3)


def test_bad_input() -> None:
    """One film at a time, a stable mixture, at least one start."""
    faces = [0.2, 0.8], [0.5, 0.5]
    with pytest.raises(InputError, match="one film"):
        solutions([faces[0]] * 2, faces[1], 1.0, 1.0, Equimolar())
    with pytest.raises(UnstableMixtureError):
        solutions(*faces, 1.0, 1.0, Equimolar(), gamma=[[-1.0]])
    with pytest.raises(InputError, match="starts"):
        solutions(*faces, 1.0, 1.0, Equimolar(), starts=0)
    with pytest.raises(InputError, match="starts = 2.5"):
        solutions(*faces, 1.0, 1.0, Equimolar(), starts=2.5)
