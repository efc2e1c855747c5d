"""Multicomponent diffusion coefficients of a general kinetics and transport library against [D] of `fick_matrix`.

The library solves the kinetic-theory system with its own binary coefficients; in the molar frame the fluxes it implies
for given gradients must be those of the Maxwell-Stefan equations with the same binary coefficients.
"""
from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from ratebased.maxwell_stefan import fick_matrix


@pytest.mark.parametrize("T", [300.0, 900.0])
def test_fluxes_for_given_gradients(T: float) -> None:
    """Hydrogen, oxygen, water, nitrogen, argon: molar fluxes against the molar-average velocity, to 1e-9.

    The library leaves the thermal moments out of its ordinary coefficients (Dixon-Lewis 1968), so nothing but rounding
    parts the two.
    """
    cantera = pytest.importorskip("cantera")
    gas = cantera.Solution("gri30.yaml", transport_model="multicomponent")
    names = ["H2", "O2", "H2O", "N2", "AR"]
    index = [gas.species_index(name) for name in names]
    x = np.array([0.15, 0.2, 0.1, 0.4, 0.15])
    gas.TPX = T, 101325.0, dict(zip(names, x))
    pairs = gas.binary_diff_coeffs[np.ix_(index, index)]
    multi = gas.multi_diff_coeffs[np.ix_(index, index)]
    M = gas.molecular_weights[index]
    mean = (x * M).sum()
    rng = np.random.default_rng(0)
    for _ in range(4):
        grad = rng.normal(size=5)
        grad -= grad.mean()
        # mass fluxes against the mass-average velocity, j_i = (rho/W^2) W_i sum_j W_j D_ij grad x_j; here molar, c = 1
        mass_frame = (multi * M) @ grad / mean
        molar = mass_frame - x * mass_frame.sum()
        expected = -fick_matrix(x, pairs) @ grad[:-1]
        assert_allclose(molar[:-1], expected, atol=1e-9 * np.abs(expected).max())
