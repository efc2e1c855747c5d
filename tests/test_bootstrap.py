"""The closures of a film: their linear form and what they refuse."""
from __future__ import annotations

import numpy as np
import pytest

from ratebased.bootstrap import Equimolar, FluxRatio, LatentHeat, LinearBootstrap, Stagnant, TotalFlux
from ratebased.errors import InputError


def test_linear_forms() -> None:
    """nu and s of every closure, written out."""
    for closure, nu, s in [(Equimolar(), [1, 1, 1], 0), (Stagnant(1), [0, 1, 0], 0), (Stagnant(-1), [0, 0, 1], 0),
                           (FluxRatio(0, 2.5), [-1.5, -2.5, -2.5], 0),
                           (LatentHeat([3e4, 4e4, 5e4]), [3e4, 4e4, 5e4], 0), (TotalFlux(-2.0), [1, 1, 1], -2),
                           (LinearBootstrap([1, 0, 2], 0.5), [1, 0, 2], 0.5)]:
        found_nu, found_s = closure.linear_form(3)
        np.testing.assert_array_equal(found_nu, nu)
        np.testing.assert_array_equal(found_s, s)


def test_batched_values() -> None:
    """A ratio, a total flux and general coefficients may differ from film to film."""
    nu, _ = FluxRatio(1, [0.5, -1.0]).linear_form(3)
    np.testing.assert_array_equal(nu, [[-0.5, 0.5, -0.5], [1.0, 2.0, 1.0]])
    assert TotalFlux([1.0, 2.0]).linear_form(3)[1].shape == (2,)
    assert LinearBootstrap(np.ones((4, 3)), np.zeros(4)).linear_form(3)[0].shape == (4, 3)


@pytest.mark.parametrize("build, words", [
    (lambda: FluxRatio([0, 1, 2], [0.2, 0.3, 0.5]), "more equations than unknowns"),  # all ratios and both faces
    (lambda: Stagnant([0, 1]), "one component"),
    (lambda: Stagnant(True), "index of one component"),
    (lambda: Stagnant(3).linear_form(3), "component = 3"),
    (lambda: FluxRatio(-4, 1.0).linear_form(3), "component = -4"),
    (lambda: FluxRatio(0, np.nan), "z"),
    (lambda: LatentHeat([0.0, 0.0, 0.0]), "nothing is closed"),
    (lambda: LatentHeat([1.0, 2.0]).linear_form(3), "expected 3 components"),
    (lambda: LinearBootstrap([[1.0, 1.0], [0.0, 0.0]]), r"nu\[1\]"),
    (lambda: TotalFlux(np.inf), "N_t"),
])
def test_bad_input(build, words: str) -> None:
    """The message names the argument and what is wrong."""
    with pytest.raises(InputError, match=words):
        build()
