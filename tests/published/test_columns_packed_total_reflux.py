"""A packed binary at total reflux: Chilton & Colburn, Ind. Eng. Chem. 27 (1935) 255 (from memory) with constant
volatility.

The operating line is y = x, so N_OG = integral dy/(y* - y) with y* = alpha y/(1 + (alpha - 1) y) has the closed form
ln[y_2 (1 - y_1)/(y_1 (1 - y_2))]/(alpha - 1) + ln[(1 - y_1)/(1 - y_2)].
"""
from __future__ import annotations

import numpy as np
import pytest
from ideal_columns import P, ideal_mixture

from ratebased.column import Column, DistillateRate, LiquidFeed, Reboiler, RefluxRatio, TotalCondenser, solve_ratebased
from ratebased.equipment import FixedCoefficients

ALPHA, R, D = 1.8, 2e4, 50.0
V = (R + 1) * D


def transfer_units(segments: int, N_OG: float) -> float:
    """N_OG read from the compositions at both ends of a bed that has that many, the vapour film alone resisting."""
    column = Column(segments + 2, [LiquidFeed(segments // 2 + 1, [50.0, 50.0], 350.0)], P, condenser=TotalCondenser(),
                    reboiler=Reboiler(), specifications=[RefluxRatio(R),
                                                         DistillateRate(D)], segment_height=3.0 / segments)
    area = N_OG * V / (35.0 * 0.02)
    bed = FixedCoefficients(0.02, 1e3, area / segments, h_vapor=80.0, h_liquid=1500.0)
    y = solve_ratebased(column, ideal_mixture([ALPHA, 1.0]), bed).y[:, 0]
    low, high = y[-1], y[1]
    return float(np.log(high * (1 - low) / (low * (1 - high))) / (ALPHA - 1) + np.log((1 - low) / (1 - high)))


@pytest.mark.parametrize("N_OG", [2.0, 5.0])
def test_transfer_units_of_the_bed(N_OG: float) -> None:
    """Extrapolated from 16 and 32 segments; what is left is the reflux that is not quite total, 1/R of the flows."""
    extrapolated = (4.0 * transfer_units(32, N_OG) - transfer_units(16, N_OG)) / 3.0
    assert extrapolated == pytest.approx(N_OG, rel=2e-4)
