"""Minimum reflux: Underwood, Chem. Eng. Prog. 44 (1948) 603 (from memory), and the binary pinch.

sum_i alpha_i z_i/(alpha_i - theta) = 1 - q has a root between neighbouring volatilities; at minimum reflux
sum_i alpha_i D_i/(alpha_i - theta) = V_min for every root between components that distribute.
"""
from __future__ import annotations

import numpy as np
import pytest
from ideal_columns import distillation, ideal_mixture
from scipy.optimize import brentq

from ratebased.column import solve_equilibrium

ALPHA, Z = np.array([4.0, 2.0, 1.0]), np.array([0.35, 0.35, 0.30])
THETA = [brentq(lambda t: float((ALPHA * Z / (ALPHA - t)).sum()), low + 1e-9, high - 1e-9)
         for low, high in ((1.0, 2.0), (2.0, 4.0))]


def top(trays: int, D: float, R: float) -> np.ndarray:
    column = distillation(trays, feed_tray=trays // 2, z=Z, D=D, R=R)
    return solve_equilibrium(column, ideal_mixture(ALPHA)).products["top"].flows


def test_roots() -> None:
    np.testing.assert_allclose(THETA, [1.215119965796, 2.743213367537], atol=1e-11)


@pytest.mark.parametrize("trays, defect", [(60, 8.6e-4), (120, 1.0e-7), (240, 1e-13)])
def test_all_components_distribute(trays: int, defect: float) -> None:
    """D 45, R 0.6: both roots hold, D_i = 32.55, 11.55, 0.90."""
    D, R = 45.0, 0.6
    matrix = np.array([ALPHA / (ALPHA - t) for t in THETA] + [np.ones(3)])
    limit = np.linalg.solve(matrix, [(R + 1) * D, (R + 1) * D, D])
    np.testing.assert_allclose(limit, [32.55, 11.55, 0.90], atol=1e-9)
    assert np.abs(top(trays, D, R) - limit).max() / 100.0 < 1.3 * defect


@pytest.mark.parametrize("trays, defect", [(60, 5.7e-4), (120, 3.9e-8), (240, 1e-12)])
def test_light_component_does_not_distribute(trays: int, defect: float) -> None:
    """D 50, R 0.6: all the light component goes up, the root between the others holds."""
    D, R = 50.0, 0.6
    t = THETA[0]
    left = (R + 1) * D - ALPHA[0] * 35.0 / (ALPHA[0] - t)
    rest = np.linalg.solve([ALPHA[1:] / (ALPHA[1:] - t), [1.0, 1.0]], [left, D - 35.0])
    np.testing.assert_allclose(rest, [13.819760068408, 1.180239931592], atol=1e-9)
    assert np.abs(top(trays, D, R) - [35.0, *rest]).max() / 100.0 < 1.3 * defect


@pytest.mark.parametrize("trays, tolerance", [(60, 4e-7), (120, 1e-11)])
def test_binary_pinch_at_the_feed(trays: int, tolerance: float) -> None:
    """R_min = [x_D/z - alpha (1 - x_D)/(1 - z)]/(alpha - 1): at R = 1, alpha 2.5, z 0.5 infinite stages reach 13/14."""
    column = distillation(trays, feed_tray=trays // 2, z=[0.5, 0.5], D=50.0, R=1.0)
    found = solve_equilibrium(column, ideal_mixture([2.5, 1.0])).purity(0)
    assert found == pytest.approx(13.0 / 14.0, abs=tolerance)
