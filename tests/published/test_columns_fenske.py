"""Fenske, Ind. Eng. Chem. 24 (1932) 482 (from memory): separation at total reflux, alpha^N for N equilibrium stages."""
from __future__ import annotations

import numpy as np
import pytest
from ideal_columns import distillation, ideal_mixture

from ratebased.column import solve_equilibrium

STAGES = 9          # eight trays and the reboiler; the total condenser separates nothing


def separation(R: float) -> float:
    column = distillation(8, feed_tray=4, z=[0.5, 0.5], D=50.0, R=R)
    profile = solve_equilibrium(column, ideal_mixture([2.5, 1.0]))
    D, B = profile.products["top"].flows, profile.products["bottom"].flows
    return float(D[0] / D[1] * B[1] / B[0])


@pytest.mark.parametrize("R, expected", [(1e2, 3475.216), (1e4, 3811.0996), (1e6, 3814.661268)])
@pytest.mark.filterwarnings("ignore:RefluxRatio")
def test_approach_to_total_reflux(R: float, expected: float) -> None:
    """Regression values of the column; what they approach is the check below."""
    assert separation(R) == pytest.approx(expected, rel=1e-7)


def test_limit_of_total_reflux() -> None:
    """The defect falls as 1/R, so two reflux ratios extrapolate to 2.5^9 = 3814.697."""
    limit = (10.0 * separation(1e5) - separation(1e4)) / 9.0
    assert limit == pytest.approx(2.5 ** STAGES, rel=1e-7)


def test_ternary_distributes_by_fenske() -> None:
    """D_i/B_i = C alpha_i^9, C from the distillate rate: x_D = 0.957639316, 0.0422867718, 7.39119812e-5."""
    def top(R: float) -> np.ndarray:
        column = distillation(8, feed_tray=4, z=[0.35, 0.35, 0.30], D=35.0, R=R)
        return solve_equilibrium(column, ideal_mixture([4.0, 2.0, 1.0])).products["top"].composition

    lower, upper = ((10.0 * top(10.0 * R) - top(R)) / 9.0 for R in (1e3, 1e4))      # powers of 1/R, one after another
    limit = (100.0 * upper - lower) / 99.0
    np.testing.assert_allclose(limit, [0.957639316, 0.0422867718, 7.39119812e-5], rtol=1e-7)
